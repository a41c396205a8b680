package timer

import (
	"fmt"

	"tickdrawer/inventory/marking"
)

// Rail is a limit that a circuit breaks, or comes within a fifth of, or a
// figure that its times rest on though no data sheet states it.
type Rail struct {
	Name   string // which limit: "supply", "discharge current", "power ra"
	Broken bool   // false: a warning
	Text   string // for people, with figures
}

// currents is what flows at one instant, A.
type currents struct {
	ohms       [MaxResistors]float64 // through each resistor
	switchA    float64               // into the discharge pin
	outA       float64               // out of the output into the timing network; negative: into the output
	capacitorA float64               // that charges, or discharges, the capacitor; never negative
}

// near is the share of a limit from which on it is warned of.
const near = 0.8

// Limits that belong to no device.
const (
	// Ideal equations hold up to here (TI SLFS078C).
	delaysIgnoredHz = 100e3
	// The shortest pulse of a one-shot (TI SLFS023H, SLFS043I).
	leastPulseS = 1e-6
	// RD over the largest with which a discharge-limb circuit runs: near it the low
	// time runs away with every change (our own figure: RD of 0.45 RA).
	limbNear = 0.9
	// A resistor's temperature follows power over about a second (common practice,
	// no source): shorter periods heat it by the average, longer ones by each phase.
	averagingS = 1.0
)

// rails collects what Rails returns.
type rails struct {
	circuit *Circuit
	c       *Conditions
	v       *Values
	phases  Phases
	found   []Rail
}

// Rails returns every limit that the circuit breaks under the conditions, and
// what to be wary of, in a fixed order: first the oscillation itself, then the
// supply, the device's currents and frequency, the parts' ratings. A device or a
// part that states no figure breaks no limit.
func Rails(circuit *Circuit, c *Conditions, v *Values, ratings *Ratings) []Rail {
	r := &rails{circuit: circuit, c: c, v: v, phases: circuit.Phases(c, v)}
	if why := circuit.Stalls(c, v); why != "" {
		r.add("oscillation", true, "%s", why)
		return r.found
	}
	if r.addInstant(); Broken(r.found) {
		return r.found
	}
	r.addSupply()
	r.addMargin()
	r.addDeviceCurrents()
	r.addInputCurrents()
	r.addFrequency()
	r.addPower(ratings)
	r.addCapacitor(ratings)
	return r.found
}

// Broken reports whether any of the rails is broken.
func Broken(rails []Rail) bool {
	for _, rail := range rails {
		if rail.Broken {
			return true
		}
	}
	return false
}

func (r *rails) add(name string, broken bool, format string, args ...any) {
	r.found = append(r.found, Rail{name, broken, fmt.Sprintf(format, args...)})
}

// limit adds the rail of a quantity that is to stay below most, where most is
// stated: broken with the advice, or near it.
func (r *rails) limit(name string, x, most float64, unit func(float64) string, subject, advice string) {
	switch {
	case most <= 0 || x <= near*most:
	case x > most:
		r.add(name, true, "%s %s, above the limit of %s: %s", subject, unit(x), unit(most), advice)
	default:
		r.add(name, false, "%s %s, close to the limit of %s", subject, unit(x), unit(most))
	}
}

// addInstant adds a phase that takes no time, as links leave it.
func (r *rails) addInstant() {
	for _, phase := range []struct {
		name    string
		seconds float64
	}{{"high", r.phases.HighS}, {"low", r.phases.LowS}} {
		if phase.seconds <= 0 && !(r.circuit.OneShot && phase.name == "low") {
			r.add("oscillation", true, "the %s time is 0 s: without resistance in its path nothing is timed", phase.name)
		}
	}
}

func (r *rails) addSupply() {
	d := r.c.Device
	r.limit("supply", r.c.SupplyV, d.SupplyMaxV, marking.FormatVolts, "the supply is", "lower it")
	if least := d.SupplyMinV; least > 0 && r.c.SupplyV < least*(2-near) {
		r.add("supply", r.c.SupplyV < least, "the supply of %s is close to the least of %s that %s works from",
			marking.FormatVolts(r.c.SupplyV), marking.FormatVolts(least), d.Name)
	}
	stated := d.StatedSupplies()
	if len(stated) == 0 {
		return
	}
	if low, high := stated[0], stated[len(stated)-1]; r.c.SupplyV < low || r.c.SupplyV > high {
		r.add("data", false, "the drops of %s are stated from %s to %s: at %s those of the nearest stated supply are used",
			d.Name, marking.FormatVolts(low), marking.FormatVolts(high), marking.FormatVolts(r.c.SupplyV))
	}
}

