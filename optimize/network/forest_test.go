package network

import (
	"math/big"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// resistors returns a piece of each value, uses times each.
func resistors(uses int64, ohms ...float64) []Piece {
	pieces := make([]Piece, len(ohms))
	for i, value := range ohms {
		pieces[i] = Piece{Uses: uses, Lot: inventory.Lot{
			ID: inventory.LotID(i + 1), OnHand: uses,
			Part: inventory.Part{Kind: inventory.Resistor, Value: value},
		}}
	}
	return pieces
}

func mustGrow(t testing.TB, pieces []Piece, most int) *Forest {
	t.Helper()
	forest, err := Grow(pieces, most)
	if err != nil {
		t.Fatal(err)
	}
	return forest
}

func ohms1to(n int) []float64 {
	values := make([]float64, n)
	for i := range values {
		values[i] = float64(i + 1)
	}
	return values
}

// OEIS A000084: series/parallel networks with n unlabelled edges.
func TestLikePartsFormTheShapesOfA000084(t *testing.T) {
	want := []int{1, 2, 4, 10, 24, 66, 180, 522, 1532}
	forest := mustGrow(t, resistors(99, 1), len(want))
	for i, count := range want {
		if got := forest.Len(i + 1); got != count {
			t.Errorf("%d parts: %d networks, OEIS A000084 has %d", i+1, got, count)
		}
	}
}

// OEIS A006351: series/parallel networks with n labelled edges.
func TestUnlikePartsFormTheNetworksOfA006351(t *testing.T) {
	for i, count := range []int{1, 2, 8, 52, 472, 5504} {
		forest := mustGrow(t, resistors(1, ohms1to(i+1)...), i+1)
		if got := forest.Len(i + 1); got != count {
			t.Errorf("%d parts: %d networks, OEIS A006351 has %d", i+1, got, count)
		}
	}
}

// OEIS A048211: distinct resistances of exactly n equal resistors;
// OEIS A153588: of up to n.
func TestEqualResistorsGiveTheValuesOfA048211AndA153588(t *testing.T) {
	exactly := []int{1, 2, 4, 9, 22, 53, 131, 337, 869}
	upTo := []int{1, 3, 7, 15, 35, 77, 179, 429, 1039}
	forest := mustGrow(t, resistors(99, 1), len(exactly))
	var all []float64
	for i := range exactly {
		table := forest.Table(i + 1)
		if got := table.Len(); got != exactly[i] {
			t.Errorf("exactly %d parts: %d values, OEIS A048211 has %d", i+1, got, exactly[i])
		}
		all = append(all, table.Values...)
		slices.Sort(all)
		if got := countDistinct(all); got != upTo[i] {
			t.Errorf("up to %d parts: %d values, OEIS A153588 has %d", i+1, got, upTo[i])
		}
	}
}

// OEIS A232005: distinct resistances of resistors of 1 to n ohm, each used once.
func TestResistorsOf1ToNOhmGiveTheValuesOfA232005(t *testing.T) {
	for i, count := range []int{1, 2, 8, 48, 386, 3781} {
		n := i + 1
		table := mustGrow(t, resistors(1, ohms1to(n)...), n).Table(n)
		if got := countDistinct(table.Values); got != count {
			t.Errorf("1 to %d ohm: %d values, OEIS A232005 has %d", n, got, count)
		}
	}
}

// countDistinct counts the values of a sorted list that differ by more than
// rounding.
func countDistinct(sorted []float64) int {
	count := 0
	for i, value := range sorted {
		if i == 0 || value > sorted[i-1]*(1+1e-12) {
			count++
		}
	}
	return count
}

// exactValue computes a network's value in rationals.
func exactValue(n optimize.Network, kind inventory.Kind) *big.Rat {
	if n.Operator == optimize.Leaf {
		return new(big.Rat).SetFloat64(n.Lot.Value())
	}
	sum := new(big.Rat)
	adds := (n.Operator == optimize.Series) == (kind == inventory.Resistor)
	for _, member := range n.Members {
		value := exactValue(member, kind)
		if !adds {
			value.Inv(value)
		}
		sum.Add(sum, value)
	}
	if !adds {
		sum.Inv(sum)
	}
	return sum
}

func TestTablesAgreeWithRationalsAndTheStock(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		kind := rapid.SampledFrom([]inventory.Kind{inventory.Resistor, inventory.Capacitor}).Draw(t, "kind")
		count := rapid.IntRange(1, 5).Draw(t, "lots")
		pieces := make([]Piece, count)
		for i := range pieces {
			part := inventory.Part{Kind: kind, Value: rapid.Float64Range(1e-3, 1e3).Draw(t, "value")}
			if kind == inventory.Capacitor && rapid.Bool().Draw(t, "polarised") {
				part.Dielectric = "electrolytic"
			}
			cost := inventory.Micros(rapid.Int64Range(0, 1000).Draw(t, "cost"))
			pieces[i] = Piece{
				Lot:  inventory.Lot{ID: inventory.LotID(i + 1), Part: part, UnitCost: &cost},
				Uses: rapid.Int64Range(1, 3).Draw(t, "uses"),
			}
		}
		most := rapid.IntRange(1, 4).Draw(t, "parts")
		forest, err := Grow(pieces, most)
		if err != nil {
			t.Fatal(err)
		}
		for n := 1; n <= most; n++ {
			table := forest.Table(n)
			texts := map[string]bool{}
			for row := range table.Len() {
				tree := table.Network(row)
				if tree.Parts() != n {
					t.Fatalf("%d parts in the table of %d", tree.Parts(), n)
				}
				exact, _ := exactValue(tree, kind).Float64()
				if d := table.Values[row]/exact - 1; d > 1e-14 || d < -1e-14 {
					t.Fatalf("%v: value %g, exactly %g", tree, table.Values[row], exact)
				}
				if row > 0 && table.Values[row] < table.Values[row-1] {
					t.Fatal("values do not ascend")
				}
				used := map[inventory.LotID]int64{}
				var cost inventory.Micros
				tree.Lots(func(l inventory.Lot) { used[l.ID]++; cost += *l.UnitCost })
				if cost != table.Costs[row] {
					t.Fatalf("cost %d, of its lots %d", table.Costs[row], cost)
				}
				for _, piece := range pieces {
					if used[piece.Lot.ID] > piece.Uses {
						t.Fatalf("lot %d used %d times of %d", piece.Lot.ID, used[piece.Lot.ID], piece.Uses)
					}
				}
				if polarisedInSeries(tree, false) {
					t.Fatalf("polarised in series: %s", shape(tree))
				}
				if text := shape(tree); texts[text] {
					t.Fatalf("%s stands twice", text)
				} else {
					texts[text] = true
				}
			}
			checkSpans(t, table, 1, 0, table.Len())
		}
	})
}

