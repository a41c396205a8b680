package importers

import (
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Rejects returns the rejected rows as CSV, for mending and importing again: the
// headings and cells as the file has them, in its order and with its delimiter
// and line ends, after a column "reason" that lists all that is wrong with the
// row and its line. Read leaves that column out. nil where no row was rejected.
//
// The text is UTF-8. It begins with a byte order mark, which spreadsheets need,
// unless the file was UTF-8 without one.
//
// A cell that a spreadsheet would run as a formula (CWE-1236: it begins with
// = + - @, a tab or a line end) is written with an apostrophe before it; a plain
// number such as -5 is not, since it is one either way. Read takes one such
// apostrophe away, and a cell that begins with apostrophes before a formula gets
// one more, so that every cell reads back as the same text.
func Rejects(t Table) []byte {
	if len(t.Rejected) == 0 {
		return nil
	}
	reasons := make(map[int][]string, len(t.Rejected))
	for _, p := range t.Problems {
		reason := p.Reason
		if p.Column != "" {
			reason = p.Column + ": " + reason
		}
		reasons[p.Line] = append(reasons[p.Line], reason)
	}
	w := rejectWriter{delimiter: ",", lineEnd: t.lineEnd}
	if t.Delimiter != 0 {
		w.delimiter = string(t.Delimiter)
	}
	if w.lineEnd == "" {
		w.lineEnd = "\n"
	}
	if t.marked {
		w.WriteString("\uFEFF")
	}
	// A file of rejects has the column already.
	again := len(t.Columns) > 0 && t.Columns[0].Field == fieldReason
	headings := make([]string, 0, len(t.Columns))
	for _, c := range t.Columns {
		headings = append(headings, c.Heading)
	}
	w.line(rejectHeading, headings, again)
	for _, row := range t.Rejected {
		w.line("line "+strconv.Itoa(row.Line)+": "+strings.Join(reasons[row.Line], "; "), row.Cells, again)
	}
	return []byte(w.String())
}

// rejectWriter writes lines of CSV.
type rejectWriter struct {
	strings.Builder
	delimiter, lineEnd string
}

// line writes the first cell and the others; again says that the first of those
// is an older form of it.
func (w *rejectWriter) line(first string, others []string, again bool) {
	if again && len(others) > 0 {
		others = others[1:]
	}
	w.cell(first)
	for _, cell := range others {
		w.WriteString(w.delimiter)
		w.cell(cell)
	}
	w.WriteString(w.lineEnd)
}

func (w *rejectWriter) cell(text string) {
	text = guarded(text)
	if !strings.Contains(text, w.delimiter) && !strings.ContainsAny(text, "\"\r\n") && strings.TrimSpace(text) == text {
		w.WriteString(text)
		return
	}
	w.WriteByte('"')
	w.WriteString(strings.ReplaceAll(text, `"`, `""`))
	w.WriteByte('"')
}

// guarded returns the cell with an apostrophe before it where a spreadsheet
// would take it for a formula, or where unguarded would take one away.
func guarded(cell string) string {
	bare := strings.TrimLeft(cell, "'")
	if !runs(bare) || bare == cell && plainNumber(cell) {
		return cell
	}
	return "'" + cell
}

// unguarded returns the cell without the apostrophe that guarded put before it.
// Other programs guard the same way, and people write '-5 for the text -5.
func unguarded(cell string) string {
	if cell == "" || cell[0] != '\'' || !runs(strings.TrimLeft(cell, "'")) {
		return cell
	}
	return cell[1:]
}

// runs reports whether a spreadsheet may take the cell for a formula. The wide
// forms of the signs count, and so does a sign after white space.
func runs(cell string) bool {
	first, _ := utf8.DecodeRuneInString(cell)
	if first == '\t' || first == '\r' || first == '\n' {
		return true
	}
	first, _ = utf8.DecodeRuneInString(strings.TrimLeftFunc(cell, unicode.IsSpace))
	return strings.ContainsRune("=+-@＝＋－＠", first)
}

// plainNumber reports whether the cell is a sign and a decimal, perhaps with a
// percent sign.
func plainNumber(cell string) bool {
	digits := strings.TrimSuffix(strings.TrimLeft(cell, "+-"), "%")
	if len(cell)-len(strings.TrimLeft(cell, "+-")) > 1 || digits == "" {
		return false
	}
	whole, fraction, found := strings.Cut(strings.Replace(digits, ",", ".", 1), ".")
	return strings.Trim(whole+fraction, "0123456789") == "" && whole != "" && (!found || fraction != "")
}
