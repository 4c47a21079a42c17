package record

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

type silent struct{}

// alone reaches no extension.
type alone struct{ stage.Services }

func (alone) Extensions(context.Context) ([]stage.Extension, error) { return nil, nil }

func (silent) Progress(string, float64)        {}
func (silent) Log(stage.Level, string, ...any) {}

// run calls the stage with defaults filled in, as the host does.
func run(t testing.TB, folder string, arguments stage.Arguments) (*kinds.Spectra, *stage.Outcome, error) {
	t.Helper()
	s, second, o, err := runBoth(t, folder, arguments)
	if err == nil && len(second.Axes) > 0 {
		t.Errorf("a second sensor with %s", second.Axes[0].Column)
	}
	return s, o, err
}

// runBoth gives the spectra of the second sensor, too.
func runBoth(t testing.TB, folder string, arguments stage.Arguments) (first, second *kinds.Spectra, o *stage.Outcome, err error) {
	t.Helper()
	for _, a := range (Stage{}).Describe().Arguments {
		if _, given := arguments[a.Name]; !given && a.Default != nil {
			arguments[a.Name] = a.Default
		}
	}
	out, other := t.TempDir(), t.TempDir()
	o, err = Stage{}.Run(context.Background(), &stage.Call{
		Arguments: arguments, Outputs: map[string]string{"spectra": out, "accelerations": other}, Files: stage.NewFiles(folder), Threads: 1, Report: silent{}, Services: alone{},
	})
	if err != nil {
		if left, _ := os.ReadDir(out); len(left) > 0 {
			t.Errorf("a failed step left %v", left)
		}
		return nil, nil, nil, err
	}
	read := func(folder string) *kinds.Spectra {
		a, err := artifact.Open(folder, kinds.Registry())
		if err != nil {
			t.Fatal(err)
		}
		s, err := kinds.DecodeSpectra(a)
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
	return read(out), read(other), o, nil
}

func seconds(v ...float64) []any {
	var out []any
	for _, s := range v {
		out = append(out, stage.Quantity{SI: s, Dimension: "time"})
	}
	return out
}

const bad = "../../testdata/recordings/bad"

// Each bad recording with its whole message, as testdata/recordings/bad/expected.txt has it.
func TestBadRecordings(t *testing.T) {
	f, err := os.Open(filepath.Join(bad, "expected.txt"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	seen := map[string]bool{"expected.txt": true}
	for lines := bufio.NewScanner(f); lines.Scan(); {
		name, want, ok := strings.Cut(lines.Text(), " | ")
		if !ok {
			t.Fatalf("%q", lines.Text())
		}
		seen[name] = true
		arguments := stage.Arguments{"file": name}
		if name == "missing_column.csv" {
			arguments["columns"] = map[string]any{"roll": "gx_deg_s", "pitch": "-gy_deg_s", "yaw": "-gz_deg_s"}
		}
		_, _, err := run(t, bad, arguments)
		var e *fault.Error
		if !errors.As(err, &e) || e.Kind != fault.Input || e.Argument != "file" || e.Remedy == "" {
			t.Errorf("%s: %#v", name, err)
			continue
		}
		if e.Error() != want {
			t.Errorf("%s:\n got %s\nwant %s", name, e.Error(), want)
		}
	}
	entries, err := os.ReadDir(bad)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if !seen[e.Name()] {
			t.Errorf("%s has no expected message", e.Name())
		}
	}
}

// Arguments that contradict each other or the recording name the argument.
func TestBadArguments(t *testing.T) {
	folder := t.TempDir()
	write(t, filepath.Join(folder, "good.csv"), 4000, 2000)
	for _, c := range []struct {
		name, argument, text string
		arguments            stage.Arguments
	}{
		{"no file", "", "there is no such file", stage.Arguments{"file": "none.csv"}},
		{"no reader", "reader", `there is no reader "tape"`, stage.Arguments{"reader": "tape"}},
		{"no role", "columns", `there is no role "pitchh"; did you mean "pitch"? the roles are time, roll, pitch, yaw, x, y, z`,
			stage.Arguments{"columns": map[string]any{"pitchh": "gy"}}},
		{"one column twice", "columns", `column "gy" is given for roll and for pitch`, stage.Arguments{"columns": map[string]any{"roll": "gy", "pitch": "-#3"}}},
		{"rate and time", "rate", "both a time column and a rate",
			stage.Arguments{"columns": map[string]any{"time": "time_us"}, "rate": hertz(2000)}},
		{"one time", "window", "the window has 1 time", stage.Arguments{"window": seconds(1)}},
		{"backwards", "window", "has not begun", stage.Arguments{"window": seconds(3, 2)}},
		{"elsewhere", "window", "the recording runs from 4 s to 5.9995 s", stage.Arguments{"window": seconds(100, 200)}},
		{"too fine", "resolution", "the longest stretch without a gap has 4000 samples (2 s), a segment needs 20000; choose at least 0.5 Hz",
			stage.Arguments{"resolution": hertz(0.1)}},
		{"too wide", "resolution", "too wide for a rate of 2000 Hz", stage.Arguments{"resolution": hertz(900)}},
		{"band", "to", "has not begun", stage.Arguments{"from": hertz(100), "to": hertz(50)}},
		{"order", "orders", "order -1", stage.Arguments{"orders": []any{-1.0}}},
		{"unit", "file", `column "gx": "N" is no unit of angular rate`, stage.Arguments{"units": map[string]any{"gx": "N"}}},
		{"no such column", "file", `column "gw": the recording has no such column`, stage.Arguments{"units": map[string]any{"gw": "N"}}},
		{"option", "file", `no option "tabs"`, stage.Arguments{"options": map[string]any{"tabs": "4"}}},
	} {
		if !c.arguments.Has("file") {
			c.arguments["file"] = "good.csv"
		}
		_, _, err := run(t, folder, c.arguments)
		var e *fault.Error
		if !errors.As(err, &e) || e.Argument != c.argument || !strings.Contains(e.Error(), c.text) {
			t.Errorf("%s: %v (blames %q)", c.name, err, fault.From(err).Argument)
		}
	}
}

// write makes a recording whose tones are known: gyro in deg/s and rotor speed in rpm, times in µs from 4 s.
func write(t testing.TB, path string, rows int, rate float64) {
	t.Helper()
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	w := bufio.NewWriter(f)
	fmt.Fprintln(w, "time_us,gx,gy,gz,rpm_1,rpm_2")
	state := uint32(1)
	noise := func() float64 { state = state*1664525 + 1013904223; return float64(state)/4294967296 - 0.5 }
	for i := range rows {
		at := float64(i) / rate
		tone := func(f, a float64) float64 { return a * math.Sin(2*math.Pi*f*at) }
		fmt.Fprintf(w, "%d,%.4f,%.4f,%.4f,%d,%d\n", 4_000_000+int64(math.Round(at*1e6)), tone(160, 20)+noise(), tone(266.5, 5)+noise(), noise(), 15990, 12000)
	}
	if err := w.Flush(); err != nil {
		t.Fatal(err)
	}
}

// A recording without a word from the job: columns, units and window are found and told.
func TestFoundByName(t *testing.T) {
	folder := t.TempDir()
	write(t, filepath.Join(folder, "hover.csv"), 40000, 2000)
	s, o, err := run(t, folder, stage.Arguments{"file": "hover.csv", "window": seconds(8, 20), "blades": 3.0})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(s.Rate-2000) > 1e-6 || s.From != 8 || s.To != 20 || s.Samples != 24001 || s.Gaps != 0 {
		t.Errorf("rate %g, %g to %g, %d samples", s.Rate, s.From, s.To, s.Samples)
	}
	if len(s.Axes) != 3 || s.Axes[1].Axis != "pitch" || s.Axes[1].Column != "gy" || s.Axes[1].Unit != "rad/s" {
		t.Fatalf("%+v", s.Axes)
	}
	// A sine of 20 deg/s has the mean square 200 (deg/s)², to which uniform noise adds 1/12.
	if want := math.Sqrt(200+1.0/12) * degree; math.Abs(s.Axes[0].Deviation-want) > 1e-3*want {
		t.Errorf("rms %g, want %g", s.Axes[0].Deviation, want)
	}
	if len(s.Peaks) != 2 || s.Peaks[0].Axis != 0 || math.Abs(s.Peaks[0].Frequency-160) > 0.02 || s.Peaks[1].Axis != 1 ||
		math.Abs(s.Peaks[1].Frequency-266.5) > 0.02 || !s.Peaks[0].Narrow {
		t.Errorf("%+v", s.Peaks)
	}
	// 15990 rpm is 266.5 Hz.
	if len(s.Rotors) != 2 || s.Rotors[0].Rotor != "1" || math.Abs(s.Rotors[0].Median-266.5*2*math.Pi) > 1e-6 {
		t.Errorf("%+v", s.Rotors)
	}
	blade := 0
	for _, b := range s.Orders {
		if b.BladePassing {
			blade++
		}
		if b.Rotor == "1" && b.Order == 1 && (b.Low > 266.5 || b.High < 266.5 || b.High-b.Low > 4*s.Resolution) {
			t.Errorf("%+v", b)
		}
		// Order 5 is at 1332.5 Hz and appears at 667.5.
		if b.Rotor == "1" && b.Order == 5 && (!b.Folded || b.Low > 667.5 || b.High < 667.5) {
			t.Errorf("%+v", b)
		}
	}
	if blade != 2 {
		t.Errorf("%d bands of blade passing", blade)
	}
	told := strings.Join(o.Notes, "\n")
	for _, want := range []string{`time is column "time_us" by its name`, `roll is column "gx" by its name, in deg/s`,
		`the speed of rotor 2 is column "rpm_2" by its name, in rpm`, "separated by comma"} {
		if !strings.Contains(told, want) {
			t.Errorf("notes lack %q:\n%s", want, told)
		}
	}
	ids := ""
	for _, w := range o.Warnings {
		ids += w.ID + " "
	}
	if strings.Count(ids, "record.unit-assumed") != 3 {
		t.Errorf("warnings %s", ids)
	}
	checkFigures(t, o)
	if holds := o.Summary[1].Rows[1][7]; holds != "order 1" {
		t.Errorf("the peak at 266.5 Hz lies where %q is", holds)
	}
}

// checkFigures holds the outcome to the description.
func checkFigures(t *testing.T, o *stage.Outcome) {
	t.Helper()
	declared := map[string]bool{}
	for _, f := range (Stage{}).Describe().Figures {
		declared[f.Name] = true
		if _, ok := o.Figures[f.Name]; !ok {
			t.Errorf("no figure %s", f.Name)
		}
	}
	for name := range o.Figures {
		if !declared[name] {
			t.Errorf("figure %s is not declared", name)
		}
	}
	if _, err := stage.EncodeValues(o.Figures); err != nil {
		t.Error(err)
	}
}

// Columns, signs and units of the job; a sign changes the mean but no density.
func TestStatedColumns(t *testing.T) {
	folder := t.TempDir()
	write(t, filepath.Join(folder, "hover.csv"), 20000, 2000)
	plain, _, err := run(t, folder, stage.Arguments{"file": "hover.csv"})
	if err != nil {
		t.Fatal(err)
	}
	stated, o, err := run(t, folder, stage.Arguments{
		"file":    "hover.csv",
		"columns": map[string]any{"time": "time_us", "pitch": "-gx", "yaw": "+gy"},
		"rotors":  map[string]any{"fr": "rpm_2"},
		"units":   map[string]any{"gx": "rad/s", "time_us": "us", "gy": "deg/s", "rpm_2": "Hz"},
	})
	if err != nil {
		t.Fatal(err)
	}
	if len(stated.Axes) != 2 || stated.Axes[0].Axis != "pitch" || stated.Axes[0].Column != "-gx" || stated.Axes[1].Column != "gy" {
		t.Fatalf("%+v", stated.Axes)
	}
	if got, want := stated.Axes[0].Mean, -plain.Axes[0].Mean/degree; math.Abs(got-want) > 1e-9 {
		t.Errorf("mean %g, want %g", got, want)
	}
	k := int(math.Round(160 / plain.Step))
	if got, want := stated.Axes[0].Density[k], plain.Axes[0].Density[k]/degree/degree; math.Abs(got-want) > 1e-9*want {
		t.Errorf("density %g, want %g", got, want)
	}
	if stated.Rotors[0].Rotor != "fr" || math.Abs(stated.Rotors[0].Median-12000*2*math.Pi) > 1e-6 {
		t.Errorf("%+v", stated.Rotors)
	}
	for _, w := range o.Warnings {
		if w.ID == "record.unit-assumed" {
			t.Errorf("%+v", w)
		}
	}
}

// lines writes a recording from its lines.
func lines(t *testing.T, text []string) string {
	t.Helper()
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "r.csv"), []byte(strings.Join(text, "\n")+"\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	return folder
}

// What a recording lacks is told, each by its own warning.
func TestWarnings(t *testing.T) {
	text := []string{"t_us,gx_dps,gy_dps,gz_dps"}
	for i := range 3000 {
		at := float64(i) * 500
		if i%2 == 1 {
			at += 60 // steps of 560 and 440 µs: 12 % either way
		}
		held := math.Floor(float64(i)/3) * 3 // measured a third as often as logged
		text = append(text, fmt.Sprintf("%.0f,%.3f,%.3f,%.3f", at, max(-8, min(8, 10*math.Sin(float64(i)/9))), math.Sin(held), math.Sin(float64(i))))
	}
	_, o, err := run(t, lines(t, text), stage.Arguments{"file": "r.csv", "resolution": hertz(2)})
	if err != nil {
		t.Fatal(err)
	}
	got := map[string]string{}
	for _, w := range o.Warnings {
		got[w.ID] += w.Text
	}
	for id, want := range map[string]string{
		"record.saturated":      "samples of roll stay at an extreme of 8 deg/s",
		"record.jitter":         "differ by 12.0 %",
		"record.repeated":       "67 % of the samples of pitch equal the one before",
		"record.few-averages":   "only 5 segments",
		"record.no-rotor-speed": "no rotor speed is recorded",
	} {
		if !strings.Contains(got[id], want) {
			t.Errorf("%s: %q lacks %q", id, got[id], want)
		}
		delete(got, id)
	}
	if len(got) > 0 {
		t.Errorf("and %v", got)
	}
	if share := o.Figures["saturated"].(float64); share < 0.3 || share > 0.5 { // |sin| > 0.8 for 41 % of the time
		t.Errorf("saturated share %g", share)
	}
}

// A fault of the times names the row of the file, also where rows without samples lie between.
func TestRowOfAFault(t *testing.T) {
	text := []string{"t_ms,gx_dps,other"}
	for i := range 40 {
		at := i
		if i == 31 {
			at = 7
		}
		text = append(text, fmt.Sprintf("%d,%d,", at, i), fmt.Sprintf("%d,,5", at))
	}
	_, _, err := run(t, lines(t, text), stage.Arguments{"file": "r.csv"})
	if err == nil || !strings.Contains(err.Error(), `row 63, column "t_ms": time goes back by 0.023 s`) {
		t.Error(err)
	}
}

func TestSameBytes(t *testing.T) {
	folder := t.TempDir()
	write(t, filepath.Join(folder, "hover.csv"), 8000, 2000)
	var first string
	for range 3 {
		s, _, err := run(t, folder, stage.Arguments{"file": "hover.csv"})
		if err != nil {
			t.Fatal(err)
		}
		hash := kinds.EncodeSpectra(s).Hash()
		if first == "" {
			first = hash
		}
		if hash != first {
			t.Error("two runs differ")
		}
	}
}

func TestDescriptionHoldsTogether(t *testing.T) {
	d := Stage{}.Describe()
	for _, a := range d.Arguments {
		if a.About == "" || a.Example == "" {
			t.Errorf("argument %s lacks help", a.Name)
		}
	}
	if !strings.Contains(d.Doc, "one-sided Welch spectra") {
		t.Error("the help does not say what spectra these are")
	}
}

// A minute of flight at 2 kHz with three axes and two rotors.
func BenchmarkRun(b *testing.B) {
	folder := b.TempDir()
	write(b, filepath.Join(folder, "hover.csv"), 120000, 2000)
	for b.Loop() {
		if _, _, err := run(b, folder, stage.Arguments{"file": "hover.csv"}); err != nil {
			b.Fatal(err)
		}
	}
}

const usable = "../../testdata/recordings/usable"

// Each recording that is hurt and can be used all the same, with what is found, as testdata/recordings/usable/expected.txt has it. Their
// gyro rates lie on 80 Hz at 2 kHz.
func TestUsableRecordings(t *testing.T) {
	data, err := os.ReadFile(filepath.Join(usable, "expected.txt"))
	if err != nil {
		t.Fatal(err)
	}
	expected := map[string][]string{"expected.txt": nil}
	for line := range strings.Lines(string(data)) {
		name, want, ok := strings.Cut(strings.TrimSpace(line), " | ")
		if !ok {
			t.Fatalf("%q", line)
		}
		expected[name] = append(expected[name], want)
	}
	entries, err := os.ReadDir(usable)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		wants, ok := expected[e.Name()]
		if !ok {
			t.Errorf("%s has no expected findings", e.Name())
		}
		if len(wants) == 0 {
			continue
		}
		arguments := stage.Arguments{"file": e.Name(), "resolution": hertz(20)}
		if e.Name() == "no_times.txt" {
			arguments["options"] = map[string]any{"separator": "~"}
		}
		s, o, err := run(t, usable, arguments)
		if err != nil {
			t.Errorf("%s: %v", e.Name(), err)
			continue
		}
		if math.Abs(s.Rate-2000) > 1 || len(s.Axes) != 3 {
			t.Errorf("%s: %g Hz, %d axes", e.Name(), s.Rate, len(s.Axes))
		}
		var got []string
		for _, f := range s.Findings {
			if f.What != "alias" && f.What != "unit" { // short recordings without a filter, which these tests are not about
				got = append(got, fmt.Sprintf("%s: %s; %s", f.What, f.Extent, f.Consequence))
			}
		}
		got = append(got, o.Notes...)
		for _, want := range wants {
			if !slices.Contains(got, want) {
				t.Errorf("%s: %q is not among\n%s", e.Name(), want, strings.Join(got, "\n"))
			}
		}
	}
}
