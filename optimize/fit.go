package optimize

import (
	"time"

	"tickdrawer/inventory"
)

// Operator joins the members of a network.
type Operator int

// The operators. A Leaf has no members.
const (
	Leaf Operator = iota
	Series
	Parallel
)

// Network is a two-terminal series/parallel combination of parts. A Leaf is one
// piece of a lot; any other has two or more members, none of its own operator,
// in the total order of the network package.
type Network struct {
	Operator Operator
	Lot      inventory.Lot // of a Leaf
	Members  []Network     // of Series and Parallel
	Value    float64       // ohm or farad; 0 for a diode
}

// Lots calls visit for every leaf, left to right.
func (n Network) Lots(visit func(inventory.Lot)) {
	if n.Operator == Leaf {
		visit(n.Lot)
		return
	}
	for _, member := range n.Members {
		member.Lots(visit)
	}
}

// Parts returns how many pieces the network takes.
func (n Network) Parts() int {
	parts := 0
	n.Lots(func(inventory.Lot) { parts++ })
	return parts
}

// Placed is the network that fills a position of a circuit, Count times over
// (two matched diodes; otherwise 1).
type Placed struct {
	Position string
	Kind     inventory.Kind
	Count    int
	Network  Network
}

// Fit is a circuit, a timer and a network for every position, meeting a spec.
type Fit struct {
	Circuit       string
	Timer         string         // device name; "ideal" for the perfect one
	TimerLot      *inventory.Lot // nil where the timer is not from stock
	Inverter      *inventory.Lot // nil where none is needed or none is stocked
	NeedsInverter bool
	Networks      []Placed // in the circuit's order of positions

	Parts       int              // what fills the positions, and an inverter
	Cost        inventory.Micros // of all that is taken from stock, the timer too
	CostPartial bool             // some part has no unit cost and counts 0

	Nominal     Times
	WorstCase   TimesBand
	UsedNominal float64 // share of the allowance
	UsedWorst   float64
	Warnings    []string
}

// Used returns the share of the allowance by the basis.
func (f Fit) Used(b Basis) float64 {
	if b == WorstCase {
		return f.UsedWorst
	}
	return f.UsedNominal
}

// Usage returns how many pieces of each lot one board of the fit takes, the
// timer and the inverter included.
func (f Fit) Usage() map[inventory.LotID]int64 {
	usage := map[inventory.LotID]int64{}
	for _, placed := range f.Networks {
		placed.Network.Lots(func(l inventory.Lot) { usage[l.ID] += int64(placed.Count) })
	}
	for _, lot := range []*inventory.Lot{f.TimerLot, f.Inverter} {
		if lot != nil {
			usage[lot.ID]++
		}
	}
	return usage
}

// Search reports how a search ended.
type Search struct {
	Proven              bool    // no fit left out would have been on the front
	Bound               float64 // where not proven: no missed fit uses less than this share of the allowance
	Elapsed             time.Duration
	Resistor, Capacitor int // networks considered
}

// Front is the answer to one stage: the non-dominated fits in the spec's order.
type Front struct {
	Fits   []Fit
	Search Search
	// TimersUnstocked is set where no timer is stocked, so every known family
	// was tried and none is counted against the stock.
	TimersUnstocked bool
	// Unsuited names each circuit and timer that was left out, and why.
	Unsuited []Unsuited
}

// Unsuited is a circuit with a timer that could not be tried.
type Unsuited struct{ Circuit, Timer, Why string }
