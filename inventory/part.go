package inventory

import (
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"tickdrawer/inventory/marking"
)

// Part is a kind of component. A zero rating, coefficient or model parameter
// means that the part does not state it.
type Part struct {
	Kind       Kind
	Value      float64            // ohm or farad by Kind.Unit; 0 for kinds without a value, and for a 0 ohm link
	Tolerance  *marking.Tolerance // nil where unstated
	PartNumber string             // trade number ("1N4148", "NE555"), upper case; required for kinds without a value
	RatingV    float64            // volt
	RatingW    float64            // watt, at 70 °C
	Dielectric string             // as written: "X7R", "film", "electrolytic"
	TempcoPPM  *float64           // temperature coefficient, ppm/°C; nil where unstated
	Package    string             // body, as written: "axial", "0805", "DIP-8"

	// Diode model at 27 °C, as SPICE names it (IS, N, RS), and the stated drop.
	ForwardV    float64 // volt
	SaturationA float64 // ampere
	Ideality    float64 // 1
	SeriesOhm   float64 // ohm
}

// NewPart returns p with its texts trimmed, runs of white space in them made one
// space, and its part number in upper case. The error (Invalid) says which field
// does not suit the kind: a resistor's value may be 0 (a link) but not negative,
// a capacitor's must be positive, a kind without a value needs a part number and
// has no tolerance, a diode model belongs to a diode, ratings and model
// parameters are never negative, and nothing is NaN or infinite.
func NewPart(p Part) (Part, error) {
	p.PartNumber = strings.ToUpper(oneSpaced(p.PartNumber))
	p.Dielectric = oneSpaced(p.Dielectric)
	p.Package = oneSpaced(p.Package)
	if p.Value == 0 {
		p.Value = 0 // not -0, which would print and compare as another value
	}
	if err := p.check(); err != nil {
		return Part{}, err
	}
	return p, nil
}

func oneSpaced(text string) string { return strings.Join(strings.Fields(text), " ") }

func (p Part) check() error {
	for _, check := range []func() error{p.checkValue, p.checkTolerance, p.checkFigures, p.checkTexts} {
		if err := check(); err != nil {
			return err
		}
	}
	return nil
}

func (p Part) checkValue() error {
	switch {
	case !p.Kind.known():
		return Errorf(Invalid, "kind: %q is no kind of component; the kinds are %s", string(p.Kind), kindWords())
	case !finite(p.Value):
		return Errorf(Invalid, "value: not a finite number")
	case p.Kind.Unit() == "" && p.Value != 0:
		return Errorf(Invalid, "value: a part of kind %s has a part number instead of a value; leave the value empty", p.Kind)
	case p.Kind.Unit() == "" && p.PartNumber == "":
		return Errorf(Invalid, "part_number: a part of kind %s needs a part number, such as %s", p.Kind, p.Kind.sampleNumber())
	case p.Kind == Capacitor && p.Value <= 0:
		return Errorf(Invalid, "value: a capacitance is above 0, not %g F", p.Value)
	case p.Kind == Potentiometer && p.Value <= 0:
		return Errorf(Invalid, "value: a potentiometer's resistance is above 0, not %g ohm", p.Value)
	case p.Value < 0:
		return Errorf(Invalid, "value: a resistance is never negative, not %g ohm; 0 is a link", p.Value)
	}
	return nil
}

func (p Part) checkTolerance() error {
	t := p.Tolerance
	switch {
	case t == nil:
		return nil
	case p.Kind.Unit() == "":
		return Errorf(Invalid, "tolerance: a part of kind %s has no value that a tolerance could belong to; leave it empty", p.Kind)
	case !finite(t.Minus) || !finite(t.Plus) || t.Minus < 0 || t.Plus < 0:
		return Errorf(Invalid, "tolerance: both sides are 0 %% or more, and finite")
	case t.Minus >= 1:
		return Errorf(Invalid, "tolerance: %s leaves nothing of the value", marking.FormatTolerance(*t))
	}
	return nil
}

