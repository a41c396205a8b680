package spread

import (
	"testing"

	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// wide is a worst case with every spread: supply, temperature, tolerances.
func wide(tb testing.TB, circuit *timer.Circuit) (*Evaluator, Values) {
	around := Surroundings{
		Device: timer.DeviceByName("TLC555"), SupplyV: optimize.Range{Nominal: 9, Min: 8.1, Max: 9.9},
		AmbientC: optimize.Range{Nominal: 25, Min: 10, Max: 40},
	}
	var diode timer.Diode
	if circuit.Diodes > 0 {
		diode, _ = timer.DiodeByPartNumber("1N4148")
	}
	e, err := NewEvaluator(circuit, around, diode)
	if err != nil {
		tb.Fatal(err)
	}
	values := Values{Farads: optimize.Band{Min: .9e-6, Max: 1.1e-6}}
	for i, ohms := range [...]float64{100e3, 47e3, 33e3} {
		values.Ohms[i] = optimize.Band{Min: .99 * ohms, Max: 1.01 * ohms}
	}
	return e, values
}

func BenchmarkBand(b *testing.B) {
	for _, circuit := range timer.Circuits() {
		b.Run(circuit.Slug, func(b *testing.B) {
			e, values := wide(b, circuit)
			b.ReportAllocs()
			for b.Loop() {
				e.Band(&values)
			}
		})
	}
}

func TestTheEvaluatorAllocatesNothing(t *testing.T) {
	for _, circuit := range timer.Circuits() {
		e, values := wide(t, circuit)
		if n := testing.AllocsPerRun(100, func() { e.Band(&values) }); n != 0 {
			t.Errorf("%s: %g allocations", circuit.Slug, n)
		}
	}
}
