package run

import (
	"context"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/store"
)

// Look tells what a run would do, without running anything.
type Look struct {
	Label, Kind string
	// Key addresses the step in the store; empty while it hangs on steps that
	// have to run first.
	Key string
	// Stored tells that the store has the result.
	Stored bool
	Record *store.Record
	// Diagnostics say what is wrong with the arguments.
	Diagnostics hcl.Diagnostics
}

// LookAhead walks the plan as a run would, as far as the store has results.
func LookAhead(ctx context.Context, o Options) []Look {
	r := &runner{Options: o, ctx: ctx, steps: map[string]*progress{}, figures: job.Figures{}}
	r.Observer = nil
	world := newWorld(ctx, o.Plan.Job.Folder, o.Source)
	for _, s := range o.Plan.Steps {
		r.steps[s.Stage.Label] = &progress{step: s}
	}
	var out []Look
	for _, s := range o.Plan.Steps {
		p := r.steps[s.Stage.Label]
		look := Look{Label: s.Stage.Label, Kind: s.Stage.Kind}
		if r.known(s.Needs) && (!s.Last || r.account != nil || r.allKnown()) {
			if s.Last && r.account == nil {
				r.judge(true)
				r.account = &input{r.describe().Encode().Hash(), account.KindName, account.KindName}
			}
			var pr *prepared
			pr, look.Diagnostics = evaluate(o.Source, s, r.inputs(s), r.figuresOf(s.Stage))
			if pr != nil {
				look.Key = pr.key
				look.Record, look.Stored = o.Store.Find(pr.key, world, o.Verify)
			}
		}
		if look.Stored {
			p.result = Step{Label: look.Label, Kind: look.Kind, State: Reused, Key: look.Key,
				Outcome: look.Record.Outcome, Outputs: look.Record.Outputs, Files: look.Record.Files}
			r.figures[look.Label] = figuresFor(s.Stage, look.Record.Outcome)
		}
		out = append(out, look)
	}
	return out
}

func (r *runner) known(labels []string) bool {
	for _, l := range labels {
		if !r.steps[l].result.Done() {
			return false
		}
	}
	return true
}

// allKnown tells whether every step before the last ones is stored.
func (r *runner) allKnown() bool {
	for _, s := range r.Plan.Steps {
		if !s.Last && !r.steps[s.Stage.Label].result.Done() {
			return false
		}
	}
	return true
}
