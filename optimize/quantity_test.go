package optimize

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory/marking"
)

func TestRequirementsAreReadAsWritten(t *testing.T) {
	for _, c := range []struct {
		measure Measure
		text    string
		want    Allowance // target, min, max
	}{
		{High, "4s±3%", Allowance{4, 3.88, 4.12}},
		{High, "4s+-3%", Allowance{4, 3.88, 4.12}},
		{High, "4s +/- 3 %", Allowance{4, 3.88, 4.12}},
		{High, " 4 s ± 3 % ", Allowance{4, 3.88, 4.12}},
		{High, "4s-+3%", Allowance{4, 3.88, 4.12}},
		{High, "4s+2%-1%", Allowance{4, 3.96, 4.08}},
		{High, "4s-1%+2%", Allowance{4, 3.96, 4.08}},
		{High, "4s−1%+2%", Allowance{4, 3.96, 4.08}},
		{High, "4s +2% / -1%", Allowance{4, 3.96, 4.08}},
		{High, "4s+2%-0%", Allowance{4, 4, 4.08}},
		{Low, "4s±100ms", Allowance{4, 3.9, 4.1}},
		{Low, "4s+0.1s-50ms", Allowance{4, 3.95, 4.1}},
		{Period, "3.9s..4.1s", Allowance{4, 3.9, 4.1}},
		{Period, "3.9 s … 4.1 s", Allowance{4, 3.9, 4.1}},
		{Period, "900ms..1.1s", Allowance{1, 0.9, 1.1}},
		{Period, "4s", Allowance{4, 3.92, 4.08}},
		{Pulse, "0,7s±1%", Allowance{0.7, 0.693, 0.707}},
		{Pulse, "1E-3s±2%", Allowance{1e-3, 0.98e-3, 1.02e-3}},
		{Frequency, "420Hz±1%", Allowance{420, 415.8, 424.2}},
		{Frequency, "1.2kHz", Allowance{1200, 1176, 1224}},
		{Frequency, "1.2kHz±10Hz", Allowance{1200, 1190, 1210}},
		{Frequency, "400Hz..440Hz", Allowance{420, 400, 440}},
		{Duty, "50%±1pt", Allowance{0.5, 0.49, 0.51}},
		{Duty, "50 % +/- 1 pt", Allowance{0.5, 0.49, 0.51}},
		{Duty, "0.5±0.01", Allowance{0.5, 0.49, 0.51}},
		{Duty, "0.5±1pt", Allowance{0.5, 0.49, 0.51}},
		{Duty, "30%+2pt-1pt", Allowance{0.3, 0.29, 0.32}},
		{Duty, "48%..52%", Allowance{0.5, 0.48, 0.52}},
		{Duty, "0.48..0.52", Allowance{0.5, 0.48, 0.52}},
		{Duty, "10%", Allowance{0.1, 0.09, 0.11}},
	} {
		got, err := ParseRequirement(c.measure, c.text)
		if err != nil || got.Allowance != c.want || got.Measure != c.measure {
			t.Errorf("ParseRequirement(%v, %q) = %v, %v; want %v", c.measure, c.text, got, err, c.want)
		}
	}
}

// refusal is a text that must be refused: where, and with which words.
type refusal struct {
	text   string
	column int
	words  string
}

func checkRefusals(t *testing.T, parse func(string) error, refusals []refusal) {
	t.Helper()
	for _, r := range refusals {
		var e *marking.Error
		if err := parse(r.text); !errors.As(err, &e) {
			t.Errorf("%q: %v, want a *marking.Error", r.text, err)
			continue
		}
		if e.Column != r.column || e.Text != r.text || !strings.Contains(e.Message, r.words) {
			t.Errorf("%q: column %d of %q: %q; want column %d and %q", r.text, e.Column, e.Text, e.Message, r.column, r.words)
		}
	}
}

