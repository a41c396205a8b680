package timer

import (
	"fmt"
	"math"
	"slices"

	"tickdrawer/inventory/marking"
)

// Stated is a figure of a data sheet, at 25 °C. Zero is a figure that the sheet
// does not state.
type Stated struct{ Typ, Max float64 }

// Largest returns the greatest figure stated: the typical one where it is the
// only one.
func (s Stated) Largest() float64 { return max(s.Typ, s.Max) }

// Drop is one stated point of an output or a switch: how far it stays from its
// rail at a supply and a current.
type Drop struct {
	SupplyV, CurrentA float64
	DropV             Stated
}

// TimingError is what the data sheet says of the timing interval itself; it
// multiplies every phase alike. Fractions: 0.01 is 1 %.
type TimingError struct {
	Initial   Stated
	PerKelvin Stated // drift with temperature
	PerVolt   Stated // drift with supply
}

// Levels is the spread of the two comparator levels at a supply, V.
type Levels struct {
	SupplyV                      float64
	ThresholdMinV, ThresholdMaxV float64
	TriggerMinV, TriggerMaxV     float64
}

// Device is a timer family as its data sheet gives it. A zero figure is one that
// the sheet does not state.
type Device struct {
	Name                   string // trade number, upper case; "ideal" for the perfect timer
	Document               string // the data sheets that the figures are from
	CMOS                   bool
	SupplyMinV, SupplyMaxV float64 // 0, 0: no limits (ideal)

	OutHigh []Drop // below the supply against the current sourced, by supply and current
	OutLow  []Drop // above ground against the current sunk, likewise
	Switch  []Drop // discharge pin above ground, likewise

	SourceMaxA, SinkMaxA float64 // output
	SwitchMaxA           float64 // discharge pin
	FrequencyMaxHz       float64

	ThresholdA, TriggerA, SwitchOffA Stated // input currents, A
	Astable, OneShot                 TimingError
	Levels                           []Levels
}

// Ideal is a timer with no imperfection: exact thirds, no currents, no drops,
// no delay, no limits.
var Ideal = Device{Name: "ideal"}

// Conditions is a device in use: the levels that the equations compute with.
type Conditions struct {
	Device                *Device
	SupplyV               float64
	AmbientC              float64
	LoadA                 float64 // current that the output delivers to a load to ground while high, A
	ControlV              float64 // driven control pin, V; 0: not driven
	HighLevelV, LowLevelV float64 // comparator levels Vhi, Vlo
	SwitchV, SwitchOhm    float64 // discharge switch when on: Vsat behind Ron
	OutHighV, OutHighOhm  float64 // output high: level behind a resistance, the load's share taken off
	OutLowV, OutLowOhm    float64 // output low, likewise
}

// Under returns the device's conditions, with its typical figures, at a supply,
// an ambient temperature, a load from the output to ground, and a driven control
// pin (0: not driven). The error says which limit of the device is broken.
//
// The comparator levels are two thirds and one third of the supply, or the
// driven control voltage and half of it. The drops are fitted to the stated
// points by pullUp and saturated.
func (d *Device) Under(supplyV, ambientC, loadA, controlV float64) (Conditions, error) {
	return d.under(supplyV, ambientC, loadA, controlV, typical)
}

// Extremes returns the device's conditions with every drop at its least and at
// its largest. The largest is the data sheet's; the least, which no sheet states,
// is as far below the typical drop as the largest is above it, and never below
// nothing. No phase depends on two of the drops, so the two conditions span what
// parts of the family do.
func (d *Device) Extremes(supplyV, ambientC, loadA, controlV float64) (least, most Conditions, err error) {
	if least, err = d.under(supplyV, ambientC, loadA, controlV, smallest); err != nil {
		return least, most, err
	}
	most, err = d.under(supplyV, ambientC, loadA, controlV, Stated.Largest)
	return least, most, err
}

func (d *Device) under(supplyV, ambientC, loadA, controlV float64, of figure) (Conditions, error) {
	c := Conditions{
		Device: d, SupplyV: supplyV, AmbientC: ambientC, LoadA: loadA, ControlV: controlV,
		HighLevelV: supplyV * 2 / 3, LowLevelV: supplyV / 3,
	}
	if err := d.check(&c); err != nil {
		return Conditions{}, err
	}
	if controlV > 0 {
		c.HighLevelV, c.LowLevelV = controlV, controlV/2
	}
	c.SwitchV, c.SwitchOhm = d.saturated(d.Switch, supplyV, of)
	c.OutLowV, c.OutLowOhm = d.saturated(d.OutLow, supplyV, of)
	dropV, ohm := d.pullUp(supplyV, loadA, of)
	c.OutHighV, c.OutHighOhm = supplyV-dropV, ohm
	return c, nil
}

// Bounds on what is computed with at all: a supply that a person may touch, and
// the temperatures at which parts are sold.
const (
	supplyCeilingV  = 1000
	ambientFloorC   = -65
	ambientCeilingC = 200
)

