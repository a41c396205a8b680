package main

import (
	"context"
	"errors"
	"fmt"
	"strings"
	"time"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
	"tickdrawer/optimize/allot"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/search"
)

// specFlags are the flags that state what a stage must do.
type specFlags struct {
	measures          map[optimize.Measure]*string
	supply, ambient   string
	circuits, timers  []string
	partsEach, partsC int
	boards            int64
	basis, prefer     string
	show              int
	timeLimit         time.Duration
	resolution        float64
	load, control     string
}

func (s *specFlags) add(f *pflag.FlagSet) {
	s.measures = map[optimize.Measure]*string{}
	for _, flag := range []struct {
		measure optimize.Measure
		use     string
	}{
		{optimize.Frequency, "frequency with its allowance, `HZ` such as 420Hz±2%"},
		{optimize.Period, "period with its allowance, `TIME` such as 4s±3% or 3.9s..4.1s"},
		{optimize.Duty, "high time over period, `SHARE` such as 50%±1pt (points of duty)"},
		{optimize.High, "high time of the output, `TIME`"},
		{optimize.Low, "low time of the output, `TIME`"},
		{optimize.Pulse, "pulse of a one-shot, `TIME`"},
	} {
		s.measures[flag.measure] = f.String(flag.measure.String(), "", flag.use)
	}
	f.StringVar(&s.supply, "supply", allot.DefaultSupply, "supply with its range, `VOLT` such as 9V±10%")
	f.StringVar(&s.ambient, "ambient", allot.DefaultAmbient, "ambient temperature, `RANGE` such as 10C..40C")
	f.StringSliceVar(&s.circuits, "circuit", nil, "only these circuits, `SLUG`[,SLUG]")
	f.StringSliceVar(&s.timers, "timer", nil, "only these timers, `NAME`[,NAME]; ideal is the perfect one")
	f.IntVar(&s.partsEach, "parts-each", allot.DefaultPartsEach, "most parts in one position, `N`")
	f.IntVar(&s.partsC, "parts-c", 0, "most parts in the capacitor position, `N` (else as --parts-each)")
	f.Int64Var(&s.boards, "boards", 1, "boards of the same fit that the stock must cover, `N`")
	f.StringVar(&s.basis, "basis", optimize.Nominal.String(), "judge by `BASIS`: nominal or worst-case")
	f.StringVar(&s.prefer, "prefer", optimize.PreferParts.String(), "list first by `WHAT`: parts, closeness, cost or spare")
	f.IntVar(&s.show, "show", 10, "most fits listed, `N`; 0: all")
	f.DurationVar(&s.timeLimit, "time-limit", 0, "stop the search after this `TIME`, such as 5s, with what was found")
	f.Float64Var(&s.resolution, "resolution", allot.DefaultResolution, "least `SHARE` of the allowance that a part or cost more must gain; 0: the exact front")
	f.StringVar(&s.load, "load", "", "`CURRENT` that the output must deliver, such as 20mA")
	f.StringVar(&s.control, "control", "", "`VOLT` that drives the control pin, where something does")
}

// mostPartsEach is the most parts a position that the tables are built for.
const mostPartsEach = 4

