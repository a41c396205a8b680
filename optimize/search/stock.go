package search

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/timer"
)

// pieces returns the lots of the kind that networks of so many boards can draw
// on, in the order of their numbers. Links (0 ohm) shape no time and are out.
func pieces(lots []inventory.Lot, kind inventory.Kind, boards int64) []network.Piece {
	var found []network.Piece
	for _, lot := range lots {
		if lot.Part.Kind != kind || lot.Value() <= 0 {
			continue
		}
		if uses := lot.Available() / boards; uses > 0 {
			found = append(found, network.Piece{Lot: lot, Uses: uses})
		}
	}
	slices.SortFunc(found, func(a, b network.Piece) int { return cmp.Compare(a.Lot.ID, b.Lot.ID) })
	return found
}

// devicePool is the timers of one family in stock; Pool.Lots is empty for a
// device that is not taken from stock.
type devicePool struct {
	device *timer.Device
	pool   optimize.Pool
}

// devicePools returns the timers to try, sorted by name, whether none is
// stocked, and what had to be left out.
func devicePools(spec optimize.Spec, lots []inventory.Lot) (pools []devicePool, unstocked bool, out []optimize.Unsuited, err error) {
	stocked := TimerPools(lots)
	for _, lot := range lots {
		if _, known := timer.DeviceForPart(lot.Part.PartNumber); lot.Part.Kind == inventory.Timer && !known && len(spec.Timers) == 0 {
			out = append(out, optimize.Unsuited{Timer: lot.Part.PartNumber, Why: "no data sheet figures are known for this timer"})
		}
	}
	pool := func(name string) optimize.Pool {
		for _, p := range stocked {
			if p.Name == name {
				return p
			}
		}
		return optimize.Pool{}
	}
	names := spec.Timers
	if len(names) == 0 {
		for _, p := range stocked {
			names = append(names, p.Name)
		}
		if len(names) == 0 {
			unstocked = true
			for _, device := range timer.Devices() {
				if device != &timer.Ideal { // nobody can fit it
					names = append(names, device.Name)
				}
			}
		}
	}
	for _, name := range names {
		device := timer.DeviceByName(name)
		if device == nil {
			return nil, false, nil, inventory.Errorf(inventory.Invalid, "no timer is called %q: known are %s", name, timerNames())
		}
		found := devicePool{device, pool(device.Name)}
		if found.pool.Available > 0 && found.pool.Available < spec.Boards {
			out = append(out, optimize.Unsuited{Timer: device.Name, Why: fmt.Sprintf("%d available, %d boards need %d", found.pool.Available, spec.Boards, spec.Boards)})
			continue
		}
		if !slices.ContainsFunc(pools, func(p devicePool) bool { return p.device == device }) {
			pools = append(pools, found)
		}
	}
	return pools, unstocked, out, nil
}

func timerNames() string {
	var names []string
	for _, device := range timer.Devices() {
		names = append(names, device.Name)
	}
	return strings.Join(names, ", ")
}

// diodePools returns the diodes in stock by part, those whose law is known.
func diodePools(lots []inventory.Lot) []optimize.Pool {
	return optimize.Pools(lots, func(lot inventory.Lot) string {
		if lot.Part.Kind != inventory.Diode {
			return ""
		}
		if _, _, err := timer.DiodeOf(lot.Part); err != nil {
			return ""
		}
		return lot.Part.Key()
	})
}

func inverterPools(lots []inventory.Lot) []optimize.Pool {
	return optimize.Pools(lots, func(lot inventory.Lot) string {
		if lot.Part.Kind != inventory.Inverter {
			return ""
		}
		return lot.Part.Key()
	})
}

// TimerPools returns the timers in stock by family, sorted by the family's name.
func TimerPools(lots []inventory.Lot) []optimize.Pool {
	return optimize.Pools(lots, func(lot inventory.Lot) string {
		if lot.Part.Kind != inventory.Timer {
			return ""
		}
		device, ok := timer.DeviceForPart(lot.Part.PartNumber)
		if !ok {
			return ""
		}
		return device.Name
	})
}

// Pools returns the lots that serve alike, timers of a family, diodes and
// inverters of a part: a fit takes any lot of a pool and names the first.
func Pools(lots []inventory.Lot) []optimize.Pool {
	return slices.Concat(TimerPools(lots), diodePools(lots), inverterPools(lots))
}
