package match

import (
	"math"
	"slices"
)

// Peak is a peak of either side.
type Peak struct {
	Frequency float64 // Hz, above 0
	Error     float64 // standard error of the frequency, Hz; 0 if not known
	// Direction holds a non-negative amplitude per axis, not all zero. Peaks that are taken axis by axis have a 1 and zeros.
	Direction []float64
}

// Options say what counts as near. The zero value of each field means its default.
type Options struct {
	From, To  float64 // band in Hz that both peaks of a pair must lie in; To 0 means no upper end
	Tolerance float64 // τ, default 0.05
	Reach     float64 // largest |d| of a pair, default 0.2
	Turning   float64 // w, default 8: peaks at 45° then cost as much as 1.5 standard deviations of frequency
	Cut       float64 // default 9: three standard deviations
}

// The defaults of Options.
const (
	DefaultTolerance = 0.05
	DefaultReach     = 0.2
	DefaultTurning   = 8
	DefaultCut       = 9
)

// Pair is one predicted with one observed peak, by their indices.
type Pair struct {
	Predicted, Observed int
	Error               float64 // fp/fo - 1
	Cost                float64
	Confidence          float64 // 0 to 1, see the package comment
}

// Result holds the pairs by rising predicted frequency, and the indices of the peaks without a partner, rising. Peaks
// outside the band are in neither.
type Result struct {
	Pairs               []Pair
	Predicted, Observed []int
}

// Pairs pairs the peaks. It panics on directions of different lengths, a frequency that is not above 0, and a direction
// that is all zero.
func Pairs(predicted, observed []Peak, o Options) Result {
	o = o.filled()
	return pair(predicted, observed, o, func(i, j int) float64 { return o.cost(predicted[i], observed[j]) })
}

// pair makes the assignment of least total cost among the peaks within the band; of gives the cost of a pair.
func pair(predicted, observed []Peak, o Options, of func(i, j int) float64) Result {
	ps, os := o.within(predicted), o.within(observed)
	cost := make([]float64, 0, len(ps)*len(os))
	for _, i := range ps {
		for _, j := range os {
			cost = append(cost, of(i, j))
		}
	}
	var out Result
	taken := make([]bool, len(os))
	for r, c := range Assign(cost, len(ps), len(os), o.Cut) {
		if c < 0 {
			out.Predicted = append(out.Predicted, ps[r])
			continue
		}
		taken[c] = true
		out.Pairs = append(out.Pairs, Pair{
			Predicted: ps[r], Observed: os[c],
			Error:      predicted[ps[r]].Frequency/observed[os[c]].Frequency - 1,
			Cost:       cost[r*len(os)+c],
			Confidence: confidence(cost, len(ps), len(os), r, c, o.Cut),
		})
	}
	for c, j := range os {
		if !taken[c] {
			out.Observed = append(out.Observed, j)
		}
	}
	slices.SortStableFunc(out.Pairs, func(a, b Pair) int {
		switch fa, fb := predicted[a.Predicted].Frequency, predicted[b.Predicted].Frequency; {
		case fa < fb:
			return -1
		case fa > fb:
			return 1
		}
		return 0
	})
	return out
}

func (o Options) filled() Options {
	fill := func(v *float64, by float64) {
		if *v == 0 {
			*v = by
		}
	}
	fill(&o.Tolerance, DefaultTolerance)
	fill(&o.Reach, DefaultReach)
	fill(&o.Turning, DefaultTurning)
	fill(&o.Cut, DefaultCut)
	fill(&o.To, math.Inf(1))
	return o
}

func (o Options) within(peaks []Peak) []int {
	var out []int
	for i, p := range peaks {
		if !(p.Frequency > 0) {
			panic("match: a peak needs a frequency above zero")
		}
		if o.From <= p.Frequency && p.Frequency <= o.To {
			out = append(out, i)
		}
	}
	return out
}

func (o Options) cost(p, q Peak) float64 {
	d := math.Log(p.Frequency / q.Frequency)
	turn := cosine(p.Direction, q.Direction)
	if math.Abs(d) > o.Reach {
		return math.Inf(1)
	}
	up, uq := p.Error/p.Frequency, q.Error/q.Frequency
	return d*d/(o.Tolerance*o.Tolerance+up*up+uq*uq) + o.Turning*(1-turn)
}

// cosine of the angle between two directions.
func cosine(a, b []float64) float64 {
	if len(a) != len(b) {
		panic("match: directions of different lengths")
	}
	var ab, aa, bb float64
	for i := range a {
		ab += a[i] * b[i]
		aa += a[i] * a[i]
		bb += b[i] * b[i]
	}
	if !(aa > 0) || !(bb > 0) {
		panic("match: a direction is all zero")
	}
	return ab / math.Sqrt(aa*bb)
}

func confidence(cost []float64, rows, columns, row, column int, cut float64) float64 {
	sum := math.Exp(-cut / 2)
	for j := range columns {
		sum += math.Exp(-cost[row*columns+j] / 2)
	}
	for i := range rows {
		if i != row {
			sum += math.Exp(-cost[i*columns+column] / 2)
		}
	}
	return math.Exp(-cost[row*columns+column]/2) / sum
}
