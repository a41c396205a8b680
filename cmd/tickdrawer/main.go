// Command tickdrawer finds which parts to take from which bin for boards of
// timers (flashers, tones, delays, pulses): stock comes in from CSV, an exact
// search finds the networks that meet the timing, and the picks are booked.
package main

import (
	"context"
	"os"
	"os/signal"
	"os/user"
	"path/filepath"
	"strings"
	"syscall"
	"time"

	"golang.org/x/term"
)

func main() { os.Exit(mainStatus()) }

// mainStatus runs the program as its process does and returns its exit status.
func mainStatus() int {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	context.AfterFunc(ctx, stop) // a second interrupt ends the program at once
	p := program{
		in: interruptible(ctx, os.Stdin), out: os.Stdout, errOut: os.Stderr,
		env: os.Getenv, now: time.Now, who: userName(), width: unlimited,
		name: "tickdrawer",
	}
	if strings.Contains(filepath.ToSlash(os.Args[0]), "/go-build") { // go run
		p.name = "go run ./cmd/tickdrawer"
	}
	if columns, _, err := term.GetSize(int(os.Stdout.Fd())); err == nil && columns > 0 {
		p.width = columns
		p.colour = os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb"
	}
	return p.run(ctx, os.Args[1:])
}

// unlimited is the width of output that no terminal shows: nothing wraps, so that
// a line stays a line for grep.
const unlimited = 1 << 15

// userName returns who books: the login name.
func userName() string {
	if u, err := user.Current(); err == nil && u.Username != "" {
		return u.Username
	}
	return "unknown"
}
