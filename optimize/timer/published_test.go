package timer

import (
	"math"
	"testing"
)

// Components are those that the documents print; the results follow from them by
// the ideal equations and were run in ngspice 39, unless the document states them.
func TestIdealTimesOfPublishedComponents(t *testing.T) {
	c := under(t, &Ideal, 5)
	for _, test := range []struct {
		source, slug string
		v            Values
		highS, lowS  float64
		tolerance    float64
	}{
		{"SLFS022I figure 13", "classic", Values{Ohms: [3]float64{5e3, 3e3}, Farads: .15e-6}, 831.8e-6, 311.9e-6, 1e-4},
		{"ST NE555 figure 14", "classic", Values{Ohms: [3]float64{4.8e3, 4.8e3}, Farads: .1e-6}, 665.4e-6, 332.7e-6, 1e-4},
		{"ST NE555 figure 14, inverted", "classic-inverted", Values{Ohms: [3]float64{4.8e3, 4.8e3}, Farads: .1e-6}, 332.7e-6, 665.4e-6, 1e-4},
		// RA of SLFS022 figure 10 is from memory; the same parts stand in the LM555's figure 8.
		{"SLFS022 figure 10", "one-shot", Values{Ohms: [3]float64{9.1e3}, Farads: .01e-6}, 99.97e-6, 0, 1e-4},
		{"SLFS022 figure 16", "one-shot", Values{Ohms: [3]float64{1e3}, Farads: .1e-6}, 109.86e-6, 0, 1e-4},
	} {
		p := CircuitBySlug(test.slug).Phases(&c, &test.v)
		within(t, test.source+" high", p.HighS, test.highS, test.tolerance)
		within(t, test.source+" low", p.LowS, test.lowS, test.tolerance)
	}
	// SLFS022I figure 13: 874.4 Hz, 72.7 % high. ST figure 14: 1001.9 Hz.
	p := classic.Phases(&c, &Values{Ohms: [3]float64{5e3, 3e3}, Farads: .15e-6})
	within(t, "SLFS022I figure 13 frequency", 1/(p.HighS+p.LowS), 874.4, 1e-4)
	within(t, "SLFS022I figure 13 share of high", p.HighS/(p.HighS+p.LowS), .727, 1e-3)
	p = classic.Phases(&c, &Values{Ohms: [3]float64{4.8e3, 4.8e3}, Farads: .1e-6})
	within(t, "ST figure 14 frequency", 1/(p.HighS+p.LowS), 1001.9, 1e-4)
	// Nomograph of SLFS022F figure 14, read: 10 kΩ and 0.01 µF 14.4 kHz, 1 MΩ and 1 µF 1.44 Hz.
	for _, line := range [][3]float64{{10e3, .01e-6, 14.4e3}, {1e6, 1e-6, 1.44}} {
		p = classic.Phases(&c, &Values{Ohms: [3]float64{line[0] / 2, line[0] / 4}, Farads: line[1]})
		within(t, "SLFS022F figure 14", 1/(p.HighS+p.LowS), line[2], 3e-3)
	}
}

func TestALimbRunsWithRDBelowHalfOfRAAndStopsAbove(t *testing.T) {
	// RD of 49 kΩ runs and 51 kΩ stops with RA of 100 kΩ: run in ngspice 39.
	c := under(t, &Ideal, 9)
	runs := Values{Ohms: [3]float64{100e3, 10e3, 49e3}, Farads: 1e-6}
	stops := Values{Ohms: [3]float64{100e3, 10e3, 51e3}, Farads: 1e-6}
	if why := dischargeLimb.Stalls(&c, &runs); why != "" {
		t.Error(why)
	}
	want := "does not oscillate: rd and the discharge pin, with ra pulling up against them, take the capacitor to 3.04 V at least, not past the lower level of 3 V (with ra of 100 kΩ, rd must stay below 50 kΩ)"
	if why := dischargeLimb.Stalls(&c, &stops); why != want {
		t.Errorf("%q", why)
	}
	if p := dischargeLimb.Phases(&c, &stops); !math.IsInf(p.LowS, 1) {
		t.Errorf("%+v", p)
	}
	// ST NE555, with RB of 0: t2 = RA RD/(RA+RD) C ln((RD-2RA)/(2RD-RA)).
	ra, rd := 100e3, 33e3
	p := dischargeLimb.Phases(&c, &Values{Ohms: [3]float64{ra, 0, rd}, Farads: 1e-6})
	within(t, "ST NE555 low time of 50 % circuit", p.LowS, ra*rd/(ra+rd)*1e-6*math.Log((rd-2*ra)/(2*rd-ra)), 1e-12)
}

