package marking

import (
	"math"
	"strconv"
	"strings"
)

// significant is the most significant digits shown to people.
const significant = 4

// step is a prefix with its power of ten, from a power on.
type step struct {
	symbol string
	power  int
	from   int // used for values from 10^from on
}

// The prefixes that the trade writes, descending: none for 0.47 Ω, 0.25 Hz and
// times above 1 s, micro for capacitance up to 0.1 F (4700 µF, not 4.7 mF).
// Common practice, no source.
var (
	ohmSteps   = []step{{"T", 12, 12}, {"G", 9, 9}, {"M", 6, 6}, {"k", 3, 3}, {"", 0, -1}, {"m", -3, -3}}
	faradSteps = []step{{"", 0, -1}, {"µ", -6, -6}, {"n", -9, -9}, {"p", -12, -12}}
	timeSteps  = []step{{"", 0, 0}, {"m", -3, -3}, {"µ", -6, -6}, {"n", -9, -9}, {"p", -12, -12}}
	plainSteps = []step{{"G", 9, 9}, {"M", 6, 6}, {"k", 3, 3}, {"", 0, 0}, {"m", -3, -3}, {"µ", -6, -6}, {"n", -9, -9}, {"p", -12, -12}}
	hertzSteps = []step{{"G", 9, 9}, {"M", 6, 6}, {"k", 3, 3}, {"", 0, -2}, {"m", -3, -3}, {"µ", -6, -6}, {"n", -9, -9}}
	noSteps    = []step{{"", 0, 0}}
)

// FormatOhms returns a resistance (ohm) for people: "4.7 kΩ", at most four
// significant digits.
func FormatOhms(ohms float64) string { return engineering(ohms, ohmSteps, "Ω") }

// FormatFarads returns a capacitance (farad) for people: "100 nF", "4700 µF".
func FormatFarads(farads float64) string { return engineering(farads, faradSteps, "F") }

// FormatSeconds returns a time (s) for people: "3.98 s", "221.8 µs".
func FormatSeconds(seconds float64) string { return engineering(seconds, timeSteps, "s") }

// FormatHertz returns a frequency (Hz) for people: "421.3 Hz", "1.2 kHz",
// "0.25 Hz".
func FormatHertz(hertz float64) string { return engineering(hertz, hertzSteps, "Hz") }

// FormatVolts returns a voltage (V) for people: "9 V", "700 mV".
func FormatVolts(volts float64) string { return engineering(volts, plainSteps, "V") }

// FormatAmperes returns a current (A) for people: "10 mA".
func FormatAmperes(amperes float64) string { return engineering(amperes, plainSteps, "A") }

// FormatWatts returns a power (W) for people: "0.25 W" is "250 mW".
func FormatWatts(watts float64) string { return engineering(watts, plainSteps, "W") }

// FormatCelsius returns a temperature (°C) for people: "25 °C", "−10 °C".
func FormatCelsius(celsius float64) string { return engineering(celsius, noSteps, "°C") }

// FormatPercent returns a share (1 for the whole) for people: 0.483 is "48.3 %".
func FormatPercent(share float64) string { return engineering(share*100, noSteps, "%") }

// engineering returns the value rounded to four significant digits (whole
// numbers are not rounded to tens), with the prefix for its size and the unit.
func engineering(value float64, steps []step, unit string) string {
	sign := ""
	if value < 0 {
		sign, value = "−", -value
	}
	switch {
	case math.IsNaN(value):
		return "unknown"
	case math.IsInf(value, 0):
		return sign + "∞ " + unit
	case value == 0:
		return "0 " + unit
	}
	// Rounding comes first: 999.96 Ω is 1 kΩ.
	digits, power := rounded(value, significant)
	chosen := steps[len(steps)-1]
	for _, s := range steps {
		if power >= s.from {
			chosen = s
			break
		}
	}
	if power-chosen.power >= significant {
		digits, power = rounded(value, power-chosen.power+1)
	}
	return sign + plain(digits, power-chosen.power) + " " + chosen.symbol + unit
}

// rounded returns the value as count significant digits, trailing zeros
// dropped, and the power of ten of the first.
func rounded(value float64, count int) (digits string, power int) {
	return split(strconv.FormatFloat(value, 'e', count-1, 64))
}

// exactly returns the fewest digits that read back as the same float64, and the
// power of ten of the first.
func exactly(value float64) (digits string, power int) {
	return split(strconv.FormatFloat(value, 'e', -1, 64))
}

func split(scientific string) (digits string, power int) {
	mantissa, exponent, _ := strings.Cut(scientific, "e")
	power, _ = strconv.Atoi(exponent)
	digits = strings.TrimRight(strings.Replace(mantissa, ".", "", 1), "0")
	if digits == "" {
		digits = "0"
	}
	return digits, power
}

// plain returns the digits as a decimal number whose first digit has the power
// of ten.
func plain(digits string, power int) string {
	whole, fraction := around(digits, power)
	if fraction == "" {
		return whole
	}
	if whole == "" {
		whole = "0"
	}
	return whole + "." + fraction
}

// around splits the digits at the decimal point; whole is "" below 1.
func around(digits string, power int) (whole, fraction string) {
	switch {
	case power < 0:
		return "", strings.Repeat("0", -1-power) + digits
	case power >= len(digits)-1:
		return digits + strings.Repeat("0", power-len(digits)+1), ""
	}
	return digits[:power+1], digits[power+1:]
}

// scientific returns the value for a message about its size.
func scientific(x float64) string {
	switch {
	case math.IsInf(x, 1):
		return "more than 1e308"
	case x == 0:
		return "less than 1e-308"
	}
	return strconv.FormatFloat(x, 'g', significant, 64)
}

// CompactOhms returns a resistance (ohm, 0 or from 1 µΩ to 1 TΩ) as IEC 60062
// marks it: "4k7", "R47", "100R". ParseOhms reads the same float64 from it.
func CompactOhms(ohms float64) string {
	if ohms == 0 {
		return "0R"
	}
	digits, power := exactly(ohms)
	switch {
	case power >= 12:
		return lettered(digits, power-12, "T")
	case power >= 9:
		return lettered(digits, power-9, "G")
	case power >= 6:
		return lettered(digits, power-6, "M")
	case power >= 3:
		return lettered(digits, power-3, "k")
	case power >= -1:
		return lettered(digits, power, "R")
	}
	return lettered(digits, power+3, "m")
}

// CompactFarads returns a capacitance (farad, 1e-14 to 100 F) as IEC 60062 marks
// it: "100n", "4u7", "4700u". ParseFarads reads the same float64 from it.
func CompactFarads(farads float64) string {
	digits, power := exactly(farads)
	switch {
	case power >= 2:
		// 100F would be a code with a tolerance letter too.
		return lettered(digits, power, "F") + "0"
	case power >= -1:
		return lettered(digits, power, "F")
	case power >= -6:
		return lettered(digits, power+6, "u")
	case power >= -9:
		return lettered(digits, power+9, "n")
	}
	return lettered(digits, power+12, "p")
}

// lettered returns the digits with the letter as their decimal point.
func lettered(digits string, power int, letter string) string {
	whole, fraction := around(digits, power)
	return whole + letter + fraction
}
