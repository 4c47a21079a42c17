package sandpiper

import (
	"context"
	"os"
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
