package kinds

import (
	"reflect"
	"strings"
	"testing"
)

func sampleSpectra() *Spectra {
	return &Spectra{
		Rate: 2000, Step: 500, Resolution: 750, Window: "hann", Segment: 4, Overlap: 2, Segments: 9, Freedom: 17,
		Level: 0.95, Lower: 0.6, Upper: 2, From: 8, To: 60, Samples: 100, Gaps: 1, Missing: 2, Jitter: 0.01,
		Axes: []SpectraAxis{{Axis: "roll", Quantity: "angular rate", Unit: "rad/s", Column: "gx", Mean: 1, Deviation: 2,
			Largest: 3, Saturated: 4, Repeated: 0.5, Density: []float64{1, 2, 3}}},
		Peaks: []SpectraPeak{{Frequency: 500, FrequencyError: 1, Density: 2, Prominence: 3, OverFloor: 4, Lower: 490,
			Upper: 510, Damping: 0.02, DampingError: 0.01, Narrow: true}},
		Rotors:   []SpectraRotor{{Rotor: "fr", Column: "rpm", Blades: 3, Median: 1600, Low: 1500, High: 1700}},
		Findings: []Finding{{What: "gaps", Where: "t", Extent: "one", Consequence: "none"}},
		Orders:   []OrderBand{{Rotor: "fr", Order: 3, BladePassing: true, Low: 700, High: 800, Share: 0.98, Folded: true}},
		ChosenBy: "throttle", CoherenceLimit: 0.3,
		Pieces:    []SpectraPiece{{From: 8, To: 20, Samples: 60, Level: 0.4, Used: true, Why: "steady"}},
		Cross:     []SpectraCross{{A: 0, B: 0, Real: []float64{1, 2, 3}, Imaginary: []float64{4, 5, 6}, Coherence: []float64{0.7, 0.8, 0.9}}},
		SetPoints: []SpectraSetPoint{{Axis: 0, Column: "sp", Deviation: 2, Coherence: []float64{0.1, 0.2, 0.3}}},
		Maps:      []SpectraMapRow{{Axis: 0, Against: MapThrottle, Unit: "1", Centre: 0.5, Low: 0.4, High: 0.6, Segments: 3, Step: 500, Density: []float64{1, 2, 3}}},
	}
}

func TestSpectraRoundTrip(t *testing.T) {
	want := sampleSpectra()
	a := EncodeSpectra(want)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	got, err := DecodeSpectra(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, want %+v", got, want)
	}
	if label := got.Orders[0].Name(); label != "blade passing (folded)" {
		t.Error(label)
	}
}

func TestSpectraRefusesWhatDoesNotFit(t *testing.T) {
	s := sampleSpectra()
	s.Peaks[0].Axis = 1
	if _, err := DecodeSpectra(EncodeSpectra(s)); err == nil || !strings.Contains(err.Error(), "axis 1 of 1") {
		t.Error(err)
	}
	s = sampleSpectra()
	s.Axes[0].Density = nil
	if _, err := DecodeSpectra(EncodeSpectra(s)); err == nil || !strings.Contains(err.Error(), "0 bins") {
		t.Error(err)
	}
	for want, spoil := range map[string]func(*Spectra){
		"axis 1 of 1": func(s *Spectra) { s.Cross[0].B = 1 },
		"axis 3 of 1": func(s *Spectra) { s.Maps[0].Axis = 3 },
		"2 bins":      func(s *Spectra) { s.Cross[0].Coherence = s.Cross[0].Coherence[:2] },
		"1 bins":      func(s *Spectra) { s.SetPoints[0].Coherence = s.SetPoints[0].Coherence[:1] },
		"no width":    func(s *Spectra) { s.Maps[0].Step = 0 },
	} {
		s = sampleSpectra()
		spoil(s)
		if _, err := DecodeSpectra(EncodeSpectra(s)); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", want, err)
		}
	}
}

