package marking

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// The notations are those of IEC 60062 (letter as the decimal point: 4K7, R47,
// 4n7, µ47) and of common practice, no source.
func TestResistancesAreReadAsWritten(t *testing.T) {
	for text, want := range map[string]float64{
		"4k7": 4700, "4K7": 4700, "4.7k": 4700, "4,7k": 4700, "4700": 4700, "4.7 kΩ": 4700,
		"4.7 k\u2126": 4700, "4.7kohm": 4700, "4,7 KOHM": 4700, "4k7 ohms": 4700, "4.7kR": 4700, "4.7E+03": 4700, "47e+2": 4700,
		"4R7": 4.7, "4r7": 4.7, "4Ω7": 4.7, "R47": 0.47, "0R47": 0.47, ".47": 0.47, "0,47": 0.47,
		"1M": 1e6, "2M2": 2.2e6, "2.2 MΩ": 2.2e6, "1G": 1e9, "1T": 1e12,
		"100": 100, "100R": 100, "100 Ω": 100, "104": 104, "470K": 470e3, "k47": 470,
		"0": 0, "0R": 0, "0R0": 0, "0 Ω": 0, "000": 0,
		"1m": 1e-3, "10mΩ": 10e-3, "4m7": 4.7e-3,
		"L50":    0.5e-3, // L for milliohm: from memory
		" 4k7\t": 4700, "4.7\u00a0kΩ": 4700, "4.7\u202fk": 4700,
		"10.000k": 10e3, "4.682k": 4682, "4,682 kΩ": 4682, "4.682 Ω": 4.682, "0.100": 0.1, "1,0000": 1, "1234.5": 1234.5,
		"1,234.5": 1234.5, "1.234,5": 1234.5, "1.000.000": 1e6, "1,000,000 ohm": 1e6,
	} {
		if got, err := ParseOhms(text); err != nil || got != want {
			t.Errorf("ParseOhms(%q) = %v, %v; want %v", text, got, err, want)
		}
	}
}

func TestCapacitancesAreReadAsWritten(t *testing.T) {
	for text, want := range map[string]float64{
		"100n": 1e-7, "0.1u": 1e-7, "0,1uF": 1e-7, "0.1µF": 1e-7, "0.1μF": 1e-7, "0u1": 1e-7, "u1": 1e-7, "100 nF": 1e-7, "100NF": 1e-7, "0.1 UF": 1e-7, "100000p": 1e-7,
		"104": 1e-7, "104K": 1e-7, "104 K": 1e-7, "104k": 1e-7, "104M": 1e-7, "1E-7F": 1e-7, "1.0e-07 farad": 1e-7,
		"4u7": 4.7e-6, "4µ7": 4.7e-6, "4μ7": 4.7e-6, "4U7": 4.7e-6, "4.7 µF": 4.7e-6,
		"6p8": 6.8e-12, "6.8pF": 6.8e-12, "6,8 pf": 6.8e-12, "0p5": 0.5e-12, "2n2": 2.2e-9, "4n7": 4.7e-9, "µ47": 0.47e-6,
		"470p": 470e-12, "470K": 47e-12, "100K": 10e-12, "470J": 47e-12, "140": 14e-12, "223": 22e-9,
		"4700u": 4.7e-3, "10mF": 10e-3, "104m": 0.104, "1F": 1, "1F5": 1.5, "100F0": 100,
		"109":     1e-12, // 9 for a tenth: from memory
		"4.682nF": 4.682e-9, "4,682nF": 4.682e-9, "0,100u": 0.1e-6, "2,200.0u": 2.2e-3,
	} {
		if got, err := ParseFarads(text); err != nil || got != want {
			t.Errorf("ParseFarads(%q) = %v, %v; want %v", text, got, err, want)
		}
	}
}

// refusal is a text that must be refused: where, and with which words.
type refusal struct {
	text   string
	column int
	words  []string
}

func checkRefusals(t *testing.T, parse func(string) error, refusals []refusal) {
	t.Helper()
	for _, r := range refusals {
		var e *Error
		if err := parse(r.text); !errors.As(err, &e) {
			t.Errorf("%q: %v, want an *Error", r.text, err)
			continue
		}
		if e.Column != r.column || e.Text != r.text {
			t.Errorf("%q: column %d of %q (%s), want %d", r.text, e.Column, e.Text, e.Message, r.column)
		}
		for _, word := range r.words {
			if !strings.Contains(e.Message, word) {
				t.Errorf("%q: message %q lacks %q", r.text, e.Message, word)
			}
		}
	}
}

