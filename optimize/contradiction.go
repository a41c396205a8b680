package optimize

import (
	"math/big"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

// NewRequirements returns a copy of the requirements sorted by measure. The error is that
// of CheckRequirements.
func NewRequirements(requirements []Requirement) ([]Requirement, error) {
	sorted := slices.SortedStableFunc(slices.Values(requirements), func(a, b Requirement) int { return int(a.Measure - b.Measure) })
	if err := CheckRequirements(sorted); err != nil {
		return nil, err
	}
	return sorted, nil
}

// CheckRequirements returns an error (inventory.Invalid) that says which requirements cannot stand
// together: none at all, a measure stated twice, a pulse beside measures of an
// oscillator, or two or three that no pair of a high and a low time meets, in
// exact arithmetic.
func CheckRequirements(requirements []Requirement) error {
	if len(requirements) == 0 {
		return inventory.Errorf(inventory.Invalid, "nothing is asked for; state at least one of %s", measureWords())
	}
	stated := map[Measure]bool{}
	for _, r := range requirements {
		if stated[r.Measure] {
			return inventory.Errorf(inventory.Invalid, "the %s is stated twice; state it once", r.Measure)
		}
		stated[r.Measure] = true
	}
	if stated[Pulse] && len(requirements) > 1 {
		other := requirements[0].Measure
		if other == Pulse {
			other = requirements[1].Measure
		}
		return inventory.Errorf(inventory.Invalid, "a pulse is of a one-shot and a %s of an oscillator; state one or the other", other)
	}
	return checkTogether(requirements)
}

func measureWords() string {
	var words []string
	for _, m := range Measures() {
		words = append(words, m.String())
	}
	return strings.Join(words, ", ")
}

// checkTogether finds the fewest requirements that exclude each other. Each one
// is a convex set of (high, low) pairs, so by Helly's theorem in the plane all
// have a pair in common where every three have.
func checkTogether(requirements []Requirement) error {
	n := len(requirements)
	for i := range n {
		for j := range i {
			if a, b := requirements[j], requirements[i]; !meetable(a, b) {
				return inventory.Errorf(inventory.Invalid, "%s and %s exclude each other; change or leave out one of them", a.words(), b.words())
			}
		}
	}
	for i := range n {
		for j := range i {
			for k := range j {
				if a, b, c := requirements[k], requirements[j], requirements[i]; !meetable(a, b, c) {
					return inventory.Errorf(inventory.Invalid, "%s, %s and %s exclude each other: the first two give a %s of %s; change or leave out one of them",
						a.words(), b.words(), c.words(), c.Measure, c.Measure.bandWords(extent(c.Measure, vertices([]Requirement{a, b}))))
				}
			}
		}
	}
	return nil
}

// words returns the requirement for people: "high 0.99 s to 1.01 s".
func (r Requirement) words() string {
	return r.Measure.String() + " " + r.Measure.bandWords(r.Min, r.Max)
}

func (m Measure) bandWords(low, high float64) string {
	return m.Format(low) + " to " + m.Format(high)
}

// Format returns a value of the measure for people: "3.98 s", "421.3 Hz",
// "48.3 %" for a duty.
func (m Measure) Format(x float64) string {
	switch m {
	case Frequency:
		return marking.FormatHertz(x)
	case Duty:
		return marking.FormatPercent(x)
	}
	return marking.FormatSeconds(x)
}

// halfPlane holds the (high, low) pairs with h·high + l·low ≥ c.
type halfPlane struct{ h, l, c *big.Rat }

// point is a (high, low) pair, s.
type point struct{ high, low *big.Rat }

func (p halfPlane) holds(at point) bool {
	return rat().Add(rat().Mul(p.h, at.high), rat().Mul(p.l, at.low)).Cmp(p.c) >= 0
}

func rat() *big.Rat               { return new(big.Rat) }
func ratOf(x float64) *big.Rat    { return rat().SetFloat64(x) }
func negated(x *big.Rat) *big.Rat { return rat().Neg(x) }

// The limits of a requirement are decimal numbers rounded to float64. slack is
// how far, relatively, they are moved outward for that, and thinnest the share
// of the shortest stated time that counts as a phase at all.
var (
	slack    = big.NewRat(1, 1e12)
	thinnest = big.NewRat(1, 1e9)
)

// halfPlanes returns the requirement on a running oscillator as linear bounds on
// its phases: of the sum for period and frequency, and for duty d as
// (1-d)·high - d·low against 0.
func (r Requirement) halfPlanes() []halfPlane {
	one, zero := big.NewRat(1, 1), rat()
	low := rat().Mul(ratOf(r.Min), rat().Sub(one, slack))
	high := rat().Mul(ratOf(r.Max), rat().Add(one, slack))
	between := func(h, l, low, high *big.Rat) []halfPlane {
		return []halfPlane{{h, l, low}, {negated(h), negated(l), negated(high)}}
	}
	switch r.Measure {
	case High:
		return between(one, zero, low, high)
	case Low:
		return between(zero, one, low, high)
	case Period:
		return between(one, one, low, high)
	case Frequency:
		return between(one, one, rat().Inv(high), rat().Inv(low))
	case Duty:
		return []halfPlane{
			{rat().Sub(one, low), negated(low), zero},
			{rat().Sub(high, one), high, zero},
		}
	}
	return nil
}

// vertices returns the corners of the set of (high, low) pairs that meet all the
// requirements, empty where none does. The set lies in the quadrant of positive
// times, so it holds no straight line, and has a corner unless it is empty.
func vertices(requirements []Requirement) []point {
	one, zero := big.NewRat(1, 1), rat()
	var bounds []halfPlane
	shortest := rat()
	for _, r := range requirements {
		bounds = append(bounds, r.halfPlanes()...)
		scale := ratOf(r.Max)
		switch r.Measure {
		case Frequency:
			scale = rat().Inv(ratOf(r.Min))
		case Duty, Pulse:
			continue
		}
		if shortest.Sign() == 0 || scale.Cmp(shortest) < 0 {
			shortest = scale
		}
	}
	if shortest.Sign() == 0 {
		shortest = one
	}
	phase := rat().Mul(shortest, thinnest)
	bounds = append(bounds, halfPlane{one, zero, phase}, halfPlane{zero, one, phase})

	var corners []point
	for i, a := range bounds {
		for _, b := range bounds[:i] {
			corner, found := crossing(a, b)
			if found && !slices.ContainsFunc(bounds, func(p halfPlane) bool { return !p.holds(corner) }) {
				corners = append(corners, corner)
			}
		}
	}
	return corners
}

// crossing returns where the edges of two half-planes meet, by Cramer's rule.
func crossing(a, b halfPlane) (point, bool) {
	cross := func(p, q, r, s *big.Rat) *big.Rat { return rat().Sub(rat().Mul(p, s), rat().Mul(q, r)) }
	determinant := cross(a.h, a.l, b.h, b.l)
	if determinant.Sign() == 0 {
		return point{}, false
	}
	return point{
		high: rat().Quo(cross(a.c, a.l, b.c, b.l), determinant),
		low:  rat().Quo(cross(a.h, a.c, b.h, b.c), determinant),
	}, true
}

func meetable(requirements ...Requirement) bool { return len(vertices(requirements)) > 0 }

// extent returns the least and the largest value of the measure over a bounded
// set with the corners: every measure has its extremes in corners.
func extent(m Measure, corners []point) (low, high float64) {
	for i, corner := range corners {
		h, _ := corner.high.Float64()
		l, _ := corner.low.Float64()
		x := Times{HighS: h, LowS: l}.Of(m)
		if i == 0 {
			low, high = x, x
		}
		low, high = min(low, x), max(high, x)
	}
	return low, high
}
