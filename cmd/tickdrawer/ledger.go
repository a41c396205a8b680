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
	command := &cobra.Command{
		Use:   "ledger",
		Short: "List who moved what when",
		Long: `Ledger lists every movement of pieces, oldest first, one line each: what came in,
what was counted, pulled and put back. Lines are never changed; their sum is the
stock.`,
		Example: `  tickdrawer ledger --lot 12`,
		Args:    arguments(),
		RunE: func(command *cobra.Command, _ []string) error {
			drawer, err := p.openDrawer(command.Context(), false)
			if err != nil {
				return err
			}
			defer drawer.Close()
			movements, err := drawer.Movements(command.Context(), sqlite.Filter{Lot: inventory.LotID(lot), Kit: inventory.KitID(kit)})
			if err != nil {
				return err
			}
			if p.json {
				return p.printJSON(map[string]any{"movements": documentsOfMovements(movements)})
			}
			p.printMovements(movements)
			return nil
		},
	}
	command.Flags().Int64Var(&lot, "lot", 0, "only movements of the `LOT`")
	command.Flags().Int64Var(&kit, "kit", 0, "only movements of the `KIT`")
	return command
}

func (p *program) printMovements(movements []inventory.Movement) {
	if len(movements) == 0 {
		p.printf("no movement to list")
		return
	}
	columns := []column{
		{title: "NO", right: true}, {title: "TIME (UTC)"}, {title: "WHO"}, {title: "WHAT"}, {title: "PIECES", right: true}, {title: "LEFT", right: true},
		{title: "LOT", right: true}, {title: "BIN"}, {title: "PART", wraps: true}, {title: "FOR"},
	}
	var rows [][]string
	for _, m := range movements {
		cause := m.Source
		if m.Kit != 0 {
			cause = fmt.Sprintf("kit %d", m.Kit)
		}
		rows = append(rows, []string{
			fmt.Sprint(m.ID), m.At.Format("2006-01-02 15:04:05"), m.Who, string(m.Kind), fmt.Sprintf("%+d", m.Delta), fmt.Sprint(m.Balance),
			fmt.Sprint(m.Lot), m.Bin, m.Part.Name(), cause,
		})
	}
	p.printTable(columns, rows)
}

func (p *program) verifyCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "verify",
		Short: "Check the stock against the ledger",
		Long: `Verify adds up the movements and the reservations again, compares them with the
stock, and checks the drawer's file. Anything found ends with status 1.`,
		Example: `  tickdrawer verify`,
		Args:    arguments(),
		RunE: func(command *cobra.Command, _ []string) error {
			drawer, err := p.openDrawer(command.Context(), false)
			if err != nil {
				return err
			}
			defer drawer.Close()
			findings, err := drawer.Verify(command.Context())
			if err != nil {
				return err
			}
			if p.json {
				if err := p.printJSON(map[string]any{"sound": len(findings) == 0, "findings": append([]string{}, findings...)}); err != nil {
					return err
				}
			} else {
				for _, finding := range findings {
					p.printf("%s", finding)
				}
			}
			if len(findings) > 0 {
				return fmt.Errorf("%s: the drawer %s is not sound; go back to a backup", counted(len(findings), "finding"), p.drawerPath())
			}
			if !p.json {
				p.printf("the drawer %s is sound: stock, reservations and ledger agree", p.drawerPath())
			}
			return nil
		},
	}
}

func (p *program) backupCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "backup FILE",
		Short: "Copy the drawer into a new file",
		Long: `Backup copies the drawer into a new file while others may read and book, and
checks the copy. It never replaces a file.`,
		Example: `  tickdrawer backup drawer-monday.backup`,
		Args:    arguments("FILE"),
		RunE: func(command *cobra.Command, names []string) error {
			drawer, err := p.openDrawer(command.Context(), false)
			if err != nil {
				return err
			}
			defer drawer.Close()
			if err := drawer.Backup(command.Context(), names[0]); err != nil {
				return err
			}
			if p.json {
				return p.printJSON(map[string]any{"drawer": p.drawerPath(), "backup": names[0]})
			}
			p.printf("%s copied to %s and checked", p.drawerPath(), names[0])
			return nil
		},
	}
}
