package allot

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// share is pieces of one lot (an index into the lots) for one fixed line.
type share struct {
	lot    int
	pieces int64
}

// fixedShares returns which lots serve each line for the boards, and how many
// pieces each line is short of. As many pieces as possible are served: it is a
// maximum flow from lines to lots by augmenting paths (Ford and Fulkerson 1956).
// A line takes the least good lot that serves it first, so that better parts
// stay for the timers.
func fixedShares(lines []optimize.FixedLine, lots []inventory.Lot, boards int64) (shares [][]share, short []int64) {
	suited := make([][]int, len(lines))
	for i, line := range lines {
		suited[i] = lotsFor(line.Part, lots)
	}
	flow := make([]map[int]int64, len(lines))
	left := make([]int64, len(lots))
	for i, lot := range lots {
		left[i] = max(0, lot.Available())
	}
	short = make([]int64, len(lines))
	for i, line := range lines {
		flow[i] = map[int]int64{}
		for short[i] = boards * int64(len(line.References)); short[i] > 0; {
			moved := augment(i, short[i], suited, flow, left)
			if moved == 0 {
				break
			}
			short[i] -= moved
		}
	}
	shares = make([][]share, len(lines))
	for i := range lines {
		for _, lot := range suited[i] {
			if pieces := flow[i][lot]; pieces > 0 {
				shares[i] = append(shares[i], share{lot, pieces})
			}
		}
	}
	return shares, short
}

// augment moves up to want pieces to the line along a shortest path: from a lot
// with pieces left, or from lots whose other lines can move to further lots.
func augment(line int, want int64, suited [][]int, flow []map[int]int64, left []int64) int64 {
	type step struct{ line, lot int } // the line takes from the lot
	from := map[int]step{}            // by lot: the step that reached it
	before := map[int]int{line: -1}   // by line: the lot that it gives up
	for queue := []int{line}; len(queue) > 0; queue = queue[1:] {
		taker := queue[0]
		for _, lot := range suited[taker] {
			if _, seen := from[lot]; seen {
				continue
			}
			from[lot] = step{taker, lot}
			if left[lot] == 0 {
				for other := range suited {
					if _, seen := before[other]; !seen && flow[other][lot] > 0 {
						before[other] = lot
						queue = append(queue, other)
					}
				}
				continue
			}
			// Found: walk back, first for the least that can move.
			moved := min(want, left[lot])
			for at := from[lot]; before[at.line] >= 0; at = from[before[at.line]] {
				moved = min(moved, flow[at.line][before[at.line]])
			}
			left[lot] -= moved
			for at := from[lot]; ; at = from[before[at.line]] {
				flow[at.line][at.lot] += moved
				if before[at.line] < 0 {
					return moved
				}
				flow[at.line][before[at.line]] -= moved
			}
		}
	}
	return 0
}

// lotsFor returns the lots that serve in the part's place, the least good first:
// a stated figure before an unstated one, then the widest tolerance, the lowest
// ratings, the lowest cost, the lowest number.
func lotsFor(part inventory.Part, lots []inventory.Lot) []int {
	var found []int
	for i := range lots {
		if lots[i].Available() > 0 && serves(lots[i].Part, part) {
			found = append(found, i)
		}
	}
	slices.SortFunc(found, func(a, b int) int {
		p, q := lots[a].Part, lots[b].Part
		return cmp.Or(
			cmp.Compare(len(unstated(p, part)), len(unstated(q, part))),
			cmp.Compare(width(q), width(p)),
			cmp.Compare(p.RatingV, q.RatingV), cmp.Compare(p.RatingW, q.RatingW),
			cmp.Compare(unitCost(lots[a]), unitCost(lots[b])),
			cmp.Compare(lots[a].ID, lots[b].ID),
		)
	})
	return found
}

func width(p inventory.Part) float64 {
	if p.Tolerance == nil {
		return 1
	}
	return p.Tolerance.Minus + p.Tolerance.Plus
}

func unitCost(lot inventory.Lot) inventory.Micros {
	if lot.UnitCost == nil {
		return 0
	}
	return *lot.UnitCost
}

// serves reports whether a part of the drawer can stand in the wanted one's
// place: the same kind and value or number, tolerance and ratings at least as
// good and the same dielectric and body where both state them.
func serves(have, want inventory.Part) bool {
	if have.Kind != want.Kind {
		return false
	}
	if want.Kind.Unit() != "" {
		if have.Value != want.Value {
			return false
		}
	} else if !sameNumber(have, want) {
		return false
	}
	if t := want.Tolerance; t != nil && have.Tolerance != nil && (have.Tolerance.Minus > t.Minus || have.Tolerance.Plus > t.Plus) {
		return false
	}
	if have.RatingV > 0 && have.RatingV < want.RatingV || have.RatingW > 0 && have.RatingW < want.RatingW {
		return false
	}
	return same(have.Dielectric, want.Dielectric) && same(have.Package, want.Package) &&
		(want.PartNumber == "" || want.Kind.Unit() == "" || same(have.PartNumber, want.PartNumber))
}

// same compares texts that may be unstated.
func same(have, want string) bool {
	return want == "" || have == "" || strings.EqualFold(have, want)
}

// sameNumber reports whether two part numbers name one part; two timers are one
// where they are of one family.
func sameNumber(have, want inventory.Part) bool {
	if strings.EqualFold(have.PartNumber, want.PartNumber) {
		return true
	}
	if want.Kind != inventory.Timer {
		return false
	}
	one, ok := timer.DeviceForPart(have.PartNumber)
	other, known := timer.DeviceForPart(want.PartNumber)
	return ok && known && one == other
}

// unstated returns what the wanted part asks for and the lot's part does not
// state.
func unstated(have, want inventory.Part) []string {
	var fields []string
	add := func(missing bool, field string) {
		if missing {
			fields = append(fields, field)
		}
	}
	add(want.Tolerance != nil && have.Tolerance == nil, "tolerance")
	add(want.RatingV > 0 && have.RatingV == 0, "voltage rating")
	add(want.RatingW > 0 && have.RatingW == 0, "power rating")
	add(want.Dielectric != "" && have.Dielectric == "", "dielectric")
	add(want.Package != "" && have.Package == "", "package")
	return fields
}

// fixedWarnings names the lots that serve without stating what the line asks.
func fixedWarnings(lines []optimize.FixedLine, lots []inventory.Lot, shares [][]share) []string {
	var warnings []string
	for i, line := range lines {
		for _, s := range shares[i] {
			if fields := unstated(lots[s.lot].Part, line.Part); len(fields) > 0 {
				warnings = append(warnings, fmt.Sprintf("%s: lot %d (%s) does not state its %s: check it before it is fitted",
					strings.Join(line.References, " "), lots[s.lot].ID, lots[s.lot].Part.Name(), strings.Join(fields, " and ")))
			}
		}
	}
	return warnings
}
