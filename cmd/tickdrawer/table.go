package main

import (
	"fmt"
	"strings"

	"charm.land/lipgloss/v2"
	"charm.land/lipgloss/v2/table"
)

// column is a column of a printed table.
type column struct {
	title string
	right bool // numbers stand to the right
	wraps bool // gives way when the terminal is narrow
}

// printTable writes rows below their titles, aligned in cells, without borders.
// Where the terminal is too narrow the columns that wrap give way.
func (p *program) printTable(columns []column, rows [][]string) {
	titles := make([]string, len(columns))
	widths := make([]int, len(columns))
	for i, c := range columns {
		titles[i] = c.title
		widths[i] = lipgloss.Width(c.title)
		for _, row := range rows {
			widths[i] = max(widths[i], lipgloss.Width(row[i]))
		}
	}
	total := 0
	for _, w := range widths {
		total += w + 2
	}
	for i, c := range columns {
		if over := total - p.width; c.wraps && over > 0 {
			narrowed := max(widths[i]-over, 16)
			total -= widths[i] - narrowed
			widths[i] = narrowed
		}
	}
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
			style = style.Width(widths[col] + 2).PaddingRight(2)
			if columns[col].right {
				style = style.Align(lipgloss.Right)
			}
			return style
		})
	for line := range strings.SplitSeq(t.String(), "\n") {
		fmt.Fprintln(p.out, strings.TrimRight(line, " "))
	}
}
