package main

import (
	"github.com/spf13/cobra"

	"tickdrawer/inventory"
	"tickdrawer/inventory/sqlite"
)

func (p *program) putbackCommand() *cobra.Command {
	var lot, quantity int64
	command := &cobra.Command{
		Use:   "putback KIT",
		Short: "Book pieces of a pulled kit back",
		Long: `Putback books everything of a pulled kit that is still out back into its lots, or
some pieces of one lot.`,
		Example: `  tickdrawer putback 1 --lot 9 --quantity 3`,
		Args:    arguments("KIT"),
		RunE: func(command *cobra.Command, args []string) error {
			given := command.Flags().Changed
			if given("lot") != given("quantity") {
				return usagef("--lot and --quantity go together: so many pieces of one lot")
			}
			if given("lot") && (lot < 1 || quantity < 1) {
				return usagef("--lot and --quantity are whole numbers of at least 1")
			}
			return p.moveKit(command.Context(), args[0], "put back", func(drawer *sqlite.Drawer, kit inventory.KitID) ([]inventory.Movement, error) {
				return drawer.PutBack(command.Context(), kit, inventory.LotID(lot), quantity)
			})
		},
	}
	command.Flags().Int64Var(&lot, "lot", 0, "only pieces of the `LOT`")
	command.Flags().Int64Var(&quantity, "quantity", 0, "how many `PIECES` of it")
	return command
}
