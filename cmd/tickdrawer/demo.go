package main

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"tickdrawer/importers"
	"tickdrawer/testdata"
)

// demoJob is the demo's job file.
const demoJob = "harbour.yaml"

func (p *program) demoCommand() *cobra.Command {
	var folder string
	command := &cobra.Command{
		Use:   "demo",
		Short: "Make a demo drawer, plan its job and write the picks",
		Long: `Demo makes a folder with an invented drawer of about 150 lots and a job: twelve
harbour dioramas, each with an isophase lead light (4 s, equal light and dark), a
flashing buoy (0.5 s every 5 s), an occulting pierhead (dark 1 s in 6 s) and a fog
signal (about 420 Hz). It books the parts, plans the boards, writes the workbook
with the picks, and says what to type next.`,
		Example: `  tickdrawer demo --folder try-it`,
		Args:    arguments(),
		RunE: func(command *cobra.Command, _ []string) error {
			return p.runDemo(command.Context(), folder)
		},
	}
	command.Flags().StringVar(&folder, "folder", "", "the new `FOLDER` (else tickdrawer-demo, numbered where it exists)")
	return command
}

func (p *program) runDemo(ctx context.Context, folder string) error {
	folder, err := makeFolder(folder)
	if err != nil {
		return err
	}
	tables, err := unpackDemo(folder)
	if err != nil {
		return err
	}
	p.drawerFlag = filepath.Join(folder, "stock.drawer")
	if !p.json {
		p.printf("the demo's parts lists lie in %s: all of it is invented", folder)
		p.printf("")
	}
	// In a --json run the plan is the document; the import goes unprinted.
	jsonRun, out := p.json, p.out
	if jsonRun {
		p.json, p.out = false, p.errOut
	}
	err = p.runImport(ctx, tables, importers.Options{}, importFlags{})
	p.json, p.out = jsonRun, out
	if err != nil {
		return err
	}
	if !p.json {
		p.printf("")
	}
	job := filepath.Join(folder, demoJob)
	err = p.runKit(ctx, job, kitFlags{output: filepath.Join(folder, "picks.xlsx")})
	if err != nil && !errors.Is(err, errUnmet) || p.json {
		return err
	}
	p.printf("")
	p.printf("what to type next:")
	for _, next := range []string{
		"stock                       what lies in the drawer",
		"pull 1                      book the picks out",
		"ledger --kit 1              what was moved",
		"putback 1                   book them back",
		"fit --period 4s --duty 50%  the networks for one timer",
	} {
		p.printf("  %s %s", p.invocation(), next)
	}
	return err
}

// makeFolder makes the folder, or the first of tickdrawer-demo,
// tickdrawer-demo-2, ... that does not exist.
func makeFolder(folder string) (string, error) {
	if folder != "" {
		err := os.Mkdir(folder, 0o755)
		if errors.Is(err, fs.ErrExist) {
			return "", fmt.Errorf("%s exists already: name a new folder with --folder", folder)
		}
		if err != nil {
			return "", fmt.Errorf("the folder %s cannot be made: %w", folder, systemReason(err))
		}
		return folder, nil
	}
	for n := 1; ; n++ {
		name := "tickdrawer-demo"
		if n > 1 {
			name = fmt.Sprintf("%s-%d", name, n)
		}
		err := os.Mkdir(name, 0o755)
		if err == nil {
			return name, nil
		}
		if !errors.Is(err, fs.ErrExist) {
			return "", fmt.Errorf("the folder %s cannot be made: %w; name another with --folder", name, systemReason(err))
		}
	}
}

// unpackDemo writes the demo's files into the folder and returns its parts lists.
func unpackDemo(folder string) (tables []string, err error) {
	entries, err := fs.ReadDir(testdata.Demo, "demo")
	if err != nil {
		return nil, err
	}
	for _, entry := range entries {
		content, err := fs.ReadFile(testdata.Demo, "demo/"+entry.Name())
		if err != nil {
			return nil, err
		}
		path := filepath.Join(folder, entry.Name())
		if err := os.WriteFile(path, content, 0o644); err != nil {
			return nil, fmt.Errorf("%s: %w", path, systemReason(err))
		}
		if strings.HasSuffix(entry.Name(), ".csv") {
			tables = append(tables, path)
		}
	}
	return tables, nil
}
