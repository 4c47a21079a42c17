package record

import (
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// rowsOf makes a recording of rows of numbers at 1 kHz.
func rowsOf(t *testing.T, header string, rows int, row func(i int) []float64) string {
	t.Helper()
	var text strings.Builder
	fmt.Fprintln(&text, header)
	for i := range rows {
		fmt.Fprintf(&text, "%g", float64(i)/1000)
		for _, v := range row(i) {
			fmt.Fprintf(&text, ",%.6g", v)
		}
		text.WriteByte('\n')
	}
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "a.csv"), []byte(text.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	return folder
}

func told(s *kinds.Spectra) string {
	var out []string
	for _, f := range s.Findings {
		out = append(out, f.What+"|"+f.Where+"|"+f.Extent)
	}
	return strings.Join(out, "\n")
}

// A recording whose times are not in the unit that they state, and a column of text where a rate is due, are told.
func TestSlowGyroAndText(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	var text strings.Builder
	fmt.Fprintln(&text, "time [s],gx [deg/s],gy [deg/s],rpm_1")
	for i := range 4000 {
		fmt.Fprintf(&text, "%d,%.3f,0x%x,%d rpm\n", i, random.NormFloat64(), i, i)
	}
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "a.csv"), []byte(text.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	s, o, err := run(t, folder, stage.Arguments{"file": "a.csv"})
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"unit|time [s]|the times make the rate 1 Hz, too slow for a gyro", "no numbers|gy [deg/s]|it would be pitch by its name", "no numbers|rpm_1|it would be the speed of rotor 1 by its name",
	} {
		if !strings.Contains(told(s), want) {
			t.Errorf("%q is not among\n%s", want, told(s))
		}
	}
	warned := ""
	for _, w := range o.Warnings {
		warned += w.ID + " "
	}
	if !strings.Contains(warned, "record.no-numbers") {
		t.Errorf("warnings: %s", warned)
	}
}

// A rate of the job that the times contradict is told; a clock coarser than the samples, or one with a gap, contradicts nothing.
func TestRateOfTheJobAndOfTheTimes(t *testing.T) {
	for name, c := range map[string]struct {
		time func(i int) float64
		rate float64
		told bool
	}{
		"the same":  {func(i int) float64 { return float64(i) }, 1000, false},
		"three":     {func(i int) float64 { return float64(i) }, 3000, true},
		"coarse":    {func(i int) float64 { return float64(i / 4) }, 4000, false},
		"with gaps": {func(i int) float64 { return float64(i + i/1000*500) }, 1000, false},
	} {
		var text strings.Builder
		fmt.Fprintln(&text, "time_ms,gx_deg_s")
		random := rand.New(rand.NewPCG(3, 4))
		for i := range 8000 {
			fmt.Fprintf(&text, "%g,%.3f\n", c.time(i), random.NormFloat64())
		}
		folder := t.TempDir()
		if err := os.WriteFile(filepath.Join(folder, "a.csv"), []byte(text.String()), 0o644); err != nil {
			t.Fatal(err)
		}
		s, _, err := run(t, folder, stage.Arguments{"file": "a.csv", "rate": hertz(c.rate)})
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if got := strings.Contains(told(s), "rate|time_ms|the job states 3000 Hz, this column makes it 1000 Hz"); got != c.told || !c.told && strings.Contains(told(s), "rate|") {
			t.Errorf("%s:\n%s", name, told(s))
		}
	}
}

