package report

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/sweep"
)

// slab adds a rectangular plate in a grid of quadratic triangles, its frame at
// origin turned by angle about z.
func slab(m *mesh.Mesh, name string, origin airframe.Vec, angle, x0, x1, y0, y1, size float64) {
	part := int32(len(m.Parts))
	c, s := math.Cos(angle), math.Sin(angle)
	f := airframe.Frame{Origin: origin, X: airframe.Vec{c, s, 0}, Y: airframe.Vec{-s, c, 0}, Z: airframe.Vec{0, 0, 1}}
	m.Parts = append(m.Parts, mesh.Part{Name: name, Element: "quadratic-triangle", Thickness: 0.002, Frame: f})
	nx, ny := int(math.Round((x1-x0)/size)), int(math.Round((y1-y0)/size))
	node := map[[2]int]int32{}
	at := func(i, j int) int32 { // on a grid of half steps
		if n, ok := node[[2]int{i, j}]; ok {
			return n
		}
		x, y := x0+(x1-x0)*float64(i)/float64(2*nx), y0+(y1-y0)*float64(j)/float64(2*ny)
		n := int32(len(m.Nodes))
		m.Nodes = append(m.Nodes, airframe.Vec{origin[0] + c*x - s*y, origin[1] + s*x + c*y, origin[2]})
		node[[2]int{i, j}] = n
		return n
	}
	for i := 0; i < 2*nx; i += 2 {
		for j := 0; j < 2*ny; j += 2 {
			m.Triangles = append(m.Triangles,
				[6]int32{at(i, j), at(i+2, j), at(i+2, j+2), at(i+1, j), at(i+2, j+1), at(i+1, j+1)},
				[6]int32{at(i, j), at(i+2, j+2), at(i, j+2), at(i+1, j+1), at(i+1, j+2), at(i, j+1)})
			m.TrianglePart = append(m.TrianglePart, part, part)
		}
	}
}

var rotorNames = []string{"fl", "fr", "rl", "rr"}

// sampleMesh is an invented quadrotor of grids: two plates, four arms, four
// standoffs.
func sampleMesh() *mesh.Mesh {
	m := &mesh.Mesh{}
	slab(m, "bottom", airframe.Vec{0, 0, 0}, 0, -0.045, 0.045, -0.025, 0.025, 0.0025)
	for k, name := range rotorNames {
		slab(m, "arm_"+name, airframe.Vec{0, 0, 0.0035}, armAngle(k), 0.015, 0.115, -0.007, 0.007, 0.0025)
	}
	slab(m, "top", airframe.Vec{0, 0, 0.03}, 0, -0.055, 0.055, -0.018, 0.018, 0.0025)
	for i, x := range []float64{-0.035, 0.035} {
		for j, y := range []float64{-0.015, 0.015} {
			part := int32(len(m.Parts))
			m.Parts = append(m.Parts, mesh.Part{Name: fmt.Sprintf("post_%d%d", i, j), Standoff: true, Outer: 0.005, Frame: airframe.Frame{X: airframe.Vec{1}, Y: airframe.Vec{0, 1}, Z: airframe.Vec{0, 0, 1}}})
			n := int32(len(m.Nodes))
			m.Nodes = append(m.Nodes, airframe.Vec{x, y, 0.001}, airframe.Vec{x, y, 0.015}, airframe.Vec{x, y, 0.029})
			m.Beams = append(m.Beams, [2]int32{n, n + 1}, [2]int32{n + 1, n + 2})
			m.BeamPart = append(m.BeamPart, part, part)
		}
	}
	return m
}

func armAngle(k int) float64 { return []float64{40, -40, 140, -140}[k] * math.Pi / 180 }

func hub(k int) airframe.Vec {
	return airframe.Vec{0.11 * math.Cos(armAngle(k)), 0.11 * math.Sin(armAngle(k)), 0.016}
}