func TestABipolarOutputLengthensTheHighTimeAndStallsAtLowSupply(t *testing.T) {
	// VOH of 3.6 V at 5 V gives 1.98 RC in place of 0.693 RC, and 3.3 V never trips: run in ngspice 39.
	c := under(t, &Ideal, 5)
	v := Values{Ohms: [3]float64{10e3}, Farads: 1e-6}
	c.OutHighV = 3.6
	within(t, "high", outputFed.Phases(&c, &v).HighS, 1.98*10e3*1e-6, 2e-3)
	c.OutHighV = 3.3
	if p := outputFed.Phases(&c, &v); !math.IsInf(p.HighS, 1) {
		t.Errorf("%+v", p)
	}
	c = under(t, DeviceByName("NE555"), 5)
	want := "does not oscillate: the output, high, charges the capacitor to 3.3 V at most, not past the upper level of 3.33 V"
	if why := outputFed.Stalls(&c, &v); why != want {
		t.Errorf("%q", why)
	}
	c = under(t, DeviceByName("TLC555"), 5)
	if why := outputFed.Stalls(&c, &v); why != "" {
		t.Error(why)
	}
}

func TestTheDischargePinsResistanceLengthensTheLowTime(t *testing.T) {
	// tL = (RB + RA∥ron) C ln((2/3-k)/(1/3-k)), k = ron/(RA+ron): 0.01 % from ngspice 39.
	c := under(t, DeviceByName("TLC555"), 5)
	ra, rb, ron := 470.0, 200.0, 14.0
	k := ron / (ra + ron)
	p := classic.Phases(&c, &Values{Ohms: [3]float64{ra, rb}, Farads: 1e-6})
	within(t, "low", p.LowS, (rb+ra*ron/(ra+ron))*1e-6*math.Log((2.0/3-k)/(1.0/3-k)), 1e-12)
}

func TestADiodeThatQuitsEarlyIsCounted(t *testing.T) {
	// RA 10 kΩ, RB 2 kΩ at 5 V: with a constant drop tH = RA C ln((2VCC/3-VF)/(VCC/3-VF)) is
	// 11.6 % off a run in ngspice 39 with the 1N4148's model; the law is not.
	c := under(t, &Ideal, 5)
	v := Values{Ohms: [3]float64{10e3, 2e3}, Farads: 100e-9, Diode: signal}
	vf := .55
	constantDrop := 10e3 * 100e-9 * math.Log((10.0/3-vf)/(5.0/3-vf))
	if p := diodeBypass.Phases(&c, &v); math.Abs(constantDrop/p.HighS-1) < .03 {
		t.Errorf("the constant drop gives %g s, the law %g s", constantDrop, p.HighS)
	}
}

func TestStallsNamesEachLevelThatIsNotReached(t *testing.T) {
	c := under(t, &Ideal, 9)
	c.HighLevelV = 10
	for slug, want := range map[string]string{
		"classic":          "does not oscillate: ra and rb charge the capacitor to 9 V at most, not past the upper level of 10 V",
		"one-shot":         "the pulse never ends: r charges the capacitor to 9 V at most, not past the upper level of 10 V",
		"output-fed-split": "does not oscillate: the output, high, charges the capacitor to 9 V at most, not past the upper level of 10 V",
	} {
		v := Values{Ohms: [3]float64{1e3, 1e3}, Farads: 1e-6}
		if why := CircuitBySlug(slug).Stalls(&c, &v); why != want {
			t.Errorf("%s: %q", slug, why)
		}
	}
	c = under(t, DeviceByName("TLC555"), 5)
	want := "does not oscillate: the discharge pin, with ra pulling up against it, takes the capacitor to 1.84 V at least, not past the lower level of 1.67 V"
	if why := classic.Stalls(&c, &Values{Ohms: [3]float64{24, 1e3}, Farads: 1e-6}); why != want {
		t.Errorf("%q", why)
	}
}
