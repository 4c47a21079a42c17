package outline

import (
	"math"
	"math/rand/v2"
	"testing"
)

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.15g, want %.15g within %g", what, got, want, tol)
	}
}

func nearPoint(t *testing.T, what string, got, want Point, tol float64) {
	t.Helper()
	if !(got.Distance(want) <= tol) {
		t.Errorf("%s = %v, want %v within %g", what, got, want, tol)
	}
}

// samples are one curve of each kind, none of them special.
func samples() map[string]Curve {
	return map[string]Curve{
		"line":      Line(Point{1, 2}, Point{4, -2}),
		"arc":       ArcOf(Point{0.5, -0.25}, 2, 0.3, 2.1),
		"clockwise": ArcOf(Point{-1, 3}, 0.7, 2, -4.4),
		"circle":    Circle(Point{3, 1}, 0.5, true),
		"cubic":     Cubic(Point{0, 0}, Point{1, 2}, Point{3, -1}, Point{4, 1}),
	}
}

func TestCurveAgainstNumericalCalculus(t *testing.T) {
	for name, c := range samples() {
		const n = 20000
		length, area, box := 0.0, 0.0, EmptyBox()
		for i := range n {
			p, q := c.At(float64(i)/n), c.At(float64(i+1)/n)
			length += p.Distance(q)
			area += 0.5 * p.Cross(q)
			box = box.With(p).With(q)
		}
		near(t, name+" length", c.Length(), length, 1e-6)
		near(t, name+" area term", c.AreaTerm(), area, 1e-6)
		b := c.Bounds()
		nearPoint(t, name+" bounds min", b.Min, box.Min, 1e-6)
		nearPoint(t, name+" bounds max", b.Max, box.Max, 1e-6)
		for _, u := range []float64{0.1, 0.45, 0.8} {
			const h = 1e-5
			d := c.At(u + h).Sub(c.At(u - h)).Scale(1 / (2 * h))
			nearPoint(t, name+" derivative", c.Derivative(u), d, 1e-7)
			nearPoint(t, name+" tangent", c.Tangent(u), d.Scale(1/d.Norm()), 1e-8)
			turn := c.Tangent(u - h).Cross(c.Tangent(u + h))
			near(t, name+" curvature", c.Curvature(u), turn/(2*h*d.Norm()), 1e-5)
		}
	}
}

func TestReverseSplitAndPartKeepTheCurve(t *testing.T) {
	for name, c := range samples() {
		r := c.Reverse()
		near(t, name+" reversed area term", r.AreaTerm(), -c.AreaTerm(), 1e-13)
		near(t, name+" reversed curvature", r.Curvature(0.3), -c.Curvature(0.7), 1e-12)
		a, b := c.Split(0.3)
		if a.P0 != c.P0 || b.P1 != c.P1 || a.P1 != b.P0 {
			t.Errorf("%s: the pieces do not join exactly", name)
		}
		m := c.Part(0.2, 0.7)
		for _, u := range []float64{0, 0.25, 0.5, 1} {
			nearPoint(t, name+" reversed", r.At(u), c.At(1-u), 1e-14)
			nearPoint(t, name+" before", a.At(u), c.At(0.3*u), 1e-14)
			nearPoint(t, name+" after", b.At(u), c.At(0.3+0.7*u), 1e-14)
			nearPoint(t, name+" part", m.At(u), c.At(0.2+0.5*u), 1e-14)
		}
	}
}

func TestTransformMovesEveryPlace(t *testing.T) {
	maps := map[string]Affine{
		"turn":   Turn(0.7).Then(Shift(Point{1, -2})),
		"mirror": Stretch(1, -1).Then(Turn(-2)).Then(Shift(Point{0.1, 0.2})),
		"scale":  Stretch(-2.5, -2.5).Then(Shift(Point{3, 0})),
	}
	for mapName, a := range maps {
		for name, c := range samples() {
			d := c.Transform(a)
			for _, u := range []float64{0, 0.2, 0.77, 1} {
				nearPoint(t, mapName+" "+name, d.At(u), a.Apply(c.At(u)), 1e-13)
			}
		}
	}
	if _, ok := (Stretch(1, 2)).Similarity(); ok {
		t.Error("unequal scaling passes for a similarity")
	}
	quarter := Turn(math.Pi / 2).Apply(Point{1, 0})
	if quarter != (Point{0, 1}) {
		t.Errorf("quarter turn of (1, 0) = %v", quarter)
	}
}

