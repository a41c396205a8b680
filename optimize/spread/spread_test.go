package spread

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/optimize"
	"tickdrawer/optimize/timer"
)

func logRange(t *rapid.T, low, high float64, label string) float64 {
	return low * math.Exp(rapid.Float64Range(0, math.Log(high/low)).Draw(t, label))
}

// spreadOf draws a band around a value, up to the share either way.
func spreadOf(t *rapid.T, value, share float64, label string) optimize.Band {
	return optimize.Band{
		Min: value * (1 - rapid.Float64Range(0, share).Draw(t, label+" less")),
		Max: value * (1 + rapid.Float64Range(0, share).Draw(t, label+" more")),
	}
}

func rangeAround(t *rapid.T, nominal, less, more float64, label string) optimize.Range {
	return optimize.Range{
		Nominal: nominal,
		Min:     nominal - rapid.Float64Range(0, less).Draw(t, label+" less"),
		Max:     nominal + rapid.Float64Range(0, more).Draw(t, label+" more"),
	}
}

var diodes = []timer.Diode{{}, {SaturationA: 2.52e-9, Ideality: 1.752, SeriesOhm: .568}, {SaturationA: 14.11e-9, Ideality: 1.984, SeriesOhm: .034}, {SaturationA: 31.7e-6, Ideality: 1.373, SeriesOhm: .051}}

// drawCase draws a circuit with values and surroundings.
func drawCase(t *rapid.T) (*timer.Circuit, Surroundings, Values, timer.Diode) {
	circuit := rapid.SampledFrom(timer.Circuits()).Draw(t, "circuit")
	device := rapid.SampledFrom(timer.Devices()).Draw(t, "device")
	around := Surroundings{Device: device, AmbientC: rangeAround(t, 25, 40, 40, "ambient")}
	around.SupplyV = rangeAround(t, rapid.Float64Range(5, 13).Draw(t, "supply"), .5, 2, "supply")
	around.LoadA = device.SourceMaxA * rapid.Float64Range(0, 1).Draw(t, "load")
	if rapid.IntRange(0, 3).Draw(t, "driven control pin") == 0 {
		around.ControlV = around.SupplyV.Min * rapid.Float64Range(.2, .9).Draw(t, "control")
	}
	values := Values{Farads: spreadOf(t, logRange(t, 1e-9, 1e-3, "farads"), .3, "farads")}
	for i := range circuit.Resistors {
		values.Ohms[i] = spreadOf(t, logRange(t, 300, 1e6, circuit.Resistors[i]), .2, circuit.Resistors[i])
	}
	var diode timer.Diode
	if circuit.Diodes > 0 {
		diode = rapid.SampledFrom(diodes).Draw(t, "diode")
	}
	return circuit, around, values, diode
}

// board draws one board within the spreads and returns its times; ok is false
// where its diodes do not steer it.
func board(t *rapid.T, circuit *timer.Circuit, around Surroundings, values Values, diode timer.Diode, e *Evaluator) (times optimize.Times, ok bool) {
	at := func(low, high float64, label string) float64 {
		if rapid.IntRange(0, 3).Draw(t, label+" at an end") == 0 { // corners are drawn too
			return rapid.SampledFrom([]float64{low, high}).Draw(t, label)
		}
		return low + (high-low)*rapid.Float64Range(0, 1).Draw(t, label)
	}
	v := timer.Values{Farads: at(values.Farads.Min, values.Farads.Max, "c"), Diode: diode}
	for i, position := range circuit.Resistors {
		v.Ohms[i] = at(values.Ohms[i].Min, values.Ohms[i].Max, position)
	}
	supplyV := at(around.SupplyV.Min, around.SupplyV.Max, "the supply")
	ambientC := at(around.AmbientC.Min, around.AmbientC.Max, "the ambient")
	least, most, err := around.Device.Extremes(supplyV, ambientC, around.LoadA, around.ControlV)
	if err != nil {
		t.Fatal(err)
	}
	c := least
	c.SwitchV, c.SwitchOhm = mixed(at(0, 1, "switch"), least.SwitchV, most.SwitchV, least.SwitchOhm, most.SwitchOhm)
	c.OutHighV, c.OutHighOhm = mixed(at(0, 1, "output high"), least.OutHighV, most.OutHighV, least.OutHighOhm, most.OutHighOhm)
	c.OutLowV, c.OutLowOhm = mixed(at(0, 1, "output low"), least.OutLowV, most.OutLowV, least.OutLowOhm, most.OutLowOhm)
	if !steers(circuit, &c, &v) {
		return times, false
	}
	scale := 1 + at(-1, 1, "timing error")*e.timingError(supplyV)
	p := circuit.Phases(&c, &v)
	if circuit.OneShot {
		return optimize.Times{PulseS: p.HighS * scale}, true
	}
	return optimize.Times{HighS: p.HighS * scale, LowS: p.LowS * scale, FirstHighS: circuit.FirstHighS(&c, &v) * scale}, true
}

