package main

import (
	"context"
	"fmt"
	"math"
	"path"
	"strings"

	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "vtk-modes".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	one, zero := 1.0, 0.0
	return stage.Description{
		Name:  "vtk-modes",
		About: "export mode shapes to VTK XML for general viewers",
		Doc: `Writes one unstructured grid (.vtu) with the mesh in metres and a field of
displacements for each elastic mode, brought to a largest displacement of size.`,
		Arguments: []stage.Argument{
			{Name: "mesh", About: "mesh from mesh", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"mesh"}}, Required: true},
			{Name: "modes", About: "modes from solve", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"modes"}}, Required: true},
			{Name: "to", About: "where the file goes", Type: stage.Type{Kind: stage.Target}, Required: true, Example: `"shapes/modes.vtu"`},
			{Name: "most", About: "most modes written, from the lowest", Type: stage.Type{Kind: stage.Whole}, Default: 20.0, Example: "20", Min: &one},
			{Name: "size", About: "largest displacement of a shape", Type: stage.Type{Kind: stage.Amount, Dimension: "length", Unit: "mm"},
				Default: stage.Quantity{SI: 10e-3, Dimension: "length"}, Example: `"10 mm"`, Above: &zero},
		},
		Outputs: []stage.Output{{Name: "grid", Kind: "document", About: "the file", Publish: "to"}},
		Figures: []stage.Figure{
			{Name: "modes", About: "number of modes written", Type: stage.Type{Kind: stage.Whole}},
			{Name: "bytes", About: "size of the file", Type: stage.Type{Kind: stage.Amount, Dimension: "memory", Unit: "kB"}},
		},
	}
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	if err := ctx.Err(); err != nil {
		return nil, fault.From(err)
	}
	target := path.Base(strings.ReplaceAll(call.Arguments.Text("to"), `\`, "/"))
	if !strings.HasSuffix(target, ".vtu") {
		return nil, fault.New(fault.Input, "viewers know an unstructured grid by the ending .vtu, and %q has another", target).
			In("vtk-modes", "").Of("to").Do(`write a name such as "modes.vtu"`)
	}
	m, err := read(call, "mesh", kinds.DecodeMesh)
	if err != nil {
		return nil, err
	}
	modes, err := read(call, "modes", kinds.DecodeModes)
	if err != nil {
		return nil, err
	}
	g := newGrid(m)
	number := 0
	for v, shape := range modes.Basis.Shapes {
		if modes.Basis.Kinds[v] != modal.Elastic || number >= call.Arguments.Whole("most") {
			continue
		}
		if err := ctx.Err(); err != nil {
			return nil, fault.From(err)
		}
		if len(shape) != 3*len(m.Nodes) {
			return nil, fault.New(fault.Input, "the modes are those of another mesh").In("vtk-modes", "").Of("modes").Do("give the mesh that was solved")
		}
		number++
		g.field(fmt.Sprintf("mode %02d at %.1f Hz", number, modes.Basis.Frequency[v]), scaled(shape, call.Arguments.SI("size")))
		call.Report.Progress("modes", float64(number)/float64(call.Arguments.Whole("most")))
	}
	data := g.bytes()
	a := kinds.EncodeDocument(&kinds.Document{Title: "Mode shapes", Page: target, Files: map[string][]byte{target: data},
		Sources: []kinds.DocumentSource{source(call, "mesh"), source(call, "modes")}})
	if _, err := artifact.Write(call.Outputs["grid"], a); err != nil {
		return nil, err
	}
	return &stage.Outcome{Figures: map[string]any{
		"modes": float64(number), "bytes": stage.Quantity{SI: float64(len(data)), Dimension: "memory"},
	}}, nil
}

func read[T any](call *stage.Call, name string, decode func(*artifact.Artifact) (T, error)) (T, error) {
	a, err := artifact.Open(call.Inputs[name][0].Folder, kinds.Registry())
	if err != nil {
		var none T
		return none, err
	}
	return decode(a)
}

func source(call *stage.Call, name string) kinds.DocumentSource {
	in := call.Inputs[name][0]
	return kinds.DocumentSource{Kind: in.Kind, From: in.From, Hash: in.Hash}
}

// scaled brings the largest displacement of a shape to size.
func scaled(shape []float64, size float64) []float64 {
	largest := 0.0
	for i := 0; i < len(shape); i += 3 {
		largest = math.Max(largest, math.Hypot(math.Hypot(shape[i], shape[i+1]), shape[i+2]))
	}
	if largest == 0 {
		return shape
	}
	out := make([]float64, len(shape))
	for i, v := range shape {
		out[i] = v * size / largest
	}
	return out
}

// cells are those of a mesh: nodes, kind and part of each.
type cells struct {
	nodes  []int32
	ends   []int32 // of each cell in nodes
	kinds  []byte
	parts  []int32
	places []float64
}

// Cell kinds of the format.
const (
	lineCell              = 3
	quadraticTriangleCell = 22
)

func (c *cells) add(kind byte, part int32, nodes ...int32) {
	c.nodes = append(c.nodes, nodes...)
	c.ends, c.kinds, c.parts = append(c.ends, int32(len(c.nodes))), append(c.kinds, kind), append(c.parts, part)
}

func newGrid(m *mesh.Mesh) *grid {
	var c cells
	for i, t := range m.Triangles {
		c.add(quadraticTriangleCell, m.TrianglePart[i], t[:]...)
	}
	for i, b := range m.Beams {
		c.add(lineCell, m.BeamPart[i], b[:]...)
	}
	for _, p := range m.Nodes {
		c.places = append(c.places, p[:]...)
	}
	return &grid{cells: c, points: len(m.Nodes)}
}
