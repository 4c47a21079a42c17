package identify

import (
	"math"
	"math/rand/v2"
	"testing"

	"hushframe/core/signal/order"
)

// system is a structure drawn at random: modes with shapes on the channels and their own force, seen with noise of the sensors.
type system struct {
	rate               float64
	frequency, damping []float64
	shape              [][]float64 // by mode, unit
}

// drawn returns count modes between 90 and 480 Hz, at least 4 % apart, with 0.8 to 5 % of damping.
func drawn(rng *rand.Rand, count, channels int) system {
	s := system{rate: 2000}
	for len(s.frequency) < count {
		f := 90 * math.Pow(480.0/90, rng.Float64())
		apart := true
		for _, g := range s.frequency {
			apart = apart && math.Abs(math.Log(f/g)) > 0.04
		}
		if !apart {
			continue
		}
		s.frequency = append(s.frequency, f)
		s.damping = append(s.damping, 0.008*math.Pow(0.05/0.008, rng.Float64()))
		d, norm := make([]float64, channels), 0.0
		for c := range d {
			d[c] = rng.NormFloat64()
			norm = math.Hypot(norm, d[c])
		}
		for c := range d {
			d[c] /= norm
		}
		s.shape = append(s.shape, d)
	}
	return s
}

// shake returns the rate of each channel under white force on every mode, correlated by a third between neighbours, with sensor noise.
func (s system) shake(rng *rand.Rand, samples, channels int) [][]float64 {
	y := make([][]float64, channels)
	for c := range y {
		y[c] = make([]float64, samples)
	}
	dt := 1 / s.rate
	state := make([][2]float64, len(s.frequency))
	force := make([]float64, len(s.frequency))
	for t := range samples {
		for m := range force {
			force[m] = rng.NormFloat64()
		}
		for m := range s.frequency {
			w := 2 * math.Pi * s.frequency[m]
			// Exact step of x″ + 2ζω·x′ + ω²·x = f for a force held over it.
			decay, damped := s.damping[m]*w, w*math.Sqrt(1-s.damping[m]*s.damping[m])
			e, sin, cos := math.Exp(-decay*dt), math.Sin(damped*dt), math.Cos(damped*dt)
			f := force[m] + force[(m+1)%len(force)]/3
			x, v := state[m][0]-f/(w*w), state[m][1]
			state[m] = [2]float64{
				e*(x*(cos+decay/damped*sin)+v*sin/damped) + f/(w*w),
				e * (v*(cos-decay/damped*sin) - x*w*w/damped*sin),
			}
			// About the same rate for every mode.
			by := math.Sqrt(s.damping[m] * w)
			for c := range y {
				y[c][t] += s.shape[m][c] * state[m][1] * by
			}
		}
	}
	for c := range y {
		square := 0.0
		for _, v := range y[c] {
			square += v * v / float64(samples)
		}
		for t := range y[c] {
			y[c][t] += 0.03 * math.Sqrt(square) * rng.NormFloat64()
		}
	}
	return y
}

// The slopes are the derivatives of the likelihood, by differences, at a model away from its greatest value.
func TestSlopes(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	s := drawn(rng, 3, 2)
	r := Record{Rate: s.rate, Runs: [][][]float64{s.shake(rng, 8000, 2)}}
	w, err := newLikelihood(r, 1024, 60, 560, func(f float64) float64 { return 0.9 }, 0.01, 2)
	if err != nil {
		t.Fatal(err)
	}
	v := &innovation{rate: s.rate, l: 2, noise: []float64{0.3, 0, 0.1, 0.2}, reals: []realPole{{0.7, []float64{1, 0.2}, []float64{0.1, 0.3}}}}
	for m, f := range s.frequency {
		p := pair{decay: 2 * math.Pi * f * 0.03, turn: 2 * math.Pi * f, c: []complex128{complex(s.shape[m][0], 0.1), complex(s.shape[m][1], -0.2)},
			k: []complex128{complex(0.1, 0.05), complex(-0.05, 0.1)}}
		p.normal()
		v.pairs = append(v.pairs, p)
	}
	gram, n := w.gram(v)
	if n != v.parameters() || len(v.scales()) != n {
		t.Fatalf("%d parameters, %d slopes, %d scales", v.parameters(), n, len(v.scales()))
	}
	for a := range n {
		const h = 1e-6
		step := make([]float64, n)
		step[a] = h
		up := w.value(v.move(step))
		step[a] = -h
		slope := (up - w.value(v.move(step))) / (2 * h)
		if got := gram[n*(n+1)+a]; math.Abs(got-slope) > 1e-4*math.Abs(slope)+1e-2 {
			t.Errorf("parameter %d: %.8g, by differences %.8g", a, got, slope)
		}
	}
	// The threads change no digit.
	one := *w
	one.threads = 1
	if a, b := w.value(v), one.value(v); a != b {
		t.Errorf("two threads give %.17g, one %.17g", a, b)
	}
}