func TestArcBetweenFollowsTheBulge(t *testing.T) {
	// Bulge 1 is a half circle to the right of the chord: from (0,0) to (2,0) counterclockwise through (1,−1).
	c := ArcBetween(Point{0, 0}, Point{2, 0}, 4*math.Atan(1))
	nearPoint(t, "half circle", c.At(0.5), Point{1, -1}, 1e-15)
	near(t, "radius", c.Radius, 1, 1e-15)
	for _, sweep := range []float64{0.4, 3.9, -0.4, -5.5} {
		c := ArcBetween(Point{1, 1}, Point{2, 3}, sweep)
		nearPoint(t, "start", c.onCircle(c.Start), c.P0, 1e-14)
		nearPoint(t, "end", c.onCircle(c.Start+c.Sweep), c.P1, 1e-14)
		near(t, "chord", 2*c.Radius*math.Abs(math.Sin(sweep/2)), math.Sqrt(5), 1e-14)
	}
}

func TestClosedForms(t *testing.T) {
	p := func(x, y float64) Point { return Point{x, y} }
	// A slot: two half circles of radius r joined by straights of length l; area 2rl + πr².
	const r, l = 1.5e-3, 4e-3
	slot := Loop{
		Line(p(0, -r), p(l, -r)), ArcBetween(p(l, -r), p(l, r), math.Pi),
		Line(p(l, r), p(0, r)), ArcBetween(p(0, r), p(0, -r), math.Pi),
	}
	near(t, "slot area", slot.Area(), 2*r*l+math.Pi*r*r, 1e-18)
	near(t, "slot length", slot.Length(), 2*l+2*math.Pi*r, 1e-17)
	b := slot.Bounds()
	nearPoint(t, "slot min", b.Min, p(-r, -r), 1e-17)
	nearPoint(t, "slot max", b.Max, p(l+r, r), 1e-17)

	// The parabola y = x² over 0…1 as a cubic: area below the chord 1/6, length √5/2 + asinh(2)/4.
	parabola := Cubic(p(0, 0), p(1.0/3, 0), p(2.0/3, 1.0/3), p(1, 1))
	near(t, "parabola area", Loop{parabola, Line(p(1, 1), p(0, 0))}.Area(), 1.0/6, 1e-15)
	near(t, "parabola length", parabola.Length(), math.Sqrt(5)/2+math.Asinh(2)/4, 1e-10)
	near(t, "parabola curvature", parabola.Curvature(0.5), 2/math.Pow(2, 1.5), 1e-13)

	ring := NewRegion(Loop{Circle(p(5, 5), 2, false)}, Loop{Circle(p(5.5, 5), 1, true)})
	near(t, "ring area", ring.Area(), 3*math.Pi, 1e-13)
	mirrored := ring.Transform(Stretch(-1, 1))
	near(t, "mirrored ring area", mirrored.Area(), 3*math.Pi, 1e-13)
	if !ring.Contains(p(3.5, 5)) || ring.Contains(p(5.5, 5)) || ring.Contains(p(7.1, 5)) {
		t.Error("the ring holds the wrong places")
	}

	ellipse := Loop(EllipseArc(p(1, 2), p(3, 0), p(0, 2), 0.4, 2*math.Pi))
	near(t, "ellipse area", ellipse.Area(), 6*math.Pi, 6*math.Pi*2e-7)
	if ellipse.Gap() != 0 {
		t.Errorf("the ellipse has a gap of %g", ellipse.Gap())
	}
	for _, c := range ellipse {
		for _, u := range []float64{0.1, 0.3, 0.5, 0.9} {
			q := c.At(u).Sub(p(1, 2))
			near(t, "ellipse equation", math.Hypot(q.X/3, q.Y/2), 1, 1e-7)
		}
	}
}

