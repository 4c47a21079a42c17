package assembly

import (
	"fmt"
	"slices"
)

// Merge says that several bodies of the problem became one.
type Merge struct {
	Bodies []string
	// Shared is true when some of them share a node, false when they were only welded.
	Shared bool
}

// forest is a union-find whose roots are the lowest members.
type forest []int

func newForest(n int) forest {
	f := make(forest, n)
	for i := range f {
		f[i] = i
	}
	return f
}

func (f forest) root(i int) int {
	for f[i] != i {
		f[i] = f[f[i]]
		i = f[i]
	}
	return i
}

func (f forest) join(i, j int) bool {
	i, j = f.root(i), f.root(j)
	if i == j {
		return false
	}
	f[max(i, j)] = min(i, j)
	return true
}

// merged is a body after welding: the union of bodies of the problem.
type merged struct {
	name      string
	members   []int // bodies of the problem, ascending
	nodes     []int32
	reference Vec
}

// mergeBodies joins bodies that are welded or share a used node. at maps bodies to merged ones.
func mergeBodies(p *Problem, used []bool) (bodies []merged, at []int, report []Merge, err error) {
	f := newForest(len(p.Bodies))
	for _, w := range p.Welds {
		f.join(w[0], w[1])
	}
	owner := make([]int, len(p.Nodes))
	for i := range owner {
		owner[i] = -1
	}
	sharing := map[int]bool{}
	for b, body := range p.Bodies {
		for _, n := range body.Nodes {
			if !used[n] {
				continue
			}
			if owner[n] >= 0 && owner[n] != b {
				if f.root(owner[n]) != f.root(b) || !welded(p, owner[n], b) {
					sharing[b], sharing[owner[n]] = true, true
				}
				f.join(owner[n], b)
			}
			owner[n] = b
		}
	}
	at = make([]int, len(p.Bodies))
	for b, body := range p.Bodies {
		if r := f.root(b); r != b {
			at[b] = at[r]
		} else {
			at[b] = len(bodies)
			bodies = append(bodies, merged{name: body.Name})
		}
		m := &bodies[at[b]]
		m.members = append(m.members, b)
		for _, n := range body.Nodes {
			if used[n] {
				m.nodes = append(m.nodes, n)
			}
		}
	}
	for i := range bodies {
		m := &bodies[i]
		slices.Sort(m.nodes)
		m.nodes = slices.Compact(m.nodes)
		var sum Vec
		switch {
		case len(m.nodes) > 0:
			for _, n := range m.nodes {
				sum = add(sum, p.Nodes[n])
			}
			m.reference = scale(1/float64(len(m.nodes)), sum)
		default:
			first := p.Bodies[m.members[0]]
			if len(first.Inertia) == 0 {
				return nil, nil, nil, fmt.Errorf("body %q has neither nodes nor mass", first.Name)
			}
			m.reference = first.Inertia[0].Centre
		}
		if len(m.members) > 1 {
			merge := Merge{}
			for _, b := range m.members {
				merge.Bodies = append(merge.Bodies, p.Bodies[b].Name)
				merge.Shared = merge.Shared || sharing[b]
			}
			report = append(report, merge)
		}
	}
	return bodies, at, report, nil
}

func welded(p *Problem, a, b int) bool {
	return slices.Contains(p.Welds, [2]int{a, b}) || slices.Contains(p.Welds, [2]int{b, a})
}