func TestResistancesAreRefusedWithTheReason(t *testing.T) {
	checkRefusals(t, func(s string) error { _, err := ParseOhms(s); return err }, []refusal{
		{"", 1, []string{"nothing is written", "4k7"}},
		{" \t", 3, []string{"nothing is written"}},
		{"4,700", 2, []string{"4.7 Ω", "4.7 kΩ", "4R7", "4k7", "comma"}},
		{"4.700", 2, []string{"4.7 Ω", "4.7 kΩ", "4R7", "4k7", "point"}},
		{"4.700 Ω", 2, []string{"4.7 kΩ"}},
		{"4,682 Ω", 2, []string{"4.682 kΩ"}},
		{"100,000", 4, []string{"100 Ω", "100 kΩ"}},
		{"104J", 1, []string{"100 kΩ", "104 Ω"}},
		{"1E4", 2, []string{"several readings"}},
		{"4e7", 2, []string{"several readings"}},
		{"4x7", 2, []string{`"x"`, "4k7"}},
		{"4k7x", 4, []string{`"x"`}},
		{"4k7k7", 4, []string{`"k"`}},
		{"4.7k7", 5, []string{`"7"`}},
		{"4..7", 2, []string{`"."`}},
		{"1.2.3", 4, []string{"points or commas"}},
		{"1,00,000", 5, []string{"points or commas"}},
		{"1,000.000,5", 6, []string{"points or commas"}},
		{"10 000", 4, []string{`"0"`}},
		{"-4k7", 1, []string{"never negative"}},
		{"−4k7", 1, []string{"never negative"}},
		{"+4k7", 1, []string{`"+"`}},
		{"k", 1, []string{`"k"`, "digit"}},
		{"R", 1, []string{`"R"`}},
		{strings.Repeat("1", 5000), 101, []string{"5000 bytes"}},
		{"NaN", 1, []string{`"N"`}},
		{"Inf", 1, []string{`"I"`}},
		{"1e+13", 1, []string{"1e+13", "out of reason"}},
		{"2T", 1, []string{"out of reason"}},
		{"1e-7", 1, []string{"out of reason"}},
		{"1e-999", 1, []string{"out of reason"}},
		{"1e+999999999999", 1, []string{"out of reason"}},
		{"10uF", 3, []string{`"u"`}},
		{"4k7\xb5", 4, []string{"0xB5", "not UTF-8"}},
		{"\xb5", 1, []string{"0xB5"}},
		{"4µ7", 2, []string{`"µ"`}},
		{"4k7 5%", 5, []string{`"5"`}},
		{"4K7P", 4, []string{"0.02 %", "100 %"}},
		{"4\x007", 2, []string{`"\x00"`}},
	})
}

func TestCapacitancesAreRefusedWithTheReason(t *testing.T) {
	checkRefusals(t, func(s string) error { _, err := ParseFarads(s); return err }, []refusal{
		{"", 1, []string{"nothing is written"}},
		{"470", 1, []string{"47 pF", "470 pF", "47p", "470p", "three-digit code"}},
		{"100", 1, []string{"10 pF", "100 pF", "10p", "100p"}},
		{"100N", 4, []string{"10 pF", "100 nF", "tolerance"}},
		{"100P", 4, []string{"10 pF", "100 pF"}},
		{"104F", 4, []string{"100 nF", "104 F"}},
		{"104f", 4, []string{"100 nF", "104 F"}},
		{"047", 1, []string{"does not begin with 0"}},
		{"108", 3, []string{"no settled meaning"}},
		{"47", 3, []string{"unit", "47p", "47n", "47u"}},
		{"0.1", 4, []string{"unit", "0.1u"}},
		{"4700", 5, []string{"unit", "4700p"}},
		{"1e-7", 5, []string{"unit", "1e-7u"}},
		{"0", 2, []string{"unit"}},
		{"0p", 1, []string{"of 0 F"}},
		{"2,200u", 2, []string{"2.2 µF", "2200 µF", "2u2", "2200u"}},
		{"2.200 µF", 2, []string{"2.2 µF", "2200 µF"}},
		{"1,000p", 2, []string{"1 pF", "1 nF"}},
		{"100MF", 1, []string{"out of reason", "M is mega"}},
		{"10k", 1, []string{"out of reason"}},
		{"101F0", 1, []string{"out of reason"}},
		{"0.001p", 1, []string{"out of reason"}},
		{"-100n", 1, []string{"never negative"}},
		{"4R7", 2, []string{"resistance", "4p7"}},
		{"10kΩ", 4, []string{`"Ω"`}},
		{"100nX", 5, []string{`"X"`}},
		{"100n 50V", 6, []string{`"5"`}},
		{"104KK", 1, []string{"out of reason"}},
		{"104nKK", 5, []string{`"K"`}},
		{"100\xb5", 4, []string{"0xB5"}},
	})
}

