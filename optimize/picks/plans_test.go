package picks

import (
	"fmt"
	"math"
	"time"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
)

// Plans built by hand. Their times are those of the ideal timer (ln 2 and ln 3
// of the one law), computed here from the lots.

var testOptions = Options{Now: time.Date(2026, 3, 14, 9, 30, 0, 0, time.UTC), Kit: 7}

func percent(p float64) *marking.Tolerance { return &marking.Tolerance{Minus: p / 100, Plus: p / 100} }

func resistor(id inventory.LotID, bin string, ohms float64, onHand int64) inventory.Lot {
	return inventory.Lot{ID: id, Bin: bin, OnHand: onHand, Part: inventory.Part{Kind: inventory.Resistor, Value: ohms, Tolerance: percent(1), RatingW: 0.25, Package: "axial"}}
}

func capacitor(id inventory.LotID, bin string, farads float64, dielectric string, onHand int64) inventory.Lot {
	return inventory.Lot{ID: id, Bin: bin, OnHand: onHand, Part: inventory.Part{Kind: inventory.Capacitor, Value: farads, Tolerance: percent(5), Dielectric: dielectric, RatingV: 50}}
}

func numbered(id inventory.LotID, bin string, kind inventory.Kind, number string, onHand int64) inventory.Lot {
	return inventory.Lot{ID: id, Bin: bin, OnHand: onHand, Part: inventory.Part{Kind: kind, PartNumber: number}}
}

func leaf(lot inventory.Lot) optimize.Network {
	return optimize.Network{Lot: lot, Value: lot.Value()}
}

func series(members ...optimize.Network) optimize.Network {
	n := optimize.Network{Operator: optimize.Series, Members: members}
	for _, m := range members {
		n.Value += m.Value
	}
	return n
}

func parallelOhms(members ...optimize.Network) optimize.Network {
	n := optimize.Network{Operator: optimize.Parallel, Members: members}
	for _, m := range members {
		n.Value += 1 / m.Value
	}
	n.Value = 1 / n.Value
	return n
}

func placed(position string, kind inventory.Kind, n optimize.Network) optimize.Placed {
	return optimize.Placed{Position: position, Kind: kind, Count: 1, Network: n}
}

func requirement(m optimize.Measure, target, share float64) optimize.Requirement {
	return optimize.Requirement{Measure: m, Allowance: optimize.Allowance{Target: target, Min: target * (1 - share), Max: target * (1 + share)}}
}

func spec(requirements ...optimize.Requirement) optimize.Spec {
	return optimize.Spec{Requirements: requirements, Supply: optimize.Range{Nominal: 9, Min: 8.1, Max: 9.9}, Ambient: optimize.Range{Nominal: 25, Min: 10, Max: 40}}
}

// band returns a band around x.
func band(x, share float64) optimize.Band {
	return optimize.Band{Min: x * (1 - share), Max: x * (1 + share)}
}

// astable returns the fit and its places; references are name1, name2 and so on.
func astable(stage optimize.Stage, ra, rb, c optimize.Network, timerLot inventory.Lot) optimize.StageFit {
	fit := optimize.Fit{
		Circuit: "classic", Timer: timerLot.Part.PartNumber, TimerLot: &timerLot,
		Networks: []optimize.Placed{placed("ra", inventory.Resistor, ra), placed("rb", inventory.Resistor, rb), placed("c", inventory.Capacitor, c)},
	}
	fit.Nominal = optimize.Times{
		HighS: math.Ln2 * (ra.Value + rb.Value) * c.Value, LowS: math.Ln2 * rb.Value * c.Value,
		FirstHighS: math.Log(3) * (ra.Value + rb.Value) * c.Value,
	}
	fit.WorstCase = optimize.TimesBand{
		High: band(fit.Nominal.HighS, 0.07), Low: band(fit.Nominal.LowS, 0.07), Period: band(fit.Nominal.PeriodS(), 0.07),
		Frequency: band(fit.Nominal.FrequencyHz(), 0.07), Duty: band(fit.Nominal.Duty(), 0.01), FirstHigh: band(fit.Nominal.FirstHighS, 0.07),
	}
	fit.UsedNominal, fit.UsedWorst = stage.Spec.AllowanceUsed(fit.Nominal), stage.Spec.WorstAllowanceUsed(fit.WorstCase)
	return optimize.StageFit{Stage: stage.Name, Fit: fit, Places: placesOf(stage, fit)}
}

