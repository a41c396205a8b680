package timer

// powerOnPulse gives one pulse when the supply comes up with the capacitor
// empty: trigger and threshold follow the capacitor, the discharge pin is not
// used. PulseS is HighS, ln3 R C for the ideal timer.
var powerOnPulse = Circuit{
	Slug:      "power-on-pulse",
	Title:     "one pulse at power-up",
	Resistors: []string{"r"},
	OneShot:   true,
	HighTrend: Trend{+1},
	Phases:    func(c *Conditions, v *Values) Phases { return Phases{HighS: powerOnS(c, v)} },
	HighS:     powerOnS,
	LowS:      noLowS,
	currents: func(c *Conditions, v *Values, capacitorV float64, _ bool) currents {
		return pulseCurrents(c, v, capacitorV)
	},
	wire: func(n *netlist) {
		n.timer("cap", "cap", "dis")
		n.resistor("r", "vcc", "cap")
		n.capacitor(0)
	},
	FirstHighS: func(*Conditions, *Values) float64 { return 0 },
	Stalls:     pulseStalls,
}

func powerOnS(c *Conditions, v *Values) float64 { return pulseS(c, v, 0) }
