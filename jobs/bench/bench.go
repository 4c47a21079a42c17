// Package bench holds the recipe that reads a hammer test of one arm on the bench, and the recording it reads, which is invented:
// the response of two known modes to seven blows.
package bench

import (
	"bufio"
	"io"
	"math"
	"math/rand/v2"
	"strconv"
)

// Mode is one mode of the invented arm, clamped at its root: gain is the square of its shape at the tip over its modal mass.
type Mode struct{ Frequency, Damping, Gain float64 } // Hz, 1, 1/kg

// Modes are the truth that the recipe has to find.
func Modes() []Mode {
	return []Mode{{148.6, 0.014, 21}, {391.2, 0.021, 17}}
}

const (
	sampleRate = 4000.0 // Hz
	fine       = 16     // steps of the simulation per sample
	seconds    = 8.4
	length     = 0.0012 // of a blow
	forceNoise = 0.01   // N
	noise      = 0.15   // m/s²
)

// Blows are times in seconds and forces in newtons. The fourth bounces.
var blows = [][2]float64{{0.4, 38}, {1.5, 44}, {2.6, 31}, {3.7, 47}, {3.737, 9}, {4.8, 40}, {5.9, 35}, {7, 42}}

// Knock writes the recording: time in µs, force in N, acceleration of the tip in g, z up.
func Knock(w io.Writer) error {
	out := bufio.NewWriter(w)
	out.WriteString("time_us,hammer_N,tip_accel_z_g\n")
	random := rand.New(rand.NewPCG(11, 7))
	modes := Modes()
	y, v := make([]float64, len(modes)), make([]float64, len(modes))
	const step = 1 / (sampleRate * fine)
	var line []byte
	for i := range int(seconds * sampleRate * fine) {
		t := float64(i) * step
		force, tip := 0.0, 0.0
		for _, b := range blows {
			if x := (t - b[0]) / length; x > 0 && x < 1 {
				s := math.Sin(math.Pi * x)
				force += b[1] * s * s
			}
		}
		for k, m := range modes {
			omega := 2 * math.Pi * m.Frequency
			a := m.Gain*force - 2*m.Damping*omega*v[k] - omega*omega*y[k]
			v[k] += a * step
			y[k] += v[k] * step
			tip += a
		}
		if i%fine != 0 {
			continue
		}
		line = strconv.AppendInt(line[:0], int64(math.Round(t*1e6)), 10)
		line = strconv.AppendFloat(append(line, ','), force+forceNoise*random.NormFloat64(), 'f', 2, 64)
		line = strconv.AppendFloat(append(line, ','), (tip+noise*random.NormFloat64())/9.80665, 'f', 2, 64)
		out.Write(append(line, '\n'))
	}
	return out.Flush()
}
