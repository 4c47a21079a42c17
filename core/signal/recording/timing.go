package recording

import (
	"fmt"
	"math"
	"slices"
)

// Timing is what a time column says about a series.
type Timing struct {
	// Rate is one over the mean of the regular steps, those within half the median step of it. It resolves a rate that
	// is finer than the digits of the time column, which the median alone cannot.
	Rate float64 // Hz
	// Step is the median step in seconds.
	Step float64
	// Jitter is the root mean square of regular step over 1/Rate, less one; Widest is the largest such deviation.
	Jitter, Widest float64
	Gaps           []Gap
	Runs           []Run
	// Start and End are the times of the first and last sample, in seconds as given.
	Start, End float64
	Samples    int
}

// Gap is a hole between two neighbouring samples.
type Gap struct {
	After   int     // index of the last sample before it
	Length  float64 // seconds from that sample to the next
	Missing int     // samples that a regular series would have between them
}

// Run is a stretch of samples without a gap: First to End-1.
type Run struct{ First, End int }

// Len returns the number of samples of the run.
func (r Run) Len() int { return r.End - r.First }

// gapSteps is the length of a step, in median steps, above which samples are taken to be missing.
const gapSteps = 1.5

// Analyse reads a time column in seconds. Times must rise from sample to sample: it returns an *Error, whose Row is the
// index of the offending sample plus one, for a time that repeats, goes back, or is not a number, and for fewer than two
// samples.
func Analyse(time []float64) (Timing, error) {
	if len(time) < 2 {
		return Timing{}, &Error{Text: Count(len(time), "sample") + " do not make a series",
			Remedy: "a recording needs at least two rows with samples"}
	}
	if constant(time) {
		return Timing{}, &Error{Text: fmt.Sprintf("the time never changes: all %d rows say %g s", len(time), time[0]),
			Remedy: "name another time column, or leave it out and state the rate"}
	}
	sorted := make([]float64, len(time)-1)
	for i := range sorted {
		step := time[i+1] - time[i]
		sorted[i] = step
		if step > 0 && !math.IsInf(step, 0) {
			continue
		}
		e := &Error{Row: int64(i + 2), Remedy: "name another time column, or mend the recording: time must rise from row to row"}
		switch {
		case step == 0:
			e.Text = "the time of the row before repeats"
			e.Remedy = "name another time column; where the clock is coarser than the samples, state the rate, and the times are not used"
		case step < 0:
			e.Text = fmt.Sprintf("time goes back by %.6g s", -step)
		default:
			e.Text = "the time is not a number"
		}
		return Timing{}, e
	}
	slices.Sort(sorted)
	t := Timing{Step: sorted[len(sorted)/2], Start: time[0], End: time[len(time)-1], Samples: len(time)}

	sum, count := 0.0, 0
	for i := 1; i < len(time); i++ {
		if s := time[i] - time[i-1]; regular(s, t.Step) {
			sum += s
			count++
		}
	}
	mean := sum / float64(count)
	t.Rate = 1 / mean

	squares, first := 0.0, 0
	for i := range len(time) - 1 {
		s := time[i+1] - time[i]
		if regular(s, t.Step) {
			d := s/mean - 1
			squares += d * d
			t.Widest = max(t.Widest, math.Abs(d))
		}
		if s > gapSteps*t.Step {
			t.Gaps = append(t.Gaps, Gap{After: i, Length: s, Missing: max(1, int(math.Round(s/mean))-1)})
			t.Runs = append(t.Runs, Run{first, i + 1})
			first = i + 1
		}
	}
	t.Runs = append(t.Runs, Run{first, len(time)})
	t.Jitter = math.Sqrt(squares / float64(count))
	return t, nil
}

func regular(step, median float64) bool { return math.Abs(step-median) <= 0.5*median }

func constant(time []float64) bool {
	for _, v := range time[1:] {
		if v != time[0] {
			return false
		}
	}
	return true
}

// Steady returns the timing of n samples at a stated rate in Hz, the first at time 0. It panics unless rate > 0.
func Steady(n int, rate float64) Timing {
	if !(rate > 0) {
		panic("recording: rate must be above zero")
	}
	t := Timing{Rate: rate, Step: 1 / rate, Samples: n, End: float64(max(0, n-1)) / rate}
	if n > 0 {
		t.Runs = []Run{{0, n}}
	}
	return t
}
