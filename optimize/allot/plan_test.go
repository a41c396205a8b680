package allot

import (
	"context"
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/search"
)

func capacitorLot(id inventory.LotID, farads float64, pieces int64) inventory.Lot {
	return inventory.Lot{ID: id, Part: inventory.Part{Kind: inventory.Capacitor, Value: farads}, OnHand: pieces}
}

func timerLot(id inventory.LotID, number string, pieces int64) inventory.Lot {
	return inventory.Lot{ID: id, Part: inventory.Part{Kind: inventory.Timer, PartNumber: number}, OnHand: pieces}
}

// pulseStage asks for a one-shot of ln3·R·C (the ideal timer's pulse, from the
// one law t = R C ln((VCC-0)/(VCC-2/3 VCC))).
func pulseStage(name string, ohms, farads, share float64, parts int) optimize.Stage {
	target := math.Log(3) * ohms * farads
	return optimize.Stage{Name: name, References: map[string]string{}, Spec: optimize.Spec{
		Requirements: []optimize.Requirement{{Measure: optimize.Pulse, Allowance: optimize.Allowance{
			Target: target, Min: target * (1 - share), Max: target * (1 + share),
		}}},
		Supply: optimize.Exactly(9), Ambient: optimize.Exactly(25),
		Circuits: []string{"one-shot"}, Timers: []string{"ideal"},
		PartsEach: parts, PartsC: 1,
	}}
}

func planned(t testing.TB, job optimize.Job, lots []inventory.Lot) optimize.Plan {
	t.Helper()
	plan, err := Plan(context.Background(), job, lots)
	if err != nil {
		t.Fatal(err)
	}
	return plan
}

func TestTwoStagesShareTheDrawer(t *testing.T) {
	// Each stage alone would take the single 10k; there are pieces for one only.
	lots := []inventory.Lot{resistorLot(1, 10e3, 0.01, 2), resistorLot(2, 4700, 0.01, 2), resistorLot(3, 5300, 0.01, 2), capacitorLot(4, 1e-6, 4)}
	job := optimize.Job{Name: "pair", Boards: 2, Stages: []optimize.Stage{
		pulseStage("one", 10e3, 1e-6, 0.001, 2), pulseStage("two", 10e3, 1e-6, 0.001, 2),
	}}
	plan := planned(t, job, lots)
	if plan.Built != 2 || !plan.Search.Proven || len(plan.Shortages) != 0 {
		t.Fatalf("built %d, proven %v, shortages %v", plan.Built, plan.Search.Proven, plan.Shortages)
	}
	parts := plan.Variants[0].Stages[0].Fit.Parts + plan.Variants[0].Stages[1].Fit.Parts
	if parts != 2+3 { // 10k and c; 4k7 + 5k3 and c
		t.Errorf("%d parts, want 5", parts)
	}
}

func TestAJobThatRunsShortNamesWhatIsMissing(t *testing.T) {
	lots := []inventory.Lot{resistorLot(1, 10e3, 0.01, 3), capacitorLot(2, 1e-6, 9)}
	job := optimize.Job{Name: "short", Boards: 5, Stages: []optimize.Stage{pulseStage("one", 10e3, 1e-6, 0.001, 1)}}
	plan := planned(t, job, lots)
	if plan.Built != 3 || len(plan.Shortages) != 1 {
		t.Fatalf("built %d, shortages %+v", plan.Built, plan.Shortages)
	}
	s := plan.Shortages[0]
	if s.Short != 2 || s.Kind != inventory.Resistor || s.Value != 10e3 || s.References[0] != "one.r" {
		t.Errorf("shortage %+v, want 2 of 10k at one.r", s)
	}
}

func TestAStageThatNothingMeetsIsNamed(t *testing.T) {
	lots := []inventory.Lot{resistorLot(1, 10e3, 0.01, 3), capacitorLot(2, 1e-6, 9)}
	job := optimize.Job{Name: "no", Boards: 2, Stages: []optimize.Stage{pulseStage("one", 1e6, 1e-3, 0.001, 2)}}
	plan := planned(t, job, lots)
	if plan.Built != 0 || len(plan.Picks) != 0 || len(plan.Shortages) != 1 || plan.Shortages[0].References[0] != "one" {
		t.Errorf("built %d, picks %v, shortages %+v", plan.Built, plan.Picks, plan.Shortages)
	}
}

