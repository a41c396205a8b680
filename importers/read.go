package importers

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Read returns the table that the content of the file holds. The error is about
// the file as a whole, in one sentence that begins with its name: nothing in it,
// not text, headings not recognised or short of a field, quotes out of step, a
// limit passed, or options that do not suit it. What is wrong with single rows
// is in Table.Problems.
func Read(name string, content []byte, options Options) (Table, error) {
	t, err := read(name, content, options)
	if err != nil {
		return Table{}, fmt.Errorf("%s: %w", name, err)
	}
	return t, nil
}

// ReadFrom returns what Read does of the content that the reader gives, of which
// it takes no more than MaxFileBytes and one byte.
func ReadFrom(name string, r io.Reader, options Options) (Table, error) {
	content, err := io.ReadAll(io.LimitReader(r, MaxFileBytes+1))
	if err != nil {
		return Table{}, fmt.Errorf("reading %s: %w", name, err)
	}
	return Read(name, content, options)
}

func read(name string, content []byte, options Options) (Table, error) {
	if len(content) > MaxFileBytes {
		return Table{}, refused("the file is larger than %d MiB: divide it", MaxFileBytes>>20)
	}
	if options.Delimiter != 0 && !soundDelimiter(options.Delimiter) {
		return Table{}, refused("%q cannot divide cells: give a comma, semicolon, tab, pipe or another sign", options.Delimiter)
	}
	headings, err := newHeadingReader(options.Columns)
	if err != nil {
		return Table{}, err
	}
	text, err := decode(content, options.Encoding)
	if err != nil {
		return Table{}, err
	}
	if strings.TrimSpace(text.text) == "" {
		return Table{}, refused("the file is empty: nothing to import")
	}
	l := layoutOf(text.text, options.Delimiter, headings)
	if l.recognised == 0 {
		if l.err != nil {
			return Table{}, l.err
		}
		return Table{}, noHeadings(l)
	}
	t := Table{
		File: name, Encoding: text.encoding, HeadingLine: l.heading.line,
		lineEnd: lineEndOf(text.text),
		marked:  text.marked || text.encoding != utf8Name,
	}
	t.Delimiter, _ = utf8.DecodeRuneInString(l.delimiter)
	if t.Columns, t.Unrecognised, err = headings.columnsOf(l.heading, options); err != nil {
		return Table{}, err
	}
	sum := sha256.Sum256(content)
	t.SHA256 = hex.EncodeToString(sum[:])
	t.Detected = t.detected()
	if err := t.readRows(newDelimited(text.text, l.delimiter), l.heading, options); err != nil {
		return Table{}, err
	}
	if t.RowCount() == 0 {
		return Table{}, refused("there is no row below the headings on line %d: nothing to import", t.HeadingLine)
	}
	return t, nil
}

// noHeadings returns the error of a file in which no heading is recognised.
func noHeadings(l layout) error {
	columns := make([]Column, len(l.heading.cells))
	for i, cell := range l.heading.cells {
		columns[i].Heading = strings.TrimSpace(cell)
	}
	return refused("no headings recognised in the first %d lines with text (line %d reads %s): name the columns with --column \"THEIRS=FIELD\"; the fields are %s",
		headingLines, l.heading.line, headingWords(columns), fieldWords())
}

// detected returns what was detected, for people.
func (t *Table) detected() string {
	said := fmt.Sprintf("delimiter %s, %s, headings on line %d", delimiterName(string(t.Delimiter)), t.Encoding, t.HeadingLine)
	if t.Columns[0].Field == fieldReason {
		said += `, column "` + rejectHeading + `" of an earlier import left out`
	}
	return said
}

