package search

import (
	"context"
	"fmt"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
	"tickdrawer/optimize/spread"
	"tickdrawer/optimize/timer"
)

// plainNetwork is a network as the exhaustive search forms it: by splitting the
// lots in two in every way, with no sharing, ordering or bound in common with
// the tables under test.
type plainNetwork struct {
	value       float64
	least, most float64 // over tolerance and temperature
	usage       map[inventory.LotID]int64
	parts       int
	cost        inventory.Micros
	polar       bool // holds a polarised part
}

func plainNetworks(lots []inventory.Lot, kind inventory.Kind, most int, ambient optimize.Range) []plainNetwork {
	byParts := make([][]plainNetwork, most+1)
	for _, lot := range lots {
		if lot.Part.Kind == kind && lot.Available() > 0 {
			n := plainNetwork{lot.Value(), lot.Value(), lot.Value(), map[inventory.LotID]int64{lot.ID: 1}, 1, 0, lot.Part.Polarised()}
			if t := lot.Part.Tolerance; t != nil && lot.Measured == 0 {
				n.least, n.most = n.least*(1-t.Minus), n.most*(1+t.Plus)
			}
			if ppm := lot.Part.TempcoPPM; ppm != nil {
				cold, hot := *ppm*1e-6*(ambient.Min-25), *ppm*1e-6*(ambient.Max-25)
				n.least, n.most = n.least*(1+min(cold, hot)), n.most*(1+max(cold, hot))
			}
			if lot.UnitCost != nil {
				n.cost = *lot.UnitCost
			}
			byParts[1] = append(byParts[1], n)
		}
	}
	for parts := 2; parts <= most; parts++ {
		for left := 1; left < parts; left++ {
			for _, a := range byParts[left] {
				for _, b := range byParts[parts-left] {
					usage := map[inventory.LotID]int64{}
					for _, part := range []plainNetwork{a, b} {
						for id, n := range part.usage {
							usage[id] += n
						}
					}
					sum := func(x, y float64) float64 { return x + y }
					ratio := func(x, y float64) float64 { return y * x / (y + x) }
					join := func(f func(x, y float64) float64) {
						byParts[parts] = append(byParts[parts], plainNetwork{
							f(a.value, b.value), f(a.least, b.least), f(a.most, b.most), usage, parts, a.cost + b.cost, a.polar || b.polar,
						})
					}
					series, parallel := sum, ratio
					if kind == inventory.Capacitor {
						series, parallel = ratio, sum
					}
					if !a.polar && !b.polar {
						join(series)
					}
					join(parallel)
				}
			}
		}
	}
	return slices.Concat(byParts...)
}

// roundoff is by how much two computations of one share may differ here.
const roundoff = 1e-10

type plainFit struct {
	parts int
	cost  inventory.Micros
	used  float64
}

func covered(lots []inventory.Lot, boards int64, networks ...*plainNetwork) bool {
	for _, lot := range lots {
		total := int64(0)
		for _, n := range networks {
			total += n.usage[lot.ID]
		}
		if total*boards > lot.Available() {
			return false
		}
	}
	return true
}

// plainFits returns every fit of the circuit with the ideal timer.
func plainFits(spec optimize.Spec, circuit *timer.Circuit, lots []inventory.Lot, diode timer.Diode, extraParts int, extraCost inventory.Micros) []plainFit {
	resistors := plainNetworks(lots, inventory.Resistor, spec.PartsEach, spec.Ambient)
	capacitors := plainNetworks(lots, inventory.Capacitor, spec.PartsC, spec.Ambient)
	around := spread.Surroundings{Device: &timer.Ideal, SupplyV: spec.Supply, AmbientC: spec.Ambient}
	conditions, err := timer.Ideal.Under(spec.Supply.Nominal, spec.Ambient.Nominal, 0, 0)
	if err != nil {
		panic(err)
	}
	var fits []plainFit
	chosen := make([]*plainNetwork, len(circuit.Resistors))
	var place func(position int)
	place = func(position int) {
		if position < len(chosen) {
			for i := range resistors {
				chosen[position] = &resistors[i]
				if covered(lots, spec.Boards, chosen[:position+1]...) {
					place(position + 1)
				}
			}
			return
		}
		for i := range capacitors {
			c := &capacitors[i]
			if !covered(lots, spec.Boards, c) {
				continue
			}
			values := timer.Values{Farads: c.value, Diode: diode}
			fit := plainFit{parts: extraParts + c.parts, cost: extraCost + c.cost}
			for j, n := range chosen {
				values.Ohms[j] = n.value
				fit.parts += n.parts
				fit.cost += n.cost
			}
			if spec.Basis == optimize.WorstCase {
				bands := spread.Values{Farads: optimize.Band{Min: c.least, Max: c.most}}
				for j, n := range chosen {
					bands.Ohms[j] = optimize.Band{Min: n.least, Max: n.most}
				}
				band, err := spread.WorstCase(circuit, around, &bands, diode)
				if err != nil {
					panic(err)
				}
				fit.used = spec.WorstAllowanceUsed(band)
			} else {
				fit.used = spec.AllowanceUsed(timesOf(circuit, circuit.Phases(&conditions, &values)))
			}
			if fit.used <= 1+roundoff {
				fits = append(fits, fit)
			}
		}
	}
	place(0)
	return fits
}