func (d *Device) check(c *Conditions) error {
	switch {
	case !(c.SupplyV > 0) || c.SupplyV > supplyCeilingV:
		return fmt.Errorf("a supply of %g V cannot be computed with: state one above 0 V, such as 9V", c.SupplyV)
	case d.SupplyMaxV > 0 && (c.SupplyV < d.SupplyMinV || c.SupplyV > d.SupplyMaxV):
		return fmt.Errorf("%s works from %g V to %g V, not %g V (%s)", d.Name, d.SupplyMinV, d.SupplyMaxV, c.SupplyV, d.Document)
	case !(c.AmbientC >= ambientFloorC && c.AmbientC <= ambientCeilingC):
		return fmt.Errorf("an ambient temperature of %g °C is outside %d °C to %d °C, which parts are made for", c.AmbientC, ambientFloorC, ambientCeilingC)
	case !(c.ControlV >= 0) || c.ControlV >= c.SupplyV:
		return fmt.Errorf("a control pin driven to %g V must lie between 0 V and the supply of %g V, or no phase ends", c.ControlV, c.SupplyV)
	case !(c.LoadA >= 0) || math.IsInf(c.LoadA, 1):
		return fmt.Errorf("a load of %g A cannot be computed with: state the current that the output delivers, such as 5mA", c.LoadA)
	case d.SourceMaxA > 0 && c.LoadA > d.SourceMaxA:
		return fmt.Errorf("the output of %s delivers %s at most, not %s: put a transistor between it and the load",
			d.Name, marking.FormatAmperes(d.SourceMaxA), marking.FormatAmperes(c.LoadA))
	}
	return nil
}

// figure picks one of a stated figure's values.
type figure func(Stated) float64

func typical(s Stated) float64 { return s.Typ }

// smallest returns the least figure: the sheets state none, so it is taken as far
// below the typical one as the largest is above, and never below nothing.
func smallest(s Stated) float64 { return max(0, 2*s.Typ-s.Largest()) }

// saturated returns a saturated output or switch as a voltage behind a
// resistance. A CMOS one is a resistance through the origin (common practice, no
// source), from the point of the least current at each stated supply. A bipolar
// one is the line through its two points of least current, at each supply that
// states two, or over all supplies where none does, as a saturated transistor
// hardly knows its supply. Between stated supplies both figures are interpolated,
// beyond them they stay.
func (d *Device) saturated(points []Drop, supplyV float64, of figure) (dropV, ohm float64) {
	if len(points) == 0 {
		return 0, 0
	}
	line := func(p []Drop) (dropV, ohm float64) {
		if d.CMOS || len(p) == 1 {
			return 0, of(p[0].DropV) / p[0].CurrentA
		}
		ohm = (of(p[1].DropV) - of(p[0].DropV)) / (p[1].CurrentA - p[0].CurrentA)
		dropV = of(p[0].DropV) - ohm*p[0].CurrentA
		if dropV < 0 || ohm < 0 {
			return 0, of(p[0].DropV) / p[0].CurrentA
		}
		return dropV, ohm
	}
	if !d.CMOS && countAt(points, points[0].SupplyV) == 1 {
		return line(points)
	}
	return interpolate(points, supplyV, line)
}

// pullUp returns the output high as a drop below the supply behind a resistance
// under a load. A CMOS one is a resistance through the origin, as in saturated. A
// bipolar one is a follower, whose drop falls but little with the current: below
// the least stated current it is taken as at that current (the sheet states
// nothing there), between stated currents it follows the line.
func (d *Device) pullUp(supplyV, loadA float64, of figure) (dropV, ohm float64) {
	if len(d.OutHigh) == 0 {
		return 0, 0
	}
	return interpolate(d.OutHigh, supplyV, func(p []Drop) (dropV, ohm float64) {
		if d.CMOS {
			ohm = of(p[0].DropV) / p[0].CurrentA
			return ohm * loadA, ohm
		}
		stated := of(p[0].DropV)
		dropV = stated
		for i := 1; i < len(p) && loadA > p[i-1].CurrentA; i++ {
			next := of(p[i].DropV)
			if p[i].DropV.Max == 0 { // the spread of the point before
				next = stated + p[i].DropV.Typ - p[i-1].DropV.Typ
			}
			ohm = (next - stated) / (p[i].CurrentA - p[i-1].CurrentA)
			dropV = stated + ohm*(loadA-p[i-1].CurrentA)
			stated = next
		}
		return dropV, ohm
	})
}

// countAt returns how many of the leading points are stated at the supply.
func countAt(points []Drop, supplyV float64) int {
	n := 0
	for n < len(points) && points[n].SupplyV == supplyV {
		n++
	}
	return n
}

// interpolate returns what fit makes of the points of each supply, linearly
// between the supplies and constant beyond the first and the last.
func interpolate(points []Drop, supplyV float64, fit func([]Drop) (dropV, ohm float64)) (dropV, ohm float64) {
	lowerV := 0.0
	for len(points) > 0 {
		n := countAt(points, points[0].SupplyV)
		upperV := points[0].SupplyV
		nextV, nextOhm := fit(points[:n])
		if supplyV <= upperV {
			if lowerV == 0 {
				return nextV, nextOhm
			}
			share := (supplyV - lowerV) / (upperV - lowerV)
			return dropV + share*(nextV-dropV), ohm + share*(nextOhm-ohm)
		}
		lowerV, dropV, ohm = upperV, nextV, nextOhm
		points = points[n:]
	}
	return dropV, ohm
}

// StatedSupplies returns the supplies at which any of the device's drops is
// stated, V, ascending: between them the drops are interpolated.
func (d *Device) StatedSupplies() []float64 {
	var supplies []float64
	for _, points := range [][]Drop{d.OutHigh, d.OutLow, d.Switch} {
		for _, p := range points {
			supplies = append(supplies, p.SupplyV)
		}
	}
	slices.Sort(supplies)
	return slices.Compact(supplies)
}

// highestA returns the largest current at which the drop is stated, 0 for none.
func highestA(points []Drop) float64 {
	highest := 0.0
	for _, p := range points {
		highest = max(highest, p.CurrentA)
	}
	return highest
}
