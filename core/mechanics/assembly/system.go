package assembly

import (
	"context"
	"errors"
	"fmt"
	"math"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/numeric/dense"
	"hushframe/core/numeric/sparse"
)

// System is an assembled problem.
type System struct {
	// N is the number of unknowns; K (N/m, N, N·m) and M (kg, kg·m, kg·m²) share their pattern.
	N    int
	K, M *sparse.Symmetric
	// Merges lists the bodies that became one.
	Merges []Merge
	// Mass is the total mass in kg and Centre its centre of gravity; GroupMass and GroupCentre those of
	// each group. They are summed without K and M.
	Mass        float64
	Centre      Vec
	GroupMass   []float64
	GroupCentre []Vec

	layout  *layout
	plates  []assembledPlates
	beams   []assembledBeams
	springs []assembledSpring
	// What K and M are the sums of, and where it goes.
	entries   []contribution
	assembler *sparse.Assembler
}

// assembledPlates keeps what energies and groups need again.
type assembledPlates struct {
	part     *PlatePart
	nodes    int // that carry the unknowns of an element
	batch    element.Batch
	matrices *element.Matrices
}

type assembledBeams struct {
	part     *BeamPart
	axes     []Axes
	lengths  []float64
	matrices *element.Matrices
}

type assembledSpring struct {
	spring    Spring // bodies merged; rigid components zeroed
	reference [2]Vec
}

// Assemble lays out the unknowns of p and assembles K and M on up to threads goroutines.
//
// Errors: a part or body connected to the rest by nothing (*Loose), a body that moves freely on its
// mount (*Free), an impossible body, an element of bad shape (*PartError wrapping *element.ShapeError),
// or what an element type returns.
func Assemble(ctx context.Context, p *Problem, threads int) (*System, error) {
	if err := checkBodies(p); err != nil {
		return nil, err
	}
	l, err := number(p)
	if err != nil {
		return nil, err
	}
	if err := checkConnected(p, l); err != nil {
		return nil, err
	}
	s := &System{N: l.count, Merges: l.merges, layout: l}
	s.plates = make([]assembledPlates, len(p.Plates))
	dense.Parallel(threads, len(p.Plates), func(i int) { s.plates[i] = l.gather(&p.Plates[i], threads) })
	for i := range s.plates {
		if err := s.computePlates(ctx, &s.plates[i]); err != nil {
			return nil, err
		}
	}
	for i := range p.Beams {
		if err := s.computeBeams(&p.Beams[i]); err != nil {
			return nil, err
		}
	}
	for i := range p.Springs {
		sp := l.merged(p.Springs[i])
		if sp.A == sp.B {
			continue
		}
		as := assembledSpring{spring: sp}
		for side, b := range []int{sp.A, sp.B} {
			if b != Ground {
				as.reference[side] = l.bodies[b].reference
			}
		}
		for c, k := range sp.Stiffness {
			if math.IsInf(k, 1) {
				as.spring.Stiffness[c] = 0
			}
		}
		s.springs = append(s.springs, as)
	}
	s.weigh()
	if !(s.Mass > 0) {
		return nil, errors.New("the structure has no mass")
	}
	s.add(threads)
	return s, nil
}

// PartError places an error in a part of the problem.
type PartError struct {
	Part string
	Err  error
}

func (e *PartError) Error() string { return fmt.Sprintf("part %q: %v", e.Part, e.Err) }

// Unwrap gives the cause.
func (e *PartError) Unwrap() error { return e.Err }

// gather makes room for the matrices of a part and brings the nodes of its elements into its axes.
func (l *layout) gather(part *PlatePart, threads int) assembledPlates {
	d := part.Type.Describe()
	a := assembledPlates{part: part, nodes: d.Unknowns() / part.unknowns()}
	origin := Vec{}
	if len(part.Elements) > 0 {
		origin = l.problem.Nodes[part.Elements[0][0]]
	}
	a.batch.Sections = append(a.batch.Sections, part.Section)
	a.batch.Layups = append(a.batch.Layups, part.Layup)
	a.batch.Section = make([]int32, len(part.Elements))
	a.batch.Threads = threads
	a.batch.Nodes = make([]float64, 0, 3*d.Nodes*len(part.Elements))
	for i := range part.Elements {
		for _, v := range part.Elements[i][:d.Nodes] {
			x := part.Axes.in(sub(l.problem.Nodes[v], origin))
			a.batch.Nodes = append(a.batch.Nodes, x[:]...)
		}
	}
	a.matrices = element.NewMatrices(len(part.Elements), d.Unknowns())
	return a
}

