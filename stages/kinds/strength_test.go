package kinds_test

import (
	"math"
	"testing"

	"hushframe/stages/kinds"
)

func TestNegligible(t *testing.T) {
	var s kinds.Strongest
	s.Add([3]float64{2, -3, 0})
	s.Add([3]float64{1, 1, 0})
	s.Add([3]float64{math.Inf(1), math.NaN(), 0}) // of a mode without damping
	if s != (kinds.Strongest{2, 3, 0}) {
		t.Errorf("%v", s)
	}
	for _, c := range []struct {
		axis int
		v    float64
		want bool
	}{{0, 0.0019, true}, {0, 0.0021, false}, {1, -0.0029, true}, {1, -0.0031, false}, {2, 0, false}, {0, math.Inf(1), false}} {
		if got := s.Negligible(c.axis, c.v); got != c.want {
			t.Errorf("axis %d, %g: %v", c.axis, c.v, got)
		}
	}
}
