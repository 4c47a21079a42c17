package assembly

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
)

var componentNames = [6]string{"x", "y", "z", "rx", "ry", "rz"}

// checkStiffness refuses negative and undefined components, and zero ones where all must resist.
func checkStiffness(k [6]float64, all bool) error {
	for c, v := range k {
		if !(v >= 0) || (all && v == 0) {
			return fmt.Errorf("stiffness of component %s is %g: it must be positive", componentNames[c], v)
		}
	}
	return nil
}

func (b *builder) readJoints() error {
	b.joints = map[string]airframe.Joint{}
	for _, x := range b.properties.Joints {
		b.joints[x.Name] = x
	}
	return nil
}

// joint finds a joint whose stiffness counts for the measure.
func (b *builder) joint(name string, measure airframe.Measure) (airframe.Joint, error) {
	j, ok := b.joints[name]
	switch {
	case !ok:
		return j, fmt.Errorf("there is no joint %q", name)
	case j.Measure != measure:
		return j, fmt.Errorf("the stiffness of joint %q is that per %q and %q is due", name, j.Measure, measure)
	}
	return j, nil
}

// contacts ties plates that are pressed, glued or keyed.
func (b *builder) contacts() error {
	linear, solid := make([]bool, len(b.mesh.Parts)), make([]bool, len(b.mesh.Parts))
	for i, part := range b.mesh.Parts {
		if part.Standoff {
			continue
		}
		kind := b.types(part.Element)
		linear[i] = kind != nil && kind.Describe().Nodes == 3
		solid[i] = kind != nil && kind.Describe().Solid()
	}
	properties := map[string]airframe.ContactProperties{}
	for _, x := range b.properties.Contacts {
		properties[x.Contact] = x
	}
	for i := range b.mesh.Contacts {
		c := &b.mesh.Contacts[i]
		x, ok := properties[c.Name]
		if !ok {
			return blame("contact %q", c.Name, fmt.Errorf("the properties do not know it"))
		}
		measure := b.joints[x.Joint].Measure
		if measure == airframe.Each {
			measure = airframe.PerArea // refused, for no joint of that kind ties a contact
		}
		joint, err := b.joint(x.Joint, measure)
		if err != nil {
			return blame("contact %q", c.Name, err)
		}
		k := joint.Stiffness
		if x.Stiffness != nil {
			k = *x.Stiffness
		}
		if err := checkStiffness(k, false); err != nil {
			return blame("joint %q", joint.Name, err)
		}
		for q, v := range k {
			if math.IsInf(v, 1) {
				return blame("joint %q", joint.Name, fmt.Errorf("component %s of a contact must be finite", componentNames[q]))
			}
		}
		out := Contact{Group: b.group(JointGroup, joint.Name, joint.LossFactor), Axes: Axes{c.Axes.X, c.Axes.Y, c.Axes.Z}, Stiffness: k}
		for p := range c.Points {
			for _, t := range c.Points[p].Triangle {
				if part := b.mesh.TrianglePart[t]; solid[part] {
					return blame("contact %q", c.Name, fmt.Errorf("plate %q is of solid elements, which no face can be pressed or glued to yet", b.mesh.Parts[part].Name))
				}
			}
			out.Points = append(out.Points, b.contactPoint(&c.Points[p], linear))
		}
		b.frame.Contacts = append(b.frame.Contacts, out)
	}
	return nil
}

// contactPoint gives a point its nodes and shape functions; linear tells the parts of three-node elements.
func (b *builder) contactPoint(p *mesh.ContactPoint, linear []bool) ContactPoint {
	out := ContactPoint{At: p.At, Measure: p.Measure}
	for side, t := range p.Triangle {
		s := &out.Sides[side]
		s.Nodes, s.Weights, s.Count = b.mesh.Triangles[t], mesh.Weights(p.Local[side]), len(s.Nodes)
		if linear[b.mesh.TrianglePart[t]] {
			x, y := p.Local[side][0], p.Local[side][1]
			s.Weights, s.Count = [6]float64{1 - x - y, x, y}, 3
		}
	}
	return out
}
