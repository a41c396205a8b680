package optimize

import (
	"strings"

	"tickdrawer/inventory/marking"
)

// What an allowance is where none is written.
const (
	defaultShare  = 0.02 // of a time or frequency
	defaultPoints = 0.01 // of duty
)

// What can be meant of a timer's phase, s, and of its frequency, Hz.
const (
	shortestS, longestS = 1e-12, 1e9
	lowestHz, highestHz = 1e-9, 1e12
)

// What a timer can be supplied with, V, and work in, °C.
const (
	highestV           = 1e4
	coldestC, hottestC = -273.15, 1000
)

// ParseRequirement returns the requirement that the text writes for the measure:
// a target with an allowance ("4s±3%", "4s+2%-1%", "4s±100ms", "420Hz±1%",
// "50%±1pt", "0.5±0.01") or a range, whose target is its arithmetic middle
// ("3.9s..4.1s"). A target alone allows ±2 %, a duty ±1 point. ± may be written
// +- or +/-. Times and frequencies need their unit; a duty is a share or a
// percentage, strictly between 0 and 1.
//
// The error is a *marking.Error: it has the byte column in text.
func ParseRequirement(m Measure, text string) (Requirement, error) {
	allowance, err := parseAllowance(m, text)
	if err != nil {
		return Requirement{}, err
	}
	return Requirement{Measure: m, Allowance: allowance}, nil
}

func parseAllowance(m Measure, text string) (Allowance, error) {
	if from, to, found := cutRange(text); found {
		a := Allowance{}
		var err error
		if a.Min, err = parseTarget(m, from); err != nil {
			return a, err
		}
		if a.Max, err = parseTarget(m, to); err != nil {
			return a, err
		}
		if m == Duty && from.percent() != to.percent() {
			return a, from.errorf("the two ends are in different units; write both in percent or neither")
		}
		if a.Min >= a.Max {
			return a, to.errorf("the range ends at or below its beginning; write the smaller %s first", m)
		}
		a.Target = decimalMiddle(a.Min, a.Max)
		return a, nil
	}
	written, terms, err := cutAllowance(text)
	if err != nil {
		return Allowance{}, err
	}
	target, err := parseTarget(m, written)
	if err != nil {
		return Allowance{}, err
	}
	below, above, err := terms.deviations(func(t term) (float64, error) { return requirementDeviation(m, t, written, target) })
	if err != nil {
		return Allowance{}, err
	}
	at := written
	switch {
	case len(terms) > 0:
		at = terms[0].piece
	case m == Duty:
		below, above = defaultPoints, defaultPoints
	default:
		below = decimalProduct(defaultShare, target)
		above = below
	}
	a := Allowance{Target: target, Min: decimalSum(target, -below), Max: decimalSum(target, above)}
	switch {
	case below == 0 && above == 0:
		return a, at.errorf("no network of real parts meets an allowance of nothing; write one such as %s", m.sampleAllowance())
	case a.Min <= 0:
		return a, at.errorf("the allowance reaches down to zero or below; write a smaller one such as %s", m.sampleAllowance())
	case m == Duty && a.Max >= 1:
		return a, at.errorf("the allowance reaches up to a duty of 100 %%, which is no oscillation; write a smaller one such as %s", m.sampleAllowance())
	case a.Min == a.Max:
		return a, at.errorf("the allowance is too small to compute with; write one such as %s", m.sampleAllowance())
	}
	return a, nil
}

// sampleAllowance returns how an allowance is written, for messages.
func (m Measure) sampleAllowance() string {
	if m == Duty {
		return "±1pt"
	}
	return "±3%"
}

// parseTarget returns a written value of the measure in its unit.
func parseTarget(m Measure, p piece) (float64, error) {
	if m == Duty {
		return parseDuty(p)
	}
	x, err := marking.ParseMagnitudeWithUnit(p.written, m.Unit())
	if err != nil {
		return 0, p.within(err)
	}
	smallest, largest, limits := shortestS, longestS, "1 ps to 1e9 s"
	if m == Frequency {
		smallest, largest, limits = lowestHz, highestHz, "1 nHz to 1 THz"
	}
	switch {
	case x == 0:
		return 0, p.errorf("a %s of 0 is not possible", m)
	case x < smallest || x > largest:
		return 0, p.errorf("this %s is out of reason (%s)", m, limits)
	}
	return x, nil
}

func parseDuty(p piece) (float64, error) {
	unit := ""
	if p.percent() {
		unit = "%"
	}
	x, err := marking.ParseMagnitude(p.written, unit)
	switch {
	case err != nil:
		return 0, p.within(err)
	case unit == "" && x > 1 && x < 100:
		return 0, p.errorf("a duty is a share below 1 or a percentage; write 0.5 or 50%%")
	case x <= 0 || x >= 1:
		return 0, p.errorf("a duty is above 0 and below 1 (100 %%)")
	}
	return x, nil
}

