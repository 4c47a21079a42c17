package draw

import (
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
)

// Surface is a mesh made coarse enough to draw: corner triangles of the
// plates, their boundary edges, and standoffs as lines. All indices are nodes
// of the mesh it came from.
type Surface struct {
	Nodes     []airframe.Vec
	Parts     []SurfacePart
	Triangles int // drawn, in all
}

// SurfacePart is one plate or standoff.
type SurfacePart struct {
	Name      string
	Height    float64 // mean z, m
	Triangles [][3]int32
	Edges     [][2]int32
	Lines     [][2]int32
}

// boundaryError is how far a boundary may move when it is made coarser, m.
const boundaryError = 0.15e-3

// NewSurface makes triangles coarser, by collapsing edges, until few are
// shorter than the given length in m. Boundaries stay where they are within
// 0.15 mm, and no triangle turns over. Parts are ordered by height, so that,
// seen from above, later ones hide earlier ones.
func NewSurface(m *mesh.Mesh, length float64) *Surface {
	s := &Surface{Nodes: m.Nodes}
	parts := make([]SurfacePart, len(m.Parts))
	triangles := make([][][3]int32, len(m.Parts))
	for i, t := range m.Triangles {
		p := m.TrianglePart[i]
		triangles[p] = append(triangles[p], [3]int32{t[0], t[1], t[2]})
	}
	for i, b := range m.Beams {
		parts[m.BeamPart[i]].Lines = append(parts[m.BeamPart[i]].Lines, b)
	}
	for p := range parts {
		part := &parts[p]
		part.Name = m.Parts[p].Name
		if len(triangles[p]) > 0 {
			c := newCollapser(m, m.Parts[p].Frame, triangles[p])
			c.run(length)
			part.Triangles, part.Edges = c.result()
			s.Triangles += len(part.Triangles)
		}
		sum, n := 0.0, 0
		for _, t := range part.Triangles {
			for _, v := range t {
				sum, n = sum+m.Nodes[v][2], n+1
			}
		}
		for _, l := range part.Lines {
			for _, v := range l {
				sum, n = sum+m.Nodes[v][2], n+1
			}
		}
		if n > 0 {
			part.Height = sum / float64(n)
			s.Parts = append(s.Parts, *part)
		}
	}
	sort.SliceStable(s.Parts, func(i, j int) bool { return s.Parts[i].Height < s.Parts[j].Height })
	return s
}

// nearest finds the corner nearest to a point.
func (s *Surface) nearest(p airframe.Vec) (node int32, ok bool) {
	best := math.Inf(1)
	for _, part := range s.Parts {
		for _, t := range part.Triangles {
			for _, n := range t {
				q := s.Nodes[n]
				if d := sq(p[0]-q[0]) + sq(p[1]-q[1]) + sq(p[2]-q[2]); d < best {
					best, node, ok = d, n, true
				}
			}
		}
	}
	return node, ok
}

func sq(x float64) float64 { return x * x }

type point2 struct{ x, y float64 }

// collapser makes the triangles of one flat plate coarser.
type collapser struct {
	node  []int32 // vertex to node of the mesh
	at    []point2
	tri   [][3]int32 // of vertices; dead ones have tri[0] = −1
	touch [][]int32  // triangles at each vertex, some dead
	alive []bool
}

func newCollapser(m *mesh.Mesh, f airframe.Frame, triangles [][3]int32) *collapser {
	c := &collapser{}
	vertex := map[int32]int32{}
	for _, t := range triangles {
		var mine [3]int32
		for k, n := range t {
			v, ok := vertex[n]
			if !ok {
				v = int32(len(c.node))
				vertex[n] = v
				c.node = append(c.node, n)
				p := m.Nodes[n]
				c.at = append(c.at, point2{along(p, f.Origin, f.X), along(p, f.Origin, f.Y)})
				c.touch = append(c.touch, nil)
				c.alive = append(c.alive, true)
			}
			mine[k] = v
			c.touch[v] = append(c.touch[v], int32(len(c.tri)))
		}
		c.tri = append(c.tri, mine)
	}
	return c
}

func along(p, origin, axis airframe.Vec) float64 {
	return (p[0]-origin[0])*axis[0] + (p[1]-origin[1])*axis[1] + (p[2]-origin[2])*axis[2]
}

type edge struct{ a, b int32 } // a < b

// edges counts the triangles at each edge.
func (c *collapser) edges() map[edge]int {
	count := map[edge]int{}
	for _, t := range c.tri {
		if t[0] < 0 {
			continue
		}
		for k := range 3 {
			count[between(t[k], t[(k+1)%3])]++
		}
	}
	return count
}

func between(a, b int32) edge {
	if a > b {
		a, b = b, a
	}
	return edge{a, b}
}