func TestFixedLinesAreTakenFirst(t *testing.T) {
	lots := []inventory.Lot{resistorLot(1, 10e3, 0.01, 5), capacitorLot(2, 1e-6, 9)}
	job := optimize.Job{
		Name: "fixed first", Boards: 3,
		Stages: []optimize.Stage{pulseStage("one", 10e3, 1e-6, 0.001, 1)},
		Fixed:  []optimize.FixedLine{fixedLine(10e3, 0.05, "R7")},
	}
	plan := planned(t, job, lots)
	if plan.Built != 2 || plan.Picks[0].Quantity != 4 {
		t.Fatalf("built %d, picks %+v: five pieces serve two boards", plan.Built, plan.Picks)
	}
	if got := fmt.Sprint(plan.Picks[0].References); got != "[R7 one.r]" {
		t.Errorf("references %s", got)
	}
}

func TestTimersOfOneFamilyAreDrawnFromSeveralLots(t *testing.T) {
	lots := []inventory.Lot{
		resistorLot(1, 10e3, 0.01, 9), capacitorLot(2, 1e-6, 9),
		timerLot(3, "NE555P", 2), timerLot(4, "NE555N", 3),
	}
	stage := pulseStage("one", 10e3, 1e-6, 0.2, 1)
	stage.Spec.Timers = nil
	plan := planned(t, optimize.Job{Name: "timers", Boards: 5, Stages: []optimize.Stage{stage}}, lots)
	if plan.Built != 5 {
		t.Fatalf("built %d of 5: %+v", plan.Built, plan.Shortages)
	}
	taken := map[inventory.LotID]int64{}
	for _, pick := range plan.Picks {
		taken[pick.Lot.ID] = pick.Quantity
	}
	if taken[3] != 2 || taken[4] != 3 {
		t.Errorf("timers taken %v, want 2 and 3", taken)
	}
}

func TestTimersThatDoNotDivideOverTheStagesLimitTheBoards(t *testing.T) {
	lots := []inventory.Lot{
		resistorLot(1, 10e3, 0.01, 200), capacitorLot(2, 1e-6, 200),
		timerLot(3, "NE555P", 35), timerLot(4, "TLC555CP", 24),
	}
	var stages []optimize.Stage
	for i := range 4 {
		stage := pulseStage(fmt.Sprint("stage", i), 10e3, 1e-6, 0.2, 1)
		stage.Spec.Timers = nil
		stages = append(stages, stage)
	}
	// 13 boards: 35/13 serve two stages, 24/13 one, and there are four.
	plan := planned(t, optimize.Job{Name: "timers", Boards: 50, Stages: stages}, lots)
	if plan.Built != 12 || !plan.Search.Proven {
		t.Errorf("built %d, proven %v: want 12, proven", plan.Built, plan.Search.Proven)
	}
	// Whom only one family suits comes first; the other moves to the second.
	stages[3].Spec.Timers = []string{"NE555"}
	stages[2].Spec.Timers = []string{"NE555"}
	if plan = planned(t, optimize.Job{Name: "timers", Boards: 12, Stages: stages}, lots); plan.Built != 12 {
		t.Errorf("built %d of 12", plan.Built)
	}
	stages[1].Spec.Timers = []string{"NE555"}
	if plan = planned(t, optimize.Job{Name: "timers", Boards: 12, Stages: stages}, lots); plan.Built != 11 {
		t.Errorf("built %d, want 11: 35 serve three stages", plan.Built)
	}
}

