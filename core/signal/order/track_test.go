package order

import (
	"math"
	"testing"

	"hushframe/core/signal/internal/noise"
)

// Two rotors whose speeds wander by some per cent, 20 Hz apart, with orders 1 and 2 below a resonance that is louder than
// they are: each is followed within the width of a frame's line for nine tenths of the time.
func TestFindSpeeds(t *testing.T) {
	const rate, n = 2000.0, 40000
	source := noise.Source(31)
	speedA, turnsA := wandering(&source, 250, n, rate)
	speedB, turnsB := wandering(&source, 272, n, rate)
	x := make([]float64, n)
	y1, y2 := 0.0, 0.0
	w := 2 * math.Pi * 190 / rate
	a1, a2 := 2*math.Exp(-0.02*w)*math.Cos(w), -math.Exp(-0.04*w)
	for i := range x {
		y1, y2 = a1*y1+a2*y2+0.3*source.Gauss(), y1
		x[i] = y1 + 0.5*source.Gauss() + 0.5*math.Sin(2*math.Pi*turnsA[i]) + 0.3*math.Sin(4*math.Pi*turnsA[i]+1) +
			0.4*math.Sin(2*math.Pi*turnsB[i]) + 0.3*math.Sin(4*math.Pi*turnsB[i]+2)
	}
	tracks := FindSpeeds([][]float64{x}, TrackSettings{Rate: rate, From: 150, To: 320, Rotors: 2, Orders: []float64{1, 2}, Frame: 0.5, Threads: 2})
	if len(tracks) != 2 {
		t.Fatalf("%d tracks", len(tracks))
	}
	one := FindSpeeds([][]float64{x}, TrackSettings{Rate: rate, From: 150, To: 320, Rotors: 2, Orders: []float64{1, 2}, Frame: 0.5, Threads: 1})
	for k := range tracks {
		for i, v := range tracks[k].Speed {
			if one[k].Speed[i] != v {
				t.Fatal("the number of threads changes a track")
			}
		}
	}
	for name, speed := range map[string][]float64{"A": speedA, "B": speedB} {
		best := 0.0
		for _, track := range tracks {
			held := 0.0
			for i, at := range track.Time {
				if math.Abs(track.Speed[i]-speed[int(at*rate)]) < 1.5 {
					held++
				}
			}
			best = max(best, held/float64(len(track.Time)))
		}
		if best < 0.9 {
			t.Errorf("rotor %s is followed for %.2f of the time", name, best)
		}
	}
	if got := FindSpeeds([][]float64{x[:1000]}, TrackSettings{Rate: rate, From: 150, To: 320}); got != nil {
		t.Errorf("half a second has tracks %v", got)
	}
}

// Four rotors sought in three channels of 60 s at 2 kHz.
func BenchmarkFindSpeeds(b *testing.B) {
	source := noise.Source(6)
	var channels [][]float64
	for range 3 {
		x := make([]float64, 120000)
		for i := range x {
			x[i] = source.Gauss()
		}
		channels = append(channels, x)
	}
	b.ResetTimer()
	for range b.N {
		FindSpeeds(channels, TrackSettings{Rate: 2000, From: 125, To: 400, Rotors: 4, Threads: 2})
	}
}
