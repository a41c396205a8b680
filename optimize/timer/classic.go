package timer

// classic charges through RA + RB and discharges through RB alone.
var classic = Circuit{
	Slug:       "classic",
	Title:      "RA and RB charge, RB discharges: high longer than low",
	Resistors:  []string{"ra", "rb"},
	HighTrend:  Trend{+1, +1},
	LowTrend:   Trend{-1, +1},
	Phases:     classicPhases,
	HighS:      classicHighS,
	LowS:       classicLowS,
	FirstHighS: classicFirstHighS,
	Stalls:     classicStalls,
	currents:   classicCurrents,
	wire:       classicWire,
}

// classicPhases returns, for the ideal timer, HighS = ln2 (RA+RB) C and
// LowS = ln2 RB C.
func classicPhases(c *Conditions, v *Values) Phases {
	return Phases{HighS: classicHighS(c, v), LowS: classicLowS(c, v)}
}

func classicHighS(c *Conditions, v *Values) float64 {
	return rampS(c.SupplyV, v.Ohms[0]+v.Ohms[1], v.Farads, c.LowLevelV, c.HighLevelV)
}

func classicLowS(c *Conditions, v *Values) float64 {
	vth, rth := pulledDown(c, v.Ohms[0], v.Ohms[1], 0)
	return rampS(vth, rth, v.Farads, c.HighLevelV, c.LowLevelV)
}

func classicFirstHighS(c *Conditions, v *Values) float64 {
	return rampS(c.SupplyV, v.Ohms[0]+v.Ohms[1], v.Farads, 0, c.HighLevelV)
}

func classicStalls(c *Conditions, v *Values) string {
	return noOscillation(
		stallsCharging(c, "ra and rb charge the capacitor", c.SupplyV),
		stallsPulledDown(c, v.Ohms[0]))
}

// stallsPulledDown returns why the discharge pin cannot pull down ra, or "".
func stallsPulledDown(c *Conditions, ra float64) string {
	vth, _ := pulledDown(c, ra, 0, 0)
	return stallsDischarging(c, "the discharge pin, with ra pulling up against it, takes the capacitor", vth)
}

func classicWire(n *netlist) {
	n.timer("cap", "cap", "dis")
	n.resistor("ra", "vcc", "dis")
	n.resistor("rb", "dis", "cap")
	n.capacitor(0)
}

func classicCurrents(c *Conditions, v *Values, capacitorV float64, high bool) currents {
	return limbCurrents(c, v.Ohms[0], v.Ohms[1], 0, capacitorV, high)
}
