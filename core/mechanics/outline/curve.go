package outline

import (
	"fmt"
	"math"
)

// Kind tells the three forms of curve apart.
type Kind uint8

const (
	KindLine  Kind = iota // straight from P0 to P1
	KindArc               // part of a circle, or all of it
	KindCubic             // cubic Bézier curve P0, C1, C2, P1
)

// Curve is one directed piece of a boundary. Build it with Line, ArcOf, ArcBetween, Circle or Cubic.
type Curve struct {
	Kind   Kind
	P0, P1 Point // ends (m)

	// Arc only: centre and radius (m), angle of P0 seen from the centre and signed sweep to P1 (rad, positive
	// counterclockwise, at most a full turn). A full circle has sweep ±2π and P0 == P1.
	Centre Point
	Radius float64
	Start  float64
	Sweep  float64

	// Cubic only: the two inner control points (m).
	C1, C2 Point
}

// Line returns the straight curve from p to q.
func Line(p, q Point) Curve { return Curve{Kind: KindLine, P0: p, P1: q} }

// Cubic returns the Bézier curve from p to q with inner control points c1 and c2.
func Cubic(p, c1, c2, q Point) Curve { return Curve{Kind: KindCubic, P0: p, P1: q, C1: c1, C2: c2} }

// ArcOf returns the arc about centre that begins at angle start and turns by sweep (rad, positive counterclockwise).
// A sweep within 1e-12 of ±2π gives the full circle. It panics unless radius > 0 and 0 < |sweep| ≤ 2π (+1e-12).
func ArcOf(centre Point, radius, start, sweep float64) Curve {
	if !(radius > 0) || !(math.Abs(sweep) > 0) || math.Abs(sweep) > 2*math.Pi+1e-12 {
		panic(fmt.Sprintf("outline: arc with radius %g m and sweep %g rad", radius, sweep))
	}
	c := Curve{Kind: KindArc, Centre: centre, Radius: radius, Start: start, Sweep: sweep}
	c.P0 = c.onCircle(start)
	if 2*math.Pi-math.Abs(sweep) <= 1e-12 {
		c.Sweep = math.Copysign(2*math.Pi, sweep)
		c.P1 = c.P0
	} else {
		c.P1 = c.onCircle(start + sweep)
	}
	return c
}

// Circle returns the full circle about centre, beginning at angle 0, counterclockwise or clockwise.
func Circle(centre Point, radius float64, counterclockwise bool) Curve {
	sweep := 2 * math.Pi
	if !counterclockwise {
		sweep = -sweep
	}
	return ArcOf(centre, radius, 0, sweep)
}

// ArcBetween returns the arc from p to q that turns by sweep, 0 < |sweep| < 2π; with tan(sweep/4) it is the arc of a
// given bulge. It panics when p == q or the sweep is out of range. A sweep so small that the radius exceeds 1e9
// chords gives the straight line.
func ArcBetween(p, q Point, sweep float64) Curve {
	chord := q.Sub(p)
	d := chord.Norm()
	if d == 0 || !(math.Abs(sweep) > 0) || math.Abs(sweep) >= 2*math.Pi {
		panic(fmt.Sprintf("outline: arc over a chord of %g m with sweep %g rad", d, sweep))
	}
	s, c := math.Sincos(sweep / 2)
	radius := math.Abs(d / (2 * s))
	if radius > 1e9*d {
		return Line(p, q)
	}
	// The centre lies at signed distance (d/2)·cot(sweep/2) to the left of the chord.
	left := Point{-chord.Y, chord.X}.Scale(c / (2 * s))
	centre := p.Lerp(q, 0.5).Add(left)
	start := math.Atan2(p.Y-centre.Y, p.X-centre.X)
	return Curve{Kind: KindArc, P0: p, P1: q, Centre: centre, Radius: radius, Start: start, Sweep: sweep}
}

// EllipseArc returns cubics along centre + u·cos φ + v·sin φ for φ from start to start+sweep (rad). u and v are any two
// independent vectors (conjugate half axes), so the image of an arc under any affine map is covered. The curves are
// within about 2e-7 of the longer half axis of the ellipse (pieces of at most 22.5 degrees of φ). The first and last
// end are those of the formula; for a full turn they are equal. It panics when sweep is 0.
func EllipseArc(centre, u, v Point, start, sweep float64) []Curve {
	if sweep == 0 || math.IsNaN(sweep) || math.Abs(sweep) > 2*math.Pi+1e-12 {
		panic(fmt.Sprintf("outline: elliptic arc with sweep %g rad", sweep))
	}
	n := int(math.Ceil(math.Abs(sweep)/(math.Pi/8) - 1e-9))
	n = max(n, 1)
	at := func(phi float64) Point {
		s, c := math.Sincos(phi)
		return centre.Add(u.Scale(c)).Add(v.Scale(s))
	}
	slope := func(phi float64) Point {
		s, c := math.Sincos(phi)
		return v.Scale(c).Sub(u.Scale(s))
	}
	step := sweep / float64(n)
	h := 4.0 / 3 * math.Tan(step/4)
	full := 2*math.Pi-math.Abs(sweep) <= 1e-12
	curves := make([]Curve, n)
	p := at(start)
	for i := range curves {
		a, b := start+float64(i)*step, start+float64(i+1)*step
		q := at(b)
		if i == n-1 && full {
			q = curves[0].P0
			if n == 1 {
				q = p
			}
		}
		curves[i] = Cubic(p, p.Add(slope(a).Scale(h)), q.Sub(slope(b).Scale(h)), q)
		p = q
	}
	return curves
}

