package known

import (
	"fmt"
	"math"
	"math/rand/v2"
	"sort"
)

// Grid is a plane mesh of six-node triangles: corners 0, 1, 2 counterclockwise, then the mid-side
// nodes of sides 0-1, 1-2 and 2-0. Corner nodes come first, so that the first Corners points and the
// first three nodes of each triangle are the three-node mesh.
type Grid struct {
	Points    [][2]float64
	Corners   int
	Triangles [][6]int32
	// Sets are named nodes, mid-side nodes included, ascending: "x=0", "x=a", "y=0", "y=b" of
	// rectangles, "inner" and "outer" of rings.
	Sets map[string][]int32
}

// FromCorners builds a grid with straight sides from corner points and triangles.
func FromCorners(points [][2]float64, triangles [][3]int32) *Grid {
	g := &Grid{Points: append([][2]float64(nil), points...), Corners: len(points), Sets: map[string][]int32{}}
	mids := map[[2]int32]int32{}
	for _, t := range triangles {
		six := [6]int32{t[0], t[1], t[2]}
		for s := range 3 {
			a, b := t[s], t[(s+1)%3]
			key := [2]int32{min(a, b), max(a, b)}
			m, ok := mids[key]
			if !ok {
				m = int32(len(g.Points))
				mids[key] = m
				g.Points = append(g.Points, [2]float64{(points[a][0] + points[b][0]) / 2, (points[a][1] + points[b][1]) / 2})
			}
			six[3+s] = m
		}
		g.Triangles = append(g.Triangles, six)
	}
	return g
}

// Collect names the set of nodes for which in holds.
func (g *Grid) Collect(name string, in func(x, y float64) bool) {
	var set []int32
	for i, p := range g.Points {
		if in(p[0], p[1]) {
			set = append(set, int32(i))
		}
	}
	if len(set) == 0 {
		panic(fmt.Sprintf("known: no node in set %q", name))
	}
	g.Sets[name] = set
}

// Nodes returns the number of nodes that an element of the given number of nodes uses.
func (g *Grid) Nodes(perElement int) int {
	if perElement == 3 {
		return g.Corners
	}
	return len(g.Points)
}

// Rectangle meshes 0 ≤ x ≤ a, 0 ≤ y ≤ b with nx × ny cells cut in two, diagonals alternating.
// Interior corner nodes are moved at random by up to distort of the cell size, by a fixed seed.
func Rectangle(a, b float64, nx, ny int, distort float64) *Grid {
	return Lattice(Even(0, a, nx), Even(0, b, ny), distort)
}

// Even returns n+1 equally spaced values from lo to hi.
func Even(lo, hi float64, n int) []float64 {
	v := make([]float64, n+1)
	for i := range v {
		v[i] = lo + (hi-lo)*float64(i)/float64(n)
	}
	v[n] = hi
	return v
}

// Lattice is Rectangle with the given ascending grid lines.
func Lattice(xs, ys []float64, distort float64) *Grid {
	g := Cells(xs, ys, distort, func(x, y float64) bool { return true })
	const tiny = 1e-9
	x0, x1, y0, y1 := xs[0], xs[len(xs)-1], ys[0], ys[len(ys)-1]
	g.Collect("x=0", func(x, _ float64) bool { return math.Abs(x-x0) < tiny*(x1-x0) })
	g.Collect("x=a", func(x, _ float64) bool { return math.Abs(x-x1) < tiny*(x1-x0) })
	g.Collect("y=0", func(_, y float64) bool { return math.Abs(y-y0) < tiny*(y1-y0) })
	g.Collect("y=b", func(_, y float64) bool { return math.Abs(y-y1) < tiny*(y1-y0) })
	return g
}

// Cells meshes those cells of a lattice whose centre keep accepts.
func Cells(xs, ys []float64, distort float64, keep func(x, y float64) bool) *Grid {
	rng := rand.New(rand.NewPCG(11, 29))
	nx, ny := len(xs)-1, len(ys)-1
	var lattice [][2]float64
	for j, y := range ys {
		for i, x := range xs {
			dx, dy := distort*(2*rng.Float64()-1), distort*(2*rng.Float64()-1)
			at := [2]float64{x, y}
			if i > 0 && i < nx && j > 0 && j < ny {
				at[0] += dx * math.Min(xs[i+1]-xs[i], xs[i]-xs[i-1])
				at[1] += dy * math.Min(ys[j+1]-ys[j], ys[j]-ys[j-1])
			}
			lattice = append(lattice, at)
		}
	}
	var points [][2]float64
	number := make([]int32, len(lattice))
	for i := range number {
		number[i] = -1
	}
	var triangles [][3]int32
	add := func(corners ...int) {
		var t [3]int32
		for k, c := range corners {
			if number[c] < 0 {
				number[c] = int32(len(points))
				points = append(points, lattice[c])
			}
			t[k] = number[c]
		}
		triangles = append(triangles, t)
	}
	for j := range ny {
		for i := range nx {
			if !keep((xs[i]+xs[i+1])/2, (ys[j]+ys[j+1])/2) {
				continue
			}
			p := j*(nx+1) + i
			q, r, s := p+1, p+nx+2, p+nx+1
			if (i+j)%2 == 0 {
				add(p, q, r)
				add(p, r, s)
			} else {
				add(p, q, s)
				add(q, r, s)
			}
		}
	}
	return FromCorners(points, triangles)
}

