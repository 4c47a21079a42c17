package report

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"hushframe/stages/kinds"
)

// sampleTransfer is a bench recording of a single mode in acceleration and in rate.
func sampleTransfer() *kinds.Transfer {
	x := &kinds.Transfer{Rate: 2000, Step: 2, Segment: 1000, Averages: 2, Method: "strikes", Decay: 0.2, ForceColumn: "hammer", ExcitedTo: 700, Force: make([]float64, 501),
		Strikes: []kinds.TransferStrike{{Time: 1, Force: 30, Length: 1e-3, Used: true}, {Time: 2, Force: 35, Length: 1e-3, Used: true}, {Time: 3, Force: 90, Length: 2e-3, Why: "overloaded"}}}
	for _, r := range []kinds.TransferResponse{{Axis: "z", Quantity: "acceleration", Unit: "m/s^2/N", Column: "-az <b>"}, {Axis: "pitch", Quantity: "angular rate", Unit: "rad/s/N", Column: "gy"}} {
		for k := range 501 {
			f := float64(k) * x.Step
			h := complex(-f*f/1e4, 0) / complex(1-f*f/4e4, 0.04*f/200)
			r.H1, r.H2, r.Coherence = append(r.H1, h), append(r.H2, 1.01*h), append(r.Coherence, 0.99)
		}
		x.Responses = append(x.Responses, r)
		x.Peaks = append(x.Peaks, kinds.TransferPeak{Response: len(x.Responses) - 1, Frequency: 200, Damping: 0.02, Magnitude: cmplx.Abs(r.H1[100]), Coherence: 0.987})
	}
	return x
}

// The charts of a bench recording hold its values, in the units that they state; strikes and peaks are tables.
func TestTransferOnThePage(t *testing.T) {
	x := sampleTransfer()
	c := &content{transfer: x}
	d, err := compose(c, "", "page.html")
	if err != nil {
		t.Fatal(err)
	}
	if len(c.charts) != 6 {
		t.Fatalf("%d charts", len(c.charts))
	}
	for i, factor := range []float64{1, 180 / math.Pi} {
		magnitude, phase, coherence := c.charts[3*i], c.charts[3*i+1], c.charts[3*i+2]
		if magnitude.X.To != 875 || len(magnitude.Marks) != 1 || magnitude.Marks[0].X != 700 {
			t.Errorf("%s: to %g, marks %+v", magnitude.ID, magnitude.X.To, magnitude.Marks)
		}
		h2, h1 := magnitude.Curves[0], magnitude.Curves[1]
		for n, f := range h1.X {
			k := int(math.Round(f / x.Step))
			want := factor * cmplx.Abs(x.Responses[i].H1[k])
			if math.Abs(h1.Y[n]-want) > 1e-9*want || math.Abs(h2.Y[n]-1.01*want) > 1e-9*want {
				t.Fatalf("%s: %g and %g at %g Hz, want %g", magnitude.ID, h1.Y[n], h2.Y[n], f, want)
			}
		}
		if p := magnitude.Points; len(p) != 1 || p[0].X != 200 || math.Abs(p[0].Y-factor*x.Peaks[i].Magnitude) > 1e-9*p[0].Y {
			t.Errorf("%s: points %+v", magnitude.ID, p)
		}
		for n, f := range phase.Curves[0].X { // -ω² over a resonance: 180° below, 90° at the peak, 0 above
			if f == 200 && math.Abs(phase.Curves[0].Y[n]-90) > 1e-9 {
				t.Errorf("%s: %g deg at the peak", phase.ID, phase.Curves[0].Y[n])
			}
		}
		if y := coherence.Curves[0].Y; y[0] != 0.99 || coherence.Y.From != 0 || coherence.Y.To != 1 {
			t.Errorf("%s: %g of %g to %g", coherence.ID, y[0], coherence.Y.From, coherence.Y.To)
		}
	}
	for file, wants := range map[string][]string{
		"page-tables/transfer-peaks.csv": {"z,'-az <b>,200,2,100,m/s²/N,0.987", "pitch,gy,200,2,5729.57795,deg/s/N,0.987"},
		"page-tables/strikes.csv":        {"1,30,1,yes,", "3,90,2,no,overloaded"},
	} {
		for _, want := range wants {
			if !strings.Contains(string(d.Files[file]), want) {
				t.Errorf("%s lacks %q:\n%s", file, want, d.Files[file])
			}
		}
	}
	if page := string(d.Files["page.html"]); strings.Contains(page, "<b>") || !strings.Contains(page, "2 strikes of a hammer") {
		t.Error("the page has a name as markup, or does not say what was averaged")
	}
}

// Named points stand on the page with what the response says of them.
func TestNamedPointsOnThePage(t *testing.T) {
	r := &kinds.Response{From: 80, To: 500,
		Points: []kinds.ResponsePoint{{Name: "nose", Kind: "node", Part: "top"}, {Name: "camera", Kind: "body"}},
		PointSpectra: []kinds.ResponsePointSpectrum{
			{Point: "nose", Axis: "x", Quantity: kinds.Displacement, RMS: 3e-6}, {Point: "nose", Axis: "z", Quantity: kinds.Displacement, RMS: 4e-6},
			{Point: "nose", Axis: "x", Quantity: kinds.Acceleration, RMS: 5, Loudest: 120}, {Point: "nose", Axis: "z", Quantity: kinds.Acceleration, RMS: 12, Loudest: 240},
		},
		PointLines: []kinds.ResponsePointLine{{Point: "nose", Source: "unbalance", Displacement: [3]float64{0, 6e-6, 8e-6}, Acceleration: [3]float64{8, 15, 0}}},
	}
	got := string(pointTable(r).csv())
	for _, want := range []string{"nose,on top,5,13,240,10,17\n", "camera,body,0,0,0,,\n"} {
		if !strings.Contains(got, want) {
			t.Errorf("%q is missing in\n%s", want, got)
		}
	}
}