// spec returns the flags as a spec; what is wrong names its flag.
func (s *specFlags) spec() (optimize.Spec, error) {
	spec := optimize.Spec{
		Circuits: s.circuits, Timers: s.timers, PartsEach: s.partsEach, PartsC: s.partsC, Boards: s.boards,
		Show: s.show, Resolution: s.resolution, TimeLimit: s.timeLimit,
	}
	var requirements []optimize.Requirement
	for _, m := range optimize.Measures() {
		if *s.measures[m] == "" {
			continue
		}
		requirement, err := optimize.ParseRequirement(m, *s.measures[m])
		if err != nil {
			return spec, flagError(m.String(), err)
		}
		requirements = append(requirements, requirement)
	}
	if len(requirements) == 0 {
		return spec, usagef("nothing is asked: state --frequency, --period, --duty, --high, --low or --pulse")
	}
	var err error
	if spec.Requirements, err = optimize.NewRequirements(requirements); err != nil {
		return spec, usageError{err}
	}
	if spec.Supply, spec.Ambient, err = surroundings(s.supply, s.ambient); err != nil {
		return spec, err
	}
	if spec.Basis, err = optimize.ParseBasis(s.basis); err != nil {
		return spec, flagError("basis", err)
	}
	if spec.Prefer, err = optimize.ParsePreference(s.prefer); err != nil {
		return spec, flagError("prefer", err)
	}
	if spec.LoadA, err = magnitude("load", s.load, "A"); err != nil {
		return spec, err
	}
	if spec.ControlV, err = magnitude("control", s.control, "V"); err != nil {
		return spec, err
	}
	if spec.PartsC == 0 {
		spec.PartsC = spec.PartsEach
	}
	switch {
	case spec.PartsEach < 1 || spec.PartsEach > mostPartsEach:
		return spec, usagef("--parts-each is 1 to %d, not %d", mostPartsEach, spec.PartsEach)
	case spec.PartsC < 1 || spec.PartsC > mostPartsEach:
		return spec, usagef("--parts-c is 1 to %d, not %d", mostPartsEach, spec.PartsC)
	case spec.Boards < 1 || spec.Boards > 1_000_000:
		return spec, usagef("--boards is 1 to 1000000, not %d", spec.Boards)
	case spec.Show < 0:
		return spec, usagef("--show is 0 (all) or more, not %d", spec.Show)
	case !(spec.Resolution >= 0 && spec.Resolution < 1):
		return spec, usagef("--resolution is a share from 0 to below 1, not %g", spec.Resolution)
	case spec.TimeLimit < 0:
		return spec, usagef("--time-limit is a time above 0 such as 5s, not %s", spec.TimeLimit)
	}
	return spec, nil
}

// surroundings reads the supply and the ambient flag.
func surroundings(supplyText, ambientText string) (supply, ambient optimize.Range, err error) {
	if supply, err = optimize.ParseRange("V", supplyText); err != nil {
		return supply, ambient, flagError("supply", err)
	}
	if ambient, err = optimize.ParseRange("C", ambientText); err != nil {
		return supply, ambient, flagError("ambient", err)
	}
	return supply, ambient, nil
}

// magnitude reads a flag's quantity; "" is 0.
func magnitude(flag, text, unit string) (float64, error) {
	if text == "" {
		return 0, nil
	}
	x, err := marking.ParseMagnitude(text, unit)
	if err != nil {
		return 0, flagError(flag, err)
	}
	if x < 0 {
		return 0, usagef("--%s is not negative", flag)
	}
	return x, nil
}

// flagError returns wrong usage of the flag, with a caret below the place where
// the text cannot be read.
func flagError(flag string, err error) error {
	var at *marking.Error
	if !errors.As(err, &at) || at.Column < 1 || at.Column > len(at.Text)+1 || strings.ContainsAny(at.Text, "\n\t") {
		return usageError{fmt.Errorf("--%s: %w", flag, err)}
	}
	lead := fmt.Sprintf("--%s ", flag)
	indent := strings.Repeat(" ", len(lead)+len([]rune(at.Text[:at.Column-1])))
	return usagef("--%s: %s\n  %s%s\n  %s^", flag, at.Message, lead, at.Text, indent)
}

func (p *program) fitCommand() *cobra.Command {
	var flags specFlags
	command := &cobra.Command{
		Use:   "fit",
		Short: "Find the timer networks in the drawer that meet a timing",
		Long: `Fit searches every series and parallel network of stocked parts, in every position
of every circuit that suits, for the timing you state. It lists the fits that
nothing beats in parts, closeness and cost: one more part stands there only if it
brings the board closer.

A quantity without an allowance has ±2 %, a duty ±1 point. Status 3: nothing in
the drawer meets it.`,
		Example: `  tickdrawer fit --frequency 420Hz±5% --supply 9V±10% --boards 12
  tickdrawer fit --pulse 10s --parts-each 1 --prefer cost`,
		Args: arguments(),
		RunE: func(command *cobra.Command, _ []string) error {
			spec, err := flags.spec()
			if err != nil {
				return err
			}
			return p.runFit(command.Context(), spec)
		},
	}
	flags.add(command.Flags())
	command.Flags().SortFlags = false
	return command
}

type unsuitedDocument struct {
	Circuit string `json:"circuit,omitempty"`
	Timer   string `json:"timer,omitempty"`
	Why     string `json:"why"`
}

