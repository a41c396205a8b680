package search

import (
	"cmp"
	"math"
	"slices"
	"sort"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/timer"
)

// tie is how close two shares of an allowance must be to count as equal: beyond
// the rounding of a time computed along two ways (decade scaling R×10, C÷10),
// far below what can be measured.
const tie = 1e-12

// candidate is a filled circuit, by the rows of its tables.
type candidate struct {
	setup *setup
	ohms  [timer.MaxResistors]choice
	farad choice
	parts int
	cost  inventory.Micros
	used  float64
}

// choice is a row of one of a position's tables.
type choice struct{ table, row int32 }

// compareOrder is the total order that decides ties: the circuit's and the
// timer's place in the listings, then the capacitor's network, then the
// resistors', each by its value, then its number.
func compareOrder(a, b *candidate) int {
	stage := a.setup.stage
	order := cmp.Or(
		cmp.Compare(a.setup.index, b.setup.index),
		compareNetworks(stage.capacitors, a.farad, b.farad),
	)
	for i := 0; order == 0 && i < len(a.setup.circuit.Resistors); i++ {
		order = compareNetworks(stage.resistors, a.ohms[i], b.ohms[i])
	}
	return order
}

func compareNetworks(tables []*network.Table, a, b choice) int {
	s, t := tables[a.table], tables[b.table]
	return cmp.Or(cmp.Compare(s.Values[a.row], t.Values[b.row]), cmp.Compare(s.Number(int(a.row)), t.Number(int(b.row))))
}

// collector keeps the answer while the search runs.
type collector interface {
	// limit returns the largest share of the allowance with which a fit of so
	// many parts and at least that cost can still join; negative: none can. What
	// ties with it within the rounding is to be offered.
	limit(parts int, cost inventory.Micros) float64
	offer(candidate)
}

// frontCollector keeps what nothing beats in (parts, cost, used) by less than the
// gain. What is turned away may be missed as a rival to what stands: see
// doubtful.
type frontCollector struct {
	gain  float64 // that every fit must have over each with no more parts and cost
	cells []cell
	steps [][]step // by number of parts, up to the most that a cell has: what limit looks up
}

// step is the limit from a cost on, for one number of parts.
type step struct {
	cost inventory.Micros
	at   float64 // of fits of this very cost, which may share the cell of this cost
	over float64 // of fits of more
}

func newFrontCollector(resolution float64) *frontCollector {
	return &frontCollector{gain: max(resolution-tie, tie)}
}

// cell is the fits of one number of parts and one cost. Its candidates are a
// staircase: the first uses least; each further one uses more but comes earlier
// in the order, so that a tie can still be decided by it.
type cell struct {
	parts      int
	cost       inventory.Micros
	candidates []candidate
}

func (c *cell) used() float64 { return c.candidates[0].used }

// champion returns the first in the order of those that tie for least used.
func (c *cell) champion() candidate {
	best := c.candidates[0]
	for _, other := range c.candidates[1:] {
		if other.used <= c.used()+tie && compareOrder(&other, &best) < 0 {
			best = other
		}
	}
	return best
}

func (f *frontCollector) limit(parts int, cost inventory.Micros) float64 {
	if len(f.steps) == 0 {
		return 1
	}
	most := len(f.steps) - 1
	steps := f.steps[min(parts, most)]
	n := sort.Search(len(steps), func(i int) bool { return steps[i].cost > cost })
	switch {
	case n == 0:
		return 1
	case steps[n-1].cost == cost && parts <= most:
		return steps[n-1].at
	}
	return steps[n-1].over
}

// climb rebuilds the steps after a cell changed.
func (f *frontCollector) climb() {
	most := 0
	for i := range f.cells {
		most = max(most, f.cells[i].parts)
	}
	f.steps = make([][]step, most+1)
	for parts := range f.steps {
		var inReach []*cell
		for i := range f.cells {
			if f.cells[i].parts <= parts {
				inReach = append(inReach, &f.cells[i])
			}
		}
		slices.SortFunc(inReach, func(a, b *cell) int { return cmp.Compare(a.cost, b.cost) })
		least := math.Inf(1) // used, of all cheaper
		for i := 0; i < len(inReach); {
			s := step{cost: inReach[i].cost, at: math.Inf(1)}
			below, same := least, math.Inf(1)
			for ; i < len(inReach) && inReach[i].cost == s.cost; i++ {
				if inReach[i].parts == parts {
					same = inReach[i].used()
				} else {
					below = min(below, inReach[i].used())
				}
			}
			least = min(below, same)
			s.at = min(1, below-f.gain, same)
			s.over = min(1, least-f.gain)
			f.steps[parts] = append(f.steps[parts], s)
		}
	}
}

