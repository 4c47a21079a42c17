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
}

func (r row) seen() bool { return r.share >= seenShare }

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
	var v verdict
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
		r := row{m, t.share(i), partner[i]}
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

// counts sums a verdict up: true modes that are seen, of these found and right; told ones that are right; false ones; orders.
func (v verdict) counts() (seen, found, right, wrong int) {
	for _, r := range v.rows {
		if r.seen() {
			seen++
			if r.found != nil {
				found++
			}
		}
		if r.found != nil {
			if r.right() {
				right++
			} else {
				wrong++
			}
		}
	}
	return seen, found, right, wrong
}

// print writes the table of true and found modes.
func (v verdict) print(w io.Writer) {
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', tabwriter.AlignRight)
	fmt.Fprintln(t, "true, Hz\tdamping, %\troll\tpitch\tyaw\tshare, %\tfound, Hz\t±\toff, %\tdamping, %\t±\toff, %\tangle, deg\t\t")
	for _, r := range v.rows {
		fmt.Fprintf(t, "%.1f\t%.2f\t%.2f\t%.2f\t%.2f\t%.0f\t", r.Frequency, 100*r.Damping, r.Direction[0], r.Direction[1], r.Direction[2], 100*r.share)
		m := r.found
		if m == nil {
			fmt.Fprintln(t, "–\t\t\t\t\t\t\tmissed\t")
			continue
		}
		word := "right"
		if !r.right() {
			word = "off"
		}
		fmt.Fprintf(t, "%.1f\t%.2g\t%+.2f\t%.2f\t%.2f\t%+.0f\t%.0f\t%s\t\n", m.Frequency, m.FrequencyError, 100*(m.Frequency/r.Frequency-1),
			100*m.Damping, 100*m.DampingError, 100*(m.Damping/r.Damping-1), r.angle()*180/math.Pi, word)
	}
	t.Flush()
	for _, m := range v.unknown {
		fmt.Fprintf(w, "told as a mode, but none of the truth: %.1f Hz, damping %.2f %%, direction %.2f\n", m.Frequency, 100*m.Damping, m.Direction)
	}
	seen, found, right, wrong := v.counts()
	fmt.Fprintf(w, "%d true modes are seen, %d of them found; of the modes told %d are right, %d off, %d false, %d of these at a rotor order\n",
		seen, found, right, wrong, len(v.unknown), len(v.orders))
}
