package timer

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestTimersAreKnownByTheirTradeNumbers(t *testing.T) {
	for number, want := range map[string]string{
		"NE555": "NE555", "ne555p": "NE555", "NE555N": "NE555", "NE 555 DR": "NE555", "NE555-P": "NE555", "NE555PE4": "NE555",
		"TLC555": "TLC555", "TLC555CP": "TLC555", "TLC555IP": "TLC555", "tlc555cdr": "TLC555",
		"": "", "555": "", "NE5551": "", "NE556": "", "LM555CN": "", "ICM7555": "", "TLC551": "", "IDEAL": "", "XNE555": "",
	} {
		device, ok := DeviceForPart(number)
		if ok != (want != "") || ok && device.Name != want {
			t.Errorf("%q is taken for %v", number, device)
		}
	}
	for name, want := range map[string]*Device{"ideal": &Ideal, "IDEAL": &Ideal, " tlc555 ": devices[2], "555": nil, "": nil} {
		if got := DeviceByName(name); got != want {
			t.Errorf("by name %q: %v", name, got)
		}
	}
}

// SLFS022, ST and SLFS043C state these points; the conditions must meet them.
func TestDropsMeetTheStatedPoints(t *testing.T) {
	ne, tlc := DeviceByName("NE555"), DeviceByName("TLC555")
	for _, test := range []struct {
		name      string
		device    *Device
		supplyV   float64
		loadA     float64
		got       func(Conditions) float64
		want, rel float64
	}{
		{"NE555 discharge pin, 4.5 mA", ne, 5, 0, func(c Conditions) float64 { return c.SwitchV + 4.5e-3*c.SwitchOhm }, 80e-3, 1e-12},
		{"NE555 discharge pin, 15 mA", ne, 15, 0, func(c Conditions) float64 { return c.SwitchV + 15e-3*c.SwitchOhm }, 180e-3, 1e-12},
		{"NE555 output low, 8 mA", ne, 5, 0, func(c Conditions) float64 { return c.OutLowV + 8e-3*c.OutLowOhm }, .15, 1e-12},
		{"NE555 output low, 50 mA", ne, 15, 0, func(c Conditions) float64 { return c.OutLowV + 50e-3*c.OutLowOhm }, .4, 1e-12},
		{"NE555 output high, 100 mA", ne, 5, 100e-3, func(c Conditions) float64 { return c.OutHighV }, 3.3, 1e-12},
		{"NE555 output high, light load", ne, 5, 1e-3, func(c Conditions) float64 { return c.OutHighV }, 3.3, 1e-12},
		{"NE555 output high, 200 mA", ne, 15, 200e-3, func(c Conditions) float64 { return c.OutHighV }, 12.5, 1e-12},
		{"NE555 output high, 150 mA", ne, 15, 150e-3, func(c Conditions) float64 { return c.OutHighV }, 12.9, 1e-12},
		{"TLC555 discharge pin, 10 mA", tlc, 5, 0, func(c Conditions) float64 { return 10e-3 * c.SwitchOhm }, .14, 1e-12},
		{"TLC555 discharge pin, 100 mA", tlc, 15, 0, func(c Conditions) float64 { return 100e-3 * c.SwitchOhm }, .77, 1e-12},
		{"TLC555 output high, 1 mA", tlc, 5, 1e-3, func(c Conditions) float64 { return c.OutHighV }, 4.8, 1e-12},
		{"TLC555 output high, 10 mA", tlc, 15, 10e-3, func(c Conditions) float64 { return c.OutHighV }, 14.2, 1e-12},
		{"TLC555 output low, 8 mA", tlc, 5, 0, func(c Conditions) float64 { return 8e-3 * c.OutLowOhm }, .21, 1e-12},
		{"TLC555 between stated supplies", tlc, 10, 0, func(c Conditions) float64 { return c.SwitchOhm }, (14 + 7.7) / 2, 1e-12},
		{"TLC555 below stated supplies", tlc, 2, 0, func(c Conditions) float64 { return c.SwitchOhm }, 14, 1e-12},
	} {
		c, err := test.device.Under(test.supplyV, 25, test.loadA, 0)
		if err != nil {
			t.Fatal(test.name, err)
		}
		within(t, test.name, test.got(c), test.want, test.rel)
	}
}

