package picks

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/optimize"
)

func TestFiguresShowFourDigitsAndEnoughToTellTheLimitsApart(t *testing.T) {
	for _, test := range []struct {
		size, spread float64
		percent      bool
		x            float64
		format, text string
	}{
		{4, 0.24, false, 3.88, "0.000", "3.880"},
		{420, 8.4, false, 415.8, "0.00", "415.80"},
		{420, 0, false, 415.8, "0.0", "415.8"},
		{12345, 0, false, 12345.6, "0", "12346"},
		{4, 0.0004, false, 4.0002, "0.000000", "4.000200"},
		{2.4e-3, 0, false, 2.4e-3, "0.000000", "0.002400"},
		{2.4e-7, 0, false, 2.4e-7, "0.000E+00", "2.400e-07"},
		{0.5, 0.02, true, 0.49, "0.00%", "49.00%"},
		{1, 0, true, 1, "0.0%", "100.0%"},
		{0, 0, false, 0, "0", "0"},
		{math.Inf(1), 0, false, 3, "0", "3"},
		{math.NaN(), math.NaN(), false, 3, "0", "3"},
	} {
		got := figuresFor(test.size, test.spread, test.percent)(test.x)
		if got.format() != test.format || got.text() != test.text {
			t.Errorf("size %v, spread %v: %s by %s, want %s by %s", test.size, test.spread, got.text(), got.format(), test.text, test.format)
		}
	}
}

func TestShiftedIsExactInDecimal(t *testing.T) {
	for _, test := range []struct {
		x     float64
		power int
		want  float64
	}{{0.0038, 3, 3.8}, {1e-6, 6, 1}, {0.0352, 3, 35.2}, {4, 0, 4}, {0, 3, 0}, {415.8, -3, 0.4158}, {math.Inf(1), 3, math.Inf(1)}} {
		if got := shifted(test.x, test.power); got != test.want {
			t.Errorf("%v shifted by %d is %v, want %v", test.x, test.power, got, test.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		mantissa, power := rapid.IntRange(-99999, 99999).Draw(t, "mantissa"), rapid.IntRange(-12, 12).Draw(t, "power")
		x, _ := strconv.ParseFloat(strconv.Itoa(mantissa)+"e-4", 64)
		want, _ := strconv.ParseFloat(strconv.Itoa(mantissa)+"e"+strconv.Itoa(power-4), 64)
		if got := shifted(x, power); got != want {
			t.Fatalf("%v shifted by %d is %v, want %v", x, power, got, want)
		}
	})
}

func TestReadingsAreInTheUnitOfTheInstrument(t *testing.T) {
	for _, test := range []struct {
		unit   string
		x      float64
		want   string
		number float64
	}{
		{"s", 4, "s", 4}, {"s", 1, "s", 1}, {"s", 0.5, "ms", 500}, {"s", 0.0024, "ms", 2.4}, {"s", 110e-6, "µs", 110}, {"s", 90e-9, "ns", 90}, {"s", 5e-10, "ns", 0.5},
		{"Hz", 0.25, "Hz", 0.25}, {"Hz", 420, "Hz", 420}, {"Hz", 14400, "kHz", 14.4}, {"Hz", 2.1e6, "MHz", 2.1},
		{"%", 0.5, "%", 0.5}, {"s", 0, "s", 0}, {"s", math.Inf(1), "s", math.Inf(1)},
	} {
		r := reading{unit: test.unit, nominal: test.x, worst: &optimize.Band{Min: test.x, Max: test.x}}.atBench()
		if r.unit != test.want || r.nominal != test.number || r.worst.Min != test.number || r.worst.Max != test.number {
			t.Errorf("%v %s: %v %s, worst %v", test.x, test.unit, r.nominal, r.unit, *r.worst)
		}
	}
	// The unit is that of the target, whatever the fit does.
	r := reading{unit: "s", nominal: 0.99, stated: &optimize.Allowance{Target: 1, Min: 0.98, Max: 1.02}}.atBench()
	if r.unit != "s" || r.nominal != 0.99 || r.stated.Min != 0.98 {
		t.Errorf("target 1 s: %+v", r)
	}
}

func TestLinesAreCountedAsWordsWrap(t *testing.T) {
	for _, test := range []struct {
		text  string
		width float64
		want  int
	}{
		{"", 10, 1}, {"one", 10, 1}, {"one two", 100, 1}, {"aaaaa bbbbb", 6, 2}, {"aaaaa bbbbb ccccc", 12, 2},
		{"a\nb\n\nc", 10, 4}, {strings.Repeat("a", 100), 11, 10}, {"aa " + strings.Repeat("a", 20), 11, 3}, {"text", 0, 1}, {"抽斗抽斗", 4, 2},
	} {
		if got := lineCount(test.text, test.width); got != test.want {
			t.Errorf("%q in %v: %d lines, want %d", test.text, test.width, got, test.want)
		}
	}
}

func TestUnderscoresThatReadAsEscapesAreEscaped(t *testing.T) {
	for text, want := range map[string]string{
		"": "", "a_b": "a_b", "_x000D_": "_x005F_x000D_", "_x000D_x000D_": "_x005F_x000D_x005F_x000D_", "_x00G0_": "_x00G0_", "µ_xABcd_µ": "µ_x005F_xABcd_µ",
	} {
		if got := escaped(text); got != want {
			t.Errorf("escaped(%q) = %q, want %q", text, got, want)
		}
	}
}
