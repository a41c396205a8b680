package timer

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// needsNgspice skips the test where ngspice is absent, or fails it where the
// environment says that the reference programs are required.
func needsNgspice(t testing.TB) {
	t.Helper()
	if _, err := exec.LookPath("ngspice"); err != nil {
		if os.Getenv("TICKDRAWER_REFERENCES") == "required" {
			t.Fatal("ngspice is not installed, and TICKDRAWER_REFERENCES=required")
		}
		t.Skip("SKIPPED: ngspice is not installed; the times are not compared with a simulator")
	}
}

var measurement = regexp.MustCompile(`(?m)^(\w+)\s*=\s*([-+0-9.eE]+)`)

// simulate runs the netlist unchanged and returns the named measurements, in
// lower case. ngspice's exit status does not tell of a failed measurement, so
// every name must be there and nothing may have failed.
func simulate(t testing.TB, netlist string, names ...string) map[string]float64 {
	t.Helper()
	path := filepath.Join(t.TempDir(), "circuit.cir")
	if err := os.WriteFile(path, []byte(netlist), 0o600); err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command("ngspice", "-n", "-b", path).CombinedOutput()
	if err != nil {
		t.Fatalf("ngspice: %v\n%s\n%s", err, out, netlist)
	}
	if bytes.Contains(out, []byte("failed")) || bytes.Contains(out, []byte("Error")) {
		t.Fatalf("ngspice: a measurement failed:\n%s\n%s", out, netlist)
	}
	measured := map[string]float64{}
	for _, found := range measurement.FindAllSubmatch(out, -1) {
		if x, err := strconv.ParseFloat(string(found[2]), 64); err == nil {
			measured[string(found[1])] = x
		}
	}
	for _, name := range names {
		if _, ok := measured[name]; !ok {
			t.Fatalf("ngspice reported no %s:\n%s\n%s", name, out, netlist)
		}
	}
	return measured
}

// placedValues returns single parts of the values in the circuit's positions.
func placedValues(circuit *Circuit, v *Values) []optimize.Placed {
	var placed []optimize.Placed
	leaf := func(kind inventory.Kind, value float64) optimize.Network {
		return optimize.Network{Lot: inventory.Lot{Part: inventory.Part{Kind: kind, Value: value}}, Value: value}
	}
	for i, position := range circuit.Resistors {
		placed = append(placed, optimize.Placed{Position: position, Kind: inventory.Resistor, Count: 1, Network: leaf(inventory.Resistor, v.Ohms[i])})
	}
	return append(placed, optimize.Placed{Position: "c", Kind: inventory.Capacitor, Count: 1, Network: leaf(inventory.Capacitor, v.Farads)})
}

// deviations returns the relative deviation of every time of the circuit from
// the simulated one.
func deviations(t testing.TB, circuit *Circuit, c *Conditions, v *Values) map[string]float64 {
	t.Helper()
	netlist := Netlist(circuit, c, placedValues(circuit, v), v.Diode)
	p := circuit.Phases(c, v)
	want := map[string]float64{"pulse": p.HighS}
	if !circuit.OneShot {
		want = map[string]float64{"th": p.HighS, "tl": p.LowS, "tp": p.HighS + p.LowS, "first": circuit.FirstHighS(c, v)}
	}
	var names []string
	for name := range want {
		names = append(names, name)
	}
	measured := simulate(t, netlist, names...)
	off := map[string]float64{}
	for name, computed := range want {
		off[name] = computed/measured[name] - 1
	}
	return off
}

type simulated struct {
	slug    string
	device  string
	supplyV float64
	v       Values
}

func (s simulated) String() string {
	return fmt.Sprintf("%s/%s/%gV/%v/%g", s.slug, s.device, s.supplyV, s.v.Ohms, s.v.Farads)
}

var signal = Diode{2.52e-9, 1.752, .568}

