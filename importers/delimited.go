package importers

import (
	"io"
	"strings"
	"unicode"
	"unicode/utf8"
)

// record is a line of a table: more than one of the file where a cell in quotes
// holds line ends.
type record struct {
	line  int      // on which it begins, from 1
	cells []string // none where the line is empty
}

// blank reports whether the record holds nothing but white space.
func (r record) blank() bool {
	for _, cell := range r.cells {
		if strings.TrimSpace(cell) != "" {
			return false
		}
	}
	return true
}

// delimited reads text as RFC 4180 has it, with any delimiter and with lines
// that end in LF, CR LF or CR, which encoding/csv does not know. Beyond the RFC
// it takes what is often written and has one reading: a quote within a cell that
// does not begin with one (a 1/4" jack), and spaces around a cell in quotes.
type delimited struct {
	text      string
	delimiter string
	at        int // offset of the next record
	line      int // of that offset, from 1
	width     int // of the last record
	most      int // cells of a record
}

func newDelimited(text, delimiter string) *delimited {
	d := &delimited{text: text, delimiter: delimiter, line: 1, most: MaxColumns}
	if strings.HasPrefix(text, rejectHeading+delimiter) {
		d.most++ // the column that Rejects adds
	}
	return d
}

// next returns the next record, or io.EOF. Any other error is about the whole
// file: where quotes are out of step, no later cell can be trusted.
func (d *delimited) next() (record, error) {
	if d.at == len(d.text) {
		return record{}, io.EOF
	}
	r := record{line: d.line}
	if c := d.text[d.at]; c != '\n' && c != '\r' {
		r.cells = make([]string, 0, d.width)
		if err := d.cells(&r); err != nil {
			return r, err
		}
		d.width = len(r.cells)
	}
	if strings.HasPrefix(d.text[d.at:], "\r\n") {
		d.at++
	}
	if d.at < len(d.text) {
		d.at++
		d.line++
	}
	return r, nil
}

// cells reads the cells of the record and stops before its line end.
func (d *delimited) cells(r *record) error {
	for {
		if len(r.cells) == d.most {
			return refused("line %d has more than %d cells: this is not a table of stock, or another delimiter divides it", r.line, MaxColumns)
		}
		cell, err := d.cell(len(r.cells) + 1)
		if err != nil {
			return err
		}
		r.cells = append(r.cells, unguarded(cell))
		if !strings.HasPrefix(d.text[d.at:], d.delimiter) {
			return nil
		}
		d.at += len(d.delimiter)
	}
}

// cell returns the next cell and stops before the delimiter or line end after it.
func (d *delimited) cell(number int) (string, error) {
	start := d.at
	if open := d.skipSpace(start); open < len(d.text) && d.text[open] == '"' {
		return d.quotedCell(open, number)
	}
	first := d.delimiter[0]
	longest := MaxCellBytes
	if strings.HasPrefix(d.text[start:], "'") {
		longest++ // guarded
	}
	at := start
	for ; at < len(d.text); at++ {
		c := d.text[at]
		if c == '\n' || c == '\r' || c == first && strings.HasPrefix(d.text[at:], d.delimiter) {
			break
		}
		if at-start == longest {
			return "", refused("line %d, column %d: the cell is longer than %d bytes: this is not a table of stock, or another delimiter divides it", d.line, number, MaxCellBytes)
		}
	}
	d.at = at
	return d.text[start:at], nil
}

