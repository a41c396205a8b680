package spread_test

import (
	"fmt"

	"tickdrawer/optimize"
	"tickdrawer/optimize/spread"
	"tickdrawer/optimize/timer"
)

func ExampleWorstCase() {
	around := spread.Surroundings{Device: &timer.Ideal, SupplyV: optimize.Exactly(9), AmbientC: optimize.Exactly(25)}
	values := spread.Values{Farads: optimize.Band{Min: .9e-6, Max: 1.1e-6}}
	values.Ohms[0] = optimize.Band{Min: 9.9e3, Max: 10.1e3}
	values.Ohms[1] = optimize.Band{Min: 19.8e3, Max: 20.2e3}
	band, err := spread.WorstCase(timer.CircuitBySlug("classic"), around, &values, timer.Diode{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("period %.2f ms to %.2f ms, duty %.4f to %.4f\n", 1e3*band.Period.Min, 1e3*band.Period.Max, band.Duty.Min, band.Duty.Max)
	// Output: period 30.88 ms to 38.50 ms, duty 0.5984 to 0.6016
}
