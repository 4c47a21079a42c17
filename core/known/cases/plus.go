package cases

import (
	"context"
	"math"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/mechanics/modal"
)

type footprint struct {
	Mass    float64    `json:"mass_kg"`
	Inertia [3]float64 `json:"inertia_cg_kgm2_xyz"`
	Centre  [3]float64 `json:"cg_m"`
}

// PlusFrame is the setup of a row C-PLUS-*: a free plus-shaped plate with bodies on footprints.
type PlusFrame struct {
	S          float64 `json:"s_m"`
	Width      float64 `json:"wa_m"`
	Length     float64 `json:"La_m"`
	Thickness  float64 `json:"thickness_m"`
	E          float64 `json:"E_Pa"`
	Nu         float64
	Rho        float64 `json:"rho_kgm3"`
	Properties *known.Constants
	Motors     *footprint
	Hub        *footprint `json:"hub_body"`
}

// Problem meshes the plate with cells of the given part of the arm width, and ties its bodies to their footprints.
// Places are the motors as rotors and the hub as gyro.
func (c *PlusFrame) Problem(t known.T, part float64) (*assembly.Problem, []modal.Place) {
	t.Helper()
	reach := c.S/2 + c.Length
	g := known.Plus(c.S, c.Width, c.Length, c.Width*part, reach-0.014)
	m := laminate.Isotropic(c.E, c.Nu, c.Rho)
	if c.Properties != nil {
		m = c.Properties.Material()
	}
	section, err := laminate.Homogeneous(m, c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	p := &assembly.Problem{Groups: []assembly.Group{{Name: "plate", Kind: assembly.PartGroup}}}
	for _, x := range g.Points {
		p.Nodes = append(p.Nodes, assembly.Vec{x[0], x[1], 0})
	}
	p.Plates = []assembly.PlatePart{{Type: shell.QuadraticTriangle(), Axes: assembly.Global, Section: section, Elements: g.Triangles}}
	var places []modal.Place
	tie := func(name, kind string, f *footprint, centre assembly.Vec, in func(x, y float64) bool) {
		g.Collect(name, in)
		p.Bodies = append(p.Bodies, assembly.Body{Name: name, Nodes: g.Sets[name], Inertia: []assembly.Inertia{{
			Mass: f.Mass, Centre: centre, Tensor: [6]float64{f.Inertia[0], f.Inertia[1], f.Inertia[2]},
		}}})
		places = append(places, modal.Place{Name: name, Kind: kind, Body: len(p.Bodies) - 1, Point: centre})
	}
	if c.Motors != nil {
		const long, tiny = 0.014, 1e-9
		for _, arm := range []struct {
			name string
			x, y float64
		}{{"front", 1, 0}, {"left", 0, 1}, {"back", -1, 0}, {"right", 0, -1}} {
			mid := reach - long/2
			tie(arm.name, "rotor", c.Motors, assembly.Vec{mid * arm.x, mid * arm.y, 0.01}, func(x, y float64) bool {
				return x*arm.x+y*arm.y > reach-long-tiny
			})
		}
	}
	if c.Hub != nil {
		tie("hub", "gyro", c.Hub, c.Hub.Centre, func(x, y float64) bool {
			return math.Abs(x) < 0.007+1e-9 && math.Abs(y) < 0.007+1e-9
		})
	}
	return p, places
}

// Rows C-PLUS-*: the elastic frequencies of the modal basis, as the solve stage computes it.
func plusFrames(t known.T, row known.Row) []float64 {
	var c PlusFrame
	row.Decode(t, &c)
	p, places := c.Problem(t, 1.0/4)
	st, err := modal.Build(context.Background(), assemble(t, p), places, modal.Options{UpTo: 1.02 * row.Values[len(row.Values)-1], Threads: threads})
	if err != nil {
		t.Fatal(err)
	}
	if !st.Proved {
		t.Errorf("row %s: no proof that all modes were found", row.ID)
	}
	var got []float64
	for v, kind := range st.Basis.Kinds {
		if kind == modal.Elastic && len(got) < len(row.Values) {
			got = append(got, st.Basis.Frequency[v])
		}
	}
	return got
}
