package optimize

// Times is what a circuit does. HighS and LowS are the phases of the running
// oscillator; FirstHighS is its first high time, from an empty capacitor. A
// one-shot has PulseS alone.
type Times struct {
	HighS, LowS, FirstHighS float64
	PulseS                  float64
}

// PeriodS returns the high and the low time together, s.
func (t Times) PeriodS() float64 { return t.HighS + t.LowS }

// FrequencyHz returns the reciprocal of the period, Hz.
func (t Times) FrequencyHz() float64 { return 1 / t.PeriodS() }

// Duty returns the high time over the period.
func (t Times) Duty() float64 { return t.HighS / t.PeriodS() }

// Of returns the measure's value in its unit.
func (t Times) Of(m Measure) float64 {
	switch m {
	case High:
		return t.HighS
	case Low:
		return t.LowS
	case Period:
		return t.PeriodS()
	case Frequency:
		return t.FrequencyHz()
	case Duty:
		return t.Duty()
	}
	return t.PulseS
}

// AllowanceUsed returns the largest share of an allowance that t consumes over
// the requirements.
func (s Spec) AllowanceUsed(t Times) float64 {
	worst := 0.0
	for _, r := range s.Requirements {
		worst = max(worst, r.Used(t.Of(r.Measure)))
	}
	return worst
}

// Band is the smallest and the largest value of a quantity over its spreads.
type Band struct{ Min, Max float64 }

// TimesBand is the worst case of each measure; only those of the circuit's kind
// (oscillator or one-shot) are set.
type TimesBand struct {
	High, Low, Period, Frequency, Duty, FirstHigh Band
	Pulse                                         Band
}

// Of returns the measure's band in its unit.
func (b TimesBand) Of(m Measure) Band {
	return [...]Band{High: b.High, Low: b.Low, Period: b.Period, Frequency: b.Frequency, Duty: b.Duty, Pulse: b.Pulse}[m]
}

// WorstAllowanceUsed returns the largest share of an allowance that any end of
// the band consumes over the requirements.
func (s Spec) WorstAllowanceUsed(b TimesBand) float64 {
	worst := 0.0
	for _, r := range s.Requirements {
		band := b.Of(r.Measure)
		worst = max(worst, r.Used(band.Min), r.Used(band.Max))
	}
	return worst
}
