package spread

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
)

func TestANetworkIsWorstWithAllItsPartsAtTheSameEnd(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		kind := rapid.SampledFrom([]inventory.Kind{inventory.Resistor, inventory.Capacitor}).Draw(t, "kind")
		ambient := rangeAround(t, 25, 60, 60, "ambient")
		network := drawNetwork(t, kind, 3)
		band := NetworkBand(&network, ambient)
		if low, high := valueAt(&network, func(b optimize.Band) float64 { return b.Min }, ambient), valueAt(&network, func(b optimize.Band) float64 { return b.Max }, ambient); !near(low, band.Min) || !near(high, band.Max) {
			t.Fatalf("band %v, all parts at one end %g and %g", band, low, high)
		}
		for range 8 {
			value := valueAt(&network, func(b optimize.Band) float64 {
				return b.Min + (b.Max-b.Min)*rapid.Float64Range(0, 1).Draw(t, "share")
			}, ambient)
			if !(value >= band.Min*(1-1e-12) && value <= band.Max*(1+1e-12)) {
				t.Fatalf("%g is outside %v", value, band)
			}
		}
	})
}

func near(a, b float64) bool { return math.Abs(a-b) <= 1e-12*math.Abs(b) }

func drawNetwork(t *rapid.T, kind inventory.Kind, depth int) optimize.Network {
	operator := optimize.Leaf
	if depth > 0 {
		operator = rapid.SampledFrom([]optimize.Operator{optimize.Leaf, optimize.Series, optimize.Parallel}).Draw(t, "operator")
	}
	if operator == optimize.Leaf {
		part := inventory.Part{Kind: kind, Value: logRange(t, 1e-9, 1e6, "value")}
		if rapid.Bool().Draw(t, "tolerance") {
			part.Tolerance = &marking.Tolerance{Minus: rapid.Float64Range(0, .3).Draw(t, "minus"), Plus: rapid.Float64Range(0, .8).Draw(t, "plus")}
		}
		if rapid.Bool().Draw(t, "coefficient") {
			ppm := rapid.Float64Range(-1500, 1500).Draw(t, "ppm")
			part.TempcoPPM = &ppm
		}
		return optimize.Network{Lot: inventory.Lot{Part: part}}
	}
	network := optimize.Network{Operator: operator}
	for range rapid.IntRange(2, 3).Draw(t, "members") {
		network.Members = append(network.Members, drawNetwork(t, kind, depth-1))
	}
	return network
}

// valueAt returns the network's value with each part where within its band pick
// says.
func valueAt(network *optimize.Network, pick func(optimize.Band) float64, ambient optimize.Range) float64 {
	if network.Operator == optimize.Leaf {
		return pick(LotBand(&network.Lot, ambient))
	}
	sum, reciprocals, capacitors := 0.0, 0.0, false
	for i := range network.Members {
		value := valueAt(&network.Members[i], pick, ambient)
		sum += value
		reciprocals += 1 / value
		network.Members[i].Lots(func(lot inventory.Lot) { capacitors = lot.Part.Kind == inventory.Capacitor })
	}
	if (network.Operator == optimize.Series) != capacitors {
		return sum
	}
	return 1 / reciprocals
}

func TestALotSpreadsByWhatItStates(t *testing.T) {
	ppm := -100.0
	tolerance := &marking.Tolerance{Minus: .2, Plus: .8}
	ambient := optimize.Range{Nominal: 25, Min: 5, Max: 65}
	for _, test := range []struct {
		name     string
		lot      inventory.Lot
		min, max float64
		unstated bool
	}{
		{"nothing stated", inventory.Lot{Part: inventory.Part{Kind: inventory.Resistor, Value: 100}}, 100, 100, true},
		{"asymmetric tolerance", inventory.Lot{Part: inventory.Part{Kind: inventory.Capacitor, Value: 100, Tolerance: tolerance}}, 80, 180, false},
		{"tolerance and coefficient", inventory.Lot{Part: inventory.Part{Kind: inventory.Capacitor, Value: 100, Tolerance: tolerance, TempcoPPM: &ppm}}, 80 * .996, 180 * 1.002, false},
		{"measured", inventory.Lot{Measured: 97, Part: inventory.Part{Kind: inventory.Capacitor, Value: 100, Tolerance: tolerance}}, 97, 97, false},
		{"measured, with coefficient", inventory.Lot{Measured: 97, Part: inventory.Part{Kind: inventory.Capacitor, Value: 100, Tolerance: tolerance, TempcoPPM: &ppm}}, 97 * .996, 97 * 1.002, false},
		{"a link", inventory.Lot{Part: inventory.Part{Kind: inventory.Resistor}}, 0, 0, false},
	} {
		band := LotBand(&test.lot, ambient)
		if !near(band.Min, test.min) || !near(band.Max, test.max) {
			t.Errorf("%s: %v", test.name, band)
		}
		if network := (optimize.Network{Lot: test.lot}); Unstated(&network) != test.unstated {
			t.Errorf("%s: unstated is %v", test.name, !test.unstated)
		}
	}
}

func TestALinkBesideAResistorLeavesNothing(t *testing.T) {
	leaf := func(ohms float64) optimize.Network {
		return optimize.Network{Lot: inventory.Lot{Part: inventory.Part{Kind: inventory.Resistor, Value: ohms}}}
	}
	network := optimize.Network{Operator: optimize.Parallel, Members: []optimize.Network{leaf(0), leaf(1e3)}}
	if band := NetworkBand(&network, optimize.Exactly(25)); band != (optimize.Band{}) {
		t.Errorf("%v", band)
	}
}