// addMargin adds what is wary of phases that nearly stall.
func (r *rails) addMargin() {
	c := r.c
	switch r.circuit {
	case &dischargeLimb:
		limit := limbLimitOhm(c, r.v.Ohms[0])
		if rd := r.v.Ohms[2]; rd > limbNear*limit {
			r.add("switching margin", false, "rd of %s is close to the %s at which the circuit stops: the low time changes with every part and the supply",
				marking.FormatOhms(rd), marking.FormatOhms(limit))
		}
	case &outputFed, &outputFedSplit:
		r.addOutputMargin()
	}
}

func (r *rails) addOutputMargin() {
	c := r.c
	if points := c.Device.OutHigh; len(points) > 0 && !c.Device.CMOS && c.LoadA < points[0].CurrentA {
		r.add("output level", false, "the high level of %s is stated at %s and more: %s are counted, with less load it is higher and the high time shorter",
			c.Device.Name, marking.FormatAmperes(points[0].CurrentA), marking.FormatVolts(c.OutHighV))
	}
	if r.circuit != &outputFedSplit || r.v.Diode.SaturationA == 0 {
		return
	}
	d := r.v.Diode.at(c.AmbientC)
	rh, rl := r.v.Ohms[0], r.v.Ohms[1]
	for _, side := range []struct {
		phase             string
		own, other, dropV float64
	}{
		{"high", rh + c.OutHighOhm, rl + c.OutHighOhm, c.OutHighV - c.HighLevelV},
		{"low", rl + c.OutLowOhm, rh + c.OutLowOhm, c.LowLevelV - c.OutLowV},
	} {
		w := solveW((side.own+d.seriesOhm)*d.saturationA, d.slopeV, side.dropV)
		if !d.blocks(side.other+d.seriesOhm, side.dropV, w) {
			r.add("diode", true, "the diodes do not steer the %s time: its last %s neither drive the one nor block the other, which leaks %s; take a higher supply, smaller resistors or diodes with less leakage",
				side.phase, marking.FormatVolts(side.dropV), marking.FormatAmperes(d.saturationA))
		}
	}
}

// instants calls visit with what flows at the beginning and the end of both
// phases; highs are those of the high time of the latch.
func (r *rails) instants(visit func(high bool, at currents)) {
	for _, high := range []bool{true, false} {
		for _, capacitorV := range []float64{r.c.LowLevelV, r.c.HighLevelV} {
			visit(high, r.circuit.currents(r.c, r.v, capacitorV, high))
		}
	}
}

func (r *rails) addDeviceCurrents() {
	d := r.c.Device
	var switchA, sourceA, sinkA float64
	r.instants(func(_ bool, at currents) {
		switchA = max(switchA, at.switchA)
		sourceA = max(sourceA, at.outA)
		sinkA = max(sinkA, -at.outA)
	})
	advice := "make " + r.circuit.Resistors[0] + " larger"
	r.limit("discharge current", switchA, d.SwitchMaxA, marking.FormatAmperes, "the discharge pin sinks", advice)
	if stated := highestA(d.Switch); stated > 0 && switchA > stated && switchA <= near*d.SwitchMaxA {
		r.add("data", false, "the discharge pin sinks %s, and the drop of %s is stated up to %s: the low time is less certain",
			marking.FormatAmperes(switchA), d.Name, marking.FormatAmperes(stated))
	}
	r.limit("output current", sourceA+r.c.LoadA, d.SourceMaxA, marking.FormatAmperes, "the output delivers", "relieve it, with a transistor for the load or larger resistors")
	r.limit("output current", sinkA, d.SinkMaxA, marking.FormatAmperes, "the output sinks", advice)
}

// addInputCurrents adds the ceiling on the resistance from the threshold current
// by the half rule: at the upper level the charging current is to be at least
// twice as large (TI SLFS022 and Philips print the resistances that follow). The
// trigger current works against the discharge; it is stated with the pin at 0 V
// alone, so it is only warned of.
func (r *rails) addInputCurrents() {
	d := r.c.Device
	threshold, trigger := d.ThresholdA.Largest(), d.TriggerA.Largest()
	if threshold > 0 {
		charging := r.circuit.currents(r.c, r.v, r.c.HighLevelV, true).capacitorA
		switch needed := 2 * threshold; {
		case charging < needed:
			r.add("input current", true, "only %s charge the capacitor at the upper level, less than twice the threshold current of %s (%s): take smaller resistors and a larger capacitor",
				marking.FormatAmperes(charging), d.Name, marking.FormatAmperes(threshold))
		case charging < needed/near:
			r.add("input current", false, "only %s charge the capacitor at the upper level, hardly more than twice the threshold current of %s (%s)",
				marking.FormatAmperes(charging), d.Name, marking.FormatAmperes(threshold))
		}
	}
	if trigger > 0 && !r.circuit.OneShot {
		discharging := r.circuit.currents(r.c, r.v, r.c.LowLevelV, false).capacitorA
		if discharging < 2*trigger {
			r.add("input current", false, "only %s discharge the capacitor at the lower level, and the trigger pin of %s may feed up to %s into it (stated at 0 V): the low time may be longer",
				marking.FormatAmperes(discharging), d.Name, marking.FormatAmperes(trigger))
		}
	}
}

