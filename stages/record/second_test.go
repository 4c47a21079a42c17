package record

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"sort"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Gyro at 1 kHz with a tone of 90 Hz, accelerometer at 400 Hz with one of 130 Hz and rotor speeds at 50 Hz, each in rows of its own in
// one table: one step describes both sensors, each at its rate, with the orders of the rotor in both.
func TestSecondSensorInRowsOfItsOwn(t *testing.T) {
	type row struct {
		at   float64
		text string
	}
	var rows []row
	for i := range 20000 {
		at := float64(i) / 1000
		rows = append(rows, row{at, fmt.Sprintf("%.6f,%.4f,,", at, 20*math.Sin(2*math.Pi*90*at)+0.3*wave(i, 211.7))})
	}
	for i := range 8000 {
		at := 0.0003 + float64(i)/400
		rows = append(rows, row{at, fmt.Sprintf("%.6f,,%.5f,", at, 9.81+math.Sin(2*math.Pi*130*at))})
	}
	for i := range 1000 {
		at := 0.0007 + float64(i)/50
		rows = append(rows, row{at, fmt.Sprintf("%.6f,,,7800", at)})
	}
	sort.SliceStable(rows, func(a, b int) bool { return rows[a].at < rows[b].at })
	folder := recordingOf(t, "time_s,gx_deg_s,az_m_s2,rpm_1", len(rows), func(i int) string { _, rest, _ := strings.Cut(rows[i].text, ","); return rest })
	var text strings.Builder
	text.WriteString("time_s,gx_deg_s,az_m_s2,rpm_1\n")
	for _, r := range rows {
		text.WriteString(r.text + "\n")
	}
	if err := os.WriteFile(filepath.Join(folder, "a.csv"), []byte(text.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	arguments := func() stage.Arguments {
		return stage.Arguments{"file": "a.csv", "window": seconds(1, 19), "resolution": hertz(1), "from": hertz(20), "prominence": 20.0,
			"columns": map[string]any{"roll": "gx_deg_s", "z": "az_m_s2"}}
	}
	gyro, accelerometer, o, err := runBoth(t, folder, arguments())
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(gyro.Rate-1000) > 0.1 || math.Abs(accelerometer.Rate-400) > 0.1 || len(gyro.Axes) != 1 || len(accelerometer.Axes) != 1 || accelerometer.Axes[0].Axis != "z" {
		t.Fatalf("rates %g and %g, %d and %d axes", gyro.Rate, accelerometer.Rate, len(gyro.Axes), len(accelerometer.Axes))
	}
	if gyro.Gaps != 0 || accelerometer.Gaps != 0 || gyro.Samples != 18001 {
		t.Errorf("%d and %d gaps, %d samples", gyro.Gaps, accelerometer.Gaps, gyro.Samples)
	}
	strongest := func(s *kinds.Spectra) float64 {
		best := 0
		for i, p := range s.Peaks {
			if p.Density > s.Peaks[best].Density {
				best = i
			}
		}
		return s.Peaks[best].Frequency
	}
	if a, b := strongest(gyro), strongest(accelerometer); math.Abs(a-90) > 0.1 || math.Abs(b-130) > 0.1 {
		t.Errorf("tones at %g and %g Hz, want 90 and 130", a, b)
	}
	for _, s := range []*kinds.Spectra{gyro, accelerometer} {
		if len(s.Rotors) != 1 || len(s.Orders) == 0 || s.Orders[0].Low > 130 || s.Orders[0].High < 130 {
			t.Errorf("orders %+v of %+v", s.Orders, s.Rotors)
		}
	}
	axes := map[string]bool{}
	for _, p := range o.Figures["peaks"].([]any) {
		axes[p.(map[string]any)["axis"].(string)] = true
	}
	if !axes["roll"] || !axes["z"] {
		t.Errorf("peaks of %v", axes)
	}
	if told := strings.Join(o.Notes, "\n"); !strings.Contains(told, "a sensor of their own") || strings.Contains(told, "left out") {
		t.Error(told)
	}
	// A band that only the gyro reaches names the accelerometer's rate.
	a := arguments()
	a["resolution"] = hertz(40)
	if _, _, _, err := runBoth(t, folder, a); err == nil || fault.From(err).Argument != "resolution" || !strings.Contains(err.Error(), "400 Hz") {
		t.Error(err)
	}
}

// The gyro and the accelerometer of gyro_handheld_3200hz_gaps (3198.6 and 502.7 Hz, SOURCE.md), put into one table side by side with a
// clock each, and row by row in order of time: one step gives what a step of each file gives.
func TestHandheldInOneStep(t *testing.T) {
	source := open(t, "gyro_handheld_3200hz_gaps")
	lines := func(name string) []string {
		data, err := os.ReadFile(filepath.Join(source, name))
		if err != nil {
			t.Fatal(err)
		}
		return strings.Split(strings.TrimSpace(strings.ReplaceAll(string(data), "\r", "")), "\n")[1:]
	}
	gyro, accelerometer := lines("gyro.csv"), lines("accel_500hz.csv")
	const names = "gx_deg_s,gy_deg_s,gz_deg_s"
	beside, byRow := []string{"time_s," + names + ",other_s,ax_g,ay_g,az_g"}, []string{}
	for i, g := range gyro {
		a := ",,,"
		if i < len(accelerometer) {
			a = accelerometer[i]
		}
		beside = append(beside, g+","+a)
		byRow = append(byRow, g+",,,")
	}
	for _, a := range accelerometer {
		at, rest, _ := strings.Cut(a, ",")
		byRow = append(byRow, at+",,,,"+rest)
	}
	time := func(row string) float64 {
		at, _, _ := strings.Cut(row, ",")
		v, err := strconv.ParseFloat(at, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	sort.SliceStable(byRow, func(a, b int) bool { return time(byRow[a]) < time(byRow[b]) })
	byRow = append([]string{"time_s," + names + ",ax_g,ay_g,az_g"}, byRow...)
	folder := t.TempDir()
	for name, rows := range map[string][]string{"beside.csv": beside, "rows.csv": byRow} {
		if err := os.WriteFile(filepath.Join(folder, name), []byte(strings.Join(rows, "\n")+"\n"), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	wantGyro, _, err := run(t, source, stage.Arguments{"file": "gyro.csv"})
	if err != nil {
		t.Fatal(err)
	}
	wantAcceleration, _, err := run(t, source, stage.Arguments{"file": "accel_500hz.csv"})
	if err != nil {
		t.Fatal(err)
	}
	columns := map[string]any{"time": "time_s", "roll": "gx_deg_s", "pitch": "gy_deg_s", "yaw": "gz_deg_s", "x": "ax_g", "y": "ay_g", "z": "az_g"}
	for name, clocks := range map[string]map[string]any{"beside.csv": {"ax_g": "other_s", "ay_g": "other_s", "az_g": "other_s"}, "rows.csv": {}} {
		first, second, _, err := runBoth(t, folder, stage.Arguments{"file": name, "columns": columns, "clocks": clocks})
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		for of, pair := range map[string][2]*kinds.Spectra{"gyro": {first, wantGyro}, "accelerometer": {second, wantAcceleration}} {
			got, want := pair[0], pair[1]
			if got.Rate != want.Rate || got.Samples != want.Samples || got.Gaps != want.Gaps || math.Abs(got.From-want.From) > 1e-9 {
				t.Errorf("%s, %s: rate %g, %d samples, %d gaps from %g s, want %g, %d, %d, %g", name, of, got.Rate, got.Samples, got.Gaps, got.From, want.Rate, want.Samples, want.Gaps, want.From)
			}
			for i := range want.Axes {
				if i >= len(got.Axes) || got.Axes[i].Axis != want.Axes[i].Axis || !reflect.DeepEqual(got.Axes[i].Density, want.Axes[i].Density) {
					t.Errorf("%s, %s: axis %d differs from that of a step of its own", name, of, i)
				}
			}
		}
	}
}
