package order

import (
	"math"
	"slices"
)

// SharpenSettings say how followed speeds are sharpened. Rate must be above zero.
type SharpenSettings struct {
	Rate float64 // sample rate, Hz
	// Orders are those whose phases may be heeded, where they stand out; nil means 1. Order 1 is always among them.
	Orders  []float64
	Span    float64 // time over which amplitude and phase of an order count as steady, s; 0 means 2
	Near    float64 // as in TrackSettings
	Threads int
}

// Sharp are speeds that were sharpened by the phase of their own orders.
type Sharp struct {
	Time   []float64   // s from the first sample
	Speeds [][]float64 // by rotor and time, revolutions per second
	// SpeedError is the standard error of each in Hz, PhaseError that of the angle of the rotor in rad, against amplitudes that are
	// steady over the span: roots of the means of their squares over the time.
	SpeedError, PhaseError []float64
	// Strength is the power of order 1 of each rotor over that of the noise that is taken out with any line.
	Strength []float64
}

// shortestSharp is the length of a signal in seconds below which speeds are not sharpened.
const shortestSharp = 6.0

// courses are gone through one after the other: the frames become longer as the reference follows better what all rotors do alike.
var courses = []course{{frame: 1.2, steep: 9, turns: 3}, {frame: 1.5, steep: 7, turns: 3}, {frame: 2, steep: 6, turns: 2}}

// first follows the reference itself, which nothing is known of but a mean over seconds.
var first = course{frame: 0.6, steep: 24, turns: 8}

const (
	searchSpan = 0.7 // s over which amplitudes count as steady while lines are sought
	steps      = 4   // of Gauss and Newton after each change
	sweeps     = 2   // times that all rotors are sought anew, at most
	enough     = 5.0 // gain of a sweep below which it was the last
)

// Sharpen finds the speeds of as many rotors as there are tracks, near the clearest of them, to a fraction of a hertz. Signals are
// turned back by the angle of a common reference. In what is left, the line of each rotor is pursued with those of the others
// taken out, and again until nothing is gained; where two meet it is tried whether one went on as the other. The mean of all speeds,
// which such a mistake does not disturb, is the next reference. Then the phases of all orders that stand out are demodulated along the angles, and phases, speeds and
// accelerations of all rotors together are smoothed by them, until they agree; amplitudes are fitted in between as Remove fits
// them. This is the iterated Kalman smoother, a Gauss-Newton method (B. M. Bell, The iterated Kalman smoother as a Gauss-Newton method,
// SIAM J. Optim. 4, 1994), on the model of tracking filters for orders that are close (H. Vold and J. Leuridan, High resolution
// order tracking at extreme slew rates, using Kalman tracking filters, SAE 931288, 1993), with the speeds unknown. How rough the
// speeds are, and how much of that is common, is that of greatest likelihood.
//
// It returns ok false for no track, for a signal shorter than 6 s or without a channel that changes, and where no numbers come out. It panics on a rate that is not above zero.
func Sharpen(channels [][]float64, tracks []Track, s SharpenSettings) (sharp Sharp, ok bool) {
	if !(s.Rate > 0) {
		panic("order: rate must be above zero")
	}
	var alive [][]float64
	for _, c := range channels {
		if len(c) > 0 && slices.Max(c) > slices.Min(c) {
			alive = append(alive, c)
		}
	}
	if len(tracks) == 0 || len(alive) == 0 || float64(len(alive[0])) < shortestSharp*s.Rate {
		return Sharp{}, false
	}
	if s.Span == 0 {
		s.Span = defaultSpan
	}
	if s.Near == 0 {
		s.Near = 0.12
	}
	x := &sharpening{channels: alive, rotors: len(tracks), set: s}
	x.begin(tracks[0])
	for i, c := range courses {
		x.search(c)
		if !x.lines.finite() {
			return Sharp{}, false
		}
		if i < len(courses)-1 {
			x.refer()
		}
	}
	x.finish()
	return x.told(), x.lines.finite()
}

// finite tells whether all phases are numbers.
func (l *lines) finite() bool {
	for _, v := range l.phase {
		for _, p := range v {
			if math.IsNaN(p) || math.IsInf(p, 0) {
				return false
			}
		}
	}
	return true
}

