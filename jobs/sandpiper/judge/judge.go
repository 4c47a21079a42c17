package main

import (
	"context"
	"fmt"
	"io"
	"math"
	"os"
	"text/tabwriter"

	"hushframe/core/match"
	"hushframe/jobs/inprocess"
	"hushframe/stages/kinds"
)

// What counts as right: frequency within 1 %, damping within 30 %, direction within 15°. Apart is the frequency error in standard
// deviations of 1 % beyond which a found mode belongs to no true one.
const (
	rightFrequency = 0.01
	rightDamping   = 0.3
	rightAngle     = 15 * math.Pi / 180
	apart          = 3
	within         = 2 // of its own errors, with which a mode that is off has said so
)

// identify finds the modes of a recording with judge.hcl.
func identify(ctx context.Context, job, recording string) (*kinds.Identified, error) {
	store, err := os.MkdirTemp("", "judge")
	if err != nil {
		return nil, err
	}
	defer os.RemoveAll(store)
	done, err := inprocess.Run(ctx, job, store, map[string]string{"recording": recording})
	if err != nil {
		return nil, err
	}
	a, err := done.Artifact("inflight", "identified")
	if err != nil {
		return nil, err
	}
	return kinds.DecodeIdentified(a)
}

// row is a true mode with the one found for it.
type row struct {
	trueMode
	share float64
	found *kinds.IdentifiedMode // nil if it was missed
	// bestFrequency and bestDamping are the least relative errors that the recording allows; not a number if they are not told.
	bestFrequency, bestDamping float64
}

func (r row) seen() bool { return r.share >= seenShare }

// knowable tells whether the recording allows to know the mode to within the limits.
func (r row) knowable() bool {
	return !(r.bestFrequency > rightFrequency) && !(r.bestDamping > rightDamping)
}

// needs tells how many times as long a recording would have to be at least to know the mode to within the limits.
func (r row) needs() float64 {
	return math.Pow(max(r.bestFrequency/rightFrequency, r.bestDamping/rightDamping), 2)
}

// said tells whether what was found is within twice its own errors.
func (r row) said() bool {
	m := r.found
	return math.Abs(m.Frequency-r.Frequency) <= within*m.FrequencyError && math.Abs(m.Damping-r.Damping) <= within*m.DampingError && r.angle() <= max(rightAngle, within*m.DirectionError)
}

// right tells whether what was found is within the limits.
func (r row) right() bool {
	return r.found != nil && math.Abs(r.found.Frequency/r.Frequency-1) <= rightFrequency &&
		math.Abs(r.found.Damping/r.Damping-1) <= rightDamping && r.angle() <= rightAngle
}

func (r row) angle() float64 {
	return math.Acos(math.Min(1, math.Sqrt(match.Agreement(r.Direction[:], r.found.Direction))))
}

// verdict is what was found against the truth.
type verdict struct {
	seconds float64                // that were recorded
	rows    []row                  // true modes within the band that are seen, or found
	unknown []kinds.IdentifiedMode // told as structure, but none of the truth
	orders  []kinds.IdentifiedMode // those of them that lie where a rotor order is
}

// judge pairs each mode told as structure with one true mode, by frequency and direction.
func judge(t *truth, x *kinds.Identified) verdict {
	var found []kinds.IdentifiedMode
	for _, m := range x.Modes {
		if m.Kind == kinds.ModeStructure {
			found = append(found, m)
		}
	}
	cost := make([]float64, 0, len(found)*len(t.Modes))
	for _, m := range found {
		for i, want := range t.Modes {
			off := math.Log(m.Frequency/want.Frequency) / rightFrequency
			if math.Abs(off) > apart || match.Agreement(m.Direction, want.Direction[:]) < 0.5 {
				cost = append(cost, math.Inf(1))
				continue
			}
			// Of two true modes as near, the stronger one was found.
			cost = append(cost, off*off-2*math.Log(t.share(i)))
		}
	}
	partner := make([]*kinds.IdentifiedMode, len(t.Modes))
	v := verdict{seconds: x.End - x.Start}
	for k, i := range match.Assign(cost, len(found), len(t.Modes), 1e6) {
		if i >= 0 {
			partner[i] = &found[k]
			continue
		}
		v.unknown = append(v.unknown, found[k])
		if t.order(found[k].Frequency, x.Rate) {
			v.orders = append(v.orders, found[k])
		}
	}
	for i, m := range t.Modes {
		r := row{trueMode: m, share: t.share(i), found: partner[i]}
		r.bestFrequency, r.bestDamping = t.best(m, x.End-x.Start)
		if partner[i] != nil || r.seen() && m.Frequency >= x.From && m.Frequency <= x.To {
			v.rows = append(v.rows, r)
		}
	}
	return v
}

// order tells whether one of the orders 1, 2, 3 and 6 of a rotor, whose speed wanders by some 4 %, may appear at a frequency.
func (t *truth) order(f, rate float64) bool {
	for _, r := range t.Rotors {
		for _, n := range []float64{1, 2, 3, 6} {
			at := n * r.Speed / 60
			if math.Abs(math.Abs(at-rate*math.Round(at/rate))-f) < 0.04*at {
				return true
			}
		}
	}
	return false
}

