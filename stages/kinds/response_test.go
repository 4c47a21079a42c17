package kinds

import (
	"math"
	"reflect"
	"testing"
)

func sampleResponse() *Response {
	nan := []float64{math.NaN(), math.NaN()}
	r := &Response{
		From: 100, To: 500, ModesTo: 760, Force: 1e-6, Moment: 1e-9, Residual: true, Thrust: 2.5, BladeShare: 0.01,
		Frequency: []float64{100, 101}, Density: [3][]float64{{1, 2}, {3, 4}, {5, 6}}, Uncorrected: [3][]float64{{1, 2}, {3, 4}, nan},
		Sources:  []ResponseSource{{"fr", "roll", []float64{1, 2}}},
		Transfer: []ResponseTransfer{{"fr", 2, "pitch", []float64{1, 2}, []float64{3, 4}}},
		Axes:     []ResponseAxis{{"roll", 0.1, -3, 440, 1e-5, 2e-3}},
		Peaks: []ResponsePeak{{Axis: "roll", Frequency: 230, Density: 2, Prominence: 30, Damping: 0.01, Modes: []int{3, 4}, Shares: []float64{0.9, -0.1},
			Rigid: 0.1, Residual: 0.1, Uncorrected: 0.95, Rotor: "fr", Component: 4, ComponentShare: 0.4, Losses: []string{"arm"}, LossShares: []float64{1},
			ModeShares: []float64{0.9}, RotorShares: []float64{1}}},
		FirstMode: 150, GyroNoise: 1e-8, Rigid: [3][]float64{{1, 1}, {2, 2}, {3, 3}}, Static: [3][]float64{{4, 4}, {5, 5}, {6, 6}},
		Map:          ResponseMap{[]float64{100.5, 101.5, 102.5}, 1, []ResponseMapRow{{17, [3][]float64{{1, 2, 3}, {4, 5, 6}, {7, 8, 9}}}, {34, [3][]float64{{1, 1, 1}, {2, 2, 2}, {3, 3, 3}}}}},
		Flight:       []ResponseFlight{{1600, 0.25}, {1700, 0.75}},
		Motions:      []ResponseMotion{{BroadbandSource, "all", "roll", 230, []float64{1, 2}, []float64{3, 4}}, {"unbalance", "fr", "", 266, []float64{5, 6}, []float64{7, 8}}},
		Points:       []ResponsePoint{{"nose", "node", "top", [3]float64{0.07, 0, 0.02}}},
		PointSpectra: []ResponsePointSpectrum{{"nose", Acceleration, "z", []float64{2, 3}, 4, 101}},
		PointLines:   []ResponsePointLine{{"nose", "unbalance", 1, 266, [3]float64{1, 2, 3}, [3]float64{4, 5, 6}}},
		Direct:       []ResponseDirect{{230, "fr", 4, "yaw", 1 + 2i, 3 + 4i}},
		DirectErrors: []ResponseDirectError{{230, "yaw", true, 0.004}},
		Practice:     []ResponsePractice{{"modes", "what", "Hz", 5, math.Inf(-1), 7, true}},
		Separations:  []ResponseSeparation{{3, 4, 230, 9, 2.5, [3]float64{1, 2, 3}, [3]float64{4, 5, 6}, [3]float64{1, 1.5, 0.9}}},
		MapSpeeds:    []float64{100, 200}, Orders: []ResponseOrder{{"unbalance", 1, []string{"fr"}, [3][]float64{{1, 2}, {3, 4}, {5, 6}}}}, Flown: [3][]float64{{2, 3}, {4, 5}, {6, 7}},
		Spinning: true, Speeds: []float64{0, 1675},
		Whirl:    []ResponseWhirl{{4, []float64{230, 220}, []float64{0.01, 0.02}, []float64{0, -0.5}}},
		Critical: []ResponseCritical{{3, []string{"fr"}, 500, 239, 0.01, 0.4, 4}},
		Modes:    []ResponseMode{{1, 150, 0.01}},
		Rotors:   []ResponseRotor{{"fr", 3, 1675, 3450, 1600, 6e-6, 4e-6, 400, 2e-6, 4e-6}},
		Lines:    []ResponseLine{{"unbalance", "fr", 1, 266, 0.1, [3]float64{1, 2, 3}}},
		Shapes:   []ResponseShape{{230, "roll", "fr", 2, []float64{1, 2, 3}, []float64{4, 5, 6}}},
	}
	return r
}

