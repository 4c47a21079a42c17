package eigen_test

import (
	"context"
	"strings"
	"testing"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

// A count that goes on asking for one more than there are cannot be met: after four searches the result says that it is not
// complete and by how much, and what was found is right all the same. A count of fewer than were found, which is impossible, and
// one that cannot be trusted take away the proof and nothing else: where the search relied on that count, it goes on beyond the
// limit.
func TestCountThatCannotBeMet(t *testing.T) {
	const n = 60
	k, chain := trial.Chain(n)
	m := trial.Identity(n)
	order := sparse.MinimumDegree(k.Pattern())
	// Six are wanted, below a limit between the sixth and the seventh or simply as many.
	options := map[string]eigen.Options{"limit": {Limit: (chain[5] + chain[6]) / 2}, "modes": {Modes: 6}}
	for name, c := range map[string]struct {
		spoil     func(count int, sure bool) (int, bool)
		attempts  map[string]int
		converged bool
		off       int // counted less found
		note      string
	}{
		"one more":         {func(c int, sure bool) (int, bool) { return c + 1, sure }, map[string]int{"limit": 4, "modes": 4}, false, 1, "found below"},
		"one fewer":        {func(c int, sure bool) (int, bool) { return c - 1, sure }, map[string]int{"limit": 2, "modes": 1}, true, -1, "only"},
		"unsure":           {func(c int, _ bool) (int, bool) { return c, false }, map[string]int{"limit": 1, "modes": 1}, true, 0, "cannot be trusted"},
		"unsure, one more": {func(c int, _ bool) (int, bool) { return c + 1, false }, map[string]int{"limit": 1, "modes": 1}, true, 1, "cannot be trusted"},
		"true":             {func(c int, sure bool) (int, bool) { return c, sure }, map[string]int{"limit": 1, "modes": 1}, true, 0, ""},
	} {
		for kind, opt := range options {
			res, err := eigen.LowestCounted(context.Background(), k, m, order, opt, c.spoil)
			if err != nil {
				t.Errorf("%s, %s: %v", name, kind, err)
				continue
			}
			st := res.Status
			if st.Attempts != c.attempts[kind] || st.Converged != c.converged || st.Proved != (name == "true") || st.Counted-st.Found != c.off {
				t.Errorf("%s, %s: status %+v", name, kind, st)
			}
			if !strings.Contains(strings.Join(st.Notes, "\n"), c.note) || c.note == "" && len(st.Notes) > 0 {
				t.Errorf("%s, %s: notes %q", name, kind, st.Notes)
			}
			agree(t, res.Values, chain[:6], 1e-11)
		}
	}
}

// A count that is met by the second search: the first missed what the true count knows of, or the count erred once.
func TestCountIsMetBySecondSearch(t *testing.T) {
	const n = 60
	k, chain := trial.Chain(n)
	m := trial.Identity(n)
	order := sparse.MinimumDegree(k.Pattern())
	counts := 0
	res, err := eigen.LowestCounted(context.Background(), k, m, order, eigen.Options{Modes: 6}, func(c int, sure bool) (int, bool) {
		if counts++; counts == 1 {
			c += 2
		}
		return c, sure
	})
	if err != nil {
		t.Fatal(err)
	}
	if st := res.Status; st.Attempts != 2 || !st.Converged || !st.Proved || !strings.Contains(strings.Join(st.Notes, "\n"), "2 of 8 eigenvalues below") {
		t.Errorf("status %+v", st)
	}
	agree(t, res.Values, chain[:6], 1e-11)
}
