package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/sqlite"
	"tickdrawer/optimize"
	"tickdrawer/optimize/allot"
	"tickdrawer/optimize/picks"
)

type kitFlags struct {
	boards  int64
	output  string
	reserve bool
}

func (p *program) kitCommand() *cobra.Command {
	var flags kitFlags
	command := &cobra.Command{
		Use:   "kit JOB.yaml",
		Short: "Plan the boards of a job from one drawer",
		Long: `Kit plans a board of several timers: it takes the fixed lines first, then finds a
fit for every stage so that as many boards as possible can be built, with fewest
parts, least cost and closest timing. The plan gets a number, which pull books.

Preference: most complete boards, then fewest parts in all, least cost, least
allowance used. Status 3: not every board can be built; what is short is named.`,
		Example: `  tickdrawer kit harbour.yaml --boards 6 -o six-boards.xlsx
  tickdrawer kit harbour.yaml --reserve`,
		Args: arguments("JOB.yaml"),
		RunE: func(command *cobra.Command, names []string) error {
			if command.Flags().Changed("boards") && (flags.boards < 1 || flags.boards > 1_000_000) {
				return usagef("--boards is 1 to 1000000, not %d", flags.boards)
			}
			return p.runKit(command.Context(), names[0], flags)
		},
	}
	f := command.Flags()
	f.Int64Var(&flags.boards, "boards", 0, "how many boards, `N` (else what the job says)")
	f.StringVarP(&flags.output, "output", "o", "", "write the picks to the `FILE`, .xlsx or .csv")
	f.BoolVar(&flags.reserve, "reserve", false, "hold the picks for this kit")
	return command
}

type kitPickDocument struct {
	Lot        inventory.LotID `json:"lot"`
	Bin        string          `json:"bin"`
	Kind       inventory.Kind  `json:"kind"`
	Value      number          `json:"value,omitempty"`
	Unit       string          `json:"unit,omitempty"`
	Name       string          `json:"name"`
	PartNumber string          `json:"part_number,omitempty"`
	Quantity   int64           `json:"quantity"`
	PerBoard   int64           `json:"per_board"`
	Left       int64           `json:"left"`
	References []string        `json:"references"`
}

type placeDocument struct {
	Reference string          `json:"reference"`
	Position  string          `json:"position,omitempty"`
	Lot       inventory.LotID `json:"lot"`
	Bin       string          `json:"bin"`
	Name      string          `json:"name"`
}

type stageDocument struct {
	Stage  string          `json:"stage"`
	Fit    fitDocument     `json:"fit"`
	Places []placeDocument `json:"places"`
}

type variantDocument struct {
	Boards int64           `json:"boards"`
	Stages []stageDocument `json:"stages"`
	Fixed  []placeDocument `json:"fixed"`
}

type shortageDocument struct {
	References []string       `json:"references"`
	Kind       inventory.Kind `json:"kind"`
	Value      number         `json:"value,omitempty"`
	Unit       string         `json:"unit,omitempty"`
	PartNumber string         `json:"part_number,omitempty"`
	Short      int64          `json:"short"`
	Why        string         `json:"why"`
}

type kitDocument struct {
	Kit       inventory.KitID    `json:"kit"`
	Job       string             `json:"job"`
	State     inventory.KitState `json:"state"`
	Boards    boardsDocument     `json:"boards"`
	Variants  []variantDocument  `json:"variants"`
	Picks     []kitPickDocument  `json:"picks"`
	Shortages []shortageDocument `json:"shortages"`
	Warnings  []string           `json:"warnings"`
	Output    string             `json:"output,omitempty"`
	Search    searchDocument     `json:"search"`
}

type boardsDocument struct {
	Wanted int64 `json:"wanted"`
	Built  int64 `json:"built"`
}

func documentsOfPlaces(places []optimize.Place) []placeDocument {
	documents := make([]placeDocument, len(places))
	for i, place := range places {
		documents[i] = placeDocument{place.Reference, place.Position, place.Lot.ID, place.Lot.Bin, place.Lot.Part.Name()}
	}
	return documents
}

