package assembly

import (
	"context"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/numeric/dense"
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
	// Plates[m][e] is the strain energy of plate element e in motion m, in the order of the plates of the
	// problem and of their elements. What contacts between plates store is that of their joint groups.
	Plates [][]float64
}

// Energies splits the strain and kinetic energy of each motion y (unknowns).
func (s *System) Energies(ctx context.Context, ys [][]float64, threads int) (*Energies, error) {
	p := s.layout.problem
	out := &Energies{}
	nodes := s.expandAll(ys, threads)
	for _, y := range ys {
		out.Strain = append(out.Strain, make([][6]float64, len(p.Groups)))
		out.Kinetic = append(out.Kinetic, make([]float64, len(p.Groups)))
		out.Body = append(out.Body, s.bodyKinetic(y))
		out.Plates = append(out.Plates, nil)
	}
	for i := range s.plates {
		if err := s.plateEnergies(ctx, &s.plates[i], nodes, out, threads); err != nil {
			return nil, err
		}
	}
	for i := range s.beams {
		a := &s.beams[i]
		for e, ends := range a.part.Elements {
			for m := range ys {
				u := local(nil, nodes[m], ends[:], a.axes[e])
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
	s.contactEnergies(nodes, out, threads)
	return out, nil
}

// energyBatch bounds how many motions one call of an element type gets, for its memory.
const energyBatch = 32

func (s *System) plateEnergies(ctx context.Context, a *assembledPlates, nodes [][]float64, out *Energies, threads int) error {
	per, count := a.part.unknowns(), len(a.part.Elements)
	order := per * a.nodes
	w := newWork(nodes, count, a.nodes, per, a.part.lists(), func(int) Axes { return a.part.Axes }, a.part.Axes, threads)
	if err := w.apply(ctx, a.matrices.Mass, threads); err != nil {
		return err
	}
	for m := range nodes {
		out.Kinetic[m][a.part.Group] += w.own(m) / 2
	}
	for lo := 0; lo < len(nodes); lo += energyBatch {
		some := min(energyBatch, len(nodes)-lo)
		motions := make([]float64, count*some*order)
		dense.Parallel(threads, some, func(m int) {
			row := w.motion[(lo+m)*w.width:]
			for e := range count {
				to := motions[(e*some+m)*order:]
				for i := range a.nodes {
					copy(to[per*i:][:per], row[6*w.node(e, i):])
				}
			}
		})
		got := make([]float64, count*some*element.Kinds)
		if err := a.part.Type.Energies(ctx, &a.batch, motions, got); err != nil {
			return &PartError{s.layout.problem.Groups[a.part.Group].Name, err}
		}
		for e := range count {
			for m := range some {
				sum := 0.0
				for k := range element.Kinds {
					v := got[(e*some+m)*element.Kinds+k]
					out.Strain[lo+m][a.part.Group][k] += v
					sum += v
				}
				out.Plates[lo+m] = append(out.Plates[lo+m], sum)
			}
		}
	}
	return nil
}

// local appends the motion of nodes in an element's axes.
func local(u, nodes []float64, list []int32, axes Axes) []float64 {
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
