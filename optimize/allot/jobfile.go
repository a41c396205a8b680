package allot

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"github.com/goccy/go-yaml"
	"github.com/goccy/go-yaml/ast"
	"github.com/goccy/go-yaml/parser"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
	"tickdrawer/optimize"
)

// maxJobBytes bounds a job file: a board is described in a few hundred lines.
const maxJobBytes = 1 << 20

// Defaults of a job file and of the command line alike.
const (
	DefaultSupply     = "9V"
	DefaultAmbient    = "25C"
	DefaultPartsEach  = 2
	DefaultResolution = 0.001
)

// JobError says where a job file is wrong.
type JobError struct {
	File         string
	Line, Column int // from 1; 0 where the whole file is meant
	Message      string
}

func (e *JobError) Error() string {
	if e.Line == 0 {
		return fmt.Sprintf("%s: %s", e.File, e.Message)
	}
	return fmt.Sprintf("%s, line %d, column %d: %s", e.File, e.Line, e.Column, e.Message)
}

// scalar is a YAML scalar as it is written: text and plain numbers alike.
type scalar string

func (s *scalar) UnmarshalYAML(node ast.Node) error {
	switch node := node.(type) {
	case *ast.StringNode:
		*s = scalar(node.Value)
	case *ast.LiteralNode:
		*s = scalar(node.Value.Value)
	case *ast.IntegerNode, *ast.FloatNode:
		*s = scalar(strings.TrimSpace(node.GetToken().Value))
	case *ast.NullNode:
	default:
		return positioned(node, "a text or a number belongs here")
	}
	return nil
}

// positioned returns a JobError at the node; yamlError puts the file's name in.
func positioned(node ast.Node, message string) error {
	at := node.GetToken().Position
	return &JobError{Line: at.Line, Column: at.Column, Message: message}
}

// scalars is one scalar or a list of them.
type scalars []scalar

func (s *scalars) UnmarshalYAML(node ast.Node) error {
	members := []ast.Node{node}
	if list, ok := node.(*ast.SequenceNode); ok {
		members = list.Values
	}
	*s = make(scalars, len(members))
	for i, member := range members {
		if err := (*s)[i].UnmarshalYAML(member); err != nil {
			return err
		}
	}
	return nil
}

func (s scalars) texts() []string {
	var texts []string
	for _, one := range s {
		for text := range strings.SplitSeq(string(one), ",") {
			texts = append(texts, strings.TrimSpace(text))
		}
	}
	return texts
}

type jobFile struct {
	Job     scalar      `yaml:"job"`
	Boards  scalar      `yaml:"boards"`
	Supply  scalar      `yaml:"supply"`
	Ambient scalar      `yaml:"ambient"`
	Timer   scalars     `yaml:"timer"`
	Basis   scalar      `yaml:"basis"`
	Stages  []stageFile `yaml:"stages"`
	Fixed   []fixedFile `yaml:"fixed"`
	BOM     scalar      `yaml:"bom"`
}

type stageFile struct {
	Name       scalar            `yaml:"name"`
	High       scalar            `yaml:"high"`
	Low        scalar            `yaml:"low"`
	Period     scalar            `yaml:"period"`
	Frequency  scalar            `yaml:"frequency"`
	Duty       scalar            `yaml:"duty"`
	Pulse      scalar            `yaml:"pulse"`
	Circuit    scalars           `yaml:"circuit"`
	Timer      scalars           `yaml:"timer"`
	Load       scalar            `yaml:"load"`
	PartsEach  scalar            `yaml:"parts_each"`
	PartsC     scalar            `yaml:"parts_c"`
	References map[string]scalar `yaml:"references"`
}

type fixedFile struct {
	References scalars `yaml:"references"`
	Kind       scalar  `yaml:"kind"`
	Value      scalar  `yaml:"value"`
	Tolerance  scalar  `yaml:"tolerance"`
	RatingV    scalar  `yaml:"rating_v"`
	RatingW    scalar  `yaml:"rating_w"`
	Dielectric scalar  `yaml:"dielectric"`
	Package    scalar  `yaml:"package"`
	PartNumber scalar  `yaml:"part_number"`
}

