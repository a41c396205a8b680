package importers

import (
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

// maxUnitCost bounds the cost of a piece so that MaxPieces of it can be summed
// exactly.
const maxUnitCost = 100_000

// number is an unsigned decimal as written, without what groups its digits.
type number struct{ whole, fraction string }

// numberOf returns the number that the text writes: digits with a decimal point
// or comma, thousands grouped by spaces, apostrophes, commas or points. The
// errors are a text that is no number, and a separator before exactly three
// digits, which has two readings.
func numberOf(text string) (number, error) {
	var groups []string
	var separators []rune
	from := 0
	for at, r := range text {
		switch {
		case '0' <= r && r <= '9':
			continue
		case r == '.' || r == ',' || r == '\'':
		case r == '’':
			r = '\''
		case unicode.IsSpace(r): // among them the no-break and narrow spaces
			r = ' '
		default:
			return number{}, errNotNumber
		}
		groups = append(groups, text[from:at])
		separators = append(separators, r)
		_, size := utf8.DecodeRuneInString(text[at:])
		from = at + size
	}
	return grouped(append(groups, text[from:]), separators)
}

// errNotNumber is what numberOf fails with where no number is written.
var errNotNumber = errors.New("not a number")

// numberAsked returns what numberOf does; where no number is written, the error
// says what is asked for.
func numberAsked(text, asked string) (number, error) {
	n, err := numberOf(text)
	if err == errNotNumber {
		err = errors.New("not " + asked)
	}
	return n, err
}

// grouped returns the number whose digits are the groups.
func grouped(groups []string, separators []rune) (number, error) {
	n := len(separators)
	fraction := ""
	if n > 0 {
		last := separators[n-1]
		if (last == '.' || last == ',') && !slices.Contains(separators[:n-1], last) {
			if n == 1 && len(groups[1]) == 3 && len(groups[0]) >= 1 && len(groups[0]) <= 3 && groups[0][0] != '0' {
				return number{}, twoReadings(groups[0], groups[1])
			}
			fraction = groups[n]
			groups = groups[:n]
			if fraction == "" {
				return number{}, errNotNumber
			}
			if groups[0] == "" && n == 1 {
				groups[0] = "0"
			}
		}
	}
	for i, group := range groups {
		switch {
		case i == 0 && (group == "" || len(groups) > 1 && len(group) > 3),
			i > 0 && len(group) != 3,
			i > 1 && separators[i-1] != separators[0]:
			return number{}, errNotNumber
		}
	}
	return number{whole: strings.Join(groups, ""), fraction: fraction}, nil
}

// twoReadings returns the error of a separator that may be a decimal point or
// may group thousands.
func twoReadings(whole, fraction string) error {
	small := whole
	sure := whole
	if digits := strings.TrimRight(fraction, "0"); digits != "" {
		small += "." + digits
		sure += "." + fraction + "0"
	}
	large := whole + fraction
	return fmt.Errorf("could be %s or %s: write %s or %s", small, large, sure, large)
}

// countOf returns the pieces that the cell states: "100", "100 pcs", "1 000".
// Receipts are of 1 to MaxPieces; a stocktake may find none.
func countOf(cell string, stocktake bool) (int64, error) {
	text := strings.TrimSpace(cell)
	if rest, negative := cutMinus(text); negative {
		if rest != "" && '0' <= rest[0] && rest[0] <= '9' {
			return 0, errors.New("a quantity is never negative: import books what came in; a stocktake states what is there")
		}
	}
	digits := text
	if at := strings.LastIndexAny(text, "0123456789"); at >= 0 {
		word := strings.TrimSuffix(strings.TrimSpace(text[at+1:]), ".")
		if pieceWord[fold(word)] && strings.IndexFunc(word, notLetter) < 0 {
			digits = text[:at+1]
		}
	}
	n, err := numberAsked(digits, "a whole number of pieces: write it in digits, such as 100")
	if err != nil {
		return 0, err
	}
	whole := strings.TrimLeft(n.whole, "0")
	switch {
	case strings.Trim(n.fraction, "0") != "":
		return 0, errors.New("pieces are whole: write a number without a fraction")
	case len(whole) > len("10000000"):
		return 0, tooMany()
	case whole == "" && !stocktake:
		return 0, errors.New("nothing came in: leave the row out, or import the file as a stocktake")
	case whole == "":
		return 0, nil
	}
	count, err := strconv.ParseInt(whole, 10, 64)
	if err != nil || count > MaxPieces {
		return 0, tooMany()
	}
	return count, nil
}

func tooMany() error {
	return fmt.Errorf("more than %d pieces in one bin is out of reason: check the number", MaxPieces)
}

// costOf returns the cost of a piece, exact to a millionth, and its currency as
// written. A decimal comma is read.
func costOf(cell string) (inventory.Micros, string, error) {
	text := strings.TrimSpace(cell)
	if _, negative := cutMinus(text); negative {
		return 0, "", errors.New("a cost is never negative")
	}
	currency, amount := cutCurrency(text)
	n, err := numberAsked(amount, "an amount of money: write the cost of one piece, such as 0.012")
	if err != nil {
		return 0, "", err
	}
	fraction := strings.TrimRight(n.fraction, "0")
	if len(fraction) > 6 {
		return 0, "", errors.New("costs are kept to a millionth: write at most 6 digits after the point")
	}
	whole, err := strconv.ParseInt(n.whole, 10, 64)
	if err != nil || whole > maxUnitCost || whole == maxUnitCost && fraction != "" {
		return 0, "", fmt.Errorf("more than %d for one piece is out of reason: write the cost of one piece", maxUnitCost)
	}
	millionths, err := strconv.ParseInt((fraction + "000000")[:6], 10, 64)
	if err != nil {
		return 0, "", err
	}
	return inventory.Micros(whole*1_000_000 + millionths), currency, nil
}

// cutCurrency returns the currency that stands before or after an amount, and
// the amount. The currency is the first name of those that mean the same. Fr.5
// is left as it is: it is 5 and 0.5.
func cutCurrency(text string) (currency, amount string) {
	for _, names := range currencies {
		for _, name := range names {
			if rest, found := cutFold(text, name); found && !unicode.IsLetter(firstRune(rest)) {
				if unicode.IsLetter(firstRune(name)) && strings.HasPrefix(rest, ".") {
					if rest = rest[1:]; !unicode.IsSpace(firstRune(rest)) {
						continue
					}
				}
				return names[0], strings.TrimSpace(rest)
			}
			bare := text
			if unicode.IsLetter(firstRune(name)) {
				bare = strings.TrimSuffix(text, ".")
			}
			if at := len(bare) - len(name); at >= 0 && strings.EqualFold(bare[at:], name) {
				if last, _ := utf8.DecodeLastRuneInString(bare[:at]); !unicode.IsLetter(last) {
					return names[0], strings.TrimSpace(bare[:at])
				}
			}
		}
	}
	return "", text
}

// cutFold returns the text after the prefix, in any case, and whether it begins
// with it.
func cutFold(text, prefix string) (string, bool) {
	if len(text) < len(prefix) || !strings.EqualFold(text[:len(prefix)], prefix) {
		return text, false
	}
	return text[len(prefix):], true
}

func firstRune(text string) rune {
	r, _ := utf8.DecodeRuneInString(text)
	return r
}

// tempcoOf returns the temperature coefficient in ppm/°C: "100", "±100 ppm",
// "-750 ppm/K". Of a range about nought, "0±30", it is the half width.
func tempcoOf(cell string) (float64, error) {
	text := strings.TrimSpace(cell)
	for _, ppm := range []string{"ppm", "PPM", "Ppm"} {
		before, after, found := strings.Cut(text, ppm)
		if !found {
			continue
		}
		switch fold(after) {
		case "", "k", "c", "perk", "perc", "degc", "perdegc":
			text = strings.TrimSpace(before)
		}
		break
	}
	if rest := strings.TrimLeft(text, "0 "); len(rest) < len(text) && strings.HasPrefix(rest, "±") {
		text = rest
	}
	negative := false
	for _, sign := range []string{"±", "+/-", "+-", "+", "-", "−"} {
		if rest, found := strings.CutPrefix(text, sign); found {
			negative = sign == "-" || sign == "−"
			text = strings.TrimSpace(rest)
			break
		}
	}
	n, err := numberAsked(text, "a temperature coefficient: write it in ppm/K, such as 100")
	if err != nil {
		return 0, err
	}
	ppm, err := strconv.ParseFloat(n.whole+"."+n.fraction, 64)
	switch {
	case err != nil || ppm > 1e6:
		return 0, errors.New("a temperature coefficient of more than 1000000 ppm/K is out of reason")
	case negative && ppm != 0:
		ppm = -ppm
	}
	return ppm, nil
}

// positive returns the quantity in the unit ("V", "W", "A", "ohm", "" for a
// plain number), which must be above 0.
func positive(cell, unit string) (float64, error) {
	var x float64
	var err error
	if unit == "ohm" {
		x, err = marking.ParseOhms(cell)
	} else {
		if strings.ContainsAny(cell, "½¼⅛⅙⅓") {
			cell = quarters.Replace(cell)
		}
		x, err = marking.ParseMagnitude(cell, unit)
	}
	if err == nil && !(x > 0) {
		err = errors.New("must be above 0: leave the cell empty where nothing is stated")
	}
	return x, err
}

// quarters writes out the fractions that are one character.
var quarters = strings.NewReplacer("½", "1/2", "¼", "1/4", "⅛", "1/8", "⅙", "1/6", "⅓", "1/3")

// cutMinus returns the text after a leading minus, and whether there is one.
func cutMinus(text string) (string, bool) {
	for _, minus := range []string{"-", "−", "–"} {
		if rest, found := strings.CutPrefix(text, minus); found {
			return strings.TrimSpace(rest), true
		}
	}
	return text, false
}

func notLetter(r rune) bool { return !unicode.IsLetter(r) }

// pieceWord holds pieceWords folded.
var pieceWord = func() map[string]bool {
	words := map[string]bool{}
	for _, word := range pieceWords {
		words[fold(word)] = true
	}
	return words
}()
