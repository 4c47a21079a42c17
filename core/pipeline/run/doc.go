// Package run carries out a plan: it finds what the store already has, runs
// the other steps, several at once within a budget of threads and memory,
// judges requirements as soon as their figures exist, and publishes reports.
//
// A step passes through these states: it waits for the steps it needs; it is
// prepared (arguments evaluated with the figures now known, its key looked up
// in the store); if the store has no result it queues for a share of the
// budget and runs; its outputs are checked, hashed and moved into the store,
// and its record is written. When a step fails, those that need it are
// skipped and all others still run. Steps marked Last wait until every other
// step has ended, and receive the account of the run.
package run

import (
	"context"
	"time"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// Source is where stages and extensions come from: processes or, in tests,
// values in this process.
type Source interface {
	// Stage finds a stage by the name used in jobs.
	Stage(name string) (stage.Stage, bool)
	// Checksum is the SHA-256 of the executable that runs a stage.
	Checksum(stage string) string
	// Call runs a method of an element type or reader.
	Call(ctx context.Context, kind, name string, request stage.ExtensionRequest) error
	// Extensions lists element types and readers, sorted.
	Extensions() []stage.Extension
}

// Options are what a run needs.
type Options struct {
	Plan     *plan.Plan
	Source   Source
	Store    *store.Store
	Observer Observer
	// Name is the file or folder name of the job; the last run is noted under it.
	Name string
	// Label keeps the run under a name, so that others can be set beside it; see
	// store.NameRun. A run that was stopped is not kept.
	Label string
	// Program is name and version of the host, for the account.
	Program string
	// Threads and Memory (bytes, 0 for no limit) bound all steps together.
	Threads int
	Memory  int64
	// Force runs every step, whatever the store has.
	Force bool
	// Verify reads and hashes artifacts in full before they are reused.
	Verify bool
}

// Observer is told what happens. Its methods are called one at a time and
// should return soon.
type Observer interface {
	// Begin says that a step starts to run with a number of threads.
	Begin(label, kind string, threads int)
	// Progress passes on what the step says.
	Progress(label, phase string, fraction float64)
	// Log passes on a line of the step.
	Log(label string, level stage.Level, text string, fields []any)
	// End says how a step ended; also for steps that never began.
	End(step Step)
	// Judged says how a requirement stands.
	Judged(v Verdict)
}

// State is how a step ended.
type State string

const (
	Ran     State = "ran"     // it ran and its result is in the store
	Reused  State = "reused"  // the store had the result
	Failed  State = "failed"  // see Fault and Diagnostics
	Skipped State = "skipped" // a step it needs did not finish
	Stopped State = "stopped" // the run was stopped first
)

// Step is the end of one step.
type Step struct {
	Label   string
	Kind    string
	State   State
	Key     string
	Outcome stage.Outcome
	// Inputs are the content hashes of the artifacts it took, by argument.
	Inputs  map[string][]string
	Outputs map[string]store.Output
	Files   []stage.FileUse
	// Published are the paths of files copied out of the store, as the job
	// names their folder.
	Published []string
	Fault     *fault.Error
	// Diagnostics say what went wrong with its place in the job.
	Diagnostics hcl.Diagnostics
	// Because is the label of the step that made this one be skipped.
	Because string
	// Elapsed is the time it took, or took when it ran.
	Elapsed time.Duration
}

// Done reports whether the step has a result.
func (s Step) Done() bool { return s.State == Ran || s.State == Reused }

// Verdict is a requirement with whether it could be judged at all.
type Verdict struct {
	job.Verdict
	Judged bool
}

// Result is the end of a run.
type Result struct {
	// ID names the run; equal runs have equal ids. Empty when it was stopped.
	ID       string
	Steps    []Step    // in the order of the plan
	Verdicts []Verdict // in file order
	// Diagnostics are those of all steps and requirements.
	Diagnostics hcl.Diagnostics
	// Stopped tells that the context ended before the work did.
	Stopped bool
}

// Failed reports whether any step did not finish.
func (r *Result) Failed() bool {
	for _, s := range r.Steps {
		if !s.Done() {
			return true
		}
	}
	return false
}

// Broken lists the requirements that do not hold or could not be judged.
func (r *Result) Broken() []Verdict {
	var out []Verdict
	for _, v := range r.Verdicts {
		if !v.Holds {
			out = append(out, v)
		}
	}
	return out
}
