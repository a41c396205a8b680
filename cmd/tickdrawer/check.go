package main

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
	"tickdrawer/optimize/allot"
	"tickdrawer/optimize/network"
	"tickdrawer/optimize/spread"
	"tickdrawer/optimize/timer"
)

type checkFlags struct {
	circuit, timer, supply, ambient, load, control, netlist string
}

func (p *program) checkCommand() *cobra.Command {
	var flags checkFlags
	command := &cobra.Command{
		Use:   "check POSITION=NETWORK...",
		Short: "Say what a given network does",
		Long: `Check computes the times of a circuit with the parts you name. A position takes a
value (ra=10k), perhaps with a tolerance (c=4u7±10%), or a network: + in series,
| in parallel, brackets (ra=(10k+4k7)|22k). A diode is d=PART_NUMBER, or its model
at 27 °C: d=saturation_a=2.52n,ideality=1.752,series_ohm=0.568.

Circuits and their positions:
` + circuitList() + `
Status 3: the circuit does not run with these parts; the reason is printed.`,
		Example: `  tickdrawer check --circuit classic --timer NE555 --supply 9V ra=10k±1% rb=100k±1% c=4u7±10%
  tickdrawer check --circuit diode-bypass --timer ideal --supply 5V ra=10k rb=47k c=100n d=1N4148 --netlist bypass.cir`,
		Args: func(_ *cobra.Command, given []string) error {
			if len(given) == 0 {
				return usagef("no part is named: write positions such as ra=10k rb=100k c=4u7")
			}
			return nil
		},
		RunE: func(command *cobra.Command, given []string) error {
			return p.runCheck(command.Context(), flags, given)
		},
	}
	f := command.Flags()
	f.StringVar(&flags.circuit, "circuit", "", "the circuit, `SLUG`")
	f.StringVar(&flags.timer, "timer", timer.Ideal.Name, "the timer, `NAME`; ideal is the perfect one")
	f.StringVar(&flags.supply, "supply", allot.DefaultSupply, "supply with its range, `VOLT` such as 9V±10%")
	f.StringVar(&flags.ambient, "ambient", allot.DefaultAmbient, "ambient temperature, `RANGE` such as 10C..40C")
	f.StringVar(&flags.load, "load", "", "`CURRENT` that the output delivers, such as 20mA")
	f.StringVar(&flags.control, "control", "", "`VOLT` that drives the control pin, where something does")
	f.StringVar(&flags.netlist, "netlist", "", "write a SPICE netlist to the `FILE`")
	f.SortFlags = false
	return command
}

// circuitList names every circuit with its positions, a line each.
func circuitList() string {
	text := ""
	for _, c := range timer.Circuits() {
		text += fmt.Sprintf("  %-17s %-11s %s\n", c.Slug, strings.Join(positionsOf(c), " "), c.Title)
	}
	return text
}

func positionsOf(c *timer.Circuit) []string {
	positions := append(slices.Clone(c.Resistors), "c")
	if c.Diodes > 0 {
		positions = append(positions, "d")
	}
	return positions
}

// checked is a circuit with everything that check computes with.
type checked struct {
	circuit         *timer.Circuit
	device          *timer.Device
	supply, ambient optimize.Range
	loadA, controlV float64
	conditions      timer.Conditions
	placed          []optimize.Placed
	values          timer.Values
}

func (p *program) runCheck(ctx context.Context, flags checkFlags, given []string) error {
	c, err := p.readCheck(ctx, flags, given)
	if err != nil {
		return err
	}
	if c.conditions, err = c.device.Under(c.supply.Nominal, c.ambient.Nominal, c.loadA, c.controlV); err != nil {
		return err
	}
	fit, runs, err := c.fit()
	if err != nil {
		return err
	}
	if flags.netlist != "" {
		file, err := newReplacement(flags.netlist)
		if err != nil {
			return err
		}
		if err := file.finish([]byte(timer.Netlist(c.circuit, &c.conditions, c.placed, c.values.Diode))); err != nil {
			return err
		}
	}
	if p.json {
		document := struct {
			fitDocument
			Runs    bool   `json:"runs"`
			Netlist string `json:"netlist,omitempty"`
		}{documentOfFit(fit, 0, c.circuit.OneShot), runs, flags.netlist}
		document.AllowanceUsed = usedDocument{} // nothing was asked for
		if err := p.printJSON(document); err != nil {
			return err
		}
	} else {
		p.printCheck(c, fit, runs)
		if flags.netlist != "" {
			p.printf("netlist: %s; run it with: ngspice -b %s", flags.netlist, flags.netlist)
		}
	}
	if !runs {
		return errUnmet
	}
	return nil
}

