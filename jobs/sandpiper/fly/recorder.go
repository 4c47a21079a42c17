package main

import (
	"bufio"
	"io"
	"math"
	"math/rand/v2"
	"strconv"
)

// The recorder: x forward, y right, z down, as gyro chips are often mounted;
// deg/s, 2 kHz, after the sensor's own second-order low-pass.
const (
	stepRate   = 8000.0 // simulation, Hz
	recordRate = 2000.0 // Hz
	lowPass    = 480.0  // Hz, sensor filter, Butterworth
	noise      = 0.006  // deg/s/√Hz, one-sided
	leastBit   = 1.0 / 32.8
	speedEvery = 20 // samples between new rotor speeds

	// The current ripple behind the torque ripple also reaches the sensor
	// through its supply: deg/s about z before the low-pass, from one rotor.
	pickup      = 10.0
	pickupRotor = 1
)

// butterworth is a second-order low-pass by the bilinear transform.
type butterworth struct{ b0, b1, b2, a1, a2, s1, s2 float64 }

func newButterworth(cutoff, rate float64) butterworth {
	k := math.Tan(math.Pi * cutoff / rate)
	n := 1 + math.Sqrt2*k + k*k
	return butterworth{b0: k * k / n, b1: 2 * k * k / n, b2: k * k / n, a1: 2 * (k*k - 1) / n, a2: (1 - math.Sqrt2*k + k*k) / n}
}

func (f *butterworth) step(x float64) float64 {
	y := f.b0*x + f.s1
	f.s1 = f.b1*x - f.a1*y + f.s2
	f.s2 = f.b2*x - f.a2*y
	return y
}

// record flies the plant and writes the recording as comma-separated text.
func record(w io.Writer, pl *plant, src *sources, seed uint64) error {
	dt := 1 / stepRate
	ad, bd := pl.discretise(dt)
	s, m := 2*pl.n, 6*len(pl.sites)
	a, b := ad.RawMatrix().Data, bd.RawMatrix().Data
	x, next := make([]float64, s), make([]float64, s)

	rng := rand.New(rand.NewPCG(57+seed, 0x6779))
	sigma := noise * math.Sqrt(recordRate/2)
	bias := [3]float64{0.31, -0.18, 0.07}
	var filters [3]butterworth
	for d := range filters {
		filters[d] = newButterworth(lowPass, stepRate)
	}
	out := bufio.NewWriterSize(w, 1<<16)
	out.WriteString("time_us,gx,gy,gz,throttle_pct")
	for r := range pl.sites {
		out.WriteString(",rpm_" + strconv.Itoa(r+1))
	}
	out.WriteByte('\n')

	every := int(stepRate / recordRate)
	speeds := make([]float64, len(pl.sites))
	line := make([]byte, 0, 128)
	var gains [3][]float64
	for d := range gains {
		gains[d] = pl.gyro.RawRowView(d)
	}
	for k := 0; k < int(end*stepRate); k++ {
		force, command := src.step()
		for i := range s {
			var sum float64
			row := a[i*s : i*s+s]
			for j, v := range x {
				sum += row[j] * v
			}
			in := b[i*m : i*m+m]
			for j, v := range force {
				sum += in[j] * v
			}
			next[i] = sum
		}
		x, next = next, x
		var rate [3]float64
		for d := range rate {
			var sum float64
			for i, g := range gains[d] {
				sum += g * x[pl.n+i]
			}
			rate[d] = sum * 180 / math.Pi
		}
		r := src.rotors[pickupRotor]
		ratio := r.speed / r.hover
		rate[2] += pickup * ratio * ratio * math.Sin(rippleOrder*r.angle)
		for d := range rate {
			rate[d] = filters[d].step(rate[d])
		}
		if k%every != 0 {
			continue
		}
		sample := k / every
		if sample%speedEvery == 0 {
			for r := range speeds {
				speeds[r] = math.Round(src.rotors[r].speed * 60 / (2 * math.Pi))
			}
		}
		line = strconv.AppendInt(line[:0], 4_000_000+int64(math.Round(float64(k)*dt*1e6)), 10)
		for d, sign := range [3]float64{1, -1, -1} {
			v := sign*rate[d] + bias[d] + sigma*rng.NormFloat64()
			line = append(line, ',')
			line = strconv.AppendFloat(line, math.Round(v/leastBit)*leastBit, 'f', 2, 64)
		}
		line = append(line, ',')
		line = strconv.AppendFloat(line, 31*command, 'f', 1, 64)
		for _, v := range speeds {
			line = append(line, ',')
			line = strconv.AppendFloat(line, v, 'f', 0, 64)
		}
		line = append(line, '\n')
		if _, err := out.Write(line); err != nil {
			return err
		}
	}
	return out.Flush()
}
