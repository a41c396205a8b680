package inventory

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory/marking"
)

func ppm(x float64) *float64 { return &x }

func TestNewPartTidiesItsTexts(t *testing.T) {
	part, err := NewPart(Part{Kind: Diode, PartNumber: " 1n4148\t", Dielectric: "", Package: " DO-35  axial "})
	if err != nil {
		t.Fatal(err)
	}
	if part.PartNumber != "1N4148" || part.Package != "DO-35 axial" {
		t.Errorf("part number %q, package %q", part.PartNumber, part.Package)
	}
	if part, _ := NewPart(Part{Kind: Resistor, Value: math.Copysign(0, -1)}); math.Signbit(part.Value) {
		t.Error("a link keeps a negative zero")
	}
}

func TestNewPartAcceptsWhatSuitsTheKind(t *testing.T) {
	for name, part := range map[string]Part{
		"resistor":                  {Kind: Resistor, Value: 4700, Tolerance: &marking.Tolerance{Minus: 0.01, Plus: 0.01}, RatingW: 0.25},
		"link":                      {Kind: Resistor},
		"capacitor":                 {Kind: Capacitor, Value: 1e-7, Dielectric: "X7R", RatingV: 50},
		"asymmetric":                {Kind: Capacitor, Value: 1e-5, Tolerance: &marking.Tolerance{Minus: 0, Plus: 1}},
		"diode with a model":        {Kind: Diode, PartNumber: "1N4148", ForwardV: 0.7, SaturationA: 2.52e-9, Ideality: 1.752, SeriesOhm: 0.568},
		"timer":                     {Kind: Timer, PartNumber: "NE555", Package: "DIP-8"},
		"negative tempco":           {Kind: Capacitor, Value: 1e-8, TempcoPPM: ppm(-200)},
		"potentiometer":             {Kind: Potentiometer, Value: 1e4},
		"resistor with part number": {Kind: Resistor, Value: 1e4, PartNumber: "MFR-25"},
		"other":                     {Kind: Other, PartNumber: "2N3904"},
	} {
		if _, err := NewPart(part); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestNewPartRefusesWithTheField(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range []struct {
		part  Part
		field string
	}{
		{Part{}, "kind"},
		{Part{Kind: "resitor"}, "kind"},
		{Part{Kind: Resistor, Value: -1}, "value"},
		{Part{Kind: Resistor, Value: nan}, "value"},
		{Part{Kind: Resistor, Value: inf}, "value"},
		{Part{Kind: Capacitor}, "value"},
		{Part{Kind: Capacitor, Value: -1e-9}, "value"},
		{Part{Kind: Potentiometer}, "value"},
		{Part{Kind: Diode, PartNumber: "1N4148", Value: 1}, "value"},
		{Part{Kind: Diode}, "part_number"},
		{Part{Kind: Timer, PartNumber: "  "}, "part_number"},
		{Part{Kind: Other, PartNumber: "A\x00B"}, "part_number"},
		{Part{Kind: Other, PartNumber: "A\xb5B"}, "part_number"},
		{Part{Kind: Timer, PartNumber: "NE555", Tolerance: &marking.Tolerance{Minus: 0.1, Plus: 0.1}}, "tolerance"},
		{Part{Kind: Resistor, Value: 1, Tolerance: &marking.Tolerance{Minus: 1, Plus: 1}}, "tolerance"},
		{Part{Kind: Resistor, Value: 1, Tolerance: &marking.Tolerance{Minus: -0.1, Plus: 0.1}}, "tolerance"},
		{Part{Kind: Resistor, Value: 1, Tolerance: &marking.Tolerance{Minus: 0.1, Plus: nan}}, "tolerance"},
		{Part{Kind: Resistor, Value: 1, RatingV: -1}, "rating_v"},
		{Part{Kind: Resistor, Value: 1, RatingW: inf}, "rating_w"},
		{Part{Kind: Resistor, Value: 1, TempcoPPM: ppm(nan)}, "tempco"},
		{Part{Kind: Diode, PartNumber: "1N4148", ForwardV: -0.7}, "forward_v"},
		{Part{Kind: Diode, PartNumber: "1N4148", SaturationA: nan}, "saturation_a"},
		{Part{Kind: Diode, PartNumber: "1N4148", SeriesOhm: -1}, "series_ohm"},
		{Part{Kind: Resistor, Value: 1, Ideality: 1.7}, "ideality"},
		{Part{Kind: Resistor, Value: 1, Package: "a\ab"}, "package"},
		{Part{Kind: Capacitor, Value: 1e-9, Dielectric: "\xff"}, "dielectric"},
	} {
		part, err := NewPart(c.part)
		if ReasonOf(err) != Invalid || !strings.HasPrefix(err.Error(), c.field+": ") {
			t.Errorf("NewPart(%+v): %v, want an invalid %s", c.part, err, c.field)
		}
		if !reflect.DeepEqual(part, Part{}) {
			t.Errorf("NewPart(%+v) returned %+v beside its error", c.part, part)
		}
	}
}

func TestPartsHaveANameForPeople(t *testing.T) {
	for want, part := range map[string]Part{
		"4.7 kΩ ±1 %":         {Kind: Resistor, Value: 4700, Tolerance: &marking.Tolerance{Minus: 0.01, Plus: 0.01}},
		"100 nF X7R 50 V":     {Kind: Capacitor, Value: 1e-7, Dielectric: "X7R", RatingV: 50},
		"1N4148":              {Kind: Diode, PartNumber: "1N4148"},
		"10 kΩ ±5 % 250 mW":   {Kind: Resistor, Value: 1e4, Tolerance: &marking.Tolerance{Minus: 0.05, Plus: 0.05}, RatingW: 0.25},
		"10 µF −20/+80 %":     {Kind: Capacitor, Value: 1e-5, Tolerance: &marking.Tolerance{Minus: 0.2, Plus: 0.8}},
		"0 Ω":                 {Kind: Resistor},
		"22 kΩ":               {Kind: Potentiometer, Value: 22e3},
		"NE555":               {Kind: Timer, PartNumber: "NE555", Package: "DIP-8"},
		"1 µF electrolytic":   {Kind: Capacitor, Value: 1e-6, Dielectric: "electrolytic"},
		"4.7 pF ±5.319 % C0G": {Kind: Capacitor, Value: 4.7e-12, Dielectric: "C0G", Tolerance: &marking.Tolerance{Minus: 0.25 / 4.7, Plus: 0.25 / 4.7}},
	} {
		if got := part.Name(); got != want {
			t.Errorf("%+v is called %q, want %q", part, got, want)
		}
	}
}

// anyPart draws from few values of each field, so that equal parts are common.
func anyPart(t *rapid.T, label string) Part {
	figure := rapid.SampledFrom([]float64{0, 1, 1.0000000000000002, 50})
	text := rapid.SampledFrom([]string{"", "A", "A B", `A" package="B`, "B"})
	part := Part{
		Kind: rapid.SampledFrom([]Kind{Resistor, Capacitor}).Draw(t, label+" kind"), Value: rapid.SampledFrom([]float64{1e-7, 1, 1.0000000000000002}).Draw(t, label+" value"),
		PartNumber: text.Draw(t, label+" number"), RatingV: figure.Draw(t, label+" volt"), RatingW: figure.Draw(t, label+" watt"),
		Dielectric: text.Draw(t, label+" dielectric"), Package: text.Draw(t, label+" package"),
	}
	if rapid.Bool().Draw(t, label+" has tolerance") {
		part.Tolerance = &marking.Tolerance{Minus: figure.Filter(func(x float64) bool { return x < 1 }).Draw(t, label+" minus"), Plus: figure.Draw(t, label+" plus")}
	}
	if rapid.Bool().Draw(t, label+" has tempco") {
		part.TempcoPPM = ppm(figure.Draw(t, label+" tempco"))
	}
	part, err := NewPart(part)
	if err != nil {
		t.Fatal(err)
	}
	return part
}

func TestKeysAreEqualExactlyForTheSamePart(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := anyPart(t, "a")
		b := a
		// Change at most one field, then possibly all of them.
		other := anyPart(t, "b")
		switch rapid.IntRange(0, 8).Draw(t, "change") {
		case 0:
			b.Value = other.Value
		case 1:
			b.Tolerance = other.Tolerance
		case 2:
			b.PartNumber = other.PartNumber
		case 3:
			b.RatingV = other.RatingV
		case 4:
			b.Dielectric, b.Package = other.Dielectric, other.Package
		case 5:
			b.TempcoPPM = other.TempcoPPM
		case 6:
			b.RatingV, b.RatingW = a.RatingW, a.RatingV
		case 7:
			b.Dielectric, b.Package = a.Package, a.Dielectric
		case 8:
			b = other
		}
		if same := reflect.DeepEqual(a, b); same != (a.Key() == b.Key()) {
			t.Fatalf("same part: %v\n%s\n%s", same, a.Key(), b.Key())
		}
	})
}

