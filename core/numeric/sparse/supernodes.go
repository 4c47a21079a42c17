package sparse

import (
	"cmp"
	"slices"
)

// tree is a supernode partition under construction: node s has columns (old positions) and count[s] rows in its first
// column.
type tree struct {
	columns [][]int32
	count   []int32
	parent  []int32
}

// fundamentalSupernodes joins columns k and k+1 when k+1 is the parent of k and their rows below agree.
func fundamentalSupernodes(parent, counts []int32) *tree {
	t := &tree{}
	n := int32(len(parent))
	all := make([]int32, n)
	node := make([]int32, n)
	for k := range n {
		all[k] = k
		if s := len(t.columns) - 1; k > 0 && parent[k-1] == k && counts[k-1] == counts[k]+1 {
			t.columns[s] = all[k-int32(len(t.columns[s])) : k+1]
		} else {
			t.columns = append(t.columns, all[k:k+1])
			t.count = append(t.count, counts[k])
		}
		node[k] = int32(len(t.columns) - 1)
	}
	t.parent = make([]int32, len(t.columns))
	for s, cols := range t.columns {
		if p := parent[cols[len(cols)-1]]; p >= 0 {
			t.parent[s] = node[p]
		} else {
			t.parent[s] = -1
		}
	}
	return t
}

// worthMerging says whether a supernode of the given width may hold the given fraction of zeros: narrow ones cost more
// in handling than in arithmetic.
func worthMerging(width int32, zeros float64) bool {
	switch {
	case width <= 8:
		return true
	case width <= 32:
		return zeros < 0.3
	case width <= 64:
		return zeros < 0.12
	}
	return zeros < 0.05
}

// mergeSupernodes merges children into parents where few zeros result, and returns the tree in postorder with first
// columns set. Children come in the order that needs the least memory for waiting updates.
func mergeSupernodes(t *tree) []supernode {
	n := len(t.columns)
	into := make([]int32, n) // node that s has been merged into, or s
	width := make([]int32, n)
	zeros := make([]float64, n)
	parts := make([][]int32, n) // merged children, in order
	kids := make([][]int32, n)
	for s := range n {
		into[s], width[s] = int32(s), int32(len(t.columns[s]))
		if p := t.parent[s]; p >= 0 {
			kids[p] = append(kids[p], int32(s))
		}
	}
	entries := func(width, rows int32) float64 {
		return float64(width)*float64(rows) - float64(width)*float64(width-1)/2
	}
	for p := range int32(n) {
		// The child with the most rows loses least by merging; ties by number.
		queue := slices.Clone(kids[p])
		slices.SortStableFunc(queue, func(a, b int32) int { return cmp.Compare(t.count[b]-width[b], t.count[a]-width[a]) })
		var stay []int32
		for _, c := range queue {
			w := width[c] + width[p]
			rows := t.count[p] + width[c]
			full := entries(w, rows)
			empty := full - (entries(width[c], t.count[c]) - zeros[c]) - (entries(width[p], t.count[p]) - zeros[p])
			if !worthMerging(w, empty/full) {
				stay = append(stay, c)
				continue
			}
			into[c] = p
			parts[p] = append(parts[p], c)
			width[p], t.count[p], zeros[p] = w, rows, empty
			stay = append(stay, kids[c]...)
		}
		kids[p] = stay
	}

	var out []supernode
	memoryOrder(t, into, width, kids)
	var columns func(s int32, to []int32) []int32
	columns = func(s int32, to []int32) []int32 {
		for _, c := range parts[s] {
			to = columns(c, to)
		}
		return append(to, t.columns[s]...)
	}
	type visit struct{ node, next int32 }
	first := int32(0)
	number := make([]int32, n)
	for root := range int32(n) {
		if into[root] != root || t.parent[root] >= 0 {
			continue
		}
		stack := []visit{{root, 0}}
		for len(stack) > 0 {
			top := &stack[len(stack)-1]
			if int(top.next) < len(kids[top.node]) {
				top.next++
				stack = append(stack, visit{kids[top.node][top.next-1], 0})
				continue
			}
			s := top.node
			stack = stack[:len(stack)-1]
			node := supernode{first: first, width: width[s], parent: -1, rows: columns(s, nil)}
			number[s] = int32(len(out))
			for _, c := range kids[s] {
				node.children = append(node.children, number[c])
				out[number[c]].parent = number[s]
			}
			first += width[s]
			out = append(out, node)
		}
	}
	return out
}

