package order

import (
	"math"
	"sync"
)

const (
	meets      = 1.5 // Hz between two rotors below which one may have gone on as the other
	aroundIt   = 3.0 // s to either side of a meeting within which that is tried
	worthwhile = 3.0 // gain of likelihood
)

// part shares the bands and copies the phases of the blocks from first up to end.
func (l *lines) part(first, end int) *lines {
	out := &lines{step: l.step, per: l.per, used: l.used}
	for at, b := range l.bands {
		from, to := first*l.per[at], min(end*l.per[at], len(b.values))
		out.bands = append(out.bands, &baseband{order: b.order, rate: b.rate, values: b.values[from:to], inverse: b.inverse, steady: true})
	}
	for _, v := range l.phase[first:end] {
		out.phase = append(out.phase, append([]float64{}, v...))
	}
	return out
}

// exchange lets two rotors go on as each other from a block on; phases stay continuous.
func (l *lines) exchange(r, s, block int) {
	next := make([][]float64, len(l.phase))
	gap := l.phase[block][r] - l.phase[block][s]
	for k, v := range l.phase {
		next[k] = append([]float64{}, v...)
		if k > block {
			next[k][r], next[k][s] = v[s]+gap, v[r]-gap
		}
	}
	l.phase = next
}

// untangle tries, wherever two rotors meet, whether they have gone on as each other, and lets them where that explains the signal
// better. Two that went on wrongly spoil the amplitudes for a span. It tells how often they were exchanged.
func (l *lines) untangle(d drift, span float64, threads int) int {
	count := 0
	wide := int(aroundIt / l.step)
	l.fit(span, -1)
	for at, b := range l.bands {
		b.whiten(l.rest[at])
	}
	for r := range l.rotors() {
		for s := range r {
			_, fr := l.frequency(r)
			_, fs := l.frequency(s)
			for k := 1; k < len(fr)-1; k++ {
				gap := math.Abs(fr[k] - fs[k])
				if gap > meets || gap > math.Abs(fr[k-1]-fs[k-1]) || gap >= math.Abs(fr[k+1]-fs[k+1]) {
					continue // not where they are nearest
				}
				first, end := max(0, k-wide), min(len(fr), k+wide)
				as, other := l.part(first, end), l.part(first, end)
				other.exchange(r, s, k-first)
				var wait sync.WaitGroup
				wait.Go(func() { other.improve(d, span, steps) })
				if threads < 2 {
					wait.Wait()
				}
				as.improve(d, span, steps)
				wait.Wait()
				if as.loss()-other.loss() > worthwhile {
					l.exchange(r, s, k)
					_, fr = l.frequency(r)
					_, fs = l.frequency(s)
					count++
					k += wide / 4
				}
			}
		}
	}
	return count
}

// loss is the sum of the squares of the whitened rests of all bands.
func (l *lines) loss() float64 {
	sum := 0.0
	for at, b := range l.bands {
		for _, v := range l.rest[at] {
			sum += real(b.form(v, v))
		}
	}
	return sum
}
