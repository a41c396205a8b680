package inventory

import (
	"errors"
	"fmt"
	"testing"
)

func TestAvailableIsWhatNoKitHolds(t *testing.T) {
	for _, c := range []struct{ onHand, reserved, want int64 }{{0, 0, 0}, {10, 0, 10}, {10, 4, 6}, {10, 10, 0}} {
		if got := (Lot{OnHand: c.onHand, Reserved: c.reserved}).Available(); got != c.want {
			t.Errorf("%d on hand, %d reserved: %d available, want %d", c.onHand, c.reserved, got, c.want)
		}
	}
}

func TestMeasuredValueComesBeforeTheNominalOne(t *testing.T) {
	part := Part{Kind: Capacitor, Value: 1e-6}
	if got := (Lot{Part: part}).Value(); got != 1e-6 {
		t.Errorf("not measured: %v", got)
	}
	if got := (Lot{Part: part, Measured: 1.03e-6}).Value(); got != 1.03e-6 {
		t.Errorf("measured: %v", got)
	}
}

func TestMoneyIsCountedInMillionths(t *testing.T) {
	if got := Micros(12_500).Float(); got != 0.0125 {
		t.Errorf("12500 millionths are %v", got)
	}
}

func TestReasonSurvivesWrapping(t *testing.T) {
	err := fmt.Errorf("booking row 3: %w", Errorf(Shortage, "lot %d has %d pieces", 7, 2))
	if ReasonOf(err) != Shortage {
		t.Errorf("reason %v of %v", ReasonOf(err), err)
	}
	if ReasonOf(errors.New("disk full")) != 0 || ReasonOf(nil) != 0 {
		t.Error("an error of another package has a reason")
	}
}
