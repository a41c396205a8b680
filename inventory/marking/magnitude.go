package marking

import (
	"math"
	"strings"
)

// siPrefixes are those of quantities other than resistance and capacitance.
const siPrefixes = "pnuµμmkKMG"

// magnitudes is what ParseMagnitude reads, by SI symbol.
var magnitudes = map[string]*family{
	"s":  {noun: "a time", sample: "4s or 500ms", symbol: "s", units: []string{"seconds", "second", "sec", "s"}, prefixes: siPrefixes},
	"Hz": {noun: "a frequency", sample: "420Hz or 1.2kHz", symbol: "Hz", units: []string{"Hz"}, prefixes: siPrefixes},
	"V":  {noun: "a voltage", sample: "9V or 2.4V", symbol: "V", units: []string{"volts", "volt", "V DC", "VDC", "V"}, prefixes: siPrefixes, points: "Vv"},
	"A":  {noun: "a current", sample: "10mA", symbol: "A", units: []string{"amperes", "ampere", "amps", "amp", "A"}, prefixes: siPrefixes},
	"W":  {noun: "a power", sample: "0.25W or 1/4W", symbol: "W", units: []string{"watts", "watt", "W"}, prefixes: siPrefixes, points: "Ww"},
	"C":  {noun: "a temperature", sample: "25C", symbol: "°C", units: []string{"°C", "℃", "degC", "C"}, signed: true},
	"%":  {noun: "a percentage", sample: "3%", symbol: "%", units: []string{"%"}, power: -2},
	"pt": {noun: "a number of points", sample: "1pt", symbol: "pt", units: []string{"points", "point", "pts", "pt"}, power: -2},
	"":   {noun: "a number", sample: "0.5"},
}

// ParseMagnitude returns the quantity that the text writes, in the unit: "s",
// "Hz", "V", "A", "W" or "C" (degree Celsius); "%" and "pt" (points of a
// percentage) come as a share, 3% as 0.03; "" is a plain number. The unit may be
// left out, since the caller has one ("500m" is 0.5 V), except that 5m of time
// could be minutes.
// A decimal comma is read; a comma before exactly three digits may group
// thousands and is refused. Power may be a fraction ("1/4W"). Only a temperature
// may be negative; 0 is for the caller to judge.
//
// The error is an *Error. An unknown unit panics.
func ParseMagnitude(text, unit string) (float64, error) {
	x, _, err := parseMagnitude(text, unit)
	return x, err
}

// ParseMagnitudeWithUnit returns what ParseMagnitude does; a text without its
// unit is refused.
func ParseMagnitudeWithUnit(text, unit string) (float64, error) {
	x, q, err := parseMagnitude(text, unit)
	if err == nil && !q.unit {
		return 0, errorAt(text, len(strings.TrimRight(text, " \t")), "the unit of %s is missing; write it as %s", magnitudes[unit].noun, magnitudes[unit].sample)
	}
	return x, err
}

func parseMagnitude(text, unit string) (float64, quantity, error) {
	f := magnitudes[unit]
	if f == nil {
		panic("marking: no quantity has the unit " + unit)
	}
	limited := *f
	limited.nought, limited.max, limited.limits = true, math.MaxFloat64, "1e-308 to 1e308"
	q, err := limited.read(text)
	if err != nil {
		return 0, q, err
	}
	if unit == "W" && q.whole && q.prefix == 0 && !q.unit && strings.HasPrefix(q.rest, "/") {
		return wattFraction(text, q)
	}
	switch {
	case unit == "s" && (q.rest == "in" && q.prefix == 'm' || q.rest == "h"):
		return 0, q, errorAt(text, q.restAt, "times are in seconds; write 90s for one minute and a half")
	case unit == "s" && q.rest == "" && !q.unit && q.prefix == 'm':
		return 0, q, errorAt(text, len(strings.TrimSpace(text)), "m could be milliseconds or minutes; write 5ms, or 300s for five minutes")
	case q.rest != "":
		return 0, q, limited.stray(text, q)
	case q.pointAt >= 0 && text[q.pointAt] == ',':
		return 0, q, limited.comma(text, q)
	}
	x, err := limited.value(text, q)
	return x, q, err
}

// comma returns the error about a comma that may group thousands.
func (f *family) comma(text string, q quantity) error {
	steps := noSteps
	if f.prefixes != "" {
		steps = plainSteps
	}
	format := func(x float64) string { return strings.TrimSpace(engineering(x, steps, f.symbol)) }
	compact := func(x float64) string { return strings.ReplaceAll(format(x), " ", "") }
	return thousands(text, q.scaled(-f.power), format, compact)
}

// wattFraction returns the power written as a fraction, from the quantity that
// holds its numerator.
func wattFraction(text string, q quantity) (float64, quantity, error) {
	r := &reader{text: text, at: q.restAt + 1}
	r.space()
	at := r.at
	numerator := q.float()
	denominator, err := r.number("a power such as 1/4W")
	if err != nil {
		return 0, q, err
	}
	r.space()
	for _, u := range magnitudes["W"].units {
		if r.take(u) {
			q.unit = true
			break
		}
	}
	switch {
	case !denominator.whole || denominator.zero() || numerator == 0:
		return 0, q, errorAt(text, at, "a fraction of a watt has whole numbers above and below, such as 1/4W")
	case !r.end():
		return 0, q, errorAt(text, r.at, "%s does not belong after a power; write it as 0.25W or 1/4W", characterAt(text, r.at))
	}
	watts := numerator / denominator.float()
	if math.IsInf(watts, 0) || math.IsNaN(watts) || watts == 0 {
		return 0, q, errorAt(text, q.at, "a power of %s W is out of reason", q.written)
	}
	return watts, q, nil
}
