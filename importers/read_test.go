package importers

import (
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"

	"tickdrawer/inventory"
)

// mustRead returns the table of the text, which must be sound as a file.
func mustRead(t *testing.T, text string, options Options) Table {
	t.Helper()
	table, err := Read("stock.csv", []byte(text), options)
	if err != nil {
		t.Fatalf("Read: %v", err)
	}
	return table
}

func TestReadDetectsDelimiterEncodingAndHeadings(t *testing.T) {
	const table = "Art;Wert;Menge;Bemerkung\nKondensator;4,7µF;12;für Töne\n"
	utf16 := func(endian unicode.Endianness, bom unicode.BOMPolicy) string {
		text, err := unicode.UTF16(endian, bom).NewEncoder().String(table)
		if err != nil {
			t.Fatal(err)
		}
		return text
	}
	ansi, err := charmap.Windows1252.NewEncoder().String(table)
	if err != nil {
		t.Fatal(err)
	}
	dos, err := charmap.CodePage850.NewEncoder().String(table)
	if err != nil {
		t.Fatal(err)
	}
	with := func(delimiter string) string {
		return strings.NewReplacer("4,7", "4u7", "µF", "", ";", delimiter).Replace(table)
	}
	for _, test := range []struct {
		name, text, detected string
		options              Options
	}{
		{"semicolon", table, `delimiter ";", utf-8, headings on line 1`, Options{}},
		{"comma", with(","), `delimiter ",", utf-8, headings on line 1`, Options{}},
		{"tab", with("\t"), `delimiter tab, utf-8, headings on line 1`, Options{}},
		{"pipe", with("|"), `delimiter "|", utf-8, headings on line 1`, Options{}},
		{"another delimiter, given", with("^"), `delimiter "^", utf-8, headings on line 1`, Options{Delimiter: '^'}},
		{"another delimiter, stated in the file", "sep=^\n" + with("^"), `delimiter "^", utf-8, headings on line 2`, Options{}},
		{"byte order mark", "\uFEFF" + table, `delimiter ";", utf-8, headings on line 1`, Options{}},
		{"UTF-16 with mark, little endian", utf16(unicode.LittleEndian, unicode.UseBOM), `delimiter ";", utf-16le, headings on line 1`, Options{}},
		{"UTF-16 with mark, big endian", utf16(unicode.BigEndian, unicode.UseBOM), `delimiter ";", utf-16be, headings on line 1`, Options{}},
		{"UTF-16 without mark, little endian", utf16(unicode.LittleEndian, unicode.IgnoreBOM), `delimiter ";", utf-16le, headings on line 1`, Options{}},
		{"UTF-16 without mark, big endian", utf16(unicode.BigEndian, unicode.IgnoreBOM), `delimiter ";", utf-16be, headings on line 1`, Options{}},
		{"Windows-1252", ansi, `delimiter ";", windows-1252, headings on line 1`, Options{}},
		{"Windows-1252 by another name", ansi, `delimiter ";", windows-1252, headings on line 1`, Options{Encoding: "Latin-1"}},
		{"code page 850, given", dos, `delimiter ";", cp850, headings on line 1`, Options{Encoding: "cp850"}},
		{"CR LF", strings.ReplaceAll(table, "\n", "\r\n"), `delimiter ";", utf-8, headings on line 1`, Options{}},
		{"CR", strings.ReplaceAll(table, "\n", "\r"), `delimiter ";", utf-8, headings on line 1`, Options{}},
		{"no line end at the end", strings.TrimSuffix(table, "\n"), `delimiter ";", utf-8, headings on line 1`, Options{}},
		{"DOS end of text", table + "\x1A", `delimiter ";", utf-8, headings on line 1`, Options{}},
		{"preamble and blank lines", "Bestand der Werkstatt; Stand Mai\n;;;\n\n" + table, `delimiter ";", utf-8, headings on line 4`, Options{}},
		{"commas in a preamble", "a,b,c,d,e,f,g\n" + table, `delimiter ";", utf-8, headings on line 2`, Options{}},
		{"blank lines below", strings.Replace(table, "\nK", "\n\n ; ;\nK", 1) + "\n\n", `delimiter ";", utf-8, headings on line 1`, Options{}},
	} {
		t.Run(test.name, func(t *testing.T) {
			got := mustRead(t, test.text, test.options)
			if got.Detected != test.detected {
				t.Errorf("Detected = %s, want %s", got.Detected, test.detected)
			}
			if len(got.Rows) != 1 || len(got.Rejected) != 0 {
				t.Fatalf("%d rows, problems %v", len(got.Rows), got.Problems)
			}
			r := got.Rows[0].Receipt
			if r.Part.Kind != inventory.Capacitor || r.Part.Value != 4.7e-6 || r.Quantity != 12 || r.Note != "für Töne" {
				t.Errorf("receipt %+v", r)
			}
		})
	}
}