// sharpening is the state of Sharpen.
type sharpening struct {
	channels  [][]float64
	rotors    int
	set       SharpenSettings
	reference []float64 // speed by sample, Hz
	reach     float64   // Hz to either side of it within which rotors lie
	drift     drift
	lines     *lines
}

// begin makes the reference out of a track: a mean over two seconds, which the strongest line near it corrects.
func (x *sharpening) begin(t Track) {
	n, rate := len(x.channels[0]), x.set.Rate
	hop := t.Time[1] - t.Time[0]
	slow := average(t.Speed, int(math.Round(2/hop)))
	x.reference = make([]float64, n)
	for i := range x.reference {
		x.reference[i] = at(t.Time, slow, float64(i)/rate)
	}
	x.reach = x.set.Near * mean(slow) / 2
	x.drift = drift{own: 20, common: 40, memory: 0.3}
	l := newLines(x.channels, turn(x.reference, rate), []float64{1}, []float64{x.reach}, rate)
	c := first
	c.reach = x.reach
	time, offset := l.bands[0].pursue(l.bands[0].values, c, x.set.Threads)
	for i := range x.reference {
		x.reference[i] += at(time, offset, float64(i)/rate)
	}
	x.reference = average(x.reference, int(rate/2))
}

// search finds the lines of all rotors near the reference.
func (x *sharpening) search(c course) {
	c.reach = x.reach
	x.lines = newLines(x.channels, turn(x.reference, x.set.Rate), []float64{1}, []float64{c.reach}, x.set.Rate)
	l := x.lines
	l.rest = [][][]complex128{l.bands[0].values}
	for r := range x.rotors {
		time, offset := l.bands[0].pursue(l.rest[0], c, x.set.Threads)
		l.set(r, time, offset)
		l.improveOne(r, x.drift, searchSpan, 2)
		l.improve(x.drift, searchSpan, 1)
	}
	l.improve(x.drift, searchSpan, steps)
	before := l.cost()
	for range sweeps {
		for r := range x.rotors {
			x.again(r, c)
		}
		l.improve(x.drift, searchSpan, 2)
		now := l.cost()
		if before-now < enough {
			break
		}
		before = now
	}
	for range sweeps {
		exchanged := l.untangle(x.drift, 1.5*searchSpan, x.set.Threads)
		l.improve(x.drift, searchSpan, steps)
		if exchanged == 0 {
			break
		}
	}
}

// again seeks the line of one rotor anew, with the others taken out. Of the path found and the one so far, each stretch where they differ
// is taken from the one that explains it better, and the whole only if it is better than before.
func (x *sharpening) again(r int, c course) {
	l := x.lines
	phase, cost, old := l.phase, l.cost(), l.losses()
	time, kept := l.frequency(r)
	l.fit(searchSpan, r)
	foundTime, found := l.bands[0].pursue(l.rest[0], c, x.set.Threads)
	l.set(r, foundTime, found)
	l.improveOne(r, x.drift, searchSpan, steps)
	mixed := l.mix(r, kept, old, l.losses())
	if mixed != nil {
		l.phase = phase
		l.set(r, time, mixed)
		l.improveOne(r, x.drift, searchSpan, steps)
		if l.cost() < cost {
			return
		}
	}
	l.phase = phase
	l.fit(searchSpan, -1)
}

// frequency is that of a rotor against the reference, by block, in Hz.
func (l *lines) frequency(r int) (time, offset []float64) {
	n := len(l.phase)
	for k := range n {
		a, b := max(0, k-1), min(n-1, k+1)
		time = append(time, float64(k)*l.step)
		offset = append(offset, (l.phase[b][r]-l.phase[a][r])/(2*math.Pi*float64(b-a)*l.step))
	}
	return time, offset
}

// mix takes, in each stretch where the present path of a rotor and another one differ by more than half a hertz, the one with the smaller
// loss there and in the half second around it. It returns nil if the present path is nowhere better.
func (l *lines) mix(r int, other, otherLoss, loss []float64) []float64 {
	_, out := l.frequency(r)
	around := int(0.5 / l.step)
	better := false
	for k := 0; k < len(out); {
		if math.Abs(out[k]-other[k]) < 0.5 {
			out[k] = other[k]
			k++
			continue
		}
		end, near := k+1, 0 // the stretch goes on over short agreements
		for i := k + 1; i < len(out) && near < around; i++ {
			if near++; math.Abs(out[i]-other[i]) >= 0.5 {
				end, near = i+1, 0
			}
		}
		gain := 0.0
		for i := max(0, k-around); i < min(len(out), end+around); i++ {
			gain += otherLoss[i] - loss[i]
		}
		if gain > 0 {
			better = true
		} else {
			copy(out[k:end], other[k:end])
		}
		k = end
	}
	if !better {
		return nil
	}
	return out
}