func (f *frontCollector) offer(new candidate) {
	var own *cell
	for i := range f.cells {
		c := &f.cells[i]
		if c.parts == new.parts && c.cost == new.cost {
			own = c
		} else if c.parts <= new.parts && c.cost <= new.cost && new.used > c.used()-f.gain {
			return
		}
	}
	if own == nil {
		f.cells = append(f.cells, cell{new.parts, new.cost, []candidate{new}})
	} else if used := own.used(); !own.add(new) || own.used() == used {
		return
	}
	f.climb()
}

// add puts the candidate into the staircase and reports whether it stands.
func (c *cell) add(new candidate) bool {
	if new.used > c.used()+tie {
		return false
	}
	for i := range c.candidates {
		if old := &c.candidates[i]; old.used <= new.used && compareOrder(old, &new) <= 0 {
			return false
		}
	}
	c.candidates = slices.DeleteFunc(c.candidates, func(old candidate) bool {
		return old.used > new.used+tie || old.used >= new.used && compareOrder(&new, &old) <= 0
	})
	c.candidates = append(c.candidates, new)
	slices.SortFunc(c.candidates, func(a, b candidate) int { return cmp.Compare(a.used, b.used) })
	return true
}

// front returns the cells that gain enough over every other found with no more
// parts and no more cost.
func (f *frontCollector) front() []*cell {
	var front []*cell
	for i := range f.cells {
		if c := &f.cells[i]; f.lead(c) >= f.gain {
			front = append(front, c)
		}
	}
	return front
}

// lead returns by how much the cell uses less than every other found with no
// more parts and no more cost.
func (f *frontCollector) lead(c *cell) float64 {
	lead := math.Inf(1)
	for i := range f.cells {
		other := &f.cells[i]
		if other != c && other.parts <= c.parts && other.cost <= c.cost {
			lead = min(lead, other.used()-c.used())
		}
	}
	return lead
}

// doubtful reports whether a fit that was turned away could stand between the
// cell and those it leads: every fit was found but for those that use more than
// what was found, less the gain, so it must lie within twice the gain.
func (f *frontCollector) doubtful(c *cell) bool {
	return f.gain > tie && f.lead(c) < 2*f.gain
}

// rivalCollector looks for one fit with no more parts and cost than the cell,
// in another cell, that the cell does not lead by the gain.
type rivalCollector struct {
	cell  *cell
	gain  float64
	found bool
}

func (r *rivalCollector) limit(parts int, cost inventory.Micros) float64 {
	if r.found || parts > r.cell.parts || cost > r.cell.cost || parts == r.cell.parts && cost == r.cell.cost {
		return -1
	}
	return min(1, r.cell.used()+r.gain-2*tie)
}

func (r *rivalCollector) offer(c candidate) {
	if c.cost <= r.cell.cost && (c.parts != r.cell.parts || c.cost != r.cell.cost) {
		r.found = true
	}
}

// bestCollector keeps the first n fits by parts, cost, used and order.
type bestCollector struct {
	n    int
	best []candidate
	full bool // a fit was turned away or dropped
}

func compareBest(a, b *candidate) int {
	order := cmp.Or(cmp.Compare(a.parts, b.parts), cmp.Compare(a.cost, b.cost))
	if order == 0 && (a.used < b.used-tie || a.used > b.used+tie) {
		order = cmp.Compare(a.used, b.used)
	}
	return cmp.Or(order, compareOrder(a, b))
}

func (b *bestCollector) limit(parts int, cost inventory.Micros) float64 {
	if len(b.best) < b.n {
		return 1
	}
	last := &b.best[len(b.best)-1]
	switch {
	case parts > last.parts, parts == last.parts && cost > last.cost:
		b.full = true
		return -1
	case parts == last.parts && cost == last.cost:
		b.full = true
		return last.used
	}
	return 1
}

func (b *bestCollector) offer(new candidate) {
	at, _ := slices.BinarySearchFunc(b.best, new, func(a, b candidate) int { return compareBest(&a, &b) })
	b.best = slices.Insert(b.best, at, new)
	if len(b.best) > b.n {
		b.best = b.best[:b.n]
		b.full = true
	}
}

// sortFits puts the fits into the order of the preference. Ties go to the order
// in which the candidates compare, which the caller's slice is in.
func sortFits(fits []optimize.Fit, prefer optimize.Preference, basis optimize.Basis, spare func(*optimize.Fit) int64) {
	slices.SortStableFunc(fits, func(a, b optimize.Fit) int {
		parts := cmp.Compare(a.Parts, b.Parts)
		cost := cmp.Compare(a.Cost, b.Cost)
		used := cmp.Compare(a.Used(basis), b.Used(basis))
		switch prefer {
		case optimize.PreferCloseness:
			return cmp.Or(used, parts, cost)
		case optimize.PreferCost:
			return cmp.Or(cost, parts, used)
		case optimize.PreferSpare:
			return cmp.Or(cmp.Compare(spare(&b), spare(&a)), parts, used, cost)
		}
		return cmp.Or(parts, used, cost)
	})
}
