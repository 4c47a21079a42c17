// Package reference reads the rows of testdata/known for the tests of the signal kernels. The README there explains the
// rows and their tolerances.
package reference

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"testing"
)

// Row is one row of outside values.
type Row struct {
	ID     string          `json:"id"`
	Setup  json.RawMessage `json:"setup"`
	Labels []string        `json:"labels"`
	Values []float64       `json:"values"`
	TolRel []float64       `json:"tol_rel"`
	TolAbs []float64       `json:"tol_abs"`
}

// Path returns the path of a file of testdata/known.
func Path(name string) string {
	_, here, _, _ := runtime.Caller(0)
	return filepath.Join(filepath.Dir(here), "..", "..", "..", "..", "testdata", "known", name)
}

// Get returns the row of that id of F_signals.json and decodes its setup into setup, which may be nil.
func Get(t testing.TB, id string, setup any) Row {
	t.Helper()
	text, err := os.ReadFile(Path("F_signals.json"))
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Rows []Row }
	if err := json.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	for _, row := range file.Rows {
		if row.ID != id {
			continue
		}
		if setup != nil {
			if err := json.Unmarshal(row.Setup, setup); err != nil {
				t.Fatalf("%s: %v", id, err)
			}
		}
		return row
	}
	t.Fatalf("no row %s", id)
	return Row{}
}

// Check compares one value with the row's, within the row's tolerance.
func (r Row) Check(t testing.TB, i int, got float64) {
	t.Helper()
	want := r.Values[i]
	if !(math.Abs(got-want) <= r.TolAbs[i]+r.TolRel[i]*math.Abs(want)) {
		t.Errorf("%s, %s: got %.13g, want %.13g (rel %g, abs %g)", r.ID, r.Labels[i], got, want, r.TolRel[i], r.TolAbs[i])
	}
}

// CheckAll compares all values of the row.
func (r Row) CheckAll(t testing.TB, got ...float64) {
	t.Helper()
	if len(got) != len(r.Values) {
		t.Fatalf("%s: %d values, want %d", r.ID, len(got), len(r.Values))
	}
	for i, v := range got {
		r.Check(t, i, v)
	}
}

// Noise is the generator of row F-LCG: uniform values in -0.5 … 0.5.
type Noise uint32

// Integer steps the generator and returns its state.
func (n *Noise) Integer() uint32 {
	*n = *n*1664525 + 1013904223
	return uint32(*n)
}

// Uniform returns the next uniform value.
func (n *Noise) Uniform() float64 { return float64(n.Integer())/4294967296 - 0.5 }

// Gauss returns the next near-Gaussian value of unit variance (row F-LCG-GAUSS).
func (n *Noise) Gauss() float64 {
	sum := 0.0
	for range 12 {
		sum += n.Uniform()
	}
	return sum
}
