package outline

import (
	"math"
	"sort"
)

// extremes returns the inner parameters, rising, at which the curve turns back along x or along y.
func (c Curve) extremes() []float64 {
	var ts []float64
	switch c.Kind {
	case KindArc:
		// The tangent is parallel to an axis at every multiple of a quarter turn.
		lo, hi := c.Start, c.Start+c.Sweep
		if lo > hi {
			lo, hi = hi, lo
		}
		const quarter = math.Pi / 2
		for k := math.Ceil(lo / quarter); k*quarter <= hi; k++ {
			ts = append(ts, (k*quarter-c.Start)/c.Sweep)
		}
	case KindCubic:
		d0, d1, d2 := c.C1.Sub(c.P0), c.C2.Sub(c.C1), c.P1.Sub(c.C2)
		ts = append(ts, quadraticRoots(d0.X, d1.X, d2.X)...)
		ts = append(ts, quadraticRoots(d0.Y, d1.Y, d2.Y)...)
	}
	inner := ts[:0]
	for _, t := range ts {
		if t > 0 && t < 1 {
			inner = append(inner, t)
		}
	}
	sort.Float64s(inner)
	return inner
}

// quadraticRoots returns the real roots of the Bézier polynomial a(1−t)² + 2b·t(1−t) + c·t².
func quadraticRoots(a, b, c float64) []float64 {
	p, q := a-2*b+c, b-a // p·t² + 2q·t + a
	if math.Abs(p) <= 1e-14*(math.Abs(a)+math.Abs(b)+math.Abs(c)) {
		if q == 0 {
			return nil
		}
		return []float64{-a / (2 * q)}
	}
	disc := q*q - p*a
	if disc < 0 {
		return nil
	}
	w := -(q + math.Copysign(math.Sqrt(disc), q))
	if w == 0 {
		return []float64{0}
	}
	return []float64{w / p, a / w}
}

// monotone returns parameters 0 = t₀ < … < tₙ = 1 between which the curve is monotone along both axes.
func (c Curve) monotone() []float64 {
	ts := []float64{0}
	for _, t := range c.extremes() {
		if t > ts[len(ts)-1] {
			ts = append(ts, t)
		}
	}
	return append(ts, 1)
}

// winding returns twice the contribution of the curve to the winding number about p: the signed crossings of the
// ray from p towards +x, counted by the half-open rule on y so that joints between curves count once.
func (c Curve) winding(p Point) int {
	ts := c.monotone()
	n := 0
	for i := 1; i < len(ts); i++ {
		a, b := ts[i-1], ts[i]
		pa, pb := c.At(a), c.At(b)
		var sign int
		switch {
		case pa.Y <= p.Y && pb.Y > p.Y:
			sign = 1
		case pb.Y <= p.Y && pa.Y > p.Y:
			sign = -1
		default:
			continue
		}
		if p.X >= math.Max(pa.X, pb.X) {
			continue
		}
		if p.X < math.Min(pa.X, pb.X) || c.right(p, a, b, pa, pb) {
			n += sign
		}
	}
	return n
}

// right reports whether the monotone piece between a and b passes to the right of p at the height of p.
func (c Curve) right(p Point, a, b float64, pa, pb Point) bool {
	if c.Kind == KindLine {
		side := pb.Sub(pa).Cross(p.Sub(pa))
		if pb.Y < pa.Y {
			side = -side
		}
		return side > 0
	}
	up := pb.Y > pa.Y
	for range 200 {
		m := 0.5 * (a + b)
		if m <= a || m >= b {
			break
		}
		q := c.At(m)
		if (q.Y <= p.Y) == up {
			a, pa = m, q
		} else {
			b, pb = m, q
		}
		if p.X >= math.Max(pa.X, pb.X) {
			return false
		}
		if p.X < math.Min(pa.X, pb.X) {
			return true
		}
	}
	return c.At(0.5*(a+b)).X > p.X
}

// gauss integrates f from a to b with the eight-point Gauss–Legendre rule.
func gauss(f func(float64) float64, a, b float64) float64 {
	nodes := [4]float64{0.1834346424956498, 0.5255324099163290, 0.7966664774136267, 0.9602898564975363}
	weights := [4]float64{0.3626837833783620, 0.3137066458778873, 0.2223810344533745, 0.1012285362903763}
	m, h := 0.5*(a+b), 0.5*(b-a)
	sum := 0.0
	for i, x := range nodes {
		sum += weights[i] * (f(m-h*x) + f(m+h*x))
	}
	return h * sum
}

// integrate halves the interval until both halves together agree with the whole.
func integrate(f func(float64) float64, a, b, whole, tol float64, depth int) float64 {
	m := 0.5 * (a + b)
	left, right := gauss(f, a, m), gauss(f, m, b)
	if depth == 0 || math.Abs(left+right-whole) <= tol {
		return left + right
	}
	return integrate(f, a, m, left, tol/2, depth-1) + integrate(f, m, b, right, tol/2, depth-1)
}
