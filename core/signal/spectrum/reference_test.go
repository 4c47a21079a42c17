package spectrum

import (
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/signal/internal/noise"
)

// welchSetup is the setup of the rows F-WELCH-* and F-PARSEVAL of testdata/known/F_signals.json.
type welchSetup struct {
	Rate     float64 `json:"fs_Hz"`
	Samples  int     `json:"samples"`
	Seed     uint32  `json:"seed"`
	Window   string  `json:"window"`
	Segment  int     `json:"segment"`
	Overlap  int     `json:"overlap"`
	Detrend  string  `json:"detrend_per_segment"`
	Scaling  string  `json:"scaling"`
	Segments int     `json:"segments"`
	Tones    []struct {
		A     float64 `json:"a"`
		F     float64 `json:"f_Hz"`
		Phase float64 `json:"phase"`
	} `json:"tones"`
}

func (s welchSetup) signal() []float64 {
	source := noise.Source(s.Seed)
	x := make([]float64, s.Samples)
	for i := range x {
		t := float64(i) / s.Rate
		x[i] = source.Uniform() + 0.3 + 0.02*t
		for _, tone := range s.Tones {
			x[i] += tone.A * math.Sin(2*math.Pi*tone.F*t+tone.Phase)
		}
	}
	return x
}

func (s welchSetup) settings(t *testing.T) Settings {
	name, _, _ := strings.Cut(s.Window, " ")
	window, ok := ParseWindow(name)
	if !ok {
		t.Fatalf("no window %q", name)
	}
	out := Settings{Rate: s.Rate, Segment: s.Segment, Overlap: s.Overlap, Window: window}
	switch s.Detrend {
	case "constant":
	case "False":
		out.Detrend = DetrendNone
	case "linear":
		out.Detrend = DetrendLinear
	default:
		t.Fatalf("no detrending %q", s.Detrend)
	}
	if s.Scaling == "spectrum" {
		out.Scaling = Spectrum
	}
	return out
}

// rowOf returns a row of F_signals.json and decodes its setup.
func rowOf(t *testing.T, id string, setup any) known.Row {
	row := known.One(t, "F_signals.json", id)
	row.Decode(t, setup)
	return row
}

// binOf reads the number in "bin 42 (…)" or "bin 42 …".
func binOf(t *testing.T, label string) int {
	var k int
	if _, err := fmt.Sscanf(label, "bin %d", &k); err != nil {
		t.Fatalf("%q: %v", label, err)
	}
	return k
}

func TestWelchRows(t *testing.T) {
	for _, id := range []string{
		"F-WELCH-HANN256-128-C", "F-WELCH-HANN256-0-N", "F-WELCH-HANN512-384-L", "F-WELCH-BOX256-128-C",
		"F-WELCH-HANN255-127-C", "F-WELCH-BLACKMAN512-256-C", "F-WELCH-SPECTRUM",
	} {
		t.Run(id, func(t *testing.T) {
			var setup welchSetup
			row := rowOf(t, id, &setup)
			p, err := Welch([][]float64{setup.signal()}, setup.settings(t))
			if err != nil {
				t.Fatal(err)
			}
			if p.Segments != setup.Segments {
				t.Errorf("%d segments, want %d", p.Segments, setup.Segments)
			}
			var got []float64
			for _, label := range row.Labels {
				got = append(got, p.Values[binOf(t, label)])
			}
			row.Check(t, 1, got...)
		})
	}
}

// The whole spectrum and the first samples of row F-WELCH-HANN256-128-C lie beside the rows.
func TestWelchWholeSpectrum(t *testing.T) {
	var setup welchSetup
	row := rowOf(t, "F-WELCH-HANN256-128-C", &setup)
	x := setup.signal()
	for i, want := range column(t, "F-WELCH-HANN256-128-C.signal64.csv") {
		if math.Abs(x[i]-want) > 1e-11 {
			t.Fatalf("sample %d: %.13g, want %.13g", i, x[i], want)
		}
	}
	p, err := Welch([][]float64{x}, setup.settings(t))
	if err != nil {
		t.Fatal(err)
	}
	want := column(t, "F-WELCH-HANN256-128-C.csv")
	if len(want) != len(p.Values) {
		t.Fatalf("%d bins, want %d", len(p.Values), len(want))
	}
	for k, v := range want {
		if math.Abs(p.Values[k]-v) > row.TolAbs[0]+row.TolRel[0]*v {
			t.Errorf("bin %d: %.12g, want %.12g", k, p.Values[k], v)
		}
	}
}

func column(t *testing.T, name string) []float64 {
	f, err := os.Open("../../../testdata/known/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []float64
	for _, r := range rows[1:] {
		v, err := strconv.ParseFloat(r[1], 64)
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, v)
	}
	return out
}

func TestParsevalRow(t *testing.T) {
	var setup welchSetup
	row := rowOf(t, "F-PARSEVAL", &setup)
	x := setup.signal()
	var got []float64
	for _, w := range []Window{Boxcar, Hann} {
		samples := w.Samples(setup.Segment)
		_, square, _ := moments(samples)
		mean := 0.0
		for i, v := range x {
			weight := samples[i%setup.Segment] * samples[i%setup.Segment] / square * float64(setup.Segment)
			mean += v * v * weight / float64(len(x))
		}
		p, err := Welch([][]float64{x}, Settings{Rate: setup.Rate, Segment: setup.Segment, Window: w, Detrend: DetrendNone})
		if err != nil {
			t.Fatal(err)
		}
		sum := 0.0
		for _, v := range p.Values {
			sum += v * p.Step
		}
		got = append(got, mean, sum)
	}
	row.Check(t, 1, got...)
}

