package sparse

// graph is the undirected graph of a pattern with unknowns of equal neighbourhoods made one vertex. Neighbours of
// vertex v are adj[ptr[v]:ptr[v+1]], v itself not among them, rising.
type graph struct {
	ptr    []int32
	adj    []int32
	weight []int32 // unknowns in each vertex
}

func (g *graph) order() int { return len(g.weight) }

func (g *graph) near(v int32) []int32 { return g.adj[g.ptr[v]:g.ptr[v+1]] }

// compressed is a graph with the unknowns of its vertices: unknowns of vertex v are member[first[v]:first[v+1]].
type compressed struct {
	graph
	first  []int32
	member []int32
}

// expand turns an order of the vertices into an order of the unknowns.
func (c *compressed) expand(vertices []int32) Ordering {
	order := make(Ordering, 0, len(c.member))
	for _, v := range vertices {
		order = append(order, c.member[c.first[v]:c.first[v+1]]...)
	}
	return order
}

// compress finds unknowns with the same closed neighbourhood (C. Ashcraft, Compressed graphs and the minimum degree
// algorithm, SIAM J. Sci. Comput. 16, 1995). Neighbourhoods are compared by the sum of 64-bit hashes of their members
// and their number; should two ever collide, the ordering is a little worse and nothing else.
func compress(p *Pattern) *compressed {
	sum := make([]uint64, p.N)
	size := make([]int32, p.N)
	for j := range p.N {
		sum[j] += mix(uint64(j))
		size[j]++
		for _, i := range p.Row[p.Ptr[j]+1 : p.Ptr[j+1]] {
			sum[j] += mix(uint64(i))
			sum[i] += mix(uint64(j))
			size[i]++
			size[j]++
		}
	}
	type key struct {
		sum  uint64
		size int32
	}
	vertex := make([]int32, p.N)
	seen := make(map[key]int32, p.N/4+1)
	c := &compressed{}
	for u := range p.N {
		k := key{sum[u], size[u]}
		v, ok := seen[k]
		if !ok {
			v = int32(len(c.weight))
			seen[k] = v
			c.weight = append(c.weight, 0)
		}
		vertex[u] = v
		c.weight[v]++
	}
	n := len(c.weight)
	c.first = make([]int32, n+1)
	for v := range n {
		c.first[v+1] = c.first[v] + c.weight[v]
	}
	c.member = make([]int32, p.N)
	next := append([]int32(nil), c.first[:n]...)
	for u := range p.N {
		v := vertex[u]
		c.member[next[v]] = int32(u)
		next[v]++
	}
	c.connect(p, vertex)
	return c
}

// connect fills the adjacency from the entries between the first members of vertices.
func (c *compressed) connect(p *Pattern, vertex []int32) {
	n := len(c.weight)
	leads := func(u int32) bool { return c.member[c.first[vertex[u]]] == u }
	c.ptr = make([]int32, n+1)
	each := func(visit func(v, w int32)) {
		for v := range int32(n) {
			j := c.member[c.first[v]]
			for _, i := range p.Row[p.Ptr[j]+1 : p.Ptr[j+1]] {
				if w := vertex[i]; w != v && leads(i) {
					visit(v, w)
				}
			}
		}
	}
	each(func(v, w int32) {
		c.ptr[v+1]++
		c.ptr[w+1]++
	})
	for v := range n {
		c.ptr[v+1] += c.ptr[v]
	}
	c.adj = make([]int32, c.ptr[n])
	next := append([]int32(nil), c.ptr[:n]...)
	// First members rise with the vertex, so both halves of each list come out rising, the smaller half first.
	each(func(v, w int32) {
		c.adj[next[w]] = v
		next[w]++
	})
	each(func(v, w int32) {
		c.adj[next[v]] = w
		next[v]++
	})
}

// mix is the finaliser of splitmix64 (G. Steele, D. Lea, C. Flood, Fast splittable pseudorandom number generators,
// OOPSLA 2014).
func mix(x uint64) uint64 {
	x += 0x9e3779b97f4a7c15
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}