func (p *program) readCheck(ctx context.Context, flags checkFlags, given []string) (*checked, error) {
	c := &checked{circuit: timer.CircuitBySlug(flags.circuit), device: timer.DeviceByName(flags.timer)}
	if flags.circuit == "" {
		return nil, usagef("--circuit is missing: name one of %s", strings.Join(circuitSlugs(), ", "))
	}
	if c.circuit == nil {
		return nil, usagef("no circuit is called %q: known are %s", flags.circuit, strings.Join(circuitSlugs(), ", "))
	}
	if c.device == nil {
		var names []string
		for _, device := range timer.Devices() {
			names = append(names, device.Name)
		}
		return nil, usagef("no timer is called %q: known are %s", flags.timer, strings.Join(names, ", "))
	}
	var err error
	if c.supply, c.ambient, err = surroundings(flags.supply, flags.ambient); err != nil {
		return nil, err
	}
	if c.loadA, err = magnitude("load", flags.load, "A"); err != nil {
		return nil, err
	}
	if c.controlV, err = magnitude("control", flags.control, "V"); err != nil {
		return nil, err
	}
	texts := map[string]string{}
	for _, argument := range given {
		position, text, found := strings.Cut(argument, "=")
		position = strings.ToLower(strings.TrimSpace(position))
		if !found || !slices.Contains(positionsOf(c.circuit), position) {
			return nil, usagef("%q names no part of %s: its positions are %s", argument, c.circuit.Slug, strings.Join(positionsOf(c.circuit), " "))
		}
		if _, twice := texts[position]; twice {
			return nil, usagef("%s is named twice", position)
		}
		texts[position] = text
	}
	for _, position := range positionsOf(c.circuit) {
		text, named := texts[position]
		if !named {
			return nil, usagef("%s of %s is missing: name %s", position, c.circuit.Slug, strings.Join(positionsOf(c.circuit), " "))
		}
		if err := c.place(ctx, p, position, text); err != nil {
			return nil, err
		}
	}
	return c, nil
}

func circuitSlugs() []string {
	var slugs []string
	for _, c := range timer.Circuits() {
		slugs = append(slugs, c.Slug)
	}
	return slugs
}

// place reads the network of a position.
func (c *checked) place(ctx context.Context, p *program, position, text string) error {
	if position == "d" {
		part, diode, err := p.diode(ctx, text)
		if err != nil {
			return err
		}
		c.values.Diode = diode
		c.placed = append(c.placed, optimize.Placed{Position: position, Kind: inventory.Diode, Count: c.circuit.Diodes, Network: optimize.Network{Lot: inventory.Lot{Part: part}}})
		return nil
	}
	kind := inventory.Resistor
	if position == "c" {
		kind = inventory.Capacitor
	}
	n, err := network.Parse(kind, text)
	if err != nil {
		return usageError{fmt.Errorf("%s: %w", position, err)}
	}
	if position == "c" {
		c.values.Farads = n.Value
	} else {
		c.values.Ohms[slices.Index(c.circuit.Resistors, position)] = n.Value
	}
	c.placed = append(c.placed, optimize.Placed{Position: position, Kind: kind, Count: 1, Network: n})
	return nil
}

// diode reads a diode: its model, a known part number, or one that the drawer
// holds with its model.
func (p *program) diode(ctx context.Context, text string) (inventory.Part, timer.Diode, error) {
	part := inventory.Part{Kind: inventory.Diode, PartNumber: "MODEL"}
	if !strings.Contains(text, "=") {
		part.PartNumber = text
		if stocked, ok := p.stockedDiode(ctx, text); ok {
			part = stocked
		}
	} else {
		for pair := range strings.SplitSeq(text, ",") {
			field, figure, _ := strings.Cut(pair, "=")
			var into *float64
			unit := ""
			switch strings.ToLower(strings.TrimSpace(field)) {
			case "saturation_a":
				into, unit = &part.SaturationA, "A"
			case "ideality":
				into = &part.Ideality
			case "series_ohm":
				into, unit = &part.SeriesOhm, "ohm"
			default:
				return part, timer.Diode{}, usagef("d: %q is no figure of a diode: they are saturation_a, ideality, series_ohm", strings.TrimSpace(field))
			}
			var err error
			if unit == "ohm" {
				*into, err = marking.ParseOhms(figure)
			} else {
				*into, err = marking.ParseMagnitude(figure, unit)
			}
			if err != nil {
				return part, timer.Diode{}, usageError{fmt.Errorf("d: %s: %w", strings.TrimSpace(field), err)}
			}
		}
	}
	part, err := inventory.NewPart(part)
	if err == nil {
		var diode timer.Diode
		if diode, _, err = timer.DiodeOf(part); err == nil {
			return part, diode, nil
		}
	}
	return part, timer.Diode{}, usageError{fmt.Errorf("d: %w; or write d=saturation_a=2.52n,ideality=1.752,series_ohm=0.568", err)}
}

