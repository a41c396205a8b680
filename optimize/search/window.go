package search

import (
	"math"

	"tickdrawer/optimize"
)

// outward is by how much a bound is widened, relative: well above the rounding
// of a phase time.
const outward = 1e-12

// span is a lower and an upper bound of a quantity that is never negative.
type span struct{ low, high float64 }

func exactly(x float64) span { return span{x, x} }

func anything() span { return span{0, math.Inf(1)} }

func (s span) widened() span { return span{s.low * (1 - outward), s.high * (1 + outward)} }

func (s span) meet(t span) span { return span{max(s.low, t.low), min(s.high, t.high)} }

// empty reports whether nothing lies in the span; so does a NaN at an end.
func (s span) empty() bool { return !(s.low <= s.high) }

// times returns the span of products; an end at 0 times infinity is 0.
func (s span) times(t span) span { return span{product(s.low, t.low), product(s.high, t.high)} }

func product(a, b float64) float64 {
	if a == 0 || b == 0 {
		return 0
	}
	return a * b
}

// less returns the span of differences, cut at 0.
func (s span) less(t span) span {
	low := 0.0
	if !math.IsInf(t.high, 1) {
		low = max(0, s.low-t.high)
	}
	return span{low, s.high - t.low}
}

// over returns the span of quotients.
func (s span) over(t span) span {
	q := span{0, math.Inf(1)}
	if !math.IsInf(t.high, 1) {
		q.low = s.low / t.high
	}
	if t.low > 0 {
		q.high = s.high / t.low
	}
	return q
}

// windows is what the phases must lie in for a fit to use at most a share of
// the allowance; what the requirements on sums and ratios leave of each phase
// is worked into the phases' own windows. A one-shot's pulse is its high time.
type windows struct {
	share             float64
	high, low         span
	period, duty, gap span // gap is 1 - duty
}

// windowsAt returns the windows of the spec at a share of the allowance.
func windowsAt(spec *optimize.Spec, share float64) windows {
	w := windows{share: share, high: anything(), low: anything(), period: anything(), duty: span{0, 1}, gap: span{0, 1}}
	share += tie
	for _, r := range spec.Requirements {
		stated := span{r.Target - share*(r.Target-r.Min), r.Target + share*(r.Max-r.Target)}.widened()
		switch r.Measure {
		case optimize.High, optimize.Pulse:
			w.high = w.high.meet(stated)
		case optimize.Low:
			w.low = w.low.meet(stated)
		case optimize.Period:
			w.period = w.period.meet(stated)
		case optimize.Frequency:
			w.period = w.period.meet(span{1, 1}.over(stated))
		case optimize.Duty:
			w.duty = w.duty.meet(stated)
			w.gap = w.gap.meet(span{1 - stated.high, 1 - stated.low}.widened())
		}
	}
	for range 3 { // each round carries what one phase learned to the other
		w.high = w.high.meet(w.period.times(w.duty)).meet(w.period.less(w.low)).meet(w.low.times(w.duty).over(w.gap)).widened()
		w.low = w.low.meet(w.period.times(w.gap)).meet(w.period.less(w.high)).meet(w.high.times(w.gap).over(w.duty)).widened()
	}
	return w
}

// misses reports whether no pair of phases in the two spans lies in the windows.
func (w *windows) misses(high, low span, oneShot bool) bool {
	high = high.widened().meet(w.high)
	if high.empty() || oneShot {
		return high.empty()
	}
	low = low.widened().meet(w.low)
	if low.empty() {
		return true
	}
	if (span{high.low + low.low, high.high + low.high}).meet(w.period).empty() {
		return true
	}
	// high/period within duty: high·gap against low·duty at the ends.
	return product(high.high, w.gap.high) < product(low.low, w.duty.low)*(1-outward) ||
		product(high.low, w.gap.low) > product(low.high, w.duty.high)*(1+outward)
}
