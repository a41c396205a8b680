package spread

import (
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// referenceC is the temperature that values, tolerances and temperature
// coefficients refer to, °C.
const referenceC = 25

// LotBand returns the least and the largest value of a part of the lot, ohm or
// farad, over its tolerance and its temperature coefficient times the departure
// of the ambient range from 25 °C. A measured lot has no tolerance: its parts are
// as measured, at 25 °C. A part that states no tolerance, or no coefficient, has
// no spread from it: Unstated tells.
func LotBand(lot *inventory.Lot, ambient optimize.Range) optimize.Band {
	value := lot.Value()
	band := optimize.Band{Min: value, Max: value}
	if t := lot.Part.Tolerance; t != nil && lot.Measured == 0 {
		band.Min *= 1 - t.Minus
		band.Max *= 1 + t.Plus
	}
	if ppm := lot.Part.TempcoPPM; ppm != nil {
		cold, hot := *ppm*1e-6*(ambient.Min-referenceC), *ppm*1e-6*(ambient.Max-referenceC)
		band.Min *= max(0, 1+min(cold, hot))
		band.Max *= max(0, 1+max(cold, hot))
	}
	return band
}

// NetworkBand returns the least and the largest value of a network of resistors
// or capacitors, ohm or farad: that with all its parts at their least, and with
// all at their largest, as a network's value rises with each of its parts.
func NetworkBand(network *optimize.Network, ambient optimize.Range) optimize.Band {
	band, _ := networkBand(network, ambient)
	return band
}

// networkBand also returns whether the parts are capacitors, whose values add
// side by side.
func networkBand(network *optimize.Network, ambient optimize.Range) (band optimize.Band, capacitors bool) {
	if network.Operator == optimize.Leaf {
		return LotBand(&network.Lot, ambient), network.Lot.Part.Kind == inventory.Capacitor
	}
	var sum, reciprocals optimize.Band
	for i := range network.Members {
		var member optimize.Band
		member, capacitors = networkBand(&network.Members[i], ambient)
		sum.Min += member.Min
		sum.Max += member.Max
		reciprocals.Min += 1 / member.Min // +Inf for a link, which leaves 0 ohm below
		reciprocals.Max += 1 / member.Max
	}
	if (network.Operator == optimize.Series) != capacitors {
		return sum, capacitors
	}
	return optimize.Band{Min: 1 / reciprocals.Min, Max: 1 / reciprocals.Max}, capacitors
}

// Unstated reports whether some part of the network is neither measured nor
// states a tolerance, so that its band is too narrow.
func Unstated(network *optimize.Network) bool {
	unstated := false
	network.Lots(func(lot inventory.Lot) {
		unstated = unstated || lot.Measured == 0 && lot.Part.Tolerance == nil && lot.Part.Value != 0
	})
	return unstated
}

// UnstatedNote returns what to mind of the positions whose parts state no
// tolerance, for people; "" where all do.
func UnstatedNote(placed []optimize.Placed) string {
	var positions []string
	for i := range placed {
		if placed[i].Kind != inventory.Diode && Unstated(&placed[i].Network) {
			positions = append(positions, placed[i].Position)
		}
	}
	if positions == nil {
		return ""
	}
	return "no tolerance is stated in " + strings.Join(positions, ", ") + ": the worst case takes those parts as exact"
}
