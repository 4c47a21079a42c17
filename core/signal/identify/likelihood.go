package identify

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/numeric/dense"
	"hushframe/core/signal/spectrum"
)

// likelihood is what a record says of a model: averaged cross spectra in a band of frequencies, taken as independent complex Wishart
// matrices about the model's spectrum (P. Whittle, The analysis of multiple stationary time series, J. R. Statist. Soc. B 15, 1953).
type likelihood struct {
	l       int
	bins    []float64      // Hz
	spectra [][]complex128 // two-sided per sample, l × l
	weights []float64      // independent averages of each
	threads int
}

// leastLeft keeps what was taken out with rotor orders from being made up for beyond measure.
const leastLeft = 0.3

// newLikelihood takes the bins between from and to Hz of the cross spectra of a record, averaged over parts of that width over the
// frequency, and makes up for the share of the noise that is left at a frequency; nil means all.
func newLikelihood(r Record, segment int, from, to float64, left func(f float64) float64, width float64, threads int) (*likelihood, error) {
	s := spectrum.Settings{Rate: r.Rate, Segment: segment, Overlap: segment / 2}
	m, err := spectrum.CrossMatrix(r.Runs, s)
	if err != nil {
		return nil, err
	}
	w := &likelihood{l: m.Channels, threads: threads}
	samples := 0
	for _, run := range r.Runs {
		if n := s.Segments(len(run[0])); n > 0 {
			samples += (n + 1) * segment / 2
		}
	}
	// Every second holds as many independent values per Hz as there are channels, however they are cut into segments.
	weight := float64(samples) / float64(segment)
	for k := 0; k < len(m.Values); {
		f := m.Frequency(k)
		if f < from {
			k++
			continue
		}
		count := min(max(1, int(f*width/m.Step)), len(m.Values)-k)
		if f+float64(count-1)*m.Step > to {
			break
		}
		sum := make([]complex128, m.Channels*m.Channels)
		for range count {
			by := 1.0
			if left != nil {
				by = max(leastLeft, left(m.Frequency(k)))
			}
			for i, v := range m.Values[k] {
				sum[i] += v * complex(r.Rate/2/by/float64(count), 0)
			}
			k++
		}
		w.bins = append(w.bins, f+float64(count-1)/2*m.Step)
		w.weights = append(w.weights, weight*float64(count))
		w.spectra = append(w.spectra, sum)
	}
	return w, nil
}

// blockBins is the number of bins that one piece of work takes.
const blockBins = 32

// value returns the logarithm of the likelihood, less a constant; -Inf where the model has no spectrum.
func (w *likelihood) value(v *innovation) float64 {
	blocks := (len(w.bins) + blockBins - 1) / blockBins
	parts := make([]float64, blocks)
	dense.Parallel(w.threads, blocks, func(t int) {
		b, inverse := make([]complex128, w.l*w.l), make([]complex128, w.l*w.l)
		x := make([]complex128, w.l*w.l)
		for k := t * blockBins; k < min(len(w.bins), (t+1)*blockBins); k++ {
			v.at(w.bins[k], b)
			determinant, ok := invert(b, inverse, w.l)
			if !ok {
				parts[t] = math.Inf(-1)
				return
			}
			whiten(inverse, w.spectra[k], x, w.l)
			trace := 0.0
			for p := range w.l {
				trace += real(x[p*w.l+p])
			}
			parts[t] -= w.weights[k] * (2*math.Log(determinant) + trace)
		}
	})
	sum := 0.0
	for _, p := range parts {
		sum += p
	}
	return sum
}

// invert inverts a small matrix by elimination with row exchange and returns the magnitude of its determinant.
func invert(a, out []complex128, n int) (determinant float64, ok bool) {
	m := append([]complex128{}, a...)
	clear(out)
	for i := range n {
		out[i*n+i] = 1
	}
	determinant = 1
	for i := range n {
		pivot := i
		for r := i + 1; r < n; r++ {
			if cmplx.Abs(m[r*n+i]) > cmplx.Abs(m[pivot*n+i]) {
				pivot = r
			}
		}
		size := cmplx.Abs(m[pivot*n+i])
		if !(size > 0) || math.IsInf(size, 0) {
			return 0, false
		}
		determinant *= size
		for c := range n {
			m[i*n+c], m[pivot*n+c] = m[pivot*n+c], m[i*n+c]
			out[i*n+c], out[pivot*n+c] = out[pivot*n+c], out[i*n+c]
		}
		by := 1 / m[i*n+i]
		for c := range n {
			m[i*n+c] *= by
			out[i*n+c] *= by
		}
		for r := range n {
			if f := m[r*n+i]; r != i && f != 0 {
				for c := range n {
					m[r*n+c] -= f * m[i*n+c]
					out[r*n+c] -= f * out[i*n+c]
				}
			}
		}
	}
	return determinant, true
}

