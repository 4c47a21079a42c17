package outline

import (
	"math"
	"sort"
)

// Meeting is a place that two curves share.
type Meeting struct {
	S, T float64 // parameters on the first and the second curve; exactly 0 or 1 at an end
	At   Point   // the place (m): an end if there is one, else on the first curve
}

// Nearest returns the parameter of the place on c nearest to p and its distance (m). Ends are returned as exactly 0 or
// 1. On a full circle the answer lies in [0, 1).
func (c Curve) Nearest(p Point) (t, distance float64) {
	switch c.Kind {
	case KindLine:
		d := c.P1.Sub(c.P0)
		if n := d.Dot(d); n > 0 {
			t = math.Min(1, math.Max(0, p.Sub(c.P0).Dot(d)/n))
		}
	case KindArc:
		v := p.Sub(c.Centre)
		turn := math.Atan2(v.Y, v.X) - c.Start
		if c.Sweep < 0 {
			turn = -turn
		}
		turn = math.Mod(turn, 2*math.Pi)
		if turn < 0 {
			turn += 2 * math.Pi
		}
		if t = turn / math.Abs(c.Sweep); t > 1 {
			t = 0
			if p.Distance(c.P1) < p.Distance(c.P0) {
				t = 1
			}
		}
		if c.Closed() && t == 1 {
			t = 0
		}
	case KindCubic:
		t = c.nearestOnCubic(p)
	}
	return t, c.At(t).Distance(p)
}

func (c Curve) nearestOnCubic(p Point) float64 {
	const n = 24
	best, bestD := 0.0, c.P0.Distance(p)
	for i := 1; i <= n; i++ {
		t := float64(i) / n
		if d := c.At(t).Distance(p); d < bestD {
			best, bestD = t, d
		}
	}
	// The slope of the squared distance changes sign between the neighbours of the best sample.
	slope := func(t float64) float64 { return c.At(t).Sub(p).Dot(c.Derivative(t)) }
	lo, hi := math.Max(0, best-1.0/n), math.Min(1, best+1.0/n)
	if slope(lo) >= 0 {
		hi = lo
	} else if slope(hi) <= 0 {
		lo = hi
	}
	for range 60 {
		m := 0.5 * (lo + hi)
		if m <= lo || m >= hi {
			break
		}
		if slope(m) < 0 {
			lo = m
		} else {
			hi = m
		}
	}
	for _, t := range [2]float64{lo, hi} {
		if d := c.At(t).Distance(p); d < bestD {
			best, bestD = t, d
		}
	}
	return best
}

// Meet returns the places that a and b share, in order along a. Places closer together than tol (m) are one, an end
// within tol of the other curve lies on it, and curves that pass each other within tol without crossing touch once.
// Curves that run together for a while meet at the ends of the shared piece. It panics unless tol > 0.
func Meet(a, b Curve, tol float64) []Meeting {
	if !(tol > 0) {
		panic("outline: Meet needs a positive tolerance")
	}
	if !a.Bounds().Grow(tol).Meets(b.Bounds()) {
		return nil
	}
	var m []Meeting
	add := func(s, t float64, p Point) {
		for _, o := range m {
			if o.At.Distance(p) <= tol {
				return
			}
		}
		m = append(m, Meeting{s, t, p})
	}
	for _, e := range [2]float64{0, 1} {
		for _, f := range [2]float64{0, 1} {
			if a.At(e).Distance(b.At(f)) <= tol {
				add(e, f, a.At(e))
			}
		}
	}
	for _, e := range [2]float64{0, 1} {
		if t, d := b.Nearest(a.At(e)); d <= tol {
			add(e, t, a.At(e))
		}
		if s, d := a.Nearest(b.At(e)); d <= tol {
			add(s, e, b.At(e))
		}
	}
	for _, c := range interior(a, b, tol) {
		add(c.S, c.T, c.At)
	}
	sort.SliceStable(m, func(i, j int) bool { return m[i].S < m[j].S })
	return m
}

// interior finds the crossings and contacts that are not at ends (some may be).
func interior(a, b Curve, tol float64) []Meeting {
	switch {
	case a.Kind == KindCubic || b.Kind == KindCubic:
		return meetNumerically(a, b, tol)
	case a.Kind == KindLine && b.Kind == KindLine:
		d, e, w := a.P1.Sub(a.P0), b.P1.Sub(b.P0), b.P0.Sub(a.P0)
		den := d.Cross(e)
		if den == 0 {
			return nil
		}
		s, t := w.Cross(e)/den, w.Cross(d)/den
		if s <= 0 || s >= 1 || t <= 0 || t >= 1 {
			return nil
		}
		return []Meeting{{s, t, a.At(s)}}
	}
	var places []Point
	if a.Kind == KindArc && b.Kind == KindArc {
		places = circleCircle(a, b, tol)
	} else if a.Kind == KindArc {
		places = lineCircle(b, a, tol)
	} else {
		places = lineCircle(a, b, tol)
	}
	var m []Meeting
	for _, p := range places {
		s, d := a.Nearest(p)
		t, e := b.Nearest(p)
		if d <= tol && e <= tol {
			m = append(m, Meeting{s, t, a.At(s)})
		}
	}
	return m
}

