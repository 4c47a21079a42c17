package identify

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// scatter is what leaving out groups of time does to one pole.
type scatter struct {
	frequency, damping float64 // standard errors, Hz and 1
	angle              float64 // standard error of the direction, rad
}

// changes are the differences of T without one group of time from T of all.
func changes(c *Covariance, rows int) []*mat.Dense {
	whole := toeplitz(c.Mean(-1), c.Channels, rows)
	var out []*mat.Dense
	for g := range c.Sums {
		t := toeplitz(c.Mean(g), c.Channels, rows)
		t.Sub(t, whole)
		out = append(out, t)
	}
	return out
}

// jackknife returns the standard errors of one pole of a model from leaving out each group of time in turn. To first order
//
//	δO·v = δT·W2·V·S^(-1/2)·v,   δA·v = O₊⁺·(δO₋ - μ·δO₊)·v
//
// with O₊ and O₋ the matrix O without its last and its first block row; δμ and δv follow from the eigenvectors.
func (s *Subspace) jackknife(m *model, p Pole, deltas []*mat.Dense) (scatter, bool) {
	n, size, l := m.order, s.Rows*s.Channels, s.Channels
	v := make([]complex128, n)
	for j := range v {
		v[j] = m.right.At(j, p.index)
	}
	u := mat.NewDense(size, 2, nil)
	for i := range size {
		var sum complex128
		for j, x := range v {
			sum += complex(s.right.At(i, j)/math.Sqrt(s.Singular[j]), 0) * x
		}
		u.Set(i, 0, real(sum))
		u.Set(i, 1, imag(sum))
	}
	mu := m.values[p.index]
	right := mat.NewDense(size-l, 2*len(deltas), nil)
	tops := make([][]complex128, len(deltas))
	var z mat.Dense
	for g, delta := range deltas {
		z.Mul(delta, u)
		at := func(i int) complex128 { return complex(z.At(i, 0), z.At(i, 1)) }
		for i := range size - l {
			r := at(i+l) - mu*at(i)
			right.Set(i, 2*g, real(r))
			right.Set(i, 2*g+1, imag(r))
		}
		for c := range l {
			tops[g] = append(tops[g], at(c))
		}
	}
	var x mat.Dense
	if m.qr.SolveTo(&x, false, right) != nil {
		return scatter{}, false
	}
	reference, _ := Direction(p.Shape)
	var frequency, damping []float64
	directions := make([][]float64, l)
	for g := range deltas {
		moved := mu
		shape := append([]complex128{}, p.Shape...)
		for c := range shape {
			shape[c] += tops[g][c]
		}
		for k := range n {
			var by complex128
			for j, w := range m.inverse(k) {
				by += w * complex(x.At(j, 2*g), x.At(j, 2*g+1))
			}
			if k == p.index {
				moved += by
				continue
			}
			gap := mu - m.values[k]
			if gap == 0 {
				return scatter{}, false
			}
			for c := range shape {
				shape[c] += by / gap * m.shapes[k][c]
			}
		}
		f, d := natural(cmplx.Log(moved) * complex(s.Rate, 0))
		frequency, damping = append(frequency, f), append(damping, d)
		direction, _ := Direction(shape)
		sign := 1.0
		if dot(direction, reference) < 0 {
			sign = -1
		}
		for c := range direction {
			directions[c] = append(directions[c], sign*direction[c])
		}
	}
	out := scatter{frequency: spread(frequency), damping: spread(damping)}
	for _, d := range directions {
		out.angle = math.Hypot(out.angle, spread(d))
	}
	return out, true
}

// spread is the standard error of a jackknife: √((G-1)/G·Σ(x-mean)²).
func spread(x []float64) float64 {
	n := float64(len(x))
	mean := 0.0
	for _, v := range x {
		mean += v / n
	}
	sum := 0.0
	for _, v := range x {
		sum += (v - mean) * (v - mean)
	}
	return math.Sqrt((n - 1) / n * sum)
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}
