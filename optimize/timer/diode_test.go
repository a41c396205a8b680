package timer

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
)

// drop returns the diode's forward voltage at a current and 27 °C, V.
func (d Diode) drop(amperes float64) float64 {
	j := d.at(27)
	return j.slopeV*math.Log1p(amperes/j.saturationA) + amperes*j.seriesOhm
}

func TestTheUsualModelOfA1N4148HasThePublishedDrops(t *testing.T) {
	d, ok := DiodeByPartNumber("1n4148")
	if !ok {
		t.Fatal("1N4148 is unknown")
	}
	// 0.48, 0.58 and 0.69 V at 0.1, 1 and 10 mA: the model run in ngspice 39.
	for amperes, volts := range map[float64]float64{1e-4: .48, 1e-3: .58, 1e-2: .69} {
		if got := d.drop(amperes); math.Abs(got-volts) > .005 {
			t.Errorf("at %g A: %.4f V, want %g", amperes, got, volts)
		}
	}
}

func TestDiodesAreKnownByTheirTradeNumbers(t *testing.T) {
	for number, known := range map[string]bool{
		"1N4148": true, "1n4148 ": true, "1N4148TR": true, "1N 4148-W": true, "1N4001": true, "1N4007": true, "1N4007-T": true, "1N5819": true,
		"": false, "1N41": false, "1N41480": false, "1N4008": false, "BAT85": false, "LED": false,
	} {
		if _, ok := DiodeByPartNumber(number); ok != known {
			t.Errorf("%q known: %v", number, ok)
		}
	}
}

func TestAStockedDiodeHasItsOwnModelOrAKnownOneOrSaysWhatToFill(t *testing.T) {
	for _, test := range []struct {
		name   string
		part   inventory.Part
		want   Diode
		source string // part of it; of the error where the diode is zero
	}{
		{"own model", inventory.Part{PartNumber: "1N4148", SaturationA: 4.352e-9, Ideality: 1.906, SeriesOhm: .646}, Diode{4.352e-9, 1.906, .646}, "own model"},
		{"own model without resistance", inventory.Part{PartNumber: "X1", SaturationA: 1e-9, Ideality: 1.5}, Diode{1e-9, 1.5, 0}, "own model"},
		{"known number", inventory.Part{PartNumber: "1N4148", ForwardV: .7}, Diode{2.52e-9, 1.752, .568}, "usual model"},
		{"half a model", inventory.Part{PartNumber: "X1", SaturationA: 1e-9}, Diode{}, "only one of saturation_a and ideality"},
		{"absurd ideality", inventory.Part{PartNumber: "X1", SaturationA: 1e-9, Ideality: 100}, Diode{}, "ideality of 100 is not between"},
		{"absurd saturation", inventory.Part{PartNumber: "X1", SaturationA: 10, Ideality: 1}, Diode{}, "saturation_a of 10 is not between"},
		{"absurd forward drop", inventory.Part{PartNumber: "X1", ForwardV: 60}, Diode{}, "forward_v of 60 V"},
		{"nothing known", inventory.Part{PartNumber: "X1"}, Diode{}, "fill the columns saturation_a, ideality and series_ohm"},
	} {
		got, source, err := DiodeOf(test.part)
		if err != nil {
			source = err.Error()
		}
		if got != test.want || (err != nil) != (test.want == Diode{}) || !strings.Contains(source, test.source) {
			t.Errorf("%s: %+v, %q, %v", test.name, got, source, err)
		}
	}
}

func TestADiodeWithItsForwardDropAloneHasThatDropAtTenMilliamperes(t *testing.T) {
	d, source, err := DiodeOf(inventory.Part{PartNumber: "X1", ForwardV: .65})
	if err != nil || !strings.Contains(source, "0.65 V at 10 mA") {
		t.Fatal(source, err)
	}
	within(t, "drop", d.drop(10e-3), .65, 1e-12)
}

func TestAHotDiodeLeaksMoreAndDropsLess(t *testing.T) {
	d := signal
	cold, hot := d.at(0), d.at(60)
	if !(hot.saturationA > 5*cold.saturationA) {
		t.Errorf("IS is %g A at 0 °C and %g A at 60 °C", cold.saturationA, hot.saturationA)
	}
	at := func(j junction) float64 { return j.slopeV * math.Log1p(1e-3/j.saturationA) }
	// About -2 mV/°C for silicon (common practice, no source).
	if slope := (at(hot) - at(cold)) / 60; slope > -1e-3 || slope < -3e-3 {
		t.Errorf("the drop changes by %g V/°C", slope)
	}
	if moved := d.At(60).at(27); !closeTo(moved.saturationA, hot.saturationA, 1e-14) || !closeTo(moved.slopeV, hot.slopeV, 1e-14) {
		t.Errorf("moved to 27 °C it is %+v, at 60 °C %+v", moved, hot)
	}
	if at27 := d.at(27); at27.saturationA != d.SaturationA {
		t.Errorf("at 27 °C IS is %g, not the model's", at27.saturationA)
	}
}