// refer makes the mean of all rotors the reference.
func (x *sharpening) refer() {
	l := x.lines
	far := 0.0
	mean := make([]float64, len(l.phase))
	var time []float64
	for r := range x.rotors {
		var offset []float64
		time, offset = l.frequency(r)
		for k, v := range offset {
			mean[k] += v / float64(x.rotors)
		}
	}
	for r := range x.rotors {
		_, offset := l.frequency(r)
		for k, v := range offset {
			far = max(far, math.Abs(v-mean[k]))
		}
	}
	for i := range x.reference {
		x.reference[i] += at(time, mean, float64(i)/x.set.Rate)
	}
	x.reference = average(x.reference, int(x.set.Rate/5))
	x.reach = min(x.reach, far+4)
}

// finish fits all orders that stand out, over spans that grow to that of the settings.
func (x *sharpening) finish() {
	orders := slices.Clone(x.set.Orders)
	if !slices.Contains(orders, 1) {
		orders = append(orders, 1)
	}
	slices.Sort(orders)
	var widths []float64
	for _, n := range orders {
		widths = append(widths, min(n*x.reach, 0.2*x.set.Rate))
	}
	l := newLines(x.channels, turn(x.reference, x.set.Rate), orders, widths, x.set.Rate)
	l.phase = x.lines.phase
	x.lines = l
	for _, span := range []float64{min(1, x.set.Span), x.set.Span} {
		l.fit(span, -1)
		l.choose(span)
		x.drift = l.likeliest(x.drift, span)
		l.improve(x.drift, span, 2*steps)
		l.choose(span)
		l.untangle(x.drift, span, x.set.Threads)
		l.improve(x.drift, span, 2*steps)
	}
	x.drift.step = l.step
	l.result = smooth(l.phase, l.evidence(l.all()), x.drift, withErrors)
}

// Sure tells whether the orders of a rotor can be taken out by its angle: it is off by less than half a radian, and its line is one. What
// follows the humps of noise holds up to ten times what any line takes.
func (s Sharp) Sure(rotor int) bool { return s.PhaseError[rotor] < 0.5 && s.Strength[rotor] > 15 }

// told puts the result into speeds.
func (x *sharpening) told() Sharp {
	l := x.lines
	out := Sharp{Speeds: make([][]float64, x.rotors), SpeedError: make([]float64, x.rotors), PhaseError: make([]float64, x.rotors), Strength: make([]float64, x.rotors)}
	n := float64(len(l.phase))
	for k := range l.phase {
		t := float64(k) * l.step
		i := min(len(x.reference)-1, int(math.Round(t*x.set.Rate)))
		out.Time = append(out.Time, t)
		for r := range x.rotors {
			out.Speeds[r] = append(out.Speeds[r], x.reference[i]+l.result.speed[k][r]/(2*math.Pi))
			out.SpeedError[r] += math.Pow(l.result.speedError[k][r]/(2*math.Pi), 2) / n
			out.PhaseError[r] += math.Pow(l.result.phaseError[k][r], 2) / n
		}
	}
	for r := range x.rotors {
		out.SpeedError[r], out.PhaseError[r] = math.Sqrt(out.SpeedError[r]), math.Sqrt(out.PhaseError[r])
		for at, b := range l.bands {
			if b.order == 1 {
				b.whiten(l.rest[at])
				out.Strength[r] = l.strength(at, r, x.set.Span)
			}
		}
	}
	return out
}

// average is a moving mean over wide samples, twice.
func average(x []float64, wide int) []float64 {
	for range 2 {
		sums := make([]float64, len(x)+1)
		for i, v := range x {
			sums[i+1] = sums[i] + v
		}
		out := make([]float64, len(x))
		for i := range x {
			a, b := max(0, i-wide/2), min(len(x), i+wide/2+1)
			out[i] = (sums[b] - sums[a]) / float64(b-a)
		}
		x = out
	}
	return x
}

func mean(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	return sum / float64(len(x))
}
