package main

import (
	"slices"
	"sort"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
)

// branch is one end of a run with what it was made from: a response with its modes, mesh and properties; modes that no
// response was made of; or properties alone.
type branch struct {
	label     string
	kind      string   // of the end
	artifacts []string // hashes: the end and what it comes from, one of each kind
}

// ends are the kinds a branch may end in; a later one that an earlier one comes from makes no branch of its own.
var ends = []string{"response", "modes", "properties"}

// branches finds the branches of a run, in the order of its steps.
func (r *storedRun) branches() []branch {
	type output struct {
		step int
		kind string
	}
	made := map[string]output{}
	for i, s := range r.record.Steps {
		for _, o := range s.Outputs {
			if _, ok := made[o.Hash]; !ok {
				made[o.Hash] = output{i, o.Kind}
			}
		}
	}
	wanted := append([]string{"mesh"}, ends...)
	used := map[string]bool{}
	var out []branch
	for _, end := range ends {
		for i, s := range r.record.Steps {
			for _, name := range sortedKeys(s.Outputs) {
				hash := s.Outputs[name].Hash
				if s.Outputs[name].Kind != end || used[hash] || made[hash].step != i {
					continue
				}
				b := branch{label: s.Label, kind: end, artifacts: []string{hash}}
				has := map[string]bool{end: true}
				take := func(kind, hash string) {
					if slices.Contains(wanted, kind) && !has[kind] {
						has[kind] = true
						b.artifacts = append(b.artifacts, hash)
					}
				}
				// Nearest first, so that of two meshes on the way the one that the end rests on counts.
				for queue, seen := []int{i}, map[int]bool{i: true}; len(queue) > 0; queue = queue[1:] {
					step := r.record.Steps[queue[0]]
					for _, output := range sortedKeys(step.Outputs) {
						take(step.Outputs[output].Kind, step.Outputs[output].Hash)
					}
					for _, argument := range sortedKeys(step.Inputs) {
						for _, h := range step.Inputs[argument] {
							from, ok := made[h]
							if !ok {
								continue
							}
							take(from.kind, h)
							if !seen[from.step] {
								seen[from.step] = true
								queue = append(queue, from.step)
							}
						}
					}
				}
				for _, h := range b.artifacts {
					used[h] = true
				}
				out = append(out, b)
			}
		}
	}
	return out
}

// partners pairs branches by label and kind; what is left, where there is one of a kind on each side.
func partners(sides [2][]branch) (pairs [][2]branch) {
	taken := map[int]bool{}
	var left []branch
	for _, a := range sides[0] {
		j := slices.IndexFunc(sides[1], func(b branch) bool { return b.label == a.label && b.kind == a.kind })
		if j < 0 {
			left = append(left, a)
			continue
		}
		taken[j] = true
		pairs = append(pairs, [2]branch{a, sides[1][j]})
	}
	for _, kind := range ends {
		var before, after []branch
		for _, b := range left {
			if b.kind == kind {
				before = append(before, b)
			}
		}
		for j, b := range sides[1] {
			if !taken[j] && b.kind == kind {
				after = append(after, b)
			}
		}
		if len(before) == 1 && len(after) == 1 {
			pairs = append(pairs, [2]branch{before[0], after[0]})
		}
	}
	return pairs
}

// open reads an artifact of the run.
func (r *storedRun) open(hash string) (*artifact.Artifact, error) {
	if !r.store.Holds(hash, false) {
		return nil, fault.New(fault.Missing, "what it made is no longer in the store").In("read run", r.words).Do("run the job again; give runs that are to stay a name with run --name")
	}
	return artifact.Open(r.store.Folder(hash), registry())
}

func sortedKeys[T any](m map[string]T) []string {
	out := make([]string, 0, len(m))
	for k := range m {
		out = append(out, k)
	}
	sort.Strings(out)
	return out
}
