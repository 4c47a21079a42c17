package identify

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"hushframe/core/signal/internal/noise"
	"hushframe/core/signal/spectrum"
)

// Row F-OMA-FDD: peaks of the first singular value near the true frequencies, and the agreement of their vectors.
func TestDecompositionReference(t *testing.T) {
	c, row := readChain(t, "F-OMA-FDD")
	w, phi := c.modes()
	d, err := Singular(Record{Rate: c.Rate, Runs: [][][]float64{c.simulate()}},
		spectrum.Settings{Rate: c.Rate, Segment: c.Segment, Overlap: c.Overlap})
	if err != nil {
		t.Fatal(err)
	}
	var bins, values, agreements []float64
	for m := range 3 {
		f := w[m] / (2 * math.Pi)
		p, ok := d.PeakNear(0.9*f, 1.1*f, nil)
		if !ok {
			t.Fatalf("no bin near %g Hz", f)
		}
		truth := make([]complex128, 3)
		for i := range truth {
			truth[i] = complex(phi.At(i, m), 0)
		}
		bins, values = append(bins, d.Frequency(p.Bin)), append(values, p.Value)
		agreements = append(agreements, Agreement(p.Shape, truth))
	}
	row.Check(t, 1, append(append(bins, values...), agreements...)...)
}

// Over forty records of the chain, damping from the decay is off by less than 15 % (root mean square), where the bound of one mode alone,
// √(1/(ζ·ω·T)) (see TestBoundOfOneMode), is 11, 6 and 4 %, so that row F-OMA-TRUTH-BAND, which allows 25 %, holds by more than chance.
func TestDecayScatters(t *testing.T) {
	c, _ := readChain(t, "F-OMA-TRUTH-BAND")
	w, phi := c.modes()
	const records = 40
	var square [3]float64
	for k := range noise.Source(records) {
		y := c.shaken(1000*k+1, 77*k+20001, 991*k+555)
		d, err := Singular(Record{Rate: c.Rate, Runs: [][][]float64{y}}, spectrum.Settings{Rate: c.Rate, Segment: 1024, Overlap: 512})
		if err != nil {
			t.Fatal(err)
		}
		for m := range square {
			shape := make([]complex128, 3)
			for i := range shape {
				shape[i] = complex(phi.At(i, m), 0)
			}
			f := w[m] / (2 * math.Pi)
			p, _ := d.PeakNear(0.95*f, 1.05*f, shape)
			square[m] += math.Pow(p.Damping/c.Damping[m]-1, 2) / records
		}
	}
	for m, v := range square {
		if !(v < 0.15*0.15) {
			t.Errorf("mode %d: damping is off by %.3f", m+1, math.Sqrt(v))
		}
	}
}

