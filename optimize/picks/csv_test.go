package picks

import (
	"bytes"
	"encoding/csv"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/optimize"
)

func readCSV(t testing.TB, plan optimize.Plan) [][]string {
	t.Helper()
	content := PicksCSV(plan)
	text, marked := bytes.CutPrefix(content, []byte(byteOrderMark))
	if !marked {
		t.Fatalf("no byte order mark before %.20q", content)
	}
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

func TestCSVHoldsThePicksInWalkingOrder(t *testing.T) {
	rows := readCSV(t, beaconPlan())
	if !slices.Equal(rows[0], headings[1:]) {
		t.Fatalf("headings %q", rows[0])
	}
	var bins []string
	for _, row := range rows[1:] {
		bins = append(bins, row[0]+"/"+row[1])
	}
	if got, want := strings.Join(bins, " "), "/50 A1/4 A2/1 A3/5 A10/2 A10/3 B9/21 B9/22 B10/20 D1/40"; got != want {
		t.Errorf("bins and lots %s, want %s", got, want)
	}
	want := []string{"B10", "20", "capacitor", "22 µF", "±5 %", "C1", "1", "12", "18", "", "electrolytic, 50 V, measured 21.6 µF"}
	if !slices.Equal(rows[9], want) {
		t.Errorf("lot 20: %q, want %q", rows[9], want)
	}
	if want := []string{"A2", "1", "resistor", "33 kΩ", "±1 %", "R10a", "1", "12", "0", "runs out", "250 mW, axial"}; !slices.Equal(rows[3], want) {
		t.Errorf("lot 1: %q, want %q", rows[3], want)
	}
}

func TestCSVFollowsRFC4180(t *testing.T) {
	for name, plan := range map[string]optimize.Plan{"beacon": beaconPlan(), "hostile": hostilePlan(), "empty": {}} {
		content := PicksCSV(plan)
		if bytes.Count(content, []byte("\n")) != bytes.Count(content, []byte("\r\n")) || bytes.Count(content, []byte("\r")) != bytes.Count(content, []byte("\r\n")) || !bytes.HasSuffix(content, []byte("\r\n")) {
			t.Errorf("%s: a line ends in something else than CRLF:\n%q", name, content)
		}
		for _, row := range readCSV(t, plan) {
			if len(row) != len(headings)-1 {
				t.Errorf("%s: %d cells in %q", name, len(row), row)
			}
		}
	}
}

func TestCSVRunsNothing(t *testing.T) {
	apostrophes := 0
	for _, row := range readCSV(t, hostilePlan()) {
		for _, text := range row {
			if runs(text) {
				t.Errorf("%q is a formula to a spreadsheet", text)
			}
			if strings.HasPrefix(text, "'") {
				apostrophes++
			}
		}
	}
	// =cmd, -2+3, +A1 and CR are bins; =R1, @SUM(A1) and +U1 references; one part
	// number and one dielectric begin with =.
	if apostrophes != 9 {
		t.Errorf("%d texts have an apostrophe, want 9", apostrophes)
	}
}

func TestGuardedTextsComeBackByTakingOneApostropheAway(t *testing.T) {
	for text, want := range map[string]string{
		"": "", "A1": "A1", "=1": "'=1", "+1": "'+1", "-1": "'-1", "@a": "'@a", "\t1": "'\t1", "\r1": "'\n1", "\n1": "'\n1",
		"'=1": "''=1", "'A1": "'A1", " =1": "' =1", "＝1": "'＝1", "−20/+80 %": "−20/+80 %", "±5 %": "±5 %", "\xff": "\uFFFD",
	} {
		if got := guarded(text); got != want {
			t.Errorf("guarded(%q) = %q, want %q", text, got, want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`['=+@\t A-]{0,5}`).Draw(t, "text")
		got := guarded(text)
		if runs(got) {
			t.Fatalf("guarded(%q) = %q, which runs", text, got)
		}
		back := got
		if bare := strings.TrimLeft(got, "'"); bare != got && runs(bare) {
			back = got[1:]
		}
		if back != text {
			t.Fatalf("%q is written as %q and comes back as %q", text, got, back)
		}
	})
}

func TestCSVAndWorkbookAgree(t *testing.T) {
	for name, plan := range map[string]optimize.Plan{"beacon": beaconPlan(), "short": shortPlan(), "large": largePlan(60)} {
		file := opened(t, plan, testOptions)
		sheet := tableOf(t, file, sheetPicks, headings)
		for i, row := range readCSV(t, plan)[1:] {
			for j, text := range row {
				if j == 0 && text == "" {
					text = "not stated"
				}
				if sheet[i][j+1] != text {
					t.Errorf("%s, row %d, %s: workbook %q, CSV %q", name, i+1, headings[j+1], sheet[i][j+1], text)
				}
			}
			if _, err := strconv.Atoi(row[7]); err != nil {
				t.Errorf("%s: in all %q", name, row[7])
			}
		}
	}
}
