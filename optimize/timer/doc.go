// Package timer holds the physics of 555 timer circuits: values in, times and
// limits out. A Device is a timer family as its data sheet gives it, Conditions
// is a device in use, a Circuit is one of the wirings with its positions and its
// equations:
//
//	device := timer.DeviceByName("TLC555")
//	conditions, err := device.Under(9, 25, 0, 0) // V, °C, no load, control pin free
//	circuit := timer.CircuitBySlug("classic")
//	values := timer.Values{Ohms: [timer.MaxResistors]float64{10e3, 47e3}, Farads: 1e-6}
//	phases := circuit.Phases(&conditions, &values)
//
// All times follow from one law, t = C ∫ dv/i(v): with a linear source it closes to
// a logarithm (rampS), with a diode's exponential law to an expression in the
// diode's voltage, or to an integral over it (junction). A phase that never ends
// takes +Inf, and Circuit.Stalls says which voltage is not reached. Rails names the
// limits that a design breaks or nears; Netlist writes it for a SPICE simulator,
// which the tests hold every equation against.
//
// Delays and input currents of the timer are not in the times; Rails warns where
// they would show.
package timer
