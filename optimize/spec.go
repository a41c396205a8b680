package optimize

import (
	"math"
	"time"
)

// Measure is a timing quantity that a spec can state.
type Measure int

// The measures, in the order in which they are listed.
const (
	High Measure = iota // output high time of the running oscillator, s
	Low                 // output low time, s
	Period
	Frequency // Hz
	Duty      // high time over period, 0..1
	Pulse     // length of a one-shot's pulse, s
)

var measureNames = [...]string{"high", "low", "period", "frequency", "duty", "pulse"}

// String returns the measure's word on the command line and in job files.
func (m Measure) String() string { return measureNames[m] }

// Measures returns every measure in order.
func Measures() []Measure { return []Measure{High, Low, Period, Frequency, Duty, Pulse} }

// Unit returns the unit of the measure: "s", "Hz", or "" for duty.
func (m Measure) Unit() string {
	switch m {
	case Frequency:
		return "Hz"
	case Duty:
		return ""
	}
	return "s"
}

// Allowance is how far a quantity may be from its target: Min ≤ Target ≤ Max.
type Allowance struct{ Target, Min, Max float64 }

// Used returns the share of the allowance that x consumes: 0 on target, 1 at
// the limit, above 1 a miss, +Inf off target on a side that allows nothing.
func (a Allowance) Used(x float64) float64 {
	switch {
	case x == a.Target:
		return 0
	case x > a.Target:
		return (x - a.Target) / (a.Max - a.Target)
	case x < a.Target:
		return (a.Target - x) / (a.Target - a.Min)
	}
	return math.Inf(1) // NaN
}

// Requirement is one stated quantity of a spec.
type Requirement struct {
	Measure Measure
	Allowance
}

// Range is a quantity with its nominal value: Min ≤ Nominal ≤ Max.
type Range struct{ Nominal, Min, Max float64 }

// Exactly returns the range that holds x alone.
func Exactly(x float64) Range { return Range{x, x, x} }

// Basis is the figure that a fit is judged by.
type Basis int

// The bases of judgement.
const (
	Nominal   Basis = iota // values as marked or measured
	WorstCase              // the worst corner of every spread
)

// Preference is the order in which a front is printed.
type Preference int

// The orders: what comes first, all else following as the tie-break.
const (
	PreferParts Preference = iota
	PreferCloseness
	PreferCost
	PreferSpare // most boards that the stock covers
)

// Spec is what is asked of one stage. Requirements is not empty; for a
// one-shot it holds Pulse alone, for an oscillator any of the others.
type Spec struct {
	Requirements []Requirement // sorted by measure, each at most once
	Supply       Range         // V
	Ambient      Range         // °C
	Circuits     []string      // slugs; empty: all that suit
	Timers       []string      // names; empty: those stocked
	PartsEach    int           // most parts in a resistor position, ≥ 1
	PartsC       int           // most parts in the capacitor position, ≥ 1
	Boards       int64         // that the stock must cover with the same fit, ≥ 1
	Basis        Basis
	Prefer       Preference
	Show         int     // most fits listed, 0: all
	Resolution   float64 // least gain in allowance used that another part or cost must bring
	LoadA        float64 // current that the output must deliver, A
	ControlV     float64 // driven control pin, V; 0: not driven
	TimeLimit    time.Duration
}

// OneShot reports whether the spec asks for a single pulse.
func (s Spec) OneShot() bool {
	return len(s.Requirements) == 1 && s.Requirements[0].Measure == Pulse
}
