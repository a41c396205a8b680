package main

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"tickdrawer": func() { os.Exit(mainStatus()) },
	})
}

// TestScripts runs the dialogues at the prompt in testdata. Beyond testscript's
// own commands they have
//
//	status N tickdrawer ARGS...   run it and require the exit status N
//	json PATH WANT                look into the JSON document on standard output
//	cut FILE BYTES                keep so many bytes of the file
//
// and the condition [root]: the user may write into every folder.
//
// A PATH is names and [indices] joined by dots; "len" at its end is the length. A
// WANT that is a number matches within 0.1 %, which times of the closed form are
// well inside.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata",
		RequireExplicitExec: true,
		Setup: func(e *testscript.Env) error {
			e.Setenv("TICKDRAWER_FILE", e.WorkDir+"/stock.drawer")
			e.Setenv("XDG_DATA_HOME", e.WorkDir+"/data")
			e.Setenv("ESCAPE", "\x1b[2J")
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"status": scriptStatus,
			"json":   scriptJSON,
			"cut":    scriptCut,
		},
		Condition: func(condition string) (bool, error) {
			if condition != "root" {
				return false, fmt.Errorf("the condition %q is not known", condition)
			}
			return os.Geteuid() == 0, nil
		},
	})
}

func scriptStatus(ts *testscript.TestScript, negated bool, args []string) {
	if negated || len(args) < 2 {
		ts.Fatalf("usage: status N COMMAND ARGS...")
	}
	err := ts.Exec(args[1], args[2:]...)
	status := "0"
	if err != nil {
		status = strings.TrimPrefix(err.Error(), "exit status ")
	}
	if status != args[0] {
		ts.Fatalf("%s: status %s, want %s", strings.Join(args[1:], " "), status, args[0])
	}
}

func scriptJSON(ts *testscript.TestScript, negated bool, args []string) {
	if len(args) != 2 {
		ts.Fatalf("usage: json PATH WANT")
	}
	decoder := json.NewDecoder(strings.NewReader(ts.ReadFile("stdout")))
	var document any
	if err := decoder.Decode(&document); err != nil {
		ts.Fatalf("standard output is no JSON: %v", err)
	}
	if decoder.More() {
		ts.Fatalf("standard output holds more than one JSON document")
	}
	got, found := lookUp(document, args[0])
	if matches := found && matchesJSON(got, args[1]); matches == negated {
		ts.Fatalf("%s is %v (found: %v), want %s, negated: %v", args[0], got, found, args[1], negated)
	}
}

func scriptCut(ts *testscript.TestScript, negated bool, args []string) {
	if negated || len(args) != 2 {
		ts.Fatalf("usage: cut FILE BYTES")
	}
	size, err := strconv.ParseInt(args[1], 10, 64)
	ts.Check(err)
	ts.Check(os.Truncate(ts.MkAbs(args[0]), size))
}

// lookUp returns what lies at the path: fits[0].nominal.period_s, lots.len.
func lookUp(at any, path string) (any, bool) {
	for step := range strings.SplitSeq(strings.ReplaceAll(path, "[", ".["), ".") {
		switch {
		case step == "":
		case step == "len":
			switch list := at.(type) {
			case []any:
				at = float64(len(list))
			case map[string]any:
				at = float64(len(list))
			default:
				return nil, false
			}
		case strings.HasPrefix(step, "["):
			list, ok := at.([]any)
			index, err := strconv.Atoi(strings.Trim(step, "[]"))
			if !ok || err != nil || index >= len(list) {
				return nil, false
			}
			at = list[index]
		default:
			object, ok := at.(map[string]any)
			if !ok {
				return nil, false
			}
			if at, ok = object[step]; !ok {
				return nil, false
			}
		}
	}
	return at, true
}

func matchesJSON(got any, want string) bool {
	switch got := got.(type) {
	case float64:
		number, err := strconv.ParseFloat(want, 64)
		return err == nil && math.Abs(got-number) <= 1e-3*math.Abs(number)
	case string:
		return got == want
	case bool:
		return strconv.FormatBool(got) == want
	case nil:
		return want == "null"
	}
	return false
}
