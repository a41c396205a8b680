package allot

import (
	"errors"
	"strings"
	"testing"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

const pierJob = `# a comment
job: pier
boards: 12
supply: 9V±10%
ambient: 10C..35C
timer: [NE555, TLC555]
stages:
  - name: lead
    period: 4s±2%
    duty: 50%±1pt
    references: {ra: R1, rb: R2, c: C1, timer: U1}
  - name: horn
    frequency: 420Hz±5%
    circuit: classic, diode-bypass
    parts_each: 1
    parts_c: 2
    load: 20mA
fixed:
  - references: [R7, R8]
    kind: resistor
    value: 470R
    tolerance: 5%
    rating_w: 1/4W
  - references: D9
    kind: diode
    value: 1n4148
`

func TestAJobFileReads(t *testing.T) {
	parsed, err := ParseJob("pier.yaml", []byte(pierJob))
	if err != nil {
		t.Fatal(err)
	}
	job := parsed.Job
	if job.Name != "pier" || job.Boards != 12 || len(job.Stages) != 2 || len(job.Fixed) != 2 {
		t.Fatalf("read %+v", job)
	}
	lead, horn := job.Stages[0], job.Stages[1]
	if lead.References["timer"] != "U1" || len(lead.Spec.Requirements) != 2 || lead.Spec.PartsEach != 2 || lead.Spec.PartsC != 2 {
		t.Errorf("lead %+v", lead)
	}
	if s := lead.Spec.Supply; s.Min < 8.0999 || s.Max > 9.9001 || lead.Spec.Ambient.Nominal != 22.5 {
		t.Errorf("supply %v, ambient %v", s, lead.Spec.Ambient)
	}
	if horn.Spec.PartsEach != 1 || horn.Spec.PartsC != 2 || horn.Spec.LoadA != 0.02 || len(horn.Spec.Circuits) != 2 {
		t.Errorf("horn %+v", horn.Spec)
	}
	if f := job.Fixed[0]; f.Part.Value != 470 || f.Part.RatingW != 0.25 || len(f.References) != 2 {
		t.Errorf("fixed %+v", f)
	}
	if f := job.Fixed[1]; f.Part.PartNumber != "1N4148" || f.Part.Kind != inventory.Diode {
		t.Errorf("fixed %+v", f)
	}
}

func TestPlainNumbersReadAsTheyAreWritten(t *testing.T) {
	parsed, err := ParseJob("n.yaml", []byte("job: 7\nboards: 3\nsupply: 9\nstages:\n  - {name: 1, duty: 0.5, period: 4s}\n"))
	if err != nil {
		t.Fatal(err)
	}
	if parsed.Job.Name != "7" || parsed.Job.Stages[0].Name != "1" || parsed.Job.Stages[0].Spec.Supply != optimize.Exactly(9) {
		t.Errorf("read %+v", parsed.Job)
	}
}

func TestAWrongJobFileIsPointedAt(t *testing.T) {
	stage := "stages:\n  - {name: a, period: 4s}\n"
	for name, test := range map[string]struct {
		text    string
		line    int
		message string
	}{
		"empty":               {"", 0, "empty"},
		"not yaml":            {"job: [", 1, ""},
		"unknown key":         {"job: x\ncolour: red\n" + stage, 2, "colour"},
		"duplicate key":       {"job: x\njob: y\n" + stage, 2, "job"},
		"no name":             {"boards: 2\n" + stage, 0, "needs a name"},
		"no stages":           {"job: x\n", 0, "no stages"},
		"fractional boards":   {"job: x\nboards: 1.5\n" + stage, 2, "whole number"},
		"negative boards":     {"job: x\nboards: -3\n" + stage, 2, "whole number"},
		"bad quantity":        {"job: x\nstages:\n  - name: a\n    period: 4q\n", 4, "4q"},
		"contradiction":       {"job: x\nstages:\n  - {name: a, high: 1s, low: 1s, duty: 80%}\n", 3, "stage a"},
		"nothing stated":      {"job: x\nstages:\n  - {name: a}\n", 3, "stage a"},
		"same stage twice":    {"job: x\nstages:\n  - {name: a, period: 4s}\n  - {name: a, period: 4s}\n", 4, "two stages"},
		"unknown position":    {"job: x\nstages:\n  - name: a\n    period: 4s\n    references: {rq: R1}\n", 5, "rq"},
		"reference twice":     {"job: x\n" + stage + "fixed:\n  - {references: [R1], kind: resistor, value: 1k}\n  - {references: [r1], kind: resistor, value: 2k}\n", 6, "r1 is the place"},
		"fixed without value": {"job: x\n" + stage + "fixed:\n  - {references: [R1], kind: resistor}\n", 5, "value"},
		"fixed of no kind":    {"job: x\n" + stage + "fixed:\n  - {references: [R1], kind: spoon, value: 1k}\n", 5, "spoon"},
		"alias":               {"job: x\nboards: 1\nsupply: *a\n" + stage, 3, "alias"},
		"anchor":              {"job: &a x\n" + stage, 1, "anchor"},
		"tag":                 {"job: !!str x\n" + stage, 1, "tag"},
		"bad basis":           {"job: x\nbasis: hope\n" + stage, 2, "hope"},
		"list for a text":     {"job: [a, b]\n" + stage, 1, ""},
		"bom and fixed":       {"job: x\nbom: a.csv\n" + stage + "fixed:\n  - {references: [R1], kind: resistor, value: 1k}\n", 2, "not both"},
		"two documents":       {"job: x\n" + stage + "---\njob: y\n", 0, "documents"},
		"too large":           {"job: x" + strings.Repeat(" ", maxJobBytes), 0, "larger"},
	} {
		_, err := ParseJob("f.yaml", []byte(test.text))
		var wrong *JobError
		if !errors.As(err, &wrong) {
			t.Errorf("%s: %v, want a JobError", name, err)
			continue
		}
		if wrong.Line != test.line || !strings.Contains(wrong.Error(), test.message) {
			t.Errorf("%s: line %d, want %d with %q: %v", name, wrong.Line, test.line, test.message, err)
		}
		if strings.Contains(wrong.Message, "\n") {
			t.Errorf("%s: the message runs over lines: %q", name, wrong.Message)
		}
	}
}

func FuzzParseJob(f *testing.F) {
	f.Add([]byte(pierJob))
	f.Add([]byte("job: x\nstages:\n  - {name: a, period: 4s}\n"))
	f.Add([]byte("a: &a [*a]\n"))
	f.Fuzz(func(t *testing.T, content []byte) {
		parsed, err := ParseJob("f.yaml", content)
		var wrong *JobError
		if err != nil && !errors.As(err, &wrong) {
			t.Errorf("%v is no JobError", err)
		}
		if err == nil && (parsed.Job.Boards < 1 || len(parsed.Job.Stages) == 0) {
			t.Errorf("read %+v without an error", parsed.Job)
		}
	})
}
