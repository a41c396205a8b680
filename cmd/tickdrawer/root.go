package main

import (
	"context"
	"errors"
	"io"
	"path/filepath"
	"strings"
	"time"

	"github.com/adrg/xdg"
	"github.com/spf13/cobra"

	"tickdrawer/inventory/sqlite"
)

// The exit statuses that scripts rely on.
const (
	statusDone   = 0
	statusFailed = 1 // nothing changed
	statusUsage  = 2
	statusUnmet  = 3 // a sound request that the drawer does not meet; the result is printed
)

// program is the command line with everything it touches.
type program struct {
	in          io.Reader
	out, errOut io.Writer
	env         func(string) string
	now         func() time.Time
	who         string
	name        string // how a person starts the program
	width       int    // of the terminal, in cells
	colour      bool   // the terminal shows it and the person wants it

	drawerFlag string
	json       bool
	started    bool // a command's own work began: what fails now is no wrong usage
}

// errUnmet ends a command whose result is printed but which the drawer does not
// meet: status 3.
var errUnmet = errors.New("not met")

// run executes the arguments and returns the exit status.
func (p *program) run(ctx context.Context, args []string) int {
	out := &output{Writer: p.out}
	p.out = out
	root := p.rootCommand()
	root.SetArgs(args)
	root.SetIn(p.in)
	root.SetOut(p.out)
	root.SetErr(p.errOut)
	err := root.ExecuteContext(ctx)
	if unknown := unknownCommand(root, args); unknown != nil {
		err = unknown
	}
	switch {
	case out.failed != nil:
		p.notef("tickdrawer: the result cannot be printed: %v; what was booked stays booked: \"tickdrawer ledger\" lists it", systemReason(out.failed))
		return statusFailed
	case err == nil:
		return statusDone
	case errors.Is(err, errUnmet):
		return statusUnmet
	case ctx.Err() != nil && p.started:
		p.notef("tickdrawer: stopped: nothing was changed")
		return statusFailed
	}
	p.notef("tickdrawer: %s", strings.TrimRight(err.Error(), "\n"))
	var wrong usageError
	if errors.As(err, &wrong) || !p.started {
		p.notef("see: %s %s--help", p.name, commandPath(root, args))
		return statusUsage
	}
	return statusFailed
}

// commandPath returns the words of the command that the arguments name, each
// followed by a space.
func commandPath(root *cobra.Command, args []string) string {
	command, _, err := root.Find(args)
	if err != nil || command == root {
		return ""
	}
	return strings.TrimPrefix(command.CommandPath(), root.Name()+" ") + " "
}

func (p *program) rootCommand() *cobra.Command {
	root := &cobra.Command{
		Use:   "tickdrawer",
		Short: "Timer boards from the parts in your drawers",
		Long: `tickdrawer takes a stock of parts and the timing that a board needs, and finds
which parts to take from which bin: resistors and capacitors in series and
parallel around 555-type timers, for as many boards as you build. It writes the
pick list and books what you pull.

Start with "tickdrawer demo". Quantities are written as on the bench: 4k7, 100n,
4s±3%, 3.9s..4.1s, 9V±10%, 10C..40C.

A fit is a design aid: check ratings, mind the polarity and the stored charge of
electrolytics, keep mains work to qualified people, and measure the built circuit.
Not for timing on which life or property depends.`,
		SilenceUsage:      true,
		SilenceErrors:     true,
		PersistentPreRun:  func(*cobra.Command, []string) { p.started = true },
		CompletionOptions: cobra.CompletionOptions{HiddenDefaultCmd: true},
	}
	root.PersistentFlags().StringVar(&p.drawerFlag, "drawer", "", "the drawer `FILE` (else $TICKDRAWER_FILE, else the user's data directory)")
	root.PersistentFlags().BoolVar(&p.json, "json", false, "print one JSON document, SI units, nothing else")
	root.SetFlagErrorFunc(wrongFlag)
	root.SetHelpCommand(p.helpCommand())
	for _, group := range []struct {
		id, title string
		commands  []*cobra.Command
	}{
		{"stock", "Stock:", []*cobra.Command{p.importCommand(), p.stockCommand()}},
		{"plan", "Plan:", []*cobra.Command{p.fitCommand(), p.checkCommand(), p.kitCommand(), p.kitsCommand()}},
		{"book", "Hold and book:", []*cobra.Command{p.reserveCommand(), p.releaseCommand(), p.pullCommand(), p.putbackCommand()}},
		{"keep", "Keep the drawer:", []*cobra.Command{p.ledgerCommand(), p.verifyCommand(), p.backupCommand()}},
		{"learn", "Learn:", []*cobra.Command{p.demoCommand()}},
	} {
		root.AddGroup(&cobra.Group{ID: group.id, Title: group.title})
		for _, command := range group.commands {
			command.GroupID = group.id
			root.AddCommand(command)
		}
	}
	root.SetHelpCommandGroupID("learn")
	return root
}

// drawerPath returns where the drawer lies: the flag, the environment, or the
// user's data directory.
func (p *program) drawerPath() string {
	if p.drawerFlag != "" {
		return p.drawerFlag
	}
	if file := p.env("TICKDRAWER_FILE"); file != "" {
		return file
	}
	if home := p.env("XDG_DATA_HOME"); filepath.IsAbs(home) {
		return filepath.Join(home, "tickdrawer", "stock.drawer")
	}
	return filepath.Join(xdg.DataHome, "tickdrawer", "stock.drawer")
}

// invocation returns how a person starts the program with this drawer.
func (p *program) invocation() string {
	if p.drawerFlag == "" {
		return p.name
	}
	drawer := p.drawerFlag
	if strings.ContainsAny(drawer, " '\"$&;()<>|*?#\\") {
		drawer = "'" + strings.ReplaceAll(drawer, "'", `'\''`) + "'"
	}
	return p.name + " --drawer " + drawer
}

// openDrawer opens the drawer; the caller closes it.
func (p *program) openDrawer(ctx context.Context, create bool) (*sqlite.Drawer, error) {
	return sqlite.Open(ctx, p.drawerPath(), sqlite.Options{Create: create, Now: p.now, Who: p.who})
}
