package picks

import (
	"fmt"
	"slices"
	"strings"

	"github.com/xuri/excelize/v2"
)

// Margins of the paper, inch.
const (
	sideMargin, endMargin, headerMargin = 0.5, 0.75, 0.35
	ptPerInch                           = 72
)

// area returns the paper's code (ECMA-376 part 1, 18.3.1.63) and what a landscape
// page of it holds inside the margins, pt.
func (p Paper) area() (code int, widthPt, heightPt float64) {
	long, short := 297/25.4, 210/25.4
	code = 9
	if p == Letter {
		code, long, short = 1, 11, 8.5
	}
	return code, (long - 2*sideMargin) * ptPerInch, (short - 2*endMargin) * ptPerInch
}

// finish sets how the sheet is seen and printed: landscape, as wide as the
// paper, the rows from repeatFrom to repeatTo on every page, the rows down to
// frozen always in view.
func (p *page) finish(repeatFrom, repeatTo, frozen int) {
	code, _, _ := p.opts.Paper.area()
	landscape, wide, tall := "landscape", 1, 0
	p.check(p.file.SetPageLayout(p.name, &excelize.PageLayoutOptions{Size: &code, Orientation: &landscape, FitToWidth: &wide, FitToHeight: &tall}))
	yes, no := true, false
	p.check(p.file.SetSheetProps(p.name, &excelize.SheetPropsOptions{FitToPage: &yes}))
	side, end, header := sideMargin, endMargin, headerMargin
	p.check(p.file.SetPageMargins(p.name, &excelize.PageLayoutMarginsOptions{
		Left: &side, Right: &side, Top: &end, Bottom: &end, Header: &header, Footer: &header, Horizontally: &yes,
	}))
	day := ""
	if !p.opts.Now.IsZero() {
		day = p.opts.Now.Format("2006-01-02")
	}
	p.check(p.file.SetHeaderFooter(p.name, &excelize.HeaderFooterOptions{
		OddHeader: "&L&9 " + headerText(p.job) + "&R&9 " + headerText(p.name),
		OddFooter: "&L&9 " + day + "&R&9 page &P of &N",
	}))
	p.check(p.file.SetSheetView(p.name, 0, &excelize.ViewOptions{ShowGridLines: &no}))
	last, err := excelize.ColumnNumberToName(len(p.widths))
	p.check(err)
	p.check(p.file.SetSheetDimension(p.name, fmt.Sprintf("A1:%s%d", last, p.row)))
	quoted := "'" + p.name + "'!"
	p.check(p.file.SetDefinedName(&excelize.DefinedName{
		Name: "_xlnm.Print_Area", Scope: p.name, RefersTo: fmt.Sprintf("%s$A$1:$%s$%d", quoted, last, p.row),
	}))
	p.check(p.file.SetDefinedName(&excelize.DefinedName{
		Name: "_xlnm.Print_Titles", Scope: p.name, RefersTo: fmt.Sprintf("%s$%d:$%d", quoted, repeatFrom, repeatTo),
	}))
	first := fmt.Sprintf("A%d", frozen+1)
	p.check(p.file.SetPanes(p.name, &excelize.Panes{
		Freeze: true, YSplit: frozen, TopLeftCell: first, ActivePane: "bottomLeft",
		Selection: []excelize.Selection{{SQRef: first, ActiveCell: first, Pane: "bottomLeft"}},
	}))
	p.breakPages(repeatFrom, repeatTo)
}

// pageHeightPt returns what a page holds of the sheet, pt, at the scale that
// makes the sheet as wide as the paper. A character of the body font is 7 pixels
// wide and a column has 5 more, at 96 pixels an inch.
func (p *page) pageHeightPt() float64 {
	_, widthPt, heightPt := p.opts.Paper.area()
	sheetPt := 0.0
	for _, w := range p.widths {
		sheetPt += (7*w + 5) * ptPerInch / 96
	}
	return heightPt / min(1, widthPt/sheetPt)
}

// heightPt returns the height of the rows, pt.
func (p *page) heightPt(from, to int) float64 {
	sum := 0.0
	for row := from; row <= to; row++ {
		sum += p.heights[row]
	}
	return sum
}

// breakPages begins a new page before each block that would else run over the
// end of one and that a page can hold.
func (p *page) breakPages(repeatFrom, repeatTo int) {
	onPage, repeated := p.pageHeightPt(), p.heightPt(repeatFrom, repeatTo)
	used := 0.0
	for row := 1; row <= p.row; row++ {
		if i := slices.Index(p.blocks, row); i >= 0 {
			end := p.row
			if i+1 < len(p.blocks) {
				end = p.blocks[i+1] - 1
			}
			if block := p.heightPt(row, end); used+block > onPage && repeated+block <= onPage {
				p.check(p.file.InsertPageBreak(p.name, fmt.Sprintf("A%d", row)))
				used = repeated
			}
		}
		if used += p.heights[row]; used > onPage {
			used = repeated + p.heights[row]
		}
	}
}

// headerMost is the length of a text in a page header; all of it together has
// at most 255 characters.
const headerMost = 80

// headerText returns the text as a page header shows it: one line, its & doubled,
// shortened.
func headerText(text string) string { return strings.ReplaceAll(shortened(text), "&", "&&") }

// shortened returns the text in one line, cut to headerMost.
func shortened(text string) string {
	runes := []rune(oneLine(printable(text)))
	if len(runes) > headerMost {
		runes = append(slices.Clone(runes[:headerMost-1]), '…')
	}
	return string(runes)
}

// oneLine returns the text with every run of white space made one space.
func oneLine(text string) string { return strings.Join(strings.Fields(text), " ") }