func TestReadRefusesWhatIsNoTable(t *testing.T) {
	const headings = "kind,value,quantity\n"
	for _, test := range []struct {
		name, text, want string
		options          Options
	}{
		{"empty", "", "the file is empty", Options{}},
		{"only white space", " \n\r\n\t\n", "the file is empty", Options{}},
		{"only a byte order mark", "\uFEFF", "the file is empty", Options{}},
		{"a picture", "\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR", "byte 9 is nought", Options{}},
		{"a spreadsheet", "PK\x03\x04\x14\x00", "save the sheet as CSV", Options{}},
		{"a control code", headings + "resistor,4k7,\x07100\n", "line 2: byte 0x07", Options{}},
		{"UTF-32", "\xFF\xFE\x00\x00k\x00\x00\x00", "UTF-32", Options{}},
		{"UTF-16 cut off", "\xFF\xFEk\x00i", "cut off", Options{}},
		{"UTF-8 with one foreign byte", headings + "resistor,4k7 Ω,1\nresistor,1k Ω,1\ncapacitor,1\xB5,1\n", "line 4: byte 0xB5", Options{}},
		{"not UTF-8 as told", headings + "capacitor,1\xB5,1\n", "line 2: byte 0xB5", Options{Encoding: "utf-8"}},
		{"unknown encoding", headings, `unknown encoding "utf-9": it is one of utf-8`, Options{Encoding: "utf-9"}},
		{"unsound delimiter", headings, "cannot divide cells", Options{Delimiter: '7'}},
		{"no headings", "resistor,4k7,100\nresistor,1k,5\n", `no headings recognised in the first 100 lines with text (line 1 reads "resistor", "4k7", "100")`, Options{}},
		{"prose", "Dear all,\nplease find the list attached.\n", "no headings recognised", Options{}},
		{"headings only", headings, "no row below the headings on line 1", Options{}},
		{"no quantity", "kind,value\nresistor,4k7\n", `no column gives quantity: the headings on line 1 are "kind", "value"; map one with --column "THEIRS=quantity"`, Options{}},
		{"neither value nor part number", "kind,quantity\nresistor,5\n", `no column gives value or part_number`, Options{}},
		{"part numbers without kinds", "part number,quantity\n1N4148,5\n", `no column gives kind`, Options{}},
		{"two headings for a field", "kind,value,qty,Menge\nresistor,4k7,1,2\n", `line 1: the headings "qty" (column 3) and "Menge" (column 4) both mean quantity`, Options{}},
		{"quote never closed", headings + "resistor,4k7,\"100\nresistor,1k,5\n", "line 2, column 3: the quote that opens the cell is never closed", Options{}},
		{"quote closed by a later one", headings + "resistor,\"4k7,100\nresistor,\"1k\",5\n", `line 3: "1" follows the quote that closes the cell opened on line 2, column 2`, Options{}},
		{"unknown field", headings + "resistor,4k7,1\n", `there is no field "colour"; the fields are kind, value`, Options{Columns: map[string]string{"value": "colour"}}},
		{"heading that is not there", headings + "resistor,4k7,1\n", `--column "Farbe=note": line 1 has no such heading; it has "kind", "value", "quantity"`, Options{Columns: map[string]string{"Farbe": "note"}}},
		{"heading with two meanings", headings + "resistor,4k7,1\n", `gives the heading "Value" two fields, bin and note`, Options{Columns: map[string]string{"VALUE": "bin", "Value": "note"}}},
	} {
		t.Run(test.name, func(t *testing.T) {
			table, err := Read("stock.csv", []byte(test.text), test.options)
			if err == nil {
				t.Fatalf("read as %+v", table)
			}
			if !strings.HasPrefix(err.Error(), "stock.csv: ") || !strings.Contains(err.Error(), test.want) {
				t.Errorf("error %q, want one that contains %q", err, test.want)
			}
			if inventory.ReasonOf(err) != inventory.Invalid {
				t.Errorf("reason %v, want Invalid", inventory.ReasonOf(err))
			}
		})
	}
}

func TestReadTakesUsualViolationsOfRFC4180(t *testing.T) {
	got := mustRead(t, "kind, value ,quantity,note\n"+
		"resistor, \"4k7\" ,\"100\" , a 1/4\" jack\n"+
		"resistor,1k,5,\"say \"\"hi\"\",\nthen go\"\n"+
		"resistor,2k2,6\n"+ // short
		"resistor,3k3,7,,,\n", // empty cells too many
		Options{})
	var notes []string
	var lines []int
	for _, row := range got.Rows {
		notes = append(notes, row.Receipt.Note)
		lines = append(lines, row.Line)
	}
	if want := []string{`a 1/4" jack`, `say "hi", then go`, "", ""}; !slices.Equal(notes, want) {
		t.Errorf("notes %q, want %q; problems %v", notes, want, got.Problems)
	}
	if want := []int{2, 3, 5, 6}; !slices.Equal(lines, want) {
		t.Errorf("rows on lines %v, want %v", lines, want)
	}
}

