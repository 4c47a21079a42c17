package outline

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestMeetClosedForms(t *testing.T) {
	p := func(x, y float64) Point { return Point{x, y} }
	unit := Circle(p(0, 0), 1, true)
	h := math.Sqrt(3) / 2
	cases := []struct {
		name string
		a, b Curve
		want []Point // in order along a
	}{
		{"lines cross", Line(p(0, 0), p(2, 2)), Line(p(0, 2), p(2, 0)), []Point{p(1, 1)}},
		{"lines miss", Line(p(0, 0), p(1, 1)), Line(p(0, 4), p(4, 0)), nil},
		{"lines run together", Line(p(0, 0), p(4, 0)), Line(p(3, 0), p(1, 0)), []Point{p(1, 0), p(3, 0)}},
		{"end on line", Line(p(0, 0), p(4, 0)), Line(p(1, 1), p(1, 0)), []Point{p(1, 0)}},
		{"chord", Line(p(-2, 0.5), p(2, 0.5)), unit, []Point{p(-h, 0.5), p(h, 0.5)}},
		{"tangent line", Line(p(-2, 1+4e-10), p(2, 1+4e-10)), unit, []Point{p(0, 1)}},
		{"circles", Circle(p(1, 0), 1, true), unit, []Point{p(0.5, h), p(0.5, -h)}},
		{"circles touch outside", Circle(p(3, 0), 2, true), unit, []Point{p(1, 0)}},
		{"circles touch inside", Circle(p(0, 0.5), 0.5, true), unit, []Point{p(0, 1)}},
		{"circle within circle", Circle(p(0, 0.4), 0.5, true), unit, nil},
		{"arc ends on shared circle", ArcOf(p(0, 0), 1, 1, 2), unit, []Point{p(math.Cos(1), math.Sin(1)), p(math.Cos(3), math.Sin(3))}},
		{"parabola and level", Cubic(p(-1, 1), p(-1.0/3, -1.0/3), p(1.0/3, -1.0/3), p(1, 1)), Line(p(-2, 0.25), p(2, 0.25)),
			[]Point{p(-0.5, 0.25), p(0.5, 0.25)}},
		{"parabola touches axis", Cubic(p(-1, 1), p(-1.0/3, -1.0/3), p(1.0/3, -1.0/3), p(1, 1)), Line(p(-2, 0), p(2, 0)),
			[]Point{p(0, 0)}},
	}
	for _, c := range cases {
		got := Meet(c.a, c.b, 1e-9)
		if len(got) != len(c.want) {
			t.Errorf("%s: %d places %v, want %v", c.name, len(got), got, c.want)
			continue
		}
		for i, m := range got {
			nearPoint(t, c.name, m.At, c.want[i], 5e-5) // contacts are only as sharp as √tol
			if !(c.a.At(m.S).Distance(c.b.At(m.T)) <= 1e-9) {
				t.Errorf("%s: the two curves are %g apart at the meeting", c.name, c.a.At(m.S).Distance(c.b.At(m.T)))
			}
		}
	}
}

// Two curves cross as often as fine chords of theirs do, when no crossing is near an end or a contact.
func TestMeetAgainstChords(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 4))
	pt := func() Point { return Point{rng.Float64(), rng.Float64()} }
	curve := func() Curve {
		switch rng.IntN(3) {
		case 0:
			return Line(pt(), pt())
		case 1:
			return ArcBetween(pt(), pt(), 12*(rng.Float64()-0.5))
		}
		return Cubic(pt(), pt(), pt(), pt())
	}
	total := 0
	for trial := range 500 {
		a, b := curve(), curve()
		pa, pb := a.Flatten(1e-4), b.Flatten(1e-4)
		count, doubtful := 0, false
		for i := 1; i < len(pa); i++ {
			for j := 1; j < len(pb); j++ {
				la, lb := Line(pa[i-1], pa[i]), Line(pb[j-1], pb[j])
				if !la.Bounds().Meets(lb.Bounds()) {
					continue
				}
				for _, m := range interior(la, lb, 1e-12) {
					count++
					sine := math.Abs(la.Tangent(0).Cross(lb.Tangent(0)))
					doubtful = doubtful || sine < 0.05 || m.At.Distance(b.P0) < 1e-2 || m.At.Distance(b.P1) < 1e-2 ||
						m.At.Distance(a.P0) < 1e-2 || m.At.Distance(a.P1) < 1e-2
				}
			}
		}
		got := Meet(a, b, 1e-9)
		for _, m := range got {
			doubtful = doubtful || math.Abs(a.Tangent(m.S).Cross(b.Tangent(m.T))) < 0.05
		}
		if doubtful {
			continue
		}
		total += count
		if len(got) != count {
			t.Fatalf("trial %d: %v and %v meet %d times, chords %d times", trial, a, b, len(got), count)
		}
	}
	if total < 100 {
		t.Fatalf("only %d crossings: the check is empty", total)
	}
}

