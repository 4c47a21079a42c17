package assemble

import (
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/airframefile"
)

// built is a plate in place.
type built struct {
	part      airframefile.Part
	name      string
	region    outline.Region
	frame     airframe.Frame
	thickness float64
	material  string
	fibre     float64
	plies     []airframe.Ply
}

// flipSides is the map (x, y) → (x, −y) of a plate's plane.
var flipSides = outline.Stretch(1, -1)

// mirrored is the plate as its mirror image in the plane y = 0 of its own frame; angles change sign.
func (p built) mirrored() built {
	p.region = p.region.Transform(flipSides)
	p.fibre = -p.fibre
	plies := append([]airframe.Ply(nil), p.plies...)
	for i := range plies {
		plies[i].Angle = -plies[i].Angle
	}
	p.plies = plies
	return p
}

// upsideDown is the plate turned over about its x axis, described in a frame whose z axis is turned over as well.
func (p built) upsideDown() built {
	p = p.mirrored()
	for i, j := 0, len(p.plies)-1; i < j; i, j = i+1, j-1 {
		p.plies[i], p.plies[j] = p.plies[j], p.plies[i]
	}
	return p
}

func place3(pl *airframefile.Plate) airframe.Frame {
	f := airframe.Frame{X: vec{1, 0, 0}, Y: vec{0, 1, 0}, Z: vec{0, 0, 1}}
	for _, axis := range []*vec{&f.X, &f.Y, &f.Z} {
		*axis = turned(*axis, 2, pl.Turn)
		*axis = turned(*axis, 0, pl.Tilt[0])
		*axis = turned(*axis, 1, pl.Tilt[1])
	}
	f.Origin = along(pl.At, f.Z, pl.Thickness/2)
	return f
}

func (b *builder) buildPlates() *fault.Error {
	declared := map[string]*airframefile.Plate{}
	copies := map[string]*airframefile.Copy{}
	type entry struct {
		name string
		line int
	}
	var order []entry
	for i := range b.file.Plates {
		p := &b.file.Plates[i]
		declared[p.Name] = p
		order = append(order, entry{p.Name, p.Line})
	}
	for i := range b.file.Copies {
		c := &b.file.Copies[i]
		copies[c.Name] = c
		order = append(order, entry{c.Name, c.Line})
	}
	sort.SliceStable(order, func(i, j int) bool { return order[i].line < order[j].line })
	done := map[string]built{}
	var make func(name string, depth int) (built, *fault.Error)
	make = func(name string, depth int) (built, *fault.Error) {
		if p, ok := done[name]; ok {
			return p, nil
		}
		if pl, ok := declared[name]; ok {
			region, err := b.region(pl)
			if err != nil {
				return built{}, err
			}
			p := built{part: pl.Part, name: name, thickness: pl.Thickness, material: pl.Material, fibre: pl.Fibre,
				plies: append([]airframe.Ply(nil), pl.Plies...), region: region.Transform(outline.Shift(pl.Origin.Scale(-1)))}
			if pl.Flip {
				p = p.upsideDown()
			}
			p.frame = place3(pl)
			done[name] = p
			return p, nil
		}
		c := copies[name]
		if depth > len(copies) {
			return built{}, c.Fault("of", "the copies go round in a circle").Do("let one of them be a plate of its own")
		}
		p, err := make(c.Of, depth+1)
		if err != nil {
			return built{}, err
		}
		p = copied(p, c)
		done[name] = p
		return p, nil
	}
	for _, e := range order {
		p, err := make(e.name, 0)
		if err != nil {
			return err
		}
		b.index[p.name] = len(b.plates)
		b.plates = append(b.plates, p)
		b.out.Geometry.Plates = append(b.out.Geometry.Plates, airframe.Plate{Name: p.name, Region: p.region, Frame: p.frame, Thickness: p.thickness})
		b.out.Properties.Plates = append(b.out.Properties.Plates, airframe.PlateProperties{Plate: p.name, Material: p.material, Fibre: p.fibre, Plies: p.plies})
	}
	return nil
}

// copied mirrors, turns and moves a plate. A mirror turns the frame left-handed; the outline is mirrored in its place.
func copied(p built, c *airframefile.Copy) built {
	p.part, p.name = c.Part, c.Name
	odd := false
	move := func(v vec, point bool) vec {
		for i, m := range c.Mirror {
			if m {
				v[i] = -v[i]
			}
		}
		centre := vec{c.Centre.X, c.Centre.Y, 0}
		if point {
			v = sub(v, centre)
		}
		v = turned(v, 2, c.Turn)
		if point {
			v = add(add(v, centre), c.Move)
		}
		return v
	}
	for _, m := range c.Mirror {
		odd = odd != m
	}
	f := airframe.Frame{Origin: move(p.frame.Origin, true), X: move(p.frame.X, false), Z: move(p.frame.Z, false)}
	if odd {
		p = p.mirrored()
	}
	if f.Z[2] < -1e-9 {
		p = p.upsideDown()
		f.Z = scale(f.Z, -1)
	}
	f.Y = cross(f.Z, f.X)
	p.frame = f
	return p
}

// faces gives the places where the vertical (or the line along axis) through a point meets the faces of a plate.
func (p built) faces(at vec, axis vec) (lower, upper vec, ok bool) {
	slope := dot(axis, p.frame.Z)
	if math.Abs(slope) < 1e-3 {
		return lower, upper, false
	}
	s := dot(sub(p.frame.Origin, at), p.frame.Z) / slope
	half := p.thickness / 2 / slope
	return along(at, axis, s-half), along(at, axis, s+half), true
}