func TestResponseRoundTrip(t *testing.T) {
	r := sampleResponse()
	a := EncodeResponse(r)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	back, err := DecodeResponse(a)
	if err != nil {
		t.Fatal(err)
	}
	for _, x := range []*Response{r, back} { // NaN is not equal to itself
		for k, v := range x.Uncorrected[2] {
			if !math.IsNaN(v) {
				t.Errorf("uncorrected yaw %d is %g", k, v)
			}
		}
		x.Uncorrected[2] = nil
	}
	if !reflect.DeepEqual(r, back) {
		t.Errorf("got %+v\nwant %+v", back, r)
	}
}

func TestContradictoryResponsesAreRefused(t *testing.T) {
	for name, spoil := range map[string]func(r *Response){
		"frequencies out of order": func(r *Response) { r.Frequency = []float64{101, 100} },
		"short source":             func(r *Response) { r.Sources[0].Density = []float64{1} },
		"short transfer":           func(r *Response) { r.Transfer[0].Imaginary = nil },
		"short whirl":              func(r *Response) { r.Whirl[0].Damping = nil },
		"short map":                func(r *Response) { r.Orders[0].Rate[1] = nil },
		"seventh component":        func(r *Response) { r.Transfer[0].Component = 6 },
		"shares without modes":     func(r *Response) { r.Peaks[0].Shares = nil },
		"peak of no component":     func(r *Response) { r.Peaks[0].Component = -1 },
		"short map over speed":     func(r *Response) { r.Map.Rows[1].Density[2] = nil },
		"map out of order":         func(r *Response) { r.Map.Rows[1].Speed = 1 },
		"motion without phase":     func(r *Response) { r.Motions[1].Imaginary = nil },
		"short motion":             func(r *Response) { r.Motions[1].Real, r.Motions[1].Imaginary = []float64{1}, []float64{1} },
		"unknown point":            func(r *Response) { r.PointSpectra[0].Point = "tail" },
		"short point":              func(r *Response) { r.PointSpectra[0].Density = nil },
		"direct of no component":   func(r *Response) { r.Direct[0].Component = 7 },
		"shares of other modes":    func(r *Response) { r.Peaks[0].ModeShares = []float64{1, 2} },
		"shares of other rotors":   func(r *Response) { r.Peaks[0].RotorShares = []float64{0.5, 0.5} },
		"half a node":              func(r *Response) { r.Shapes[0].Real, r.Shapes[0].Imaginary = []float64{1}, []float64{1} },
	} {
		r := sampleResponse()
		spoil(r)
		if _, err := DecodeResponse(EncodeResponse(r)); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
}

func TestDocumentRoundTrip(t *testing.T) {
	d := &Document{Title: "t", Page: "a.html", Sources: []DocumentSource{{"modes", "stage.m.modes", "ff"}},
		Tables: []DocumentTable{{"a-peaks.csv", "Peaks", 2}}, Files: map[string][]byte{"a.html": []byte("<p>"), "a-peaks.csv": []byte("x\n")}}
	a := EncodeDocument(d)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	back, err := DecodeDocument(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(d, back) {
		t.Errorf("got %+v\nwant %+v", back, d)
	}
	delete(a.Files, "a-peaks.csv")
	if _, err := DecodeDocument(a); err == nil {
		t.Error("a table without its file was accepted")
	}
}
