package allot

import (
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
)

func resistorLot(id inventory.LotID, ohms, tolerance float64, pieces int64) inventory.Lot {
	part := inventory.Part{Kind: inventory.Resistor, Value: ohms}
	if tolerance > 0 {
		part.Tolerance = &marking.Tolerance{Minus: tolerance, Plus: tolerance}
	}
	return inventory.Lot{ID: id, Part: part, OnHand: pieces}
}

func fixedLine(ohms, tolerance float64, references ...string) optimize.FixedLine {
	return optimize.FixedLine{References: references, Part: resistorLot(0, ohms, tolerance, 0).Part}
}

func TestALineTakesTheWidestToleranceThatServes(t *testing.T) {
	lots := []inventory.Lot{resistorLot(1, 1000, 0.01, 10), resistorLot(2, 1000, 0.05, 10), resistorLot(3, 1000, 0.10, 10)}
	shares, short := fixedShares([]optimize.FixedLine{fixedLine(1000, 0.05, "R1")}, lots, 4)
	if short[0] != 0 || len(shares[0]) != 1 || shares[0][0] != (share{1, 4}) {
		t.Errorf("shares %v, short %v: want 4 pieces of the 5 %% lot", shares, short)
	}
}

func TestAnEarlierLineMakesRoomForOneThatHasNoChoice(t *testing.T) {
	lots := []inventory.Lot{resistorLot(1, 1000, 0.01, 6), resistorLot(2, 1000, 0.01, 6)}
	lots[0].Part.RatingW, lots[1].Part.RatingW = 0.25, 0.5
	strong := fixedLine(1000, 0, "R2")
	strong.Part.RatingW = 0.5
	// R1 alone would take lot 1 first; with two lines of R1 both lots are needed.
	shares, short := fixedShares([]optimize.FixedLine{fixedLine(1000, 0, "R1"), strong}, lots, 6)
	if short[0] != 0 || short[1] != 0 || shares[1][0].lot != 1 {
		t.Errorf("shares %v, short %v", shares, short)
	}
}

// The served pieces are the most that can be: the peer is Hall's condition over
// every set of lines, counted by hand.
func TestFixedSharesServeAsMuchAsAnySplitCould(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		tolerances := []float64{0.01, 0.02, 0.05}
		var lots []inventory.Lot
		for i := range rapid.IntRange(1, 4).Draw(t, "lots") {
			lots = append(lots, resistorLot(inventory.LotID(i+1), 1000, rapid.SampledFrom(tolerances).Draw(t, "tolerance"), rapid.Int64Range(0, 12).Draw(t, "pieces")))
			lots[i].Part.RatingW = rapid.SampledFrom([]float64{0.25, 0.5}).Draw(t, "watts")
		}
		var lines []optimize.FixedLine
		for range rapid.IntRange(1, 4).Draw(t, "lines") {
			line := fixedLine(1000, rapid.SampledFrom(tolerances).Draw(t, "wanted"), "R1", "R2")
			line.Part.RatingW = rapid.SampledFrom([]float64{0, 0.5}).Draw(t, "wanted watts")
			lines = append(lines, line)
		}
		boards := rapid.Int64Range(1, 4).Draw(t, "boards")
		shares, short := fixedShares(lines, lots, boards)
		totalShort := int64(0)
		taken := make([]int64, len(lots))
		for i := range lines {
			served := int64(0)
			for _, s := range shares[i] {
				if !serves(lots[s.lot].Part, lines[i].Part) {
					t.Fatalf("line %d takes lot %d, which does not serve", i, s.lot)
				}
				taken[s.lot] += s.pieces
				served += s.pieces
			}
			if served+short[i] != 2*boards {
				t.Fatalf("line %d: %d served and %d short of %d", i, served, short[i], 2*boards)
			}
			totalShort += short[i]
		}
		for i := range lots {
			if taken[i] > lots[i].Available() {
				t.Fatalf("lot %d overdrawn", i)
			}
		}
		worst := int64(0) // the largest deficiency of a set of lines is what must be short
		for set := range 1 << len(lines) {
			need, have := int64(0), int64(0)
			for i := range lines {
				if set&(1<<i) != 0 {
					need += 2 * boards
				}
			}
			for l := range lots {
				for i := range lines {
					if set&(1<<i) != 0 && serves(lots[l].Part, lines[i].Part) {
						have += lots[l].Available()
						break
					}
				}
			}
			worst = max(worst, need-have)
		}
		if totalShort != worst {
			t.Fatalf("%d short, the largest deficiency is %d", totalShort, worst)
		}
	})
}