func documentOfPlan(plan optimize.Plan) kitDocument {
	d := kitDocument{
		Job: plan.Job.Name, State: inventory.KitPlanned,
		Boards:   boardsDocument{plan.Job.Boards, plan.Built},
		Variants: []variantDocument{}, Picks: []kitPickDocument{}, Shortages: []shortageDocument{},
		Warnings: append([]string{}, plan.Warnings...), Search: documentOfSearch(plan.Search),
	}
	for _, variant := range plan.Variants {
		v := variantDocument{Boards: variant.Boards, Stages: []stageDocument{}, Fixed: documentsOfPlaces(variant.Fixed)}
		for i, stage := range variant.Stages {
			v.Stages = append(v.Stages, stageDocument{stage.Stage, documentOfFit(stage.Fit, 0, plan.Job.Stages[i].Spec.OneShot()), documentsOfPlaces(stage.Places)})
		}
		d.Variants = append(d.Variants, v)
	}
	for _, pick := range plan.Picks {
		part := pick.Lot.Part
		document := kitPickDocument{
			Lot: pick.Lot.ID, Bin: pick.Lot.Bin, Kind: part.Kind, Unit: part.Kind.Unit(), Name: part.Name(), PartNumber: part.PartNumber,
			Quantity: pick.Quantity, PerBoard: pick.PerBoard, Left: pick.Left(), References: pick.References,
		}
		if document.Unit != "" {
			document.Value = finite(pick.Lot.Value())
		}
		d.Picks = append(d.Picks, document)
	}
	for _, s := range plan.Shortages {
		document := shortageDocument{References: s.References, Kind: s.Kind, Unit: s.Kind.Unit(), PartNumber: s.PartNumber, Short: s.Short, Why: s.Why}
		if document.Unit != "" {
			document.Value = finite(s.Value)
		}
		d.Shortages = append(d.Shortages, document)
	}
	return d
}

func (p *program) runKit(ctx context.Context, name string, flags kitFlags) error {
	job, err := readJob(name)
	if err != nil {
		return err
	}
	if flags.boards > 0 {
		job.Boards = flags.boards
	}
	var format picks.Format
	if flags.output != "" {
		if format, err = picks.ForFile(flags.output); err != nil {
			return usageError{err}
		}
	}
	drawer, err := p.openDrawer(ctx, false)
	if err != nil {
		return err
	}
	defer drawer.Close()
	lots, err := drawer.Lots(ctx)
	if err != nil {
		return err
	}
	plan, err := allot.Plan(ctx, job, lots)
	if err != nil {
		return err
	}
	document := documentOfPlan(plan)
	// The file is opened before the kit is kept, so that neither stands without
	// the other; its content names the kit.
	var file *replacement
	if flags.output != "" {
		if file, err = newReplacement(flags.output); err != nil {
			return err
		}
		document.Output = flags.output
	}
	document.Kit, document.State, err = saveKit(ctx, drawer, plan, document, flags.reserve)
	if err != nil {
		if file != nil {
			file.drop()
		}
		return err
	}
	if file != nil {
		content, err := format.Document(plan, picks.Options{Now: p.now(), Kit: document.Kit})
		if err == nil {
			err = file.finish(content)
		}
		if err != nil {
			return fmt.Errorf("kit %d is kept, but not its picks: %w", document.Kit, err)
		}
	}
	if p.json {
		err = p.printJSON(document)
	} else {
		p.printPlan(plan, document)
	}
	if err == nil && plan.Built < plan.Job.Boards {
		err = errUnmet
	}
	return err
}

