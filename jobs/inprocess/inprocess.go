// Package inprocess runs a job with the built-in stages inside this process,
// without starting any other: for the generators of the demo and for tests
// that look into artifacts. Jobs are otherwise run by the command, in
// processes.
package inprocess

import (
	"context"
	"fmt"
	"path/filepath"
	"runtime"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
	"hushframe/stages"
	"hushframe/stages/kinds"
)

// Done is a job that has been run.
type Done struct {
	Result *run.Result
	store  *store.Store
}

// Run loads and runs a job with its store in a folder of its own. A step that
// fails is an error; a broken requirement is not.
func Run(ctx context.Context, path, storeFolder string, set map[string]string) (*Done, error) {
	source := run.InProcess{Stages: stages.Builtin(), Sum: "in process"}
	j, diags := job.Load(ctx, path, job.Options{Set: set, Describe: func(_ context.Context, name string) (stage.Description, error) {
		if s, ok := source.Stage(name); ok {
			return s.Describe(), nil
		}
		return stage.Description{}, fault.New(fault.Missing, "there is no stage %q", name)
	}})
	if diags.HasErrors() {
		return nil, diags
	}
	p, diags := plan.Make(j)
	if diags.HasErrors() {
		return nil, diags
	}
	registry := kinds.Registry()
	registry[account.Kind.Name] = account.Kind
	st, err := store.Open(ctx, storeFolder, registry)
	if err != nil {
		return nil, err
	}
	defer st.Close()
	r, err := run.Run(ctx, run.Options{Plan: p, Source: source, Store: st, Observer: quiet{}, Name: filepath.Base(path), Program: "in process", Threads: runtime.GOMAXPROCS(0)})
	if err != nil {
		return nil, err
	}
	for _, s := range r.Steps {
		if s.Fault != nil {
			return nil, fmt.Errorf("step %s: %w", s.Label, s.Fault)
		}
		if !s.Done() {
			return nil, fmt.Errorf("step %s: %s: %w", s.Label, s.State, s.Diagnostics)
		}
	}
	return &Done{r, st}, nil
}

// Step finds the end of a step by its label; it panics if the job has none.
func (d *Done) Step(label string) run.Step {
	for _, s := range d.Result.Steps {
		if s.Label == label {
			return s
		}
	}
	panic("inprocess: the job has no step " + label)
}

// Artifact opens an output of a step.
func (d *Done) Artifact(label, output string) (*artifact.Artifact, error) {
	out, ok := d.Step(label).Outputs[output]
	if !ok {
		return nil, fmt.Errorf("step %s has no output %s", label, output)
	}
	return d.store.Load(out.Hash)
}

type quiet struct{}

func (quiet) Begin(string, string, int)              {}
func (quiet) Progress(string, string, float64)       {}
func (quiet) Log(string, stage.Level, string, []any) {}
func (quiet) End(run.Step)                           {}
func (quiet) Judged(run.Verdict)                     {}
