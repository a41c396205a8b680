package importers

import (
	"bytes"
	"encoding/csv"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestRejectsKeepCellsHeadingsAndDelimiter(t *testing.T) {
	got := mustRead(t, "Bestand\r\nArt;Wert;Menge;Farbe\r\nR;4,7k;1;rot\r\nR; 4,7x ;1;\"a;\"\"b\"\"\"\r\nR;1k;0\r\n", Options{})
	want := "reason;Art;Wert;Menge;Farbe\r\n" +
		`line 4: Wert: "x" is no prefix or unit of a resistance; write it as 4k7, 4.7k or 4R7;R;" 4,7x ";1;"a;""b"""` + "\r\n" +
		"line 5: Menge: nothing came in: leave the row out, or import the file as a stocktake;R;1k;0\r\n"
	// The first reason holds quotes of its own, which RFC 4180 doubles.
	want = strings.Replace(want, `line 4: Wert: "x" is no prefix or unit of a resistance; write it as 4k7, 4.7k or 4R7`, `"line 4: Wert: ""x"" is no prefix or unit of a resistance; write it as 4k7, 4.7k or 4R7"`, 1)
	if text := string(Rejects(got)); text != want {
		t.Errorf("rejects:\n%s\nwant:\n%s", text, want)
	}
	if text := Rejects(mustRead(t, "kind,value,quantity\nR,1k,1\n", Options{})); text != nil {
		t.Errorf("rejects of a good file: %s", text)
	}
}

func TestRejectsBeginWithAMarkUnlessTheFileWasPlainUTF8(t *testing.T) {
	for text, marked := range map[string]bool{
		"kind,value,quantity\nR,1kΩ,0\n":          false,
		"\uFEFFkind,value,quantity\nR,1kΩ,0\n":    true,
		"kind,value,quantity,note\nR,1k,0,\xB5\n": true, // Windows-1252
	} {
		if got := bytes.HasPrefix(Rejects(mustRead(t, text, Options{})), []byte("\uFEFF")); got != marked {
			t.Errorf("%q: mark %v, want %v", text, got, marked)
		}
	}
}

func TestMendedRejectsReadWithoutTheReason(t *testing.T) {
	rejects := Rejects(mustRead(t, "kind,value,quantity,note\nR,1k,-5,=1+1\nR,2k,0,x\n", Options{}))
	if !strings.Contains(string(rejects), ",-5,'=1+1\n") {
		t.Fatalf("rejects:\n%s", rejects)
	}
	again := mustRead(t, strings.Replace(string(rejects), "-5", "5", 1), Options{})
	if len(again.Rows) != 1 || again.Rows[0].Receipt.Note != "=1+1" || len(again.Rejected) != 1 {
		t.Errorf("rows %+v, problems %v", again.Rows, again.Problems)
	}
	if !strings.Contains(again.Detected, `column "reason" of an earlier import left out`) {
		t.Errorf("Detected = %s", again.Detected)
	}
	if twice := string(Rejects(again)); strings.Count(twice, "reason") != 1 {
		t.Errorf("rejects of rejects:\n%s", twice)
	}
}

func TestGuardedCellsAreNoFormulas(t *testing.T) {
	for cell, want := range map[string]string{
		"=1+1": "'=1+1", "+A1": "'+A1", "-A1": "'-A1", "@SUM(A1)": "'@SUM(A1)", "\t=1": "'\t=1", "\r=1": "'\r=1", " =1": "' =1", "＝1": "'＝1", "-20/+80%": "'-20/+80%", "--1": "'--1", "-5k": "'-5k",
		"'=1": "''=1", "''=1": "'''=1", "'-5": "''-5",
		"-5": "-5", "+5": "+5", "-0,5": "-0,5", "-20%": "-20%", "100": "100", "4k7": "4k7", "": "", "'": "'", "'tis": "'tis", "±5%": "±5%",
	} {
		if got := guarded(cell); got != want {
			t.Errorf("guarded(%q) = %q, want %q", cell, got, want)
		}
		if got := unguarded(guarded(cell)); got != cell {
			t.Errorf("unguarded(guarded(%q)) = %q", cell, got)
		}
	}
}

// messyText draws texts of all that can go wrong in CSV, without control codes.
var messyText = rapid.Map(rapid.SliceOfN(rapid.SampledFrom([]string{
	"a", "Z", "7", " ", ",", ";", "\t", "|", `"`, "'", "=", "+", "-", "@", "\n", "\r", "µ", "Ω", "€", "é", ".", "%", "＝", "\u00a0", "\u2028", "😀",
}), 0, 12), func(parts []string) string { return strings.Join(parts, "") })

func TestRejectsReadBackAsTheSameCells(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		delimiter := rapid.SampledFrom([]rune{',', ';', '\t', '|'}).Draw(t, "delimiter")
		table := Table{
			Columns:   []Column{{Heading: "kind"}, {Heading: "value"}, {Heading: "quantity"}, {Heading: "note"}},
			Delimiter: delimiter,
			lineEnd:   rapid.SampledFrom([]string{"\n", "\r\n", "\r"}).Draw(t, "line end"),
			marked:    rapid.Bool().Draw(t, "marked"),
		}
		for i := range rapid.IntRange(1, 5).Draw(t, "rows") {
			// A quantity of none is always refused, so all rows come back as rejects.
			cells := []string{"R", messyText.Draw(t, "value"), "none", messyText.Draw(t, "note")}
			cells = append(cells, rapid.SliceOfN(messyText, 0, 2).Draw(t, "surplus")...)
			table.Rejected = append(table.Rejected, Row{Line: i + 2, Cells: cells})
			table.Problems = append(table.Problems, Problem{Line: i + 2, Column: "value", Reason: messyText.Draw(t, "reason")})
		}
		written := Rejects(table)
		again, err := Read("rejects.csv", written, Options{Delimiter: delimiter})
		if err != nil {
			t.Fatalf("%v\n%s", err, written)
		}
		if len(again.Rejected) != len(table.Rejected) || len(again.Rows) != 0 {
			t.Fatalf("%d rows rejected, want %d\n%s", len(again.Rejected), len(table.Rejected), written)
		}
		for i, row := range again.Rejected {
			if !slices.Equal(row.Cells[1:], table.Rejected[i].Cells) {
				t.Errorf("cells %q, want %q\n%s", row.Cells[1:], table.Rejected[i].Cells, written)
			}
		}
		noFormula(t, written, delimiter, table.lineEnd)
	})
}