// plainFront keeps, for each number of parts and cost, the least used, where it
// gains the resolution over every fit with no more of either.
func plainFront(fits []plainFit, resolution float64) []plainFit {
	least := map[[2]int64]float64{}
	for _, f := range fits {
		key := [2]int64{int64(f.parts), int64(f.cost)}
		if used, ok := least[key]; !ok || f.used < used {
			least[key] = f.used
		}
	}
	var front []plainFit
	for key, used := range least {
		joins := true
		for other, otherUsed := range least {
			if other != key && other[0] <= key[0] && other[1] <= key[1] && used > otherUsed-max(resolution-roundoff, roundoff) {
				joins = false
			}
		}
		if joins {
			front = append(front, plainFit{int(key[0]), inventory.Micros(key[1]), used})
		}
	}
	slices.SortFunc(front, func(a, b plainFit) int {
		return (a.parts-b.parts)*1_000_000_000 + int(a.cost-b.cost)
	})
	return front
}

func drawLots(t *rapid.T, kind inventory.Kind, first inventory.LotID, values []float64, most int) []inventory.Lot {
	var lots []inventory.Lot
	for i := range rapid.SampledFrom([]int{most, most - 1, most - 1, 1}).Draw(t, string(kind)+"s") {
		part := inventory.Part{Kind: kind, Value: rapid.SampledFrom(values).Draw(t, "value")}
		if kind == inventory.Capacitor && rapid.IntRange(0, 3).Draw(t, "polarised") == 0 {
			part.Dielectric = "electrolytic"
		}
		lot := inventory.Lot{ID: first + inventory.LotID(i), Part: part, OnHand: rapid.SampledFrom([]int64{9, 6, 4, 3, 2, 1}).Draw(t, "pieces")}
		if percent := rapid.SampledFrom([]float64{1, 5, 0}).Draw(t, "tolerance"); percent > 0 {
			lot.Part.Tolerance = &marking.Tolerance{Minus: percent / 100, Plus: percent / 100}
		}
		if ppm := rapid.SampledFrom([]float64{0, 0, 200, -700}).Draw(t, "tempco"); ppm != 0 {
			lot.Part.TempcoPPM = &ppm
		}
		if rapid.IntRange(0, 4).Draw(t, "measured") == 0 {
			lot.Measured = part.Value * 1.013
		}
		lot.Reserved = rapid.Int64Range(0, lot.OnHand/3).Draw(t, "reserved")
		if rapid.Bool().Draw(t, "costed") {
			cost := inventory.Micros(rapid.Int64Range(1, 3).Draw(t, "cost")) * 10_000
			lot.UnitCost = &cost
		}
		lots = append(lots, lot)
	}
	return lots
}

// The peer is an exhaustive enumeration written apart from the search.
func TestFrontEqualsExhaustiveEnumeration(t *testing.T) {
	for _, circuit := range timer.Circuits() {
		t.Run(circuit.Slug, func(t *testing.T) { frontEqualsExhaustiveEnumeration(t, circuit) })
	}
}