type fitsDocument struct {
	Spec            specDocument       `json:"spec"`
	Fits            []fitDocument      `json:"fits"`
	Front           int                `json:"front"` // fits on the front, of which some are listed
	TimersUnstocked bool               `json:"timers_unstocked"`
	Unsuited        []unsuitedDocument `json:"unsuited"`
	Search          searchDocument     `json:"search"`
}

func (p *program) runFit(ctx context.Context, spec optimize.Spec) error {
	drawer, err := p.openDrawer(ctx, false)
	if err != nil {
		return err
	}
	defer drawer.Close()
	lots, err := drawer.Lots(ctx)
	if err != nil {
		return err
	}
	front, err := search.Run(ctx, spec, lots)
	if err != nil {
		if inventory.ReasonOf(err) == inventory.Invalid {
			return usageError{err}
		}
		return err
	}
	listed := front.Fits
	if spec.Show > 0 && len(listed) > spec.Show {
		listed = listed[:spec.Show]
	}
	if p.json {
		document := fitsDocument{
			Spec: documentOfSpec(spec), Fits: []fitDocument{}, Front: len(front.Fits),
			TimersUnstocked: front.TimersUnstocked, Unsuited: []unsuitedDocument{}, Search: documentOfSearch(front.Search),
		}
		for i, f := range listed {
			document.Fits = append(document.Fits, documentOfFit(f, i+1, spec.OneShot()))
		}
		for _, u := range front.Unsuited {
			document.Unsuited = append(document.Unsuited, unsuitedDocument(u))
		}
		err = p.printJSON(document)
	} else {
		p.printFront(spec, front, listed)
	}
	if err == nil && len(front.Fits) == 0 {
		err = errUnmet
	}
	return err
}

func (p *program) printFront(spec optimize.Spec, front optimize.Front, listed []optimize.Fit) {
	p.printf("wanted: %s", describeSpec(spec))
	p.printf("searched: %d resistor and %d capacitor networks in %s", front.Search.Resistor, front.Search.Capacitor, front.Search.Elapsed.Round(time.Millisecond))
	if front.TimersUnstocked {
		p.printf("no timer is in the drawer: every known family was tried")
	}
	for _, u := range front.Unsuited {
		p.printf("left out: %s: %s", strings.Join(strings.Fields(u.Circuit+" "+u.Timer), " with "), u.Why)
	}
	p.printf("")
	if len(listed) == 0 {
		if front.Search.Proven {
			p.printf("nothing in the drawer meets it: widen an allowance, or allow more parts with --parts-each")
		} else {
			p.printf("nothing was found before the search was stopped")
		}
		return
	}
	p.printFitTable(spec, listed)
	for i, f := range listed {
		p.printf("")
		p.printFit(fmt.Sprintf("fit %d", i+1), f, spec)
	}
	p.printf("")
	if left := len(front.Fits) - len(listed); left > 0 {
		p.printf("%s more on the front: --show 0 lists all", counted(left, "fit"))
	}
	if front.Search.Proven {
		p.printf("proven: no other fit in the drawer meets it with fewer parts, closer or cheaper")
	} else {
		p.printf("not proven: the search was stopped; a fit that was missed could use as little as %s of the allowance", marking.FormatPercent(front.Search.Bound))
	}
}

// describeSpec returns the spec in a line.
func describeSpec(spec optimize.Spec) string {
	var words []string
	for _, r := range spec.Requirements {
		words = append(words, fmt.Sprintf("%s %s (%s to %s)", r.Measure, r.Measure.Format(r.Target), r.Measure.Format(r.Min), r.Measure.Format(r.Max)))
	}
	words = append(words, "supply "+describeRange(spec.Supply, marking.FormatVolts), describeRange(spec.Ambient, marking.FormatCelsius))
	if spec.Boards > 1 {
		words = append(words, counted(spec.Boards, "board"))
	}
	if spec.Basis != optimize.Nominal {
		words = append(words, "judged by the worst case")
	}
	return strings.Join(words, ", ")
}

func describeRange(r optimize.Range, format func(float64) string) string {
	if r.Min == r.Max {
		return format(r.Nominal)
	}
	return fmt.Sprintf("%s to %s", format(r.Min), format(r.Max))
}

