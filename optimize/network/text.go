package network

import (
	"fmt"
	"regexp"
	"strings"
	"unicode"
	"unicode/utf8"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
)

// Text returns the network as people write it and Parse reads it: members
// joined by + in series and | in parallel, brackets where a member is itself a
// network, and each leaf's value in its shortest form.
func Text(n optimize.Network) string {
	if n.Operator == optimize.Leaf {
		return leafText(n.Lot)
	}
	sign := "+"
	if n.Operator == optimize.Parallel {
		sign = "|"
	}
	members := make([]string, len(n.Members))
	for i, member := range n.Members {
		members[i] = Text(member)
		if member.Operator != optimize.Leaf {
			members[i] = "(" + members[i] + ")"
		}
	}
	return strings.Join(members, sign)
}

func leafText(lot inventory.Lot) string {
	switch lot.Part.Kind {
	case inventory.Resistor:
		return marking.CompactOhms(lot.Value())
	case inventory.Capacitor:
		return marking.CompactFarads(lot.Value())
	}
	return lot.Part.PartNumber
}

// SyntaxError says where an expression cannot be read.
type SyntaxError struct {
	Expression string
	Column     int // of the first byte at fault, from 1
	Message    string
}

func (e *SyntaxError) Error() string {
	return fmt.Sprintf("%q, column %d: %s", e.Expression, e.Column, e.Message)
}

// Parse returns the network that the expression writes: values of the kind,
// each perhaps with a tolerance (4u7±10%), joined by + (series) and | or ∥
// (parallel, which binds tighter), with brackets. Each leaf is a lot of its own
// with no number. The error is a *SyntaxError.
func Parse(kind inventory.Kind, expression string) (optimize.Network, error) {
	p := parser{kind: kind, text: expression}
	n, err := p.series()
	if err != nil {
		return optimize.Network{}, err
	}
	p.skipSpace()
	if p.at < len(p.text) {
		return optimize.Network{}, p.errorf(p.at, "%q is not expected here: join values by + (series) or | (parallel)", p.text[p.at:])
	}
	return n, nil
}

type parser struct {
	kind  inventory.Kind
	text  string
	at    int
	depth int
}

// maxDepth bounds how deeply brackets nest.
const maxDepth = 32

func (p *parser) errorf(at int, format string, args ...any) error {
	return &SyntaxError{Expression: p.text, Column: at + 1, Message: fmt.Sprintf(format, args...)}
}

func (p *parser) skipSpace() {
	for p.at < len(p.text) {
		r, size := utf8.DecodeRuneInString(p.text[p.at:])
		if !unicode.IsSpace(r) {
			return
		}
		p.at += size
	}
}

// sign consumes one of the signs if it is next.
func (p *parser) sign(signs ...string) bool {
	p.skipSpace()
	for _, sign := range signs {
		if strings.HasPrefix(p.text[p.at:], sign) {
			p.at += len(sign)
			return true
		}
	}
	return false
}

func (p *parser) series() (optimize.Network, error) {
	return p.joined(optimize.Series, p.parallel, "+")
}

func (p *parser) parallel() (optimize.Network, error) {
	return p.joined(optimize.Parallel, p.member, "|", "∥")
}

func (p *parser) joined(operator optimize.Operator, member func() (optimize.Network, error), signs ...string) (optimize.Network, error) {
	first, err := member()
	if err != nil {
		return first, err
	}
	members := []optimize.Network{first}
	for p.sign(signs...) {
		next, err := member()
		if err != nil {
			return next, err
		}
		members = append(members, next)
	}
	if len(members) == 1 {
		return first, nil
	}
	return Join(p.kind, operator, members), nil
}

func (p *parser) member() (optimize.Network, error) {
	if !p.sign("(") {
		return p.leaf()
	}
	open := p.at - 1
	if p.depth++; p.depth > maxDepth {
		return optimize.Network{}, p.errorf(open, "brackets nest more than %d deep", maxDepth)
	}
	n, err := p.series()
	if err != nil {
		return n, err
	}
	if !p.sign(")") {
		return n, p.errorf(open, "this bracket is not closed")
	}
	p.depth--
	return n, nil
}

func (p *parser) leaf() (optimize.Network, error) {
	p.skipSpace()
	start := p.at
	value := strings.TrimSpace(p.until("+|∥()±"))
	if value == "" {
		return optimize.Network{}, p.errorf(start, "a value is missing here")
	}
	tolerance := p.tolerance()
	part := inventory.Part{Kind: p.kind}
	var err error
	if p.kind == inventory.Capacitor {
		part.Value, err = marking.ParseFarads(value)
	} else {
		part.Value, err = marking.ParseOhms(value)
	}
	if err == nil && part.Value <= 0 {
		err = fmt.Errorf("a timing part needs a value above zero")
	}
	if err == nil && tolerance != "" {
		var t marking.Tolerance
		if t, err = marking.ParseTolerance(tolerance, part.Value, p.kind.Unit()); err == nil {
			part.Tolerance = &t
		}
	}
	if err == nil {
		part, err = inventory.NewPart(part)
	}
	if err != nil {
		return optimize.Network{}, p.errorf(start, "%v", err)
	}
	return optimize.Network{Lot: inventory.Lot{Part: part}, Value: part.Value}, nil
}

// until consumes up to the first of the stop characters.
func (p *parser) until(stops string) string {
	start := p.at
	if end := strings.IndexAny(p.text[p.at:], stops); end >= 0 {
		p.at += end
	} else {
		p.at = len(p.text)
	}
	return p.text[start:p.at]
}

// toleranceText matches a tolerance behind a value: ±5%, ±0.5p, +-5%, +/-5%,
// +20%-10%, +80/-20%. A + that a percent sign does not close is series.
var toleranceText = regexp.MustCompile(`^\s*(?:±[^+|∥()%]+%?|\+/?-\s*[0-9.,]+\s*%|[+-]\s*[0-9.,]+(?:\s*/?\s*-\s*[0-9.,]+)?\s*%)`)

// tolerance consumes the tolerance behind a value and returns its text.
func (p *parser) tolerance() string {
	start := p.at
	for range 2 { // +20% and -10% are two
		p.at += len(toleranceText.FindString(p.text[p.at:]))
	}
	return strings.TrimSpace(p.text[start:p.at])
}

// Join returns the network of the members under the operator, flattened. The
// kind decides whether series adds (resistors) or parallel does (capacitors).
func Join(kind inventory.Kind, operator optimize.Operator, members []optimize.Network) optimize.Network {
	joined := optimize.Network{Operator: operator}
	for _, member := range members {
		if member.Operator == operator {
			joined.Members = append(joined.Members, member.Members...)
		} else {
			joined.Members = append(joined.Members, member)
		}
	}
	joined.Value = valueOf(kind, operator, joined.Members, func(n optimize.Network) float64 { return n.Value })
	return joined
}

func valueOf(kind inventory.Kind, operator optimize.Operator, members []optimize.Network, value func(optimize.Network) float64) float64 {
	adds := (operator == optimize.Series) == (kind != inventory.Capacitor)
	sum := 0.0
	for _, member := range members {
		if adds {
			sum += value(member)
		} else {
			sum += 1 / value(member)
		}
	}
	if adds {
		return sum
	}
	return 1 / sum
}