func frontEqualsExhaustiveEnumeration(t *testing.T, circuit *timer.Circuit) {
	found, competed := 0, 0 // drawers with a fit, and with several on the front
	defer func() {
		t.Logf("%d drawers with a fit, %d with several on the front", found, competed)
		if found == 0 || competed == 0 {
			t.Error("the drawn drawers try nothing")
		}
	}()
	ohms := []float64{1000, 2200, 4700, 10e3, 10e3, 22e3, 47e3, 100e3}
	farads := []float64{10e-9, 22e-9, 100e-9, 100e-9, 1e-6}
	rapid.Check(t, func(t *rapid.T) {
		most := 4
		if len(circuit.Resistors) > 2 {
			most = 3
		}
		lots := drawLots(t, inventory.Resistor, 1, ohms, most)
		lots = append(lots, drawLots(t, inventory.Capacitor, 101, farads, 3)...)
		spec := optimize.Spec{
			Supply: optimize.Exactly(9), Ambient: rapid.SampledFrom([]optimize.Range{optimize.Exactly(25), {Nominal: 35, Min: 30, Max: 40}}).Draw(t, "ambient"),
			Circuits: []string{circuit.Slug}, Timers: []string{"ideal"},
			PartsEach: rapid.SampledFrom([]int{2, 1}).Draw(t, "parts_each"), PartsC: rapid.SampledFrom([]int{2, 1}).Draw(t, "parts_c"),
			Boards:     rapid.Int64Range(1, 3).Draw(t, "boards"),
			Basis:      rapid.SampledFrom([]optimize.Basis{optimize.Nominal, optimize.WorstCase}).Draw(t, "basis"),
			Resolution: rapid.SampledFrom([]float64{0, 0.001, 0.1}).Draw(t, "resolution"),
		}
		if len(circuit.Resistors) == 1 && rapid.Bool().Draw(t, "three") {
			spec.PartsEach = 3
		}
		extraParts, extraCost := 0, inventory.Micros(0)
		var diode timer.Diode
		if circuit.Diodes > 0 {
			cost := inventory.Micros(5000)
			part := inventory.Part{Kind: inventory.Diode, PartNumber: "1N4148", SaturationA: 2.52e-9, Ideality: 1.752, SeriesOhm: 0.568}
			lots = append(lots, inventory.Lot{ID: 900, Part: part, OnHand: 99, UnitCost: &cost})
			diode, _, _ = timer.DiodeOf(part)
			extraParts, extraCost = circuit.Diodes, inventory.Micros(circuit.Diodes)*cost
		}
		if circuit.Inverter {
			extraParts++
		}
		// Ask for what some values near the stock's give, with wide allowances,
		// so that many fits compete.
		conditions, err := timer.Ideal.Under(9, spec.Ambient.Nominal, 0, 0)
		if err != nil {
			t.Fatal(err)
		}
		stocked := func(kind inventory.Kind) float64 {
			return rapid.SampledFrom(slices.DeleteFunc(slices.Clone(lots), func(l inventory.Lot) bool { return l.Part.Kind != kind })).Draw(t, "aim").Part.Value
		}
		aim := timer.Values{Farads: stocked(inventory.Capacitor), Diode: diode}
		for i := range circuit.Resistors {
			aim.Ohms[i] = stocked(inventory.Resistor) * rapid.SampledFrom([]float64{0.47, 1.03, 1.9}).Draw(t, "factor")
		}
		if circuit.Slug == "discharge-limb" && aim.Ohms[2] >= aim.Ohms[0]/2 {
			aim.Ohms[0], aim.Ohms[2] = 2.2*aim.Ohms[2], aim.Ohms[0] // it must run
		}
		times := timesOf(circuit, circuit.Phases(&conditions, &aim))
		measures := []optimize.Measure{optimize.Pulse}
		if !circuit.OneShot {
			measures = rapid.SampledFrom([][]optimize.Measure{
				{optimize.High, optimize.Low}, {optimize.Period}, {optimize.Frequency, optimize.Duty}, {optimize.Period, optimize.Duty}, {optimize.Low},
			}).Draw(t, "measures")
		}
		for _, m := range measures {
			target := times.Of(m)
			if math.IsInf(target, 0) || !(target > 0) {
				return
			}
			share := rapid.SampledFrom([]float64{0.03, 0.1, 0.4}).Draw(t, "share")
			spec.Requirements = append(spec.Requirements, optimize.Requirement{Measure: m, Allowance: optimize.Allowance{
				Target: target, Min: target * (1 - share), Max: target * (1 + share/2),
			}})
		}
		got, err := Run(context.Background(), spec, lots)
		if err != nil {
			t.Fatal(err)
		}
		want := plainFront(plainFits(spec, circuit, lots, diode, extraParts, extraCost), spec.Resolution)
		if len(want) > 0 {
			found++
		}
		if len(want) > 1 {
			competed++
		}
		if !got.Search.Proven {
			t.Fatal("not proven without a time limit")
		}
		if len(got.Fits) != len(want) {
			t.Fatalf("%d fits, exhaustively %d\n%s\nwant %+v", len(got.Fits), len(want), describe(got.Fits), want)
		}
		slices.SortFunc(got.Fits, func(a, b optimize.Fit) int {
			return (a.Parts-b.Parts)*1_000_000_000 + int(a.Cost-b.Cost)
		})
		for i, fit := range got.Fits {
			if fit.Parts != want[i].parts || fit.Cost != want[i].cost || math.Abs(fit.Used(spec.Basis)-want[i].used) > 1e-9 {
				t.Fatalf("fit %d: %d parts, cost %d, used %.12f; exhaustively %+v", i, fit.Parts, fit.Cost, fit.Used(spec.Basis), want[i])
			}
			for id, pieces := range fit.Usage() {
				at := slices.IndexFunc(lots, func(l inventory.Lot) bool { return l.ID == id })
				if pieces*spec.Boards > lots[at].Available() {
					t.Fatalf("lot %d overdrawn: %d a board, %d boards, %d available", id, pieces, spec.Boards, lots[at].Available())
				}
			}
		}
	})
}

func describe(fits []optimize.Fit) string {
	text := ""
	for _, f := range fits {
		text += fmt.Sprintf("%s: %d parts, cost %d, used %.12f\n", f.Circuit, f.Parts, f.Cost, f.UsedNominal)
	}
	return text
}
