package marking

import (
	"slices"
	"strings"
)

var capacitance = family{
	noun: "a capacitance", sample: "100n, 4u7 or 0.1uF", symbol: "F",
	units: []string{"farads", "farad", "F"},
	// k, K and M stand here so that 100MF is refused for its size, not its spelling.
	prefixes: "pPnNuUµμmkKM",
	points:   "Ff",
	min:      1e-14, max: 100, limits: "0.01 pF to 100 F",
}

// ParseFarads returns the capacitance that the text writes, in farad: a number
// with a prefix (0.1u, 0,1 µF, 100nF), with the prefix as its decimal point
// (4n7, µ47; IEC 60062), or the three-digit code in pF (104) with or without its
// tolerance letter. m is milli, always; a tolerance letter is read over:
// ParseMarkedFarads returns it.
//
// The error is an *Error: not a capacitance, below 1e-14 or above 100 F, without
// a unit, or of two readings (470 is 47 pF as a code and 470 pF as a number).
func ParseFarads(text string) (float64, error) {
	farads, _, err := ParseMarkedFarads(text)
	return farads, err
}

// ParseMarkedFarads returns what ParseFarads does and the tolerance that follows
// it as a letter, nil where there is none.
func ParseMarkedFarads(text string) (float64, *Tolerance, error) {
	if code, found := findCode(text); found {
		return code.farads(text)
	}
	q, err := capacitance.read(text)
	if err != nil {
		return 0, nil, err
	}
	if q.rest != "" && !q.unit && q.prefix == 0 {
		if r := q.rest[0]; r == 'R' || r == 'r' {
			return 0, nil, errorAt(text, q.restAt, "R is the decimal point of a resistance; write 4.7 pF as 4p7")
		}
		return 0, nil, capacitance.stray(text, q)
	}
	if q.prefix == 0 && !q.unit {
		n := strings.TrimSpace(q.written)
		return 0, nil, errorAt(text, q.at+len(q.written), "the unit of the capacitance is missing; write %sp, %sn or %su", n, n, n)
	}
	// From 1000 µF on the trade writes 2,200 µF; a meter shows 4.682 nF. Two
	// readings are there only where the larger is a value that is made.
	if q.pointAt >= 0 && preferredDigits(q.digits) {
		return 0, nil, thousands(text, q.decimal, FormatFarads, CompactFarads)
	}
	return capacitance.marked(text, q, "f")
}

// preferredDigits reports whether the digits are an E24 value with zeros after.
func preferredDigits(digits string) bool {
	trimmed := strings.TrimRight(digits, "0")
	if len(trimmed) == 1 {
		trimmed += "0"
	}
	return len(trimmed) == 2 && slices.Contains(e24[:], int(trimmed[0]-'0')*10+int(trimmed[1]-'0'))
}
