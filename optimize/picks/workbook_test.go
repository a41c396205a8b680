package picks

import (
	"archive/zip"
	"bytes"
	"context"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/xuri/excelize/v2"
	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/allot"
)

// fatal is what *testing.T and *rapid.T share here.
type fatal interface{ Fatalf(string, ...any) }

// opened returns the plan's workbook as excelize reads it.
func opened(t fatal, plan optimize.Plan, opts Options) *excelize.File {
	content, err := Workbook(plan, opts)
	if err != nil {
		t.Fatalf("%v", err)
	}
	file, err := excelize.OpenReader(bytes.NewReader(content))
	if err != nil {
		t.Fatalf("%v", err)
	}
	return file
}

// cellsOf returns the sheet's stored values, each row as wide as the longest.
func cellsOf(t fatal, file *excelize.File, sheet string) [][]string {
	rows, err := file.GetRows(sheet, excelize.Options{RawCellValue: true})
	if err != nil {
		t.Fatalf("%v", err)
	}
	widest := 0
	for _, row := range rows {
		widest = max(widest, len(row))
	}
	for i, row := range rows {
		rows[i] = append(row, make([]string, widest-len(row))...)
	}
	return rows
}

// tableOf returns the rows below the sheet's only row of the headings.
func tableOf(t fatal, file *excelize.File, sheet string, headings []string) [][]string {
	rows := cellsOf(t, file, sheet)
	for i, row := range rows {
		if slices.Equal(row[:min(len(row), len(headings))], headings) {
			return rows[i+1:]
		}
	}
	t.Fatalf("sheet %s has no row of the headings %q:\n%q", sheet, headings, rows)
	return nil
}

var everyPlan = map[string]func() optimize.Plan{
	"beacon": beaconPlan, "short": shortPlan, "hostile": hostilePlan,
	"300 picks": func() optimize.Plan { return largePlan(300) },
	"empty":     func() optimize.Plan { return optimize.Plan{} },
}

func TestPicksSheetIsThePlanCellByCell(t *testing.T) {
	for name, build := range everyPlan {
		if name == "empty" {
			continue
		}
		plan := build()
		file := opened(t, plan, testOptions)
		rows := tableOf(t, file, sheetPicks, headings)
		if len(rows) != len(plan.Picks) {
			t.Fatalf("%s: %d rows, %d picks", name, len(rows), len(plan.Picks))
		}
		byLot := map[string]optimize.PlannedPick{}
		for _, pick := range plan.Picks {
			byLot[fmt.Sprint(pick.Lot.ID)] = pick
		}
		previous := ""
		for _, row := range rows {
			pick, found := byLot[row[2]]
			if !found {
				t.Fatalf("%s: lot %q is not in the plan, or is there twice", name, row[2])
			}
			delete(byLot, row[2])
			bin := printable(pick.Lot.Bin)
			if bin == "" {
				bin = "not stated"
			}
			want := []string{
				"", bin, fmt.Sprint(pick.Lot.ID), string(pick.Lot.Part.Kind), printable(valueText(pick.Lot.Part)), "", referenceList(pick.References),
				fmt.Sprint(pick.PerBoard), fmt.Sprint(pick.Quantity), fmt.Sprint(pick.Lot.OnHand - pick.Quantity),
			}
			want[5] = row[5] // below
			if !slices.Equal(row[:10], want) {
				t.Errorf("%s: row %q, want %q", name, row[:10], want)
			}
			if tolerance := pick.Lot.Part.Tolerance; (tolerance == nil) != (row[5] == "") || tolerance != nil && tolerance.Plus == 0.05 && row[5] != "±5 %" {
				t.Errorf("%s: tolerance %q of %+v", name, row[5], tolerance)
			}
			if out := pick.Lot.OnHand == pick.Quantity; out != strings.HasPrefix(row[10], "runs out") {
				t.Errorf("%s: %d left of lot %d and the remark %q", name, pick.Lot.OnHand-pick.Quantity, pick.Lot.ID, row[10])
			}
			if inventory.NaturalCompare(previous, pick.Lot.Bin) > 0 {
				t.Errorf("%s: bin %q comes after %q", name, pick.Lot.Bin, previous)
			}
			previous = pick.Lot.Bin
		}
	}
}

