package picks

import (
	"bytes"
	"encoding/csv"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"tickdrawer/optimize"
)

// byteOrderMark tells spreadsheets that the text is UTF-8.
const byteOrderMark = "\uFEFF"

// PicksCSV returns the picks as CSV by RFC 4180, one line a pick in walking
// order, under the headings of the workbook's sheet but the one of the ticks:
// comma, CRLF, UTF-8 behind a byte order mark, counts as plain digits.
//
// A cell that a spreadsheet would run as a formula (CWE-1236: it begins with
// = + - @, a tab or a line end, or with a sign after white space) has an
// apostrophe before it. A cell that begins with apostrophes before such a text
// gets one more, so that taking one away always gives the text back.
func PicksCSV(plan optimize.Plan) []byte {
	var out bytes.Buffer
	out.WriteString(byteOrderMark)
	w := csv.NewWriter(&out)
	w.UseCRLF = true
	// A bytes.Buffer takes every write, so the writer never fails.
	_ = w.Write(headings[1:])
	count := func(n int64) string { return strconv.FormatInt(n, 10) }
	for _, l := range lines(plan) {
		_ = w.Write([]string{
			guarded(l.bin), count(int64(l.lot)), guarded(l.kind), guarded(l.value), guarded(l.tolerance), guarded(l.references),
			count(l.perBoard), count(l.inAll), count(l.leftBin), guarded(l.remark), guarded(l.details),
		})
	}
	w.Flush()
	return out.Bytes()
}

// lineEnds makes every line end one that the CSV writer keeps.
var lineEnds = strings.NewReplacer("\r\n", "\n", "\r", "\n")

// guarded returns the text with an apostrophe before it where a spreadsheet
// would run it.
func guarded(text string) string {
	text = lineEnds.Replace(printable(text))
	if runs(strings.TrimLeft(text, "'")) {
		return "'" + text
	}
	return text
}

// runs reports whether a spreadsheet may take the text for a formula. The wide
// forms of the signs count.
func runs(text string) bool {
	if text == "" {
		return false
	}
	if strings.ContainsRune("\t\r\n", rune(text[0])) {
		return true
	}
	first, _ := utf8.DecodeRuneInString(strings.TrimLeftFunc(text, unicode.IsSpace))
	return first != utf8.RuneError && strings.ContainsRune("=+-@＝＋－＠", first)
}
