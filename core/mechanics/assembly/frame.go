package assembly

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/mechanics/mesh"
)

// Frame is the problem of an airframe, with where its things went.
type Frame struct {
	Problem
	// BodyOf[i] is the body of the problem for body i of the properties.
	BodyOf []int
	// Loss[g] is the loss factor of group g, Laws[g] how its stiffness depends on frequency.
	Loss []float64
	Laws []airframe.Law
}

// InputError blames something the airframe declares.
type InputError struct {
	What string // `material "carbon"`, `bolt "clamp-1"`
	Err  error
}

func (e *InputError) Error() string { return fmt.Sprintf("%s: %v", e.What, e.Err) }

// Unwrap gives the cause.
func (e *InputError) Unwrap() error { return e.Err }

func blame(format string, name string, err error) error {
	return &InputError{fmt.Sprintf(format, name), err}
}

// FromAirframe states the problem of an airframe. types gives the element type of a name, or nil.
//
// Patches become bodies, standoffs beams whose end nodes join the bodies of their patches. Rigid bolts
// weld their patches; others put their joint between each pair of plates, in axes with z along the bolt
// and x along the lower plate's x. The mass of a bolt is shared by its patches. Rotors and lumps are
// welded to their patches or hang on the springs of their mount.
//
// Errors are *InputError: unknown names, impossible materials, patches without nodes, plies that do
// not add up to the plate.
func FromAirframe(m *mesh.Mesh, p *airframe.Properties, types func(name string) element.Type) (*Frame, error) {
	b := &builder{mesh: m, properties: p, types: types, frame: &Frame{}, groups: map[string]int{}, fibres: map[int32][]int32{}}
	b.frame.Nodes = slices.Clip(m.Nodes) // points of solid elements are appended
	for _, step := range []func() error{b.readMaterials, b.readJoints, b.parts, b.patches, b.links, b.contacts, b.bodies} {
		if err := step(); err != nil {
			return nil, err
		}
	}
	return b.frame, nil
}

type builder struct {
	mesh       *mesh.Mesh
	properties *airframe.Properties
	types      func(string) element.Type
	frame      *Frame
	materials  map[string]airframe.Material
	joints     map[string]airframe.Joint
	patchBody  map[string]int
	groups     map[string]int
	fibres     map[int32][]int32 // points of solid elements over a node of the mesh
}

func (b *builder) group(kind, name string, loss float64) int {
	if g, ok := b.groups[kind+" "+name]; ok {
		return g
	}
	b.frame.Groups = append(b.frame.Groups, Group{Name: name, Kind: kind})
	b.frame.Loss, b.frame.Laws = append(b.frame.Loss, loss), append(b.frame.Laws, airframe.Law{})
	b.groups[kind+" "+name] = len(b.frame.Groups) - 1
	return len(b.frame.Groups) - 1
}

func elastic(m airframe.Material) laminate.Material {
	return laminate.Material{E1: m.E1, E2: m.E2, G12: m.G12, Nu12: m.Nu12, G13: m.G13, G23: m.G23, Density: m.Density}
}

func (b *builder) readMaterials() error {
	b.materials = map[string]airframe.Material{}
	for _, m := range b.properties.Materials {
		err := elastic(m).Check()
		if err == nil && m.Isotropic {
			err = laminate.CheckIsotropic(m.E1, m.Nu12, m.Density)
		}
		if err != nil {
			return blame("material %q", m.Name, err)
		}
		b.materials[m.Name] = m
	}
	return nil
}

func (b *builder) material(name string) (airframe.Material, error) {
	m, ok := b.materials[name]
	if !ok {
		return m, fmt.Errorf("there is no material %q", name)
	}
	return m, nil
}