func TestRequirementsAreRefusedWithTheReason(t *testing.T) {
	checkRefusals(t, func(s string) error { _, err := ParseRequirement(High, s); return err }, []refusal{
		{"", 1, "nothing is written"},
		{"4", 2, "the unit of a time is missing"},
		{"4±3%", 2, "the unit of a time is missing"},
		{"4V", 2, `"V"`},
		{"4s±3", 5, "3 could be 3 % or 3 s"},
		{"4s±3V", 6, `"V"`},
		{"4s±1pt", 7, `"t"`},
		{"4s±", 3, "no allowance follows the sign"},
		{"±3%", 1, "nothing is written"},
		{"4s+3%", 4, "only one side"},
		{"4s-3%", 4, "only one side"},
		{"4s+3%+2%", 7, "one term for both sides"},
		{"4s±3%±2%", 9, "one term for both sides"},
		{"4s±3%%", 7, `"%"`},
		{"4s±x", 5, `"x"`},
		{"4s±3%/", 7, `"/"`},
		{"-4s", 1, "never negative"},
		{"0s", 1, "a high of 0 is not possible"},
		{"4s±100%", 5, "zero or below"},
		{"4s±5s", 5, "zero or below"},
		{"4s-150%+1%", 4, "zero or below"},
		{"4s±0%", 5, "allowance of nothing"},
		{"4s±1e-20%", 5, "too small to compute with"},
		{"4s±1e+300%", 5, "zero or below"},
		{"1e-100s", 1, "out of reason"},
		{"1e+100s", 1, "out of reason"},
		{"4.1s..3.9s", 7, "ends at or below its beginning"},
		{"4s..4s", 5, "ends at or below its beginning"},
		{"3.9..4.1s", 4, "unit of a time is missing"},
		{"3.9s..4.1", 10, "unit of a time is missing"},
		{"3.9s..", 7, "nothing is written"},
		{"..4.1s", 1, "nothing is written"},
		{"3.9s..4.1s±3%", 11, `"±"`},
		{"1s..2s..3s", 7, `"."`},
		{"5m", 3, "minutes"},
		{"1,443s±1%", 2, "1.443 s"},
		{"4s\xb13%", 3, "0xB1"},
	})
	checkRefusals(t, func(s string) error { _, err := ParseRequirement(Frequency, s); return err }, []refusal{
		{"420", 4, "unit of a frequency is missing"},
		{"420s", 4, `"s"`},
		{"0Hz", 1, "of 0"},
		{"1e+20Hz", 1, "out of reason"},
		{"420Hz±500Hz", 8, "zero or below"},
	})
	checkRefusals(t, func(s string) error { _, err := ParseRequirement(Duty, s); return err }, []refusal{
		{"50", 1, "write 0.5 or 50%"},
		{"0", 1, "above 0 and below 1"},
		{"0%", 1, "above 0 and below 1"},
		{"1", 1, "above 0 and below 1"},
		{"100%", 1, "above 0 and below 1"},
		{"150%", 1, "above 0 and below 1"},
		{"50%±1%", 6, "of the duty or points"},
		{"0.5±2%", 6, "of the duty or points"},
		{"50%±0.01", 6, "±1pt"},
		{"50%±60pt", 6, "zero or below"},
		{"0.5%", 1, "zero or below"},
		{"99.5%", 1, "100 %"},
		{"48%..0.52", 1, "different units"},
		{"0.48..52%", 1, "different units"},
		{"50s", 3, `"s"`},
	})
}

// What is pointed at is the same character wherever white space is put around.
func TestRefusalsPointIntoTheWholeText(t *testing.T) {
	_, err := ParseRequirement(High, "  4s  ±  3x% ")
	var e *marking.Error
	if !errors.As(err, &e) || "  4s  ±  3x% "[e.Column-1] != 'x' {
		t.Errorf("%v", err)
	}
}

func TestRangesAreReadAsWritten(t *testing.T) {
	for _, c := range []struct {
		unit, text string
		want       Range // nominal, min, max
	}{
		{"V", "9V", Range{9, 9, 9}},
		{"V", "9", Range{9, 9, 9}},
		{"V", "9V±10%", Range{9, 8.1, 9.9}},
		{"V", "9 V +/- 0.5 V", Range{9, 8.5, 9.5}},
		{"V", "9V+1V-0.5V", Range{9, 8.5, 10}},
		{"V", "4.5V..16V", Range{10.25, 4.5, 16}},
		{"V", "4.5..16", Range{10.25, 4.5, 16}},
		{"V", "5V..5V", Range{5, 5, 5}},
		{"V", "3V3±5%", Range{3.3, 3.135, 3.465}},
		{"C", "10C..40C", Range{25, 10, 40}},
		{"C", "10..40", Range{25, 10, 40}},
		{"C", "25C", Range{25, 25, 25}},
		{"C", "25 °C", Range{25, 25, 25}},
		{"C", "-10C", Range{-10, -10, -10}},
		{"C", "-10C..40C", Range{15, -10, 40}},
		{"C", "−10 °C .. 40 °C", Range{15, -10, 40}},
		{"C", "-20C..-10C", Range{-15, -20, -10}},
		{"C", "25C±15C", Range{25, 10, 40}},
		{"C", "-10C±15C", Range{-10, -25, 5}},
		{"C", "25C+10C-5C", Range{25, 20, 35}},
	} {
		if got, err := ParseRange(c.unit, c.text); err != nil || got != c.want {
			t.Errorf("ParseRange(%q, %q) = %v, %v; want %v", c.unit, c.text, got, err, c.want)
		}
	}
}

