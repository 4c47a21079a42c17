package order

import (
	"math"
	"slices"
	"sync"

	"gonum.org/v1/gonum/dsp/fourier"
)

// TrackSettings say how speeds are found in a signal itself. From and To must be given, the rest may be zero.
type TrackSettings struct {
	Rate     float64   // sample rate, Hz
	From, To float64   // range of the speed, revolutions per second
	Orders   []float64 // multiples that show; nil means 1
	Rotors   int       // how many to look for; 0 means 1
	// Near is the share of the first rotor's speed within which the others are sought; 0 means 0.12. Rotors that carry one
	// frame turn alike, and resonances elsewhere look like lines, too.
	Near  float64
	Frame float64 // length of a frame in seconds; 0 means 1
	// Slope is the fastest change of speed in Hz per second; 0 means 8.
	Slope   float64
	Threads int
}

// Track is the speed of one rotor as it shows in a signal.
type Track struct {
	Time  []float64 // middle of each frame, s from the first sample
	Speed []float64 // revolutions per second
	// Clear is the mean by which the orders stand above their surroundings, in dB over the frames.
	Clear float64
}

const (
	slopes   = 7    // slopes tried per frame, over ± Slope
	mostDB   = 15.0 // beyond which a line counts no more, so that one strong order does not make a track alone
	stepCost = 0.5  // dB per cell of change between frames
)

// Following a comb: each frame is looked at along several slopes of speed, by a Fourier transform with that slope taken out
// for every cell of speed at once (a chirp common to the frame). The power at every order of a speed, over the median of its
// surroundings and in decibels, adds up to the salience of that speed; the track is the path of greatest salience over all
// frames, less a cost for change (A. J. Viterbi, Error bounds for convolutional codes and an asymptotically optimum
// decoding algorithm, IEEE Trans. Inf. Theory 13, 1967). Each rotor found takes its own cells out before the next is sought.

// FindSpeeds returns the tracks of up to Rotors rotors, the clearest first. Channels share their samples. It returns none for a
// signal shorter than four frames. Rotors nearer to each other than 1.5 over the frame cannot be told
// apart, and where two cross a track may go on with the other. It panics on an
// impossible range.
func FindSpeeds(channels [][]float64, s TrackSettings) []Track {
	if !(s.Rate > 0) || !(s.From > 0) || !(s.To > s.From) {
		panic("order: a range of speeds above zero is needed")
	}
	if s.Orders == nil {
		s.Orders = []float64{1}
	}
	if s.Frame == 0 {
		s.Frame = 1
	}
	if s.Slope == 0 {
		s.Slope = 8
	}
	if s.Near == 0 {
		s.Near = 0.12
	}
	length := int(s.Frame * s.Rate)
	hop := max(1, length/4)
	if len(channels) == 0 || len(channels[0]) < 4*length {
		return nil
	}
	size := 1
	for size < 2*length {
		size *= 2
	}
	frames := (len(channels[0])-length)/hop + 1
	cell := s.Rate / float64(size) / slices.Max(append([]float64{1}, s.Orders...)) * 2
	cells := int((s.To-s.From)/cell) + 1
	salience := make([][]float64, frames)
	var wait sync.WaitGroup
	next := make(chan int, frames)
	for k := range frames {
		next <- k
	}
	close(next)
	for range max(1, s.Threads) {
		wait.Go(func() {
			w := newSpotter(length, size, s)
			for k := range next {
				salience[k] = w.salience(channels, k*hop, cell, cells)
			}
		})
	}
	wait.Wait()
	reach := max(1, int(math.Ceil(s.Slope*float64(hop)/s.Rate/cell)))
	var out []Track
	for rotor := range max(1, s.Rotors) {
		path, mean := viterbi(salience, reach)
		t := Track{Clear: mean}
		for k, c := range path {
			t.Time = append(t.Time, (float64(k*hop)+float64(length)/2)/s.Rate)
			t.Speed = append(t.Speed, s.From+float64(c)*cell)
			wide := int(math.Ceil(1.5 / s.Frame / cell))
			for i := max(0, c-wide); i <= min(cells-1, c+wide); i++ {
				salience[k][i] = 0
			}
			if rotor == 0 {
				for i := range salience[k] {
					if f := s.From + float64(i)*cell; math.Abs(f/t.Speed[k]-1) > s.Near {
						salience[k][i] = -mostDB * float64(len(s.Orders))
					}
				}
			}
		}
		out = append(out, t)
	}
	slices.SortStableFunc(out, func(a, b Track) int {
		switch {
		case a.Clear > b.Clear:
			return -1
		case a.Clear < b.Clear:
			return 1
		}
		return 0
	})
	return out
}

