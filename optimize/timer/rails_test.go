package timer

import (
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

func TestRailsNameWhatIsBrokenAndWhatIsNear(t *testing.T) {
	schottky, _ := DiodeByPartNumber("1N5819")
	for _, test := range []struct {
		name, slug, device string
		supplyV, loadA     float64
		v                  Values
		ratings            Ratings
		rail, words        string
		broken             bool
	}{
		{"limb that stalls", "discharge-limb", "ideal", 9, 0, Values{Ohms: [3]float64{100e3, 1e3, 51e3}, Farads: 1e-6}, Ratings{},
			"oscillation", "rd must stay below 50 kΩ", true}, // 51k stops, 49k runs: a simulation of R3 at half of R1
		{"limb near its limit", "discharge-limb", "ideal", 9, 0, Values{Ohms: [3]float64{100e3, 1e3, 46e3}, Farads: 1e-6}, Ratings{},
			"switching margin", "46 kΩ is close to the 50 kΩ", false},
		{"bipolar output at 5 V", "output-fed", "NE555", 5, 0, Values{Ohms: [3]float64{10e3}, Farads: 1e-6}, Ratings{},
			"oscillation", "3.3 V at most, not past the upper level of 3.33 V", true},
		{"bipolar output, light load", "output-fed", "NE555", 9, 0, Values{Ohms: [3]float64{10e3}, Farads: 1e-6}, Ratings{},
			"output level", "stated at 100 mA and more", false},
		{"discharge pin overloaded", "classic", "NE555", 15, 0, Values{Ohms: [3]float64{47, 10e3}, Farads: 1e-6}, Ratings{},
			"discharge current", "make ra larger", true},
		{"discharge pin loaded", "classic", "NE555", 15, 0, Values{Ohms: [3]float64{82, 10e3}, Farads: 1e-6}, Ratings{},
			"discharge current", "close to the limit of 200 mA", false},
		{"discharge drop unstated", "classic", "NE555", 15, 0, Values{Ohms: [3]float64{470, 10e3}, Farads: 1e-6}, Ratings{},
			"data", "stated up to 15 mA", false},
		{"load near the output's limit", "classic", "TLC555", 9, 9e-3, Values{Ohms: [3]float64{10e3, 10e3}, Farads: 1e-6}, Ratings{},
			"output current", "close to the limit of 10 mA", false},
		{"load and timing over the output's limit", "output-fed", "TLC555", 9, 9e-3, Values{Ohms: [3]float64{1e3}, Farads: 1e-6}, Ratings{},
			"output current", "above the limit of 10 mA", true},
		{"too fast", "classic", "NE555", 9, 0, Values{Ohms: [3]float64{1e3, 470}, Farads: 1e-9}, Ratings{},
			"frequency", "too slow", true},
		{"delays", "classic", "NE555", 9, 0, Values{Ohms: [3]float64{1e3, 4.7e3}, Farads: 1e-9}, Ratings{},
			"delays", "100 kHz", false},
		{"pulse too short", "one-shot", "TLC555", 9, 0, Values{Ohms: [3]float64{1e3}, Farads: 500e-12}, Ratings{},
			"pulse", "shorter than the 1 µs", true},
		// (VCC/3)/0.25 µA is 20 MΩ at 15 V; SLFS022 prints half.
		{"more resistance than the half rule", "classic", "NE555", 15, 0, Values{Ohms: [3]float64{9e6, 2e6}, Farads: 1e-6}, Ratings{},
			"input current", "less than twice the threshold current", true},
		{"resistance near the half rule", "classic", "NE555", 15, 0, Values{Ohms: [3]float64{8e6, 1e6}, Farads: 1e-6}, Ratings{},
			"input current", "hardly more than twice", false},
		{"supply near the highest", "classic", "TLC555", 14, 0, Values{Ohms: [3]float64{10e3, 10e3}, Farads: 1e-6}, Ratings{},
			"supply", "close to the limit of 15 V", false},
		{"supply near the least", "classic", "TLC555", 2.2, 0, Values{Ohms: [3]float64{10e3, 10e3}, Farads: 1e-6}, Ratings{},
			"supply", "close to the least of 2 V", false},
		{"supply without stated drops", "classic", "TLC555", 3, 0, Values{Ohms: [3]float64{10e3, 10e3}, Farads: 1e-6}, Ratings{},
			"data", "stated from 5 V to 15 V", false},
		{"resistor too hot", "classic", "NE555", 15, 0, Values{Ohms: [3]float64{390, 100e3}, Farads: 1e-6}, Ratings{Watts: [3]float64{.25, .25}},
			"power ra", "above the limit of 250 mW", true},
		{"resistor warm, unrated", "classic", "NE555", 15, 0, Values{Ohms: [3]float64{470, 100e3}, Farads: 1e-6}, Ratings{},
			"power ra", "state no rating", false},
		{"capacitor over its voltage", "classic", "ideal", 15, 0, Values{Ohms: [3]float64{10e3, 10e3}, Farads: 1e-6}, Ratings{CapacitorV: 6.3},
			"capacitor voltage", "above the limit of 6.3 V", true},
		{"capacitor near its voltage", "power-on-pulse", "ideal", 9, 0, Values{Ohms: [3]float64{10e3}, Farads: 1e-6}, Ratings{CapacitorV: 10},
			"capacitor voltage", "9 V, close to the limit of 10 V", false},
		{"capacitor unrated", "classic", "ideal", 9, 0, Values{Ohms: [3]float64{10e3, 10e3}, Farads: 1e-6}, Ratings{},
			"capacitor voltage", "state no voltage rating", false},
		{"polarised capacitors in series", "classic", "ideal", 9, 0, Values{Ohms: [3]float64{10e3, 10e3}, Farads: 1e-6}, Ratings{PolarisedSeries: true},
			"polarity", "in series", true},
		{"diodes that leak more than they steer", "output-fed-split", "ideal", 5, 0, Values{Ohms: [3]float64{1e6, 1e6}, Farads: 1e-6, Diode: schottky}, Ratings{},
			"diode", "neither drive the one nor block the other", true},
		{"links alone", "output-fed", "ideal", 5, 0, Values{Farads: 1e-6}, Ratings{},
			"oscillation", "0 s", true},
	} {
		c, err := DeviceByName(test.device).Under(test.supplyV, 25, test.loadA, 0)
		if err != nil {
			t.Fatal(test.name, err)
		}
		found := Rails(CircuitBySlug(test.slug), &c, &test.v, &test.ratings)
		ok := false
		for _, rail := range found {
			ok = ok || rail.Name == test.rail && rail.Broken == test.broken && strings.Contains(rail.Text, test.words)
		}
		if !ok {
			t.Errorf("%s: no rail %q (broken: %v) with %q in\n%v", test.name, test.rail, test.broken, test.words, found)
		}
	}
}

func TestAnOrdinaryCircuitBreaksNoRailAndNeedsNoWarning(t *testing.T) {
	ratings := Ratings{Watts: [3]float64{.25, .25, .25}, CapacitorV: 50}
	for _, name := range []string{"ideal", "NE555", "TLC555"} {
		c := under(t, DeviceByName(name), 9)
		if found := Rails(&classic, &c, &Values{Ohms: [3]float64{10e3, 47e3}, Farads: 1e-6}, &ratings); len(found) != 0 {
			t.Errorf("%s: %v", name, found)
		}
	}
}

func TestCurrentsObeyKirchhoff(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		circuit, c, v := drawDesign(t, anyDevice(t))
		at := rapid.Float64Range(c.LowLevelV, c.HighLevelV).Draw(t, "capacitor voltage")
		high := rapid.Bool().Draw(t, "high")
		i := circuit.currents(&c, &v, at, high)
		if circuit.Stalls(&c, &v) != "" {
			return
		}
		for k, through := range i.ohms {
			if !(through >= 0) {
				t.Fatalf("resistor %d carries %g A", k, through)
			}
		}
		if !circuit.OneShot && !(i.capacitorA > 0) {
			t.Fatalf("the capacitor carries %g A", i.capacitorA)
		}
		if circuit == &dischargeLimb && !high {
			drop := i.ohms[2]*(v.Ohms[2]+c.SwitchOhm) + c.SwitchV
			if junction := at - i.ohms[1]*v.Ohms[1]; !closeTo(drop, junction, 1e-9) {
				t.Fatalf("rd and the switch drop %g V, the junction is at %g V", drop, junction)
			}
		}
	})
}

