package timer

import (
	"math"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// Ratings is what the parts in a circuit's positions stand. Zero is a rating
// that no part of the position states.
type Ratings struct {
	Watts           [MaxResistors]float64 // of a whole position, at 70 °C, before one of its parts exceeds its own
	CapacitorV      float64               // likewise
	PolarisedSeries bool                  // polarised capacitors are in series
}

// RatingsOf returns what the placed networks stand: the least over their parts
// that state a rating, each with its share of the position's power or voltage.
func RatingsOf(circuit *Circuit, placed []optimize.Placed) Ratings {
	var r Ratings
	for i := range placed {
		network := &placed[i].Network
		if placed[i].Position == "c" {
			r.CapacitorV = ratedV(network)
			r.PolarisedSeries = polarisedSeries(network, false)
			continue
		}
		for k, position := range circuit.Resistors {
			if placed[i].Position == position {
				r.Watts[k] = ratedW(network)
			}
		}
	}
	return r
}

// ratedW returns the power that a resistor network stands, W; 0 where unstated.
// In a string a member takes the share R/ΣR of the power, side by side G/ΣG.
func ratedW(network *optimize.Network) float64 {
	if network.Operator == optimize.Leaf {
		return network.Lot.Part.RatingW
	}
	whole := networkValue(network, false)
	return leastRated(network, func(member *optimize.Network) (rating, share float64) {
		share = networkValue(member, false) / whole
		if network.Operator == optimize.Parallel {
			share = 1 / share
		}
		return ratedW(member), share
	})
}

// ratedV returns the voltage that a capacitor network stands, V; 0 where
// unstated. In a string a member takes the share (1/C)/Σ(1/C) of the voltage.
func ratedV(network *optimize.Network) float64 {
	if network.Operator == optimize.Leaf {
		return network.Lot.Part.RatingV
	}
	whole := networkValue(network, true)
	return leastRated(network, func(member *optimize.Network) (rating, share float64) {
		share = 1
		if network.Operator == optimize.Series {
			share = whole / networkValue(member, true)
		}
		return ratedV(member), share
	})
}

// leastRated returns the least rating over share of the members that state one,
// 0 where none does.
func leastRated(network *optimize.Network, of func(*optimize.Network) (rating, share float64)) float64 {
	least := math.Inf(1)
	for i := range network.Members {
		if rating, share := of(&network.Members[i]); rating > 0 {
			least = min(least, rating/share)
		}
	}
	if math.IsInf(least, 1) {
		return 0
	}
	return least
}

// polarisedSeries reports whether a polarised capacitor is part of a string.
func polarisedSeries(network *optimize.Network, inSeries bool) bool {
	if network.Operator == optimize.Leaf {
		return inSeries && network.Lot.Part.Kind == inventory.Capacitor && network.Lot.Part.Polarised()
	}
	for i := range network.Members {
		if polarisedSeries(&network.Members[i], inSeries || network.Operator == optimize.Series) {
			return true
		}
	}
	return false
}