func TestThreeDigitCodesCarryTheirTolerance(t *testing.T) {
	// K ±10 % (source: makers' charts of IEC 60062 letters); 104K = 100 nF ±10 %.
	for text, want := range map[string]struct {
		farads float64
		Tolerance
	}{
		"104K": {1e-7, Tolerance{0.1, 0.1}},
		"104j": {1e-7, Tolerance{0.05, 0.05}},
		"470K": {47e-12, Tolerance{0.1, 0.1}},
		"224M": {220e-9, Tolerance{0.2, 0.2}},
		"103Z": {10e-9, Tolerance{0.2, 0.8}},
		"479C": {4.7e-12, Tolerance{0.25e-12 / 4.7e-12, 0.25e-12 / 4.7e-12}},
	} {
		farads, tolerance, err := ParseCapacitorCode(text)
		if err != nil || farads != want.farads || tolerance == nil || *tolerance != want.Tolerance {
			t.Errorf("ParseCapacitorCode(%q) = %v, %v, %v; want %v", text, farads, tolerance, err, want)
		}
	}
	if farads, tolerance, err := ParseCapacitorCode("104"); err != nil || farads != 1e-7 || tolerance != nil {
		t.Errorf("104: %v, %v, %v", farads, tolerance, err)
	}
	for _, text := range []string{"", "4u7", "10", "1044", "104X", "104n", "470", "104 nF"} {
		if farads, _, err := ParseCapacitorCode(text); err == nil {
			t.Errorf("ParseCapacitorCode(%q) = %v, want an error", text, farads)
		}
	}
}

func TestMarkedValuesCarryTheirTolerance(t *testing.T) {
	for text, percent := range map[string]float64{"4K7J": 5, "R47K": 10, "1M0F": 1, "10KJ": 5, "100RM": 20, "4k7 G": 2} {
		if _, tolerance, err := ParseMarkedOhms(text); err != nil || tolerance == nil || *tolerance != (Tolerance{percent / 100, percent / 100}) {
			t.Errorf("ParseMarkedOhms(%q): %v, %v; want ±%v %%", text, tolerance, err, percent)
		}
	}
	for text, percent := range map[string]float64{"4n7J": 5, "100nK": 10, "100nFM": 20, "µ47K": 10} {
		if _, tolerance, err := ParseMarkedFarads(text); err != nil || tolerance == nil || *tolerance != (Tolerance{percent / 100, percent / 100}) {
			t.Errorf("ParseMarkedFarads(%q): %v, %v; want ±%v %%", text, tolerance, err, percent)
		}
	}
	for _, text := range []string{"4k7", "100"} {
		if _, tolerance, err := ParseMarkedOhms(text); err != nil || tolerance != nil {
			t.Errorf("%q: %v, %v; want no tolerance", text, tolerance, err)
		}
	}
}

// Every three-digit text has exactly the fate the rule gives it: the code in pF
// unless the plain number is an E24 value.
func TestEveryThreeDigitCapacitorCode(t *testing.T) {
	for n := range 1000 {
		text := strconv.Itoa(1000 + n)[1:]
		farads, err := ParseFarads(text)
		mantissa, zeros := n/10, n%10
		refused := mantissa < 10 || zeros == 8
		for _, number := range Preferred(24) {
			refused = refused || n == number*10
		}
		if zeros == 9 {
			zeros = -1
		}
		want, _ := strconv.ParseFloat(strconv.Itoa(mantissa)+"e"+strconv.Itoa(zeros-12), 64)
		if refused != (err != nil) || err == nil && farads != want {
			t.Errorf("%s: %v, %v; want %v, refused %v", text, farads, err, want, refused)
		}
	}
}

