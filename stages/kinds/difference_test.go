package kinds_test

import (
	"reflect"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/stages/kinds"
)

// Every field has a value of its own, so that a forgotten or swapped column shows.
func TestDifferenceRoundTrip(t *testing.T) {
	two := func(x float64) [2]float64 { return [2]float64{x, x + 0.5} }
	want := &kinds.Difference{
		SharedBefore: 0.9, SharedAfter: 0.8, MassBefore: 0.5, MassAfter: 0.6, From: 80, To: 500,
		Modes: []kinds.ModeChange{{Number: [2]int{3, 4}, Frequency: two(100), Damping: two(0.01), Assurance: 0.97,
			Strength: [2][3]float64{{1, 2, 3}, {4, 5, 6}}, Part: "arm", Motion: "twist"}},
		Alone:     []kinds.ModeWithout{{Side: kinds.After, Number: 7, Nearest: 6, Frequency: 333, Assurance: 0.2, Spanned: 0.7, Reason: "none"}},
		Unshared:  []kinds.Unshared{{Side: kinds.Before, Name: "fin"}},
		Frequency: []float64{80, 500},
		Density:   [2][3][]float64{{{1, 2}, {3, 4}, {5, 6}}, {{7, 8}, {9, 10}, {11, 12}}},
		Bands:     []kinds.BandChange{{Axis: "roll", From: 80, To: 89, RMS: two(3), Change: 1}, {Axis: "roll", From: 80, To: 500, Whole: true, RMS: two(4), Change: 2}},
		Peaks:     []kinds.PeakChange{{Axis: "yaw", Frequency: two(120), Density: two(7), Change: 3, Modes: [2][]int{{4}, {5, 6}}}},
		Lines:     []kinds.LineChange{{Source: "unbalance", Order: 1, Axis: "pitch", Frequency: two(266), Rate: two(8), Change: 4}},
		Masses:    []kinds.MassChange{{Name: "arm", Kind: "part", Mass: two(0.01)}},
	}
	read := func(d *kinds.Difference) (*kinds.Difference, error) {
		folder := t.TempDir()
		if _, err := artifact.Write(folder, kinds.EncodeDifference(d)); err != nil {
			t.Fatal(err)
		}
		a, err := artifact.Open(folder, kinds.Registry())
		if err != nil {
			t.Fatal(err)
		}
		return kinds.DecodeDifference(a)
	}
	if got, err := read(want); err != nil || !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, %v\nwant %+v", got, err, want)
	}
	if got, err := read(&kinds.Difference{}); err != nil || !reflect.DeepEqual(got, &kinds.Difference{}) {
		t.Errorf("nothing: %+v, %v", got, err)
	}
	if x, ok := want.Whole("roll"); !ok || x.Change != 2 {
		t.Errorf("%+v", x)
	}
	want.Alone[0].Side = "beside"
	if _, err := read(want); err == nil {
		t.Error("a side that is none was taken")
	}
}