func TestWindowRow(t *testing.T) {
	var setup struct{ N int }
	row := rowOf(t, "F-WINDOWS", &setup)
	var got []float64
	for _, label := range row.Labels {
		name, what, _ := strings.Cut(label, " ")
		w, ok := ParseWindow(name)
		if !ok {
			t.Fatalf("no window %q", name)
		}
		switch what {
		case "coherent gain":
			got = append(got, w.CoherentGain(setup.N))
		case "equivalent noise bandwidth (bins)":
			got = append(got, w.NoiseBandwidth(setup.N))
		case "scalloping loss (dB)":
			got = append(got, w.ScallopingLoss(setup.N))
		case "overlap correlation at 50 %":
			got = append(got, w.OverlapCorrelation(setup.N, setup.N/2))
		default:
			t.Fatalf("label %q", label)
		}
	}
	row.Check(t, 1, got...)
}

func TestConfidenceRows(t *testing.T) {
	for _, id := range []string{"F-CONFIDENCE-4096-256-0", "F-CONFIDENCE-4096-256-50", "F-CONFIDENCE-60000-2048-50"} {
		var setup struct {
			Samples, Segment int
			Overlap, Level   float64
		}
		row := rowOf(t, id, &setup)
		s := Settings{Rate: 1, Segment: setup.Segment, Overlap: int(setup.Overlap * float64(setup.Segment))}
		k := s.Segments(setup.Samples)
		nu := Freedom([]int{k}, s)
		lower, upper := Bounds(nu, setup.Level)
		row.Check(t, 1, float64(k), nu, lower, upper, math.Sqrt(2/nu))
	}
}

func TestChirpRow(t *testing.T) {
	var setup struct {
		Rate     float64 `json:"fs_Hz"`
		Duration float64 `json:"duration_s"`
		F0       float64 `json:"f0_Hz"`
		F1       float64 `json:"f1_Hz"`
		A        float64 `json:"amplitude"`
		Segment  int     `json:"segment"`
		Overlap  int     `json:"overlap"`
	}
	row := rowOf(t, "F-CHIRP", &setup)
	x := make([]float64, int(setup.Rate*setup.Duration))
	for i := range x {
		at := float64(i) / setup.Rate
		x[i] = setup.A * math.Sin(2*math.Pi*(setup.F0*at+(setup.F1-setup.F0)/(2*setup.Duration)*at*at))
	}
	p, err := Welch([][]float64{x}, Settings{
		Rate: setup.Rate, Segment: setup.Segment, Overlap: setup.Overlap, Detrend: DetrendNone,
	})
	if err != nil {
		t.Fatal(err)
	}
	var got []float64
	for _, label := range row.Labels[:6] {
		got = append(got, p.Values[binOf(t, label)])
	}
	mean := 0.0
	for k := 49; k <= 166; k++ {
		mean += p.Values[k] / (166 - 49 + 1)
	}
	row.Check(t, 1, append(got, mean, setup.A*setup.A/(2*(setup.F1-setup.F0)))...)
}

func TestCoherenceRow(t *testing.T) {
	var setup struct {
		Rate    float64 `json:"fs_Hz"`
		Samples int     `json:"samples"`
		Segment int     `json:"segment"`
		Overlap int     `json:"overlap"`
	}
	row := rowOf(t, "F-COHERENCE", &setup)
	u, v := noise.Source(111), noise.Source(222)
	x, z := make([]float64, setup.Samples), make([]float64, setup.Samples)
	y := 0.0
	for i := range x {
		x[i] = u.Uniform()
		y = 0.2*x[i] + 0.6*y
		if i > 0 {
			y += 0.3 * x[i-1]
		}
		z[i] = y + 0.3*v.Uniform()
	}
	c, err := CrossSpectrum([][]float64{x}, [][]float64{z}, Settings{
		Rate: setup.Rate, Segment: setup.Segment, Overlap: setup.Overlap,
	})
	if err != nil {
		t.Fatal(err)
	}
	coherence, h1, h2 := c.Coherence(), c.H1(), c.H2()
	var got []float64
	for _, label := range row.Labels {
		k := binOf(t, label)
		_, what, _ := strings.Cut(strings.TrimPrefix(label, "bin "), " ")
		switch what {
		case "Pxy re":
			got = append(got, real(c.XY[k]))
		case "Pxy im":
			got = append(got, imag(c.XY[k]))
		case "coherence":
			got = append(got, coherence[k])
		case "H1 re":
			got = append(got, real(h1[k]))
		case "H1 im":
			got = append(got, imag(h1[k]))
		case "H2 re":
			got = append(got, real(h2[k]))
		case "H2 im":
			got = append(got, imag(h2[k]))
		default:
			t.Fatalf("label %q", label)
		}
	}
	row.Check(t, 1, got...)
}
