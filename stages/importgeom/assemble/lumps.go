package assemble

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/airframefile"
)

// defaultFoot is the diameter (m) of the footprint below a spring.
const defaultFoot = 6e-3

func (b *builder) lumps() *fault.Error {
	gyro := false
	for i := range b.file.Lumps {
		l := &b.file.Lumps[i]
		if err := b.lump(l); err != nil {
			return err
		}
		gyro = gyro || l.Gyro
	}
	if !gyro {
		return fault.New(fault.Input, "the airframe has no gyro, whose rotation is the output").In("read airframe", b.file.Path).Of("airframe").
			Do(`add one as in gyro "stack" { on = plate.NAME, at = ..., mass = "15 g", size = ["36 mm", "36 mm", "8 mm"] }, each in a line of its own`)
	}
	return nil
}

func (b *builder) lump(l *airframefile.Lump) *fault.Error {
	plate := b.index[l.On]
	p := b.plates[plate]
	centre, err := b.locate(l.Part, "at", plate, l.At)
	if err != nil {
		return err
	}
	side := 1.0
	if l.Lower {
		side = -1
	}
	up := scale(p.frame.Z, side)
	// The box's x axis is airframe x laid onto the plate, then turned.
	x := along(vec{1, 0, 0}, p.frame.Z, -p.frame.Z[0])
	x = scale(x, 1/norm(x))
	y := cross(p.frame.Z, x)
	s, c := math.Sincos(l.Turn)
	x, y = add(scale(x, c), scale(y, s)), add(scale(y, c), scale(x, -s))
	height := l.Height.Or(l.Lift + l.Size[2]/2)

	owner := l.Kind + " " + l.Name
	body := airframe.Body{Name: l.Name, Kind: l.Kind, Mass: l.Mass}
	body.Centre = along(inSpace(p.frame, centre, side*p.thickness/2), up, height)
	body.Centre = along(along(body.Centre, x, l.Offset[0]), y, l.Offset[1])
	switch {
	case len(l.Inertia) == 0 && l.Diameter.Given:
		axes := [3]vec{x, y, p.frame.Z}
		// The cylinder's axis last, in cyclic order.
		k := l.Axis
		body.Inertia = principal(cylinder(l.Mass, l.Diameter.Value, l.Size[k]), [3]vec{axes[(k+1)%3], axes[(k+2)%3], axes[k]})
		b.assume(l.Part, "inertia of a homogeneous cylinder")
	case len(l.Inertia) == 0:
		body.Inertia = principal(box(l.Mass, l.Size), [3]vec{x, y, p.frame.Z})
		b.assume(l.Part, "inertia of a homogeneous box")
	default:
		copy(body.Inertia[:], l.Inertia)
	}
	if l.Mount == nil {
		w, h := l.Size[0], l.Size[1]
		if l.Pad != nil {
			w, h = l.Pad[0], l.Pad[1]
		} else {
			b.assume(l.Part, "tied to the plate under all of its box")
		}
		turn := math.Atan2(dot(x, p.frame.Y), dot(x, p.frame.X))
		i, err := b.patch(l.Part, "at", airframe.Patch{Name: owner + "/pad", Owner: owner, Plate: plate, Shape: airframe.Rectangle, Centre: centre, Width: w, Height: h, Turn: turn})
		if err != nil {
			return err
		}
		body.Patches = []string{b.out.Geometry.Patches[i].Name}
	} else if body.Mount, err = b.mount(l, plate, owner, side, up); err != nil {
		return err
	}
	b.out.Properties.Bodies = append(b.out.Properties.Bodies, body)
	if l.Gyro {
		b.out.Properties.Gyro = airframe.Gyro{Body: l.Name, At: body.Centre}
	}
	return nil
}

func (b *builder) mount(l *airframefile.Lump, plate int, owner string, side float64, up vec) (*airframe.Mount, *fault.Error) {
	m := l.Mount
	p := b.plates[plate]
	out := &airframe.Mount{Name: l.Name, Kind: m.Word, Loss: m.Loss, Law: m.Law, Preload: m.Preload, Origin: m.Origin}
	foot := m.Pad.Or(defaultFoot)
	if !m.Pad.Given {
		b.assume(l.Part, "springs stand on footprints of %s", mm(defaultFoot))
	}
	for k, at := range m.Places {
		local, err := b.locate(m.Part, "places", plate, at)
		if err != nil {
			return nil, err
		}
		i, err := b.disc(m.Part, "places", owner, fmt.Sprintf("spring-%d", k+1), plate, local, foot)
		if err != nil {
			return nil, err
		}
		point := along(inSpace(p.frame, local, side*p.thickness/2), up, m.Height)
		out.Points = append(out.Points, airframe.MountPoint{Point: point, Patch: b.out.Geometry.Patches[i].Name, Stiffness: m.Stiffness})
	}
	if len(m.Places) > 2 && collinear(m.Places) && m.Stiffness[3] == 0 && m.Stiffness[4] == 0 {
		return nil, m.Fault("places", "the springs stand in one line, and the body can turn about it").Do("put one aside, or give rotational stiffness")
	}
	return out, nil
}

// collinear reports whether points lie within a micrometre of one line.
func collinear(p []outline.Point) bool {
	far := 0
	for i := range p {
		if p[i].Distance(p[0]) > p[far].Distance(p[0]) {
			far = i
		}
	}
	d := p[far].Sub(p[0])
	n := d.Norm()
	for _, q := range p {
		if n > 1e-6 && math.Abs(d.Cross(q.Sub(p[0]))) > 1e-6*n {
			return false
		}
	}
	return true
}