func pulse(stage optimize.Stage, r, c optimize.Network, timerLot inventory.Lot) optimize.StageFit {
	fit := optimize.Fit{
		Circuit: "one-shot", Timer: timerLot.Part.PartNumber, TimerLot: &timerLot,
		Networks: []optimize.Placed{placed("r", inventory.Resistor, r), placed("c", inventory.Capacitor, c)},
		Nominal:  optimize.Times{PulseS: math.Log(3) * r.Value * c.Value},
	}
	fit.WorstCase = optimize.TimesBand{Pulse: band(fit.Nominal.PulseS, 0.25)}
	fit.UsedNominal, fit.UsedWorst = stage.Spec.AllowanceUsed(fit.Nominal), stage.Spec.WorstAllowanceUsed(fit.WorstCase)
	return optimize.StageFit{Stage: stage.Name, Fit: fit, Places: placesOf(stage, fit)}
}

func placesOf(stage optimize.Stage, fit optimize.Fit) []optimize.Place {
	name := func(position string) string {
		if reference := stage.References[position]; reference != "" {
			return reference
		}
		return stage.Name + "." + position
	}
	var places []optimize.Place
	for _, p := range fit.Networks {
		at := 0
		p.Network.Lots(func(lot inventory.Lot) {
			reference := name(p.Position)
			if p.Network.Parts() > 1 {
				reference += string(rune('a' + at))
			}
			at++
			places = append(places, optimize.Place{Reference: reference, Position: p.Position, Lot: lot})
		})
	}
	return append(places, optimize.Place{Reference: name("timer"), Position: "timer", Lot: *fit.TimerLot})
}

// withPicks returns the plan with the picks that its variants need.
func withPicks(plan optimize.Plan) optimize.Plan {
	at := map[inventory.LotID]int{}
	for _, variant := range plan.Variants {
		onBoard := map[inventory.LotID]int64{}
		take := func(place optimize.Place) {
			i, found := at[place.Lot.ID]
			if !found {
				i = len(plan.Picks)
				at[place.Lot.ID] = i
				plan.Picks = append(plan.Picks, optimize.PlannedPick{Lot: place.Lot})
			}
			pick := &plan.Picks[i]
			pick.Quantity += variant.Boards
			onBoard[place.Lot.ID]++
			pick.PerBoard = max(pick.PerBoard, onBoard[place.Lot.ID])
			pick.References = append(pick.References, place.Reference)
		}
		for _, stage := range variant.Stages {
			for _, place := range stage.Places {
				take(place)
			}
		}
		for _, place := range variant.Fixed {
			take(place)
		}
	}
	return plan
}

// beaconPlan is one variant with an astable of two-part networks, a one-shot,
// and fixed lines.
func beaconPlan() optimize.Plan {
	slow := optimize.Stage{Name: "slow blink", References: map[string]string{"ra": "R10", "rb": "R2", "c": "C1", "timer": "U1"}, Spec: spec(requirement(optimize.Period, 4, 0.03), optimize.Requirement{Measure: optimize.Duty, Allowance: optimize.Allowance{Target: 0.6, Min: 0.55, Max: 0.65}})}
	hold := optimize.Stage{Name: "hold", References: map[string]string{"r": "R3", "c": "C2", "timer": "U2"}, Spec: spec(requirement(optimize.Pulse, 2.4e-3, 0.02))}
	timerLot := numbered(40, "D1", inventory.Timer, "NE555", 50)
	slowC := capacitor(20, "B10", 22e-6, "electrolytic", 30)
	slowC.Measured = 21.6e-6
	slowFit := astable(slow, series(leaf(resistor(1, "A2", 33e3, 12)), leaf(resistor(2, "A10", 22e3, 100))), parallelOhms(leaf(resistor(3, "A10", 220e3, 100)), leaf(resistor(4, "A1", 220e3, 100))), leaf(slowC), timerLot)
	slowFit.Fit.Warnings = []string{"C1: leakage of an electrolytic may lengthen the times by up to 1.4 %; a film capacitor would not"}
	holdFit := pulse(hold, leaf(resistor(2, "A10", 22e3, 100)), leaf(capacitor(21, "B9", 100e-9, "film", 40)), timerLot)
	fixedC := capacitor(22, "B9", 100e-9, "X7R", 80)
	fixedC.Note = "from the 2024 order"
	led := numbered(50, "", inventory.Other, "LED 5 MM AMBER", 30)
	held := resistor(5, "A3", 470, 60)
	held.Reserved = 8
	plan := optimize.Plan{
		Job:   optimize.Job{Name: "harbour beacon", Boards: 12, Stages: []optimize.Stage{slow, hold}},
		Built: 12,
		Variants: []optimize.Variant{{Boards: 12, Stages: []optimize.StageFit{slowFit, holdFit}, Fixed: []optimize.Place{
			{Reference: "C4", Lot: fixedC}, {Reference: "C3", Lot: fixedC}, {Reference: "D1", Lot: led}, {Reference: "R4", Lot: held},
		}}},
		Search: optimize.Search{Proven: true},
	}
	return withPicks(plan)
}

