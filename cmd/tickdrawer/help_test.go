package main

import (
	"bytes"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/spf13/cobra"
)

// newProgram returns a program at a prompt whose drawer lies in the folder, with
// what it prints.
func newProgram(folder string) (p *program, out, errOut *bytes.Buffer) {
	out, errOut = &bytes.Buffer{}, &bytes.Buffer{}
	environment := map[string]string{"TICKDRAWER_FILE": filepath.Join(folder, "stock.drawer")}
	return &program{
		in: strings.NewReader(""), out: out, errOut: errOut,
		env: func(name string) string { return environment[name] },
		now: func() time.Time { return time.Date(2026, 3, 1, 9, 30, 0, 0, time.UTC) },
		who: "tester", name: "tickdrawer", width: unlimited,
	}, out, errOut
}

// commands returns every command that help lists.
func commands() []*cobra.Command {
	p, _, _ := newProgram("")
	root := p.rootCommand()
	root.InitDefaultHelpCmd()
	return slices.DeleteFunc(root.Commands(), func(c *cobra.Command) bool { return c.Hidden })
}

func TestEveryCommandSaysWhatItDoesWithAnExample(t *testing.T) {
	for _, command := range commands() {
		if command.Short == "" || strings.HasSuffix(command.Short, ".") {
			t.Errorf("%s: its short help is %q, want a phrase without a full stop", command.Name(), command.Short)
		}
		if !strings.HasSuffix(strings.TrimSpace(command.Long), ".") && command.Name() != "check" { // check ends with a list and a sentence
			t.Errorf("%s: its long help is no sentence: %q", command.Name(), command.Long)
		}
		for line := range strings.SplitSeq(command.Long, "\n") {
			if len([]rune(line)) > 100 {
				t.Errorf("%s: a line of its help is wider than a terminal: %q", command.Name(), line)
			}
		}
		if command.Example == "" {
			t.Errorf("%s has no example", command.Name())
		}
		if command.GroupID == "" {
			t.Errorf("%s stands in no group of the overview", command.Name())
		}
	}
}

// TestEveryExampleRunsWithTheDemo runs the examples of every command's help as
// they stand, in the demo's folder.
func TestEveryExampleRunsWithTheDemo(t *testing.T) {
	// What must have happened to the demo's kit before.
	before := map[string][]string{"release": {"reserve 1"}, "putback": {"pull 1"}}
	demo := t.TempDir()
	t.Chdir(demo)
	p, _, errOut := newProgram(demo)
	if status := p.run(t.Context(), []string{"demo", "--folder", "demo"}); status != statusDone {
		t.Fatalf("demo ends with status %d: %s", status, errOut)
	}
	for _, command := range commands() {
		for i, example := range strings.Split(command.Example, "\n") {
			t.Run(command.Name(), func(t *testing.T) {
				folder := copyOf(t, filepath.Join(demo, "demo"))
				t.Chdir(folder)
				if command.Name() == "import" { // into a drawer of its own
					if err := os.Remove("stock.drawer"); err != nil {
						t.Fatal(err)
					}
				}
				for _, step := range append(slices.Clone(before[command.Name()]), strings.TrimSpace(example)) {
					args := words(strings.TrimPrefix(step, "tickdrawer "))
					p, out, errOut := newProgram(folder)
					if status := p.run(t.Context(), args); status != statusDone {
						t.Fatalf("example %d, %q, ends with status %d: %s", i+1, step, status, errOut)
					}
					if out.Len() == 0 {
						t.Errorf("example %d, %q, prints nothing", i+1, step)
					}
				}
			})
		}
	}
}

// copyOf returns a new folder with the files of the other.
func copyOf(t *testing.T, folder string) string {
	t.Helper()
	into := t.TempDir()
	if err := os.CopyFS(into, os.DirFS(folder)); err != nil {
		t.Fatal(err)
	}
	return into
}

// words splits a line as a shell does that knows double quotes only.
func words(line string) []string {
	var all []string
	for i, part := range strings.Split(line, `"`) {
		if i%2 == 1 {
			all = append(all, part)
		} else {
			all = append(all, strings.Fields(part)...)
		}
	}
	return all
}

func TestHelpPrintsTheSameAsTheFlag(t *testing.T) {
	for _, command := range commands() {
		p, asked, _ := newProgram(t.TempDir())
		if status := p.run(t.Context(), []string{"help", command.Name()}); status != statusDone {
			t.Fatalf("help %s ends with status %d", command.Name(), status)
		}
		p, flagged, _ := newProgram(t.TempDir())
		if status := p.run(t.Context(), []string{command.Name(), "--help"}); status != statusDone {
			t.Fatalf("%s --help ends with status %d", command.Name(), status)
		}
		if asked.String() != flagged.String() || !strings.Contains(asked.String(), command.Example) {
			t.Errorf("help %s prints\n%s\n%s --help prints\n%s", command.Name(), asked, command.Name(), flagged)
		}
	}
}
