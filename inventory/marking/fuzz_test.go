package marking

import (
	"errors"
	"math"
	"testing"
)

// checkFailure fails unless the error is an *Error that points into the text.
func checkFailure(t *testing.T, text string, err error) {
	t.Helper()
	var e *Error
	if !errors.As(err, &e) || e.Text != text || e.Column < 1 || e.Column > len(text)+1 || e.Message == "" || len(e.Error()) > 1000 {
		t.Fatalf("%q: unsound error %#v", text, err)
	}
}

func seed(f *testing.F, texts ...string) {
	for _, text := range append(texts, "", " ", "0", "-1", "1e+400", "1,234.5", "4,700", "\xb5", "∞", "NaN") {
		f.Add(text)
	}
}

func FuzzParseOhms(f *testing.F) {
	seed(f, "4k7", "R47", "4.7 kΩ", "1M", "104J", "4K7J", "4.7E+03", "k", "L50")
	f.Fuzz(func(t *testing.T, text string) {
		ohms, err := ParseOhms(text)
		if err != nil {
			checkFailure(t, text, err)
			return
		}
		if ohms != 0 && !(ohms >= 1e-6 && ohms <= 1e12) || math.Signbit(ohms) {
			t.Fatalf("%q: %v ohm", text, ohms)
		}
		if again, err := ParseOhms(CompactOhms(ohms)); err != nil || again != ohms {
			t.Fatalf("%q: %v is written %q and read as %v, %v", text, ohms, CompactOhms(ohms), again, err)
		}
	})
}

func FuzzParseFarads(f *testing.F) {
	seed(f, "100n", "0,1uF", "µ47", "104", "470", "104K", "2,200u", "4R7", "100F0")
	f.Fuzz(func(t *testing.T, text string) {
		farads, err := ParseFarads(text)
		if err != nil {
			checkFailure(t, text, err)
			return
		}
		if !(farads >= 1e-14 && farads <= 100) {
			t.Fatalf("%q: %v F", text, farads)
		}
		if again, err := ParseFarads(CompactFarads(farads)); err != nil || again != farads {
			t.Fatalf("%q: %v is written %q and read as %v, %v", text, farads, CompactFarads(farads), again, err)
		}
	})
}

func FuzzParseTolerance(f *testing.F) {
	seed(f, "5%", "±5 %", "+80-20%", "−20/+80 %", "J", "P", "±0.25pF", "0.05")
	f.Fuzz(func(t *testing.T, text string) {
		for unit, value := range map[string]float64{"ohm": 4700, "f": 4.7e-12, "": 0} {
			tolerance, err := ParseTolerance(text, value, unit)
			if err != nil {
				checkFailure(t, text, err)
				continue
			}
			if !(tolerance.Minus >= 0 && tolerance.Minus < 1 && tolerance.Plus >= 0 && tolerance.Plus <= 3) {
				t.Fatalf("%q: %v", text, tolerance)
			}
		}
	})
}

func FuzzParseMagnitude(f *testing.F) {
	seed(f, "4s", "500ms", "1/4W", "-10C", "6V3", "1.2kHz", "3%", "1pt", "5m")
	f.Fuzz(func(t *testing.T, text string) {
		for unit := range magnitudes {
			x, err := ParseMagnitude(text, unit)
			if err != nil {
				checkFailure(t, text, err)
				continue
			}
			if math.IsNaN(x) || math.IsInf(x, 0) || x < 0 && unit != "C" {
				t.Fatalf("%q: %v %s", text, x, unit)
			}
		}
	})
}

func FuzzParseCapacitorCode(f *testing.F) {
	seed(f, "104", "104K", "470", "100N", "108", "109C", "047")
	f.Fuzz(func(t *testing.T, text string) {
		farads, _, err := ParseCapacitorCode(text)
		if err != nil {
			checkFailure(t, text, err)
			return
		}
		if same, err := ParseFarads(text); err != nil || same != farads {
			t.Fatalf("%q: %v as a code and %v, %v as a value", text, farads, same, err)
		}
	})
}
