package main

import (
	"bytes"
	"strings"
	"testing"

	"charm.land/lipgloss/v2"
	"pgregory.net/rapid"
)

// printed returns the lines of a table for a terminal of the width.
func printed(width int, columns []column, rows [][]string) []string {
	var out bytes.Buffer
	p := &program{out: &out, width: width}
	p.printTable(columns, rows)
	return strings.Split(strings.TrimSuffix(out.String(), "\n"), "\n")
}

func TestATableAlignsInCells(t *testing.T) {
	columns := []column{{title: "LOT", right: true}, {title: "PART"}, {title: "PIECES", right: true}}
	// 抵抗 takes four cells; the é of the second line is an e and an accent.
	got := printed(unlimited, columns, [][]string{{"1", "抵抗", "7"}, {"12", "re\u0301s", "1000"}, {"3", "x", ""}})
	want := []string{
		"LOT  PART  PIECES",
		"  1  抵抗       7",
		" 12  re\u0301s     1000",
		"  3  x",
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("the table is\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

func TestATableLeavesSpareColumnsOut(t *testing.T) {
	columns := []column{{title: "LOT"}, {title: "MEASURED", spare: true}, {title: "BIN"}}
	if got := printed(unlimited, columns, [][]string{{"1", "", "A"}})[0]; got != "LOT  BIN" {
		t.Errorf("the titles are %q", got)
	}
	if got := printed(unlimited, columns, [][]string{{"1", "", "A"}, {"2", "982 nF", "B"}})[0]; got != "LOT  MEASURED  BIN" {
		t.Errorf("the titles are %q", got)
	}
}

func TestACellCannotSteerTheTerminalNorBreakALine(t *testing.T) {
	lines := printed(unlimited, []column{{title: "BIN"}, {title: "NOTE"}}, [][]string{{"A\x1b[2J", "one\ntwo"}})
	if len(lines) != 2 || lines[1] != "A\uFFFD[2J  one two" {
		t.Errorf("the lines are %q", lines)
	}
}

func TestColoursAreForTerminalsOnly(t *testing.T) {
	var out bytes.Buffer
	p := &program{out: &out, width: 80, colour: true}
	p.printTable([]column{{title: "LOT"}}, [][]string{{"1"}})
	if !strings.Contains(out.String(), "\x1b[1mLOT") {
		t.Errorf("the title is not bold: %q", out.String())
	}
	if got := printed(80, []column{{title: "LOT"}}, [][]string{{"1"}}); strings.Contains(strings.Join(got, ""), "\x1b") {
		t.Errorf("the title has an escape: %q", got)
	}
}

// TestANarrowTerminalHoldsTheTable draws tables that can give way far enough, and
// reads every cell back from the lines.
func TestANarrowTerminalHoldsTheTable(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		word := rapid.StringMatching(`[a-z]{1,9}`)
		cell := func(label string) string { return strings.Join(rapid.SliceOfN(word, 1, 8).Draw(t, label), " ") }
		columns := []column{{title: "LOT", right: true}, {title: "PART", wraps: true}, {title: "FOR", wraps: true}}
		row := []string{"12", cell("part"), cell("for")}
		width := rapid.IntRange(3+gap+narrowest+gap+narrowest, 100).Draw(t, "width")
		var part, cause []string
		lines := printed(width, columns, [][]string{row})
		start := strings.Index(lines[0], "FOR")
		for _, line := range lines[1:] {
			if lipgloss.Width(line) > width {
				t.Fatalf("%q is wider than %d", line, width)
			}
			padded := line + strings.Repeat(" ", max(0, start-len(line)))
			part = append(part, strings.Fields(padded[3:start])...)
			cause = append(cause, strings.Fields(padded[start:])...)
		}
		if strings.Join(part, " ") != row[1] || strings.Join(cause, " ") != row[2] {
			t.Fatalf("the cells read %q and %q, want %q and %q", part, cause, row[1], row[2])
		}
	})
}