// sampleModes are invented shapes: smooth functions of place that look like
// modes of arms and plates, with sites and energies to match the form.
func sampleModes(m *mesh.Mesh) *kinds.Modes {
	type field func(p airframe.Vec) airframe.Vec
	radial := func(p airframe.Vec) float64 { return math.Max(0, math.Hypot(p[0], p[1])-0.03) / 0.085 }
	side := func(p airframe.Vec) (front, left float64) { return math.Copysign(1, p[0]), math.Copysign(1, p[1]) }
	fields := []struct {
		f            float64
		part, motion string
		u            field
	}{
		{141.3, "arm_fr", "bending", func(p airframe.Vec) airframe.Vec { r := radial(p); return airframe.Vec{0, 0, r * r} }},
		{168.9, "arm_fl", "bending", func(p airframe.Vec) airframe.Vec {
			r := radial(p)
			_, l := side(p)
			return airframe.Vec{0, 0, r * r * l}
		}},
		{176.2, "top", "bending", func(p airframe.Vec) airframe.Vec {
			r := radial(p)
			f, _ := side(p)
			return airframe.Vec{0, 0, r * r * f}
		}},
		{232.0, "clamp", "twist", func(p airframe.Vec) airframe.Vec {
			r := radial(p)
			f, l := side(p)
			return airframe.Vec{0, 0, r*r*f*l + 4*p[0]*p[1]*90}
		}},
		{301.7, "arm_fl", "in-plane", func(p airframe.Vec) airframe.Vec {
			r := radial(p)
			f, l := side(p)
			return airframe.Vec{-p[1] * r * r * 9 * f * l, p[0] * r * r * 9 * f * l, 0}
		}},
		{388.4, "top", "bending", func(p airframe.Vec) airframe.Vec {
			return airframe.Vec{0, 0, math.Sin(p[0]/0.055*math.Pi) * p[2] / 0.03}
		}},
		{466.0, "grommets", "shear", func(p airframe.Vec) airframe.Vec { return airframe.Vec{p[2] / 0.03, 0, 0} }},
	}
	n := 6 + len(fields) + 1
	b := &modal.Basis{}
	add := func(kind modal.VectorKind, f, scale float64, u field) {
		shape := make([]float64, 0, 3*len(m.Nodes))
		for _, p := range m.Nodes {
			v := u(p)
			shape = append(shape, scale*v[0], scale*v[1], scale*v[2])
		}
		b.Kinds, b.Frequency, b.Shapes = append(b.Kinds, kind), append(b.Frequency, f), append(b.Shapes, shape)
	}
	for d := range 3 {
		add(modal.RigidBody, 0, 1.3, func(airframe.Vec) airframe.Vec { var u airframe.Vec; u[d] = 1; return u })
	}
	for d := range 3 {
		add(modal.RigidBody, 0, 20, func(p airframe.Vec) airframe.Vec {
			var w airframe.Vec
			w[d] = 1
			return airframe.Vec{w[1]*p[2] - w[2]*p[1], w[2]*p[0] - w[0]*p[2], w[0]*p[1] - w[1]*p[0]}
		})
	}
	survey := &modal.Survey{From: 80, To: 500, Groups: []string{"arm_fl", "arm_fr", "top", "clamp", "grommets"},
		Kinds: []string{"in-plane", "bending", "twist", "shear", "joint", "mount"}, Carriers: []string{"bottom", "top", "fl", "fr", "battery"}, Rotors: append([]string{}, rotorNames...)}
	for i, x := range fields {
		add(modal.Elastic, x.f, 3, x.u)
		up := math.Inf(1)
		if i+1 < len(fields) {
			up = fields[i+1].f - x.f
		}
		down := math.Inf(1)
		if i > 0 {
			down = x.f - fields[i-1].f
		}
		k := float64(i)
		shares := []float64{0.4, 0.3, 0.1, 0.15, 0.05} // the greatest for the part named
		lead := slices.Index(survey.Groups, x.part)
		shares[0], shares[lead] = shares[lead], shares[0]
		survey.Modes = append(survey.Modes, modal.Mode{Number: i + 1, Vector: 6 + i, Frequency: x.f, Loss: 0.015 + 0.003*k, Part: x.part, Motion: x.motion,
			ByGroup: shares, ByKind: []float64{0.05, 0.6, 0.2, 0.02, 0.08, 0.05}, ByCarrier: []float64{0.05, 0.05, 0.3, 0.4, 0.2},
			Rotation:       [3]float64{20 * math.Sin(k+1), 30 * math.Cos(2*k), 8 * math.Sin(3*k)},
			Strength:       [3]float64{0.03 * math.Abs(math.Sin(k+1)), 0.05 * math.Abs(math.Cos(2*k)), 0.01 * math.Abs(math.Sin(3*k))},
			MomentStrength: [3]float64{1, 2, 0.4}, RotorShare: []float64{0.25, 0.3, 0.2, 0.25}, MomentShare: []float64{0.25, 0.25, 0.25, 0.25},
			Below: down, Above: up,
			Meetings: []modal.Meeting{{Order: 1, Speed: x.f * 2 * math.Pi, Rotors: []int{0, 1, 2, 3}, Hover: i == 4, Service: x.f < 550},
				{Order: 3, Blade: true, Speed: x.f * 2 * math.Pi / 3, Rotors: []int{0, 1, 2, 3}, Service: true}}})
	}
	add(modal.Residual, 1900, 5, func(p airframe.Vec) airframe.Vec { return airframe.Vec{0, 0, math.Sin(40 * p[0])} })
	survey.Gaps[1] = []modal.Gap{{Lower: 2, Upper: 3, Width: 7.3}, {Lower: 3, Upper: 5, Width: 125.5}}
	for k, name := range rotorNames {
		b.Sites = append(b.Sites, sampleSite(name, "rotor", hub(k), b, m, survey))
	}
	b.Sites = append(b.Sites, sampleSite("gyro", "gyro", airframe.Vec{0.02, 0, 0.014}, b, m, survey))
	for g, name := range survey.Groups {
		k := make([]float64, n*n)
		for v, f := range b.Frequency {
			k[v*n+v] = math.Pow(2*math.Pi*f, 2) / float64(len(survey.Groups))
		}
		kind := "part"
		if g == 4 {
			kind = "mount"
		}
		b.Groups = append(b.Groups, modal.LossGroup{Name: name, Kind: kind, LossFactor: []float64{0.012, 0.012, 0.02, 0.02, 0.1}[g], Stiffness: k})
	}
	out := &kinds.Modes{UpTo: 750, SweptTo: 500, Proved: true, Unknowns: 6 * len(m.Nodes), Mass: 0.6123, Centre: airframe.Vec{-0.0012, 0.0003, 0.0141}, RigidRatio: 2e-6, Basis: b, Survey: survey}
	for _, name := range survey.Carriers {
		out.Masses = append(out.Masses, kinds.MassRow{Name: name, Kind: "part", Mass: 0.05})
	}
	return out
}

