package order

import (
	"math"

	"hushframe/core/numeric/dense"
)

// drift is the model by which phases move: the acceleration of each rotor is a Gauss-Markov process that forgets within memory, with a
// deviation of its own and one that all rotors share (G. E. Uhlenbeck and L. S. Ornstein, Phys. Rev. 36, 1930). A short memory makes speeds walk at
// random, a long one makes them smooth.
type drift struct {
	own, common float64 // rad/s²
	memory      float64 // s
	step        float64 // s between moments
}

// evidence is what one moment says of the phases: the gradient and curvature of its log likelihood at the phases assumed.
type evidence struct {
	slope, curve []float64 // by rotor; by pair of rotors
}

// smoothed are phases and speeds by moment with their covariances.
type smoothed struct {
	phase, speed           [][]float64 // by moment and rotor, rad and rad/s
	phaseError, speedError [][]float64
	likelihood             float64
}

// wanted says how much of the smoothing is done.
type wanted int

const (
	likelihoodOnly wanted = iota
	withoutErrors
	withErrors
)

// smooth gives the most likely phases under the drift, from what each moment says of them: the filter of R. E. Kalman (1960) forwards and
// the recursion of H. E. Rauch, F. Tung and C. T. Striebel (Maximum likelihood estimates of linear dynamic systems, AIAA J. 3, 1965)
// backwards. at holds the phases by moment about which the evidence was taken, start the speeds of the first moment.
func smooth(at [][]float64, said []evidence, d drift, want wanted) smoothed {
	n, r := len(at), len(at[0])
	m := 3 * r
	var out smoothed
	x, p := make([]float64, m), make([]float64, m*m)
	for i := range r {
		x[i] = at[0][i]
		p[i*m+i], p[(r+i)*m+r+i] = 10, startError*startError
		if n > 1 {
			x[r+i] = (at[1][i] - at[0][i]) / d.step
		}
		for j := range r {
			p[(2*r+i)*m+2*r+j] = d.variance(i, j)
		}
	}
	predicted, predictedP := make([][]float64, n), make([][]float64, n)
	filtered, filteredP := make([][]float64, n), make([][]float64, n)
	for k := range n {
		if k > 0 {
			x, p = d.ahead(x, p, r)
		}
		predicted[k], predictedP[k] = x, p
		x, p = out.take(x, p, at[k], said[k], r)
		filtered[k], filteredP[k] = x, p
	}
	if want == likelihoodOnly {
		return out
	}
	out.phase, out.speed = make([][]float64, n), make([][]float64, n)
	out.phaseError, out.speedError = make([][]float64, n), make([][]float64, n)
	for k := n - 1; k >= 0; k-- {
		switch {
		case k < n-1 && want == withoutErrors:
			x = d.backMean(filtered[k], filteredP[k], predicted[k+1], predictedP[k+1], x, r)
		case k < n-1:
			x, p = d.back(filtered[k], filteredP[k], predicted[k+1], predictedP[k+1], x, p, r)
		}
		out.phase[k], out.speed[k] = x[:r:r], x[r:2*r:2*r]
		if want == withoutErrors {
			continue
		}
		pe, se := make([]float64, r), make([]float64, r)
		for i := range r {
			pe[i], se[i] = math.Sqrt(max(0, p[i*m+i])), math.Sqrt(max(0, p[(r+i)*m+r+i]))
		}
		out.phaseError[k], out.speedError[k] = pe, se
	}
	return out
}

// startError is how far the speed of the first moment may be off, rad/s.
const startError = 2 * math.Pi * 3

func (d drift) variance(i, j int) float64 {
	v := d.common * d.common
	if i == j {
		v += d.own * d.own
	}
	return v
}

// move applies the motion of one step to the rows of a matrix of that many columns.
func (d drift) move(p []float64, r, columns int) []float64 {
	h, kept := d.step, math.Exp(-d.step/d.memory)
	out := make([]float64, len(p))
	for i := range r {
		for j := range columns {
			f, s, a := p[i*columns+j], p[(r+i)*columns+j], p[(2*r+i)*columns+j]
			out[i*columns+j] = f + h*s + h*h/2*a
			out[(r+i)*columns+j] = s + h*a
			out[(2*r+i)*columns+j] = kept * a
		}
	}
	return out
}

// ahead moves state and covariance on by one step.
func (d drift) ahead(x, p []float64, r int) ([]float64, []float64) {
	m := 3 * r
	kept := math.Exp(-d.step / d.memory)
	np := d.move(dense.Transposed(d.move(p, r, m), m), r, m)
	for i := range r {
		for j := range r {
			np[(2*r+i)*m+2*r+j] += d.variance(i, j) * (1 - kept*kept)
		}
	}
	return d.move(x, r, 1), np
}