func (r *rails) addFrequency() {
	d := r.c.Device
	if d.FrequencyMaxHz == 0 {
		return
	}
	if r.circuit.OneShot {
		switch pulseS := r.phases.HighS; {
		case pulseS < leastPulseS:
			r.add("pulse", true, "a pulse of %s is shorter than the %s that the timer needs", marking.FormatSeconds(pulseS), marking.FormatSeconds(leastPulseS))
		case pulseS < leastPulseS/near:
			r.add("pulse", false, "a pulse of %s is close to the shortest of %s", marking.FormatSeconds(pulseS), marking.FormatSeconds(leastPulseS))
		}
		return
	}
	frequencyHz := 1 / (r.phases.HighS + r.phases.LowS)
	r.limit("frequency", frequencyHz, d.FrequencyMaxHz, marking.FormatHertz, "the frequency is", "this timer is too slow")
	if frequencyHz > delaysIgnoredHz {
		r.add("delays", false, "above %s the delays of the timer, which are not counted, lengthen both times", marking.FormatHertz(delaysIgnoredHz))
	}
}

// addPower adds each resistor's dissipation against its rating. In a phase it is
// that of the phase's more demanding end: a bound, as the power is convex in the
// capacitor's voltage.
func (r *rails) addPower(ratings *Ratings) {
	var high, low [MaxResistors]float64 // W
	r.instants(func(isHigh bool, at currents) {
		for i := range r.circuit.Resistors {
			watts := 0.0 // of a link, whatever flows
			if r.v.Ohms[i] > 0 {
				watts = at.ohms[i] * at.ohms[i] * r.v.Ohms[i]
			}
			if isHigh {
				high[i] = max(high[i], watts)
			} else {
				low[i] = max(low[i], watts)
			}
		}
	})
	highS, lowS := r.phases.HighS, r.phases.LowS
	if r.circuit.Inverter {
		highS, lowS = lowS, highS
	}
	for i, position := range r.circuit.Resistors {
		watts := max(high[i], low[i])
		if periodS := highS + lowS; !r.circuit.OneShot && periodS < averagingS {
			watts = (high[i]*highS + low[i]*lowS) / periodS
		}
		rating := ratings.Watts[i] * derating(r.c.AmbientC)
		switch {
		case ratings.Watts[i] > 0 && rating == 0:
			r.add("power "+position, true, "%s may carry no power at %s", position, marking.FormatCelsius(r.c.AmbientC))
		case ratings.Watts[i] > 0:
			r.limit("power "+position, watts, rating, marking.FormatWatts, "the power in "+position+" is", "take more resistance, or a part of a higher rating")
		case watts > unratedW:
			r.add("power "+position, false, "the power in %s is %s, and its parts state no rating", position, marking.FormatWatts(watts))
		}
	}
}

// unratedW is the power from which on an unstated rating is worth a warning: half
// of what the smallest leaded resistors stand, 1/6 W (Yageo MFR).
const unratedW = 1.0 / 12

// derating returns the share of its rating that a film resistor may carry at an
// ambient temperature: all of it up to 70 °C, none at 155 °C (Yageo MFR, CFR).
func derating(ambientC float64) float64 { return min(1, max(0, (155-ambientC)/85)) }

func (r *rails) addCapacitor(ratings *Ratings) {
	volts := r.c.HighLevelV
	if r.circuit == &powerOnPulse { // charges on after its pulse
		volts = r.c.SupplyV
	}
	if ratings.CapacitorV > 0 {
		r.limit("capacitor voltage", volts, ratings.CapacitorV, marking.FormatVolts, "the capacitor charges to", "take one of a higher rating")
	} else {
		r.add("capacitor voltage", false, "the capacitor charges to %s, and its parts state no voltage rating", marking.FormatVolts(volts))
	}
	if ratings.PolarisedSeries {
		r.add("polarity", true, "polarised capacitors are in series, where leakage may reverse one of them: put them side by side")
	}
}
