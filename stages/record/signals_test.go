package record

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// recordingOf makes a recording of 1 kHz under a header; row gives everything behind the time, ready to be written.
func recordingOf(t *testing.T, header string, rows int, row func(i int) string) string {
	t.Helper()
	var text strings.Builder
	fmt.Fprintln(&text, header)
	for i := range rows {
		fmt.Fprintf(&text, "%g,%s\n", float64(i)/1000, row(i))
	}
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "a.csv"), []byte(text.String()), 0o600); err != nil {
		t.Fatal(err)
	}
	return folder
}

func wave(i int, f float64) float64 { return math.Sin(2 * math.Pi * f * float64(i) / 1000) }

// rms is the root mean square of an axis about its mean, in deg/s or m/s².
func rms(s *kinds.Spectra, axis int) float64 {
	if s.Axes[axis].Quantity == "angular rate" {
		return s.Axes[axis].Deviation / degree
	}
	return s.Axes[axis].Deviation
}

func angles(deg ...float64) []any {
	var out []any
	for _, d := range deg {
		out = append(out, stage.Quantity{SI: d * degree, Dimension: "angle"})
	}
	return out
}

// A sensor turned by 30 degrees about z sees a roll of 10 on two axes; turned back, all is on roll again. A turn about x by 90 degrees puts
// what the sensor calls y on z (right-handed).
func TestMounting(t *testing.T) {
	cos, sin := math.Cos(30*degree), math.Sin(30*degree)
	folder := recordingOf(t, "time_s,gx_deg_s,gy_deg_s,gz_deg_s", 8000, func(i int) string {
		v := 10 * math.Sqrt2 * wave(i, 90)
		// Axes of the sensor: x' = (cos, sin), so that a roll rate p shows as (p·cos, -p·sin).
		return fmt.Sprintf("%.6f,%.6f,%.6f", v*cos, -v*sin, 0.5*wave(i, 200))
	})
	s, o, err := run(t, folder, stage.Arguments{"file": "a.csv", "mounting": angles(0, 0, 30)})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(rms(s, 0)-10) > 0.01 || rms(s, 1) > 1e-4 {
		t.Errorf("roll %g, pitch %g", rms(s, 0), rms(s, 1))
	}
	if !strings.Contains(strings.Join(o.Notes, "\n"), "turned by 0, 0 and 30 deg") {
		t.Error(o.Notes)
	}
	s, _, err = run(t, folder, stage.Arguments{"file": "a.csv", "mounting": angles(90, 0, 0)})
	if err != nil || math.Abs(rms(s, 2)-10*sin) > 0.01 || math.Abs(rms(s, 0)-10*cos) > 0.01 {
		t.Errorf("roll %g, yaw %g, %v", rms(s, 0), rms(s, 2), err)
	}
	_, _, err = run(t, folder, stage.Arguments{"file": "a.csv", "columns": map[string]any{"roll": "gx_deg_s"}, "mounting": angles(0, 0, 30)})
	if err == nil || !strings.Contains(err.Error(), "needs all three axes") {
		t.Error(err)
	}
}

// Speeds in turns per minute, in hertz and electrical ones are one speed; an electrical one without its pole pairs is refused.
func TestRotorSpeedUnits(t *testing.T) {
	folder := recordingOf(t, "time_s,gx_deg_s,rpm_1,rotor_2_hz,erpm_3", 4000, func(i int) string { return fmt.Sprintf("%.4f,12000,200,84000", 20*wave(i, 90)) })
	_, _, err := run(t, folder, stage.Arguments{"file": "a.csv"})
	if f := fault.From(err); f == nil || f.Argument != "pole_pairs" || !strings.Contains(f.Text, "erpm_3") {
		t.Error(err)
	}
	for _, c := range []struct {
		rotors map[string]any
		poles  float64
	}{{map[string]any{"a": "rpm_1", "b": "rotor_2_hz"}, 0}, {map[string]any{"a": "erpm_3"}, 7}} {
		s, _, err := run(t, folder, stage.Arguments{"file": "a.csv", "rotors": c.rotors, "pole_pairs": c.poles})
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range s.Rotors {
			if math.Abs(r.Median-200*2*math.Pi) > 1e-6 {
				t.Errorf("%s at %g rad/s", r.Column, r.Median)
			}
		}
	}
}

