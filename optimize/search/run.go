package search

import (
	"context"
	"math"
	"slices"
	"time"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/timer"
)

// Run returns the front of fits that the available lots give for the spec: none
// other meets it with no more parts, cost and allowance used, and each gains at
// least the spec's resolution. An empty front is no error. When ctx ends first
// the front is what was found and Search.Proven is false.
//
// The error (inventory.Invalid) names a circuit or timer that does not exist or
// does not suit the spec.
func Run(ctx context.Context, spec optimize.Spec, lots []inventory.Lot) (optimize.Front, error) {
	start := time.Now()
	s, front, err := prepare(spec, lots)
	if err != nil {
		return front, err
	}
	if spec.TimeLimit > 0 {
		var cancel context.CancelFunc
		ctx, cancel = context.WithTimeout(ctx, spec.TimeLimit)
		defer cancel()
	}
	collected := newFrontCollector(spec.Resolution)
	front.Search.Proven = s.run(ctx, collected)
	var candidates []candidate
	for _, cell := range collected.front() {
		if collected.doubtful(cell) {
			rival := rivalCollector{cell: cell, gain: collected.gain}
			if !s.run(ctx, &rival) && !rival.found {
				front.Search.Proven = false
			}
			if rival.found {
				continue
			}
		}
		candidates = append(candidates, cell.champion())
	}
	slices.SortFunc(candidates, func(a, b candidate) int { return compareOrder(&a, &b) })
	for i := range candidates {
		front.Fits = append(front.Fits, s.fit(&candidates[i]))
	}
	sortFits(front.Fits, spec.Prefer, spec.Basis, s.boardsCovered)
	front.Search.Elapsed = time.Since(start)
	return front, nil
}

// Best returns the first n fits by parts, then cost, then allowance used, not
// only those of the front, and whether they are all there are. When ctx ends
// first it returns ctx's error.
func Best(ctx context.Context, spec optimize.Spec, lots []inventory.Lot, n int) (fits []optimize.Fit, all bool, err error) {
	s, _, err := prepare(spec, lots)
	if err != nil {
		return nil, false, err
	}
	collected := bestCollector{n: n}
	if !s.run(ctx, &collected) {
		return nil, false, ctx.Err()
	}
	for i := range collected.best {
		fits = append(fits, s.fit(&collected.best[i]))
	}
	return fits, !collected.full, nil
}

// prepare grows the tables and finds the setups.
func prepare(spec optimize.Spec, lots []inventory.Lot) (*stage, optimize.Front, error) {
	var front optimize.Front
	s := &stage{spec: spec}
	var err error
	if front.Unsuited, front.TimersUnstocked, err = s.findSetups(lots); err != nil {
		return nil, front, err
	}
	resistors := pieces(lots, inventory.Resistor, spec.Boards)
	if s.resistors, err = tables(resistors, spec.PartsEach, spec.Basis, resistorTables); err != nil {
		return nil, front, err
	}
	if s.capacitors, err = tables(pieces(lots, inventory.Capacitor, spec.Boards), spec.PartsC, spec.Basis, capacitorTables); err != nil {
		return nil, front, err
	}
	for _, piece := range resistors {
		s.uses = append(s.uses, piece.Uses)
	}
	s.drift = drift(lots, spec.Ambient)
	s.ohms = span{math.Inf(1), 0}
	for _, table := range s.resistors {
		front.Search.Resistor += table.Len()
		s.ohms = span{min(s.ohms.low, table.Values[0]), max(s.ohms.high, table.Values[table.Len()-1])}
	}
	for _, table := range s.capacitors {
		front.Search.Capacitor += table.Len()
	}
	return s, front, s.useBasis()
}

// Into how many tables of ascending cost the networks of one number of parts are
// split, so that cheap ones are not searched for what only dear ones could bring.
// What is computed for a pair of resistors serves every capacitor of a table, so
// theirs are not split: their costs are looked at row by row.
const (
	resistorTables  = 4
	capacitorTables = 1
)

// tables returns the networks, each table of one number of parts and of some
// costs; none is empty.
func tables(pieces []network.Piece, most int, basis optimize.Basis, mostTables int) ([]*network.Table, error) {
	forest, err := network.Grow(pieces, most)
	if err != nil {
		return nil, err
	}
	var found []*network.Table
	for n := 1; n <= most; n++ {
		table := forest.Table
		if basis != optimize.Nominal { // equal values may spread unequally
			table = forest.Structures
		}
		found = append(found, table(n).ByCost(mostTables)...)
	}
	return found, nil
}

// fit returns the candidate with its networks as trees.
func (s *stage) fit(c *candidate) optimize.Fit {
	f := optimize.Fit{
		Circuit: c.setup.circuit.Slug, Timer: c.setup.device.device.Name,
		NeedsInverter: c.setup.circuit.Inverter,
		Parts:         c.parts, Cost: c.cost,
	}
	take := func(lot inventory.Lot) *inventory.Lot {
		f.CostPartial = f.CostPartial || lot.UnitCost == nil
		return &lot
	}
	if len(c.setup.device.pool.Lots) > 0 {
		f.TimerLot = take(c.setup.device.pool.Lot())
	}
	if c.setup.inverter != nil {
		f.Inverter = take(c.setup.inverter.Lot())
	}
	f.Networks = s.placed(c)
	for _, placed := range f.Networks {
		placed.Network.Lots(func(lot inventory.Lot) { take(lot) })
	}
	values := s.values(c)
	f.Nominal = timesOf(c.setup.circuit, c.setup.circuit.Phases(&c.setup.conditions, &values))
	if !c.setup.circuit.OneShot {
		f.Nominal.FirstHighS = c.setup.circuit.FirstHighS(&c.setup.conditions, &values)
	}
	f.UsedNominal = s.spec.AllowanceUsed(f.Nominal)
	f.WorstCase = s.worstCase(c)
	f.UsedWorst = s.spec.WorstAllowanceUsed(f.WorstCase)
	f.Warnings = s.warnings(c, &f)
	return f
}

// values returns what the candidate's networks amount to.
func (s *stage) values(c *candidate) timer.Values {
	values := timer.Values{Diode: c.setup.diode}
	for i := range c.setup.circuit.Resistors {
		values.Ohms[i] = s.resistors[c.ohms[i].table].Values[c.ohms[i].row]
	}
	values.Farads = s.capacitors[c.farad.table].Values[c.farad.row]
	return values
}

// boardsCovered returns how many boards of the fit the stock covers.
func (s *stage) boardsCovered(f *optimize.Fit) int64 {
	boards := int64(1<<62 - 1)
	usage := f.Usage()
	cover := func(lot inventory.Lot, available int64) {
		if n := usage[lot.ID]; n > 0 {
			boards = min(boards, available/n)
		}
	}
	for _, placed := range f.Networks {
		placed.Network.Lots(func(lot inventory.Lot) {
			if placed.Kind != inventory.Diode {
				cover(lot, lot.Available())
			}
		})
	}
	for i := range s.setups {
		setup := &s.setups[i]
		for _, pool := range []*optimize.Pool{&setup.device.pool, setup.diodes, setup.inverter} {
			if pool != nil && len(pool.Lots) > 0 {
				cover(pool.Lot(), pool.Available)
			}
		}
	}
	return boards
}
