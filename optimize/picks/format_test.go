package picks

import (
	"bytes"
	"strings"
	"testing"

	"tickdrawer/inventory"
)

func TestTheEndingChoosesTheFormat(t *testing.T) {
	for name, want := range map[string]Format{"picks.xlsx": XLSX, "PICKS.XLSX": XLSX, "out/my.picks.csv": CSV, ".csv": CSV} {
		if got, err := ForFile(name); err != nil || got != want {
			t.Errorf("ForFile(%q) = %v, %v; want %v", name, got, err, want)
		}
	}
	for name, want := range map[string]string{"picks.ods": ".ods files", "picks": "no ending", "": "no ending", "picks.": "no ending", "picks.xls": ".xls files", "csv": "no ending"} {
		_, err := ForFile(name)
		if inventory.ReasonOf(err) != inventory.Invalid || !strings.Contains(err.Error(), want) || !strings.Contains(err.Error(), ".xlsx") || !strings.Contains(err.Error(), ".csv") {
			t.Errorf("ForFile(%q): %v; want %q and both endings", name, err, want)
		}
	}
}

func TestDocumentIsThatOfTheFormat(t *testing.T) {
	plan := beaconPlan()
	workbook, err := XLSX.Document(plan, testOptions)
	if err != nil || !bytes.HasPrefix(workbook, []byte("PK\x03\x04")) { // a ZIP archive
		t.Errorf("XLSX: %.4q, %v", workbook, err)
	}
	if table, err := CSV.Document(plan, testOptions); err != nil || !bytes.Equal(table, PicksCSV(plan)) {
		t.Errorf("CSV: %q, %v", table, err)
	}
	if _, err := Format(0).Document(plan, testOptions); inventory.ReasonOf(err) != inventory.Invalid {
		t.Errorf("no format: %v", err)
	}
}
