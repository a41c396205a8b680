package main

import (
	"fmt"
	"slices"
	"strings"

	"charm.land/lipgloss/v2"
	"charm.land/lipgloss/v2/table"
)

// column is a column of a printed table.
type column struct {
	title string
	right bool // numbers stand to the right
	wraps bool // gives way when the terminal is narrow
	spare bool // is left out where no row has anything in it
}

// narrowest is how far a column that wraps gives way, in cells.
const narrowest = 10

// gap is the space between columns, in cells.
const gap = 2

// printTable writes rows below their titles, aligned in cells, without borders.
// Where the terminal is too narrow the columns that wrap give way, the widest
// first; what is too wide even so, the terminal folds.
func (p *program) printTable(columns []column, rows [][]string) {
	columns, rows = filled(columns, rows)
	titles := make([]string, len(columns))
	widths := make([]int, len(columns))
	for i, c := range columns {
		titles[i] = c.title
		widths[i] = lipgloss.Width(c.title)
		for _, row := range rows {
			widths[i] = max(widths[i], lipgloss.Width(row[i]))
		}
	}
	p.narrow(columns, widths)
	head := lipgloss.NewStyle()
	if p.colour {
		head = head.Bold(true)
	}
	t := table.New().
		Border(lipgloss.HiddenBorder()).
		BorderTop(false).BorderBottom(false).BorderLeft(false).BorderRight(false).
		BorderColumn(false).BorderHeader(false).BorderRow(false).
		Headers(titles...).Rows(rows...).
		StyleFunc(func(row, col int) lipgloss.Style {
			style := lipgloss.NewStyle()
			if row == table.HeaderRow {
				style = head
			}
			style = style.Width(widths[col] + gap).PaddingRight(gap)
			if columns[col].right {
				style = style.Align(lipgloss.Right)
			}
			return style
		})
	for line := range strings.SplitSeq(t.String(), "\n") {
		fmt.Fprintln(p.out, strings.TrimRight(line, " "))
	}
}

// filled returns the columns and their cells, printable and in one line each,
// without the spare columns that nothing stands in.
func filled(columns []column, rows [][]string) ([]column, [][]string) {
	used := make([]bool, len(columns))
	for i, c := range columns {
		used[i] = !c.spare || slices.ContainsFunc(rows, func(row []string) bool { return row[i] != "" })
	}
	var kept []column
	for i, c := range columns {
		if used[i] {
			kept = append(kept, c)
		}
	}
	cells := make([][]string, len(rows))
	for i, row := range rows {
		for j, text := range row {
			if used[j] {
				cells[i] = append(cells[i], printable(strings.ReplaceAll(text, "\n", " ")))
			}
		}
	}
	return kept, cells
}

// narrow takes cells from the columns that wrap until the table fits.
func (p *program) narrow(columns []column, widths []int) {
	over := -gap - p.width // nothing stands after the last column
	for _, width := range widths {
		over += width + gap
	}
	for ; over > 0; over-- {
		widest := -1
		for i, c := range columns {
			if c.wraps && widths[i] > narrowest && (widest < 0 || widths[i] > widths[widest]) {
				widest = i
			}
		}
		if widest < 0 {
			return
		}
		widths[widest]--
	}
}
