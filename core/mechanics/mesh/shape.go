package mesh

import (
	"math"

	"hushframe/core/mechanics/airframe"
)

// Weights are the shape functions of the six-node triangle at area coordinates (of corners 1 and 2), in the order of
// its nodes.
func Weights(local [2]float64) [6]float64 {
	b, c := local[0], local[1]
	a := 1 - b - c
	return [6]float64{a * (2*a - 1), b * (2*b - 1), c * (2*c - 1), 4 * a * b, 4 * b * c, 4 * c * a}
}

// slopes are the derivatives of Weights by the two coordinates.
func slopes(local [2]float64) (db, dc [6]float64) {
	b, c := local[0], local[1]
	a := 1 - b - c
	db = [6]float64{1 - 4*a, 4*b - 1, 0, 4 * (a - b), 4 * c, -4 * c}
	dc = [6]float64{1 - 4*a, 0, 4*c - 1, -4 * b, 4 * b, 4 * (a - c)}
	return db, dc
}

// flat is the triangles of one part in its plane, sorted into a grid to find points.
type flat struct {
	frame     airframe.Frame
	triangles []int32      // of the mesh
	nodes     [][6]planar2 // of each
	lo        planar2
	cell      float64
	width     int
	cells     map[int][]int // indices into triangles
}

type planar2 [2]float64

func (m *Mesh) flatten(part int32) *flat {
	f := &flat{frame: m.Parts[part].Frame, lo: planar2{math.Inf(1), math.Inf(1)}, cells: map[int][]int{}}
	hi, area := planar2{math.Inf(-1), math.Inf(-1)}, 0.0
	for t, p := range m.TrianglePart {
		if p != part {
			continue
		}
		var nodes [6]planar2
		for i, v := range m.Triangles[t] {
			nodes[i] = f.in(m.Nodes[v])
			for d := range 2 {
				f.lo[d], hi[d] = min(f.lo[d], nodes[i][d]), max(hi[d], nodes[i][d])
			}
		}
		f.triangles, f.nodes = append(f.triangles, int32(t)), append(f.nodes, nodes)
		area += math.Abs(cross2(nodes[0], nodes[1], nodes[2])) / 2
	}
	if len(f.triangles) == 0 {
		return f
	}
	f.cell = 2 * math.Sqrt(area/float64(len(f.triangles)))
	f.width = int((hi[0]-f.lo[0])/f.cell) + 1
	for k, nodes := range f.nodes {
		from, to := nodes[0], nodes[0]
		for _, n := range nodes {
			for d := range 2 {
				from[d], to[d] = min(from[d], n[d]), max(to[d], n[d])
			}
		}
		f.over(from, to, func(cell int) { f.cells[cell] = append(f.cells[cell], k) })
	}
	return f
}

// over visits the cells of a box.
func (f *flat) over(from, to planar2, visit func(cell int)) {
	x0, y0 := int(math.Floor((from[0]-f.lo[0])/f.cell)), int(math.Floor((from[1]-f.lo[1])/f.cell))
	x1, y1 := int(math.Floor((to[0]-f.lo[0])/f.cell)), int(math.Floor((to[1]-f.lo[1])/f.cell))
	for y := y0; y <= y1; y++ {
		for x := max(x0, 0); x <= min(x1, f.width-1); x++ {
			visit(y*f.width + x)
		}
	}
}

func (f *flat) in(p airframe.Vec) planar2 {
	d := minus(p, f.frame.Origin)
	return planar2{dot(d, f.frame.X), dot(d, f.frame.Y)}
}

func dot(a, b airframe.Vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func cross2(a, b, c planar2) float64 {
	return (b[0]-a[0])*(c[1]-a[1]) - (b[1]-a[1])*(c[0]-a[0])
}

// inside is how far (area coordinates) a point may lie beyond a side for rounding.
const inside = 1e-6

// find gives the triangle in which a point lies, or within reach (m) of which, the nearest of them, with its area
// coordinates there, none below zero. Of equals it is the first.
func (f *flat) find(p planar2, reach float64) (triangle int32, local [2]float64, ok bool) {
	best := math.Inf(1)
	if len(f.triangles) == 0 {
		return 0, local, false
	}
	f.over(planar2{p[0] - reach, p[1] - reach}, planar2{p[0] + reach, p[1] + reach}, func(cell int) {
		for _, k := range f.cells[cell] {
			at := locate(&f.nodes[k], p)
			out := -min(at[0], at[1], 1-at[0]-at[1])
			distance := 0.0
			if out > inside {
				at = clamped(at)
				q := place(&f.nodes[k], at)
				distance = math.Hypot(q[0]-p[0], q[1]-p[1])
			}
			if distance < best && distance <= reach {
				best, triangle, local, ok = distance, f.triangles[k], at, true
			}
		}
	})
	return triangle, local, ok
}

// clamped moves area coordinates to the nearest ones of the triangle, roughly.
func clamped(at [2]float64) [2]float64 {
	l := [3]float64{max(0, 1-at[0]-at[1]), max(0, at[0]), max(0, at[1])}
	sum := l[0] + l[1] + l[2]
	return [2]float64{l[1] / sum, l[2] / sum}
}

func place(nodes *[6]planar2, local [2]float64) (p planar2) {
	for i, w := range Weights(local) {
		p[0] += w * nodes[i][0]
		p[1] += w * nodes[i][1]
	}
	return p
}

// locate inverts the map of a triangle by Newton's method from the straight one.
func locate(nodes *[6]planar2, p planar2) [2]float64 {
	area := cross2(nodes[0], nodes[1], nodes[2])
	at := [2]float64{cross2(nodes[0], p, nodes[2]) / area, cross2(nodes[0], nodes[1], p) / area}
	if out := -min(at[0], at[1], 1-at[0]-at[1]); out > 0.5 {
		return at // far off: a curved side changes nothing
	}
	for range 8 {
		q := place(nodes, at)
		db, dc := slopes(at)
		var xb, yb, xc, yc float64
		for i, n := range nodes {
			xb, yb = xb+db[i]*n[0], yb+db[i]*n[1]
			xc, yc = xc+dc[i]*n[0], yc+dc[i]*n[1]
		}
		det := xb*yc - xc*yb
		if det == 0 {
			return at
		}
		dx, dy := p[0]-q[0], p[1]-q[1]
		b, c := (dx*yc-dy*xc)/det, (dy*xb-dx*yb)/det
		at[0], at[1] = at[0]+b, at[1]+c
		if math.Abs(b)+math.Abs(c) < 1e-12 {
			break
		}
	}
	return at
}

// jacobian is the area of the plane per unit of the triangle's coordinates.
func jacobian(nodes *[6]planar2, local [2]float64) float64 {
	db, dc := slopes(local)
	var xb, yb, xc, yc float64
	for i, n := range nodes {
		xb, yb = xb+db[i]*n[0], yb+db[i]*n[1]
		xc, yc = xc+dc[i]*n[0], yc+dc[i]*n[1]
	}
	return xb*yc - xc*yb
}