// noFormula reads the CSV with the standard library's reader and checks that no
// cell begins as CWE-1236 says a formula does, unless it is a number.
func noFormula(t *rapid.T, written []byte, delimiter rune, lineEnd string) {
	text := strings.TrimPrefix(string(written), "\uFEFF")
	if lineEnd == "\r" {
		return // which encoding/csv does not know
	}
	r := csv.NewReader(strings.NewReader(text))
	r.Comma = delimiter
	r.FieldsPerRecord = -1
	records, err := r.ReadAll()
	if err != nil {
		t.Fatalf("encoding/csv: %v\n%s", err, written)
	}
	for _, record := range records {
		for _, cell := range record {
			if cell == "" || !strings.ContainsRune("=+-@\t\r\n", rune(cell[0])) {
				continue
			}
			number := strings.Replace(strings.TrimSuffix(cell, "%"), ",", ".", 1)
			if _, err := strconv.ParseFloat(number, 64); err != nil {
				t.Errorf("the cell %q may run as a formula\n%s", cell, written)
			}
		}
	}
}

func TestDelimitedAgreesWithTheStandardLibrary(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		delimiter := rapid.SampledFrom([]rune{',', ';', '\t', '|'}).Draw(t, "delimiter")
		records := rapid.SliceOfN(rapid.SliceOfN(messyText, 2, 4), 1, 5).Draw(t, "records")
		var written strings.Builder
		w := csv.NewWriter(&written)
		w.Comma = delimiter
		if err := w.WriteAll(records); err != nil {
			t.Fatal(err)
		}
		lines := newDelimited(written.String(), string(delimiter))
		line := 1
		for _, want := range records {
			got, err := lines.next()
			if err != nil {
				t.Fatalf("%v\n%s", err, written.String())
			}
			for i := range want {
				want[i] = unguarded(want[i])
			}
			if !slices.Equal(got.cells, want) {
				t.Fatalf("cells %q, want %q\n%s", got.cells, want, written.String())
			}
			if got.line != line {
				t.Fatalf("line %d, want %d", got.line, line)
			}
			line += 1 + lineEnds(strings.Join(want, "|")) // between cells there is no line end
		}
	})
}
