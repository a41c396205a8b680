package search

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// setups returns every circuit with every timer and diode that suit the spec and
// the stock, in the order of the listings, and what had to be left out.
func (s *stage) findSetups(lots []inventory.Lot) (out []optimize.Unsuited, timersUnstocked bool, err error) {
	circuits, err := circuitsFor(s.spec)
	if err != nil {
		return nil, false, err
	}
	devices, timersUnstocked, out, err := devicePools(s.spec, lots)
	if err != nil {
		return nil, false, err
	}
	diodes, inverters := diodePools(lots), inverterPools(lots)
	for _, circuit := range circuits {
		for _, device := range devices {
			conditions, err := device.device.Under(s.spec.Supply.Nominal, s.spec.Ambient.Nominal, s.spec.LoadA, s.spec.ControlV)
			for _, end := range []float64{s.spec.Supply.Min, s.spec.Supply.Max} {
				if _, endErr := device.device.Under(end, s.spec.Ambient.Nominal, s.spec.LoadA, s.spec.ControlV); err == nil {
					err = endErr
				}
			}
			if err == nil {
				err = fastEnough(device.device, s.spec)
			}
			if err != nil {
				out = append(out, optimize.Unsuited{Circuit: circuit.Slug, Timer: device.device.Name, Why: err.Error()})
				continue
			}
			base := setup{circuit: circuit, device: device, conditions: conditions}
			if len(device.pool.Lots) > 0 {
				base.cost += costOf(device.pool.Lot())
			}
			if why := s.addInverter(&base, inverters); why != "" {
				out = append(out, optimize.Unsuited{Circuit: circuit.Slug, Timer: device.device.Name, Why: why})
				continue
			}
			if circuit.Diodes == 0 {
				s.add(base)
				continue
			}
			if why := s.addWithDiodes(base, diodes); why != "" {
				out = append(out, optimize.Unsuited{Circuit: circuit.Slug, Timer: device.device.Name, Why: why})
			}
		}
	}
	return out, timersUnstocked, nil
}

// fastEnough returns an error where all that the spec allows is above the highest
// frequency of the device, so that no network need be looked at.
func fastEnough(device *timer.Device, spec optimize.Spec) error {
	of := windowsAt(&spec, 1)
	slowest := 1 / min(of.period.high, of.high.high+of.low.high)
	if most := device.FrequencyMaxHz; most > 0 && !spec.OneShot() && slowest > most*(1+outward) {
		return fmt.Errorf("%s works up to %s, and at least %s is asked for", device.Name, marking.FormatHertz(most), marking.FormatHertz(slowest))
	}
	return nil
}

// circuitsFor returns the circuits that the spec names, or all of its kind.
func circuitsFor(spec optimize.Spec) ([]*timer.Circuit, error) {
	if len(spec.Circuits) == 0 {
		return slices.DeleteFunc(timer.Circuits(), func(c *timer.Circuit) bool { return c.OneShot != spec.OneShot() }), nil
	}
	var found []*timer.Circuit
	for _, slug := range spec.Circuits {
		circuit := timer.CircuitBySlug(slug)
		if circuit == nil {
			return nil, inventory.Errorf(inventory.Invalid, "no circuit is called %q: known are %s", slug, slugs())
		}
		if circuit.OneShot != spec.OneShot() {
			wants := "high, low, period, frequency or duty"
			if circuit.OneShot {
				wants = "pulse alone"
			}
			return nil, inventory.Errorf(inventory.Invalid, "the circuit %s needs a spec that states %s", slug, wants)
		}
		if !slices.Contains(found, circuit) {
			found = append(found, circuit)
		}
	}
	slices.SortFunc(found, func(a, b *timer.Circuit) int { return listing(a) - listing(b) })
	return found, nil
}

func listing(circuit *timer.Circuit) int { return slices.Index(timer.Circuits(), circuit) }

func slugs() string {
	var all []string
	for _, circuit := range timer.Circuits() {
		all = append(all, circuit.Slug)
	}
	return strings.Join(all, ", ")
}

