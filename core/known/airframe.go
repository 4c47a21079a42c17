package known

import (
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
)

// Airframe returns a small invented quadrotor, meshed without a mesher, and its properties: a deck of
// woven carbon with a rotor at each corner, a tail plate under it held by two bolts, a glass roof on
// four standoffs, a battery strapped to the roof and a gyro stack on four grommets. size is the length
// of cells; footprints are squares on mesh lines.
//
//	deck  120 × 90 × 2.5 mm at z = 0, tail 50 × 20 × 2 mm below it, roof 50 × 40 × 1.5 mm at 27 mm
func Airframe(size float64) (*mesh.Mesh, *airframe.Properties) {
	b := &frameBuilder{mesh: &mesh.Mesh{}, size: size}
	const (
		deckThickness, tailThickness, roofThickness = 0.0025, 0.002, 0.0015
		roofAt                                      = 0.027
	)
	corners := [4][2]float64{{1, 1}, {-1, 1}, {-1, -1}, {1, -1}}
	names := [4]string{"fl", "rl", "rr", "fr"}
	var motors, feet, heads, pads, straps []square
	for i, c := range corners {
		motors = append(motors, square{"motor " + names[i], c[0] * 0.051, c[1] * 0.036, 0.018})
		feet = append(feet, square{"foot " + names[i], c[0] * 0.021, c[1] * 0.016, 0.006})
		heads = append(heads, square{"head " + names[i], c[0] * 0.021, c[1] * 0.016, 0.006})
		pads = append(pads, square{"pad " + names[i], 0.0 + c[0]*0.009, c[1] * 0.008, 0.004})
		straps = append(straps, square{"strap " + names[i], c[0] * 0.011, c[1] * 0.006, 0.006})
	}
	bolts := []square{{"bolt near", -0.038, 0, 0.006}, {"bolt far", -0.052, 0, 0.006}}
	b.plate("deck", deckThickness, 0, -0.06, 0.06, -0.045, 0.045, append(append(append([]square{}, motors...), feet...), append(pads, bolts...)...))
	below := -(deckThickness + tailThickness) / 2
	var under []square
	for _, s := range bolts {
		s.name += " under"
		under = append(under, s)
	}
	b.plate("tail", tailThickness, below, -0.08, -0.03, -0.01, 0.01, under)
	b.plate("roof", roofThickness, roofAt, -0.025, 0.025, -0.02, 0.02, append(append([]square{}, heads...), straps...))

	m := b.mesh
	p := &airframe.Properties{
		Materials: []airframe.Material{
			{Name: "carbon", E1: 55e9, E2: 55e9, Nu12: 0.06, G12: 4.2e9, G13: 3.2e9, G23: 3.2e9, Density: 1550, LossFactor: 0.012},
			{Name: "glass", E1: 22e9, E2: 20e9, Nu12: 0.13, G12: 4e9, G13: 3e9, G23: 3e9, Density: 1850, LossFactor: 0.015},
			{Name: "aluminium", E1: 70e9, E2: 70e9, Nu12: 0.33, G12: 70e9 / 2.66, G13: 70e9 / 2.66, G23: 70e9 / 2.66, Density: 2700, LossFactor: 0.002, Isotropic: true},
		},
		Plates: []airframe.PlateProperties{{Plate: "deck", Material: "carbon"}, {Plate: "tail", Material: "carbon"},
			{Plate: "roof", Plies: []airframe.Ply{{Material: "glass", Thickness: 0.00075}, {Material: "glass", Thickness: 0.00075, Angle: math.Pi / 4}}}},
		Joints: []airframe.Joint{{Name: "tail joint", Stiffness: [6]float64{2e7, 2e7, 3e7, math.Inf(1), 800, 300}, LossFactor: 0.03}},
		Floor:  0.001,
	}
	for i, c := range corners {
		at := func(z float64) airframe.Vec { return airframe.Vec{c[0] * 0.021, c[1] * 0.016, z} }
		b.standoff("post "+names[i], at(deckThickness/2), at(roofAt-roofThickness/2), "foot "+names[i], "head "+names[i])
		p.Standoffs = append(p.Standoffs, airframe.StandoffProperties{Standoff: "post " + names[i], Material: "aluminium"})
		hub := airframe.Vec{c[0] * 0.051, c[1] * 0.036, 0.022}
		centre := hub
		centre[2] = 0.011
		p.Bodies = append(p.Bodies, airframe.Body{Name: names[i], Kind: "rotor", Mass: 0.018, Centre: centre,
			Inertia: [6]float64{1.6e-6, 1.6e-6, 1.9e-6}, Patches: []string{"motor " + names[i]}})
		p.Rotors = append(p.Rotors, airframe.Rotor{Name: names[i], Body: names[i], Hub: hub, Axis: airframe.Vec{0, 0, 1}, Blades: 3,
			Spin: 1 - 2*(i%2), HoverSpeed: 1500, MaxSpeed: 3200, SpinningMass: 0.009, PolarInertia: 1e-6, Grade: 0.0063})
	}
	grommets := &airframe.Mount{Name: "grommets", Kind: "grommet", Loss: [6]float64{0.2, 0.2, 0.2, 0.2, 0.2, 0.2}}
	strap := &airframe.Mount{Name: "strap", Kind: "strap", Loss: [6]float64{0.25, 0.25, 0.25, 0.25, 0.25, 0.25}}
	for i, c := range corners {
		grommets.Points = append(grommets.Points, airframe.MountPoint{Point: airframe.Vec{c[0] * 0.009, c[1] * 0.008, 0.004},
			Patch: "pad " + names[i], Stiffness: [6]float64{1.2e4, 1.2e4, 2.5e4}})
		strap.Points = append(strap.Points, airframe.MountPoint{Point: airframe.Vec{c[0] * 0.011, c[1] * 0.006, roofAt + 0.001},
			Patch: "strap " + names[i], Stiffness: [6]float64{3e4, 3e4, 6e4}})
	}
	p.Bodies = append(p.Bodies,
		airframe.Body{Name: "battery", Kind: "lump", Mass: 0.085, Centre: airframe.Vec{0.002, 0, roofAt + 0.012}, Inertia: [6]float64{1.2e-5, 2.2e-5, 2.6e-5}, Mount: strap},
		airframe.Body{Name: "stack", Kind: "gyro", Mass: 0.014, Centre: airframe.Vec{0, 0, 0.009}, Inertia: [6]float64{2.2e-6, 2.4e-6, 3.4e-6}, Mount: grommets})
	p.Gyro = airframe.Gyro{Body: "stack", At: airframe.Vec{0.002, 0, 0.01}}
	for _, s := range bolts {
		m.Links = append(m.Links, mesh.Link{Name: s.name, Kind: "bolt", Patches: []int32{b.patch(s.name + " under"), b.patch(s.name)},
			Point: airframe.Vec{s.x, s.y, below / 2}, Axis: airframe.Vec{0, 0, 1}})
		p.Bolts = append(p.Bolts, airframe.BoltProperties{Bolt: s.name, Mass: 0.0006, Joint: "tail joint"})
	}
	return m, p
}

