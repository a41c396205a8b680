package main

import (
	"math"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/network"
)

// The JSON documents of the planning commands. Numbers are SI; a figure that is
// not finite (a phase that never ends) is left out, never written as text.

// number is a finite figure; nil is left out.
type number = *float64

func finite(x float64) number {
	if math.IsInf(x, 0) || math.IsNaN(x) {
		return nil
	}
	return &x
}

// known is a figure that 0 does not state.
func known(x float64) number {
	if x == 0 {
		return nil
	}
	return finite(x)
}

type rangeDocument struct {
	Nominal float64 `json:"nominal"`
	Min     float64 `json:"min"`
	Max     float64 `json:"max"`
}

type requirementDocument struct {
	Measure string  `json:"measure"`
	Target  float64 `json:"target"`
	Min     float64 `json:"min"`
	Max     float64 `json:"max"`
}

type specDocument struct {
	Requirements []requirementDocument `json:"requirements"`
	SupplyV      rangeDocument         `json:"supply_v"`
	AmbientC     rangeDocument         `json:"ambient_c"`
	Circuits     []string              `json:"circuits,omitempty"`
	Timers       []string              `json:"timers,omitempty"`
	PartsEach    int                   `json:"parts_each"`
	PartsC       int                   `json:"parts_c"`
	Boards       int64                 `json:"boards"`
	Basis        string                `json:"basis"`
	Prefer       string                `json:"prefer"`
	Resolution   float64               `json:"resolution"`
	LoadA        float64               `json:"load_a"`
	ControlV     number                `json:"control_v,omitempty"`
	TimeLimitS   number                `json:"time_limit_s,omitempty"`
}

func documentOfSpec(s optimize.Spec) specDocument {
	d := specDocument{
		Requirements: []requirementDocument{},
		SupplyV:      rangeDocument(s.Supply), AmbientC: rangeDocument(s.Ambient),
		Circuits: s.Circuits, Timers: s.Timers,
		PartsEach: s.PartsEach, PartsC: s.PartsC, Boards: s.Boards,
		Basis: s.Basis.String(), Prefer: s.Prefer.String(), Resolution: s.Resolution,
		LoadA: s.LoadA, ControlV: known(s.ControlV), TimeLimitS: known(s.TimeLimit.Seconds()),
	}
	for _, r := range s.Requirements {
		d.Requirements = append(d.Requirements, requirementDocument{r.Measure.String(), r.Target, r.Min, r.Max})
	}
	return d
}

type nodeDocument struct {
	Lot        inventory.LotID `json:"lot,omitempty"`
	Value      number          `json:"value,omitempty"`
	PartNumber string          `json:"part_number,omitempty"`
	Bin        string          `json:"bin,omitempty"`
	Series     []nodeDocument  `json:"series,omitempty"`
	Parallel   []nodeDocument  `json:"parallel,omitempty"`
}

func documentOfNode(n optimize.Network) nodeDocument {
	switch n.Operator {
	case optimize.Series:
		return nodeDocument{Series: documentsOfNodes(n.Members)}
	case optimize.Parallel:
		return nodeDocument{Parallel: documentsOfNodes(n.Members)}
	}
	d := nodeDocument{Lot: n.Lot.ID, Bin: n.Lot.Bin}
	if n.Lot.Part.Kind.Unit() == "" {
		d.PartNumber = n.Lot.Part.PartNumber
	} else {
		d.Value = finite(n.Lot.Value())
	}
	return d
}

func documentsOfNodes(members []optimize.Network) []nodeDocument {
	nodes := make([]nodeDocument, len(members))
	for i, member := range members {
		nodes[i] = documentOfNode(member)
	}
	return nodes
}

type networkDocument struct {
	Position string       `json:"position"`
	Value    number       `json:"value,omitempty"`
	Unit     string       `json:"unit,omitempty"`
	Count    int          `json:"count"`
	Text     string       `json:"text"`
	Tree     nodeDocument `json:"tree"`
}

type timesDocument struct {
	HighS       number `json:"high_s,omitempty"`
	LowS        number `json:"low_s,omitempty"`
	PeriodS     number `json:"period_s,omitempty"`
	FrequencyHz number `json:"frequency_hz,omitempty"`
	Duty        number `json:"duty,omitempty"`
	FirstHighS  number `json:"first_high_s,omitempty"`
	PulseS      number `json:"pulse_s,omitempty"`
}

