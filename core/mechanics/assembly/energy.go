package assembly

import (
	"context"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
)

// EnergyKinds are the kinds of strain energy of a structure: those of plates and beams, then joints
// and mounts.
var EnergyKinds = [6]string{"in-plane", "bending", "twist", "shear", "joint", "mount"}

// Energies are the energies (J) of several motions, for unit unknowns.
type Energies struct {
	// Strain[m][g][k] is ½ of the work of stiffness group g, kind k, in motion m.
	Strain [][][6]float64
	// Kinetic[m][g] is ½ yᵀ M_g y of part group g; Body[m][b] that of body b of the problem.
	Kinetic, Body [][]float64
}

// Energies splits the strain and kinetic energy of each motion y (unknowns).
func (s *System) Energies(ctx context.Context, ys [][]float64) (*Energies, error) {
	p := s.layout.problem
	out := &Energies{}
	nodes := make([][]float64, len(ys))
	for m, y := range ys {
		nodes[m] = make([]float64, 6*len(p.Nodes))
		s.Expand(nodes[m], y)
		out.Strain = append(out.Strain, make([][6]float64, len(p.Groups)))
		out.Kinetic = append(out.Kinetic, make([]float64, len(p.Groups)))
		out.Body = append(out.Body, s.bodyKinetic(y))
	}
	for i := range s.plates {
		if err := s.plateEnergies(ctx, &s.plates[i], nodes, out); err != nil {
			return nil, err
		}
	}
	for i := range s.beams {
		a := &s.beams[i]
		for e, ends := range a.part.Elements {
			for m := range ys {
				u := local(nodes[m], ends[:], a.axes[e])
				strain := beam.Energies(a.part.Section, a.lengths[e], u)
				for k, v := range strain {
					out.Strain[m][a.part.Group][k] += v
				}
				size := element.Packed(beam.Unknowns)
				out.Kinetic[m][a.part.Group] += half(a.matrices.Mass[size*e:size*(e+1)], u)
			}
		}
	}
	for i := range s.springs {
		a := &s.springs[i]
		kind := len(EnergyKinds) - 1
		if p.Groups[a.spring.Group].Kind == JointGroup {
			kind--
		}
		for m, y := range ys {
			d := s.stretch(a, y)
			for c, k := range a.spring.Stiffness {
				out.Strain[m][a.spring.Group][kind] += k * d[c] * d[c] / 2
			}
		}
	}
	return out, nil
}

// energyBatch bounds how many motions one call of an element type gets, for its memory.
const energyBatch = 16

func (s *System) plateEnergies(ctx context.Context, a *assembledPlates, nodes [][]float64, out *Energies) error {
	size, count := element.Packed(6*a.nodes), len(a.part.Elements)
	for lo := 0; lo < len(nodes); lo += energyBatch {
		some := nodes[lo:min(lo+energyBatch, len(nodes))]
		motions := make([]float64, 0, count*len(some)*6*a.nodes)
		for e, list := range a.part.Elements {
			for m := range some {
				u := local(some[m], list[:a.nodes], a.part.Axes)
				motions = append(motions, u...)
				out.Kinetic[lo+m][a.part.Group] += half(a.matrices.Mass[size*e:size*(e+1)], u)
			}
		}
		got := make([]float64, count*len(some)*element.Kinds)
		if err := a.part.Type.Energies(ctx, &a.batch, motions, got); err != nil {
			return &PartError{s.layout.problem.Groups[a.part.Group].Name, err}
		}
		for e := range count {
			for m := range some {
				for k := range element.Kinds {
					out.Strain[lo+m][a.part.Group][k] += got[(e*len(some)+m)*element.Kinds+k]
				}
			}
		}
	}
	return nil
}

// local gathers the motion of nodes in an element's axes.
func local(nodes []float64, list []int32, axes Axes) []float64 {
	u := make([]float64, 0, 6*len(list))
	for _, v := range list {
		m := axes.in6([6]float64(nodes[6*v : 6*v+6]))
		u = append(u, m[:]...)
	}
	return u
}

// half returns ½ uᵀAu of a packed matrix.
func half(a, u []float64) float64 {
	sum, at := 0.0, 0
	for i := range u {
		row := 0.0
		for j := range i {
			row += a[at+j] * u[j]
		}
		sum += u[i] * (2*row + a[at+i]*u[i])
		at += i + 1
	}
	return sum / 2
}

// stretch is the relative motion of a spring's ends in its axes.
func (s *System) stretch(a *assembledSpring, y []float64) (d [6]float64) {
	for side, b := range []int{a.spring.A, a.spring.B} {
		if b == Ground {
			continue
		}
		m := a.spring.Axes.in6(carried(s.layout.bodyMotion(b, y), sub(a.spring.Point, a.reference[side])))
		for c := range 6 {
			d[c] += float64(2*side-1) * m[c]
		}
	}
	return d
}

func (s *System) bodyKinetic(y []float64) []float64 {
	p := s.layout.problem
	out := make([]float64, len(p.Bodies))
	for b, body := range p.Bodies {
		for _, in := range body.Inertia {
			v := s.Motion(b, in.Centre, y)
			m := in.about(in.Centre)
			for r := range 6 {
				for q := range 6 {
					out[b] += v[r] * m[r][q] * v[q] / 2
				}
			}
		}
	}
	return out
}
