package timer

import (
	"fmt"
	"math"
	"strings"

	"tickdrawer/inventory"
)

// knownDiodes holds models by trade number. They are the parameter sets (IS, N,
// RS) that makers and the trade pass around for SPICE; a batch differs from them
// by tens of millivolts.
var knownDiodes = []struct {
	numbers []string
	diode   Diode
}{
	// 0.48, 0.58 and 0.69 V at 0.1, 1 and 10 mA; the sheet's limit is 1 V at 10 mA.
	{[]string{"1N4148"}, Diode{2.52e-9, 1.752, .568}},
	{[]string{"1N4001", "1N4002", "1N4003", "1N4004", "1N4005", "1N4006", "1N4007"}, Diode{14.11e-9, 1.984, .034}},
	// A Schottky diode: its leakage spoils timing with large resistors.
	{[]string{"1N5819"}, Diode{31.7e-6, 1.373, .051}},
}

// DiodeByPartNumber returns the model of a diode known by its trade number,
// alone or with a package or reel in letters after it ("1N4148TR"), spaces and
// hyphens apart.
func DiodeByPartNumber(partNumber string) (Diode, bool) {
	number := tradeNumber(partNumber)
	for _, known := range knownDiodes {
		for _, stem := range known.numbers {
			if belongsTo(number, stem) {
				return known.diode, true
			}
		}
	}
	return Diode{}, false
}

// tradeNumber returns a part number in upper case without spaces and hyphens.
func tradeNumber(partNumber string) string {
	return strings.NewReplacer(" ", "", "-", "").Replace(strings.ToUpper(partNumber))
}

// belongsTo reports whether a trade number is the stem, alone or with letters
// and what follows them after it.
func belongsTo(number, stem string) bool {
	suffix, found := strings.CutPrefix(number, stem)
	return found && (suffix == "" || suffix[0] >= 'A' && suffix[0] <= 'Z')
}

// NewDiode returns the law with the parameters at 27 °C. The error says which
// one no diode has.
func NewDiode(saturationA, ideality, seriesOhm float64) (Diode, error) {
	switch {
	case !(saturationA >= 1e-20 && saturationA <= .1):
		return Diode{}, fmt.Errorf("a diode's saturation_a of %g is not between 1e-20 and 0.1 A: a silicon diode has about 2.5n", saturationA)
	case !(ideality >= .5 && ideality <= 10):
		return Diode{}, fmt.Errorf("a diode's ideality of %g is not between 0.5 and 10: a silicon diode has 1 to 2", ideality)
	case !(seriesOhm >= 0 && seriesOhm <= 1e4):
		return Diode{}, fmt.Errorf("a diode's series_ohm of %g is not between 0 and 10000 ohm: a small diode has about 0.5", seriesOhm)
	}
	return Diode{saturationA, ideality, seriesOhm}, nil
}

// What a part that states its forward drop alone is taken for: the drop holds at
// 10 mA, where small diodes are tested, with an ideality between those of the
// two models known for the 1N4148 (common practice, no source).
const (
	assumedForwardA = 10e-3
	assumedIdeality = 1.8
)

// DiodeOf returns the law of a stocked diode and where it is from, for people:
// the part's own model where it states saturation_a and ideality (series_ohm 0
// where unstated), else the model known for its part number, else a law through
// its forward_v, which is then only roughly right. The error says which columns
// to fill.
func DiodeOf(part inventory.Part) (diode Diode, source string, err error) {
	if part.SaturationA != 0 || part.Ideality != 0 {
		if part.SaturationA == 0 || part.Ideality == 0 {
			return Diode{}, "", fmt.Errorf("diode %s states only one of saturation_a and ideality: fill both columns, or neither", part.PartNumber)
		}
		diode, err = NewDiode(part.SaturationA, part.Ideality, part.SeriesOhm)
		if err != nil {
			return Diode{}, "", fmt.Errorf("diode %s: %w", part.PartNumber, err)
		}
		return diode, "the part's own model", nil
	}
	if diode, known := DiodeByPartNumber(part.PartNumber); known {
		return diode, "the usual model of " + part.PartNumber, nil
	}
	if part.ForwardV != 0 {
		slopeV := assumedIdeality * boltzmannVPerK * modelK
		diode, err = NewDiode(assumedForwardA/math.Expm1(part.ForwardV/slopeV), assumedIdeality, 0)
		if err != nil {
			return Diode{}, "", fmt.Errorf("diode %s: a forward_v of %g V is not a diode's: state a drop of 0.1 V to 1.2 V at 10 mA", part.PartNumber, part.ForwardV)
		}
		return diode, fmt.Sprintf("a guess through its forward_v of %g V at 10 mA: state saturation_a, ideality and series_ohm for exact times", part.ForwardV), nil
	}
	return Diode{}, "", fmt.Errorf("diode %s has no known model: fill the columns saturation_a, ideality and series_ohm (SPICE's IS, N and RS at 27 °C), or at least forward_v", part.PartNumber)
}
