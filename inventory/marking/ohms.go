package marking

import "strings"

// The largest resistance that a marking can mean, and the smallest above a
// 0 ohm link: beyond them a row's value is in the wrong column or unit.
const (
	largestOhms  = 1e12
	smallestOhms = 1e-6
)

var resistance = family{
	noun: "a resistance", sample: "4k7, 4.7k or 4R7", symbol: "Ω",
	// U+03A9 and U+2126 look the same.
	units:    []string{"Ω", "\u2126", "ohms", "ohm", "R"},
	prefixes: "mLkKMGT",
	points:   "RrΩ\u2126",
	max:      largestOhms, limits: "1 µΩ to 1 TΩ",
}

// ParseOhms returns the resistance that the text writes, in ohm: a number with
// a prefix (4.7k, 4,7 kΩ, 4700), or with the prefix or R as its decimal point
// (4k7, R47; IEC 60062, codes R K M G T and, from memory, L for milliohm). m is
// milli and M mega, always. 0 is a link. A tolerance letter after the prefix
// (4K7J) is read over; ParseMarkedOhms returns it.
//
// The error is an *Error: not a resistance, above 1e12 ohm, or of two readings.
func ParseOhms(text string) (float64, error) {
	ohms, _, err := ParseMarkedOhms(text)
	return ohms, err
}

// ParseMarkedOhms returns what ParseOhms does and the tolerance that follows it
// as a letter, nil where there is none.
func ParseMarkedOhms(text string) (float64, *Tolerance, error) {
	q, err := resistance.read(text)
	if err != nil {
		return 0, nil, err
	}
	if err := threeDigitResistor(text, q); err != nil {
		return 0, nil, err
	}
	// A prefix of kilo or more rules thousands out: the trade writes 4.7M.
	if q.pointAt >= 0 && q.prefix == 0 {
		return 0, nil, thousands(text, q, FormatOhms, CompactOhms)
	}
	ohms, err := resistance.value(text, q)
	if err != nil {
		return 0, nil, err
	}
	if ohms != 0 && ohms < smallestOhms {
		return 0, nil, errorAt(text, q.at, "a resistance of %s Ω is out of reason (%s); m is milli and M is mega, always", scientific(ohms), resistance.limits)
	}
	if q.rest == "" {
		return ohms, nil, nil
	}
	if !q.unit && q.prefix == 0 || len(q.rest) > 1 || !strings.Contains(toleranceLetters, q.rest) {
		return 0, nil, resistance.stray(text, q)
	}
	tolerance, err := letterTolerance(text, q.restAt, q.rest[0], ohms, "ohm")
	if err != nil {
		return 0, nil, err
	}
	return ohms, &tolerance, nil
}

// threeDigitResistor refuses three digits with a tolerance letter: 104J is
// 100 kΩ as a chip's code and 104 Ω as a number.
func threeDigitResistor(text string, q quantity) error {
	if !q.whole || q.prefix != 0 || q.unit || len(q.digits) != 3 || len(q.rest) != 1 || !strings.Contains(toleranceLetters, q.rest) {
		return nil
	}
	coded := decimal{digits: q.digits[:2], exponent: int(q.digits[2] - '0')}.float()
	plain := q.float()
	return errorAt(text, q.at, "%s%s could be %s (three-digit code) or %s (plain number), with a tolerance letter; write %s or %s",
		q.digits, q.rest, FormatOhms(coded), FormatOhms(plain), CompactOhms(coded), CompactOhms(plain))
}
