package gather

import (
	"errors"

	"hushframe/core/pipeline/fault"
	"hushframe/core/signal/recording"
)

// Window cuts the axes to the times asked for and checks their times. Errors are to be explained.
func (r *Recording) Window() (Series, recording.Timing, error) {
	axes := r.Data.Axes
	if w := r.set.Window; len(w) > 0 {
		first, last := axes.Time[0], axes.Time[len(axes.Time)-1]
		if first == last && len(axes.Time) > 1 {
			_, err := recording.Analyse(axes.Time) // the time never changes, and no window could tell
			return Series{}, recording.Timing{}, r.placed(err, axes)
		}
		axes = axes.Cut(w[0], w[1])
		if len(axes.Time) < 2 {
			return Series{}, recording.Timing{}, fault.New(fault.Input, "the window of %g s to %g s holds %d samples; the recording runs from %.6g s to %.6g s",
				w[0], w[1], len(axes.Time), first, last).Of("window").Do("choose a window within the recording")
		}
	}
	timing, err := r.analyse(axes)
	return axes, timing, err
}

func (r *Recording) analyse(s Series) (recording.Timing, error) {
	if n := len(s.Row); r.Data.Rate > 0 && s.Row[n-1]-s.Row[0] == int64(n-1) {
		t := recording.Steady(len(s.Time), r.Data.Rate)
		t.Start, t.End = s.Time[0], s.Time[len(s.Time)-1]
		return t, nil
	}
	t, err := recording.Analyse(s.Time)
	return t, r.placed(err, s)
}

// placed gives an error of a series the row and column of the recording.
func (r *Recording) placed(err error, s Series) error {
	var e *recording.Error
	if !errors.As(err, &e) {
		return err
	}
	out := *e
	if out.Row > 0 {
		out.Row = s.Row[out.Row-1]
	}
	out.Column = r.Plan.Time
	return &out
}

// Runs cuts the values of one channel at the gaps.
func Runs(values []float64, runs []recording.Run) [][]float64 {
	var out [][]float64
	for _, r := range runs {
		out = append(out, values[r.First:r.End])
	}
	return out
}