func documentOfTimes(t optimize.Times, oneShot bool) timesDocument {
	if oneShot {
		return timesDocument{PulseS: finite(t.PulseS)}
	}
	d := timesDocument{HighS: finite(t.HighS), LowS: finite(t.LowS), FirstHighS: finite(t.FirstHighS)}
	if d.HighS != nil && d.LowS != nil { // it oscillates
		d.PeriodS, d.FrequencyHz, d.Duty = finite(t.PeriodS()), finite(t.FrequencyHz()), finite(t.Duty())
	}
	return d
}

// bandDocument leaves out an end that is not finite: a phase that in some corner
// never ends has no largest time.
type bandDocument struct {
	Min number `json:"min,omitempty"`
	Max number `json:"max,omitempty"`
}

type timesBandDocument struct {
	HighS       *bandDocument `json:"high_s,omitempty"`
	LowS        *bandDocument `json:"low_s,omitempty"`
	PeriodS     *bandDocument `json:"period_s,omitempty"`
	FrequencyHz *bandDocument `json:"frequency_hz,omitempty"`
	Duty        *bandDocument `json:"duty,omitempty"`
	FirstHighS  *bandDocument `json:"first_high_s,omitempty"`
	PulseS      *bandDocument `json:"pulse_s,omitempty"`
}

func documentOfBand(b optimize.Band) *bandDocument {
	return &bandDocument{finite(b.Min), finite(b.Max)}
}

func documentOfTimesBand(b optimize.TimesBand, oneShot bool) timesBandDocument {
	if oneShot {
		return timesBandDocument{PulseS: documentOfBand(b.Pulse)}
	}
	return timesBandDocument{
		HighS: documentOfBand(b.High), LowS: documentOfBand(b.Low), PeriodS: documentOfBand(b.Period),
		FrequencyHz: documentOfBand(b.Frequency), Duty: documentOfBand(b.Duty), FirstHighS: documentOfBand(b.FirstHigh),
	}
}

type usedDocument struct {
	Nominal   number `json:"nominal,omitempty"`
	WorstCase number `json:"worst_case,omitempty"`
}

type fitDocument struct {
	Rank          int               `json:"rank,omitempty"`
	Circuit       string            `json:"circuit"`
	Timer         string            `json:"timer"`
	TimerLot      inventory.LotID   `json:"timer_lot,omitempty"`
	InverterLot   inventory.LotID   `json:"inverter_lot,omitempty"`
	Parts         int               `json:"parts"`
	Cost          float64           `json:"cost"`
	CostPartial   bool              `json:"cost_partial"`
	Networks      []networkDocument `json:"networks"`
	Nominal       timesDocument     `json:"nominal"`
	WorstCase     timesBandDocument `json:"worst_case"`
	AllowanceUsed usedDocument      `json:"allowance_used"`
	Warnings      []string          `json:"warnings"`
}

// documentOfFit returns the fit as scripts read it; rank 0 is left out.
func documentOfFit(f optimize.Fit, rank int, oneShot bool) fitDocument {
	d := fitDocument{
		Rank: rank, Circuit: f.Circuit, Timer: f.Timer,
		Parts: f.Parts, Cost: f.Cost.Float(), CostPartial: f.CostPartial,
		Networks:      []networkDocument{},
		Nominal:       documentOfTimes(f.Nominal, oneShot),
		WorstCase:     documentOfTimesBand(f.WorstCase, oneShot),
		AllowanceUsed: usedDocument{finite(f.UsedNominal), finite(f.UsedWorst)},
		Warnings:      append([]string{}, f.Warnings...),
	}
	if f.TimerLot != nil {
		d.TimerLot = f.TimerLot.ID
	}
	if f.Inverter != nil {
		d.InverterLot = f.Inverter.ID
	}
	for _, placed := range f.Networks {
		n := networkDocument{
			Position: placed.Position, Unit: placed.Kind.Unit(), Count: placed.Count,
			Text: network.Text(placed.Network), Tree: documentOfNode(placed.Network),
		}
		if n.Unit != "" {
			n.Value = finite(placed.Network.Value)
		}
		d.Networks = append(d.Networks, n)
	}
	return d
}

type networksDocument struct {
	Resistor  int `json:"resistor"`
	Capacitor int `json:"capacitor"`
}

type searchDocument struct {
	Proven   bool              `json:"proven"`
	Bound    number            `json:"bound,omitempty"`
	ElapsedS float64           `json:"elapsed_s"`
	Networks *networksDocument `json:"networks,omitempty"`
}

func documentOfSearch(s optimize.Search) searchDocument {
	d := searchDocument{Proven: s.Proven, ElapsedS: s.Elapsed.Seconds()}
	if !s.Proven {
		d.Bound = finite(s.Bound)
	}
	if s.Resistor > 0 || s.Capacitor > 0 {
		d.Networks = &networksDocument{s.Resistor, s.Capacitor}
	}
	return d
}