// addInverter takes the cheapest inverter that covers the boards. Where none is
// stocked the circuit stands and the fit says that it needs one.
func (s *stage) addInverter(base *setup, inverters []optimize.Pool) (why string) {
	if !base.circuit.Inverter {
		return ""
	}
	base.parts++
	for i := range inverters {
		pool := &inverters[i]
		if pool.Available >= s.spec.Boards && (base.inverter == nil || costOf(pool.Lot()) < costOf(base.inverter.Lot())) {
			base.inverter = pool
		}
	}
	if base.inverter == nil && len(inverters) > 0 {
		return fmt.Sprintf("no inverter in the drawer covers %d boards", s.spec.Boards)
	}
	if base.inverter != nil {
		base.cost += costOf(base.inverter.Lot())
	}
	return ""
}

// addWithDiodes adds a setup for every diode that covers the boards.
func (s *stage) addWithDiodes(base setup, diodes []optimize.Pool) (why string) {
	if len(diodes) == 0 {
		return "no diode whose law is known is available in the drawer"
	}
	needed := s.spec.Boards * int64(base.circuit.Diodes)
	added := false
	for i := range diodes {
		pool := &diodes[i]
		if pool.Available < needed {
			continue
		}
		diode, _, err := timer.DiodeOf(pool.Lot().Part)
		if err != nil {
			continue // diodePools left it out already
		}
		with := base
		with.diodes, with.diode = pool, diode
		with.parts += base.circuit.Diodes
		with.cost += inventory.Micros(base.circuit.Diodes) * costOf(pool.Lot())
		s.add(with)
		added = true
	}
	if !added {
		return fmt.Sprintf("no diode in the drawer covers %d boards: %d pieces are needed", s.spec.Boards, needed)
	}
	return ""
}

func (s *stage) add(with setup) {
	with.stage, with.index = s, len(s.setups)
	with.first = map[int32][]phaseBounds{}
	with.order = assignmentOrder(with.circuit, &with.conditions, with.diode)
	s.setups = append(s.setups, with)
}

func costOf(lot inventory.Lot) inventory.Micros {
	if lot.UnitCost == nil {
		return 0
	}
	return *lot.UnitCost
}

// dominant is the least share of a relative change of a resistor that a phase
// must follow for the search to count the phase as decided by it.
const dominant = 0.05

// assignmentOrder returns the resistor positions in the order in which the
// search assigns them: first those that decide the phase that fewest decide, so
// that a time window closes as early as it can. It looks at the slopes at one
// typical set of values; any order is exact, only slower.
func assignmentOrder(circuit *timer.Circuit, conditions *timer.Conditions, diode timer.Diode) []int {
	values := timer.Values{Farads: 1e-6, Diode: diode}
	for i := range circuit.Resistors {
		values.Ohms[i] = 100e3 / math.Pow(5, float64(i))
	}
	at := circuit.Phases(conditions, &values)
	var decide [2][]int // by phase: the positions
	for i := range circuit.Resistors {
		more := values
		more.Ohms[i] *= 1.01
		moved := circuit.Phases(conditions, &more)
		for phase, ratio := range []float64{moved.HighS / at.HighS, moved.LowS / at.LowS} {
			if !(math.Abs(ratio-1) < dominant*0.01) && !(circuit.OneShot && phase == 1) {
				decide[phase] = append(decide[phase], i)
			}
		}
	}
	first, second := decide[0], decide[1]
	if len(second) < len(first) {
		first, second = second, first
	}
	var order []int
	for _, positions := range [][]int{first, second, everyPosition(circuit)} {
		for _, position := range positions {
			if !slices.Contains(order, position) {
				order = append(order, position)
			}
		}
	}
	return order
}

func everyPosition(circuit *timer.Circuit) []int {
	positions := make([]int, len(circuit.Resistors))
	for i := range positions {
		positions[i] = i
	}
	return positions
}
