package timer

// classicInverted is classic with its output taken through an inverter, so that
// high and low swap: the light is shorter than the dark. From an empty capacitor
// the inverted output starts low, and its first high time is like all others.
var classicInverted = Circuit{
	Slug:      "classic-inverted",
	Title:     "classic behind an inverter: low longer than high",
	Resistors: []string{"ra", "rb"},
	Inverter:  true,
	HighTrend: classic.LowTrend,
	LowTrend:  classic.HighTrend,
	Phases: func(c *Conditions, v *Values) Phases {
		return Phases{HighS: classicLowS(c, v), LowS: classicHighS(c, v)}
	},
	HighS:      classicLowS,
	LowS:       classicHighS,
	FirstHighS: classicLowS,
	Stalls:     classicStalls,
	currents:   classicCurrents,
	wire: func(n *netlist) {
		classicWire(n)
		n.line("Binverter inverted 0 V=V(vcc)*(1-V(state))")
	},
}
