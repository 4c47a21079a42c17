// Package plan orders the stages of a job. Nothing is computed here.
package plan

import (
	"fmt"
	"sort"
	"strings"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/job"
)

// Plan is the steps of a job in an order in which each comes after all it
// needs.
type Plan struct {
	Job   *job.Job
	Steps []*Step
}

// Step is one stage of the job.
type Step struct {
	Stage *job.Stage
	// Needs lists the labels of the steps it waits for, sorted.
	Needs []string
	// Last tells that the step also waits until every requirement has been
	// judged, and receives the run artifact.
	Last bool
}

// Make orders the stages of a job: among those that could be next, the first in
// the file. Steps that run after the requirements come last. Stages that need
// each other in a circle are diagnosed, and the plan is nil.
func Make(j *job.Job) (*Plan, hcl.Diagnostics) {
	if diags := j.Loops(); diags.HasErrors() {
		return nil, diags
	}
	p := &Plan{Job: j}
	done := map[string]bool{}
	ready := func(s *job.Stage) bool {
		for _, n := range s.Needs {
			if !done[n] {
				return false
			}
		}
		return true
	}
	for _, last := range []bool{false, true} {
		for again := true; again; {
			again = false
			for _, s := range j.Stages {
				if done[s.Label] || s.Description.Last != last || !ready(s) {
					continue
				}
				done[s.Label] = true
				p.Steps = append(p.Steps, &Step{Stage: s, Needs: append([]string(nil), s.Needs...), Last: last})
				again = true
				break
			}
		}
	}
	if len(p.Steps) != len(j.Stages) {
		panic("plan: stages are left over although there is no loop")
	}
	return p, nil
}

// Step finds a step by label, nil if there is none.
func (p *Plan) Step(label string) *Step {
	for _, s := range p.Steps {
		if s.Stage.Label == label {
			return s
		}
	}
	return nil
}

// Dependents lists the labels that need a step, directly or through others,
// in the order of the plan.
func (p *Plan) Dependents(label string) []string {
	reached := map[string]bool{label: true}
	var out []string
	for _, s := range p.Steps {
		for _, n := range s.Needs {
			if reached[n] && !reached[s.Stage.Label] {
				reached[s.Stage.Label] = true
				out = append(out, s.Stage.Label)
			}
		}
	}
	return out
}

// String writes the plan: one line for each step with what it takes from which
// other, then the requirements.
func (p *Plan) String() string {
	var b strings.Builder
	width, kinds := 0, 0
	for _, s := range p.Steps {
		width, kinds = max(width, len(s.Stage.Label)), max(kinds, len(s.Stage.Kind))
	}
	judged := false
	judge := func() {
		if !judged {
			for _, r := range p.Job.Requirements {
				fmt.Fprintf(&b, "    require %s%s\n", r.Name, from(r.Needs))
			}
		}
		judged = true
	}
	for i, s := range p.Steps {
		if s.Last {
			judge()
		}
		line := fmt.Sprintf("%3d %-*s  %-*s%s", i+1, width, s.Stage.Label, kinds, s.Stage.Kind, takes(s.Stage))
		b.WriteString(strings.TrimRight(line, " ") + "\n")
	}
	judge()
	return b.String()
}

func from(needs []string) string {
	if len(needs) == 0 {
		return ""
	}
	return " from " + strings.Join(needs, ", ")
}

// takes lists what a stage refers to, without repetition.
func takes(s *job.Stage) string {
	seen := map[string]bool{}
	var texts []string
	for _, u := range s.Uses() {
		t := strings.TrimPrefix(u.Text, "stage.")
		if u.Text == "after" {
			t = "after " + u.Label
		}
		if !seen[t] {
			seen[t] = true
			texts = append(texts, t)
		}
	}
	sort.Strings(texts)
	if len(texts) == 0 {
		return ""
	}
	return "  <- " + strings.Join(texts, ", ")
}
