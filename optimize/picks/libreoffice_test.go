package picks

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"tickdrawer/optimize"
)

// converted returns the folder in which LibreOffice has written the workbook in
// another format.
func converted(t *testing.T, name string, content []byte, format string) string {
	t.Helper()
	soffice, err := exec.LookPath("soffice")
	if err != nil {
		if os.Getenv("TICKDRAWER_REFERENCES") == "required" {
			t.Fatal("LibreOffice (soffice) is required and not installed")
		}
		t.Skip("LibreOffice (soffice) is not installed: its reading of the workbook is not compared")
	}
	folder := t.TempDir()
	file := filepath.Join(folder, name+".xlsx")
	if err := os.WriteFile(file, content, 0o600); err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(folder, "out")
	command := exec.Command(soffice, "-env:UserInstallation=file://"+filepath.Join(folder, "profile"), "--headless", "--convert-to", format, "--outdir", out, file)
	if said, err := command.CombinedOutput(); err != nil {
		t.Fatalf("soffice: %v\n%s", err, said)
	}
	return out
}

// everySheet is LibreOffice's CSV filter: comma, quote, UTF-8, numbers in full and
// not as shown, every sheet in a file of its own.
const everySheet = "csv:Text - txt - csv (StarCalc):44,34,76,1,,0,false,false,false,false,false,-1"

func TestLibreOfficeReadsTheSameCells(t *testing.T) {
	for name, plan := range map[string]optimize.Plan{"beacon": beaconPlan(), "short": shortPlan(), "hostile": hostilePlan()} {
		content, err := Workbook(plan, testOptions)
		if err != nil {
			t.Fatal(err)
		}
		file, err := excelize.OpenReader(bytes.NewReader(content))
		if err != nil {
			t.Fatal(err)
		}
		folder := converted(t, name, content, everySheet)
		for _, sheet := range file.GetSheetList() {
			text, err := os.ReadFile(filepath.Join(folder, name+"-"+sheet+".csv"))
			if err != nil {
				t.Fatal(err)
			}
			reader := csv.NewReader(bytes.NewReader(text))
			got, err := reader.ReadAll()
			if err != nil {
				t.Fatalf("%s, %s: %v", name, sheet, err)
			}
			want := cellsOf(t, file, sheet)
			if len(got) != len(want) {
				t.Errorf("%s, %s: %d rows, want %d", name, sheet, len(got), len(want))
				continue
			}
			for i, row := range want {
				for j, cell := range row {
					if !sameCell(got[i][j], cell) {
						t.Errorf("%s, %s, row %d, column %d: LibreOffice reads %q, written %q", name, sheet, i+1, j+1, got[i][j], cell)
					}
				}
			}
		}
	}
}

// sameCell compares texts by their visible characters (a CSV reader takes line
// ends as it likes) and numbers by their value.
func sameCell(got, want string) bool {
	if x, err := strconv.ParseFloat(want, 64); err == nil {
		y, err := strconv.ParseFloat(strings.TrimSuffix(got, "%"), 64)
		if strings.HasSuffix(got, "%") {
			y = shifted(y, -2)
		}
		return err == nil && x == y
	}
	return strings.Join(strings.Fields(got), " ") == strings.Join(strings.Fields(want), " ")
}

func TestLibreOfficeJudgesWhatIsMeasured(t *testing.T) {
	content, err := Workbook(beaconPlan(), testOptions)
	if err != nil {
		t.Fatal(err)
	}
	file, err := excelize.OpenReader(bytes.NewReader(content))
	if err != nil {
		t.Fatal(err)
	}
	verdicts := map[int]string{}
	for i, row := range cellsOf(t, file, sheetBoard) {
		measured, want := 0.0, ""
		switch row[1] {
		case "period": // s: 4 ±3 %
			measured, want = 4.12, "pass"
		case "duty, high": // 55 % to 65 %
			measured, want = 0.549, "fail"
		default: // left empty: no verdict
			continue
		}
		if err := file.SetCellValue(sheetBoard, fmt.Sprintf("J%d", i+1), measured); err != nil {
			t.Fatal(err)
		}
		verdicts[i] = want
	}
	if err := file.UpdateLinkedValue(); err != nil {
		t.Fatal(err)
	}
	edited, err := file.WriteToBuffer()
	if err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile(filepath.Join(converted(t, "measured", edited.Bytes(), everySheet), "measured-"+sheetBoard+".csv"))
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for i, row := range rows {
		if row[10] == "Remark" || row[10] == "Verdict" || row[10] == "polarised" {
			continue
		}
		if row[10] != verdicts[i] {
			t.Errorf("row %d, %s measured %s: verdict %q, want %q", i+1, row[1], row[9], row[10], verdicts[i])
		}
	}
	if len(verdicts) != 2 {
		t.Errorf("%d readings typed", len(verdicts))
	}
}

func TestLibreOfficePrintsEverySheetOnePageWide(t *testing.T) {
	content, err := Workbook(hostilePlan(), testOptions)
	if err != nil {
		t.Fatal(err)
	}
	pdf, err := os.ReadFile(filepath.Join(converted(t, "printed", content, "pdf"), "printed.pdf"))
	if err != nil {
		t.Fatal(err)
	}
	// Four short sheets are four pages of A4, landscape: 842 by 595 pt.
	if pages := regexp.MustCompile(`/Type\s*/Page\b`).FindAll(pdf, -1); len(pages) != 4 {
		t.Errorf("%d pages, want 4", len(pages))
	}
	for _, box := range regexp.MustCompile(`/MediaBox\s*\[0 0 (\d+)[.\d]* (\d+)[.\d]*\]`).FindAllSubmatch(pdf, -1) {
		if string(box[1]) != "841" || string(box[2]) != "595" {
			t.Errorf("a page of %s by %s pt", box[1], box[2])
		}
	}
}