func TestRangesAreRefusedWithTheReason(t *testing.T) {
	checkRefusals(t, func(s string) error { _, err := ParseRange("V", s); return err }, []refusal{
		{"", 1, "nothing is written"},
		{"0V", 1, "above 0 V"},
		{"-9V", 1, "never negative"},
		{"9V±100%", 5, "above 0 V"},
		{"9V±1", 5, "1 % or 1 V"},
		{"9V±1A", 6, `"A"`},
		{"1e+9V", 1, "out of reason"},
		{"16V..4.5V", 6, "ends below its beginning"},
		{"4.5..16V", 1, "write both or neither"},
		{"9s", 2, `"s"`},
		{"9V+5%", 4, "only one side"},
	})
	checkRefusals(t, func(s string) error { _, err := ParseRange("C", s); return err }, []refusal{
		{"10C-40C", 5, "only one side"},
		{"25C±10%", 6, "no meaning"},
		{"-300C", 1, "absolute zero"},
		{"-270C±10C", 8, "absolute zero"},
		{"5000C", 1, "out of reason"},
		{"40C..-10C", 6, "ends below its beginning"},
		{"25K", 3, `"K"`},
	})
}

// An allowance's ends are the decimals that a person would compute, each rounded
// to float64 once.
func TestAllowanceEndsAreTheWrittenDecimals(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		thousandths := rapid.IntRange(1, 99999).Draw(t, "thousandths of a second")
		percent := rapid.IntRange(1, 99).Draw(t, "percent")
		text := strconv.Itoa(thousandths) + "ms±" + strconv.Itoa(percent) + "%"
		r, err := ParseRequirement(Period, text)
		if err != nil {
			t.Fatal(err)
		}
		low, _ := strconv.ParseFloat(strconv.Itoa(thousandths*(100-percent))+"e-5", 64)
		high, _ := strconv.ParseFloat(strconv.Itoa(thousandths*(100+percent))+"e-5", 64)
		if r.Min != low || r.Max != high {
			t.Fatalf("%s: %v to %v, want %v to %v", text, r.Min, r.Max, low, high)
		}
	})
}

func TestARangeAndItsAllowanceAreTheSame(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		middle := rapid.IntRange(101, 9999).Draw(t, "middle, ms")
		off := rapid.IntRange(1, 100).Draw(t, "off, ms")
		spread, err := ParseRequirement(High, strconv.Itoa(middle)+"ms±"+strconv.Itoa(off)+"ms")
		if err != nil {
			t.Fatal(err)
		}
		ends, err := ParseRequirement(High, strconv.Itoa(middle-off)+"ms.."+strconv.Itoa(middle+off)+"ms")
		if err != nil || spread != ends {
			t.Fatalf("%v and %v, %v", spread, ends, err)
		}
	})
}

func FuzzParseRequirement(f *testing.F) {
	for _, text := range []string{"4s±3%", "4s+2%-1%", "3.9s..4.1s", "50%±1pt", "0.5±0.01", "420Hz±1%", "1E-3s", "-4s", "±", "..", "…", "4s\xb1", "4s±1e+300%", ""} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		for _, m := range Measures() {
			r, err := ParseRequirement(m, text)
			if err != nil {
				checkFailure(t, text, err)
				continue
			}
			if !(r.Min > 0 && r.Min <= r.Target && r.Target <= r.Max && r.Min < r.Max) || math.IsInf(r.Max, 0) || m == Duty && r.Max >= 1 {
				t.Fatalf("%q: %v", text, r)
			}
			if err := CheckRequirements([]Requirement{r}); err != nil {
				t.Fatalf("%q alone: %v", text, err)
			}
		}
	})
}

func FuzzParseRange(f *testing.F) {
	for _, text := range []string{"9V", "9V±10%", "4.5V..16V", "-10C..40C", "25C±15C", "10C-40C", "", "-", "..", "9V±1e+300%"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		for _, unit := range []string{"V", "C"} {
			r, err := ParseRange(unit, text)
			if err != nil {
				checkFailure(t, text, err)
				continue
			}
			if !(r.Min <= r.Nominal && r.Nominal <= r.Max) || unit == "V" && r.Min <= 0 || r.Min < -273.15 || r.Max > 1e4 {
				t.Fatalf("%q: %v", text, r)
			}
		}
	})
}

// checkFailure fails unless the error is a *marking.Error that points into text.
func checkFailure(t *testing.T, text string, err error) {
	t.Helper()
	var e *marking.Error
	if !errors.As(err, &e) || e.Text != text || e.Column < 1 || e.Column > len(text)+1 || e.Message == "" {
		t.Fatalf("%q: unsound error %#v", text, err)
	}
}
