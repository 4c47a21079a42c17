package filter

import (
	"math"
	"slices"
)

// Goal says what a chain is chosen for.
type Goal struct {
	Rate      float64     // Hz
	Speeds    [][]float64 // as in Train
	From, To  float64     // band whose residual counts, Hz
	Target    float64     // root mean square to be left on every axis
	Bandwidth float64     // Hz, at which lag counts
	// Orders may be followed, the most worth first; Centres may be notched, likewise, with the Q of each.
	Orders  []float64
	Centres []float64
	Q       []float64
	// FollowQ and Lowest are those of the notches that follow.
	FollowQ, Lowest float64
}

// Trial is a chain that was weighed.
type Trial struct {
	Train   Train
	Orders  int     // how many of Orders are followed
	Centres int     // how many of Centres are notched
	LowPass int     // order of the low-pass: 0 for none, 1 or 2
	Cutoff  float64 // Hz
	Lag     float64 // rad at the bandwidth
	Left    float64 // largest root mean square of an axis
	Met     bool
}

// Filters counts the filters of a trial.
func (t Trial) Filters() int { return len(t.Train.Filters) }

// worth is the share of the lag that a further filter must save to be taken; common practice: each one is more to run and to tune.
const worth = 0.2

// Choose weighs chains of notches that follow orders, fixed notches and one low-pass, whose cut-off is the highest that meets the
// target, and returns all of them by rising lag with the index of the one to take; -1 if none meets the target. That is the one of fewest
// filters and, among these, of least lag, unless each further filter saves a fifth of the lag. A cut-off is never put below the bandwidth.
func Choose(noises []Noise, g Goal) (trials []Trial, best int) {
	for orders := 0; orders <= len(g.Orders) && (orders == 0 || len(g.Speeds) > 0); orders++ {
		for centres := 0; centres <= len(g.Centres); centres++ {
			base := Train{Rate: g.Rate, Speeds: g.Speeds}
			for _, n := range g.Orders[:orders] {
				base.Filters = append(base.Filters, Filter{Follow: &Follower{Order: n, Q: g.FollowQ, Lowest: g.Lowest}})
			}
			for i, f := range g.Centres[:centres] {
				base.Filters = append(base.Filters, Filter{Fixed: Chain{Notch(f, g.Q[i], g.Rate)}})
			}
			// What the notches leave does not change with the cut-off.
			left := make([][]float64, len(noises))
			for i, n := range noises {
				left[i] = finite(base.Leaves(n))
			}
			for lowPass := range 3 {
				t := Trial{Train: base, Orders: orders, Centres: centres, LowPass: lowPass}
				g.lowPass(&t, noises, left)
				trials = append(trials, t)
			}
		}
	}
	slices.SortStableFunc(trials, func(a, b Trial) int {
		switch {
		case a.Lag < b.Lag:
			return -1
		case a.Lag > b.Lag:
			return 1
		}
		return 0
	})
	best = -1
	for filters := range len(g.Orders) + len(g.Centres) + 2 {
		least := slices.IndexFunc(trials, func(t Trial) bool { return t.Met && t.Filters() == filters })
		if least < 0 {
			continue
		}
		if best < 0 || trials[least].Lag < trials[best].Lag*(1-worth*float64(filters-trials[best].Filters())) {
			best = least
		}
	}
	return trials, best
}

// lowPass adds the low-pass to a trial, as high as the target allows, and weighs it; left are the densities that its notches leave.
func (g Goal) lowPass(t *Trial, noises []Noise, left [][]float64) {
	section := func(cutoff float64) Chain {
		switch t.LowPass {
		case 1:
			return Chain{FirstOrder(cutoff, g.Rate)}
		case 2:
			return Chain{LowPass(cutoff, math.Sqrt2/2, g.Rate)}
		}
		return nil
	}
	most := func(c Chain) float64 {
		out := 0.0
		for i, density := range left {
			out = max(out, c.Residual(density, noises[i].Step, g.From, g.To, g.Rate))
		}
		return out
	}
	if t.LowPass > 0 {
		low, high := math.Log(g.Bandwidth), math.Log(0.45*g.Rate)
		if most(section(math.Exp(high))) > g.Target {
			for range 24 {
				if mid := (low + high) / 2; most(section(math.Exp(mid))) > g.Target {
					high = mid
				} else {
					low = mid
				}
			}
			high = low
		}
		t.Cutoff = rounded(math.Exp(high), g.Bandwidth)
	}
	if c := section(t.Cutoff); c != nil {
		t.Train.Filters = append(slices.Clone(t.Train.Filters), Filter{Fixed: c})
	}
	t.Left = most(section(t.Cutoff))
	t.Lag = t.Train.Lag(g.Bandwidth)
	t.Met = t.Left <= g.Target
}

// rounded gives a frequency down to three digits, not below a bound.
func rounded(f, least float64) float64 {
	step := math.Pow(10, math.Floor(math.Log10(f))-2)
	return max(least, math.Floor(f/step)*step)
}

func finite(density []float64) []float64 {
	out := make([]float64, len(density))
	for k, v := range density {
		if !math.IsNaN(v) {
			out[k] = v
		}
	}
	return out
}
