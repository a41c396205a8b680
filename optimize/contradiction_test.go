package optimize

import (
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
)

// required returns the requirements that pairs of a measure and a text write.
func required(t *testing.T, pairs ...any) []Requirement {
	t.Helper()
	var requirements []Requirement
	for i := 0; i < len(pairs); i += 2 {
		r, err := ParseRequirement(pairs[i].(Measure), pairs[i+1].(string))
		if err != nil {
			t.Fatal(err)
		}
		requirements = append(requirements, r)
	}
	return requirements
}

func TestRequirementsThatCanBeMetTogetherAreAccepted(t *testing.T) {
	for name, requirements := range map[string][]Requirement{
		"one":                          required(t, Frequency, "420Hz"),
		"pulse":                        required(t, Pulse, "1s"),
		"isophase":                     required(t, Period, "4s±3%", Duty, "50%±1pt"),
		"flashing":                     required(t, High, "0.5s±3%", Period, "5s±3%"),
		"all five":                     required(t, High, "2s", Low, "2s", Period, "4s", Frequency, "0.25Hz", Duty, "50%"),
		"duty alone of the whole":      required(t, Duty, "0.001..0.999"),
		"period and frequency touch":   required(t, Period, "1s..2s", Frequency, "1Hz..2Hz"),
		"phases touch the period":      required(t, High, "1s..2s", Low, "1s..2s", Period, "4s..5s"),
		"decimal ends touch":           required(t, High, "0.7s..0.8s", Low, "0.1s..0.2s", Period, "1s..1.1s"),
		"nanoseconds and a low duty":   required(t, Period, "100ns", Duty, "2%"),
		"high close below period":      required(t, High, "4s±1%", Period, "4s±1%"),
		"duty at the edge of high/low": required(t, High, "1s±1%", Low, "1s±1%", Duty, "50.4%..60%"),
	} {
		if err := CheckRequirements(requirements); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestRequirementsThatExcludeEachOtherAreNamed(t *testing.T) {
	for _, c := range []struct {
		name         string
		requirements []Requirement
		with         []string
		without      string
	}{
		{"none", nil, []string{"nothing is asked for", "frequency"}, "exclude"},
		{"twice", required(t, High, "1s", High, "2s"), []string{"high is stated twice"}, "exclude"},
		{"pulse first", required(t, Pulse, "1s", Duty, "50%"), []string{"pulse", "duty"}, "exclude"},
		{"pulse last", required(t, High, "1s", Pulse, "1s"), []string{"pulse", "high"}, "exclude"},
		{"high and period", required(t, High, "4s±1%", Period, "1s±1%"), []string{"high 3.96 s to 4.04 s and period 990 ms to 1.01 s exclude each other"}, ""},
		{"low and frequency", required(t, Low, "1s", Frequency, "2Hz"), []string{"low", "and frequency", "exclude each other"}, ""},
		{"period and frequency", required(t, Period, "1s±1%", Frequency, "2Hz"), []string{"period", "and frequency"}, ""},
		{"two of four", required(t, High, "1s", Low, "1s", Period, "2s", Frequency, "1kHz"), []string{"exclude each other"}, ", "},
		{"three", required(t, High, "1s±1%", Low, "1s±1%", Duty, "80%"), []string{"high 990 ms to 1.01 s, low 990 ms to 1.01 s and duty 79 % to 81 %", "give a duty of 49.5 % to 50.5 %"}, ""},
		{"phases and period", required(t, High, "1s±1%", Low, "1s±1%", Period, "3s±1%"), []string{"give a period of 1.98 s to 2.02 s"}, ""},
		{"period, duty and high", required(t, High, "3s±1%", Period, "4s±1%", Duty, "50%"), []string{"high", "period", "duty"}, ""},
		{"just apart", required(t, High, "1s±1%", Low, "1s±1%", Duty, "50.6%..60%"), []string{"duty"}, ""},
	} {
		err := CheckRequirements(c.requirements)
		if inventory.ReasonOf(err) != inventory.Invalid {
			t.Errorf("%s: %v, want an invalid request", c.name, err)
			continue
		}
		for _, words := range c.with {
			if !strings.Contains(err.Error(), words) {
				t.Errorf("%s: %q lacks %q", c.name, err, words)
			}
		}
		if c.without != "" && strings.Contains(err.Error(), c.without) {
			t.Errorf("%s: %q holds %q", c.name, err, c.without)
		}
	}
}

func TestNewRequirementsSortsACopy(t *testing.T) {
	given := required(t, Duty, "50%", High, "2s")
	before := slices.Clone(given)
	sorted, err := NewRequirements(given)
	if err != nil || sorted[0].Measure != High || sorted[1].Measure != Duty {
		t.Errorf("%v, %v", sorted, err)
	}
	if !slices.Equal(given, before) {
		t.Error("the given order changed")
	}
}

// Requirements around the times of one oscillator are met by it, so they are
// never refused.
func TestRequirementsAroundRealTimesAreNeverRefused(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		times := drawTimes(t, "")
		var requirements []Requirement
		for _, m := range []Measure{High, Low, Period, Frequency, Duty} {
			if rapid.Bool().Draw(t, m.String()) {
				x := times.Of(m)
				below, above := rapid.Float64Range(0, 0.5).Draw(t, "below"), rapid.Float64Range(0, 0.5).Draw(t, "above")
				requirements = append(requirements, Requirement{m, Allowance{x, x * (1 - below), x * (1 + above)}})
			}
		}
		if len(requirements) == 0 {
			return
		}
		if err := CheckRequirements(requirements); err != nil {
			t.Fatalf("%+v: %v", times, err)
		}
	})
}

