package record

import (
	"math"

	"hushframe/core/signal/order"
	"hushframe/core/signal/recording"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// cross gives the cross spectra of all pairs of axes, over the segments that the densities come from.
func cross(axes gather.Series, runs []recording.Run, ws spectrum.Settings) ([]kinds.SpectraCross, error) {
	if len(axes.Values) < 2 {
		return nil, nil
	}
	all := make([][][]float64, len(runs))
	for r, run := range runs {
		for _, v := range axes.Values {
			all[r] = append(all[r], v[run.First:run.End])
		}
	}
	m, err := spectrum.CrossMatrix(all, ws)
	if err != nil {
		return nil, err
	}
	var out []kinds.SpectraCross
	for a := range m.Channels {
		for b := a + 1; b < m.Channels; b++ {
			x := kinds.SpectraCross{A: a, B: b, Real: make([]float64, len(m.Values)), Imaginary: make([]float64, len(m.Values)), Coherence: make([]float64, len(m.Values))}
			for k := range m.Values {
				v := m.At(k, b, a) // mean(B·conj(A))
				x.Real[k], x.Imaginary[k] = real(v), imag(v)
				if p := real(m.At(k, a, a)) * real(m.At(k, b, b)); p > 0 {
					x.Coherence[k] = min(1, (real(v)*real(v)+imag(v)*imag(v))/p)
				}
			}
			out = append(out, x)
		}
	}
	return out, nil
}

// setPoints gives the coherence of each recorded set-point with its axis. A set-point that is logged less often is taken as a
// line between its samples.
func setPoints(r *gather.Recording, axes gather.Series, runs []recording.Run, ws spectrum.Settings) ([]kinds.SpectraSetPoint, error) {
	var out []kinds.SpectraSetPoint
	for i, c := range r.Plan.SetPoints {
		s := r.Data.SetPoints[i]
		for a, axis := range r.Plan.Axes {
			if axis.Name != c.Name || s.Len() == 0 {
				continue
			}
			at := order.Follow(s.Time, s.Values[0], axes.Time)
			x, err := spectrum.CrossSpectrum(gather.Runs(at, runs), gather.Runs(axes.Values[a], runs), ws)
			if err != nil {
				return nil, err
			}
			out = append(out, kinds.SpectraSetPoint{Axis: a, Column: c.Shown(), Deviation: deviation(gather.Join(at, runs)), Coherence: x.Coherence()})
		}
	}
	return out, nil
}

func deviation(values []float64) float64 {
	mean, squares := 0.0, 0.0
	for _, v := range values {
		mean += v
	}
	mean /= float64(len(values))
	for _, v := range values {
		squares += (v - mean) * (v - mean)
	}
	return math.Sqrt(squares / float64(len(values)))
}

// pieces lists what was used and left out.
func pieces(r *gather.Recording) []kinds.SpectraPiece {
	var out []kinds.SpectraPiece
	for _, p := range r.Pieces {
		out = append(out, kinds.SpectraPiece{From: p.From, To: p.To, Samples: p.Samples, Level: p.Level, Used: p.Used, Why: p.Why})
	}
	return out
}
