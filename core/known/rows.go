package known

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
)

// T takes the failures of what reads rows: a *testing.T, or whoever runs problems outside a test. Fatal
// and Fatalf do not return.
type T interface {
	Helper()
	Errorf(format string, args ...any)
	Fatal(args ...any)
	Fatalf(format string, args ...any)
}

// Row is one row of a reference file. Values are finite; complex values are not read here.
type Row struct {
	ID, Title      string
	Setup          json.RawMessage
	Labels         []string
	Values         []float64
	TolRel         []float64 `json:"tol_rel"`
	TolAbs         []float64 `json:"tol_abs"`
	Quantity, Unit string
	Source         []string
	HowKnown       string `json:"how_known"`
}

// Rows returns the rows of testdata/known/<file> whose ids begin with any of the prefixes, in file
// order. It fails the test when a prefix matches nothing.
func Rows(t T, file string, prefixes ...string) []Row {
	t.Helper()
	_, here, _, _ := runtime.Caller(0)
	text, err := os.ReadFile(filepath.Join(filepath.Dir(here), "..", "..", "testdata", "known", file))
	if err != nil {
		t.Fatal(err)
	}
	rows, err := Select(text, prefixes...)
	if err != nil {
		t.Fatalf("%s: %v", file, err)
	}
	return rows
}

// Select reads the rows of a reference file whose ids begin with any of the prefixes, in file order. It
// fails when a prefix matches nothing.
func Select(text []byte, prefixes ...string) ([]Row, error) {
	var all struct{ Rows []json.RawMessage }
	if err := json.Unmarshal(text, &all); err != nil {
		return nil, err
	}
	matched := make([]bool, len(prefixes))
	var rows []Row
	for _, raw := range all.Rows {
		var id struct{ ID string }
		if err := json.Unmarshal(raw, &id); err != nil {
			return nil, err
		}
		i := slices.IndexFunc(prefixes, func(p string) bool { return strings.HasPrefix(id.ID, p) })
		if i < 0 {
			continue
		}
		matched[i] = true
		var row Row
		if err := json.Unmarshal(raw, &row); err != nil {
			return nil, fmt.Errorf("row %s: %w", id.ID, err)
		}
		rows = append(rows, row)
	}
	for i, ok := range matched {
		if !ok {
			return nil, fmt.Errorf("there is no row %s", prefixes[i])
		}
	}
	return rows, nil
}

// One returns the row with exactly this id.
func One(t T, file, id string) Row {
	t.Helper()
	for _, r := range Rows(t, file, id) {
		if r.ID == id {
			return r
		}
	}
	t.Fatalf("%s has no row %s", file, id)
	return Row{}
}

// Decode reads the row's setup into the struct that dst points to.
func (r Row) Decode(t T, dst any) {
	t.Helper()
	if err := json.Unmarshal(r.Setup, dst); err != nil {
		t.Fatalf("row %s: setup: %v", r.ID, err)
	}
}

// Value returns the value with the given label.
func (r Row) Value(t T, label string) float64 {
	t.Helper()
	i := slices.Index(r.Labels, label)
	if i < 0 {
		t.Fatalf("row %s has no value %q, only %q", r.ID, label, r.Labels)
	}
	return r.Values[i]
}

// Printed is the relative error of a value printed with nine significant digits, as the rows are.
const Printed = 5e-9

// Check compares got with the first len(got) values under the row's own tolerances times slack, and
// half of the last digit printed.
func (r Row) Check(t T, slack float64, got ...float64) {
	t.Helper()
	if len(got) == 0 || len(got) > len(r.Values) {
		t.Fatalf("row %s: %d values to check, the row has %d", r.ID, len(got), len(r.Values))
	}
	for i, x := range got {
		want := r.Values[i]
		tol := slack*(r.TolAbs[i]+r.TolRel[i]*math.Abs(want)) + Printed*math.Abs(want)
		if !(math.Abs(x-want) <= tol) {
			t.Errorf("row %s: %s = %.9g, want %.9g (off by %s, tolerance %.3g)", r.ID, r.Labels[i], x, want, relative(x, want), tol)
		}
	}
}

func relative(x, want float64) string {
	if want == 0 {
		return fmt.Sprintf("%.3g", x)
	}
	return fmt.Sprintf("%+.4f %%", 100*(x/want-1))
}
