package optimize

import (
	"errors"
	"math"
	"math/big"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"tickdrawer/inventory/marking"
)

const (
	signs           = "±+-−"
	allowanceSample = "±3%, +2%-1% or a range such as 3.9s..4.1s"
)

// rangeMarks stand between two ends; an editor may make one character of two
// points.
var rangeMarks = []string{"..", "…"}

// piece is a stretch of a longer text.
type piece struct {
	whole   string
	at      int // offset in whole
	written string
}

// cut returns the piece of the text between two offsets without the white space
// around it.
func cut(text string, from, to int) piece {
	written := strings.TrimLeftFunc(text[from:to], unicode.IsSpace)
	return piece{text, to - len(written), strings.TrimRightFunc(written, unicode.IsSpace)}
}

func (p piece) percent() bool { return strings.Contains(p.written, "%") }

// errorf returns an error that points at the piece.
func (p piece) errorf(format string, args ...any) error {
	return marking.Errorf(p.whole, p.at, format, args...)
}

// within returns an error about the piece as one about the whole text.
func (p piece) within(err error) error {
	var e *marking.Error
	if errors.As(err, &e) {
		return e.Within(p.whole, p.at)
	}
	return err
}

// cutRange returns the two ends of a text that writes a range.
func cutRange(text string) (from, to piece, found bool) {
	for _, mark := range rangeMarks {
		if at := strings.Index(text, mark); at >= 0 {
			return cut(text, 0, at), cut(text, at+len(mark), len(text)), true
		}
	}
	return piece{}, piece{}, false
}

// term is one deviation of an allowance.
type term struct {
	piece
	below, above bool // the sides that it is for
}

// terms is a whole allowance: nothing, one term for both sides, or one for each.
type terms []term

// deviations returns how far the terms go below and above, by what of reads in
// one of them.
func (ts terms) deviations(of func(term) (float64, error)) (below, above float64, err error) {
	for _, t := range ts {
		x, err := of(t)
		if err != nil {
			return 0, 0, err
		}
		if math.IsInf(x, 0) {
			return 0, 0, t.errorf("this is out of reason")
		}
		if t.below {
			below = x
		}
		if t.above {
			above = x
		}
	}
	return below, above, nil
}

// cutAllowance returns what precedes the first sign that is not the number's own
// or its exponent's, and the terms from there on.
func cutAllowance(text string) (target piece, ts terms, err error) {
	at := nextSign(text, len(text)-len(strings.TrimLeftFunc(text, unicode.IsSpace)), true)
	target = cut(text, 0, at)
	for at < len(text) {
		var t term
		signAt := at
		for at < len(text) {
			c, size := utf8.DecodeRuneInString(text[at:])
			switch {
			case c == '±':
				t.below, t.above = true, true
			case c == '+':
				t.above = true
			case c == '-' || c == '−':
				t.below = true
			case c != '/' && !unicode.IsSpace(c):
				size = 0
			}
			if size == 0 {
				break
			}
			at += size
		}
		end := nextSign(text, at, false)
		t.piece = cut(text, at, end)
		if end < len(text) {
			t.written = strings.TrimRight(t.written, "/ ")
		}
		if t.written == "" {
			return target, nil, marking.Errorf(text, signAt, "no allowance follows the sign; write %s", allowanceSample)
		}
		ts = append(ts, t)
		at = end
	}
	return target, ts, ts.check()
}

// check refuses anything but one term for both sides or one for each.
func (ts terms) check() error {
	switch {
	case len(ts) == 0:
	case len(ts) == 1 && !(ts[0].below && ts[0].above):
		return ts[0].errorf("only one side of the allowance is written; write both as +2%%-1%%, one for both as ±3%%, or a range such as 3.9s..4.1s")
	case len(ts) > 2, len(ts) == 2 && (ts[0].above == ts[1].above || ts[0].below == ts[1].below):
		return ts[1].errorf("an allowance has one term for both sides or one for each; write %s", allowanceSample)
	}
	return nil
}

// nextSign returns the offset of the first sign of the text from an offset on,
// len(text) where there is none. The sign of an exponent (1E-3) does not count;
// neither does the very first character where it is the number's own sign.
func nextSign(text string, from int, skipOwn bool) int {
	for i, c := range text[from:] {
		at := from + i
		if !strings.ContainsRune(signs, c) || i == 0 && skipOwn && c != '±' {
			continue
		}
		exponent := at >= 2 && (text[at-1]|0x20) == 'e' && isDigit(text[at-2]) && at+1 < len(text) && isDigit(text[at+1])
		if !exponent {
			return at
		}
	}
	return len(text)
}

func isDigit(c byte) bool { return '0' <= c && c <= '9' }

// decimal returns the shortest decimal number that reads as x: what a person
// wrote, so that 0.7 less 1 % of it is 0.693 and not a neighbour.
func decimal(x float64) *big.Rat {
	r, _ := new(big.Rat).SetString(strconv.FormatFloat(x, 'g', -1, 64))
	return r
}

// decimalSum, decimalProduct and decimalMiddle compute with what was written and
// round once; +Inf where the result is too large.
func decimalSum(a, b float64) float64     { return rounded(rat().Add(decimal(a), decimal(b))) }
func decimalProduct(a, b float64) float64 { return rounded(rat().Mul(decimal(a), decimal(b))) }
func decimalMiddle(a, b float64) float64 {
	return rounded(rat().Mul(rat().Add(decimal(a), decimal(b)), big.NewRat(1, 2)))
}

func rounded(r *big.Rat) float64 {
	x, _ := r.Float64()
	return x
}
