package importers

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// converted returns the file as LibreOffice writes it in another format, read
// with the import filter's options.
func converted(t *testing.T, content []byte, infilter, format, ending string) []byte {
	t.Helper()
	soffice, err := exec.LookPath("soffice")
	if err != nil {
		if os.Getenv("TICKDRAWER_REFERENCES") == "required" {
			t.Fatal("LibreOffice (soffice) is required and not installed")
		}
		t.Skip("LibreOffice (soffice) is not installed: its reading of CSV is not compared")
	}
	folder := t.TempDir()
	file := filepath.Join(folder, "stock.csv")
	if err := os.WriteFile(file, content, 0o600); err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(folder, "out")
	command := exec.Command(soffice, "-env:UserInstallation=file://"+filepath.Join(folder, "profile"), "--headless",
		"--infilter="+infilter, "--convert-to", format, "--outdir", out, file)
	if said, err := command.CombinedOutput(); err != nil {
		t.Fatalf("soffice: %v\n%s", err, said)
	}
	result, err := os.ReadFile(filepath.Join(out, "stock."+ending))
	if err != nil {
		t.Fatal(err)
	}
	return result
}

func TestRejectsOpenInLibreOfficeWithoutFormulas(t *testing.T) {
	const table = "kind,value,quantity,note\nR,1k,0,=1+1\nR,1k,=2*3,\"=HYPERLINK(\"\"x\"\",\"\"y\"\")\"\nR,-1k,-5,@SUM(1;2)\n"
	const filter, formula = "CSV:44,34,76,1", "table:formula"
	// LibreOffice does run the cells as they came.
	if sheet := converted(t, []byte(table), filter, "fods", "fods"); !bytes.Contains(sheet, []byte(formula)) {
		t.Fatal("LibreOffice runs no cell of the table as a formula: the check below shows nothing")
	}
	rejects := Rejects(mustRead(t, table, Options{}))
	if sheet := converted(t, rejects, filter, "fods", "fods"); bytes.Contains(sheet, []byte(formula)) {
		t.Errorf("LibreOffice runs a cell of the rejects as a formula:\n%s", rejects)
	}
}

func TestReadReadsWhatLibreOfficeWrites(t *testing.T) {
	const table = "Art,Wert,Menge,Fach,Preis,Bemerkung\n" +
		"Widerstand,\"4,7k\",100,A1,\"0,012 €\",\"sagt \"\"für Töne\"\"; µ, |\"\n" +
		"capacitor,100nF,20,,,\"zwei\nZeilen\"\n" +
		"diode,1N4148,50,B2,,\n"
	want := mustRead(t, table, Options{})
	if len(want.Rows) != 3 {
		t.Fatalf("problems %v", want.Problems)
	}
	// The filter's options: delimiter, quote, character set (of LibreOffice's
	// numbering: 76 UTF-8, 65535 UTF-16, 1 Windows-1252).
	for _, test := range []struct{ output, detected string }{
		{"59,34,1", `delimiter ";", windows-1252, headings on line 1`},
		{"9,34,65535", `delimiter tab, utf-16le, headings on line 1`},
		{"124,34,76", `delimiter "|", utf-8, headings on line 1`},
	} {
		content := converted(t, []byte(table), "CSV:44,34,76,1", "csv:Text - txt - csv (StarCalc):"+test.output, "csv")
		got := mustRead(t, string(content), Options{})
		if got.Detected != test.detected {
			t.Errorf("Detected = %s, want %s", got.Detected, test.detected)
		}
		for i := range want.Rows {
			if i >= len(got.Rows) {
				t.Errorf("%s: %d rows, problems %v", test.output, len(got.Rows), got.Problems)
				break
			}
			if diff := cmp.Diff(want.Rows[i].Receipt, got.Rows[i].Receipt); diff != "" {
				t.Errorf("%s, row %d (-want +got):\n%s", test.output, i, diff)
			}
		}
	}
}
