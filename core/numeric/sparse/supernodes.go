package sparse

import (
	"cmp"
	"slices"
)

// tree is a supernode partition under construction: node s eliminates steps[s], has width[s] columns, and count[s] rows
// in the first of them.
type tree struct {
	steps  [][]int32
	width  []int32
	count  []int32
	parent []int32
}

// fundamentalSupernodes joins steps k and k+1 when k+1 is the parent of k and their rows below agree.
func fundamentalSupernodes(q *symbolic) *tree {
	t := &tree{}
	n := int32(len(q.parent))
	all := make([]int32, n)
	node := make([]int32, n)
	for k := range n {
		all[k] = k
		weight := q.g.weight[q.vertex[k]]
		if s := len(t.steps) - 1; k > 0 && q.parent[k-1] == k && q.count[k-1]-q.g.weight[q.vertex[k-1]] == q.count[k] {
			t.steps[s] = all[k-int32(len(t.steps[s])) : k+1]
			t.width[s] += weight
		} else {
			t.steps = append(t.steps, all[k:k+1])
			t.width = append(t.width, weight)
			t.count = append(t.count, q.count[k])
		}
		node[k] = int32(len(t.steps) - 1)
	}
	t.parent = make([]int32, len(t.steps))
	for s, steps := range t.steps {
		if p := q.parent[steps[len(steps)-1]]; p >= 0 {
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
	case width <= 4:
		return zeros < 0.8
	case width <= 16:
		return zeros < 0.4
	case width <= 48:
		return zeros < 0.15
	}
	return zeros < 0.05
}

// mergeSupernodes merges children into parents where few zeros result, and returns the tree in postorder. Children come
// in the order that needs the least memory for waiting updates.
func mergeSupernodes(t *tree) []supernode {
	n := len(t.steps)
	into := make([]int32, n) // node that s has been merged into, or s
	width := t.width
	zeros := make([]float64, n)
	parts := make([][]int32, n) // merged children, in order
	kids := make([][]int32, n)
	for s := range n {
		into[s] = int32(s)
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
	memoryOrder(t, into, kids)
	var steps func(s int32, to []int32) []int32
	steps = func(s int32, to []int32) []int32 {
		for _, c := range parts[s] {
			to = steps(c, to)
		}
		return append(to, t.steps[s]...)
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
			node := supernode{first: first, width: width[s], parent: -1, steps: steps(s, nil)}
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
func memoryOrder(t *tree, into []int32, kids [][]int32) {
	n := len(into)
	peak := make([]float64, n)
	update := make([]float64, n)
	for s := range n {
		if into[s] != int32(s) {
			continue
		}
		slices.SortStableFunc(kids[s], func(a, b int32) int { return cmp.Compare(peak[b]-update[b], peak[a]-update[a]) })
		below := float64(t.count[s] - t.width[s])
		update[s] = below * below
		held := 0.0
		for _, c := range kids[s] {
			peak[s] = max(peak[s], held+peak[c])
			held += update[c]
		}
		peak[s] = max(peak[s], held+update[s])
	}
}

// layOut numbers the positions, those of the supernodes in order, and finds the rows of each supernode: its own, and those
// that the matrix or its children have below them.
func (a *Analysis) layOut(c *compressed, q *symbolic) {
	start := make([]int32, c.order())         // position of the first unknown of each vertex
	a.order = make([]int32, 0, len(c.member)) // unknown at each position
	size := make([]int32, len(c.member))      // unknowns of the vertex that starts at a position
	for s := range a.nodes {
		for _, k := range a.nodes[s].steps {
			v := q.vertex[k]
			start[v] = int32(len(a.order))
			size[start[v]] = c.weight[v]
			a.order = append(a.order, c.member[c.first[v]:c.first[v+1]]...)
		}
	}
	seen := make([]int32, len(c.member))
	for i := range seen {
		seen[i] = -1
	}
	below := make([][]int32, len(a.nodes)) // starts of the vertices below each supernode, rising
	for s := range a.nodes {
		node := &a.nodes[s]
		end := node.first + node.width
		var heads []int32
		add := func(i int32) {
			if i >= end && seen[i] != int32(s) {
				seen[i] = int32(s)
				heads = append(heads, i)
			}
		}
		for _, child := range node.children {
			for _, i := range below[child] {
				add(i)
			}
			below[child] = nil
		}
		for _, k := range node.steps {
			for _, w := range c.near(q.vertex[k]) {
				add(start[w])
			}
		}
		node.steps = nil
		slices.Sort(heads)
		below[s] = heads
		count := node.width
		for _, i := range heads {
			count += size[i]
		}
		node.rows = make([]int32, 0, count)
		for i := node.first; i < end; i++ {
			node.rows = append(node.rows, i)
		}
		for _, i := range heads {
			for d := range size[i] {
				node.rows = append(node.rows, i+d)
			}
		}
	}
}

// findSources sorts the entries of the pattern by the lower of their two positions.
func (a *Analysis) findSources() {
	p := a.pattern
	place := make([]int32, p.N)
	for k, u := range a.order {
		place[u] = int32(k)
	}
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
