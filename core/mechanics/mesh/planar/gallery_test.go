package planar

import (
	"math"
	"math/rand/v2"

	"hushframe/core/mechanics/outline"
)

type example struct {
	name   string
	region outline.Region
	lines  []outline.Loop
	size   float64
	// cramped regions have parts nearer to each other than a thousandth of the size.
	cramped bool
}

func pt(x, y float64) outline.Point { return outline.Point{X: x, Y: y} }

func disc(x, y, r float64) outline.Loop { return outline.Loop{outline.Circle(pt(x, y), r, true)} }

// slot is a stadium from (x0, y) to (x1, y) with radius r.
func slot(x0, x1, y, r float64) outline.Loop {
	return outline.Loop{
		outline.Line(pt(x0, y-r), pt(x1, y-r)), outline.ArcBetween(pt(x1, y-r), pt(x1, y+r), math.Pi),
		outline.Line(pt(x1, y+r), pt(x0, y+r)), outline.ArcBetween(pt(x0, y+r), pt(x0, y-r), math.Pi),
	}
}

// rounded is a rectangle about (x, y) with corners of radius r.
func rounded(x, y, w, h, r float64) outline.Loop {
	a, b, c, d := x-w/2, x+w/2, y-h/2, y+h/2
	return outline.Loop{
		outline.Line(pt(a+r, c), pt(b-r, c)), outline.ArcBetween(pt(b-r, c), pt(b, c+r), math.Pi/2),
		outline.Line(pt(b, c+r), pt(b, d-r)), outline.ArcBetween(pt(b, d-r), pt(b-r, d), math.Pi/2),
		outline.Line(pt(b-r, d), pt(a+r, d)), outline.ArcBetween(pt(a+r, d), pt(a, d-r), math.Pi/2),
		outline.Line(pt(a, d-r), pt(a, c+r)), outline.ArcBetween(pt(a, c+r), pt(a+r, c), math.Pi/2),
	}
}

func star(n int, outer, inner float64) outline.Loop {
	var ps []outline.Point
	for i := range 2 * n {
		r := outer
		if i%2 == 1 {
			r = inner
		}
		s, c := math.Sincos(math.Pi * float64(i) / float64(n))
		ps = append(ps, pt(r*c, r*s))
	}
	return outline.Polygon(ps...)
}

func spiral() outline.Loop {
	var out, in []outline.Point
	for i := range 121 {
		a := float64(i) * 0.12
		r := 4e-3 + 2.2e-3*a
		s, c := math.Sincos(a)
		out = append(out, pt((r+2e-3)*c, (r+2e-3)*s))
		in = append(in, pt((r-2e-3)*c, (r-2e-3)*s))
	}
	for i := len(in) - 1; i >= 0; i-- {
		out = append(out, in[i])
	}
	return outline.Polygon(out...)
}

// motorArm is a 5 mm arm: straight, with a round motor base, its holes and a slot.
func motorArm() (outline.Region, []outline.Loop) {
	o := outline.Loop{
		outline.Line(pt(0, -7.5e-3), pt(0.085, -7.5e-3)),
		outline.ArcBetween(pt(0.085, -7.5e-3), pt(0.085, 7.5e-3), 2*math.Pi-2*math.Asin(7.5/14)),
		outline.Line(pt(0.085, 7.5e-3), pt(0, 7.5e-3)), outline.Line(pt(0, 7.5e-3), pt(0, -7.5e-3)),
	}
	c := o[1].Centre
	holes := []outline.Loop{disc(c.X, c.Y, 3e-3), disc(6e-3, 0, 1.6e-3), disc(20e-3, 0, 1.6e-3), slot(35e-3, 60e-3, 0, 1.5e-3)}
	lines := []outline.Loop{disc(6e-3, 0, 3.5e-3), disc(20e-3, 0, 3.5e-3), disc(c.X, c.Y, 11e-3)}
	for i := range 4 {
		s, co := math.Sincos(math.Pi/4 + math.Pi/2*float64(i))
		holes = append(holes, disc(c.X+8e-3*co, c.Y+8e-3*s, 1.6e-3))
		lines = append(lines, disc(c.X+8e-3*co, c.Y+8e-3*s, 2.75e-3))
	}
	return outline.NewRegion(o, holes...), lines
}

