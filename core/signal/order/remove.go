package order

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/mat"
)

// RemoveSettings say how orders are taken out of a signal.
type RemoveSettings struct {
	Rate   float64   // sample rate, Hz
	Orders []float64 // multiples of the speeds, also those that fold
	// Span is the length in seconds over which amplitude and phase of an order count as steady; 0 means 2 s. A longer
	// span takes less of the noise about a line with it: each line costs the noise of a band 2/Span wide.
	Span    float64
	Threads int
}

// Removed is a signal without its orders.
type Removed struct {
	// Rest holds the signal without them, by channel.
	Rest [][]float64
	// Power is the mean square of what was taken out, by channel, rotor and order.
	Power [][][]float64
}

const defaultSpan = 2 // s

// ridge, over the mean of the diagonal, keeps lines that coincide within a span from being told apart by noise.
const ridge = 1e-3

// Remove takes the orders of rotors with known speed out of the channels of one run. Speeds holds, by rotor, one speed in
// revolutions per second per sample; samples that are not above zero have no orders. The angle of a rotor is the integral
// of its speed. Within overlapping Hann-weighted spans, the cosine and sine of each order of all rotors are fitted together
// by least squares; the spans are joined by their weights, which sum to one. It panics on different lengths and a rate that is not
// above zero.
//
// What it takes is everything in a narrow band that wanders with the speed, noise of the structure included.
func Remove(channels, speeds [][]float64, s RemoveSettings) Removed {
	if !(s.Rate > 0) {
		panic("order: rate must be above zero")
	}
	n := 0
	if len(channels) > 0 {
		n = len(channels[0])
	}
	for _, c := range append(append([][]float64{}, channels...), speeds...) {
		if len(c) != n {
			panic("order: channels and speeds differ in samples")
		}
	}
	angles := make([][]float64, len(speeds))
	for r, speed := range speeds {
		angles[r] = turn(speed, s.Rate)
	}
	span := s.Span
	if span == 0 {
		span = defaultSpan
	}
	half := max(4, int(math.Round(span*s.Rate/2)))
	count := (n + half - 1) / half // spans 2·half long begin at (k-1)·half, k = 0 … count
	out := Removed{Rest: make([][]float64, len(channels)), Power: make([][][]float64, len(channels))}
	taken := make([][][]float64, len(channels)) // by channel and parity of the span: neighbours do not share a slice
	for c := range channels {
		taken[c] = [][]float64{make([]float64, n), make([]float64, n)}
		out.Rest[c] = make([]float64, n)
		out.Power[c] = make([][]float64, len(speeds))
		for r := range speeds {
			out.Power[c][r] = make([]float64, len(s.Orders))
		}
	}
	if n == 0 {
		return out
	}
	power := make([][][][]float64, count+1)
	var wait sync.WaitGroup
	next := make(chan int, count+1)
	for k := range count + 1 {
		next <- k
	}
	close(next)
	for range max(1, s.Threads) {
		wait.Go(func() {
			for k := range next {
				power[k] = removeSpan(channels, speeds, angles, taken, (k-1)*half, half, k%2, s.Orders)
			}
		})
	}
	wait.Wait()
	for c, x := range channels {
		for i, v := range x {
			out.Rest[c][i] = v - taken[c][0][i] - taken[c][1][i]
		}
		for k := range power {
			for r := range speeds {
				for o := range s.Orders {
					out.Power[c][r][o] += power[k][c][r][o] / float64(n)
				}
			}
		}
	}
	return out
}

// Left returns, for frequencies in cells of step Hz from 0 Hz to half the rate, the share of the noise of other origin that Remove leaves: each line
// takes that of a band 2/Span wide, where it is at the time.
func Left(speeds [][]float64, s RemoveSettings, step float64) []float64 {
	if !(s.Rate > 0) || !(step > 0) {
		panic("order: rate and cell width must be above zero")
	}
	span := s.Span
	if span == 0 {
		span = defaultSpan
	}
	out := make([]float64, int(math.Ceil(s.Rate/2/step))+1)
	for k := range out {
		out[k] = 1
	}
	for _, speed := range speeds {
		for _, v := range speed {
			if !(v > 0) || math.IsInf(v, 0) {
				continue
			}
			for _, n := range s.Orders {
				cell := min(int(math.Round(Fold(n*v, s.Rate)/step)), len(out)-1)
				out[cell] -= 2 / span / step / float64(len(speed))
			}
		}
	}
	for k := range out {
		out[k] = max(0, out[k])
	}
	return out
}

