package bench

import (
	"bytes"
	"compress/gzip"
	"context"
	"io"
	"math"
	"math/cmplx"
	"os"
	"testing"

	"hushframe/jobs/inprocess"
	"hushframe/stages/kinds"
)

// The recipe finds both modes of the invented arm, leaves the blow that bounced out, and its transfer function is the known one.
func TestBench(t *testing.T) {
	d, err := inprocess.Run(context.Background(), "bench.hcl", t.TempDir(), nil)
	if err != nil {
		t.Fatal(err)
	}
	a, err := d.Artifact("arm", "transfer")
	if err != nil {
		t.Fatal(err)
	}
	x, err := kinds.DecodeTransfer(a)
	if err != nil {
		t.Fatal(err)
	}
	if x.Averages != 6 || len(x.Strikes) != 7 || x.Strikes[3].Why != "double" {
		t.Errorf("%d averages of %+v", x.Averages, x.Strikes)
	}
	if len(x.Peaks) != len(Modes()) {
		t.Fatalf("%+v", x.Peaks)
	}
	for i, m := range Modes() {
		p := x.Peaks[i]
		t.Logf("%.2f Hz, %.3f %%; truth %g Hz, %g %%", p.Frequency, 100*p.Damping, m.Frequency, 100*m.Damping)
		if math.Abs(p.Frequency/m.Frequency-1) > 0.003 || math.Abs(p.Damping/m.Damping-1) > 0.1 {
			t.Errorf("%+v, truth %+v", p, m)
		}
	}
	// Ewins, Modal Testing, 2nd ed., 2000, chapter 2: accelerances of modes add up. A window exp(-t/τ) moves them to ω - i/τ.
	for _, f := range []float64{80, 250, 320, 600} {
		k := int(math.Round(f / x.Step))
		w := complex(2*math.Pi*x.Step*float64(k), -1/x.Decay)
		var want complex128
		for _, m := range Modes() {
			w0 := complex(2*math.Pi*m.Frequency, 0)
			want += -w * w * complex(m.Gain, 0) / (w0*w0 - w*w + 2i*complex(m.Damping, 0)*w0*w)
		}
		if got := x.Responses[0].H1[k]; cmplx.Abs(got-want) > 0.03*cmplx.Abs(want) {
			t.Errorf("%g Hz: %v, want %v", f, got, want)
		}
	}
	for _, v := range d.Result.Verdicts {
		if !v.Judged || !v.Holds {
			t.Errorf("requirement %s does not hold", v.Name)
		}
	}
}

// The recording is what its generator writes.
func TestRecordingIsGenerated(t *testing.T) {
	f, err := os.Open("arm.csv.gz")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	z, err := gzip.NewReader(f)
	if err != nil {
		t.Fatal(err)
	}
	got, err := io.ReadAll(z)
	if err != nil {
		t.Fatal(err)
	}
	var want bytes.Buffer
	if err := Knock(&want); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want.Bytes()) {
		t.Error("arm.csv.gz is not what go run ./jobs/bench/knock writes")
	}
}
