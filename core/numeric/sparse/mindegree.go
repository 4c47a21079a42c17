package sparse

import "slices"

// Ordering is an order of elimination: Ordering[k] is the unknown eliminated k-th.
type Ordering []int32

// MinimumDegree orders by approximate minimum degree on the compressed graph.
func MinimumDegree(p *Pattern) Ordering {
	c := compress(p)
	return c.expand(minimumDegree(&c.graph, nil))
}

// quotient is the state of a minimum degree elimination: the graph after some eliminations, held as variables (not yet
// eliminated, possibly several vertices at once) and elements (the cliques that eliminations leave behind).
type quotient struct {
	n      int32
	weight []int32   // of live principal variables; negated while in the pivot's clique; 0 once gone
	vars   [][]int32 // adjacent variables of each variable
	elems  [][]int32 // adjacent elements of each variable
	clique [][]int32 // variables of each live element
	size   []int32   // weight of each element's clique; -1 when the element is absorbed or never was
	degree []int32   // approximate external degree of each variable
	halo   []bool    // variables that are never eliminated; nil when there are none
	joined [][]int32 // vertices that are eliminated together with this one

	// Doubly linked lists of the variables by degree.
	head, next, prev []int32
	least            int32

	rest  []int32 // of elements seen in this step: weight of their clique outside the pivot's
	seen  []int32 // the step in which rest was set
	stamp int32
}

// minimumDegree returns an elimination order of the vertices outside the halo (which may be nil). Halo vertices count
// in degrees as if they were to be eliminated last.
//
// It is the algorithm of Amestoy, Davis and Duff: degrees are bounded by d = |A_i \ i| + |L_p \ i| + Σ_e |L_e \ L_p|,
// elements inside the pivot's clique are absorbed, variables that become indistinguishable are joined, and those that
// have no neighbour outside the clique are eliminated at once.
func minimumDegree(g *graph, halo []bool) []int32 {
	q := newQuotient(g, halo)
	order := make([]int32, 0, q.n)
	for {
		p := q.pick()
		if p < 0 {
			return order
		}
		order = q.emit(order, p)
		for _, i := range q.eliminate(p) {
			order = q.emit(order, i)
		}
	}
}

func newQuotient(g *graph, halo []bool) *quotient {
	n := g.order()
	q := &quotient{
		n: int32(n), weight: append([]int32(nil), g.weight...), vars: make([][]int32, n), elems: make([][]int32, n),
		clique: make([][]int32, n), size: make([]int32, n), degree: make([]int32, n), halo: halo,
		joined: make([][]int32, n), next: make([]int32, n), prev: make([]int32, n), rest: make([]int32, n), seen: make([]int32, n),
	}
	adj := append([]int32(nil), g.adj...)
	total := int32(0)
	for v := range int32(n) {
		q.vars[v] = adj[g.ptr[v]:g.ptr[v+1]:g.ptr[v+1]]
		q.size[v] = -1
		total += g.weight[v]
	}
	q.head = make([]int32, total+1)
	for d := range q.head {
		q.head[d] = -1
	}
	q.least = total
	for v := int32(n) - 1; v >= 0; v-- {
		for _, w := range q.vars[v] {
			q.degree[v] += g.weight[w]
		}
		q.insert(v)
	}
	return q
}

func (q *quotient) insert(v int32) {
	if q.halo != nil && q.halo[v] {
		return
	}
	d := q.degree[v]
	q.next[v], q.prev[v] = q.head[d], -1
	if h := q.head[d]; h >= 0 {
		q.prev[h] = v
	}
	q.head[d] = v
	q.least = min(q.least, d)
}

func (q *quotient) remove(v int32) {
	if q.halo != nil && q.halo[v] {
		return
	}
	if q.prev[v] >= 0 {
		q.next[q.prev[v]] = q.next[v]
	} else {
		q.head[q.degree[v]] = q.next[v]
	}
	if q.next[v] >= 0 {
		q.prev[q.next[v]] = q.prev[v]
	}
}

func (q *quotient) pick() int32 {
	for ; int(q.least) < len(q.head); q.least++ {
		if v := q.head[q.least]; v >= 0 {
			q.remove(v)
			return v
		}
	}
	return -1
}

// emit appends a vertex and all that were joined to it.
func (q *quotient) emit(order []int32, v int32) []int32 {
	order = append(order, v)
	for _, w := range q.joined[v] {
		order = q.emit(order, w)
	}
	q.joined[v] = nil
	return order
}

