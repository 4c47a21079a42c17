package main

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// term is one pole of the plant: its gyro rate for the force f of all inputs is rate·(forceᵀ·f)/(s-λ).
type term struct {
	lambda complex128
	rate   []complex128 // rad/s, three axes
	force  []complex128 // inputs, six for each rotor
}

// lowest is the frequency in Hz below which a pole is no mode of the frame.
const lowest = 40

// elastic tells whether a term is that one of a pair of poles by which a mode is told.
func (t term) elastic() bool {
	return imag(t.lambda) > 0 && cmplx.Abs(t.lambda) >= 2*math.Pi*lowest
}

// terms splits the plant into its poles, from the eigenvalues of its state matrix. Poles at zero, which are places and not rates, are left out.
func (pl *plant) terms() []term {
	var eig mat.Eigen
	if !eig.Factorize(pl.a, mat.EigenBoth) {
		panic("fly: the state matrix has no eigenvalues")
	}
	var right, left mat.CDense
	eig.VectorsTo(&right)
	eig.LeftVectorsTo(&left)
	inputs := pl.b.RawMatrix().Cols
	var out []term
	for k, s := range eig.Values(nil) {
		if cmplx.Abs(s) < 1 {
			continue
		}
		t := term{lambda: s, rate: make([]complex128, 3), force: make([]complex128, inputs)}
		for d := range t.rate {
			for i := range pl.n {
				t.rate[d] += complex(pl.gyro.At(d, i), 0) * right.At(pl.n+i, k)
			}
		}
		var norm complex128
		for i := range 2 * pl.n {
			norm += cmplx.Conj(left.At(i, k)) * right.At(i, k)
		}
		for c := range t.force {
			for i := range 2 * pl.n {
				t.force[c] += cmplx.Conj(left.At(i, k)) * complex(pl.b.At(i, c), 0)
			}
			t.force[c] /= norm
		}
		out = append(out, t)
	}
	return out
}
