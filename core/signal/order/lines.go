package order

import (
	"math"
	"slices"
)

// lines are the lines of some rotors in the basebands of some orders. The phases of the rotors, against a common reference, are what is
// sought; their speeds and errors are in result.
type lines struct {
	bands []*baseband
	per   []int              // samples of each band per block
	step  float64            // s from block to block
	phase [][]float64        // by block and rotor, rad
	used  [][]bool           // by band and rotor: its phase is heeded; nil for all
	model [][][][]complex128 // by band, rotor, sample and channel, of the last fit
	rest  [][][]complex128   // by band, sample and channel

	result smoothed
}

const blockRate = 50.0 // phases are kept about that often in a second

// newLines turns the channels back by the orders of the reference angle (turns, by sample); widths say how far from it in Hz
// lines may lie, by order.
func newLines(channels [][]float64, reference []float64, orders, widths []float64, rate float64) *lines {
	l := &lines{}
	block := max(1, int(math.Round(rate/blockRate)))
	l.step = float64(block) / rate
	for i, n := range orders {
		per := 1
		for ; per < block; per++ {
			if block%per == 0 && passed*rate*float64(per)/float64(block) >= widths[i] {
				break
			}
		}
		l.bands = append(l.bands, demodulate(channels, reference, n, rate, block/per))
		l.per = append(l.per, per)
	}
	return l
}

func (l *lines) rotors() int {
	if len(l.phase) == 0 {
		return 0
	}
	return len(l.phase[0])
}

// set puts a rotor, the last or a new one behind it, at frequencies in Hz against the reference that are known at some times.
func (l *lines) set(rotor int, time, offset []float64) {
	blocks := (len(l.bands[0].values) + l.per[0] - 1) / l.per[0]
	if l.phase == nil {
		l.phase = make([][]float64, blocks)
	}
	next := make([][]float64, blocks) // the old phases may be kept by others
	phase, before := 0.0, 0.0
	for k := range next {
		f := at(time, offset, float64(k)*l.step)
		if k > 0 {
			phase += math.Pi * (f + before) * l.step
		}
		before = f
		next[k] = slices.Clone(l.phase[k])
		if rotor == len(next[k]) {
			next[k] = append(next[k], 0)
		}
		next[k][rotor] = phase
	}
	l.phase = next
}

// at reads a value by straight lines between rising times, steady outside.
func at(time, value []float64, t float64) float64 {
	i, _ := slices.BinarySearch(time, t)
	switch {
	case i == 0:
		return value[0]
	case i == len(time):
		return value[i-1]
	}
	w := (t - time[i-1]) / (time[i] - time[i-1])
	return (1-w)*value[i-1] + w*value[i]
}

// place is the phase of a rotor at a sample of a band.
func (l *lines) place(band, rotor, i int) float64 {
	per := l.per[band]
	k, w := i/per, float64(i%per)/float64(per)
	if k+1 >= len(l.phase) {
		return l.phase[len(l.phase)-1][rotor]
	}
	return (1-w)*l.phase[k][rotor] + w*l.phase[k+1][rotor]
}

// fit sets model and rest for the present phases: amplitudes are those of least squares over Hann-weighted spans, as Remove
// has them. Without, a rotor number, is left out of the model; -1 leaves none out.
func (l *lines) fit(span float64, without int) {
	l.model, l.rest = make([][][][]complex128, len(l.bands)), make([][][]complex128, len(l.bands))
	for at, b := range l.bands {
		l.model[at], l.rest[at] = l.fitBand(at, b, span, without)
	}
}

func (l *lines) fitBand(at int, b *baseband, span float64, without int) (model [][][]complex128, rest [][]complex128) {
	n, channels := len(b.values), len(b.values[0])
	model = make([][][]complex128, l.rotors())
	var which []int
	for r := range model {
		model[r] = zeros(n, channels)
		if r != without {
			which = append(which, r)
		}
	}
	turned := make([][]complex128, len(which))
	for a, r := range which {
		turned[a] = make([]complex128, n)
		for i := range n {
			sin, cos := math.Sincos(b.order * l.place(at, r, i))
			turned[a][i] = complex(cos, sin)
		}
	}
	rotors := len(which)
	half := max(2, int(math.Round(span*b.rate/2)))
	normal, right := make([]complex128, rotors*rotors), make([]complex128, rotors*channels)
	for start := -half; start < n; start += half {
		first, end := max(0, start), min(n, start+2*half)
		if end-first < 2 || rotors == 0 {
			continue
		}
		clear(normal)
		clear(right)
		weight := func(i int) float64 { return 0.5 - 0.5*math.Cos(math.Pi*(float64(i-start)+0.5)/float64(half)) }
		for i := first; i < end; i++ {
			w := complex(weight(i), 0)
			for r := range rotors {
				c := w * complex(real(turned[r][i]), -imag(turned[r][i]))
				for s := range rotors {
					normal[r*rotors+s] += c * turned[s][i]
				}
				for ch, v := range b.values[i] {
					right[r*channels+ch] += c * v
				}
			}
		}
		trace := 0.0
		for r := range rotors {
			trace += real(normal[r*rotors+r])
		}
		for r := range rotors {
			normal[r*rotors+r] += complex(ridge*trace/float64(rotors), 0)
		}
		inverse := invert(normal, rotors)
		for r := range rotors {
			for ch := range channels {
				var a complex128
				for s := range rotors {
					a += inverse[r*rotors+s] * right[s*channels+ch]
				}
				for i := first; i < end; i++ {
					model[which[r]][i][ch] += complex(weight(i), 0) * a * turned[r][i]
				}
			}
		}
	}
	rest = zeros(n, channels)
	for i := range n {
		for ch, v := range b.values[i] {
			for _, r := range which {
				v -= model[r][i][ch]
			}
			rest[i][ch] = v
		}
	}
	return model, rest
}

