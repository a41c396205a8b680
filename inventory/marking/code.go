package marking

import (
	"strings"
)

// code is three digits on a capacitor with what follows them.
type code struct {
	digits   string
	at       int
	letter   byte // tolerance letter in upper case, 0 where none
	letterAt int
}

// ParseCapacitorCode returns the capacitance of a capacitor's three-digit code,
// in farad, and the tolerance of the letter after it, nil where there is none:
// two digits and the number of zeros, in pF, so 104K is 100 nF ±10 %. A third
// digit of 9 divides by ten (from memory).
//
// The error is an *Error: not a code, or one of two readings. Three bare digits
// that are an E24 value in pF themselves have two (470: 47 pF or 470 pF), and so
// do the letters F, N and P (100N: 10 pF ±30 % or 100 nF).
func ParseCapacitorCode(text string) (float64, *Tolerance, error) {
	c, found := findCode(text)
	if !found {
		return 0, nil, errorAt(text, 0, "not a capacitor's code; it is three digits and perhaps a tolerance letter, such as 104 or 104K")
	}
	return c.farads(text)
}

// findCode finds three digits alone or before one letter that can be a
// tolerance. The lower-case letters that are prefixes are never tolerances.
func findCode(text string) (code, bool) {
	r := &reader{text: text}
	r.space()
	c := code{at: r.at}
	if c.digits = r.run(); len(c.digits) != 3 {
		return code{}, false
	}
	if r.end() {
		return c, true
	}
	letter := r.text[r.at]
	c.letterAt = r.at
	r.at++
	if !r.end() || strings.IndexByte("pnum", letter) >= 0 {
		return code{}, false
	}
	if 'a' <= letter && letter <= 'z' {
		letter -= 'a' - 'A'
	}
	if strings.IndexByte(toleranceLetters, letter) < 0 {
		return code{}, false
	}
	c.letter = letter
	return c, true
}

func (c code) farads(text string) (float64, *Tolerance, error) {
	zeros := int(c.digits[2] - '0')
	picofarads := decimal{digits: c.digits[:2], exponent: zeros - 12}
	switch {
	case c.digits[0] == '0':
		return 0, nil, errorAt(text, c.at, "a capacitor's code does not begin with 0; write the value with its unit, such as 47p")
	case zeros == 8:
		return 0, nil, errorAt(text, c.at+2, "a last digit of 8 has no settled meaning in a capacitor's code; write the value with its unit, such as 0.1p")
	case zeros == 9:
		picofarads.exponent = -1 - 12
	}
	farads := picofarads.float()
	if power, found := alsoUnits[c.letter]; found {
		return 0, nil, c.ambiguous(text, farads, power)
	}
	if c.letter != 0 {
		tolerance, err := letterTolerance(text, c.letterAt, c.letter, farads, "f")
		if err != nil {
			return 0, nil, err
		}
		return farads, &tolerance, nil
	}
	if zeros == 0 && preferredDigits(c.digits) {
		plain := decimal{digits: c.digits, exponent: -12}.float()
		return 0, nil, errorAt(text, c.at, "%s could be %s (three-digit code) or %s (plain number); write %s or %s",
			c.digits, FormatFarads(farads), FormatFarads(plain), CompactFarads(farads), CompactFarads(plain))
	}
	return farads, nil, nil
}

// alsoUnits holds the tolerance letters that are a unit or a prefix as well, with
// the power of ten that they then stand for.
var alsoUnits = map[byte]int{'F': 0, 'N': -9, 'P': -12}

// ambiguous returns the error about a letter that is a tolerance after a code
// and a power of ten after a number.
func (c code) ambiguous(text string, farads float64, power int) error {
	plain := decimal{digits: c.digits, exponent: power}.float()
	return errorAt(text, c.letterAt, "%s%c could be %s with the tolerance letter %c (three-digit code) or %s (plain number); write %s and the tolerance apart, or %s",
		c.digits, c.letter, FormatFarads(farads), c.letter, FormatFarads(plain), CompactFarads(farads), CompactFarads(plain))
}