func (c Curve) onCircle(angle float64) Point {
	s, co := math.Sincos(angle)
	return Point{c.Centre.X + c.Radius*co, c.Centre.Y + c.Radius*s}
}

// Closed reports whether c is a full circle.
func (c Curve) Closed() bool { return c.Kind == KindArc && math.Abs(c.Sweep) >= 2*math.Pi }

// At returns the place at parameter t in [0, 1]; At(0) is P0 and At(1) is P1 exactly.
func (c Curve) At(t float64) Point {
	switch {
	case t == 0:
		return c.P0
	case t == 1:
		return c.P1
	case c.Kind == KindArc:
		return c.onCircle(c.Start + t*c.Sweep)
	case c.Kind == KindCubic:
		u := 1 - t
		a, b, d, e := u*u*u, 3*u*u*t, 3*u*t*t, t*t*t
		return Point{
			a*c.P0.X + b*c.C1.X + d*c.C2.X + e*c.P1.X,
			a*c.P0.Y + b*c.C1.Y + d*c.C2.Y + e*c.P1.Y,
		}
	}
	return c.P0.Lerp(c.P1, t)
}

// Derivative returns dP/dt at t (m).
func (c Curve) Derivative(t float64) Point {
	switch c.Kind {
	case KindArc:
		s, co := math.Sincos(c.Start + t*c.Sweep)
		return Point{-s, co}.Scale(c.Radius * c.Sweep)
	case KindCubic:
		u := 1 - t
		d0, d1, d2 := c.C1.Sub(c.P0), c.C2.Sub(c.C1), c.P1.Sub(c.C2)
		return d0.Scale(3 * u * u).Add(d1.Scale(6 * u * t)).Add(d2.Scale(3 * t * t))
	}
	return c.P1.Sub(c.P0)
}

// second returns d²P/dt² (m).
func (c Curve) second(t float64) Point {
	switch c.Kind {
	case KindArc:
		s, co := math.Sincos(c.Start + t*c.Sweep)
		return Point{-co, -s}.Scale(c.Radius * c.Sweep * c.Sweep)
	case KindCubic:
		d0, d1, d2 := c.C1.Sub(c.P0), c.C2.Sub(c.C1), c.P1.Sub(c.C2)
		return d1.Sub(d0).Scale(6 * (1 - t)).Add(d2.Sub(d1).Scale(6 * t))
	}
	return Point{}
}

// Tangent returns the unit tangent at t in the direction of travel. Where the derivative of a cubic vanishes (a control
// point on its end) it is the limit from within the curve; a curve of no length has the zero tangent.
func (c Curve) Tangent(t float64) Point {
	d := c.Derivative(t)
	n := d.Norm()
	if c.Kind == KindCubic {
		scale := math.Max(c.C1.Distance(c.P0), math.Max(c.C2.Distance(c.P0), c.P1.Distance(c.P0)))
		if n <= 1e-12*scale {
			d = c.second(t)
			if t > 0.5 {
				d = d.Scale(-1)
			}
			if n = d.Norm(); n <= 1e-12*scale {
				d = c.P1.Sub(c.P0)
				n = d.Norm()
			}
		}
	}
	if n == 0 {
		return Point{}
	}
	return d.Scale(1 / n)
}

// Curvature returns the signed curvature at t (1/m), positive when the curve bends to the left. It is 0 where the
// derivative of a cubic vanishes.
func (c Curve) Curvature(t float64) float64 {
	switch c.Kind {
	case KindArc:
		return math.Copysign(1/c.Radius, c.Sweep)
	case KindCubic:
		d := c.Derivative(t)
		n := d.Norm()
		if n == 0 {
			return 0
		}
		return d.Cross(c.second(t)) / (n * n * n)
	}
	return 0
}

// Length returns the length of the curve (m); exact for lines and arcs, to about 1e-10 of itself for cubics.
func (c Curve) Length() float64 {
	switch c.Kind {
	case KindArc:
		return c.Radius * math.Abs(c.Sweep)
	case KindCubic:
		speed := func(t float64) float64 { return c.Derivative(t).Norm() }
		scale := c.P0.Distance(c.C1) + c.C1.Distance(c.C2) + c.C2.Distance(c.P1)
		return integrate(speed, 0, 1, gauss(speed, 0, 1), 1e-11*scale, 30)
	}
	return c.P0.Distance(c.P1)
}