// sampleSite moves with the nearest node; the gyro turns as its mode says.
func sampleSite(name, kind string, at airframe.Vec, b *modal.Basis, m *mesh.Mesh, survey *modal.Survey) modal.Site {
	near, best := 0, math.Inf(1)
	for i, p := range m.Nodes {
		if d := math.Hypot(math.Hypot(p[0]-at[0], p[1]-at[1]), p[2]-at[2]); d < best {
			near, best = i, d
		}
	}
	s := modal.Site{Name: name, Kind: kind, Point: at}
	for v := range b.Kinds {
		var q [6]float64
		copy(q[:3], b.Shapes[v][3*near:3*near+3])
		switch {
		case v >= 3 && v < 6:
			q[v] = 20
		case b.Kinds[v] == modal.Elastic && kind == "gyro":
			copy(q[3:], survey.Modes[v-6].Rotation[:])
		}
		s.Motion = append(s.Motion, q)
	}
	return s
}

func sampleGeometry() *airframe.Geometry {
	rectangle := func(x0, x1, y0, y1 float64) outline.Region {
		at := func(x, y float64) outline.Point { return outline.Point{X: x, Y: y} }
		return outline.Region{Outer: outline.Loop{outline.Line(at(x0, y0), at(x1, y0)), outline.Line(at(x1, y0), at(x1, y1)), outline.Line(at(x1, y1), at(x0, y1)), outline.Line(at(x0, y1), at(x0, y0))}}
	}
	level := func(z, angle float64) airframe.Frame {
		c, s := math.Cos(angle), math.Sin(angle)
		return airframe.Frame{Origin: airframe.Vec{0, 0, z}, X: airframe.Vec{c, s, 0}, Y: airframe.Vec{-s, c, 0}, Z: airframe.Vec{0, 0, 1}}
	}
	g := &airframe.Geometry{Plates: []airframe.Plate{{Name: "bottom", Thickness: 0.002, Frame: level(0, 0), Region: rectangle(-0.045, 0.045, -0.025, 0.025)}}}
	for k, name := range rotorNames {
		g.Plates = append(g.Plates, airframe.Plate{Name: "arm_" + name, Thickness: 0.005, Frame: level(0.0035, armAngle(k)), Region: rectangle(0.015, 0.115, -0.007, 0.007)})
	}
	g.Patches = []airframe.Patch{{Name: "b1-bottom", Plate: 0, Shape: airframe.Disc, Radius: 0.003}, {Name: "b1-arm", Plate: 1, Shape: airframe.Disc, Radius: 0.003}}
	g.Bolts = []airframe.Bolt{{Name: "b1", Group: "clamp", Patches: []int{0, 1}, Point: airframe.Vec{0.03, 0.02, 0.001}, Axis: airframe.Vec{0, 0, 1}, HoleRadius: 0.0016, ClampRadius: 0.003, Inferred: true}}
	g.Plates = append(g.Plates, airframe.Plate{Name: "top", Thickness: 0.002, Frame: level(0.03, 0), Region: rectangle(-0.055, 0.055, -0.018, 0.018)})
	return g
}

