package picks

import (
	"fmt"
	"slices"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// variants writes a sheet per variant: which part goes where, then for each
// stage what to expect and what to measure.
func (b *book) variants(plan optimize.Plan) {
	for i, variant := range plan.Variants {
		b.variant(plan, variant, variantSheet(plan, i))
	}
}

func (b *book) variant(plan optimize.Plan, variant optimize.Variant, sheet string) {
	kitting, rows := kittingColumns(), kittingRows(pieces(plan, variant))
	var all [][]cell
	for _, stage := range variant.Stages {
		all = append(all, benchRows(readings(stage.Fit, stageOf(plan, stage.Stage).Spec), 0)...)
	}
	p := b.page(sheet, stretched(shared(kitting, rows, benchColumns(), all)))
	p.title(sheet+": "+oneLine(plan.Job.Name), joined(" · ",
		"build "+counted(variant.Boards, "board", "boards")+" like this", b.kit(), b.day()))
	p.gap()
	repeatFrom, repeatTo := 1, 1
	if heading := p.table(1, kitting, rows); p.heightPt(1, p.row) > p.pageHeightPt() {
		repeatFrom, repeatTo = heading, heading
	}
	for _, warning := range plan.Warnings {
		p.paragraph(2, "Warning: "+warning, look{bold: true})
	}
	for _, stage := range variant.Stages {
		p.blocks = append(p.blocks, p.row+1)
		p.gap()
		p.stage(plan, stage)
	}
	p.finish(repeatFrom, repeatTo, 1)
}

// leastBench is the least width of a column that readings stand in.
const leastBench = 11

// shared returns the widths of a sheet that holds the first table from its
// first column and the second, which spans nothing, from its second.
func shared(first []column, firstRows [][]cell, second []column, secondRows [][]cell) []float64 {
	widths := append([]float64{0}, fitted(second, secondRows)...)
	for i := range second {
		widths[i+1] = max(widths[i+1], leastBench)
	}
	at := 0
	for i, need := range fitted(first, firstRows) {
		have, spans := 0.0, first[i].spans()
		for _, w := range widths[at : at+spans] {
			have += w
		}
		for j := at; j < at+spans && need > have; j++ {
			widths[j] += (need - have) / float64(spans)
		}
		at += spans
	}
	return widths
}

// stage writes what a stage is, how its positions are filled and what to
// measure.
func (p *page) stage(plan optimize.Plan, stage optimize.StageFit) {
	spec := stageOf(plan, stage.Stage).Spec
	fit := stage.Fit
	circuit := timer.CircuitBySlug(fit.Circuit)
	p.paragraph(1, oneLine(stage.Stage)+": "+fit.Circuit+", "+fit.Timer, look{size: 12, bold: true, shaded: true})
	if circuit != nil {
		p.paragraph(2, circuit.Title, look{})
	}
	p.paragraph(2, joined(" · ", conditions(spec), usedText(fit)), look{})
	p.gap()
	p.table(2, wiringColumns(), wiringRows(stage))
	p.gap()
	columns, found := benchColumns(), readings(fit, spec)
	p.table(2, columns, benchRows(found, p.row+2))
	p.paragraph(2, benchNote(circuit), look{italic: true})
	if slices.ContainsFunc(found, reading.unending) {
		p.paragraph(2, unendingNote, look{italic: true})
	}
	for _, warning := range fit.Warnings {
		p.paragraph(2, "Warning: "+warning, look{bold: true})
	}
}

// conditions returns what the times hold under; "" where the spec is unknown.
func conditions(spec optimize.Spec) string {
	if spec.Supply == (optimize.Range{}) {
		return ""
	}
	load := ""
	if spec.LoadA > 0 {
		load = "load " + marking.FormatAmperes(spec.LoadA)
	}
	control := ""
	if spec.ControlV > 0 {
		control = "control pin at " + marking.FormatVolts(spec.ControlV)
	}
	return joined(" · ", "supply "+rangeText(spec.Supply, marking.FormatVolts), "ambient "+rangeText(spec.Ambient, marking.FormatCelsius), load, control)
}

func rangeText(r optimize.Range, format func(float64) string) string {
	if r.Min == r.Max {
		return format(r.Nominal)
	}
	return fmt.Sprintf("%s (%s to %s)", format(r.Nominal), format(r.Min), format(r.Max))
}

// usedText returns how much of the allowance the fit uses.
func usedText(fit optimize.Fit) string {
	text := "uses " + shareText(fit.UsedNominal) + " of the allowance"
	if fit.WorstCase != (optimize.TimesBand{}) {
		text += ", " + shareText(fit.UsedWorst) + " in the worst case"
	}
	return text
}

// shareText returns the share in whole percent.
func shareText(share float64) string {
	if !(share < 100) {
		return "a hundred times and more"
	}
	return fmt.Sprintf("%.0f %%", 100*share)
}

func wiringColumns() []column {
	return []column{
		{heading: "Position", align: "left"},
		{heading: "Value", align: "left", span: 2},
		{heading: "Made of (+ in series, ∥ in parallel)", align: "left", span: 7},
	}
}

func wiringRows(stage optimize.StageFit) [][]cell {
	var rows [][]cell
	at := 0
	for _, placed := range stage.Fit.Networks {
		value := ""
		if placed.Kind.Unit() != "" {
			value = valueText(inventory.Part{Kind: placed.Kind, Value: placed.Network.Value})
		}
		made := ""
		for i := range placed.Count {
			if i > 0 {
				made += ", "
			}
			made += wiring(placed.Network, func(lot inventory.Lot) string {
				text := actualText(lot)
				if at < len(stage.Places) {
					text = stage.Places[at].Reference + " (" + text + ")"
				}
				at++
				return text
			})
		}
		rows = append(rows, []cell{{text: placed.Position, bold: true}, {text: value}, {text: made}})
	}
	return rows
}

// wiring returns how the leaves join, as they are named in order.
func wiring(n optimize.Network, name func(inventory.Lot) string) string {
	if n.Operator == optimize.Leaf {
		return name(n.Lot)
	}
	sign := " + "
	if n.Operator == optimize.Parallel {
		sign = " ∥ "
	}
	text := ""
	for i, member := range n.Members {
		made := wiring(member, name)
		if member.Operator != optimize.Leaf {
			made = "(" + made + ")"
		}
		if i > 0 {
			text += sign
		}
		text += made
	}
	return text
}

func benchColumns() []column {
	return []column{
		{heading: "Measure", align: "left"},
		{heading: "Unit", align: "left"},
		{heading: "Target", align: "right"},
		{heading: "Pass from", align: "right"},
		{heading: "Pass to", align: "right"},
		{heading: "Expected", align: "right"},
		{heading: "Worst case from", align: "right"},
		{heading: "Worst case to", align: "right"},
		{heading: "Measured", align: "right", box: true},
		{heading: "Verdict", align: "center"},
	}
}

// benchRows returns the rows of the readings; the first will stand in the row of
// the sheet. The verdict follows from what is typed under Measured.
func benchRows(found []reading, row int) [][]cell {
	var rows [][]cell
	for i, r := range found {
		r = r.atBench()
		show := r.figures()
		cells := []cell{{text: r.name, bold: r.stated != nil}, {text: r.unit}, {}, {}, {}, number(show(r.nominal)), {}, {}, {}, {}}
		if a := r.stated; a != nil {
			cells[2], cells[3], cells[4] = number(show(a.Target)), boldly(number(show(rounded(a.Min, limitDigits)))), boldly(number(show(rounded(a.Max, limitDigits))))
			verdict := fmt.Sprintf(`IF(AND(J%[1]d>=E%[1]d,J%[1]d<=F%[1]d),"pass","fail")`, row+i)
			if r.percent { // 60 without its sign would be 6000 %
				verdict = fmt.Sprintf(`IF(J%d>1,"type it with %%",%s)`, row+i, verdict)
			}
			cells[9] = cell{bold: true, formula: fmt.Sprintf(`IF(ISNUMBER(J%[1]d),%[2]s,IF(ISBLANK(J%[1]d),"","type a number"))`, row+i, verdict)}
		}
		if r.percent {
			cells[8] = cell{typed: show(0).format()}
		}
		if r.worst != nil {
			cells[6], cells[7] = number(show(r.worst.Min)), number(show(r.worst.Max))
		}
		rows = append(rows, cells)
	}
	return rows
}

func benchNote(circuit *timer.Circuit) string {
	pin := "the timer's output"
	if circuit != nil && circuit.Inverter {
		pin = "the inverter's output"
	}
	return "Measure at " + pin + " with the board warm and the supply as above; type the reading under Measured in the row's unit."
}
