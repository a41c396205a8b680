package timer_test

import (
	"fmt"

	"tickdrawer/optimize/timer"
)

func ExampleCircuit() {
	conditions, err := timer.Ideal.Under(9, 25, 0, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	circuit := timer.CircuitBySlug("classic")
	values := timer.Values{Ohms: [timer.MaxResistors]float64{5e3, 3e3}, Farads: 150e-9}
	phases := circuit.Phases(&conditions, &values)
	fmt.Printf("high %.1f µs, low %.1f µs\n", 1e6*phases.HighS, 1e6*phases.LowS)
	// Output: high 831.8 µs, low 311.9 µs
}

func ExampleRails() {
	conditions, err := timer.DeviceByName("NE555").Under(5, 25, 0, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	values := timer.Values{Ohms: [timer.MaxResistors]float64{10e3}, Farads: 1e-6}
	for _, rail := range timer.Rails(timer.CircuitBySlug("output-fed"), &conditions, &values, &timer.Ratings{}) {
		fmt.Println(rail.Name+":", rail.Text)
	}
	// Output: oscillation: does not oscillate: the output, high, charges the capacitor to 3.3 V at most, not past the upper level of 3.33 V
}
