package timer

// oneShot gives one pulse a trigger: the discharge pin holds the capacitor down
// at rest and lets go of it, R charges it to the upper level. PulseS is HighS,
// ln3 R C for the ideal timer.
var oneShot = Circuit{
	Slug:       "one-shot",
	Title:      "one pulse after each trigger",
	Resistors:  []string{"r"},
	OneShot:    true,
	HighTrend:  Trend{+1},
	Phases:     func(c *Conditions, v *Values) Phases { return Phases{HighS: triggeredS(c, v)} },
	HighS:      triggeredS,
	LowS:       noLowS,
	FirstHighS: func(*Conditions, *Values) float64 { return 0 },
	Stalls:     pulseStalls,
	// The discharge of the capacitor itself is left out: the switch limits it, and it
	// is over at once.
	currents: func(c *Conditions, v *Values, capacitorV float64, high bool) currents {
		if high {
			return pulseCurrents(c, v, capacitorV)
		}
		resting := (c.SupplyV - c.SwitchV) / (v.Ohms[0] + c.SwitchOhm)
		return currents{ohms: [MaxResistors]float64{resting}, switchA: resting}
	},
	wire: func(n *netlist) {
		n.timer("trigger", "cap", "cap")
		n.trigger("trigger")
		n.resistor("r", "vcc", "cap")
		n.capacitor(0)
	},
}

// triggeredS returns the pulse from the voltage at which the switch holds the
// capacitor against r.
func triggeredS(c *Conditions, v *Values) float64 {
	rest, _ := pulledDown(c, v.Ohms[0], 0, 0)
	return pulseS(c, v, rest)
}

// pulseS returns how long R takes to charge the capacitor from startV to the
// upper level, s: 0 where it rests there already, so that no pulse comes.
func pulseS(c *Conditions, v *Values, startV float64) float64 {
	if startV >= c.HighLevelV {
		return 0
	}
	return rampS(c.SupplyV, v.Ohms[0], v.Farads, startV, c.HighLevelV)
}

func pulseStalls(c *Conditions, _ *Values) string {
	return because("the pulse never ends: ", stallsCharging(c, "r charges the capacitor", c.SupplyV))
}

func pulseCurrents(c *Conditions, v *Values, capacitorV float64) currents {
	charging := (c.SupplyV - capacitorV) / v.Ohms[0]
	return currents{ohms: [MaxResistors]float64{charging}, capacitorA: charging}
}