// plate is a 2 mm main plate with slots, many holes and footprints that overlap, leave the plate and cross holes.
func plate() (outline.Region, []outline.Loop) {
	var holes, lines []outline.Loop
	for _, x := range []float64{-60e-3, -40e-3, 40e-3, 60e-3} {
		for _, y := range []float64{-18e-3, 18e-3} {
			holes = append(holes, disc(x, y, 1.6e-3))
			lines = append(lines, disc(x, y, 3e-3))
		}
	}
	for _, y := range []float64{-8e-3, 8e-3} {
		holes = append(holes, slot(-30e-3, 30e-3, y, 2e-3))
	}
	for _, x := range []float64{-15.25e-3, 15.25e-3} {
		for _, y := range []float64{-15.25e-3, 15.25e-3} {
			holes = append(holes, disc(x, y, 1.6e-3))
			lines = append(lines, disc(x, y, 2.8e-3))
		}
	}
	lines = append(lines,
		outline.Rectangle(pt(0, 0), 35e-3, 20e-3, 0),          // crosses the slots
		outline.Rectangle(pt(68e-3, 5e-3), 30e-3, 22e-3, 0.2), // leaves the plate
		disc(57e-3, 16e-3, 4e-3),                              // overlaps a clamp disc
		disc(0, 21.98e-3, 3e-3),                               // nearly touches the edge from inside
		outline.Rectangle(pt(-50e-3, 24.97e-3), 10e-3, 6e-3, 0),
	)
	return outline.NewRegion(rounded(0, 0, 0.15, 0.05, 6e-3), holes...), lines
}

func randomPolygon(rng *rand.Rand) (outline.Region, []outline.Loop) {
	n := 3 + rng.IntN(25)
	wobble := rng.Float64()
	ring := func(c outline.Point, r float64) outline.Loop {
		var ps []outline.Point
		for i := range n {
			s, co := math.Sincos(2 * math.Pi * (float64(i) + 0.9*wobble*rng.Float64()) / float64(n))
			ps = append(ps, c.Add(pt(co, s).Scale(r*(1-0.8*wobble*rng.Float64()))))
		}
		return outline.Polygon(ps...)
	}
	outer := ring(pt(0, 0), 50e-3)
	region := outline.NewRegion(outer)
	for range rng.IntN(12) {
		c := pt(60e-3*(rng.Float64()-0.5), 60e-3*(rng.Float64()-0.5))
		n = 3 + rng.IntN(8)
		hole := ring(c, 1e-3+8e-3*rng.Float64())
		if rng.IntN(2) == 0 {
			hole = disc(c.X, c.Y, 0.5e-3+6e-3*rng.Float64())
		}
		if candidate := outline.NewRegion(outer, append(append([]outline.Loop{}, region.Holes...), hole)...); check(candidate) == nil {
			region = candidate
		}
	}
	var lines []outline.Loop
	for range rng.IntN(6) {
		c := pt(80e-3*(rng.Float64()-0.5), 80e-3*(rng.Float64()-0.5))
		if rng.IntN(2) == 0 {
			lines = append(lines, disc(c.X, c.Y, 1e-3+20e-3*rng.Float64()))
		} else {
			lines = append(lines, outline.Rectangle(c, 2e-3+30e-3*rng.Float64(), 2e-3+30e-3*rng.Float64(), 3*rng.Float64()))
		}
	}
	return region, lines
}