// AreaTerm returns ½∫(x dy − y dx) along the curve (m²), exact for each kind. The sum over a loop is its area.
func (c Curve) AreaTerm() float64 {
	switch c.Kind {
	case KindArc:
		return 0.5 * (c.Radius*c.Radius*c.Sweep + c.Centre.Cross(c.P1.Sub(c.P0)))
	case KindCubic:
		return (6*c.P0.Cross(c.C1) + 3*c.P0.Cross(c.C2) + c.P0.Cross(c.P1) +
			3*c.C1.Cross(c.C2) + 3*c.C1.Cross(c.P1) + 6*c.C2.Cross(c.P1)) / 20
	}
	return 0.5 * c.P0.Cross(c.P1)
}

// Reverse returns the same curve run through the other way.
func (c Curve) Reverse() Curve {
	r := c
	r.P0, r.P1 = c.P1, c.P0
	r.C1, r.C2 = c.C2, c.C1
	if c.Kind == KindArc {
		r.Start, r.Sweep = c.Start+c.Sweep, -c.Sweep
	}
	return r
}

// Split returns the parts before and after t; both keep the ends of c exactly. It panics unless 0 < t < 1.
func (c Curve) Split(t float64) (before, after Curve) {
	if !(t > 0 && t < 1) {
		panic(fmt.Sprintf("outline: split at t = %g", t))
	}
	m := c.At(t)
	before, after = c, c
	switch c.Kind {
	case KindArc:
		before.Sweep = t * c.Sweep
		after.Start, after.Sweep = c.Start+t*c.Sweep, c.Sweep-before.Sweep
	case KindCubic:
		ab, bc, cd := c.P0.Lerp(c.C1, t), c.C1.Lerp(c.C2, t), c.C2.Lerp(c.P1, t)
		before.C1, before.C2 = ab, ab.Lerp(bc, t)
		after.C1, after.C2 = bc.Lerp(cd, t), cd
	}
	before.P1, after.P0 = m, m
	return before, after
}

// Part returns the piece of c from parameter a to parameter b, 0 ≤ a < b ≤ 1.
func (c Curve) Part(a, b float64) Curve {
	if !(0 <= a && a < b && b <= 1) {
		panic(fmt.Sprintf("outline: part from t = %g to %g", a, b))
	}
	if b < 1 {
		c, _ = c.Split(b)
	}
	if a > 0 {
		_, c = c.Split(a / b)
	}
	return c
}

// Transform returns the image of the curve under a. Lines and cubics take any map; an arc must have a similarity
// (mirrors included), otherwise Transform panics: use EllipseArc for the image of an arc under other maps.
func (c Curve) Transform(a Affine) Curve {
	r := c
	r.P0, r.P1, r.C1, r.C2 = a.Apply(c.P0), a.Apply(c.P1), a.Apply(c.C1), a.Apply(c.C2)
	if c.Kind != KindCubic {
		r.C1, r.C2 = Point{}, Point{}
	}
	if c.Kind == KindArc {
		factor, ok := a.Similarity()
		if !ok {
			panic("outline: an arc needs a similarity; draw its image with EllipseArc")
		}
		r.Centre = a.Apply(c.Centre)
		r.Radius = factor * c.Radius
		s, co := math.Sincos(c.Start)
		d := a.ApplyVector(Point{co, s})
		r.Start = math.Atan2(d.Y, d.X)
		if a.Determinant() < 0 {
			r.Sweep = -c.Sweep
		}
	}
	return r
}

// Bounds returns the smallest axis-parallel box that holds the curve.
func (c Curve) Bounds() Box {
	b := EmptyBox().With(c.P0).With(c.P1)
	for _, t := range c.extremes() {
		b = b.With(c.At(t))
	}
	return b
}

// Flatten returns places along the curve, both ends included, such that no chord between neighbours is farther than
// tol (m) from the curve. It panics unless tol > 0.
func (c Curve) Flatten(tol float64) []Point {
	if !(tol > 0) {
		panic(fmt.Sprintf("outline: flatten with tolerance %g m", tol))
	}
	n := 1
	switch c.Kind {
	case KindArc:
		// A chord over the angle a has the sagitta r·(1−cos(a/2)).
		a := math.Pi / 2
		if tol < c.Radius {
			a = math.Min(a, 2*math.Acos(1-tol/c.Radius))
		}
		n = int(math.Min(math.Ceil(math.Abs(c.Sweep)/a), 1e6))
	case KindCubic:
		// The chord of a piece over Δt is at most |P″|max·Δt²/8 away, and |P″| is largest at an end.
		m := math.Max(c.second(0).Norm(), c.second(1).Norm())
		n = int(math.Min(math.Ceil(math.Sqrt(m/(8*tol))), 1e6))
	}
	n = max(n, 1)
	points := make([]Point, n+1)
	for i := range points {
		points[i] = c.At(float64(i) / float64(n))
	}
	return points
}
