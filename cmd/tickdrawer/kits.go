package main

import (
	"fmt"
	"time"

	"github.com/spf13/cobra"

	"tickdrawer/inventory"
)

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