func gallery() []example {
	arm, armLines := motorArm()
	main, mainLines := plate()
	var many []outline.Loop
	for i := range 100 {
		many = append(many, disc(float64(i%10)*5e-3, float64(i/10)*5e-3, 0.5e-3+1.9e-3*float64(i*37%100)/100))
	}
	wave := outline.Loop{
		outline.Cubic(pt(0, 0), pt(20e-3, -20e-3), pt(40e-3, 20e-3), pt(60e-3, 0)),
		outline.ArcBetween(pt(60e-3, 0), pt(60e-3, 20e-3), 2),
		outline.Cubic(pt(60e-3, 20e-3), pt(40e-3, 35e-3), pt(20e-3, 0), pt(0, 20e-3)), outline.Line(pt(0, 20e-3), pt(0, 0)),
	}
	comb := []outline.Point{pt(0, 0)}
	for i := range 10 {
		x := float64(i) * 4e-3
		comb = append(comb, pt(x+1.9e-3, 0), pt(x+2e-3, 15e-3), pt(x+2.1e-3, 0), pt(x+4e-3, 0))
	}
	comb = append(comb, pt(40e-3, 20e-3), pt(0, 20e-3))
	return []example{
		{name: "square", region: outline.NewRegion(outline.Rectangle(pt(0, 0), 20e-3, 20e-3, 0.1)), size: 3e-3},
		{name: "disc", region: outline.NewRegion(disc(0, 0, 10e-3)), size: 3e-3},
		{name: "ring", region: outline.NewRegion(disc(0, 0, 10e-3), disc(2e-3, 0, 7.9e-3)), size: 3e-3},
		{name: "thin ring", region: outline.NewRegion(disc(0, 0, 10e-3), disc(0, 0, 9.8e-3)), size: 3e-3},
		{name: "ell", region: outline.NewRegion(outline.Polygon(pt(0, 0), pt(40e-3, 0), pt(40e-3, 10e-3), pt(10e-3, 10e-3), pt(10e-3, 30e-3), pt(0, 30e-3))), size: 3e-3},
		{name: "slot plate", region: outline.NewRegion(rounded(0, 0, 60e-3, 30e-3, 3e-3), slot(-15e-3, 15e-3, 5e-3, 2e-3), slot(-15e-3, 15e-3, -2e-3, 2e-3)), size: 3e-3},
		{name: "arm", region: arm, lines: armLines, size: 3e-3},
		{name: "plate", region: main, lines: mainLines, size: 3e-3},
		{name: "many holes", region: outline.NewRegion(rounded(22.5e-3, 22.5e-3, 55e-3, 55e-3, 4e-3), many...), size: 3e-3},
		{name: "wave", region: outline.NewRegion(wave), lines: []outline.Loop{disc(30e-3, 5e-3, 8e-3)}, size: 3e-3},
		{name: "spiral", region: outline.NewRegion(spiral()), size: 3e-3},
		{name: "teardrop", region: outline.NewRegion(outline.Loop{outline.Cubic(pt(0, 0), pt(9e-3, -7e-3), pt(9e-3, 7e-3), pt(0, 0))}), size: 20e-3},
		{name: "kite", region: outline.NewRegion(outline.Polygon(pt(0, 0), pt(30e-3, -20e-3), pt(60e-3, 0), pt(30e-3, 22e-3))), size: 3e-3},
		{name: "star", region: outline.NewRegion(star(9, 20e-3, 5e-3)), size: 3e-3},
		{name: "needle", region: outline.NewRegion(outline.Polygon(pt(0, 0), pt(60e-3, 0), pt(60e-3, 3e-3))), size: 3e-3},
		{name: "comb", region: outline.NewRegion(outline.Polygon(comb...)), size: 3e-3},
		{name: "tiny step", region: outline.NewRegion(outline.Polygon(pt(0, 0), pt(30e-3, 0), pt(30e-3, 20e-3), pt(15e-3, 20e-3), pt(15e-3, 20.01e-3), pt(0, 20.01e-3))), size: 3e-3},
		{name: "near holes", cramped: true, region: outline.NewRegion(rounded(0, 0, 40e-3, 20e-3, 2e-3), disc(-5.001e-3, 0, 5e-3), disc(5.001e-3, 0, 5e-3)), size: 3e-3},
		{name: "touching lines", region: outline.NewRegion(rounded(0, 0, 40e-3, 20e-3, 2e-3)), size: 3e-3,
			lines: []outline.Loop{disc(-5e-3, 0, 5e-3), disc(5e-3, 0, 5e-3), disc(0, 6e-3, 4e-3), disc(2e-3, 0, 8e-3)}},
	}
}