func TestAreaKeepsItsDigitsFarAway(t *testing.T) {
	const far = 1 << 30
	l := Polygon(Point{far, far}, Point{far + 1, far}, Point{far + 1, far + 2}, Point{far, far + 2})
	near(t, "area", l.Area(), 2, 0)
}

// A place is inside a loop exactly when it is inside the fine polygon through it, away from the boundary.
func TestContainsAgainstPolygon(t *testing.T) {
	p := func(x, y float64) Point { return Point{x, y} }
	l := Loop{
		Cubic(p(0, 0), p(2, -3), p(3, 3), p(4, 0)), ArcBetween(p(4, 0), p(4, 4), 3.5),
		Line(p(4, 4), p(0, 4)), ArcBetween(p(0, 4), p(0, 2), -2.5), Line(p(0, 2), p(0, 0)),
	}
	polygon := l.Flatten(1e-5)
	inPolygon := func(q Point) (inside, close bool) {
		for i, a := range polygon {
			b := polygon[(i+1)%len(polygon)]
			if _, d := Line(a, b).Nearest(q); d < 1e-4 {
				close = true
			}
			if (a.Y > q.Y) != (b.Y > q.Y) && q.X < a.X+(b.X-a.X)*(q.Y-a.Y)/(b.Y-a.Y) {
				inside = !inside
			}
		}
		return inside, close
	}
	rng := rand.New(rand.NewPCG(3, 1))
	hits := 0
	for range 4000 {
		q := p(-1+8*rng.Float64(), -2+8*rng.Float64())
		if rng.IntN(4) == 0 { // heights of corners, where crossings must count once
			q.Y = float64(rng.IntN(3)) * 2
		}
		want, close := inPolygon(q)
		if close {
			continue
		}
		if want {
			hits++
		}
		if l.Contains(q) != want || l.Reverse().Contains(q) != want {
			t.Fatalf("Contains(%v) is not %v", q, want)
		}
	}
	if hits < 500 {
		t.Fatalf("only %d places inside: the check is empty", hits)
	}
}

func TestFlattenStaysWithinTolerance(t *testing.T) {
	for name, c := range samples() {
		for _, tol := range []float64{1e-1, 1e-3, 1e-6} {
			points := c.Flatten(tol)
			n := len(points) - 1
			worst := 0.0
			for i := range n {
				for _, u := range []float64{0.25, 0.5, 0.75} {
					q := c.At((float64(i) + u) / float64(n))
					_, d := Line(points[i], points[i+1]).Nearest(q)
					worst = math.Max(worst, d)
				}
			}
			if worst > tol*(1+1e-9) {
				t.Errorf("%s: chords are %g away, tolerance %g", name, worst, tol)
			}
		}
	}
}

func TestNearestAgainstSampling(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 8))
	curves := samples()
	curves["teardrop"] = Cubic(Point{0, 0}, Point{3, -3}, Point{3, 3}, Point{0, 0})
	if u, d := curves["teardrop"].Nearest(curves["teardrop"].At(0.98)); math.Abs(u-0.98) > 1e-6 || d > 1e-12 {
		t.Errorf("a place near the far end of a closed cubic is %g away at %g", d, u)
	}
	for name, c := range curves {
		for range 200 {
			q := Point{-3 + 8*rng.Float64(), -4 + 8*rng.Float64()}
			best := math.Inf(1)
			for i := range 4001 {
				best = math.Min(best, c.At(float64(i)/4000).Distance(q))
			}
			u, d := c.Nearest(q)
			if u < 0 || u > 1 || d > best+1e-12 || d < best-2e-3 {
				t.Fatalf("%s: nearest to %v is %g away at %g, sampling finds %g", name, q, d, u, best)
			}
		}
	}
}
