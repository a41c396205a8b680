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
}

// stage is a spec with the tables that it is searched in.
type stage struct {
	spec       optimize.Spec
	resistors  []*network.Table // by number of parts; [0] is nil
	capacitors []*network.Table
	setups     []setup
	uses       []int64                  // by resistor piece: most that one board may take
	judge      func(*candidate) float64 // allowance used by the basis; nil: nominal
	drift      float64                  // by how much the judged times may lie beside the nominal ones
	ohmBands   bands                    // by resistor network
	faradBands bands
}

// walk is one pass over the tables of a setup.
type walk struct {
	*stage
	*setup
	ctx     context.Context
	into    collector
	low     timer.Values // the box: each position between low and high
	high    timer.Values
	tables  [timer.MaxResistors]*network.Table // of this class, by position
	farads  *network.Table
	windows windows         // of the limit last asked for
	first   []phaseBounds   // of 1 F, by span of the first resistor's table
	corners [4]timer.Values // scratch: values escape through Circuit.Phases
	at      candidate
	pieces  []int32 // scratch
	visited int
	stopped bool
}

// phaseBounds bounds both phases.
type phaseBounds struct {
	high, low span
	known     bool
}

// class is how many parts each position has.
type class struct {
	farads int
	ohms   [timer.MaxResistors]int
	total  int
}

// classes returns every split of parts over the setup's positions, fewest parts
// first.
func (s *stage) classes(setup *setup) []class {
	found := []class{{}}
	for i := range setup.circuit.Resistors {
		var next []class
		for _, c := range found {
			for n := 1; n < len(s.resistors); n++ {
				c.ohms[i] = n
				next = append(next, c)
			}
		}
		found = next
	}
	var all []class
	for _, c := range found {
		for n := 1; n < len(s.capacitors); n++ {
			c.farads, c.total = n, n
			for _, parts := range c.ohms {
				c.total += parts
			}
			all = append(all, c)
		}
	}
	slices.SortStableFunc(all, func(a, b class) int { return cmp.Compare(a.total, b.total) })
	return all
}

// run offers every fit that can join the collector's answer, and reports
// whether it came to the end before ctx did.
func (s *stage) run(ctx context.Context, into collector) bool {
	// Classes of all setups together, fewest parts first: what is found with
	// few parts bounds the rest.
	type work struct {
		setup *setup
		class class
	}
	var works []work
	for i := range s.setups {
		for _, c := range s.classes(&s.setups[i]) {
			works = append(works, work{&s.setups[i], c})
		}
	}
	slices.SortStableFunc(works, func(a, b work) int {
		return cmp.Compare(a.class.total+a.setup.parts, b.class.total+b.setup.parts)
	})
	for _, work := range works {
		w := walk{stage: s, setup: work.setup, ctx: ctx, into: into, windows: windows{share: math.NaN()}}
		if !w.search(work.class) {
			return false
		}
	}
	return true
}

// search walks one class and reports whether it came to the end.
func (w *walk) search(c class) bool {
	w.farads = w.capacitors[c.farads]
	w.at = candidate{setup: w.setup, parts: w.parts + c.total}
	w.at.farad.parts = int32(c.farads)
	w.low.Diode, w.high.Diode = w.diode, w.diode
	rest := w.setup.cost
	for i := range w.circuit.Resistors {
		table := w.resistors[c.ohms[i]]
		if table.Len() == 0 {
			return true
		}
		w.tables[i] = table
		w.at.ohms[i].parts = int32(c.ohms[i])
		w.low.Ohms[i], w.high.Ohms[i] = table.Values[0], table.Values[table.Len()-1]
		rest += table.CheapestIn(1)
	}
	if w.farads.Len() == 0 {
		return true
	}
	if len(w.order) > 0 {
		w.first = make([]phaseBounds, w.tables[w.order[0]].Spans())
	}
	w.descend(-1, w.farads, rest, 1, 0, w.farads.Len())
	return !w.stopped
}

// descend searches the span [from, to) of a position's table: depth -1 is the
// capacitor, depth d the resistor order[d]. The cost is the least of all other
// positions.
func (w *walk) descend(depth int, table *network.Table, others inventory.Micros, span, from, to int) {
	if w.stopped || !w.tick() {
		return
	}
	low, high := w.slot(depth)
	*low, *high = table.Values[from], table.Values[to-1]
	last := depth == len(w.order)-1
	if to-from == 1 && last {
		w.choose(depth, from)
		w.leaf(others + table.Costs[from])
		return
	}
	limit := w.into.limit(w.at.parts, others+table.CheapestIn(span))
	if limit < 0 || w.hopeless(limit, depth, span) {
		return
	}
	if to-from == 1 {
		w.choose(depth, from)
		next := w.order[depth+1]
		below := w.tables[next]
		full := [2]float64{w.low.Ohms[next], w.high.Ohms[next]}
		w.descend(depth+1, below, others+table.Costs[from]-below.CheapestIn(1), 1, 0, below.Len())
		w.low.Ohms[next], w.high.Ohms[next] = full[0], full[1]
		return
	}
	middle := network.Middle(from, to)
	w.descend(depth, table, others, 2*span, from, middle)
	w.descend(depth, table, others, 2*span+1, middle, to)
}

// tick counts a span and looks at the clock now and then.
func (w *walk) tick() bool {
	w.visited++
	if w.visited&0xfff == 0 && w.ctx.Err() != nil {
		w.stopped = true
	}
	return !w.stopped
}

