package picks

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// A cell holds 32 767 characters and a row has 409 points at most (from memory;
// excelize.TotalCellChars and excelize.MaxRowHeight say the same).

func TestATextLongerThanACellHoldsIsCutWhereAReaderSeesIt(t *testing.T) {
	for text, want := range map[string]string{
		strings.Repeat("a", 32767): strings.Repeat("a", 32767),
		strings.Repeat("a", 32768): strings.Repeat("a", 32767-33) + cutShort,
		strings.Repeat("🔩", 20000): strings.Repeat("🔩", (32767-33)/2) + cutShort,
		strings.Repeat("µ", 20000): strings.Repeat("µ", 20000),
	} {
		lot := numbered(1, "A1", inventory.Other, "X", 9)
		lot.Note = text
		plan := withPicks(optimize.Plan{Variants: []optimize.Variant{{Boards: 1, Fixed: []optimize.Place{{Reference: "X1", Lot: lot}}}}})
		if got := tableOf(t, opened(t, plan, Options{}), sheetPicks, headings)[0][11]; got != want {
			t.Errorf("%d bytes become %d: %.20q … %q", len(text), len(got), got, got[max(0, len(got)-50):])
		}
	}
}

func TestAnyNumberOfReferencesIsShownWhole(t *testing.T) {
	lot := resistor(1, "A1", 470, 5000)
	variant := optimize.Variant{Boards: 2}
	for i := range 600 {
		variant.Fixed = append(variant.Fixed, optimize.Place{Reference: fmt.Sprintf("R%d", 1000+i), Lot: lot})
	}
	file := opened(t, withPicks(optimize.Plan{Variants: []optimize.Variant{variant}}), Options{})
	rows, err := file.GetRows(sheetPicks)
	if err != nil {
		t.Fatal(err)
	}
	height, err := file.GetRowHeight(sheetPicks, len(rows))
	if err != nil {
		t.Fatal(err)
	}
	column, err := file.GetColWidth(sheetPicks, "G")
	if err != nil {
		t.Fatal(err)
	}
	references := rows[len(rows)-1][6]
	if need := float64(lineCount(references, column-cellMargin/2))*linePt + paddingPt; need > height || height > 409 {
		t.Errorf("%d characters in a column of %.0f need %.0f pt and have %.0f", len(references), column, need, height)
	}
}

func TestTimesThatNeverEndAreADashWithANote(t *testing.T) {
	plan := beaconPlan()
	fit := &plan.Variants[0].Stages[0].Fit
	fit.WorstCase.Low.Max, fit.WorstCase.Period.Max, fit.WorstCase.Frequency.Min, fit.WorstCase.Duty.Min = math.Inf(1), math.Inf(1), 0, math.NaN()
	fit.UsedWorst = math.Inf(1)
	file := opened(t, plan, testOptions)
	for _, sheet := range []string{sheetBoard, sheetTiming} {
		cells := fmt.Sprint(cellsOf(t, file, sheet))
		if !strings.Contains(cells, unendingNote) || strings.Contains(cells, "NaN") || strings.Contains(cells, "Inf") {
			t.Errorf("%s: %s", sheet, cells)
		}
	}
	rows := cellsOf(t, file, sheetTiming)
	dashes := map[string]string{}
	for _, row := range rows {
		if row[1] == "slow blink" {
			dashes[row[4]] = row[10] + " to " + row[11]
		}
	}
	for measure, ends := range map[string][2]bool{"low time": {false, true}, "period": {false, true}, "duty, high": {true, false}, "high time": {}} {
		from, to, _ := strings.Cut(dashes[measure], " to ")
		if (from == unending) != ends[0] || (to == unending) != ends[1] {
			t.Errorf("%s: %q", measure, dashes[measure])
		}
	}
	for _, sheet := range []string{sheetBoard, sheetTiming} {
		if strings.Contains(fmt.Sprint(cellsOf(t, opened(t, beaconPlan(), testOptions), sheet)), unendingNote) {
			t.Errorf("%s: the note stands where every figure is a number", sheet)
		}
	}
}
