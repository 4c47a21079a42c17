package plugintest

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

var notesKind = artifact.Kind{Name: "notes", Version: 1, Files: "what was asked for"}

// asked is a stage with an argument of every type, which writes all that it is asked for into a file.
type asked struct {
	ignores  string // this argument
	describe func(*stage.Description)
	run      func(*stage.Call) error
}

func (s asked) Describe() stage.Description {
	zero, ten := 0.0, 10.0
	length := stage.Type{Kind: stage.Amount, Dimension: "length", Unit: "mm"}
	text, beads := stage.Type{Kind: stage.Text}, stage.Type{Kind: stage.Artifact, Kinds: []string{"beads"}}
	d := stage.Description{Name: "asked", About: "writes what it is asked for",
		Arguments: []stage.Argument{
			{Name: "beads", Type: beads, Required: true},
			{Name: "more", Type: stage.Type{Kind: stage.List, Element: &beads}},
			{Name: "to", Type: stage.Type{Kind: stage.Target}, Required: true},
			{Name: "file", Type: stage.Type{Kind: stage.File}, Required: true},
			{Name: "files", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.File}}},
			{Name: "title", Type: text, Default: `a "title" with ${this} and %{that}`},
			{Name: "form", Type: text, Choices: []string{"round", "square"}, Default: "round"},
			{Name: "factor", Type: stage.Type{Kind: stage.Number}, Default: 2.0, Max: &ten},
			{Name: "count", Type: stage.Type{Kind: stage.Whole}, Default: 3, Min: &zero, Max: &ten},
			{Name: "strict", Type: stage.Type{Kind: stage.Truth}, Default: true},
			{Name: "size", Type: length, Default: stage.Quantity{SI: 0.003, Dimension: "length"}, Above: &zero},
			{Name: "gap", Type: length, Example: `"2 mm"`},
			{Name: "sizes", Type: stage.Type{Kind: stage.List, Element: &length}, Min: &zero, Example: `["1 mm", "2 mm"]`},
			{Name: "names", Type: stage.Type{Kind: stage.Map, Element: &text}, Example: `{ roll = "gx" }`},
			{Name: "source", Type: stage.Type{Kind: stage.Object, Fields: []stage.Argument{
				{Name: "force", About: "f", Type: stage.Type{Kind: stage.Amount, Dimension: "force"}, Default: stage.Quantity{SI: 1, Dimension: "force"}, Above: &zero},
				{Name: "rotors", About: "r", Type: stage.Type{Kind: stage.List, Element: &text}},
			}}},
			{Name: "method", Type: text, Choices: []string{"plain", "fine"}, Default: "plain"},
			{Name: "options", Type: stage.Type{Kind: stage.Any}, OptionsOf: "method", Variants: map[string][]stage.Argument{
				"plain": {{Name: "steps", About: "s", Type: stage.Type{Kind: stage.Whole}, Default: 4.0}}, "fine": {}}},
			{Name: "whatever", Type: stage.Type{Kind: stage.Any}},
		},
		Outputs: []stage.Output{{Name: "notes", Kind: "notes", About: "what was asked for", Publish: "to"}},
	}
	for i := range d.Arguments {
		d.Arguments[i].About = "an argument"
	}
	if s.describe != nil {
		s.describe(&d)
	}
	return d
}

func (s asked) Run(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
	if ctx.Err() != nil {
		return nil, fault.From(ctx.Err())
	}
	c.Report.Progress("writing", 0)
	if s.run != nil {
		if err := s.run(c); err != nil {
			return nil, err
		}
	}
	notes := map[string]string{}
	for _, n := range c.Arguments.Names() {
		if n == s.ignores || n == "to" {
			continue
		}
		data, err := stage.EncodeValue(c.Arguments[n])
		if err != nil {
			return nil, err
		}
		notes[n] = string(data)
	}
	for _, n := range sortedKeys(c.Inputs) {
		for i, in := range c.Inputs[n] {
			if n == s.ignores {
				break
			}
			a, err := artifact.Open(in.Folder, asksOf)
			if err != nil {
				return nil, err
			}
			notes[n] += fmt.Sprint(i, a.Table("beads").Rows())
		}
	}
	for _, n := range append(c.Arguments.Texts("files"), c.Arguments.Text("file")) {
		if _, err := c.Files.Read(n); err != nil {
			return nil, err
		}
	}
	data, err := json.Marshal(notes)
	if err != nil {
		return nil, err
	}
	out := artifact.New(notesKind)
	name := path.Base(c.Arguments.Text("to"))
	if s.ignores == "to" {
		name = "notes.txt"
	}
	out.Files = map[string][]byte{name: data}
	_, err = artifact.Write(c.Outputs["notes"], out)
	return &stage.Outcome{}, err
}

var asksOf = artifact.NewRegistry(beadsKind, notesKind)