// quotedCell returns the cell whose first quote is at the offset, with doubled
// quotes undone.
func (d *delimited) quotedCell(open, number int) (string, error) {
	start := open + 1
	end := start + MaxCellBytes + 1 // before which the cell must close
	if strings.HasPrefix(d.text[start:], "'") {
		end++ // guarded
	}
	doubled := false
	for at := start; ; at += 2 {
		limit := max(at, min(len(d.text), end))
		length := strings.IndexByte(d.text[at:limit], '"')
		if length < 0 {
			if len(d.text) <= end {
				return "", refused("line %d, column %d: the quote that opens the cell is never closed: close it, or double it (\"\") where it belongs to the text", d.line, number)
			}
			return "", refused("line %d, column %d: the quote that opens the cell is not closed within %d bytes: close it, or double it (\"\") where it belongs to the text", d.line, number, MaxCellBytes)
		}
		at += length
		if strings.HasPrefix(d.text[at:], `""`) {
			doubled = true
			end++
			continue
		}
		cell := d.text[start:at]
		opened := d.line
		d.line += lineEnds(cell)
		d.at = d.skipSpace(at + 1)
		if rest := d.text[d.at:]; rest != "" && rest[0] != '\n' && rest[0] != '\r' && !strings.HasPrefix(rest, d.delimiter) {
			after, _ := utf8.DecodeRuneInString(rest)
			return "", refused("line %d: %s follows the quote that closes the cell opened on line %d, column %d: double a quote (\"\") that belongs to the text, and close each that opens a cell",
				d.line, quoted(string(after)), opened, number)
		}
		if doubled {
			cell = strings.ReplaceAll(cell, `""`, `"`)
		}
		return cell, nil
	}
}

// skipSpace returns the offset of the first byte from at on that is not a space
// or a tab, unless that is the delimiter.
func (d *delimited) skipSpace(at int) int {
	for at < len(d.text) && (d.text[at] == ' ' || d.text[at] == '\t') && d.text[at] != d.delimiter[0] {
		at++
	}
	return at
}

// layout is how a text is divided and which of its lines has the headings.
type layout struct {
	delimiter  string
	heading    record
	recognised int   // headings that name a field
	err        error // on which the reading of the first lines stopped
}

// layoutOf returns the layout in which the most headings are recognised; of
// equal ones, the delimiter that comes first and the line that does. The
// delimiter is the one given, else the one that a first line such as sep=;
// states, else one of comma, semicolon, tab and pipe.
func layoutOf(text string, delimiter rune, headings headingReader) layout {
	candidates := []string{",", ";", "\t", "|"}
	if stated := statedDelimiter(text); stated != "" {
		candidates = []string{stated}
	}
	if delimiter != 0 {
		candidates = []string{string(delimiter)}
	}
	var best layout
	for i, candidate := range candidates {
		found := headingLayout(text, candidate, headings)
		if i == 0 || found.recognised > best.recognised ||
			// Where nothing is recognised, the widest is what a person would call the table.
			found.recognised == best.recognised && best.recognised == 0 && len(found.heading.cells) > len(best.heading.cells) {
			best = found
		}
	}
	return best
}

// headingLayout returns the layout of the text with the delimiter: its heading
// is, of the first lines, the one with the most recognised headings, or the
// widest where none has any.
func headingLayout(text, delimiter string, headings headingReader) layout {
	l := layout{delimiter: delimiter}
	lines := newDelimited(text, delimiter)
	for n, depth := 0, 0; n < headingLines && depth < headingDepth; depth++ {
		r, err := lines.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			l.err = err
			break
		}
		if r.blank() {
			continue
		}
		n++
		recognised := headings.recognised(r.cells)
		if recognised > l.recognised || l.recognised == 0 && len(r.cells) > len(l.heading.cells) {
			l.heading, l.recognised = r, recognised
		}
	}
	return l
}

// statedDelimiter returns the delimiter that a first line such as sep=; states,
// as spreadsheets write and read it, or "".
func statedDelimiter(text string) string {
	rest, found := strings.CutPrefix(text, "sep=")
	if !found {
		return ""
	}
	r, size := utf8.DecodeRuneInString(rest)
	if size == 0 || !soundDelimiter(r) || size < len(rest) && rest[size] != '\r' && rest[size] != '\n' {
		return ""
	}
	return string(r)
}

// soundDelimiter reports whether the character can divide cells.
func soundDelimiter(r rune) bool {
	if r == '\t' {
		return true
	}
	return r > ' ' && r != 0x7F && r != utf8.RuneError && !strings.ContainsRune(`"'.-+=@`, r) && !unicode.IsLetter(r) && !unicode.IsDigit(r)
}

// delimiterName returns the delimiter as messages write it.
func delimiterName(delimiter string) string {
	if delimiter == "\t" {
		return "tab"
	}
	return quoted(delimiter)
}
