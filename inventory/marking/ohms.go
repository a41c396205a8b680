package marking

import "strings"

var resistance = family{
	noun: "a resistance", sample: "4k7, 4.7k or 4R7", symbol: "Ω",
	// U+03A9 and U+2126 look the same.
	units:    []string{"Ω", "\u2126", "ohms", "ohm", "R"},
	prefixes: "mLkKMGT",
	points:   "RrΩ\u2126",
	nought:   true, // a link
	min:      1e-6, max: 1e12, limits: "1 µΩ to 1 TΩ",
}

// ParseOhms returns the resistance that the text writes, in ohm: a number with
// a prefix (4.7k, 4,7 kΩ, 4700), or with the prefix or R as its decimal point
// (4k7, R47; IEC 60062, codes R K M G T and, from memory, L for milliohm). m is
// milli and M mega, always. 0 is a link. A tolerance letter after the prefix
// (4K7J) is read over; ParseMarkedOhms returns it.
//
// The error is an *Error: not a resistance, below 1e-6 (but for 0) or above
// 1e12 ohm, or of two readings (4,700 or 4.700).
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
	if q.pointAt >= 0 && mayGroupOhms(text, q) {
		return 0, nil, thousands(text, q.decimal, FormatOhms, CompactOhms)
	}
	return resistance.marked(text, q, "ohm")
}

// mayGroupOhms reports whether the separator at q.pointAt may group thousands. A
// prefix rules that out: the trade writes 4.7M, not 4,700k. So does 4.682 Ω, as
// meters and this package print it: no resistor is marked with four digits.
func mayGroupOhms(text string, q quantity) bool {
	return q.prefix == 0 && !(q.unit && text[q.pointAt] == '.' && !strings.HasSuffix(q.digits, "0"))
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
