package main

import (
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

func TestAResultThatCannotBePrintedFails(t *testing.T) {
	folder := t.TempDir()
	parts := filepath.Join(folder, "parts.csv")
	if err := os.WriteFile(parts, []byte("kind,value,quantity\nresistor,1k,5\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	for _, args := range [][]string{{"import", parts}, {"stock"}, {"stock", "--json"}, {"ledger"}, {"kits"}, {"verify"}, {"help", "stock"}} {
		p, _, errOut := newProgram(folder)
		p.out = failingWriter{}
		if status := p.run(t.Context(), args); status != statusFailed {
			t.Errorf("%v ends with status %d, want %d", args, status, statusFailed)
		}
		if !strings.Contains(errOut.String(), "cannot be printed: no room") {
			t.Errorf("%v says %q", args, errOut)
		}
	}
	// What was booked before the printing failed is booked, as the message says.
	p, out, _ := newProgram(folder)
	if status := p.run(t.Context(), []string{"stock"}); status != statusDone || !strings.Contains(out.String(), "1 lot, 5 pieces") {
		t.Errorf("stock ends with status %d: %s", status, out)
	}
}

type failingWriter struct{}

func (failingWriter) Write([]byte) (int, error) {
	return 0, &os.PathError{Op: "write", Path: "result", Err: errors.New("no room")}
}

func TestAnInterruptEndsAnImportThatWaits(t *testing.T) {
	folder := t.TempDir()
	ctx, interrupt := context.WithCancel(t.Context())
	reader, writer := io.Pipe() // nothing ever comes in
	defer writer.Close()
	p, out, errOut := newProgram(folder)
	p.in = interruptible(ctx, reader)
	ended := make(chan int)
	go func() { ended <- p.run(ctx, []string{"import", "-"}) }()
	time.AfterFunc(20*time.Millisecond, interrupt)
	select {
	case status := <-ended:
		if status != statusFailed {
			t.Errorf("the status is %d, want %d", status, statusFailed)
		}
	case <-time.After(10 * time.Second):
		t.Fatal("the program still waits for input")
	}
	if got := errOut.String(); got != "tickdrawer: stopped: nothing was changed\n" {
		t.Errorf("it says %q", got)
	}
	if out.Len() > 0 {
		t.Errorf("it prints %q", out)
	}
	if _, err := os.Stat(filepath.Join(folder, "stock.drawer")); err == nil {
		t.Error("it left a drawer")
	}
}

func TestOnlyACommandThatReadsInputTakesIt(t *testing.T) {
	unread := strings.NewReader("the next command's input")
	p, _, _ := newProgram(t.TempDir())
	p.in = interruptible(t.Context(), unread)
	p.run(t.Context(), []string{"stock"})
	time.Sleep(10 * time.Millisecond)
	if unread.Len() != len("the next command's input") {
		t.Error("stock took from standard input")
	}
}

func TestWhatSteersATerminalIsShownAsAMark(t *testing.T) {
	for given, want := range map[string]string{
		"4.7 kΩ ±1 %":        "4.7 kΩ ±1 %",
		"two\nlines":         "two\nlines",
		"red \x1b[31m":       "red \uFFFD[31m",
		"back\rspace\b":      "back\uFFFDspace\uFFFD",
		"next\u0085line":     "next\uFFFDline",
		"turned \u202Etxet":  "turned \uFFFDtxet",
		"isolated \u2066txt": "isolated \uFFFDtxt",
		"tab\there":          "tab\uFFFDhere",
	} {
		if got := printable(given); got != want {
			t.Errorf("printable(%q) = %q, want %q", given, got, want)
		}
	}
}