// The rotor speed has a clock of its own, half as fast and two seconds late, in milliseconds: its step at 6 s of the gyro's clock is found
// there, and the pieces are cut there.
func TestClocks(t *testing.T) {
	folder := recordingOf(t, "time_s,gx_deg_s,clock_ms,rpm_1", 16000, func(i int) string {
		if i%2 == 1 || i/2 >= 6000 {
			return fmt.Sprintf("%.4f,,", 20*wave(i, 90))
		}
		at := 2 + float64(i/2)*0.002
		speed := 6000
		if at >= 6 {
			speed = 9000
		}
		return fmt.Sprintf("%.4f,%.3f,%d", 20*wave(i, 90), 1000*at, speed)
	})
	arguments := func() stage.Arguments {
		return stage.Arguments{"file": "a.csv", "columns": map[string]any{"time": "time_s"}, "clocks": map[string]any{"rpm_1": "clock_ms"}, "resolution": hertz(2)}
	}
	s, _, err := run(t, folder, arguments())
	if err != nil {
		t.Fatal(err)
	}
	edge := 0.0
	for _, r := range s.MapOf(0, kinds.MapTime) {
		if edge == 0 && r.Centre > 6 {
			edge = r.Centre
		}
	}
	if len(s.Pieces) < 3 {
		t.Fatalf("%+v", s.Pieces)
	}
	for _, p := range s.Pieces {
		if p.Used && p.To < 6.5 && (p.To < 4.5 || p.To > 6) || p.Used && p.From > 5 && (p.From < 6 || p.From > 7.5) {
			t.Errorf("a steady piece from %g to %g s, and the speed steps at 6 s", p.From, p.To)
		}
	}
	a := arguments()
	a["clocks"] = map[string]any{"gx_deg_s": "clock_ms", "rpm_1": "clock_ms"}
	if s, _, err = run(t, folder, a); err != nil || math.Abs(s.Rate-500) > 0.1 || math.Abs(s.From-2) > 1e-9 {
		t.Errorf("%v %v", s, err)
	}
	a["clocks"] = map[string]any{"time_s": "clock_ms"}
	if _, _, err = run(t, folder, a); err == nil || fault.From(err).Argument != "clocks" {
		t.Error(err)
	}
}

// Throttles in shares, per cent and pulses give one map; a set-point that the axis follows is coherent with it, one that it does not is not.
func TestThrottleAndSetPoints(t *testing.T) {
	state := uint32(9)
	noise := func() float64 { state = state*1664525 + 1013904223; return float64(state)/(1<<32) - 0.5 }
	for header, scale := range map[string]func(share float64) float64{
		"throttle":          func(v float64) float64 { return v },
		"throttle_pct":      func(v float64) float64 { return 100 * v },
		"throttle command":  nil, // what is asked for, not what is
		"collective":        func(v float64) float64 { return 100 * v },
		"throttle_us":       func(v float64) float64 { return 1000 + 1000*v },
		"throttle [pulses]": nil,
	} {
		var sp, low float64
		folder := recordingOf(t, "time_s,gyro_x_deg_s,gyro_y_deg_s,roll_rate_target,pitch_rate_target,"+header, 20000, func(i int) string {
			low += (40*noise() - low) * 0.1
			sp = low
			throttle := 0.3
			if i >= 10000 {
				throttle = 0.5
			}
			loud := 1.0
			if throttle == 0.5 {
				loud = 3
			}
			v := 0.0
			if scale != nil {
				v = scale(throttle)
			}
			return fmt.Sprintf("%.4f,%.4f,%.4f,%.4f,%.4f", sp+loud*wave(i, 200)+0.1*noise(), 10*noise(), sp, 10*noise(), v)
		})
		s, _, err := run(t, folder, stage.Arguments{"file": "a.csv", "resolution": hertz(4)})
		if header == "throttle [pulses]" {
			if err == nil || !strings.Contains(err.Error(), "no unit of throttle") {
				t.Errorf("%s: %v", header, err)
			}
			continue
		}
		if err != nil {
			t.Fatalf("%s: %v", header, err)
		}
		if len(s.SetPoints) != 2 || s.SetPoints[0].Axis != 0 || s.SetPoints[0].Column != "roll_rate_target" {
			t.Fatalf("%s: %+v", header, s.SetPoints)
		}
		k := int(10 / s.Step)
		if a, b := s.SetPoints[0].Coherence[k], s.SetPoints[1].Coherence[k]; a < 0.98 || b > 0.3 {
			t.Errorf("%s: coherence %g with what it follows, %g with what it does not", header, a, b)
		}
		cells := s.MapOf(0, kinds.MapThrottle)
		if scale == nil {
			if cells != nil {
				t.Errorf("%s makes a map", header)
			}
			continue
		}
		first, last := cells[0], cells[len(cells)-1]
		if math.Abs(first.Centre-0.3) > 0.01 || math.Abs(last.Centre-0.5) > 0.01 {
			t.Errorf("%s: from %g to %g", header, first.Centre, last.Centre)
		}
		line := int(math.Round(200 / first.Step))
		if ratio := last.Density[line] / first.Density[line]; math.Abs(ratio-9) > 2 {
			t.Errorf("%s: the line is %g times as strong, want 9", header, ratio)
		}
		if last := s.Pieces[len(s.Pieces)-1]; s.ChosenBy != kinds.MapThrottle || !last.Used || math.Abs(last.Level-0.5) > 0.01 {
			t.Errorf("%s: by %q, %+v", header, s.ChosenBy, last)
		}
	}
}

