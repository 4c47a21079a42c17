package assemble

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/airframefile"
)

// Defaults of rotors, from memory of common motors and propellers; common practice.
const (
	motorDensity    = 2800   // kg/m³, of the cylinder round a brushless outrunner
	bellShare       = 0.5    // of the motor's mass that spins
	bellRadius      = 0.8    // radius of gyration of the bell by the motor's radius
	bladeRadius     = 0.42   // radius of gyration of a propeller by its tip radius
	defaultGrade    = 6.3e-3 // m/s, ISO 21940-11 G 6.3, usual for fans
	defaultBlades   = 2
	patternInner    = 8e-3 // m, spans of motor hole patterns
	patternOuter    = 32e-3
	patternMidpoint = 0.2e-3
)

func (b *builder) rotors() *fault.Error {
	for i := range b.file.Rotors {
		if err := b.rotor(&b.file.Rotors[i]); err != nil {
			return err
		}
	}
	if len(b.file.Rotors) == 0 {
		b.warn("no-rotors", "", "declare rotors", "the airframe has no rotors: nothing drives it, and the modes lack the masses at the arm tips")
	}
	return nil
}

func (b *builder) rotor(r *airframefile.Rotor) *fault.Error {
	plate := b.index[r.On]
	centre, pattern, err := b.seat(r, plate)
	if err != nil {
		return err
	}
	base := r.Base.Value
	switch {
	case r.Base.Given:
	case r.Diameter.Given:
		base = r.Diameter.Value
		b.assume(r.Part, "footprint as wide as the motor, since no base is given")
	case pattern.span > 0:
		base = pattern.span + 2*pattern.hole
		b.assume(r.Part, "footprint of %s from the hole pattern, since no base is given", mm(base))
	default:
		return r.Fault("at", "the size of its footprint is not known: there is no hole pattern there").Do(`give base = "24 mm" or the motor's diameter`)
	}
	owner := "rotor " + r.Name
	patch, err := b.disc(r.Part, "at", owner, "base", plate, centre, base)
	if err != nil {
		return err
	}
	f := b.plates[plate].frame
	side := 1.0
	if r.Lower {
		side = -1
	}
	up := scale(f.Z, side)
	face := inSpace(f, centre, side*b.plates[plate].thickness/2)

	motor, err := b.motor(r, [3]vec{f.X, f.Y, f.Z}, face, up)
	if err != nil {
		return err
	}
	axes := [3]vec{f.X, f.Y, f.Z}
	hubHeight := r.HubHeight.Or(2 * r.Height)
	if !r.HubHeight.Given {
		b.assume(r.Part, "propeller disc at twice the height of the motor's centre of gravity")
	}
	if !r.PropellerMass.Given {
		b.assume(r.Part, "no propeller_mass: mass is taken to be that of motor and propeller")
	}
	hub := along(face, up, hubHeight)
	propeller := r.PropellerMass.Value
	radius := r.PropellerDiameter.Value / 2
	disc := propeller * bladeRadius * bladeRadius * radius * radius
	if propeller > 0 && radius == 0 {
		b.assume(r.Part, "no propeller_diameter: the propeller is taken as a point at the hub")
	}

	body := airframe.Body{Name: r.Name, Kind: "rotor", Patches: []string{b.out.Geometry.Patches[patch].Name}}
	body.Mass, body.Centre, body.Inertia = combine(append(motor.parts,
		// Blades go round: about the diameters of its disc a propeller has half its polar inertia, on average.
		item{propeller, hub, principal(vec{disc / 2, disc / 2, disc}, axes)}))
	b.out.Properties.Bodies = append(b.out.Properties.Bodies, body)

	bell := motor.polar
	polar := r.PolarInertia.Or(bell + disc)
	switch {
	case r.PolarInertia.Given && disc < polar:
		bell = polar - disc
	case r.PolarInertia.Given:
		bell, disc = 0, 0 // what it consists of is not known
	case r.Bell == nil:
		b.assume(r.Part, "polar inertia of what spins %s, estimated from half the motor's mass and the propeller's size", kgmm2(polar))
	}
	spinning := r.SpinningMass.Or(motor.spinning + propeller)
	if !r.SpinningMass.Given && r.Bell == nil {
		b.assume(r.Part, "half of the motor's mass spins")
	}
	if !r.Blades.Given {
		b.assume(r.Part, "%d blades", defaultBlades)
	}
	if !r.Grade.Given {
		b.assume(r.Part, "balance grade G 6.3 (6.3 mm/s) at the highest speed")
	}
	b.out.Properties.Rotors = append(b.out.Properties.Rotors, airframe.Rotor{
		Name: r.Name, Body: r.Name, Hub: hub, Axis: f.Z, Blades: int(r.Blades.Or(defaultBlades)), Spin: r.Spin,
		HoverSpeed: r.HoverSpeed, MaxSpeed: r.MaxSpeed, SpinningMass: spinning, PolarInertia: polar,
		BellInertia: bell, PropellerInertia: disc, Grade: r.Grade.Or(defaultGrade),
	})
	return nil
}

