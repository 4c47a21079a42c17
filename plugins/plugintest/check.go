package plugintest

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"path"
	"path/filepath"
	"reflect"
	"regexp"
	"slices"
	"sort"
	"strings"
	"sync/atomic"
	"time"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/stage"
)

// Check lists the problems of a stage, working below an empty folder.
//
// The description must be complete, constant and survive the boundary. Each
// case must run and write what it declares; run again, with another number of
// threads and other folders, it must write the same bytes and report the same;
// it must send progress; with a context that has ended it must end with a fault
// of kind cancelled, and so within a second when the context ends on the way.
//
// Each argument must be such that a job with a value of the wrong type, unit or
// range, an unknown choice or no value where one is required is refused by its
// name before anything runs, and leaving it out must be the same as giving its
// default. Other values of it, which the suite makes from type, range, choices
// and example (or takes from Vary), must change an artifact, a figure or what is
// told in at least one case, or be refused as an input under its name; an
// argument that may do neither is listed in Inert with the reason. An artifact
// that is handed in must be opened.
func Check(folder string, s stage.Stage, registry artifact.Registry, cases ...Case) []string {
	problems := checkDescription(s, registry)
	if len(problems) > 0 {
		return problems // no case can be run by a wrong one
	}
	if len(cases) == 0 {
		return []string{"no case to run was given; the suite needs at least one"}
	}
	g, heeds := &guarded{s}, map[string]*heeded{}
	for i, c := range cases {
		if c.Name == "" {
			c.Name = fmt.Sprint("case ", i+1)
		}
		for _, p := range checkCase(filepath.Join(folder, fmt.Sprint(i)), g, registry, c, heeds) {
			problems = append(problems, c.Name+": "+p)
		}
	}
	if len(problems) > 0 {
		return problems // what changes nothing might be a consequence
	}
	for _, a := range s.Describe().Arguments {
		if p := heeds[a.Name].verdict("argument", a); p != "" {
			problems = append(problems, p)
		}
	}
	return problems
}

var name = regexp.MustCompile(`^[a-z][a-z0-9]*([_-][a-z0-9]+)*$`)

func checkDescription(s stage.Stage, registry artifact.Registry) []string {
	var problems []string
	bad := func(format string, args ...any) {
		problems = append(problems, "description: "+fmt.Sprintf(format, args...))
	}
	d := s.Describe()
	if !reflect.DeepEqual(d, s.Describe()) {
		bad("a second one differs")
	}
	data, err := json.Marshal(d)
	var back stage.Description
	if err == nil {
		err = json.Unmarshal(data, &back)
	}
	if again, _ := json.Marshal(back); err != nil || string(again) != string(data) {
		bad("it does not survive the boundary: %v", err)
	}
	about := func(what, text string) { checkAbout(bad, what, text) }
	if !name.MatchString(d.Name) {
		bad("%q is no name: lower-case words joined by - or _", d.Name)
	}
	about("the stage", d.About)
	seen := map[string]bool{}
	unique := func(kind, n string) {
		if !name.MatchString(n) {
			bad("%q is no name of %s", n, kind)
		}
		if seen[kind+n] {
			bad("two of %s are called %q", kind, n)
		}
		seen[kind+n] = true
	}
	arguments := map[string]stage.Argument{}
	for _, a := range d.Arguments {
		unique("the arguments", a.Name)
		about("argument "+a.Name, a.About)
		arguments[a.Name] = a
		checkType("argument "+a.Name, a.Type, registry, bad)
	}
	for _, o := range d.Outputs {
		unique("the outputs", o.Name)
		about("output "+o.Name, o.About)
		if _, ok := registry[o.Kind]; !ok {
			bad("output %s is of the unknown kind %q", o.Name, o.Kind)
		}
		if o.Publish != "" && arguments[o.Publish].Type.Kind != stage.Target {
			bad("output %s is published to %q, which is no argument of type target", o.Name, o.Publish)
		}
	}
	for _, n := range sortedKeys(arguments) {
		if arguments[n].Type.Kind == stage.Target && !slices.ContainsFunc(d.Outputs, func(o stage.Output) bool { return o.Publish == n }) {
			bad("argument %s is a target, and no output is published to it: nothing would be written there", n)
		}
	}
	for _, f := range d.Figures {
		unique("the figures", f.Name)
		about("figure "+f.Name, f.About)
		checkType("figure "+f.Name, f.Type, registry, bad)
	}
	return problems
}