func TestNumbersAreNumbersAndTextsAreTexts(t *testing.T) {
	for name, build := range everyPlan {
		file := opened(t, build(), testOptions)
		for _, sheet := range file.GetSheetList() {
			for i, row := range cellsOf(t, file, sheet) {
				for j, value := range row {
					at, _ := excelize.CoordinatesToCellName(j+1, i+1)
					kind, err := file.GetCellType(sheet, at)
					if err != nil {
						t.Fatal(err)
					}
					formula, _ := file.GetCellFormula(sheet, at)
					switch _, notNumber := strconv.ParseFloat(value, 64); {
					case formula != "":
						if !strings.HasPrefix(formula, "IF(ISNUMBER(J") || value != "" {
							t.Errorf("%s, %s!%s: formula %q with the value %q", name, sheet, at, formula, value)
						}
					case value == "":
					case notNumber == nil && kind != excelize.CellTypeUnset && kind != excelize.CellTypeNumber:
						t.Errorf("%s, %s!%s: the number %q is of type %d", name, sheet, at, value, kind)
					case notNumber != nil && kind != excelize.CellTypeSharedString:
						t.Errorf("%s, %s!%s: the text %q is of type %d", name, sheet, at, value, kind)
					}
					if strings.Contains(value, "NaN") || strings.Contains(value, "Inf") {
						t.Errorf("%s, %s!%s: %q", name, sheet, at, value)
					}
				}
			}
		}
	}
}

func TestHostileTextsStayAsTheyAre(t *testing.T) {
	content, err := Workbook(hostilePlan(), testOptions)
	if err != nil {
		t.Fatal(err)
	}
	file, err := excelize.OpenReader(bytes.NewReader(content))
	if err != nil {
		t.Fatal(err)
	}
	held := map[string]bool{}
	for _, sheet := range file.GetSheetList() {
		for i, row := range cellsOf(t, file, sheet) {
			for j, text := range row {
				held[text] = true
				if !runs(text) {
					continue
				}
				// The cell stays text when it is edited.
				at, _ := excelize.CoordinatesToCellName(j+1, i+1)
				style, err := file.GetCellStyle(sheet, at)
				if err != nil {
					t.Fatal(err)
				}
				if quoted := file.Styles.CellXfs.Xf[style].QuotePrefix; quoted == nil || !*quoted {
					t.Errorf("%s!%s: %q would become a formula when it is edited", sheet, at, text)
				}
			}
		}
	}
	for _, text := range []string{
		"=cmd|' /C calc'!A0", "-2+3", "+A1", "\rbin", "=R1", "@SUM(A1)", "+U1", `=HYPERLINK("http://example.invalid","X")`,
		"抽斗 3 – Größe µ Ω", "VIS À TÊTE FRAISÉE «M3» 🔩 <&> \"QUOTED\"", "bell\uFFFD and \uFFFD", "_x000D_ AND &#10;",
		"a stage with forty characters in its nam", "=1+1, 50 V, \tindented", "250 mW, axial, @note", "@SUM(A1) (1 µF)",
	} {
		if !held[text] {
			t.Errorf("no cell holds %q", text)
		}
	}
	for _, xf := range file.Styles.CellXfs.Xf[:2] {
		if xf.QuotePrefix != nil && *xf.QuotePrefix {
			t.Error("plain texts are marked as literal too")
		}
	}
}

func TestTextsComeBackFromTheWorkbook(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		plan := optimize.Plan{Job: optimize.Job{Name: rapid.String().Draw(t, "job"), Boards: 1}, Built: 1}
		text := rapid.OneOf(rapid.String(), rapid.StringMatching(`[_x0-9D]{0,16}`), rapid.StringMatching(`[=@\t\r\n a-]{1,6}`))
		lot := numbered(1, text.Draw(t, "bin"), inventory.Other, text.Draw(t, "part number"), 9)
		plan.Variants = []optimize.Variant{{Boards: 1, Fixed: []optimize.Place{{Reference: text.Draw(t, "reference"), Lot: lot}}}}
		file := opened(t, withPicks(plan), Options{})
		row := tableOf(t, file, sheetPicks, headings)[0]
		want := []string{printable(lot.Bin), printable(lot.Part.PartNumber), printable(plan.Variants[0].Fixed[0].Reference)}
		if want[0] == "" {
			want[0] = "not stated"
		}
		if got := []string{row[1], row[4], row[6]}; !slices.Equal(got, want) {
			t.Fatalf("wrote %q, read %q", want, got)
		}
	})
}