func TestKeysDoNotDependOnCase(t *testing.T) {
	a := Part{Kind: Capacitor, Value: 1e-7, Dielectric: "X7R", Package: "Radial"}
	b := Part{Kind: Capacitor, Value: 1e-7, Dielectric: "x7r", Package: "radial"}
	if a.Key() != b.Key() {
		t.Errorf("%s\n%s", a.Key(), b.Key())
	}
}

// Drawers store keys: a changed form would make every part new.
func TestKeysAreStable(t *testing.T) {
	part := Part{
		Kind: Capacitor, Value: 1e-7, Tolerance: &marking.Tolerance{Minus: 0.2, Plus: 0.8}, PartNumber: "K104", RatingV: 50, RatingW: 0.25,
		Dielectric: "X7R", TempcoPPM: ppm(-200), Package: "0805",
	}
	want := `capacitor f=1e-07 minus=0.2 plus=0.8 number="K104" rating_v=50 rating_w=0.25 dielectric="x7r" tempco_ppm=-200 package="0805"`
	if got := part.Key(); got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	diode := Part{Kind: Diode, PartNumber: "1N4148", ForwardV: 0.7, SaturationA: 2.52e-9, Ideality: 1.752, SeriesOhm: 0.568}
	want = `diode number="1N4148" forward_v=0.7 saturation_a=2.52e-09 ideality=1.752 series_ohm=0.568`
	if got := diode.Key(); got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
}

