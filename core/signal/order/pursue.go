package order

import (
	"math"
	"slices"
	"sync"

	"gonum.org/v1/gonum/dsp/fourier"
)

// course says how a line is pursued through a baseband.
type course struct {
	reach float64 // Hz to either side of the reference
	frame float64 // s
	steep float64 // greatest change of frequency against the reference, Hz/s
	turns float64 // usual change of that within a frame, Hz/s
}

const (
	bends        = 11   // slopes tried, over ± steep
	hopsPerFrame = 4    // frames begin that often
	mostGain     = 40.0 // beyond which a frame says no more: a line that strong is there
	aroundLine   = 12   // inverse frames to either side from which the surroundings are taken
)

// pursue returns the path of greatest likelihood of one line through the rest of a baseband of order 1: its frequency against the reference in
// Hz, by frame, with the time of each frame's middle in s. Each frame is held against chirps of all frequencies and slopes; a path goes
// on from where the slope of the frame before leads (A. J. Viterbi, 1967).
func (b *baseband) pursue(rest [][]complex128, c course, threads int) (time, offset []float64) {
	length := min(max(8, int(math.Round(c.frame*b.rate))), len(rest))
	hop := max(1, length/hopsPerFrame)
	size := 1
	for size < 3*length {
		size *= 2
	}
	cell := b.rate / float64(size)
	half := min(int(c.reach/cell), size/2-1)
	gain := make([][]float64, (len(rest)-length)/hop+1)
	next := make(chan int, len(gain))
	for k := range gain {
		next <- k
	}
	close(next)
	var wait sync.WaitGroup
	for range max(1, threads) {
		wait.Go(func() {
			h := newHolder(length, size, half, b.rate, c)
			for k := range next {
				gain[k] = h.gains(rest[k*hop : k*hop+length])
			}
		})
	}
	wait.Wait()
	for k, at := range c.follow(gain, 2*half+1, float64(hop)/b.rate, cell) {
		time = append(time, (float64(k*hop)+float64(length-1)/2)/b.rate)
		offset = append(offset, float64(at%(2*half+1)-half)*cell)
	}
	return time, offset
}

// slope is one of the slopes that are tried, in Hz/s.
func (c course) slope(s int) float64 { return c.steep * (2*float64(s)/(bends-1) - 1) }

// holder holds frames against chirps. It owns its scratch.
type holder struct {
	size, half int
	chirps     [bends][]complex128 // with the window
	fft        *fourier.CmplxFFT
	in, bins   []complex128
	power      []float64
}

func newHolder(length, size, half int, rate float64, c course) *holder {
	h := &holder{size: size, half: half, fft: fourier.NewCmplxFFT(size), in: make([]complex128, size), bins: make([]complex128, size), power: make([]float64, size)}
	for s := range bends {
		chirp := math.Pi * c.slope(s) / (rate * rate)
		for i := range length {
			u := float64(i) - float64(length-1)/2
			sin, cos := math.Sincos(-chirp * u * u)
			w := 0.5 - 0.5*math.Cos(2*math.Pi*(float64(i)+0.5)/float64(length))
			h.chirps[s] = append(h.chirps[s], complex(w*cos, w*sin))
		}
	}
	return h
}

// gains are the likelihoods of a line by slope and cell, over noise.
func (h *holder) gains(frame [][]complex128) []float64 {
	cells := 2*h.half + 1
	out := make([]float64, bends*cells)
	for ch := range frame[0] {
		var floor []float64
		for _, s := range middleFirst() {
			clear(h.in)
			for i, w := range h.chirps[s] {
				h.in[i] = frame[i][ch] * w
			}
			h.fft.Coefficients(h.bins, h.in)
			for i := range h.power {
				v := h.bins[(i+h.size/2)%h.size] // from -rate/2 up
				h.power[i] = real(v)*real(v) + imag(v)*imag(v)
			}
			if floor == nil {
				floor = medians(h.power, aroundLine*h.size/len(frame))
			}
			for i := range cells {
				if at := h.size/2 - h.half + i; floor[at] > 0 {
					out[s*cells+i] += math.Ln2 * h.power[at] / floor[at] // over the mean of noise, of which the median is ln 2
				}
			}
		}
	}
	for i, v := range out {
		out[i] = min(mostGain, v)
	}
	return out
}

// middleFirst orders the slopes so that the flat one comes first.
func middleFirst() []int {
	out := []int{bends / 2}
	for s := range bends {
		if s != bends/2 {
			out = append(out, s)
		}
	}
	return out
}

// medians returns the running median of power within wide to either side, found at every sixteenth place.
func medians(power []float64, wide int) []float64 {
	out := make([]float64, len(power))
	const every = 16
	for k := 0; k < len(power); k += every {
		sorted := slices.Clone(power[max(0, k-wide):min(len(power), k+wide)])
		slices.Sort(sorted)
		for i := k; i < min(k+every, len(out)); i++ {
			out[i] = sorted[len(sorted)/2]
		}
	}
	return out
}

// follow returns the path of greatest gain over cells and slopes.
func (c course) follow(gain [][]float64, cells int, hop, cell float64) []int {
	states := bends * cells
	score := slices.Clone(gain[0])
	from := make([][]int32, len(gain))
	usual := c.turns * math.Sqrt(hop/c.frame)
	const stray = 2 // cells that a path may miss its slope by
	type way struct {
		slope, lead int
		cost        float64
	}
	ways := make([][]way, bends)
	for s := range bends {
		for before := max(0, s-2); before <= min(bends-1, s+2); before++ {
			turn := (c.slope(s) - c.slope(before)) / usual
			lead := int(math.Round((c.slope(s) + c.slope(before)) / 2 * hop / cell))
			for j := -stray; j <= stray; j++ {
				ways[s] = append(ways[s], way{before, j - lead, turn*turn/2 + float64(j*j)/4})
			}
		}
	}
	now := make([]float64, states)
	for k := 1; k < len(gain); k++ {
		from[k] = make([]int32, states)
		for s := range bends {
			for i := range cells {
				best, at := score[s*cells+i]-mostGain, s*cells+i
				for _, w := range ways[s] {
					o := i + w.lead
					if o < 0 || o >= cells {
						continue
					}
					if v := score[w.slope*cells+o] - w.cost; v > best {
						best, at = v, w.slope*cells+o
					}
				}
				now[s*cells+i], from[k][s*cells+i] = best+gain[k][s*cells+i], int32(at)
			}
		}
		score, now = now, score
	}
	at := 0
	for i, v := range score {
		if v > score[at] {
			at = i
		}
	}
	path := make([]int, len(gain))
	for k := len(gain) - 1; k >= 0; k-- {
		path[k] = at
		if k > 0 {
			at = int(from[k][at])
		}
	}
	return path
}