func zeros(n, channels int) [][]complex128 {
	flat, out := make([]complex128, n*channels), make([][]complex128, n)
	for i := range out {
		out[i] = flat[i*channels : (i+1)*channels]
	}
	return out
}

// evidence gathers what all bands say of the phases of some rotors after a fit.
func (l *lines) evidence(which []int) []evidence {
	rotors := len(which)
	out := make([]evidence, len(l.phase))
	for k := range out {
		out[k] = evidence{make([]float64, rotors), make([]float64, rotors*rotors)}
	}
	for at, b := range l.bands {
		b.whiten(l.rest[at])
		heeded := func(r int) bool { return l.used == nil || l.used[at][r] }
		for i := range b.values {
			k := min(len(out)-1, (i+l.per[at]/2)/l.per[at])
			for a, r := range which {
				if !heeded(r) {
					continue
				}
				u := l.model[at][r][i]
				out[k].slope[a] += 2 * b.order * imag(b.form(u, l.rest[at][i]))
				for c, s := range which[:a+1] {
					if !heeded(s) {
						continue
					}
					v := 2 * b.order * b.order * real(b.form(u, l.model[at][s][i]))
					out[k].curve[a*rotors+c] += v
					if c != a {
						out[k].curve[c*rotors+a] += v
					}
				}
			}
		}
	}
	return out
}

func (l *lines) all() []int {
	var out []int
	for r := range l.rotors() {
		out = append(out, r)
	}
	return out
}

// improve does some steps of Gauss and Newton for the phases of all rotors together.
func (l *lines) improve(d drift, span float64, times int) {
	d.step = l.step
	for range times {
		l.fit(span, -1)
		l.result = smooth(l.phase, l.evidence(l.all()), d, withoutErrors)
		l.phase = l.result.phase
	}
	l.fit(span, -1)
}

// improveOne does so for one rotor, the others held.
func (l *lines) improveOne(rotor int, d drift, span float64, times int) {
	d = drift{own: math.Hypot(d.own, d.common), memory: d.memory, step: l.step}
	for range times {
		l.fit(span, -1)
		alone := make([][]float64, len(l.phase))
		for k, v := range l.phase {
			alone[k] = v[rotor : rotor+1]
		}
		found := smooth(alone, l.evidence([]int{rotor}), d, withoutErrors)
		next := make([][]float64, len(l.phase))
		for k, v := range l.phase {
			next[k] = slices.Clone(v)
			next[k][rotor] = found.phase[k][0]
		}
		l.phase = next
	}
	l.fit(span, -1)
}

// likeliest climbs by factors of two to the drift of greatest likelihood.
func (l *lines) likeliest(d drift, span float64) drift {
	d.step = l.step
	l.fit(span, -1)
	said := l.evidence(l.all())
	best := smooth(l.phase, said, d, likelihoodOnly).likelihood
	for moved := true; moved; {
		moved = false
		for _, by := range []float64{2, 0.5} {
			for _, try := range []drift{
				{d.own * by, d.common, d.memory, d.step}, {d.own, d.common * by, d.memory, d.step}, {d.own, d.common, d.memory * by, d.step},
				{d.own * by, d.common * by, d.memory / by / by, d.step},
			} {
				if try.memory < shortMemory || try.memory > longMemory || try.own < slowest || try.common < slowest {
					continue
				}
				if v := smooth(l.phase, said, try, likelihoodOnly).likelihood; v > best {
					best, d, moved = v, try, true
				}
			}
		}
	}
	return d
}

const (
	shortMemory, longMemory = 0.05, 4.0 // s
	slowest                 = 1.0       // rad/s²
)

// cost is the likelihood lost to the rests of all bands: samples times the logarithm of the determinant of their covariance.
func (l *lines) cost() float64 {
	sum := 0.0
	for at, b := range l.bands {
		sum += float64(len(l.rest[at])) * b.whiten(l.rest[at])
	}
	return sum
}

// losses are the squares of the whitened rest of the first band by block.
func (l *lines) losses() []float64 {
	b, out := l.bands[0], make([]float64, len(l.phase))
	for i, v := range l.rest[0] {
		out[min(len(out)-1, i/l.per[0])] += real(b.form(v, v))
	}
	return out
}

// choose lets the evidence heed the lines that hold clearly more than the noise that is taken with any line.
func (l *lines) choose(span float64) {
	l.used = make([][]bool, len(l.bands))
	for at, b := range l.bands {
		b.whiten(l.rest[at])
		l.used[at] = make([]bool, l.rotors())
		for r := range l.used[at] {
			l.used[at][r] = l.strength(at, r, span) > clearLine
		}
	}
}

// clearLine is how many times the noise that goes with it a line must hold for its phase to be heeded.
const clearLine = 4.0

// strength is the power of a line over that of the noise that is taken with it.
func (l *lines) strength(at, rotor int, span float64) float64 {
	b, sum := l.bands[at], 0.0
	for _, u := range l.model[at][rotor] {
		sum += real(b.form(u, u))
	}
	return sum / (float64(len(b.values)*len(b.values[0])) * 2 / span / b.rate)
}
