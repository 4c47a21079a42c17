package transfer

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"slices"

	"hushframe/core/pipeline/fault"
	"hushframe/core/signal/impact"
	"hushframe/core/signal/peaks"
	"hushframe/core/signal/recording"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

const (
	longestSegment = 2.0  // seconds, where the job says none
	shortestBins   = 64   // samples of the shortest segment worth a transform
	remains        = 0.01 // what the exponential window leaves at the end of a segment
	peaky          = 8    // greatest force over its root mean square, from which a force has strikes; a sine has 1.4, noise 4 to 5
	faded          = 0.01 // density of the force over its greatest, below which nothing is excited: 20 dB
	lowBins        = 5    // bins from 0 Hz without peaks, where the job says none
)

// measure computes what the artifact holds.
func measure(r *gather.Recording, axes gather.Series, timing recording.Timing, set settings) (*kinds.Transfer, error) {
	n := len(r.Plan.Axes)
	force := axes.Values[n]
	x := &kinds.Transfer{Rate: timing.Rate, Method: set.method, ForceColumn: r.Plan.Force.Shown()}
	if x.Method == auto {
		x.Method = steady
		if crest(gather.Join(force, timing.Runs)) > peaky {
			x.Method = strikes
		}
	}
	var f [][]float64
	responses := make([][][]float64, n)
	ws := spectrum.Settings{Rate: timing.Rate}
	if x.Method == strikes {
		hits, err := strike(x, axes, timing, set)
		if err != nil {
			return nil, err
		}
		ws.Segment, ws.Window, ws.Detrend = x.Segment, spectrum.Boxcar, spectrum.DetrendNone
		is := impact.Settings{Rate: timing.Rate, Segment: x.Segment}
		for _, h := range hits {
			run := timing.Runs[h.run]
			for k := range responses {
				pulse, response := h.Cut(force[run.First:run.End], axes.Values[k][run.First:run.End], x.Decay, is)
				if k == 0 {
					f = append(f, pulse)
				}
				responses[k] = append(responses[k], response)
			}
		}
	} else {
		f = gather.Runs(force, timing.Runs)
		for k := range responses {
			responses[k] = gather.Runs(axes.Values[k], timing.Runs)
		}
		seconds := set.segment
		if seconds == 0 {
			seconds = longestSegment
		}
		ws.Segment = max(shortestBins, int(math.Round(seconds*timing.Rate)))
		if longest := slices.MaxFunc(timing.Runs, func(a, b recording.Run) int { return a.Len() - b.Len() }).Len(); set.segment == 0 {
			ws.Segment = max(shortestBins, min(ws.Segment, longest/8))
		}
		ws.Segment -= ws.Segment % 2
		ws.Overlap = ws.Segment / 2
		x.Segment = ws.Segment
	}
	x.Step = ws.Step()
	for k, c := range r.Plan.Axes {
		cross, err := spectrum.CrossSpectrum(f, responses[k], ws)
		if err != nil {
			return nil, short(err, timing, set)
		}
		x.Averages, x.Force = cross.Segments, cross.XX
		x.Responses = append(x.Responses, kinds.TransferResponse{
			Axis: c.Name, Quantity: c.Of, Unit: map[string]string{gather.AngularRate: "rad/s/N", gather.Acceleration: "m/s2/N"}[c.Of], Column: c.Shown(),
			H1: finite(cross.H1()), H2: finite(cross.H2()), Coherence: cross.Coherence(),
		})
	}
	x.ExcitedTo = excitedTo(x.Force, x.Step)
	peak(x, set)
	return x, nil
}

func short(err error, timing recording.Timing, set settings) error {
	var e *spectrum.ShortError
	if errors.As(err, &e) && set.segment > 0 {
		return fault.New(fault.Input, "the longest stretch without a gap has %.3g s, a segment needs %.3g s", float64(e.Longest)/timing.Rate, set.segment).
			In("", "").Of("segment").Do("choose a shorter segment")
	}
	return &recording.Error{Text: err.Error(), Remedy: "give a longer recording"}
}

// crest is the greatest deviation from the median over the root mean square deviation.
func crest(v []float64) float64 {
	base := median(v)
	greatest, square := 0.0, 0.0
	for _, a := range v {
		greatest = max(greatest, math.Abs(a-base))
		square += (a - base) * (a - base)
	}
	if square == 0 {
		return 0
	}
	return greatest / math.Sqrt(square/float64(len(v)))
}

// hit is a strike with the run it is in.
type hit struct {
	impact.Strike
	run int
}

