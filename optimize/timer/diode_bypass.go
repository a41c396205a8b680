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
		junctionV, junctionOhm := pulledDown(c, ra, 0, 0)
		return Phases{
			HighS: d.bypassRampS(ra, rb, v.Farads, c.SupplyV-c.LowLevelV, c.SupplyV-c.HighLevelV),
			LowS:  d.leakingRampS(junctionOhm, rb, v.Farads, c.HighLevelV-junctionV, c.LowLevelV-junctionV),
		}
	},
	FirstHighS: func(c *Conditions, v *Values) float64 {
		d := v.Diode.at(c.AmbientC)
		return d.bypassRampS(v.Ohms[0], v.Ohms[1], v.Farads, c.SupplyV, c.SupplyV-c.HighLevelV)
	},
	currents: func(c *Conditions, v *Values, capacitorV float64, high bool) currents {
		if !high {
			return classicCurrents(c, v, capacitorV, false)
		}
		charging, bypassed := v.Diode.at(c.AmbientC).bypassCurrents(v.Ohms[0], v.Ohms[1], c.SupplyV-capacitorV)
		return currents{ohms: [MaxResistors]float64{charging, bypassed}, capacitorA: charging}
	},
	wire: func(n *netlist) {
		classicWire(n)
		n.diode("dis", "cap")
	},
	Stalls: func(c *Conditions, v *Values) string {
		return noOscillation(
			stallsCharging(c, "ra charges the capacitor", c.SupplyV),
			stallsPulledDown(c, v.Ohms[0]))
	},
}
