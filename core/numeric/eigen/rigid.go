package eigen

import (
	"math"
	"slices"

	"hushframe/core/numeric/sparse"
)

// lockRigid checks the null vectors given and makes them M-orthonormal; they are the first known pairs.
func (s *solver) lockRigid() error {
	p, given := s.p, s.opt.Rigid
	n := p.order()
	s.known = &pairs{}
	if len(given) == 0 {
		return nil
	}
	y, size := make([]float64, n), make([]float64, n)
	diagonal := p.k.Diagonal()
	w := make([]float64, 0, len(given)*n)
	for v, r := range given {
		if len(r) != n {
			panic("eigen: Rigid vector of wrong length")
		}
		p.k.MulVec(y, r)
		sumOfTerms(p.k, size, r)
		// Each row is divided by the root of its diagonal, so that forces and moments compare; the rows of a pure
		// translation that belong to rotations hold nothing but rounding. Rounding in the matrix leaves some 1e-12 of
		// the largest terms, a wrong vector more than a millionth.
		largest := 0.0
		for i, d := range diagonal {
			if d > 0 {
				largest = max(largest, size[i]/math.Sqrt(d))
			}
		}
		for i, d := range diagonal {
			if left := math.Abs(y[i]); left > 0 && !(left <= 1e-6*largest*math.Sqrt(d)) {
				return &RigidError{Vector: v, Unknown: i, Ratio: left / (largest * math.Sqrt(d))}
			}
		}
		w = append(w, r...)
	}
	b := newBasis(p, len(given))
	keep, _, _ := b.append(w, nil, len(given), 0)
	kept := len(keep)
	if kept < len(given) {
		s.res.Status.note("%d of the %d rigid vectors given depend on the others or have no mass", len(given)-kept, len(given))
	}
	s.known = &pairs{
		values: make([]float64, kept), residuals: make([]float64, kept),
		rigid: slices.Repeat([]bool{true}, kept), x: b.vectors(),
	}
	return nil
}

// sumOfTerms computes y = |A|·|x|, the size of the terms that cancel in A·x.
func sumOfTerms(a *sparse.Symmetric, y, x []float64) {
	clear(y)
	for j := range a.N {
		for q := a.Ptr[j]; q < a.Ptr[j+1]; q++ {
			i, v := int(a.Row[q]), math.Abs(a.Val[q])
			y[i] += v * math.Abs(x[j])
			if i != j {
				y[j] += v * math.Abs(x[i])
			}
		}
	}
}
