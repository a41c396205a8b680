package timer

// outputFedSplit is output-fed with a diode and a resistor for each direction:
// RH sets the high time and RL the low time, each on its own. Two like diodes.
var outputFedSplit = Circuit{
	Slug:      "output-fed-split",
	Title:     "the output charges through RH and discharges through RL: any duty",
	Resistors: []string{"rh", "rl"},
	Diodes:    2,
	HighTrend: Trend{+1, 0},
	LowTrend:  Trend{0, +1},
	Phases: func(c *Conditions, v *Values) Phases {
		return Phases{HighS: splitHighS(c, v), LowS: splitLowS(c, v)}
	},
	HighS: splitHighS,
	LowS:  splitLowS,
	FirstHighS: func(c *Conditions, v *Values) float64 {
		d := v.Diode.at(c.AmbientC)
		return d.seriesRampS(v.Ohms[0], v.Ohms[1], c.OutHighOhm, v.Farads, c.OutHighV, c.OutHighV-c.HighLevelV)
	},
	Stalls: outputFedStalls,
	currents: func(c *Conditions, v *Values, capacitorV float64, high bool) currents {
		d := v.Diode.at(c.AmbientC)
		if high {
			charging := d.seriesA(v.Ohms[0]+c.OutHighOhm, c.OutHighV-capacitorV)
			return currents{ohms: [MaxResistors]float64{charging, 0}, outA: charging, capacitorA: charging}
		}
		discharging := d.seriesA(v.Ohms[1]+c.OutLowOhm, capacitorV-c.OutLowV)
		return currents{ohms: [MaxResistors]float64{0, discharging}, outA: -discharging, capacitorA: discharging}
	},
	wire: func(n *netlist) {
		n.timer("cap", "cap", "dis")
		n.diode("out", "charge")
		n.resistor("rh", "charge", "cap")
		n.resistor("rl", "cap", "discharge")
		n.diode("discharge", "out")
		n.capacitor(0)
	},
}

func splitHighS(c *Conditions, v *Values) float64 {
	return v.Diode.at(c.AmbientC).seriesRampS(v.Ohms[0], v.Ohms[1], c.OutHighOhm, v.Farads, c.OutHighV-c.LowLevelV, c.OutHighV-c.HighLevelV)
}

func splitLowS(c *Conditions, v *Values) float64 {
	return v.Diode.at(c.AmbientC).seriesRampS(v.Ohms[1], v.Ohms[0], c.OutLowOhm, v.Farads, c.HighLevelV-c.OutLowV, c.LowLevelV-c.OutLowV)
}