// steers reports whether the circuit's diodes block, without which the trends of
// its times are no longer those of the circuit.
func steers(circuit *timer.Circuit, c *timer.Conditions, v *timer.Values) bool {
	for _, rail := range timer.Rails(circuit, c, v, &timer.Ratings{}) {
		if rail.Broken && rail.Name == "diode" {
			return false
		}
	}
	return true
}

func mixed(share, v0, v1, ohm0, ohm1 float64) (volts, ohms float64) {
	return v0 + share*(v1-v0), ohm0 + share*(ohm1-ohm0)
}

// slack is what two ways of computing the same time may differ by: rounding, and
// where diodes hardly block, the two forms of their law.
func slack(circuit *timer.Circuit, around *Surroundings) float64 {
	switch {
	case around.ControlV > 0: // the supply is meshed, see suppliesV
		return 1e-3
	case circuit.Diodes == 2:
		return 1e-5
	}
	return 1e-11
}

func TestNoBoardFallsOutsideTheBand(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		circuit, around, values, diode := drawCase(t)
		band, err := WorstCase(circuit, around, &values, diode)
		if err != nil {
			t.Fatal(err)
		}
		e, err := NewEvaluator(circuit, around, diode)
		if err != nil {
			t.Fatal(err)
		}
		stalls := e.Stalls(&values)
		for range 8 {
			times, ok := board(t, circuit, around, values, diode, e)
			if !ok {
				continue
			}
			inside := func(name string, x float64, b optimize.Band) {
				t.Helper()
				if math.IsInf(x, 1) {
					if !math.IsInf(b.Max, 1) || stalls == "" {
						t.Fatalf("%s: %s never ends, yet the band is %v and %q", circuit.Slug, name, b, stalls)
					}
					return
				}
				if !(x >= b.Min*(1-slack(circuit, &around)) && x <= b.Max*(1+slack(circuit, &around))) {
					t.Fatalf("%s: %s of %.15g is outside %.15g to %.15g", circuit.Slug, name, x, b.Min, b.Max)
				}
			}
			if circuit.OneShot {
				inside("pulse", times.PulseS, band.Pulse)
				continue
			}
			inside("high", times.HighS, band.High)
			inside("low", times.LowS, band.Low)
			inside("first high", times.FirstHighS, band.FirstHigh)
			inside("period", times.PeriodS(), band.Period)
			if !math.IsInf(times.PeriodS(), 1) {
				inside("frequency", times.FrequencyHz(), band.Frequency)
				inside("duty", times.Duty(), band.Duty)
			}
		}
	})
}

