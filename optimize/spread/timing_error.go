package spread

import (
	"fmt"
	"math"

	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

func (e *Evaluator) figures() timer.TimingError {
	if e.circuit.OneShot {
		return e.around.Device.OneShot
	}
	return e.around.Device.Astable
}

// TimeScale returns what the timer's own errors multiply every time by, at their
// least and at their largest, beside 1.
func (e *Evaluator) TimeScale() optimize.Band {
	return optimize.Band{Min: e.scaleMin, Max: e.scaleMax}
}

// largestTimingError returns that at whichever end of the supply range is further
// from the nominal supply. It is taken at every supply: a time that falls with the
// supply may have its least value between the ends, where the drift is less.
func (e *Evaluator) largestTimingError() float64 {
	return max(e.timingError(e.around.SupplyV.Min), e.timingError(e.around.SupplyV.Max))
}

// timingError returns the largest relative error of all times at a supply: the
// initial one, the drift with temperature over the ambient range from 25 °C, and
// the drift with the supply from the nominal one.
func (e *Evaluator) timingError(supplyV float64) float64 {
	figures, ambient := e.figures(), e.around.AmbientC
	departureK := max(math.Abs(ambient.Min-referenceC), math.Abs(ambient.Max-referenceC))
	return figures.Initial.Largest() + figures.PerKelvin.Largest()*departureK +
		figures.PerVolt.Largest()*math.Abs(supplyV-e.around.SupplyV.Nominal)
}

// Notes returns what the worst case leaves out for want of a figure, for people.
func (e *Evaluator) Notes() []string {
	device := e.around.Device
	if device == &timer.Ideal {
		return nil
	}
	var notes []string
	for _, figure := range []struct {
		name   string
		stated timer.Stated
		counts bool
	}{
		{"initial timing error", e.figures().Initial, true},
		{"drift with temperature", e.figures().PerKelvin, e.around.AmbientC.Min != referenceC || e.around.AmbientC.Max != referenceC},
		{"drift with supply", e.figures().PerVolt, e.around.SupplyV.Min != e.around.SupplyV.Max},
	} {
		switch {
		case !figure.counts || figure.stated.Max > 0:
		case figure.stated.Typ > 0:
			notes = append(notes, fmt.Sprintf("the data sheet of %s states its %s as typical only: the worst case may be wider", device.Name, figure.name))
		default:
			notes = append(notes, fmt.Sprintf("the data sheet of %s states no %s: the worst case leaves it out", device.Name, figure.name))
		}
	}
	return notes
}