// ParsedJob is a job file's job, and the BOM file that it names, if any.
type ParsedJob struct {
	Job optimize.Job
	BOM string // as written; relative to the job file
}

// ParseJob returns the job that a job file's content describes. The name is for
// messages. The error is a *JobError.
func ParseJob(name string, content []byte) (ParsedJob, error) {
	if len(content) > maxJobBytes {
		return ParsedJob{}, &JobError{File: name, Message: fmt.Sprintf("larger than %d bytes: this is no job file", maxJobBytes)}
	}
	tree, file, err := decode(name, content)
	if err != nil {
		return ParsedJob{}, err
	}
	r := reader{name: name, tree: tree}
	job, err := r.job(file)
	return ParsedJob{Job: job, BOM: string(file.BOM)}, err
}

// decode returns the file's tree and its content.
func decode(name string, content []byte) (tree *ast.File, file jobFile, err error) {
	defer func() {
		// The library has panicked on broken documents; a person sees a sentence.
		if recover() != nil {
			err = &JobError{File: name, Message: "this is no YAML that can be read: check the indents and the dashes"}
		}
	}()
	if tree, err = parser.ParseBytes(content, 0); err != nil {
		return nil, file, yamlError(name, err)
	}
	if len(tree.Docs) == 0 || tree.Docs[0].Body == nil {
		return nil, file, &JobError{File: name, Message: "the file is empty: a job needs job, boards and stages"}
	}
	if len(tree.Docs) > 1 {
		return nil, file, &JobError{File: name, Message: fmt.Sprintf("the file holds %d documents: one job a file", len(tree.Docs))}
	}
	// Aliases can make a small file expand without end; no job needs them.
	for _, refused := range []ast.NodeType{ast.AliasType, ast.AnchorType, ast.TagType} {
		for _, node := range ast.Filter(refused, tree.Docs[0].Body) {
			at := node.GetToken().Position
			return nil, file, &JobError{name, at.Line, at.Column, fmt.Sprintf("%s is not read here: write the value alone", strings.ToLower(refused.String()))}
		}
	}
	if err = yaml.UnmarshalWithOptions(content, &file, yaml.Strict()); err != nil {
		return nil, file, yamlError(name, err)
	}
	return tree, file, nil
}

// yamlError turns the library's error into ours, keeping its position.
func yamlError(name string, err error) error {
	var ours *JobError
	if errors.As(err, &ours) {
		return &JobError{name, ours.Line, ours.Column, ours.Message}
	}
	var positioned yaml.Error
	if errors.As(err, &positioned) && positioned.GetToken() != nil {
		at := positioned.GetToken().Position
		return &JobError{name, at.Line, at.Column, positioned.GetMessage()}
	}
	return &JobError{File: name, Message: err.Error()}
}

// reader turns the file's texts into a job and finds the place of what is wrong.
type reader struct {
	name string
	tree *ast.File
}

// errorf returns a JobError at the YAML path, or at the nearest parent of it
// that the file has.
func (r *reader) errorf(path, format string, args ...any) error {
	e := &JobError{File: r.name, Message: fmt.Sprintf(format, args...)}
	for path != "" {
		if yamlPath, err := yaml.PathString("$." + path); err == nil {
			if node, err := yamlPath.FilterFile(r.tree); err == nil && node != nil {
				at := node.GetToken().Position
				e.Line, e.Column = at.Line, at.Column
				return e
			}
		}
		path = path[:max(0, strings.LastIndexAny(path, ".["))]
	}
	return e
}

