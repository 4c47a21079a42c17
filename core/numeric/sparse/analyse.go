package sparse

import (
	"cmp"
	"fmt"
	"slices"
	"time"
)

// Analysis is what a factorisation needs to know of a pattern and an ordering: the supernodes, their rows, their tree,
// and where each entry of a matrix goes. It serves any number of matrices with that pattern, also at the same time.
type Analysis struct {
	pattern *Pattern
	order   []int32 // order[k] is the unknown at position k; positions are final, after postordering and merging
	nodes   []supernode
	source  []sourceEntry // entries of the matrix by the column of the lower position, see columns
	columns []int         // entries of position k are source[columns[k]:columns[k+1]]
	tasks   schedule      // of the elimination
	passes  schedule      // of solving

	// Entries is the number of non-zeros of the factor including those that merged supernodes store in vain; Flops the
	// additions and multiplications of the elimination.
	Entries int64
	Flops   float64
	// Seconds is the time that Analyse took.
	Seconds float64
}

// supernode is a run of columns first..first+width-1 with common rows.
type supernode struct {
	first, width int32
	steps        []int32 // of the symbolic elimination, until layOut has used them
	rows         []int32 // positions, rising; the first width are the columns
	parent       int32   // -1 at a root
	children     []int32 // in the order in which their updates are added
	offset       int     // of its trapezoid of len(rows) by width in the factor
	flops        float64
}

func (s *supernode) below() int { return len(s.rows) - int(s.width) }

// sourceEntry says that value number val of a matrix belongs in row row.
type sourceEntry struct{ row, val int32 }

// Analyse prepares the factorisation of matrices with pattern p in the given order. It returns an error when order is
// not a permutation of the unknowns.
func Analyse(p *Pattern, order Ordering) (*Analysis, error) {
	began := time.Now()
	if len(order) != p.N {
		return nil, fmt.Errorf("sparse: ordering of %d unknowns for %d", len(order), p.N)
	}
	place := make([]int32, p.N)
	for i := range place {
		place[i] = -1
	}
	for k, u := range order {
		if u < 0 || int(u) >= p.N || place[u] >= 0 {
			return nil, fmt.Errorf("sparse: ordering names unknown %d at place %d twice or out of range", u, k)
		}
		place[u] = int32(k)
	}
	a := &Analysis{pattern: p}
	c := compress(p)
	q := newSymbolic(&c.graph, c.inOrderOf(place))
	a.nodes = mergeSupernodes(fundamentalSupernodes(q))
	a.layOut(c, q)
	a.findSources()
	a.measure()
	a.tasks = a.split(func(s *supernode) float64 { return s.flops }, largestSubtree)
	a.passes = a.split(func(s *supernode) float64 { return float64(len(s.rows)) * float64(s.width) }, largestPass)
	a.Seconds = time.Since(began).Seconds()
	return a, nil
}

// inOrderOf returns the vertices by the place of their first unknown to be eliminated. Unknowns with the same
// neighbourhood can be eliminated one straight after the other without any further non-zeros.
func (c *compressed) inOrderOf(place []int32) []int32 {
	earliest := make([]int32, c.order())
	vertices := make([]int32, c.order())
	for v := range vertices {
		vertices[v] = int32(v)
		earliest[v] = place[c.member[c.first[v]]]
		for _, u := range c.member[c.first[v]:c.first[v+1]] {
			earliest[v] = min(earliest[v], place[u])
		}
	}
	slices.SortFunc(vertices, func(x, y int32) int { return cmp.Compare(earliest[x], earliest[y]) })
	return vertices
}

// symbolic is what elimination in an order makes of a graph. Steps are postordered: the children of a step and all below
// them come right before it.
type symbolic struct {
	g      *graph
	vertex []int32 // vertex eliminated at each step
	step   []int32 // step at which each vertex is eliminated
	parent []int32 // of each step in the elimination tree, -1 at roots
	count  []int32 // rows of the factor in the first column of each step, its own included
}