// reachable returns the widest band that boards at corners and half way between
// them show: what Band must not exceed by more than a percent.
func reachable(t *rapid.T, circuit *timer.Circuit, around Surroundings, values Values, diode timer.Diode, e *Evaluator) optimize.TimesBand {
	none := optimize.Band{Min: math.Inf(1), Max: math.Inf(-1)}
	band := optimize.TimesBand{High: none, Low: none, Period: none, Frequency: none, Duty: none, FirstHigh: none, Pulse: none}
	const steps = 8 // of the first resistor
	for mask := range 1 << len(circuit.Resistors) {
		for step := 0; step <= steps; step++ {
			for _, supplyV := range []float64{around.SupplyV.Min, (around.SupplyV.Min + around.SupplyV.Max) / 2, around.SupplyV.Max} {
				for _, ambientC := range []float64{around.AmbientC.Min, (around.AmbientC.Min + around.AmbientC.Max) / 2, around.AmbientC.Max} {
					least, most, err := around.Device.Extremes(supplyV, ambientC, around.LoadA, around.ControlV)
					if err != nil {
						t.Fatal(err)
					}
					mixed := least
					mixed.OutHighV, mixed.OutHighOhm = most.OutHighV, most.OutHighOhm
					crossed := most
					crossed.OutHighV, crossed.OutHighOhm = least.OutHighV, least.OutHighOhm
					for _, c := range []timer.Conditions{least, most, mixed, crossed} {
						for sign := -1.0; sign <= 1; sign += 2 {
							v := timer.Values{Farads: values.Farads.Min, Diode: diode}
							if sign > 0 {
								v.Farads = values.Farads.Max
							}
							for i := range circuit.Resistors {
								v.Ohms[i] = values.Ohms[i].Min
								if mask>>i&1 != 0 {
									v.Ohms[i] = values.Ohms[i].Max
								}
							}
							v.Ohms[0] = values.Ohms[0].Min + (values.Ohms[0].Max-values.Ohms[0].Min)*float64(step)/steps
							p := circuit.Phases(&c, &v)
							scale := 1 + sign*e.largestTimingError()
							times := optimize.Times{HighS: p.HighS * scale, LowS: p.LowS * scale, FirstHighS: circuit.FirstHighS(&c, &v) * scale}
							include(&band.High, times.HighS)
							include(&band.Low, times.LowS)
							include(&band.FirstHigh, times.FirstHighS)
							include(&band.Period, times.PeriodS())
							include(&band.Frequency, times.FrequencyHz())
							include(&band.Duty, duty(times.HighS, times.LowS))
							include(&band.Pulse, times.HighS)
						}
					}
				}
			}
		}
	}
	return band
}

func TestTheBandIsReachedByBoardsOfItsOwnSpreads(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		circuit, around, values, diode := drawCase(t)
		e, err := NewEvaluator(circuit, around, diode)
		if err != nil {
			t.Fatal(err)
		}
		if e.Stalls(&values) != "" {
			return
		}
		for i := range e.corners {
			e.place(&e.corners[i], &values, 1<<len(circuit.Resistors)-1)
			if !steers(circuit, &e.corners[i].most, &e.at) {
				return
			}
		}
		band, seen := e.Band(&values), reachable(t, circuit, around, values, diode, e)
		wide := .01
		check := func(name string, claimed, seen optimize.Band) {
			t.Helper()
			if claimed.Min < seen.Min*(1-wide) || claimed.Max > seen.Max*(1+wide) {
				t.Fatalf("%s: %s from %.9g to %.9g, boards go from %.9g to %.9g", circuit.Slug, name, claimed.Min, claimed.Max, seen.Min, seen.Max)
			}
		}
		if circuit.OneShot {
			check("pulse", band.Pulse, seen.Pulse)
			return
		}
		check("high", band.High, seen.High)
		check("low", band.Low, seen.Low)
		check("first high", band.FirstHigh, seen.FirstHigh)
		check("period", band.Period, seen.Period)
		check("frequency", band.Frequency, seen.Frequency)
		if circuit.Diodes > 0 { // what it may gain between corners is estimated
			wide = .03
		}
		if circuit.Diodes != 1 || values.Ohms[1].Max <= e.corners[len(e.corners)-1].leakingOhm { // else a bound
			check("duty", band.Duty, seen.Duty)
		}
	})
}

func exactly(ohms ...float64) (bands [timer.MaxResistors]optimize.Band) {
	for i, x := range ohms {
		bands[i] = optimize.Band{Min: x, Max: x}
	}
	return bands
}

func ideally(supplyV float64) Surroundings {
	return Surroundings{Device: &timer.Ideal, SupplyV: optimize.Exactly(supplyV), AmbientC: optimize.Exactly(25)}
}

func closeTo(t *testing.T, what string, got, want, rel float64) {
	t.Helper()
	if !(math.Abs(got-want) <= rel*math.Abs(want)) {
		t.Errorf("%s = %.12g, want %.12g", what, got, want)
	}
}

