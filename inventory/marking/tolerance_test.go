package marking

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestTolerancesAreReadAsWritten(t *testing.T) {
	five := Tolerance{0.05, 0.05}
	electrolytic := Tolerance{Minus: 0.2, Plus: 0.8}
	for text, want := range map[string]Tolerance{
		"5%": five, "5 %": five, "±5%": five, "±5 %": five, "± 5%": five, "+-5%": five, "+/-5%": five, "+/- 5 %": five, "-+5%": five, "5": five, "±5": five, "5.0%": five, "5,0 %": five, "+5-5%": five, "J": five, "j": five, " J ": five,
		"0,1%": {0.001, 0.001}, "0.1 %": {0.001, 0.001}, "1": {0.01, 0.01}, "0.5": {0.005, 0.005}, "0.25": {0.0025, 0.0025},
		"+80-20%": electrolytic, "+80/-20 %": electrolytic, "+80% -20%": electrolytic, "-20/+80%": electrolytic, "−20/+80 %": electrolytic, "-20...+80 %": electrolytic, "-20..+80%": electrolytic, "+80-20": electrolytic,
		"+100-0%": {0, 1}, "-0/+100 %": {0, 1},
		"±0.25pF": {0.0025, 0.0025}, "±0,5 pF": {0.005, 0.005}, "0.001nF": {0.01, 0.01}, "+2pF-1pF": {0.01, 0.02},
	} {
		if got, err := ParseTolerance(text, 100e-12, "f"); err != nil || !near(got.Minus, want.Minus) || !near(got.Plus, want.Plus) {
			t.Errorf("ParseTolerance(%q) = %v, %v; want %v", text, got, err, want)
		}
	}
	for text, want := range map[string]float64{"±0.5Ω": 0.05, "±500mΩ": 0.05, "0.1 ohm": 0.01, "10R": 0} {
		got, err := ParseTolerance(text, 10, "ohm")
		if want == 0 {
			if err == nil {
				t.Errorf("%q of 10 Ω: %v, want an error", text, got)
			}
		} else if err != nil || !near(got.Plus, want) || !near(got.Minus, want) {
			t.Errorf("ParseTolerance(%q) = %v, %v; want %v", text, got, err, want)
		}
	}
}

func near(a, b float64) bool { return math.Abs(a-b) <= 1e-12*math.Abs(b) }

func TestPercentagesAreExact(t *testing.T) {
	// 0.07 is not 7/100 in every float arithmetic; text to float must round once.
	for text, want := range map[string]float64{"7%": 0.07, "0.1%": 0.001, "14,5 %": 0.145, "2.9%": 0.029} {
		if got, err := ParseTolerance(text, 1, "ohm"); err != nil || got.Plus != want {
			t.Errorf("ParseTolerance(%q) = %v, %v; want exactly %v", text, got.Plus, err, want)
		}
	}
}

// The letters of IEC 60062 as makers' charts print them, ±%.
func TestToleranceLettersFollowMakersCharts(t *testing.T) {
	for letter, want := range map[string]float64{"B": 0.1, "C": 0.25, "D": 0.5, "F": 1, "G": 2, "J": 5, "K": 10, "M": 20, "N": 30} {
		for _, part := range []struct {
			value float64
			unit  string
		}{{4700, "ohm"}, {100e-9, "f"}, {10e-12, "f"}} {
			if got, err := ParseTolerance(letter, part.value, part.unit); err != nil || !near(got.Plus*100, want) || got.Plus != got.Minus {
				t.Errorf("%s of %v %s: %v, %v; want ±%v %%", letter, part.value, part.unit, got, err, want)
			}
		}
	}
	for letter, want := range map[string]Tolerance{"T": {0.1, 0.5}, "Z": {0.2, 0.8}} {
		if got, err := ParseTolerance(letter, 100e-9, "f"); err != nil || got != want {
			t.Errorf("%s: %v, %v; want %v", letter, got, err, want)
		}
	}
	// Below 10 pF B, C and D are absolute (makers' charts).
	for letter, picofarads := range map[string]float64{"B": 0.1, "C": 0.25, "D": 0.5} {
		if got, err := ParseTolerance(letter, 4.7e-12, "f"); err != nil || !near(got.Plus*4.7, picofarads) {
			t.Errorf("%s of 4.7 pF: %v, %v; want ±%v pF", letter, got, err, picofarads)
		}
	}
}

