package gather

import (
	"errors"
	"fmt"
	"math"
	"runtime/debug"

	"hushframe/core/pipeline/fault"
	"hushframe/core/signal/recording"
)

// Piece is a stretch of a recording with the samples of the axes in it.
type Piece struct {
	recording.Piece
	Samples int
	Used    bool
}

// Window chooses the times that are used, as the job says or by the steady pieces of the flight, and checks them. It gives the
// axes from the first of them to the last, and a timing whose runs are the samples used. Errors are to be explained.
func (r *Recording) Window() (Series, recording.Timing, error) {
	axes := r.Data.Axes
	n := axes.Len()
	stretches := []recording.Run{{First: 0, End: n}}
	switch {
	case len(r.set.Window) > 0:
		first, last := axes.Time[0], axes.Time[n-1]
		if first == last && n > 1 {
			_, err := recording.Analyse(axes.Time) // the time never changes, and no window could tell
			return Series{}, recording.Timing{}, r.placed(err, axes)
		}
		stretches = nil
		r.ChosenBy = "window"
		for i := 0; i < len(r.set.Window); i += 2 {
			from, to := r.set.Window[i], r.set.Window[i+1]
			s := within(axes.Time, from, to)
			if s.Len() < 2 {
				return Series{}, recording.Timing{}, fault.New(fault.Input, "the window of %g s to %g s holds %d samples; the recording runs from %.6g s to %.6g s",
					from, to, s.Len(), first, last).Of("window").Do("choose a window within the recording")
			}
			stretches = append(stretches, s)
			r.Pieces = append(r.Pieces, Piece{Piece: recording.Piece{From: axes.Time[s.First], To: axes.Time[s.End-1], Level: math.NaN(), Why: "window"}, Samples: s.Len(), Used: true})
		}
	case n > 1 && !r.set.Force:
		if found := r.steady(axes); len(found) > 0 {
			stretches = found
		}
	}
	if len(r.Pieces) == 0 && n > 0 {
		r.Pieces = []Piece{{Piece: recording.Piece{From: axes.Time[0], To: axes.Time[n-1], Level: math.NaN(), Why: "all"}, Samples: n, Used: true}}
	}
	from := stretches[0].First
	axes = axes.part(from, stretches[len(stretches)-1].End)
	for i := range stretches {
		stretches[i].First -= from
		stretches[i].End -= from
	}
	timing, err := r.analyse(axes)
	if err != nil {
		return axes, timing, err
	}
	if axes.Len() == n {
		whole := timing
		r.whole = &whole
	}
	if len(stretches) > 1 {
		timing = timing.Within(stretches)
	}
	return axes, timing, nil
}

// Whole gives the axes of the whole recording, whatever is used of it.
func (r *Recording) Whole() (Series, recording.Timing, error) {
	if r.whole != nil {
		return r.Data.Axes, *r.whole, nil
	}
	timing, err := r.analyse(r.Data.Axes)
	return r.Data.Axes, timing, err
}

// UsedValues copies the values of the first channel of a series within the pieces that are used: all, or, where the series is longer
// than most, every second, third and so on.
func (r *Recording) UsedValues(s Series, most int) []float64 {
	stride := 1 + (s.Len()-1)/most
	var out []float64
	for _, p := range r.Pieces {
		if !p.Used {
			continue
		}
		w := within(s.Time, p.From, p.To)
		for i := w.First; i < w.End; i += stride {
			out = append(out, s.Values[0][i])
		}
	}
	return out
}

// Frugal makes the runtime collect garbage before it weighs much beside the samples of a long recording. The function it returns puts
// that back.
func (r *Recording) Frugal() func() {
	const litter = 96 << 20 // bytes
	kept := 0
	for _, s := range r.Data.all() {
		kept += 8 * s.Len() * (len(s.Values) + 1)
	}
	if kept < 2*litter {
		return func() {}
	}
	before := debug.SetGCPercent(max(5, 100*litter/kept))
	return func() { debug.SetGCPercent(before) }
}

// steady finds the steady pieces by rotor speed or throttle; nil, with a note, where there are none.
func (r *Recording) steady(axes Series) []recording.Run {
	var time, level [][]float64
	by := "rotor speed"
	for _, s := range r.Data.Rotors {
		time, level = append(time, s.Time), append(level, s.Values[0])
	}
	if len(time) == 0 && r.Data.Throttle != nil {
		by = "throttle"
		time, level = [][]float64{r.Data.Throttle.Time}, [][]float64{r.Data.Throttle.Values[0]}
	}
	note := func(format string, args ...any) { r.Plan.Notes = append(r.Plan.Notes, fmt.Sprintf(format, args...)) }
	if len(time) == 0 {
		note("neither rotor speed nor throttle is recorded, so all of the recording is used, ground time as well; give a window")
		return nil
	}
	settings := recording.PieceSettings{}
	if by == "throttle" {
		settings.Airborne, settings.Tolerance = 0.5, 0.1 // a throttle of half the usual one may hover with a fuller battery
	}
	var out []recording.Run
	var pieces []Piece
	used := 0.0
	for _, p := range recording.Pieces(time, level, axes.Time[0], axes.Time[axes.Len()-1], settings) {
		s := within(axes.Time, p.From, p.To)
		piece := Piece{Piece: p, Samples: s.Len(), Used: p.Why == recording.PieceSteady && s.Len() > 1}
		pieces = append(pieces, piece)
		if !piece.Used {
			continue
		}
		used += p.To - p.From
		if last := len(out) - 1; last >= 0 && out[last].End >= s.First {
			s.First = out[last].End // a sample on the border of two pieces counts once
		}
		out = append(out, s)
	}
	if len(out) == 0 {
		note("no stretch is steady by %s, so all of the recording is used; give a window", by)
		return nil
	}
	r.ChosenBy, r.Pieces = by, pieces
	if whole := axes.Time[axes.Len()-1] - axes.Time[0]; used < 0.999*whole {
		note("no window is given: %.4g s of %.4g s are used, in %s steady by %s", used, whole, count(len(out), "piece"), by)
	}
	return out
}

func count(n int, what string) string {
	if n == 1 {
		return "one " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// within gives the samples from the first at or after from to the last at or before to; times outside need not rise.
func within(time []float64, from, to float64) recording.Run {
	out := recording.Run{}
	first := true
	for i, t := range time {
		if t >= from && t <= to {
			if first {
				out.First, first = i, false
			}
			out.End = i + 1
		}
	}
	return out
}

func (r *Recording) analyse(s Series) (recording.Timing, error) {
	if clock := r.Plan.Axes[0].Clock; clock == "" && r.Data.Rate > 0 && s.unbroken() {
		t := recording.Steady(s.Len(), r.Data.Rate)
		t.Start, t.End = s.Time[0], s.Time[s.Len()-1]
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
		out.Row = s.RowAt(int(out.Row - 1))
	}
	out.Column = r.Plan.Time
	if clock := r.Plan.Axes[0].Clock; clock != "" {
		out.Column = clock
	}
	return &out
}
