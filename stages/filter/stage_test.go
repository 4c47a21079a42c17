package filter

import (
	"bytes"
	"context"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/filter"
	"hushframe/stages/kinds"
)

type silent struct{}

func (silent) Progress(string, float64)        {}
func (silent) Log(stage.Level, string, ...any) {}

// observed is a recording at 2 kHz: floor, a mode at 210 Hz on pitch, and order 1 of two rotors near 160 Hz on roll, held for half of
// the time at 155 and at 165 Hz.
func observed() *kinds.Spectra {
	s := &kinds.Spectra{Rate: 2000, Step: 0.5, Segment: 4000, Overlap: 2000, Segments: 50, Level: 0.95}
	for _, name := range []string{"roll", "pitch"} {
		a := kinds.SpectraAxis{Axis: name, Quantity: "angular rate", Unit: "rad/s", Column: "g"}
		for k := range 2001 {
			f := float64(k) * s.Step
			v := 1e-6
			if name == "pitch" {
				v += 1e-3 * math.Exp(-math.Pow((f-210)/4, 2))
			}
			a.Density = append(a.Density, v)
		}
		s.Axes = append(s.Axes, a)
	}
	s.Axes[0].Density[310], s.Axes[0].Density[330] = 0.01, 0.01
	s.Peaks = []kinds.SpectraPeak{{Axis: 1, Frequency: 210, Density: 1e-3, Lower: 206, Upper: 214}, {Axis: 0, Frequency: 155, Density: 0.01}}
	s.Rotors = []kinds.SpectraRotor{{Rotor: "a", Median: 160 * 2 * math.Pi, Low: 154 * 2 * math.Pi, High: 166 * 2 * math.Pi}}
	s.Orders = []kinds.OrderBand{{Rotor: "a", Order: 1, Low: 150, High: 170, Share: 1}}
	return s
}

// identified knows the course of the rotors and what their order holds.
func identified() *kinds.Identified {
	x := &kinds.Identified{Rate: 2000, Step: 0.5, Orders: observed().Orders}
	for _, a := range observed().Axes {
		after := append([]float64{}, a.Density...)
		if a.Axis == "roll" {
			after[310], after[330] = 1e-6, 1e-6
		}
		x.Channels = append(x.Channels, kinds.IdentifiedChannel{Axis: a.Axis, Quantity: "angular rate"})
		x.Densities = append(x.Densities, kinds.IdentifiedDensity{Axis: a.Axis, Before: a.Density, After: after})
		x.Singular = append(x.Singular, after)
	}
	for _, rotor := range []string{"a", "b"} {
		x.Tracks = append(x.Tracks, kinds.RotorTrack{Rotor: rotor, Time: []float64{0, 1}, Speed: []float64{155 * 2 * math.Pi, 165 * 2 * math.Pi}})
	}
	return x
}

// predicted is a flat response from 100 to 500 Hz.
func predicted() *kinds.Response {
	r := &kinds.Response{From: 100, To: 500, ModesTo: 750}
	for f := 100.0; f <= 500; f++ {
		r.Frequency = append(r.Frequency, f)
		for axis := range r.Density {
			r.Density[axis] = append(r.Density[axis], 1e-6)
			r.Uncorrected[axis] = append(r.Uncorrected[axis], math.NaN())
		}
	}
	return r
}

func quantity(v float64, dimension string) stage.Quantity {
	return stage.Quantity{SI: v, Dimension: dimension}
}

