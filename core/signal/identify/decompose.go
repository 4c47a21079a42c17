package identify

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/mat"

	"hushframe/core/signal/spectrum"
)

// Decomposition holds the singular values and vectors of the cross-spectral matrix, bin by bin.
type Decomposition struct {
	spectrum.Average
	Channels int
	Settings spectrum.Settings
	Values   [][]float64      // [bin][l], falling, in unit²/Hz
	Vectors  [][][]complex128 // [bin][which], unit length
}

// Singular decomposes the averaged cross spectra of a record. Errors as spectrum.CrossMatrix.
func Singular(r Record, s spectrum.Settings) (*Decomposition, error) {
	r.check()
	m, err := spectrum.CrossMatrix(r.Runs, s)
	if err != nil {
		return nil, err
	}
	l := m.Channels
	d := &Decomposition{Average: m.Average, Channels: l, Settings: s}
	for _, g := range m.Values {
		values, vectors := hermitian(g, l)
		d.Values, d.Vectors = append(d.Values, values), append(d.Vectors, vectors)
	}
	return d, nil
}

// hermitian returns eigenvalues, falling, and unit eigenvectors of a positive l × l Hermitian matrix, which are its
// singular values and vectors. The matrix [Re -Im; Im Re] has each of them twice.
func hermitian(g []complex128, l int) ([]float64, [][]complex128) {
	scale := 0.0
	for a := range l {
		scale = max(scale, real(g[a*l+a]))
	}
	values, vectors := make([]float64, l), make([][]complex128, l)
	if scale == 0 {
		for k := range vectors {
			vectors[k] = make([]complex128, l)
			vectors[k][k] = 1
		}
		return values, vectors
	}
	m := mat.NewSymDense(2*l, nil)
	for a := range l {
		for b := range l {
			v := (g[a*l+b] + cmplx.Conj(g[b*l+a])) / complex(2*scale, 0)
			m.SetSym(min(a, b), max(a, b), real(v))
			m.SetSym(min(l+a, l+b), max(l+a, l+b), real(v))
			m.SetSym(a, l+b, -imag(v))
		}
	}
	var e mat.EigenSym
	if !e.Factorize(m, true) {
		panic("identify: a finite symmetric matrix has eigenvalues")
	}
	twice := e.Values(nil)
	var q mat.Dense
	e.VectorsTo(&q)
	for k := range l {
		column := 2*l - 1 - 2*k
		values[k] = max(0, twice[column]) * scale
		vectors[k] = make([]complex128, l)
		for a := range l {
			vectors[k][a] = complex(q.At(a, column), q.At(l+a, column))
		}
	}
	return values, vectors
}

// Peak is a mode as the decomposition shows it.
type Peak struct {
	Bin       int
	Frequency float64 // Hz, from the zero crossings; that of the bin if there are too few
	Damping   float64 // ζ from the decay; NaN if there is too little of it
	Value     float64 // first singular value at the peak
	Shape     []complex128
	Low, High float64 // Hz, the bins that agree with the shape
}

// bellAgreement is the least agreement of a bin's first vector with the shape of the peak; common practice.
const bellAgreement = 0.9

// PeakNear returns the mode at the largest first singular value within low to high Hz; with a shape, at the largest value
// whose vector agrees with it. ok is false if there is none.
func (d *Decomposition) PeakNear(low, high float64, shape []complex128) (p Peak, ok bool) {
	p.Bin = -1
	for k := range d.Values {
		if f := d.Frequency(k); f < low || f > high {
			continue
		}
		for w, v := range d.Values[k] {
			if shape != nil && Agreement(d.Vectors[k][w], shape) < sameShape {
				continue
			}
			if p.Bin < 0 || v > p.Value {
				p.Bin, p.Value, p.Shape = k, v, d.Vectors[k][w]
			}
			break
		}
	}
	if p.Bin < 0 {
		return p, false
	}
	p.Frequency, p.Damping = d.Frequency(p.Bin), math.NaN()
	bell := make([]complex128, len(d.Values))
	p.Low, p.High = p.Frequency, p.Frequency
	for _, step := range []int{-1, 1} {
		for k := p.Bin; k > 0 && k < len(bell)-1; k += step {
			// The bell may be the second value where a stronger mode crosses it.
			which := -1
			for w, v := range d.Vectors[k] {
				if Agreement(v, p.Shape) >= bellAgreement {
					which = w
					break
				}
			}
			if which < 0 {
				break
			}
			bell[k] = complex(d.Values[k][which], 0)
			p.Low, p.High = min(p.Low, d.Frequency(k)), max(p.High, d.Frequency(k))
			// Far down the flank the noise of other modes has its vector too.
			if d.Values[k][which] < bellDepth*p.Value {
				break
			}
			// Past a valley the next mode of like shape begins.
			if next := k + 4*step; k != p.Bin && next > 0 && next < len(bell) && d.mean(k, step) > 2*d.mean(k-4*step, step) && d.Values[k][0] < p.Value/2 {
				break
			}
		}
	}
	d.decay(&p, bell)
	return p, true
}

