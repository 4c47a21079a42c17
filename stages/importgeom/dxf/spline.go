package dxf

import (
	"math"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
)

// spline reads a curve given by control points, knots and weights, or by the points it runs through.
func spline(r *reader, rec record, _ outline.Affine) ([]outline.Curve, *fault.Error) {
	degree, err := rec.whole(71, 3)
	if err != nil {
		return nil, err
	}
	flags, err := rec.whole(70, 0)
	if err != nil {
		return nil, err
	}
	var knots, weights []float64
	var control, through []outline.Point
	for _, t := range rec.tags {
		switch t.code {
		case 40, 41, 10, 20, 11, 21:
		default:
			continue
		}
		x, err := t.real()
		if err != nil {
			return nil, err
		}
		switch t.code {
		case 40:
			knots = append(knots, x)
		case 41:
			weights = append(weights, x)
		case 10:
			control = append(control, outline.Point{X: x})
		case 11:
			through = append(through, outline.Point{X: x})
		case 20:
			if len(control) > 0 {
				control[len(control)-1].Y = x
			}
		case 21:
			if len(through) > 0 {
				through[len(through)-1].Y = x
			}
		}
	}
	if len(control) == 0 {
		return throughPoints(rec, through, flags&1 != 0)
	}
	n := nurbs{degree: degree, knots: knots}
	n.points = make([]weighted, len(control))
	for i, p := range control {
		n.points[i] = weighted{p.X, p.Y, 1}
		if len(weights) == len(control) {
			n.points[i] = weighted{p.X * weights[i], p.Y * weights[i], weights[i]}
		}
	}
	if err := n.check(); err != nil {
		return nil, err
	}
	var curves []outline.Curve
	for _, piece := range n.pieces() {
		curves = append(curves, piece.cubics(r.tolerance)...)
	}
	return curves, nil
}

// weighted is a control point times its weight, with the weight.
type weighted struct{ x, y, w float64 }

func (a weighted) point() outline.Point { return outline.Point{X: a.x / a.w, Y: a.y / a.w} }

func (a weighted) lerp(b weighted, t float64) weighted {
	return weighted{a.x + t*(b.x-a.x), a.y + t*(b.y-a.y), a.w + t*(b.w-a.w)}
}

// nurbs is a B-spline curve over [knots[degree], knots[len(points)]].
type nurbs struct {
	degree int
	knots  []float64
	points []weighted
}

func (n nurbs) check() *fault.Error {
	const remedy = "export the curve again, or as arcs"
	switch {
	case n.degree < 1 || n.degree > 25:
		return fault.New(fault.Input, "the spline has the degree %d", n.degree).Do(remedy)
	case len(n.points) <= n.degree:
		return fault.New(fault.Input, "a spline of degree %d needs more than %d control points", n.degree, len(n.points)).Do(remedy)
	case len(n.knots) != len(n.points)+n.degree+1:
		return fault.New(fault.Input, "the spline has %d knots where %d control points of degree %d need %d",
			len(n.knots), len(n.points), n.degree, len(n.points)+n.degree+1).Do(remedy)
	}
	for i := 1; i < len(n.knots); i++ {
		if n.knots[i] < n.knots[i-1] {
			return fault.New(fault.Input, "the knots of the spline do not ascend").Do(remedy)
		}
	}
	if !(n.knots[len(n.points)] > n.knots[n.degree]) {
		return fault.New(fault.Input, "the knots of the spline are all equal").Do(remedy)
	}
	for _, p := range n.points {
		if !(p.w > 0) {
			return fault.New(fault.Input, "the spline has a weight of %g", p.w).Do(remedy)
		}
	}
	return nil
}

// bezier is one rational Bézier curve of any degree.
type bezier []weighted

