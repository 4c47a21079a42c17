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
	best, bestD := 0.0, c.P0.Distance(p)
	try := func(t float64) {
		if d := c.At(t).Distance(p); d < bestD {
			best, bestD = t, d
		}
	}
	try(1)
	// The squared distance is least where its slope turns from falling to rising.
	slope := func(t float64) float64 { return c.At(t).Sub(p).Dot(c.Derivative(t)) }
	const n = 24
	before := slope(0)
	for i := 1; i <= n; i++ {
		lo, hi := float64(i-1)/n, float64(i)/n
		after := slope(hi)
		if before < 0 && after >= 0 {
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
			try(lo)
			try(hi)
		}
		before = after
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

// span is a piece of a curve that is monotone along both axes, so that its ends span its bounds.
type span struct {
	a, b float64
	p, q Point
}

func spans(c Curve) []span {
	ts := c.monotone()
	all := make([]span, len(ts)-1)
	for i := range all {
		all[i] = span{ts[i], ts[i+1], c.At(ts[i]), c.At(ts[i+1])}
	}
	return all
}

func (s span) bounds() Box { return EmptyBox().With(s.p).With(s.q) }

// bend returns how far the piece strays from its chord, judged at three places.
func (s span) bend(c Curve) float64 {
	worst := 0.0
	for _, u := range [3]float64{0.25, 0.5, 0.75} {
		_, d := Line(s.p, s.q).Nearest(c.At(s.a + u*(s.b-s.a)))
		worst = math.Max(worst, d)
	}
	return worst
}

func (s span) halves(c Curve) [2]span {
	m := 0.5 * (s.a + s.b)
	p := c.At(m)
	return [2]span{{s.a, m, s.p, p}, {m, s.b, p, s.q}}
}

// meetNumerically halves pieces of both curves as long as their bounds meet, down to nearly straight ones, whose
// crossings Newton's method then improves.
func meetNumerically(a, b Curve, tol float64) []Meeting {
	var m []Meeting
	var visit func(s, t span)
	visit = func(s, t span) {
		if !s.bounds().Grow(tol).Meets(t.bounds()) {
			return
		}
		const flat = 1e-3
		bs, bt := s.bend(a), t.bend(b)
		ls, lt := s.p.Distance(s.q), t.p.Distance(t.q)
		splitS, splitT := bs > math.Max(flat*ls, tol/8), bt > math.Max(flat*lt, tol/8)
		switch {
		case splitS && (!splitT || ls >= lt):
			for _, h := range s.halves(a) {
				visit(h, t)
			}
		case splitT:
			for _, h := range t.halves(b) {
				visit(s, h)
			}
		default:
			for _, c := range Meet(Line(s.p, s.q), Line(t.p, t.q), tol+2*(bs+bt)) {
				x, y, ok := polish(a, b, s.a+c.S*(s.b-s.a), t.a+c.T*(t.b-t.a), tol)
				if ok {
					m = append(m, Meeting{x, y, a.At(x)})
				}
			}
		}
	}
	for _, s := range spans(a) {
		for _, t := range spans(b) {
			visit(s, t)
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
