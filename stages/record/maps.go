package record

import (
	"math"
	"slices"

	"hushframe/core/signal/recording"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// The cells of a map.
const (
	mapSpan      = 0.5 // seconds of a segment, about
	mostTimes    = 160 // cells over time
	mostLevels   = 24  // cells over throttle or rotor speed
	leastMapSize = 64  // samples of the shortest segment worth a row
)

// maps gives the spectra against time, throttle and rotor speed. They take in all of the recording between gaps, also what the
// averages leave out, unless the job gives a window.
func maps(r *gather.Recording, axes gather.Series, timing recording.Timing, set settings) ([]kinds.SpectraMapRow, error) {
	if r.ChosenBy != "window" {
		var err error
		if axes, timing, err = r.Whole(); err != nil {
			return nil, err
		}
	}
	ws := spectrum.Settings{Rate: timing.Rate, Window: set.taper, Detrend: set.detrend, Segment: leastMapSize}
	for float64(ws.Segment) < mapSpan*timing.Rate {
		ws.Segment *= 2
	}
	ws.Overlap = ws.Segment / 2
	var out []kinds.SpectraMapRow
	levels := steering(r)
	for i := range r.Plan.Axes {
		runs := gather.Runs(axes.Values[i], timing.Runs)
		for _, against := range []string{kinds.MapTime, kinds.MapThrottle, kinds.MapRotorSpeed} {
			level, ok := levels[against]
			if !ok {
				continue
			}
			rows, err := cells(runs, timing.Runs, axes.Time, level, ws, against)
			if err != nil {
				return nil, nil // too short for a map: the averages say so if they are, too
			}
			for _, row := range rows {
				row.Axis, row.Against, row.Unit = i, against, level.unit
				out = append(out, row)
			}
		}
	}
	return out, nil
}

// level gives the mean of what a map lies against between two times.
type level struct {
	unit string
	mean func(from, to float64) float64
}

// steering gives the levels that are recorded.
func steering(r *gather.Recording) map[string]level {
	out := map[string]level{kinds.MapTime: {"s", func(from, to float64) float64 { return (from + to) / 2 }}}
	if t := r.Data.Throttle; t != nil && t.Len() > 0 {
		out[kinds.MapThrottle] = level{"1", func(from, to float64) float64 { return meanBetween(t.Time, t.Values[0], from, to) }}
	}
	var turning []gather.Series
	for _, s := range r.Data.Rotors {
		if s.Len() > 0 {
			turning = append(turning, s)
		}
	}
	if len(turning) > 0 {
		out[kinds.MapRotorSpeed] = level{"rad/s", func(from, to float64) float64 {
			sum := 0.0
			for _, s := range turning {
				sum += math.Abs(meanBetween(s.Time, s.Values[0], from, to))
			}
			return sum / float64(len(turning))
		}}
	}
	return out
}

// meanBetween is the mean of the samples from one time to another; where there is none, the sample before, or else the first.
func meanBetween(time, values []float64, from, to float64) float64 {
	first, _ := slices.BinarySearch(time, from)
	sum, count := 0.0, 0.0
	for i := first; i < len(time) && time[i] <= to; i++ {
		sum, count = sum+values[i], count+1
	}
	if count == 0 {
		return values[max(0, first-1)]
	}
	return sum / count
}

// cells averages the segments whose mean level falls into the same cell. Cells without a segment are left out.
func cells(runs [][]float64, places []recording.Run, time []float64, by level, s spectrum.Settings, against string) ([]kinds.SpectraMapRow, error) {
	var centres []float64
	for r, run := range runs {
		for i := range s.Segments(len(run)) {
			from := places[r].First + i*(s.Segment-s.Overlap)
			centres = append(centres, by.mean(time[from], time[from+s.Segment-1]))
		}
	}
	if len(centres) == 0 {
		return nil, &spectrum.ShortError{Segment: s.Segment}
	}
	low, high := slices.Min(centres), slices.Max(centres)
	n := mostTimes
	if against != kinds.MapTime {
		n = mostLevels
	}
	n = min(n, len(centres))
	if !(high > low) {
		n = 1
	}
	width := (high - low) / float64(n)
	rows := make([]kinds.SpectraMapRow, n)
	for k := range rows {
		rows[k] = kinds.SpectraMapRow{Low: low + float64(k)*width, High: low + float64(k+1)*width, Step: s.Step()}
	}
	at := 0
	err := spectrum.Slices(runs, s, func(_, _ int, values []float64) {
		k := 0
		if width > 0 {
			k = min(n-1, int((centres[at]-low)/width))
		}
		row := &rows[k]
		if row.Density == nil {
			row.Density = make([]float64, len(values))
		}
		for b, v := range values {
			row.Density[b] += v
		}
		row.Centre += centres[at]
		row.Segments++
		at++
	})
	if err != nil {
		return nil, err
	}
	var out []kinds.SpectraMapRow
	for _, row := range rows {
		if row.Segments == 0 {
			continue
		}
		row.Centre /= float64(row.Segments)
		for b := range row.Density {
			row.Density[b] /= float64(row.Segments)
		}
		out = append(out, row)
	}
	return out, nil
}