// Row F-OMA-TRUTH-BAND, for the whole identification, and for the decay of the decomposition beside it. The claimed errors
// must be of the size of the bound, and cover the truth.
func TestIdentifyChain(t *testing.T) {
	c, row := readChain(t, "F-OMA-TRUTH-BAND")
	r, err := Identify(Record{Rate: c.Rate, Runs: [][][]float64{c.simulate()}}, Settings{From: 20, To: 200, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	var f, z, pf, pz []float64
	for _, m := range r.Modes {
		t.Logf("%s %.3f ± %.3f Hz, %.4f ± %.4f, peak %.3f %.4f, kurtosis %.2f, %d orders from %d %s", m.Kind, m.Frequency, m.FrequencyError,
			m.Damping, m.DampingError, m.PeakFrequency, m.PeakDamping, m.Kurtosis, m.Orders, m.First, m.Reason)
		if m.Kind == Structure {
			f, z = append(f, m.Frequency), append(z, m.Damping)
			pf, pz = append(pf, m.PeakFrequency), append(pz, m.PeakDamping)
		}
	}
	if len(f) != 3 {
		t.Fatalf("modes at %v Hz", f)
	}
	row.Check(t, 1, append(f, z...)...)
	row.Check(t, 1, append(pf, pz...)...)
	k := 0
	// The errors that the notes of F-OMA-SSI state, one of frequency and three of damping, are √(ζ/(ω·T)): those of one mode alone without noise, of which all
	// but its pole is known. With three modes unknown the bound is a twentieth above that. The claimed errors are up to 1.6 times the bound, since it knows how
	// many modes there are and the fit does not: poles that the spectra need a little, worth 1.5 per parameter, share in what is told of their neighbours.
	oneF, threeZ := [3]float64{1.1e-3, 9.1e-4, 8.9e-4}, [3]float64{3.4e-3, 2.7e-3, 2.7e-3}
	best := c.best(t, 16, 224)
	for _, m := range r.Modes {
		if m.Kind != Structure {
			continue
		}
		t.Logf("mode %d: bound %.4f Hz, %.5f; of one mode alone %.4f Hz, %.5f", k+1, best[k].Frequency, best[k].Damping, oneF[k]*m.Frequency, threeZ[k]/3)
		if ratio := best[k].Frequency / (oneF[k] * row.Values[k]); ratio < 0.98 || ratio > 1.1 {
			t.Errorf("mode %d: the bound of frequency is %.2f of that of one mode alone", k+1, ratio)
		}
		if ratio := 3 * best[k].Damping / threeZ[k]; ratio < 0.98 || ratio > 1.1 {
			t.Errorf("mode %d: the bound of damping is %.2f of that of one mode alone", k+1, ratio)
		}
		if ratio := m.FrequencyError / best[k].Frequency; ratio < 0.8 || ratio > 1.7 {
			t.Errorf("mode %d: frequency error %.4f Hz is %.2f of the bound", k+1, m.FrequencyError, ratio)
		}
		if ratio := m.DampingError / best[k].Damping; ratio < 0.8 || ratio > 1.7 {
			t.Errorf("mode %d: damping error %.5f is %.2f of the bound", k+1, m.DampingError, ratio)
		}
		if math.Abs(m.Frequency-row.Values[k]) > 3.5*m.FrequencyError || math.Abs(m.Damping-row.Values[3+k]) > 3.5*m.DampingError {
			t.Errorf("mode %d: %.3f ± %.3f Hz and %.4f ± %.4f miss the truth", k+1, m.Frequency, m.FrequencyError, m.Damping, m.DampingError)
		}
		k++
	}
}

// A steady line on top of the chain is a line by its kurtosis, a wandering one by its band; neither costs a mode.
func TestLinesAreNoModes(t *testing.T) {
	c, row := readChain(t, "F-OMA-TRUTH-BAND")
	y := c.simulate()
	wander := noise.Source(5)
	angle, drift := 0.0, 0.0
	for i := range y[0] {
		drift += -drift/500 + 0.05*wander.Gauss()
		angle += 2 * math.Pi * (112 + drift) / c.Rate
		for k, by := range []float64{1, 0.4, -0.7} {
			y[k][i] += 0.004*by*math.Sin(2*math.Pi*70*float64(i)/c.Rate) + 0.006*by*math.Sin(angle)
		}
	}
	r, err := Identify(Record{Rate: c.Rate, Runs: [][][]float64{y}}, Settings{From: 20, To: 200, Threads: 1, Bands: []Band{{Low: 107, High: 117}}})
	if err != nil {
		t.Fatal(err)
	}
	var f, lines []float64
	for _, m := range r.Modes {
		t.Logf("%s %.3f ± %.3f Hz, %.4f ± %.4f, kurtosis %.2f %s", m.Kind, m.Frequency, m.FrequencyError, m.Damping, m.DampingError, m.Kurtosis, m.Reason)
		switch m.Kind {
		case Structure:
			f = append(f, m.Frequency)
		case Line:
			lines = append(lines, m.Frequency)
		}
	}
	if len(f) != 3 {
		t.Fatalf("modes at %v Hz", f)
	}
	row.Check(t, 1, f...)
	near := func(want, by float64) bool {
		for _, v := range lines {
			if math.Abs(v-want) < by {
				return true
			}
		}
		return false
	}
	if !near(70, 0.5) || !near(112, 5) {
		t.Errorf("lines at %v Hz", lines)
	}
}

// The same record in two runs and on any number of threads gives the same modes; cut in runs, nearly so.
func TestThreadsAndRuns(t *testing.T) {
	c, _ := readChain(t, "F-OMA-SIM")
	y := c.simulate()
	set := Settings{From: 20, To: 200}
	one, err := Identify(Record{Rate: c.Rate, Runs: [][][]float64{y}}, set)
	if err != nil {
		t.Fatal(err)
	}
	set.Threads = 3
	many, err := Identify(Record{Rate: c.Rate, Runs: [][][]float64{y}}, set)
	if err != nil {
		t.Fatal(err)
	}
	cut := [][][]float64{{}, {}}
	for _, x := range y {
		cut[0], cut[1] = append(cut[0], x[:14000]), append(cut[1], x[14050:])
	}
	runs, err := Identify(Record{Rate: c.Rate, Runs: cut}, set)
	if err != nil {
		t.Fatal(err)
	}
	if len(one.Modes) != len(many.Modes) {
		t.Fatalf("%d and %d modes", len(one.Modes), len(many.Modes))
	}
	for i, m := range one.Modes {
		if m.Frequency != many.Modes[i].Frequency || m.DampingError != many.Modes[i].DampingError {
			t.Errorf("mode %d differs between one and three threads", i)
		}
		found := false
		for _, o := range runs.Modes {
			found = found || o.Kind == m.Kind && math.Abs(o.Frequency-m.Frequency) < 2*m.FrequencyError
		}
		if m.Kind == Structure && !found {
			t.Errorf("the mode at %.2f Hz is lost when the record is cut in two", m.Frequency)
		}
	}
}

// Refusals: too short, not finite, a channel that never changes.
func TestRefusals(t *testing.T) {
	set := Settings{From: 20, To: 200}
	var short *spectrum.ShortError
	if _, err := Identify(Record{Rate: 1000, Runs: [][][]float64{{make([]float64, 50)}}}, set); !errors.As(err, &short) {
		t.Errorf("fifty samples: %v", err)
	}
	source := noise.Source(1)
	x, still := make([]float64, 20000), make([]float64, 20000)
	for i := range x {
		x[i] = source.Gauss()
	}
	if _, err := Identify(Record{Rate: 1000, Runs: [][][]float64{{x, still}}}, set); !errors.Is(err, ErrDegenerate) {
		t.Errorf("a still channel: %v", err)
	}
	x[500] = math.NaN()
	if _, err := Identify(Record{Rate: 1000, Runs: [][][]float64{{x}}}, set); !errors.Is(err, spectrum.ErrNotFinite) {
		t.Errorf("a value that is no number: %v", err)
	}
	// White noise has no modes.
	x[500] = 0
	r, err := Identify(Record{Rate: 1000, Runs: [][][]float64{{x}}}, set)
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range r.Modes {
		if m.Kind == Structure {
			t.Errorf("white noise has a mode at %.2f ± %.2f Hz, %.4f ± %.4f", m.Frequency, m.FrequencyError, m.Damping, m.DampingError)
		}
	}
}

// The open data set oma_shear_frame_simulated, with the true modes beside it. Its SOURCE.md notes that the simulation shifts
// the upper ones by up to 2.7 %: that is what the trapezoidal rule does at 12 Hz, f → atan(πf/12)·12/π. About the shifted
// ones all five agree within 0.5 %.
func TestShearFrame(t *testing.T) {
	folder := os.Getenv("HUSHFRAME_OPEN_DATA")
	if folder == "" {
		t.Skip("HUSHFRAME_OPEN_DATA is not set")
	}
	read := func(name string) [][]float64 {
		f, err := os.Open(filepath.Join(folder, "oma_shear_frame_simulated", name))
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		rows, err := csv.NewReader(f).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		columns := make([][]float64, len(rows[0]))
		for _, row := range rows[1:] {
			for k, cell := range row {
				v, err := strconv.ParseFloat(cell, 64)
				if err != nil {
					t.Fatal(err)
				}
				columns[k] = append(columns[k], v)
			}
		}
		return columns
	}
	truth := read("reference_modes.csv")
	r, err := Identify(Record{Rate: 12, Runs: [][][]float64{read("accel_12hz.csv")}}, Settings{From: 0.1, To: 2, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	var found []Mode
	for _, m := range r.Modes {
		t.Logf("%s %d(%d) %.4f ± %.4f Hz, %.4f ± %.4f, peak %.4f %.4f %s", m.Kind, m.Orders, m.First, m.Frequency, m.FrequencyError, m.Damping, m.DampingError, m.PeakFrequency, m.PeakDamping, m.Reason)
		if m.Kind == Structure {
			found = append(found, m)
		}
	}
	if len(found) != 5 {
		t.Fatalf("%d modes, want 5", len(found))
	}
	for k, m := range found {
		shape := make([]complex128, 5)
		for c := range shape {
			shape[c] = complex(truth[4+c][k], 0)
		}
		want := math.Atan(math.Pi*truth[2][k]/12) * 12 / math.Pi
		if off := m.Frequency/want - 1; math.Abs(off) > 0.005 {
			t.Errorf("mode %d: %.4f Hz, truth %.4f shifted to %.4f", k+1, m.Frequency, truth[2][k], want)
		}
		if off := m.Damping/truth[3][k] - 1; math.Abs(off) > 0.3 {
			t.Errorf("mode %d: damping %.4f, truth %.4f", k+1, m.Damping, truth[3][k])
		}
		if a := Agreement(m.Shape, shape); a < 0.98 {
			t.Errorf("mode %d: agreement of its shape %.3f", k+1, a)
		}
		t.Logf("mode %d: truth %.4f Hz, %.4f, agreement %.4f", k+1, truth[2][k], truth[3][k], Agreement(m.Shape, shape))
	}
}

func TestDirection(t *testing.T) {
	// A real direction turned by any phase comes back; a circling one holds half.
	want := []float64{0.6, -0.8, 0}
	shape := make([]complex128, 3)
	for i, v := range want {
		shape[i] = complex(v*math.Cos(2), v*math.Sin(2))
	}
	got, hold := Direction(shape)
	for i := range got {
		if math.Abs(got[i]+want[i]) > 1e-12 { // the largest component is positive
			t.Errorf("direction %v", got)
		}
	}
	if math.Abs(hold-1) > 1e-12 {
		t.Errorf("collinearity %g", hold)
	}
	if _, hold = Direction([]complex128{1, 1i, 0}); math.Abs(hold-0.5) > 1e-12 {
		t.Errorf("a circling shape has %g", hold)
	}
}

// A low-passed, thinned sine keeps its amplitude below 0.4 of the new rate and loses it above 0.6.
func TestDecimate(t *testing.T) {
	for f, want := range map[float64]float64{10: 1, 79: 1, 125: 0} {
		x := make([]float64, 4000)
		for i := range x {
			x[i] = math.Sin(2 * math.Pi * f * float64(i) / 1000)
		}
		r := Decimate(Record{Rate: 1000, Runs: [][][]float64{{x}}}, 5)
		if r.Rate != 200 {
			t.Fatalf("rate %g", r.Rate)
		}
		square := 0.0
		for _, v := range r.Runs[0][0] {
			square += v * v
		}
		if got := math.Sqrt(2 * square / float64(len(r.Runs[0][0]))); math.Abs(got-want) > 0.005 {
			t.Errorf("%g Hz keeps %.4f", f, got)
		}
	}
}

func TestKurtosis(t *testing.T) {
	source := noise.Source(3)
	x, y := make([]float64, 60000), make([]float64, 60000)
	for i := range x {
		x[i] = source.Gauss()
		y[i] = 0.05*x[i] + math.Sin(2*math.Pi*150.3*float64(i)/1000)
	}
	// N = 60 s × 10 Hz independent values scatter by √(24/600) = 0.2.
	if k := Kurtosis(Record{Rate: 1000, Runs: [][][]float64{{x}}}, []float64{1}, 150, 10); math.Abs(k-3) > 0.5 {
		t.Errorf("noise has %.2f", k)
	}
	if k := Kurtosis(Record{Rate: 1000, Runs: [][][]float64{{y}}}, []float64{1}, 150, 10); math.Abs(k-1.5) > 0.1 {
		t.Errorf("a sine has %.2f", k)
	}
}

// A record of 120 s at 2 kHz on three axes.
func BenchmarkIdentify(b *testing.B) {
	source := noise.Source(77)
	var y [3][]float64
	var state [6][2]float64
	for range 240000 {
		var out [3]float64
		for m := range state {
			w := 2 * math.Pi * (90 + 70*float64(m)) / 2000
			const zeta = 0.02
			a1, a2 := 2*math.Exp(-zeta*w)*math.Cos(w), -math.Exp(-2*zeta*w)
			s := &state[m]
			s[0], s[1] = a1*s[0]+a2*s[1]+source.Gauss(), s[0]
			out[m%3] += s[0]
			out[(m+1)%3] += 0.2 * s[0]
		}
		for k := range y {
			y[k] = append(y[k], out[k]+source.Gauss())
		}
	}
	record := Record{Rate: 2000, Runs: [][][]float64{y[:]}}
	b.ResetTimer()
	for range b.N {
		r, err := Identify(record, Settings{From: 80, To: 500, Threads: 2})
		if err != nil {
			b.Fatal(err)
		}
		n := 0
		for _, m := range r.Modes {
			if m.Kind == Structure {
				n++
			}
		}
		if n != 6 {
			b.Fatalf("%d modes, want 6", n)
		}
	}
}
