package main

import (
	"context"
	"strconv"

	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/sqlite"
)

// kitNumber reads the KIT argument.
func kitNumber(text string) (inventory.KitID, error) {
	number, err := strconv.ParseInt(text, 10, 64)
	if err != nil || number < 1 {
		return 0, usagef("%q is no kit: a kit is a number, \"tickdrawer kits\" lists them", text)
	}
	return inventory.KitID(number), nil
}

func (p *program) pullCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "pull KIT",
		Short: "Book the picks of a kit out of the drawer",
		Long: `Pull books what a kit takes out of its lots, once. If pieces are gone since the
kit was planned, it says which and changes nothing.`,
		Example: `  tickdrawer pull 1`,
		Args:    arguments("KIT"),
		RunE: func(command *cobra.Command, args []string) error {
			return p.moveKit(command.Context(), args[0], "pulled", func(drawer *sqlite.Drawer, kit inventory.KitID) ([]inventory.Movement, error) {
				return drawer.Pull(command.Context(), kit)
			})
		},
	}
}

// moveKit books movements of the kit and prints them.
func (p *program) moveKit(ctx context.Context, argument, done string, move func(*sqlite.Drawer, inventory.KitID) ([]inventory.Movement, error)) error {
	id, err := kitNumber(argument)
	if err != nil {
		return err
	}
	drawer, err := p.openDrawer(ctx, false)
	if err != nil {
		return err
	}
	defer drawer.Close()
	movements, err := move(drawer, id)
	if err != nil {
		return err
	}
	if p.json {
		return p.printJSON(movementsDocument{Kit: id, Movements: documentsOfMovements(movements)})
	}
	p.printMovements(movements)
	pieces := int64(0)
	for _, m := range movements {
		pieces += max(m.Delta, -m.Delta)
	}
	p.printf("")
	p.printf("kit %d: %s %s, %s", id, counted(pieces, "piece"), done, movementNumbers(movements[0].ID, movements[len(movements)-1].ID))
	return nil
}
