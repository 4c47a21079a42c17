package record

import (
	"context"
	"path/filepath"
	"testing"

	"hushframe/core/pipeline/stage"
)

// reading keeps what is told of the reading.
type reading struct {
	silent
	fractions []float64
}

func (r *reading) Progress(phase string, fraction float64) {
	if phase == "read" && fraction >= 0 {
		r.fractions = append(r.fractions, fraction)
	}
}

// Reading tells how far it is, in steps of some per cent, and comes to the end.
func TestProgress(t *testing.T) {
	folder := t.TempDir()
	write(t, filepath.Join(folder, "a.csv"), 120_000, 2000)
	arguments := stage.Arguments{"file": "a.csv"}
	for _, a := range (Stage{}).Describe().Arguments {
		if _, given := arguments[a.Name]; !given && a.Default != nil {
			arguments[a.Name] = a.Default
		}
	}
	var told reading
	if _, err := (Stage{}).Run(context.Background(), &stage.Call{Arguments: arguments, Outputs: map[string]string{"spectra": t.TempDir(), "accelerations": t.TempDir()},
		Files: stage.NewFiles(folder), Threads: 1, Report: &told, Services: alone{}}); err != nil {
		t.Fatal(err)
	}
	if n := len(told.fractions); n < 5 || n > 110 || told.fractions[n-1] < 0.9 {
		t.Fatalf("%d steps: %v", n, told.fractions)
	}
	for i, f := range told.fractions {
		if f > 1 || i > 0 && f <= told.fractions[i-1] {
			t.Errorf("%g after %g", f, told.fractions[max(0, i-1)])
		}
	}
}
