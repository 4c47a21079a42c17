package outline

import "math"

// Loop is a closed chain of curves: each begins where the one before it ends and the first begins where the last ends.
// A full circle is a loop of one curve.
type Loop []Curve

// Polygon returns the loop of straight lines through the points, closed from the last to the first.
func Polygon(points ...Point) Loop {
	l := make(Loop, len(points))
	for i, p := range points {
		l[i] = Line(p, points[(i+1)%len(points)])
	}
	return l
}

// Rectangle returns the counterclockwise rectangle of the given widths (m) about centre, turned by angle (rad).
func Rectangle(centre Point, width, height, angle float64) Loop {
	l := Polygon(Point{-width / 2, -height / 2}, Point{width / 2, -height / 2},
		Point{width / 2, height / 2}, Point{-width / 2, height / 2})
	return l.Transform(Turn(angle).Then(Shift(centre)))
}

// Area returns the enclosed area (m²), positive for a counterclockwise loop.
func (l Loop) Area() float64 {
	if len(l) == 0 {
		return 0
	}
	// About the first point, so that a small loop far from the origin keeps its digits.
	back := Shift(l[0].P0.Scale(-1))
	sum := 0.0
	for _, c := range l {
		sum += c.Transform(back).AreaTerm()
	}
	return sum
}

// Length returns the length of the loop (m).
func (l Loop) Length() float64 {
	sum := 0.0
	for _, c := range l {
		sum += c.Length()
	}
	return sum
}

// Bounds returns the smallest axis-parallel box that holds the loop.
func (l Loop) Bounds() Box {
	b := EmptyBox()
	for _, c := range l {
		b = b.Union(c.Bounds())
	}
	return b
}

// Contains reports whether p lies inside the loop (winding number not zero), whichever way the loop runs.
func (l Loop) Contains(p Point) bool {
	n := 0
	for _, c := range l {
		n += c.winding(p)
	}
	return n != 0
}

// Reverse returns the loop run through the other way.
func (l Loop) Reverse() Loop {
	r := make(Loop, len(l))
	for i, c := range l {
		r[len(l)-1-i] = c.Reverse()
	}
	return r
}

// Transform returns the image of the loop; a map that mirrors turns its direction round. Arcs need a similarity.
func (l Loop) Transform(a Affine) Loop {
	r := make(Loop, len(l))
	for i, c := range l {
		r[i] = c.Transform(a)
	}
	return r
}

// Flatten returns the corners of a polygon within tol (m) of the loop, the first not repeated at the end.
func (l Loop) Flatten(tol float64) []Point {
	var points []Point
	for _, c := range l {
		f := c.Flatten(tol)
		points = append(points, f[:len(f)-1]...)
	}
	return points
}

// Gap returns the largest distance (m) between the end of one curve and the beginning of the next.
func (l Loop) Gap() float64 {
	gap := 0.0
	for i, c := range l {
		gap = math.Max(gap, c.P1.Distance(l[(i+1)%len(l)].P0))
	}
	return gap
}

// CircleOf recognises a round hole. A loop of arcs is round when all centres and all radii agree within 1e-4 of the
// radius or 1e-6 m, whichever is more (never above 2 % of the radius), and the sweeps add up to a full turn; the answer
// is then that of the longest arc. Any other loop (splines, many short lines) is round when it goes once round the mean of its
// evenly spread places and none of them is farther from the mean radius than 2 % of it (a polygon of 16 sides or more
// passes, an octagon does not); then the radius is that of the circle of equal area.
func CircleOf(l Loop) (centre Point, radius float64, ok bool) {
	if len(l) == 0 {
		return Point{}, 0, false
	}
	if c, r, ok := circleOfArcs(l); ok {
		return c, r, true
	}
	length := l.Length()
	var points []Point
	for _, c := range l {
		n := max(2, int(math.Ceil(64*c.Length()/length-1e-6)))
		for i := range n {
			points = append(points, c.At(float64(i)/float64(n)))
		}
	}
	// The centre is that of the polygon's area, which does not depend on how the places are spread.
	o := points[0]
	area, moment := 0.0, Point{}
	for i := range points {
		p, q := points[i].Sub(o), points[(i+1)%len(points)].Sub(o)
		x := p.Cross(q)
		area += x / 2
		moment = moment.Add(p.Add(q).Scale(x / 6))
	}
	if area == 0 {
		return Point{}, 0, false
	}
	centre = o.Add(moment.Scale(1 / area))
	radius = math.Sqrt(math.Abs(l.Area()) / math.Pi)
	turn := 0.0
	for i := range points {
		p, q := points[i].Sub(centre), points[(i+1)%len(points)].Sub(centre)
		if math.Abs(p.Norm()-radius) > 0.02*radius {
			return Point{}, 0, false
		}
		turn += math.Atan2(p.Cross(q), p.Dot(q))
	}
	if math.Abs(math.Abs(turn)-2*math.Pi) > 1e-6 {
		return Point{}, 0, false
	}
	return centre, radius, true
}

func circleOfArcs(l Loop) (centre Point, radius float64, ok bool) {
	longest := 0
	sweep := 0.0
	for i, c := range l {
		if c.Kind != KindArc {
			return Point{}, 0, false
		}
		sweep += c.Sweep
		if math.Abs(c.Sweep) > math.Abs(l[longest].Sweep) {
			longest = i
		}
	}
	a := l[longest]
	tol := math.Max(1e-4*a.Radius, 1e-6)
	tol = math.Min(tol, 0.02*a.Radius)
	for _, c := range l {
		if c.Centre.Distance(a.Centre) > tol || math.Abs(c.Radius-a.Radius) > tol {
			return Point{}, 0, false
		}
	}
	if math.Abs(math.Abs(sweep)-2*math.Pi) > 1e-3 {
		return Point{}, 0, false
	}
	return a.Centre, a.Radius, true
}
