package transfer

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
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
func run(t testing.TB, folder string, arguments stage.Arguments) (*kinds.Transfer, *stage.Outcome, error) {
	t.Helper()
	for _, a := range (Stage{}).Describe().Arguments {
		if _, given := arguments[a.Name]; !given && a.Default != nil {
			arguments[a.Name] = a.Default
		}
	}
	out := t.TempDir()
	o, err := Stage{}.Run(context.Background(), &stage.Call{
		Arguments: arguments, Outputs: map[string]string{"transfer": out}, Files: stage.NewFiles(folder), Threads: 1, Report: silent{},
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
	x, err := kinds.DecodeTransfer(a)
	if err != nil {
		t.Fatal(err)
	}
	return x, o, nil
}

const (
	rate = 2048.0
	f0   = 120.0
	zeta = 0.012
	mass = 0.5 // kg
)

// accelerance of a mass on a spring: -ω²/m / (ω0² - ω² + 2iζω0ω), Ewins, Modal Testing, 2nd ed., 2000, chapter 2.
func accelerance(f float64) complex128 {
	w, w0 := 2*math.Pi*f, 2*math.Pi*f0
	return complex(-w*w/mass, 0) / complex(w0*w0-w*w, 2*zeta*w0*w)
}

// write makes a bench recording under a force in N, by steps 16 times as fine as the samples.
func write(t testing.TB, folder, name, header string, seconds float64, unit float64, force func(t float64) float64) {
	t.Helper()
	const fine = 16
	random := rand.New(rand.NewPCG(1, 9))
	var out bytes.Buffer
	fmt.Fprintln(&out, header)
	y, v := 0.0, 0.0
	w0 := 2 * math.Pi * f0
	for i := range int(seconds * rate * fine) {
		at := float64(i) / (rate * fine)
		p := force(at)
		a := p/mass - 2*zeta*w0*v - w0*w0*y
		v += a / (rate * fine)
		y += v / (rate * fine)
		if i%fine == 0 {
			fmt.Fprintf(&out, "%.6f,%.5f,%.4f\n", at, p/unit+0.002*random.NormFloat64(), a+0.02*random.NormFloat64())
		}
	}
	if err := os.WriteFile(filepath.Join(folder, name), out.Bytes(), 0o600); err != nil {
		t.Fatal(err)
	}
}

func pulse(at, peak, t float64) float64 {
	x := (t - at) / 0.002
	if x <= 0 || x >= 1 {
		return 0
	}
	s := math.Sin(math.Pi * x)
	return peak * s * s
}

// Four strikes, of which one bounces, on a mass and spring of known transfer function; force in pounds, acceleration turned round.
func TestStrikes(t *testing.T) {
	folder := t.TempDir()
	write(t, folder, "a.csv", "time_s,hammer_lbf,az_m_s2", 9, 4.4482216152605, func(t float64) float64 {
		return pulse(0.5, 60, t) + pulse(2.5, 45, t) + pulse(4.5, 70, t) + pulse(4.53, 20, t) + pulse(6.5, 55, t)
	})
	x, o, err := run(t, folder, stage.Arguments{"file": "a.csv", "columns": map[string]any{"z": "-az_m_s2"}})
	if err != nil {
		t.Fatal(err)
	}
	if x.Method != strikes || x.Averages != 3 || len(x.Strikes) != 4 || x.Strikes[2].Used || x.Strikes[2].Why != "double" || o.Figures["left_out"] != 1.0 {
		t.Fatalf("%s, %d averages, %+v", x.Method, x.Averages, x.Strikes)
	}
	if s := x.Strikes[0]; math.Abs(s.Time-0.501) > 5e-4 || math.Abs(s.Force-60) > 0.6 {
		t.Errorf("%+v", s)
	}
	if len(x.Peaks) != 1 {
		t.Fatalf("%+v", x.Peaks)
	}
	p := x.Peaks[0]
	if math.Abs(p.Frequency-f0) > 0.002*f0 || math.Abs(p.Damping-zeta) > 0.08*zeta || p.Coherence < 0.99 {
		t.Errorf("%+v, truth %g Hz, %g", p, f0, zeta)
	}
	// Away from the peak, where the window changes little, the transfer function is the known one, turned round.
	for _, f := range []float64{60, 90, 160, 240} {
		k := int(math.Round(f / x.Step))
		want := -accelerance(float64(k) * x.Step)
		for name, h := range map[string]complex128{"H1": x.Responses[0].H1[k], "H2": x.Responses[0].H2[k]} {
			if e := cmplx.Abs(h-want) / cmplx.Abs(want); e > 0.03 {
				t.Errorf("%s at %.1f Hz is %.4g, want %.4g", name, float64(k)*x.Step, h, want)
			}
		}
	}
	if x.ExcitedTo < 400 || x.ExcitedTo > 1024 {
		t.Errorf("force up to %g Hz", x.ExcitedTo)
	}
}

// Broadband noise of a shaker: no strikes, Hann segments.
func TestSteady(t *testing.T) {
	folder := t.TempDir()
	random := rand.New(rand.NewPCG(4, 4))
	var low [4]float64
	write(t, folder, "a.csv", "time_s,force_N,az_m_s2", 40, 1, func(float64) float64 {
		in := 500 * random.NormFloat64()
		for i := range low { // far below half the sample rate, or the force would fold
			low[i] += (in - low[i]) * 0.05
			in = low[i]
		}
		return in
	})
	x, _, err := run(t, folder, stage.Arguments{"file": "a.csv"})
	if err != nil {
		t.Fatal(err)
	}
	if x.Method != steady || len(x.Strikes) != 0 || x.Decay != 0 || x.Averages < 30 {
		t.Fatalf("%s, %d averages", x.Method, x.Averages)
	}
	if len(x.Peaks) != 1 || math.Abs(x.Peaks[0].Frequency-f0) > 0.005*f0 || math.Abs(x.Peaks[0].Damping-zeta) > 0.15*zeta {
		t.Errorf("%+v", x.Peaks)
	}
	k := int(160 / x.Step)
	if want := accelerance(float64(k) * x.Step); cmplx.Abs(x.Responses[0].H1[k]-want) > 0.03*cmplx.Abs(want) || x.Responses[0].Coherence[k] < 0.98 {
		t.Errorf("%v, want %v", x.Responses[0].H1[k], want)
	}
}

func TestRefusals(t *testing.T) {
	folder := t.TempDir()
	write(t, folder, "a.csv", "time_s,force_N,az_m_s2", 2, 1, func(t float64) float64 { return pulse(0.5, 60, t) + pulse(0.53, 30, t) })
	write(t, folder, "b.csv", "time_s,pull,az_m_s2", 1, 1, func(t float64) float64 { return pulse(0.5, 60, t) })
	seconds := func(v float64) stage.Quantity { return stage.Quantity{SI: v, Dimension: "time"} }
	for text, a := range map[string]stage.Arguments{
		"no column is a force by its name":             {"file": "b.csv"},
		"none of 1 strikes can be used: 1 double":      {"file": "a.csv", "segment": seconds(1), "method": "strikes"},
		"too short for a transform":                    {"file": "a.csv", "segment": seconds(0.01), "method": "strikes"},
		"a segment needs 3 s":                          {"file": "a.csv", "segment": seconds(3), "method": "steady"},
		`"Hz" is no unit of force`:                     {"file": "a.csv", "units": map[string]any{"force_N": "Hz"}},
		"the band of the peaks ends at 50 Hz":          {"file": "a.csv", "from": hertz(60), "to": hertz(50)},
		`there is no role "hammer"; the roles are tim`: {"file": "a.csv", "columns": map[string]any{"hammer": "force_N"}},
	} {
		_, _, err := run(t, folder, a)
		var f *fault.Error
		if !errors.As(err, &f) || f.Kind != fault.Input || f.Remedy == "" || !strings.Contains(err.Error(), text) {
			t.Errorf("%s: %v", text, err)
		}
	}
}

// SOURCE.md of the set: a steel cantilever on a shaker, steady tones at 100, 120 and 150 Hz, force in pounds. At the tones, and only there,
// the force explains the acceleration.
func TestBeamShaker(t *testing.T) {
	root := os.Getenv("HUSHFRAME_OPEN_DATA")
	if root == "" {
		t.Skip("HUSHFRAME_OPEN_DATA is not set, so the open recordings are not read")
	}
	x, _, err := run(t, filepath.Join(root, "beam_shaker_tones"), stage.Arguments{
		"file": "three_tones_1600hz.lvm", "columns": map[string]any{"time": "X_Value", "force": "#3", "z": "Acceleratio"},
		"units": map[string]any{"Acceleratio": "g", "X_Value": "s", "#3": "pounds"},
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range []float64{100, 120, 150} {
		k := int(math.Round(f / x.Step))
		if c := x.Responses[0].Coherence[k]; c < 0.99 {
			t.Errorf("coherence %g at %g Hz", c, f)
		}
		t.Logf("%g Hz: |H1| %.3f, |H2| %.3f m/s²/N, coherence %.4f", f, cmplx.Abs(x.Responses[0].H1[k]), cmplx.Abs(x.Responses[0].H2[k]), x.Responses[0].Coherence[k])
	}
	if c := x.Responses[0].Coherence[int(135/x.Step)]; c > 0.5 {
		t.Errorf("coherence %g between the tones", c)
	}
	for _, p := range x.Peaks {
		t.Logf("%+v", p)
	}
}

func TestDescriptionHoldsTogether(t *testing.T) {
	for _, a := range (Stage{}).Describe().Arguments {
		if a.About == "" || a.Example == "" {
			t.Errorf("argument %s lacks help", a.Name)
		}
	}
}
