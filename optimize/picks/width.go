package picks

import (
	"math"
	"strings"
	"unicode"

	"golang.org/x/text/width"
)

// A width is in characters: the widest digit of the workbook's font, as
// spreadsheets count the width of a column.

// textWidth returns the width of the longest line of the text. The shares are
// those of a common sans serif; they err on the wide side, since a column that
// is too narrow cuts text off.
func textWidth(text string) float64 {
	widest := 0.0
	for paragraph := range strings.SplitSeq(text, "\n") {
		w := 0.0
		for _, r := range paragraph {
			w += runeWidth(r)
		}
		widest = max(widest, w)
	}
	return widest
}

func runeWidth(r rune) float64 {
	switch {
	case unicode.Is(unicode.Mn, r) || unicode.IsControl(r):
		return 0
	case strings.ContainsRune("ijl.,:;'|!()[] I", r):
		return 0.6
	case strings.ContainsRune("ftr-/\"°", r):
		return 0.75
	case strings.ContainsRune("mwMWΩ%@", r):
		return 1.65
	case unicode.IsUpper(r) || strings.ContainsRune("±−+=<>∥", r):
		return 1.3
	}
	if kind := width.LookupRune(r).Kind(); kind == width.EastAsianWide || kind == width.EastAsianFullwidth {
		return 2
	}
	return 1.05
}

// lineCount returns how many lines the text takes in the width: words stay
// whole unless one is longer than a line.
func lineCount(text string, width float64) int {
	if width <= 0 {
		return 1
	}
	count := 0
	for paragraph := range strings.SplitSeq(text, "\n") {
		count++
		used := 0.0
		for word := range strings.FieldsSeq(paragraph) {
			w := textWidth(word)
			if used > 0 && used+runeWidth(' ')+w <= width {
				used += runeWidth(' ') + w
				continue
			}
			if used > 0 {
				count++
			}
			extra := max(0, int(math.Ceil(w/width))-1)
			count += extra
			used = w - float64(extra)*width
		}
	}
	return count
}