func TestPolarityFollowsTheDielectric(t *testing.T) {
	for dielectric, want := range map[string]bool{
		"electrolytic": true, "Electrolytic": true, "alu electrolytic": true, "Aluminium": true, "aluminum electrolytic": true, "Al-Elko": true, "Elko": true, "Tantalum": true, "tantal": true, "MnO2 tantalum": true,
		"polymer": true, "Aluminium polymer": true, "niobium oxide": true, "EDLC": true, "elec": true, "supercapacitor": true,
		"Elektrolyt": true, "Tantalkondensator": true, "Doppelschicht": true, "électrolytique": true, "e\u0301lectrolytique": true, "tantale": true, "polymère": true, "electrolítico": true, "tántalo": true, "electrolítico de aluminio": true, "polímero": true,
		"bipolar electrolytic": false, "electrolytic, non-polar": false, "non polarised electrolytic": false, "nonpolar electrolytic": false, "unpolarised electrolytic": false, "Elko bipolar": false, "Elko ungepolt": false, "Elko unpolar": false,
		"électrolytique non polarisé": false, "electrolítico no polarizado": false, "electrolytic NP": false, "electrolytic BP": false,
		"": false, "X7R": false, "C0G": false, "NP0": false, "film": false, "polyester": false, "polypropylene": false, "metallised polymer film": false, "aluminium foil film": false, "Folie": false, "ceramic": false, "mica": false, "PET": false,
	} {
		part := Part{Kind: Capacitor, Value: 1e-6, Dielectric: dielectric}
		if got := part.Polarised(); got != want {
			t.Errorf("a capacitor of %q is polarised: %v, want %v", dielectric, got, want)
		}
	}
	if (Part{Kind: Resistor, Value: 1, Dielectric: "electrolytic"}).Polarised() {
		t.Error("a resistor is polarised")
	}
}
