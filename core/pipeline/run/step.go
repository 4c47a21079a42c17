package run

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"time"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// input is an artifact that a step takes.
type input struct {
	hash, kind, from string
}

// prepared is a step that the store has no result for.
type prepared struct {
	key       string
	arguments stage.Arguments
	inputs    map[string][]input
}

// hashes gives the content hashes of the inputs.
func (p *prepared) hashes() map[string][]string {
	if len(p.inputs) == 0 {
		return nil
	}
	out := map[string][]string{}
	for argument, list := range p.inputs {
		for _, in := range list {
			out[argument] = append(out[argument], in.hash)
		}
	}
	return out
}

// inputs gives the outputs of the steps a step needs, by address, and the
// account of the run for one that comes last.
func (r *runner) inputs(s *plan.Step) map[string]input {
	out := map[string]input{}
	for _, label := range s.Needs {
		for name, o := range r.steps[label].result.Outputs {
			from := job.ArtifactRef{Label: label, Output: name}.String()
			out[from] = input{o.Hash, o.Kind, from}
		}
	}
	if s.Last {
		out[account.KindName] = *r.account
	}
	return out
}

func (r *runner) figuresOf(s *job.Stage) job.Figures {
	out := job.Figures{}
	for _, label := range s.Figures {
		if f, ok := r.figures[label]; ok {
			out[label] = f
		}
	}
	return out
}

// prepareStep evaluates a step and looks it up: either what is needed to run
// it, or how it ended.
func (r *runner) prepareStep(s *plan.Step, available map[string]input, figures job.Figures) (*prepared, *Step) {
	p, diags := evaluate(r.Source, s, available, figures)
	if p == nil {
		result := Step{State: Failed, Fault: fault.New(fault.Input, "its arguments are wrong"), Diagnostics: diags}
		return nil, &result
	}
	if r.Force {
		return p, nil
	}
	record, ok := r.Store.Find(p.key, newWorld(r.ctx, r.Plan.Job.Folder, r.Source), r.Verify)
	if !ok {
		return p, nil
	}
	result := Step{State: Reused, Key: p.key, Outcome: record.Outcome, Inputs: p.hashes(), Outputs: record.Outputs, Files: record.Files,
		Elapsed: time.Duration(record.Seconds * float64(time.Second))}
	if err := r.publish(s, p, &result); err != nil {
		result = r.failed(s, p, err)
	}
	return nil, &result
}

// runStep runs a step with its share and keeps the result.
func (r *runner) runStep(s *plan.Step, p *prepared, threads int, memory int64) Step {
	began := time.Now()
	ctx := r.ctx
	if s.Stage.TimeLimit > 0 {
		var cancel context.CancelFunc
		ctx, cancel = context.WithTimeout(ctx, s.Stage.TimeLimit)
		defer cancel()
	}
	result, err := r.work(ctx, s, p, threads, memory, began)
	if err == nil {
		err = r.publish(s, p, result)
	}
	if err == nil {
		result.Elapsed = time.Since(began)
		return *result
	}
	if r.ctx.Err() != nil {
		return Step{State: Stopped, Key: p.key, Fault: fault.From(err), Elapsed: time.Since(began)}
	}
	if ctx.Err() != nil && errors.Is(ctx.Err(), context.DeadlineExceeded) {
		err = fault.New(fault.Limit, "it did not finish within %v", s.Stage.TimeLimit).Of("time_limit").Do("raise time_limit or make the step smaller")
	}
	out := r.failed(s, p, err)
	out.Elapsed = time.Since(began)
	return out
}

func (r *runner) failed(s *plan.Step, p *prepared, err error) Step {
	f := fault.From(err)
	return Step{State: Failed, Key: p.key, Fault: f, Diagnostics: r.Plan.Job.Diagnose(s.Stage, f)}
}

func (r *runner) work(ctx context.Context, s *plan.Step, p *prepared, threads int, memory int64, began time.Time) (*Step, error) {
	label, d := s.Stage.Label, s.Stage.Description
	st, ok := r.Source.Stage(s.Stage.Kind)
	if !ok {
		return nil, fault.New(fault.Missing, "there is no stage %q", s.Stage.Kind)
	}
	dir, err := r.Store.Scratch(label)
	if err != nil {
		return nil, err
	}
	defer os.RemoveAll(dir) // what is left goes with the scratch of the run
	services := &services{runner: r, checksum: r.Source.Checksum(s.Stage.Kind), threads: threads, memory: memory}
	call := &stage.Call{
		Arguments: p.arguments, Inputs: map[string][]stage.Input{}, Outputs: map[string]string{}, Scratch: filepath.Join(dir, "scratch"),
		Files: stage.NewFiles(r.Plan.Job.Folder), Threads: threads, Memory: memory,
		Report: reporter{r, label}, Services: services,
	}
	for argument, list := range p.inputs {
		for _, in := range list {
			call.Inputs[argument] = append(call.Inputs[argument], stage.Input{Folder: r.Store.Folder(in.hash), Kind: in.kind, Hash: in.hash, From: in.from})
		}
	}
	folders := []string{call.Scratch}
	for _, o := range d.Outputs {
		call.Outputs[o.Name] = filepath.Join(dir, "output-"+o.Name)
		folders = append(folders, call.Outputs[o.Name])
	}
	for _, f := range folders {
		if err := os.MkdirAll(f, 0o755); err != nil {
			return nil, fault.New(fault.Limit, "%v", err)
		}
	}
	outcome, err := st.Run(ctx, call)
	if err != nil {
		return nil, err
	}
	if err := ctx.Err(); err != nil { // a result after the end of time is none
		return nil, err
	}
	if outcome == nil {
		outcome = &stage.Outcome{}
	}
	if err := CheckFigures(d, outcome.Figures); err != nil {
		return nil, err
	}
	result := &Step{State: Ran, Key: p.key, Outcome: *outcome, Inputs: p.hashes(), Outputs: map[string]store.Output{}, Files: call.Files.Used()}
	for _, o := range d.Outputs {
		hash, err := r.Store.Adopt(call.Outputs[o.Name], o.Kind)
		if err != nil {
			return nil, badOutput(s.Stage.Kind, o.Name, err)
		}
		result.Outputs[o.Name] = store.Output{Kind: o.Kind, Hash: hash}
	}
	return result, r.Store.Save(p.key, &store.Record{
		Stage: s.Stage.Kind, Outputs: result.Outputs, Outcome: *outcome, Files: result.Files, Tools: services.used(),
		Seconds: time.Since(began).Round(time.Millisecond).Seconds(),
	})
}

// badOutput says of a fault of an artifact which stage and output it concerns;
// the scratch folder it names means nothing to anyone.
func badOutput(kind, output string, err error) error {
	cause := *fault.From(err)
	cause.Op, cause.Item = "", ""
	f := fault.New(cause.Kind, "stage %s did not write its output as declared", kind).In("take over output", output)
	f.Cause = &cause
	return f
}
