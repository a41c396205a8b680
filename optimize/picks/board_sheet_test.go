package picks

import (
	"archive/zip"
	"bytes"
	"fmt"
	"io"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// rowsUnder returns the rows of a sheet from below the headings, which begin at
// the column, up to the first that is empty there.
func rowsUnder(t *testing.T, rows [][]string, column int, headings ...string) [][]string {
	t.Helper()
	for i, row := range rows {
		var got []string
		for _, text := range row[column:] {
			if text != "" {
				got = append(got, text)
			}
		}
		if !slices.Equal(got, headings) {
			continue
		}
		var found [][]string
		for _, row := range rows[i+1:] {
			if row[column] == "" {
				break
			}
			found = append(found, row[column:])
		}
		return found
	}
	t.Fatalf("no row of the headings %q in %q", headings, rows)
	return nil
}

func TestKittingTableSaysWhichPartGoesWhere(t *testing.T) {
	rows := cellsOf(t, opened(t, beaconPlan(), testOptions), sheetBoard)
	var got []string
	for _, row := range rowsUnder(t, rows, 1, "Reference", "Stage", "Position", "Part", "Bin", "Lot", "Remark") {
		got = append(got, strings.Join([]string{row[0], row[1], row[3], row[4], row[7], row[8], row[9]}, "|"))
	}
	want := []string{
		"C1|slow blink|c|22 µF ±5 % electrolytic 50 V|B10|20|polarised",
		"C2|hold|c|100 nF ±5 % film 50 V|B9|21|",
		"C3|fixed line||100 nF ±5 % X7R 50 V|B9|22|",
		"C4|fixed line||100 nF ±5 % X7R 50 V|B9|22|",
		"D1|fixed line||LED 5 MM AMBER|not stated|50|",
		"R2a|slow blink|rb|220 kΩ ±1 % 250 mW|A10|3|",
		"R2b|slow blink|rb|220 kΩ ±1 % 250 mW|A1|4|",
		"R3|hold|r|22 kΩ ±1 % 250 mW|A10|2|",
		"R4|fixed line||470 Ω ±1 % 250 mW|A3|5|",
		"R10a|slow blink|ra|33 kΩ ±1 % 250 mW|A2|1|",
		"R10b|slow blink|ra|22 kΩ ±1 % 250 mW|A10|2|",
		"U1|slow blink|timer|NE555|D1|40|",
		"U2|hold|timer|NE555|D1|40|",
	}
	if !slices.Equal(got, want) {
		t.Errorf("kitting table:\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

func TestEveryPieceOfEveryVariantIsOnItsSheet(t *testing.T) {
	for name, build := range everyPlan {
		plan := build()
		file := opened(t, plan, testOptions)
		taken := map[string]int64{}
		for i, variant := range plan.Variants {
			rows := cellsOf(t, file, variantSheet(plan, i))
			for _, row := range rowsUnder(t, rows, 1, "Reference", "Stage", "Position", "Part", "Bin", "Lot", "Remark") {
				taken[row[8]] += variant.Boards
			}
		}
		for _, pick := range plan.Picks {
			if got := taken[fmt.Sprint(pick.Lot.ID)]; got != pick.Quantity {
				t.Errorf("%s: the variants take %d of lot %d, the picks %d", name, got, pick.Lot.ID, pick.Quantity)
			}
		}
	}
}

func TestPositionsAreToldByTheirPieces(t *testing.T) {
	rows := cellsOf(t, opened(t, beaconPlan(), testOptions), sheetBoard)
	var got []string
	for _, row := range rowsUnder(t, rows, 1, "Position", "Value", "Made of (+ in series, ∥ in parallel)") {
		got = append(got, row[0]+"|"+row[1]+"|"+row[3])
	}
	want := []string{"ra|55 kΩ|R10a (33 kΩ) + R10b (22 kΩ)", "rb|110 kΩ|R2a (220 kΩ) ∥ R2b (220 kΩ)", "c|21.6 µF|C1 (21.6 µF)"}
	if !slices.Equal(got, want) {
		t.Errorf("positions %q, want %q", got, want)
	}
}

func TestWiringBracketsMembersAndRepeatsMatchedPieces(t *testing.T) {
	a, b, c := leaf(resistor(1, "", 1e3, 1)), leaf(resistor(2, "", 2e3, 1)), leaf(resistor(3, "", 3e3, 1))
	d := optimize.Network{Lot: numbered(4, "", inventory.Diode, "1N4148", 9)}
	stage := optimize.StageFit{
		Fit: optimize.Fit{Networks: []optimize.Placed{
			placed("rh", inventory.Resistor, series(a, parallelOhms(b, c))), placed("rl", inventory.Resistor, parallelOhms(a, series(b, c))),
			{Position: "d", Kind: inventory.Diode, Count: 2, Network: d},
		}},
		Places: []optimize.Place{{Reference: "R1a"}, {Reference: "R1b"}, {Reference: "R1c"}, {Reference: "R2a"}, {Reference: "R2b"}, {Reference: "R2c"}, {Reference: "D1a"}},
	}
	var got []string
	for _, row := range wiringRows(stage) {
		got = append(got, row[2].text)
	}
	// The last piece has no place: its value stands alone.
	want := []string{"R1a (1 kΩ) + (R1b (2 kΩ) ∥ R1c (3 kΩ))", "R2a (1 kΩ) ∥ (R2b (2 kΩ) + R2c (3 kΩ))", "D1a (1N4148), 1N4148"}
	if !slices.Equal(got, want) {
		t.Errorf("%q, want %q", got, want)
	}
}

func TestBenchTableStatesWhatPasses(t *testing.T) {
	plan := beaconPlan()
	file := opened(t, plan, testOptions)
	shown, err := file.GetRows(sheetBoard)
	if err != nil {
		t.Fatal(err)
	}
	all := fmt.Sprintf("%q", shown)
	for _, want := range []string{
		`"period" "s" "4.000" "3.880" "4.120" "4.117" "3.829" "4.406"`,
		`"duty, high" "%" "60.00%" "55.00%" "65.00%" "60.00%" "59.40%" "60.60%"`,
		`"high time" "s" "" "" "" "2.470" "2.297" "2.643"`,
		`"frequency" "Hz" "" "" "" "0.2429" "0.2259" "0.2599"`,
		`"first high time" "s" "" "" "" "3.915"`,
		`"pulse" "ms" "2.4000" "2.3520" "2.4480" "2.4169" "1.8127" "3.0212"`,
		`slow blink: classic, NE555`, `hold: one-shot, NE555`,
		`supply 9 V (8.1 V to 9.9 V) · ambient 25 °C (10 °C to 40 °C) · uses 98 % of the allowance, 338 % in the worst case`,
		`Warning: C1: leakage of an electrolytic`, `Measure at the timer's output`,
	} {
		if !strings.Contains(all, want) {
			t.Errorf("the board's sheet does not say %s:\n%s", want, strings.Join(strings.Split(all, "] ["), "\n"))
		}
	}
}

func TestVerdictFollowsFromTheReading(t *testing.T) {
	file := opened(t, beaconPlan(), testOptions)
	rows := cellsOf(t, file, sheetBoard)
	checked := 0
	for i, row := range rows {
		if row[1] != "pulse" {
			continue
		}
		reading, verdict := fmt.Sprintf("J%d", i+1), fmt.Sprintf("K%d", i+1)
		// 2.4 ms ±2 %: a reading at either limit passes.
		for _, test := range []struct {
			typed any
			want  string
		}{{nil, ""}, {2.352, "pass"}, {2.448, "pass"}, {2.4, "pass"}, {2.351, "fail"}, {2.449, "fail"}, {"2.4 ms", "type a number"}} {
			typed, want := test.typed, test.want
			if typed != nil {
				if err := file.SetCellValue(sheetBoard, reading, typed); err != nil {
					t.Fatal(err)
				}
			}
			if got, err := file.CalcCellValue(sheetBoard, verdict); err != nil || got != want {
				t.Errorf("measured %v: %q, %v; want %q", typed, got, err, want)
			}
			checked++
		}
	}
	if checked != 7 {
		t.Errorf("%d readings tried", checked)
	}
}

func TestDutyIsReadAsAShare(t *testing.T) {
	file := opened(t, beaconPlan(), testOptions)
	checked := 0
	for i, row := range cellsOf(t, file, sheetBoard) {
		if row[1] != "duty, high" {
			continue
		}
		reading, verdict := fmt.Sprintf("J%d", i+1), fmt.Sprintf("K%d", i+1)
		// A spreadsheet completes 60 to 60 % where the cell has such a format.
		id, err := file.GetCellStyle(sheetBoard, reading)
		if err != nil {
			t.Fatal(err)
		}
		if style, err := file.GetStyle(id); err != nil || style.CustomNumFmt == nil || !strings.HasSuffix(*style.CustomNumFmt, "%") {
			t.Errorf("the reading's cell has the style %+v, %v", style, err)
		}
		for typed, want := range map[float64]string{0.55: "pass", 0.65: "pass", 0.549: "fail", 60: "type it with %"} {
			if err := file.SetCellValue(sheetBoard, reading, typed); err != nil {
				t.Fatal(err)
			}
			if got, err := file.CalcCellValue(sheetBoard, verdict); err != nil || got != want {
				t.Errorf("measured %v: %q, %v; want %q", typed, got, err, want)
			}
			checked++
		}
	}
	if checked != 4 {
		t.Errorf("%d readings tried", checked)
	}
}

func TestTimingSheetHoldsTheFitsFiguresInSI(t *testing.T) {
	for name, build := range everyPlan {
		plan := build()
		if len(plan.Variants) == 0 {
			continue
		}
		rows := tableOf(t, opened(t, plan, testOptions), sheetTiming, []string{
			"Sheet", "Stage", "Circuit", "Timer", "Measure", "Unit", "Target", "Pass from", "Pass to", "Expected", "Worst case from", "Worst case to", "Allowance used", "Allowance used, worst case",
		})
		equal := func(row []string, column int, want float64) {
			if got, err := strconv.ParseFloat(row[column], 64); err != nil || got != rounded(want, cellDigits) {
				t.Errorf("%s, %s, column %d: %q, want %v", name, row[:5], column, row[column], want)
			}
		}
		at := 0
		for i, variant := range plan.Variants {
			for _, stage := range variant.Stages {
				spec := stageOf(plan, stage.Stage).Spec
				for _, r := range readings(stage.Fit, spec) {
					row := rows[at]
					at++
					if row[0] != variantSheet(plan, i) || row[1] != stage.Stage || row[4] != r.name {
						t.Fatalf("%s: row %q, want %s of %s", name, row, r.name, stage.Stage)
					}
					equal(row, 9, r.nominal)
					equal(row, 10, r.worst.Min)
					equal(row, 11, r.worst.Max)
				}
				row := rows[at-len(readings(stage.Fit, spec))]
				first := spec.Requirements[0]
				if row[4] != measureNames[first.Measure] {
					t.Errorf("%s: %s comes first, not the %s that is asked for", name, row[4], first.Measure)
				}
				equal(row, 6, first.Target)
				equal(row, 7, first.Min)
				equal(row, 8, first.Max)
				equal(row, 12, first.Used(stage.Fit.Nominal.Of(first.Measure)))
			}
		}
		if at != len(rows) {
			t.Errorf("%s: %d rows, want %d", name, len(rows), at)
		}
	}
}

func TestPiecesFromElsewhereAreNamed(t *testing.T) {
	stage := optimize.Stage{Name: "tone", References: map[string]string{"timer": "U3"}}
	for _, test := range []struct {
		fit  optimize.Fit
		want string
	}{
		{optimize.Fit{Timer: "NE555"}, "[U3 timer NE555 not from stock]"},
		{optimize.Fit{Timer: "ideal"}, "[U3 timer ideal timer a model, not a part: choose a timer]"},
		{optimize.Fit{Timer: "NE555", TimerLot: &inventory.Lot{}, NeedsInverter: true}, "[tone.inverter inverter inverter not from stock]"},
		{optimize.Fit{Timer: "NE555", TimerLot: &inventory.Lot{}, NeedsInverter: true, Inverter: &inventory.Lot{}}, "[]"},
	} {
		plan := optimize.Plan{Job: optimize.Job{Stages: []optimize.Stage{stage}}}
		variant := optimize.Variant{Stages: []optimize.StageFit{{Stage: "tone", Fit: test.fit}}}
		var got []string
		for _, p := range pieces(plan, variant) {
			got = append(got, strings.Join([]string{p.reference, p.position, p.part, p.remark}, " "))
		}
		if fmt.Sprint(got) != test.want {
			t.Errorf("%+v: %s, want %s", test.fit, got, test.want)
		}
	}
}

func TestALotThatDoesNotLastNamesTheNext(t *testing.T) {
	first, second := numbered(3, "D1", inventory.Timer, "NE555", 2), numbered(4, "D2", inventory.Timer, "NE555", 9)
	plan := optimize.Plan{
		Variants: []optimize.Variant{{Boards: 5, Fixed: []optimize.Place{{Reference: "U1", Lot: second}}}},
		Picks: []optimize.PlannedPick{
			{Lot: first, Quantity: 2, PerBoard: 1, References: []string{"U1"}}, {Lot: second, Quantity: 3, PerBoard: 1, References: []string{"U1"}},
		},
	}
	if got := pieces(plan, plan.Variants[0])[0].remark; got != "some boards: bin D1, lot 3" {
		t.Errorf("remark %q", got)
	}
}

func TestStagesStayOnOnePageWhereTheyFit(t *testing.T) {
	content, err := Workbook(beaconPlan(), testOptions)
	if err != nil {
		t.Fatal(err)
	}
	var headings []string // of the stages, by the row before the empty one above
	for i, row := range cellsOf(t, opened(t, beaconPlan(), testOptions), sheetBoard) {
		if strings.HasSuffix(row[0], ", NE555") {
			headings = append(headings, fmt.Sprint(i-1))
		}
	}
	var breaks []string
	for _, found := range regexp.MustCompile(`<brk id="(\d+)"`).FindAllStringSubmatch(sheetXML(t, content, 3), -1) {
		breaks = append(breaks, found[1])
	}
	// The kitting table and the first stage fill more than a page together, and so
	// do the two stages.
	if len(headings) != 2 || !slices.Equal(breaks, headings) {
		t.Errorf("pages end after the rows %s, stages begin after %s", breaks, headings)
	}
}

// sheetXML returns the numbered sheet as it is stored.
func sheetXML(t *testing.T, content []byte, number int) string {
	t.Helper()
	archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	if err != nil {
		t.Fatal(err)
	}
	r, err := archive.Open(fmt.Sprintf("xl/worksheets/sheet%d.xml", number))
	if err != nil {
		t.Fatal(err)
	}
	stored, err := io.ReadAll(r)
	if err != nil {
		t.Fatal(err)
	}
	return string(stored)
}
