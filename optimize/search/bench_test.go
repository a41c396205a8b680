package search

import (
	"context"
	"fmt"
	"math"
	"testing"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

// drawerSize is decades of preferred numbers: resistors from 100 ohm, capacitors
// from 1 nF.
type drawerSize struct{ ohmSeries, ohmDecades, faradSeries, faradDecades int }

func (d drawerSize) String() string {
	return fmt.Sprintf("%dR%dC", d.ohmSeries*d.ohmDecades, d.faradSeries*d.faradDecades)
}

// lots returns the drawer, ten pieces of each value.
func (d drawerSize) lots() []inventory.Lot {
	var lots []inventory.Lot
	add := func(kind inventory.Kind, series, decades int, unit float64) {
		for decade := range decades {
			for _, number := range marking.Preferred(series) {
				lots = append(lots, inventory.Lot{
					ID: inventory.LotID(len(lots) + 1), OnHand: 10,
					Part: inventory.Part{Kind: kind, Value: float64(number) * unit * math.Pow(10, float64(decade))},
				})
			}
		}
	}
	add(inventory.Resistor, d.ohmSeries, d.ohmDecades, 10)
	add(inventory.Capacitor, d.faradSeries, d.faradDecades, 100e-12)
	return lots
}

func toneSpec(partsEach int) optimize.Spec {
	return optimize.Spec{
		Requirements: []optimize.Requirement{
			{Measure: optimize.Frequency, Allowance: optimize.Allowance{Target: 1234.5, Min: 1210, Max: 1260}},
			{Measure: optimize.Duty, Allowance: optimize.Allowance{Target: 0.63, Min: 0.62, Max: 0.64}},
		},
		Supply: optimize.Exactly(9), Ambient: optimize.Exactly(25),
		Circuits: []string{"classic"}, Timers: []string{"ideal"},
		PartsEach: partsEach, PartsC: partsEach, Boards: 1,
	}
}

// BenchmarkFront times the whole proven search, tables included. The peer is
// BenchmarkExhaustive on the same drawers, as far as that finishes.
func BenchmarkFront(b *testing.B) {
	for _, size := range []drawerSize{{3, 4, 3, 2}, {6, 4, 3, 3}, {12, 4, 6, 3}, {24, 6, 6, 6}} {
		b.Run(size.String(), func(b *testing.B) {
			lots := size.lots()
			for b.Loop() {
				front, err := Run(context.Background(), toneSpec(2), lots)
				if err != nil || len(front.Fits) == 0 || !front.Search.Proven {
					b.Fatal("no proven front", err)
				}
			}
		})
	}
}

func BenchmarkExhaustive(b *testing.B) {
	for _, size := range []drawerSize{{3, 4, 3, 2}} {
		b.Run(size.String(), func(b *testing.B) {
			lots := size.lots()
			for b.Loop() {
				front := plainFront(plainFits(toneSpec(2), timer.CircuitBySlug("classic"), lots, timer.Diode{}, 0, 0), 0)
				if len(front) == 0 {
					b.Fatal("no front")
				}
			}
		})
	}
}
