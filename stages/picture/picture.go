package picture

import (
	"fmt"
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
)

// flat is the deviation (m) of drawn curves.
const flat = 0.05e-3

// Top draws the frame from above, forward up. centre is the centre of gravity of the whole frame, nil when not known.
func Top(g *airframe.Geometry, p *airframe.Properties, centre *airframe.Vec) string {
	v := &view{box: outline.EmptyBox(),
		right: func(_, y, _ float64) float64 { return -y },
		down:  func(x, _, _ float64) float64 { return -x },
	}
	for _, i := range byHeight(g) {
		pl := g.Plates[i]
		var rings [][]outline.Point
		for _, l := range pl.Region.Loops() {
			var ring []outline.Point
			for _, q := range l.Flatten(flat) {
				ring = append(ring, v.page(inSpace(pl.Frame, q, pl.Thickness/2)))
			}
			rings = append(rings, ring)
		}
		v.path("af-plate", plateTitle(pl), rings)
	}
	for _, b := range g.Bolts {
		c := v.page(b.Point)
		v.circle("af-bolt", "bolt "+b.Name, c, 1e3*b.ClampRadius)
	}
	for _, s := range g.Standoffs {
		v.circle("af-post", "standoff "+s.Name, v.page(s.Ends[1]), 500*s.Outer)
	}
	v.bodies(p)
	for _, r := range p.Rotors {
		v.spin(v.page(r.Hub), r)
	}
	v.centre(centre)
	return v.finish("frame from above, forward is up", outline.Point{Y: -1})
}

// Side draws the frame from its right side, forward to the right; centre as for Top.
func Side(g *airframe.Geometry, p *airframe.Properties, centre *airframe.Vec) string {
	v := &view{box: outline.EmptyBox(),
		right: func(x, _, _ float64) float64 { return x },
		down:  func(_, _, z float64) float64 { return -z },
	}
	for _, s := range g.Standoffs {
		// Across the pillar, on the page.
		a, b := v.page(s.Ends[0]), v.page(s.Ends[1])
		e := b.Sub(a)
		if l := e.Norm(); l > 0 {
			w := outline.Point{X: -e.Y, Y: e.X}.Scale(500 * s.Outer / l)
			v.path("af-post", "standoff "+s.Name, [][]outline.Point{{a.Add(w), b.Add(w), b.Sub(w), a.Sub(w)}})
		}
	}
	for _, i := range byHeight(g) {
		pl := g.Plates[i]
		var pts []outline.Point
		for _, q := range pl.Region.Outer.Flatten(flat) {
			pts = append(pts, v.page(inSpace(pl.Frame, q, pl.Thickness/2)), v.page(inSpace(pl.Frame, q, -pl.Thickness/2)))
		}
		v.path("af-plate", plateTitle(pl), [][]outline.Point{hullOf(pts)})
	}
	v.bodies(p)
	for _, r := range p.Rotors {
		c := v.page(r.Hub)
		v.line("af-way", c.Sub(outline.Point{X: 9}), c.Add(outline.Point{X: 9}))
	}
	v.centre(centre)
	return v.finish("frame from the right side, forward is to the right", outline.Point{X: 1})
}

func plateTitle(pl airframe.Plate) string {
	return fmt.Sprintf("plate %s, %s mm", pl.Name, mm(1e3*pl.Thickness))
}

// byHeight lists plates from the lowest to the highest.
func byHeight(g *airframe.Geometry) []int {
	order := make([]int, len(g.Plates))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return g.Plates[order[a]].Frame.Origin[2] < g.Plates[order[b]].Frame.Origin[2] })
	return order
}

func inSpace(f airframe.Frame, p outline.Point, z float64) airframe.Vec {
	var out airframe.Vec
	for i := range out {
		out[i] = f.Origin[i] + f.X[i]*p.X + f.Y[i]*p.Y + f.Z[i]*z
	}
	return out
}

// halves gives the half sides of the homogeneous box with a body's mass and moments of inertia, along airframe axes.
func halves(b *airframe.Body) [3]float64 {
	var h [3]float64
	for i := range h {
		j, k := (i+1)%3, (i+2)%3
		side := 6 / b.Mass * (b.Inertia[j] + b.Inertia[k] - b.Inertia[i])
		h[i] = math.Sqrt(math.Max(0, side)) / 2
	}
	return h
}

// hull is the outline of a box on the page.
func (v *view) hull(c airframe.Vec, h [3]float64) []outline.Point {
	var pts []outline.Point
	for n := range 8 {
		p := c
		for i := range p {
			if n>>i&1 == 0 {
				p[i] += h[i]
			} else {
				p[i] -= h[i]
			}
		}
		pts = append(pts, v.page(p))
	}
	return hullOf(pts)
}