// A refusal is right: no sampled pair of times meets the requirements, and those
// accepted have a corner that meets each of them.
func TestRefusalsAreRight(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var requirements []Requirement
		for _, m := range []Measure{High, Low, Period, Frequency, Duty} {
			if rapid.Bool().Draw(t, m.String()) {
				x := drawTimes(t, m.String()).Of(m)
				spread := rapid.Float64Range(0.001, 0.3).Draw(t, "spread")
				requirements = append(requirements, Requirement{m, Allowance{x, x * (1 - spread), min(x*(1+spread), map[bool]float64{true: 0.9999, false: math.Inf(1)}[m == Duty])}})
			}
		}
		if len(requirements) == 0 {
			return
		}
		spec := Spec{Requirements: requirements}
		if CheckRequirements(requirements) == nil {
			corners := vertices(requirements)
			if len(corners) == 0 {
				t.Fatal("accepted without a corner")
			}
			for _, corner := range corners {
				h, _ := corner.high.Float64()
				l, _ := corner.low.Float64()
				for _, r := range requirements {
					if x := (Times{HighS: h, LowS: l}).Of(r.Measure); x < r.Min*(1-1e-9) || x > r.Max*(1+1e-9) {
						t.Fatalf("corner %v, %v has %v of %v", h, l, x, r)
					}
				}
			}
			return
		}
		for range 100 {
			if times := drawTimes(t, "sample"); spec.AllowanceUsed(times) <= 1 {
				t.Fatalf("refused, but %+v meets %v", times, requirements)
			}
		}
	})
}

func drawTimes(t *rapid.T, label string) Times {
	phase := rapid.Float64Range(0.5, 4)
	return Times{HighS: phase.Draw(t, label+" high"), LowS: phase.Draw(t, label+" low")}
}

func TestMeasuresAreWrittenForPeople(t *testing.T) {
	for m, want := range map[Measure]string{High: "500 ms", Frequency: "0.5 Hz", Duty: "50 %"} {
		if got := m.Format(0.5); got != want {
			t.Errorf("%v: %q, want %q", m, got, want)
		}
	}
}