// From memory, no published chart at hand: E L W, H, Q, S, and F below 10 pF.
func TestToleranceLettersFromMemory(t *testing.T) {
	for letter, want := range map[string]Tolerance{
		"E": {0.00005, 0.00005}, "L": {0.0001, 0.0001}, "W": {0.0005, 0.0005}, "H": {0.03, 0.03}, "Q": {0.1, 0.3}, "S": {0.2, 0.5},
	} {
		if got, err := ParseTolerance(letter, 100e-9, "f"); err != nil || got != want {
			t.Errorf("%s: %v, %v; want %v", letter, got, err, want)
		}
	}
	if got, err := ParseTolerance("F", 5e-12, "f"); err != nil || !near(got.Plus, 0.2) {
		t.Errorf("F of 5 pF: %v, %v; want ±1 pF", got, err)
	}
}

func TestTolerancesAreRefusedWithTheReason(t *testing.T) {
	parse := func(s string) error { _, err := ParseTolerance(s, 4.7e-12, "f"); return err }
	checkRefusals(t, parse, []refusal{
		{"", 1, []string{"nothing is written"}},
		{"0.05", 1, []string{"0.05 %", "5 %", "percent sign"}},
		{"±0.1", 3, []string{"0.1 %", "10 %"}},
		{".2", 1, []string{"0.2 %", "20 %"}},
		{"+0.2-0.1", 2, []string{"0.2 %", "20 %"}},
		{"P", 1, []string{"±0.02 %", "+100 %"}},
		{"G", 1, []string{"±2 %", "±2 pF"}},
		{"A", 1, []string{`"A"`}},
		{"X7R", 1, []string{`"X"`}},
		{"0", 1, []string{"0 %"}},
		{"0%", 1, []string{"0 %", "empty"}},
		{"100%", 1, []string{"100 %", "nothing"}},
		{"+500-20%", 1, []string{"500 %", "out of reason"}},
		{"1e+999%", 1, []string{"out of reason"}},
		{"-5%", 4, []string{"one side"}},
		{"+80%", 5, []string{"one side"}},
		{"+80+20%", 4, []string{"one side"}},
		{"+80-20pF", 1, []string{"different units"}},
		{"5%%", 3, []string{`"%"`}},
		{"5x", 2, []string{`"x"`}},
		{"5%\xb1", 3, []string{"0xB1"}},
		{"10K", 3, []string{`"K"`, "percent"}},
		{"±5pF", 1, []string{"nothing of the value"}},
		{"±", 3, []string{"the end"}},
	})
	checkRefusals(t, func(s string) error { _, err := ParseTolerance(s, 0, "ohm"); return err }, []refusal{
		{"±0.1R", 3, []string{"other than 0"}},
	})
	checkRefusals(t, func(s string) error { _, err := ParseTolerance(s, 0.5e-12, "f"); return err }, []refusal{
		{"D", 1, []string{"all of 0.5 pF"}},
	})
}

func TestTolerancesAreWrittenForPeople(t *testing.T) {
	for want, tolerance := range map[string]Tolerance{
		"±5 %": {0.05, 0.05}, "±0.1 %": {0.001, 0.001}, "±7 %": {0.07, 0.07}, "−20/+80 %": {0.2, 0.8}, "−0/+100 %": {0, 1},
	} {
		if got := FormatTolerance(tolerance); got != want {
			t.Errorf("FormatTolerance(%v) = %q, want %q", tolerance, got, want)
		}
	}
}

func TestWrittenTolerancesReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		hundredths := rapid.IntRange(1, 9999)
		want := Tolerance{float64(hundredths.Draw(t, "minus")) / 1e4, float64(hundredths.Draw(t, "plus")) / 1e4}
		if got, err := ParseTolerance(FormatTolerance(want), 1, "ohm"); err != nil || !near(got.Minus, want.Minus) || !near(got.Plus, want.Plus) {
			t.Fatalf("%v is written %q and read as %v, %v", want, FormatTolerance(want), got, err)
		}
	})
}