func TestSelfCrossings(t *testing.T) {
	p := func(x, y float64) Point { return Point{x, y} }
	bow := Polygon(p(0, 0), p(2, 2), p(2, 0), p(0, 2))
	got := bow.SelfCrossings()
	if len(got) != 1 || got[0].I != 0 || got[0].J != 2 {
		t.Fatalf("bow tie: %v", got)
	}
	nearPoint(t, "bow tie", got[0].At, p(1, 1), 1e-12)

	spike := Polygon(p(0, 0), p(4, 0), p(4, 2), p(4, 1), p(0, 1))
	if got := spike.SelfCrossings(); len(got) == 0 {
		t.Error("a spike that runs back on itself is not found")
	}
	knot := Loop{Cubic(p(0, 0), p(3, 2), p(-2, 2), p(1, 0)), Line(p(1, 0), p(0, 0))}
	if got := knot.SelfCrossings(); len(got) != 1 || got[0].I != 0 || got[0].J != 0 {
		t.Errorf("cubic with a knot: %v", got)
	} else {
		near(t, "knot is on the axis of symmetry", got[0].At.X, 0.5, 1e-9)
	}
	for name, l := range map[string]Loop{
		"circle":       {Circle(p(0, 0), 1, true)},
		"half circles": {ArcOf(p(0, 0), 1, 0, math.Pi), ArcOf(p(0, 0), 1, math.Pi, math.Pi)},
		"square":       Polygon(p(0, 0), p(1, 0), p(1, 1), p(0, 1)),
		"teardrop":     {Cubic(p(0, 0), p(3, -3), p(3, 3), p(0, 0))},
		"ellipse":      EllipseArc(p(0, 0), p(2, 0), p(0, 1), 0.4, 2*math.Pi),
	} {
		if got := l.SelfCrossings(); len(got) != 0 {
			t.Errorf("%s: %v", name, got)
		}
	}
}

func TestCircleOf(t *testing.T) {
	c := Point{0.031, -0.012}
	ngon := func(n int) Loop {
		var points []Point
		for i := range n {
			s, co := math.Sincos(2 * math.Pi * float64(i) / float64(n))
			points = append(points, c.Add(Point{co, s}.Scale(1.6e-3)))
		}
		return Polygon(points...)
	}
	round := map[string]Loop{
		"circle":       {Circle(c, 1.6e-3, false)},
		"half circles": {ArcOf(c, 1.6e-3, 0, math.Pi), ArcOf(c, 1.6e-3, math.Pi, math.Pi)},
		"cubics":       EllipseArc(c, Point{1.6e-3, 0}, Point{0, -1.6e-3}, 0, 2*math.Pi),
		"24 sides":     ngon(24),
	}
	for name, l := range round {
		o, r, ok := CircleOf(l)
		if !ok {
			t.Errorf("%s: not recognised", name)
			continue
		}
		tol := 1e-9
		if name == "24 sides" {
			tol = 2e-5 // the polygon has the area of a slightly smaller circle
		}
		nearPoint(t, name+" centre", o, c, 1e-8)
		near(t, name+" radius", r, 1.6e-3, tol)
	}
	for name, l := range map[string]Loop{
		"octagon":   ngon(8),
		"square":    Rectangle(c, 1, 1, 0.2),
		"slot":      {Line(Point{0, 0}, Point{1e-4, 0}), ArcBetween(Point{1e-4, 0}, Point{1e-4, 1e-3}, math.Pi), Line(Point{1e-4, 1e-3}, Point{0, 1e-3}), ArcBetween(Point{0, 1e-3}, Point{0, 0}, math.Pi)},
		"ellipse":   EllipseArc(c, Point{2e-3, 0}, Point{0, 1.8e-3}, 0, 2*math.Pi),
		"half disc": {ArcOf(c, 1, 0, math.Pi), Line(c.Add(Point{-1, 0}), c.Add(Point{1, 0}))},
		"empty":     nil,
	} {
		if _, r, ok := CircleOf(l); ok {
			t.Errorf("%s passes for a circle of radius %g", name, r)
		}
	}
}
