package picks

import (
	"cmp"

	"github.com/xuri/excelize/v2"
)

const (
	font       = "Arial" // there, or a font of the same widths, wherever workbooks are opened
	bodySize   = 10.0    // pt
	titleSize  = 16.0
	linePt     = 13.0 // height of a line of body text
	paddingPt  = 5.0  // of a row, above and below together
	gapPt      = 15.0 // an empty row's
	mostPt     = 400.0
	boldness   = 1.1 // how much wider bold text is
	cellMargin = 2.5 // of a column, in characters, beside its text
)

// Greys: legible where they are printed in black alone.
const (
	textInk, lineInk, lightInk, shade = "1F2933", "52606D", "B5BEC7", "E9EDF0"
)

// frame is the lines around a cell.
type frame int

const (
	noFrame frame = iota
	ruled         // a light line below
	closed        // a line below: the last row of a group
	boxed         // a line all around: to be filled in
	headed        // a firm line below
)

// look is how a cell is drawn. Cells of one look share a style.
type look struct {
	size         float64 // pt; 0: bodySize
	bold, italic bool
	shaded       bool
	frame        frame
	align        string // "left", "center" or "right"; "" by the cell's type
	wrap         bool
	indented     bool   // a little room beside left or right text
	format       string // number format; "" for text
	literal      bool   // stays text when the cell is edited
}

// book is a workbook in the making. The first error sticks and ends in bytes.
type book struct {
	file   *excelize.File
	styles map[look]int
	opts   Options
	job    string
	err    error
}

func (b *book) check(err error) {
	if b.err == nil && err != nil {
		b.err = err
	}
}

// style returns the number of the look's style.
func (b *book) style(l look) int {
	if id, found := b.styles[l]; found {
		return id
	}
	style := &excelize.Style{
		Font:      &excelize.Font{Family: font, Size: cmp.Or(l.size, bodySize), Bold: l.bold, Italic: l.italic, Color: textInk},
		Alignment: &excelize.Alignment{Horizontal: l.align, Vertical: "center", WrapText: l.wrap},
	}
	if l.shaded {
		style.Fill = excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{shade}}
	}
	if l.indented && l.align != "center" {
		style.Alignment.Indent = 1
	}
	const thin, medium = 1, 2
	side := func(name string, kind int, color string) {
		style.Border = append(style.Border, excelize.Border{Type: name, Style: kind, Color: color})
	}
	switch l.frame {
	case ruled:
		side("bottom", thin, lightInk)
	case closed:
		side("bottom", thin, lineInk)
	case headed:
		side("bottom", medium, lineInk)
	case boxed:
		for _, name := range []string{"left", "right", "top", "bottom"} {
			side(name, thin, lineInk)
		}
	}
	if l.format != "" {
		style.CustomNumFmt = &l.format
	}
	id, err := b.file.NewStyle(style)
	b.check(err)
	if l.literal && err == nil { // which excelize has no option for
		all, literal := b.file.Styles.CellXfs, true
		twin := all.Xf[id]
		twin.QuotePrefix = &literal
		all.Xf = append(all.Xf, twin)
		all.Count = len(all.Xf)
		id = len(all.Xf) - 1
	}
	b.styles[l] = id
	return id
}

// page is a sheet in the making, written from the top down.
type page struct {
	*book
	name   string
	widths []float64 // of the columns, in characters
	row    int       // written last
	// heights of the rows that have one of their own, pt
	heights map[int]float64
	blocks  []int // rows from which on what follows stays on one page, if it can
}

// page returns a new sheet with the columns.
func (b *book) page(name string, widths []float64) *page {
	_, err := b.file.NewSheet(name)
	b.check(err)
	for i, w := range widths {
		column, err := excelize.ColumnNumberToName(i + 1)
		b.check(err)
		b.check(b.file.SetColWidth(name, column, column, w))
	}
	return &page{book: b, name: name, widths: widths, heights: map[int]float64{}}
}

func (p *page) at(column int) string {
	name, err := excelize.CoordinatesToCellName(column, p.row)
	p.check(err)
	return name
}

// put writes the cell at the column of the current row, over span columns, and
// returns how many lines it takes.
func (p *page) put(column, span int, c cell, l look) int {
	from, to := p.at(column), p.at(column+span-1)
	count := 1
	switch {
	case c.formula != "":
		p.check(p.file.SetCellFormula(p.name, from, c.formula))
	case c.figure != nil && c.figure.finite():
		p.check(p.file.SetCellFloat(p.name, from, rounded(c.figure.number, cellDigits), -1, 64))
		l.format = c.figure.format()
		l.align = cmp.Or(l.align, "right")
		l.wrap = false // LibreOffice would drop the indent
	default:
		text := c.shown()
		if text != "" {
			p.check(p.file.SetCellStr(p.name, from, cellText(text)))
		}
		l.literal = runs(text)
		l.format = c.typed
		if l.wrap {
			available := -cellMargin / 2
			for _, w := range p.widths[column-1 : column-1+span] {
				available += w
			}
			if l.bold {
				available /= boldness
			}
			count = lineCount(text, available*bodySize/cmp.Or(l.size, bodySize))
		}
	}
	p.check(p.file.SetCellStyle(p.name, from, to, p.style(l)))
	if span > 1 {
		p.check(p.file.MergeCell(p.name, from, to))
	}
	return count
}

// height sets the height of the current row for lines of text.
func (p *page) height(lines int, size float64) {
	p.heights[p.row] = min(mostPt, float64(lines)*linePt*size/bodySize+paddingPt)
	p.check(p.file.SetRowHeight(p.name, p.row, p.heights[p.row]))
}

// paragraph writes a row with one text over all columns from one on.
func (p *page) paragraph(from int, text string, l look) {
	p.row++
	l.wrap = true
	l.align = "left"
	p.height(p.put(from, len(p.widths)-from+1, cell{text: text}, l), cmp.Or(l.size, bodySize))
}

// gap leaves a row empty.
func (p *page) gap() {
	p.row++
	p.heights[p.row] = gapPt
	p.check(p.file.SetRowHeight(p.name, p.row, gapPt))
}

// title writes the sheet's first rows: what it is, and lines on it.
func (p *page) title(title string, under ...string) {
	p.paragraph(1, title, look{size: titleSize, bold: true})
	for _, text := range under {
		p.paragraph(1, text, look{})
	}
}
