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

// class is one table for each position.
type class struct {
	setup *setup
	ohms  [timer.MaxResistors]int32
	farad int32
	parts int
	cost  inventory.Micros // the least
}

// classes returns every choice of tables for the setup's positions.
func (s *stage) classes(setup *setup) []class {
	found := []class{{setup: setup, parts: setup.parts, cost: setup.cost}}
	for i := range setup.circuit.Resistors {
		var next []class
		for _, c := range found {
			for t, table := range s.resistors {
				with := c
				with.ohms[i] = int32(t)
				with.parts += table.Parts
				with.cost += table.CheapestIn(1)
				next = append(next, with)
			}
		}
		found = next
	}
	var all []class
	for _, c := range found {
		for t, table := range s.capacitors {
			with := c
			with.farad = int32(t)
			with.parts += table.Parts
			with.cost += table.CheapestIn(1)
			all = append(all, with)
		}
	}
	return all
}

// run offers every fit that can join the collector's answer, and reports
// whether it came to the end before ctx did.
func (s *stage) run(ctx context.Context, into collector) bool {
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
