package gather

import (
	"context"
	"fmt"
	"io"
	"math"
	"runtime/debug"
	"slices"

	"hushframe/core/extension"
	"hushframe/core/signal/recording"
)

// Data is what a recording holds for a plan.
type Data struct {
	Axes Series
	// Apart are the axes of a second sensor, with rows of their own; ApartPartial is as Partial, ApartRows as Rows.
	Apart        Series
	ApartPartial int
	ApartRows    int64
	Rotors       []Series // one per rotor, each with its own rows
	// Throttle and SetPoints are those of the plan, each with its own rows.
	Throttle  *Series
	SetPoints []Series
	Rows      int64
	// Partial counts rows that have a sample of some axes but not of all.
	Partial  int
	Rate     float64 // stated rate; 0 if times are measured
	Start    float64 // first time of the recording, s
	Epoch    bool    // times count from an epoch, and the window from the first row
	Notes    []string
	Assumed  []string            // as in the plan
	Findings []recording.Finding // what was wrong with rows, and left out
}

// epochAfter is the time, in seconds, after which a time column is taken to count from an epoch: three years.
const epochAfter = 1e8

// raw is what one pass over the recording gives: columns as they stand, with NaN where a row has no sample.
type raw struct {
	values map[string][]float64
	uses   map[string]int
	time   []float64 // nil without a time column
	rows   int
	origin float64 // first time, in units of its column
	free   int64   // columns turned into slices since the last collection, bytes
}

// source gives the recording from its beginning, once per clock.
type source func() (io.Reader, error)

// samples reads the channels of the plan and leaves out rows without a sample. It settles the unit of time.
func samples(ctx context.Context, reader extension.Reader, open source, p *Plan, set Settings, h recording.Header) (*Data, error) {
	d := &Data{}
	if p.Time == "" && !h.Timed {
		d.Rate = set.Rate
		if d.Rate == 0 {
			d.Rate = h.Rate
		}
	}
	axes := p.Axes
	if p.Force != nil {
		axes = append(slices.Clone(axes), *p.Force)
	}
	channels := slices.Concat(axes, p.Rotors, p.SetPoints)
	if p.Throttle != nil {
		channels = append(channels, *p.Throttle)
	}
	var clocks []string
	for _, c := range channels {
		if !slices.Contains(clocks, c.Clock) {
			clocks = append(clocks, c.Clock)
		}
	}
	passes := map[string]*raw{}
	for i, clock := range clocks {
		r, err := d.pass(ctx, reader, open, clock, channels, *p, set, i == 0)
		if err != nil {
			return nil, err
		}
		passes[clock] = r
	}
	axesClock := p.Axes[0].Clock
	d.Rows = int64(passes[axesClock].rows)
	if set.Apart {
		if p.part(passes); len(p.Apart) > 0 {
			axes = p.Axes
		}
	}
	var err error
	if d.Axes, err = d.series(passes, axes, &d.Partial); err != nil {
		return nil, err
	}
	if len(p.Apart) > 0 {
		d.ApartRows = int64(passes[p.Apart[0].Clock].rows)
		if d.Apart, err = d.series(passes, p.Apart, &d.ApartPartial); err != nil {
			return nil, err
		}
	}
	for _, c := range p.Rotors {
		s, err := d.series(passes, []Channel{c}, nil)
		if err != nil {
			return nil, err
		}
		d.Rotors = append(d.Rotors, s)
	}
	for _, c := range p.SetPoints {
		s, err := d.series(passes, []Channel{c}, nil)
		if err != nil {
			return nil, err
		}
		d.SetPoints = append(d.SetPoints, s)
	}
	if p.Throttle != nil {
		s, err := d.series(passes, []Channel{*p.Throttle}, nil)
		if err != nil {
			return nil, err
		}
		d.Throttle = &s
		d.scaleThrottle(*p.Throttle)
	}
	if d.Axes.Len() == 0 && len(d.Findings) > 0 && d.Findings[len(d.Findings)-1].What == "no time" {
		return nil, &recording.Error{Column: p.Time, Text: fmt.Sprintf("no row of %d with samples has a time", d.Rows), Remedy: "name another time column, or state the rate"}
	}
	if d.Axes.Len() == 0 {
		return nil, &recording.Error{Column: p.Axes[0].Column, Text: fmt.Sprintf("no row of %d holds a sample of every axis", d.Rows),
			Remedy: "name columns that are filled in the same rows, and describe a sensor with rows of its own in another step"}
	}
	if err := d.scale(*p, passes, axesClock, set); err != nil {
		return nil, err
	}
	d.mend(*p)
	if len(set.Mounting) == 3 {
		d.Axes.turn(p.Axes, set.Mounting)
		d.Apart.turn(p.Apart, set.Mounting)
	}
	return d, nil
}