// eliminate turns variable p into an element and returns the variables eliminated with it.
func (q *quotient) eliminate(p int32) []int32 {
	clique, weight := q.form(p)
	q.outside(clique)
	var gone []int32
	buckets := map[uint32][]int32{}
	var hashes []uint32
	for _, i := range clique {
		deg, hash := q.reduce(i, p)
		if deg == 0 && len(q.vars[i]) == 0 && len(q.elems[i]) == 0 && !(q.halo != nil && q.halo[i]) {
			weight += q.weight[i] // weights are negated here
			q.weight[i] = 0
			q.vars[i], q.elems[i] = nil, nil
			gone = append(gone, i)
			continue
		}
		q.degree[i] = min(q.degree[i], deg)
		q.elems[i] = append(q.elems[i], p)
		if _, ok := buckets[hash]; !ok {
			hashes = append(hashes, hash)
		}
		buckets[hash] = append(buckets[hash], i)
	}
	for _, h := range hashes {
		q.join(buckets[h])
	}
	live := clique[:0]
	for _, i := range clique {
		if q.weight[i] == 0 {
			continue
		}
		q.weight[i] = -q.weight[i]
		live = append(live, i)
	}
	limit := int32(len(q.head)) - 1
	for _, i := range live {
		q.degree[i] = min(q.degree[i]+weight-q.weight[i], limit)
		q.insert(i)
	}
	q.clique[p], q.size[p] = live, weight
	if len(live) == 0 {
		q.size[p] = -1
	}
	return gone
}

// form collects the clique of pivot p from its variables and elements, absorbs those elements, negates the weights of
// the members and takes them off the degree lists. It returns the clique and its weight.
func (q *quotient) form(p int32) ([]int32, int32) {
	var clique []int32
	weight := int32(0)
	add := func(i int32) {
		if w := q.weight[i]; i != p && w > 0 {
			weight += w
			q.weight[i] = -w
			q.remove(i)
			clique = append(clique, i)
		}
	}
	for _, e := range q.elems[p] {
		for _, i := range q.clique[e] {
			add(i)
		}
		q.size[e], q.clique[e] = -1, nil
	}
	for _, i := range q.vars[p] {
		add(i)
	}
	q.weight[p] = 0
	q.vars[p], q.elems[p] = nil, nil
	return clique, weight
}

// outside finds the weight that each element near the pivot's clique has outside it.
func (q *quotient) outside(clique []int32) {
	q.stamp++
	for _, i := range clique {
		w := -q.weight[i]
		for _, e := range q.elems[i] {
			if q.size[e] < 0 {
				continue
			}
			if q.seen[e] != q.stamp {
				q.seen[e], q.rest[e] = q.stamp, q.size[e]
			}
			q.rest[e] -= w
		}
	}
}

// reduce drops from the lists of variable i, a member of the clique of p, what the clique makes superfluous. It returns
// the bound of its degree outside the clique and a hash of what is left in its lists.
func (q *quotient) reduce(i, p int32) (degree int32, hash uint32) {
	elems := q.elems[i][:0]
	for _, e := range q.elems[i] {
		switch {
		case q.size[e] < 0:
		case q.rest[e] == 0:
			q.size[e], q.clique[e] = -1, nil // inside the pivot's clique: absorbed
		default:
			degree += q.rest[e]
			hash += uint32(e)
			elems = append(elems, e)
		}
	}
	vars := q.vars[i][:0]
	for _, j := range q.vars[i] {
		if w := q.weight[j]; w > 0 {
			degree += w
			hash += uint32(j)
			vars = append(vars, j)
		}
	}
	q.elems[i], q.vars[i] = elems, vars
	return degree, hash
}

// join makes one variable of those in the list that have equal lists and are alike in being halo or not.
func (q *quotient) join(alike []int32) {
	for a, i := range alike {
		if q.weight[i] == 0 {
			continue
		}
		for _, j := range alike[a+1:] {
			if q.weight[j] == 0 || q.halo != nil && q.halo[i] != q.halo[j] {
				continue
			}
			if !sameSet(q.elems[i], q.elems[j]) || !sameSet(q.vars[i], q.vars[j]) {
				continue
			}
			q.weight[i] += q.weight[j]
			q.weight[j] = 0
			q.vars[j], q.elems[j] = nil, nil
			q.joined[i] = append(q.joined[i], j)
		}
	}
}

// sameSet compares two short lists without repeats.
func sameSet(a, b []int32) bool {
	if len(a) != len(b) {
		return false
	}
	for k, v := range a {
		if b[k] == v {
			continue
		}
		if !slices.Contains(b, v) {
			return false
		}
	}
	return true
}
