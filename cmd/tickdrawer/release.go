package main

import (
	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/sqlite"
)

func (p *program) releaseCommand() *cobra.Command {
	return &cobra.Command{
		Use:     "release KIT",
		Short:   "Free what a reserved kit holds",
		Long:    `Release frees the pieces that a reserved kit holds, so that other plans may use them.`,
		Example: `  tickdrawer release 1`,
		Args:    arguments("KIT"),
		RunE: func(command *cobra.Command, args []string) error {
			return p.changeKit(command.Context(), args[0], inventory.KitReleased, (*sqlite.Drawer).Release, "it holds nothing any more")
		},
	}
}