func TestTheQuadratureRuleIsExactForPolynomials(t *testing.T) {
	// Eight points integrate x^n over [-1, 1] exactly up to n = 15: 2/(n+1) for even n.
	for n := 0; n <= 14; n += 2 {
		sum := 0.0
		for i, node := range legendreNodes {
			sum += 2 * legendreWeights[i] * math.Pow(node, float64(n))
		}
		within(t, "integral of an even power", sum, 2/float64(n+1), 1e-14)
	}
}

// simpson integrates f from a to b adaptively.
func simpson(f func(float64) float64, a, b, rel float64) float64 {
	var halve func(a, b, fa, fm, fb, whole, tolerance float64, depth int) float64
	halve = func(a, b, fa, fm, fb, whole, tolerance float64, depth int) float64 {
		m := (a + b) / 2
		fl, fr := f((a+m)/2), f((m+b)/2)
		left, right := (m-a)/6*(fa+4*fl+fm), (b-m)/6*(fm+4*fr+fb)
		if off := left + right - whole; depth == 0 || math.Abs(off) <= 15*tolerance {
			return left + right + off/15
		}
		return halve(a, m, fa, fl, fm, left, tolerance/2, depth-1) + halve(m, b, fm, fr, fb, right, tolerance/2, depth-1)
	}
	const strips = 8 // so that a knee is not stepped over at once
	sum, width := 0.0, (b-a)/strips
	for i := range strips {
		a := a + float64(i)*width
		fa, fm, fb := f(a), f(a+width/2), f(a+width)
		whole := width / 6 * (fa + 4*fm + fb)
		sum += halve(a, a+width, fa, fm, fb, whole, rel*math.Abs(whole), 30)
	}
	return sum
}

// bisect returns the root of a rising f between low and high.
func bisect(f func(float64) float64, low, high float64) float64 {
	for range 60 {
		if m := (low + high) / 2; f(m) < 0 {
			low = m
		} else {
			high = m
		}
	}
	return (low + high) / 2
}

// The phases with diodes against t = C ∫ dv/i over the capacitor's voltage, each
// current found by bisection of Kirchhoff's law.
func TestDiodePhasesAreTheIntegralOfTheOneLaw(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := anyDiode(t)
		if d.SaturationA == 0 {
			d = signal
		}
		j := d.at(rapid.Float64Range(-20, 70).Draw(t, "ambient"))
		r, other := logRange(t, 100, 1e7, "r"), logRange(t, 100, 1e7, "other")
		drop1 := rapid.Float64Range(.3, 5).Draw(t, "drop1")
		drop0 := drop1 * rapid.Float64Range(1.2, 4).Draw(t, "ratio")
		// Currents of the diode span decades: their logarithm is bisected.
		current := func(rising func(i, u float64) float64) (i, u float64) {
			voltage := func(i float64) float64 { return i*j.seriesOhm + j.slopeV*math.Log1p(i/j.saturationA) }
			i = math.Exp(bisect(func(ln float64) float64 { i := math.Exp(ln); return rising(i, voltage(i)) }, -80, 5))
			return i, voltage(i)
		}
		forward := func(ohm, drop float64) float64 { // through ohm and the diode
			i, _ := current(func(i, u float64) float64 { return i*ohm + u - drop })
			return i
		}
		reverse := func(ohm, drop float64) float64 { // through ohm and the diode the other way round
			passed := func(x float64) float64 { return -j.saturationA * math.Expm1(-x) }
			return passed(bisect(func(x float64) float64 { return passed(x)*(ohm+j.seriesOhm) + x*j.slopeV - drop }, 0, drop/j.slopeV))
		}
		across := func(ohm, drop float64) float64 { // u on rb with the diode across it, behind ra
			_, u := current(func(i, u float64) float64 { return ohm*(i+u/other) + u - drop })
			return u
		}
		same := func(what string, got, want, rel float64) {
			t.Helper()
			if !closeTo(got, want, rel) {
				t.Fatalf("%s: %.9g, by quadrature of the law %.9g", what, got, want)
			}
		}
		same("series", j.seriesRampS(r, other, 0, 1, drop0, drop1),
			simpson(func(drop float64) float64 { return 1 / (forward(r, drop) + reverse(other, drop)) }, drop1, drop0, 1e-8), 2e-6)
		same("bypass", j.bypassRampS(r, other, 1, drop0, drop1),
			simpson(func(drop float64) float64 { return r / (drop - across(r, drop)) }, drop1, drop0, 1e-8), 1e-6)
		sink := r / 100
		leaking := func(drop float64) float64 {
			x := bisect(func(x float64) float64 {
				return x*j.slopeV + sink*(x*j.slopeV/other+j.saturationA*(1-math.Exp(-x))) - drop
			}, 0, drop/j.slopeV)
			return x*j.slopeV/other + j.saturationA*(1-math.Exp(-x))
		}
		same("leaking", j.leakingRampS(sink, other, 1, drop0, drop1),
			simpson(func(drop float64) float64 { return 1 / leaking(drop) }, drop1, drop0, 1e-8), 1e-6)
	})
}
