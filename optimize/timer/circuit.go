package timer

import "math"

// MaxResistors is the most resistor positions that any circuit has.
const MaxResistors = 3

// Values fills the positions of a circuit: Ohms in the order of
// Circuit.Resistors, one capacitance, and the diode model where the circuit has
// diodes (all its diodes are alike).
type Values struct {
	Ohms   [MaxResistors]float64
	Farads float64
	Diode  Diode
}

// Trend is the sign of a phase time's slope in each resistor: +1 never shorter
// with more resistance, -1 never longer, 0 independent. Every phase is
// proportional to the capacitance.
//
// The signs follow from the one law t = C ∫ dv/i(v): at every capacitor voltage
// the current of a passive network falls as a resistor in its path rises, and
// rises as the resistor that works against it rises. They say nothing of sums:
// where one phase grows and the other shrinks, the period has a minimum.
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

	// HighTrend and LowTrend hold where every phase ends and no rail is broken.
	HighTrend, LowTrend Trend

	// Phases returns the durations under the conditions; it allocates nothing.
	Phases func(*Conditions, *Values) Phases
	// HighS and LowS return the one and the other alone, s. The low time of a
	// one-shot is 0.
	HighS, LowS func(*Conditions, *Values) float64
	// FirstHighS returns the first high time from an empty capacitor, s; 0 for
	// a one-shot, +Inf where it never ends.
	FirstHighS func(*Conditions, *Values) float64
	// Stalls returns, for values whose phases do not all end, which voltage
	// cannot be reached and why, for people; "" where they all end.
	Stalls func(*Conditions, *Values) string
	// currents returns what flows while the latch is high or low and the capacitor
	// is at a voltage between the levels (rails.go).
	currents func(c *Conditions, v *Values, capacitorV float64, high bool) currents
	// wire writes the circuit's elements around the timer (netlist.go).
	wire func(*netlist)
}

// noLowS is the low time of a one-shot.
func noLowS(*Conditions, *Values) float64 { return 0 }

// rampS returns the time in which a source of vth behind rth ohm moves farads
// from v0 to v1, s; +Inf where it cannot. t = R C ln((Vth-v0)/(Vth-v1)), the
// linear case of t = C ∫ dv/i(v).
func rampS(vth, rth, farads, v0, v1 float64) float64 {
	if !reaches(vth, v0, v1) {
		return math.Inf(1)
	}
	return rth * farads * math.Log1p((v1-v0)/(vth-v1))
}

// reaches reports whether a source of vinf moves a capacitor from v0 past v1.
func reaches(vinf, v0, v1 float64) bool {
	if v1 > v0 {
		return vinf > v1
	}
	return vinf < v1
}

// pulledDown returns the Thevenin voltage and resistance at the capacitor while
// the switch discharges it through rb and rd against ra, which pulls up still.
// Without any resistance the supply wins.
func pulledDown(c *Conditions, ra, rb, rd float64) (vth, rth float64) {
	rx := rd + c.SwitchOhm
	if ra == 0 {
		return c.SupplyV, rb
	}
	return (c.SupplyV*rx + c.SwitchV*ra) / (ra + rx), rb + ra*rx/(ra+rx)
}

// limbCurrents returns what flows in the wirings with a discharge pin: charging
// through ra and rb, or discharging through rb and rd against ra.
func limbCurrents(c *Conditions, ra, rb, rd, capacitorV float64, high bool) currents {
	if high {
		charging := (c.SupplyV - capacitorV) / (ra + rb)
		return currents{ohms: [MaxResistors]float64{charging, charging, 0}, capacitorA: charging}
	}
	vth, rth := pulledDown(c, ra, rb, rd)
	discharging := max(0, (capacitorV-vth)/rth)
	junctionV := capacitorV
	if rb > 0 {
		junctionV -= discharging * rb
	}
	pulling := (c.SupplyV - junctionV) / ra
	sunk := pulling + discharging
	return currents{ohms: [MaxResistors]float64{pulling, discharging, sunk}, switchA: sunk, capacitorA: discharging}
}
