package picks

import (
	"math"

	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// reading is one measure of a stage: what is asked, what is expected.
type reading struct {
	name    string
	unit    string // "s", "Hz", "%" of a share; with a prefix at the bench
	percent bool
	stated  *optimize.Allowance // nil where the spec does not ask for it
	nominal float64
	worst   *optimize.Band // nil where no worst case was computed
}

var measureNames = [...]string{
	optimize.High: "high time", optimize.Low: "low time", optimize.Period: "period",
	optimize.Frequency: "frequency", optimize.Duty: "duty, high", optimize.Pulse: "pulse",
}

// readings returns the measures of the fit in SI units, those that the spec
// states first.
func readings(fit optimize.Fit, spec optimize.Spec) []reading {
	stated := map[optimize.Measure]*optimize.Allowance{}
	for i := range spec.Requirements {
		stated[spec.Requirements[i].Measure] = &spec.Requirements[i].Allowance
	}
	var asked, others []reading
	for _, m := range optimize.Measures() {
		if (m == optimize.Pulse) != oneShot(fit) {
			continue
		}
		r := reading{name: measureNames[m], unit: m.Unit(), stated: stated[m], nominal: fit.Nominal.Of(m), worst: known(fit.WorstCase.Of(m))}
		if m == optimize.Duty {
			r.unit, r.percent = "%", true
		}
		if r.stated != nil {
			asked = append(asked, r)
		} else {
			others = append(others, r)
		}
	}
	if !oneShot(fit) && fit.Nominal.FirstHighS > 0 {
		others = append(others, reading{name: "first high time", unit: "s", nominal: fit.Nominal.FirstHighS, worst: known(fit.WorstCase.FirstHigh)})
	}
	return append(asked, others...)
}

// unending reports whether a figure of the reading is no number.
func (r reading) unending() bool {
	finite := figure{number: r.nominal}.finite()
	if r.worst != nil {
		finite = finite && figure{number: r.worst.Min}.finite() && figure{number: r.worst.Max}.finite()
	}
	return !finite
}

func oneShot(fit optimize.Fit) bool {
	if circuit := timer.CircuitBySlug(fit.Circuit); circuit != nil {
		return circuit.OneShot
	}
	return fit.Nominal.PulseS != 0
}

// known returns the band, or nil for the zero band.
func known(band optimize.Band) *optimize.Band {
	if band == (optimize.Band{}) {
		return nil
	}
	return &band
}

// prefixes of the units that are read at the bench, by power of ten.
var prefixes = map[string][]struct {
	power  int
	symbol string
}{
	"s":  {{0, ""}, {-3, "m"}, {-6, "µ"}, {-9, "n"}},
	"Hz": {{6, "M"}, {3, "k"}, {0, ""}},
}

// size returns the target, or the expected value where none is stated.
func (r reading) size() float64 {
	if r.stated != nil {
		return r.stated.Target
	}
	return r.nominal
}

// atBench returns the reading in the unit that an instrument shows for its
// size.
func (r reading) atBench() reading {
	steps := prefixes[r.unit]
	if size := math.Abs(r.size()); len(steps) > 0 && size > 0 && !math.IsInf(size, 0) {
		step := steps[len(steps)-1]
		for _, s := range steps {
			if size >= shifted(1, s.power) {
				step = s
				break
			}
		}
		r.unit = step.symbol + r.unit
		r.nominal = shifted(r.nominal, -step.power)
		if r.worst != nil {
			r.worst = &optimize.Band{Min: shifted(r.worst.Min, -step.power), Max: shifted(r.worst.Max, -step.power)}
		}
		if a := r.stated; a != nil {
			r.stated = &optimize.Allowance{Target: shifted(a.Target, -step.power), Min: shifted(a.Min, -step.power), Max: shifted(a.Max, -step.power)}
		}
	}
	return r
}

// figures returns how the reading's numbers are shown.
func (r reading) figures() func(float64) figure {
	spread := 0.0
	if r.stated != nil {
		spread = r.stated.Max - r.stated.Min
	}
	return figuresFor(r.size(), spread, r.percent)
}