// The peer tries every choice of fits, one a stage, for every number of boards.
func TestPlanEqualsEveryChoiceTried(t *testing.T) {
	built := 0
	rapid.Check(t, func(t *rapid.T) {
		var lots []inventory.Lot
		for i := range rapid.IntRange(1, 3).Draw(t, "resistors") {
			lot := resistorLot(inventory.LotID(i+1), rapid.SampledFrom([]float64{10e3, 10e3, 5e3, 20e3}).Draw(t, "ohms"), 0.01, rapid.Int64Range(1, 6).Draw(t, "pieces"))
			cost := inventory.Micros(rapid.Int64Range(1, 3).Draw(t, "cost"))
			lot.UnitCost = &cost
			lots = append(lots, lot)
		}
		lots = append(lots, capacitorLot(10, 1e-6, rapid.Int64Range(1, 8).Draw(t, "capacitors")), capacitorLot(11, 0.5e-6, rapid.Int64Range(1, 8).Draw(t, "capacitors")))
		job := optimize.Job{Name: "tiny", Boards: rapid.Int64Range(1, 4).Draw(t, "boards")}
		for i := range rapid.IntRange(1, 3).Draw(t, "stages") {
			job.Stages = append(job.Stages, pulseStage(fmt.Sprint("stage", i), rapid.SampledFrom([]float64{10e3, 5e3, 20e3}).Draw(t, "aim"), 1.01e-6, rapid.SampledFrom([]float64{0.02, 0.6}).Draw(t, "share"), 2))
		}
		if rapid.Bool().Draw(t, "fixed") {
			job.Fixed = append(job.Fixed, fixedLine(10e3, 0.05, "R9"))
		}
		plan, err := Plan(context.Background(), job, lots)
		if err != nil {
			t.Fatal(err)
		}
		if !plan.Search.Proven {
			t.Fatal("a tiny job is not proven")
		}
		boards, best := everyChoice(t, job, lots)
		if plan.Built != boards {
			t.Fatalf("built %d, every choice tried builds %d", plan.Built, boards)
		}
		taken := map[inventory.LotID]int64{}
		for _, pick := range plan.Picks {
			taken[pick.Lot.ID] += pick.Quantity
		}
		for _, lot := range lots {
			if taken[lot.ID] > lot.Available() {
				t.Fatalf("lot %d overdrawn", lot.ID)
			}
		}
		if boards == 0 {
			return
		}
		built++
		var got price
		places := int64(0)
		for i, stage := range plan.Variants[0].Stages {
			got = got.plus(priceOf(&stage.Fit, job.Stages[i].Spec.Basis))
			places += int64(len(stage.Places))
		}
		if got.parts != best.parts || got.cost != best.cost || math.Abs(got.used-best.used) > 1e-9 {
			t.Fatalf("price %+v, the best of every choice is %+v", got, best)
		}
		total := int64(0)
		for _, pieces := range taken {
			total += pieces
		}
		if want := boards * (places + int64(len(plan.Variants[0].Fixed))); total != want {
			t.Fatalf("%d pieces picked, the boards take %d", total, want)
		}
	})
	t.Logf("%d jobs with a board built", built)
}

func everyChoice(t *rapid.T, job optimize.Job, lots []inventory.Lot) (boards int64, best price) {
	for boards = job.Boards; boards > 0; boards-- {
		shares, short := fixedShares(job.Fixed, lots, boards)
		if len(short) > 0 && short[0] > 0 {
			continue
		}
		left := without(lots, shares)
		lists := make([][]optimize.Fit, len(job.Stages))
		for i, stage := range job.Stages {
			spec := stage.Spec
			spec.Boards = 1
			fits, all, err := search.Best(context.Background(), spec, left, 100_000)
			if err != nil || !all {
				t.Fatal("the list of all fits is not whole", err)
			}
			lists[i] = fits
		}
		found := false
		var choose func(stage int, so price, usage map[inventory.LotID]int64)
		choose = func(stage int, so price, usage map[inventory.LotID]int64) {
			for _, lot := range left {
				if usage[lot.ID]*boards > lot.Available() {
					return
				}
			}
			if stage == len(lists) {
				if !found || so.below(best) {
					best, found = so, true
				}
				return
			}
			for i := range lists[stage] {
				with := map[inventory.LotID]int64{}
				for id, n := range usage {
					with[id] = n
				}
				for id, n := range lists[stage][i].Usage() {
					with[id] += n
				}
				choose(stage+1, so.plus(priceOf(&lists[stage][i], optimize.Nominal)), with)
			}
		}
		choose(0, price{}, map[inventory.LotID]int64{})
		if found {
			return boards, best
		}
	}
	return 0, price{}
}

func TestAddingStockNeverLowersTheBoards(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lots := []inventory.Lot{
			resistorLot(1, 10e3, 0.01, rapid.Int64Range(0, 4).Draw(t, "pieces")),
			resistorLot(2, 5e3, 0.01, rapid.Int64Range(0, 4).Draw(t, "pieces")),
			capacitorLot(3, 1e-6, rapid.Int64Range(0, 4).Draw(t, "pieces")),
		}
		job := optimize.Job{Name: "more", Boards: 4, Stages: []optimize.Stage{pulseStage("a", 10e3, 1e-6, 0.01, 2), pulseStage("b", 5e3, 1e-6, 0.01, 2)}}
		before, err := Plan(context.Background(), job, lots)
		if err != nil {
			t.Fatal(err)
		}
		lots[rapid.IntRange(0, 2).Draw(t, "more of")].OnHand += rapid.Int64Range(1, 4).Draw(t, "added")
		after, err := Plan(context.Background(), job, lots)
		if err != nil {
			t.Fatal(err)
		}
		if after.Built < before.Built {
			t.Fatalf("%d boards before, %d after adding stock", before.Built, after.Built)
		}
	})
}