// newSymbolic finds tree and counts for an order of the vertices, which it replaces by an equivalent postorder.
func newSymbolic(g *graph, order []int32) *symbolic {
	q := &symbolic{g: g, vertex: order, step: make([]int32, len(order))}
	for k, v := range order {
		q.step[v] = int32(k)
	}
	q.parent = q.eliminationTree()
	next := postorder(q.parent)
	old := slices.Clone(order)
	for k, from := range next {
		q.vertex[k] = old[from]
		q.step[old[from]] = int32(k)
	}
	parent := make([]int32, len(order))
	for k, from := range next {
		parent[k] = -1
		if up := q.parent[from]; up >= 0 {
			parent[k] = q.step[old[up]]
		}
	}
	q.parent = parent
	q.countColumns()
	return q
}

// flops returns the additions and multiplications of the elimination.
func (q *symbolic) flops() float64 {
	sum := 0.0
	for k, v := range q.vertex {
		for r := q.count[k] - 1; r >= q.count[k]-q.g.weight[v]; r-- {
			sum += float64(r) * float64(r+2)
		}
	}
	return sum
}

// eliminationTree returns the parent of each step, -1 at roots, by Liu's algorithm with compressed paths.
func (q *symbolic) eliminationTree() []int32 {
	n := len(q.vertex)
	parent := make([]int32, n)
	ancestor := make([]int32, n)
	for k := range int32(n) {
		parent[k], ancestor[k] = -1, -1
		for _, w := range q.g.near(q.vertex[k]) {
			for i := q.step[w]; i != -1 && i < k; {
				up := ancestor[i]
				ancestor[i] = k
				if up == -1 {
					parent[i] = k
				}
				i = up
			}
		}
	}
	return parent
}

// postorder returns the vertices of a forest, children (lowest first) before parents and each subtree in one run.
func postorder(parent []int32) []int32 {
	n := len(parent)
	child := make([]int32, n) // first child, then the next sibling through sibling
	sibling := make([]int32, n)
	for v := range child {
		child[v] = -1
	}
	root := int32(-1)
	for v := n - 1; v >= 0; v-- {
		if p := parent[v]; p >= 0 {
			sibling[v], child[p] = child[p], int32(v)
		} else {
			sibling[v], root = root, int32(v)
		}
	}
	out := make([]int32, 0, n)
	for ; root >= 0; root = sibling[root] {
		v := root
		for {
			for child[v] >= 0 {
				v = child[v]
			}
			out = append(out, v)
			for v != root && sibling[v] < 0 {
				v = parent[v]
				out = append(out, v)
			}
			if v == root {
				break
			}
			v = sibling[v]
		}
	}
	return out
}

// countColumns finds the number of rows of each step.
//
// The row subtree of i (the steps in whose columns row i of the factor is non-zero) has its leaves among the neighbours
// of i eliminated earlier. The count of a step is the weight of the row subtrees it is in; adding the weight of i at each
// leaf, subtracting it at the least common ancestor of consecutive leaves and summing up the tree gives it (Gilbert, Ng
// and Peyton).
func (q *symbolic) countColumns() {
	n := int32(len(q.vertex))
	sum := make([]int32, n)
	lowest := make([]int32, n) // lowest descendant
	inner := make([]bool, n)
	set := make([]int32, n) // disjoint sets of finished subtrees, for least common ancestors
	lastLow, lastLeaf := make([]int32, n), make([]int32, n)
	for k := range n {
		lowest[k], set[k], lastLow[k], lastLeaf[k] = k, k, -1, -1
	}
	for k, up := range q.parent {
		if up >= 0 {
			lowest[up] = min(lowest[up], lowest[k])
			inner[up] = true
		}
	}
	find := func(v int32) int32 {
		root := v
		for set[root] != root {
			root = set[root]
		}
		for set[v] != root {
			set[v], v = root, set[v]
		}
		return root
	}
	for k := range n {
		v, up := q.vertex[k], q.parent[k]
		if !inner[k] {
			sum[k] += q.g.weight[v] // k is the only leaf of its own row subtree
		}
		for _, w := range q.g.near(v) {
			i := q.step[w]
			if i <= k || lowest[k] <= lastLow[i] {
				continue // not a leaf of the row subtree of i
			}
			sum[k] += q.g.weight[w]
			if l := lastLeaf[i]; l >= 0 {
				sum[find(l)] -= q.g.weight[w]
			}
			lastLow[i], lastLeaf[i] = k, k
		}
		if up >= 0 {
			set[k] = up
			sum[up] -= q.g.weight[v] // the row subtree of k ends at k
		}
	}
	for k, up := range q.parent {
		if up >= 0 {
			sum[up] += sum[k]
		}
	}
	q.count = sum
}
