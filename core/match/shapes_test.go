package match

import (
	"math"
	"reflect"
	"testing"
)

// By the definition (R. J. Allemang and D. L. Brown, 1982), worked by hand.
func TestMAC(t *testing.T) {
	for _, c := range []struct {
		a, b, w []float64
		want    float64
	}{
		{[]float64{1, 2, 3}, []float64{-2, -4, -6}, nil, 1},
		{[]float64{1, 0}, []float64{0, 1}, nil, 0},
		{[]float64{1, 1}, []float64{1, 0}, nil, 0.5},
		{[]float64{1, 2}, []float64{2, 1}, nil, 16.0 / 25},
		// (3·1·2 + 1·2·1)² / ((3+4)·(12+1)).
		{[]float64{1, 2}, []float64{2, 1}, []float64{3, 1}, 64.0 / 91},
	} {
		if got := MAC(c.a, c.b, c.w); math.Abs(got-c.want) > 1e-15 {
			t.Errorf("%v and %v: %g, want %g", c.a, c.b, got, c.want)
		}
	}
	if got := MAC([]float64{0, 0}, []float64{1, 0}, nil); !math.IsNaN(got) {
		t.Errorf("a shape at rest has %g", got)
	}
}

// The modes of a free uniform bar along its length are cos(kπx), whatever its section: a stiffer bar has the same shapes
// at other frequencies, and they are found though their order by frequency among others has changed.
func TestTrackAcrossFrequencies(t *testing.T) {
	shape := func(k int) []float64 {
		const n = 200
		out := make([]float64, n)
		for i := range out {
			out[i] = math.Cos(float64(k) * math.Pi * (float64(i) + 0.5) / n)
		}
		return out
	}
	before := Shapes{Frequency: []float64{100, 200, 300, 390}, Motion: [][]float64{shape(1), shape(2), shape(3), shape(7)}}
	after := Shapes{Frequency: []float64{150, 290, 310, 330}, Motion: [][]float64{shape(1), shape(3), shape(2), shape(9)}}
	got := Track(before, after, nil, TrackOptions{})
	want := []Tracked{{0, 0, 1}, {1, 2, 1}, {2, 1, 1}}
	for i := range got.Pairs {
		if math.Abs(got.Pairs[i].MAC-1) < 1e-12 {
			got.Pairs[i].MAC = 1
		}
	}
	if !reflect.DeepEqual(got.Pairs, want) || !reflect.DeepEqual(got.Lost, []int{3}) || !reflect.DeepEqual(got.New, []int{3}) {
		t.Errorf("%+v", got)
	}
	if len(got.MAC) != 16 || math.Abs(got.MAC[1*4+2]-1) > 1e-12 || got.MAC[0] < 1-1e-12 || got.MAC[3] > 1e-12 {
		t.Errorf("table %v", got.MAC)
	}
}

// Two modes of equal shape at the points that were looked at are told apart by frequency alone, and a mode is lost rather
// than forced on one that hardly resembles it.
func TestTrackSettlesDoubts(t *testing.T) {
	a, b := []float64{1, 0, 0}, []float64{0.6, 0.8, 0}
	got := Track(Shapes{[]float64{100, 200}, [][]float64{a, a}}, Shapes{[]float64{110, 190}, [][]float64{a, a}}, nil, TrackOptions{})
	if len(got.Pairs) != 2 || got.Pairs[0].After != 0 || got.Pairs[1].After != 1 {
		t.Errorf("%+v", got.Pairs)
	}
	got = Track(Shapes{[]float64{200}, [][]float64{a}}, Shapes{[]float64{120, 190}, [][]float64{a, a}}, nil, TrackOptions{})
	if len(got.Pairs) != 1 || got.Pairs[0].After != 1 || !reflect.DeepEqual(got.New, []int{0}) {
		t.Errorf("%+v", got)
	}
	got = Track(Shapes{[]float64{100}, [][]float64{a}}, Shapes{[]float64{100}, [][]float64{b}}, nil, TrackOptions{})
	if len(got.Pairs) != 0 || len(got.Lost) != 1 || len(got.New) != 1 { // MAC 0.36
		t.Errorf("%+v", got)
	}
	got = Track(Shapes{[]float64{100}, [][]float64{a}}, Shapes{[]float64{100}, [][]float64{b}}, nil, TrackOptions{Least: 0.3})
	if len(got.Pairs) != 1 || math.Abs(got.Pairs[0].MAC-0.36) > 1e-15 {
		t.Errorf("%+v", got)
	}
	if got = Track(Shapes{}, Shapes{}, nil, TrackOptions{}); got.Pairs != nil || got.Lost != nil || got.New != nil {
		t.Errorf("%+v", got)
	}
}
