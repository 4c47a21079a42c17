package record

import (
	"context"
	"fmt"
	"io"
	"math"
	"slices"

	"hushframe/core/signal/recording"
)

// series are the samples of channels that share their rows.
type series struct {
	time   []float64   // seconds on the time column; from 0 at the stated rate without one
	row    []int64     // number of the row, from 1
	values [][]float64 // by channel, in SI
}

// data is what a recording holds for a plan.
type data struct {
	axes   series
	rotors []series // one per rotor, each with its own rows
	rows   int64
	// partial counts rows that have a sample of some axes but not of all.
	partial int
	rate    float64 // stated rate; 0 if times are measured
	start   float64 // first time of the recording, s
	epoch   bool    // times count from an epoch, and the window from the first row
	notes   []string
	assumed []string // as in plan
}

// epochAfter is the time, in seconds, after which a time column is taken to count from an epoch: three years.
const epochAfter = 1e8

// gather reads the channels of the plan and leaves out rows without a sample. It settles the unit of time.
func gather(ctx context.Context, reader recording.Reader, source io.Reader, p plan, set settings, h recording.Header) (*data, error) {
	d := &data{}
	channels := append(slices.Clone(p.axes), p.rotors...)
	request := recording.Request{Time: p.time, TimeUnit: 1, Options: set.options}
	place := map[string]int{} // a column may serve two channels
	at := make([]int, len(channels))
	for i, c := range channels {
		k, ok := place[c.column]
		if !ok {
			k = len(request.Columns)
			place[c.column] = k
			request.Columns = append(request.Columns, c.column)
		}
		at[i] = k
	}
	columns := make([][]float64, len(request.Columns))
	var times []float64
	origin := 0.0
	err := reader.Read(ctx, source, request, func(b recording.Batch) error {
		times = append(times, b.Time...)
		for k, v := range b.Values {
			columns[k] = append(columns[k], v...)
		}
		origin = b.Origin
		d.rows += int64(b.Rows())
		d.notes = append(d.notes, b.Notes...)
		return nil
	})
	if err != nil {
		return nil, err
	}
	if p.time == "" && !h.Timed {
		d.rate = set.rate
		if d.rate == 0 {
			d.rate = h.Rate
		}
	}
	pick := func(from, to int) series {
		var s series
		var sources [][]float64
		for _, k := range at[from:to] {
			sources = append(sources, columns[k])
		}
		d.fill(&s, channels[from:to], sources, times)
		return s
	}
	d.axes = pick(0, len(p.axes))
	for i := range p.rotors {
		d.rotors = append(d.rotors, pick(len(p.axes)+i, len(p.axes)+i+1))
	}
	if len(d.axes.row) == 0 {
		return nil, &recording.Error{Column: p.axes[0].column, Text: fmt.Sprintf("no row of %d holds a sample of every axis", d.rows),
			Remedy: "name columns that are filled in the same rows"}
	}
	return d, d.scale(p, origin)
}

// fill copies the rows that hold a sample of every source.
func (d *data) fill(s *series, channels []channel, sources [][]float64, times []float64) {
	n := len(sources[0])
	s.values = make([][]float64, len(sources))
	for i := range s.values {
		s.values[i] = make([]float64, 0, n)
	}
	s.row, s.time = make([]int64, 0, n), make([]float64, 0, n)
	for r := range n {
		held := 0
		for _, source := range sources {
			if !math.IsNaN(source[r]) {
				held++
			}
		}
		if held < len(sources) {
			if held > 0 {
				d.partial++
			}
			continue
		}
		for i, source := range sources {
			s.values[i] = append(s.values[i], source[r]*channels[i].factor)
		}
		s.row = append(s.row, int64(r+1))
		if times != nil {
			s.time = append(s.time, times[r])
		}
	}
}

// scale brings times to seconds on the time column.
func (d *data) scale(p plan, origin float64) error {
	all := append([]*series{&d.axes}, pointers(d.rotors)...)
	if d.rate > 0 {
		for _, s := range all {
			for i := range s.row {
				// Rows of a table without times are samples; those that lack a sample of these channels are left out.
				s.time = append(s.time, float64(s.row[i]-1)/d.rate)
			}
		}
		return nil
	}
	second := p.second
	if p.time != "" && p.timeUnit == "" {
		step := medianStep(d.axes.time)
		unit, seconds, ok := guessTimeUnit(step)
		switch {
		case ok:
			second = seconds
			d.assumed = append(d.assumed, fmt.Sprintf("column %q states no unit and is taken in %s, which makes the rate %.4g Hz", p.time, unit, 1/(step*seconds)))
		case step > 0:
			return &recording.Error{Column: p.time, Text: fmt.Sprintf("the unit of time is not stated, and a usual step of %g fits none", step),
				Remedy: fmt.Sprintf(`state it in units, such as { %q = "ms" }`, p.time)}
		}
	}
	d.start = origin * second
	d.epoch = math.Abs(d.start) > epochAfter
	shift := d.start
	if d.epoch {
		shift = 0
	}
	for _, s := range all {
		for i := range s.time {
			s.time[i] = s.time[i]*second + shift
		}
	}
	return nil
}

func pointers(all []series) []*series {
	var out []*series
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

// cut keeps the samples within from to to seconds, both included.
func (s series) cut(from, to float64) series {
	out := series{values: make([][]float64, len(s.values))}
	for i, t := range s.time {
		if t < from || t > to {
			continue
		}
		out.time, out.row = append(out.time, t), append(out.row, s.row[i])
		for k := range s.values {
			out.values[k] = append(out.values[k], s.values[k][i])
		}
	}
	return out
}
