package main

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

type lotDocument struct {
	Lot            inventory.LotID `json:"lot"`
	Kind           inventory.Kind  `json:"kind"`
	Value          number          `json:"value"` // null for kinds without a value
	Unit           string          `json:"unit"`
	Tolerance      number          `json:"tolerance"` // the wider side, a fraction; null where unstated
	ToleranceMinus number          `json:"tolerance_minus,omitempty"`
	TolerancePlus  number          `json:"tolerance_plus,omitempty"`
	Quantity       int64           `json:"quantity"`
	Reserved       int64           `json:"reserved"`
	Available      int64           `json:"available"`
	Bin            string          `json:"bin"`
	Measured       number          `json:"measured"` // null where not measured
	Name           string          `json:"name"`
	PartNumber     string          `json:"part_number,omitempty"`
	RatingV        number          `json:"rating_v,omitempty"`
	RatingW        number          `json:"rating_w,omitempty"`
	Dielectric     string          `json:"dielectric,omitempty"`
	TempcoPPM      number          `json:"tempco_ppm,omitempty"`
	Package        string          `json:"package,omitempty"`
	UnitCost       number          `json:"unit_cost,omitempty"`
	Note           string          `json:"note,omitempty"`
	ForwardV       number          `json:"forward_v,omitempty"`
	SaturationA    number          `json:"saturation_a,omitempty"`
	Ideality       number          `json:"ideality,omitempty"`
	SeriesOhm      number          `json:"series_ohm,omitempty"`
}

func documentOfLot(lot inventory.Lot) lotDocument {
	part := lot.Part
	d := lotDocument{
		Lot: lot.ID, Kind: part.Kind, Unit: part.Kind.Unit(),
		Quantity: lot.OnHand, Reserved: lot.Reserved, Available: lot.Available(),
		Bin: lot.Bin, Measured: known(lot.Measured), Name: part.Name(), PartNumber: part.PartNumber,
		RatingV: known(part.RatingV), RatingW: known(part.RatingW), Dielectric: part.Dielectric,
		TempcoPPM: part.TempcoPPM, Package: part.Package, Note: lot.Note,
		ForwardV: known(part.ForwardV), SaturationA: known(part.SaturationA), Ideality: known(part.Ideality), SeriesOhm: known(part.SeriesOhm),
	}
	if d.Unit != "" {
		d.Value = finite(part.Value)
	}
	if t := part.Tolerance; t != nil {
		d.Tolerance, d.ToleranceMinus, d.TolerancePlus = finite(max(t.Minus, t.Plus)), finite(t.Minus), finite(t.Plus)
	}
	if lot.UnitCost != nil {
		d.UnitCost = finite(lot.UnitCost.Float())
	}
	return d
}

func (p *program) stockCommand() *cobra.Command {
	var kind, bin string
	var all bool
	command := &cobra.Command{
		Use:   "stock",
		Short: "List what lies in the drawer",
		Long: `Stock lists every lot with pieces in it: on hand, reserved by kits, available
for new plans, and what one piece costs.`,
		Example: `  tickdrawer stock --kind capacitor`,
		Args:    arguments(),
		RunE: func(command *cobra.Command, _ []string) error {
			wanted, err := kindFlag(command.Flags().Changed("kind"), kind)
			if err != nil {
				return err
			}
			drawer, err := p.openDrawer(command.Context(), false)
			if err != nil {
				return err
			}
			defer drawer.Close()
			lots, err := drawer.Lots(command.Context())
			if err != nil {
				return err
			}
			anyBin := !command.Flags().Changed("bin")
			lots = slices.DeleteFunc(lots, func(lot inventory.Lot) bool {
				return wanted != "" && lot.Part.Kind != wanted || !anyBin && !strings.EqualFold(lot.Bin, bin) || !all && !p.json && lot.OnHand == 0
			})
			return p.printStock(lots)
		},
	}
	command.Flags().StringVar(&kind, "kind", "", "only parts of this `KIND`: resistor, capacitor, diode, ...")
	command.Flags().StringVar(&bin, "bin", "", "only lots in this `BIN`; \"\": those without a bin")
	command.Flags().BoolVar(&all, "all", false, "empty lots too (--json always has them)")
	return command
}

func (p *program) printStock(lots []inventory.Lot) error {
	slices.SortStableFunc(lots, func(a, b inventory.Lot) int {
		return cmp.Or(
			cmp.Compare(slices.Index(inventory.Kinds(), a.Part.Kind), slices.Index(inventory.Kinds(), b.Part.Kind)),
			cmp.Compare(a.Part.Value, b.Part.Value), cmp.Compare(a.Part.PartNumber, b.Part.PartNumber),
			inventory.NaturalCompare(a.Bin, b.Bin), cmp.Compare(a.ID, b.ID))
	})
	if p.json {
		document := struct {
			Lots []lotDocument `json:"lots"`
		}{Lots: []lotDocument{}}
		for _, lot := range lots {
			document.Lots = append(document.Lots, documentOfLot(lot))
		}
		return p.printJSON(document)
	}
	if len(lots) == 0 {
		p.printf("no lot with pieces to list; --all lists empty ones too")
		return nil
	}
	columns := []column{
		{title: "LOT", right: true}, {title: "BIN"}, {title: "KIND"}, {title: "PART", wraps: true}, {title: "MEASURED", right: true, spare: true},
		{title: "ON HAND", right: true}, {title: "RESERVED", right: true, spare: true}, {title: "AVAILABLE", right: true}, {title: "COST", right: true, spare: true},
	}
	var rows [][]string
	pieces := int64(0)
	for _, lot := range lots {
		measured, reserved, cost := "", "", ""
		if lot.Measured != 0 {
			measured = formatValue(lot.Part.Kind, lot.Measured)
		}
		if lot.Reserved != 0 {
			reserved = fmt.Sprint(lot.Reserved)
		}
		if lot.UnitCost != nil {
			cost = formatCost(*lot.UnitCost)
		}
		pieces += lot.OnHand
		rows = append(rows, []string{
			fmt.Sprint(lot.ID), lot.Bin, string(lot.Part.Kind), lot.Part.Name(), measured,
			fmt.Sprint(lot.OnHand), reserved, fmt.Sprint(lot.Available()), cost,
		})
	}
	p.printTable(columns, rows)
	p.printf("")
	p.printf("%s, %s", counted(len(lots), "lot"), counted(pieces, "piece"))
	return nil
}

// formatValue writes a value of the kind for people.
func formatValue(kind inventory.Kind, value float64) string {
	switch kind.Unit() {
	case "ohm":
		return marking.FormatOhms(value)
	case "f":
		return marking.FormatFarads(value)
	}
	return ""
}

// formatCost writes an amount with at least two decimals.
func formatCost(amount inventory.Micros) string {
	text := strings.TrimRight(fmt.Sprintf("%.6f", amount.Float()), "0")
	if decimals := len(text) - strings.IndexByte(text, '.') - 1; decimals < 2 {
		text += strings.Repeat("0", 2-decimals)
	}
	return text
}