func polarisedInSeries(n optimize.Network, inSeries bool) bool {
	if n.Operator == optimize.Leaf {
		return inSeries && n.Lot.Part.Polarised()
	}
	for _, member := range n.Members {
		if polarisedInSeries(member, inSeries || n.Operator == optimize.Series) {
			return true
		}
	}
	return false
}

// shape writes a network with the numbers of its lots, members sorted, so that
// equal networks read alike.
func shape(n optimize.Network) string {
	if n.Operator == optimize.Leaf {
		return string(rune('a' + n.Lot.ID))
	}
	var members []string
	for _, member := range n.Members {
		members = append(members, shape(member))
	}
	slices.Sort(members)
	text := "("
	for _, member := range members {
		text += member
	}
	return text + string(rune('0'+n.Operator)) + ")"
}

func checkSpans(t *rapid.T, table *Table, span, from, to int) {
	if from >= to {
		return
	}
	if got, want := table.CheapestIn(span), slices.Min(table.Costs[from:to]); got != want {
		t.Fatalf("cheapest of rows %d to %d: %d, want %d", from, to, got, want)
	}
	if to-from > 1 {
		checkSpans(t, table, 2*span, from, Middle(from, to))
		checkSpans(t, table, 2*span+1, Middle(from, to), to)
	}
}

func TestPartsThatNoNetworkTakesAreRefused(t *testing.T) {
	many := make([]float64, 500)
	for i := range many {
		many[i] = float64(i + 1)
	}
	mixed := append(resistors(1, 10), Piece{Uses: 1, Lot: inventory.Lot{ID: 9, Part: inventory.Part{Kind: inventory.Capacitor, Value: 1e-6}}})
	for name, try := range map[string]func() error{
		"no parts":        func() error { _, err := Grow(resistors(1, 10), 0); return err },
		"too many parts":  func() error { _, err := Grow(resistors(1, 10), MaxParts+1); return err },
		"more than fit":   func() error { _, err := Grow(resistors(4, many...), 4); return err },
		"a link":          func() error { _, err := Grow(resistors(1, 0), 1); return err },
		"mixed kinds":     func() error { _, err := Grow(mixed, 1); return err },
		"a negative ohms": func() error { _, err := Grow(resistors(1, -5), 1); return err },
	} {
		if try() == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

func BenchmarkGrowPairsOf500Lots(b *testing.B) {
	values := make([]float64, 500)
	for i := range values {
		values[i] = 10 * float64(i+1)
	}
	pieces := resistors(10, values...)
	for b.Loop() {
		forest, err := Grow(pieces, 2)
		if err != nil {
			b.Fatal(err)
		}
		forest.Table(1)
		forest.Table(2)
	}
}
