package shell

import (
	"math"
	"testing"
)

// Each shape function is one at its node and zero at the others; they add up to one; derivatives
// match differences.
func TestShapeFunctions(t *testing.T) {
	corners := [][2]float64{{0, 0}, {1, 0}, {0, 1}, {0.5, 0}, {0.5, 0.5}, {0, 0.5}}
	for n, shape := range map[int]func(r, s float64) at{3: linearAt, 6: quadraticAt} {
		for j, c := range corners[:n] {
			for i, v := range shape(c[0], c[1]).value {
				want := 0.0
				if i == j {
					want = 1
				}
				if math.Abs(v-want) > 1e-15 {
					t.Errorf("%d nodes: function %d at node %d is %g", n, i, j, v)
				}
			}
		}
		const r, s, h = 0.21, 0.34, 1e-5
		a, sum := shape(r, s), 0.0
		for i := range n + 1 {
			dr := (shape(r+h, s).value[i] - shape(r-h, s).value[i]) / (2 * h)
			ds := (shape(r, s+h).value[i] - shape(r, s-h).value[i]) / (2 * h)
			if math.Abs(dr-a.dr[i]) > 1e-8 || math.Abs(ds-a.ds[i]) > 1e-8 {
				t.Errorf("%d nodes: gradient of function %d is (%g, %g), differences give (%g, %g)", n, i, a.dr[i], a.ds[i], dr, ds)
			}
			if i < n {
				sum += a.value[i]
			}
		}
		if math.Abs(sum-1) > 1e-15 {
			t.Errorf("%d nodes: shape functions add up to %g", n, sum)
		}
	}
}

// ∫ r^p s^q over the triangle is p! q!/(p+q+2)!.
func TestRules(t *testing.T) {
	factorial := func(n int) float64 { return math.Gamma(float64(n + 1)) }
	for degree, rule := range map[int][]position{4: degree4(), 6: degree6()} {
		for p := 0; p <= degree; p++ {
			for q := 0; p+q <= degree; q++ {
				got := 0.0
				for _, x := range rule {
					got += x.weight * math.Pow(x.r, float64(p)) * math.Pow(x.s, float64(q))
				}
				if want := factorial(p) * factorial(q) / factorial(p+q+2); math.Abs(got-want) > 1e-15 {
					t.Errorf("degree %d: ∫ r^%d s^%d = %.16g, want %.16g", degree, p, q, got, want)
				}
			}
		}
	}
}
