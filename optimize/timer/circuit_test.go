package timer

import (
	"math"
	"testing"
)

// within fails unless got is within rel of want.
func within(t *testing.T, what string, got, want, rel float64) {
	t.Helper()
	if !(math.Abs(got-want) <= rel*math.Abs(want)) {
		t.Errorf("%s = %.9g, want %.9g within %g", what, got, want, rel)
	}
}

func under(t *testing.T, d *Device, supplyV float64) Conditions {
	t.Helper()
	c, err := d.Under(supplyV, 25, 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

func TestIdealTimesAreTheTextbookLogarithms(t *testing.T) {
	c := under(t, &Ideal, 9)
	ln2, ln3 := math.Ln2, math.Log(3)
	for _, test := range []struct {
		slug             string
		ohms             [MaxResistors]float64
		high, low, first float64 // of 10 nF
	}{
		{"classic", [3]float64{1000, 2000}, 3000 * ln2, 2000 * ln2, 3000 * ln3},
		{"classic-inverted", [3]float64{1000, 2000}, 2000 * ln2, 3000 * ln2, 2000 * ln2},
		{"diode-bypass", [3]float64{1000, 2000}, 1000 * ln2, 2000 * ln2, 1000 * ln3},
		// k = RD/(RA+RD) = 1/4: Rth = 2000+750, ln((2/3-1/4)/(1/3-1/4)) = ln 5.
		{"discharge-limb", [3]float64{3000, 2000, 1000}, 5000 * ln2, 2750 * math.Log(5), 5000 * ln3},
		{"output-fed", [3]float64{2000}, 2000 * ln2, 2000 * ln2, 2000 * ln3},
		{"output-fed-split", [3]float64{1000, 2000}, 1000 * ln2, 2000 * ln2, 1000 * ln3},
		{"one-shot", [3]float64{2000}, 2000 * ln3, 0, 0},
		{"power-on-pulse", [3]float64{2000}, 2000 * ln3, 0, 0},
	} {
		circuit := CircuitBySlug(test.slug)
		if circuit == nil {
			t.Fatalf("no circuit %s", test.slug)
		}
		v := Values{Ohms: test.ohms, Farads: 10e-9}
		p := circuit.Phases(&c, &v)
		within(t, test.slug+" high", p.HighS, test.high*10e-9, 1e-14)
		within(t, test.slug+" low", p.LowS, test.low*10e-9, 1e-14)
		within(t, test.slug+" first high", circuit.FirstHighS(&c, &v), test.first*10e-9, 1e-14)
		if why := circuit.Stalls(&c, &v); why != "" {
			t.Errorf("%s stalls: %s", test.slug, why)
		}
	}
}
