package sparse

import (
	"cmp"
	"slices"
)

// schedule divides the supernodes into subtrees, each done by one goroutine from end to end, and the supernodes above
// them, done one after another with all goroutines inside each. Results do not depend on where the line is drawn.
type schedule struct {
	subtrees []span  // by falling work
	top      []int32 // rising
}

// span is a run of supernodes, first to last inclusive; last is the root of the subtree.
type span struct {
	first, last int32
	work        float64
}

// Subtrees larger than this share of the work are divided: enough pieces for sixteen threads, few enough that the
// supernodes above them stay large. In solving, which waits for memory, few threads are of use.
const (
	largestSubtree = 1.0 / 24
	largestPass    = 1.0 / 8
)

// split draws the line from the roots down: every subtree is opened until its work is at most the given share of all.
func (a *Analysis) split(work func(s *supernode) float64, share float64) schedule {
	n := len(a.nodes)
	start := make([]int32, n)
	sum := make([]float64, n)
	total := 0.0
	var open []int32
	for s := range n {
		node := &a.nodes[s]
		start[s], sum[s] = int32(s), sum[s]+work(node)
		total += work(node)
		if len(node.children) > 0 {
			start[s] = start[node.children[0]]
		}
		if node.parent >= 0 {
			sum[node.parent] += sum[s]
		} else {
			open = append(open, int32(s))
		}
	}
	var out schedule
	for len(open) > 0 {
		s := open[len(open)-1]
		open = open[:len(open)-1]
		if sum[s] <= total*share || len(a.nodes[s].children) == 0 {
			out.subtrees = append(out.subtrees, span{start[s], s, sum[s]})
			continue
		}
		out.top = append(out.top, s)
		open = append(open, a.nodes[s].children...)
	}
	slices.Sort(out.top)
	slices.SortStableFunc(out.subtrees, func(x, y span) int {
		return cmp.Or(cmp.Compare(y.work, x.work), cmp.Compare(x.first, y.first))
	})
	return out
}