func TestEqualInputGivesEqualBytes(t *testing.T) {
	first, err := Workbook(hostilePlan(), testOptions)
	if err != nil {
		t.Fatal(err)
	}
	for range 3 {
		if again, err := Workbook(hostilePlan(), testOptions); err != nil || !bytes.Equal(first, again) {
			t.Fatalf("other bytes (%v)", err)
		}
	}
	later := testOptions
	later.Now = later.Now.Add(24 * time.Hour)
	if other, _ := Workbook(hostilePlan(), later); bytes.Equal(first, other) {
		t.Error("the day makes no difference")
	}
}

func TestPropertiesSayWhatAndWhen(t *testing.T) {
	props, err := opened(t, beaconPlan(), testOptions).GetDocProps()
	if err != nil {
		t.Fatal(err)
	}
	if props.Created != "2026-03-14T09:30:00Z" || props.Modified != props.Created || props.Title != "Picks for harbour beacon" || props.Creator != "tickdrawer" {
		t.Errorf("properties %+v", props)
	}
}

func TestEveryFileInTheWorkbookIsWellFormedXML(t *testing.T) {
	for name, build := range everyPlan {
		content, err := Workbook(build(), testOptions)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
		if err != nil {
			t.Fatal(err)
		}
		for _, entry := range archive.File {
			r, err := entry.Open()
			if err != nil {
				t.Fatal(err)
			}
			decoder := xml.NewDecoder(r)
			for err == nil {
				_, err = decoder.Token()
			}
			if !errors.Is(err, io.EOF) {
				t.Errorf("%s, %s: %v", name, entry.Name, err)
			}
		}
	}
}

func TestSheetsAreThoseThatThePlanNeeds(t *testing.T) {
	for name, want := range map[string][]string{
		"beacon": {"Picks", "Board", "Timing", "Cautions"},
		"short":  {"Picks", "Variant 1", "Variant 2", "Timing", "Shortages", "Cautions"},
		"empty":  {"Picks", "Cautions"},
	} {
		file := opened(t, everyPlan[name](), testOptions)
		if got := file.GetSheetList(); !slices.Equal(got, want) {
			t.Errorf("%s: sheets %q, want %q", name, got, want)
		}
		if file.GetActiveSheetIndex() != 0 {
			t.Errorf("%s: sheet %d is shown first", name, file.GetActiveSheetIndex())
		}
	}
}

func TestShortagesAreListedWithWhatWasLookedFor(t *testing.T) {
	file := opened(t, shortPlan(), testOptions)
	rows := tableOf(t, file, sheetShortages, []string{"References", "Kind", "Value", "Short", "Why"})
	want := [][]string{
		{"U1, U10", "timer", "TLC555", "2", "TLC555: 8 available in lot 40, 10 boards with this fit need 10"},
		{"R1", "resistor", "2.2 kΩ", "5", "2.2 kΩ ±1 %: 5 available in lot 1"},
		{"spare stage", "other", "", "10", "no network of up to 2 parts a position meets stage spare stage, not even for one board"},
	}
	if !slices.EqualFunc(rows, want, slices.Equal[[]string]) {
		t.Errorf("shortages %q", rows)
	}
	cells := fmt.Sprint(cellsOf(t, file, sheetPicks))
	for _, said := range []string{"8 boards of 10", "does not hold enough for 2 boards", "before it was shown that no better plan exists", "for some of the boards"} {
		if !strings.Contains(cells, said) {
			t.Errorf("the picks do not say %q", said)
		}
	}
}

