package search

import (
	"context"
	"math"
	"sort"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/timer"
)

// walk is one pass over the tables of a class.
//
// The first resistor is outermost: with it alone fixed, the phases for 1 F are
// bounded, and as every phase is proportional to the capacitance the windows
// leave a range of capacitors. Where many are left, the bounds for every row of
// the second resistor are computed once and serve all of them; else the rows are
// found by halving spans, as those of any further resistor are.
type walk struct {
	*stage
	*setup
	ctx     context.Context
	into    collector
	low     timer.Values // the box: each position between low and high
	high    timer.Values
	tables  [timer.MaxResistors]*network.Table // of this class, by position
	farads  *network.Table
	second  []phaseBounds   // by row of the second resistor's table, under the first one's row
	windows windows         // of the limit last asked for
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

// times returns the bounds for some farads.
func (b phaseBounds) times(farads float64) (high, low span) {
	return span{b.high.low * farads, b.high.high * farads}, span{b.low.low * farads, b.low.high * farads}
}

// halvings is about how many bounds a search by halving computes; where fewer
// rows a capacitor are to be gone through, their bounds are computed once.
const halvings = 24

// search walks the class and reports whether it came to the end.
func (w *walk) search(c *class) bool {
	w.at = candidate{setup: w.setup}
	w.low.Diode, w.high.Diode = w.diode, w.diode
	for depth, position := range w.order {
		if depth < 2 {
			w.use(position, c.ohms[position])
		} else {
			w.low.Ohms[position], w.high.Ohms[position] = w.ohms.low, w.ohms.high
		}
	}
	position := w.order[0]
	table := w.tables[position]
	kept := w.keptBounds(c.ohms[position])
	for row := range table.Len() {
		if !w.tick() {
			return false
		}
		w.at.parts = c.parts
		cost := c.cost - table.CheapestIn(1) + table.Costs[row]
		if w.into.limit(w.at.parts, cost) < 0 {
			continue
		}
		w.fix(position, row)
		if !kept[row].known {
			kept[row] = w.boundsOverAll()
		}
		w.second = w.second[:0]
		any := leastOf(w.capacitors)
		for t, farads := range w.capacitors {
			w.farads = farads
			w.at.farad.table = int32(t)
			w.at.parts = c.parts - any.parts + farads.Parts
			with := cost - any.cost + farads.CheapestIn(1)
			if limit := w.into.limit(w.at.parts, with); limit >= 0 {
				from, to := w.faradRows(&kept[row], limit)
				w.overFarads(&kept[row], with, from, to)
			}
		}
	}
	return !w.stopped
}

// use puts a table into a resistor position, all of its rows.
func (w *walk) use(position int, number int32) {
	table := w.resistors[number]
	w.tables[position] = table
	w.at.ohms[position].table = number
	w.low.Ohms[position], w.high.Ohms[position] = table.Values[0], table.Values[table.Len()-1]
}

// keptBounds returns the bounds for 1 F by row of the first resistor's table,
// which come back for every table of the other positions.
func (w *walk) keptBounds(table int32) []phaseBounds {
	if w.setup.first[table] == nil {
		w.setup.first[table] = make([]phaseBounds, w.resistors[table].Len())
	}
	return w.setup.first[table]
}

// boundsOverAll returns the bounds with the first resistor fixed and the others
// anywhere among all the networks there are.
func (w *walk) boundsOverAll() phaseBounds {
	low, high := w.low, w.high
	for _, position := range w.order[1:] {
		w.low.Ohms[position], w.high.Ohms[position] = w.ohms.low, w.ohms.high
	}
	bounds := w.phaseBounds()
	w.low, w.high = low, high
	return bounds
}

// fix puts the row of its table into a resistor position.
func (w *walk) fix(position, row int) {
	w.low.Ohms[position] = w.tables[position].Values[row]
	w.high.Ohms[position] = w.low.Ohms[position]
	w.at.ohms[position].row = int32(row)
}

// faradRows returns the rows of the capacitors that the windows leave.
func (w *walk) faradRows(bounds *phaseBounds, limit float64) (from, to int) {
	high, low := bounds.high, bounds.low
	if w.judge != nil {
		high, low = w.drifted(high), w.drifted(low)
	}
	if math.IsInf(high.low, 1) || math.IsInf(low.low, 1) {
		return 0, 0 // a phase that never ends
	}
	of := w.windowsOf(limit)
	farads := of.high.over(high)
	if !w.circuit.OneShot {
		farads = farads.meet(of.low.over(low))
	}
	farads = farads.widened()
	values := w.farads.Values
	return sort.SearchFloat64s(values, farads.low), sort.Search(len(values), func(i int) bool { return values[i] > farads.high })
}

// overFarads goes through the rows of the capacitors; the cost is the least with
// the first resistor fixed.
func (w *walk) overFarads(bounds *phaseBounds, cost inventory.Micros, from, to int) {
	for row := from; row < to && w.tick(); row++ {
		with := cost - w.farads.CheapestIn(1) + w.farads.Costs[row]
		limit := w.into.limit(w.at.parts, with)
		if limit < 0 {
			continue
		}
		w.low.Farads, w.high.Farads = w.farads.Values[row], w.farads.Values[row]
		w.at.farad.row = int32(row)
		if len(w.order) == 1 {
			w.leaf(with)
			continue
		}
		if w.hopeless(bounds, limit) {
			continue
		}
		if len(w.second) > 0 || (to-from)*halvings > w.tables[w.order[1]].Len() {
			w.overSecond(with, limit)
		} else {
			w.overRows(1, with)
		}
	}
}

// overRows searches all rows of the resistor at the depth; the cost is the least.
func (w *walk) overRows(depth int, cost inventory.Micros) {
	position := w.order[depth]
	table := w.tables[position]
	low, high := w.low.Ohms[position], w.high.Ohms[position]
	w.descend(depth, cost-table.CheapestIn(1), 1, 0, table.Len())
	w.low.Ohms[position], w.high.Ohms[position] = low, high
}

// overThird goes through the tables of the third resistor; the cost is the least
// with all else fixed.
func (w *walk) overThird(cost inventory.Micros) {
	position := w.order[2]
	any := leastOf(w.resistors)
	parts := w.at.parts
	for t, table := range w.resistors {
		w.at.parts = parts - any.parts + table.Parts
		with := cost - any.cost + table.CheapestIn(1)
		if w.into.limit(w.at.parts, with) >= 0 {
			w.use(position, int32(t))
			w.overRows(2, with)
		}
	}
	w.at.parts = parts
	w.low.Ohms[position], w.high.Ohms[position] = w.ohms.low, w.ohms.high
}

// overSecond goes through the rows of the second resistor that the windows
// leave; the cost is the least with the first resistor and the capacitor fixed.
func (w *walk) overSecond(cost inventory.Micros, limit float64) {
	position := w.order[1]
	table := w.tables[position]
	low, high := w.low.Ohms[position], w.high.Ohms[position]
	if len(w.second) == 0 {
		for row := range table.Len() {
			w.fix(position, row)
			w.second = append(w.second, w.phaseBounds())
		}
	}
	from, to := w.secondRows(position, limit)
	for row := from; row < to && w.tick(); row++ {
		with := cost - table.CheapestIn(1) + table.Costs[row]
		limit := w.into.limit(w.at.parts, with)
		if limit < 0 || w.hopeless(&w.second[row], limit) {
			continue
		}
		w.fix(position, row)
		if len(w.order) == 2 {
			w.leaf(with)
		} else {
			w.overThird(with)
		}
	}
	w.low.Ohms[position], w.high.Ohms[position] = low, high
}

// secondRows returns the rows of the second resistor within which each phase by
// itself can lie in its window, by the trends of their bounds.
func (w *walk) secondRows(position int, limit float64) (from, to int) {
	farads := w.low.Farads
	of := w.windowsOf(limit)
	slack := 1 + outward
	if w.judge != nil {
		slack += w.drift / (1 - w.drift)
	}
	from, to = 0, len(w.second)
	narrow := func(trend int8, within span, of func(*phaseBounds) span) {
		if trend != 1 && trend != -1 {
			return
		}
		short := func(i int) bool { return of(&w.second[i]).high*farads*slack < within.low }
		long := func(i int) bool { return of(&w.second[i]).low*farads > within.high*slack }
		if trend < 0 {
			short, long = long, short
		}
		// Ascending: rows that are too short, rows that may do, rows too long.
		first := from + sort.Search(to-from, func(i int) bool { return !short(from + i) })
		to = first + sort.Search(to-first, func(i int) bool { return long(first + i) })
		from = first
	}
	narrow(w.circuit.HighTrend[position], of.high, func(b *phaseBounds) span { return b.high })
	if !w.circuit.OneShot {
		narrow(w.circuit.LowTrend[position], of.low, func(b *phaseBounds) span { return b.low })
	}
	return from, to
}

// descend searches the span [from, to) of a resistor's table with what comes
// before it fixed; the cost is the least of all other positions.
func (w *walk) descend(depth int, others inventory.Micros, span, from, to int) {
	if !w.tick() {
		return
	}
	position := w.order[depth]
	table := w.tables[position]
	if to-from == 1 {
		w.fix(position, from)
		if depth == len(w.order)-1 {
			w.leaf(others + table.Costs[from])
			return
		}
	}
	w.low.Ohms[position], w.high.Ohms[position] = table.Values[from], table.Values[to-1]
	limit := w.into.limit(w.at.parts, others+table.CheapestIn(span))
	if limit < 0 {
		return
	}
	if bounds := w.phaseBounds(); w.hopeless(&bounds, limit) {
		return
	}
	if to-from == 1 {
		w.overThird(others + table.Costs[from])
		return
	}
	middle := network.Middle(from, to)
	w.descend(depth, others, 2*span, from, middle)
	w.descend(depth, others, 2*span+1, middle, to)
}

// hopeless reports whether nothing within the bounds for 1 F, with the capacitor
// at hand, uses at most the share of the allowance.
func (w *walk) hopeless(bounds *phaseBounds, share float64) bool {
	high, low := bounds.times(w.low.Farads)
	if w.judge != nil {
		high, low = w.drifted(high), w.drifted(low)
	}
	return w.windowsOf(share).misses(high, low, w.circuit.OneShot)
}

// tick counts a span and looks at the clock now and then.
func (w *walk) tick() bool {
	w.visited++
	if w.visited&0xfff == 0 && w.ctx.Err() != nil {
		w.stopped = true
	}
	return !w.stopped
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

// phaseBounds returns the bounds of the phases over the box for 1 F, from the
// corners that the circuit's trends name.
func (w *walk) phaseBounds() phaseBounds {
	circuit, at := w.circuit, &w.corners
	bounds := phaseBounds{high: anything(), low: anything(), known: true}
	known := w.corner(&at[0], circuit.HighTrend, -1)
	w.corner(&at[1], circuit.HighTrend, +1)
	if known {
		bounds.high = span{circuit.HighS(&w.conditions, &at[0]), circuit.HighS(&w.conditions, &at[1])}
	}
	if circuit.OneShot {
		return bounds
	}
	known = w.corner(&at[2], circuit.LowTrend, -1)
	w.corner(&at[3], circuit.LowTrend, +1)
	if known {
		bounds.low = span{circuit.LowS(&w.conditions, &at[2]), circuit.LowS(&w.conditions, &at[3])}
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
