package spread

import (
	"fmt"
	"math"
	"slices"

	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// Surroundings is what a circuit is used in, with its ranges.
type Surroundings struct {
	Device   *timer.Device
	SupplyV  optimize.Range
	AmbientC optimize.Range
	LoadA    float64 // current that the output delivers, A
	ControlV float64 // driven control pin, V; 0: not driven
}

// Values is the least and the largest value in each position of a circuit.
type Values struct {
	Ohms   [timer.MaxResistors]optimize.Band // in the order of Circuit.Resistors
	Farads optimize.Band
}

// Evaluator computes the worst case of one circuit with one timer and one diode
// for many values. It is not for use by several goroutines at once: Clone it.
type Evaluator struct {
	circuit             *timer.Circuit
	around              Surroundings
	scaleMin, scaleMax  float64 // the timer's own errors multiply all times
	corners             []corner
	bends               []bend
	highMoves, lowMoves moves

	// Scratch. The functions of a circuit are called through pointers, so what
	// they get would be allocated each time.
	at     timer.Values
	duties []optimize.Band // by corner
}

// corner is one supply and one ambient temperature, with the drops of the timer
// at their least and at their largest. The conditions are at 27 °C, with the diode
// that is there what the circuit's diode is at the ambient temperature, so that
// its law is moved once and not in every time.
type corner struct {
	least, most timer.Conditions
	diode       timer.Diode
	// leakingOhm is the resistance from which on a reverse biased diode's leakage
	// through it, or across it, changes how the times depend on it.
	leakingOhm float64
}

// bend is a place half way between two corners, where the duty may lie off the
// line between theirs: both phases fall with the supply, or with the temperature,
// and their ratio need not be monotone.
type bend struct {
	middle      corner
	first, last int // corners
	warms       bool
}

// NewEvaluator returns the evaluator of the circuit. The error is the device's:
// some corner of the surroundings breaks one of its limits.
//
// The corners of the surroundings are the ends of the supply range, the supplies
// in between at which the data sheet states drops, and the ends of the ambient
// range where the circuit has diodes; drops are those of timer.Device.Extremes.
// Initial error and drifts of the timing multiply all times alike (the data
// sheets state them so), by the largest figures stated; a figure that is only
// typical is used as it is, which Notes tells.
func NewEvaluator(circuit *timer.Circuit, around Surroundings, diode timer.Diode) (*Evaluator, error) {
	e := &Evaluator{circuit: circuit, around: around}
	off := e.largestTimingError()
	e.scaleMin, e.scaleMax = max(0, 1-off), 1+off

	supplies, ambient := e.suppliesV(), around.AmbientC
	warms := circuit.Diodes > 0 && ambient.Min != ambient.Max
	if !warms {
		ambient.Min = ambient.Nominal
	}
	for i, supplyV := range supplies {
		if err := e.addCorner(supplyV, ambient.Min, diode); err != nil {
			return nil, err
		}
		if i > 0 {
			middle, _ := e.cornerAt((supplies[i-1]+supplyV)/2, ambient.Min, diode) // between two that are within limits
			e.bends = append(e.bends, bend{middle: middle, first: i - 1, last: i})
		}
	}
	if warms {
		for _, supplyV := range supplies {
			if err := e.addCorner(supplyV, ambient.Max, diode); err != nil {
				return nil, err
			}
		}
		middle, _ := e.cornerAt(supplies[0], (ambient.Min+ambient.Max)/2, diode)
		e.bends = append(e.bends, bend{middle: middle, first: 0, last: len(supplies), warms: true})
	}
	e.duties = make([]optimize.Band, len(e.corners))
	e.highMoves = e.movesOf(circuit.HighS, circuit.HighTrend)
	e.lowMoves = e.movesOf(circuit.LowS, circuit.LowTrend)
	if !e.highMoves.surroundings || !e.lowMoves.surroundings {
		e.bends = nil // one of them stands still
	}
	return e, nil
}

// Clone returns an evaluator of its own for another goroutine.
func (e *Evaluator) Clone() *Evaluator {
	clone := *e
	clone.duties = make([]optimize.Band, len(e.duties))
	return &clone
}

func (e *Evaluator) addCorner(supplyV, ambientC float64, diode timer.Diode) error {
	corner, err := e.cornerAt(supplyV, ambientC, diode)
	e.corners = append(e.corners, corner)
	return err
}

func (e *Evaluator) cornerAt(supplyV, ambientC float64, diode timer.Diode) (corner, error) {
	least, most, err := e.around.Device.Extremes(supplyV, ambientC, e.around.LoadA, e.around.ControlV)
	c := corner{least: least, most: most, diode: diode.At(ambientC), leakingOhm: math.Inf(1)}
	c.least.AmbientC, c.most.AmbientC = modelC, modelC
	if saturationA := c.diode.SaturationA; saturationA > 0 {
		c.leakingOhm = leakageCounts * least.LowLevelV / saturationA
		if e.circuit.Diodes == 2 {
			lastV := min(most.OutHighV-most.HighLevelV, most.LowLevelV-most.OutLowV)
			c.leakingOhm = (lastV - c.diode.BlockingV()) / saturationA
		}
	}
	return c, err
}

const (
	// modelC is the temperature of a diode's figures, °C.
	modelC = 27
	// leakageCounts is the share of the lower level that the leakage of the diode
	// across RB may drop on RB before the duty is no longer monotone in RB for sure:
	// up to there the low time rises more steeply with RB than the high time.
	leakageCounts = 0.05
)

// suppliesV returns the supplies to evaluate at, ascending. Between stated points
// phases are monotone in the supply, as all levels scale with it and the drops do
// not; with the ideal timer and no diode they do not know it. A driven control pin
// does not scale: it may move the phases apart, so that a mesh is laid between the
// ends, which is close but no proof.
func (e *Evaluator) suppliesV() []float64 {
	r := e.around.SupplyV
	supplies := []float64{r.Min, r.Max}
	inside := e.around.Device.StatedSupplies()
	if e.around.ControlV > 0 {
		const strips = 16
		for i := 1; i < strips; i++ {
			inside = append(inside, r.Min+(r.Max-r.Min)*float64(i)/strips)
		}
	}
	for _, supplyV := range inside {
		if supplyV > r.Min && supplyV < r.Max {
			supplies = append(supplies, supplyV)
		}
	}
	slices.Sort(supplies)
	return slices.Compact(supplies)
}

// moves tells what a phase time depends on.
type moves struct {
	resistors    int  // bits of the positions
	drops        bool // of the timer
	surroundings bool // supply, temperature, drops
}

// movesOf returns what the phase depends on: the resistors of its trend, and the
// surroundings where they make a difference at all with ordinary values.
func (e *Evaluator) movesOf(phase phaseS, trend timer.Trend) moves {
	var m moves
	for i := range e.circuit.Resistors {
		if trend[i] != 0 {
			m.resistors |= 1 << i
		}
	}
	ordinary := timer.Values{Ohms: [timer.MaxResistors]float64{10e3, 10e3, 1e3}, Farads: 1}
	atFirst := 0.0
	for i := range e.corners {
		c := &e.corners[i]
		ordinary.Diode = c.diode
		least, most := phase(&c.least, &ordinary), phase(&c.most, &ordinary)
		if i == 0 {
			atFirst = least
		}
		m.drops = m.drops || least != most || math.IsInf(least, 1)
		m.surroundings = m.surroundings || m.drops || math.Abs(least-atFirst) > 1e-12*atFirst
	}
	return m
}

// WorstCase returns the least and the largest of every time of the circuit over
// the values and the surroundings: of High, Low, Period, Frequency, Duty and
// FirstHigh, or of Pulse alone for a one-shot. Where a corner stalls, a time's
// Max is +Inf and the frequency's Min is 0: Evaluator.Stalls tells which corner.
// The error says which band is none, or which limit of the device is broken.
func WorstCase(circuit *timer.Circuit, around Surroundings, values *Values, diode timer.Diode) (optimize.TimesBand, error) {
	for i, position := range circuit.Resistors {
		if b := values.Ohms[i]; !(b.Min >= 0 && b.Min <= b.Max) || math.IsInf(b.Max, 1) {
			return optimize.TimesBand{}, fmt.Errorf("%s from %g to %g ohm is no range of resistance", position, b.Min, b.Max)
		}
	}
	if b := values.Farads; !(b.Min > 0 && b.Min <= b.Max) || math.IsInf(b.Max, 1) {
		return optimize.TimesBand{}, fmt.Errorf("c from %g to %g F is no range of capacitance", b.Min, b.Max)
	}
	e, err := NewEvaluator(circuit, around, diode)
	if err != nil {
		return optimize.TimesBand{}, err
	}
	return e.Band(values), nil
}