var simulations = []simulated{
	{"classic", "ideal", 5, Values{Ohms: [3]float64{10e3, 22e3}, Farads: 10e-9}},
	{"classic", "ideal", 9, Values{Ohms: [3]float64{1e3, 1e6}, Farads: 2.9e-6}},
	{"classic", "ideal", 9, Values{Ohms: [3]float64{1e6, 1e3}, Farads: 4.7e-6}},
	{"classic", "NE555", 5, Values{Ohms: [3]float64{1e3, 4.7e3}, Farads: 100e-9}},
	{"classic", "NE555", 15, Values{Ohms: [3]float64{10e3, 1e3}, Farads: 1e-6}},
	{"classic", "TLC555", 2, Values{Ohms: [3]float64{1e3, 470}, Farads: 1e-6}},
	{"classic-inverted", "ideal", 9, Values{Ohms: [3]float64{470e3, 47e3}, Farads: 10e-6}},
	{"classic-inverted", "TLC555", 5, Values{Ohms: [3]float64{4.7e3, 1e3}, Farads: 1e-9}},
	{"diode-bypass", "ideal", 5, Values{Ohms: [3]float64{10e3, 47e3}, Farads: 10e-9, Diode: signal}},
	{"diode-bypass", "ideal", 5, Values{Ohms: [3]float64{10e3, 2e3}, Farads: 100e-9, Diode: signal}},
	{"diode-bypass", "ideal", 9, Values{Ohms: [3]float64{10e3, 1e6}, Farads: 1e-6, Diode: signal}},
	{"diode-bypass", "NE555", 9, Values{Ohms: [3]float64{10e3, 100e3}, Farads: 1e-6, Diode: signal}},
	{"diode-bypass", "ideal", 9, Values{Ohms: [3]float64{10e3, 47e3}, Farads: 1e-6}},
	{"discharge-limb", "ideal", 9, Values{Ohms: [3]float64{100e3, 10e3, 33e3}, Farads: 1e-6}},
	{"discharge-limb", "ideal", 9, Values{Ohms: [3]float64{100e3, 0, 49e3}, Farads: 1e-6}},
	{"discharge-limb", "NE555", 5, Values{Ohms: [3]float64{10e3, 1e3, 4.3e3}, Farads: 1e-6}},
	{"output-fed", "ideal", 9, Values{Ohms: [3]float64{100e3}, Farads: 28.8e-6}},
	{"output-fed", "NE555", 9, Values{Ohms: [3]float64{10e3}, Farads: 1e-6}},
	{"output-fed", "TLC555", 5, Values{Ohms: [3]float64{1e3}, Farads: 1e-6}},
	{"output-fed-split", "ideal", 5, Values{Ohms: [3]float64{10e3, 22e3}, Farads: 100e-9, Diode: signal}},
	{"output-fed-split", "ideal", 9, Values{Ohms: [3]float64{1e3, 1e6}, Farads: 1e-6, Diode: signal}},
	{"output-fed-split", "NE555", 9, Values{Ohms: [3]float64{10e3, 22e3}, Farads: 100e-9, Diode: signal}},
	{"output-fed-split", "ideal", 9, Values{Ohms: [3]float64{10e3, 22e3}, Farads: 100e-9, Diode: Diode{31.7e-6, 1.373, .051}}},
	{"output-fed-split", "ideal", 9, Values{Ohms: [3]float64{100e3, 330e3}, Farads: 100e-9, Diode: Diode{31.7e-6, 1.373, .051}}},
	{"output-fed-split", "ideal", 9, Values{Ohms: [3]float64{10e3, 1e3}, Farads: 100e-9}},
	{"one-shot", "ideal", 9, Values{Ohms: [3]float64{9.1e3}, Farads: 10e-9}},
	{"one-shot", "NE555", 5, Values{Ohms: [3]float64{100e3}, Farads: 10e-6}},
	{"power-on-pulse", "ideal", 9, Values{Ohms: [3]float64{100e3}, Farads: 10e-6}},
}

func TestTimesAgreeWithNgspice(t *testing.T) {
	needsNgspice(t)
	worst := map[string]float64{}
	for _, s := range simulations {
		circuit, device := CircuitBySlug(s.slug), DeviceByName(s.device)
		c := under(t, device, s.supplyV)
		off := deviations(t, circuit, &c, &s.v)
		t.Log(s, off)
		for name, d := range off {
			if !(math.Abs(d) <= 1e-3) {
				t.Errorf("%v: %s is off by %.4f %%", s, name, 100*d)
			}
			worst[s.slug] = max(worst[s.slug], math.Abs(d))
		}
	}
	for _, circuit := range Circuits() {
		t.Logf("%-17s worst deviation from ngspice %.5f %%", circuit.Slug, 100*worst[circuit.Slug])
	}
}

// sweepEach is how many designs of each circuit the sweep draws; many where the
// reference programs are required.
func sweepEach() int {
	if os.Getenv("TICKDRAWER_REFERENCES") == "required" {
		return 40
	}
	return 8
}