// The nearest float64 to a decimal is what strconv reads from it; every way of
// writing the same decimal must give that.
func TestEveryNotationOfADecimalIsTheSameFloat(t *testing.T) {
	prefixes := map[string]int{"m": -3, "R": 0, "k": 3, "K": 3, "M": 6}
	rapid.Check(t, func(t *rapid.T) {
		whole := rapid.StringMatching(`[1-9][0-9]{0,3}`).Draw(t, "whole")
		fraction := rapid.StringMatching(`[0-9]{1,8}`).Filter(func(s string) bool { return len(s) != 3 }).Draw(t, "fraction")
		prefix := rapid.SampledFrom([]string{"m", "R", "k", "K", "M"}).Draw(t, "prefix")
		want, err := strconv.ParseFloat(whole+"."+fraction+"e"+strconv.Itoa(prefixes[prefix]), 64)
		if err != nil {
			t.Fatal(err)
		}
		for _, text := range []string{
			whole + prefix + fraction, whole + "." + fraction + prefix, whole + "," + fraction + " " + prefix,
			whole + prefix + fraction + "Ω", whole + fraction + "e" + strconv.FormatInt(int64(prefixes[prefix]-len(fraction)), 10),
		} {
			// An exponent needs its sign.
			text = strings.Replace(strings.Replace(text, "e", "e+", 1), "e+-", "e-", 1)
			if got, err := ParseOhms(text); err != nil || got != want {
				t.Fatalf("ParseOhms(%q) = %v, %v; want %v", text, got, err, want)
			}
		}
	})
}

func TestCompactFormsReadBackAsTheSameFloat(t *testing.T) {
	compare := func(t *rapid.T, x float64, compact string, parse func(string) (float64, error)) {
		if got, err := parse(compact); err != nil || got != x {
			t.Fatalf("%v is written %q and read as %v, %v", x, compact, got, err)
		}
	}
	short := func(t *rapid.T, lowest, highest int) float64 {
		digits := rapid.IntRange(1, 9999).Draw(t, "digits")
		power := rapid.IntRange(lowest, highest).Draw(t, "power")
		x, _ := strconv.ParseFloat(strconv.Itoa(digits)+"e"+strconv.Itoa(power), 64)
		return x
	}
	t.Run("resistances of up to four digits", rapid.MakeCheck(func(t *rapid.T) {
		x := short(t, -6, 8)
		compare(t, x, CompactOhms(x), ParseOhms)
	}))
	t.Run("capacitances of up to four digits", rapid.MakeCheck(func(t *rapid.T) {
		x := short(t, -14, -2)
		compare(t, x, CompactFarads(x), ParseFarads)
	}))
	t.Run("any resistance", rapid.MakeCheck(func(t *rapid.T) {
		x := math.Exp(rapid.Float64Range(math.Log(1.1e-6), math.Log(0.9e12)).Draw(t, "ln"))
		compare(t, x, CompactOhms(x), ParseOhms)
	}))
	t.Run("any capacitance", rapid.MakeCheck(func(t *rapid.T) {
		x := math.Exp(rapid.Float64Range(math.Log(1.1e-14), math.Log(99.9)).Draw(t, "ln"))
		compare(t, x, CompactFarads(x), ParseFarads)
	}))
	for x, compact := range map[float64]string{0: "0R", 4700: "4k7", 4.7: "4R7", 0.47: "R47", 100: "100R", 10e3: "10k", 1e6: "1M", 2.2e6: "2M2", 1e12: "1T", 0.0047: "4m7", 12345: "12k345"} {
		if got := CompactOhms(x); got != compact {
			t.Errorf("CompactOhms(%v) = %q, want %q", x, got, compact)
		}
	}
	for x, compact := range map[float64]string{1e-7: "100n", 4.7e-6: "4u7", 6.8e-12: "6p8", 0.5e-12: "p5", 4.7e-3: "4700u", 0.47: "F47", 1: "1F", 100: "100F0", 1e-14: "p01"} {
		if got := CompactFarads(x); got != compact {
			t.Errorf("CompactFarads(%v) = %q, want %q", x, got, compact)
		}
	}
}
