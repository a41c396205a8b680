package picks

import (
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// cautions writes what to mind before power is applied.
func (b *book) cautions(plan optimize.Plan) {
	p := b.page(sheetCautions, []float64{5, 125})
	p.title("Cautions")
	p.gap()
	for i, text := range cautions(plan) {
		p.row++
		top := look{bold: true, frame: ruled, align: "right", indented: true}
		p.put(1, 1, count(int64(i+1)), top)
		p.height(p.put(2, 1, cell{text: text}, look{wrap: true, frame: ruled, align: "left", indented: true}), bodySize)
	}
	p.finish(1, 1, 1)
}

// cautions returns what to mind with the plan's parts: customary rules; a
// maker's sheet or a code that says otherwise prevails.
func cautions(plan optimize.Plan) []string {
	polarised, cmos := sensitive(plan)
	found := []string{
		"Local codes, licensed practice and the makers' data sheets come first: where they differ from this workbook, follow them.",
		"Do not use these boards for timing on which life, health or property depends.",
		"Work from an isolated extra-low-voltage supply. Mains wiring is for qualified people: isolate it, prove it dead, and keep it apart from the board by parts rated for that.",
		"Check every rating on the part itself before power is applied: voltage, power, current, temperature. A rating that the stock does not state has not been checked.",
		"Capacitors keep their charge: discharge them through a resistor before you touch the board, and again later, since electrolytics recover some of it.",
	}
	if len(polarised) > 0 {
		found = append(found, "Polarised capacitors vent, short or burn when they are reversed or see more than their voltage: minus of a timing capacitor goes to ground. Here: "+strings.Join(polarised, ", ")+".")
	} else {
		found = append(found, "Polarised capacitors vent, short or burn when they are reversed or see more than their voltage. None of the picks is marked as one: look at the parts all the same.")
	}
	if len(cmos) > 0 {
		found = append(found, fmt.Sprintf("%s: CMOS, so guard against static charge, apply the supply before any signal, keep inputs within the supply and tie an unused reset to it.", strings.Join(cmos, ", ")))
	}
	return append(found,
		"Put a diode across every relay coil or other inductive load that a timer switches.",
		"The times are computed. Measure every built board against its limits before it is used.",
	)
}

// sensitive returns the references that polarised capacitors go to, and the CMOS
// timers, each sorted.
func sensitive(plan optimize.Plan) (polarised, cmos []string) {
	visit := func(place optimize.Place) {
		if place.Lot.Part.Polarised() {
			polarised = append(polarised, place.Reference)
		}
	}
	for _, variant := range plan.Variants {
		for _, stage := range variant.Stages {
			for _, place := range stage.Places {
				visit(place)
			}
			if device := timer.DeviceByName(stage.Fit.Timer); device != nil && device.CMOS {
				cmos = append(cmos, device.Name)
			}
		}
		for _, place := range variant.Fixed {
			visit(place)
		}
	}
	for _, list := range []*[]string{&polarised, &cmos} {
		slices.SortFunc(*list, inventory.NaturalCompare)
		*list = slices.Compact(*list)
	}
	return polarised, cmos
}