// Plus meshes a square hub of side s at the origin with four arms of width w and length l along ±x
// and ±y, with cells about size, and a grid line at each of the given distances from the centre.
func Plus(s, w, l, size float64, lines ...float64) *Grid {
	stops := append([]float64{0, w / 2, s / 2, s/2 + l}, lines...)
	sort.Float64s(stops)
	var half []float64
	for i := 1; i < len(stops); i++ {
		if span := stops[i] - stops[i-1]; span > 1e-9*l {
			n := int(math.Ceil(span/size - 1e-9))
			for k := range n {
				half = append(half, stops[i-1]+span*float64(k)/float64(n))
			}
		}
	}
	half = append(half, s/2+l)
	var axis []float64
	for i := len(half) - 1; i > 0; i-- {
		axis = append(axis, -half[i])
	}
	axis = append(axis, half...)
	return Cells(axis, axis, 0, func(x, y float64) bool {
		x, y = math.Abs(x), math.Abs(y)
		return x < s/2 && y < s/2 || x < w/2 || y < w/2
	})
}

// Ring meshes inner ≤ radius ≤ outer with rows of cells and around of them about the axis; sides on
// circles are curved through their mid-side nodes. An inner radius of 0 meshes a disc.
func Ring(inner, outer float64, rows, around int) *Grid {
	disc := inner == 0
	if disc {
		inner = outer / float64(2*rows)
	}
	var points [][2]float64
	for j := range rows + 1 {
		r := inner + (outer-inner)*float64(j)/float64(rows)
		for i := range around {
			a := 2 * math.Pi * float64(i) / float64(around)
			points = append(points, [2]float64{r * math.Cos(a), r * math.Sin(a)})
		}
	}
	var triangles [][3]int32
	for j := range rows {
		for i := range around {
			k := (i + 1) % around
			p, q := int32(j*around+i), int32((j+1)*around+i)
			r, s := int32((j+1)*around+k), int32(j*around+k)
			if (i+j)%2 == 0 {
				triangles = append(triangles, [3]int32{p, q, r}, [3]int32{p, r, s})
			} else {
				triangles = append(triangles, [3]int32{p, q, s}, [3]int32{q, r, s})
			}
		}
	}
	if disc {
		centre := int32(len(points))
		points = append(points, [2]float64{0, 0})
		for i := range around {
			triangles = append(triangles, [3]int32{centre, int32(i), int32((i + 1) % around)})
		}
	}
	g := FromCorners(points, triangles)
	for _, t := range g.Triangles {
		for s := range 3 {
			a, b := g.Points[t[s]], g.Points[t[(s+1)%3]]
			ra, rb := math.Hypot(a[0], a[1]), math.Hypot(b[0], b[1])
			if math.Abs(ra-rb) > 1e-9*outer {
				continue
			}
			m := &g.Points[t[3+s]]
			x, y := a[0]+b[0], a[1]+b[1]
			h := math.Hypot(x, y)
			m[0], m[1] = ra*x/h, ra*y/h
		}
	}
	g.Collect("outer", func(x, y float64) bool { return math.Hypot(x, y) > outer*(1-1e-9) })
	if !disc {
		g.Collect("inner", func(x, y float64) bool { return math.Hypot(x, y) < inner*(1+1e-9) })
	}
	return g
}

// Map moves every node by f; sides stay straight only under affine maps.
func (g *Grid) Map(f func(x, y float64) (float64, float64)) {
	for i, p := range g.Points {
		g.Points[i][0], g.Points[i][1] = f(p[0], p[1])
	}
}

// Outline returns the union of the named sets, ascending.
func (g *Grid) Outline(names ...string) []int32 {
	seen := map[int32]bool{}
	var all []int32
	for _, name := range names {
		for _, n := range g.Sets[name] {
			if !seen[n] {
				seen[n] = true
				all = append(all, n)
			}
		}
	}
	sort.Slice(all, func(i, j int) bool { return all[i] < all[j] })
	return all
}
