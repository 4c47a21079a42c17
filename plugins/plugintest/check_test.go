package plugintest

import (
	"context"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

var beadsKind = artifact.Kind{Name: "beads", Version: 1, Tables: []artifact.TableSpec{
	{Name: "beads", Columns: []artifact.Column{{Name: "mass", Type: artifact.Float, Unit: "kg"}}}}}

var kinds = artifact.NewRegistry(beadsKind, artifact.Kind{Name: "other", Version: 1})

// doubling is a stage without fault; tests spoil it.
type doubling struct {
	describe func(*stage.Description)
	masses   func(c *stage.Call, masses []float64)
	outcome  func(c *stage.Call, o *stage.Outcome) error
	deaf     bool
	mute     bool
	slow     bool
	kind     artifact.Kind
}

func (s doubling) Describe() stage.Description {
	d := stage.Description{Name: "doubling", About: "doubles beads",
		Arguments: []stage.Argument{{Name: "beads", About: "beads to double", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"beads"}}, Required: true},
			{Name: "factor", About: "how often", Type: stage.Type{Kind: stage.Number}, Default: 2.0}},
		Outputs: []stage.Output{{Name: "beads", Kind: "beads", About: "doubled beads"}},
		Figures: []stage.Figure{{Name: "total", About: "mass of all", Type: stage.Type{Kind: stage.Amount, Dimension: "mass"}}}}
	if s.describe != nil {
		s.describe(&d)
	}
	return d
}

func (s doubling) Run(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
	if !s.deaf && ctx.Err() != nil {
		return nil, fault.From(ctx.Err())
	}
	if !s.mute {
		c.Report.Progress("doubling", 0.5)
	}
	if s.slow {
		time.Sleep(1300 * time.Millisecond) // and does not look at the context again
	}
	in, err := artifact.Open(c.Inputs["beads"][0].Folder, kinds)
	if err != nil {
		return nil, err
	}
	total := 0.0
	var masses []float64
	for _, m := range in.Table("beads").Floats("mass") {
		masses = append(masses, m*c.Arguments.Number("factor"))
		total += masses[len(masses)-1]
	}
	if s.masses != nil {
		s.masses(c, masses)
	}
	kind := beadsKind
	if s.kind.Name != "" {
		kind = s.kind
	}
	out := artifact.New(kind)
	if kind.Name == "beads" {
		out.Table("beads").Set("mass", masses)
	}
	if _, err := artifact.Write(c.Outputs["beads"], out); err != nil {
		return nil, err
	}
	o := &stage.Outcome{Figures: map[string]any{"total": stage.Quantity{SI: total, Dimension: "mass"}}}
	if s.outcome != nil {
		return o, s.outcome(c, o)
	}
	return o, nil
}

