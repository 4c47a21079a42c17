package record

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// open returns a folder of the open data, each of which has a SOURCE.md with its origin, licence and what is known of it.
func open(t *testing.T, folder string) string {
	root := os.Getenv("HUSHFRAME_OPEN_DATA")
	if root == "" {
		t.Skip("HUSHFRAME_OPEN_DATA is not set, so the open recordings are not read")
	}
	return filepath.Join(root, folder)
}

// peakNear returns the peak of an axis nearest to a frequency.
func peakNear(t *testing.T, s *kinds.Spectra, axis int, f float64) kinds.SpectraPeak {
	t.Helper()
	best := kinds.SpectraPeak{Frequency: math.Inf(1)}
	for _, p := range s.Peaks {
		if p.Axis == axis && math.Abs(p.Frequency-f) < math.Abs(best.Frequency-f) {
			best = p
		}
	}
	return best
}

// SOURCE.md: tone along x, 100.00 Hz and 10.08 g peak, measured there from 7 to 9 s; the rate is 3134.31 Hz.
func TestShaker(t *testing.T) {
	folder := open(t, "accel_shaker_100hz")
	s, _, err := run(t, folder, stage.Arguments{
		"file": "accel_3134hz.csv", "window": seconds(7, 9), "resolution": hertz(1), "taper": "flat-top",
	})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(s.Rate-3134.31) > 0.2 { // the steps vary, so two seconds of them do not give the mean of all
		t.Errorf("rate %g", s.Rate)
	}
	p := peakNear(t, s, 0, 100)
	if math.Abs(p.Frequency-100) > 0.05 {
		t.Errorf("tone at %.4f Hz", p.Frequency)
	}
	// A line of amplitude a has the mean square a²/2, its density times the noise bandwidth.
	const g = 9.80665
	if peak := math.Sqrt(2*p.Density*s.Resolution) / g; math.Abs(peak-10.08) > 0.01*10.08 {
		t.Errorf("tone of %.3f g", peak)
	}
	for _, f := range []float64{200, 300} {
		if h := peakNear(t, s, 0, f); math.Abs(h.Frequency-f) > 0.5 {
			t.Errorf("no harmonic at %g Hz but at %g", f, h.Frequency)
		}
	}
	whole, _, err := run(t, folder, stage.Arguments{"file": "accel_3134hz.csv", "resolution": hertz(1), "taper": "flat-top"})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(whole.Rate-3134.31) > 0.01 {
		t.Errorf("rate of the whole %g", whole.Rate)
	}
	if w := peakNear(t, whole, 0, 100); w.Density > 0.8*p.Density {
		t.Errorf("the whole recording, with its quiet ends, is as loud as the steady part: %g and %g", w.Density, p.Density)
	}
}

// SOURCE.md: tones at 100, 120 and 150 Hz all through; 1600 Hz by the time column, whatever the header says; RMS 0.0781 g,
// level steady within 2 % between halves; force in pounds.
func TestBeamShaker(t *testing.T) {
	folder := open(t, "beam_shaker_tones")
	arguments := func(window ...float64) stage.Arguments {
		a := stage.Arguments{
			"file": "three_tones_1600hz.lvm", "columns": map[string]any{"time": "X_Value", "z": "Acceleratio"},
			"units": map[string]any{"Acceleratio": "g", "X_Value": "s"},
		}
		if window != nil {
			a["window"] = seconds(window...)
		}
		return a
	}
	s, o, err := run(t, folder, arguments())
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(s.Rate-1600) > 0.01 || s.Samples != 31521 {
		t.Errorf("rate %g, %d samples", s.Rate, s.Samples)
	}
	if !strings.Contains(strings.Join(o.Notes, "\n"), "separated by tab") {
		t.Errorf("%v", o.Notes)
	}
	if rms := math.Hypot(s.Axes[0].Deviation, s.Axes[0].Mean) / 9.80665; math.Abs(rms-0.0781) > 0.0001 {
		t.Errorf("rms %g g", rms)
	}
	for _, f := range []float64{100, 120, 150} {
		if p := peakNear(t, s, 0, f); math.Abs(p.Frequency-f) > s.Step || !p.Narrow {
			t.Errorf("tone of %g Hz: %+v", f, p)
		}
	}
	first, _, err := run(t, folder, arguments(0, 9.85))
	if err != nil {
		t.Fatal(err)
	}
	second, _, err := run(t, folder, arguments(9.85, 19.7))
	if err != nil {
		t.Fatal(err)
	}
	if ratio := first.Axes[0].Deviation / second.Axes[0].Deviation; math.Abs(ratio-1) > 0.02 {
		t.Errorf("halves differ by %g", ratio)
	}
}

