package spectrum

import (
	"math"
	"math/cmplx"
)

// Matrix holds the averaged cross spectra of l channels: Values[k] is the l × l matrix of bin k, row by row, with
//
//	entry (a, b) = mean(X_a·conj(X_b))
//
// one-sided and scaled as the settings say. It is Hermitian; its diagonal is what Welch gives.
type Matrix struct {
	Average
	Channels int
	Values   [][]complex128
}

// At is the entry (a, b) of bin k.
func (m Matrix) At(k, a, b int) complex128 { return m.Values[k][a*m.Channels+b] }

// CrossMatrix averages all pairs of channels over the same segments; runs[r][c] are the samples of channel c in run r.
// Errors and panics as Welch; it also panics if the channels of a run differ in samples or the runs in channels.
func CrossMatrix(runs [][][]float64, s Settings) (Matrix, error) {
	s.check()
	first := make([][]float64, len(runs))
	for r, run := range runs {
		if len(run) == 0 || len(run) != len(runs[0]) {
			panic("spectrum: runs differ in channels")
		}
		first[r] = run[0]
		for _, c := range run {
			if len(c) != len(run[0]) {
				panic("spectrum: channels differ in samples")
			}
		}
	}
	average, err := survey(first, s)
	if err != nil {
		return Matrix{}, err
	}
	l, n := len(runs[0]), s.Bins()
	m := Matrix{Average: average, Channels: l, Values: make([][]complex128, n)}
	for k := range m.Values {
		m.Values[k] = make([]complex128, l*l)
	}
	t := newTransformer(s)
	bins := make([][]complex128, l)
	for c := range bins {
		bins[c] = make([]complex128, n)
	}
	for _, run := range runs {
		for i, at := 0, 0; i < s.Segments(len(run[0])); i, at = i+1, at+s.Segment-s.Overlap {
			for c := range bins {
				t.apply(bins[c], run[c][at:at+s.Segment])
			}
			for k, values := range m.Values {
				for a := range l {
					for b := range l {
						values[a*l+b] += bins[a][k] * cmplx.Conj(bins[b][k])
					}
				}
			}
		}
	}
	factor := complex(t.factor()/float64(average.Segments), 0)
	for k, values := range m.Values {
		by := factor
		if k == 0 || k == n-1 && s.Segment%2 == 0 {
			by /= 2
		}
		for i := range values {
			values[i] *= by
			if v := real(values[i]) + imag(values[i]); math.IsNaN(v) || math.IsInf(v, 0) {
				return Matrix{}, ErrNotFinite
			}
		}
	}
	return m, nil
}
