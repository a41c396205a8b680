package picks

import (
	"fmt"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// shortages writes what is missing for the boards wanted, where anything is.
func (b *book) shortages(plan optimize.Plan) {
	if len(plan.Shortages) == 0 {
		return
	}
	columns := []column{
		{heading: "References", align: "left", most: 34},
		{heading: "Kind", align: "left"},
		{heading: "Value", align: "left", most: 26},
		{heading: "Short", align: "right"},
		{heading: "Why", align: "left", most: 70},
	}
	var rows [][]cell
	for _, s := range plan.Shortages {
		value := s.PartNumber
		if s.Value != 0 || value == "" {
			value = valueText(inventory.Part{Kind: s.Kind, Value: s.Value, PartNumber: s.PartNumber})
		}
		rows = append(rows, []cell{
			{text: referenceList(s.References), bold: true}, {text: string(s.Kind)}, {text: value, bold: true}, boldly(count(s.Short)), {text: s.Why},
		})
	}
	p := b.page(sheetShortages, stretched(fitted(columns, rows)))
	p.title("Shortages: "+oneLine(plan.Job.Name), fmt.Sprintf("%d of %s can be built; short in pieces.", plan.Built, counted(plan.Job.Boards, "board", "boards")))
	p.gap()
	heading := p.table(1, columns, rows)
	p.finish(heading, heading, heading)
}
