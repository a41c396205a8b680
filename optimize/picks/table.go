package picks

import (
	"cmp"
	"math"
	"regexp"
	"strings"
	"unicode"
	"unicode/utf16"
	"unicode/utf8"
)

// cell is what one cell of a table holds: a figure where there is one, a
// formula, or a text.
type cell struct {
	text    string
	figure  *figure
	formula string
	typed   string // number format of what is typed into an empty cell
	bold    bool
	closing bool // in the last row of a group
}

// printable returns the text with U+FFFD for what XML cannot hold.
func printable(text string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsControl(r) && !strings.ContainsRune("\t\r\n", r) || r == 0xFFFE || r == 0xFFFF {
			return utf8.RuneError
		}
		return r
	}, strings.ToValidUTF8(text, "\uFFFD"))
}

// escaped returns the text with each _ that begins what readers of the format
// take for an escaped character (_x000D_; ECMA-376 part 1, 22.9.2.19) escaped
// itself. excelize 2.11.1 leaves shared strings as they are.
func escaped(text string) string {
	var out strings.Builder
	for i := range len(text) {
		if text[i] == '_' && escapeShape.MatchString(text[i:]) {
			out.WriteString("_x005F_")
		} else {
			out.WriteByte(text[i])
		}
	}
	return out.String()
}

// What a cell holds, in UTF-16 units, and what ends a text that was longer.
const (
	mostCellText = 32767
	cutShort     = "… (cut: longer than a cell holds)"
)

// cellText returns the text as a cell stores it: escaped, and where it is longer
// than a cell holds, cut where a reader sees it.
func cellText(text string) string {
	stored := escaped(text)
	if len(stored) <= mostCellText || len(utf16.Encode([]rune(stored))) <= mostCellText {
		return stored
	}
	left := mostCellText - len(utf16.Encode([]rune(cutShort)))
	for at, r := range stored {
		if left -= utf16.RuneLen(r); left < 0 {
			return stored[:at] + cutShort
		}
	}
	return stored
}

var escapeShape = regexp.MustCompile(`^_x[0-9A-Fa-f]{4}_`)

// count returns a cell with a whole number of pieces.
func count(n int64) cell { return cell{figure: &figure{number: float64(n)}} }

// number returns a cell with the figure, or with words where it has no number.
func number(f figure) cell { return cell{figure: &f} }

// shown returns what the cell shows, for measuring.
func (c cell) shown() string {
	switch f := c.figure; {
	case f == nil:
		return printable(c.text)
	case f.finite():
		return f.text()
	}
	return unending
}

// unending stands for a figure that is no number. Where it does, unendingNote
// says why.
const (
	unending     = "–"
	unendingNote = unending + " stands where there is no figure: at that end of the worst case the output may never switch."
)

// column is a column of a table.
type column struct {
	heading string
	align   string  // of heading and cells
	box     bool    // cells are filled in by hand
	span    int     // columns of the sheet; 0: 1
	most    float64 // width that the text may ask for; 0: no limit
	least   float64 // width in any case
}

func (c column) spans() int { return cmp.Or(c.span, 1) }

// fitted returns the widths that the columns need for their headings' words and
// their cells.
func fitted(columns []column, rows [][]cell) []float64 {
	widths := make([]float64, len(columns))
	for i, c := range columns {
		for word := range strings.FieldsSeq(c.heading) {
			widths[i] = max(widths[i], boldness*textWidth(word))
		}
		for _, row := range rows {
			w := textWidth(row[i].shown())
			if row[i].bold {
				w *= boldness
			}
			if c.most > 0 {
				w = min(w, c.most)
			}
			widths[i] = max(widths[i], w)
		}
		widths[i] = max(c.least, widths[i]+cellMargin)
	}
	return widths
}

// Widths of a sheet: as wide as a page takes at full size, unless that would
// stretch it more than looks well.
const (
	fullWidth   = 130
	mostStretch = 1.4
)

// stretched returns the widths as wide as a page.
func stretched(widths []float64) []float64 {
	sum := 0.0
	for _, w := range widths {
		sum += w
	}
	factor := min(mostStretch, max(1, fullWidth/sum))
	wide := make([]float64, len(widths))
	for i, w := range widths {
		wide[i] = math.Round(factor*w*100) / 100
	}
	return wide
}

// table writes the headings and the rows, the first of whose columns is at the
// sheet's column from. It returns the row of the headings.
func (p *page) table(from int, columns []column, rows [][]cell) (headingRow int) {
	heads := make([]cell, len(columns))
	for i, c := range columns {
		heads[i] = cell{text: c.heading}
	}
	headingRow = p.row + 1
	p.tableRow(from, columns, heads, func(column) look { return look{bold: true, shaded: true, frame: headed} })
	for _, row := range rows {
		p.tableRow(from, columns, row, func(c column) look {
			if c.box {
				return look{frame: boxed}
			}
			return look{frame: ruled}
		})
	}
	return headingRow
}

func (p *page) tableRow(from int, columns []column, cells []cell, lookOf func(column) look) {
	p.row++
	lines, at := 1, from
	for i, c := range columns {
		l := lookOf(c)
		l.align, l.wrap, l.indented = c.align, true, true
		if cells[i].closing && l.frame == ruled {
			l.frame = closed
		}
		l.bold = l.bold || cells[i].bold
		lines = max(lines, p.put(at, c.spans(), cells[i], l))
		at += c.spans()
	}
	p.height(lines, bodySize)
}