func (r *reader) job(file jobFile) (optimize.Job, error) {
	job := optimize.Job{Name: strings.TrimSpace(string(file.Job))}
	if job.Name == "" {
		return job, r.errorf("job", "the job needs a name: job: NAME")
	}
	var err error
	if job.Boards, err = r.count("boards", file.Boards, 1); err != nil {
		return job, err
	}
	if len(file.Stages) == 0 {
		return job, r.errorf("stages", "the job has no stages: name at least one")
	}
	if file.BOM != "" && len(file.Fixed) > 0 {
		return job, r.errorf("bom", "a job has fixed lines or a bom file, not both")
	}
	base := optimize.Spec{Boards: job.Boards, Resolution: DefaultResolution}
	if base.Supply, err = r.rangeOf("supply", file.Supply, "V", DefaultSupply); err != nil {
		return job, err
	}
	if base.Ambient, err = r.rangeOf("ambient", file.Ambient, "C", DefaultAmbient); err != nil {
		return job, err
	}
	base.Timers = file.Timer.texts()
	if file.Basis != "" {
		if base.Basis, err = optimize.ParseBasis(string(file.Basis)); err != nil {
			return job, r.errorf("basis", "%v", err)
		}
	}
	for i, stage := range file.Stages {
		read, err := r.stage(fmt.Sprintf("stages[%d]", i), stage, base)
		if err != nil {
			return job, err
		}
		if slices.ContainsFunc(job.Stages, func(s optimize.Stage) bool { return s.Name == read.Name }) {
			return job, r.errorf(fmt.Sprintf("stages[%d].name", i), "two stages are called %q", read.Name)
		}
		job.Stages = append(job.Stages, read)
	}
	for i, fixed := range file.Fixed {
		line, err := r.fixed(fmt.Sprintf("fixed[%d]", i), fixed)
		if err != nil {
			return job, err
		}
		job.Fixed = append(job.Fixed, line)
	}
	return job, r.uniqueReferences(job)
}

// count reads a whole number of at least 1; the default stands for "".
func (r *reader) count(path string, written scalar, otherwise int64) (int64, error) {
	if written == "" {
		return otherwise, nil
	}
	var n int64
	if _, err := fmt.Sscanf(string(written), "%d", &n); err != nil || fmt.Sprint(n) != string(written) || n < 1 || n > math.MaxInt32 {
		return 0, r.errorf(path, "%q is not a whole number of at least 1", written)
	}
	return n, nil
}

func (r *reader) rangeOf(path string, written scalar, unit, otherwise string) (optimize.Range, error) {
	text := string(written)
	if text == "" {
		text = otherwise
	}
	read, err := optimize.ParseRange(unit, text)
	if err != nil {
		return read, r.errorf(path, "%v", err)
	}
	return read, nil
}

func (r *reader) stage(path string, file stageFile, spec optimize.Spec) (optimize.Stage, error) {
	stage := optimize.Stage{Name: strings.TrimSpace(string(file.Name)), References: map[string]string{}}
	if stage.Name == "" {
		return stage, r.errorf(path, "every stage needs a name")
	}
	var requirements []optimize.Requirement
	for m, written := range map[optimize.Measure]scalar{
		optimize.High: file.High, optimize.Low: file.Low, optimize.Period: file.Period,
		optimize.Frequency: file.Frequency, optimize.Duty: file.Duty, optimize.Pulse: file.Pulse,
	} {
		if written == "" {
			continue
		}
		requirement, err := optimize.ParseRequirement(m, string(written))
		if err != nil {
			return stage, r.errorf(path+"."+m.String(), "%v", err)
		}
		requirements = append(requirements, requirement)
	}
	var err error
	if spec.Requirements, err = optimize.NewRequirements(requirements); err != nil {
		return stage, r.errorf(path, "stage %s: %v", stage.Name, err)
	}
	spec.Circuits = file.Circuit.texts()
	if len(file.Timer) > 0 {
		spec.Timers = file.Timer.texts()
	}
	if file.Load != "" {
		if spec.LoadA, err = marking.ParseMagnitude(string(file.Load), "A"); err != nil {
			return stage, r.errorf(path+".load", "%v", err)
		}
	}
	partsEach, err := r.count(path+".parts_each", file.PartsEach, DefaultPartsEach)
	if err != nil {
		return stage, err
	}
	partsC, err := r.count(path+".parts_c", file.PartsC, partsEach)
	if err != nil {
		return stage, err
	}
	spec.PartsEach, spec.PartsC = int(partsEach), int(partsC)
	stage.Spec = spec
	for position, reference := range file.References {
		if !slices.Contains(positions, position) {
			return stage, r.errorf(path+".references."+position, "%q is no position: known are %s", position, strings.Join(positions, ", "))
		}
		stage.References[position] = strings.TrimSpace(string(reference))
	}
	return stage, nil
}

