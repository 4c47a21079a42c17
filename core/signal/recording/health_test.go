package recording

import (
	"math"
	"testing"

	"hushframe/core/signal/internal/noise"
)

func TestQuantised(t *testing.T) {
	source := noise.Source(3)
	var fine, coarse, text []float64
	for range 20000 {
		v := source.Gauss()
		fine = append(fine, v)
		coarse = append(coarse, math.Round(v/0.25)*0.25)
		// Steps of 1/32.8 printed with three digits, as recorders do.
		text = append(text, math.Round(math.Round(v*32.8)/32.8*1000)/1000)
	}
	if s := Quantised(fine, 1000); s.Step != 0 {
		t.Errorf("plain noise comes in steps of %g", s.Step)
	}
	s := Quantised(coarse, 1000)
	if math.Abs(s.Step-0.25) > 1e-12 || math.Abs(s.Density-0.0625/6000) > 1e-12 {
		t.Errorf("%+v", s)
	}
	if s := Quantised(text, 1000); math.Abs(s.Step*32.8-1) > 0.01 {
		t.Errorf("steps of %g, want %g", s.Step, 1/32.8)
	}
	if s := Quantised([]float64{2, 2}, 1); s.Step != 0 {
		t.Errorf("one value has steps of %g", s.Step)
	}
}

func TestStuck(t *testing.T) {
	source := noise.Source(5)
	var values []float64
	for range 50000 {
		values = append(values, math.Round(source.Gauss()/2)) // mostly zero: chance makes long stretches
	}
	q := Inspect(values)
	if s := Longest(values); s.Unlikely(len(values), q.Repeated) {
		t.Errorf("chance makes %d, which is called stuck", s.Length)
	}
	at := 700
	for i := range 200 {
		values[at+i] = 1
	}
	s := Longest(values)
	if !s.Unlikely(len(values), q.Repeated) || s.First > at || s.Length < 200 || s.Value != 1 {
		t.Errorf("%+v", s)
	}
}

// A second-order low-pass falls by 12 dB per octave far above its cut-off, and a notch is a hole in all channels.
func TestFallAndDips(t *testing.T) {
	flat, low := make([]float64, 2049), make([]float64, 2049)
	source := noise.Source(7)
	for k := range flat {
		scatter := 1 + 0.1*source.Gauss()
		r := float64(k) / 200
		flat[k] = scatter
		low[k] = scatter / (1 + r*r*r*r)
	}
	if f := Fall(flat); math.Abs(f.Slope) > 1 || !f.Steady {
		t.Errorf("%+v", f)
	}
	if f := Fall(low); math.Abs(f.Slope+12) > 1 || !f.Steady {
		t.Errorf("%+v", f)
	}
	notched := func(d []float64) []float64 {
		out := append([]float64(nil), d...)
		for k := range out {
			x := (float64(k) - 600) / 20
			out[k] *= x * x / (1 + x*x)
		}
		return out
	}
	if got := Dips([][]float64{notched(flat), notched(low)}, 10); len(got) != 1 || got[0] < 595 || got[0] > 605 {
		t.Errorf("holes at %v", got)
	}
	if got := Dips([][]float64{notched(flat), low}, 10); got != nil {
		t.Errorf("a hole in one channel only: %v", got)
	}
}
