package timer

import (
	"fmt"

	"tickdrawer/inventory/marking"
)

// dischargeLimb is classic with RD between the RA-RB junction and the discharge
// pin, which lengthens the low time. It runs only while RD plus the switch can
// pull the junction below the lower level: RD < RA/2 for the ideal timer.
//
// HighS rises and LowS falls with RA, so the period has a minimum in RA.
var dischargeLimb = Circuit{
	Slug:      "discharge-limb",
	Title:     "RD in the discharge path: low as long as high, or longer",
	Resistors: []string{"ra", "rb", "rd"},
	HighTrend: Trend{+1, +1, 0},
	LowTrend:  Trend{-1, +1, +1},
	Phases: func(c *Conditions, v *Values) Phases {
		return Phases{HighS: classicHighS(c, v), LowS: limbLowS(c, v)}
	},
	HighS:      classicHighS,
	LowS:       limbLowS,
	FirstHighS: classicFirstHighS,
	currents: func(c *Conditions, v *Values, capacitorV float64, high bool) currents {
		return limbCurrents(c, v.Ohms[0], v.Ohms[1], v.Ohms[2], capacitorV, high)
	},
	wire: func(n *netlist) {
		n.timer("cap", "cap", "dis")
		n.resistor("ra", "vcc", "junction")
		n.resistor("rb", "junction", "cap")
		n.resistor("rd", "junction", "dis")
		n.capacitor(0)
	},
	Stalls: func(c *Conditions, v *Values) string {
		vth, _ := pulledDown(c, v.Ohms[0], v.Ohms[1], v.Ohms[2])
		low := stallsDischarging(c, "rd and the discharge pin, with ra pulling up against them, take the capacitor", vth)
		if low != "" {
			low += limbAdvice(c, v.Ohms[0])
		}
		return noOscillation(stallsCharging(c, "ra and rb charge the capacitor", c.SupplyV), low)
	},
}

func limbLowS(c *Conditions, v *Values) float64 {
	vth, rth := pulledDown(c, v.Ohms[0], v.Ohms[1], v.Ohms[2])
	return rampS(vth, rth, v.Farads, c.HighLevelV, c.LowLevelV)
}

// limbLimitOhm returns the rd at which the discharge of a discharge-limb circuit
// no longer reaches the lower level, ohm; not positive where none is small
// enough. RX = RA (Vlo-Vsat)/(VCC-Vlo), less the switch.
func limbLimitOhm(c *Conditions, ra float64) float64 {
	return ra*(c.LowLevelV-c.SwitchV)/(c.SupplyV-c.LowLevelV) - c.SwitchOhm
}

func limbAdvice(c *Conditions, ra float64) string {
	limit := limbLimitOhm(c, ra)
	if limit <= 0 {
		return fmt.Sprintf(" (no rd is small enough for ra of %s)", marking.FormatOhms(ra))
	}
	return fmt.Sprintf(" (with ra of %s, rd must stay below %s)", marking.FormatOhms(ra), marking.FormatOhms(limit))
}