// A sound recording has no findings; each fault put into one is found, with its extent.
func TestFindings(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	noise := func(rms float64) float64 { return rms * random.NormFloat64() }
	var low [2]float64
	rates := []float64{0.4 * 1000, 0.4 * 1000}
	for name, c := range map[string]struct {
		header string
		row    func(i int) []float64
		want   []string
		none   bool
	}{
		"sound": {"time_s,gx_deg_s,gy_deg_s,rpm_1", func(i int) []float64 { return []float64{noise(20), noise(20), 4000} }, nil, true},
		"steps": {"time_s,gx_deg_s,rpm_1", func(i int) []float64 { return []float64{math.Round(noise(20)/38) * 38, 4000} },
			[]string{"coarse steps|gx_deg_s|steps of 38 deg/s"}, false},
		"stuck": {"time_s,gx_deg_s,rpm_1", func(i int) []float64 {
			if i >= 3000 && i < 3500 {
				return []float64{7, 4000}
			}
			return []float64{noise(20), 4000}
		}, []string{"stuck|gx_deg_s|500 samples stay at 7 deg/s from 3 s"}, false},
		"constant": {"time_s,gx_deg_s,gy_deg_s,rpm_1", func(i int) []float64 { return []float64{0.1, noise(20), 4000} },
			[]string{"stuck|gx_deg_s|all samples are 0.1 deg/s"}, false},
		"spikes": {"time_s,gx_deg_s,rpm_1", func(i int) []float64 {
			if i == 3000 || i == 9000 {
				return []float64{20000, 4000}
			}
			return []float64{noise(20), 4000}
		}, []string{"spikes|gx_deg_s|2 samples stand out from those beside, up to 2e+04 deg/s, the first at 3 s, with 99.2 % of the mean square"}, false},
		"counts":  {"time_s,gx_deg_s,rpm_1", func(i int) []float64 { return []float64{noise(2000), 4000} }, []string{"the numbers may be counts of the sensor"}, false},
		"radians": {"time_s,gx_deg_s,rpm_1", func(i int) []float64 { return []float64{noise(0.1), 4000} }, []string{"unit|gx_deg_s|only 0.1 deg/s"}, false},
		"degrees": {"time_s,gx_rad_s,rpm_1", func(i int) []float64 { return []float64{noise(60), 4000} }, []string{"unit|gx_rad_s|reaches"}, false},
		"gravity": {"time_s,ax_m_s2,ay_m_s2,az_m_s2,rpm_1", func(i int) []float64 { return []float64{noise(0.1), noise(0.1), 1 + noise(0.1), 4000} },
			[]string{"m/s²: the numbers may be in g"}, false},
		"offset": {"time_s,gx_deg_s,rpm_1", func(i int) []float64 { return []float64{400 + noise(20), 4000} }, []string{"offset|gx_deg_s|mean of 400 deg/s"}, false},
		"mirror": {"time_s,gx_deg_s,rpm_1", func(i int) []float64 { return []float64{noise(20), 9600} }, []string{"alias||order 4 of 1 appears mirrored at 355 to 363 Hz",
			"alias||order 5 of 1 appears mirrored at 195 to 203 Hz", "alias||order 6 of 1 appears mirrored at 35 to 43 Hz"}, false},
		"filter": {"time_s,gx_deg_s,gy_deg_s,rpm_1", func(i int) []float64 {
			for d := range low {
				// Two first-order low-passes of 20 Hz in a row, ten steps a sample, so that little folds back.
				for range 10 {
					rates[d] += (noise(4000) - rates[d]) * 0.01249
					low[d] += (rates[d] - low[d]) * 0.01249
				}
			}
			return []float64{low[0], low[1], 4000}
		}, []string{"low-pass||the floor falls by"}, false},
		"no rotor": {"time_s,gx_deg_s", func(i int) []float64 { return []float64{noise(20)} }, []string{"alias||no filter before sampling shows"}, false},
	} {
		random = rand.New(rand.NewPCG(3, 4))
		s, o, err := run(t, rowsOf(t, c.header, 16000, c.row), stage.Arguments{"file": "a.csv"})
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		text := told(s)
		for _, want := range c.want {
			if !strings.Contains(text, want) {
				t.Errorf("%s: %q is not among\n%s", name, want, text)
			}
		}
		if len(c.want) > 0 && len(s.Findings) != len(c.want) {
			t.Errorf("%s:\n%s", name, text)
		}
		spiky := slices.ContainsFunc(o.Warnings, func(w stage.Warning) bool { return w.ID == "record.spikes" })
		if spiky != (name == "spikes") {
			t.Errorf("%s: warnings %+v", name, o.Warnings)
		}
		if c.none && len(s.Findings) > 0 {
			t.Errorf("%s:\n%s", name, text)
		}
		if shown := o.Summary[len(o.Summary)-1].Title == "Health of the recording"; shown != (len(s.Findings) > 0) {
			t.Errorf("%s: findings are shown: %v", name, shown)
		}
	}
}
