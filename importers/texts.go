package importers

import (
	"errors"
	"strconv"
	"strings"
	"unicode"
)

// keep adds the field's cell to the note, under its heading.
func (row *reading) keep(field Field) {
	if i, found := row.numberOf[field]; found {
		row.keepColumn(i)
	}
}

func (row *reading) keepColumn(i int) {
	cell := row.cellAt(i)
	if cell == "" {
		return
	}
	heading := row.columns[i].Heading
	if heading == "" {
		heading = "column " + strconv.Itoa(i+1)
	}
	row.notes = append(row.notes, heading+": "+cell)
}

// note returns the row's note with the cells of the columns that nothing else
// takes, as "heading: text".
func (row *reading) note() string {
	kept := row.notes
	row.notes = nil
	if cell := row.cell(FieldNote); cell != "" {
		row.notes = append(row.notes, cell)
	}
	row.notes = append(row.notes, kept...)
	for _, i := range row.noted {
		row.keepColumn(i)
	}
	note := oneSpaced(strings.Join(row.notes, "; "))
	if err := unsoundText(note, MaxNoteBytes); err != nil {
		row.problem(FieldNote, err)
	}
	return note
}

// text returns the field's cell with runs of white space made one space.
func (row *reading) text(field Field) string {
	text := oneSpaced(row.cell(field))
	if err := unsoundText(text, MaxTextBytes); err != nil {
		row.problem(field, err)
	}
	return text
}

func oneSpaced(text string) string { return strings.Join(strings.Fields(text), " ") }

// sheetErrors are what spreadsheets write where a formula failed.
var sheetErrors = map[string]bool{"#N/A": true, "#REF!": true, "#VALUE!": true, "#NAME?": true, "#DIV/0!": true, "#NULL!": true, "#NUM!": true}

// unsoundText returns what is wrong with a text that is kept as it is.
func unsoundText(text string, longest int) error {
	switch {
	case len(text) > longest:
		return errors.New("the text is longer than " + strconv.Itoa(longest) + " bytes: shorten it")
	case strings.ContainsFunc(text, unicode.IsControl):
		return errors.New("the text holds a character that does not print: write it again")
	case strings.ContainsRune(text, unicode.ReplacementChar):
		return errors.New("the text holds a character that was lost (" + string(unicode.ReplacementChar) + "): write it again")
	case sheetErrors[text]:
		return errors.New("this is a spreadsheet's error, not a text: correct it or leave the cell empty")
	}
	return nil
}
