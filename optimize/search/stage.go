package search

import (
	"cmp"
	"context"
	"math"
	"slices"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/spread"
	"tickdrawer/optimize/timer"
)

// setup is one circuit with one timer and one diode: what the tables are
// searched for.
type setup struct {
	stage      *stage
	index      int // place in the order of setups: decides ties
	circuit    *timer.Circuit
	conditions timer.Conditions
	device     devicePool
	diode      timer.Diode
	diodes     *optimize.Pool // nil where the circuit has none
	inverter   *optimize.Pool // nil where the circuit has none or none is stocked
	parts      int            // besides the networks: diodes and inverter
	cost       inventory.Micros
	order      []int // resistor positions, in the order in which they are assigned
	evaluator  *spread.Evaluator
	first      map[int32][]phaseBounds // see walk.keptBounds; by the first resistor's table
}

// stage is a spec with the tables that it is searched in.
type stage struct {
	spec       optimize.Spec
	resistors  []*network.Table // each of one number of parts and some costs
	ohms       span             // of every resistor network
	capacitors []*network.Table
	setups     []setup
	uses       []int64                  // by resistor piece: most that one board may take
	judge      func(*candidate) float64 // allowance used by the basis; nil: nominal
	drift      float64                  // by how much the judged times may lie beside the nominal ones
	ohmBands   bands                    // by resistor network
	faradBands bands
}

// class is one table for each of the first two resistors that are assigned. The
// tables of a third, and of the capacitor, are gone through inside, so that what
// is computed for a pair of resistors serves them all.
type class struct {
	setup *setup
	ohms  [timer.MaxResistors]int32 // by position
	parts int                       // the fewest
	cost  inventory.Micros          // the least
}

// classes returns every choice of tables for the setup's first two resistors.
func (s *stage) classes(setup *setup) []class {
	ohms, farads := leastOf(s.resistors), leastOf(s.capacitors)
	least := class{setup: setup, parts: setup.parts + farads.parts, cost: setup.cost + farads.cost}
	for range len(setup.order) - 2 {
		least.parts += ohms.parts
		least.cost += ohms.cost
	}
	found := []class{least}
	for _, position := range setup.order[:min(2, len(setup.order))] {
		var next []class
		for _, c := range found {
			for t, table := range s.resistors {
				with := c
				with.ohms[position] = int32(t)
				with.parts += table.Parts
				with.cost += table.CheapestIn(1)
				next = append(next, with)
			}
		}
		found = next
	}
	return found
}

// least is the fewest parts and the least cost that any network of some tables
// has, each by itself.
type least struct {
	parts int
	cost  inventory.Micros
}

func leastOf(tables []*network.Table) least {
	l := least{tables[0].Parts, tables[0].CheapestIn(1)}
	for _, table := range tables[1:] {
		l.parts, l.cost = min(l.parts, table.Parts), min(l.cost, table.CheapestIn(1))
	}
	return l
}

// run offers every fit that can join the collector's answer, and reports
// whether it came to the end before ctx did.
func (s *stage) run(ctx context.Context, into collector) bool {
	if len(s.resistors) == 0 || len(s.capacitors) == 0 {
		return true
	}
	// Fewest parts first, then the cheapest: what is found bounds the rest.
	var classes []class
	for i := range s.setups {
		classes = append(classes, s.classes(&s.setups[i])...)
	}
	slices.SortStableFunc(classes, func(a, b class) int {
		return cmp.Or(cmp.Compare(a.parts, b.parts), cmp.Compare(a.cost, b.cost))
	})
	for i := range classes {
		c := &classes[i]
		if into.limit(c.parts, c.cost) < 0 {
			continue
		}
		w := walk{stage: s, setup: c.setup, ctx: ctx, into: into, windows: windows{share: math.NaN()}}
		if !w.search(c) {
			return false
		}
	}
	return ctx.Err() == nil
}