// tally sums a verdict up.
type tally struct {
	seen, knowable       int // true modes that are seen, and those of them that the recording allows to know
	found, knowableFound int // of these
	right, off, said     int // told ones that are right, that are off, and those of the latter that are within twice their own errors
}

func (v verdict) tally() tally {
	var n tally
	one := func(count *int, is bool) {
		if is {
			*count++
		}
	}
	for _, r := range v.rows {
		hit := r.found != nil
		one(&n.seen, r.seen())
		one(&n.knowable, r.seen() && r.knowable())
		one(&n.found, r.seen() && hit)
		one(&n.knowableFound, r.seen() && hit && r.knowable())
		one(&n.right, hit && r.right())
		one(&n.off, hit && !r.right())
		one(&n.said, hit && !r.right() && r.said())
	}
	return n
}

// scores are the root mean squares of what was found less the truth, over the claimed errors, of frequency and damping, and the share within 2.
func (v verdict) scores() (frequency, damping, inside float64) {
	count := 0.0
	for _, r := range v.rows {
		if r.found == nil {
			continue
		}
		count++
		for _, z := range []struct {
			sum         *float64
			off, claims float64
		}{{&frequency, r.found.Frequency - r.Frequency, r.found.FrequencyError}, {&damping, r.found.Damping - r.Damping, r.found.DampingError}} {
			*z.sum += math.Pow(z.off/z.claims, 2)
			if math.Abs(z.off) <= within*z.claims {
				inside += 0.5
			}
		}
	}
	return math.Sqrt(frequency / count), math.Sqrt(damping / count), inside / count
}

// add puts the findings of another flight to these.
func (v *verdict) add(other verdict) {
	v.rows, v.unknown, v.orders = append(v.rows, other.rows...), append(v.unknown, other.unknown...), append(v.orders, other.orders...)
}

// print writes the table of true and found modes.
func (v verdict) print(w io.Writer) {
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', tabwriter.AlignRight)
	fmt.Fprintln(t, "true, Hz\tdamping, %\troll\tpitch\tyaw\tshare, %\tat best, %\tdamping, %\tfound, Hz\t±\toff, %\tdamping, %\t±\toff, %\tangle, deg\t\t")
	for _, r := range v.rows {
		fmt.Fprintf(t, "%.1f\t%.2f\t%.2f\t%.2f\t%.2f\t%.0f\t%s\t%s\t", r.Frequency, 100*r.Damping, r.Direction[0], r.Direction[1], r.Direction[2], 100*r.share,
			percent("±%.2f", r.bestFrequency), percent("±%.0f", r.bestDamping))
		m := r.found
		if m == nil {
			word := "missed"
			if !r.knowable() {
				word = fmt.Sprintf("not knowable in less than %.0f s", v.seconds*r.needs())
			}
			fmt.Fprintf(t, "–\t\t\t\t\t\t\t%s\t\n", word)
			continue
		}
		word := "right"
		switch {
		case !r.right() && r.said():
			word = "off, and says so"
		case !r.right():
			word = "off"
		}
		fmt.Fprintf(t, "%.1f\t%.2g\t%+.2f\t%.2f\t%.2f\t%+.0f\t%.0f\t%s\t\n", m.Frequency, m.FrequencyError, 100*(m.Frequency/r.Frequency-1),
			100*m.Damping, 100*m.DampingError, 100*(m.Damping/r.Damping-1), r.angle()*180/math.Pi, word)
	}
	t.Flush()
	for _, m := range v.unknown {
		fmt.Fprintf(w, "told as a mode, but none of the truth: %.1f Hz, damping %.2f %%, direction %.2f\n", m.Frequency, 100*m.Damping, m.Direction)
	}
	v.sum(w)
}

// sum writes the counts.
func (v verdict) sum(w io.Writer) {
	n := v.tally()
	fmt.Fprintf(w, "%d true modes are seen, %d of them found; %d can be known from this recording to %.0f %% and %.0f %% of damping, %d of them found\n",
		n.seen, n.found, n.knowable, 100*rightFrequency, 100*rightDamping, n.knowableFound)
	fmt.Fprintf(w, "of the modes told %d are right, %d off (%d of them by less than twice their own errors), %d false, %d of these at a rotor order\n", n.right, n.off, n.said,
		len(v.unknown), len(v.orders))
	if n.right+n.off > 0 {
		frequency, damping, inside := v.scores()
		fmt.Fprintf(w, "over the claimed errors, frequency is off by %.2f and damping by %.2f (root mean square; %.0f %% within 2)\n", frequency, damping, 100*inside)
	}
}

// percent writes a relative number.
func percent(format string, v float64) string {
	if math.IsNaN(v) {
		return "–"
	}
	return fmt.Sprintf(format, 100*v)
}
