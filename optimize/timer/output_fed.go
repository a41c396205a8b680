package timer

// outputFed charges and discharges the capacitor from the output through one
// resistor: equal times where the output swings from rail to rail. A bipolar
// timer pulls high to well below the supply, so there the high time is longer
// or never ends.
var outputFed = Circuit{
	Slug:      "output-fed",
	Title:     "the output charges and discharges through R: high equals low",
	Resistors: []string{"r"},
	HighTrend: Trend{+1},
	LowTrend:  Trend{+1},
	Phases: func(c *Conditions, v *Values) Phases {
		return Phases{HighS: fedHighS(c, v), LowS: fedLowS(c, v)}
	},
	HighS: fedHighS,
	LowS:  fedLowS,
	FirstHighS: func(c *Conditions, v *Values) float64 {
		return rampS(c.OutHighV, v.Ohms[0]+c.OutHighOhm, v.Farads, 0, c.HighLevelV)
	},
	Stalls: outputFedStalls,
	currents: func(c *Conditions, v *Values, capacitorV float64, high bool) currents {
		if high {
			charging := (c.OutHighV - capacitorV) / (v.Ohms[0] + c.OutHighOhm)
			return currents{ohms: [MaxResistors]float64{charging}, outA: charging, capacitorA: charging}
		}
		discharging := (capacitorV - c.OutLowV) / (v.Ohms[0] + c.OutLowOhm)
		return currents{ohms: [MaxResistors]float64{discharging}, outA: -discharging, capacitorA: discharging}
	},
	wire: func(n *netlist) {
		n.timer("cap", "cap", "dis")
		n.resistor("r", "out", "cap")
		n.capacitor(0)
	},
}

func outputFedStalls(c *Conditions, _ *Values) string {
	return noOscillation(
		stallsCharging(c, "the output, high, charges the capacitor", c.OutHighV),
		stallsDischarging(c, "the output, low, takes the capacitor", c.OutLowV))
}

func fedHighS(c *Conditions, v *Values) float64 {
	return rampS(c.OutHighV, v.Ohms[0]+c.OutHighOhm, v.Farads, c.LowLevelV, c.HighLevelV)
}

func fedLowS(c *Conditions, v *Values) float64 {
	return rampS(c.OutLowV, v.Ohms[0]+c.OutLowOhm, v.Farads, c.HighLevelV, c.LowLevelV)
}