func askedCase(t *testing.T) Case {
	t.Helper()
	folder := t.TempDir()
	for _, n := range []string{"a.txt", "b.txt"} {
		if err := os.WriteFile(filepath.Join(folder, n), []byte(n), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	beads := artifact.New(beadsKind)
	beads.Table("beads").Set("mass", []float64{1, 2, 3})
	return Case{Folder: folder,
		Arguments: stage.Arguments{"to": "out/notes.txt", "file": "a.txt", "files": []any{"a.txt", "b.txt"}, "gap": stage.Quantity{SI: 0.001, Dimension: "length"},
			"names": map[string]any{"a key": "x"}, "source": map[string]any{"force": stage.Quantity{SI: 2, Dimension: "force"}}, "options": map[string]any{"steps": 5.0}},
		Inputs: map[string][]*artifact.Artifact{"beads": {beads}, "more": {beads, beads}},
		Vary:   map[string][]any{"whatever": {"x", 1}},
	}
}

// only leaves one argument in a description and a case, and what no job can leave out.
func only(t *testing.T, names ...string) (func(*stage.Description), Case) {
	c := askedCase(t)
	gone := func(a stage.Argument) bool {
		return !a.Required && !slices.Contains(names, a.Name) && !(a.Name == "method" && names[0] == "options")
	}
	for _, a := range (asked{}).Describe().Arguments {
		if gone(a) {
			delete(c.Arguments, a.Name)
			delete(c.Inputs, a.Name)
			delete(c.Vary, a.Name)
		}
	}
	return func(d *stage.Description) { d.Arguments = slices.DeleteFunc(d.Arguments, gone) }, c
}

// A stage that ignores any one of its arguments is caught, and one that heeds all of them is not blamed.
func TestIgnoredArguments(t *testing.T) {
	t.Parallel()
	c := askedCase(t)
	if p := Check(t.TempDir(), asked{}, asksOf, c); len(p) != 0 {
		t.Errorf("without fault: %q", p)
	}
	for _, a := range (asked{}).Describe().Arguments {
		want := "argument " + a.Name + " changes nothing: with "
		switch a.Name {
		case "to":
			want = `argument to = "out/other-notes.txt" is allowed by the description, and gives output notes is published to "out/other-notes.txt", and has no file "other-notes.txt"`
		case "file", "files": // they are read all the same
			continue
		case "method": // with another one come other options, which are written
			continue
		}
		few, alone := only(t, a.Name) // the others were heeded above
		if p := strings.Join(Check(t.TempDir(), asked{ignores: a.Name, describe: few}, asksOf, alone), "\n"); !strings.Contains(p, want) || strings.Count(p, "\n") > 0 {
			t.Errorf("want %q among\n%s", want, p)
		}
	}
	unread := func(d *stage.Description) {
		d.Arguments = append(d.Arguments, stage.Argument{Name: "unread", About: "a file", Type: stage.Type{Kind: stage.File}})
	}
	named := c
	named.Arguments = with(c.Arguments, "unread", "a.txt")
	if p := strings.Join(Check(t.TempDir(), asked{ignores: "unread", describe: unread}, asksOf, named), "\n"); !strings.Contains(p, "argument unread changes nothing") {
		t.Errorf("a file that is not read: %s", p)
	}

	// One case that shows the effect is enough.
	few, c := only(t, "whatever")
	plain := c
	plain.Name, plain.Vary = "without whatever", nil
	if p := Check(t.TempDir(), asked{describe: few}, asksOf, plain, c); len(p) != 0 {
		t.Errorf("two cases: %q", p)
	}
	want := "argument whatever was never varied: the suite cannot guess another value of it; give one in Vary of a case"
	if p := strings.Join(Check(t.TempDir(), asked{describe: few}, asksOf, plain), "\n"); p != want+", or say in Inert of a case why it changes nothing there" {
		t.Errorf("an argument of any type: %s", p)
	}
	few, c = only(t, "more")
	delete(c.Inputs, "more")
	if p := strings.Join(Check(t.TempDir(), asked{describe: few}, asksOf, c), "\n"); p != "argument more was never given: hand an artifact in with Inputs of a case, or say in Inert of a case why none is" {
		t.Errorf("an artifact that is never handed in: %s", p)
	}
	c.Inert = map[string]string{"more": "there is only one kind of bead"}
	if p := Check(t.TempDir(), asked{describe: few}, asksOf, c); len(p) != 0 {
		t.Errorf("an artifact that need not be handed in: %q", p)
	}
	if p := Check(t.TempDir(), asked{}, asksOf); len(p) != 1 || !strings.Contains(p[0], "no case to run was given") {
		t.Errorf("no case: %q", p)
	}
}

// What an author says of arguments is held to what they do.
func TestInertArguments(t *testing.T) {
	t.Parallel()
	c := askedCase(t)
	c.Inert = map[string]string{"form": "beads look alike from afar"}
	if p := Check(t.TempDir(), asked{ignores: "form"}, asksOf, c); len(p) != 0 {
		t.Errorf("an argument that is said to change nothing: %q", p)
	}
	for want, change := range map[string]func(*Case){
		`argument form is said to change nothing (so I think), and "square" changes the outcome`: func(c *Case) { c.Inert = map[string]string{"form": "so I think"} },
		"argument form is said to change nothing, without a reason":                              func(c *Case) { c.Inert = map[string]string{"form": " "} },
		`Inert names the argument "shape", which is not there`:                                   func(c *Case) { c.Inert = map[string]string{"shape": "gone"} },
		`Vary names the argument "shape", which is not there`:                                    func(c *Case) { c.Vary = map[string][]any{"shape": {1}} },
		`argument count: the value 11 of Vary is refused by the job: count is 11`:                func(c *Case) { c.Vary = map[string][]any{"count": {11}} },
		"no job can have this step: gap takes a length with a unit":                              func(c *Case) { c.Arguments = with(c.Arguments, "gap", 2) },
		"no job can have this step: there is no file":                                            func(c *Case) { c.Arguments = with(c.Arguments, "file", "c.txt") },
	} {
		c := askedCase(t)
		change(&c)
		if p := strings.Join(Check(t.TempDir(), asked{}, asksOf, c), "\n"); !strings.Contains(p, want) {
			t.Errorf("want %q among\n%s", want, p)
		}
	}
}

// What an argument declares must be what a job checks, and what it allows must be done or refused by name.
func TestSpoiledArguments(t *testing.T) {
	t.Parallel()
	argument := func(name string, change func(*stage.Argument)) func(*stage.Description) {
		return func(d *stage.Description) {
			for i := range d.Arguments {
				if d.Arguments[i].Name == name {
					change(&d.Arguments[i])
				}
			}
		}
	}
	low, high := 5.0, 20.0
	for want, s := range map[string]asked{
		"argument count: its own default, 3, is refused: count is 3, but it has to be at least 5": {describe: argument("count", func(a *stage.Argument) { a.Min = &low })},
		`argument gap: its own example "2 kg" is refused`:                                         {describe: argument("gap", func(a *stage.Argument) { a.Example = `"2 kg"` })},
		"argument gap is required and has a default, which no job can reach": {describe: argument("gap", func(a *stage.Argument) {
			a.Required, a.Default = true, stage.Quantity{SI: 1, Dimension: "length"}
		})},
		"argument title has bounds, which hold for numbers and quantities alone": {describe: argument("title", func(a *stage.Argument) { a.Max = &high })},
		"argument factor has choices, which hold for texts alone":                {describe: argument("factor", func(a *stage.Argument) { a.Choices = []string{"2"} })},
		"leaving out must be the same as giving the default":                     {describe: argument("source", func(a *stage.Argument) { a.Default = map[string]any{} })},
		"description: argument other is a target, and no output is published to it": {describe: func(d *stage.Description) {
			d.Arguments = append(d.Arguments, stage.Argument{Name: "other", About: "a file", Type: stage.Type{Kind: stage.Target}})
		}},
		"argument factor = -1 is allowed by the description, and gives a panic: no such factor; narrow its range or choices, or refuse the value with fault.New(fault.Input, …).Of(\"factor\")": {run: func(c *stage.Call) error {
			if c.Arguments.Number("factor") == -1 {
				panic("no such factor")
			}
			return nil
		}},
		`argument factor = 4 is refused without naming it (too much); add .Of("factor")`: {run: func(c *stage.Call) error {
			if c.Arguments.Number("factor") == 4 {
				return fault.New(fault.Input, "too much")
			}
			return nil
		}},
		"argument gap = no value is allowed by the description, and gives a panic": {run: func(c *stage.Call) error {
			_ = c.Arguments["gap"].(stage.Quantity)
			return nil
		}},
		"argument beads: without the files of its artifact it gives a panic": {run: func(c *stage.Call) error {
			a, _ := artifact.Open(c.Inputs["beads"][0].Folder, asksOf)
			_ = a.Kind
			return nil
		}},
	} {
		if p := strings.Join(Check(t.TempDir(), s, asksOf, askedCase(t)), "\n"); !strings.Contains(p, want) {
			t.Errorf("want %q among\n%s", want, p)
		}
	}

	// A value that is refused by name is heeded.
	picky := asked{run: func(c *stage.Call) error {
		if f := c.Arguments.Number("factor"); f != 2 {
			return fault.New(fault.Input, "%g is not two", f).Of("factor")
		}
		return nil
	}}
	if p := Check(t.TempDir(), picky, asksOf, askedCase(t)); len(p) != 0 {
		t.Errorf("a stage that refuses by name: %q", p)
	}
}
