package counterpart

import (
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
)

// side is a Frame made ready.
type side struct {
	Frame
	elastic []int // vectors of the basis
	parts   map[string]*part
	solids  map[string]Solid
	sites   map[string]modal.Site
	mass    float64
}

func newSide(f Frame) *side {
	s := &side{Frame: f, parts: map[string]*part{}, solids: map[string]Solid{}, sites: map[string]modal.Site{}}
	for v, kind := range f.Basis.Kinds {
		if kind != modal.Elastic {
			continue
		}
		if len(f.Basis.Shapes[v]) != 3*len(f.Mesh.Nodes) {
			panic("counterpart: a basis of another mesh")
		}
		s.elastic = append(s.elastic, v)
	}
	parts := make([]*part, len(f.Mesh.Parts))
	for i, p := range f.Mesh.Parts {
		parts[i] = &part{nodes: f.Mesh.Nodes, standoff: p.Standoff, frame: p.Frame, quadratic: p.Element == "quadratic-triangle", mass: f.Masses[p.Name]}
	}
	for t, n := range f.Mesh.Triangles {
		parts[f.Mesh.TrianglePart[t]].add(n)
	}
	for b, n := range f.Mesh.Beams {
		p := parts[f.Mesh.BeamPart[b]]
		p.beams = append(p.beams, n)
	}
	for i, p := range f.Mesh.Parts {
		if q := parts[i]; q.mass > 0 && (len(q.beams) > 0 || q.area > 0) {
			q.sort()
			s.parts[p.Name] = q
			s.mass += q.mass
		}
	}
	for _, x := range f.Basis.Sites {
		s.sites[x.Name] = x
	}
	for _, x := range f.Solids {
		if _, ok := s.sites[x.Name]; ok && x.Mass > 0 {
			s.solids[x.Name] = x
			s.mass += x.Mass
		}
	}
	return s
}

// place is a point as a sum over nodes.
type place struct {
	nodes   [6]int32
	weights [6]float64
	count   int
}

func (p place) of(shape []float64) (u airframe.Vec) {
	for i := range p.count {
		n := 3 * int(p.nodes[i])
		for d := range u {
			u[d] += p.weights[i] * shape[n+d]
		}
	}
	return u
}

// part is a plate in its own plane, or a standoff.
type part struct {
	nodes     []airframe.Vec
	standoff  bool
	quadratic bool
	frame     airframe.Frame
	mass      float64

	triangles [][6]int32
	corners   [][3][2]float64 // in the frame
	centres   []airframe.Vec  // in airframe axes
	areas     []float64
	area      float64
	grid      grid

	beams [][2]int32 // from the lower to the upper end
}

func (p *part) add(n [6]int32) {
	var c [3][2]float64
	var centre airframe.Vec
	for k := range c {
		at := p.nodes[n[k]]
		c[k] = p.local(at)
		for d := range centre {
			centre[d] += at[d] / 3
		}
	}
	area := math.Abs((c[1][0]-c[0][0])*(c[2][1]-c[0][1])-(c[2][0]-c[0][0])*(c[1][1]-c[0][1])) / 2
	p.triangles, p.corners = append(p.triangles, n), append(p.corners, c)
	p.centres, p.areas = append(p.centres, centre), append(p.areas, area)
	p.area += area
}

func (p *part) sort() {
	if len(p.triangles) > 0 {
		p.grid = newGrid(p.corners)
	}
}

func (p *part) local(at airframe.Vec) [2]float64 {
	r := airframe.Vec{at[0] - p.frame.Origin[0], at[1] - p.frame.Origin[1], at[2] - p.frame.Origin[2]}
	return [2]float64{dot(r, p.frame.X), dot(r, p.frame.Y)}
}

// seen gives a point of p, in airframe axes, in the plane of another part: by the frames of both, or as it lies.
func (p *part) seen(q *part, at airframe.Vec, own bool) [2]float64 {
	if own {
		return p.local(at)
	}
	return q.local(at)
}

// probes is how many triangles are looked at to see how far two plates are apart.
const probes = 100

// apart is the mean square distance of points of either part to the other.
func apart(p, q *part, own bool) float64 {
	sum := 0.0
	for _, pair := range [2][2]*part{{p, q}, {q, p}} {
		from, to := pair[0], pair[1]
		step := max(1, len(from.centres)/probes)
		n := 0
		var square float64
		for t := 0; t < len(from.centres); t += step {
			_, d := to.find(from.seen(to, from.centres[t], own))
			square += d
			n++
		}
		sum += square / float64(n)
	}
	return sum
}

func (p *part) middle(t int) place { return p.inside(t, [3]float64{1. / 3, 1. / 3, 1. / 3}) }

// nearest is the point of the part nearest to one of its plane.
func (p *part) nearest(at [2]float64) place {
	t, _ := p.find(at)
	return p.inside(t, closest(p.corners[t], at))
}

// find gives the nearest triangle and the square of the distance.
func (p *part) find(at [2]float64) (best int, square float64) {
	square = math.Inf(1)
	try := func(t int) {
		if d := distance(p.corners[t], at); d < square {
			best, square = t, d
		}
	}
	for _, t := range p.grid.at(at) {
		try(int(t))
	}
	if square <= onIt*p.grid.size*p.grid.size {
		return best, 0
	}
	for t := range p.corners {
		try(t)
	}
	return best, square
}

// onIt is the square of the distance, in cells, at which a point lies on a triangle but for rounding.
const onIt = 1e-16

// inside gives a point of a triangle by its area coordinates.
func (p *part) inside(t int, l [3]float64) place {
	n := p.triangles[t]
	if !p.quadratic { // mid-side nodes of other elements may be without motion
		return place{nodes: [6]int32{n[0], n[1], n[2]}, weights: [6]float64{l[0], l[1], l[2]}, count: 3}
	}
	return place{nodes: n, count: 6, weights: [6]float64{
		l[0] * (2*l[0] - 1), l[1] * (2*l[1] - 1), l[2] * (2*l[2] - 1), 4 * l[0] * l[1], 4 * l[1] * l[2], 4 * l[2] * l[0]}}
}

// along gives the point of a standoff at a share t of its elements, 0 to 1.
func (p *part) along(t float64) place {
	x := t * float64(len(p.beams))
	i := min(int(x), len(p.beams)-1)
	x -= float64(i)
	return place{nodes: [6]int32{p.beams[i][0], p.beams[i][1]}, weights: [6]float64{1 - x, x}, count: 2}
}