// pass reads all channels of one clock.
func (d *Data) pass(ctx context.Context, reader extension.Reader, open source, clock string, channels []Channel, p Plan, set Settings, first bool) (*raw, error) {
	in, err := open()
	if err != nil {
		return nil, err
	}
	r := &raw{values: map[string][]float64{}, uses: map[string]int{}}
	request := recording.Request{Time: p.Time, TimeUnit: 1}
	if clock != "" {
		request.Time = clock
	}
	for _, c := range channels {
		if c.Clock != clock {
			continue
		}
		if r.uses[c.Column]++; r.uses[c.Column] == 1 {
			request.Columns = append(request.Columns, c.Column)
		}
	}
	columns := make([]column, len(request.Columns))
	var times column
	timed := false
	err = reader.Read(ctx, in, set.Options, request, func(b recording.Batch) error {
		times.add(b.Time)
		timed = timed || b.Time != nil
		for k, v := range b.Values {
			columns[k].add(v)
		}
		r.origin = b.Origin
		r.rows += b.Rows()
		if first {
			d.Notes = append(d.Notes, b.Notes...)
			d.Findings = append(d.Findings, b.Findings...)
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	for k, name := range request.Columns {
		r.values[name] = columns[k].take()
		r.tidy()
	}
	if timed {
		r.time = times.take()
		r.tidy()
	}
	return r, nil
}

// tidy returns the memory of columns that have become slices, where it is much. Chunks of all columns lie between each other, so that
// what is free has to go back to the system before another whole column is laid out.
func (r *raw) tidy() {
	const much = 64 << 20
	if r.free += 8 * int64(r.rows); r.free > much {
		debug.FreeOSMemory()
		r.free = 0
	}
}

// series picks the rows that hold a sample of every channel. Columns that serve one channel are taken over, not copied.
func (d *Data) series(passes map[string]*raw, channels []Channel, partial *int) (Series, error) {
	r := passes[channels[0].Clock]
	s := Series{Time: r.time, first: 1}
	for _, c := range channels {
		v := r.values[c.Column]
		if r.uses[c.Column] > 1 {
			v = slices.Clone(v)
		}
		s.Values = append(s.Values, v)
	}
	held := func(i int) (n int) {
		for _, v := range s.Values {
			if !math.IsNaN(v[i]) {
				n++
			}
		}
		return n
	}
	untimed := func(i int) bool { return r.time != nil && math.IsNaN(r.time[i]) }
	if partial != nil {
		lost, first := 0, 0
		for i := range r.rows {
			n := held(i)
			if n > 0 && n < len(s.Values) {
				*partial++
			}
			if n > 0 && untimed(i) {
				if lost++; lost == 1 {
					first = i + 1
				}
			}
		}
		if lost > 0 {
			d.Findings = append(d.Findings, recording.Finding{What: "no time", Extent: fmt.Sprintf("%d rows without a time were left out, the first is row %d", lost, first),
				Consequence: "each makes a gap"})
		}
	}
	s.keep(func(i int) bool { return held(i) == len(s.Values) && !untimed(i) })
	for k, c := range channels {
		if c.Factor != 1 {
			for i := range s.Values[k] {
				s.Values[k][i] *= c.Factor
			}
		}
	}
	return s, nil
}

// scaleThrottle settles the unit of the throttle, where it is not stated, and brings it to 0 to 1.
func (d *Data) scaleThrottle(c Channel) {
	values := d.Throttle.Values[0]
	largest := 0.0
	for _, v := range values {
		largest = max(largest, math.Abs(v))
	}
	unit := c.Unit
	if unit == "" {
		var ok bool
		if unit, ok = guessThrottle(largest); !ok {
			d.Notes = append(d.Notes, fmt.Sprintf("the throttle in column %q states no unit and reaches %.4g; it is taken as a share of that", c.Column, largest))
			for i := range values {
				values[i] /= largest
			}
			return
		}
		d.Notes = append(d.Notes, fmt.Sprintf("the throttle in column %q states no unit and reaches %.4g; it is taken in %s", c.Column, largest,
			map[string]string{"1": "shares of one", "%": "per cent", "us": "pulses of 1000 to 2000 µs"}[unit]))
		if unit == "%" {
			for i := range values {
				values[i] /= 100
			}
		}
	}
	if unit == "us" {
		for i := range values {
			values[i] = pulses(values[i])
		}
	}
}

// all lists every series.
func (d *Data) all() []*Series {
	out := []*Series{&d.Axes}
	for i := range d.Rotors {
		out = append(out, &d.Rotors[i])
	}
	for i := range d.SetPoints {
		out = append(out, &d.SetPoints[i])
	}
	if d.Throttle != nil {
		out = append(out, d.Throttle)
	}
	if d.Apart.Values != nil {
		out = append(out, &d.Apart)
	}
	return out
}

// scale brings times to seconds on the time column of the axes.
func (d *Data) scale(p Plan, passes map[string]*raw, axesClock string, set Settings) error {
	clockOf := func(i int) string { // of the series that all lists at that place
		channels := slices.Concat([]Channel{p.Axes[0]}, p.Rotors, p.SetPoints)
		if p.Throttle != nil {
			channels = append(channels, *p.Throttle)
		}
		return append(channels, p.Apart...)[i].Clock // one series for all that is apart, the last
	}
	if passes[""] != nil && d.Rate > 0 {
		time := make([]float64, passes[""].rows)
		for i := range time {
			// Rows of a table without times are samples; those that lack a sample of some channels are left out of these.
			time[i] = float64(i) / d.Rate
		}
		for i, s := range d.all() {
			if clockOf(i) != "" {
				continue
			}
			if s.rows == nil {
				s.Time = time
				continue
			}
			s.Time = make([]float64, s.Len())
			for k, row := range s.rows {
				s.Time[k] = time[row-1]
			}
		}
	}
	second, err := d.second(p, set, axesClock, d.Axes.Time)
	if err != nil {
		return err
	}
	d.Start = passes[axesClock].origin * second
	d.Epoch = math.Abs(d.Start) > epochAfter
	done := map[*float64]bool{} // series may share their times
	for i, s := range d.all() {
		clock := clockOf(i)
		if clock == "" && d.Rate > 0 || len(s.Time) == 0 || done[&s.Time[0]] {
			continue
		}
		done[&s.Time[0]] = true
		by, shift := second, d.Start
		if clock != axesClock {
			if by, err = d.second(p, set, clock, s.Time); err != nil {
				return err
			}
			shift = passes[clock].origin * by
		}
		if d.Epoch {
			shift -= d.Start
		}
		for k := range s.Time {
			s.Time[k] = s.Time[k]*by + shift
		}
	}
	return nil
}

// second is the value of one unit of a clock in seconds: as stated, else by the usual step.
func (d *Data) second(p Plan, set Settings, clock string, time []float64) (float64, error) {
	name, unit, second := p.Time, p.TimeUnit, p.Second
	if clock != "" {
		name = clock
		unit = p.ClockUnits[clock]
		if unit != "" {
			return factor(unit, "time", clock)
		}
	}
	if name == "" || unit != "" {
		return second, nil
	}
	step := medianStep(time)
	guessed, seconds, ok := guessTimeUnit(step)
	switch {
	case ok:
		d.Assumed = append(d.Assumed, fmt.Sprintf("column %q states no unit and is taken in %s, which makes the rate %.4g Hz", name, guessed, 1/(step*seconds)))
		return seconds, nil
	case step > 0:
		return 0, &recording.Error{Column: name, Text: fmt.Sprintf("the unit of time is not stated, and a usual step of %g fits none", step),
			Remedy: fmt.Sprintf(`state it in units, such as { %q = "ms" }`, name)}
	}
	return second, nil
}

// medianStep is the median of the steps that rise, 0 if none does. Of a long recording, the beginning is enough.
func medianStep(time []float64) float64 {
	const enough = 100000
	var steps []float64
	for i := 1; i < min(len(time), enough); i++ {
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

// mend leaves out rows whose times do not rise, where they are few.
func (d *Data) mend(p Plan) {
	for i, s := range d.all() {
		dropped, first := s.mend()
		if dropped > 0 && i == 0 {
			d.Findings = append(d.Findings, recording.Finding{What: "times", Where: p.Time,
				Extent:      fmt.Sprintf("the times of %s repeat or go back, the first in row %d; they were left out", recording.Count(dropped, "row"), first),
				Consequence: "each may make a gap; many would mean another clock"})
		}
	}
}

// turn brings the axes of a turned sensor to those of the airframe: x, y, z = Rz·Ry·Rx of what the sensor measures.
func (s *Series) turn(channels []Channel, angles []float64) {
	var r [3][3]float64
	sa, ca := math.Sincos(angles[0])
	sb, cb := math.Sincos(angles[1])
	sc, cc := math.Sincos(angles[2])
	r[0] = [3]float64{cc * cb, cc*sb*sa - sc*ca, cc*sb*ca + sc*sa}
	r[1] = [3]float64{sc * cb, sc*sb*sa + cc*ca, sc*sb*ca - cc*sa}
	r[2] = [3]float64{-sb, cb * sa, cb * ca}
	for at := 0; at+2 < len(channels); at += 3 { // mounted has made sure of whole sensors
		x, y, z := s.Values[at], s.Values[at+1], s.Values[at+2]
		for i := range x {
			v := [3]float64{x[i], y[i], z[i]}
			x[i] = r[0][0]*v[0] + r[0][1]*v[1] + r[0][2]*v[2]
			y[i] = r[1][0]*v[0] + r[1][1]*v[1] + r[1][2]*v[2]
			z[i] = r[2][0]*v[0] + r[2][1]*v[1] + r[2][2]*v[2]
		}
	}
}
