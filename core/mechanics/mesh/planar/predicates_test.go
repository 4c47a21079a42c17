package planar

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"hushframe/core/mechanics/outline"
)

func sign(x float64) int {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}

func rat(x float64) *big.Rat { return new(big.Rat).SetFloat64(x) }

func ratCross(ax, ay, bx, by *big.Rat) *big.Rat {
	l, r := new(big.Rat).Mul(ax, by), new(big.Rat).Mul(ay, bx)
	return l.Sub(l, r)
}

func ratDifference(p, q outline.Point) (x, y *big.Rat) {
	return new(big.Rat).Sub(rat(p.X), rat(q.X)), new(big.Rat).Sub(rat(p.Y), rat(q.Y))
}

func ratOrient(a, b, c outline.Point) int {
	ax, ay := ratDifference(a, c)
	bx, by := ratDifference(b, c)
	return ratCross(ax, ay, bx, by).Sign()
}

func ratInCircle(a, b, c, d outline.Point) int {
	sum := new(big.Rat)
	ps := [3]outline.Point{a, b, c}
	for i := range 3 {
		ux, uy := ratDifference(ps[i], d)
		vx, vy := ratDifference(ps[(i+1)%3], d)
		wx, wy := ratDifference(ps[(i+2)%3], d)
		lift := new(big.Rat).Mul(ux, ux)
		lift.Add(lift, new(big.Rat).Mul(uy, uy))
		sum.Add(sum, lift.Mul(lift, ratCross(vx, vy, wx, wy)))
	}
	return sum.Sign()
}

// jitter moves x by a few units in the last place.
func jitter(rng *rand.Rand, x float64) float64 {
	for range rng.IntN(4) {
		x = math.Nextafter(x, math.Inf(rng.IntN(2)*2-1))
	}
	return x
}

func TestOrientAgainstRationals(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	seen := map[int]int{}
	wrongPlain := 0
	for range 20000 {
		a := outline.Point{X: rng.Float64() - 0.5, Y: rng.Float64() - 0.5}
		b := outline.Point{X: 0.3 * rng.Float64(), Y: 0.3 * rng.Float64()}
		u := 3*rng.Float64() - 1
		c := outline.Point{X: jitter(rng, a.X+u*(b.X-a.X)), Y: jitter(rng, a.Y+u*(b.Y-a.Y))}
		if rng.IntN(4) == 0 { // on the diagonal, so that zero comes up
			a.Y, b.Y, c.Y = a.X, b.X, c.X
		}
		want := ratOrient(a, b, c)
		seen[want]++
		if got := sign(orient(a, b, c)); got != want {
			t.Fatalf("orient(%v, %v, %v) has sign %d, want %d", a, b, c, got, want)
		}
		if sign((a.X-c.X)*(b.Y-c.Y)-(a.Y-c.Y)*(b.X-c.X)) != want {
			wrongPlain++
		}
	}
	if seen[0] < 100 || seen[1] < 1000 || seen[-1] < 1000 || wrongPlain < 100 {
		t.Fatalf("the cases are too easy: signs %v, plain arithmetic wrong %d times", seen, wrongPlain)
	}
}

func TestInCircleAgainstRationals(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	seen := map[int]int{}
	wrongPlain := 0
	for trial := range 20000 {
		o := outline.Point{X: rng.Float64(), Y: rng.Float64()}
		r := 0.1 + rng.Float64()
		at := func(angle float64) outline.Point {
			s, c := math.Sincos(angle)
			return outline.Point{X: jitter(rng, o.X+r*c), Y: jitter(rng, o.Y+r*s)}
		}
		u := 2 * math.Pi * rng.Float64()
		a, b, c, d := at(u), at(u+0.1+rng.Float64()), at(u+1.5+rng.Float64()), at(7*rng.Float64())
		if trial%4 == 0 { // corners of a rectangle lie on one circle exactly
			d = outline.Point{X: a.X, Y: c.Y}
			b = outline.Point{X: c.X, Y: a.Y}
		}
		if ratOrient(a, b, c) < 0 {
			b, c = c, b
		}
		want := ratInCircle(a, b, c, d)
		seen[want]++
		if got := sign(inCircle(a, b, c, d)); got != want {
			t.Fatalf("inCircle(%v, %v, %v, %v) has sign %d, want %d", a, b, c, d, got, want)
		}
		adx, ady, bdx, bdy, cdx, cdy := a.X-d.X, a.Y-d.Y, b.X-d.X, b.Y-d.Y, c.X-d.X, c.Y-d.Y
		plain := (adx*adx+ady*ady)*(bdx*cdy-cdx*bdy) + (bdx*bdx+bdy*bdy)*(cdx*ady-adx*cdy) + (cdx*cdx+cdy*cdy)*(adx*bdy-bdx*ady)
		if sign(plain) != want {
			wrongPlain++
		}
	}
	if seen[0] < 1000 || seen[1] < 1000 || seen[-1] < 1000 || wrongPlain < 500 {
		t.Fatalf("the cases are too easy: signs %v, plain arithmetic wrong %d times", seen, wrongPlain)
	}
}

func TestExpansionsHoldExactValues(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	value := func(e []float64) *big.Rat {
		sum := new(big.Rat)
		for _, x := range e {
			sum.Add(sum, rat(x))
		}
		return sum
	}
	random := func() []float64 {
		var e []float64
		for range 1 + rng.IntN(6) {
			x := math.Ldexp(rng.Float64()-0.5, rng.IntN(120)-60)
			e = addExpansions(nil, e, []float64{x})
		}
		return e
	}
	for range 2000 {
		e, f := random(), random()
		sum := new(big.Rat).Add(value(e), value(f))
		if got := value(addExpansions(nil, e, f)); got.Cmp(sum) != 0 {
			t.Fatalf("%v + %v = %v, want %v", e, f, got, sum)
		}
		product := new(big.Rat).Mul(value(e), value(f))
		got := multiplyExpansions(e, f)
		if value(got).Cmp(product) != 0 {
			t.Fatalf("%v × %v = %v, want %v", e, f, got, product)
		}
		if sign(leading(got)) != product.Sign() {
			t.Fatalf("%v × %v: the last element %g has the wrong sign", e, f, leading(got))
		}
	}
}

func BenchmarkInCircleExact(b *testing.B) {
	p := []outline.Point{{X: 0.1, Y: 0.2}, {X: 0.7, Y: 0.2}, {X: 0.7, Y: 0.9}, {X: 0.1, Y: 0.9}}
	for b.Loop() {
		inCircle(p[0], p[1], p[2], p[3])
	}
}
