package gather

import (
	"context"
	"fmt"
	"io"
	"math"
	"slices"

	"hushframe/core/extension"
	"hushframe/core/signal/recording"
)

// Series are the samples of channels that share their rows.
type Series struct {
	Time   []float64   // seconds on the time column; from 0 at the stated rate without one
	Row    []int64     // number of the row, from 1
	Values [][]float64 // by channel, in SI
}

// Data is what a recording holds for a plan.
type Data struct {
	Axes   Series
	Rotors []Series // one per rotor, each with its own rows
	Rows   int64
	// Partial counts rows that have a sample of some axes but not of all.
	Partial int
	Rate    float64 // stated rate; 0 if times are measured
	Start   float64 // first time of the recording, s
	Epoch   bool    // times count from an epoch, and the window from the first row
	Notes   []string
	Assumed []string // as in the plan
}

// epochAfter is the time, in seconds, after which a time column is taken to count from an epoch: three years.
const epochAfter = 1e8

// samples reads the channels of the plan and leaves out rows without a sample. It settles the unit of time.
func samples(ctx context.Context, reader extension.Reader, source io.Reader, p Plan, set Settings, h recording.Header) (*Data, error) {
	d := &Data{}
	channels := append(slices.Clone(p.Axes), p.Rotors...)
	request := recording.Request{Time: p.Time, TimeUnit: 1}
	place := map[string]int{} // a column may serve two channels
	at := make([]int, len(channels))
	for i, c := range channels {
		k, ok := place[c.Column]
		if !ok {
			k = len(request.Columns)
			place[c.Column] = k
			request.Columns = append(request.Columns, c.Column)
		}
		at[i] = k
	}
	columns := make([][]float64, len(request.Columns))
	var times []float64
	origin := 0.0
	err := reader.Read(ctx, source, set.Options, request, func(b recording.Batch) error {
		times = append(times, b.Time...)
		for k, v := range b.Values {
			columns[k] = append(columns[k], v...)
		}
		origin = b.Origin
		d.Rows += int64(b.Rows())
		d.Notes = append(d.Notes, b.Notes...)
		return nil
	})
	if err != nil {
		return nil, err
	}
	if p.Time == "" && !h.Timed {
		d.Rate = set.Rate
		if d.Rate == 0 {
			d.Rate = h.Rate
		}
	}
	pick := func(from, to int) Series {
		var s Series
		var sources [][]float64
		for _, k := range at[from:to] {
			sources = append(sources, columns[k])
		}
		d.fill(&s, channels[from:to], sources, times)
		return s
	}
	d.Axes = pick(0, len(p.Axes))
	for i := range p.Rotors {
		d.Rotors = append(d.Rotors, pick(len(p.Axes)+i, len(p.Axes)+i+1))
	}
	if len(d.Axes.Row) == 0 {
		return nil, &recording.Error{Column: p.Axes[0].Column, Text: fmt.Sprintf("no row of %d holds a sample of every axis", d.Rows),
			Remedy: "name columns that are filled in the same rows"}
	}
	return d, d.scale(p, origin)
}

// fill copies the rows that hold a sample of every source.
func (d *Data) fill(s *Series, channels []Channel, sources [][]float64, times []float64) {
	n := len(sources[0])
	s.Values = make([][]float64, len(sources))
	for i := range s.Values {
		s.Values[i] = make([]float64, 0, n)
	}
	s.Row, s.Time = make([]int64, 0, n), make([]float64, 0, n)
	for r := range n {
		held := 0
		for _, source := range sources {
			if !math.IsNaN(source[r]) {
				held++
			}
		}
		if held < len(sources) {
			if held > 0 {
				d.Partial++
			}
			continue
		}
		for i, source := range sources {
			s.Values[i] = append(s.Values[i], source[r]*channels[i].Factor)
		}
		s.Row = append(s.Row, int64(r+1))
		if times != nil {
			s.Time = append(s.Time, times[r])
		}
	}
}

// scale brings times to seconds on the time column.
func (d *Data) scale(p Plan, origin float64) error {
	all := append([]*Series{&d.Axes}, pointers(d.Rotors)...)
	if d.Rate > 0 {
		for _, s := range all {
			for i := range s.Row {
				// Rows of a table without times are samples; those that lack a sample of these channels are left out.
				s.Time = append(s.Time, float64(s.Row[i]-1)/d.Rate)
			}
		}
		return nil
	}
	second := p.Second
	if p.Time != "" && p.TimeUnit == "" {
		step := medianStep(d.Axes.Time)
		unit, seconds, ok := guessTimeUnit(step)
		switch {
		case ok:
			second = seconds
			d.Assumed = append(d.Assumed, fmt.Sprintf("column %q states no unit and is taken in %s, which makes the rate %.4g Hz", p.Time, unit, 1/(step*seconds)))
		case step > 0:
			return &recording.Error{Column: p.Time, Text: fmt.Sprintf("the unit of time is not stated, and a usual step of %g fits none", step),
				Remedy: fmt.Sprintf(`state it in units, such as { %q = "ms" }`, p.Time)}
		}
	}
	d.Start = origin * second
	d.Epoch = math.Abs(d.Start) > epochAfter
	shift := d.Start
	if d.Epoch {
		shift = 0
	}
	for _, s := range all {
		for i := range s.Time {
			s.Time[i] = s.Time[i]*second + shift
		}
	}
	return nil
}

func pointers(all []Series) []*Series {
	var out []*Series
	for i := range all {
		out = append(out, &all[i])
	}
	return out
}

// medianStep is the median of the steps that rise, 0 if none does.
func medianStep(time []float64) float64 {
	var steps []float64
	for i := 1; i < len(time); i++ {
		if s := time[i] - time[i-1]; s > 0 {
			steps = append(steps, s)
		}
	}
	if len(steps) == 0 {
		return 0
	}
	slices.Sort(steps)
	return steps[len(steps)/2]
}

// Cut keeps the samples within from to to seconds, both included.
func (s Series) Cut(from, to float64) Series {
	out := Series{Values: make([][]float64, len(s.Values))}
	for i, t := range s.Time {
		if t < from || t > to {
			continue
		}
		out.Time, out.Row = append(out.Time, t), append(out.Row, s.Row[i])
		for k := range s.Values {
			out.Values[k] = append(out.Values[k], s.Values[k][i])
		}
	}
	return out
}
