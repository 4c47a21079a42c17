package solve_test

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/solve"
)

// told runs the stage on the small quadrotor with an eigen-solver whose result is spoiled in the ways that package eigen
// describes.
func told(t *testing.T, spoil func(res *eigen.Result)) (*stage.Outcome, error) {
	t.Helper()
	b := newBench(t)
	b.stage = solve.With(func(ctx context.Context, k, m *sparse.Symmetric, order sparse.Ordering, opt eigen.Options) (*eigen.Result, error) {
		res, err := eigen.Lowest(ctx, k, m, order, opt)
		if err == nil {
			if !res.Status.Proved || res.Status.Attempts != 1 {
				t.Errorf("the solver itself ended with %+v", res.Status)
			}
			spoil(res)
		}
		return res, err
	})
	m, p := known.Airframe(0.03)
	o, _, err := b.run(m, p, 2, map[string]float64{"up_to": 600, "swept_to": 400})
	return o, err
}

// When a mode that the count tells of is not found however often the search is repeated, there are no modes but a fault that
// says how many are missing, below what, and what to do.
func TestMissingModeIsSaid(t *testing.T) {
	found := 0
	_, err := told(t, func(res *eigen.Result) {
		last := len(res.Values) - 1
		res.Values, res.Vectors, res.Residuals = slices.Delete(res.Values, 8, 9), slices.Delete(res.Vectors, 8, 9), res.Residuals[:last]
		st := &res.Status
		st.Found--
		st.Converged, st.Proved, st.Attempts = false, false, 4
		found = st.Found
	})
	var f *fault.Error
	if !errors.As(err, &f) {
		t.Fatalf("got %v, want a fault", err)
	}
	if f.Kind != fault.Numeric || f.Argument != "up_to" || !strings.Contains(f.Remedy, "up_to") {
		t.Errorf("the fault is %+v", f)
	}
	var counted, got, searches int
	var below float64
	_, said, _ := strings.Cut(f.Error(), "tells of ")
	if _, err := fmt.Sscanf(said, "%d modes below %g Hz, rigid-body motions included, of which %d were found in %d searches", &counted, &below, &got, &searches); err != nil {
		t.Fatalf("%q: %v", f.Error(), err)
	}
	if counted != found+1 || got != found || below < 600 || below > 600.1 || searches != 4 {
		t.Errorf("%q, but %d were found", f.Error(), found)
	}
}

// A count of fewer than were found, or one that cannot be trusted, leaves the modes and warns, with the numbers in a note.
func TestUnprovedModesAreWarnedOf(t *testing.T) {
	for want, spoil := range map[string]func(res *eigen.Result){
		"but":               func(res *eigen.Result) { res.Status.Proved = false; res.Status.Counted-- },
		"cannot be trusted": func(res *eigen.Result) { res.Status.Proved, res.Status.Trusted = false, false },
		"":                  func(*eigen.Result) {},
	} {
		o, err := told(t, spoil)
		if err != nil {
			t.Fatalf("%q: %v", want, err)
		}
		at := slices.IndexFunc(o.Warnings, func(w stage.Warning) bool { return w.ID == "solve.unproved" })
		if (at >= 0) != (want != "") {
			t.Errorf("%q: warnings %+v", want, o.Warnings)
		}
		if notes := strings.Join(o.Notes, "\n"); !strings.Contains(notes, want) || (want == "") == strings.Contains(notes, "count") || (want == "") != strings.Contains(notes, "all found") {
			t.Errorf("%q: notes %q", want, o.Notes)
		}
	}
}