// stockedDiode returns the drawer's diode of the part number that states its
// model, where there is a drawer.
func (p *program) stockedDiode(ctx context.Context, number string) (inventory.Part, bool) {
	drawer, err := p.openDrawer(ctx, false)
	if err != nil {
		return inventory.Part{}, false
	}
	defer drawer.Close()
	lots, err := drawer.Lots(ctx)
	if err != nil {
		return inventory.Part{}, false
	}
	for _, lot := range lots {
		if lot.Part.Kind == inventory.Diode && strings.EqualFold(lot.Part.PartNumber, number) && lot.Part.SaturationA > 0 {
			return lot.Part, true
		}
	}
	return inventory.Part{}, false
}

// fit returns what the circuit does, and whether it runs.
func (c *checked) fit() (optimize.Fit, bool, error) {
	f := optimize.Fit{Circuit: c.circuit.Slug, Timer: c.device.Name, NeedsInverter: c.circuit.Inverter, Networks: c.placed}
	for _, placed := range c.placed {
		f.Parts += placed.Count * placed.Network.Parts()
	}
	if c.circuit.Inverter {
		f.Parts++
	}
	phases := c.circuit.Phases(&c.conditions, &c.values)
	f.Nominal = optimize.Times{HighS: phases.HighS, LowS: phases.LowS, FirstHighS: c.circuit.FirstHighS(&c.conditions, &c.values)}
	if c.circuit.OneShot {
		f.Nominal = optimize.Times{PulseS: phases.HighS}
	}
	runs := c.circuit.Stalls(&c.conditions, &c.values) == ""
	ratings := timer.RatingsOf(c.circuit, c.placed)
	for _, rail := range timer.Rails(c.circuit, &c.conditions, &c.values, &ratings) {
		text := rail.Text
		if rail.Broken && runs {
			text = "beyond a limit: " + text
		}
		f.Warnings = append(f.Warnings, text)
	}
	around := spread.Surroundings{Device: c.device, SupplyV: c.supply, AmbientC: c.ambient, LoadA: c.loadA, ControlV: c.controlV}
	evaluator, err := spread.NewEvaluator(c.circuit, around, c.values.Diode)
	if err != nil {
		return f, runs, err
	}
	bands := spread.Values{}
	for i := range c.placed {
		placed := &c.placed[i]
		band := spread.NetworkBand(&placed.Network, c.ambient)
		switch {
		case placed.Position == "c":
			bands.Farads = band
		case placed.Kind == inventory.Resistor:
			bands.Ohms[slices.Index(c.circuit.Resistors, placed.Position)] = band
		}
	}
	f.WorstCase = evaluator.Band(&bands)
	if runs {
		if note := spread.UnstatedNote(c.placed); note != "" {
			f.Warnings = append(f.Warnings, note)
		}
		if why := evaluator.Stalls(&bands); why != "" {
			f.Warnings = append(f.Warnings, why)
		}
		f.Warnings = append(f.Warnings, evaluator.Notes()...)
	}
	return f, runs, nil
}

func (p *program) printCheck(c *checked, f optimize.Fit, runs bool) {
	p.printf("%s with %s, supply %s, %s", f.Circuit, f.Timer, describeRange(c.supply, marking.FormatVolts), describeRange(c.ambient, marking.FormatCelsius))
	for _, placed := range f.Networks {
		text := network.Text(placed.Network)
		if placed.Network.Operator != optimize.Leaf {
			text += " = " + formatValue(placed.Kind, placed.Network.Value)
		}
		if placed.Count > 1 {
			text = fmt.Sprintf("%d × %s", placed.Count, text)
		}
		p.printf("  %-3s %s", placed.Position, text)
	}
	p.printf("")
	if runs {
		var rows [][]string
		row := func(name string, nominal float64, m optimize.Measure, band optimize.Band) {
			rows = append(rows, []string{name, m.Format(nominal), describeBand(m, band)})
		}
		if c.circuit.OneShot {
			row("pulse", f.Nominal.PulseS, optimize.Pulse, f.WorstCase.Pulse)
		} else {
			for _, m := range []optimize.Measure{optimize.High, optimize.Low, optimize.Period, optimize.Frequency, optimize.Duty} {
				row(m.String(), f.Nominal.Of(m), m, f.WorstCase.Of(m))
			}
			row("first high", f.Nominal.FirstHighS, optimize.High, f.WorstCase.FirstHigh)
		}
		p.printTable([]column{{title: ""}, {title: "NOMINAL", right: true}, {title: "WORST CASE", right: true}}, rows)
		p.printf("")
	}
	for _, warning := range f.Warnings {
		p.printf("mind: %s", warning)
	}
}