func TestEqualTolerancesLeaveTheDutyAndSpreadTheTimes(t *testing.T) {
	// Ideal classic with 1 % resistors and a 10 % capacitor: times stretch by 1.01·1.1 at
	// most; the duty (RA+RB)/(RA+2RB) moves by RA against RB alone.
	values := Values{Farads: optimize.Band{Min: .9e-6, Max: 1.1e-6}}
	values.Ohms[0] = optimize.Band{Min: 9.9e3, Max: 10.1e3}
	values.Ohms[1] = optimize.Band{Min: 19.8e3, Max: 20.2e3}
	band, err := WorstCase(timer.CircuitBySlug("classic"), ideally(9), &values, timer.Diode{})
	if err != nil {
		t.Fatal(err)
	}
	closeTo(t, "least period", band.Period.Min, math.Ln2*50e3*1e-6*.99*.9, 1e-12)
	closeTo(t, "largest period", band.Period.Max, math.Ln2*50e3*1e-6*1.01*1.1, 1e-12)
	closeTo(t, "least frequency", band.Frequency.Min, 1/band.Period.Max, 1e-15)
	closeTo(t, "least duty", band.Duty.Min, (9.9+20.2)/(9.9+40.4), 1e-12)
	closeTo(t, "largest duty", band.Duty.Max, (10.1+19.8)/(10.1+39.6), 1e-12)
	closeTo(t, "largest first high", band.FirstHigh.Max, math.Log(3)*30e3*1e-6*1.01*1.1, 1e-12)
	if band.Pulse != (optimize.Band{}) {
		t.Errorf("an oscillator has a pulse: %v", band.Pulse)
	}
}

func TestThePeriodOfADischargeLimbHasItsLeastBetweenTheEndsOfRA(t *testing.T) {
	circuit := timer.CircuitBySlug("discharge-limb")
	values := Values{Ohms: exactly(0, 1e3, 33e3), Farads: optimize.Band{Min: 1e-6, Max: 1e-6}}
	values.Ohms[0] = optimize.Band{Min: 70e3, Max: 200e3}
	band, err := WorstCase(circuit, ideally(9), &values, timer.Diode{})
	if err != nil {
		t.Fatal(err)
	}
	c, _ := timer.Ideal.Under(9, 25, 0, 0)
	period := func(ra float64) float64 {
		p := circuit.Phases(&c, &timer.Values{Ohms: [3]float64{ra, 1e3, 33e3}, Farads: 1e-6})
		return p.HighS + p.LowS
	}
	least, where := math.Inf(1), 0.0
	for ra := 70e3; ra <= 200e3; ra += 10 {
		if p := period(ra); p < least {
			least, where = p, ra
		}
	}
	if where <= 71e3 || where >= 199e3 {
		t.Fatalf("no valley to test with: %g", where)
	}
	closeTo(t, "least period", band.Period.Min, least, 1e-6)
	if band.Period.Min > least {
		t.Errorf("the least period %.12g is above %.12g at ra of %g", band.Period.Min, least, where)
	}
	closeTo(t, "largest period", band.Period.Max, max(period(70e3), period(200e3)), 1e-12)
}

func TestACornerThatStallsIsNamedAndLeavesNoNaN(t *testing.T) {
	values := Values{Ohms: exactly(0, 10e3, 0), Farads: optimize.Band{Min: 1e-6, Max: 1e-6}}
	values.Ohms[0], values.Ohms[2] = optimize.Band{Min: 95e3, Max: 105e3}, optimize.Band{Min: 45e3, Max: 49e3}
	circuit := timer.CircuitBySlug("discharge-limb")
	band, err := WorstCase(circuit, ideally(9), &values, timer.Diode{})
	if err != nil {
		t.Fatal(err)
	}
	inf := math.Inf(1)
	if band.Low.Max != inf || band.Period.Max != inf || band.Frequency.Min != 0 || band.Duty.Min != 0 || math.IsInf(band.High.Max, 1) || math.IsInf(band.Low.Min, 1) {
		t.Errorf("%+v", band)
	}
	e, _ := NewEvaluator(circuit, ideally(9), timer.Diode{})
	want := "in the worst case, with ra 95 kΩ, rb 10 kΩ, rd 49 kΩ, supply 9 V: does not oscillate: rd and"
	if got := e.Stalls(&values); !strings.HasPrefix(got, want) {
		t.Errorf("%q", got)
	}
	values.Ohms[2] = optimize.Band{Min: 20e3, Max: 22e3}
	if got := e.Stalls(&values); got != "" {
		t.Errorf("%q", got)
	}
}

