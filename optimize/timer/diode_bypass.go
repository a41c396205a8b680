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
		return Phases{HighS: bypassHighS(c, v), LowS: bypassLowS(c, v)}
	},
	HighS: bypassHighS,
	LowS:  bypassLowS,
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

func bypassHighS(c *Conditions, v *Values) float64 {
	return v.Diode.at(c.AmbientC).bypassRampS(v.Ohms[0], v.Ohms[1], v.Farads, c.SupplyV-c.LowLevelV, c.SupplyV-c.HighLevelV)
}

func bypassLowS(c *Conditions, v *Values) float64 {
	junctionV, junctionOhm := pulledDown(c, v.Ohms[0], 0, 0)
	return v.Diode.at(c.AmbientC).leakingRampS(junctionOhm, v.Ohms[1], v.Farads, c.HighLevelV-junctionV, c.LowLevelV-junctionV)
}