// A structure drawn at random, flown with four rotors near each other whose orders are taken out: no mode is told that is none, each that is told lies
// within the promise (1 % of frequency, 30 % of damping, 15° of direction) and, but for one, three of its errors; most are found. The seed was
// fixed before the first run.
func TestDrawnAtRandom(t *testing.T) {
	const channels, samples, count = 3, 80000, 9
	told, off, found, beyond := 0, 0, 0, 0
	for _, seed := range []uint64{2026} {
		rng := rand.New(rand.NewPCG(seed, 5))
		s := drawn(rng, count, channels)
		y := s.shake(rng, samples, channels)
		speeds := fly(rng, y, s.rate)
		set := order.RemoveSettings{Rate: s.rate, Orders: []float64{1, 2, 3}, Span: 2, Threads: 2}
		left := order.Left(speeds, set, 1)
		var rotors []order.Rotor
		for _, v := range speeds {
			rotors = append(rotors, order.Rotor{Speed: v})
		}
		low, high := math.Inf(1), 0.0 // of the first orders together; the others lie beyond the band
		for _, b := range order.Bands(rotors, order.Settings{Orders: []float64{1}, Rate: s.rate, Step: 1, Margin: 1}) {
			low, high = min(low, b.Low), max(high, b.High)
		}
		r, err := Identify(Record{Rate: s.rate, Runs: [][][]float64{order.Remove(y, speeds, set).Rest}}, Settings{From: 80, To: 500, Threads: 2,
			Bands: []Band{{Low: low, High: high, Removed: true}}, Left: func(f float64) float64 { return left[int(math.Round(f))] }})
		if err != nil {
			t.Fatal(err)
		}
		taken := make([]bool, count)
		for _, m := range r.Modes {
			if m.Kind != Structure {
				continue
			}
			best := -1
			for k, f := range s.frequency {
				if !taken[k] && math.Abs(m.Frequency/f-1) < 0.03 && (best < 0 || math.Abs(m.Frequency-f) < math.Abs(m.Frequency-s.frequency[best])) {
					best = k
				}
			}
			if best < 0 {
				t.Errorf("seed %d: no true mode is near %.2f ± %.2f Hz, damping %.4f, worth %.0f", seed, m.Frequency, m.FrequencyError, m.Damping, m.Worth)
				continue
			}
			taken[best] = true
			told++
			df, dz := m.Frequency/s.frequency[best]-1, m.Damping/s.damping[best]-1
			cos := 0.0
			for c, v := range m.Direction {
				cos += v * s.shape[best][c]
			}
			t.Logf("seed %d: true %6.2f Hz %.4f | %6.2f ± %.2f Hz %+.2f %%, %.4f ± %.4f %+.0f %%, %.0f° off", seed, s.frequency[best], s.damping[best], m.Frequency,
				m.FrequencyError, 100*df, m.Damping, m.DampingError, 100*dz, math.Acos(min(1, math.Abs(cos)))*180/math.Pi)
			if math.Abs(df) > 0.01 || math.Abs(dz) > 0.3 || math.Abs(cos) < math.Cos(math.Pi/12) {
				off++
			}
			if math.Abs(m.Frequency-s.frequency[best]) > 3*m.FrequencyError || math.Abs(m.Damping-s.damping[best]) > 3*m.DampingError {
				beyond++
			}
		}
		for k := range taken {
			if taken[k] {
				found++
			} else {
				t.Logf("seed %d: missed %.2f Hz, %.4f", seed, s.frequency[k], s.damping[k])
			}
		}
	}
	if off > 0 || beyond > 1 || found < count*3/4 {
		t.Errorf("of %d modes %d are found and %d told; %d of these are off, %d beyond three of their errors", count, found, told, off, beyond)
	}
}

// fly adds the first three orders of four rotors with wandering speeds near 265 Hz, each as strong as the structure, and returns the speeds.
func fly(rng *rand.Rand, y [][]float64, rate float64) [][]float64 {
	var speeds [][]float64
	square := 0.0
	for _, v := range y[0] {
		square += v * v / float64(len(y[0]))
	}
	level := math.Sqrt(square)
	common := make([]float64, len(y[0]))
	drift := 0.0
	for t := range common {
		drift += -drift/2000 + 0.08*rng.NormFloat64()
		common[t] = drift
	}
	for rotor := range 4 {
		speed := make([]float64, len(common))
		own, angle := 0.0, 0.0
		for t := range speed {
			own += -own/2000 + 0.03*rng.NormFloat64()
			speed[t] = 260 + 4*float64(rotor) + common[t] + own
			if t > 0 {
				angle += math.Pi * (speed[t-1] + speed[t]) / rate
			}
			for c := range y {
				y[c][t] += level * (1.5*math.Sin(angle+float64(c)) + 0.3*math.Sin(2*angle) + 0.1*math.Sin(3*angle+float64(rotor)))
			}
		}
		speeds = append(speeds, speed)
	}
	return speeds
}