func TestCheck(t *testing.T) {
	beads := artifact.New(beadsKind)
	beads.Table("beads").Set("mass", []float64{1, 2})
	c := Case{Inputs: map[string][]*artifact.Artifact{"beads": {beads}}, Folder: "."}
	calls := 0
	for name, x := range map[string]struct {
		stage doubling
		want  string
	}{
		"without fault":   {doubling{}, ""},
		"bad name":        {doubling{describe: func(d *stage.Description) { d.Name = "Doubling Stage" }}, `description: "Doubling Stage" is no name`},
		"no about":        {doubling{describe: func(d *stage.Description) { d.Arguments[1].About = "" }}, "description: argument factor has no about"},
		"full stop":       {doubling{describe: func(d *stage.Description) { d.About = "doubles." }}, "description: the about of the stage ends with a full stop"},
		"two of one name": {doubling{describe: func(d *stage.Description) { d.Arguments[1].Name = "beads" }}, `description: two of the arguments are called "beads"`},
		"unknown kind":    {doubling{describe: func(d *stage.Description) { d.Arguments[0].Type.Kinds[0] = "pearls" }}, `argument beads takes the unknown kind "pearls"`},
		"unknown output":  {doubling{describe: func(d *stage.Description) { d.Outputs[0].Kind = "pearls" }}, `output beads is of the unknown kind "pearls"`},
		"bad publish":     {doubling{describe: func(d *stage.Description) { d.Outputs[0].Publish = "factor" }}, `output beads is published to "factor", which is no argument of type target`},
		"bad dimension":   {doubling{describe: func(d *stage.Description) { d.Figures[0].Type.Dimension = "weight" }}, "figure total: "},
		"changing":        {doubling{describe: func(d *stage.Description) { calls++; d.Doc = fmt.Sprint(calls) }}, "description: a second one differs"},
		"bad default":     {doubling{describe: func(d *stage.Description) { d.Arguments[1].Default = 2 + 1i }}, "description: it does not survive the boundary"},
		"threads matter":  {doubling{masses: func(c *stage.Call, m []float64) { m[0] += float64(c.Threads) }}, "case 1: output beads has other content with other folders and threads"},
		"folders matter": {doubling{outcome: func(c *stage.Call, o *stage.Outcome) error { o.Notes = []string{c.Scratch}; return nil }},
			"case 1: the outcome names a folder of this machine"},
		"outcome differs": {doubling{outcome: func(c *stage.Call, o *stage.Outcome) error {
			o.Notes = []string{fmt.Sprint(c.Threads)}
			return nil
		}}, "case 1: the outcome differs with other folders and threads"},
		"files differ": {doubling{outcome: func(c *stage.Call, o *stage.Outcome) error {
			_, _ = c.Files.Read(fmt.Sprint(c.Threads))
			return nil
		}}, "case 1: other files are read"},
		"mute":              {doubling{mute: true}, "case 1: it sends no progress"},
		"slow to stop":      {doubling{slow: true}, "case 1: stopped on the way it went on for"},
		"deaf":              {doubling{deaf: true}, "case 1: with a context that has ended it gives <nil>, not a fault of kind cancelled"},
		"wrong kind":        {doubling{kind: artifact.Kind{Name: "other", Version: 1}}, `case 1: output beads is of kind "other", not "beads" as declared`},
		"undeclared figure": {doubling{outcome: func(_ *stage.Call, o *stage.Outcome) error { o.Figures["more"] = 1.0; return nil }}, `case 1: stage doubling reports the figure "more", which it does not declare`},
		"figure of no type": {doubling{outcome: func(_ *stage.Call, o *stage.Outcome) error { o.Figures["total"] = 1.0; return nil }}, `case 1: stage doubling reports the figure "total" as float64`},
		"error is no fault": {doubling{outcome: func(*stage.Call, *stage.Outcome) error { return errors.New("oops") }}, "case 1: it gives an error that is no fault: oops"},
		"leaves other files": {doubling{outcome: func(c *stage.Call, _ *stage.Outcome) error {
			return os.WriteFile(filepath.Join(c.Outputs["beads"], "notes"), nil, 0o644)
		}}, "the file notes is no part of the artifact"},
	} {
		problems := Check(t.TempDir(), x.stage, kinds, c)
		if x.want == "" {
			if len(problems) != 0 {
				t.Errorf("%s: %q", name, problems)
			}
		} else if !strings.Contains(strings.Join(problems, "\n"), x.want) {
			t.Errorf("%s: %q, want %q", name, problems, x.want)
		}
	}
}

// The same suite holds a stage in a process of its own.
func TestProcess(t *testing.T) {
	beads := artifact.New(beadsKind)
	beads.Table("beads").Set("mass", []float64{1, 2})
	path := build(t, "./testdata/doubling")
	Stage(t, served(t, path, "doubling"), kinds, Case{Inputs: map[string][]*artifact.Artifact{"beads": {beads}}})

	// Started by hand, the executable says what it is.
	cmd := exec.Command(path)
	out, _ := cmd.CombinedOutput()
	want := `extension.exe is an extension for hushframe and does nothing on its own.
It offers
  the stage "doubling": doubles beads
Put it in the folder "extensions" beside a job, or in yours, and pin it: hushframe extensions pin JOB.
`
	if string(out) != want || cmd.ProcessState.ExitCode() != 2 {
		t.Errorf("exit %d, it says\n%s", cmd.ProcessState.ExitCode(), out)
	}
}