type square struct {
	name       string
	x, y, side float64
}

type frameBuilder struct {
	mesh *mesh.Mesh
	size float64
}

// lines are grid lines from lo to hi with one on every side of a square and none further apart than
// size.
func (b *frameBuilder) lines(lo, hi float64, stops []float64) []float64 {
	stops = append(append([]float64{lo}, stops...), hi)
	sort.Float64s(stops)
	out := []float64{lo}
	for i := 1; i < len(stops); i++ {
		if span := stops[i] - stops[i-1]; span > 1e-9 {
			n := int(math.Ceil(span/b.size - 1e-9))
			out = append(out, Even(stops[i-1], stops[i], n)[1:]...)
		}
	}
	return out
}

func (b *frameBuilder) plate(name string, thickness, z, x0, x1, y0, y1 float64, squares []square) {
	var xs, ys []float64
	for _, s := range squares {
		xs = append(xs, s.x-s.side/2, s.x+s.side/2)
		ys = append(ys, s.y-s.side/2, s.y+s.side/2)
	}
	g := Cells(b.lines(x0, x1, xs), b.lines(y0, y1, ys), 0, func(x, y float64) bool { return true })
	m, first := b.mesh, int32(len(b.mesh.Nodes))
	part := int32(len(m.Parts))
	m.Parts = append(m.Parts, mesh.Part{Name: name, Element: "quadratic-triangle", Thickness: thickness,
		Frame: airframe.Frame{Origin: airframe.Vec{0, 0, z}, X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}})
	for _, p := range g.Points {
		m.Nodes = append(m.Nodes, airframe.Vec{p[0], p[1], z})
	}
	for _, t := range g.Triangles {
		for k := range t {
			t[k] += first
		}
		m.Triangles, m.TrianglePart = append(m.Triangles, t), append(m.TrianglePart, part)
	}
	for _, s := range squares {
		patch := mesh.Patch{Name: s.name, Owner: s.name, Part: part, Centre: airframe.Vec{s.x, s.y, z}}
		for i, p := range g.Points {
			if math.Abs(p[0]-s.x) < s.side/2+1e-9 && math.Abs(p[1]-s.y) < s.side/2+1e-9 {
				patch.Nodes = append(patch.Nodes, first+int32(i))
			}
		}
		m.Patches = append(m.Patches, patch)
	}
}

func (b *frameBuilder) patch(name string) int32 {
	for i, p := range b.mesh.Patches {
		if p.Name == name {
			return int32(i)
		}
	}
	panic("known: no patch " + name)
}

func (b *frameBuilder) standoff(name string, lower, upper airframe.Vec, foot, head string) {
	m := b.mesh
	part, first := int32(len(m.Parts)), int32(len(m.Nodes))
	m.Parts = append(m.Parts, mesh.Part{Name: name, Standoff: true, Outer: 0.005, Inner: 0.0026,
		Frame: airframe.Frame{Origin: lower, X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}})
	const n = 3
	for k := range n + 1 {
		at := lower
		at[2] += (upper[2] - lower[2]) * float64(k) / n
		m.Nodes = append(m.Nodes, at)
	}
	for k := range int32(n) {
		m.Beams, m.BeamPart = append(m.Beams, [2]int32{first + k, first + k + 1}), append(m.BeamPart, part)
	}
	m.Links = append(m.Links, mesh.Link{Name: name, Kind: "standoff", Patches: []int32{b.patch(foot), b.patch(head)},
		Nodes: []int32{first, first + n}, Axis: airframe.Vec{0, 0, 1}})
}
