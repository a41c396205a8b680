package inventory

import (
	"slices"
	"strings"
)

// Kind is the kind of a component.
type Kind string

// The kinds a drawer knows.
const (
	Resistor      Kind = "resistor"
	Capacitor     Kind = "capacitor"
	Diode         Kind = "diode"
	Timer         Kind = "timer"
	Inverter      Kind = "inverter"
	Potentiometer Kind = "potentiometer"
	Other         Kind = "other"
)

// Kinds returns every kind, in the order in which listings show them.
func Kinds() []Kind {
	return []Kind{Resistor, Capacitor, Diode, Timer, Inverter, Potentiometer, Other}
}

// Unit returns the SI unit of the kind's value as scripts read it ("ohm", "f"),
// or "" for a kind that has a part number instead of a value.
func (k Kind) Unit() string {
	switch k {
	case Resistor, Potentiometer:
		return "ohm"
	case Capacitor:
		return "f"
	}
	return ""
}

func (k Kind) known() bool { return slices.Contains(Kinds(), k) }

// sampleNumber returns a trade number of the kind, for messages.
func (k Kind) sampleNumber() string {
	switch k {
	case Diode:
		return "1N4148"
	case Timer:
		return "NE555"
	case Inverter:
		return "74HC14"
	}
	return "2N3904"
}

// kindWords returns the kinds as a list for messages.
func kindWords() string {
	words := make([]string, 0, len(Kinds()))
	for _, k := range Kinds() {
		words = append(words, string(k))
	}
	return strings.Join(words, ", ")
}

// abbreviations holds the other words for a kind, lower case, without full
// stop: reference designators, common short forms, and the words of other
// languages that stock lists use.
var abbreviations = map[string]Kind{
	"r": Resistor, "res": Resistor, "resistance": Resistor, "widerstand": Resistor, "résistance": Resistor, "resistencia": Resistor,
	"c": Capacitor, "cap": Capacitor, "caps": Capacitor, "kondensator": Capacitor, "condensateur": Capacitor, "condensador": Capacitor,
	"d": Diode, "diodo": Diode,
	"p": Potentiometer, "pot": Potentiometer, "pots": Potentiometer, "trimmer": Potentiometer, "trimpot": Potentiometer, "vr": Potentiometer, "rv": Potentiometer,
	"inv":  Inverter,
	"misc": Other, "miscellaneous": Other, "others": Other,
}

// ParseKind returns the kind that the word names: its name or plural, or a
// common abbreviation (R, RES, C, CAP, D, POT), in any case. The error (Invalid)
// names the nearest kind where the word looks mistyped.
func ParseKind(word string) (Kind, error) {
	folded := strings.TrimSuffix(strings.ToLower(strings.TrimSpace(word)), ".")
	for _, k := range Kinds() {
		if folded == string(k) || folded == string(k)+"s" {
			return k, nil
		}
	}
	if k, found := abbreviations[folded]; found {
		return k, nil
	}
	if folded == "" {
		return "", Errorf(Invalid, "kind: nothing is written; the kinds are %s", kindWords())
	}
	if nearest, found := nearestKind(folded); found {
		return "", Errorf(Invalid, "kind: %q is no kind of component; did you mean %s?", word, nearest)
	}
	return "", Errorf(Invalid, "kind: %q is no kind of component; the kinds are %s", word, kindWords())
}

// nearestKind returns the kind whose name is the fewest mistypings away from the
// word: at most two, and one in a short word.
func nearestKind(word string) (nearest Kind, found bool) {
	if len(word) > 2*len(Potentiometer) {
		return "", false
	}
	fewest := 3
	if len(word) < len("timers") {
		fewest = 2
	}
	for _, k := range Kinds() {
		if n := min(mistypings(word, string(k)), mistypings(word, string(k)+"s")); n < fewest {
			nearest, fewest, found = k, n, true
		}
	}
	return nearest, found
}

// mistypings returns how many bytes must be put in, left out, replaced or
// swapped with their neighbour to make b of a (optimal string alignment).
func mistypings(a, b string) int {
	distance := make([][]int, len(a)+1)
	for i := range distance {
		distance[i] = make([]int, len(b)+1)
		distance[i][0] = i
	}
	for j := range distance[0] {
		distance[0][j] = j
	}
	for i := 1; i <= len(a); i++ {
		for j := 1; j <= len(b); j++ {
			replaced := distance[i-1][j-1]
			if a[i-1] != b[j-1] {
				replaced++
			}
			distance[i][j] = min(replaced, distance[i-1][j]+1, distance[i][j-1]+1)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				distance[i][j] = min(distance[i][j], distance[i-2][j-2]+1)
			}
		}
	}
	return distance[len(a)][len(b)]
}