// whiten sets x to B⁻¹·S·B⁻ᴴ.
func whiten(inverse, s, x []complex128, n int) {
	half := make([]complex128, n*n)
	for a := range n {
		for b := range n {
			for q := range n {
				half[a*n+b] += inverse[a*n+q] * s[q*n+b]
			}
		}
	}
	for a := range n {
		for b := range n {
			x[a*n+b] = 0
			for q := range n {
				x[a*n+b] += half[a*n+q] * cmplx.Conj(inverse[b*n+q])
			}
		}
	}
}

// parameters counts those of a model: decay and turn of a pair, c but its fixed component, k; then the noise.
func (v *innovation) parameters() int { return len(v.pairs)*v.perPair() + v.l*(v.l+1)/2 }

func (v *innovation) perPair() int { return 2 + 2*(v.l-1) + 2*v.l }

// slopes sets rows of the least-squares problem of one step of Fisher scoring: for parameter a, the whitened derivative
// B⁻¹·∂S/∂a·B⁻ᴴ of all bins, as the real numbers of a Hermitian matrix; the last row is the whitened remainder of the data. Decay is by its
// logarithm, turn in units of decay.
func (w *likelihood) slopes(v *innovation) (rows [][]float64, length int) {
	l, per := w.l, w.l*w.l
	length = per * len(w.bins)
	count := v.parameters() + 1
	rows = make([][]float64, count)
	flat := make([]float64, count*length)
	for a := range rows {
		rows[a] = flat[a*length : (a+1)*length]
	}
	blocks := (len(w.bins) + blockBins - 1) / blockBins
	dense.Parallel(w.threads, blocks, func(t int) {
		b, inverse, x, e := make([]complex128, per), make([]complex128, per), make([]complex128, per), make([]complex128, per)
		set := func(row, bin int, hermitian bool) {
			out := rows[row][bin*per : (bin+1)*per]
			i, root := 0, math.Sqrt(w.weights[bin])
			for p := range l {
				for q := range p + 1 {
					y := e[p*l+q]
					if !hermitian {
						y += cmplx.Conj(e[q*l+p])
					}
					if p == q {
						out[i] = root * real(y)
						i++
						continue
					}
					out[i], out[i+1] = root*math.Sqrt2*real(y), root*math.Sqrt2*imag(y)
					i += 2
				}
			}
		}
		for bin := t * blockBins; bin < min(len(w.bins), (t+1)*blockBins); bin++ {
			v.at(w.bins[bin], b)
			if _, ok := invert(b, inverse, l); !ok {
				continue
			}
			whiten(inverse, w.spectra[bin], x, l)
			copy(e, x)
			for p := range l {
				e[p*l+p] -= 1
			}
			set(count-1, bin, true)
			z := cmplx.Rect(1, 2*math.Pi*w.bins[bin]/v.rate)
			row := 0
			for _, p := range v.pairs {
				mu := cmplx.Exp(p.lambda() / complex(v.rate, 0))
				s, u := 1/(z-mu), 1/(z-cmplx.Conj(mu))
				// Whitened shapes and their conjugates; noise-weighted k.
				left, leftC := make([]complex128, l), make([]complex128, l)
				right, rightC := make([]complex128, l), make([]complex128, l)
				for a := range l {
					for q := range l {
						left[a] += inverse[a*l+q] * p.c[q]
						leftC[a] += inverse[a*l+q] * cmplx.Conj(p.c[q])
					}
					for q := a; q < l; q++ {
						right[a] += p.k[q] * complex(v.noise[q*l+a], 0)
						rightC[a] += cmplx.Conj(p.k[q]) * complex(v.noise[q*l+a], 0)
					}
				}
				// product sets e to by·a·bᵀ + byC·aC·bCᵀ.
				product := func(by complex128, a, b []complex128, byC complex128, aC, bC []complex128) {
					for x := range l {
						for y := range l {
							e[x*l+y] = by*a[x]*b[y] + byC*aC[x]*bC[y]
						}
					}
				}
				// dμ = μ/rate·dλ, of 1/(z-μ) its square.
				d := mu / complex(v.rate, 0)
				dC := cmplx.Conj(d)
				scale := complex(p.decay, 0)
				product(-scale*d*s*s, left, right, -scale*dC*u*u, leftC, rightC)
				set(row, bin, false)
				product(scale*1i*d*s*s, left, right, -scale*1i*dC*u*u, leftC, rightC)
				set(row+1, bin, false)
				row += 2
				column := make([]complex128, l)
				for q := range l {
					if q == p.fixed {
						continue
					}
					for a := range l {
						column[a] = inverse[a*l+q]
					}
					product(s, column, right, u, column, rightC)
					set(row, bin, false)
					product(1i*s, column, right, -1i*u, column, rightC)
					set(row+1, bin, false)
					row += 2
				}
				line := make([]complex128, l)
				for q := range l {
					for a := range l {
						line[a] = complex(v.noise[q*l+a], 0)
					}
					product(s, left, line, u, leftC, line)
					set(row, bin, false)
					product(1i*s, left, line, -1i*u, leftC, line)
					set(row+1, bin, false)
					row += 2
				}
			}
			// H·dL = B·L⁻¹·dL: whitened, L⁻¹·dL.
			for a := range l {
				for c := range a + 1 {
					clear(e)
					inverseColumn(v.noise, l, a, e, c)
					set(row, bin, false)
					row++
				}
			}
		}
	})
	return rows, length
}

