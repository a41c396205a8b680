package spread

import (
	"fmt"
	"strings"

	"tickdrawer/inventory/marking"
	"tickdrawer/optimize/timer"
)

// Stalls returns at which corner of the values and the surroundings the circuit
// stops, and why, for people; "" where it runs everywhere.
func (e *Evaluator) Stalls(values *Values) string {
	for i := range e.corners {
		c := &e.corners[i]
		for mask := range 1 << len(e.circuit.Resistors) {
			for _, conditions := range [...]*timer.Conditions{&c.least, &c.most} {
				e.place(c, values, mask)
				if why := e.circuit.Stalls(conditions, &e.at); why != "" {
					return fmt.Sprintf("in the worst case, with %s: %s", e.placed(conditions), why)
				}
			}
		}
	}
	return ""
}

// placed names the corner that is placed: "ra 95 kΩ, rb 10.5 kΩ, supply 8.1 V".
func (e *Evaluator) placed(c *timer.Conditions) string {
	var words []string
	for i, position := range e.circuit.Resistors {
		words = append(words, position+" "+marking.FormatOhms(e.at.Ohms[i]))
	}
	return strings.Join(append(words, "supply "+marking.FormatVolts(c.SupplyV)), ", ")
}
