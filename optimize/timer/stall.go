package timer

import (
	"fmt"
	"strings"
)

// stallsCharging returns why a charge toward vinf never ends the high phase, or
// "" where it does. source says what charges, with its verb.
func stallsCharging(c *Conditions, source string, vinf float64) string {
	if vinf > c.HighLevelV {
		return ""
	}
	reached, level := volts(vinf, c.HighLevelV)
	return fmt.Sprintf("%s to %s at most, not past the upper level of %s", source, reached, level)
}

// stallsDischarging is stallsCharging for the low phase.
func stallsDischarging(c *Conditions, source string, vinf float64) string {
	if vinf < c.LowLevelV {
		return ""
	}
	reached, level := volts(vinf, c.LowLevelV)
	return fmt.Sprintf("%s to %s at least, not past the lower level of %s", source, reached, level)
}

// noOscillation joins the reasons that are not empty into one sentence.
func noOscillation(reasons ...string) string {
	return because("does not oscillate: ", reasons...)
}

func because(lead string, reasons ...string) string {
	kept := reasons[:0]
	for _, reason := range reasons {
		if reason != "" {
			kept = append(kept, reason)
		}
	}
	if len(kept) == 0 {
		return ""
	}
	return lead + strings.Join(kept, "; ")
}

// volts returns two voltages as text with just enough digits to tell them apart.
func volts(a, b float64) (string, string) {
	for digits := 3; digits < 9; digits++ {
		ta, tb := fmt.Sprintf("%.*g V", digits, a), fmt.Sprintf("%.*g V", digits, b)
		if ta != tb || a == b {
			return ta, tb
		}
	}
	return fmt.Sprintf("%.9g V", a), fmt.Sprintf("%.9g V", b)
}
