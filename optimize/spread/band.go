package spread

import (
	"math"

	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// cornersOfAll is how many corners the most resistors have.
const cornersOfAll = 1 << timer.MaxResistors

// phases holds the phases of 1 F at every corner of the resistors; bit i of the
// index says that resistor i is at its largest. No phase depends on two drops of
// the timer, so every pair of a high and a low time belongs to some timer.
type phases struct {
	high, low [cornersOfAll][2]float64 // drops at their least, at their largest
}

// Band returns the worst case for the values, which must be valid: see WorstCase.
// It allocates nothing.
func (e *Evaluator) Band(values *Values) optimize.TimesBand {
	band := optimize.TimesBand{High: none, Low: none, Period: none, Duty: none, FirstHigh: none, Pulse: none}
	for i := range e.corners {
		of1F := e.bandAt(&e.corners[i], values)
		e.widenTimes(&band, &of1F, values)
		e.duties[i] = of1F.Duty
		widen(&band.Duty, of1F.Duty)
	}
	if e.circuit.OneShot {
		return optimize.TimesBand{Pulse: band.Pulse}
	}
	band.Pulse = optimize.Band{}
	band.Duty = e.bent(band.Duty, values)
	band.Frequency = optimize.Band{Min: 1 / band.Period.Max, Max: 1 / band.Period.Min}
	return band
}

// widenTimes widens the band of every time by that of 1 F.
func (e *Evaluator) widenTimes(band, of1F *optimize.TimesBand, values *Values) {
	short, long := values.Farads.Min*e.scaleMin, values.Farads.Max*e.scaleMax
	for _, time := range [...]struct{ all, of1F *optimize.Band }{
		{&band.High, &of1F.High}, {&band.Low, &of1F.Low}, {&band.Period, &of1F.Period},
		{&band.FirstHigh, &of1F.FirstHigh}, {&band.Pulse, &of1F.Pulse},
	} {
		include(time.all, time.of1F.Min*short)
		include(time.all, time.of1F.Max*long)
	}
}

func widen(band *optimize.Band, by optimize.Band) {
	band.Min = min(band.Min, by.Min)
	band.Max = max(band.Max, by.Max)
}

func include(band *optimize.Band, x float64) {
	band.Min = min(band.Min, x)
	band.Max = max(band.Max, x)
}

// bandAt returns the worst case of 1 F at one corner of the surroundings.
func (e *Evaluator) bandAt(s *corner, values *Values) optimize.TimesBand {
	var c phases
	var band optimize.TimesBand
	band.High = e.corners1F(&c.high, e.circuit.HighS, e.highMoves, s, values)
	if e.circuit.OneShot {
		return optimize.TimesBand{Pulse: band.High}
	}
	band.Low = e.corners1F(&c.low, e.circuit.LowS, e.lowMoves, s, values)
	band.Period = none
	for mask := range 1 << len(e.circuit.Resistors) {
		for _, highS := range c.high[mask] {
			for _, lowS := range c.low[mask] {
				include(&band.Period, highS+lowS)
			}
		}
	}
	for i := range e.circuit.Resistors {
		if e.circuit.HighTrend[i]*e.circuit.LowTrend[i] < 0 && values.Ohms[i].Min != values.Ohms[i].Max {
			e.widenPeriod(&band.Period, &c, s, values, i)
		}
	}
	band.Duty = e.dutyBand(&c, s, values)
	band.FirstHigh = e.firstHigh(s, values, band.High)
	return band
}

// dutyAt returns the band of the duty at one corner of the surroundings.
func (e *Evaluator) dutyAt(s *corner, values *Values) optimize.Band {
	var c phases
	e.corners1F(&c.high, e.circuit.HighS, e.highMoves, s, values)
	e.corners1F(&c.low, e.circuit.LowS, e.lowMoves, s, values)
	return e.dutyBand(&c, s, values)
}

// dutyBand returns the band of the duty over the corners of the resistors. Where the leakage of the
// diode across RB is a part of the discharge that counts, the high time at one end
// of RB is taken with the low time at the other too: a bound.
func (e *Evaluator) dutyBand(c *phases, s *corner, values *Values) optimize.Band {
	band := none
	leaks := 0 // bit of the resistor across which the diode leaks
	for i := range e.circuit.Resistors {
		if e.circuit.Diodes == 1 && e.circuit.HighTrend[i]*e.circuit.LowTrend[i] > 0 && values.Ohms[i].Max > s.leakingOhm {
			leaks = 1 << i
		}
	}
	for mask := range 1 << len(e.circuit.Resistors) {
		for _, highS := range c.high[mask] {
			for _, lowS := range c.low[mask] {
				include(&band, duty(highS, lowS))
			}
			if leaks != 0 {
				for _, lowS := range c.low[mask^leaks] {
					include(&band, duty(highS, lowS))
				}
			}
		}
	}
	return band
}

// bent returns the band of the duty over the corners, widened by what it may gain
// between them, along the supply and along the temperature: see crest.
func (e *Evaluator) bent(band optimize.Band, values *Values) optimize.Band {
	var supply, warmth optimize.Band // largest gains
	for i := range e.bends {
		b := &e.bends[i]
		first, middle, last := e.duties[b.first], e.dutyAt(&b.middle, values), e.duties[b.last]
		along := &supply
		if b.warms {
			along = &warmth
		}
		along.Min = max(along.Min, crest(-first.Min, -middle.Min, -last.Min))
		along.Max = max(along.Max, crest(first.Max, middle.Max, last.Max))
	}
	return optimize.Band{
		Min: max(0, band.Min-supply.Min-warmth.Min),
		Max: min(1, band.Max+supply.Max+warmth.Max),
	}
}

// crest returns by how much the parabola through three equally spaced points rises
// above both ends between them, with a quarter of its sag for what is no parabola;
// 0 where it sags, or is clear of having its top there.
func crest(first, middle, last float64) float64 {
	slope, sag := math.Abs(last-first)/2, middle-(first+last)/2
	if sag <= 0 || slope >= 2.5*sag { // from 2 on the top of a parabola is beyond an end
		return 0
	}
	top := max(first, last)
	if slope < 2*sag {
		top = middle + slope*slope/(4*sag)
	}
	return top - max(first, last) + sag/4
}

var none = optimize.Band{Min: math.Inf(1), Max: math.Inf(-1)}

// duty returns the share of the high time; a phase that never ends is all of it.
func duty(highS, lowS float64) float64 {
	if math.IsInf(highS, 1) {
		return 1
	}
	return highS / (highS + lowS)
}

// corners1F fills in the phase of 1 F at every corner, each value computed once,
// and returns its band.
func (e *Evaluator) corners1F(at *[cornersOfAll][2]float64, phase phaseS, m moves, s *corner, values *Values) optimize.Band {
	band := none
	if e.circuit.Diodes == 2 && max(values.Ohms[0].Max, values.Ohms[1].Max) > s.leakingOhm {
		m.resistors = 1<<len(e.circuit.Resistors) - 1 // each phase leaks through the other's diode
	}
	for mask := range 1 << len(e.circuit.Resistors) {
		if same := mask & m.resistors; same != mask {
			at[mask] = at[same]
			continue
		}
		e.place(s, values, mask)
		least := phase(&s.least, &e.at)
		most := least
		if m.drops {
			most = phase(&s.most, &e.at)
		}
		at[mask] = [2]float64{least, most}
		include(&band, least)
		include(&band, most)
	}
	return band
}

type phaseS = func(*timer.Conditions, *timer.Values) float64

// place sets 1 F, the diode, and each resistor to the end that its bit of the mask names.
func (e *Evaluator) place(s *corner, values *Values, mask int) {
	e.at.Farads, e.at.Diode = 1, s.diode
	for i := range e.circuit.Resistors {
		e.at.Ohms[i] = values.Ohms[i].Min
		if mask>>i&1 != 0 {
			e.at.Ohms[i] = values.Ohms[i].Max
		}
	}
}

// widenPeriod widens the band of the period by what lies between the ends of
// resistor i, in which one phase rises, along a concave or straight line, and the
// other falls, along a convex one. The least period has all else at its least: it
// is at or above the chord of the rising phase with the falling one, which is
// convex. The largest has all else at its largest: it is at or below the rising
// phase with the chord of the falling one, which is concave.
func (e *Evaluator) widenPeriod(period *optimize.Band, c *phases, s *corner, values *Values, i int) {
	rising, falling := e.circuit.HighS, e.circuit.LowS
	rises, falls := &c.high, &c.low
	if e.circuit.HighTrend[i] < 0 {
		rising, falling = falling, rising
		rises, falls = falls, rises
	}
	low, high := values.Ohms[i].Min, values.Ohms[i].Max

	const least, most = 0, 1
	first, last := 0, 1<<i // corners with all else at its least
	if falls[first][least] != falls[last][least] {
		rise := chord{low, high, rises[first][least], rises[last][least]}
		e.place(s, values, first)
		period.Min = min(period.Min, valley(low, high, rises[first][least]+falls[first][least], rises[last][least]+falls[last][least],
			func(ohms float64) float64 {
				e.at.Ohms[i] = ohms
				return rise.at(ohms) + falling(&s.least, &e.at)
			}))
	}
	if e.circuit.Diodes == 0 {
		return // the rising phase is straight: the largest period is at an end
	}
	last = 1<<len(e.circuit.Resistors) - 1 // all else at its largest
	first = last &^ (1 << i)
	if falls[first][most] != falls[last][most] && !math.IsInf(falls[first][most], 1) {
		fall := chord{low, high, falls[first][most], falls[last][most]}
		e.place(s, values, last)
		// Turned over and read from the high end.
		period.Max = max(period.Max, -valley(low, high, -rises[last][most]-falls[last][most], -rises[first][most]-falls[first][most],
			func(ohms float64) float64 {
				ohms = low + high - ohms
				e.at.Ohms[i] = ohms
				return -rising(&s.most, &e.at) - fall.at(ohms)
			}))
	}
}

// chord is the straight line between two points.
type chord struct{ low, high, atLow, atHigh float64 }

func (c chord) at(x float64) float64 {
	return c.atLow + (c.atHigh-c.atLow)*(x-c.low)/(c.high-c.low)
}

// valley returns the least value of a convex f between low and high, or one below
// it by a billionth at most. Where f falls at low and rises at high, golden
// sections close in on the valley.
func valley(low, high, atLow, atHigh float64, f func(float64) float64) float64 {
	step := (high - low) * 1e-6
	if rises(atLow, f(low+step)) {
		return atLow
	}
	if !rises(f(high-step), atHigh) {
		return atHigh
	}
	const golden = 0.6180339887498949
	a, b := high-golden*(high-low), low+golden*(high-low)
	atA, atB := f(a), f(b)
	for range 40 {
		if rises(atA, atB) {
			high, b, atB = b, a, atA
			a = high - golden*(high-low)
			atA = f(a)
		} else {
			low, a, atA = a, b, atB
			b = low + golden*(high-low)
			atB = f(b)
		}
	}
	least := min(atA, atB)
	return least - 1e-9*math.Abs(least)
}

// rises reports whether f does not fall from the lower to the higher argument; at
// the lower one it may be +Inf yet, where a phase never ends.
func rises(atLower, atHigher float64) bool { return atLower <= atHigher && !math.IsInf(atLower, 1) }

// firstHigh returns the band of the first high time of 1 F. It has the trends of
// the high time; behind an inverter it is a high time like all others.
func (e *Evaluator) firstHigh(s *corner, values *Values, high optimize.Band) optimize.Band {
	if e.circuit.Inverter {
		return high
	}
	longest := 0
	for i := range e.circuit.Resistors {
		if e.circuit.HighTrend[i] > 0 {
			longest |= 1 << i
		}
	}
	var band optimize.Band
	if e.circuit.Diodes == 2 { // with less in the other path more leaks through it
		longest = 1<<len(e.circuit.Resistors) - 1
	}
	e.place(s, values, (1<<len(e.circuit.Resistors)-1)&^longest)
	band.Min = e.circuit.FirstHighS(&s.least, &e.at)
	e.place(s, values, longest)
	conditions := &s.least
	if e.highMoves.drops {
		conditions = &s.most
	}
	band.Max = e.circuit.FirstHighS(conditions, &e.at)
	return band
}