func sampleProperties() *airframe.Properties {
	p := &airframe.Properties{
		Materials: []airframe.Material{{Name: "carbon-0-90", E1: 60e9, E2: 60e9, G12: 4.5e9, G13: 3.5e9, G23: 3.5e9, Nu12: 0.05, Density: 1550, LossFactor: 0.01, Typical: true, Scatter: 0.12, Origin: "data sheets of routed plate"}},
		Standoffs: []airframe.StandoffProperties{{Standoff: "post-1", Material: "aluminium", Mass: 0.0012}, {Standoff: "post-2", Material: "aluminium", Mass: 0.0012}},
		Bolts:     []airframe.BoltProperties{{Bolt: "b1", Mass: 0.0011, Joint: "clamp"}, {Bolt: "b2", Mass: 0.0011, Joint: "clamp"}},
		Joints:    []airframe.Joint{{Name: "clamp", Stiffness: [6]float64{2e7, 2e7, math.Inf(1), 80, 80, math.Inf(1)}, LossFactor: 0.03}},
		Bodies: []airframe.Body{{Name: "battery", Kind: "lump", Mass: 0.2, Centre: airframe.Vec{-0.01, 0, 0.05}, Inertia: [6]float64{4e-5, 1e-4, 1.2e-4}},
			{Name: "stack", Kind: "gyro", Mass: 0.018, Centre: airframe.Vec{0.02, 0, 0.014}, Inertia: [6]float64{3e-6, 3e-6, 5e-6}, Mount: &airframe.Mount{Name: "grommets", Kind: "grommet", Loss: [6]float64{0.2, 0.2, 0.2}, Points: []airframe.MountPoint{{Stiffness: [6]float64{2e4, 2e4, 5e4}}}}}},
		Gyro: airframe.Gyro{Body: "stack"},
	}
	for _, name := range []string{"post-1-lower-screw", "post-1-upper-screw", "post-2-lower-screw", "post-2-upper-screw"} {
		p.Bodies = append(p.Bodies, airframe.Body{Name: name, Kind: "lump", Mass: 0.0007, Inertia: [6]float64{1e-9, 1e-9, 1e-9}})
	}
	for k, name := range rotorNames {
		p.Plates = append(p.Plates, airframe.PlateProperties{Plate: "arm_" + name, Material: "carbon-0-90", Mass: 0.0108})
		p.Bodies = append(p.Bodies, airframe.Body{Name: name, Kind: "rotor", Mass: 0.033, Centre: hub(k), Inertia: [6]float64{3e-6, 3e-6, 4e-6}})
		p.Rotors = append(p.Rotors, airframe.Rotor{Name: name, Body: name, Hub: hub(k), Axis: airframe.Vec{0, 0, 1}, Blades: 3, Spin: 1 - 2*(k%2), HoverSpeed: 16000 * rpm, MaxSpeed: 33000 * rpm, SpinningMass: 0.018, Grade: 6.3e-3})
	}
	return p
}