func TestDesignsOfAllKindsAgreeWithNgspice(t *testing.T) {
	needsNgspice(t)
	const seed = 555
	t.Logf("seed %d", seed)
	random := rand.New(rand.NewPCG(seed, 0))
	logarithmic := func(low, high float64) float64 { return low * math.Pow(high/low, random.Float64()) }
	for _, circuit := range Circuits() {
		worst, where := 0.0, ""
		for drawn := 0; drawn < sweepEach(); {
			device := devices[random.IntN(len(devices))]
			supplyV, controlV := []float64{5, 9, 12, 15}[random.IntN(4)], 0.0
			if random.IntN(4) == 0 {
				controlV = supplyV * (.3 + .5*random.Float64())
			}
			c, err := device.Under(supplyV, []float64{0, 25, 27, 60}[random.IntN(4)], device.SourceMaxA*random.Float64(), controlV)
			if err != nil {
				t.Fatal(err)
			}
			v := Values{Farads: logarithmic(1e-9, 100e-6), Diode: [...]Diode{signal, {14.11e-9, 1.984, .034}, {31.7e-6, 1.373, .051}}[random.IntN(3)]}
			for i := range circuit.Resistors {
				v.Ohms[i] = logarithmic(470, 2e6)
			}
			if circuit.Diodes == 0 {
				v.Diode = Diode{}
			}
			if !steers(circuit, &c, &v) {
				continue
			}
			drawn++
			for name, off := range deviations(t, circuit, &c, &v) {
				if off = math.Abs(off); off > worst {
					worst, where = off, fmt.Sprintf("%s of %v at %g V with %s", name, v, supplyV, device.Name)
				}
			}
		}
		t.Logf("%-17s worst deviation from ngspice over %d designs: %.5f %%, %s", circuit.Slug, sweepEach(), 100*worst, where)
		if !(worst <= 1e-3) {
			t.Errorf("%s: off by %.4f %%", circuit.Slug, 100*worst)
		}
	}
}

func TestEveryPartOfANetworkIsAnElementOfItsOwn(t *testing.T) {
	leaf := func(kind inventory.Kind, value float64) optimize.Network {
		return optimize.Network{Lot: inventory.Lot{Part: inventory.Part{Kind: kind, Value: value}}}
	}
	r, c := inventory.Resistor, inventory.Capacitor
	placed := []optimize.Placed{
		{Position: "ra", Kind: r, Network: optimize.Network{Operator: optimize.Series, Members: []optimize.Network{
			leaf(r, 4.7e3), {Operator: optimize.Parallel, Members: []optimize.Network{leaf(r, 10e3), leaf(r, 1e6)}}}}},
		{Position: "rb", Kind: r, Network: leaf(r, 22e3)},
		{Position: "c", Kind: c, Network: optimize.Network{Operator: optimize.Parallel, Members: []optimize.Network{
			leaf(c, 10e-9), {Operator: optimize.Series, Members: []optimize.Network{leaf(c, 4.7e-9), leaf(c, 1e-9)}}}}},
	}
	conditions := under(t, &Ideal, 5)
	netlist := Netlist(&classic, &conditions, placed, Diode{})
	for _, element := range []string{
		"Rra_1 vcc ra_1 4700\n", "Rra_2 ra_1 dis 10000\n", "Rra_3 ra_1 dis 1e+06\n", "Rrb dis cap 22000\n",
		"C_1 cap 0 1e-08 ic=0\n", "C_2 cap cap_1 4.7e-09 ic=0\n", "C_3 cap_1 0 1e-09 ic=0\n",
	} {
		if !strings.Contains(netlist, element) {
			t.Errorf("no %q in\n%s", element, netlist)
		}
	}
	needsNgspice(t)
	measured := simulate(t, netlist, "th", "tl", "tp", "first")
	ra, farads := 4.7e3+10e3*1e6/1.01e6, 10e-9+4.7e-9*1e-9/5.7e-9
	within(t, "high", measured["th"], math.Ln2*(ra+22e3)*farads, 1e-4)
	within(t, "low", measured["tl"], math.Ln2*22e3*farads, 1e-4)
	within(t, "period", measured["tp"], math.Ln2*(ra+44e3)*farads, 1e-4)
	within(t, "first", measured["first"], math.Log(3)*(ra+22e3)*farads, 1e-4)
}

func TestANetlistOfACircuitThatStallsIsStillWritten(t *testing.T) {
	c := under(t, DeviceByName("NE555"), 5)
	v := Values{Ohms: [3]float64{10e3}, Farads: 1e-6}
	netlist := Netlist(&outputFed, &c, placedValues(&outputFed, &v), Diode{})
	if strings.Contains(netlist, "NaN") || strings.Contains(netlist, "Inf") {
		t.Error(netlist)
	}
	needsNgspice(t)
	path := filepath.Join(t.TempDir(), "stalls.cir")
	if err := os.WriteFile(path, []byte(netlist), 0o600); err != nil {
		t.Fatal(err)
	}
	if out, _ := exec.Command("ngspice", "-n", "-b", path).CombinedOutput(); !bytes.Contains(out, []byte("failed")) {
		t.Errorf("ngspice finds an oscillation:\n%s", out)
	}
}
