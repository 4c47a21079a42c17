package kinds_test

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/stages/kinds"
)

func modesExample() *kinds.Modes {
	shape := func(v float64) []float64 { return []float64{v, 0, 1, 0, -v, 2, 0, 0, v, 1, 1, 0} }
	return &kinds.Modes{
		UpTo: 750, SweptTo: 500, Proved: true, Unknowns: 1200, Mass: 0.61, Centre: airframe.Vec{0.001, -0.0002, 0.012}, RigidRatio: 3e-6,
		Basis: &modal.Basis{
			Kinds:     []modal.VectorKind{modal.RigidBody, modal.Elastic, modal.Residual},
			Frequency: []float64{0, 141.5, 2200},
			Shapes:    [][]float64{shape(1), shape(2), shape(-3)},
			Sites: []modal.Site{{Name: "fr", Kind: "rotor", Point: airframe.Vec{0.1, -0.1, 0.02},
				Motion: [][6]float64{{1, 2, 3, 4, 5, 6}, {0, 0, 1, 0, 0, 0}, {7, 8, 9, 10, 11, 12}}}},
			Groups: []modal.LossGroup{{Name: "bottom", Kind: "part", LossFactor: 0.01, Stiffness: []float64{0, 0, 0, 0, 5, 1, 0, 1, 7}}},
		},
		Masses: []kinds.MassRow{{"bottom", "part", 0.05, airframe.Vec{0, 0, 0.001}}, {"battery", "body", 0.2, airframe.Vec{0, 0, 0.04}}},
		Survey: &modal.Survey{
			From: 80, To: 500, Groups: []string{"bottom"}, Kinds: []string{"in-plane", "bending"}, Carriers: []string{"bottom", "battery"}, Rotors: []string{"fr", "fl"},
			Modes: []modal.Mode{{
				Number: 1, Vector: 1, Frequency: 141.5, Loss: 0.012, ByGroup: []float64{1}, ByKind: []float64{0.2, 0.8}, ByCarrier: []float64{0.3, 0.7}, ByElement: []float64{0.6, 0.3},
				Part: "bottom", Motion: "bending", Rotation: [3]float64{1, -2, 3}, Strength: [3]float64{0.1, 0.2, 0.3}, MomentStrength: [3]float64{4, 5, 6},
				RotorShare: []float64{0.25, 0.75}, MomentShare: []float64{0.5, 0.5}, Below: math.Inf(1), Above: math.Inf(1),
				Meetings: []modal.Meeting{{Order: 3, Blade: true, Speed: 296, Rotors: []int{0, 1}, Service: true}},
			}},
			Gaps: [3][]modal.Gap{1: {{Lower: 1, Upper: 4, Width: 33}}},
		},
	}
}

func TestModesRoundTrip(t *testing.T) {
	want := modesExample()
	folder := t.TempDir()
	if _, err := artifact.Write(folder, kinds.EncodeModes(want)); err != nil {
		t.Fatal(err)
	}
	a, err := artifact.Open(folder, kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	got, err := kinds.DecodeModes(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, want %+v", got, want)
	}
}

func TestModesThatContradictThemselves(t *testing.T) {
	for what, spoil := range map[string]func(*kinds.Modes){
		"components":   func(m *kinds.Modes) { m.Basis.Shapes[1] = m.Basis.Shapes[1][:9] },
		"is of kind":   func(m *kinds.Modes) { m.Basis.Kinds[2] = "static" },
		"numbers over": func(m *kinds.Modes) { m.Basis.Groups[0].Stiffness = []float64{1} },
		"other tables": func(m *kinds.Modes) { m.Survey.Modes[0].ByKind = []float64{1} },
		"of rotor":     func(m *kinds.Modes) { m.Survey.Modes[0].Meetings[0].Rotors = []int{2} },
	} {
		m := modesExample()
		spoil(m)
		if _, err := kinds.DecodeModes(kinds.EncodeModes(m)); err == nil || !strings.Contains(err.Error(), what) {
			t.Errorf("%s: got %v", what, err)
		}
	}
}
