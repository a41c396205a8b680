package marking

import (
	"math"
	"slices"
	"strings"
)

// Tolerance is how far a part's value may be from its nominal one, as fractions
// of it: ±5 % is {0.05, 0.05}, −20/+80 % is {0.20, 0.80}. Both are ≥ 0 and
// Minus < 1.
type Tolerance struct{ Minus, Plus float64 }

// letters holds the tolerance letters of IEC 60062, in percent. B C D F G J K M
// N, T and Z are as makers' charts print them; E L W, H, Q and S are from
// memory. P is missing: charts disagree on it.
var letters = map[byte]struct{ minus, plus string }{
	'E': {"0.005", "0.005"}, 'L': {"0.01", "0.01"}, 'W': {"0.05", "0.05"}, // from memory
	'B': {"0.1", "0.1"}, 'C': {"0.25", "0.25"}, 'D': {"0.5", "0.5"}, 'F': {"1", "1"}, 'G': {"2", "2"},
	'J': {"5", "5"}, 'K': {"10", "10"}, 'M': {"20", "20"}, 'N': {"30", "30"},
	'H': {"3", "3"},                      // from memory
	'Q': {"10", "30"}, 'S': {"20", "50"}, // from memory
	'T': {"10", "50"}, 'Z': {"20", "80"},
}

// picofarads holds the letters that are absolute below 10 pF. F is from memory.
var picofarads = map[byte]string{'B': "0.1", 'C': "0.25", 'D': "0.5", 'F': "1"}

// toleranceLetters is every letter that some chart gives a meaning.
const toleranceLetters = "BCDEFGHJKLMNPQSTWZ"

// Limits of what can be meant by a tolerance.
const (
	tenPicofarads = 10e-12
	largestPlus   = 3 // +300 %
	// Up to here a bare number may be a fraction: 0.3 is 30 % (letter N). 0.25 is
	// not: no tolerance is 25 %, while 0.25 % has a letter.
	largestUnclear = 0.3
)

// ParseTolerance returns the tolerance that the text writes for a part of the
// value in the unit ("ohm" or "f"; "" where it has none): a percentage ("5%",
// "±5 %", "+/-5%", "5"), two ("+80-20%", "−20/+80 %"), an absolute deviation
// ("±0.25pF"), or a letter of IEC 60062 ("J"; below 10 pF B, C, D and F are
// absolute).
//
// The error is an *Error: not a tolerance, nothing or all of the value, or of
// two readings: a bare number up to 0.3 may be a percentage or a fraction, and
// charts disagree on the letter P.
func ParseTolerance(text string, value float64, unit string) (Tolerance, error) {
	if err := checkLength(text); err != nil {
		return Tolerance{}, err
	}
	r := &reader{text: text}
	if r.end() {
		return Tolerance{}, errorAt(text, r.at, "nothing is written; write a tolerance such as 5%% or J")
	}
	if word := strings.TrimSpace(text); len(word) == 1 && strings.Contains(toleranceLetters, strings.ToUpper(word)) {
		return letterTolerance(text, r.at, strings.ToUpper(word)[0], value, unit)
	}
	t, err := deviations(r, value, unit)
	if err != nil {
		return Tolerance{}, err
	}
	switch {
	case t.Minus >= 1:
		return Tolerance{}, errorAt(text, 0, "a tolerance of %s downwards leaves nothing of the value", FormatPercent(t.Minus))
	case t.Plus > largestPlus:
		return Tolerance{}, errorAt(text, 0, "a tolerance of %s upwards is out of reason (at most +300 %%)", FormatPercent(t.Plus))
	case t.Minus == 0 && t.Plus == 0:
		return Tolerance{}, errorAt(text, 0, "no part has a tolerance of 0 %%; leave it empty where none is stated")
	}
	return t, nil
}

// FormatTolerance returns the tolerance for people: "±5 %", "−20/+80 %".
func FormatTolerance(t Tolerance) string {
	if t.Minus == t.Plus {
		return "±" + FormatPercent(t.Plus)
	}
	minus, _ := strings.CutSuffix(FormatPercent(t.Minus), " %")
	return "−" + minus + "/+" + FormatPercent(t.Plus)
}

// letterTolerance returns the tolerance of the letter at the offset.
func letterTolerance(text string, at int, letter byte, value float64, unit string) (Tolerance, error) {
	if unit == "f" && value < tenPicofarads {
		if deviation, found := picofarads[letter]; found {
			fraction := decimalOf(deviation).scaled(-12).float() / value
			if fraction >= 1 {
				return Tolerance{}, errorAt(text, at, "%c is ±%s pF below 10 pF, which is all of %s; write the tolerance in percent", letter, deviation, FormatFarads(value))
			}
			return Tolerance{fraction, fraction}, nil
		}
		if letter == 'G' {
			return Tolerance{}, errorAt(text, at, "G is ±2 %%, or ±2 pF on some charts for values below 10 pF; write ±2%% or ±2pF")
		}
	}
	if letter == 'P' {
		return Tolerance{}, errorAt(text, at, "P is ±0.02 %% on some charts and −0/+100 %% on others; write ±0.02%% or +100-0%%")
	}
	t := letters[letter]
	return Tolerance{decimalOf(t.minus).scaled(-2).float(), decimalOf(t.plus).scaled(-2).float()}, nil
}

