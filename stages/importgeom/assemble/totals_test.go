package assemble

import (
	"math"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/stages/importgeom/airframefile"
)

// The totals of a skew plate with a hole, a leaning standoff, a bolt and a body against sums over small pieces.
func TestTotalsAgainstSmallPieces(t *testing.T) {
	region := outline.NewRegion(outline.Polygon(outline.Point{}, outline.Point{X: 0.06}, outline.Point{X: 0.05, Y: 0.03}, outline.Point{X: 0.02, Y: 0.045}),
		outline.Loop{outline.Circle(outline.Point{X: 0.03, Y: 0.015}, 0.008, true)})
	frame := place3(&airframefile.Plate{Thickness: 6e-3, Turn: 0.6, Tilt: [2]float64{0.4, -0.3}, At: vec{0.01, -0.02, 0.03}})
	g := &airframe.Geometry{
		Plates:    []airframe.Plate{{Name: "p", Region: region, Frame: frame, Thickness: 6e-3}},
		Standoffs: []airframe.Standoff{{Name: "s", Ends: [2]vec{{0, 0.01, 0}, {0.03, 0.02, 0.05}}, Outer: 12e-3, Inner: 8e-3}},
		Bolts:     []airframe.Bolt{{Name: "b", Point: vec{0.05, 0.01, -0.01}}},
	}
	body := airframe.Body{Name: "l", Mass: 0.03, Centre: vec{-0.04, 0.03, 0.02}, Inertia: [6]float64{4e-6, 5e-6, 6e-6, 1e-6, -5e-7, 3e-7}}
	p := &airframe.Properties{
		Plates:    []airframe.PlateProperties{{Mass: 0.02}},
		Standoffs: []airframe.StandoffProperties{{Mass: 0.015}},
		Bolts:     []airframe.BoltProperties{{Mass: 0.01}},
		Bodies:    []airframe.Body{body},
	}
	type bit struct {
		m float64
		p vec
	}
	var bits []bit
	spread := func(mass float64, pts []vec) {
		for _, q := range pts {
			bits = append(bits, bit{mass / float64(len(pts)), q})
		}
	}
	var pts []vec
	const n = 160
	for i := range n {
		for j := range n {
			q := outline.Point{X: 0.06 * (float64(i) + 0.5) / n, Y: 0.045 * (float64(j) + 0.5) / n}
			if region.Contains(q) {
				for _, z := range [2]float64{-1, 1} { // two points have the second moment of the thickness
					pts = append(pts, inSpace(frame, q, z*6e-3/math.Sqrt(12)))
				}
			}
		}
	}
	spread(0.02, pts)
	s := g.Standoffs[0]
	d := sub(s.Ends[1], s.Ends[0])
	e := scale(d, 1/norm(d))
	u := cross(e, vec{0, 0, 1})
	u = scale(u, 1/norm(u))
	v := cross(e, u)
	pts = nil
	r := math.Sqrt((6e-3*6e-3 + 4e-3*4e-3) / 2) // a thin tube of the same second moment
	for i := range 200 {
		for j := range 24 {
			sn, co := math.Sincos(2 * math.Pi * float64(j) / 24)
			pts = append(pts, add(along(s.Ends[0], d, (float64(i)+0.5)/200), add(scale(u, r*co), scale(v, r*sn))))
		}
	}
	spread(0.015, pts)
	bits = append(bits, bit{0.01, g.Bolts[0].Point}, bit{0.03, body.Centre})

	var mass float64
	var moment vec
	for _, b := range bits {
		mass += b.m
		moment = along(moment, b.p, b.m)
	}
	centre := scale(moment, 1/mass)
	want := body.Inertia
	for _, b := range bits {
		q := sub(b.p, centre)
		want[0] += b.m * (q[1]*q[1] + q[2]*q[2])
		want[1] += b.m * (q[0]*q[0] + q[2]*q[2])
		want[2] += b.m * (q[0]*q[0] + q[1]*q[1])
		want[3] -= b.m * q[0] * q[1]
		want[4] -= b.m * q[0] * q[2]
		want[5] -= b.m * q[1] * q[2]
	}
	got := total(g, p)
	near1(t, "mass", got.Mass, 0.075, 1e-15)
	for i := range 3 {
		near1(t, "centre", got.Centre[i], centre[i], 2e-5)
	}
	for i := range 6 {
		near1(t, "inertia", got.Inertia[i], want[i], 2e-3*want[0])
	}
}