func (b *builder) parts() error {
	plates := map[string]airframe.PlateProperties{}
	for _, x := range b.properties.Plates {
		plates[x.Plate] = x
	}
	standoffs := map[string]airframe.StandoffProperties{}
	for _, x := range b.properties.Standoffs {
		standoffs[x.Standoff] = x
	}
	first := 0
	for i, part := range b.mesh.Parts {
		if part.Standoff {
			x, ok := standoffs[part.Name]
			m, err := b.material(x.Material)
			if !ok {
				err = errors.New("the properties do not know it")
			}
			if err != nil {
				return blame("standoff %q", part.Name, err)
			}
			bp := BeamPart{
				Group:   b.group(PartGroup, part.Name, m.LossFactor),
				Section: beam.Tube(part.Outer, part.Inner, m.E1, m.Nu12, m.Density),
				Y:       Vec{0, 1, 0},
			}
			for e, ends := range b.mesh.Beams {
				if int(b.mesh.BeamPart[e]) == i {
					bp.Elements = append(bp.Elements, ends)
				}
			}
			b.frame.Beams = append(b.frame.Beams, bp)
			continue
		}
		x, ok := plates[part.Name]
		if !ok {
			return blame("plate %q", part.Name, errors.New("the properties do not know it"))
		}
		section, layup, loss, err := b.section(part, x)
		if err != nil {
			return blame("plate %q", part.Name, err)
		}
		kind := b.types(part.Element)
		if kind == nil {
			return blame("plate %q", part.Name, fmt.Errorf("there is no element type %q", part.Element))
		}
		last := first
		for last < len(b.mesh.Triangles) && int(b.mesh.TrianglePart[last]) == i {
			last++
		}
		plate := PlatePart{
			Group: b.group(PartGroup, part.Name, loss), Type: kind, Section: section, Layup: layup,
			Axes: Axes{part.Frame.X, part.Frame.Y, part.Frame.Z}, Elements: b.mesh.Triangles[first:last],
		}
		b.frame.Extrude(&plate)
		for _, f := range plate.Fibres {
			b.fibres[f.Node] = f.Points
		}
		b.frame.Plates = append(b.frame.Plates, plate)
		first = last
	}
	return nil
}

// section returns the section of a plate with its plies and its loss factor; that of a stack is the mean of its plies
// weighted by their part of the bending stiffness.
func (b *builder) section(part mesh.Part, x airframe.PlateProperties) (laminate.Section, []laminate.Ply, float64, error) {
	if len(x.Plies) == 0 {
		m, err := b.material(x.Material)
		if err != nil {
			return laminate.Section{}, nil, 0, err
		}
		ply := laminate.Ply{Material: elastic(m), Thickness: part.Thickness, Angle: x.Fibre}
		s, err := laminate.Homogeneous(ply.Material, ply.Thickness, ply.Angle)
		return s, []laminate.Ply{ply}, m.LossFactor, err
	}
	var plies []laminate.Ply
	total := 0.0
	for _, ply := range x.Plies {
		m, err := b.material(ply.Material)
		if err != nil {
			return laminate.Section{}, nil, 0, err
		}
		plies = append(plies, laminate.Ply{Material: elastic(m), Thickness: ply.Thickness, Angle: x.Fibre + ply.Angle})
		total += ply.Thickness
	}
	if math.Abs(total-part.Thickness) > 1e-3*part.Thickness {
		return laminate.Section{}, nil, 0, fmt.Errorf("its plies add up to %.4g mm, the plate is %.4g mm thick", 1e3*total, 1e3*part.Thickness)
	}
	s, err := laminate.Stack(plies)
	if err != nil {
		return s, nil, 0, err
	}
	loss, weight, z := 0.0, 0.0, -total/2
	for i, ply := range plies {
		q := ply.Material.Reduced(ply.Angle)
		top := z + ply.Thickness
		w := (q[0][0] + q[1][1]) * (top*top*top - z*z*z)
		loss += w * b.materials[x.Plies[i].Material].LossFactor
		weight += w
		z = top
	}
	return s, plies, loss / weight, nil
}

func (b *builder) patches() error {
	b.patchBody = map[string]int{}
	used := usedNodes(&b.frame.Problem)
	for _, x := range b.mesh.Patches {
		body := Body{Name: x.Owner}
		if x.Owner == "" {
			body.Name = x.Name
		}
		for _, v := range x.Nodes {
			if used[v] {
				body.Nodes = append(body.Nodes, v)
			}
			body.Nodes = append(body.Nodes, b.fibres[v]...) // clamped through the thickness
		}
		if len(body.Nodes) == 0 {
			return blame("patch %q", x.Name, fmt.Errorf("no node of plate %q lies in it", b.mesh.Parts[x.Part].Name))
		}
		b.patchBody[x.Name] = len(b.frame.Bodies)
		b.frame.Bodies = append(b.frame.Bodies, body)
	}
	return nil
}

