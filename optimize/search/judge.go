package search

import (
	"fmt"
	"math"
	"slices"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/spread"
	"tickdrawer/optimize/timer"
)

// bands holds the band of every row of a table as far as it was asked for.
type bands map[choice]optimize.Band

func (b bands) of(tables []*network.Table, c choice, ambient optimize.Range) optimize.Band {
	band, known := b[c]
	if !known {
		tree := tables[c.table].Network(int(c.row))
		band = spread.NetworkBand(&tree, ambient)
		b[c] = band
	}
	return band
}

// useBasis makes what the worst case needs, and on that basis judges by it.
func (s *stage) useBasis() error {
	s.ohmBands, s.faradBands = bands{}, bands{}
	for i := range s.setups {
		setup := &s.setups[i]
		evaluator, err := spread.NewEvaluator(setup.circuit, spread.Surroundings{
			Device: setup.device.device, SupplyV: s.spec.Supply, AmbientC: s.spec.Ambient,
			LoadA: s.spec.LoadA, ControlV: s.spec.ControlV,
		}, setup.diode)
		if err != nil {
			return err
		}
		setup.evaluator = evaluator
	}
	if s.spec.Basis == optimize.WorstCase {
		s.judge = func(c *candidate) float64 { return s.spec.WorstAllowanceUsed(s.worstCase(c)) }
		s.dropTooWide()
	}
	return nil
}

// dropTooWide leaves out what can never hold in the worst case: a timer whose own
// errors, or a capacitor whose spread, multiplies every time by more than some
// window is wide.
func (s *stage) dropTooWide() {
	s.setups = slices.DeleteFunc(s.setups, func(setup setup) bool {
		return tooWide(&s.spec, setup.circuit.OneShot, setup.evaluator.TimeScale())
	})
	oneShot := s.spec.OneShot()
	for i, table := range s.capacitors {
		s.capacitors[i] = table.Only(func(row int) bool {
			tree := table.Network(row)
			return !tooWide(&s.spec, oneShot, spread.NetworkBand(&tree, s.spec.Ambient))
		})
	}
	s.capacitors = slices.DeleteFunc(s.capacitors, func(t *network.Table) bool { return t.Len() == 0 })
}

// tooWide reports whether a factor of every time spreads over more than some
// window of the spec.
func tooWide(spec *optimize.Spec, oneShot bool, factor optimize.Band) bool {
	of := windowsAt(spec, 1)
	least, most := factor.Min, factor.Max*(1-outward)
	return most*of.high.low > least*of.high.high ||
		!oneShot && (most*of.low.low > least*of.low.high || most*of.period.low > least*of.period.high)
}

// drift returns by how much, relative, the worst case of a fit may lie beside
// its nominal times: coefficients times the departure of the ambient range from
// the temperature that values refer to. But for this the nominal times lie
// within the worst case, so that their allowance used is a bound for it.
func drift(lots []inventory.Lot, ambient optimize.Range) float64 {
	most := 0.0
	for _, lot := range lots {
		if ppm := lot.Part.TempcoPPM; ppm != nil {
			most = max(most, math.Abs(*ppm))
		}
	}
	departure := max(math.Abs(ambient.Min-referenceC), math.Abs(ambient.Max-referenceC))
	return min(0.5, 3*most*1e-6*departure) // a resistor, a capacitor, and their product
}

// referenceC is the temperature that values and coefficients refer to, °C.
const referenceC = 25

// spreadOf returns the bands of the candidate's positions.
func (s *stage) spreadOf(c *candidate) spread.Values {
	var values spread.Values
	for i := range c.setup.circuit.Resistors {
		values.Ohms[i] = s.ohmBands.of(s.resistors, c.ohms[i], s.spec.Ambient)
	}
	values.Farads = s.faradBands.of(s.capacitors, c.farad, s.spec.Ambient)
	return values
}

func (s *stage) worstCase(c *candidate) optimize.TimesBand {
	values := s.spreadOf(c)
	return c.setup.evaluator.Band(&values)
}

// safe reports whether the candidate breaks no limit of its timer or its parts.
func (s *stage) safe(c *candidate) bool {
	return !timer.Broken(s.rails(c, s.placed(c)))
}

// rails returns the limits that the candidate breaks or comes near.
func (s *stage) rails(c *candidate, placed []optimize.Placed) []timer.Rail {
	values := s.values(c)
	ratings := timer.RatingsOf(c.setup.circuit, placed)
	return timer.Rails(c.setup.circuit, &c.setup.conditions, &values, &ratings)
}

// placed returns the candidate's networks as trees, in the circuit's order.
func (s *stage) placed(c *candidate) []optimize.Placed {
	var placed []optimize.Placed
	for i, position := range c.setup.circuit.Resistors {
		tree := s.resistors[c.ohms[i].table].Network(int(c.ohms[i].row))
		placed = append(placed, optimize.Placed{Position: position, Kind: inventory.Resistor, Count: 1, Network: tree})
	}
	tree := s.capacitors[c.farad.table].Network(int(c.farad.row))
	placed = append(placed, optimize.Placed{Position: "c", Kind: inventory.Capacitor, Count: 1, Network: tree})
	if c.setup.diodes != nil {
		placed = append(placed, optimize.Placed{
			Position: "d", Kind: inventory.Diode, Count: c.setup.circuit.Diodes,
			Network: optimize.Network{Lot: c.setup.diodes.Lot()},
		})
	}
	return placed
}

// warnings returns what a builder of the candidate should know.
func (s *stage) warnings(c *candidate, f *optimize.Fit) []string {
	var warnings []string
	for _, rail := range s.rails(c, f.Networks) {
		warnings = append(warnings, rail.Text)
	}
	if f.TimerLot == nil && f.Timer != timer.Ideal.Name {
		warnings = append(warnings, fmt.Sprintf("no %s is in the drawer", f.Timer))
	}
	if f.NeedsInverter && f.Inverter == nil {
		warnings = append(warnings, "the circuit needs an inverter, and none is in the drawer")
	}
	if note := spread.UnstatedNote(f.Networks); note != "" {
		warnings = append(warnings, note)
	}
	values := s.spreadOf(c)
	if why := c.setup.evaluator.Stalls(&values); why != "" {
		warnings = append(warnings, why)
	}
	return slices.Concat(warnings, c.setup.evaluator.Notes())
}
