package scene

import (
	"encoding/base64"
	"encoding/binary"
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
)

// square is a plate of two right triangles with legs of 10 mm, 2 mm thick, and a frame of one elastic mode.
func square() (*mesh.Mesh, *kinds.Modes) {
	up := airframe.Frame{X: airframe.Vec{1}, Y: airframe.Vec{0, 1}, Z: airframe.Vec{0, 0, 1}}
	m := &mesh.Mesh{Parts: []mesh.Part{{Name: "plate", Thickness: 2e-3, Frame: up}}, TrianglePart: []int32{0, 0},
		Nodes:     []airframe.Vec{{0, 0, 0}, {0.01, 0, 0}, {0.01, 0.01, 0}, {0, 0.01, 0}, {0.005, 0, 0}, {0.01, 0.005, 0}, {0.005, 0.005, 0}, {0.005, 0.01, 0}, {0, 0.005, 0}},
		Triangles: [][6]int32{{0, 1, 2, 4, 5, 6}, {0, 2, 3, 6, 7, 8}}}
	shape := make([]float64, 3*len(m.Nodes))
	for n := range m.Nodes {
		shape[3*n+2] = float64(n) * 0.25 // of the corners 0, 0.25, 0.5, 0.75
	}
	b := &modal.Basis{Kinds: []modal.VectorKind{modal.Elastic}, Frequency: []float64{150}, Shapes: [][]float64{shape},
		Sites: []modal.Site{{Name: "imu", Kind: "gyro", Motion: [][6]float64{{1, 2, 3, 4, 5, 6}}}}}
	s := &modal.Survey{Groups: []string{"plate"}, Kinds: []string{"bending"}, Carriers: []string{"plate"},
		Modes: []modal.Mode{{Number: 1, Frequency: 150, Loss: 0.02, ByGroup: []float64{1}, ByKind: []float64{1}, ByCarrier: []float64{1}, ByElement: []float64{0.9, 0.1}, Below: math.Inf(1)}}}
	return m, &kinds.Modes{Basis: b, Survey: s}
}

func TestSceneIsReadBack(t *testing.T) {
	m, modes := square()
	r := &kinds.Response{}
	for k := range 3 {
		r.Motions = append(r.Motions, kinds.ResponseMotion{Source: kinds.BroadbandSource, Rotor: "all", Axis: "pitch", Frequency: 100 + float64(k), Real: []float64{float64(k)}, Imaginary: []float64{-2}})
	}
	x := New(Sources{Mesh: m, Modes: modes, Response: r}, func(int) string { return "</script>" })
	text, err := x.JSON()
	if err != nil {
		t.Fatal(err)
	}
	if strings.ContainsAny(string(text), "<>&") {
		t.Error("the text could end the element it stands in")
	}
	var got struct {
		Frame struct {
			Nodes string
			Parts []struct{ Triangles string }
		}
		Shapes    struct{ Step, Nodes, Sites string }
		Operating []struct {
			Axis                             string
			Frequency, Step, Real, Imaginary string
		}
		Density struct{ Levels string }
		Modes   []struct{ Damping float64 }
	}
	if err := json.Unmarshal(text, &got); err != nil {
		t.Fatal(err)
	}
	// Only corners are drawn, in the order of their first use: 0, 1, 2, 3.
	nodes, triangles := floats(t, got.Frame.Nodes), got.Frame.Parts[0].Triangles
	if len(nodes) != 12 || math.Abs(nodes[3]-0.01) > 1e-9 || len(raw(t, triangles)) != 24 {
		t.Fatalf("nodes %v", nodes)
	}
	step := floats(t, got.Shapes.Step)[0]
	for i, want := range []float64{0, 0.25, 0.5, 0.75} {
		steps := int16(binary.LittleEndian.Uint16(raw(t, got.Shapes.Nodes)[2*(3*i+2):]))
		if math.Abs(float64(steps)*step-want) > 0.75/65000 {
			t.Errorf("corner %d moves by %g, want %g", i, float64(steps)*step, want)
		}
	}
	if sites := floats(t, got.Shapes.Sites); !slices.Equal(sites, []float64{1, 2, 3, 4, 5, 6}) {
		t.Errorf("site moves by %v", sites)
	}
	// Corners 0 and 2 belong to both triangles, which are alike in volume: half of 0.9 and 0.1. The densest counts as 255.
	if levels := raw(t, got.Density.Levels); !slices.Equal(levels, []byte{142, 255, 142, 28}) {
		t.Errorf("density %v, want 0.5, 0.9, 0.5 and 0.1 of 0.9", levels)
	}
	o := got.Operating[0]
	real := raw(t, o.Real)
	if f := floats(t, o.Frequency); o.Axis != "pitch" || len(f) != 3 || f[2] != 102 {
		t.Errorf("driven on %s at %v", o.Axis, f)
	}
	if w := float64(int16(binary.LittleEndian.Uint16(real[2:]))) * floats(t, o.Step)[1]; math.Abs(w-1) > 1e-4 {
		t.Errorf("the second weight is %g, want 1", w)
	}
	if got.Modes[0].Damping != 0.01 {
		t.Errorf("damping ratio %g", got.Modes[0].Damping)
	}
}

// Modes of another mesh have no shapes to show; motions of another basis do not either.
func TestWhatDoesNotFitIsLeftOut(t *testing.T) {
	m, modes := square()
	r := &kinds.Response{Motions: []kinds.ResponseMotion{{Source: kinds.BroadbandSource, Rotor: "all", Axis: "roll", Frequency: 1, Real: []float64{1, 2}, Imaginary: []float64{1, 2}},
		{Source: kinds.BroadbandSource, Rotor: "all", Axis: "roll", Frequency: 2, Real: []float64{1, 2}, Imaginary: []float64{1, 2}}}}
	if x := New(Sources{Mesh: m, Modes: modes, Response: r}, func(int) string { return "" }); x.Shapes == nil || x.Operating != nil {
		t.Error("motions of two vectors on a basis of one")
	}
	m.Nodes = append(m.Nodes, airframe.Vec{})
	if x := New(Sources{Mesh: m, Modes: modes}, func(int) string { return "" }); x.Frame == nil || x.Shapes != nil || x.Density != nil {
		t.Error("shapes of another mesh")
	}
}

func raw(t *testing.T, s string) []byte {
	t.Helper()
	b, err := base64.StdEncoding.DecodeString(s)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func floats(t *testing.T, s string) []float64 {
	t.Helper()
	b := raw(t, s)
	out := make([]float64, len(b)/4)
	for i := range out {
		out[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(b[4*i:])))
	}
	return out
}