// run calls the stage with defaults filled in, as the host does.
func run(t *testing.T, arguments stage.Arguments, inputs ...*artifact.Artifact) (*kinds.Filtered, *stage.Outcome, string, error) {
	t.Helper()
	for _, a := range (Stage{}).Describe().Arguments {
		if _, given := arguments[a.Name]; !given && a.Default != nil {
			arguments[a.Name] = a.Default
		}
	}
	names := map[string]string{"spectra": "observed", "response": "predicted", "identified": "identified"}
	call := &stage.Call{Arguments: arguments, Inputs: map[string][]stage.Input{}, Outputs: map[string]string{"filtered": t.TempDir()}, Report: silent{}}
	for _, a := range inputs {
		folder := t.TempDir()
		if _, err := artifact.Write(folder, a); err != nil {
			t.Fatal(err)
		}
		call.Inputs[names[a.Kind.Name]] = []stage.Input{{Folder: folder, Kind: a.Kind.Name}}
	}
	o, err := Stage{}.Run(context.Background(), call)
	if err != nil {
		return nil, nil, "", err
	}
	a, err := artifact.Open(call.Outputs["filtered"], kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	x, err := kinds.DecodeFiltered(a)
	if err != nil {
		t.Fatal(err)
	}
	return x, o, call.Outputs["filtered"], nil
}

func filters(list ...map[string]any) []any {
	var out []any
	for _, m := range list {
		out = append(out, m)
	}
	return out
}

// Row F-CHAIN-DELAY of testdata/known/F_signals.json through the stage: delay of each filter and of the chain at 30 Hz, magnitude and phase.
func TestChainDelay(t *testing.T) {
	row := known.One(t, "F_signals.json", "F-CHAIN-DELAY")
	x, o, _, err := run(t, stage.Arguments{"control_bandwidth": hertz(30), "filters": filters(
		map[string]any{"type": "first-order", "at": hertz(150)}, map[string]any{"type": "first-order", "at": hertz(250)},
		map[string]any{"type": "notch", "at": hertz(200), "q": 3.5}, map[string]any{"type": "notch", "at": hertz(400), "q": 3.5},
	)}, kinds.EncodeSpectra(observed()))
	if err != nil {
		t.Fatal(err)
	}
	var got []float64
	for _, f := range x.Filters {
		got = append(got, 1e3*f.GroupDelay)
	}
	row.Check(t, 1, append(got, 1e3*x.GroupDelay, x.Gain, -x.Lag)...)
	if lag := o.Figures["lag"].(stage.Quantity).SI; math.Abs(lag/(2*math.Pi*30)-x.Delay) > 1e-15 || lag != x.Lag {
		t.Errorf("lag %g rad, phase delay %g s", lag, x.Delay)
	}
}

// The curves of the artifact are the magnitudes of rows F-BIQUAD-LPF-150, F-PT2-EULER-100 and F-NOTCH-200-Q3.5.
func TestCurves(t *testing.T) {
	for id, f := range map[string]map[string]any{
		"F-BIQUAD-LPF-150": {"type": "low-pass", "at": hertz(150)},
		"F-PT2-EULER-100":  {"type": "first-order", "at": hertz(100), "count": 2.0},
		"F-NOTCH-200-Q3.5": {"type": "notch", "at": hertz(200), "q": 3.5},
	} {
		row := known.One(t, "F_signals.json", id)
		x, _, _, err := run(t, stage.Arguments{"filters": filters(f)}, kinds.EncodeSpectra(observed()))
		if err != nil {
			t.Fatal(err)
		}
		tried := 0
		for i, label := range row.Labels {
			text, ok := strings.CutPrefix(label, "|H| ")
			if !ok {
				continue
			}
			at, err := strconv.ParseFloat(strings.TrimSuffix(text, " Hz"), 64)
			if err != nil {
				t.Fatal(label)
			}
			for _, c := range x.Curves {
				if c.Frequency != at {
					continue
				}
				tried++
				if got := math.Sqrt(c.Power); math.Abs(got-row.Values[i]) > row.TolRel[i]*math.Abs(row.Values[i])+row.TolAbs[i] {
					t.Errorf("%s at %g Hz: %.12g, want %.12g", id, at, got, row.Values[i])
				}
			}
		}
		if tried < 5 {
			t.Errorf("%s: only %d frequencies were compared", id, tried)
		}
	}
}

// A notch that follows takes the order out where identify told it from the rest, and says less where it did not.
func TestRotorNotch(t *testing.T) {
	chain := func() stage.Arguments {
		return stage.Arguments{"filters": filters(map[string]any{"type": "rotor-notch", "order": 1.0}), "band": []any{hertz(100), hertz(500)}}
	}
	x, o, _, err := run(t, chain(), kinds.EncodeSpectra(observed()), kinds.EncodeIdentified(identified()), kinds.EncodeResponse(predicted()))
	if err != nil {
		t.Fatal(err)
	}
	f := x.Filters[0]
	if f.Count != 2 || math.Abs(f.Frequency-160) > 1e-9 || f.Name != "rotor-notch order 1 Q 5" {
		t.Errorf("%+v", f)
	}
	// Roll keeps its floor, less what the notches take of it.
	floor := math.Sqrt(1e-6 * 0.5 * 801)
	if left := x.Axes[0].ObservedLeft; !(left < floor) || left < 0.8*floor {
		t.Errorf("%g is left of a floor of %g", left, floor)
	}
	if f.Buys[0] < 10 || f.Buys[1] > 1.5 || f.Buys[1] < 0 {
		t.Errorf("it buys %v dB", f.Buys)
	}
	// White noise of the prediction: the mean power over the flight, as core/signal/filter gives it.
	train := filter.Train{Rate: 8000, Filters: []filter.Filter{{Follow: &filter.Follower{Order: 1, Q: 5, Lowest: 60}}}, Speeds: [][]float64{{155, 165}, {155, 165}}}
	for i, c := range x.Curves {
		if c.Frequency == 150 {
			if got, want := x.Axes[1].PredictedAfter[i], 1e-6*train.Power(150); math.Abs(got/want-1) > 1e-9 {
				t.Errorf("prediction behind the chain at 150 Hz: %g, want %g", got, want)
			}
		}
		if c.Frequency == 99.5 && !math.IsNaN(x.Axes[0].PredictedAfter[i]) {
			t.Error("there is a prediction outside the sweep")
		}
	}
	if len(o.Warnings) > 0 {
		t.Errorf("%v", o.Warnings)
	}
	y, o, _, err := run(t, chain(), kinds.EncodeSpectra(observed()))
	if err != nil {
		t.Fatal(err)
	}
	if y.Axes[0].ObservedLeft <= x.Axes[0].ObservedLeft {
		t.Errorf("%g is left without knowing the order, %g with", y.Axes[0].ObservedLeft, x.Axes[0].ObservedLeft)
	}
	if !strings.Contains(strings.Join(o.Notes, "\n"), "give identified") {
		t.Errorf("%v", o.Notes)
	}
}

// A chain is chosen that meets the target, and two runs give the same bytes.
func TestChosen(t *testing.T) {
	arguments := func(residual float64) stage.Arguments {
		return stage.Arguments{"residual": quantity(residual, "angular rate")}
	}
	x, o, folder, err := run(t, arguments(0.025), kinds.EncodeSpectra(observed()), kinds.EncodeIdentified(identified()))
	if err != nil {
		t.Fatal(err)
	}
	if !x.Chosen || !x.Met || o.Figures["met"] != true || len(x.Tried) == 0 {
		t.Errorf("%+v", o.Figures)
	}
	for _, a := range x.Axes {
		if a.ObservedLeft > 0.025 {
			t.Errorf("%s keeps %g", a.Axis, a.ObservedLeft)
		}
	}
	if x.Filters[0].Type != kinds.FilterRotorNotch {
		t.Errorf("the line that holds most is not followed: %+v", x.Filters)
	}
	for i, c := range x.Tried {
		if i > 0 && c.Lag < x.Tried[i-1].Lag {
			t.Error("the chains weighed are not by rising lag")
		}
	}
	_, _, again, err := run(t, arguments(0.025), kinds.EncodeSpectra(observed()), kinds.EncodeIdentified(identified()))
	if err != nil {
		t.Fatal(err)
	}
	names, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	for _, n := range names {
		a, err1 := os.ReadFile(filepath.Join(folder, n.Name()))
		b, err2 := os.ReadFile(filepath.Join(again, n.Name()))
		if err1 != nil || err2 != nil || !bytes.Equal(a, b) {
			t.Errorf("%s differs between two runs", n.Name())
		}
	}
	x, o, _, err = run(t, arguments(1e-6), kinds.EncodeSpectra(observed()))
	if err != nil {
		t.Fatal(err)
	}
	if x.Met || len(o.Warnings) == 0 || o.Warnings[0].ID != "filter.target-missed" {
		t.Errorf("an impossible target is met: %v", o.Warnings)
	}
}

// What is wrong is said with the argument to blame, and nothing is written.
func TestRefuses(t *testing.T) {
	one := func(m map[string]any) stage.Arguments { return stage.Arguments{"filters": filters(m)} }
	still := observed()
	still.Rotors = nil
	silentAxes := observed()
	for i := range silentAxes.Axes {
		silentAxes.Axes[i].Quantity = "acceleration"
	}
	for text, c := range map[string]struct {
		arguments stage.Arguments
		spectra   *kinds.Spectra
		argument  string
	}{
		"neither a chain":     {stage.Arguments{}, observed(), "filters"},
		"no filter":           {stage.Arguments{"filters": []any{}}, observed(), "filters"},
		"has no frequency":    {one(map[string]any{"type": "notch"}), observed(), "filters"},
		"has no q":            {one(map[string]any{"type": "first-order", "at": hertz(100), "q": 2.0}), observed(), "filters"},
		"only first-order":    {one(map[string]any{"type": "notch", "at": hertz(100), "count": 2.0}), observed(), "filters"},
		"follows no order":    {one(map[string]any{"type": "notch", "at": hertz(100), "order": 2.0}), observed(), "filters"},
		"too near half":       {one(map[string]any{"type": "low-pass", "at": hertz(3900)}), observed(), "filters"},
		"more than 8":         {one(map[string]any{"type": "first-order", "at": hertz(100), "count": 9.0}), observed(), "filters"},
		"need cut-offs":       {one(map[string]any{"type": "first-order", "at": hertz(2000), "count": 4.0}), observed(), "filters"},
		"narrower":            {one(map[string]any{"type": "notch", "at": hertz(200), "q": 1e6}), observed(), "filters"},
		"no rotor speed":      {one(map[string]any{"type": "rotor-notch"}), still, "filters"},
		"the band has 1":      {stage.Arguments{"residual": quantity(1, "angular rate"), "band": []any{hertz(80)}}, observed(), "band"},
		"second frequency":    {stage.Arguments{"residual": quantity(1, "angular rate"), "band": []any{hertz(80), hertz(70)}}, observed(), "band"},
		"nothing is left":     {stage.Arguments{"residual": quantity(1, "angular rate"), "band": []any{hertz(1200), hertz(1300)}}, observed(), "band"},
		"cannot run":          {stage.Arguments{"residual": quantity(1, "angular rate"), "control_bandwidth": hertz(3000)}, observed(), "control_bandwidth"},
		"not above zero":      {stage.Arguments{"residual": quantity(1, "angular rate"), "follow_orders": []any{-1.0}}, observed(), "follow_orders"},
		"has no angular rate": {stage.Arguments{"residual": quantity(1, "angular rate")}, silentAxes, "observed"},
	} {
		_, _, _, err := run(t, c.arguments, kinds.EncodeSpectra(c.spectra))
		var f *fault.Error
		if !errors.As(err, &f) || f.Argument != c.argument || f.Remedy == "" || !strings.Contains(f.Text+f.Remedy, text) {
			t.Errorf("%s: %v", text, err)
		}
	}
}
