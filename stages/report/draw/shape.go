package draw

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"hushframe/core/mechanics/airframe"
)

// View looks at a frame from behind, right and above, without perspective.
// Forward is away from the viewer.
type View struct {
	right, up, toward airframe.Vec
	scale             float64 // picture units per metre
	x0, y0            float64 // picture units of the origin
	width, height     float64
	span              float64 // m, largest extent of the frame
}

// shapeWidth is the width of a picture in its own whole units.
const shapeWidth = 1200.0

// swing is how far the largest displacement is drawn, as a share of the span.
const swing = 0.08

// NewView fits the view to the surface and further points (hubs, the gyro),
// leaving room for the motion.
func NewView(s *Surface, more []airframe.Vec) *View {
	const azimuth, elevation = 38 * math.Pi / 180, 34 * math.Pi / 180
	ca, sa, ce, se := math.Cos(azimuth), math.Sin(azimuth), math.Cos(elevation), math.Sin(elevation)
	v := &View{
		toward: airframe.Vec{-ce * ca, -ce * sa, se},
		right:  airframe.Vec{sa, -ca, 0},
		up:     airframe.Vec{se * ca, se * sa, ce},
	}
	lowX, lowY, highX, highY := math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)
	var low, high airframe.Vec
	for d := range low {
		low[d], high[d] = math.Inf(1), math.Inf(-1)
	}
	see := func(p airframe.Vec) {
		x, y := dot(p, v.right), -dot(p, v.up)
		lowX, highX, lowY, highY = math.Min(lowX, x), math.Max(highX, x), math.Min(lowY, y), math.Max(highY, y)
		for d := range p {
			low[d], high[d] = math.Min(low[d], p[d]), math.Max(high[d], p[d])
		}
	}
	for _, part := range s.Parts {
		for _, t := range part.Triangles {
			for _, n := range t {
				see(s.Nodes[n])
			}
		}
		for _, l := range part.Lines {
			see(s.Nodes[l[0]])
			see(s.Nodes[l[1]])
		}
	}
	for _, p := range more {
		see(p)
	}
	for d := range low {
		v.span = math.Max(v.span, high[d]-low[d])
	}
	margin := swing*v.span + 0.04*v.span
	v.scale = shapeWidth / (highX - lowX + 2*margin)
	v.x0, v.y0 = (margin-lowX)*v.scale, (margin-lowY)*v.scale
	v.width, v.height = shapeWidth, math.Ceil((highY-lowY+2*margin)*v.scale)
	return v
}