// SOURCE.md: two gaps of 9.361 s after rows 2057 and 4114; 3217.6 Hz within a recording; time starts at 242.459 s.
func TestRecordingGaps(t *testing.T) {
	s, o, err := run(t, open(t, "accel_recording_gaps"), stage.Arguments{"file": "accel_3218hz.csv"})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(s.Rate-3217.6) > 0.1 || s.Gaps != 2 || math.Abs(s.From-242.459228) > 1e-6 {
		t.Errorf("rate %g, %d gaps, from %g s", s.Rate, s.Gaps, s.From)
	}
	if want := 2 * 9.361 * 3217.6; math.Abs(float64(s.Missing)-want) > 10 {
		t.Errorf("%d samples missing, want about %.0f", s.Missing, want)
	}
	// 2057 samples make 4 segments of 1024 by halves, or 15 of 256: in three runs, never across.
	n := (2057-s.Segment)/(s.Segment-s.Overlap) + 1
	if s.Segments != 3*n {
		t.Errorf("%d segments of %d samples, want 3 times %d", s.Segments, s.Segment, n)
	}
	found := false
	for _, w := range o.Warnings {
		found = found || w.ID == "record.gaps" && strings.Contains(w.Text, "2 gaps")
	}
	if !found {
		t.Errorf("%+v", o.Warnings)
	}
}

// SOURCE.md: 28 gaps of two lost samples, after every 1118 samples; 3198.6 Hz between samples and not 3191.8.
func TestHandheldGyro(t *testing.T) {
	folder := open(t, "gyro_handheld_3200hz_gaps")
	s, _, err := run(t, folder, stage.Arguments{"file": "gyro.csv"})
	if err != nil {
		t.Fatal(err)
	}
	// That rate is one over the median step, 312.6 µs; the mean step within blocks is 312.8 µs, as some steps are 316.8.
	if math.Abs(s.Rate-3198.6) > 2 || s.Gaps != 28 || s.Missing != 56 || s.Samples != 31820 {
		t.Errorf("rate %g, %d gaps, %d missing, %d samples", s.Rate, s.Gaps, s.Missing, s.Samples)
	}
	if s.Axes[0].Axis != "roll" || s.Axes[0].Column != "gyro_x_deg_s" || s.Axes[0].Quantity != "angular rate" {
		t.Errorf("%+v", s.Axes[0].Column)
	}
	if s.Segment > 1118 {
		t.Errorf("segments of %d samples do not fit between gaps", s.Segment)
	}
	a, _, err := run(t, folder, stage.Arguments{"file": "accel_500hz.csv"})
	if err != nil {
		t.Fatal(err)
	}
	// SOURCE.md calls it 502.7 Hz: 4968 rows over their duration. Its steps are 1.96 ms with some of 1.4 to 2.6 ms.
	if math.Abs(a.Rate-502.7) > 8 || a.Axes[2].Axis != "z" {
		t.Errorf("rate %g, %s", a.Rate, a.Axes[2].Axis)
	}
}