// pieces takes the curve apart at its knots, in order. Knots closer than 1e-12 of the domain are one.
func (n nurbs) pieces() []bezier {
	p := n.degree
	a, b := n.knots[p], n.knots[len(n.points)]
	near := 1e-12 * (b - a)
	// Equal knots are made exactly equal, so that counting them is safe.
	knots := append([]float64(nil), n.knots...)
	for i := 1; i < len(knots); i++ {
		if knots[i]-knots[i-1] <= near {
			knots[i] = knots[i-1]
		}
	}
	n.knots = knots
	a, b = knots[p], knots[len(n.points)]
	var inner []float64
	for _, u := range knots {
		if u > a && u < b && (len(inner) == 0 || u > inner[len(inner)-1]) {
			inner = append(inner, u)
		}
	}
	spans := append(append([]float64{a}, inner...), b)
	var out []bezier
	for i := 1; i < len(spans); i++ {
		out = append(out, n.between(spans[i-1], spans[i]))
	}
	return out
}

// between gives the polynomial piece over one knot interval by its blossom: control point j has the arguments u
// (p−j times) and v (j times).
func (n nurbs) between(u, v float64) bezier {
	p := n.degree
	k := p
	for k+1 < len(n.points) && n.knots[k+1] <= u {
		k++
	}
	out := make(bezier, p+1)
	d := make([]weighted, p+1)
	for j := range out {
		copy(d, n.points[k-p:k+1])
		for level := 1; level <= p; level++ {
			at := u
			if level <= j {
				at = v
			}
			for i := p; i >= level; i-- {
				lo, hi := n.knots[k-p+i], n.knots[k+1+i-level]
				d[i] = d[i-1].lerp(d[i], (at-lo)/(hi-lo))
			}
		}
		out[j] = d[p]
	}
	return out
}

func (b bezier) at(t float64) weighted {
	d := append([]weighted(nil), b...)
	for n := len(d) - 1; n > 0; n-- {
		for i := range n {
			d[i] = d[i].lerp(d[i+1], t)
		}
	}
	return d[0]
}

// slope gives dP/dt at an end.
func (b bezier) slope(end bool) outline.Point {
	n := len(b) - 1
	p, q, w := b[0], b[1], b[0].w
	if end {
		p, q, w = b[n-1], b[n], b[n].w
		return q.point().Sub(p.point()).Scale(float64(n) * p.w / w)
	}
	return q.point().Sub(p.point()).Scale(float64(n) * q.w / w)
}

func (b bezier) split(t float64) (left, right bezier) {
	d := append(bezier(nil), b...)
	left, right = make(bezier, len(b)), make(bezier, len(b))
	for n := len(d) - 1; n >= 0; n-- {
		left[len(b)-1-n], right[n] = d[0], d[n]
		for i := range n {
			d[i] = d[i].lerp(d[i+1], t)
		}
	}
	return left, right
}

func (b bezier) polynomial() bool {
	for _, p := range b {
		if math.Abs(p.w-b[0].w) > 1e-12*b[0].w {
			return false
		}
	}
	return true
}

// cubics gives curves within tol of b: b itself when it is polynomial of degree up to three, else cubics with the
// same ends and end tangents, halved until they are near enough.
func (b bezier) cubics(tol float64) []outline.Curve {
	p := make([]outline.Point, len(b))
	length := 0.0
	for i := range b {
		p[i] = b[i].point()
		if i > 0 {
			length += p[i].Distance(p[i-1])
		}
	}
	if length == 0 {
		return nil
	}
	if b.polynomial() {
		switch len(b) - 1 {
		case 1:
			return []outline.Curve{outline.Line(p[0], p[1])}
		case 2: // degree raised by one
			return []outline.Curve{outline.Cubic(p[0], p[0].Lerp(p[1], 2.0/3), p[2].Lerp(p[1], 2.0/3), p[2])}
		case 3:
			return []outline.Curve{outline.Cubic(p[0], p[1], p[2], p[3])}
		}
	}
	// Halving 12 times cuts the error of such cubics by 16 each time; below 1e-9 of the size, rounding rules.
	return b.fitted(math.Max(tol, 1e-9*length), 12)
}

