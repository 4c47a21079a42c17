package record

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"hushframe/core/pipeline/fault"
	"hushframe/core/signal/order"
	"hushframe/core/signal/peaks"
	"hushframe/core/signal/recording"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// found is the description of a recording.
type found struct {
	spectra *kinds.Spectra
	timing  recording.Timing
	axes    gather.Series // the samples used
	unused  int           // samples per axis in no segment
}

const (
	leastAverages = 32   // segments wanted where the width of a bin is free
	finestBin     = 0.5  // Hz, where it is free
	leastSegment  = 1024 // samples, where the recording has them
	shortest      = 16   // samples of the shortest segment worth a spectrum
)

// describe computes everything the artifact holds.
func describe(r *gather.Recording, set settings, threads int) (*found, error) {
	axes, timing, err := r.Window()
	if err != nil {
		return nil, err
	}
	r.FindRotors(axes, timing, nil, 0, threads) // bands of orders need no angle
	f := &found{timing: timing, axes: axes}
	ws, err := segments(timing, set)
	if err != nil {
		return nil, err
	}
	s := &kinds.Spectra{
		Rate: timing.Rate, Step: ws.Step(), Window: ws.Window.String(), Segment: ws.Segment, Overlap: ws.Overlap,
		Resolution: ws.Window.NoiseBandwidth(ws.Segment) * ws.Step(), Level: set.level,
		From: timing.Start, To: timing.End, Samples: timing.Samples, Gaps: len(timing.Gaps), Jitter: timing.Jitter,
	}
	f.spectra = s
	for _, g := range timing.Gaps {
		s.Missing += g.Missing
	}
	from, to := set.from, set.to
	if from == 0 {
		from = 10 * s.Step
	}
	if to == 0 {
		to = 0.4 * s.Rate
	}
	for i, c := range r.Plan.Axes {
		power, err := spectrum.Welch(gather.Runs(axes.Values[i], timing.Runs), ws)
		if err != nil {
			return nil, refuse(err, timing, set)
		}
		s.Segments, s.Freedom, f.unused = power.Segments, power.Freedom, power.Unused
		s.Lower, s.Upper = power.Bounds(set.level)
		s.Axes = append(s.Axes, axisOf(c, gather.Join(axes.Values[i], timing.Runs), power.Values))
		if s.Axes[i].Deviation == 0 {
			clear(power.Values) // of a constant, all is rounding
			continue
		}
		for _, peak := range peaks.Find(power.Values, power.Step, peaks.Settings{
			From: from, To: to, Prominence: set.prominence, Freedom: power.Freedom,
			Resolution: s.Resolution, BinCorrelation: ws.Window.BinCorrelation(ws.Segment),
		}) {
			s.Peaks = append(s.Peaks, kinds.SpectraPeak{
				Axis: i, Frequency: peak.Frequency, FrequencyError: peak.FrequencyError, Density: peak.Value,
				Prominence: peak.Prominence, OverFloor: peak.OverFloor, Lower: peak.Lower, Upper: peak.Upper,
				Damping: peak.Damping, DampingError: peak.DampingError, Narrow: peak.Narrow,
			})
		}
	}
	rotors(s, r, set)
	s.ChosenBy, s.Pieces, s.CoherenceLimit = r.ChosenBy, pieces(r), spectrum.CoherenceLimit(s.Freedom, set.level)
	if s.Cross, err = cross(axes, timing.Runs, ws); err != nil {
		return nil, refuse(err, timing, set)
	}
	if s.SetPoints, err = setPoints(r, axes, timing.Runs, ws); err != nil {
		return nil, refuse(err, timing, set)
	}
	if s.Maps, err = maps(r, axes, timing, set); err != nil {
		return nil, err
	}
	s.Findings = findings(f, r)
	return f, nil
}

