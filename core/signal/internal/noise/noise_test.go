package noise

import (
	"testing"

	"hushframe/core/known"
)

// Rows F-LCG and F-LCG-GAUSS of testdata/known/F_signals.json.
func TestRows(t *testing.T) {
	s := Source(12345)
	var got []float64
	for range 3 {
		got = append(got, float64(s.Integer()))
	}
	row := known.One(t, "F_signals.json", "F-LCG")
	for i, v := range got {
		if v != row.Values[i] {
			t.Errorf("integer %d is %.0f, want %.0f", i, v, row.Values[i])
		}
	}
	s = 12345
	for range 5 {
		got = append(got, s.Uniform())
	}
	row.Check(t, 1, got...)
	s = 12345
	known.One(t, "F_signals.json", "F-LCG-GAUSS").Check(t, 1, s.Gauss(), s.Gauss(), s.Gauss())
}