func (s *System) computePlates(ctx context.Context, a *assembledPlates) error {
	if err := a.part.Type.Matrices(ctx, &a.batch, a.matrices); err != nil {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		return &PartError{s.layout.problem.Groups[a.part.Group].Name, placed(err, a.part, s.layout.problem)}
	}
	return nil
}

// placed adds the place of a bad element to its error.
func placed(err error, part *PlatePart, p *Problem) error {
	var bad *element.ShapeError
	if errors.As(err, &bad) && bad.Element >= 0 && bad.Element < len(part.Elements) {
		x := p.Nodes[part.Elements[bad.Element][0]]
		return fmt.Errorf("near (%.4g, %.4g, %.4g) mm: %w", 1e3*x[0], 1e3*x[1], 1e3*x[2], err)
	}
	return err
}

func (s *System) computeBeams(part *BeamPart) error {
	p := s.layout.problem
	a := assembledBeams{part: part, matrices: element.NewMatrices(len(part.Elements), beam.Unknowns)}
	size := element.Packed(beam.Unknowns)
	for i, e := range part.Elements {
		d := sub(p.Nodes[e[1]], p.Nodes[e[0]])
		l := length(d)
		if !(l > 0) {
			return &PartError{p.Groups[part.Group].Name, errors.New("a beam has no length")}
		}
		a.axes, a.lengths = append(a.axes, along(d, part.Y)), append(a.lengths, l)
		beam.Matrices(part.Section, l, a.matrices.Stiffness[size*i:size*(i+1)], a.matrices.Mass[size*i:size*(i+1)])
	}
	s.beams = append(s.beams, a)
	return nil
}

// weigh sums mass and centre of gravity over parts and bodies.
func (s *System) weigh() {
	p := s.layout.problem
	s.GroupMass, s.GroupCentre = make([]float64, len(p.Groups)), make([]Vec, len(p.Groups))
	moments := make([]Vec, len(p.Groups))
	point := func(g int, m float64, at Vec) {
		s.GroupMass[g] += m
		moments[g] = add(moments[g], scale(m, at))
	}
	for i := range s.plates {
		a := &s.plates[i]
		per, list := a.part.unknowns(), a.part.lists()
		size := element.Packed(per * a.nodes)
		// Coupling inertia: the centre of an unsymmetric plate lies off its reference plane; solid elements have their
		// mass where it is.
		off := Vec{}
		if a.part.Points == nil {
			off = scale(a.part.Section.Coupling/a.part.Section.Mass, a.part.Axes[2])
		}
		for e := range a.part.Elements {
			nodes := list(e)
			// The mass entries of u_x against u_x add up to the mass; by rows they weigh the nodes.
			packed := a.matrices.Mass[size*e:]
			for i := range a.nodes {
				m := 0.0
				for j := range a.nodes {
					m += packed[element.Packed(per*max(i, j))+per*min(i, j)]
				}
				point(a.part.Group, m, add(p.Nodes[nodes[i]], off))
			}
		}
	}
	for i := range s.beams {
		for e, nodes := range s.beams[i].part.Elements {
			m := s.beams[i].part.Section.M * s.beams[i].lengths[e] / 2
			point(s.beams[i].part.Group, m, p.Nodes[nodes[0]])
			point(s.beams[i].part.Group, m, p.Nodes[nodes[1]])
		}
	}
	var moment Vec
	for g, m := range s.GroupMass {
		s.Mass += m
		moment = add(moment, moments[g])
		if m > 0 {
			s.GroupCentre[g] = scale(1/m, moments[g])
		}
	}
	for _, b := range p.Bodies {
		for _, in := range b.Inertia {
			s.Mass += in.Mass
			moment = add(moment, scale(in.Mass, in.Centre))
		}
	}
	if s.Mass > 0 {
		s.Centre = scale(1/s.Mass, moment)
	}
}

// Problem returns what was assembled.
func (s *System) Problem() *Problem { return s.layout.problem }