// spotter looks at one frame at a time. It owns its scratch.
type spotter struct {
	s            TrackSettings
	length, size int
	window       []float64
	fft          *fourier.CmplxFFT
	in, bins     []complex128
	power        []float64
}

func newSpotter(length, size int, s TrackSettings) *spotter {
	w := &spotter{s: s, length: length, size: size, fft: fourier.NewCmplxFFT(size), in: make([]complex128, size), bins: make([]complex128, size),
		power: make([]float64, size/2)}
	for i := range length {
		w.window = append(w.window, 0.5-0.5*math.Cos(2*math.Pi*(float64(i)+0.5)/float64(length)))
	}
	return w
}

// salience returns, per cell of speed, the greatest sum over orders of decibels above the surroundings, over the slopes.
func (w *spotter) salience(channels [][]float64, start int, cell float64, cells int) []float64 {
	out := make([]float64, cells)
	for _, order := range w.s.Orders {
		best := make([]float64, cells)
		// The surroundings are much the same for every slope, and finding their medians takes longest.
		w.spectrum(channels, start, 0)
		floor := w.floors()
		for k := range slopes {
			slope := w.s.Slope * (2*float64(k)/(slopes-1) - 1)
			w.spectrum(channels, start, order*slope)
			levels := w.levels(floor)
			for c := range best {
				f := order * (w.s.From + float64(c)*cell)
				// A folded line falls where the order rises: the mirrored slope is among those tried.
				bin := int(math.Round(Fold(f, w.s.Rate) / w.s.Rate * float64(w.size)))
				if bin > 0 && bin < len(levels) {
					best[c] = max(best[c], levels[bin])
				}
			}
		}
		for c, v := range best {
			out[c] += v
		}
	}
	return out
}

// spectrum sets power to that of all channels with a slope in Hz/s taken out about the middle of the frame.
func (w *spotter) spectrum(channels [][]float64, start int, slope float64) {
	clear(w.power)
	chirp := math.Pi * slope / (w.s.Rate * w.s.Rate)
	for _, x := range channels {
		clear(w.in)
		for i, v := range x[start : start+w.length] {
			u := float64(i) - float64(w.length-1)/2
			sin, cos := math.Sincos(-chirp * u * u)
			w.in[i] = complex(v*w.window[i]*cos, v*w.window[i]*sin)
		}
		w.fft.Coefficients(w.bins, w.in)
		total := 0.0
		for k := range w.power {
			total += real(w.bins[k])*real(w.bins[k]) + imag(w.bins[k])*imag(w.bins[k])
		}
		for k := range w.power {
			w.power[k] += (real(w.bins[k])*real(w.bins[k]) + imag(w.bins[k])*imag(w.bins[k])) / (total + math.SmallestNonzeroFloat64)
		}
	}
}

// floors returns the median of the power around each bin: a tenth to either side, at least twelve lobes.
func (w *spotter) floors() []float64 {
	lobe := w.size / w.length
	floor := make([]float64, len(w.power))
	const every = 8
	for k := 0; k < len(w.power); k += every {
		wide := max(12*lobe, k/10)
		from, to := max(0, k-wide), min(len(w.power), k+wide)
		sorted := slices.Clone(w.power[from:to])
		slices.Sort(sorted)
		for i := k; i < min(k+every, len(w.power)); i++ {
			floor[i] = sorted[len(sorted)/2]
		}
	}
	return floor
}

// levels returns the power over its surroundings in decibels, 0 to mostDB.
func (w *spotter) levels(floor []float64) []float64 {
	out := make([]float64, len(w.power))
	for k, p := range w.power {
		if p > 0 && floor[k] > 0 {
			out[k] = min(mostDB, max(0, 10*math.Log10(p/floor[k])))
		}
	}
	return out
}

// viterbi returns the path of greatest sum with changes of at most reach cells, and its mean per frame.
func viterbi(salience [][]float64, reach int) (path []int, mean float64) {
	cells := len(salience[0])
	score := slices.Clone(salience[0])
	from := make([][]int32, len(salience))
	for k := 1; k < len(salience); k++ {
		from[k] = make([]int32, cells)
		now := make([]float64, cells)
		for c := range now {
			best, at := math.Inf(-1), c
			for b := max(0, c-reach); b <= min(cells-1, c+reach); b++ {
				if v := score[b] - stepCost*math.Abs(float64(b-c)); v > best {
					best, at = v, b
				}
			}
			now[c], from[k][c] = best+salience[k][c], int32(at)
		}
		score = now
	}
	at := 0
	for c := range score {
		if score[c] > score[at] {
			at = c
		}
	}
	path = make([]int, len(salience))
	sum := 0.0
	for k := len(salience) - 1; k >= 0; k-- {
		path[k] = at
		sum += salience[k][at]
		if k > 0 {
			at = int(from[k][at])
		}
	}
	return path, sum / float64(len(salience))
}