// requirementDeviation returns how far the term lets the measure be from its
// target, in the measure's unit.
func requirementDeviation(m Measure, t term, target piece, value float64) (float64, error) {
	if m != Duty {
		return deviation(t, m.Unit(), value)
	}
	switch {
	case t.percent():
		return 0, t.errorf("a percentage of a duty could be of the duty or points of it; write points as ±1pt, or a range such as 48%%..52%%")
	case strings.ContainsAny(t.written, "pP"):
		x, err := marking.ParseMagnitudeWithUnit(t.written, "pt")
		return x, t.within(err)
	case target.percent():
		return 0, t.errorf("the unit of the allowance is missing; write points of duty as ±1pt")
	}
	x, err := marking.ParseMagnitude(t.written, "")
	return x, t.within(err)
}

// deviation returns the term in the unit: a percentage of value, or a quantity
// with its unit.
func deviation(t term, unit string, value float64) (float64, error) {
	if t.percent() {
		share, err := marking.ParseMagnitudeWithUnit(t.written, "%")
		return decimalProduct(share, value), t.within(err)
	}
	if x, err := marking.ParseMagnitude(t.written, ""); err == nil && x != 0 {
		return 0, t.errorf("%s could be %s %% or %s %s; write the unit", t.written, t.written, t.written, unit)
	}
	x, err := marking.ParseMagnitudeWithUnit(t.written, unit)
	return x, t.within(err)
}

// ParseRange returns the range that the text writes in the unit, "V" for a
// supply or "C" for an ambient temperature: a value alone ("9V"), with its
// spread ("9V±10%", "25C±15C") or as two ends ("4.5V..16V", "-10C..40C"), whose
// arithmetic middle is then the nominal value. A unit may be left out on both
// ends, not on one. A supply is above 0 V.
//
// The error is a *marking.Error: it has the byte column in text.
func ParseRange(unit, text string) (Range, error) {
	if from, to, found := cutRange(text); found {
		low, lowUnit, err := parseEnd(unit, from)
		if err != nil {
			return Range{}, err
		}
		high, highUnit, err := parseEnd(unit, to)
		switch {
		case err != nil:
			return Range{}, err
		case lowUnit != highUnit:
			return Range{}, from.errorf("one end has its unit and the other has not; write both or neither")
		case low > high:
			return Range{}, to.errorf("the range ends below its beginning; write the smaller value first")
		}
		return Range{Nominal: decimalMiddle(low, high), Min: low, Max: high}, nil
	}
	written, terms, err := cutAllowance(text)
	if err != nil {
		return Range{}, err
	}
	nominal, _, err := parseEnd(unit, written)
	if err != nil {
		return Range{}, err
	}
	below, above, err := terms.deviations(func(t term) (float64, error) {
		if unit == "C" && t.percent() {
			return 0, t.errorf("a percentage of a temperature in degrees Celsius has no meaning; write degrees, such as ±15C")
		}
		return deviation(t, unit, nominal)
	})
	if err != nil {
		return Range{}, err
	}
	r := Range{Nominal: nominal, Min: decimalSum(nominal, -below), Max: decimalSum(nominal, above)}
	for _, end := range []float64{r.Min, r.Max} {
		if why := unreasonable(unit, end); why != "" {
			return Range{}, terms[0].errorf("the spread reaches %s", why)
		}
	}
	return r, nil
}

// parseEnd returns a written supply or temperature and whether it has its unit.
func parseEnd(unit string, p piece) (x float64, unitWritten bool, err error) {
	if x, err = marking.ParseMagnitude(p.written, unit); err != nil {
		return 0, false, p.within(err)
	}
	if why := unreasonable(unit, x); why != "" {
		return 0, false, p.errorf("this is %s", why)
	}
	_, err = marking.ParseMagnitudeWithUnit(p.written, unit)
	return x, err == nil, nil
}

// unreasonable returns what is wrong with a supply or a temperature, or "".
func unreasonable(unit string, x float64) string {
	switch {
	case unit == "V" && x <= 0:
		return "0 V or less; a supply is above 0 V"
	case unit == "V" && x > highestV:
		return "out of reason for a supply (at most 10 kV)"
	case unit == "C" && x < coldestC:
		return "below absolute zero (−273.15 °C)"
	case unit == "C" && x > hottestC:
		return "out of reason for an ambient temperature (at most 1000 °C)"
	}
	return ""
}