func (b *builder) links() error {
	bolts := map[string]airframe.BoltProperties{}
	for _, x := range b.properties.Bolts {
		bolts[x.Bolt] = x
	}
	for _, link := range b.mesh.Links {
		bodies := make([]int, len(link.Patches))
		for i, k := range link.Patches {
			bodies[i] = b.patchBody[b.mesh.Patches[k].Name]
		}
		if link.Kind == "standoff" {
			for i, v := range link.Nodes {
				b.frame.Bodies[bodies[i]].Nodes = append(b.frame.Bodies[bodies[i]].Nodes, v)
			}
			continue
		}
		x := bolts[link.Name]
		if x.Mass > 0 {
			for _, body := range bodies {
				b.frame.Bodies[body].Inertia = append(b.frame.Bodies[body].Inertia, Inertia{Mass: x.Mass / float64(len(bodies)), Centre: link.Point})
			}
		}
		if x.Joint == "" {
			for i := 1; i < len(bodies); i++ {
				b.frame.Welds = append(b.frame.Welds, [2]int{bodies[i-1], bodies[i]})
			}
			continue
		}
		joint, err := b.joint(x.Joint, airframe.Each)
		if err != nil {
			return blame("bolt %q", link.Name, err)
		}
		if x.Pairs != nil && len(x.Pairs) != len(bodies)-1 {
			return blame("bolt %q", link.Name, fmt.Errorf("it has the stiffness of %d pairs of plates and clamps %d plates", len(x.Pairs), len(bodies)))
		}
		lower := b.mesh.Parts[b.mesh.Patches[link.Patches[0]].Part].Frame
		t := along(link.Axis, lower.X) // its x is along the bolt, its y near the plate's x
		axes := Axes{t[1], t[2], t[0]}
		g := b.group(JointGroup, joint.Name, joint.LossFactor)
		for i := 1; i < len(bodies); i++ {
			k := joint.Stiffness
			if x.Pairs != nil {
				k = x.Pairs[i-1]
			}
			if err := checkStiffness(k, true); err != nil {
				return blame("joint %q", joint.Name, err)
			}
			b.frame.Springs = append(b.frame.Springs, Spring{
				Group: g, A: bodies[i-1], B: bodies[i], Point: link.Point, Axes: axes, Stiffness: k,
			})
		}
	}
	return nil
}

func (b *builder) bodies() error {
	for _, x := range b.properties.Bodies {
		if !(x.Mass > 0) && (x.Mass != 0 || x.Mount != nil) { // a massless rigid body harms nothing
			return blame("body %q", x.Name, fmt.Errorf("its mass is %g g: it must be positive", 1e3*x.Mass))
		}
		at := len(b.frame.Bodies)
		b.frame.Bodies = append(b.frame.Bodies, Body{Name: x.Name, Inertia: []Inertia{{Mass: x.Mass, Centre: x.Centre, Tensor: x.Inertia}}})
		b.frame.BodyOf = append(b.frame.BodyOf, at)
		for _, name := range x.Patches {
			patch, ok := b.patchBody[name]
			if !ok {
				return blame("body %q", x.Name, fmt.Errorf("there is no patch %q", name))
			}
			b.frame.Welds = append(b.frame.Welds, [2]int{patch, at})
		}
		if x.Mount == nil {
			continue
		}
		name := x.Mount.Name
		if name == "" {
			name = x.Name
		}
		if len(x.Mount.Points) == 0 {
			return blame("mount %q", name, errors.New("it stands on nothing: give the places of its springs"))
		}
		groups, err := b.mountGroups(name, x.Mount)
		if err != nil {
			return blame("mount %q", name, err)
		}
		for _, point := range x.Mount.Points {
			patch, ok := b.patchBody[point.Patch]
			if !ok {
				return blame("body %q", x.Name, fmt.Errorf("there is no patch %q", point.Patch))
			}
			if err := checkStiffness(point.Stiffness, false); err != nil {
				return blame("mount %q", name, err)
			}
			for _, g := range groups {
				k := [6]float64{}
				for _, c := range g.components {
					k[c] = point.Stiffness[c]
				}
				b.frame.Springs = append(b.frame.Springs, Spring{Group: g.group, A: patch, B: at, Point: point.Point, Axes: Global, Stiffness: k})
			}
		}
	}
	return nil
}