func kgmm2(j float64) string { return fmt.Sprintf("%.3g kg*mm^2", j*1e6) }

// pattern is a set of holes that a motor is screwed to.
type pattern struct {
	centre     outline.Point
	span, hole float64 // largest distance of opposite holes, hole diameter
	shaft      bool    // a round hole in the middle
}

// seat finds the shaft's place on a plate and the hole pattern there, if any.
func (b *builder) seat(r *airframefile.Rotor, plate int) (outline.Point, pattern, *fault.Error) {
	all := b.patterns(plate)
	if r.At != nil {
		p, err := b.locate(r.Part, "at", plate, *r.At)
		if err != nil {
			return p, pattern{}, err
		}
		for _, q := range all {
			if q.centre.Distance(p) <= 1e-3 {
				return p, q, nil
			}
		}
		return p, pattern{}, nil
	}
	if len(all) > 1 { // the hole for the shaft tells a motor's pattern from others
		var shafts []pattern
		for _, q := range all {
			if q.shaft {
				shafts = append(shafts, q)
			}
		}
		if len(shafts) == 1 {
			all = shafts
		}
	}
	switch len(all) {
	case 1:
		at := inSpace(b.plates[plate].frame, all[0].centre, 0)
		b.assume(r.Part, "shaft at %s, the middle of the motor hole pattern of plate %s", place(outline.Point{X: at[0], Y: at[1]}), r.On)
		return all[0].centre, all[0], nil
	case 0:
		return outline.Point{}, pattern{}, r.Fault("on", "plate %q has no motor hole pattern that would say where it stands", r.On).Do(`give its place: at = ["80 mm", "-80 mm"]`)
	}
	list := ""
	for i, q := range all {
		at := inSpace(b.plates[plate].frame, q.centre, 0)
		if i > 0 {
			list += "; "
		}
		list += place(outline.Point{X: at[0], Y: at[1]})
	}
	return outline.Point{}, pattern{}, r.Fault("on", "plate %q has %d hole patterns where a motor might stand", r.On, len(all)).Do("give at; the patterns are centred at %s", list)
}

// patterns finds motor hole patterns among the holes of a plate that no bolt or standoff uses.
func (b *builder) patterns(plate int) []pattern {
	var free []hole
	for _, h := range b.holes {
		if h.plate == plate && !h.taken {
			free = append(free, h)
		}
	}
	return findPatterns(free, b.plates[plate].region)
}

// MotorPlaces gives the centres of the motor hole patterns of a plate by itself, those with a hole for the shaft if
// there are any.
func MotorPlaces(region outline.Region) []outline.Point {
	var holes []hole
	for _, l := range region.Holes {
		if c, r, ok := outline.CircleOf(l); ok && r >= 1e-3 && r <= 2.75e-3 {
			holes = append(holes, hole{centre: c, radius: r})
		}
	}
	var all, shafts []outline.Point
	for _, p := range findPatterns(holes, region) {
		all = append(all, p.centre)
		if p.shaft {
			shafts = append(shafts, p.centre)
		}
	}
	if len(shafts) > 0 {
		return shafts
	}
	return all
}

// findPatterns finds sets of four equal holes: two pairs with one midpoint on lines that cross at 45 to 135 degrees.
func findPatterns(free []hole, region outline.Region) []pattern {
	type pair struct {
		mid, span outline.Point
		radius    float64
	}
	var pairs []pair
	for i, p := range free {
		for _, q := range free[i+1:] {
			d := q.centre.Sub(p.centre)
			if s := d.Norm(); s >= patternInner && s <= patternOuter && math.Abs(p.radius-q.radius) < 0.15e-3 {
				pairs = append(pairs, pair{p.centre.Lerp(q.centre, 0.5), d, math.Max(p.radius, q.radius)})
			}
		}
	}
	var out []pattern
	for i, p := range pairs {
		for _, q := range pairs[i+1:] {
			if p.mid.Distance(q.mid) > patternMidpoint || math.Abs(p.radius-q.radius) > 0.15e-3 {
				continue
			}
			if sine := math.Abs(p.span.Cross(q.span)) / (p.span.Norm() * q.span.Norm()); sine < math.Sqrt(0.5)-1e-6 {
				continue
			}
			c := pattern{centre: p.mid.Lerp(q.mid, 0.5), span: math.Max(p.span.Norm(), q.span.Norm()), hole: 2 * p.radius}
			known := false
			for k := range out {
				if out[k].centre.Distance(c.centre) <= 2*patternMidpoint {
					known = true
					out[k].span, out[k].hole = math.Max(out[k].span, c.span), math.Max(out[k].hole, c.hole)
				}
			}
			if !known {
				for _, l := range region.Holes {
					if m, _, ok := outline.CircleOf(l); ok && m.Distance(c.centre) <= 2*patternMidpoint {
						c.shaft = true
					}
				}
				out = append(out, c)
			}
		}
	}
	return out
}
