package timer

import "testing"

func BenchmarkPhases(b *testing.B) {
	c, err := Ideal.Under(9, 25, 0, 0)
	if err != nil {
		b.Fatal(err)
	}
	for _, circuit := range circuits {
		v := Values{Ohms: [MaxResistors]float64{10e3, 47e3, 2e3}, Farads: 1e-6}
		if circuit.Diodes > 0 {
			v.Diode = signal
		}
		b.Run(circuit.Slug, func(b *testing.B) {
			b.ReportAllocs()
			sum := 0.0
			for b.Loop() {
				p := circuit.Phases(&c, &v)
				sum += p.HighS + p.LowS
			}
			_ = sum
		})
	}
}

func TestPhasesAllocateNothing(t *testing.T) {
	c := under(t, DeviceByName("TLC555"), 5)
	for _, circuit := range circuits {
		v := Values{Ohms: [MaxResistors]float64{10e3, 47e3, 2e3}, Farads: 1e-6}
		if circuit.Diodes > 0 {
			v.Diode = signal
		}
		if n := testing.AllocsPerRun(100, func() { circuit.Phases(&c, &v) }); n != 0 {
			t.Errorf("%s allocates %g times", circuit.Slug, n)
		}
	}
}
