package main

import (
	"context"
	"fmt"
	"strconv"
	"time"

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
	p.printf("kit %d: %s %s, movements %d to %d", id, counted(pieces, "piece"), done, movements[0].ID, movements[len(movements)-1].ID)
	return nil
}

type keptKitDocument struct {
	Kit       inventory.KitID    `json:"kit"`
	Job       string             `json:"job"`
	State     inventory.KitState `json:"state"`
	CreatedAt string             `json:"created_at"` // RFC 3339, UTC
	Boards    boardsDocument     `json:"boards"`
}

type kitsDocument struct {
	Kits []keptKitDocument `json:"kits"`
}

func documentOfKits(kits []inventory.Kit) kitsDocument {
	document := kitsDocument{Kits: []keptKitDocument{}}
	for _, kit := range kits {
		document.Kits = append(document.Kits, keptKitDocument{kit.ID, kit.Job, kit.State, kit.CreatedAt.Format(time.RFC3339), boardsDocument{kit.Wanted, kit.Boards}})
	}
	return document
}

func (p *program) kitsCommand() *cobra.Command {
	return &cobra.Command{
		Use:     "kits",
		Short:   "List the planned kits",
		Long:    `Kits lists every kit and how far it has come: planned (holds nothing), reserved, pulled, released.`,
		Example: `  tickdrawer kits`,
		Args:    arguments(),
		RunE: func(command *cobra.Command, _ []string) error {
			drawer, err := p.openDrawer(command.Context(), false)
			if err != nil {
				return err
			}
			defer drawer.Close()
			kits, err := drawer.Kits(command.Context())
			if err != nil {
				return err
			}
			if p.json {
				return p.printJSON(documentOfKits(kits))
			}
			if len(kits) == 0 {
				p.printf("no kit is planned: \"tickdrawer kit JOB.yaml\" plans one")
				return nil
			}
			var rows [][]string
			for _, kit := range kits {
				rows = append(rows, []string{
					fmt.Sprint(kit.ID), kit.Job, fmt.Sprintf("%d of %d", kit.Boards, kit.Wanted), string(kit.State), kit.CreatedAt.Format("2006-01-02 15:04"),
				})
			}
			p.printTable([]column{{title: "KIT", right: true}, {title: "JOB", wraps: true}, {title: "BOARDS", right: true}, {title: "STATE"}, {title: "PLANNED (UTC)"}}, rows)
			return nil
		},
	}
}

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