// inverseColumn puts L⁻¹·u_a, the unit vector u_a, into column c of e.
func inverseColumn(lower []float64, l, a int, e []complex128, c int) {
	y := make([]float64, l)
	for p := range l {
		sum := 0.0
		if p == a {
			sum = 1
		}
		for q := range p {
			sum -= lower[p*l+q] * y[q]
		}
		y[p] = sum / lower[p*l+p]
		e[p*l+c] = complex(y[p], 0)
	}
}

// move returns the model with a step of its parameters.
func (v *innovation) move(step []float64) *innovation {
	out := v.clone()
	i := 0
	for n := range out.pairs {
		p := &out.pairs[n]
		p.turn += step[i+1] * p.decay
		p.decay *= math.Exp(max(-1, min(1, step[i])))
		i += 2
		for q := range p.c {
			if q != p.fixed {
				p.c[q] += complex(step[i], step[i+1])
				i += 2
			}
		}
		for q := range p.k {
			p.k[q] += complex(step[i], step[i+1])
			i += 2
		}
		p.turn = max(p.turn, 1e-6*v.rate)
		p.normal()
	}
	for a := range v.l {
		for c := range a + 1 {
			out.noise[a*v.l+c] += step[i]
			i++
		}
	}
	return out
}

// fitted is a model of greatest likelihood with the covariance of its parameters.
type fitted struct {
	*innovation
	value      float64
	covariance *mat.SymDense
	held       *mat.SymDense
	steps      int
}

const (
	mostSteps = 30
	enough    = 0.5 // gain of a step in log-likelihood at which the fit ends
	// holds is the damping under which the worth of a pair is judged: without any, shapes and forces of all pairs may turn together, which
	// changes little within a band, and no pair would seem to be worth anything.
	holds = 1e-2
)

// fit raises the likelihood of a model by Fisher scoring with damping (K. Levenberg, Q. Appl. Math. 2, 1944). It gives up when three steps as large
// as the last would not reach a wanted value.
func (w *likelihood) fit(v *innovation, wanted float64) (fitted, bool) {
	out := fitted{innovation: v, value: w.value(v)}
	if math.IsInf(out.value, 0) || math.IsNaN(out.value) {
		return out, false
	}
	damping := 1e-3
	for out.steps = 0; out.steps < mostSteps; out.steps++ {
		gram, n := w.gram(out.innovation)
		gain, scales := 0.0, out.innovation.scales()
		for range 10 {
			step, ok := solve(gram, n, damping, scales)
			if ok {
				next := out.innovation.move(step)
				if value := w.value(next); value > out.value {
					gain = value - out.value
					out.innovation, out.value = next, value
					damping = max(1e-9, damping/5)
					break
				}
			}
			damping *= 4
		}
		if gain < enough {
			break
		}
		if out.steps >= 3 && out.value+3*gain < wanted {
			return out, false
		}
	}
	gram, n := w.gram(out.innovation)
	out.covariance = inverse(gram, n, 1e-9)
	out.held = inverse(gram, n, holds)
	return out, out.covariance != nil && out.held != nil
}

