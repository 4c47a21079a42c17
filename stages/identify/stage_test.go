package identify

import (
	"bufio"
	"compress/gzip"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

type silent struct{}

func (silent) Progress(string, float64)        {}
func (silent) Log(stage.Level, string, ...any) {}

// run calls the stage with defaults filled in, as the host does.
func run(t testing.TB, folder string, arguments stage.Arguments) (*kinds.Identified, *stage.Outcome, error) {
	t.Helper()
	for _, a := range (Stage{}).Describe().Arguments {
		if _, given := arguments[a.Name]; !given && a.Default != nil {
			arguments[a.Name] = a.Default
		}
	}
	out := t.TempDir()
	o, err := Stage{}.Run(context.Background(), &stage.Call{
		Arguments: arguments, Outputs: map[string]string{"identified": out}, Files: stage.NewFiles(folder), Threads: 2, Report: silent{},
	})
	if err != nil {
		if left, _ := os.ReadDir(out); len(left) > 0 {
			t.Errorf("a failed step left %v", left)
		}
		return nil, nil, err
	}
	a, err := artifact.Open(out, kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	x, err := kinds.DecodeIdentified(a)
	if err != nil {
		t.Fatal(err)
	}
	return x, o, nil
}

const flights = "../../jobs/sandpiper/flights"

// truth are the modes behind the recording of the Sandpiper.
type truth struct {
	Modes []struct {
		Frequency float64    `json:"frequency_hz"`
		Damping   float64    `json:"damping_ratio"`
		Direction [3]float64 `json:"gyro_direction_roll_pitch_yaw"`
		Strength  float64    `json:"gyro_strength_deg_s_per_n"`
	} `json:"modes_at_hover_speed"`
}

func readTruth(t testing.TB) truth {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(flights, "hover-03-truth.json"))
	if err != nil {
		t.Fatal(err)
	}
	var out truth
	if err := json.Unmarshal(data, &out); err != nil {
		t.Fatal(err)
	}
	return out
}

// seen tells whether the gyro can see a mode apart from the others: its strength is at least a quarter of the greatest in the band,
// and no other mode of like direction, a third as strong or more, lies within the sum of their half-widths.
func (tr truth) seen(i int, from, to float64) bool {
	m := tr.Modes[i]
	if m.Frequency < from || m.Frequency > to {
		return false
	}
	for j, o := range tr.Modes {
		if o.Frequency >= from && o.Frequency <= to && m.Strength < o.Strength/4 {
			return false
		}
		cos := 0.0
		for d := range 3 {
			cos += m.Direction[d] * o.Direction[d]
		}
		if i != j && math.Abs(cos) > 0.8 && o.Strength > m.Strength/3 && math.Abs(o.Frequency-m.Frequency) < m.Frequency*m.Damping+o.Frequency*o.Damping {
			return false
		}
	}
	return true
}

// The Sandpiper's hover against its truth: every mode that the gyro can see apart is found, frequency within 1 % and
// damping within 30 %, along its direction; every mode that is told is a true one; no rotor order is told as a mode.
func TestSandpiper(t *testing.T) {
	x, o, err := run(t, flights, stage.Arguments{"file": "hover-03.csv.gz", "window": seconds(14, 72),
		"columns": map[string]any{"time": "time_us", "roll": "gx", "pitch": "-gy", "yaw": "-gz"},
		"units":   map[string]any{"gx": "deg/s", "gy": "deg/s", "gz": "deg/s"},
		"rotors":  map[string]any{"fl": "rpm_1", "fr": "rpm_2", "rl": "rpm_3", "rr": "rpm_4"}})
	if err != nil {
		t.Fatal(err)
	}
	print(t, o)
	tr := readTruth(t)
	seen := 0
	for i, want := range tr.Modes {
		apart := tr.seen(i, x.From, x.To)
		best := -1
		for k, m := range x.Modes {
			if m.Kind == kinds.ModeStructure && (best < 0 || math.Abs(m.Frequency-want.Frequency) < math.Abs(x.Modes[best].Frequency-want.Frequency)) {
				best = k
			}
		}
		if best < 0 {
			t.Fatal("no mode is found")
		}
		m := x.Modes[best]
		df, dz := m.Frequency/want.Frequency-1, m.Damping/want.Damping-1
		angle := angle(m.Direction, want.Direction)
		if want.Frequency >= x.From && want.Frequency <= x.To {
			t.Logf("true %7.2f Hz %.4f strength %5.1f apart %-5v | found %7.2f ± %.2f Hz %+.2f %%, %.4f ± %.4f %+.0f %%, %.0f° off", want.Frequency, want.Damping,
				want.Strength, apart, m.Frequency, m.FrequencyError, 100*df, m.Damping, m.DampingError, 100*dz, angle)
		}
		if !apart {
			continue
		}
		seen++
		if math.Abs(df) > 0.01 || math.Abs(dz) > 0.3 {
			t.Errorf("mode at %.2f Hz, damping %.4f: found %.2f ± %.2f Hz, %.4f ± %.4f", want.Frequency, want.Damping, m.Frequency, m.FrequencyError, m.Damping, m.DampingError)
		}
		if angle > 15 {
			t.Errorf("mode at %.2f Hz: direction %v is %.0f° off %v", want.Frequency, m.Direction, angle, want.Direction)
		}
	}
	if seen < 6 {
		t.Errorf("only %d modes can be seen apart, so little was tried", seen)
	}
	for _, m := range x.Modes {
		if m.Kind != kinds.ModeStructure {
			continue
		}
		real := false
		for _, want := range tr.Modes {
			real = real || math.Abs(m.Frequency/want.Frequency-1) < 0.015 && angle(m.Direction, want.Direction) < 20
		}
		if !real {
			t.Errorf("a mode at %.2f ± %.2f Hz, %.4f ± %.4f that is none", m.Frequency, m.FrequencyError, m.Damping, m.DampingError)
		}
	}
	if share := o.Figures["order_share"].(float64); share < 0.01 || share > 0.9 {
		t.Errorf("orders hold %.3f of an axis", share)
	}
}

// Without taking the orders out, their poles are told apart by their bands.
func TestSandpiperWithOrders(t *testing.T) {
	x, _, err := run(t, flights, stage.Arguments{"file": "hover-03.csv.gz", "window": seconds(14, 72), "remove": false,
		"columns": map[string]any{"time": "time_us", "roll": "gx", "pitch": "-gy", "yaw": "-gz"},
		"units":   map[string]any{"gx": "deg/s", "gy": "deg/s", "gz": "deg/s"}})
	if err != nil {
		t.Fatal(err)
	}
	lines := 0
	tr := readTruth(t)
	for _, m := range x.Modes {
		t.Logf("%s %.2f ± %.2f Hz, %.4f %s", m.Kind, m.Frequency, m.FrequencyError, m.Damping, m.Reason)
		switch m.Kind {
		case kinds.ModeLine:
			lines++
		case kinds.ModeStructure:
			real := false
			for _, want := range tr.Modes {
				real = real || math.Abs(m.Frequency/want.Frequency-1) < 0.02
			}
			if !real {
				t.Errorf("a mode at %.2f Hz that is none", m.Frequency)
			}
		}
	}
	if lines == 0 {
		t.Error("no pole is told to be a line, though four rotors turn")
	}
}

// With the speeds struck out of the recording, rotors are followed in the gyro itself and sharpened by the phase of their orders, which
// are taken out by them; every mode that is told is a true one, within 1 %, and no order of a rotor is.
func TestSandpiperWithoutSpeeds(t *testing.T) {
	file, err := os.Open(filepath.Join(flights, "hover-03.csv.gz"))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	unzipped, err := gzip.NewReader(file)
	if err != nil {
		t.Fatal(err)
	}
	var kept strings.Builder
	for lines := bufio.NewScanner(unzipped); lines.Scan(); {
		kept.WriteString(strings.Join(strings.Split(lines.Text(), ",")[:4], ",") + "\n")
	}
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "a.csv"), []byte(kept.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	// Too short to be sharpened: orders are told apart only, and that is said.
	x, o, err := run(t, folder, stage.Arguments{"file": "a.csv", "window": seconds(20, 25), "find_rotors": 2.0, "to": hertz(240),
		"columns": map[string]any{"time": "time_us", "roll": "gx", "pitch": "-gy", "yaw": "-gz"},
		"units":   map[string]any{"gx": "deg/s", "gy": "deg/s", "gz": "deg/s"}})
	if err != nil {
		t.Fatal(err)
	}
	if len(x.Removed) > 0 || len(x.Tracks) != 2 || !math.IsNaN(x.Tracks[0].SpeedError) || !strings.Contains(strings.Join(o.Notes, "\n"), "could not be sharpened") {
		t.Errorf("%d orders are taken out, %d tracks, %v", len(x.Removed), len(x.Tracks), o.Notes)
	}
	x, o, err = run(t, folder, stage.Arguments{"file": "a.csv", "window": seconds(14, 72), "find_rotors": 4.0,
		"columns": map[string]any{"time": "time_us", "roll": "gx", "pitch": "-gy", "yaw": "-gz"},
		"units":   map[string]any{"gx": "deg/s", "gy": "deg/s", "gz": "deg/s"}})
	if err != nil {
		t.Fatal(err)
	}
	print(t, o)
	tr := readTruth(t)
	modes := 0
	for _, m := range x.Modes {
		if m.Kind != kinds.ModeStructure {
			continue
		}
		modes++
		real := false
		for _, want := range tr.Modes {
			real = real || math.Abs(m.Frequency/want.Frequency-1) < 0.01 && angle(m.Direction, want.Direction) < 20
		}
		if !real {
			t.Errorf("a mode at %.2f ± %.2f Hz, %.4f that is none", m.Frequency, m.FrequencyError, m.Damping)
		}
	}
	if modes < 5 || !strings.Contains(strings.Join(o.Notes, "\n"), "sharpened by the phase") {
		t.Errorf("%d modes, %v", modes, o.Notes)
	}
	for _, track := range x.Tracks {
		if track.Source != kinds.TrackFollowed || !(track.SpeedError > 0 && track.SpeedError < 3) { // 3 rad/s are half a hertz, the resolution of a span
			t.Errorf("rotor %s, %s, is sure to ±%.2f rad/s", track.Rotor, track.Source, track.SpeedError)
		}
	}
	// The unbalance makes 5.73 deg/s rms of roll, by the same flight without it.
	first := 0.0
	for _, removed := range x.Removed {
		if removed.Axis == "roll" && removed.Order == 1 {
			first += removed.MeanSquare
		}
	}
	if got := math.Sqrt(first) * 180 / math.Pi; math.Abs(got/5.73-1) > 0.05 {
		t.Errorf("%.2f deg/s of order 1 are taken out of roll, 5.73 are there", got)
	}
}

func angle(a []float64, b [3]float64) float64 {
	cos := 0.0
	for d := range 3 {
		cos += a[d] * b[d]
	}
	return math.Acos(min(1, math.Abs(cos))) * 180 / math.Pi
}

func print(t testing.TB, o *stage.Outcome) {
	for _, s := range o.Summary {
		t.Log(s.Title, "|", s.Text)
		for _, row := range s.Rows {
			t.Log(strings.Join(row, " | "))
		}
	}
	t.Log(o.Notes, o.Warnings)
}

func seconds(v ...float64) []any {
	var out []any
	for _, s := range v {
		out = append(out, stage.Quantity{SI: s, Dimension: "time"})
	}
	return out
}

// What cannot be done is said, with the argument to blame.
func TestRefusals(t *testing.T) {
	folder := t.TempDir()
	var text strings.Builder
	text.WriteString("time_s,gx_deg_s\n")
	for i := range 300 {
		fmt.Fprintf(&text, "%g,%d\n", float64(i)/1000, i%7)
	}
	if err := os.WriteFile(filepath.Join(folder, "short.csv"), []byte(text.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	for argument, c := range map[string]struct {
		arguments stage.Arguments
		want      string
	}{
		"to":     {stage.Arguments{"to": hertz(490)}, "too near half the sample rate"},
		"from":   {stage.Arguments{"from": hertz(300)}, "where it has not begun"},
		"order":  {stage.Arguments{"order": 1.0}, "has no mode"},
		"orders": {stage.Arguments{"orders": []any{1.0, -2.0}}, "not above zero"},
		"file":   {stage.Arguments{}, "the longest stretch without a gap has 300 samples"},
	} {
		c.arguments["file"] = "short.csv"
		_, _, err := run(t, folder, c.arguments)
		var f *fault.Error
		if !errors.As(err, &f) || f.Kind != fault.Input || !strings.Contains(f.Error(), c.want) {
			t.Errorf("%s: %v", argument, err)
			continue
		}
		if blamed := map[string]string{"from": "to"}[argument]; f.Argument != argument && f.Argument != blamed {
			t.Errorf("%s: the fault blames %q", argument, f.Argument)
		}
	}
}