func (b bezier) fitted(tol float64, depth int) []outline.Curve {
	p, q := b[0].point(), b[len(b)-1].point()
	c := outline.Cubic(p, p.Add(b.slope(false).Scale(1.0/3)), q.Sub(b.slope(true).Scale(1.0/3)), q)
	worst := 0.0
	const samples = 16
	for i := 1; i < samples; i++ {
		_, d := c.Nearest(b.at(float64(i) / samples).point())
		worst = math.Max(worst, d)
	}
	// Half the tolerance, since the worst place may lie between samples.
	if worst <= tol/2 || depth == 0 {
		return []outline.Curve{c}
	}
	left, right := b.split(0.5)
	return append(left.fitted(tol, depth-1), right.fitted(tol, depth-1)...)
}

// throughPoints is the cubic spline with continuous curvature through given points over chord lengths: with the
// end tangents of the file if it gives them, else with no curvature at the ends; smooth all round when closed.
func throughPoints(rec record, through []outline.Point, closed bool) ([]outline.Curve, *fault.Error) {
	var pts []outline.Point
	for _, p := range through {
		if len(pts) == 0 || p != pts[len(pts)-1] {
			pts = append(pts, p)
		}
	}
	if closed && len(pts) > 1 && pts[0] != pts[len(pts)-1] {
		pts = append(pts, pts[0])
	}
	if len(pts) < 2 {
		return nil, nil
	}
	closed = closed && len(pts) > 3
	n := len(pts) - 1
	h := make([]float64, n) // parameter intervals
	for i := range h {
		h[i] = pts[i+1].Distance(pts[i])
	}
	tangents := [2]outline.Point{}
	for i, codes := range [2][2]int{{12, 22}, {13, 23}} {
		v, err := rec.reals(codes[0], codes[1])
		if err != nil {
			return nil, err
		}
		t := outline.Point{X: v[0], Y: v[1]}
		if s := t.Norm(); s > 0 {
			tangents[i] = t.Scale(1 / s) // chord length has about unit speed
		}
	}
	m := slopes(pts, h, tangents, closed)
	curves := make([]outline.Curve, n)
	for i := range curves {
		curves[i] = outline.Cubic(pts[i], pts[i].Add(m[i].Scale(h[i]/3)), pts[i+1].Sub(m[i+1].Scale(h[i]/3)), pts[i+1])
	}
	return curves, nil
}

// slopes solves for the derivative at each point such that the second derivative is continuous. The equation at
// inner point i is m[i−1]/h[i−1] + 2(1/h[i−1]+1/h[i]) m[i] + m[i+1]/h[i] = 3(s[i−1]/h[i−1] + s[i]/h[i]) with chord
// slopes s. Gauss–Seidel converges by a factor of two or more per sweep, since the matrix is diagonally dominant.
func slopes(pts []outline.Point, h []float64, tangents [2]outline.Point, closed bool) []outline.Point {
	n := len(h)
	s := make([]outline.Point, n)
	for i := range s {
		s[i] = pts[i+1].Sub(pts[i]).Scale(1 / h[i])
	}
	m := make([]outline.Point, n+1)
	for i := range m {
		m[i] = s[min(i, n-1)]
	}
	inner := func(before, after int, prev, next outline.Point) outline.Point {
		a, b := 1/h[before], 1/h[after]
		rhs := s[before].Scale(3 * a).Add(s[after].Scale(3 * b))
		return rhs.Sub(prev.Scale(a)).Sub(next.Scale(b)).Scale(1 / (2 * (a + b)))
	}
	for range 80 {
		if closed {
			m[0] = inner(n-1, 0, m[n-1], m[1])
			m[n] = m[0]
		} else {
			m[0] = s[0].Scale(1.5).Sub(m[1].Scale(0.5))
			m[n] = s[n-1].Scale(1.5).Sub(m[n-1].Scale(0.5))
			if tangents[0] != (outline.Point{}) {
				m[0] = tangents[0]
			}
			if tangents[1] != (outline.Point{}) {
				m[n] = tangents[1]
			}
		}
		for i := 1; i < n; i++ {
			m[i] = inner(i-1, i, m[i-1], m[i+1])
		}
	}
	return m
}