// inverse returns the inverse of the information. Combinations of parameters that the data say nothing of are given little by a ridge; those
// that matter are not touched by it.
func inverse(gram []float64, n int, ridge float64) *mat.SymDense {
	scale := make([]float64, n)
	for a := range n {
		scale[a] = 1 / math.Sqrt(gram[a*(n+1)+a]+1e-300)
	}
	for ; ridge < 1; ridge *= 10 {
		f := mat.NewSymDense(n, nil)
		for a := range n {
			for b := a; b < n; b++ {
				f.SetSym(a, b, gram[a*(n+1)+b]*scale[a]*scale[b])
			}
			f.SetSym(a, a, f.At(a, a)+ridge)
		}
		var chol mat.Cholesky
		var out mat.SymDense
		if !chol.Factorize(f) || chol.InverseTo(&out) != nil {
			continue
		}
		for a := range n {
			for b := a; b < n; b++ {
				out.SetSym(a, b, out.At(a, b)*scale[a]*scale[b])
			}
		}
		return &out
	}
	return nil
}

// gram returns the information of the n parameters with the gradient in the last row, (n+1) × (n+1).
func (w *likelihood) gram(v *innovation) ([]float64, int) {
	rows, length := w.slopes(v)
	count := len(rows)
	flat := rows[0][:count*length]
	g := make([]float64, count*count)
	dense.Gram(count, count, length, flat, flat, g, w.threads)
	return g, count - 1
}

// scales are the sizes of the parameters, in their order: what a step of one parameter should stay below.
func (v *innovation) scales() []float64 {
	var out []float64
	for _, p := range v.pairs {
		most := 0.0
		for _, k := range p.k {
			most = max(most, cmplx.Abs(k))
		}
		for range 2 + 2*(v.l-1) {
			out = append(out, 1)
		}
		for range 2 * v.l {
			out = append(out, max(most, 1e-12))
		}
	}
	for a := range v.l {
		for range a + 1 {
			out = append(out, v.noise[a*v.l+a])
		}
	}
	return out
}

// solve returns the step (F + damping·(diag F + 1/scale²))⁻¹·gradient: parameters of which the data say little stay near where they are.
func solve(gram []float64, n int, damping float64, scales []float64) ([]float64, bool) {
	f := mat.NewSymDense(n, nil)
	right := mat.NewVecDense(n, nil)
	for a := range n {
		for b := a; b < n; b++ {
			f.SetSym(a, b, gram[a*(n+1)+b])
		}
		f.SetSym(a, a, f.At(a, a)+damping*(f.At(a, a)+1/(scales[a]*scales[a])))
		right.SetVec(a, gram[n*(n+1)+a])
	}
	var chol mat.Cholesky
	if !chol.Factorize(f) {
		return nil, false
	}
	out := mat.NewVecDense(n, nil)
	if chol.SolveVecTo(out, right) != nil {
		return nil, false
	}
	return out.RawVector().Data, true
}

// worth returns by how much the log-likelihood would sink without a pair, to second order: ½·kᵀ·C⁻¹·k with the covariance C of its k (A. Wald,
// Trans. Am. Math. Soc. 54, 1943).
func (f fitted) worth(pair int) float64 {
	l := f.l
	first := pair*f.perPair() + 2 + 2*(l-1)
	c := mat.NewSymDense(2*l, nil)
	k := mat.NewVecDense(2*l, nil)
	for a := range 2 * l {
		for b := a; b < 2*l; b++ {
			c.SetSym(a, b, f.held.At(first+a, first+b))
		}
	}
	for q, v := range f.pairs[pair].k {
		k.SetVec(2*q, real(v))
		k.SetVec(2*q+1, imag(v))
	}
	var chol mat.Cholesky
	if !chol.Factorize(c) {
		return 0
	}
	x := mat.NewVecDense(2*l, nil)
	if chol.SolveVecTo(x, k) != nil {
		return 0
	}
	return mat.Dot(k, x) / 2
}

// price is what as many parameters must gain in log-likelihood to be worth it: half the logarithm of the number of values each (G. Schwarz,
// Estimating the dimension of a model, Ann. Statist. 6, 1978). A lower one would let a pole settle on any chance peak of the spectra.
func (w *likelihood) price(parameters int) float64 {
	values := 0.0
	for _, v := range w.weights {
		values += v * float64(w.l)
	}
	return float64(parameters) / 2 * math.Log(values)
}
