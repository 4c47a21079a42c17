package sandpiper

import (
	"context"
	"os"
	"path/filepath"
	"sync"
	"testing"

	"hushframe/core/pipeline/stage"
	"hushframe/jobs/inprocess"
	"hushframe/stages/kinds"
)

// coarse is a mesh size at which the modes are within half a per cent of
// their limit (TestFinerMesh measures it); it keeps these tests short.
const coarse = "14 mm"

var runs struct {
	sync.Mutex
	folder string
}

func TestMain(m *testing.M) {
	folder, err := os.MkdirTemp("", "sandpiper")
	if err != nil {
		panic(err)
	}
	runs.folder = folder
	code := m.Run()
	os.RemoveAll(folder)
	os.Exit(code)
}

// perform runs a job of this folder with a store that all tests share, so that
// equal steps run once.
func perform(t *testing.T, job string, set map[string]string) *inprocess.Done {
	t.Helper()
	runs.Lock()
	defer runs.Unlock()
	d, err := inprocess.Run(context.Background(), job, runs.folder, set)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func quantity(t *testing.T, d *inprocess.Done, label, figure string) float64 {
	t.Helper()
	switch v := d.Step(label).Outcome.Figures[figure].(type) {
	case stage.Quantity:
		return v.SI
	case float64:
		return v
	default:
		t.Fatalf("figure %s of %s is %v", figure, label, v)
		return 0
	}
}

// modes gives the modes of a run.
func modes(t *testing.T, d *inprocess.Done) *kinds.Modes {
	t.Helper()
	a, err := d.Artifact("modes", "modes")
	if err != nil {
		t.Fatal(err)
	}
	m, err := kinds.DecodeModes(a)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// frequencies lists the elastic modes below a limit, Hz.
func frequencies(m *kinds.Modes, below float64) []float64 {
	var f []float64
	for _, x := range m.Survey.Modes {
		if x.Frequency < below {
			f = append(f, x.Frequency)
		}
	}
	return f
}

// copyFolder copies the job folder without its stores and reports.
func copyFolder(t *testing.T) string {
	t.Helper()
	to := t.TempDir()
	for _, name := range []string{"baseline.hcl", "airframe.hcl", "cut/arm.dxf", "cut/bottom.dxf", "cut/clamp.dxf", "cut/top.dxf", "flights/hover-03.csv.gz"} {
		data, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if err := os.MkdirAll(filepath.Dir(filepath.Join(to, name)), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(to, name), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return to
}