// readRows reads all lines of the table into rows, rejected rows and skips.
func (t *Table) readRows(lines *delimited, heading record, options Options) error {
	receipts := newReceiptReader(t.File, t.Columns, options)
	t.Rows = make([]Row, 0, min(lineEnds(lines.text), MaxRows))
	cells := 0
	for {
		rec, err := lines.next()
		if err == io.EOF {
			t.Currency = receipts.currency
			return nil
		}
		if err != nil {
			return err
		}
		if rec.line == heading.line || rec.blank() {
			continue
		}
		if t.RowCount()+len(t.Skipped) == MaxRows {
			return refused("there are more than %d rows: divide the file", MaxRows)
		}
		if cells += len(rec.cells); cells > MaxCells {
			return refused("there are more than %d cells: divide the file, or leave out columns", MaxCells)
		}
		if reason := t.skipReason(rec, heading); reason != "" {
			t.Skipped = append(t.Skipped, Skip{Line: rec.line, Reason: reason})
			continue
		}
		receipt, problems := receipts.receipt(rec)
		row := Row{Line: rec.line, Receipt: receipt, Cells: rec.cells}
		if len(problems) > 0 {
			t.Rejected = append(t.Rejected, row)
			t.Problems = append(t.Problems, problems...)
			continue
		}
		t.Rows = append(t.Rows, row)
	}
}

// skipReason returns why the line is not a row, or "".
func (t *Table) skipReason(rec, heading record) string {
	switch {
	case rec.line < heading.line:
		return "before the headings"
	case sameCells(rec.cells, heading.cells):
		return "the headings again"
	case t.total(rec):
		return "a total"
	}
	return ""
}

// sameCells reports whether the lines say the same but for white space and
// empty cells at the end.
func sameCells(a, b []string) bool {
	for i := range max(len(a), len(b)) {
		var left, right string
		if i < len(a) {
			left = strings.TrimSpace(a[i])
		}
		if i < len(b) {
			right = strings.TrimSpace(b[i])
		}
		if left != right {
			return false
		}
	}
	return true
}

// total reports whether the line sums up those above it: one cell says so, and
// the others hold figures.
func (t *Table) total(rec record) bool {
	said := -1
	for i, cell := range rec.cells {
		if saysTotal(strings.TrimSpace(cell)) {
			said = i
			break
		}
	}
	if said < 0 {
		return false
	}
	for i, cell := range rec.cells {
		cell = strings.TrimSpace(cell)
		reason := i < len(t.Columns) && t.Columns[i].Field == fieldReason
		if i != said && cell != "" && !reason && !figure(cell) {
			return false
		}
	}
	return true
}

// saysTotal reports whether the cell is a word for a total, perhaps with the
// figure after it.
func saysTotal(cell string) bool {
	if cell == "" || len(cell) > longestHeading || !totalInitial[unicode.ToLower(firstRune(cell))] {
		return false
	}
	if at := strings.IndexAny(cell, "0123456789"); at >= 0 {
		return totalWord[fold(cell[:at])] && figure(cell[at:])
	}
	return totalWord[fold(cell)]
}

// figure reports whether the cell is a count or an amount of money, of any size
// and however its thousands are grouped.
func figure(cell string) bool {
	_, amount := cutCurrency(cell)
	word := strings.TrimSpace(strings.TrimLeft(amount, "0123456789.,' \u00a0\u202f"))
	return strings.ContainsAny(amount, "0123456789") && (word == "" || pieceWord[fold(word)])
}

// totalWord holds totalWords folded.
var totalWord = func() map[string]bool {
	words := map[string]bool{}
	for _, word := range totalWords {
		words[fold(word)] = true
	}
	return words
}()

// totalInitial holds the letters that totalWords begin with, so that few cells
// need folding.
var totalInitial = func() map[rune]bool {
	initials := map[rune]bool{}
	for _, word := range totalWords {
		initials[firstRune(word)] = true
	}
	return initials
}()

// lineEndOf returns the line end that the text uses first; LF where it has none.
func lineEndOf(text string) string {
	at := strings.IndexAny(text, "\r\n")
	switch {
	case at < 0 || text[at] == '\n':
		return "\n"
	case strings.HasPrefix(text[at:], "\r\n"):
		return "\r\n"
	}
	return "\r"
}