// mean is that of the first value over four bins from k.
func (d *Decomposition) mean(k, step int) float64 {
	sum := 0.0
	for i := range 4 {
		sum += d.Values[min(max(0, k+i*step), len(d.Values)-1)][0] / 4
	}
	return sum
}

const (
	bellDepth = 0.01 // of the peak, where the bell ends
	// Later, the covariance of a record is chance rather than decay: to 0.25, damping of the chain of TestDecayScatters scatters half as much again.
	// A mode so damped that it has too few extremes by then is followed to decayEnd.
	decayFrom, decayTo, decayEnd = 0.95, 0.5, 0.25
	leastExtremes                = 4
	leastWindow                  = 0.3 // of its own correlation, beyond which the window leaves too little of the decay
)

// decay fits frequency and damping to the covariance that belongs to the bell.
func (d *Decomposition) decay(p *Peak, bell []complex128) {
	n := d.Settings.Segment
	fft := fourier.NewFFT(n)
	covariance := fft.Sequence(nil, bell)
	if !(covariance[0] > 0) {
		return
	}
	// The average of segments shows the covariance times the correlation of the window with itself.
	window := d.Settings.Window.Samples(n)
	correlation := func(lag int) float64 {
		var shared, square float64
		for i, w := range window {
			square += w * w
			if i+lag < n {
				shared += w * window[i+lag]
			}
		}
		return shared / square
	}
	var lags, logs []float64
	var places []float64
	first := covariance[0]
	for k := 1; k < n/2-1; k++ {
		a, b, c := math.Abs(covariance[k-1]), math.Abs(covariance[k]), math.Abs(covariance[k+1])
		if !(b > a && b >= c) {
			continue
		}
		held := correlation(k)
		if held < leastWindow {
			break
		}
		// Top of the parabola through three values.
		bend := 2*b - a - c
		shift, top := 0.0, b
		if bend > 0 {
			shift = (c - a) / (2 * bend)
			top = b + (c-a)*shift/4
		}
		ratio := top / held / first
		if ratio < decayEnd || ratio < decayTo && len(lags) >= leastExtremes {
			break
		}
		if ratio > decayFrom {
			continue
		}
		lags, logs = append(lags, float64(k)+shift), append(logs, math.Log(ratio))
		places = append(places, float64(k)+shift)
	}
	if len(lags) < leastExtremes {
		return
	}
	slope, _ := line(lags, logs)
	index := make([]float64, len(places))
	for i := range index {
		index[i] = float64(i)
	}
	halfPeriod, _ := line(index, places)
	if !(halfPeriod > 0) || !(slope < 0) {
		return
	}
	damped := math.Pi / halfPeriod // rad per sample
	w := math.Hypot(damped, slope)
	p.Frequency = w / (2 * math.Pi) * d.Settings.Rate
	p.Damping = -slope / w
}

// line returns slope and intercept of the least-squares line.
func line(x, y []float64) (slope, intercept float64) {
	n := float64(len(x))
	var sx, sy, sxx, sxy float64
	for i, v := range x {
		sx += v
		sy += y[i]
		sxx += v * v
		sxy += v * y[i]
	}
	slope = (n*sxy - sx*sy) / (n*sxx - sx*sx)
	return slope, (sy - slope*sx) / n
}
