package marking

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestMagnitudesAreReadAsWritten(t *testing.T) {
	for _, c := range []struct {
		text, unit string
		want       float64
	}{
		{"4s", "s", 4}, {"500ms", "s", 0.5}, {"0,5s", "s", 0.5}, {"4 s", "s", 4}, {"4sec", "s", 4}, {"221.8 µs", "s", 221.8e-6}, {"221.8us", "s", 221.8e-6}, {"4", "s", 4}, {"1.443s", "s", 1.443}, {"1E-3s", "s", 1e-3}, {"0,125s", "s", 0.125},
		{"420Hz", "Hz", 420}, {"1.2kHz", "Hz", 1200}, {"1k2 Hz", "Hz", 1200}, {"1.2 KHZ", "Hz", 1200}, {"10mHz", "Hz", 0.01}, {"2MHz", "Hz", 2e6}, {"1.2k", "Hz", 1200},
		{"2.4V", "V", 2.4}, {"63V", "V", 63}, {"50 V", "V", 50}, {"50VDC", "V", 50}, {"50 V DC", "V", 50}, {"6V3", "V", 6.3}, {"6.3v", "V", 6.3}, {"700mV", "V", 0.7}, {"1kV", "V", 1000}, {"0V", "V", 0}, {"500m", "V", 0.5},
		{"10mA", "A", 0.01}, {"2.52n", "A", 2.52e-9}, {"100 µA", "A", 100e-6},
		{"1/4W", "W", 0.25}, {"1/4 W", "W", 0.25}, {"1 / 8 W", "W", 0.125}, {"1/4", "W", 0.25}, {"0.25W", "W", 0.25}, {"0,25 W", "W", 0.25}, {"250mW", "W", 0.25}, {"1W", "W", 1},
		{"10C", "C", 10}, {"25 °C", "C", 25}, {"-10C", "C", -10}, {"−10 °C", "C", -10}, {"-0C", "C", 0}, {"25degC", "C", 25},
		{"3%", "%", 0.03}, {"7 %", "%", 0.07}, {"0,5%", "%", 0.005}, {"1pt", "pt", 0.01}, {"2 points", "pt", 0.02}, {"0.5", "", 0.5},
	} {
		if got, err := ParseMagnitude(c.text, c.unit); err != nil || got != c.want {
			t.Errorf("ParseMagnitude(%q, %q) = %v, %v; want %v", c.text, c.unit, got, err, c.want)
		}
	}
	if got, _ := ParseMagnitude("-0C", "C"); math.Signbit(got) {
		t.Error("-0C is read as a negative zero")
	}
}

func TestMagnitudesAreRefusedWithTheReason(t *testing.T) {
	for unit, refusals := range map[string][]refusal{
		"s": {
			{"", 1, []string{"nothing is written", "4s"}},
			{"5m", 3, []string{"milliseconds", "minutes", "5ms"}},
			{"2min", 3, []string{"in seconds"}},
			{"1h", 2, []string{"in seconds"}},
			{"-4s", 1, []string{"never negative"}},
			{"4V", 2, []string{`"V"`}},
			{"4ss", 3, []string{`"s"`}},
			{"1,443s", 2, []string{"1.443 s", "1.443 ks"}},
			{"1e+400s", 1, []string{"out of reason"}},
			{"1e-400s", 1, []string{"out of reason"}},
			{"∞s", 1, []string{`"∞"`}},
		},
		"Hz": {{"1,200Hz", 2, []string{"1.2 Hz", "1.2 kHz", "comma"}}, {"420s", 4, []string{`"s"`}}},
		"V":  {{"-9V", 1, []string{"never negative"}}, {"250VAC", 5, []string{`"A"`}}, {"9 V ±1", 5, []string{`"±"`}}},
		"W":  {{"1/0W", 3, []string{"fraction"}}, {"1/4/2", 4, []string{`"/"`}}, {"1/0.5W", 3, []string{"fraction"}}, {"1/", 3, []string{"digit"}}, {"0/4W", 3, []string{"fraction"}}},
		"C":  {{"25K", 3, []string{`"K"`}}, {"--5C", 2, []string{`"-"`}}, {"1,200C", 2, []string{"1.2 °C", "1200 °C"}}},
		"%":  {{"1,500%", 2, []string{"1.5 %", "1500 %"}}},
		"":   {{"0.5V", 4, []string{`"V"`}}},
	} {
		checkRefusals(t, func(s string) error { _, err := ParseMagnitude(s, unit); return err }, refusals)
	}
	for unit, text := range map[string]string{"s": "4", "Hz": "1.2k", "V": "9 ", "%": "3", "pt": "1"} {
		if x, err := ParseMagnitudeWithUnit(text, unit); err == nil {
			t.Errorf("ParseMagnitudeWithUnit(%q, %q) = %v, want an error", text, unit, x)
		}
	}
}

