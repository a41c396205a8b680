package timer

import "math"

// MaxResistors is the most resistor positions that any circuit has.
const MaxResistors = 3

// Values fills the positions of a circuit: Ohms in the order of
// Circuit.Resistors, one capacitance, and the diode model where the circuit has
// diodes.
type Values struct {
	Ohms   [MaxResistors]float64
	Farads float64
	Diode  Diode
}

// Trend is the sign of a phase time's slope in each resistor: +1 longer with
// more resistance, -1 shorter, 0 independent. Every phase is longer with more
// capacitance.
type Trend [MaxResistors]int8

// Phases is the duration of each phase, s; +Inf for one that never ends. A
// one-shot has HighS alone.
type Phases struct{ HighS, LowS float64 }

// Circuit is one of the wirings: its positions and its equations. Its values
// live in one file each; registry.go lists them.
type Circuit struct {
	Slug      string   // as on the command line
	Title     string   // a line for people
	Resistors []string // position names, in the order of Values.Ohms
	Diodes    int      // pieces in position d
	Inverter  bool     // an inverter follows the output
	OneShot   bool     // one pulse, no oscillation

	// HighTrend and LowTrend hold where every phase ends.
	HighTrend, LowTrend Trend

	// Phases returns the durations under the conditions; it allocates nothing.
	Phases func(*Conditions, *Values) Phases
	// FirstHighS returns the first high time from an empty capacitor, s.
	FirstHighS func(*Conditions, *Values) float64
	// Stalls returns, for values whose phases do not all end, which voltage
	// cannot be reached and why, for people.
	Stalls func(*Conditions, *Values) string
	// wire returns the lines of the circuit's SPICE netlist (netlist.go).
	wire func(*netlist)
}

// rampS returns the time in which a source of vth behind rth ohm moves farads
// from v0 to v1, s; +Inf where it cannot. t = R C ln((Vth-v0)/(Vth-v1)), the
// linear case of t = C ∫ dv/i(v).
func rampS(vth, rth, farads, v0, v1 float64) float64 {
	remaining := vth - v1
	if remaining == 0 || (remaining > 0) != (v1 > v0) {
		return math.Inf(1)
	}
	return rth * farads * math.Log1p((v1-v0)/remaining)
}
