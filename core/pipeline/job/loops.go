package job

import (
	"fmt"
	"strings"

	"github.com/hashicorp/hcl/v2"
)

// Loops finds stages that need each other in a circle, and stages that need one
// which runs only after every requirement has been judged. One loop is shown
// for each knot of stages.
func (j *Job) Loops() hcl.Diagnostics {
	var diags hcl.Diagnostics
	for _, knot := range j.knots() {
		loop := j.loopThrough(knot)
		var b strings.Builder
		for i, u := range loop {
			from := loop[(i+len(loop)-1)%len(loop)].label
			if i > 0 {
				b.WriteString(", ")
			}
			fmt.Fprintf(&b, "stage.%s needs stage.%s (%s)", from, u.label, place(u.rng))
		}
		diags = append(diags, &hcl.Diagnostic{
			Severity: hcl.DiagError,
			Summary:  "Stages need each other in a circle",
			Detail:   b.String() + "; remove one of these references",
			Subject:  loop[0].rng.Ptr(),
		})
	}
	for _, s := range j.Stages {
		if s.Description.Last {
			continue
		}
		for _, u := range s.uses {
			if st, ok := s.scope.stages[u.label]; ok && st.described && st.Description.Last {
				diags = append(diags, &hcl.Diagnostic{
					Severity: hcl.DiagError,
					Summary:  "Stage comes too late",
					Detail:   fmt.Sprintf("stage %s (%s) runs after every requirement has been judged, so only stages of that kind can need it", u.label, st.Kind),
					Subject:  u.rng.Ptr(),
				})
			}
		}
	}
	return diags
}

// knots gives the strongly connected groups with a loop, each as a set, in file
// order of their first member (Tarjan, "Depth-first search and linear graph
// algorithms", SIAM J. Comput. 1, 1972).
func (j *Job) knots() []map[string]bool {
	index, low := map[string]int{}, map[string]int{}
	on := map[string]bool{}
	var stack []string
	group := map[string]map[string]bool{}
	next := 0
	var visit func(s *Stage)
	visit = func(s *Stage) {
		next++
		index[s.Label], low[s.Label] = next, next
		stack = append(stack, s.Label)
		on[s.Label] = true
		for _, label := range s.Needs {
			if index[label] == 0 {
				visit(s.scope.stages[label])
				low[s.Label] = min(low[s.Label], low[label])
			} else if on[label] {
				low[s.Label] = min(low[s.Label], index[label])
			}
		}
		if low[s.Label] != index[s.Label] {
			return
		}
		set := map[string]bool{}
		for {
			top := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			on[top] = false
			set[top] = true
			group[top] = set
			if top == s.Label {
				break
			}
		}
	}
	for _, s := range j.Stages {
		if index[s.Label] == 0 {
			visit(s)
		}
	}
	var knots []map[string]bool
	done := map[string]bool{}
	for _, s := range j.Stages {
		if done[s.Label] {
			continue
		}
		set := group[s.Label]
		for label := range set {
			done[label] = true
		}
		itself := false
		for _, label := range s.Needs {
			itself = itself || label == s.Label
		}
		if len(set) > 1 || itself {
			knots = append(knots, set)
		}
	}
	return knots
}

// loopThrough finds a shortest loop through the first stage of the knot, as the
// uses that make it: the first is made by the stage that the last one names.
func (j *Job) loopThrough(knot map[string]bool) []use {
	var start *Stage
	for _, s := range j.Stages {
		if knot[s.Label] {
			start = s
			break
		}
	}
	type reached struct {
		from string
		by   use
	}
	seen := map[string]reached{}
	queue := []*Stage{start}
	for len(queue) > 0 {
		s := queue[0]
		queue = queue[1:]
		for _, u := range s.uses {
			if _, known := seen[u.label]; known || !knot[u.label] {
				continue
			}
			seen[u.label] = reached{s.Label, u}
			if u.label == start.Label {
				loop := []use{u}
				for at := s.Label; at != start.Label; at = seen[at].from {
					loop = append([]use{seen[at].by}, loop...)
				}
				return loop
			}
			queue = append(queue, s.scope.stages[u.label])
		}
	}
	panic("job: a knot without a loop")
}