func TestValuesAreWrittenForPeople(t *testing.T) {
	for _, c := range []struct{ got, want string }{
		{FormatOhms(4700), "4.7 kΩ"}, {FormatOhms(0), "0 Ω"}, {FormatOhms(0.47), "0.47 Ω"}, {FormatOhms(0.047), "47 mΩ"}, {FormatOhms(999.96), "1 kΩ"}, {FormatOhms(12346), "12.35 kΩ"}, {FormatOhms(0.0005), "0.5 mΩ"}, {FormatOhms(2.2e6), "2.2 MΩ"}, {FormatOhms(1e12), "1 TΩ"},
		{FormatFarads(1e-7), "100 nF"}, {FormatFarads(4.7e-6), "4.7 µF"}, {FormatFarads(4.7e-3), "4700 µF"}, {FormatFarads(0.022), "22000 µF"}, {FormatFarads(0.1), "0.1 F"}, {FormatFarads(0.5e-12), "0.5 pF"}, {FormatFarads(0.0999999), "0.1 F"},
		{FormatSeconds(3.98), "3.98 s"}, {FormatSeconds(221.806e-6), "221.8 µs"}, {FormatSeconds(0.5), "500 ms"}, {FormatSeconds(86400), "86400 s"}, {FormatSeconds(86412.4), "86412 s"}, {FormatSeconds(0.99999), "1 s"},
		{FormatHertz(421.3), "421.3 Hz"}, {FormatHertz(1200), "1.2 kHz"}, {FormatHertz(0.25), "0.25 Hz"}, {FormatHertz(0.005), "5 mHz"},
		{FormatVolts(9), "9 V"}, {FormatVolts(0.7), "700 mV"}, {FormatAmperes(0.01), "10 mA"}, {FormatWatts(0.25), "250 mW"},
		{FormatCelsius(25), "25 °C"}, {FormatCelsius(-10), "−10 °C"}, {FormatPercent(0.483), "48.3 %"}, {FormatPercent(0.07), "7 %"}, {FormatPercent(1e-9), "0.0000001 %"},
		{FormatSeconds(math.Inf(1)), "∞ s"}, {FormatSeconds(math.NaN()), "unknown"},
	} {
		if c.got != c.want {
			t.Errorf("got %q, want %q", c.got, c.want)
		}
	}
}

// What is shown to people is within half a unit of the fourth digit, and what
// this package writes it also reads.
func TestWrittenValuesReadBackWithinTheirRounding(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		for _, c := range []struct {
			name            string
			lowest, highest float64
			format          func(float64) string
			parse           func(string) (float64, error)
		}{
			{"ohms", 2e-6, 9e11, FormatOhms, ParseOhms},
			{"farads", 2e-14, 99, FormatFarads, ParseFarads},
			{"seconds", 1e-12, 1e6, FormatSeconds, func(s string) (float64, error) { return ParseMagnitudeWithUnit(s, "s") }},
			{"hertz", 1e-9, 1e9, FormatHertz, func(s string) (float64, error) { return ParseMagnitudeWithUnit(s, "Hz") }},
		} {
			x := math.Exp(rapid.Float64Range(math.Log(c.lowest), math.Log(c.highest)).Draw(t, c.name))
			if got, err := c.parse(c.format(x)); err != nil || math.Abs(got-x) > 5.0001e-4*x {
				t.Fatalf("%v is written %q and read as %v, %v", x, c.format(x), got, err)
			}
		}
	})
}
