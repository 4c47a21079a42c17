package main

import (
	"context"
	"encoding/base64"
	"encoding/binary"
	"encoding/xml"
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/plugintest"
	"hushframe/stages/kinds"
)

// small is one triangle and one beam.
func small() *mesh.Mesh {
	x := airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}
	return &mesh.Mesh{
		Nodes:     []airframe.Vec{{0, 0, 0}, {1, 0, 0}, {0, 1, 0}, {.5, 0, 0}, {.5, .5, 0}, {0, .5, 0}, {0, 0, 1}, {0, 0, 2}},
		Parts:     []mesh.Part{{Name: "top", Element: "quadratic-triangle", Thickness: 2e-3, Frame: x}, {Name: "post", Standoff: true, Outer: 5e-3, Frame: x}},
		Triangles: [][6]int32{{0, 1, 2, 3, 4, 5}}, TrianglePart: []int32{0}, Beams: [][2]int32{{6, 7}}, BeamPart: []int32{1},
	}
}

func shapes(nodes int) *kinds.Modes {
	m := &kinds.Modes{Basis: &modal.Basis{}, Survey: &modal.Survey{}}
	for v := range 9 {
		shape := make([]float64, 3*nodes)
		for i := range shape {
			shape[i] = math.Sin(float64(i + v))
		}
		kind := modal.Elastic
		if v < 6 {
			kind = modal.RigidBody
		}
		m.Basis.Kinds, m.Basis.Frequency, m.Basis.Shapes = append(m.Basis.Kinds, kind), append(m.Basis.Frequency, 40*float64(v)), append(m.Basis.Shapes, shape)
	}
	return m
}

func step() plugintest.Case {
	return plugintest.Case{
		Arguments: stage.Arguments{"to": "out/modes.vtu", "most": 2.0},
		Inputs:    map[string][]*artifact.Artifact{"mesh": {kinds.EncodeMesh(small())}, "modes": {kinds.EncodeModes(shapes(8))}},
	}
}

func TestStage(t *testing.T) {
	plugintest.Stage(t, Stage{}, kinds.Registry(), step())
}

func TestStageProcess(t *testing.T) {
	plugintest.Stage(t, plugintest.Process(t, ".", "vtk-modes"), kinds.Registry(), step())
}

// file is the part of the format that the stage uses.
type file struct {
	Type   string `xml:"type,attr"`
	Header string `xml:"header_type,attr"`
	Piece  struct {
		Points int     `xml:"NumberOfPoints,attr"`
		Cells  int     `xml:"NumberOfCells,attr"`
		Fields []field `xml:"PointData>DataArray"`
		Parts  []field `xml:"CellData>DataArray"`
		Place  []field `xml:"Points>DataArray"`
		Lists  []field `xml:"Cells>DataArray"`
	} `xml:"UnstructuredGrid>Piece"`
}

type field struct {
	Name       string `xml:"Name,attr"`
	Type       string `xml:"type,attr"`
	Components int    `xml:"NumberOfComponents,attr"`
	Text       string `xml:",chardata"`
}

func (f field) data(t *testing.T) []byte {
	t.Helper()
	b, err := base64.StdEncoding.DecodeString(strings.TrimSpace(f.Text))
	if err != nil || int(binary.LittleEndian.Uint32(b)) != len(b)-4 {
		t.Fatalf("array %s: %v, %d bytes", f.Name, err, len(b))
	}
	return b[4:]
}

func (f field) floats(t *testing.T) (out []float64) {
	for b := f.data(t); len(b) > 0; b = b[4:] {
		out = append(out, float64(math.Float32frombits(binary.LittleEndian.Uint32(b))))
	}
	return out
}

// The file holds the mesh and the shapes, as a reader of the format takes them.
func TestFile(t *testing.T) {
	m, modes := small(), shapes(8)
	g := newGrid(m)
	g.field("mode 01 at 240.0 Hz", scaled(modes.Basis.Shapes[6], 0.01))
	var f file
	if err := xml.Unmarshal(g.bytes(), &f); err != nil {
		t.Fatal(err)
	}
	p := f.Piece
	if f.Type != "UnstructuredGrid" || f.Header != "UInt32" || p.Points != 8 || p.Cells != 2 || len(p.Fields) != 1 || p.Fields[0].Name != "mode 01 at 240.0 Hz" || p.Fields[0].Components != 3 {
		t.Fatalf("%+v", f)
	}
	largest := 0.0
	v := p.Fields[0].floats(t)
	for i := 0; i < len(v); i += 3 {
		largest = math.Max(largest, math.Sqrt(v[i]*v[i]+v[i+1]*v[i+1]+v[i+2]*v[i+2]))
	}
	if len(v) != 24 || math.Abs(largest-0.01) > 1e-8 {
		t.Errorf("%d numbers, the largest displacement is %g", len(v), largest)
	}
	if x := p.Place[0].floats(t); x[3] != 1 || x[23] != 2 {
		t.Errorf("places %v", x)
	}
	ints := func(f field) (out []int32) {
		for b := f.data(t); len(b) > 0; b = b[4:] {
			out = append(out, int32(binary.LittleEndian.Uint32(b)))
		}
		return out
	}
	if c, e, k := ints(p.Lists[0]), ints(p.Lists[1]), p.Lists[2].data(t); len(c) != 8 || c[4] != 4 || c[7] != 7 || e[0] != 6 || e[1] != 8 || k[0] != 22 || k[1] != 3 {
		t.Errorf("cells %v, %v, %v", c, e, k)
	}
}

func TestRefusals(t *testing.T) {
	_, err := Stage{}.Run(context.Background(), &stage.Call{Arguments: stage.Arguments{"to": "modes.vtk"}})
	if f := fault.From(err); f == nil || f.Kind != fault.Input || f.Argument != "to" {
		t.Errorf("%v", err)
	}
}