// readJob reads a job file and the BOM that it names.
func readJob(name string) (optimize.Job, error) {
	content, err := os.ReadFile(name)
	if err != nil {
		return optimize.Job{}, fmt.Errorf("%s: %w", name, systemReason(err))
	}
	parsed, err := allot.ParseJob(filepath.Base(name), content)
	if err != nil {
		return optimize.Job{}, err
	}
	if parsed.BOM != "" {
		return optimize.Job{}, fmt.Errorf("%s: a bom file is not read yet: list its lines under fixed", name)
	}
	return parsed.Job, nil
}

// saveKit keeps the plan in the drawer, and holds its picks where asked.
func saveKit(ctx context.Context, drawer *sqlite.Drawer, plan optimize.Plan, document kitDocument, reserve bool) (inventory.KitID, inventory.KitState, error) {
	kit := inventory.Kit{Job: plan.Job.Name, Boards: plan.Built, Wanted: plan.Job.Boards, State: inventory.KitPlanned}
	if reserve && len(plan.Picks) > 0 {
		kit.State = inventory.KitReserved
	}
	for _, pick := range plan.Picks {
		kit.Picks = append(kit.Picks, inventory.Pick{Lot: pick.Lot.ID, Quantity: pick.Quantity, References: pick.References})
	}
	var written bytes.Buffer
	if err := json.NewEncoder(&written).Encode(document); err != nil {
		return 0, "", err
	}
	kit.Plan = written.Bytes()
	id, err := drawer.SaveKit(ctx, kit)
	if err != nil {
		return 0, "", err
	}
	return id, kit.State, nil
}

func (p *program) printPlan(plan optimize.Plan, document kitDocument) {
	p.printf("kit %d: %s, %d of %s can be built", document.Kit, plan.Job.Name, plan.Built, counted(plan.Job.Boards, "board"))
	for i, variant := range plan.Variants {
		p.printf("")
		if len(plan.Variants) > 1 {
			p.printf("variant %d, %s:", i+1, counted(variant.Boards, "board"))
		}
		for j, stage := range variant.Stages {
			spec := plan.Job.Stages[j].Spec
			p.printFit(stage.Stage, stage.Fit, spec)
		}
	}
	if len(plan.Picks) > 0 {
		p.printf("")
		p.printPicks(plan)
	}
	if len(plan.Shortages) > 0 {
		p.printf("")
		p.printf("short for %s:", counted(plan.Job.Boards, "board"))
		for _, s := range plan.Shortages {
			p.printf("  %s for %s: %s", counted(s.Short, "piece"), strings.Join(s.References, " "), s.Why)
		}
	}
	for _, warning := range plan.Warnings {
		p.printf("mind: %s", warning)
	}
	p.printf("")
	switch {
	case !plan.Search.Proven:
		p.printf("not proven: a plan that was missed could be better")
	case plan.Built < plan.Job.Boards:
		p.printf("proven: with the same parts on every board no more can be built")
	default:
		p.printf("proven: with the same parts on every board, no other plan takes fewer parts, costs less or comes closer")
	}
	if document.Output != "" {
		p.printf("picks: %s", document.Output)
	}
	if len(plan.Picks) > 0 {
		held := "nothing is held; "
		if document.State == inventory.KitReserved {
			held = "its picks are held; "
		}
		p.printf("%sbook them out with: %s pull %d", held, p.invocation(), document.Kit)
	}
}

func (p *program) printPicks(plan optimize.Plan) {
	columns := []column{
		{title: "BIN"}, {title: "LOT", right: true}, {title: "PART", wraps: true}, {title: "PER BOARD", right: true}, {title: "IN ALL", right: true}, {title: "LEFT", right: true}, {title: "FOR", wraps: true},
	}
	var rows [][]string
	for _, pick := range plan.Picks {
		left := fmt.Sprint(pick.Left())
		if pick.Left() == 0 {
			left = "runs out"
		}
		rows = append(rows, []string{
			pick.Lot.Bin, fmt.Sprint(pick.Lot.ID), pick.Lot.Part.Name(), fmt.Sprint(pick.PerBoard), fmt.Sprint(pick.Quantity), left, strings.Join(pick.References, " "),
		})
	}
	p.printTable(columns, rows)
}
