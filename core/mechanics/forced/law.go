package forced

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/airframe"
)

// law is a group whose stiffness depends on frequency: it adds
// (At(f) − 1) K_g, the basis resting on its stiffness at the reference.
type law struct {
	law       *airframe.Law
	stiffness []float64 // K_g over the vectors in use, n×n
	// factors are few vectors u with K_g = Σ u uᵀ: a mount stretches in few ways.
	factors [][]float64
}

// factor fills in the factors; none when K_g has no principal stiffnesses.
func (l *law) factor() {
	n := int(math.Sqrt(float64(len(l.stiffness))))
	var eig mat.EigenSym
	if !eig.Factorize(mat.NewSymDense(n, l.stiffness), true) {
		return
	}
	values := eig.Values(nil)
	var vectors mat.Dense
	eig.VectorsTo(&vectors)
	for k, v := range values {
		if !(v > 1e-13*values[n-1]) {
			continue
		}
		u := make([]float64, n)
		for i := range u {
			u[i] = math.Sqrt(v) * vectors.At(i, k)
		}
		l.factors = append(l.factors, u)
	}
}

// Varies tells whether some stiffness depends on frequency.
func (s *System) Varies() bool { return len(s.laws) > 0 }

// Frozen gives the same system with every stiffness that depends on frequency
// taken as it is at one, Hz, everywhere: what natural motions near that frequency
// are reckoned with. It is s itself where none does.
func (s *System) Frozen(frequency float64) *System {
	if len(s.laws) == 0 {
		return s
	}
	if !(frequency > 0) || math.IsInf(frequency, 0) {
		panic(fmt.Sprintf("forced: laws taken at %g Hz", frequency))
	}
	c := *s
	c.laws = nil
	c.loss = append([]float64(nil), s.loss...)
	c.shift = make([]float64, len(s.loss))
	for _, l := range s.laws {
		f := l.law.At(frequency)
		for i, x := range l.stiffness {
			c.shift[i] += (real(f) - 1) * x
			c.loss[i] += imag(f) * x
		}
	}
	c.prepare()
	return &c
}
