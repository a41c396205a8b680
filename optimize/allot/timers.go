package allot

import (
	"slices"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/search"
	"tickdrawer/optimize/timer"
)

// timersSuffice reports whether the stages can each have a family of timers to
// themselves on every board: a family of which n are left serves n/boards stages,
// rounded down, since all boards have the same fits. It is a matching of stages
// with families by augmenting paths (Ford and Fulkerson 1956); where there is
// none, no choice of fits can be built and none need be listed.
func timersSuffice(stages []optimize.Stage, lots []inventory.Lot, boards int64) bool {
	pools := search.TimerPools(lots)
	serves := make([][]int, len(pools)) // by pool: the stages that have it
	room := func(pool int) int64 { return pools[pool].Available / boards }
	var seat func(stage int, tried []bool) bool
	seat = func(stage int, tried []bool) bool {
		for p := range pools {
			if tried[p] || !mayHave(stages[stage].Spec, pools[p].Name) {
				continue
			}
			tried[p] = true
			if int64(len(serves[p])) < room(p) {
				serves[p] = append(serves[p], stage)
				return true
			}
			for i, other := range serves[p] {
				if seat(other, tried) {
					serves[p][i] = stage
					return true
				}
			}
		}
		return false
	}
	for i, stage := range stages {
		if fromStock(stage.Spec, pools) && !seat(i, make([]bool, len(pools))) {
			return false
		}
	}
	return true
}

// fromStock reports whether the stage's timer can only come from stock: it does
// not where the spec names a family that is not stocked, such as the ideal one,
// nor where none is stocked at all.
func fromStock(spec optimize.Spec, pools []optimize.Pool) bool {
	for _, name := range spec.Timers {
		device := timer.DeviceByName(name)
		stocked := func(p optimize.Pool) bool { return device != nil && p.Name == device.Name }
		if !slices.ContainsFunc(pools, stocked) {
			return false
		}
	}
	return len(pools) > 0
}

// mayHave reports whether the stage may have the family: it is named, or none
// is, and it works from the whole supply.
func mayHave(spec optimize.Spec, name string) bool {
	device := timer.DeviceByName(name)
	named := func(other string) bool { return timer.DeviceByName(other) == device }
	if len(spec.Timers) > 0 && !slices.ContainsFunc(spec.Timers, named) {
		return false
	}
	for _, supplyV := range []float64{spec.Supply.Min, spec.Supply.Max} {
		if _, err := device.Under(supplyV, spec.Ambient.Nominal, spec.LoadA, spec.ControlV); err != nil {
			return false
		}
	}
	return true
}
