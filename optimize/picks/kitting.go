package picks

import (
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// piece is one row of a kitting table: what goes to a reference.
type piece struct {
	reference, stage, position, part string
	lot                              *inventory.Lot // nil where it is not from stock
	remark                           string
}

// fixedStage stands for the stage of a fixed line.
const fixedStage = "fixed line"

// pieces returns what goes on one board of the variant, by reference.
func pieces(plan optimize.Plan, variant optimize.Variant) []piece {
	others := otherLots(plan)
	var found []piece
	add := func(stage string, place optimize.Place) {
		lot := place.Lot
		var remarks []string
		if lot.Part.Polarised() {
			remarks = append(remarks, "polarised")
		}
		for _, other := range others[place.Reference] {
			remarks = append(remarks, fmt.Sprintf("some boards: %s, lot %d", binText(other.Bin), other.ID))
		}
		found = append(found, piece{
			place.Reference, stage, place.Position, joined(" ", lot.Part.Name(), partNumber(lot.Part)), &lot, strings.Join(remarks, "; "),
		})
	}
	for _, stage := range variant.Stages {
		for _, place := range stage.Places {
			add(stage.Stage, place)
		}
		found = append(found, unstocked(plan, stage)...)
	}
	for _, place := range variant.Fixed {
		add(fixedStage, place)
	}
	slices.SortStableFunc(found, func(a, b piece) int { return inventory.NaturalCompare(a.reference, b.reference) })
	return found
}

// partNumber returns the number of a part whose name does not hold it.
func partNumber(part inventory.Part) string {
	if part.Kind.Unit() == "" {
		return ""
	}
	return part.PartNumber
}

func binText(bin string) string {
	if bin == "" {
		return "bin not stated"
	}
	return "bin " + bin
}

// otherLots returns for each reference the lots that are picked for it and that
// no variant names: where one lot does not last, other boards take another.
func otherLots(plan optimize.Plan) map[string][]inventory.Lot {
	type at struct {
		reference string
		lot       inventory.LotID
	}
	named := map[at]bool{}
	for _, variant := range plan.Variants {
		for _, stage := range variant.Stages {
			for _, place := range stage.Places {
				named[at{place.Reference, place.Lot.ID}] = true
			}
		}
		for _, place := range variant.Fixed {
			named[at{place.Reference, place.Lot.ID}] = true
		}
	}
	others := map[string][]inventory.Lot{}
	for _, pick := range plan.Picks {
		for _, reference := range pick.References {
			if !named[at{reference, pick.Lot.ID}] {
				others[reference] = append(others[reference], pick.Lot)
			}
		}
	}
	return others
}

// unstocked returns the timer and the inverter of a stage that come from
// elsewhere.
func unstocked(plan optimize.Plan, stage optimize.StageFit) []piece {
	var found []piece
	add := func(position, part, remark string) {
		reference := stage.Stage + "." + position
		if named := stageOf(plan, stage.Stage).References[position]; named != "" {
			reference = named
		}
		found = append(found, piece{reference: reference, stage: stage.Stage, position: position, part: part, remark: remark})
	}
	switch {
	case stage.Fit.TimerLot != nil:
	case stage.Fit.Timer == "ideal":
		add("timer", "ideal timer", "a model, not a part: choose a timer")
	default:
		add("timer", stage.Fit.Timer, "not from stock")
	}
	if stage.Fit.NeedsInverter && stage.Fit.Inverter == nil {
		add("inverter", "inverter", "not from stock")
	}
	return found
}

// stageOf returns the job's stage with the name.
func stageOf(plan optimize.Plan, name string) optimize.Stage {
	for _, stage := range plan.Job.Stages {
		if stage.Name == name {
			return stage
		}
	}
	return optimize.Stage{Name: name}
}

// kittingColumns returns the columns of the kitting table. With the first they
// span the eleven columns of a variant's sheet.
func kittingColumns() []column {
	return []column{
		{heading: "Fitted", box: true, align: "center"},
		{heading: "Reference", align: "left", most: 24},
		{heading: "Stage", align: "left", span: 2, most: 32},
		{heading: "Position", align: "left"},
		{heading: "Part", align: "left", span: 3, most: 48},
		{heading: "Bin", align: "left", most: 20},
		{heading: "Lot", align: "right"},
		{heading: "Remark", align: "left", most: 26},
	}
}

func kittingRows(found []piece) [][]cell {
	var rows [][]cell
	for _, p := range found {
		bin, lot := cell{}, cell{}
		if p.lot != nil {
			bin, lot = cell{text: p.lot.Bin}, count(int64(p.lot.ID))
			if p.lot.Bin == "" {
				bin.text = "not stated"
			}
		}
		rows = append(rows, []cell{{}, {text: p.reference, bold: true}, {text: p.stage}, {text: p.position}, {text: p.part}, bin, lot, {text: p.remark}})
	}
	return rows
}
