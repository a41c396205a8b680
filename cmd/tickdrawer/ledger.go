package main

import (
	"fmt"
	"time"

	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/sqlite"
)

type movementDocument struct {
	Movement inventory.MovementID   `json:"movement"`
	At       string                 `json:"at"` // RFC 3339, UTC
	Who      string                 `json:"who"`
	Kind     inventory.MovementKind `json:"kind"`
	Lot      inventory.LotID        `json:"lot"`
	Part     string                 `json:"part"`
	Bin      string                 `json:"bin"`
	Quantity int64                  `json:"quantity"` // positive in, negative out
	Balance  int64                  `json:"balance"`  // in the lot afterwards
	Kit      inventory.KitID        `json:"kit,omitempty"`
	Source   string                 `json:"source,omitempty"`
}

type movementsDocument struct {
	Kit       inventory.KitID    `json:"kit,omitempty"` // that was moved
	Movements []movementDocument `json:"movements"`
}

func documentsOfMovements(movements []inventory.Movement) []movementDocument {
	documents := make([]movementDocument, len(movements))
	for i, m := range movements {
		documents[i] = movementDocument{
			m.ID, m.At.Format(time.RFC3339), m.Who, m.Kind, m.Lot, m.Part.Name(), m.Bin, m.Delta, m.Balance, m.Kit, m.Source,
		}
	}
	return documents
}

func (p *program) ledgerCommand() *cobra.Command {
	var lot, kit int64
	var since string
	command := &cobra.Command{
		Use:   "ledger",
		Short: "List who moved what when",
		Long: `Ledger lists every movement of pieces, oldest first, one line each: what came in,
what was counted, pulled and put back. Lines are never changed; their sum is the
stock.`,
		Example: `  tickdrawer ledger --lot 12`,
		Args:    arguments(),
		RunE: func(command *cobra.Command, _ []string) error {
			filter, err := ledgerFilter(command.Flags().Changed, lot, kit, since)
			if err != nil {
				return err
			}
			drawer, err := p.openDrawer(command.Context(), false)
			if err != nil {
				return err
			}
			defer drawer.Close()
			movements, err := drawer.Movements(command.Context(), filter)
			if err != nil {
				return err
			}
			if p.json {
				return p.printJSON(movementsDocument{Movements: documentsOfMovements(movements)})
			}
			p.printMovements(movements)
			return nil
		},
	}
	command.Flags().Int64Var(&lot, "lot", 0, "only movements of this `LOT`")
	command.Flags().Int64Var(&kit, "kit", 0, "only movements of this `KIT`")
	command.Flags().StringVar(&since, "since", "", "only movements from this `DATE` on, such as 2026-03-01 (UTC)")
	return command
}

// ledgerFilter returns which movements the flags ask for.
func ledgerFilter(given func(flag string) bool, lot, kit int64, since string) (sqlite.Filter, error) {
	filter := sqlite.Filter{Lot: inventory.LotID(lot), Kit: inventory.KitID(kit)}
	if given("lot") && lot < 1 {
		return filter, usagef("--lot %d is no lot: lots are numbered from 1", lot)
	}
	if given("kit") && kit < 1 {
		return filter, usagef("--kit %d is no kit: kits are numbered from 1", kit)
	}
	if given("since") {
		var err error
		if filter.Since, err = time.Parse(time.DateOnly, since); err != nil {
			return filter, usagef("--since %q is no date: write it as 2026-03-01", since)
		}
	}
	return filter, nil
}

func (p *program) printMovements(movements []inventory.Movement) {
	if len(movements) == 0 {
		p.printf("no movement to list")
		return
	}
	columns := []column{
		{title: "NO", right: true}, {title: "TIME (UTC)"}, {title: "WHO"}, {title: "WHAT"}, {title: "PIECES", right: true}, {title: "LEFT", right: true},
		{title: "LOT", right: true}, {title: "BIN"}, {title: "PART", wraps: true}, {title: "FOR", wraps: true},
	}
	var rows [][]string
	for _, m := range movements {
		cause := m.Source
		if m.Kit != 0 {
			cause = fmt.Sprintf("kit %d", m.Kit)
		}
		rows = append(rows, []string{
			fmt.Sprint(m.ID), m.At.Format(time.DateTime), m.Who, string(m.Kind), fmt.Sprintf("%+d", m.Delta), fmt.Sprint(m.Balance),
			fmt.Sprint(m.Lot), m.Bin, m.Part.Name(), cause,
		})
	}
	p.printTable(columns, rows)
}

// movementNumbers names the movements from the first to the last.
func movementNumbers(first, last inventory.MovementID) string {
	if first == last {
		return fmt.Sprintf("movement %d", first)
	}
	return fmt.Sprintf("movements %d to %d", first, last)
}
