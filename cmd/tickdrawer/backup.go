package main

import "github.com/spf13/cobra"

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
				return p.printJSON(struct {
					Drawer string `json:"drawer"`
					Backup string `json:"backup"`
				}{p.drawerPath(), names[0]})
			}
			p.printf("%s copied to %s and checked", p.drawerPath(), names[0])
			return nil
		},
	}
}