func (c *collapser) run(length float64) {
	for range 12 {
		count := c.edges()
		rim := map[int32][]int32{} // boundary neighbours
		var short []edge
		for e, n := range count {
			if n == 1 {
				rim[e.a] = append(rim[e.a], e.b)
				rim[e.b] = append(rim[e.b], e.a)
			}
			if c.distance(e.a, e.b) < length {
				short = append(short, e)
			}
		}
		sort.Slice(short, func(i, j int) bool {
			di, dj := c.distance(short[i].a, short[i].b), c.distance(short[j].a, short[j].b)
			if di != dj {
				return di < dj
			}
			return short[i].a < short[j].a || short[i].a == short[j].a && short[i].b < short[j].b
		})
		fresh := make([]bool, len(c.node)) // moved in this round
		changed := false
		for _, e := range short {
			if fresh[e.a] || fresh[e.b] {
				continue
			}
			for _, way := range [2][2]int32{{e.b, e.a}, {e.a, e.b}} {
				if c.may(way[0], way[1], count[e] == 1, rim) {
					for _, t := range c.touch[way[0]] {
						if c.tri[t][0] >= 0 {
							for _, v := range c.tri[t] {
								fresh[v] = true
							}
						}
					}
					c.collapse(way[0], way[1])
					changed = true
					break
				}
			}
		}
		if !changed {
			return
		}
	}
}

func (c *collapser) distance(a, b int32) float64 {
	return math.Hypot(c.at[a].x-c.at[b].x, c.at[a].y-c.at[b].y)
}

// may says whether vertex v can be moved onto its neighbour w and vanish.
func (c *collapser) may(v, w int32, boundaryEdge bool, rim map[int32][]int32) bool {
	if edge := rim[v]; len(edge) > 0 {
		// A vertex of the boundary slides only along it, and only where it is
		// nearly straight.
		if !boundaryEdge || len(edge) != 2 {
			return false
		}
		other := edge[0]
		if other == w {
			other = edge[1]
		}
		if other == w || c.offLine(v, w, other) > boundaryError {
			return false
		}
	}
	// Neighbours that both ends share must be those of the triangles between
	// them, or the surface would fold onto itself.
	shared, between := 0, 0
	near := map[int32]bool{}
	for _, t := range c.touch[w] {
		if c.tri[t][0] >= 0 {
			for _, x := range c.tri[t] {
				near[x] = true
			}
		}
	}
	seen := map[int32]bool{v: true, w: true}
	for _, t := range c.touch[v] {
		tri := c.tri[t]
		if tri[0] < 0 {
			continue
		}
		if tri[0] == w || tri[1] == w || tri[2] == w {
			between++
		}
		for _, x := range tri {
			if near[x] && !seen[x] {
				seen[x] = true
				shared++
			}
		}
	}
	if shared != between {
		return false
	}
	left := 0
	for _, t := range c.touch[v] {
		tri := c.tri[t]
		if tri[0] < 0 || tri[0] == w || tri[1] == w || tri[2] == w {
			continue
		}
		left++
		for k := range tri {
			if tri[k] == v {
				tri[k] = w
			}
		}
		if c.shape(tri) < 0.1 {
			return false
		}
	}
	return left > 0
}

// shape is 1 for an equilateral triangle, 0 for a flat one, negative when
// turned over.
func (c *collapser) shape(t [3]int32) float64 {
	a, b, d := c.at[t[0]], c.at[t[1]], c.at[t[2]]
	twice := (b.x-a.x)*(d.y-a.y) - (b.y-a.y)*(d.x-a.x)
	sum := 0.0
	for k := range 3 {
		l := c.distance(t[k], t[(k+1)%3])
		sum += l * l
	}
	return 2 * math.Sqrt(3) * twice / sum
}

// offLine is the distance of v from the line through w and other.
func (c *collapser) offLine(v, w, other int32) float64 {
	a, b, p := c.at[w], c.at[other], c.at[v]
	l := c.distance(w, other)
	if l == 0 {
		return math.Inf(1)
	}
	return math.Abs((b.x-a.x)*(p.y-a.y)-(b.y-a.y)*(p.x-a.x)) / l
}

func (c *collapser) collapse(v, w int32) {
	for _, t := range c.touch[v] {
		tri := &c.tri[t]
		if tri[0] < 0 {
			continue
		}
		if tri[0] == w || tri[1] == w || tri[2] == w {
			tri[0] = -1
			continue
		}
		for k := range tri {
			if tri[k] == v {
				tri[k] = w
			}
		}
		c.touch[w] = append(c.touch[w], t)
	}
	c.touch[v], c.alive[v] = nil, false
}

// result gives triangles and boundary edges in nodes of the mesh.
func (c *collapser) result() (triangles [][3]int32, edges [][2]int32) {
	count := c.edges()
	for _, t := range c.tri {
		if t[0] < 0 {
			continue
		}
		triangles = append(triangles, [3]int32{c.node[t[0]], c.node[t[1]], c.node[t[2]]})
		for k := range 3 {
			a, b := t[k], t[(k+1)%3]
			if count[between(a, b)] == 1 {
				edges = append(edges, [2]int32{c.node[a], c.node[b]})
			}
		}
	}
	return triangles, chain(edges)
}

// chain puts edges in an order in which each starts where the last ended, as
// far as that goes, so that they draw as few strokes.
func chain(edges [][2]int32) [][2]int32 {
	from := map[int32][]int{}
	for i, e := range edges {
		from[e[0]] = append(from[e[0]], i)
	}
	used := make([]bool, len(edges))
	var out [][2]int32
	for i := range edges {
		for j := i; j >= 0 && !used[j]; {
			used[j] = true
			out = append(out, edges[j])
			next := -1
			for _, k := range from[edges[j][1]] {
				if !used[k] {
					next = k
					break
				}
			}
			j = next
		}
	}
	return out
}