func TestAPlanThatBuildsNothingSaysSo(t *testing.T) {
	plan := optimize.Plan{Job: optimize.Job{Name: "none", Boards: 3}, Shortages: []optimize.Shortage{{References: []string{"one"}, Kind: inventory.Other, Short: 3, Why: "nothing meets it"}}}
	cells := fmt.Sprint(cellsOf(t, opened(t, plan, Options{}), sheetPicks))
	if !strings.Contains(cells, "0 boards of 3") || !strings.Contains(cells, "Nothing to pick") {
		t.Errorf("picks: %s", cells)
	}
}

func TestLotsThatRunOutOrAreHeldAreMarkedInWords(t *testing.T) {
	for _, test := range []struct {
		onHand, reserved, quantity, perBoard int64
		want                                 string
	}{
		{10, 0, 5, 1, ""},
		{5, 0, 5, 1, "runs out"},
		{10, 5, 5, 1, "runs out: the rest is held for other kits"},
		{10, 2, 5, 1, "2 of the rest are held for other kits"},
		{10, 0, 3, 1, "for some of the boards"},
		{3, 0, 3, 1, "runs out; for some of the boards"},
		{20, 0, 10, 2, ""},
	} {
		pick := optimize.PlannedPick{Lot: inventory.Lot{OnHand: test.onHand, Reserved: test.reserved}, Quantity: test.quantity, PerBoard: test.perBoard}
		if got := remark(optimize.Plan{Built: 5}, pick); got != test.want {
			t.Errorf("%+v: %q", test, got)
		}
	}
}

func TestAComputedPlanIsWrittenWhole(t *testing.T) {
	// Two lots of one timer, as the plan draws them; 2 kΩ of two pieces.
	lots := []inventory.Lot{
		resistor(1, "A2", 1000, 40), resistor(2, "A10", 470, 40), capacitor(3, "B1", 1e-6, "film", 40),
		numbered(4, "D1", inventory.Timer, "NE555", 2), numbered(5, "D2", inventory.Timer, "NE555", 9),
	}
	s := spec(requirement(optimize.Pulse, math.Log(3)*2000e-6, 0.02))
	s.Circuits, s.PartsEach, s.PartsC, s.Boards = []string{"one-shot"}, 2, 1, 1
	s.Supply, s.Ambient = optimize.Exactly(9), optimize.Exactly(25)
	job := optimize.Job{
		Name: "computed", Boards: 5, Stages: []optimize.Stage{{Name: "hold", Spec: s, References: map[string]string{"r": "R1"}}},
		Fixed: []optimize.FixedLine{{References: []string{"R2", "R3"}, Part: inventory.Part{Kind: inventory.Resistor, Value: 470}}},
	}
	plan, err := allot.Plan(context.Background(), job, lots)
	if err != nil || plan.Built != 5 {
		t.Fatalf("built %d: %v, %+v", plan.Built, err, plan.Shortages)
	}
	file := opened(t, plan, testOptions)
	inAll := map[string]string{}
	for _, row := range tableOf(t, file, sheetPicks, headings) {
		inAll[row[2]] = row[8] + " " + row[6]
	}
	want := map[string]string{"1": "10 R1a, R1b", "2": "10 R2, R3", "3": "5 hold.c", "4": "2 hold.timer", "5": "3 hold.timer"}
	if !maps.Equal(inAll, want) {
		t.Errorf("picks %v, want %v", inAll, want)
	}
	cells := fmt.Sprint(cellsOf(t, file, sheetBoard))
	for _, said := range []string{"R1a (1 kΩ) + R1b (1 kΩ)", "some boards: bin D1, lot 4"} {
		if !strings.Contains(cells, said) {
			t.Errorf("the board's sheet does not say %q", said)
		}
	}
}

func BenchmarkWorkbookOf500Picks(b *testing.B) {
	plan := largePlan(500)
	if len(plan.Picks) < 500 {
		b.Fatalf("%d picks", len(plan.Picks))
	}
	for b.Loop() {
		content, err := Workbook(plan, testOptions)
		if err != nil {
			b.Fatal(err)
		}
		b.SetBytes(int64(len(content)))
	}
}
