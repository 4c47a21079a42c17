package plugintest

import (
	"context"
	"errors"
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"time"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// heeded gathers what is known of one argument or option over all cases.
type heeded struct {
	tried   []string // values, as a job writes them
	changed bool     // one of them changed something, or was refused under its name
	inert   bool     // a case says that it changes nothing there
}

// heed tries other values of one argument in one case. run gives what is compared, and a value that the description
// allows must either run or be refused as an input that names the argument.
func (h *heeded) heed(word string, a stage.Argument, reason string, declared bool, values []any, run func(v any) (string, error), usual string, bad func(string, ...any)) {
	if declared && strings.TrimSpace(reason) == "" {
		bad("%s %s is said to change nothing, without a reason", word, a.Name)
	}
	h.inert = h.inert || declared
	blamed := a.Name // as the job calls it
	if word == "option" {
		blamed = "options." + a.Name
	}
	for _, v := range values {
		text := shown(v)
		got, err := run(v)
		if !slices.Contains(h.tried, text) {
			h.tried = append(h.tried, text)
		}
		switch {
		case err == nil && got == usual:
			continue
		case err == nil:
		case !refusal(err):
			bad("%s %s = %s is allowed by the description, and gives %v; narrow its range or choices, or refuse the value with fault.New(fault.Input, …).Of(%q)", word, a.Name, text, err, blamed)
		case !blames(err, blamed):
			bad("%s %s = %s is refused without naming it (%v); add .Of(%q), so that the user is shown the line of the job", word, a.Name, text, err, blamed)
		}
		if declared && err == nil {
			bad("%s %s is said to change nothing (%s), and %s changes the outcome", word, a.Name, reason, text)
		}
		h.changed = true
	}
}

// verdict is the problem of an argument over all cases, "" for none.
func (h *heeded) verdict(word string, a stage.Argument) string {
	name := a.Name
	switch {
	case h == nil || h.changed || h.inert:
		return ""
	case len(h.tried) == 0 && takesArtifacts(a.Type):
		return fmt.Sprintf("%s %s was never given: hand an artifact in with Inputs of a case, or say in Inert of a case why none is", word, name)
	case len(h.tried) == 0:
		return fmt.Sprintf("%s %s was never varied: the suite cannot guess another value of it; give one in Vary of a case, or say in Inert of a case why it changes nothing there", word, name)
	}
	return fmt.Sprintf("%s %s changes nothing: with %s the outcome is the same to the last byte; is it read? If it cannot matter here, add a case where it does, or say why in Inert", word, name, strings.Join(h.tried, ", "))
}

func shown(v any) string {
	if _, ok := v.(leftOut); ok {
		return "no value"
	}
	text := []rune(inJob(v))
	if len(text) < 60 {
		return string(text)
	}
	return string(text[:57]) + "…"
}

// leftOut stands for an optional argument that is not given.
type leftOut struct{}

// refusal tells an error that a user can mend from one that nobody can.
func refusal(err error) bool {
	switch fault.KindOf(err) {
	case fault.Input, fault.Missing, fault.Limit:
		return true
	}
	return false
}

// blames tells whether an error, or one below it, names the argument or a part of it.
func blames(err error, argument string) bool {
	var f *fault.Error
	if !errors.As(err, &f) {
		return false
	}
	for ; f != nil; f = f.Cause {
		if rest, ok := strings.CutPrefix(f.Argument, argument); ok && (rest == "" || rest[0] == '.' || rest[0] == '[') {
			return true
		}
	}
	return false
}

// trialOf is the step of a case as a job has it.
func trialOf(folder string, d stage.Description, c Case) *trial {
	x := &trial{folder: folder, d: d, word: "argument", given: map[string]string{}}
	for _, a := range d.Arguments {
		if v, ok := c.Arguments[a.Name]; ok && v != nil {
			x.given[a.Name] = inJob(onDisk(a.Type, plain(v), c.Folder))
		}
		var list []string
		for _, in := range c.Inputs[a.Name] {
			list = append(list, x.reference(in.Kind.Name))
		}
		switch {
		case len(list) == 0:
		case a.Type.Kind == stage.List:
			x.given[a.Name] = "[" + strings.Join(list, ", ") + "]"
		default:
			x.given[a.Name] = list[0]
		}
	}
	return x
}

// onDisk gives files the paths they have outside the folder of the case.
func onDisk(t stage.Type, v any, folder string) any {
	switch v := v.(type) {
	case string:
		if t.Kind == stage.File && !filepath.IsAbs(v) {
			if whole, err := filepath.Abs(filepath.Join(folder, filepath.FromSlash(v))); err == nil {
				return filepath.ToSlash(whole)
			}
		}
	case []any:
		if listOf(t, stage.File) {
			out := make([]any, len(v))
			for i := range v {
				out[i] = onDisk(*t.Element, v[i], folder)
			}
			return out
		}
	}
	return v
}

// checkHeeded varies every argument of a case and every artifact it is given, against what the case gives as it is.
func checkHeeded(folder string, s *guarded, registry artifact.Registry, c Case, usual *ending, all map[string]*heeded) (problems []string) {
	bad := func(format string, args ...any) { problems = append(problems, fmt.Sprintf(format, args...)) }
	d := s.Describe()
	x := trialOf(filepath.Join(folder, "job"), d, c)
	given := withDefaults(d.Arguments, c.Arguments)
	known := map[string]bool{}
	for _, a := range d.Arguments {
		known[a.Name] = true
		h := all[a.Name]
		if h == nil {
			h = &heeded{}
			all[a.Name] = h
		}
		number := 0
		try := func(v any) (string, error) {
			number++
			n := c
			n.Arguments = with(c.Arguments, a.Name, v)
			for _, o := range optionsOf(d, a.Name) {
				delete(n.Arguments, o)
			}
			if _, ok := v.(leftOut); ok {
				delete(n.Arguments, a.Name)
				n.Inputs = maps.Clone(c.Inputs)
				delete(n.Inputs, a.Name)
			}
			return s.tried(filepath.Join(folder, fmt.Sprint(a.Name, "-", number)), registry, n, usual.took)
		}
		reason, declared := c.Inert[a.Name]
		var values []any
		if takesArtifacts(a.Type) {
			if len(c.Inputs[a.Name]) == 0 {
				h.inert = h.inert || declared && reason != ""
				continue
			}
			n := c
			n.hollow = a.Name
			if got, err := s.tried(filepath.Join(folder, a.Name+"-hollow"), registry, n, usual.took); err == nil && got == usual.text() {
				h.tried = append(h.tried, "an empty folder in the place of the artifact")
			} else {
				h.changed = true
				if broken(err) {
					bad("argument %s: without the files of its artifact it gives %v; hand on the error of artifact.Open", a.Name, err)
				}
			}
		} else {
			for _, v := range c.Vary[a.Name] {
				if _, told := x.ask(map[string]string{a.Name: inJob(onDisk(a.Type, plain(v), c.Folder))}); told != "" {
					bad("argument %s: the value %s of Vary is refused by the job: %s", a.Name, shown(plain(v)), told)
					continue
				}
				values = append(values, plain(v))
			}
			values = append(values, x.guesses(a, given, c, folder)...)
		}
		_, present := given[a.Name]
		if present = present || len(c.Inputs[a.Name]) > 0; present && !a.Required && a.Default == nil {
			values = append(values, leftOut{})
		}
		h.heed("argument", a, reason, declared, values, try, usual.text(), bad)
	}
	for _, n := range sortedKeys(c.Vary) {
		if !known[n] {
			bad("Vary names the argument %q, which is not there", n)
		}
	}
	for _, n := range sortedKeys(c.Inert) {
		if !known[n] {
			bad("Inert names the argument %q, which is not there", n)
		}
	}
	return problems
}

// guesses gives other values of an argument that a job would accept.
func (x *trial) guesses(a stage.Argument, given stage.Arguments, c Case, folder string) (values []any) {
	t, usual := a.Type, given[a.Name]
	if a.OptionsOf != "" {
		chosen, _ := given[a.OptionsOf].(string)
		t = stage.Type{Kind: stage.Object, Fields: a.Variants[chosen]}
	}
	if takesFiles(t) {
		return copies(t, usual, c.Folder, filepath.Join(folder, "files", a.Name))
	}
	values = others(a, t, usual)
	if q, ok := usual.(stage.Quantity); a.Example != "" && (usual == nil || ok && q.SI == 0) {
		if with, told := x.ask(map[string]string{a.Name: a.Example}); told == "" && !reflect.DeepEqual(with[a.Name], usual) {
			values = append([]any{with[a.Name]}, others(a, t, with[a.Name])...)
		}
	}
	var allowed []any
	change := map[string]string{}
	for _, o := range optionsOf(x.d, a.Name) {
		change[o] = leave
	}
	for _, v := range values {
		if _, told := x.ask(with(change, a.Name, inJob(v))); told == "" {
			allowed = append(allowed, v)
		}
	}
	return allowed
}

// optionsOf lists the arguments that hold the options of another's choice: with another choice they are others.
func optionsOf(d stage.Description, name string) (list []string) {
	for _, a := range d.Arguments {
		if a.OptionsOf == name {
			list = append(list, a.Name)
		}
	}
	return list
}

// copies puts the same file, or the first of a list, elsewhere: who reads it, reads it there.
func copies(t stage.Type, usual any, folder, to string) []any {
	list, isList := usual.([]any)
	name, _ := usual.(string)
	if isList && len(list) > 0 {
		name, _ = list[0].(string)
	}
	if name == "" {
		return nil
	}
	data, err := os.ReadFile(stage.NewFiles(folder).Path(name))
	if err != nil || os.MkdirAll(to, 0o755) != nil {
		return nil
	}
	path := filepath.Join(to, filepath.Base(name))
	if path, err = filepath.Abs(path); err != nil || os.WriteFile(path, data, 0o644) != nil {
		return nil
	}
	if isList {
		return []any{append([]any{filepath.ToSlash(path)}, list[1:]...)}
	}
	return []any{filepath.ToSlash(path)}
}

// broken tells an error that no input excuses.
func broken(err error) bool {
	kind := fault.KindOf(err)
	return err != nil && (kind == fault.Internal || kind == fault.Crash || kind == fault.Protocol)
}

// tried runs a case that differs from the usual one and gives what it leads to as text.
func (s *guarded) tried(folder string, registry artifact.Registry, c Case, usual time.Duration) (string, error) {
	patience := max(10*usual, 30*time.Second)
	ctx, stop := context.WithTimeout(context.Background(), patience)
	defer stop()
	e, err := runCase(ctx, folder, s, registry, c, 1)
	if err != nil && ctx.Err() != nil {
		return "", fault.New(fault.Limit, "no end after %v, where the case takes %v", patience, usual.Round(time.Millisecond))
	}
	if err != nil {
		return "", err
	}
	return e.text(), nil
}

// guarded is a stage whose panics are faults, as they are in a process of its own.
type guarded struct{ stage.Stage }

// Run implements stage.Stage.
func (s *guarded) Run(ctx context.Context, call *stage.Call) (o *stage.Outcome, err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fault.New(fault.Internal, "a panic: %v", r)
		}
	}()
	return s.Stage.Run(ctx, call)
}