// strike finds the strikes and the length of their segments, and gives those that are used.
func strike(x *kinds.Transfer, axes gather.Series, timing recording.Timing, set settings) ([]hit, error) {
	force := axes.Values[len(axes.Values)-1]
	is := impact.Settings{Rate: timing.Rate, Segment: int(math.Round(set.segment * timing.Rate)), Level: set.level, Overload: set.overload}
	if set.segment == 0 {
		is.Segment = apart(force, timing, is)
	}
	is.Segment -= is.Segment % 2
	if is.Segment < shortestBins {
		return nil, fault.New(fault.Input, "a segment of %d samples is too short for a transform", is.Segment).In("", "").Of("segment").
			Do("choose at least %.2g s", shortestBins/timing.Rate)
	}
	x.Segment = is.Segment
	x.Decay = set.decay
	if !set.decayGiven {
		x.Decay = float64(is.Segment) / timing.Rate / math.Log(1/remains)
	}
	var used []hit
	reasons := map[string]int{}
	for r, run := range timing.Runs {
		for _, k := range impact.Find(force[run.First:run.End], is) {
			x.Strikes = append(x.Strikes, kinds.TransferStrike{Time: axes.Time[run.First+k.Peak], Force: k.Force, Length: float64(k.End-k.Begin) / timing.Rate,
				Used: k.Why == impact.Used, Why: k.Why})
			if k.Why == impact.Used {
				used = append(used, hit{k, r})
			}
			reasons[k.Why]++
		}
	}
	if len(used) == 0 {
		text := "the force has no strike"
		if len(x.Strikes) > 0 {
			text = fmt.Sprintf("none of %d strikes can be used:", len(x.Strikes))
			for _, why := range []string{impact.Double, impact.Long, impact.Overloaded, impact.NoRoom, impact.Early} {
				if reasons[why] > 0 {
					text += fmt.Sprintf(" %d %s,", reasons[why], why)
				}
			}
			text = text[:len(text)-1]
		}
		return nil, &recording.Error{Column: x.ForceColumn, Text: text, Remedy: `strike once and wait until all is still; choose a shorter segment; or state method = "steady" for another force`}
	}
	return used, nil
}

// apart is the length of a segment that fits between strikes: nine tenths of the least time between two that follow each other by more
// than a tenth of a second, and to the end of a run. Two seconds at most.
func apart(force []float64, timing recording.Timing, is impact.Settings) int {
	const rebound = 0.1 // seconds
	is.Segment = max(16, int(rebound*timing.Rate))
	least := longestSegment * timing.Rate
	for _, run := range timing.Runs {
		all := impact.Find(force[run.First:run.End], is)
		for i, k := range all {
			next := run.Len()
			if i+1 < len(all) {
				next = all[i+1].Begin
			}
			if gap := float64(next - k.Begin); gap > rebound*timing.Rate {
				least = min(least, 0.9*gap)
			}
		}
	}
	return int(least)
}

// finite puts 0 where there is no power to divide by.
func finite(h []complex128) []complex128 {
	for k, v := range h {
		if cmplx.IsNaN(v) || cmplx.IsInf(v) {
			h[k] = 0
		}
	}
	return h
}

// excitedTo is the frequency of the last bin at which the force has a hundredth of its greatest density.
func excitedTo(density []float64, step float64) float64 {
	greatest := slices.Max(density[1:])
	last := 0
	for k, v := range density {
		if v >= faded*greatest {
			last = k
		}
	}
	return float64(last) * step
}

// peak lists the peaks of |H1|².
func peak(x *kinds.Transfer, set settings) {
	from, to := set.from, set.to
	if from == 0 {
		from = lowBins * x.Step
	}
	if to == 0 {
		to = x.ExcitedTo
	}
	for i, r := range x.Responses {
		power := make([]float64, len(r.H1))
		for k, v := range r.H1 {
			power[k] = real(v)*real(v) + imag(v)*imag(v)
		}
		for _, p := range peaks.Find(power, x.Step, peaks.Settings{From: from, To: to, Prominence: math.Pow(10, set.prominenceInDB/10)}) {
			if x.Method == steady && r.Coherence[p.Bin] < leastCoherence {
				continue // between the lines of a steady force there is nothing but noise over noise
			}
			x.Peaks = append(x.Peaks, kinds.TransferPeak{Response: i, Frequency: p.Frequency, Damping: impact.Damping(p.Damping, p.Frequency, x.Decay),
				Magnitude: math.Sqrt(p.Value), Coherence: r.Coherence[p.Bin]})
		}
	}
}

// leastCoherence is that of a peak under a steady force; common practice.
const leastCoherence = 0.5

func median(v []float64) float64 {
	sorted := slices.Clone(v)
	slices.Sort(sorted)
	return sorted[len(sorted)/2]
}