func TestALimitOfTheDeviceThatIsBrokenIsNamed(t *testing.T) {
	tlc, ne := DeviceByName("TLC555"), DeviceByName("NE555")
	nan := math.NaN()
	for _, test := range []struct {
		device                             *Device
		supplyV, ambientC, loadA, controlV float64
		words                              string
	}{
		{tlc, 1, 25, 0, 0, "TLC555 works from 2 V to 15 V, not 1 V"},
		{ne, 18, 25, 0, 0, "NE555 works from 4.5 V to 16 V, not 18 V"},
		{&Ideal, 0, 25, 0, 0, "state one above 0 V"},
		{&Ideal, -9, 25, 0, 0, "state one above 0 V"},
		{&Ideal, nan, 25, 0, 0, "state one above 0 V"},
		{&Ideal, math.Inf(1), 25, 0, 0, "state one above 0 V"},
		{ne, 9, 25, 0, 9, "control pin driven to 9 V must lie between 0 V and the supply"},
		{ne, 9, 25, 0, -1, "control pin driven to -1 V"},
		{tlc, 9, 25, 20e-3, 0, "delivers 10 mA at most, not 20 mA"},
		{tlc, 9, 25, -1, 0, "load of -1 A"},
		{tlc, 9, nan, 0, 0, "ambient temperature of NaN"},
		{tlc, 9, 400, 0, 0, "ambient temperature of 400 °C"},
	} {
		if _, err := test.device.Under(test.supplyV, test.ambientC, test.loadA, test.controlV); err == nil || !strings.Contains(err.Error(), test.words) {
			t.Errorf("%s at %g V: %v, want %q", test.device.Name, test.supplyV, err, test.words)
		}
	}
}

func TestADrivenControlPinSetsBothLevels(t *testing.T) {
	c, err := Ideal.Under(9, 25, 0, 4)
	if err != nil || c.HighLevelV != 4 || c.LowLevelV != 2 {
		t.Fatalf("%+v, %v", c, err)
	}
	// tH = (RA+RB) C ln((VCC-VC/2)/(VCC-VC)), tL unchanged: simulated with 3, 6 and 8 of 9 V.
	v := Values{Ohms: [3]float64{10e3, 22e3}, Farads: 10e-9}
	p := classic.Phases(&c, &v)
	within(t, "high", p.HighS, 32e3*10e-9*math.Log(7.0/5), 1e-14)
	within(t, "low", p.LowS, 22e3*10e-9*math.Ln2, 1e-14)
}

func TestTypicalPhasesLieBetweenTheExtremesOfTheDrops(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		device := anyDevice(t)
		circuit, c, v := drawDesign(t, device)
		least, most, err := device.Extremes(c.SupplyV, c.AmbientC, c.LoadA, c.ControlV)
		if err != nil {
			t.Fatal(err)
		}
		p, a, b := circuit.Phases(&c, &v), circuit.Phases(&least, &v), circuit.Phases(&most, &v)
		if circuit.OneShot { // more drop leaves less to charge
			a, b = b, a
		}
		if !(a.HighS <= p.HighS*(1+1e-9) && p.HighS <= b.HighS*(1+1e-9) && a.LowS <= p.LowS*(1+1e-9) && p.LowS <= b.LowS*(1+1e-9)) {
			t.Fatalf("%s: %+v not between %+v and %+v", circuit.Slug, p, a, b)
		}
	})
}

func TestEveryDeviceNamesTheDocumentOfItsFiguresAndSortsItsPoints(t *testing.T) {
	for _, d := range Devices()[1:] {
		if d.Document == "" || d.SupplyMinV <= 0 || d.SupplyMaxV <= d.SupplyMinV || d.SourceMaxA <= 0 || d.SinkMaxA <= 0 || d.FrequencyMaxHz <= 0 {
			t.Errorf("%s is incomplete", d.Name)
		}
		for _, points := range [][]Drop{d.OutHigh, d.OutLow, d.Switch} {
			for i, p := range points {
				if p.CurrentA <= 0 || p.DropV.Typ <= 0 || p.DropV.Max != 0 && p.DropV.Max < p.DropV.Typ {
					t.Errorf("%s: point %+v", d.Name, p)
				}
				if i > 0 && (p.SupplyV < points[i-1].SupplyV || p.SupplyV == points[i-1].SupplyV && p.CurrentA <= points[i-1].CurrentA) {
					t.Errorf("%s: points are not sorted: %+v", d.Name, points)
				}
			}
		}
	}
}
