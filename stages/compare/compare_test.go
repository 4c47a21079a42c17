package compare

import (
	"context"
	"errors"
	"math"
	"os"
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

// resonance is |H|² of a single degree of freedom of unit static gain.
func resonance(f, f0, zeta float64) float64 {
	r := f / f0
	return 1 / ((1-r*r)*(1-r*r) + 4*zeta*zeta*r*r)
}

// predicted is a response with peaks at 150 and 300 Hz on roll, 210 and 262 on pitch and none on yaw.
func predicted() *kinds.Response {
	r := &kinds.Response{From: 100, To: 500, ModesTo: 750,
		Rotors: []kinds.ResponseRotor{{Rotor: "fr", Blades: 3, Hover: 1676, Highest: 3456}}}
	for f := 100.0; f <= 500; f += 0.7 {
		r.Frequency = append(r.Frequency, f)
		r.Density[0] = append(r.Density[0], 1e-6*(resonance(f, 150, 0.01)+resonance(f, 300, 0.01)))
		r.Density[1] = append(r.Density[1], 1e-6*(resonance(f, 210, 0.01)+resonance(f, 262, 0.01)))
		r.Density[2] = append(r.Density[2], 1e-8)
		for axis := range r.Uncorrected {
			r.Uncorrected[axis] = append(r.Uncorrected[axis], math.NaN())
		}
	}
	for i, p := range []struct {
		axis string
		f    float64
	}{{"roll", 150}, {"roll", 300}, {"pitch", 210}, {"pitch", 262}} {
		r.Peaks = append(r.Peaks, kinds.ResponsePeak{Axis: p.axis, Frequency: p.f, Density: 1e-3, Prominence: 100, Damping: 0.01,
			Modes: []int{i + 1}, Shares: []float64{1}, Uncorrected: math.NaN(), Rotor: "fr"})
	}
	for _, axis := range kinds.AxisNames {
		r.Axes = append(r.Axes, kinds.ResponseAxis{Axis: axis})
	}
	return r
}

// observed is the recording of a frame whose modes lie 4 % lower and whose source is a hundred times as strong (in power),
// with a rotor at 255 to 275 Hz, a line of it on pitch at 266 and one peak that no model knows at 400 Hz on yaw.
func observed() *kinds.Spectra {
	s := &kinds.Spectra{
		Rate: 2000, Step: 0.5, Resolution: 0.75, Window: "hann", Segment: 4000, Overlap: 2000, Segments: 50, Freedom: 95, Level: 0.95, Lower: 0.75, Upper: 1.3,
		Rotors: []kinds.SpectraRotor{{Rotor: "1", Column: "rpm_1", Median: 1670, Low: 1600, High: 1730}},
	}
	densities := [3]func(f float64) float64{
		func(f float64) float64 { return 1e-4 * (resonance(f, 150/1.04, 0.01) + resonance(f, 300/1.04, 0.01)) },
		func(f float64) float64 {
			return 1e-4*(resonance(f, 210/1.04, 0.01)+resonance(f, 262/1.04, 0.01)) + 1*math.Exp(-math.Pow((f-266)/5, 2))
		},
		func(f float64) float64 { return 1e-6 },
	}
	for axis, name := range kinds.AxisNames {
		a := kinds.SpectraAxis{Axis: name, Quantity: "angular rate", Unit: "rad/s", Column: "g"}
		for k := range 2001 {
			a.Density = append(a.Density, densities[axis](float64(k)*s.Step))
		}
		s.Axes = append(s.Axes, a)
	}
	for _, p := range []struct {
		axis int
		f    float64
	}{{0, 60}, {0, 150 / 1.04}, {0, 300 / 1.04}, {0, 600}, {1, 210 / 1.04}, {1, 262 / 1.04}, {1, 266}, {1, 800}, {2, 400}} {
		s.Peaks = append(s.Peaks, kinds.SpectraPeak{Axis: p.axis, Frequency: p.f, FrequencyError: 0.1, Density: 0.1, Prominence: 50,
			Damping: 0.01, DampingError: 0.002, Narrow: p.f == 266})
	}
	for _, n := range []float64{1, 2, 3, 4} {
		s.Orders = append(s.Orders, kinds.OrderBand{Rotor: "1", Order: n, Low: 255 * n, High: 275 * n, Share: 0.98})
	}
	return s
}

func run(t *testing.T, p *kinds.Response, o *kinds.Spectra, arguments stage.Arguments) (*kinds.Comparison, *stage.Outcome, error) {
	t.Helper()
	for _, a := range (Stage{}).Describe().Arguments {
		if _, given := arguments[a.Name]; !given && a.Default != nil {
			arguments[a.Name] = a.Default
		}
	}
	left, right, out := t.TempDir(), t.TempDir(), t.TempDir()
	if _, err := artifact.Write(left, kinds.EncodeResponse(p)); err != nil {
		t.Fatal(err)
	}
	if _, err := artifact.Write(right, kinds.EncodeSpectra(o)); err != nil {
		t.Fatal(err)
	}
	outcome, err := Stage{}.Run(context.Background(), &stage.Call{
		Arguments: arguments, Outputs: map[string]string{"comparison": out}, Report: silent{},
		Inputs: map[string][]stage.Input{"predicted": {{Folder: left, Kind: "response"}}, "observed": {{Folder: right, Kind: "spectra"}}},
	})
	if err != nil {
		if files, _ := os.ReadDir(out); len(files) > 0 {
			t.Errorf("a failed step left %v", files)
		}
		return nil, nil, err
	}
	a, err := artifact.Open(out, kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	c, err := kinds.DecodeComparison(a)
	if err != nil {
		t.Fatal(err)
	}
	return c, outcome, nil
}

func TestPairsAndTheRest(t *testing.T) {
	c, o, err := run(t, predicted(), observed(), stage.Arguments{})
	if err != nil {
		t.Fatal(err)
	}
	// Three pairs are 4 % off by construction. The pitch mode at 262 Hz has its true partner at 251.9, below the rotor's
	// band, and must find it though it lies in the band itself.
	if len(c.Pairs) != 4 || c.From != 80 || c.To != 800 {
		t.Fatalf("%+v", c.Pairs)
	}
	for _, p := range c.Pairs {
		if math.Abs(p.Error-0.04) > 1e-9 || p.Confidence < 0.5 || p.Confidence > 1 || p.ObservedError != 0.1 || len(p.Modes) != 1 {
			t.Errorf("%+v", p)
		}
	}
	if c.Pairs[3].Axis != "pitch" || math.Abs(c.Pairs[3].Predicted-262) > 1e-9 {
		t.Errorf("%+v", c.Pairs[3])
	}
	// 266 Hz is order 1 and 800 Hz blade passing, as the airframe has three blades; 60 Hz is below the band.
	if len(c.Masked) != 2 || c.Masked[0].Frequency != 266 || !strings.Contains(c.Masked[0].Reason, "order 1 of rotor 1") ||
		c.Masked[1].Frequency != 800 || !strings.Contains(c.Masked[1].Reason, "blade passing of rotor 1") {
		t.Errorf("%+v", c.Masked)
	}
	if len(c.Unpaired) != 2 || c.Unpaired[0].Frequency != 600 || !strings.Contains(c.Unpaired[0].Reason, "outside the sweep") ||
		c.Unpaired[1].Axis != "yaw" || !strings.Contains(c.Unpaired[1].Reason, "no predicted peak within 20 %") {
		t.Errorf("%+v", c.Unpaired)
	}
	if len(c.Orders) != 3 || !c.Orders[2].BladePassing {
		t.Errorf("%+v", c.Orders)
	}
	for name, want := range map[string]float64{"paired": 4, "largest_error": 0.04, "median_error": 0.04, "bias": 0.04,
		"unpaired_predicted": 0, "unpaired_observed": 2, "masked_predicted": 0, "masked_observed": 2} {
		if got, ok := o.Figures[name].(float64); !ok || math.Abs(got-want) > 1e-9 {
			t.Errorf("%s is %v, want %g", name, o.Figures[name], want)
		}
	}
	told := strings.Join(c.Notes, "\n")
	if !strings.Contains(told, "the rate loop acts up to about 80 Hz") || !strings.Contains(told, "no pair lies there") {
		t.Errorf("%s", told)
	}
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

// The level is free of the shift of the peaks: a hundred times, 20 dB, on every axis, though a rotor stands 40 dB high in a masked
// band.
func TestLevel(t *testing.T) {
	c, o, err := run(t, predicted(), observed(), stage.Arguments{})
	if err != nil {
		t.Fatal(err)
	}
	for i, a := range c.Axes {
		if db := 10 * math.Log10(a.Scale); math.Abs(db-20) > 1 || a.Bins != 759 { // 100 to 499.5 Hz by halves, less 255 to 275
			t.Errorf("%s: factor %g (%.2f dB) over %d bins", a.Axis, a.Scale, db, a.Bins)
		}
		if o.Figures["scale_"+kinds.AxisNames[i]] != a.Scale {
			t.Errorf("figure %v", o.Figures["scale_"+kinds.AxisNames[i]])
		}
		if n := len(a.Frequency); n < 790 || a.Frequency[0] < 100 || a.Frequency[n-1] > 500 || a.Observed[0] != observed().Axes[i].Density[200] {
			t.Errorf("%s: curves from %g to %g Hz", a.Axis, a.Frequency[0], a.Frequency[n-1])
		}
	}
	if yaw := c.Axes[2]; math.Abs(yaw.Scale-100) > 1e-6 || yaw.Residual > 1e-6 {
		t.Errorf("two level curves: %+v", yaw.Scale)
	}
}

// A predicted peak that stays alone within a masked band is masked, with the band named.
func TestPredictedPeakUnderAnOrder(t *testing.T) {
	o := observed()
	var kept []kinds.SpectraPeak
	for _, p := range o.Peaks {
		if p.Axis != 1 || p.Frequency == 266 {
			kept = append(kept, p)
		}
	}
	o.Peaks = kept
	c, _, err := run(t, predicted(), o, stage.Arguments{})
	if err != nil {
		t.Fatal(err)
	}
	if len(c.Pairs) != 2 || len(c.Masked) != 2 || c.Masked[0].Side != kinds.Predicted || c.Masked[0].Frequency != 262 ||
		!strings.Contains(c.Masked[0].Reason, "could not be told from order 1 of rotor 1") {
		t.Errorf("%+v", c.Masked)
	}
	if c.Unpaired[0].Side != kinds.Predicted || c.Unpaired[0].Frequency != 210 || !strings.Contains(c.Unpaired[0].Reason, "no observed peak within 20 %") {
		t.Errorf("%+v", c.Unpaired)
	}
}

func TestReasons(t *testing.T) {
	o := observed()
	o.Peaks = []kinds.SpectraPeak{{Axis: 0, Frequency: 170, Density: 1}, {Axis: 0, Frequency: 290, Density: 1}, {Axis: 0, Frequency: 330, Density: 1, Narrow: true}}
	c, _, err := run(t, predicted(), o, stage.Arguments{"band": []any{hertz(100), hertz(450)}, "tolerance": 0.03})
	if err != nil {
		t.Fatal(err)
	}
	var reasons []string
	for _, p := range c.Unpaired {
		if p.Axis == "roll" {
			reasons = append(reasons, p.Reason)
		}
	}
	want := []string{
		"the observed peak nearest to it, at 170.0 Hz, is too far off for the tolerance",
		"the predicted peak nearest to it, at 150.0 Hz, is too far off for the tolerance",
		"the predicted peak nearest to it, at 300.0 Hz, goes better with the observed one at 290.0 Hz; as narrow as the window shows a line",
	}
	if strings.Join(reasons, "\n") != strings.Join(want, "\n") {
		t.Errorf("%s", strings.Join(reasons, "\n"))
	}
	o.Peaks, o.Rotors, o.Orders = nil, nil, nil
	c, out, err := run(t, predicted(), o, stage.Arguments{})
	if err != nil {
		t.Fatal(err)
	}
	if len(c.Pairs) != 0 || !math.IsNaN(out.Figures["largest_error"].(float64)) || out.Warnings[0].ID != "compare.nothing-paired" ||
		out.Warnings[1].ID != "compare.no-orders" || !strings.Contains(c.Notes[0], "no rotor speed was recorded") {
		t.Errorf("%+v, %+v", out.Warnings, c.Notes)
	}
}

// One mode cannot ring at two frequencies.
func TestConsistency(t *testing.T) {
	p, o := predicted(), observed()
	p.Peaks = append(p.Peaks, p.Peaks[0])
	p.Peaks[len(p.Peaks)-1].Axis = "yaw"
	o.Peaks = append(o.Peaks, kinds.SpectraPeak{Axis: 2, Frequency: 156, Density: 1})
	c, _, err := run(t, p, o, stage.Arguments{})
	if err != nil {
		t.Fatal(err)
	}
	if told := strings.Join(c.Notes, "\n"); !strings.Contains(told, "mode 1 leads pairs at 144.2 Hz on roll and at 156.0 Hz on yaw") {
		t.Error(told)
	}
}

func TestBadInput(t *testing.T) {
	still := observed()
	for i := range still.Axes {
		still.Axes[i].Quantity = "acceleration"
	}
	for _, c := range []struct {
		name, argument, text string
		o                    *kinds.Spectra
		arguments            stage.Arguments
	}{
		{"one end", "band", "the band has 1 frequencies", observed(), stage.Arguments{"band": []any{hertz(80)}}},
		{"backwards", "band", "the band runs from 90 Hz to 80 Hz", observed(), stage.Arguments{"band": []any{hertz(90), hertz(80)}}},
		{"beyond the recording", "band", "ends at 1000 Hz", observed(), stage.Arguments{"band": []any{hertz(1000), hertz(1200)}}},
		{"beyond the sweep", "band", "nothing in common", observed(), stage.Arguments{"band": []any{hertz(600), hertz(900)}}},
		{"no gyro", "observed", "no angular rate", still, stage.Arguments{}},
	} {
		_, _, err := run(t, predicted(), c.o, c.arguments)
		var e *fault.Error
		if !errors.As(err, &e) || e.Kind != fault.Input || e.Argument != c.argument || !strings.Contains(e.Text, c.text) || e.Remedy == "" {
			t.Errorf("%s: %v", c.name, err)
		}
	}
}

// A doubtful pair names its axis once: where it is.
func TestDoubtfulPair(t *testing.T) {
	c := &kinds.Comparison{Pairs: []kinds.ComparisonPair{{Axis: "pitch", Predicted: 210, Observed: 201.9, Confidence: 0.31}}}
	w := warnings(c, observed())
	if len(w) != 1 || w[0].Where != "pitch" || w[0].Text != "the pair of 210.0 Hz predicted and 201.9 Hz observed has a confidence of only 0.31" {
		t.Errorf("%+v", w)
	}
}