func checkAbout(bad func(string, ...any), what, text string) {
	if text == "" {
		bad("%s has no about", what)
	} else if strings.HasSuffix(text, ".") {
		bad("the about of %s ends with a full stop", what)
	}
}

func checkType(what string, t stage.Type, registry artifact.Registry, bad func(string, ...any)) {
	switch t.Kind {
	case stage.Amount:
		if err := quantity.Known(t.Dimension); err != nil {
			bad("%s: %v", what, err)
		}
	case stage.List, stage.Map:
		if t.Element == nil {
			bad("%s: its entries have no type", what)
		} else {
			checkType(what, *t.Element, registry, bad)
		}
	case stage.Object:
		for _, f := range t.Fields {
			checkType(what+"."+f.Name, f.Type, registry, bad)
		}
	case stage.Artifact:
		for _, k := range t.Kinds {
			if _, ok := registry[k]; !ok {
				bad("%s takes the unknown kind %q", what, k)
			}
		}
	}
}

// ending is what one run left.
type ending struct {
	progress int // events
	took     time.Duration
	hashes   map[string]string
	outcome  string
	files    []stage.FileUse
}

// text is what a changed argument must change.
func (e *ending) text() string {
	data, _ := json.Marshal([]any{e.hashes, e.outcome, e.files})
	return string(data)
}

func checkCase(folder string, s *guarded, registry artifact.Registry, c Case, heeds map[string]*heeded) []string {
	problems := trialOf(filepath.Join(folder, "described"), s.Describe(), c).checkDescribed()
	if len(problems) > 0 {
		return problems
	}
	first, err := runCase(context.Background(), filepath.Join(folder, "first"), s, registry, c, 1)
	if err != nil {
		return []string{err.Error()}
	}
	second, err := runCase(context.Background(), filepath.Join(folder, "second"), s, registry, c, 3)
	if err != nil {
		return []string{"a second time: " + err.Error()}
	}
	for n, h := range first.hashes {
		if second.hashes[n] != h {
			problems = append(problems, fmt.Sprintf("output %s has other content with other folders and threads", n))
		}
	}
	sort.Strings(problems)
	if first.outcome != second.outcome {
		problems = append(problems, fmt.Sprintf("the outcome differs with other folders and threads:\n%s\n%s", first.outcome, second.outcome))
	}
	if !reflect.DeepEqual(first.files, second.files) {
		problems = append(problems, fmt.Sprintf("other files are read: %v, then %v", first.files, second.files))
	}
	if first.progress == 0 {
		problems = append(problems, "it sends no progress; call.Report.Progress says what it does and how far it is")
	}
	if first.took > 50*time.Millisecond {
		soon, stop := context.WithTimeout(context.Background(), first.took/10)
		_, _ = runCase(soon, filepath.Join(folder, "stopped"), s, registry, c, 1) // however it ends: that it ends soon
		at, _ := soon.Deadline()
		late := time.Since(at)
		stop()
		if late > time.Second {
			problems = append(problems, fmt.Sprintf("stopped on the way it went on for %v; look at the context in every long loop", late.Round(time.Millisecond)))
		}
	}
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := runCase(ended, filepath.Join(folder, "cancelled"), s, registry, c, 1); fault.KindOf(err) != fault.Cancelled {
		problems = append(problems, fmt.Sprintf("with a context that has ended it gives %v, not a fault of kind cancelled", err))
	}
	if len(problems) == 0 {
		problems = checkHeeded(filepath.Join(folder, "changed"), s, registry, c, first, heeds)
	}
	return problems
}

