package main

import (
	"fmt"

	"github.com/spf13/cobra"
)

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
				if err := p.printJSON(struct {
					Sound    bool     `json:"sound"`
					Findings []string `json:"findings"`
				}{len(findings) == 0, append([]string{}, findings...)}); err != nil {
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