func TestComparisonRoundTrip(t *testing.T) {
	want := &Comparison{
		From: 80, To: 800, Tolerance: 0.05, Reach: 0.2,
		Axes: []ComparisonAxis{{Axis: "pitch", Scale: 2, Residual: 3, Assurance: 0.7, Bins: 4, Frequency: []float64{1, 2},
			Predicted: []float64{3, 4}, Observed: []float64{5, 6}}},
		Pairs: []ComparisonPair{{Axis: "pitch", Predicted: 100, Observed: 99, ObservedError: 0.1, Error: 0.0101,
			Confidence: 0.9, PredictedDensity: 1, ObservedDensity: 2, PredictedDamping: 0.01, ObservedDamping: 0.02,
			ObservedDampingError: 0.003, DampingRatio: 0.5, NearLoop: true, Modes: []int{2, 1}}},
		Unpaired: []ComparisonPeak{{Side: Observed, Axis: "pitch", Frequency: 130, Density: 1, Damping: 0.02, Modes: []int{}, Reason: "none near"}},
		Masked:   []ComparisonPeak{{Side: Predicted, Axis: "pitch", Frequency: 267, Density: 1, Damping: 0.02, Modes: []int{3}, Reason: "order 1"}},
		Verdicts: []Verdict{{Axis: "pitch", Frequency: 130, Density: 1, Verdict: VerdictUnknown, Reason: "r"}},
		ModePairs: []ModePair{{Mode: 4, Predicted: 100, Observed: 98, ObservedError: 0.2, Error: 0.02, Agreement: 0.99,
			PredictedDamping: 0.01, ObservedDamping: 0.02, ObservedDampingError: 0.003, DampingRatio: 0.5, NearLoop: true, Confidence: 0.8}},
		ModesAlone: []ModeAlone{{Side: Predicted, Mode: 5, Frequency: 120, Damping: 0.01, Direction: []float64{1, 0, 0}, Strength: 0.3, Reason: "none"}},
		Orders:     []OrderBand{{Rotor: "fr", Order: 1, Low: 250, High: 280, Share: 0.98}},
		Notes:      []string{"a note"},
	}
	a := EncodeComparison(want)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	got, err := DecodeComparison(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, want %+v", got, want)
	}
}

func sampleIdentified() *Identified {
	return &Identified{
		From: 80, To: 500, Start: 8, End: 60, Rate: 2000, Samples: 9, Decimation: 1, Rows: 80, Order: 20, Span: 2, Step: 0.5, Segments: 7,
		Channels: []IdentifiedChannel{{"roll", "angular rate", "gx", 0.2}, {"pitch", "angular rate", "-gy", 0.1}},
		Modes: []IdentifiedMode{{Kind: ModeStructure, Reason: "r", Frequency: 100, FrequencyError: 0.3, Damping: 0.02, DampingError: 0.001,
			Direction: []float64{1, 0}, DirectionError: 0.1, Collinearity: 0.9, ShapeReal: []float64{1, 2}, ShapeImaginary: []float64{0, 1},
			Models: 0.7, FirstOrder: 6, Kurtosis: 3, Worth: 70, PeakFrequency: 101, PeakDamping: 0.03}},
		Diagram:  []IdentifiedPole{{Order: 6, Frequency: 100, Damping: 0.02, Stable: true, Mode: 0}},
		Singular: [][]float64{{1, 2, 3}, {0, 1, 0}},
		Removed:  []RemovedOrder{{"roll", "fr", 1, 0.1}},
		Orders:   []OrderBand{{Rotor: "fr", Order: 1, Low: 260, High: 270, Share: 0.9}},

		Densities: []IdentifiedDensity{{"roll", []float64{1, 2, 3}, []float64{1, 1, 3}}, {"pitch", []float64{1, 2, 3}, []float64{1, 1, 3}}},
		Tracks:    []RotorTrack{{"fr", TrackRecorded, []float64{8, 9}, []float64{1600, 1610}, 0.7}},
		Crossings: []OrderCrossing{{0, "fr", 1, true, 1600, 0.2}},
	}
}

