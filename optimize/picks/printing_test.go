package picks

import (
	"fmt"
	"strings"
	"testing"
)

func TestSheetsArePrintedOnePageWideWithTheirHeadings(t *testing.T) {
	for _, test := range []struct {
		paper Paper
		code  int
	}{{A4, 9}, {Letter, 1}} { // ECMA-376 part 1, 18.3.1.63: 9 is A4, 1 is Letter
		file := opened(t, largePlan(300), Options{Now: testOptions.Now, Paper: test.paper})
		for _, sheet := range file.GetSheetList() {
			layout, err := file.GetPageLayout(sheet)
			if err != nil || *layout.Size != test.code || *layout.Orientation != "landscape" || *layout.FitToWidth != 1 || *layout.FitToHeight != 0 {
				t.Errorf("%s: layout %+v, %v", sheet, layout, err)
			}
			if props, err := file.GetSheetProps(sheet); err != nil || !*props.FitToPage {
				t.Errorf("%s: not fitted to the page (%v)", sheet, err)
			}
			if panes, err := file.GetPanes(sheet); err != nil || !panes.Freeze || panes.YSplit < 1 {
				t.Errorf("%s: panes %+v, %v", sheet, panes, err)
			}
			header, err := file.GetHeaderFooter(sheet)
			if err != nil || !strings.Contains(header.OddHeader, "large board") || !strings.Contains(header.OddFooter, "page &P of &N") {
				t.Errorf("%s: header and footer %+v, %v", sheet, header, err)
			}
		}
		names := map[string]string{}
		for _, name := range file.GetDefinedName() {
			names[name.Scope+" "+name.Name] = name.RefersTo
		}
		rows := cellsOf(t, file, sheetPicks)
		if got, want := names["Picks _xlnm.Print_Area"], fmt.Sprintf("'Picks'!$A$1:$L$%d", len(rows)); got != want {
			t.Errorf("print area %s, want %s", got, want)
		}
		for sheet, heading := range map[string]string{sheetPicks: "Picked", sheetBoard: "Fitted", sheetTiming: "Sheet"} {
			var row int
			if _, err := fmt.Sscanf(names[sheet+" _xlnm.Print_Titles"], "'"+sheet+"'!$%d:", &row); err != nil {
				t.Fatalf("%s: print titles %q", sheet, names[sheet+" _xlnm.Print_Titles"])
			}
			if got := cellsOf(t, file, sheet)[row-1][0]; got != heading {
				t.Errorf("%s: the repeated row begins with %q, want %q", sheet, got, heading)
			}
		}
	}
}

func TestHeadersShowTheJobWhateverItIsCalled(t *testing.T) {
	plan := beaconPlan()
	for job, want := range map[string]string{
		"fish & chips": "fish && chips", "&P of\n&N": "&&P of &&N", "12": "12", "bell\x07": "bell\uFFFD",
		strings.Repeat("long & ", 60): strings.Repeat("long && ", 11) + "lo…",
	} {
		plan.Job.Name = job
		header, err := opened(t, plan, testOptions).GetHeaderFooter(sheetPicks)
		if err != nil || header.OddHeader != "&L&9 "+want+"&R&9 Picks" || len(header.OddHeader) > 255 {
			t.Errorf("job %q: header %q, %v", job, header.OddHeader, err)
		}
	}
}
