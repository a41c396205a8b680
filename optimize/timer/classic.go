package timer

// classic charges through RA + RB and discharges through RB alone.
var classic = Circuit{
	Slug:      "classic",
	Title:     "RA and RB charge, RB discharges: high longer than low",
	Resistors: []string{"ra", "rb"},
	HighTrend: Trend{+1, +1},
	LowTrend:  Trend{-1, +1},
	Phases: func(c *Conditions, v *Values) Phases {
		ra, rb := v.Ohms[0], v.Ohms[1]
		vth, rth := pulledDown(c, ra, rb, 0)
		return Phases{
			HighS: rampS(c.SupplyV, ra+rb, v.Farads, c.LowLevelV, c.HighLevelV),
			LowS:  rampS(vth, rth, v.Farads, c.HighLevelV, c.LowLevelV),
		}
	},
}

// pulledDown returns the Thevenin voltage and resistance at the capacitor while
// the switch discharges it through rb and rd against ra, which pulls up still.
func pulledDown(c *Conditions, ra, rb, rd float64) (vth, rth float64) {
	rx := rd + c.SwitchOhm
	return (c.SupplyV*rx + c.SwitchV*ra) / (ra + rx), rb + ra*rx/(ra+rx)
}
