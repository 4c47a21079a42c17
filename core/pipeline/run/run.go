package run

import (
	"context"
	"fmt"
	"runtime"
	"time"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// Run carries out a plan. It returns when nothing it started runs any more,
// also when ctx ends early. The error is for what concerns no step: a store
// that cannot be written.
func Run(ctx context.Context, o Options) (*Result, error) {
	if o.Threads <= 0 {
		o.Threads = runtime.GOMAXPROCS(0)
	}
	r := &runner{
		Options: o, ctx: ctx, ended: make(chan end), told: make(chan func()),
		steps: map[string]*progress{}, figures: job.Figures{}, freeThreads: o.Threads, freeMemory: o.Memory,
	}
	for _, s := range o.Plan.Steps {
		r.steps[s.Stage.Label] = &progress{step: s}
	}
	r.loop()
	return r.finish()
}

// runner is the state of a run. All of it belongs to the goroutine of loop;
// the goroutines of steps send what they have to say through told and ended.
type runner struct {
	Options
	ctx   context.Context
	ended chan end
	told  chan func()

	steps       map[string]*progress
	figures     job.Figures
	verdicts    map[string]Verdict
	queue       []*progress // prepared, waiting for a share
	preparing   int         // goroutines that prepare a step
	running     int         // all goroutines
	freeThreads int
	freeMemory  int64
	account     *input // of the run, once made
	err         error
}

// progress is where one step stands.
type progress struct {
	step    *plan.Step
	begun   bool // handed to a goroutine at least once
	ended   bool
	result  Step
	prepped *prepared
	threads int // share while running
	memory  int64
}

// end is how a goroutine of a step ended: prepared without a result, or with one.
type end struct {
	p        *progress
	prepared *prepared
	result   *Step
}

func (r *runner) loop() {
	for r.err == nil {
		r.start()
		if r.running == 0 {
			return
		}
		select {
		case tell := <-r.told:
			tell()
		case e := <-r.ended:
			r.running--
			r.take(e)
		}
	}
	for r.running > 0 { // after an error of the store
		select {
		case <-r.told:
		case <-r.ended:
			r.running--
		}
	}
}

// start begins all that can begin now, in the order of the plan.
func (r *runner) start() {
	for again := true; again; {
		again = false
		for _, s := range r.Plan.Steps {
			p := r.steps[s.Stage.Label]
			if p.begun || p.ended {
				continue
			}
			if r.ctx.Err() != nil {
				r.close(p, Step{State: Stopped})
				again = true
				continue
			}
			because, ready := r.ready(s)
			if because != "" {
				r.close(p, Step{State: Skipped, Because: because})
				again = true
			} else if ready {
				r.prepare(p)
			}
		}
	}
	r.share()
}

// ready tells whether a step can be prepared, or which step keeps it from ever.
func (r *runner) ready(s *plan.Step) (because string, ready bool) {
	ready = true
	for _, label := range s.Needs {
		need := r.steps[label]
		if need.ended && !need.result.Done() {
			return label, false
		}
		ready = ready && need.ended
	}
	if s.Last {
		for _, other := range r.Plan.Steps {
			ready = ready && (other.Last || r.steps[other.Stage.Label].ended)
		}
	}
	return "", ready
}

// prepare evaluates a step and looks it up, in a goroutine of its own.
func (r *runner) prepare(p *progress) {
	p.begun = true
	if p.step.Last && r.account == nil {
		r.judge(true)
		if r.account, r.err = r.makeAccount(); r.err != nil {
			return
		}
	}
	inputs, figures := r.inputs(p.step), r.figuresOf(p.step.Stage)
	r.running++
	r.preparing++
	go func() {
		pr, result := r.prepareStep(p.step, inputs, figures)
		r.ended <- end{p, pr, result}
	}()
}

// share gives queued steps a share of the budget: the free threads in equal
// parts, at least one each, in the order of the plan. It waits while others
// are being prepared, which is quick, so that the first does not take all.
func (r *runner) share() {
	for r.preparing == 0 && len(r.queue) > 0 && r.freeThreads > 0 {
		p := r.queue[0]
		if r.ctx.Err() != nil {
			r.queue = r.queue[1:]
			r.close(p, Step{State: Stopped, Key: p.prepped.key})
			continue
		}
		threads := max(1, r.freeThreads/len(r.queue))
		memory := p.step.Stage.MemoryLimit
		if r.Memory > 0 {
			if memory == 0 {
				memory = r.Memory * int64(threads) / int64(r.Threads)
			}
			if memory > r.Memory {
				r.queue = r.queue[1:]
				r.close(p, r.failed(p.step, p.prepped, fault.New(fault.Limit, "it asks for %d MiB, and all steps together may use %d MiB",
					memory>>20, r.Memory>>20).Of("memory_limit").Do("raise --memory or lower memory_limit")))
				continue
			}
			if memory > r.freeMemory {
				return // until another step ends
			}
			r.freeMemory -= memory
		}
		r.queue = r.queue[1:]
		r.freeThreads -= threads
		p.threads, p.memory = threads, memory
		r.running++
		if r.Observer != nil {
			r.Observer.Begin(p.step.Stage.Label, p.step.Stage.Kind, threads)
		}
		go func() {
			result := r.runStep(p.step, p.prepped, threads, memory)
			r.ended <- end{p, nil, &result}
		}()
	}
}

// take notes how a goroutine of a step ended.
func (r *runner) take(e end) {
	if e.p.threads > 0 {
		r.freeThreads += e.p.threads
		if r.Memory > 0 {
			r.freeMemory += e.p.memory
		}
		e.p.threads = 0
	} else {
		r.preparing--
	}
	if e.result == nil {
		e.p.prepped = e.prepared
		r.queue = append(r.queue, e.p)
		r.sortQueue()
		return
	}
	r.close(e.p, *e.result)
}

func (r *runner) sortQueue() {
	var queue []*progress
	waits := map[*progress]bool{}
	for _, p := range r.queue {
		waits[p] = true
	}
	for _, s := range r.Plan.Steps {
		if p := r.steps[s.Stage.Label]; waits[p] {
			queue = append(queue, p)
		}
	}
	r.queue = queue
}

// close ends a step.
func (r *runner) close(p *progress, result Step) {
	result.Label, result.Kind = p.step.Stage.Label, p.step.Stage.Kind
	p.ended, p.result = true, result
	if result.Done() {
		r.figures[result.Label] = figuresFor(p.step.Stage, result.Outcome)
	}
	if r.Observer != nil {
		r.Observer.End(result)
	}
	r.judge(false)
}

// figuresFor gives every declared figure a value, nil where the stage gave
// none.
func figuresFor(s *job.Stage, o stage.Outcome) map[string]any {
	figures := map[string]any{}
	for _, f := range s.Description.Figures {
		figures[f.Name] = o.Figures[f.Name]
	}
	return figures
}

// judge judges the requirements whose figures are known; at the end also says
// of the others why they are not.
func (r *runner) judge(atEnd bool) {
	if r.verdicts == nil {
		r.verdicts = map[string]Verdict{}
	}
	for _, q := range r.Plan.Job.Requirements {
		if _, done := r.verdicts[q.Name]; done {
			continue
		}
		missing := ""
		for _, label := range q.Needs {
			if _, ok := r.figures[label]; !ok && missing == "" {
				missing = label
			}
		}
		var v Verdict
		switch {
		case missing == "":
			var diags hcl.Diagnostics
			v.Verdict, diags = q.Judge(r.figures)
			v.Judged = !diags.HasErrors()
			if diags.HasErrors() {
				v.Holds, v.Shown = false, diags[0].Summary
			}
		case atEnd:
			v.Verdict = job.Verdict{Name: q.Name, Because: q.Because, Shown: fmt.Sprintf("stage %s did not finish", missing)}
		default:
			continue
		}
		r.verdicts[q.Name] = v
		if r.Observer != nil {
			r.Observer.Judged(v)
		}
	}
}

func (r *runner) finish() (*Result, error) {
	r.judge(true)
	out := &Result{Stopped: r.ctx.Err() != nil}
	record := &store.RunRecord{Job: r.Plan.Job.Name}
	if r.err == nil && !out.Stopped {
		if r.account == nil {
			r.account, r.err = r.makeAccount()
		}
		if r.account != nil {
			record.ID = r.account.hash
		}
	}
	for _, s := range r.Plan.Steps {
		p := r.steps[s.Stage.Label]
		if !p.ended { // an error of the store came first
			p.result = Step{Label: s.Stage.Label, Kind: s.Stage.Kind, State: Stopped}
		}
		out.Steps = append(out.Steps, p.result)
		out.Diagnostics = append(out.Diagnostics, p.result.Diagnostics...)
		record.Steps = append(record.Steps, store.RunStep{
			Label: p.result.Label, Stage: p.result.Kind, State: string(p.result.State), Key: p.result.Key,
			Inputs: p.result.Inputs, Outputs: p.result.Outputs, Seconds: p.result.Elapsed.Round(time.Millisecond).Seconds(),
		})
	}
	for _, q := range r.Plan.Job.Requirements {
		out.Verdicts = append(out.Verdicts, r.verdicts[q.Name])
	}
	if r.err == nil && r.Name != "" {
		r.err = r.Store.SaveRun(r.Name, record)
	}
	if r.err == nil && r.Label != "" && record.ID != "" {
		r.err = r.Store.NameRun(r.Label, record)
	}
	out.ID = record.ID
	return out, r.err
}

// tell hands something to the observer from the goroutine of a step.
func (r *runner) tell(f func(Observer)) {
	if r.Observer != nil {
		r.told <- func() { f(r.Observer) }
	}
}
