package order

import (
	"math"
	"testing"

	"hushframe/core/signal/internal/noise"
)

// wandering returns a speed in Hz that wanders slowly about a mean, and the exact angle in turns.
func wandering(source *noise.Source, mean float64, n int, rate float64) (speed, turns []float64) {
	drift, angle := 0.0, 0.0
	for range n {
		drift += -drift/4000 + 0.02*source.Gauss()
		speed = append(speed, mean+drift)
		turns = append(turns, angle)
		angle += (mean + drift) / rate
	}
	return speed, turns
}

// Two rotors near each other, orders 1, 2 and a folded 6, on two channels with noise: the lines leave at least 20 dB less
// than they had, what is told to be theirs is within 5 % of the truth, and the noise keeps its power but for the bands that the
// lines cost, 2/span each.
func TestRemove(t *testing.T) {
	const rate, n = 2000.0, 60000
	source := noise.Source(21)
	speedA, turnsA := wandering(&source, 262, n, rate)
	speedB, turnsB := wandering(&source, 268, n, rate)
	amplitude := [2][2][3]float64{{{2, 0.7, 0.4}, {1.5, 0.2, 0.3}}, {{0.5, 1, 0.2}, {1, 0.6, 0.1}}} // channel, rotor, order
	orders := []float64{1, 2, 6}
	channels, quiet := make([][]float64, 2), make([][]float64, 2)
	for c := range channels {
		for i := range n {
			e := 0.5 * source.Gauss()
			v := e
			for k, order := range orders {
				v += amplitude[c][0][k]*math.Sin(2*math.Pi*order*turnsA[i]+float64(k)) + amplitude[c][1][k]*math.Cos(2*math.Pi*order*turnsB[i])
			}
			channels[c], quiet[c] = append(channels[c], v), append(quiet[c], e)
		}
	}
	r := Remove(channels, [][]float64{speedA, speedB}, RemoveSettings{Rate: rate, Orders: orders, Threads: 2})
	one := Remove(channels, [][]float64{speedA, speedB}, RemoveSettings{Rate: rate, Orders: orders, Threads: 1})
	for c := range channels {
		left, lines, noisePower := 0.0, 0.0, 0.0
		for i := range n {
			d := r.Rest[c][i] - quiet[c][i]
			left += d * d / n
			noisePower += quiet[c][i] * quiet[c][i] / n
			if one.Rest[c][i] != r.Rest[c][i] {
				t.Fatal("the number of threads changes the rest")
			}
		}
		for rotor := range amplitude[c] {
			for k, a := range amplitude[c][rotor] {
				lines += a * a / 2
				if got := r.Power[c][rotor][k]; math.Abs(got-a*a/2) > 0.05*a*a/2+0.002 {
					t.Errorf("channel %d rotor %d order %g: %.4f taken, %.4f there", c, rotor, orders[k], got, a*a/2)
				}
			}
		}
		// Six lines cost the noise of 2/2 Hz each, of 1000.
		if cost := 6.0 / 1000 * noisePower; left > lines/100+2*cost {
			t.Errorf("channel %d: %.5f left of %.3f, the noise lost may be %.5f", c, left, lines, cost)
		}
	}
}

func TestRemoveNothing(t *testing.T) {
	x := [][]float64{{1, 2, 3, 4, 5, 6}}
	r := Remove(x, [][]float64{{0, 0, 0, 0, 0, math.NaN()}}, RemoveSettings{Rate: 10, Orders: []float64{1}})
	for i, v := range r.Rest[0] {
		if v != x[0][i] {
			t.Fatalf("a rotor at rest changed sample %d", i)
		}
	}
	Remove(nil, nil, RemoveSettings{Rate: 1})
	Remove([][]float64{{}}, [][]float64{{}}, RemoveSettings{Rate: 1, Orders: []float64{1}})
}

// A ramp logged every tenth of a second and held comes back as a ramp.
func TestFollow(t *testing.T) {
	var time, held []float64
	for i := range 1001 {
		time = append(time, float64(i)/1000)
		held = append(held, 100+5*float64(i/100)/10)
	}
	got := Follow(time, held, time)
	for i, v := range got {
		if want := 100 + 5*time[i]; math.Abs(v-want) > 1e-9 {
			t.Fatalf("%g Hz at %g s, want %g", v, time[i], want)
		}
	}
	if got := Follow(nil, nil, []float64{1}); got[0] != 0 {
		t.Error("no sample gives a speed")
	}
}

// Four rotors and three orders out of three channels of 120 s at 2 kHz.
func BenchmarkRemove(b *testing.B) {
	const rate, n = 2000.0, 240000
	source := noise.Source(2)
	var speeds, channels [][]float64
	for r := range 4 {
		speed, _ := wandering(&source, 260+4*float64(r), n, rate)
		speeds = append(speeds, speed)
	}
	for range 3 {
		x := make([]float64, n)
		for i := range x {
			x[i] = source.Gauss()
		}
		channels = append(channels, x)
	}
	b.ResetTimer()
	for range b.N {
		Remove(channels, speeds, RemoveSettings{Rate: rate, Orders: []float64{1, 2, 3}, Threads: 2})
	}
}

// Left tells what removal takes of noise: as much in all as is missing, and only where the orders are.
func TestLeft(t *testing.T) {
	const n, rate = 200000, 2000.0
	source := noise.Source(8)
	x, speed := make([]float64, n), make([]float64, n)
	for i := range x {
		x[i] = source.Gauss()
		speed[i] = 260 + 8*math.Sin(2*math.Pi*0.05*float64(i)/rate)
	}
	set := RemoveSettings{Rate: rate, Orders: []float64{1, 6}, Span: 2, Threads: 2}
	power := func(x []float64) float64 {
		sum := 0.0
		for _, v := range x {
			sum += v * v
		}
		return sum / n
	}
	missing := (1 - power(Remove([][]float64{x}, [][]float64{speed}, set).Rest[0])/power(x)) * rate / 2 // Hz of white noise
	said := 0.0
	for k, v := range Left([][]float64{speed}, set, 1) {
		said += 1 - v
		// 6 · 252 to 6 · 268 Hz fold to 392 … 488 Hz.
		if f := float64(k); v < 1 && !(f >= 251 && f <= 269 || f >= 391 && f <= 489) {
			t.Errorf("%g is left at %g Hz, where no order is", v, f)
		}
	}
	// 2 lines over 100 s take some 400 numbers out, whose sum of squares scatters by √(2/400).
	if math.Abs(missing/said-1) > 0.25 {
		t.Errorf("%.3f Hz of noise are missing, %.3f Hz are said to be", missing, said)
	}
}
