package assemble

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/fastener"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/airframefile"
)

// throughByShear is the modulus through a laminate by its transverse shear modulus, where it is not given: that of an
// isotropic resin of Poisson's ratio 0.35.
const throughByShear = 2.7

// joints lists the declared joints. Those of a screw get their stiffness from the stacks they clamp: each pair of
// plates its own, and the mean of all as the nominal one.
func (b *builder) joints() *fault.Error {
	for i := range b.file.Joints {
		j := &b.file.Joints[i]
		out := j.Joint
		if out.Origin == "" {
			out.Origin = "airframe file"
		}
		if j.Screw.Given {
			if err := b.screwed(j, &out); err != nil {
				return err
			}
		}
		b.out.Properties.Joints = append(b.out.Properties.Joints, out)
	}
	return nil
}

func (b *builder) screwed(j *airframefile.Joint, out *airframe.Joint) *fault.Error {
	p := &b.out.Properties
	var sum [6]float64
	pairs := 0
	grip := fastener.Friction
	if j.Bearing {
		grip = fastener.Bearing
	}
	for i := range p.Bolts {
		if p.Bolts[i].Joint != j.Part.Name {
			continue
		}
		bolt := &b.out.Geometry.Bolts[i]
		var stack []fastener.Plate
		for _, k := range bolt.Patches {
			stack = append(stack, b.clamped(b.out.Geometry.Patches[k].Plate))
		}
		screw := fastener.Screw{Diameter: j.Screw.Value, Modulus: b.material(j.ScrewMaterial).E1, Hole: 2 * bolt.HoleRadius, Head: 2 * bolt.ClampRadius}
		list, err := fastener.Pairs(stack, screw, grip)
		if err != nil {
			return j.Fault("screw", "bolt %s: %v", bolt.Name, err).Do("give screw, clamp and hole as they are, or the stiffness itself")
		}
		for q := range list {
			for c, given := range j.Stiffness {
				if !math.IsInf(given, 1) {
					list[q][c] = given
				}
				sum[c] += list[q][c]
			}
			pairs++
		}
		p.Bolts[i].Pairs = list
	}
	if pairs == 0 {
		return j.Fault("screw", "no bolt is held by it, so that no plates say how stiff it is").Do("name it in bolts or bolt, as in joint = joint.%s", j.Part.Name)
	}
	for c := range sum {
		out.Stiffness[c] = sum[c] / float64(pairs)
	}
	what := "pressure cone of 30 degrees, its layers in shear under friction, screw in tension"
	if j.Bearing {
		what = "pressure cone of 30 degrees, screw in tension, in its hole by Huth 1986"
	}
	given := ""
	for c, k := range j.Stiffness {
		if !math.IsInf(k, 1) {
			given += " " + componentNames[c]
		}
	}
	if given != "" {
		given = ";" + given + " as given"
	}
	out.Origin = fmt.Sprintf("from plates and screw of %s (%s; Shigley 1989)%s", mm(j.Screw.Value), what, given)
	if j.Low == 0 {
		out.Low, out.High = likelyLow, likelyHigh
		b.assume(j.Part, "a computed joint lies within %g to %g times its value (a judgement: faces are rough)", likelyLow, likelyHigh)
	}
	return nil
}

var componentNames = [6]string{"x", "y", "z", "rx", "ry", "rz"}

// likelyLow and likelyHigh are the range of a computed stiffness where none is given; judgement, no source.
const likelyLow, likelyHigh = 0.2, 2.0

// clamped says what a plate is to a screw.
func (b *builder) clamped(plate int) fastener.Plate {
	x := &b.out.Properties.Plates[plate]
	thickness := b.plates[plate].thickness
	if x.Material != "" {
		return b.layer(x.Plate, b.material(x.Material), thickness)
	}
	// Plies lie in a row through the thickness and side by side along it.
	out := fastener.Plate{Thickness: thickness}
	var soft, give, along float64
	for _, ply := range x.Plies {
		p := b.layer(x.Plate, b.material(ply.Material), ply.Thickness)
		soft, give, along = soft+ply.Thickness/p.E3, give+ply.Thickness/p.Shear, along+ply.Thickness*p.InPlane
		out.Composite = out.Composite || p.Composite
	}
	out.E3, out.Shear, out.InPlane = thickness/soft, thickness/give, along/thickness
	return out
}

func (b *builder) layer(plate string, m airframe.Material, thickness float64) fastener.Plate {
	p := fastener.Plate{Thickness: thickness, E3: m.E3, Shear: (m.G13 + m.G23) / 2, InPlane: math.Sqrt(m.E1 * m.E2), Composite: !m.Isotropic}
	if p.E3 == 0 {
		p.E3 = throughByShear * p.Shear
		b.assume(airframefile.Part{Kind: "material", Name: m.Name}, "no E3: the modulus through the thickness is taken as %g times the transverse shear modulus", throughByShear)
	}
	return p
}
