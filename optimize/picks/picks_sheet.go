package picks

import (
	"fmt"

	"tickdrawer/optimize"
)

// mostLines is how many lines of references a row of the picks shows: a row has
// at most 409 pt (an Excel limit), and what is more is cut off in print.
const mostLines = 26

// picks writes the sheet to walk along the bins with.
func (b *book) picks(plan optimize.Plan) {
	found := lines(plan)
	references := 34.0
	for _, l := range found {
		references = max(references, textWidth(l.references)/mostLines)
	}
	columns := []column{
		{heading: headings[0], box: true, align: "center"},
		{heading: headings[1], align: "left", most: 26},
		{heading: headings[2], align: "right"},
		{heading: headings[3], align: "left"},
		{heading: headings[4], align: "left", most: 26},
		{heading: headings[5], align: "left"},
		{heading: headings[6], align: "left", most: references},
		{heading: headings[7], align: "right", least: 8.5},
		{heading: headings[8], align: "right", least: 8.5},
		{heading: headings[9], align: "right", least: 8.5},
		{heading: headings[10], align: "left", most: 22},
		{heading: headings[11], align: "left", most: 34},
	}
	var rows [][]cell
	pieces := int64(0)
	for _, l := range found {
		bin := cell{text: l.bin, bold: true}
		if l.bin == "" {
			bin = cell{text: "not stated"}
		}
		rows = append(rows, []cell{
			{}, bin, count(int64(l.lot)), {text: l.kind}, {text: l.value, bold: true}, {text: l.tolerance}, {text: l.references},
			count(l.perBoard), boldly(count(l.inAll)), count(l.leftBin), {text: l.remark, bold: l.runsOut}, {text: l.details},
		})
		pieces += l.inAll
	}
	p := b.page(sheetPicks, stretched(fitted(columns, rows)))
	what := []string{joined(" · ",
		fmt.Sprintf("%s of %d", counted(plan.Built, "board", "boards"), plan.Job.Boards),
		counted(int64(len(rows)), "lot", "lots")+", "+counted(pieces, "piece", "pieces"),
		b.kit(), b.day(),
	)}
	if plan.Built < plan.Job.Boards {
		what = append(what, fmt.Sprintf("The drawer does not hold enough for %s: see the sheet %s.", counted(plan.Job.Boards-plan.Built, "board", "boards"), sheetShortages))
	}
	if !plan.Search.Proven {
		what = append(what, "The search ended before it was shown that no better plan exists.")
	}
	p.title("Picks for "+oneLine(plan.Job.Name), what...)
	p.gap()
	heading := p.table(1, columns, rows)
	if len(rows) == 0 {
		p.paragraph(1, "Nothing to pick.", look{italic: true})
	}
	p.finish(heading, heading, heading)
}

func boldly(c cell) cell {
	c.bold = true
	return c
}

// kit and day return what the options state, for people; "" where they do not.
func (b *book) kit() string {
	if b.opts.Kit == 0 {
		return ""
	}
	return fmt.Sprintf("kit %d", b.opts.Kit)
}

func (b *book) day() string {
	if b.opts.Now.IsZero() {
		return ""
	}
	return "planned " + b.opts.Now.Format("2006-01-02")
}