func dot(a, b airframe.Vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func (v *View) at(p airframe.Vec) (x, y int) {
	return int(math.Round(v.x0 + v.scale*dot(p, v.right))), int(math.Round(v.y0 - v.scale*dot(p, v.up)))
}

// Rest gives the outline at rest as an invisible picture to be put on the page
// once; shapes refer to it by the name.
func (v *View) Rest(s *Surface, name string) string {
	p := &pen{v: v}
	for _, part := range s.Parts {
		for _, e := range part.Edges {
			p.stroke(s.Nodes[e[0]], s.Nodes[e[1]])
		}
		for _, l := range part.Lines {
			p.stroke(s.Nodes[l[0]], s.Nodes[l[1]])
		}
	}
	return `<svg width="0" height="0" class="aside" aria-hidden="true"><defs><path id="` + name + `" class="rest" d="` + p.b.String() + `"/></defs></svg>`
}

// Motion is how a frame moves: displacement of each node of the mesh (m, any
// common scale) and of points that are no nodes.
type Motion struct {
	About string
	Node  func(n int32) airframe.Vec
	Hubs  []Hub
	Boxes []Box
	// Gyro is nil when its motion is not known.
	Gyro *Hub
}

// Hub is a point with its displacement and rotation, in the scale of Motion.
type Hub struct {
	At, Move, Turn airframe.Vec
}

// moves gives the displacement of a point fixed to the hub at an arm from it.
func (h Hub) moves(arm airframe.Vec) airframe.Vec { return plus(cross(h.Turn, arm), h.Move, 1) }

// Box is a body drawn as the edges of a box along the airframe's axes, that
// moves as one.
type Box struct {
	Hub               // at its centre
	Half airframe.Vec // half its sides, m
}

// Corners gives the eight corners at rest; bit d of the index is set for the
// far side along axis d.
func (b Box) Corners() [8]airframe.Vec {
	var out [8]airframe.Vec
	for n := range out {
		out[n] = b.At
		for d := range 3 {
			if n>>d&1 == 1 {
				out[n][d] += b.Half[d]
			} else {
				out[n][d] -= b.Half[d]
			}
		}
	}
	return out
}

// Shape draws the frame as it moves, over its outline at rest. Displacements of
// the mesh are coloured in Levels steps of their own largest; all motion is
// drawn enlarged so that the largest, of the mesh, a hub or a box, swings by a
// fixed share of the span.
func (v *View) Shape(s *Surface, rest string, m Motion) string {
	largest := 0.0
	see := func(u airframe.Vec) { largest = math.Max(largest, math.Sqrt(dot(u, u))) }
	for _, part := range s.Parts {
		for _, t := range part.Triangles {
			for _, n := range t {
				see(m.Node(n))
			}
		}
		for _, l := range part.Lines {
			see(m.Node(l[0]))
			see(m.Node(l[1]))
		}
	}
	coloured := largest
	for _, h := range m.Hubs {
		for k := range ringSides {
			see(h.moves(v.ringArm(k)))
		}
	}
	for _, b := range m.Boxes {
		for _, corner := range b.Corners() {
			see(b.moves(plus(corner, b.At, -1)))
		}
	}
	gain := 0.0
	if largest > 0 {
		gain = swing * v.span / largest
	}
	moved := func(n int32) airframe.Vec { return plus(s.Nodes[n], m.Node(n), gain) }
	share := func(nodes ...int32) float64 {
		sum := 0.0
		for _, n := range nodes {
			u := m.Node(n)
			sum += math.Sqrt(dot(u, u))
		}
		if coloured == 0 {
			return 0
		}
		return sum / float64(len(nodes)) / coloured
	}
	c := &canvas{}
	c.open("shape", m.About, v.width, v.height)
	c.b.WriteString(`<use href="#` + rest + `"/>`)
	for _, part := range s.Parts {
		var fills [Levels]pen
		for _, t := range part.Triangles {
			f := &fills[level(share(t[0], t[1], t[2]))]
			f.v = v
			f.triangle(moved(t[0]), moved(t[1]), moved(t[2]))
		}
		for k := range fills {
			if fills[k].b.Len() > 0 {
				c.b.WriteString(`<path class="k` + strconv.Itoa(k) + `" d="` + fills[k].b.String() + `"/>`)
			}
		}
		rim := &pen{v: v}
		for _, e := range part.Edges {
			rim.stroke(moved(e[0]), moved(e[1]))
		}
		if rim.b.Len() > 0 {
			c.b.WriteString(`<path class="rim" d="` + rim.b.String() + `"/>`)
		}
		pillar := &pen{v: v}
		for _, l := range part.Lines {
			pillar.stroke(moved(l[0]), moved(l[1]))
		}
		if pillar.b.Len() > 0 {
			c.b.WriteString(`<path class="pillar" d="` + pillar.b.String() + `"/>`)
		}
	}
	for _, b := range m.Boxes {
		v.box(c, b, gain)
	}
	for _, h := range m.Hubs {
		v.ring(c, s, m.Node, h, gain)
	}
	if m.Gyro != nil {
		v.arrow(c, *m.Gyro)
	}
	v.axes(c)
	return c.close()
}

func plus(p, u airframe.Vec, gain float64) airframe.Vec {
	return airframe.Vec{p[0] + gain*u[0], p[1] + gain*u[1], p[2] + gain*u[2]}
}

func cross(a, b airframe.Vec) airframe.Vec {
	return airframe.Vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

// ring draws a rotor as a small circle that moves and tilts with its hub, on a
// stem from the nearest node.
func (v *View) ring(c *canvas, s *Surface, node func(int32) airframe.Vec, h Hub, gain float64) {
	p := &pen{v: v}
	point := func(k int) airframe.Vec {
		arm := v.ringArm(k)
		return plus(plus(h.At, arm, 1), h.moves(arm), gain)
	}
	for k := range ringSides {
		p.stroke(point(k), point(k+1))
	}
	if n, ok := s.nearest(h.At); ok {
		p.stroke(plus(s.Nodes[n], node(n), gain), plus(h.At, h.Move, gain))
	}
	c.b.WriteString(`<path class="hub" d="` + p.b.String() + `"/>`)
}

const ringSides = 24

// ringArm goes from a hub to corner k of its ring.
func (v *View) ringArm(k int) airframe.Vec {
	s, c := math.Sincos(2 * math.Pi * float64(k) / ringSides)
	return airframe.Vec{0.045 * v.span * c, 0.045 * v.span * s, 0}
}

// box draws the edges of a body as it moves and turns.
func (v *View) box(c *canvas, b Box, gain float64) {
	var at [8]airframe.Vec
	for n, corner := range b.Corners() {
		at[n] = plus(corner, b.moves(plus(corner, b.At, -1)), gain)
	}
	p := &pen{v: v}
	for n := range at {
		for d := range 3 {
			if n>>d&1 == 0 {
				p.stroke(at[n], at[n|1<<d])
			}
		}
	}
	c.b.WriteString(`<path class="body" d="` + p.b.String() + `"/>`)
}

// arrow draws the rotation of the gyro as an arrow along its axis of rotation,
// by the right hand, through a ring round that axis.
func (v *View) arrow(c *canvas, g Hub) {
	size := math.Sqrt(dot(g.Turn, g.Turn))
	if size == 0 {
		return
	}
	axis := airframe.Vec{g.Turn[0] / size, g.Turn[1] / size, g.Turn[2] / size}
	l := 0.17 * v.span
	x0, y0 := v.at(plus(g.At, axis, -l))
	x1, y1 := v.at(plus(g.At, axis, l))
	d := "M" + strconv.Itoa(x0) + " " + strconv.Itoa(y0) + "L" + strconv.Itoa(x1) + " " + strconv.Itoa(y1)
	dx, dy := float64(x1-x0), float64(y1-y0)
	if n := math.Hypot(dx, dy); n > 12 {
		dx, dy = dx/n, dy/n
		for _, side := range []float64{1, -1} {
			d += fmt.Sprintf("M%d %dL%.0f %.0f", x1, y1, float64(x1)-26*dx+12*side*dy, float64(y1)-26*dy-12*side*dx)
		}
	}
	// Three quarters of a ring, with a head where it ends, show which way round.
	start := airframe.Vec{1, 0, 0}
	if math.Abs(axis[0]) > 0.8 {
		start = airframe.Vec{0, 1, 0}
	}
	e2 := cross(axis, start)
	n := math.Sqrt(dot(e2, e2))
	e2 = airframe.Vec{e2[0] / n, e2[1] / n, e2[2] / n}
	e1 := cross(e2, axis)
	r := 0.055 * v.span
	ring := func(a, r float64) (int, int) {
		return v.at(plus(plus(g.At, e1, r*math.Cos(a)), e2, r*math.Sin(a)))
	}
	for k := 0; k <= 18; k++ {
		x, y := ring(float64(k)*math.Pi/12, r)
		d += map[bool]string{true: "M", false: "L"}[k == 0] + strconv.Itoa(x) + " " + strconv.Itoa(y)
	}
	tipX, tipY := ring(1.5*math.Pi, r)
	for _, side := range []float64{0.72, 1.28} {
		x, y := ring(1.5*math.Pi-0.45, r*side)
		d += fmt.Sprintf("M%d %dL%d %d", tipX, tipY, x, y)
	}
	c.b.WriteString(`<path class="turn-halo" d="` + d + `"/><path class="turn" d="` + d + `"/>`)
}

// axes names the directions in a corner.
func (v *View) axes(c *canvas) {
	ox, oy := 130.0, v.height-50
	length := 0.08 * v.span * v.scale
	for d, name := range [3]string{"forward", "left", "up"} {
		var axis airframe.Vec
		axis[d] = 1
		x, y := dot(axis, v.right)*length, -dot(axis, v.up)*length
		c.line(ox, oy, ox+x, oy+y, "triad")
		switch {
		case x < -1:
			c.text(ox+1.1*x, oy+1.1*y, "triad-label", "end", name)
		case x > 1:
			c.text(ox+1.1*x, oy+1.1*y, "triad-label", "start", name)
		default:
			c.text(ox, oy+y-10, "triad-label", "middle", name)
		}
	}
}

// pen writes path data in whole units, relative to the last point.
type pen struct {
	v      *View
	b      strings.Builder
	x, y   int
	placed bool
}

func (p *pen) move(x, y int) {
	if p.placed && p.x == x && p.y == y {
		return
	}
	p.b.WriteString("M" + strconv.Itoa(x) + pair(y))
	p.x, p.y, p.placed = x, y, true
}

// pair writes a number after another; a minus sign parts them by itself.
func pair(y int) string {
	if y < 0 {
		return strconv.Itoa(y)
	}
	return " " + strconv.Itoa(y)
}

func (p *pen) line(x, y int) {
	p.b.WriteString("l" + strconv.Itoa(x-p.x) + pair(y-p.y))
	p.x, p.y = x, y
}

func (p *pen) stroke(a, b airframe.Vec) {
	ax, ay := p.v.at(a)
	bx, by := p.v.at(b)
	p.move(ax, ay)
	p.line(bx, by)
}

func (p *pen) triangle(a, b, c airframe.Vec) {
	ax, ay := p.v.at(a)
	bx, by := p.v.at(b)
	cx, cy := p.v.at(c)
	p.b.WriteString("M" + strconv.Itoa(ax) + pair(ay))
	p.x, p.y = ax, ay
	p.line(bx, by)
	p.b.WriteString(pair(cx-bx) + pair(cy-by) + "z") // a line goes on without its letter
	p.placed = false
}