func (p *program) printFitTable(spec optimize.Spec, fits []optimize.Fit) {
	columns := []column{{title: "FIT", right: true}, {title: "PARTS", right: true}, {title: "ALLOWANCE USED", right: true}, {title: "AT WORST", right: true}, {title: "COST", right: true}, {title: "CIRCUIT"}, {title: "TIMER"}}
	measures := shownMeasures(spec)
	for _, m := range measures {
		columns = append(columns, column{title: strings.ToUpper(m.String()), right: true})
	}
	var rows [][]string
	for i, f := range fits {
		row := []string{
			fmt.Sprint(i + 1), fmt.Sprint(f.Parts), marking.FormatPercent(f.UsedNominal), describeWorst(f.UsedWorst), describeCost(f), f.Circuit, f.Timer,
		}
		for _, m := range measures {
			row = append(row, m.Format(f.Nominal.Of(m)))
		}
		rows = append(rows, row)
	}
	p.printTable(columns, rows)
}

// describeCost returns what the fit's parts cost, as far as it is known.
func describeCost(f optimize.Fit) string {
	switch {
	case !f.CostPartial:
		return formatCost(f.Cost)
	case f.Cost == 0:
		return "not known"
	}
	return "from " + formatCost(f.Cost)
}

// describeWorst returns the share of the allowance that the worst case uses.
func describeWorst(used float64) string {
	if finite(used) == nil {
		return "stops"
	}
	if used >= 10 {
		return "over 1000 %"
	}
	return marking.FormatPercent(used)
}

// shownMeasures returns the measures whose figures a table shows.
func shownMeasures(spec optimize.Spec) []optimize.Measure {
	if spec.OneShot() {
		return []optimize.Measure{optimize.Pulse}
	}
	for _, r := range spec.Requirements {
		if r.Measure == optimize.Frequency {
			return []optimize.Measure{optimize.High, optimize.Low, optimize.Frequency, optimize.Duty}
		}
	}
	return []optimize.Measure{optimize.High, optimize.Low, optimize.Period, optimize.Duty}
}

// printFit prints what goes into each position, the worst case and warnings.
func (p *program) printFit(name string, f optimize.Fit, spec optimize.Spec) {
	p.printf("%s: %s with %s", name, f.Circuit, f.Timer)
	for _, placed := range f.Networks {
		p.printf("  %-3s %s", placed.Position, describePlaced(placed))
	}
	if f.Inverter != nil {
		p.printf("  %s", describeTaken("inverter", *f.Inverter))
	}
	if f.TimerLot != nil {
		p.printf("  %s", describeTaken("timer", *f.TimerLot))
	}
	for _, r := range spec.Requirements {
		band := f.WorstCase.Of(r.Measure)
		p.printf("  %s %s, in the worst case %s", r.Measure, r.Measure.Format(f.Nominal.Of(r.Measure)), describeBand(r.Measure, band))
	}
	for _, warning := range f.Warnings {
		p.printf("  mind: %s", warning)
	}
}

func describeTaken(what string, lot inventory.Lot) string {
	return fmt.Sprintf("%s %s (lot %d%s)", what, lot.Part.Name(), lot.ID, inBin(lot))
}

// describePlaced returns a position's network with its value, lots and bins.
func describePlaced(placed optimize.Placed) string {
	var lots []string
	placed.Network.Lots(func(lot inventory.Lot) {
		lots = append(lots, fmt.Sprintf("%s (lot %d%s)", lot.Part.Name(), lot.ID, inBin(lot)))
	})
	text := strings.Join(lots, ", ")
	if placed.Network.Operator != optimize.Leaf {
		text = fmt.Sprintf("%s = %s: %s", network.Text(placed.Network), formatValue(placed.Kind, placed.Network.Value), text)
	}
	if placed.Count > 1 {
		text = fmt.Sprintf("%d × %s", placed.Count, text)
	}
	return text
}

func inBin(lot inventory.Lot) string {
	if lot.Bin == "" {
		return ""
	}
	return ", bin " + lot.Bin
}

// describeBand writes a worst case; an end that is not finite is named.
func describeBand(m optimize.Measure, b optimize.Band) string {
	if finite(b.Max) == nil {
		return "it may stop"
	}
	return m.Format(b.Min) + " to " + m.Format(b.Max)
}