// SOURCE.md: rows of raw (1000 Hz, 3058 of 4587) and filtered values take turns; nanoseconds since 1970; raw step 1.0007 ms.
func TestInterleaved(t *testing.T) {
	s, o, err := run(t, open(t, "imu_interleaved_1khz_a"), stage.Arguments{
		"file": "imu_1khz.csv", "resolution": hertz(4), "window": seconds(0, 100),
		"columns": map[string]any{"roll": "scaledGyroX", "pitch": "scaledGyroY", "yaw": "scaledGyroZ", "z": "scaledAccelZ"},
		"units":   map[string]any{"scaledGyroX": "rad/s", "scaledGyroY": "rad/s", "scaledGyroZ": "rad/s", "scaledAccelZ": "g"},
	})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(s.Rate-1000) > 10 || s.Samples != 3058 {
		t.Errorf("rate %g, %d samples", s.Rate, s.Samples)
	}
	if s.From < 0 || s.From > 0.01 {
		t.Errorf("from %g s, though times are told from the first row", s.From)
	}
	told := strings.Join(o.Notes, "\n")
	for _, w := range o.Warnings {
		told += "\n" + w.Text
	}
	for _, want := range []string{`column "timestamp" states no unit and is taken in ns`, "counts from an epoch", "1529 of 4587 rows hold no sample"} {
		if !strings.Contains(told, want) {
			t.Errorf("notes lack %q:\n%s", want, told)
		}
	}
	// Gravity on z, moved by hand.
	if g := s.Axes[3].Mean / 9.80665; s.Axes[3].Axis != "z" || math.Abs(g-1) > 0.2 {
		t.Errorf("%s with a mean of %g g", s.Axes[3].Axis, g)
	}
}

// SOURCE.md: no time column, columns in the order z, x, y, rad/s; 3300 rows in 1.001 s.
func TestCameraGyro(t *testing.T) {
	folder := open(t, "gyro_camera_3300hz_1s")
	if _, _, err := run(t, folder, stage.Arguments{"file": "gyro_index_only.csv"}); err == nil || !strings.Contains(err.Error(), `state the rate, such as rate = "2 kHz"`) {
		t.Errorf("without a rate: %v", err)
	}
	s, _, err := run(t, folder, stage.Arguments{"file": "gyro_index_only.csv", "rate": hertz(3300 / 1.001)})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(s.Rate-3296.7) > 0.01 || s.Samples != 3300 {
		t.Errorf("rate %g, %d samples", s.Rate, s.Samples)
	}
	var columns []string
	for _, a := range s.Axes {
		columns = append(columns, a.Axis+" "+a.Column)
	}
	if got := strings.Join(columns, ", "); got != "roll gyro_x_rad_s, pitch gyro_y_rad_s, yaw gyro_z_rad_s" {
		t.Error(got)
	}
	text, err := os.ReadFile(filepath.Join(folder, "gyro_index_only.csv"))
	if err != nil {
		t.Fatal(err)
	}
	mean := 0.0
	for _, line := range strings.Fields(string(text))[1:] {
		x, err := strconv.ParseFloat(strings.Split(line, ",")[1], 64)
		if err != nil {
			t.Fatal(err)
		}
		mean += x / 3300
	}
	if math.Abs(s.Axes[0].Mean-mean) > 1e-12 {
		t.Errorf("mean of roll %g rad/s, that of the column of x is %g", s.Axes[0].Mean, mean)
	}
}

// SOURCE.md: true modes at 0.1812, 0.5289, 0.8338, 1.0711, 1.2217 Hz, which the simulation shifts by up to 2.7 %; 12 Hz, no time column.
func TestShearFrame(t *testing.T) {
	s, _, err := run(t, open(t, "oma_shear_frame_simulated"), stage.Arguments{
		"file": "accel_12hz.csv", "rate": hertz(12), "resolution": hertz(12.0 / 2048), "columns": map[string]any{"x": "#1", "y": "#2", "z": "#3"},
		"units": map[string]any{"level_*": "m/s2"}, "from": hertz(0.05), "to": hertz(1.5),
	})
	if err != nil {
		t.Fatal(err)
	}
	for i, f := range []float64{0.1812, 0.5289, 0.8338, 1.0711, 1.2217} {
		p := peakNear(t, s, 0, f)
		for axis := 1; axis < 3; axis++ { // not every level moves in every mode
			if q := peakNear(t, s, axis, f); math.Abs(q.Frequency-f) < math.Abs(p.Frequency-f) {
				p = q
			}
		}
		limit := 0.03
		if i < 2 {
			limit = 0.01
		}
		// The limits there are for the spectrum summed over the levels; a single level scatters by its own standard error.
		if math.Abs(p.Frequency-f) > limit*f+2*p.FrequencyError || p.FrequencyError > 0.02*f {
			t.Errorf("mode %d at %.4f ± %.4f Hz, true %.4f", i+1, p.Frequency, p.FrequencyError, f)
		}
	}
}

