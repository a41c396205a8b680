package timer

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func closeTo(a, b, rel float64) bool { return math.Abs(a-b) <= rel*max(math.Abs(a), math.Abs(b)) }

// logRange draws a value between two, evenly over its logarithm.
func logRange(t *rapid.T, low, high float64, label string) float64 {
	return low * math.Exp(rapid.Float64Range(0, math.Log(high/low)).Draw(t, label))
}

func anyDevice(t *rapid.T) *Device { return rapid.SampledFrom(Devices()).Draw(t, "device") }

func anyDiode(t *rapid.T) Diode {
	known := []Diode{{}, {2.52e-9, 1.752, .568}, {4.352e-9, 1.906, .646}, {14.11e-9, 1.984, .034}, {31.7e-6, 1.373, .051}}
	if rapid.Bool().Draw(t, "known diode") {
		return rapid.SampledFrom(known).Draw(t, "diode")
	}
	return Diode{logRange(t, 1e-15, 1e-5, "IS"), rapid.Float64Range(.9, 3).Draw(t, "N"), rapid.Float64Range(0, 20).Draw(t, "RS")}
}

// drawDesign draws a circuit with values far beyond what anyone builds.
func drawDesign(t *rapid.T, device *Device) (*Circuit, Conditions, Values) {
	circuit := rapid.SampledFrom(Circuits()).Draw(t, "circuit")
	lowV, highV := device.SupplyMinV, device.SupplyMaxV
	if highV == 0 {
		lowV, highV = 1, 30
	}
	supplyV := rapid.Float64Range(lowV, highV).Draw(t, "supply")
	controlV := 0.0
	if rapid.Bool().Draw(t, "driven control pin") {
		controlV = supplyV * rapid.Float64Range(.05, .98).Draw(t, "control")
	}
	ambientC := rapid.Float64Range(-40, 85).Draw(t, "ambient")
	c, err := device.Under(supplyV, ambientC, rapid.Float64Range(0, device.SourceMaxA).Draw(t, "load"), controlV)
	if err != nil {
		t.Fatal(err)
	}
	v := Values{Farads: logRange(t, 1e-11, 1e-2, "farads")}
	for i := range circuit.Resistors {
		v.Ohms[i] = logRange(t, 10, 1e8, circuit.Resistors[i])
	}
	if circuit.Diodes > 0 {
		v.Diode = anyDiode(t)
	}
	return circuit, c, v
}

func TestEveryPhaseIsATimeOrNeverEndsAndThenSaysWhy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		circuit, c, v := drawDesign(t, anyDevice(t))
		p, first := circuit.Phases(&c, &v), circuit.FirstHighS(&c, &v)
		for what, seconds := range map[string]float64{"high": p.HighS, "low": p.LowS, "first high": first} {
			if !(seconds >= 0) {
				t.Fatalf("%s %s = %g", circuit.Slug, what, seconds)
			}
		}
		ends := !math.IsInf(p.HighS, 1) && !math.IsInf(p.LowS, 1)
		if why := circuit.Stalls(&c, &v); ends != (why == "") {
			t.Fatalf("%s: phases %+v, yet %q", circuit.Slug, p, why)
		}
		if ends && !circuit.OneShot && !circuit.Inverter && first < p.HighS {
			t.Fatalf("%s: the first high time %g is shorter than the others, %g", circuit.Slug, first, p.HighS)
		}
		if circuit.Inverter && first != p.HighS {
			t.Fatalf("%s: the first high time %g differs from the others, %g", circuit.Slug, first, p.HighS)
		}
	})
}

// A relative noise that the search's bounds allow for.
const noise = 1e-12

func TestTrendsAreTrueWhereverEveryPhaseEndsAndNoRailIsBroken(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		circuit, c, v := drawDesign(t, anyDevice(t))
		k := rapid.IntRange(0, len(circuit.Resistors)-1).Draw(t, "position")
		more := v
		more.Ohms[k] *= 1 + logRange(t, 1e-9, 1e3, "step")
		if steers(circuit, &c, &v) && steers(circuit, &c, &more) {
			a, b := circuit.Phases(&c, &v), circuit.Phases(&c, &more)
			holds(t, circuit, "high", circuit.HighTrend[k], a.HighS, b.HighS)
			holds(t, circuit, "low", circuit.LowTrend[k], a.LowS, b.LowS)
		}
	})
}

// steers reports whether the circuit runs and its diodes block.
func steers(circuit *Circuit, c *Conditions, v *Values) bool {
	for _, rail := range Rails(circuit, c, v, &Ratings{}) {
		if rail.Broken && (rail.Name == "oscillation" || rail.Name == "diode") {
			return false
		}
	}
	return true
}

func holds(t *rapid.T, circuit *Circuit, phase string, trend int8, less, more float64) {
	slack := noise * max(less, more)
	switch {
	case trend > 0 && more < less-slack, trend < 0 && more > less+slack, trend == 0 && math.Abs(more-less) > slack:
		t.Fatalf("%s: with more resistance the %s time goes from %.17g to %.17g, against a trend of %d", circuit.Slug, phase, less, more, trend)
	}
}

func TestTimesAreProportionalToTheCapacitance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		circuit, c, v := drawDesign(t, anyDevice(t))
		factor := logRange(t, 1e-3, 1e3, "factor")
		scaled := v
		scaled.Farads *= factor
		a, b := circuit.Phases(&c, &v), circuit.Phases(&c, &scaled)
		if !math.IsInf(a.HighS, 1) && !closeTo(a.HighS*factor, b.HighS, noise) || !math.IsInf(a.LowS, 1) && !closeTo(a.LowS*factor, b.LowS, noise) {
			t.Fatalf("%s: %+v times %g is not %+v", circuit.Slug, a, factor, b)
		}
	})
}

func TestAMoreLeakyOrColderPartMakesNoNaN(t *testing.T) {
	c := under(t, &Ideal, 9)
	for _, ambientC := range []float64{-65, 25, 27, 200} {
		c.AmbientC = ambientC
		for _, d := range []Diode{{1e-20, .5, 0}, {.1, 10, 1e4}, {1e-20, 10, 0}, {.1, .5, 0}} {
			for _, ohms := range [][3]float64{{0, 0, 0}, {0, 1e3, 0}, {1e3, 0, 0}, {1e9, 1e9, 0}, {1, 1e9, 0}, {1e9, 1, 0}} {
				for _, circuit := range Circuits() {
					v := Values{Ohms: ohms, Farads: 1e-9, Diode: d}
					p := circuit.Phases(&c, &v)
					if math.IsNaN(p.HighS) || math.IsNaN(p.LowS) || math.IsNaN(circuit.FirstHighS(&c, &v)) || p.HighS < 0 || p.LowS < 0 {
						t.Errorf("%s %+v: %+v", circuit.Slug, v, p)
					}
					for _, rail := range Rails(circuit, &c, &v, &Ratings{Watts: [3]float64{1, 1, 1}, CapacitorV: 1}) {
						if rail.Text == "" || rail.Name == "" {
							t.Errorf("%s: empty rail", circuit.Slug)
						}
					}
				}
			}
		}
	}
}