func lineCircle(l, c Curve, tol float64) []Point {
	d := l.P1.Sub(l.P0)
	n := d.Norm()
	if n == 0 {
		return nil
	}
	u := d.Scale(1 / n)
	foot := l.P0.Add(u.Scale(c.Centre.Sub(l.P0).Dot(u)))
	h := math.Abs(u.Cross(c.Centre.Sub(l.P0)))
	switch {
	case h > c.Radius+tol:
		return nil
	case h > c.Radius-tol: // a contact, or crossings that tol cannot tell from one
		return []Point{foot}
	}
	half := math.Sqrt((c.Radius - h) * (c.Radius + h))
	return []Point{foot.Sub(u.Scale(half)), foot.Add(u.Scale(half))}
}

func circleCircle(a, b Curve, tol float64) []Point {
	w := b.Centre.Sub(a.Centre)
	d := w.Norm()
	apart, inside := d-(a.Radius+b.Radius), math.Abs(a.Radius-b.Radius)-d
	if d <= tol || apart > tol || inside > tol {
		return nil
	}
	u := w.Scale(1 / d)
	switch {
	case apart > -tol:
		return []Point{a.Centre.Add(u.Scale(a.Radius + apart/2))}
	case inside > -tol && a.Radius >= b.Radius:
		return []Point{a.Centre.Add(u.Scale(a.Radius))}
	case inside > -tol:
		return []Point{a.Centre.Sub(u.Scale(a.Radius))}
	}
	x := (d*d + (a.Radius-b.Radius)*(a.Radius+b.Radius)) / (2 * d)
	y := math.Sqrt(math.Max(0, (a.Radius-x)*(a.Radius+x)))
	foot, left := a.Centre.Add(u.Scale(x)), Point{-u.Y, u.X}
	return []Point{foot.Sub(left.Scale(y)), foot.Add(left.Scale(y))}
}

// meetNumerically compares short chords of both curves and improves each candidate by Newton's method on P(s) = Q(t).
func meetNumerically(a, b Curve, tol float64) []Meeting {
	fine := math.Max(tol/4, 1e-7*math.Max(a.Bounds().Diagonal(), b.Bounds().Diagonal()))
	p, q := a.Flatten(fine), b.Flatten(fine)
	reach := 2*fine + tol
	var m []Meeting
	for i := 1; i < len(p); i++ {
		pi := EmptyBox().With(p[i-1]).With(p[i]).Grow(reach)
		for j := 1; j < len(q); j++ {
			if !pi.Meets(EmptyBox().With(q[j-1]).With(q[j])) {
				continue
			}
			for _, c := range Meet(Line(p[i-1], p[i]), Line(q[j-1], q[j]), reach) {
				s := (float64(i-1) + c.S) / float64(len(p)-1)
				t := (float64(j-1) + c.T) / float64(len(q)-1)
				if s, t, ok := polish(a, b, s, t, tol); ok {
					m = append(m, Meeting{s, t, a.At(s)})
				}
			}
		}
	}
	return m
}

// polish runs damped least squares on P(s)−Q(t), which also settles at the closest approach of a contact.
func polish(a, b Curve, s, t, tol float64) (float64, float64, bool) {
	clamp := func(x float64) float64 { return math.Min(1, math.Max(0, x)) }
	for range 40 {
		r := b.At(t).Sub(a.At(s))
		u, v := a.Derivative(s), b.Derivative(t)
		uu, uv, vv := u.Dot(u), u.Dot(v), v.Dot(v)
		damp := 1e-12 * (uu + vv)
		uu, vv = uu+damp, vv+damp
		den := uu*vv - uv*uv
		if !(den > 0) {
			break
		}
		ur, vr := u.Dot(r), v.Dot(r)
		ds, dt := (vv*ur-uv*vr)/den, (uv*ur-uu*vr)/den
		s2, t2 := clamp(s+ds), clamp(t+dt)
		moved := math.Abs(s2-s) + math.Abs(t2-t)
		s, t = s2, t2
		if moved < 1e-15 {
			break
		}
	}
	return s, t, a.At(s).Distance(b.At(t)) <= tol
}
