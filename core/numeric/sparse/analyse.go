package sparse

import (
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
	tasks   schedule

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
	a := &Analysis{pattern: p, order: slices.Clone([]int32(order))}
	lower := lowerNeighbours(p, place)
	parent := eliminationTree(lower)
	a.renumber(place, postorder(parent))
	lower = lowerNeighbours(p, place)
	parent = eliminationTree(lower)
	counts := columnCounts(lower, parent)
	a.nodes = mergeSupernodes(fundamentalSupernodes(parent, counts))
	a.layOut(place)
	a.findSources(place)
	a.findRows()
	a.measure()
	a.tasks = a.split()
	a.Seconds = time.Since(began).Seconds()
	return a, nil
}

// renumber applies a permutation of positions: the one at old position next[k] moves to k.
func (a *Analysis) renumber(place, next []int32) {
	old := slices.Clone(a.order)
	for k, from := range next {
		a.order[k] = old[from]
		place[old[from]] = int32(k)
	}
}

// rowLists holds, for each position, a list of other positions.
type rowLists struct {
	ptr []int
	idx []int32
}

func (r *rowLists) of(k int) []int32 { return r.idx[r.ptr[k]:r.ptr[k+1]] }

// lowerNeighbours lists for each position its neighbours at lower positions, rising.
func lowerNeighbours(p *Pattern, place []int32) *rowLists {
	upper := invert(p.N, func(visit func(at, other int32)) {
		for j := range p.N {
			a := place[j]
			for _, i := range p.Row[p.Ptr[j]+1 : p.Ptr[j+1]] {
				b := place[i]
				visit(min(a, b), max(a, b))
			}
		}
	})
	return invert(p.N, func(visit func(at, other int32)) {
		for k := range p.N {
			for _, i := range upper.of(k) {
				visit(i, int32(k))
			}
		}
	})
}

// invert gathers pairs by their first member, keeping their order.
func invert(n int, each func(visit func(at, other int32))) *rowLists {
	r := &rowLists{ptr: make([]int, n+1)}
	each(func(at, _ int32) { r.ptr[at+1]++ })
	for k := range n {
		r.ptr[k+1] += r.ptr[k]
	}
	r.idx = make([]int32, r.ptr[n])
	next := slices.Clone(r.ptr[:n])
	each(func(at, other int32) {
		r.idx[next[at]] = other
		next[at]++
	})
	return r
}

// eliminationTree returns the parent of each position, -1 at roots, by Liu's algorithm with compressed paths.
func eliminationTree(lower *rowLists) []int32 {
	n := len(lower.ptr) - 1
	parent := make([]int32, n)
	ancestor := make([]int32, n)
	for k := range n {
		parent[k], ancestor[k] = -1, -1
		for _, i := range lower.of(k) {
			for i != -1 && int(i) < k {
				up := ancestor[i]
				ancestor[i] = int32(k)
				if up == -1 {
					parent[i] = int32(k)
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

// columnCounts returns the number of entries of each column of the factor, diagonal included, for a postordered tree.
//
// The row subtree of i (the columns in which row i of the factor is non-zero) has the lower neighbours of i as its
// leaves or inner vertices. A column's count is the number of row subtrees it is in; counting +1 at each leaf, -1 at
// the least common ancestor of consecutive leaves and summing up the tree gives it (Gilbert, Ng and Peyton).
func columnCounts(lower *rowLists, parent []int32) []int32 {
	n := len(parent)
	weight := make([]int32, n)
	first := make([]int32, n) // lowest descendant
	hasChild := make([]bool, n)
	for k := range n {
		first[k] = int32(k)
	}
	for k := range n {
		if p := parent[k]; p >= 0 {
			first[p] = min(first[p], first[k])
			hasChild[p] = true
		}
	}
	set := make([]int32, n) // disjoint sets of finished subtrees, for least common ancestors
	for k := range n {
		set[k] = int32(k)
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
	// Columns are visited in postorder; those above them in the matrix are needed by column, so invert.
	upper := invert(n, func(visit func(at, other int32)) {
		for i := range n {
			for _, k := range lower.of(i) {
				visit(k, int32(i))
			}
		}
	})
	lastFirst := make([]int32, n) // lowest descendant of the last leaf of each row subtree
	lastLeaf := make([]int32, n)
	for i := range n {
		lastFirst[i], lastLeaf[i] = -1, -1
	}
	for k := range n {
		if !hasChild[k] {
			weight[k] = 1
		}
		if p := parent[k]; p >= 0 {
			weight[p]--
		}
		for _, i := range upper.of(k) {
			if first[k] <= lastFirst[i] {
				continue // not a leaf of the row subtree of i
			}
			weight[k]++
			if l := lastLeaf[i]; l >= 0 {
				weight[find(l)]--
			}
			lastFirst[i], lastLeaf[i] = int32(k), int32(k)
		}
		if p := parent[k]; p >= 0 {
			set[k] = p
		}
	}
	for k := range n {
		if p := parent[k]; p >= 0 {
			weight[p] += weight[k]
		}
	}
	return weight
}
