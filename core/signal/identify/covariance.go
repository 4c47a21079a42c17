package identify

import (
	"math"
	"sync"
)

// Record is what is analysed: Runs[r][c] are the samples of channel c in run r, a stretch without a gap. All channels of
// a run have the same length. Values must be finite.
type Record struct {
	Rate float64 // samples per second
	Runs [][][]float64
}

func (r Record) channels() int {
	if len(r.Runs) == 0 {
		return 0
	}
	return len(r.Runs[0])
}

// samples counts the samples of one channel in all runs.
func (r Record) samples() int {
	n := 0
	for _, run := range r.Runs {
		n += len(run[0])
	}
	return n
}

func (r Record) check() {
	if !(r.Rate > 0) {
		panic("identify: sample rate must be above zero")
	}
	for _, run := range r.Runs {
		if len(run) == 0 || len(run) != r.channels() {
			panic("identify: runs differ in channels")
		}
		for _, c := range run {
			if len(c) != len(run[0]) {
				panic("identify: channels differ in samples")
			}
		}
	}
}

// Covariance holds the sums behind R_k per group of time.
type Covariance struct {
	Rate     float64
	Channels int
	Lags     int           // R_0 to R_Lags
	Sums     [][][]float64 // [group][lag][l·l] sums of y[j+k]·y[j]ᵀ, row by row
	Counts   [][]float64   // [group][lag] pairs
}

// Covariances sums products up to a lag over groups of equal time, by the sample j that comes first. Means are taken as
// they are. It panics on an ill-formed record, negative lags and fewer than one group.
func Covariances(r Record, lags, groups, threads int) *Covariance {
	r.check()
	if lags < 0 || groups < 1 {
		panic("identify: lags and groups must be positive")
	}
	l, total := r.channels(), r.samples()
	c := &Covariance{Rate: r.Rate, Channels: l, Lags: lags}
	for range groups {
		sums := make([][]float64, lags+1)
		for k := range sums {
			sums[k] = make([]float64, l*l)
		}
		c.Sums, c.Counts = append(c.Sums, sums), append(c.Counts, make([]float64, lags+1))
	}
	// Each group is summed by one worker in a fixed order, so that the number of workers changes nothing.
	var wait sync.WaitGroup
	next := make(chan int, groups)
	for g := range groups {
		next <- g
	}
	close(next)
	for range max(1, min(threads, groups)) {
		wait.Go(func() {
			for g := range next {
				from, to := total*g/groups, total*(g+1)/groups
				at := 0
				for _, run := range r.Runs {
					n := len(run[0])
					first, end := max(0, from-at), min(n, to-at)
					if first < end {
						c.add(g, run, first, end)
					}
					at += n
				}
			}
		})
	}
	wait.Wait()
	return c
}

// add sums the pairs whose first sample is within first to end-1 of the run.
func (c *Covariance) add(g int, run [][]float64, first, end int) {
	l := c.Channels
	n := len(run[0])
	for k := range c.Lags + 1 {
		last := min(end, n-k)
		if last <= first {
			break
		}
		sums := c.Sums[g][k]
		for a := range l {
			later := run[a][first+k : last+k]
			for b := range l {
				earlier := run[b][first:last]
				// Four sums break the chain of additions.
				var s [4]float64
				j := 0
				for ; j+4 <= len(earlier); j += 4 {
					s[0] += later[j] * earlier[j]
					s[1] += later[j+1] * earlier[j+1]
					s[2] += later[j+2] * earlier[j+2]
					s[3] += later[j+3] * earlier[j+3]
				}
				for ; j < len(earlier); j++ {
					s[0] += later[j] * earlier[j]
				}
				sums[a*l+b] += s[0] + s[1] + s[2] + s[3]
			}
		}
		c.Counts[g][k] += float64(last - first)
	}
}

// Mean returns R_0 to R_Lags over all groups but one; -1 leaves out none. A lag without a pair is zero.
func (c *Covariance) Mean(without int) [][]float64 {
	out := make([][]float64, c.Lags+1)
	for k := range out {
		out[k] = make([]float64, c.Channels*c.Channels)
		count := 0.0
		for g := range c.Sums {
			if g == without {
				continue
			}
			count += c.Counts[g][k]
			for i, v := range c.Sums[g][k] {
				out[k][i] += v
			}
		}
		if count > 0 {
			for i := range out[k] {
				out[k][i] /= count
			}
		}
	}
	return out
}

// finite tells whether every sum is a finite number.
func (c *Covariance) finite() bool {
	for _, sums := range c.Sums {
		for _, s := range sums {
			for _, v := range s {
				if math.IsNaN(v) || math.IsInf(v, 0) {
					return false
				}
			}
		}
	}
	return true
}
