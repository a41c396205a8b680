package inventory

import (
	"slices"
	"strings"
	"testing"
)

func TestKindsAreReadFromTheirWords(t *testing.T) {
	for word, want := range map[string]Kind{
		"resistor": Resistor, "Resistors": Resistor, "R": Resistor, "res": Resistor, "RES.": Resistor, " Resistor ": Resistor, "Widerstand": Resistor, "résistance": Resistor,
		"capacitor": Capacitor, "CAPACITORS": Capacitor, "C": Capacitor, "cap": Capacitor, "Caps": Capacitor, "Kondensator": Capacitor,
		"diode": Diode, "Diodes": Diode, "d": Diode,
		"timer": Timer, "timers": Timer, "inverter": Inverter, "inverters": Inverter,
		"potentiometer": Potentiometer, "POT": Potentiometer, "trimmer": Potentiometer,
		"other": Other, "misc.": Other,
	} {
		if got, err := ParseKind(word); err != nil || got != want {
			t.Errorf("ParseKind(%q) = %q, %v; want %q", word, got, err, want)
		}
	}
	for _, kind := range Kinds() {
		if got, err := ParseKind(string(kind)); err != nil || got != kind {
			t.Errorf("ParseKind(%q) = %q, %v", kind, got, err)
		}
	}
}

func TestUnknownKindsAreRefusedWithTheNearest(t *testing.T) {
	for word, want := range map[string]string{
		"resitor": "did you mean resistor", "resistro": "did you mean resistor", "capacitator": "did you mean capacitor", "doide": "did you mean diode", "potentiometre": "did you mean potentiometer", "invertor": "did you mean inverter",
		"transistor": "the kinds are", "IC": "the kinds are", "": "nothing is written", "  ": "nothing is written", "x": "the kinds are", "\xff": "the kinds are",
	} {
		kind, err := ParseKind(word)
		if ReasonOf(err) != Invalid || !strings.Contains(err.Error(), want) {
			t.Errorf("ParseKind(%q) = %q, %v; want %q", word, kind, err, want)
		}
	}
}

func FuzzParseKind(f *testing.F) {
	for _, word := range []string{"resistor", "R", "résistance", "resitor", "", "\xff", "POT."} {
		f.Add(word)
	}
	f.Fuzz(func(t *testing.T, word string) {
		kind, err := ParseKind(word)
		if known := slices.Contains(Kinds(), kind); known == (err != nil) {
			t.Fatalf("ParseKind(%q) = %q, %v", word, kind, err)
		}
		if err != nil && ReasonOf(err) != Invalid {
			t.Fatalf("ParseKind(%q): %v has no reason", word, err)
		}
	})
}