// take adds what a moment says, and its likelihood.
func (s *smoothed) take(x, p, at []float64, e evidence, r int) ([]float64, []float64) {
	m := 3 * r
	// W = (I + H·Pφφ)⁻¹ with its determinant.
	w := make([]float64, r*r)
	off, rest := make([]float64, r), make([]float64, r)
	for i := range r {
		off[i] = x[i] - at[i]
		w[i*r+i] = 1
		for j := range r {
			for l := range r {
				w[i*r+j] += e.curve[i*r+l] * p[l*m+j]
			}
		}
	}
	for i := range r {
		bend := 0.0
		for j := range r {
			bend += e.curve[i*r+j] * off[j]
		}
		rest[i] = e.slope[i] - bend
		s.likelihood += e.slope[i]*off[i] - bend*off[i]/2
	}
	inverse, det := solveInverse(w, r)
	s.likelihood -= math.Log(math.Abs(det)) / 2
	step := make([]float64, r) // W·rest
	for i := range r {
		for j := range r {
			step[i] += inverse[i*r+j] * rest[j]
		}
	}
	nx, np := make([]float64, m), make([]float64, m*m)
	for i := range m {
		nx[i] = x[i]
		for j := range r {
			nx[i] += p[i*m+j] * step[j]
		}
	}
	for i := range r {
		s.likelihood += (nx[i] - x[i]) * rest[i] / 2
	}
	// P - P·Cᵀ·W·H·C·P
	wh := make([]float64, r*r)
	for i := range r {
		for j := range r {
			for l := range r {
				wh[i*r+j] += inverse[i*r+l] * e.curve[l*r+j]
			}
		}
	}
	mid := make([]float64, m*r)
	for i := range m {
		for j := range r {
			for l := range r {
				mid[i*r+j] += p[i*m+l] * wh[l*r+j]
			}
		}
	}
	for i := range m {
		for j := range m {
			v := p[i*m+j]
			for l := range r {
				v -= mid[i*r+l] * p[l*m+j]
			}
			np[i*m+j] = v
		}
	}
	for i := range m {
		for j := range i {
			v := (np[i*m+j] + np[j*m+i]) / 2
			np[i*m+j], np[j*m+i] = v, v
		}
	}
	return nx, np
}

// backMean is one step of the recursion backwards, of the state alone.
func (d drift) backMean(x, p, nextX, nextP, laterX []float64, r int) []float64 {
	m := 3 * r
	late := make([]float64, m)
	for j := range late {
		late[j] = laterX[j] - nextX[j]
	}
	solve(append([]float64{}, nextP...), late, m)
	pf := d.move(p, r, m) // F·P, whose columns are the rows of P·Fᵀ
	out := make([]float64, m)
	for i := range m {
		out[i] = x[i]
		for j := range m {
			out[i] += pf[j*m+i] * late[j]
		}
	}
	return out
}

// solve solves a symmetric positive definite system of n rows in place.
func solve(a, b []float64, n int) {
	for k := range n {
		for i := k + 1; i < n; i++ {
			f := a[i*n+k] / a[k*n+k]
			if f == 0 {
				continue
			}
			for j := k + 1; j < n; j++ {
				a[i*n+j] -= f * a[k*n+j]
			}
			b[i] -= f * b[k]
		}
	}
	for i := n - 1; i >= 0; i-- {
		for j := i + 1; j < n; j++ {
			b[i] -= a[i*n+j] * b[j]
		}
		b[i] /= a[i*n+i]
	}
}

// back is one step of the recursion backwards.
func (d drift) back(x, p, nextX, nextP, laterX, laterP []float64, r int) ([]float64, []float64) {
	m := 3 * r
	inverse, _ := solveInverse(nextP, m)
	pf := dense.Transposed(d.move(p, r, m), m) // P·Fᵀ
	g := multiply(pf, inverse, m)
	outX, diff := make([]float64, m), make([]float64, m*m)
	for i := range m {
		outX[i] = x[i]
		for j := range m {
			outX[i] += g[i*m+j] * (laterX[j] - nextX[j])
			diff[i*m+j] = laterP[i*m+j] - nextP[i*m+j]
		}
	}
	gd := multiply(g, diff, m)
	outP := make([]float64, m*m)
	for i := range m {
		for j := range m {
			v := p[i*m+j]
			for l := range m {
				v += gd[i*m+l] * g[j*m+l]
			}
			outP[i*m+j] = v
		}
	}
	return outX, outP
}

func multiply(a, b []float64, n int) []float64 {
	out := make([]float64, n*n)
	for i := range n {
		for l := range n {
			f := a[i*n+l]
			if f == 0 {
				continue
			}
			for j := range n {
				out[i*n+j] += f * b[l*n+j]
			}
		}
	}
	return out
}

// solveInverse inverts a small matrix of n rows with row pivots and gives its determinant.
func solveInverse(a []float64, n int) ([]float64, float64) {
	w := append([]float64{}, a...)
	out := make([]float64, n*n)
	for i := range n {
		out[i*n+i] = 1
	}
	det := 1.0
	for k := range n {
		best := k
		for i := k + 1; i < n; i++ {
			if math.Abs(w[i*n+k]) > math.Abs(w[best*n+k]) {
				best = i
			}
		}
		if best != k {
			for j := range n {
				w[k*n+j], w[best*n+j] = w[best*n+j], w[k*n+j]
				out[k*n+j], out[best*n+j] = out[best*n+j], out[k*n+j]
			}
			det = -det
		}
		det *= w[k*n+k]
		p := 1 / w[k*n+k]
		for j := range n {
			w[k*n+j] *= p
			out[k*n+j] *= p
		}
		for i := range n {
			f := w[i*n+k]
			if i == k || f == 0 {
				continue
			}
			for j := range n {
				w[i*n+j] -= f * w[k*n+j]
				out[i*n+j] -= f * out[k*n+j]
			}
		}
	}
	return out, det
}