// segments chooses the length of a segment: as the job says, or the power of two that makes bins just below half a
// hertz, halved until there are enough averages; where there never are, the one with most of them.
func segments(t recording.Timing, set settings) (spectrum.Settings, error) {
	s := spectrum.Settings{Rate: t.Rate, Window: set.taper, Detrend: set.detrend}
	count := func(n int) int {
		s.Segment, s.Overlap = n, int(math.Round(set.overlap*float64(n)))
		s.Overlap = min(s.Overlap, n-1)
		total := 0
		for _, r := range t.Runs {
			total += s.Segments(r.Len())
		}
		return total
	}
	if set.resolution > 0 {
		n := int(math.Round(t.Rate / set.resolution))
		if n < shortest {
			return s, fault.New(fault.Input, "bins of %g Hz are too wide for a rate of %.5g Hz", set.resolution, t.Rate).In("", "").Of("resolution").
				Do("choose at most %.3g Hz", t.Rate/shortest)
		}
		count(n)
		return s, nil
	}
	n := shortest
	for limit := max(t.Rate/finestBin, leastSegment); float64(n) < limit; {
		n *= 2
	}
	best, most := n, 0
	for ; n >= shortest; n /= 2 {
		k := count(n)
		if k >= leastAverages {
			return s, nil
		}
		if k > most {
			best, most = n, k
		}
		if k > 0 && n <= 256 {
			break
		}
	}
	count(best)
	return s, nil
}

func refuse(err error, t recording.Timing, set settings) error {
	var short *spectrum.ShortError
	if !errors.As(err, &short) {
		return &recording.Error{Text: err.Error(), Remedy: "remove such samples"}
	}
	text := fmt.Sprintf("the longest stretch without a gap has %d samples (%.3g s), a segment needs %d", short.Longest,
		float64(short.Longest)/t.Rate, short.Segment)
	if set.resolution > 0 {
		return fault.New(fault.Input, "%s", text).In("", "").Of("resolution").Do("choose at least %.3g Hz, or a longer window", t.Rate/float64(short.Longest))
	}
	return &recording.Error{Text: text, Remedy: "give a longer recording or window, or one with fewer gaps"}
}

func axisOf(c gather.Channel, values, density []float64) kinds.SpectraAxis {
	q := recording.Inspect(values)
	mean, spread := 0.0, deviation(values)
	for _, v := range values {
		mean += v
	}
	mean /= float64(len(values))
	if q.Min == q.Max {
		mean, spread = q.Min, 0 // without the rounding of sums
	}
	return kinds.SpectraAxis{
		Axis: c.Name, Quantity: c.Of, Unit: gather.UnitOfSI[c.Of], Column: c.Shown(), Mean: mean, Deviation: spread,
		Largest: max(math.Abs(q.Min), math.Abs(q.Max)), Saturated: q.Saturated, Repeated: q.Repeated, Density: density,
	}
}

// mostSpeeds is the number of speeds of a rotor that its bands are made from; of more, some are passed over evenly.
const mostSpeeds = 1 << 19

// rotors adds the speeds of the rotors and the bands of their orders, within the times of the spectra.
func rotors(s *kinds.Spectra, r *gather.Recording, set settings) {
	var turning []order.Rotor
	for i, c := range r.Plan.Rotors {
		speeds := r.UsedValues(r.Data.Rotors[i], mostSpeeds)
		sorted := slices.Clone(speeds)
		slices.Sort(sorted)
		x := kinds.SpectraRotor{Rotor: c.Name, Column: c.Column, Blades: set.blades, Median: math.NaN(), Low: math.NaN(), High: math.NaN()}
		if n := len(sorted); n > 0 {
			x.Median, x.Low, x.High = sorted[n/2], sorted[n/100], sorted[n-1-n/100]
		}
		s.Rotors = append(s.Rotors, x)
		for k := range speeds {
			speeds[k] = math.Abs(speeds[k]) / (2 * math.Pi)
		}
		turning = append(turning, order.Rotor{Name: c.Name, Speed: speeds, Blades: set.blades})
	}
	orders := slices.Clone(set.orders)
	if orders == nil {
		orders = []float64{}
	}
	for _, b := range order.Bands(turning, order.Settings{Orders: orders, Rate: s.Rate, Step: s.Step, Margin: s.Resolution}) {
		s.Orders = append(s.Orders, kinds.OrderBand{
			Rotor: b.Rotor, Order: b.Order, BladePassing: b.BladePassing, Low: b.Low, High: b.High, Share: b.Share, Folded: b.Folded,
		})
	}
}