// sampleResponse runs the real stage over the invented modes.
func sampleResponse(t testing.TB, modes *kinds.Modes, p *airframe.Properties) (*kinds.Response, *stage.Outcome) {
	t.Helper()
	call := &stage.Call{Inputs: map[string][]stage.Input{"modes": {put(t, kinds.EncodeModes(modes), "stage.modes.modes")},
		"properties": {put(t, kinds.EncodeProperties(p), "stage.frame.properties")}}, Outputs: map[string]string{"response": t.TempDir()},
		Report: silent{}, Threads: 2, Arguments: stage.Arguments{}}
	for _, a := range (sweep.Stage{}).Describe().Arguments {
		if a.Default != nil {
			call.Arguments[a.Name] = a.Default
		}
	}
	out, err := sweep.Stage{}.Run(context.Background(), call)
	if err != nil {
		t.Fatal(err)
	}
	a, err := artifact.Open(call.Outputs["response"], kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	r, err := kinds.DecodeResponse(a)
	if err != nil {
		t.Fatal(err)
	}
	return r, out
}

// sampleRecording is an invented recording: the prediction shifted in
// frequency, with a rotor line and a scatter that depends on the bin alone.
func sampleRecording(r *kinds.Response) (*kinds.Spectra, *kinds.Comparison) {
	const step, segment = 2000.0 / 1024, 1024
	sp := &kinds.Spectra{Rate: 2000, Step: step, Resolution: 1.5 * step, Window: "hann", Segment: segment, Overlap: 512, Segments: 200, Freedom: 370,
		Level: 0.95, Lower: 0.868, Upper: 1.165, From: 8, To: 60, Samples: 104000, Jitter: 0.002}
	c := &kinds.Comparison{From: 80, To: 800, Tolerance: 0.03, Reach: 0.1, Notes: []string{"The control loop shifts frequency and damping near its bandwidth, here below about 80 Hz."}}
	for _, x := range [][2]float64{{255, 280}, {510, 560}, {765, 800}} {
		c.Orders = append(c.Orders, kinds.OrderBand{Rotor: "fr", Order: math.Round(x[0] / 255), BladePassing: x[0] > 700, Low: x[0], High: x[1], Share: 0.98})
	}
	sp.Orders = c.Orders
	sp.Rotors = []kinds.SpectraRotor{{Rotor: "fr", Column: "rpm_1", Blades: 3, Median: 16100 * rpm, Low: 15300 * rpm, High: 16800 * rpm}}
	for axis, name := range kinds.AxisNames {
		x := kinds.SpectraAxis{Axis: name, Quantity: "angular rate", Unit: "rad/s", Column: "gyro_" + name, Deviation: 0.3, Largest: 2.1, Repeated: 0.004}
		ca := kinds.ComparisonAxis{Axis: name, Scale: []float64{0.31, 2.4, 7.7}[axis], Residual: 3.2, Bins: 170}
		for k := 0; k <= segment/2; k++ {
			f := float64(k) * step
			scatter := math.Exp(0.25 * math.Sin(float64(k*k%97)+float64(axis)))
			y := ca.Scale * at(r, axis, f*1.04) * scatter
			if f > 262 && f < 270 {
				y *= 30
			}
			y += 1e-7 * scatter
			x.Density = append(x.Density, y)
			if f >= c.From && f <= c.To {
				ca.Frequency, ca.Predicted, ca.Observed = append(ca.Frequency, f), append(ca.Predicted, at(r, axis, f)), append(ca.Observed, y)
			}
		}
		sp.Axes = append(sp.Axes, x)
		c.Axes = append(c.Axes, ca)
	}
	for i, p := range r.Peaks {
		axis := map[string]int{"roll": 0, "pitch": 1, "yaw": 2}[p.Axis]
		f := p.Frequency / 1.04
		sp.Peaks = append(sp.Peaks, kinds.SpectraPeak{Axis: axis, Frequency: f, FrequencyError: 0.4, Density: p.Density * c.Axes[axis].Scale, Prominence: 20, OverFloor: 9, Damping: 0.011, DampingError: 0.002, Narrow: i == 0})
		if i%3 == 2 {
			c.Unpaired = append(c.Unpaired, kinds.ComparisonPeak{Side: kinds.Predicted, Axis: p.Axis, Frequency: p.Frequency, Density: p.Density, Damping: p.Damping, Modes: p.Modes, Reason: "no recorded peak within reach"})
			continue
		}
		c.Pairs = append(c.Pairs, kinds.ComparisonPair{Axis: p.Axis, Predicted: p.Frequency, Observed: f, ObservedError: 0.4, Error: 0.04, Confidence: 0.8,
			PredictedDensity: p.Density, ObservedDensity: p.Density * c.Axes[axis].Scale, PredictedDamping: p.Damping, ObservedDamping: 0.011, ObservedDampingError: 0.002, Modes: p.Modes})
	}
	c.Masked = []kinds.ComparisonPeak{{Side: kinds.Observed, Axis: "roll", Frequency: 266.2, Density: 1e-4, Damping: math.NaN(), Reason: "order 1 of rotor fr"}}
	return sp, c
}

func at(r *kinds.Response, axis int, f float64) float64 {
	for k := 1; k < len(r.Frequency); k++ {
		if f < r.Frequency[k] && f >= r.Frequency[0] {
			t := (f - r.Frequency[k-1]) / (r.Frequency[k] - r.Frequency[k-1])
			return r.Density[axis][k-1]*(1-t) + r.Density[axis][k]*t
		}
	}
	return r.Density[axis][len(r.Frequency)-1] / 3
}

type silent struct{}

func (silent) Progress(string, float64)        {}
func (silent) Log(stage.Level, string, ...any) {}

// put writes an artifact to a folder of its own.
func put(t testing.TB, a *artifact.Artifact, from string) stage.Input {
	t.Helper()
	folder := t.TempDir()
	hash, err := artifact.Write(folder, a)
	if err != nil {
		t.Fatal(err)
	}
	return stage.Input{Folder: folder, Kind: a.Kind.Name, Hash: hash, From: from}
}

func sampleAccount() *account.Account {
	const sum = "6fd1c0de0000000000000000000000000000000000000000000000000000abcd"
	return &account.Account{Job: "sandpiper-sample", About: "An invented frame to look at a page with", Program: "hushframe 0.1.0",
		Sources:  []account.Source{{Name: "baseline.hcl", Text: "job \"sandpiper-sample\" {\n  about = \"An invented frame\"\n}\n\nsetting \"arm_thickness\" {\n  value = \"5 mm\"\n}\n", SHA256: sum}},
		Settings: []account.Setting{{Name: "arm_thickness", Value: "6 mm", About: "carbon plate the arms are cut from", Overridden: true}, {Name: "mesh_size", Value: "3 mm", About: "largest element"}},
		Verdicts: []account.Verdict{
			{Name: "pitch-modes-apart", Because: "two modes strong on one axis and closer than this add up at the gyro", Shown: "7.3 Hz at least 20 Hz", Value: "7.3 Hz", Bound: "at least 20 Hz", Margin: "-12.7 Hz", Judged: true},
			{Name: "light", Because: "the battery allows no more", Shown: "612 g at most 650 g", Value: "612 g", Bound: "at most 650 g", Margin: "38 g", Holds: true, Judged: true}},
		Steps:       []account.Step{{Label: "frame", Stage: "import", State: "finished", Executable: sum}, {Label: "modes", Stage: "solve", State: "finished", Executable: sum}},
		Executables: []account.Executable{{Name: "hushframe", Version: "0.1.0", SHA256: sum}},
		Files:       []account.File{{Step: "frame", Path: "cut/arm.dxf", SHA256: "ab54d286ffffffffffffffffffffffffffffffffffffffffffffffffffff0001"}, {Step: "frame", Path: "cut/none.dxf"}},
		Warnings:    []account.Warning{{Step: "flight", ID: "sweep.beyond-modes", Text: "the sweep goes to 500 Hz with modes to 700 Hz", Remedy: "raise up_to of solve to 750 Hz"}},
		Notes:       []account.Note{{Step: "frame", Text: "12 bolts were found from coaxial holes"}},
	}
}

// sampleContent is a whole report's worth.
func sampleContent(t testing.TB) *content {
	m := sampleMesh()
	modes := sampleModes(m)
	p := sampleProperties()
	r, _ := sampleResponse(t, modes, p)
	sp, c := sampleRecording(r)
	return &content{geometry: sampleGeometry(), properties: p, mesh: m, modes: modes, response: r, spectra: sp, comparison: c, run: sampleAccount()}
}

// With HUSHFRAME_SAMPLE_PAGE set to a folder, the sample page is written there to look at.
func TestSamplePage(t *testing.T) {
	d, err := compose(sampleContent(t), "", "sample.html")
	if err != nil {
		t.Fatal(err)
	}
	if n := len(d.Files["sample.html"]); n > mostBytes || n < 50_000 {
		t.Errorf("the page has %d bytes", n)
	}
	if folder := os.Getenv("HUSHFRAME_SAMPLE_PAGE"); folder != "" {
		for name, data := range d.Files {
			path := filepath.Join(folder, filepath.FromSlash(name))
			if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(path, data, 0o644); err != nil {
				t.Fatal(err)
			}
		}
	}
}