func leafOf(part inventory.Part) optimize.Network {
	return optimize.Network{Lot: inventory.Lot{Part: part}, Value: part.Value}
}

func TestANetworkStandsWhatItsWeakestPartDoes(t *testing.T) {
	resistor := func(ohms, watts float64) optimize.Network {
		return leafOf(inventory.Part{Kind: inventory.Resistor, Value: ohms, RatingW: watts})
	}
	capacitor := func(farads, volts float64, dielectric string) optimize.Network {
		return leafOf(inventory.Part{Kind: inventory.Capacitor, Value: farads, RatingV: volts, Dielectric: dielectric})
	}
	join := func(op optimize.Operator, members ...optimize.Network) optimize.Network {
		return optimize.Network{Operator: op, Members: members}
	}
	placed := []optimize.Placed{
		// 1 kΩ takes a tenth of the power: 9 kΩ at 0.25 W allows 0.25/0.9.
		{Position: "ra", Network: join(optimize.Series, resistor(1e3, .25), resistor(9e3, .25))},
		// 1 kΩ takes 0.9 of the power; the other states no rating.
		{Position: "rb", Network: join(optimize.Parallel, resistor(1e3, .25), resistor(9e3, 0))},
		// 1 µF in series with 3 µF takes 0.75 of the voltage: 16/0.75, not 100/0.25.
		{Position: "c", Network: join(optimize.Series, capacitor(1e-6, 16, "film"), capacitor(3e-6, 100, "film"))},
	}
	got := RatingsOf(&classic, placed)
	within(t, "ra", got.Watts[0], .25/.9, 1e-12)
	within(t, "rb", got.Watts[1], .25/.9, 1e-12)
	within(t, "c", got.CapacitorV, 16/.75, 1e-12)
	if got.PolarisedSeries {
		t.Error("film capacitors are taken for polarised ones")
	}
	placed[2].Network = join(optimize.Series, capacitor(1e-6, 16, "electrolytic"), capacitor(3e-6, 0, ""))
	if !RatingsOf(&classic, placed).PolarisedSeries {
		t.Error("an electrolytic capacitor in series goes unnoticed")
	}
	placed[2].Network = join(optimize.Parallel, capacitor(1e-6, 16, "electrolytic"), capacitor(3e-6, 6.3, "electrolytic"))
	if got := RatingsOf(&classic, placed); got.PolarisedSeries || got.CapacitorV != 6.3 {
		t.Errorf("side by side: %+v", got)
	}
}