// shortPlan has two variants, eight boards of ten, and shortages.
func shortPlan() optimize.Plan {
	stage := optimize.Stage{Name: "tone", References: map[string]string{"ra": "R1", "rb": "R2", "c": "C1", "timer": "U1"}, Spec: spec(requirement(optimize.Frequency, 420, 0.01))}
	timerLot := numbered(40, "D1", inventory.Timer, "TLC555", 8)
	c := leaf(capacitor(20, "B1", 100e-9, "film", 40))
	rb := leaf(resistor(2, "A2", 16e3, 40))
	one := astable(stage, leaf(resistor(1, "A1", 2200, 5)), rb, c, timerLot)
	two := astable(stage, leaf(resistor(3, "A11", 2400, 40)), rb, c, timerLot)
	plan := withPicks(optimize.Plan{
		Job: optimize.Job{Name: "fog signal", Boards: 10, Stages: []optimize.Stage{stage}}, Built: 8,
		Variants: []optimize.Variant{{Boards: 5, Stages: []optimize.StageFit{one}}, {Boards: 3, Stages: []optimize.StageFit{two}}},
		Shortages: []optimize.Shortage{
			{References: []string{"U10", "U1"}, Kind: inventory.Timer, PartNumber: "TLC555", Short: 2, Why: "TLC555: 8 available in lot 40, 10 boards with this fit need 10"},
			{References: []string{"R1"}, Kind: inventory.Resistor, Value: 2200, Short: 5, Why: "2.2 kΩ ±1 %: 5 available in lot 1"},
			{References: []string{"spare stage"}, Kind: inventory.Other, Short: 10, Why: "no network of up to 2 parts a position meets stage spare stage, not even for one board"},
		},
		Warnings: []string{"C3: lot 22 (100 nF) does not state its voltage rating: check it before it is fitted"},
	})
	return plan
}

// hostilePlan holds imported texts that would do harm as anything but text, and
// the longest names that are common.
func hostilePlan() optimize.Plan {
	long := "a stage with forty characters in its name"[:40]
	stage := optimize.Stage{Name: long, References: map[string]string{"r": "=R1", "c": "@SUM(A1)", "timer": "+U1"}, Spec: spec(requirement(optimize.Pulse, 0.1, 0.05))}
	r, c := resistor(1, "=cmd|' /C calc'!A0", 82e3, 9), capacitor(2, "-2+3", 1e-6, "film", 9)
	r.Note, c.Note = "@note", "\tindented"
	c.Part.Dielectric = "=1+1"
	other := numbered(4, "\rbin", inventory.Other, `=HYPERLINK("http://example.invalid","X")`, 9)
	wide := numbered(5, "抽斗 3 – Größe µ Ω", inventory.Other, "VIS À TÊTE FRAISÉE «M3» 🔩 <&> \"QUOTED\"", 9)
	broken := numbered(6, "bell\x07 and \xff", inventory.Other, "_x000D_ AND &#10;", 9)
	fit := pulse(stage, leaf(r), leaf(c), numbered(3, "+A1", inventory.Timer, "NE555", 9))
	return withPicks(optimize.Plan{
		Job: optimize.Job{Name: `=1+1 & "job" &P 12` + "\nsecond line", Boards: 2, Stages: []optimize.Stage{stage}}, Built: 2,
		Variants: []optimize.Variant{{Boards: 2, Stages: []optimize.StageFit{fit}, Fixed: []optimize.Place{
			{Reference: "X1", Lot: other}, {Reference: "X2", Lot: wide}, {Reference: "X3", Lot: broken},
		}}},
		Search: optimize.Search{Proven: true},
	})
}

// largePlan has so many picks, most of them of fixed lines.
func largePlan(count int) optimize.Plan {
	plan := beaconPlan()
	plan.Job.Name = "large board"
	plan.Picks = nil
	for i := len(plan.Variants[0].Stages[0].Places) + 8; i < count+6; i++ {
		lot := resistor(inventory.LotID(100+i), fmt.Sprintf("%c%d", 'A'+i%20, 1+i/20), float64(100+i), 1000)
		plan.Variants[0].Fixed = append(plan.Variants[0].Fixed, optimize.Place{Reference: fmt.Sprintf("R%d", 100+i), Lot: lot})
	}
	return withPicks(plan)
}
