package timer

// diodeBypass is classic with a diode across RB that conducts while charging,
// so RA sets the high time and RB the low time, nearly on their own.
var diodeBypass = Circuit{
	Slug:      "diode-bypass",
	Title:     "a diode bypasses RB while charging: RA sets high, RB sets low",
	Resistors: []string{"ra", "rb"},
	Diodes:    1,
	HighTrend: Trend{+1, +1},
	LowTrend:  Trend{-1, +1},
	Phases: func(c *Conditions, v *Values) Phases {
		ra, rb := v.Ohms[0], v.Ohms[1]
		d := v.Diode.at(c.AmbientC)
		vth, rth := pulledDown(c, ra, rb, 0)
		return Phases{
			HighS: d.bypassRampS(ra, rb, v.Farads, c.SupplyV-c.LowLevelV, c.SupplyV-c.HighLevelV),
			// The diode, reverse biased, passes its saturation current: a
			// source across RB, which is a voltage in series with it.
			LowS: rampS(vth-d.saturationA*rb, rth, v.Farads, c.HighLevelV, c.LowLevelV),
		}
	},
	FirstHighS: func(c *Conditions, v *Values) float64 {
		d := v.Diode.at(c.AmbientC)
		return d.bypassRampS(v.Ohms[0], v.Ohms[1], v.Farads, c.SupplyV, c.SupplyV-c.HighLevelV)
	},
	wire: func(n *netlist) {
		classicWire(n)
		n.diode("dis", "cap")
	},
	Stalls: func(c *Conditions, v *Values) string {
		d := v.Diode.at(c.AmbientC)
		vth, _ := pulledDown(c, v.Ohms[0], v.Ohms[1], 0)
		return noOscillation(
			stallsCharging(c, "ra charges the capacitor", c.SupplyV),
			stallsDischarging(c, "the discharge pin, with ra pulling up against it, takes the capacitor", vth-d.saturationA*v.Ohms[1]))
	},
}