// drum is the outline on the page of the homogeneous upright cylinder with a body's mass and moments of inertia.
func (v *view) drum(b *airframe.Body) []outline.Point {
	across, spin := (b.Inertia[0]+b.Inertia[1])/2, b.Inertia[2]
	r := math.Sqrt(2 * spin / b.Mass)
	h := math.Sqrt(math.Max(0, 12*across/b.Mass-3*r*r)) / 2
	var pts []outline.Point
	const n = 64
	for i := range n {
		s, c := math.Sincos(2 * math.Pi * float64(i) / n)
		for _, z := range [2]float64{-h, h} {
			pts = append(pts, v.page(airframe.Vec{b.Centre[0] + r*c, b.Centre[1] + r*s, b.Centre[2] + z}))
		}
	}
	return hullOf(pts)
}

// bodies draws bodies and their springs.
func (v *view) bodies(p *airframe.Properties) {
	for i := range p.Bodies {
		b := &p.Bodies[i]
		h := halves(b)
		at := v.page(b.Centre)
		title := fmt.Sprintf("%s %s, %.1f g", b.Kind, b.Name, 1e3*b.Mass)
		if h[0]+h[1]+h[2] < 4e-3 { // a screw
			v.circle("af-solid", title, at, 0.7)
			continue
		}
		switch b.Kind {
		case "rotor":
			v.path("af-rotor", title, [][]outline.Point{v.drum(b)})
		case "gyro":
			v.path("af-gyro", title, [][]outline.Point{v.hull(b.Centre, h)})
		default:
			v.path("af-load", title, [][]outline.Point{v.hull(b.Centre, h)})
		}
		v.label(at, b.Name)
		if b.Mount != nil {
			for _, s := range b.Mount.Points {
				v.circle("af-spring", b.Mount.Kind+" of "+b.Name, v.page(s.Point), 2)
			}
		}
	}
}

// centre marks the centre of gravity.
func (v *view) centre(c *airframe.Vec) {
	if c == nil {
		return
	}
	at := v.page(*c)
	const r = 2.5
	v.circle("af-thin", "centre of gravity", at, r)
	fmt.Fprintf(&v.b, `<path class="af-solid" d="M%s %sv%sa%s %s 0 0 1 %s %sz"/>`, mm(at.X), mm(at.Y), mm(-r), mm(r), mm(r), mm(r), mm(r))
	fmt.Fprintf(&v.b, `<path class="af-solid" d="M%s %sv%sa%s %s 0 0 1 %s %sz"/>`, mm(at.X), mm(at.Y), mm(r), mm(r), mm(r), mm(-r), mm(-r))
}

// spin draws the way a rotor turns, seen from above, round its hub.
func (v *view) spin(c outline.Point, r airframe.Rotor) {
	const radius, from, sweep = 17.0, 0.7, 4.6
	at := func(t float64) outline.Point {
		// On the page y points down, so that counterclockwise is against the page's angle.
		s, co := math.Sincos(-float64(r.Spin) * (from + t*sweep))
		return c.Add(outline.Point{X: co, Y: s}.Scale(radius))
	}
	a, b := at(0), at(1)
	v.grow(c.Add(outline.Point{X: radius, Y: radius}), c.Sub(outline.Point{X: radius, Y: radius}))
	large := 1
	direction := 0
	if r.Spin < 0 {
		direction = 1
	}
	fmt.Fprintf(&v.b, `<path class="af-way" d="M%s %sA%s %s 0 %d %d %s %s"><title>%s</title></path>`, mm(a.X), mm(a.Y), mm(radius), mm(radius), large, direction, mm(b.X), mm(b.Y),
		map[bool]string{true: "turns counterclockwise", false: "turns clockwise"}[r.Spin > 0])
	back := b.Sub(at(0.97))
	back = back.Scale(1 / back.Norm())
	side := outline.Point{X: -back.Y, Y: back.X}
	for _, s := range [2]float64{1.4, -1.4} {
		v.line("af-way", b, b.Sub(back.Scale(2.4)).Add(side.Scale(s)))
	}
}

// hullOf is the convex hull, counterclockwise in the sense of the page's axes (A. M. Andrew, Information Processing
// Letters 9, 1979).
func hullOf(pts []outline.Point) []outline.Point {
	p := append([]outline.Point(nil), pts...)
	sort.Slice(p, func(i, j int) bool { return p[i].X < p[j].X || p[i].X == p[j].X && p[i].Y < p[j].Y })
	half := func() []outline.Point {
		var h []outline.Point
		for _, q := range p {
			for len(h) > 1 && h[len(h)-1].Sub(h[len(h)-2]).Cross(q.Sub(h[len(h)-1])) <= 0 {
				h = h[:len(h)-1]
			}
			h = append(h, q)
		}
		return h[:len(h)-1]
	}
	lower := half()
	for i, j := 0, len(p)-1; i < j; i, j = i+1, j-1 {
		p[i], p[j] = p[j], p[i]
	}
	return append(lower, half()...)
}
