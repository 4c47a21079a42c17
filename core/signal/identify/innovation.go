package identify

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// innovation is a model of the channels as white noise e of covariance L·Lᵀ through
//
//	H(z) = I + Σ c·kᵀ/(z - μ)
//
// over the poles of a state-space model, so that the two-sided spectrum is S = H·L·Lᵀ·Hᴴ. Pairs of complex poles are written by one of
// them.
type innovation struct {
	rate  float64 // Hz
	l     int
	pairs []pair
	reals []realPole
	noise []float64 // L, lower triangle in l × l
}

// pair is the pole λ = -decay + i·turn in 1/s and its conjugate. The component of c that is largest is 1.
type pair struct {
	decay, turn float64
	fixed       int // component of c that is 1
	c, k        []complex128
}

func (p pair) lambda() complex128 { return complex(-p.decay, p.turn) }

// realPole is a pole without a partner.
type realPole struct {
	mu   float64
	c, k []float64
}

// innovation turns the model of order n into innovation form: with canonical weights the covariance of the states is the diagonal of
// singular values, so that the innovations of the forward model follow without a Riccati equation (P. Van Overschee and B. De Moor,
// Subspace Identification for Linear Systems, 1996). Poles on or outside the unit circle are mirrored. r are the covariances.
func (s *Subspace) innovation(n int, r [][]float64) (*innovation, bool) {
	m, ok := s.model(n)
	if !ok {
		return nil, false
	}
	l := s.Channels
	// G = E x[t+1]·y[t]ᵀ, with x = √S·Vᵀ·W2ᵀ·past.
	past := mat.NewDense(s.Rows*l, l, nil)
	for a := range s.Rows {
		for p := range l {
			for q := range l {
				past.Set(a*l+p, q, r[s.Rows-1-a][q*l+p])
			}
		}
	}
	right := mat.DenseCopyOf(s.right.Slice(0, s.Rows*l, 0, n))
	var g mat.Dense
	g.Mul(right.T(), past)
	c := mat.DenseCopyOf(s.observability.Slice(0, l, 0, n))
	a := mat.NewDense(n, n, nil)
	o := s.observability
	rows, _ := o.Dims()
	if m.qr.SolveTo(a, false, o.Slice(l, rows, 0, n)) != nil {
		return nil, false
	}
	noise := mat.NewSymDense(l, nil)
	k := mat.NewDense(n, l, nil)
	for i := range n {
		by := math.Sqrt(s.Singular[i])
		for q := range l {
			sum := by * g.At(i, q)
			for j := range n {
				sum -= a.At(i, j) * s.Singular[j] * c.At(q, j)
			}
			k.Set(i, q, sum)
		}
	}
	for p := range l {
		for q := p; q < l; q++ {
			sum := (r[0][p*l+q] + r[0][q*l+p]) / 2
			for j := range n {
				sum -= c.At(p, j) * s.Singular[j] * c.At(q, j)
			}
			noise.SetSym(p, q, sum)
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(noise) {
		return nil, false
	}
	var gain mat.Dense
	if chol.SolveTo(&gain, k.T()) != nil { // Σ⁻¹·(G - A·P·Cᵀ)ᵀ, l × n
		return nil, false
	}
	var lower mat.TriDense
	chol.LTo(&lower)
	out := &innovation{rate: s.Rate, l: l, noise: make([]float64, l*l)}
	for p := range l {
		for q := range p + 1 {
			out.noise[p*l+q] = lower.At(p, q)
		}
	}
	for i, mu := range m.values {
		if imag(mu) < 0 {
			continue
		}
		row := m.inverse(i)
		left := make([]complex128, l)
		for q := range left {
			for j, w := range row {
				left[q] += w * complex(gain.At(q, j), 0)
			}
		}
		if by := cmplx.Abs(mu); by >= 1 {
			mu /= complex(by*by, 0)
			if cmplx.Abs(mu) > 0.9999 {
				mu *= 0.9999
			}
		}
		if imag(mu) == 0 {
			p := realPole{mu: real(mu)}
			for q := range l {
				p.c, p.k = append(p.c, real(m.shapes[i][q])), append(p.k, real(left[q]))
			}
			out.reals = append(out.reals, p)
			continue
		}
		lambda := cmplx.Log(mu) * complex(s.Rate, 0)
		p := pair{decay: -real(lambda), turn: imag(lambda), c: append([]complex128{}, m.shapes[i]...), k: left}
		p.normal()
		out.pairs = append(out.pairs, p)
	}
	sortBy(out.pairs, func(p pair) float64 { return p.turn })
	return out, true
}

// normal makes the largest component of c 1 and moves the scale to k.
func (p *pair) normal() {
	for q, v := range p.c {
		if cmplx.Abs(v) > cmplx.Abs(p.c[p.fixed]) {
			p.fixed = q
		}
	}
	by := p.c[p.fixed]
	if by == 0 {
		return
	}
	for q := range p.c {
		p.c[q] /= by
		p.k[q] *= by
	}
}

// at sets b to H·L at a frequency, l × l, row by row.
func (v *innovation) at(f float64, b []complex128) {
	l := v.l
	h := make([]complex128, l*l)
	z := cmplx.Rect(1, 2*math.Pi*f/v.rate)
	for p := range l {
		h[p*l+p] = 1
	}
	for _, p := range v.pairs {
		mu := cmplx.Exp(p.lambda() / complex(v.rate, 0))
		s, t := 1/(z-mu), 1/(z-cmplx.Conj(mu))
		for x := range l {
			for y := range l {
				r := p.c[x] * p.k[y]
				h[x*l+y] += r*s + cmplx.Conj(r)*t
			}
		}
	}
	for _, p := range v.reals {
		s := 1 / (z - complex(p.mu, 0))
		for x := range l {
			for y := range l {
				h[x*l+y] += complex(p.c[x]*p.k[y], 0) * s
			}
		}
	}
	for x := range l {
		for y := range l {
			var sum complex128
			for q := y; q < l; q++ {
				sum += h[x*l+q] * complex(v.noise[q*l+y], 0)
			}
			b[x*l+y] = sum
		}
	}
}

// clone copies a model.
func (v *innovation) clone() *innovation {
	out := *v
	out.pairs = nil
	for _, p := range v.pairs {
		p.c, p.k = append([]complex128{}, p.c...), append([]complex128{}, p.k...)
		out.pairs = append(out.pairs, p)
	}
	out.noise = append([]float64{}, v.noise...)
	return &out
}