// slot returns the ends of the box at the depth.
func (w *walk) slot(depth int) (low, high *float64) {
	if depth < 0 {
		return &w.low.Farads, &w.high.Farads
	}
	position := w.order[depth]
	return &w.low.Ohms[position], &w.high.Ohms[position]
}

func (w *walk) choose(depth, row int) {
	if depth < 0 {
		w.at.farad.row = int32(row)
		return
	}
	w.at.ohms[w.order[depth]].row = int32(row)
}

// leaf offers the candidate at hand if it meets the spec from stock.
func (w *walk) leaf(cost inventory.Micros) {
	limit := w.into.limit(w.at.parts, cost)
	if limit < 0 {
		return
	}
	found := w.at
	found.cost = cost
	phases := w.circuit.Phases(&w.conditions, &w.low)
	if w.judge == nil {
		found.used = w.spec.AllowanceUsed(timesOf(w.circuit, phases))
	} else if high, low := w.drifted(exactly(phases.HighS)), w.drifted(exactly(phases.LowS)); !w.windowsOf(limit).misses(high, low, w.circuit.OneShot) {
		found.used = w.judge(&found)
	} else {
		return
	}
	if found.used <= min(1, limit)+tie && w.enough() && w.safe(&found) {
		w.into.offer(found)
	}
}

// drifted widens the span of a nominal phase to where judged times may lie.
func (s *stage) drifted(phase span) span {
	return span{phase.low * (1 - s.drift), phase.high * (1 + s.drift)}
}

// timesOf returns the phases as times of the circuit's kind.
func timesOf(circuit *timer.Circuit, phases timer.Phases) optimize.Times {
	if circuit.OneShot {
		return optimize.Times{PulseS: phases.HighS}
	}
	return optimize.Times{HighS: phases.HighS, LowS: phases.LowS}
}

// enough reports whether the resistor positions together stay within what one
// board may take of each lot; each network alone does already.
func (w *walk) enough() bool {
	if len(w.order) < 2 {
		return true
	}
	used := w.pieces[:0]
	for _, position := range w.order {
		used = w.tables[position].Pieces(int(w.at.ohms[position].row), used)
	}
	w.pieces = used
	for i, piece := range used {
		uses := int64(1)
		for _, other := range used[:i] {
			if other == piece {
				uses++
			}
		}
		if uses > w.uses[piece] {
			return false
		}
	}
	return true
}

// windowsOf returns the windows of the share of the allowance.
func (w *walk) windowsOf(share float64) *windows {
	if share != w.windows.share {
		w.windows = windowsAt(&w.spec, share)
	}
	return &w.windows
}

// hopeless reports whether no fit in the box uses at most the share of the
// allowance.
func (w *walk) hopeless(share float64, depth, span int) bool {
	bounds := w.unitBounds(depth, span)
	high := bounds.high.times(w.faradSpan())
	low := bounds.low.times(w.faradSpan())
	if w.judge != nil {
		high, low = w.drifted(high), w.drifted(low)
	}
	return w.windowsOf(share).misses(high, low, w.circuit.OneShot)
}

func (w *walk) faradSpan() span { return span{w.low.Farads, w.high.Farads} }

// unitBounds returns the bounds of the phases over the resistors' box for 1 F:
// every phase is proportional to the capacitance. Those of the first resistor's
// spans come back for every capacitor, so they are kept.
func (w *walk) unitBounds(depth, span int) phaseBounds {
	switch depth {
	case -1:
		depth, span = 0, 1 // no resistor is assigned: all of the first one's table
		fallthrough
	case 0:
		if bounds := &w.first[span]; bounds.known {
			return *bounds
		}
		w.first[span] = w.phaseBounds()
		return w.first[span]
	}
	return w.phaseBounds()
}

// phaseBounds returns the bounds of the phases over the box for 1 F, from the
// corners that the circuit's trends name.
func (w *walk) phaseBounds() phaseBounds {
	circuit, at := w.circuit, &w.corners
	bounds := phaseBounds{high: anything(), low: anything(), known: true}
	known := w.corner(&at[0], circuit.HighTrend, -1)
	w.corner(&at[1], circuit.HighTrend, +1)
	atShort := circuit.Phases(&w.conditions, &at[0])
	atLong := circuit.Phases(&w.conditions, &at[1])
	if known {
		bounds.high = span{atShort.HighS, atLong.HighS}
	}
	if circuit.OneShot {
		return bounds
	}
	known = w.corner(&at[2], circuit.LowTrend, -1)
	w.corner(&at[3], circuit.LowTrend, +1)
	if at[2] != at[0] {
		atShort = circuit.Phases(&w.conditions, &at[2])
	}
	if at[3] != at[1] {
		atLong = circuit.Phases(&w.conditions, &at[3])
	}
	if known {
		bounds.low = span{atShort.LowS, atLong.LowS}
	}
	return bounds
}

// corner sets values to the corner of the resistors' box at which a phase with
// the trend is shortest (towards -1) or longest (+1), with 1 F, and reports
// whether the trend is known.
func (w *walk) corner(values *timer.Values, trend timer.Trend, towards int8) (known bool) {
	*values = w.low
	values.Farads = 1
	known = true
	for i := range w.circuit.Resistors {
		switch trend[i] {
		case towards:
			values.Ohms[i] = w.high.Ohms[i]
		case 0, -towards:
		default:
			known = known && w.low.Ohms[i] == w.high.Ohms[i]
		}
	}
	return known
}
