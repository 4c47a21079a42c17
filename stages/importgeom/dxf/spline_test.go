package dxf

import (
	"math"
	"math/rand/v2"
	"testing"

	"hushframe/core/mechanics/outline"
)

// basis is the B-spline basis function i of degree p at u by the recursion of Cox and de Boor, which the reader does not
// use.
func basis(knots []float64, i, p int, u float64) float64 {
	if p == 0 {
		if knots[i] <= u && u < knots[i+1] {
			return 1
		}
		return 0
	}
	sum := 0.0
	if d := knots[i+p] - knots[i]; d > 0 {
		sum += (u - knots[i]) / d * basis(knots, i, p-1, u)
	}
	if d := knots[i+p+1] - knots[i+1]; d > 0 {
		sum += (knots[i+p+1] - u) / d * basis(knots, i+1, p-1, u)
	}
	return sum
}

// Random splines, clamped or not, with single and repeated knots and with weights: every place of the curve by its
// definition lies on the cubics, and the cubics follow each other.
func TestSplinesByTheirDefinition(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for trial := range 60 {
		p := 1 + trial%5
		n := nurbs{degree: p}
		count := p + 1 + rng.IntN(6)
		u := 0.0
		for len(n.knots) < count+p+1 {
			n.knots = append(n.knots, u)
			if rng.IntN(3) > 0 {
				u += 0.3 + rng.Float64()
			}
		}
		if trial%2 == 0 { // clamped
			for i := range p {
				n.knots[i] = n.knots[p]
				n.knots[count+1+i] = n.knots[count]
			}
		}
		// A knot of the domain repeated degree times or more breaks the curve, which no drawing does on purpose.
		repeated := false
		for i := 1; i+p < len(n.knots)-1; i++ {
			repeated = repeated || n.knots[i] == n.knots[i+p]
		}
		for range count {
			w := 1.0
			if trial%3 == 0 {
				w = 0.5 + rng.Float64()
			}
			n.points = append(n.points, weighted{w * 40 * rng.Float64(), w * 40 * rng.Float64(), w})
		}
		if n.check() != nil || repeated {
			continue
		}
		const tol = 1e-4
		var curves []outline.Curve
		for _, piece := range n.pieces() {
			curves = append(curves, piece.cubics(tol)...)
		}
		for i := 1; i < len(curves); i++ {
			if curves[i].P0.Distance(curves[i-1].P1) > 1e-9 {
				t.Fatalf("trial %d: piece %d begins %g from the end of the one before", trial, i, curves[i].P0.Distance(curves[i-1].P1))
			}
		}
		// In short parts, since the nearest place of a curve that passes itself closely is found by sampling.
		var parts []outline.Curve
		for _, c := range curves {
			const m = 8
			for i := range m {
				parts = append(parts, c.Part(float64(i)/m, float64(i+1)/m))
			}
		}
		exact := tol
		if p <= 3 && trial%3 != 0 {
			exact = 1e-9
		}
		a, b := n.knots[p], n.knots[count]
		for k := range 100 {
			u := a + (b-a)*(float64(k)+0.5)/100
			var x, y, w float64
			for i, q := range n.points {
				f := basis(n.knots, i, p, u)
				x, y, w = x+f*q.x, y+f*q.y, w+f*q.w
			}
			best := math.Inf(1)
			for _, c := range parts {
				_, d := c.Nearest(outline.Point{X: x / w, Y: y / w})
				best = math.Min(best, d)
			}
			if best > exact {
				t.Fatalf("trial %d (degree %d): a place of the curve is %g from the cubics, allowed %g", trial, p, best, exact)
			}
		}
	}
}

// Cubics through points of a straight line stay on it, and given end tangents are kept.
func TestThroughPoints(t *testing.T) {
	pts := []outline.Point{{X: 0, Y: 0}, {X: 1, Y: 2}, {X: 4, Y: 8}, {X: 5, Y: 10}}
	curves, err := throughPoints(record{}, pts, false)
	if err != nil || len(curves) != 3 {
		t.Fatalf("%d curves, %v", len(curves), err)
	}
	for _, c := range curves {
		for k := range 11 {
			if p := c.At(float64(k) / 10); math.Abs(p.Y-2*p.X) > 1e-12 {
				t.Fatalf("%v is off the line", p)
			}
		}
	}
	rec := record{tags: []tag{{12, "0", 1}, {22, "3", 2}}}
	curves, err = throughPoints(rec, pts, false)
	if err != nil {
		t.Fatal(err)
	}
	if d := curves[0].Tangent(0); math.Abs(d.X) > 1e-12 || d.Y < 0.999 {
		t.Errorf("the curve begins along %v, want 0, 1", d)
	}
	for i := 1; i < len(curves); i++ { // curvature is continuous
		if a, b := curves[i-1].Curvature(1), curves[i].Curvature(0); math.Abs(a-b) > 1e-9 {
			t.Errorf("curvature %g before and %g after point %d", a, b, i)
		}
	}
}
