package picks

import (
	"math"

	"tickdrawer/optimize"
)

// timing writes the times of every stage in s, Hz and shares, for reckoning on.
func (b *book) timing(plan optimize.Plan) {
	if len(plan.Variants) == 0 {
		return
	}
	columns := []column{
		{heading: "Sheet", align: "left"},
		{heading: "Stage", align: "left", most: 26},
		{heading: "Circuit", align: "left"},
		{heading: "Timer", align: "left"},
		{heading: "Measure", align: "left"},
		{heading: "Unit", align: "left"},
		{heading: "Target", align: "right"},
		{heading: "Pass from", align: "right"},
		{heading: "Pass to", align: "right"},
		{heading: "Expected", align: "right"},
		{heading: "Worst case from", align: "right"},
		{heading: "Worst case to", align: "right"},
		{heading: "Allowance used", align: "right"},
		{heading: "Allowance used, worst case", align: "right"},
	}
	var rows [][]cell
	note := ""
	for i, variant := range plan.Variants {
		for _, stage := range variant.Stages {
			for _, r := range readings(stage.Fit, stageOf(plan, stage.Stage).Spec) {
				if r.unending() {
					note = unendingNote
				}
				rows = append(rows, timingRow(variantSheet(plan, i), stage, r))
			}
			for j := range rows[len(rows)-1] {
				rows[len(rows)-1][j].closing = true
			}
		}
	}
	p := b.page(sheetTiming, stretched(fitted(columns, rows)))
	p.title("Timing: "+oneLine(plan.Job.Name), joined(" · ", "times in s, frequencies in Hz, duty as a share of the period", b.kit(), b.day()))
	if note != "" {
		p.paragraph(1, note, look{italic: true})
	}
	p.gap()
	heading := p.table(1, columns, rows)
	p.finish(heading, heading, heading)
}

func timingRow(sheet string, stage optimize.StageFit, r reading) []cell {
	show := r.figures()
	cells := make([]cell, 14)
	cells[0], cells[1] = cell{text: sheet}, cell{text: stage.Stage}
	cells[2], cells[3] = cell{text: stage.Fit.Circuit}, cell{text: stage.Fit.Timer}
	cells[4], cells[5] = cell{text: r.name, bold: r.stated != nil}, cell{text: r.unit}
	cells[9] = number(show(r.nominal))
	if r.worst != nil {
		cells[10], cells[11] = number(show(r.worst.Min)), number(show(r.worst.Max))
	}
	if a := r.stated; a != nil {
		used := func(x float64) cell {
			if math.IsInf(x, 0) {
				return cell{text: "beyond it"}
			}
			return number(figure{number: x, decimals: 1, percent: true})
		}
		cells[6], cells[7], cells[8] = number(show(a.Target)), number(show(a.Min)), number(show(a.Max))
		cells[12] = used(a.Used(r.nominal))
		if r.worst != nil {
			cells[13] = used(max(a.Used(r.worst.Min), a.Used(r.worst.Max)))
		}
	}
	return cells
}
