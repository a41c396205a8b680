package picks

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
)

// headings names the columns of the picks. The cells under the first are empty:
// they are ticked by hand, on paper; a CSV leaves them out.
var headings = []string{"Picked", "Bin", "Lot", "Kind", "Value", "Tolerance", "References", "Per board", "In all", "Left in bin", "Remark", "Details"}

// line is one pick as the documents write it.
type line struct {
	bin                      string
	lot                      inventory.LotID
	kind, value, tolerance   string
	references               string
	perBoard, inAll, leftBin int64
	runsOut                  bool // nothing is left for other kits
	remark, details          string
}

// lines returns the picks in walking order: by bin as people count, then by
// lot.
func lines(plan optimize.Plan) []line {
	sorted := slices.Clone(plan.Picks)
	slices.SortStableFunc(sorted, func(a, b optimize.PlannedPick) int {
		return cmp.Or(inventory.NaturalCompare(a.Lot.Bin, b.Lot.Bin), cmp.Compare(a.Lot.ID, b.Lot.ID))
	})
	found := make([]line, 0, len(sorted))
	for _, pick := range sorted {
		l := line{
			bin: pick.Lot.Bin, lot: pick.Lot.ID,
			kind: string(pick.Lot.Part.Kind), value: valueText(pick.Lot.Part),
			references: referenceList(pick.References),
			perBoard:   pick.PerBoard, inAll: pick.Quantity, leftBin: pick.Lot.OnHand - pick.Quantity,
			details: details(pick.Lot),
		}
		if t := pick.Lot.Part.Tolerance; t != nil {
			l.tolerance = marking.FormatTolerance(*t)
		}
		l.runsOut = pick.Left() <= 0
		l.remark = remark(plan, pick)
		found = append(found, l)
	}
	return found
}

// referenceList returns the references as people count, each once.
func referenceList(references []string) string {
	sorted := slices.Clone(references)
	slices.SortFunc(sorted, inventory.NaturalCompare)
	return strings.Join(slices.Compact(sorted), ", ")
}

// valueText returns the value as it is marked on the part, or the part number
// of a kind without a value.
func valueText(part inventory.Part) string {
	switch part.Kind.Unit() {
	case "ohm":
		return marking.FormatOhms(part.Value)
	case "f":
		return marking.FormatFarads(part.Value)
	}
	return part.PartNumber
}

// actualText returns the value that the plan computes with, or the part number.
func actualText(lot inventory.Lot) string {
	part := lot.Part
	part.Value = lot.Value()
	return valueText(part)
}

// details returns what else tells the lot's parts from others in the bin.
func details(lot inventory.Lot) string {
	part := lot.Part
	var words []string
	add := func(stated bool, word string) {
		if stated && word != "" {
			words = append(words, word)
		}
	}
	add(part.Kind.Unit() != "", part.PartNumber)
	add(true, part.Dielectric)
	add(part.RatingV != 0, marking.FormatVolts(part.RatingV))
	add(part.RatingW != 0, marking.FormatWatts(part.RatingW))
	add(true, part.Package)
	add(lot.Measured != 0, "measured "+actualText(lot))
	add(true, lot.Note)
	return strings.Join(words, ", ")
}

// remark returns what to know before the pieces are taken.
func remark(plan optimize.Plan, pick optimize.PlannedPick) string {
	var words []string
	switch left := pick.Lot.OnHand - pick.Quantity; {
	case left <= 0:
		words = append(words, "runs out")
	case pick.Left() <= 0:
		words = append(words, "runs out: the rest is held for other kits")
	case pick.Lot.Reserved > 0:
		words = append(words, fmt.Sprintf("%d of the rest are held for other kits", pick.Lot.Reserved))
	}
	if pick.Quantity < pick.PerBoard*plan.Built {
		words = append(words, "for some of the boards")
	}
	return strings.Join(words, "; ")
}
