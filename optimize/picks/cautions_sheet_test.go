package picks

import (
	"strings"
	"testing"
)

func TestCautionsNameThePartsThatTheyAreAbout(t *testing.T) {
	beacon, short := strings.Join(cautions(beaconPlan()), "\n"), strings.Join(cautions(shortPlan()), "\n")
	for _, test := range []struct {
		name, text, holds string
		want              bool
	}{
		{"a measured electrolytic", beacon, "Here: C1.", true},
		{"films alone", short, "Here:", false},
		{"films alone", short, "None of the picks is marked as one", true},
		{"a CMOS timer", short, "TLC555: CMOS", true},
		{"a bipolar timer", beacon, "CMOS", false},
	} {
		if strings.Contains(test.text, test.holds) != test.want {
			t.Errorf("%s: %q is there: %v", test.name, test.holds, !test.want)
		}
	}
}

func TestCautionsBeginWithCodesAndEndWithMeasuring(t *testing.T) {
	for name, build := range everyPlan {
		list := cautions(build())
		all := strings.Join(list, "\n")
		for _, word := range []string{"life, health or property", "Mains", "isolated", "rating", "charge", "Polarised", "inductive"} {
			if !strings.Contains(all, word) {
				t.Errorf("%s: nothing on %q", name, word)
			}
		}
		if !strings.HasPrefix(list[0], "Local codes, licensed practice") || !strings.Contains(list[len(list)-1], "Measure every built board") {
			t.Errorf("%s: first %q, last %q", name, list[0], list[len(list)-1])
		}
		rows := cellsOf(t, opened(t, build(), Options{}), sheetCautions)
		if got := rows[len(rows)-1][1]; got != list[len(list)-1] {
			t.Errorf("%s: the sheet ends in %q", name, got)
		}
	}
}
