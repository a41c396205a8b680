package timer

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
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