func TestIdentifiedRoundTrip(t *testing.T) {
	want := sampleIdentified()
	a := EncodeIdentified(want)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	got, err := DecodeIdentified(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, want %+v", got, want)
	}
	for what, spoil := range map[string]func(*Identified){
		"direction": func(x *Identified) { x.Modes[0].Direction = []float64{1} },
		"mode":      func(x *Identified) { x.Diagram[0].Mode = 1 },
		"singular":  func(x *Identified) { x.Singular = x.Singular[:1] },
		"density":   func(x *Identified) { x.Densities[0].After = nil },
		"track":     func(x *Identified) { x.Tracks[0].Time = nil },
		"crossing":  func(x *Identified) { x.Crossings[0].Mode = 1 },
	} {
		x := sampleIdentified()
		spoil(x)
		if _, err := DecodeIdentified(EncodeIdentified(x)); err == nil {
			t.Errorf("a wrong %s is read", what)
		}
	}
}

func sampleFiltered() *Filtered {
	return &Filtered{
		Rate: 8000, Bandwidth: 40, From: 80, To: 900, Lag: 0.2, Delay: 8e-4, GroupDelay: 7e-4, Gain: 0.9, Target: 0.02, Chosen: true, Met: true,
		Filters: []FilteredFilter{{"low-pass 120 Hz", FilterLowPass, 120, 0.7, 1, 2, 0.2, 8e-4, 7e-4, 0.9, []float64{3, 4}, []float64{1, 0.5}}},
		Curves:  []FilteredCurve{{100, 1, 0.1, 1e-3}, {200, 0.5, 0.2, 1e-3}},
		Axes: []FilteredAxis{{Axis: "roll", Observed: []float64{1, 2}, ObservedAfter: []float64{1, 1}, Predicted: []float64{3, 4}, PredictedAfter: []float64{3, 2},
			ObservedRMS: 5, ObservedLeft: 4, PredictedRMS: 3, PredictedLeft: 2},
			{Axis: "yaw", Observed: []float64{1, 2}, ObservedAfter: []float64{1, 1}, Predicted: []float64{}, PredictedAfter: []float64{}}},
		Tried: []FilteredTrial{{"low-pass 120 Hz", 1, 0.2, 0.01, true}},
		Notes: []string{"a note"},
	}
}

func TestFilteredRoundTrip(t *testing.T) {
	want := sampleFiltered()
	a := EncodeFiltered(want)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	got, err := DecodeFiltered(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, want %+v", got, want)
	}
	for what, spoil := range map[string]func(*Filtered){
		"power":    func(x *Filtered) { x.Filters[0].Power = nil },
		"buys":     func(x *Filtered) { x.Filters[0].Buys = []float64{1} },
		"observed": func(x *Filtered) { x.Axes[0].Observed = nil },
		"after":    func(x *Filtered) { x.Axes[0].PredictedAfter = nil },
	} {
		x := sampleFiltered()
		spoil(x)
		if _, err := DecodeFiltered(EncodeFiltered(x)); err == nil {
			t.Errorf("a wrong %s is read", what)
		}
	}
}

// Spectra of a sensor that a recording does not have are kept and read back, but refused where they are to be used.
func TestSpectraWithoutAxes(t *testing.T) {
	a := EncodeSpectra(&Spectra{Rate: 1000, Window: "hann"})
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	if s, err := DecodeSpectra(a); err != nil || len(s.Axes) != 0 || s.Rate != 1000 {
		t.Errorf("%+v %v", s, err)
	}
	if _, err := DecodeSensor(a); err == nil || !strings.Contains(err.Error(), "have no axis") {
		t.Error(err)
	}
}