// memoryOrder sorts the children of every node so that the most memory ever held by fronts and waiting updates is least
// (J. Liu, On the storage requirement in the out-of-core multifrontal method, ACM Trans. Math. Softw. 12, 1986):
// falling peak of the subtree minus size of its update.
func memoryOrder(t *tree, into, width []int32, kids [][]int32) {
	n := len(into)
	peak := make([]float64, n)
	update := make([]float64, n)
	for s := range n {
		if into[s] != int32(s) {
			continue
		}
		slices.SortStableFunc(kids[s], func(a, b int32) int { return cmp.Compare(peak[b]-update[b], peak[a]-update[a]) })
		below := float64(t.count[s] - width[s])
		update[s] = below * below
		held := 0.0
		for _, c := range kids[s] {
			peak[s] = max(peak[s], held+peak[c])
			held += update[c]
		}
		peak[s] = max(peak[s], held+update[s])
	}
}

// layOut gives positions their final numbers: those of the supernodes in order. Until now each supernode's rows held
// its columns by old position.
func (a *Analysis) layOut(place []int32) {
	next := make([]int32, 0, len(a.order))
	for s := range a.nodes {
		next = append(next, a.nodes[s].rows...)
	}
	a.renumber(place, next)
}

// findSources sorts the entries of the pattern by the lower of their two positions.
func (a *Analysis) findSources(place []int32) {
	p := a.pattern
	a.columns = make([]int, p.N+1)
	for j := range p.N {
		for _, i := range p.Row[p.Ptr[j]:p.Ptr[j+1]] {
			a.columns[min(place[i], place[j])+1]++
		}
	}
	for k := range p.N {
		a.columns[k+1] += a.columns[k]
	}
	a.source = make([]sourceEntry, len(p.Row))
	next := slices.Clone(a.columns[:p.N])
	for j := range p.N {
		for q := p.Ptr[j]; q < p.Ptr[j+1]; q++ {
			i := place[p.Row[q]]
			lo, hi := min(i, place[j]), max(i, place[j])
			a.source[next[lo]] = sourceEntry{hi, int32(q)}
			next[lo]++
		}
	}
}

// findRows finds the rows of each supernode: those of the matrix in its columns and those of its children.
func (a *Analysis) findRows() {
	seen := make([]int32, len(a.order))
	for i := range seen {
		seen[i] = -1
	}
	for s := range a.nodes {
		node := &a.nodes[s]
		end := node.first + node.width
		rows := make([]int32, 0, node.width)
		for k := node.first; k < end; k++ {
			rows = append(rows, k)
		}
		add := func(i int32) {
			if i >= end && seen[i] != int32(s) {
				seen[i] = int32(s)
				rows = append(rows, i)
			}
		}
		for _, c := range node.children {
			child := &a.nodes[c]
			for _, i := range child.rows[child.width:] {
				add(i)
			}
		}
		for _, e := range a.source[a.columns[node.first]:a.columns[end]] {
			add(e.row)
		}
		slices.Sort(rows)
		node.rows = slices.Clip(rows)
	}
}

// measure fills in the offsets and the counts of entries and operations.
func (a *Analysis) measure() {
	offset := 0
	for s := range a.nodes {
		node := &a.nodes[s]
		node.offset = offset
		offset += len(node.rows) * int(node.width)
		node.flops = 0
		for k := range int(node.width) {
			r := float64(len(node.rows) - k - 1)
			node.flops += r * (r + 2)
			a.Entries += int64(r) + 1
		}
		a.Flops += node.flops
	}
}