// checkFigures checks the ratings and the diode model.
func (p Part) checkFigures() error {
	for _, figure := range []struct {
		field     string
		value     float64
		diodeOnly bool
	}{
		{"rating_v", p.RatingV, false},
		{"rating_w", p.RatingW, false},
		{"forward_v", p.ForwardV, true},
		{"saturation_a", p.SaturationA, true},
		{"ideality", p.Ideality, true},
		{"series_ohm", p.SeriesOhm, true},
	} {
		switch {
		case !finite(figure.value):
			return Errorf(Invalid, "%s: not a finite number", figure.field)
		case figure.value < 0:
			return Errorf(Invalid, "%s: never negative, not %g; leave it empty where it is not stated", figure.field, figure.value)
		case figure.diodeOnly && figure.value != 0 && p.Kind != Diode:
			return Errorf(Invalid, "%s: belongs to a diode, not to a part of kind %s; leave it empty", figure.field, p.Kind)
		}
	}
	if p.TempcoPPM != nil && !finite(*p.TempcoPPM) {
		return Errorf(Invalid, "tempco: not a finite number")
	}
	return nil
}

func (p Part) checkTexts() error {
	for _, text := range []struct{ field, written string }{
		{"part_number", p.PartNumber}, {"dielectric", p.Dielectric}, {"package", p.Package},
	} {
		// Upper case has made U+FFFD of a byte outside UTF-8.
		if strings.ContainsRune(text.written, utf8.RuneError) || strings.ContainsFunc(text.written, unicode.IsControl) {
			return Errorf(Invalid, "%s: %q holds characters that do not print; write it again", text.field, text.written)
		}
	}
	return nil
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// Name returns the part for people: "4.7 kΩ ±1 %", "100 nF X7R 50 V", "1N4148".
func (p Part) Name() string {
	var words []string
	switch p.Kind.Unit() {
	case "ohm":
		words = append(words, marking.FormatOhms(p.Value))
	case "f":
		words = append(words, marking.FormatFarads(p.Value))
	default:
		words = append(words, p.PartNumber)
	}
	if p.Tolerance != nil {
		words = append(words, marking.FormatTolerance(*p.Tolerance))
	}
	if p.Dielectric != "" {
		words = append(words, p.Dielectric)
	}
	if p.RatingV != 0 {
		words = append(words, marking.FormatVolts(p.RatingV))
	}
	if p.RatingW != 0 {
		words = append(words, marking.FormatWatts(p.RatingW))
	}
	return strings.Join(words, " ")
}

// Key returns a text that is equal for two parts exactly when they are the same
// part: every stated field the same, numbers to the last bit, dielectric and
// package in any case. It is stable: drawers store it.
func (p Part) Key() string {
	key := []string{string(p.Kind)}
	number := func(field string, x float64) { key = append(key, field+"="+strconv.FormatFloat(x, 'g', -1, 64)) }
	text := func(field, written string) { key = append(key, field+"="+strconv.QuoteToASCII(written)) }
	stated := func(field string, x float64) {
		if x != 0 {
			number(field, x)
		}
	}
	if p.Kind.Unit() != "" {
		number(p.Kind.Unit(), p.Value)
	}
	if p.Tolerance != nil {
		number("minus", p.Tolerance.Minus)
		number("plus", p.Tolerance.Plus)
	}
	if p.PartNumber != "" {
		text("number", p.PartNumber)
	}
	stated("rating_v", p.RatingV)
	stated("rating_w", p.RatingW)
	if p.Dielectric != "" {
		text("dielectric", strings.ToLower(p.Dielectric))
	}
	if p.TempcoPPM != nil {
		number("tempco_ppm", *p.TempcoPPM)
	}
	if p.Package != "" {
		text("package", strings.ToLower(p.Package))
	}
	stated("forward_v", p.ForwardV)
	stated("saturation_a", p.SaturationA)
	stated("ideality", p.Ideality)
	stated("series_ohm", p.SeriesOhm)
	return strings.Join(key, " ")
}