// positions are the places that a stage can name.
var positions = []string{"ra", "rb", "rd", "r", "rh", "rl", "c", "d", "timer", "inverter"}

func (r *reader) fixed(path string, file fixedFile) (optimize.FixedLine, error) {
	line := optimize.FixedLine{References: file.References.texts()}
	if len(line.References) == 0 {
		return line, r.errorf(path, "a fixed line needs references: [R7]")
	}
	kind, err := inventory.ParseKind(string(file.Kind))
	if err != nil {
		return line, r.errorf(path+".kind", "%v", err)
	}
	part := inventory.Part{
		Kind: kind, PartNumber: string(file.PartNumber),
		Dielectric: string(file.Dielectric), Package: string(file.Package),
	}
	if file.Value != "" {
		switch kind.Unit() {
		case "ohm":
			part.Value, err = marking.ParseOhms(string(file.Value))
		case "f":
			part.Value, err = marking.ParseFarads(string(file.Value))
		default: // the value of a diode or a timer is its number
			part.PartNumber = string(file.Value)
		}
		if err != nil {
			return line, r.errorf(path+".value", "%v", err)
		}
	} else if kind.Unit() != "" {
		return line, r.errorf(path, "a fixed %s needs a value", kind)
	}
	if file.Tolerance != "" {
		tolerance, err := marking.ParseTolerance(string(file.Tolerance), part.Value, kind.Unit())
		if err != nil {
			return line, r.errorf(path+".tolerance", "%v", err)
		}
		part.Tolerance = &tolerance
	}
	for _, rating := range []struct {
		field, unit string
		written     scalar
		into        *float64
	}{{"rating_v", "V", file.RatingV, &part.RatingV}, {"rating_w", "W", file.RatingW, &part.RatingW}} {
		if rating.written == "" {
			continue
		}
		if *rating.into, err = marking.ParseMagnitude(string(rating.written), rating.unit); err != nil {
			return line, r.errorf(path+"."+rating.field, "%v", err)
		}
	}
	if line.Part, err = inventory.NewPart(part); err != nil {
		return line, r.errorf(path, "%v", err)
	}
	return line, nil
}

// uniqueReferences refuses a place of the board that two lines fill.
func (r *reader) uniqueReferences(job optimize.Job) error {
	taken := map[string]string{}
	take := func(path, reference, by string) error {
		if reference == "" {
			return r.errorf(path, "a reference is empty")
		}
		if other, ok := taken[strings.ToUpper(reference)]; ok {
			return r.errorf(path, "%s is the place of %s and of %s", reference, other, by)
		}
		taken[strings.ToUpper(reference)] = by
		return nil
	}
	for i, stage := range job.Stages {
		for _, position := range positions {
			if reference, ok := stage.References[position]; ok {
				if err := take(fmt.Sprintf("stages[%d].references.%s", i, position), reference, stage.Name+"."+position); err != nil {
					return err
				}
			}
		}
	}
	for i, line := range job.Fixed {
		for _, reference := range line.References {
			if err := take(fmt.Sprintf("fixed[%d]", i), reference, "a fixed line"); err != nil {
				return err
			}
		}
	}
	return nil
}