// decimalOf returns a constant of this package as a decimal.
func decimalOf(written string) decimal {
	d, err := (&reader{text: written}).number("")
	if err != nil {
		panic(err)
	}
	return d
}

// deviations reads one deviation for both sides, or one with + and one with −
// in either order.
func deviations(r *reader, value float64, unit string) (Tolerance, error) {
	text := r.text
	firstAt := r.at
	sign := r.sign()
	first, err := readDeviation(r, unit)
	if err != nil {
		return Tolerance{}, err
	}
	if sign == both || sign == none {
		if !r.end() {
			return Tolerance{}, errorAt(text, r.at, "%s does not belong after a tolerance; write it as ±5%%, +80-20%% or J", characterAt(text, r.at))
		}
		fraction, err := first.fraction(text, value)
		return Tolerance{fraction, fraction}, err
	}
	r.space()
	if r.take("/") || r.take("...") || r.take("..") {
		r.space()
	}
	secondAt := r.at
	other := r.sign()
	if other != minus && other != plus || other == sign {
		return Tolerance{}, errorAt(text, secondAt, "only one side of the tolerance is written; write both as +80-20%%, or one for both as ±5%%")
	}
	second, err := readDeviation(r, unit)
	switch {
	case err != nil:
		return Tolerance{}, err
	case !r.end():
		return Tolerance{}, errorAt(text, r.at, "%s does not belong after a tolerance; write it as +80-20%%", characterAt(text, r.at))
	case first.in == bare && second.in == percent:
		first.in = percent // +80-20%
	case first.in != second.in:
		return Tolerance{}, errorAt(text, firstAt, "the two sides of the tolerance are in different units; write both in percent as +80-20%%")
	}
	a, err := first.fraction(text, value)
	if err != nil {
		return Tolerance{}, err
	}
	b, err := second.fraction(text, value)
	if err != nil {
		return Tolerance{}, err
	}
	if sign == minus {
		return Tolerance{Minus: a, Plus: b}, nil
	}
	return Tolerance{Minus: b, Plus: a}, nil
}

// side is what a sign before a deviation says about its direction.
type side int

const (
	none side = iota
	plus
	minus
	both
)

// sign reads ±, +-, +/-, -+, + or − and the white space after it.
func (r *reader) sign() side {
	defer r.space()
	for _, s := range []struct {
		written string
		side    side
	}{{"±", both}, {"+/-", both}, {"+/−", both}, {"-/+", both}, {"+-", both}, {"+−", both}, {"-+", both}, {"+", plus}, {"-", minus}, {"−", minus}} {
		if r.take(s.written) {
			return s.side
		}
	}
	return none
}

// scale is what a deviation is written in.
type scale int

const (
	bare scale = iota
	percent
	absolute // in the value's unit
)

// deviation is one written side of a tolerance.
type deviation struct {
	decimal
	in scale
}

// readDeviation reads a number with % or the unit.
func readDeviation(r *reader, unit string) (deviation, error) {
	number, err := r.number("a tolerance such as 5%, ±0.25pF or J")
	if err != nil {
		return deviation{}, err
	}
	r.space()
	if r.take("%") {
		return deviation{number, percent}, nil
	}
	f := map[string]*family{"ohm": &resistance, "f": &capacitance}[unit]
	if f == nil {
		return deviation{number, bare}, nil
	}
	prefixAt := r.at
	prefix := r.next()
	if prefix != 0 && strings.ContainsRune(f.prefixes, prefix) {
		number = number.scaled(powers[prefix])
		r.at += len(string(prefix))
		r.space()
	} else {
		prefix = 0
	}
	switch {
	case slices.ContainsFunc(f.units, r.take):
		return deviation{number, absolute}, nil
	case prefix != 0:
		return deviation{}, errorAt(r.text, prefixAt, "%s after a tolerance needs a unit; write it in percent as 5%%, or with its unit as ±0.25pF", characterAt(r.text, prefixAt))
	}
	return deviation{number, bare}, nil
}

// fraction returns the deviation as a fraction of the value.
func (d deviation) fraction(text string, value float64) (float64, error) {
	x := d.float()
	switch {
	case math.IsInf(x, 0):
		return 0, errorAt(text, d.at, "a tolerance of more than 1e308 is out of reason")
	case d.in == absolute && value == 0:
		return 0, errorAt(text, d.at, "an absolute tolerance needs a value other than 0; write it in percent")
	case d.in == absolute:
		return x / value, nil
	case d.in == bare && x > 0 && x <= largestUnclear && x != 0.25:
		return 0, errorAt(text, d.at, "%s could be %s or, as a fraction, %s; write the percent sign", d.written, FormatPercent(x/100), FormatPercent(x))
	}
	return d.scaled(-2).float(), nil
}
