package record

import (
	"bufio"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"testing"

	"hushframe/core/pipeline/stage"
)

// mode is a resonance under white noise, stepped exactly (impulse invariant).
type mode struct {
	f, zeta, gain  float64
	a1, a2, y1, y2 float64
}

func newMode(f, zeta, level, rate float64) *mode {
	w := 2 * math.Pi * f / rate
	m := &mode{f: f, zeta: zeta, a1: 2 * math.Exp(-zeta*w) * math.Cos(w*math.Sqrt(1-zeta*zeta)), a2: -math.Exp(-2 * zeta * w)}
	m.gain = level * 2 * zeta * w * w // roughly level at the peak for noise of unit density per sample
	return m
}

func (m *mode) step(noise float64) float64 {
	y := m.a1*m.y1 + m.a2*m.y2 + m.gain*noise
	m.y1, m.y2 = y, m.y1
	return y
}

// A minute of hover with four modes of known frequency and damping, four rotors whose speed wanders by some per cent with
// unbalance and blade passing, a loud disturbance at 30 Hz and sensor noise: every mode is found on its axis, within three
// of its own standard errors, and no order outside its band.
func TestHover(t *testing.T) {
	const rate, rows = 2000.0, 112000
	random := rand.New(rand.NewPCG(7, 11))
	axes := [3][]*mode{
		{newMode(148, 0.012, 20, rate), newMode(372, 0.015, 10, rate), newMode(30, 0.2, 100, rate)},
		{newMode(187, 0.02, 20, rate)},
		{newMode(431, 0.01, 10, rate), newMode(30, 0.2, 50, rate)},
	}
	folder := t.TempDir()
	f, err := os.Create(filepath.Join(folder, "hover.csv"))
	if err != nil {
		t.Fatal(err)
	}
	w := bufio.NewWriter(f)
	fmt.Fprintln(w, "time_us,gx,gy,gz,rpm_1,rpm_2,rpm_3,rpm_4")
	mean := [4]float64{262, 265, 268, 271} // Hz
	var drift, angle [4]float64
	for i := range rows {
		var rateOf [3]float64
		for d, modes := range axes {
			for _, m := range modes {
				rateOf[d] += m.step(random.NormFloat64())
			}
			rateOf[d] += 0.05 * random.NormFloat64()
		}
		var rpm [4]int
		for r := range mean {
			drift[r] += -drift[r]/4000 + 0.05*random.NormFloat64()
			speed := mean[r] + drift[r]
			angle[r] += 2 * math.Pi * speed / rate
			rateOf[0] += 0.6 * math.Sin(angle[r])
			rateOf[1] += 0.6 * math.Cos(angle[r])
			rateOf[2] += 0.3 * math.Sin(3*angle[r])
			rpm[r] = int(math.Round(speed * 60))
		}
		fmt.Fprintf(w, "%d,%.3f,%.3f,%.3f,%d,%d,%d,%d\n", i*500, rateOf[0], rateOf[1], rateOf[2], rpm[0], rpm[1], rpm[2], rpm[3])
	}
	if err := w.Flush(); err != nil {
		t.Fatal(err)
	}
	f.Close()

	s, o, err := run(t, folder, stage.Arguments{"file": "hover.csv", "blades": 3.0, "from": hertz(80)})
	if err != nil {
		t.Fatal(err)
	}
	if unit := o.Summary[1].Columns[3].Name; unit != "(deg/s)²/Hz" {
		t.Errorf("the densities of the peaks are headed %q", unit)
	}
	for _, row := range o.Summary[1].Rows {
		t.Log(row)
	}
	for d, modes := range axes {
		for _, m := range modes {
			if m.f < 80 {
				continue
			}
			p := peakNear(t, s, d, m.f)
			if math.Abs(p.Frequency-m.f) > 3*p.FrequencyError || p.FrequencyError > 0.01*m.f {
				t.Errorf("mode at %g Hz on axis %d: %.2f ± %.2f Hz", m.f, d, p.Frequency, p.FrequencyError)
			}
			if math.Abs(p.Damping-m.zeta) > 3*p.DampingError || p.DampingError > 0.6*m.zeta {
				t.Errorf("mode at %g Hz on axis %d: damping %.4f ± %.4f, truth %g", m.f, d, p.Damping, p.DampingError, m.zeta)
			}
			if where := holding(s, p.Frequency); where != "" {
				t.Errorf("mode at %g Hz lies where %s is", m.f, where)
			}
		}
	}
	others := 0
	for _, p := range s.Peaks {
		near := false
		for _, m := range axes[p.Axis] {
			near = near || math.Abs(p.Frequency-m.f) < 0.02*m.f
		}
		if !near {
			others++
			if holding(s, p.Frequency) == "" {
				t.Errorf("a peak at %.1f Hz on axis %d that is neither mode nor order", p.Frequency, p.Axis)
			}
		}
	}
	if others == 0 {
		t.Error("no order made a peak, so the bands were not tried")
	}
}