func TestReadSaysWhichLinesItSkips(t *testing.T) {
	got := mustRead(t, "My stock\n\nkind,value,quantity,price\n"+
		"resistor,4k7,100,0.01\n"+
		"kind,value,quantity,price\n"+
		"resistor,1k,50,0.01\n"+
		"Total,,150,$1.50\n"+
		"Total: 150 pcs,,,\n"+
		",,\"1,500\",Summe\n"+
		",,150,\n", Options{})
	want := []Skip{{1, "before the headings"}, {5, "the headings again"}, {7, "a total"}, {8, "a total"}, {9, "a total"}}
	if !slices.Equal(got.Skipped, want) {
		t.Errorf("Skipped = %v, want %v", got.Skipped, want)
	}
	if len(got.Rows) != 2 || len(got.Rejected) != 1 || got.Rejected[0].Line != 10 {
		t.Errorf("rows %v, rejected %v", got.Rows, got.Rejected)
	}
}

func TestReadKeepsUnrecognisedColumnsInTheNote(t *testing.T) {
	got := mustRead(t, "kind,value,quantitty,Qty,Colour,,Comment,Bemerkung\nresistor,4k7,x,100,blue,odd,good,sehr gut\n", Options{})
	want := []Unrecognised{{"quantitty", 3, FieldQuantity}, {"Colour", 5, ""}}
	if !slices.Equal(got.Unrecognised, want) {
		t.Errorf("Unrecognised = %v, want %v", got.Unrecognised, want)
	}
	if len(got.Rows) != 1 {
		t.Fatalf("problems %v", got.Problems)
	}
	if note, want := got.Rows[0].Receipt.Note, "good; quantitty: x; Colour: blue; column 6: odd; Bemerkung: sehr gut"; note != want {
		t.Errorf("Note = %q, want %q", note, want)
	}
}

func TestReadTakesThePersonsWordForAHeading(t *testing.T) {
	options := Options{Columns: map[string]string{"AMOUNT": "Quantity", " ring": "bin", "Note": "value"}}
	got := mustRead(t, "kind,Qty,Amount,Ring,Note,bin\nresistor,old,100,left,4k7,right\n", options)
	if len(got.Rows) != 1 {
		t.Fatalf("problems %v", got.Problems)
	}
	// What the person says a field is goes before what is recognised.
	want := inventory.Receipt{Part: inventory.Part{Kind: inventory.Resistor, Value: 4700}, Quantity: 100, Bin: "left", Note: "Qty: old; bin: right"}
	if diff := cmp.Diff(want, got.Rows[0].Receipt); diff != "" {
		t.Errorf("receipt (-want +got):\n%s", diff)
	}
}

func TestReadNamesAllProblemsOfARow(t *testing.T) {
	got := mustRead(t, "Kind;Value;Tol;Qty;Price;V;TCR;Vf\n"+
		"resistor;4k7;1%;10;;;;\n"+
		"resistor;4x7;x%;-3;1,234;much;warm;0\n", Options{})
	if len(got.Rows) != 1 || len(got.Rejected) != 1 {
		t.Fatalf("%d rows, %d rejected", len(got.Rows), len(got.Rejected))
	}
	var columns []string
	for _, p := range got.Problems {
		if p.File != "stock.csv" || p.Line != 3 || p.Reason == "" || got.Columns[p.Number-1].Heading != p.Column || got.Rejected[0].Cells[p.Number-1] != p.Value {
			t.Errorf("problem %+v", p)
		}
		columns = append(columns, p.Column)
	}
	slices.Sort(columns)
	if want := []string{"Price", "Qty", "TCR", "Tol", "Value", "Vf"}; !slices.Equal(columns, want) {
		t.Errorf("problems with %v, want %v", columns, want)
	}
	for _, p := range got.Problems {
		if p.Column == "Qty" {
			if got, want := p.String(), `stock.csv, line 3, column 4 "Qty", "-3": a quantity is never negative: import books what came in; a stocktake states what is there`; got != want {
				t.Errorf("String() = %s, want %s", got, want)
			}
		}
	}
}

func TestRejectMovesRowsThatTheDrawerRefuses(t *testing.T) {
	got := mustRead(t, "kind,value,quantity\nresistor,1k,1\nresistor,x,1\nresistor,2k,1\n", Options{})
	got.Reject(Problem{File: "stock.csv", Line: 2, Reason: "the drawer is full"})
	if len(got.Rows) != 1 || got.Rows[0].Line != 4 || got.RowCount() != 3 {
		t.Errorf("rows %v", got.Rows)
	}
	if len(got.Rejected) != 2 || got.Rejected[0].Line != 2 || got.Problems[0].Line != 2 || got.Problems[1].Line != 3 {
		t.Errorf("rejected %v, problems %v", got.Rejected, got.Problems)
	}
	if want := "reason,kind,value,quantity\nline 2: the drawer is full,resistor,1k,1\n"; !strings.HasPrefix(string(Rejects(got)), want) {
		t.Errorf("rejects:\n%s", Rejects(got))
	}
}