// What the stage says of each open recording, to be read with -v. The checks are those of the tests above.
func TestOpenRecordingsTold(t *testing.T) {
	for _, c := range []struct {
		folder, known string
		arguments     stage.Arguments
	}{
		{"gyro_handheld_3200hz_gaps", "3198.6 Hz by the median step, 28 gaps of two samples", stage.Arguments{"file": "gyro.csv"}},
		{"gyro_handheld_3200hz_gaps", "502.7 Hz by rows over time; first row all zero", stage.Arguments{"file": "accel_500hz.csv"}},
		{"gyro_camera_3300hz_1s", "no time column, 3296.7 Hz, steps of 1/939 rad/s", stage.Arguments{"file": "gyro_index_only.csv", "rate": hertz(3296.7), "units": map[string]any{"*": "rad/s"}}},
		{"imu_interleaved_1khz_a", "1000 Hz of 3058 raw rows among 4587, nanoseconds since 1970", stage.Arguments{"file": "imu_1khz.csv",
			"columns": map[string]any{"roll": "scaledGyroX", "pitch": "scaledGyroY", "yaw": "scaledGyroZ"}, "units": map[string]any{"scaledGyro*": "rad/s"}}},
		{"accel_recording_gaps", "3217.6 Hz, two gaps of 9.361 s", stage.Arguments{"file": "accel_3218hz.csv"}},
		{"accel_shaker_100hz", "3134.31 Hz; 100.00 Hz and 10.08 g peak on x from 7 to 9 s, harmonics 200, 300 Hz", stage.Arguments{"file": "accel_3134hz.csv",
			"window": seconds(7, 9), "resolution": hertz(1), "taper": "flat-top"}},
		{"beam_shaker_tones", "1600 Hz (the header states 51200), tones at 100, 120, 150 Hz, harmonics 300, 320 Hz", stage.Arguments{"file": "three_tones_1600hz.lvm",
			"columns": map[string]any{"time": "X_Value", "z": "Acceleratio"}, "units": map[string]any{"Acceleratio": "g", "X_Value": "s"}, "prominence": 35.0}},
		{"oma_shear_frame_simulated", "12 Hz; 0.1812, 0.5289, 0.8338, 1.0711, 1.2217 Hz, shifted by up to 2.7 %", stage.Arguments{"file": "accel_12hz.csv", "rate": hertz(12),
			"resolution": hertz(12.0 / 2048), "columns": map[string]any{"x": "#1", "y": "#2", "z": "#3"}, "units": map[string]any{"level_*": "m/s2"},
			"from": hertz(0.05), "to": hertz(1.5)}},
	} {
		s, _, err := run(t, open(t, c.folder), c.arguments)
		if err != nil {
			t.Errorf("%s: %v", c.folder, err)
			continue
		}
		var peaks, found []string
		for _, p := range s.Peaks {
			if len(peaks) < 12 {
				level := ""
				if p.Narrow { // a line of amplitude a has the mean square a²/2
					level = fmt.Sprintf(" (line of %.4g %s peak)", shownRate(s.Axes[0], math.Sqrt(2*p.Density*s.Resolution)), shownUnit(s.Axes[0]))
				}
				peaks = append(peaks, fmt.Sprintf("%s %.5g Hz%s", s.Axes[p.Axis].Axis, p.Frequency, level))
			}
		}
		for _, f := range s.Findings {
			found = append(found, f.What+": "+f.Extent)
		}
		t.Logf("%s, %s\n  known: %s\n  rate %.2f Hz, %d samples, %d gaps with %d missing, %d averages\n  peaks, the first dozen: %s\n  findings: %s", c.folder, c.arguments["file"], c.known,
			s.Rate, s.Samples, s.Gaps, s.Missing, s.Segments, strings.Join(peaks, ", "), strings.Join(found, " | "))
	}
}