// A window of two parts, with a gap within one of them: its spectra come from the parts alone, no segment straddles, and what lies between
// the parts is not called a gap.
func TestParts(t *testing.T) {
	var text strings.Builder
	text.WriteString("time_s,gx_deg_s\n")
	for i := range 20000 {
		if i >= 14000 && i < 14100 {
			continue
		}
		f := 50.0
		if i >= 8000 && i < 12000 {
			f = 200 // between the parts
		}
		fmt.Fprintf(&text, "%g,%.4f\n", float64(i)/1000, 10*wave(i, f))
	}
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "a.csv"), []byte(text.String()), 0o600); err != nil {
		t.Fatal(err)
	}
	s, _, err := run(t, folder, stage.Arguments{"file": "a.csv", "window": seconds(1, 8, 12, 19), "resolution": hertz(2)})
	if err != nil {
		t.Fatal(err)
	}
	if s.Gaps != 1 || s.Missing != 100 || s.Samples < 13800 || s.Samples > 13910 || len(s.Pieces) != 2 {
		t.Errorf("%d gaps, %d missing, %d samples, %+v", s.Gaps, s.Missing, s.Samples, s.Pieces)
	}
	d := s.Axes[0].Density
	if at := int(200 / s.Step); d[at] > 1e-6*d[int(50/s.Step)] {
		t.Errorf("what lies between the parts shows: %g beside %g", d[at], d[int(50/s.Step)])
	}
	if _, _, err := run(t, folder, stage.Arguments{"file": "a.csv", "window": seconds(1, 8, 7, 19)}); err == nil || !strings.Contains(err.Error(), "begins before") {
		t.Error(err)
	}
}

// Cross spectra against what is known: pitch follows roll a quarter of a turn late at 90 Hz, with noise of its own.
func TestCoherenceOfAxes(t *testing.T) {
	state := uint32(5)
	noise := func() float64 { state = state*1664525 + 1013904223; return float64(state)/(1<<32) - 0.5 }
	folder := recordingOf(t, "time_s,gx_deg_s,gy_deg_s,gz_deg_s", 30000, func(i int) string {
		return fmt.Sprintf("%.5f,%.5f,%.5f", 10*wave(i, 90)+noise(), 5*math.Sin(2*math.Pi*90*float64(i)/1000-math.Pi/2)+noise(), 10*noise())
	})
	s, _, err := run(t, folder, stage.Arguments{"file": "a.csv", "resolution": hertz(2)})
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Cross) != 3 || s.Cross[0].A != 0 || s.Cross[0].B != 1 {
		t.Fatalf("%d pairs", len(s.Cross))
	}
	k := int(math.Round(90 / s.Step))
	x := s.Cross[0]
	if phase := math.Atan2(x.Imaginary[k], x.Real[k]); math.Abs(phase+math.Pi/2) > 0.02 || x.Coherence[k] < 0.999 {
		t.Errorf("phase %g, coherence %g", phase, x.Coherence[k])
	}
	if got, want := math.Hypot(x.Real[k], x.Imaginary[k]), math.Sqrt(s.Axes[0].Density[k]*s.Axes[1].Density[k]); math.Abs(got-want) > 1e-3*want {
		t.Errorf("cross density %g, want %g", got, want)
	}
	above, bins := 0, 0
	for b := 5; b < len(x.Coherence)-5; b++ {
		if b < k-3 || b > k+3 {
			bins++
			if x.Coherence[b] > s.CoherenceLimit {
				above++
			}
		}
	}
	// 95 % of the bins of noise lie below; that of 250 lies within 2 and 9 %.
	if share := float64(above) / float64(bins); share < 0.01 || share > 0.10 {
		t.Errorf("%.3f of the bins of noise exceed the limit of 0.95", share)
	}
}
