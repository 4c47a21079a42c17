package mesh

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
)

const (
	// contactCuts is the number of pieces that each side of a triangle is cut into: a pressed area is summed over the
	// middles of the small triangles, so that its rim is followed to a quarter of a triangle.
	contactCuts = 4
	// lineReach is how far (in thicknesses of the plate) a line may lie beside the material it holds.
	lineReach = 2.0
	// linePieces is the least number of points along a line.
	linePieces = 8
)

// addContact places the points of a contact in the triangles of its plates. Where a bolt clamps both plates a pressed
// contact has none: that stiffness is the bolt's.
func (m *Mesh) addContact(g *airframe.Geometry, c *airframe.Contact) error {
	out := Contact{Name: c.Name, Parts: [2]int32{int32(c.Plates[0]), int32(c.Plates[1])}, Area: c.Kind == airframe.Pressed, Axes: c.Axes}
	sides := [2]*flat{m.flatten(out.Parts[0]), m.flatten(out.Parts[1])}
	if c.Kind == airframe.Pressed {
		out.Points = pressed(g, c, sides)
		if len(out.Points) == 0 {
			return &Problem{Contact: c.Name, Text: fmt.Sprintf("plates %s and %s have no face in common there", g.Plates[c.Plates[0]].Name, g.Plates[c.Plates[1]].Name)}
		}
	} else {
		points, err := line(g, c, sides)
		if err != nil {
			return err
		}
		out.Points = points
	}
	m.Contacts = append(m.Contacts, out)
	return nil
}

// pressed sums over the triangles of the plate with the smaller ones.
func pressed(g *airframe.Geometry, c *airframe.Contact, sides [2]*flat) []ContactPoint {
	over := 0
	if sides[1].cell < sides[0].cell {
		over = 1
	}
	a, b := sides[over], sides[1-over]
	within := bounds(g, c, sides[0])
	var points []ContactPoint
	for k := range a.nodes {
		for _, local := range middles {
			p := place(&a.nodes[k], local)
			at := on(a.frame, p)
			// On the common face.
			d := dot(minus(c.Axes.Origin, at), c.Axes.Z)
			at = airframe.Vec{at[0] + d*c.Axes.Z[0], at[1] + d*c.Axes.Z[1], at[2] + d*c.Axes.Z[2]}
			if !within(at) {
				continue
			}
			triangle, other, ok := b.find(b.in(at), 0)
			if !ok {
				continue
			}
			x := ContactPoint{At: at, Measure: jacobian(&a.nodes[k], local) / (2 * contactCuts * contactCuts)}
			x.Triangle[over], x.Local[over] = a.triangles[k], local
			x.Triangle[1-over], x.Local[1-over] = triangle, other
			points = append(points, x)
		}
	}
	return points
}

// middles are the area coordinates of the middles of contactCuts² equal pieces of a triangle.
var middles = func() (list [][2]float64) {
	const n = contactCuts
	for i := range n {
		for j := range n - i {
			list = append(list, [2]float64{(float64(i) + 1./3) / n, (float64(j) + 1./3) / n})
			if i+j < n-1 {
				list = append(list, [2]float64{(float64(i) + 2./3) / n, (float64(j) + 2./3) / n})
			}
		}
	}
	return list
}()

func on(f airframe.Frame, p planar2) airframe.Vec { return inSpace(f, outline.Point{X: p[0], Y: p[1]}) }

// bounds tells whether a point on the common face belongs to a pressed contact, as far as its shape and the bolts go.
func bounds(g *airframe.Geometry, c *airframe.Contact, first *flat) func(at airframe.Vec) bool {
	var bolts []*airframe.Bolt
	for i := range g.Bolts {
		through := [2]bool{}
		for _, k := range g.Bolts[i].Patches {
			for side, plate := range c.Plates {
				through[side] = through[side] || g.Patches[k].Plate == plate
			}
		}
		if through[0] && through[1] {
			bolts = append(bolts, &g.Bolts[i])
		}
	}
	return func(at airframe.Vec) bool {
		for _, b := range bolts {
			d := minus(at, b.Point)
			if h := dot(d, b.Axis); dot(d, d)-h*h < b.ClampRadius*b.ClampRadius {
				return false
			}
		}
		p := first.in(at)
		dx, dy := p[0]-c.Centre.X, p[1]-c.Centre.Y
		switch c.Shape {
		case airframe.Disc:
			return math.Hypot(dx, dy) <= c.Radius
		case airframe.Rectangle:
			sin, cos := math.Sincos(c.Turn)
			return math.Abs(dx*cos+dy*sin) <= c.Width/2 && math.Abs(dy*cos-dx*sin) <= c.Height/2
		}
		return true
	}
}

// line places points at the middles of equal pieces of a line, no longer than half a triangle.
func line(g *airframe.Geometry, c *airframe.Contact, sides [2]*flat) ([]ContactPoint, error) {
	along := minus(c.Ends[1], c.Ends[0])
	length := norm(along)
	n := max(linePieces, int(math.Ceil(length/(0.25*min(sides[0].cell, sides[1].cell)))))
	var points []ContactPoint
	for k := range n {
		t := (float64(k) + 0.5) / float64(n)
		x := ContactPoint{Measure: length / float64(n)}
		for d := range x.At {
			x.At[d] = c.Ends[0][d] + t*along[d]
		}
		for side, f := range sides {
			plate := &g.Plates[c.Plates[side]]
			var ok bool
			if x.Triangle[side], x.Local[side], ok = f.find(f.in(x.At), lineReach*plate.Thickness); !ok {
				return nil, &Problem{Contact: c.Name, Text: fmt.Sprintf("plate %s has no material near (%.4g, %.4g, %.4g) mm", plate.Name, 1e3*x.At[0], 1e3*x.At[1], 1e3*x.At[2])}
			}
		}
		points = append(points, x)
	}
	return points, nil
}
