package marking

import (
	"math"
	"slices"
	"strings"
)

// family is a physical quantity as people write it.
type family struct {
	noun     string // "a resistance"
	sample   string // how to write one, for messages
	symbol   string // SI symbol, for messages
	units    []string
	prefixes string // accepted prefixes, a subset of those in powers
	points   string // unit letters that may stand as the decimal point
	signed   bool   // may be negative
	nought   bool   // may be 0
	power    int    // of ten that the unit stands for
	min, max float64
	limits   string // min and max for people
}

// powers maps each prefix to its power of ten. The micro sign (U+00B5), the
// Greek mu (U+03BC) and u are one; m is milli and M mega, always. L is milliohm
// in IEC 60062, from memory.
var powers = map[rune]int{
	'p': -12, 'P': -12, 'n': -9, 'N': -9, 'u': -6, 'U': -6, 'µ': -6, 'μ': -6,
	'm': -3, 'L': -3, 'k': 3, 'K': 3, 'M': 6, 'G': 9, 'T': 12,
}

// quantity is a text taken apart: a number with its prefix folded in, and what
// was written around it.
type quantity struct {
	decimal
	prefix rune // 0 where none
	point  rune // the letter that stands as the decimal point, 0 where none
	unit   bool // the unit is written
	signed bool // a minus precedes the number
	rest   string
	restAt int // offset of rest in the text
}

// read takes the text apart: number, prefix, unit, in that order, with white
// space between them, or a letter as the decimal point. What follows is left in
// rest.
func (f *family) read(text string) (quantity, error) {
	if err := checkLength(text); err != nil {
		return quantity{}, err
	}
	r := &reader{text: text}
	if r.end() {
		return quantity{}, errorAt(text, r.at, "nothing is written; write %s such as %s", f.noun, f.sample)
	}
	var q quantity
	if c := r.next(); c == '-' || c == '−' {
		if !f.signed {
			return q, errorAt(text, r.at, "%s is never negative", f.noun)
		}
		q.signed = true
		r.at += len(string(c))
		r.space()
	}
	if err := f.readNumber(r, &q); err != nil {
		return q, err
	}
	if q.point == 0 {
		r.space()
		if c := r.next(); c != 0 && strings.ContainsRune(f.prefixes, c) {
			q.prefix = c
			q.decimal = q.scaled(powers[c])
			r.at += len(string(c))
		}
	}
	r.space()
	q.unit = slices.ContainsFunc(f.units, r.take) || f.isUnit(q.point)
	r.space()
	q.decimal = q.scaled(f.power)
	q.rest, q.restAt = strings.TrimSpace(text[r.at:]), r.at
	return q, nil
}

func (f *family) isUnit(c rune) bool { return c != 0 && strings.ContainsRune(f.points, c) }

// readNumber reads 4.7, 4k7 or k47 into q.
func (f *family) readNumber(r *reader, q *quantity) error {
	isPoint := func() bool {
		c := r.next()
		return c != 0 && (strings.ContainsRune(f.prefixes, c) || f.isUnit(c)) && r.digitAt(r.at+len(string(c)))
	}
	start := r.at
	if isPoint() {
		q.decimal = decimal{at: start, pointAt: -1, whole: true}
	} else {
		var err error
		if q.decimal, err = r.number(f.noun + " such as " + f.sample); err != nil {
			return err
		}
	}
	if q.whole && isPoint() {
		c := r.next()
		q.point = c
		if !f.isUnit(c) {
			q.prefix = c
		}
		r.at += len(string(c))
		fraction := r.run()
		q.digits += fraction
		q.exponent += powers[c] - len(fraction)
		q.whole = false
		q.written = r.text[start:r.at]
	}
	return nil
}

// stray returns the error about what follows the quantity.
func (f *family) stray(text string, q quantity) error {
	c := characterAt(text, q.restAt)
	switch {
	case q.whole && (q.rest[0]|0x20) == 'e':
		return errorAt(text, q.restAt, "%s after a number has several readings; write the prefix (%s), or an exponent with its sign (1E+3)", c, f.sample)
	case q.prefix == 0 && !q.unit:
		return errorAt(text, q.restAt, "%s is no prefix or unit of %s; write it as %s", c, f.noun, f.sample)
	}
	return errorAt(text, q.restAt, "%s does not belong after %s; write it as %s", c, f.noun, f.sample)
}

// value returns the quantity as a float64 within the family's limits.
func (f *family) value(text string, q quantity) (float64, error) {
	x := q.float()
	switch {
	case q.zero() && !f.nought:
		return 0, errorAt(text, q.at, "%s of 0 %s is not possible", f.noun, f.symbol)
	case q.zero():
		return 0, nil
	case math.IsInf(x, 0) || x > f.max || x < f.min || x == 0:
		return 0, errorAt(text, q.at, "%s of %s %s is out of reason (%s); m is milli and M is mega, always", f.noun, scientific(x), f.symbol, f.limits)
	}
	if q.signed {
		x = -x
	}
	return x, nil
}

// marked returns the value of the quantity, and the tolerance where its letter is
// all that follows a prefix or a unit.
func (f *family) marked(text string, q quantity, unit string) (float64, *Tolerance, error) {
	lettered := len(q.rest) == 1 && strings.Contains(toleranceLetters, q.rest) && (q.unit || q.prefix != 0)
	if q.rest != "" && !lettered {
		return 0, nil, f.stray(text, q)
	}
	x, err := f.value(text, q)
	if err != nil || !lettered {
		return x, nil, err
	}
	tolerance, err := letterTolerance(text, q.restAt, q.rest[0], x, unit)
	if err != nil {
		return 0, nil, err
	}
	return x, &tolerance, nil
}

// thousands returns the error about a separator that may be a decimal point or
// may group thousands, both readings as format shows them and as compact writes
// them.
func thousands(text string, d decimal, format, compact func(float64) string) error {
	name := "comma"
	if text[d.pointAt] == '.' {
		name = "point"
	}
	small, large := d.float(), d.scaled(3).float()
	return errorAt(text, d.pointAt, "%s could be %s (decimal %s) or %s (%s between thousands); write %s or %s",
		d.written, format(small), name, format(large), name, compact(small), compact(large))
}
