package search

import (
	"cmp"
	"slices"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
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

// choice is a row of the table of networks with so many parts.
type choice struct{ parts, row int32 }

// compareOrder is the total order that decides ties: the circuit's and the
// timer's place in the listings, then the capacitor's network, then the
// resistors'.
func compareOrder(a, b *candidate) int {
	order := cmp.Or(
		cmp.Compare(a.setup.index, b.setup.index),
		cmp.Compare(a.farad.parts, b.farad.parts), cmp.Compare(a.farad.row, b.farad.row),
	)
	for i := 0; order == 0 && i < timer.MaxResistors; i++ {
		order = cmp.Or(cmp.Compare(a.ohms[i].parts, b.ohms[i].parts), cmp.Compare(a.ohms[i].row, b.ohms[i].row))
	}
	return order
}

// collector keeps the answer while the search runs.
type collector interface {
	// limit returns the largest share of the allowance with which a fit of so
	// many parts and at least that cost can still join; negative: none can.
	limit(parts int, cost inventory.Micros) float64
	offer(candidate)
}

// frontCollector keeps what nothing beats in (parts, cost, used).
type frontCollector struct{ cells []cell }

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
	limit := 1.0
	for i := range f.cells {
		if c := &f.cells[i]; c.parts <= parts && c.cost <= cost {
			limit = min(limit, c.used())
		}
	}
	return limit
}

func (f *frontCollector) offer(new candidate) {
	var own *cell
	for i := range f.cells {
		c := &f.cells[i]
		if c.parts == new.parts && c.cost == new.cost {
			own = c
		} else if c.parts <= new.parts && c.cost <= new.cost && new.used > c.used()-tie {
			return
		}
	}
	if own == nil {
		f.cells = append(f.cells, cell{new.parts, new.cost, []candidate{new}})
	} else if !own.add(new) {
		return
	}
	f.cells = slices.DeleteFunc(f.cells, func(c cell) bool {
		beaten := new.parts <= c.parts && new.cost <= c.cost && c.used() > new.used-tie
		return beaten && (c.parts != new.parts || c.cost != new.cost)
	})
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

// front returns the champions that gain at least the resolution over every fit
// with no more parts and no more cost, unordered.
func (f *frontCollector) front(resolution float64) []candidate {
	var front []candidate
	gain := max(resolution-tie, tie)
	for i := range f.cells {
		c := &f.cells[i]
		joins := true
		for j := range f.cells {
			other := &f.cells[j]
			if i != j && other.parts <= c.parts && other.cost <= c.cost && c.used() > other.used()-gain {
				joins = false
			}
		}
		if joins {
			front = append(front, c.champion())
		}
	}
	return front
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