// turn integrates a speed to an angle in turns, by the trapezium rule.
func turn(speed []float64, rate float64) []float64 {
	out := make([]float64, len(speed))
	angle := 0.0
	for i, v := range speed {
		if !(v > 0) || math.IsInf(v, 0) {
			v = 0
		}
		if i > 0 {
			before := speed[i-1]
			if !(before > 0) || math.IsInf(before, 0) {
				before = 0
			}
			angle += (before + v) / 2 / rate
		}
		out[i] = angle
	}
	return out
}

// removeSpan fits all lines in one span and adds what they hold, under the weight, to taken.
func removeSpan(channels, speeds, angles [][]float64, taken [][][]float64, start, half, parity int, orders []float64) [][][]float64 {
	first, end := max(0, start), min(len(channels[0]), start+2*half)
	power := make([][][]float64, len(channels))
	for c := range power {
		power[c] = make([][]float64, len(speeds))
		for r := range power[c] {
			power[c][r] = make([]float64, len(orders))
		}
	}
	type line struct{ rotor, order int }
	var lines []line
	for r, speed := range speeds {
		turning := false
		for i := first; i < end && !turning; i++ {
			turning = speed[i] > 0
		}
		if turning {
			for o := range orders {
				lines = append(lines, line{r, o})
			}
		}
	}
	if len(lines) == 0 || end-first < 4 {
		return power
	}
	m := end - first
	weight := make([]float64, m)
	basis := make([][]float64, 2*len(lines))
	for i := range weight {
		weight[i] = 0.5 - 0.5*math.Cos(math.Pi*(float64(first+i-start)+0.5)/float64(half))
	}
	for k, l := range lines {
		cos, sin := make([]float64, m), make([]float64, m)
		for i := range m {
			if !(speeds[l.rotor][first+i] > 0) {
				continue
			}
			turns := orders[l.order] * angles[l.rotor][first+i]
			sin[i], cos[i] = math.Sincos(2 * math.Pi * (turns - math.Floor(turns)))
		}
		basis[2*k], basis[2*k+1] = cos, sin
	}
	normal := mat.NewSymDense(len(basis), nil)
	weighted := make([]float64, m)
	right := mat.NewDense(len(basis), len(channels), nil)
	trace := 0.0
	for a, u := range basis {
		for i := range weighted {
			weighted[i] = weight[i] * u[i]
		}
		for b := a; b < len(basis); b++ {
			normal.SetSym(a, b, dot(weighted, basis[b]))
		}
		trace += normal.At(a, a)
		for c, x := range channels {
			right.Set(a, c, dot(weighted, x[first:end]))
		}
	}
	for a := range basis {
		normal.SetSym(a, a, normal.At(a, a)+ridge*trace/float64(len(basis)))
	}
	var factor mat.Cholesky
	var amplitude mat.Dense
	if !factor.Factorize(normal) || factor.SolveTo(&amplitude, right) != nil {
		return power
	}
	for c := range channels {
		held := taken[c][parity]
		for k, l := range lines {
			a, b := amplitude.At(2*k, c), amplitude.At(2*k+1, c)
			cos, sin := basis[2*k], basis[2*k+1]
			sum := 0.0
			for i, w := range weight {
				v := a*cos[i] + b*sin[i]
				held[first+i] += w * v
				sum += w * v * v
			}
			power[c][l.rotor][l.order] += sum
		}
	}
	return power
}

func dot(a, b []float64) float64 {
	var s [4]float64
	j := 0
	for ; j+4 <= len(a); j += 4 {
		s[0] += a[j] * b[j]
		s[1] += a[j+1] * b[j+1]
		s[2] += a[j+2] * b[j+2]
		s[3] += a[j+3] * b[j+3]
	}
	for ; j < len(a); j++ {
		s[0] += a[j] * b[j]
	}
	return s[0] + s[1] + s[2] + s[3]
}

// Follow reads a speed that was logged at rising times, often held between updates, at other times: by straight lines
// between the samples at which the logged value changed, steady before the first and after the last. Without a sample
// it is zero everywhere. It panics if time and speed differ in length.
func Follow(time, speed, at []float64) []float64 {
	if len(time) != len(speed) {
		panic("order: times and speeds differ in length")
	}
	out := make([]float64, len(at))
	var ts, vs []float64
	for i, v := range speed {
		if i == 0 || i == len(speed)-1 || v != speed[i-1] {
			ts, vs = append(ts, time[i]), append(vs, v)
		}
	}
	k := 0
	for i, t := range at {
		switch {
		case len(ts) == 0:
			continue
		case t <= ts[0]:
			out[i] = vs[0]
			continue
		case t >= ts[len(ts)-1]:
			out[i] = vs[len(vs)-1]
			continue
		}
		if ts[k] > t {
			k = 0
		}
		for ts[k+1] < t {
			k++
		}
		w := (t - ts[k]) / (ts[k+1] - ts[k])
		out[i] = (1-w)*vs[k] + w*vs[k+1]
	}
	return out
}
