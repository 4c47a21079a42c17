package match

import (
	"math"
	"testing"
)

// ∫ of a line is exact by trapezia, its ends between the given places too; logarithmic reading of the ends is that of
// Resample.
func TestPower(t *testing.T) {
	x, y := []float64{1, 2, 4, 5}, []float64{3, 3, 3, 3}
	if got := Power(x, y, 1.5, 4.25); math.Abs(got-3*2.75) > 1e-12 {
		t.Errorf("a level density has %g", got)
	}
	y = []float64{1, 2, 4, 5}
	if got := Power(x, y, 1, 5); math.Abs(got-12) > 1e-12 {
		t.Errorf("∫x dx from 1 to 5 is %g", got)
	}
	// Between 2 and 4 the curve is read as 2·2^((x-2)/2): √8 at 3.
	if got, want := Power(x, y, 2, 3), (2+math.Sqrt(8))/2; math.Abs(got-want) > 1e-12 {
		t.Errorf("got %g, want %g", got, want)
	}
	for _, ends := range [][2]float64{{0.5, 2}, {2, 6}, {3, 2}} {
		if got := Power(x, y, ends[0], ends[1]); !math.IsNaN(got) {
			t.Errorf("%v: %g", ends, got)
		}
	}
}

// Exact midbands and edges of IEC 61260-1:2014, base-ten system: 100 Hz lies between 89.125 and 112.202 Hz (common
// practice, from memory: the standard's table is not at hand; the formula is in the comment of ThirdOctaves).
func TestThirdOctaves(t *testing.T) {
	got := ThirdOctaves(80, 300)
	want := []Band{{80, 89.125}, {89.125, 112.202}, {112.202, 141.254}, {141.254, 177.828}, {177.828, 223.872}, {223.872, 281.838}, {281.838, 300}}
	if len(got) != len(want) {
		t.Fatalf("%v", got)
	}
	for i, b := range got {
		if math.Abs(b.From-want[i].From) > 5e-4 || math.Abs(b.To-want[i].To) > 5e-4 {
			t.Errorf("band %d is %v, want %v", i, b, want[i])
		}
	}
	// No sliver for an end that lies on an edge but for rounding.
	if got := ThirdOctaves(89.125, 112.3); len(got) != 1 {
		t.Errorf("%v", got)
	}
}