func TestTheTimersOwnErrorSpreadsTimesAndNotTheDuty(t *testing.T) {
	around := Surroundings{Device: timer.DeviceByName("TLC555"), SupplyV: optimize.Range{Nominal: 9, Min: 8, Max: 10}, AmbientC: optimize.Exactly(25)}
	values := Values{Ohms: exactly(100e3, 100e3), Farads: optimize.Band{Min: 1e-6, Max: 1e-6}}
	band, err := WorstCase(timer.CircuitBySlug("classic"), around, &values, timer.Diode{})
	if err != nil {
		t.Fatal(err)
	}
	// SLFS043C: 3 % initial error, 0.5 %/V.
	closeTo(t, "largest high", band.High.Max, math.Ln2*200e3*1e-6*1.035, 1e-12)
	closeTo(t, "least high", band.High.Min, math.Ln2*200e3*1e-6*.965, 1e-12)
	if width := band.Duty.Max - band.Duty.Min; width > 1e-3 {
		t.Errorf("the duty spreads by %g", width)
	}
	e, _ := NewEvaluator(timer.CircuitBySlug("classic"), around, timer.Diode{})
	if notes := e.Notes(); len(notes) != 0 {
		t.Errorf("%q", notes)
	}
	around.AmbientC = optimize.Range{Nominal: 25, Min: 10, Max: 40}
	e, _ = NewEvaluator(timer.CircuitBySlug("classic"), around, timer.Diode{})
	if notes := e.Notes(); len(notes) != 1 || !strings.Contains(notes[0], "states no drift with temperature") {
		t.Errorf("%q", notes)
	}
	around.Device = timer.DeviceByName("NE555")
	e, _ = NewEvaluator(timer.CircuitBySlug("classic"), around, timer.Diode{})
	if notes := e.Notes(); len(notes) != 3 || !strings.Contains(notes[0], "initial timing error as typical only") {
		t.Errorf("%q", notes)
	}
}

func TestBandsThatAreNoneAndSuppliesOutsideTheDeviceAreRefused(t *testing.T) {
	classic := timer.CircuitBySlug("classic")
	good := Values{Ohms: exactly(1e3, 1e3), Farads: optimize.Band{Min: 1e-6, Max: 1e-6}}
	for name, test := range map[string]struct {
		change func(*Values, *Surroundings)
		words  string
	}{
		"swapped":   {func(v *Values, _ *Surroundings) { v.Ohms[1] = optimize.Band{Min: 2, Max: 1} }, "rb from 2 to 1 ohm"},
		"negative":  {func(v *Values, _ *Surroundings) { v.Ohms[0] = optimize.Band{Min: -2, Max: 1} }, "ra from -2"},
		"no number": {func(v *Values, _ *Surroundings) { v.Ohms[0] = optimize.Band{Min: math.NaN(), Max: 1} }, "ra from NaN"},
		"endless":   {func(v *Values, _ *Surroundings) { v.Ohms[0].Max = math.Inf(1) }, "ra from"},
		"no farads": {func(v *Values, _ *Surroundings) { v.Farads = optimize.Band{} }, "c from 0 to 0 F"},
		"supply": {func(_ *Values, s *Surroundings) {
			s.Device, s.SupplyV = timer.DeviceByName("NE555"), optimize.Range{Nominal: 15, Min: 13.5, Max: 16.5}
		}, "NE555 works from 4.5 V to 16 V, not 16.5 V"},
	} {
		values, around := good, ideally(9)
		test.change(&values, &around)
		if _, err := WorstCase(classic, around, &values, timer.Diode{}); err == nil || !strings.Contains(err.Error(), test.words) {
			t.Errorf("%s: %v", name, err)
		}
	}
}
