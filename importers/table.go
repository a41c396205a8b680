package importers

import (
	"fmt"
	"slices"
	"strconv"

	"tickdrawer/inventory"
)

// The limits that keep a hostile file from taking the machine with it. A file
// beyond one of them is refused as a whole, with the limit named.
const (
	MaxFileBytes = 64 << 20   // of the file as it lies on the disk
	MaxRows      = 250_000    // below the headings, blank lines not counted
	MaxColumns   = 256        // of any line
	MaxCells     = 8_000_000  // of all rows
	MaxCellBytes = 32 << 10   // of one cell in UTF-8
	MaxTextBytes = 200        // of a bin, part number, package or dielectric
	MaxNoteBytes = 4 << 10    // of a note with what was added from other columns
	MaxPieces    = 10_000_000 // of one row
)

// The lines within which the headings must stand.
const (
	headingLines = 100    // with text
	headingDepth = 10_000 // with blank ones
)

// Field is what a column can mean.
type Field string

// The fields of a row. Fields that a heading does not name go to Note.
const (
	FieldKind        Field = "kind"
	FieldValue       Field = "value"
	FieldTolerance   Field = "tolerance"
	FieldQuantity    Field = "quantity"
	FieldBin         Field = "bin"
	FieldRatingV     Field = "rating_v"
	FieldRatingW     Field = "rating_w"
	FieldDielectric  Field = "dielectric"
	FieldTempco      Field = "tempco"
	FieldPackage     Field = "package"
	FieldUnitCost    Field = "unit_cost"
	FieldPartNumber  Field = "part_number"
	FieldMeasured    Field = "measured"
	FieldNote        Field = "note"
	FieldForwardV    Field = "forward_v"
	FieldSaturationA Field = "saturation_a"
	FieldIdeality    Field = "ideality"
	FieldSeriesOhm   Field = "series_ohm"
)

// fieldReason marks the column that Rejects adds; it is left out on reading.
const fieldReason Field = "reason"

// Fields returns every field that a column can be mapped to, the common ones
// first.
func Fields() []Field {
	return []Field{
		FieldKind, FieldValue, FieldTolerance, FieldQuantity, FieldBin, FieldRatingV, FieldRatingW,
		FieldDielectric, FieldTempco, FieldPackage, FieldUnitCost, FieldPartNumber, FieldMeasured,
		FieldNote, FieldForwardV, FieldSaturationA, FieldIdeality, FieldSeriesOhm,
	}
}

// Options is how a file is to be read where it does not say so itself.
type Options struct {
	Columns   map[string]string // a heading as the file writes it → a field; goes before what is recognised
	Delimiter rune              // 0: detected among comma, semicolon, tab and pipe
	Encoding  string            // one of Encodings(); "": detected
	Kind      inventory.Kind    // of rows that do not state one; "": they are refused
	Stocktake bool              // rows state what is there, so a quantity may be 0
}

// Column is a column of the file and what it was taken for.
type Column struct {
	Heading string // as written, without the white space around it
	Number  int    // from 1
	Field   Field  // "" where the heading is not recognised: its cells go to the note
	Unit    string // that the heading states and that its bare numbers take: "nF"; "" for none

	kind inventory.Kind // that the heading implies: "Resistance"
}

// Unrecognised is a heading that was not recognised. Its cells are kept in the
// note, as "heading: text".
type Unrecognised struct {
	Heading string
	Number  int
	Nearest Field // that its spelling comes nearest to; "" where none is near
}

// Row is a line of the file below the headings.
type Row struct {
	Line    int               // on which it begins, from 1
	Receipt inventory.Receipt // the zero value in a rejected row
	Cells   []string          // as written; as many as the line has
}

// Problem is one thing that is wrong with a row.
type Problem struct {
	File   string
	Line   int    // on which the row begins, from 1
	Column string // the heading as written; "" where the whole row is meant
	Number int    // of the column, from 1; 0 where the whole row is meant
	Value  string // the cell as written
	Reason string // what is wrong and what to write instead
}

// String returns the problem as one line for people: file, line, column, the
// cell and the reason.
func (p Problem) String() string {
	where := fmt.Sprintf("%s, line %d", p.File, p.Line)
	if p.Number > 0 {
		where += fmt.Sprintf(", column %d", p.Number)
		if p.Column != "" {
			where += " " + quoted(p.Column)
		}
	}
	if p.Value != "" {
		where += ", " + quoted(p.Value)
	}
	return where + ": " + p.Reason
}

// Skip is a line that holds no row, and why.
type Skip struct {
	Line   int
	Reason string
}

// Table is what a file was read as.
type Table struct {
	File         string
	SHA256       string // of the content, in hexadecimal
	Detected     string // for people: delimiter ";", windows-1252, headings on line 3
	Encoding     string // one of Encodings()
	Delimiter    rune
	HeadingLine  int // from 1
	Columns      []Column
	Unrecognised []Unrecognised
	Currency     string    // of the unit costs, as first written; "" where no cell states one
	Rows         []Row     // that can be booked, in the order of the file
	Rejected     []Row     // that cannot, in the order of the file
	Problems     []Problem // of the rejected rows, all of each row, in the order of the file
	Skipped      []Skip    // lines with text that are not rows, in the order of the file

	lineEnd string // that the file uses
	marked  bool   // whether text in UTF-8 needs a byte order mark to be understood where the file comes from
}

// RowCount returns how many rows the file has, good and bad.
func (t Table) RowCount() int { return len(t.Rows) + len(t.Rejected) }

// Reject moves the rows that the problems name by their line from Rows to
// Rejected, for what only the drawer can find wrong with a row. A problem of a
// line that holds no row is kept among Problems all the same.
func (t *Table) Reject(problems ...Problem) {
	lines := make(map[int]bool, len(problems))
	for _, p := range problems {
		lines[p.Line] = true
	}
	kept := make([]Row, 0, len(t.Rows))
	for _, row := range t.Rows {
		if lines[row.Line] {
			t.Rejected = append(t.Rejected, Row{Line: row.Line, Cells: row.Cells})
		} else {
			kept = append(kept, row)
		}
	}
	t.Rows = kept
	t.Problems = append(t.Problems, problems...)
	slices.SortStableFunc(t.Rejected, func(a, b Row) int { return a.Line - b.Line })
	slices.SortStableFunc(t.Problems, func(a, b Problem) int { return a.Line - b.Line })
}

// longestQuote is the most bytes of a cell that a message repeats.
const longestQuote = 60

// quoted returns the text between quotes, shortened, with what does not print
// escaped.
func quoted(text string) string {
	if len(text) <= longestQuote {
		return strconv.Quote(text)
	}
	end := 0
	for i := range text {
		if i > longestQuote {
			break
		}
		end = i
	}
	return strconv.Quote(text[:end] + "…")
}