func runCase(ctx context.Context, folder string, s stage.Stage, registry artifact.Registry, c Case, threads int) (*ending, error) {
	d, heard := s.Describe(), &counting{}
	call := &stage.Call{Inputs: map[string][]stage.Input{}, Outputs: map[string]string{},
		Scratch: filepath.Join(folder, "scratch"), Files: stage.NewFiles(c.Folder), Threads: threads,
		Report: heard, Services: &alone{folder: filepath.Join(folder, "kept")}}
	arguments, told := trialOf(filepath.Join(folder, "job"), d, c).ask(nil)
	if told != "" {
		return nil, fault.New(fault.Internal, "no job can have this step: %s", told)
	}
	for _, a := range d.Arguments {
		if v := c.Arguments[a.Name]; v != nil && takesFiles(a.Type) {
			arguments[a.Name] = plain(v) // as it was named, not where it lies
		}
	}
	call.Arguments = arguments
	folders := []string{call.Scratch}
	for n, list := range c.Inputs {
		for i, a := range list {
			in := filepath.Join(folder, "input", n, fmt.Sprint(i))
			if err := os.MkdirAll(in, 0o755); err != nil {
				return nil, err
			}
			hash, err := artifact.Write(in, a)
			if err != nil {
				return nil, err
			}
			if n == c.hollow {
				if err := errors.Join(os.RemoveAll(in), os.MkdirAll(in, 0o755)); err != nil {
					return nil, err
				}
			}
			call.Inputs[n] = append(call.Inputs[n], stage.Input{Folder: in, Kind: a.Kind.Name, Hash: hash, From: fmt.Sprintf("stage.%s.%d", n, i)})
		}
	}
	for _, o := range d.Outputs {
		call.Outputs[o.Name] = filepath.Join(folder, "output", o.Name)
		folders = append(folders, call.Outputs[o.Name])
	}
	for _, f := range folders {
		if err := os.MkdirAll(f, 0o755); err != nil {
			return nil, err
		}
	}
	began := time.Now()
	o, err := s.Run(ctx, call)
	took := time.Since(began)
	if err != nil {
		var f *fault.Error
		if !errors.As(err, &f) {
			return nil, fmt.Errorf("it gives an error that is no fault: %v", err)
		}
		return nil, err
	}
	if o == nil {
		o = &stage.Outcome{}
	}
	if err := run.CheckFigures(d, o.Figures); err != nil {
		return nil, err
	}
	out := &ending{progress: int(heard.events.Load()), took: took, hashes: map[string]string{}, files: call.Files.Used()}
	for _, x := range d.Outputs {
		a, err := artifact.OpenExact(call.Outputs[x.Name], registry)
		if err != nil {
			return nil, fmt.Errorf("output %s: %w", x.Name, err)
		}
		if a.Kind.Name != x.Kind {
			return nil, fmt.Errorf("output %s is of kind %q, not %q as declared", x.Name, a.Kind.Name, x.Kind)
		}
		if target := strings.ReplaceAll(call.Arguments.Text(x.Publish), `\`, "/"); x.Publish != "" && target != "" {
			if _, ok := a.Files[path.Base(target)]; !ok {
				return nil, fault.New(fault.Protocol, "output %s is published to %q, and has no file %q: name its main file by the last part of the target", x.Name, target, path.Base(target)).Of(x.Publish)
			}
		}
		if _, err := artifact.Seal(call.Outputs[x.Name], a); err != nil {
			return nil, fmt.Errorf("output %s: %w", x.Name, err)
		}
		out.hashes[x.Name] = a.Hash()
	}
	data, err := json.Marshal(o)
	if err != nil {
		return nil, fmt.Errorf("the outcome cannot cross the boundary: %w", err)
	}
	if strings.Contains(string(data), filepath.ToSlash(folder)) {
		return nil, fmt.Errorf("the outcome names a folder of this machine: %s", data)
	}
	out.outcome = string(data)
	return out, nil
}

// counting counts what it hears of progress.
type counting struct{ events atomic.Int64 }

func (c *counting) Progress(string, float64)        { c.events.Add(1) }
func (c *counting) Log(stage.Level, string, ...any) {}

// alone keeps intermediate results of one call and reaches no extension.
type alone struct{ folder string }

func (a *alone) Keep(_ context.Context, key string, make func(string) error) (string, bool, error) {
	folder := filepath.Join(a.folder, fmt.Sprintf("%x", key))
	if _, err := os.Stat(folder); err == nil {
		return folder, true, nil
	}
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return "", false, err
	}
	if err := make(folder); err != nil {
		_ = os.RemoveAll(folder)
		return "", false, err
	}
	return folder, false, nil
}

func (a *alone) Element(_ context.Context, name string, _ stage.ExtensionRequest) error {
	return fault.New(fault.Missing, "no extension offers the element %q", name)
}

func (a *alone) Reader(_ context.Context, name string, _ stage.ExtensionRequest) error {
	return fault.New(fault.Missing, "no extension offers the reader %q", name)
}

func (a *alone) Extensions(context.Context) ([]stage.Extension, error) { return nil, nil }
