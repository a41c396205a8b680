package marking

import (
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// decimal is a number as written: its digits times ten to the exponent. Prefixes
// and percent signs move the exponent, so that the one conversion to float64
// rounds once.
type decimal struct {
	digits   string // without a point; never empty
	exponent int
	written  string // as it stands in the text
	at       int    // offset of written in the text
	// pointAt is the offset in the text of the only separator where exactly
	// three digits follow it and one to three precede it: 4,700 or 4.700, which
	// may group thousands. -1 otherwise.
	pointAt    int
	whole      bool // neither a separator nor an exponent
	scientific bool // has an exponent: 4.7E+03
}

// largestExponent bounds a written exponent, far beyond any float64.
const largestExponent = 1_000_000

// float returns the float64 nearest to the decimal; 0 for a number too small
// and +Inf for one too large.
func (d decimal) float() float64 {
	x, err := strconv.ParseFloat(d.digits+"e"+strconv.Itoa(d.exponent), 64)
	if err != nil {
		return math.Inf(1)
	}
	return x
}

// scaled returns the decimal times ten to the power.
func (d decimal) scaled(power int) decimal {
	d.exponent += power
	return d
}

// zero reports whether the number as written is nought; a positive one that
// float64 cannot hold is not.
func (d decimal) zero() bool { return strings.Trim(d.digits, "0") == "" }

// reader walks through a text.
type reader struct {
	text string
	at   int
}

// next returns the character at the position, or 0 at the end.
func (r *reader) next() rune {
	c, size := utf8.DecodeRuneInString(r.text[r.at:])
	if size == 0 {
		return 0
	}
	return c
}

// digitAt reports whether an ASCII digit stands at the offset.
func (r *reader) digitAt(at int) bool {
	return at < len(r.text) && '0' <= r.text[at] && r.text[at] <= '9'
}

// space skips white space.
func (r *reader) space() {
	for r.at < len(r.text) {
		c, size := utf8.DecodeRuneInString(r.text[r.at:])
		if !unicode.IsSpace(c) {
			return
		}
		r.at += size
	}
}

// end reports whether nothing but white space is left.
func (r *reader) end() bool {
	r.space()
	return r.at == len(r.text)
}

// run returns the digits from the position on and steps over them.
func (r *reader) run() string {
	from := r.at
	for r.digitAt(r.at) {
		r.at++
	}
	return r.text[from:r.at]
}

// take steps over the word where the text goes on with it, in any case.
func (r *reader) take(word string) bool {
	// Case folding may change the length in bytes (K and the kelvin sign), so
	// only a stretch of the same length counts.
	if end := r.at + len(word); end <= len(r.text) && strings.EqualFold(r.text[r.at:end], word) {
		r.at = end
		return true
	}
	return false
}

func separator(c byte) bool { return c == '.' || c == ',' }

// number reads an unsigned number: digits with a decimal point or comma, with
// thousands grouped where that has one reading (1,234.5 or 1.000.000), with an
// exponent where its sign is written (4.7E+03). What is asked names the number
// in messages ("a resistance such as 4k7").
func (r *reader) number(asked string) (decimal, error) {
	start := r.at
	if !r.digitAt(r.at) && (r.at >= len(r.text) || !separator(r.text[r.at]) || !r.digitAt(r.at+1)) {
		return decimal{}, errorAt(r.text, r.at, "%s stands where a digit should; write %s", characterAt(r.text, r.at), asked)
	}
	groups := []string{r.run()}
	var separators []int // offsets
	for r.at < len(r.text) && separator(r.text[r.at]) && r.digitAt(r.at+1) {
		separators = append(separators, r.at)
		r.at++
		groups = append(groups, r.run())
	}
	d := decimal{at: start, pointAt: -1, whole: len(separators) == 0}
	fraction, err := r.fraction(groups, separators)
	if err != nil {
		return decimal{}, err
	}
	d.digits = strings.Join(groups, "")
	d.exponent = -fraction
	if len(separators) == 1 && len(groups[1]) == 3 && len(groups[0]) >= 1 && len(groups[0]) <= 3 && groups[0][0] != '0' {
		d.pointAt = separators[0]
	}
	if power, found := r.exponent(); found {
		d.exponent += power
		d.whole, d.scientific, d.pointAt = false, true, -1
	}
	d.written = r.text[start:r.at]
	return d, nil
}

// fraction returns how many digits follow the decimal point of groups of digits
// divided by separators. One separator is the point. Of more, the last is the
// point where it differs from the others, and what precedes it must be groups
// of three.
func (r *reader) fraction(groups []string, separators []int) (int, error) {
	if len(separators) == 0 {
		return 0, nil
	}
	last := len(separators) - 1
	digits := len(groups[last+1])
	if last == 0 {
		return digits, nil
	}
	grouping := r.text[separators[0]]
	thousands := groups[1:]
	if r.text[separators[last]] != grouping {
		thousands = groups[1 : last+1]
	} else {
		digits = 0
	}
	sound := len(groups[0]) >= 1 && len(groups[0]) <= 3
	for i, group := range thousands {
		if len(group) != 3 || r.text[separators[i]] != grouping {
			sound = false
		}
	}
	if !sound {
		return 0, errorAt(r.text, separators[1], "the number has %d points or commas; write it with one decimal point and nothing between thousands", last+1)
	}
	return digits, nil
}

// exponent reads E or e with a signed power of ten.
func (r *reader) exponent() (power int, found bool) {
	if r.at+2 >= len(r.text) || r.text[r.at]|0x20 != 'e' || (r.text[r.at+1] != '+' && r.text[r.at+1] != '-') || !r.digitAt(r.at+2) {
		return 0, false
	}
	negative := r.text[r.at+1] == '-'
	r.at += 2
	for _, c := range r.run() {
		power = min(power*10+int(c-'0'), largestExponent)
	}
	if negative {
		power = -power
	}
	return power, true
}
