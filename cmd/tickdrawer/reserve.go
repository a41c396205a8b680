package main

import (
	"context"

	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/sqlite"
)

func (p *program) reserveCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "reserve KIT",
		Short: "Hold the picks of a planned kit",
		Long: `Reserve holds the pieces of a planned or released kit for it: other plans and
pulls leave them alone until it is pulled or released.`,
		Example: `  tickdrawer reserve 1`,
		Args:    arguments("KIT"),
		RunE: func(command *cobra.Command, args []string) error {
			return p.changeKit(command.Context(), args[0], inventory.KitReserved, (*sqlite.Drawer).Reserve, "its picks are held for it")
		},
	}
}

// changeKit brings the kit into the state and says so.
func (p *program) changeKit(ctx context.Context, argument string, state inventory.KitState, change func(*sqlite.Drawer, context.Context, inventory.KitID) error, done string) error {
	id, err := kitNumber(argument)
	if err != nil {
		return err
	}
	drawer, err := p.openDrawer(ctx, false)
	if err != nil {
		return err
	}
	defer drawer.Close()
	if err := change(drawer, ctx, id); err != nil {
		return err
	}
	if p.json {
		return p.printJSON(struct {
			Kit   inventory.KitID    `json:"kit"`
			State inventory.KitState `json:"state"`
		}{id, state})
	}
	p.printf("kit %d is %s: %s", id, state, done)
	return nil
}
