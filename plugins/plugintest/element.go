package plugintest

import (
	"context"
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"
	"time"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// Element reports each problem of an element type as an error of the test. Every set of options is tried; without
// any, the defaults.
func Element(t *testing.T, e extension.Element, options ...stage.Arguments) {
	t.Helper()
	for _, p := range CheckElement(e, options...) {
		t.Error(p)
	}
}

// CheckElement lists the problems of an element type. What is wanted:
//
//   - a description that is complete, constant and survives the boundary, and options that change something;
//   - energies that are ½ uᵀKu; rigid motions without energy; mass and inertia as the plate has them;
//   - the energy of constant strain and curvature as the section has it, and no forces within a patch of distorted
//     triangles under it (six-node types; three-node ones are held to constant strain);
//   - the same matrices, turned, in turned axes;
//   - a cantilever that bends as a beam does, the better the finer it is divided;
//   - equal bytes whatever the threads and the size of the batch, bad elements named, cancellation obeyed in a second.
func CheckElement(e extension.Element, options ...stage.Arguments) []string {
	problems := checkExtension(e.Describe(), e.Describe(), extension.ElementKind)
	if len(problems) > 0 {
		return problems
	}
	if len(options) == 0 {
		options = []stage.Arguments{nil}
	}
	options = slices.Clone(options)
	for i, o := range options {
		o = withDefaults(e.Describe().Arguments, o)
		options[i] = o
		for _, p := range checkElement(e, o) {
			if len(o) > 0 {
				p = fmt.Sprintf("with %v: %s", map[string]any(o), p)
			}
			problems = append(problems, p)
		}
	}
	if len(problems) == 0 {
		problems = checkOptions(e, options)
	}
	return problems
}

// subject is an element type with options settled, and what it is tried on.
type subject struct {
	element extension.Element
	options stage.Arguments
	kind    element.Type
	shape   element.Description
	section laminate.Section
	layup   []laminate.Ply
}

// aluminium and carbon are round numbers, of no source: any material will do.
var (
	aluminium = laminate.Isotropic(70e9, 0.3, 2700)
	carbon    = laminate.Material{E1: 60e9, E2: 12e9, G12: 4e9, Nu12: 0.25, G13: 4e9, G23: 3e9, Density: 1550}
)

const plateThickness = 2e-3

func newSubject(e extension.Element, o stage.Arguments, m laminate.Material, angle float64) (*subject, error) {
	kind, err := extension.Bind(context.Background(), e, o)
	if err != nil {
		return nil, err
	}
	s := &subject{element: e, options: o, kind: kind, shape: kind.Describe(), layup: []laminate.Ply{{Material: m, Thickness: plateThickness, Angle: angle}}}
	s.section, err = laminate.Homogeneous(m, plateThickness, angle)
	return s, err
}

// triangle is the one that single elements are tried on, distorted, its centroid at the origin.
var triangle = [3][2]float64{{-3.1e-3, -1.6e-3}, {3.4e-3, -0.7e-3}, {-0.3e-3, 2.3e-3}}

// batch makes count elements of one triangle, each shifted by a multiple of step.
func (s *subject) batch(corners [3][2]float64, count int, step float64) *element.Batch {
	in := &element.Batch{Sections: []laminate.Section{s.section}, Layups: [][]laminate.Ply{s.layup}, Section: make([]int32, count), Threads: 1}
	for i := range count {
		for n := range s.shape.Nodes {
			p := corners[n%3]
			if n >= 3 {
				q := corners[(n-2)%3]
				p = [2]float64{(p[0] + q[0]) / 2, (p[1] + q[1]) / 2}
			}
			in.Nodes = append(in.Nodes, p[0]+step*float64(i), p[1], 0)
		}
	}
	return in
}

func (s *subject) matrices(in *element.Batch) (*element.Matrices, error) {
	out := element.NewMatrices(in.Count(), s.shape.Unknowns())
	return out, s.kind.Matrices(context.Background(), in, out)
}

func checkElement(e extension.Element, o stage.Arguments) (problems []string) {
	bad := func(format string, args ...any) { problems = append(problems, fmt.Sprintf(format, args...)) }
	s, err := newSubject(e, o, carbon, 0.4)
	if err != nil {
		return []string{fmt.Sprintf("shape: %v", err)}
	}
	if again, err := e.Shape(context.Background(), o); err != nil || !reflect.DeepEqual(again.Points, s.shape.Points) || again.Nodes != s.shape.Nodes {
		bad("shape: a second answer differs from the first")
	}
	in := s.batch(triangle, 1, 0)
	m, err := s.matrices(in)
	if err != nil {
		return append(problems, fmt.Sprintf("matrices: an ordinary triangle gives %v", err))
	}
	s.checkEnergies(in, m, bad)
	s.checkRigid(in, m, bad)
	s.checkMass(in, m, bad)
	s.checkConstant(in, m, bad)
	s.checkTurned(m, bad)
	s.checkBatches(m, bad)
	s.checkBadShape(bad)
	s.checkCancel(bad)
	if len(problems) == 0 { // the rest would only repeat it
		s.checkPatch(bad)
		checkBeam(e, o, bad)
	}
	return problems
}

// product returns ½ of the work of a packed matrix from u to v, times two.
func product(packed, u, v []float64) float64 {
	sum := 0.0
	for i := range u {
		for j := range v {
			sum += u[i] * packed[element.Packed(max(i, j))+min(i, j)] * v[j]
		}
	}
	return sum
}

func (s *subject) checkEnergies(in *element.Batch, m *element.Matrices, bad func(string, ...any)) {
	n := s.shape.Unknowns()
	motions := make([]float64, 2*n)
	for i := range motions {
		motions[i] = math.Sin(1.7*float64(i) + 0.3) // any motion
		if !s.shape.Solid() && i%6 >= 3 {
			motions[i] /= 1e-3
		}
	}
	out := make([]float64, 2*element.Kinds)
	if err := s.kind.Energies(context.Background(), in, motions, out); err != nil {
		bad("energies: %v", err)
		return
	}
	for k := range 2 {
		u := motions[k*n : (k+1)*n]
		want, got := product(m.Stiffness, u, u)/2, 0.0
		for _, v := range out[k*element.Kinds : (k+1)*element.Kinds] {
			got += v
		}
		if !(math.Abs(got-want) <= 1e-6*want) {
			bad("energies: the four kinds add up to %.6g J under motion %d of a batch, where half of uᵀKu is %.6g J; each kind must be filled for every motion, and nothing left out", got, k, want)
		}
	}
}

func (s *subject) checkBatches(one *element.Matrices, bad func(string, ...any)) {
	const count = 150
	in := s.batch(triangle, count, 0)
	first, err1 := s.matrices(in)
	in.Threads = 3
	second, err2 := s.matrices(in)
	switch {
	case err1 != nil || err2 != nil:
		bad("matrices: a batch of %d gives %v, %v", count, err1, err2)
		return
	case !reflect.DeepEqual(first, second):
		bad("matrices: with three threads other bytes come out than with one; sum in a fixed order and share nothing between elements")
	}
	size := len(one.Stiffness)
	for i := range count {
		if !reflect.DeepEqual(first.Stiffness[i*size:(i+1)*size], one.Stiffness) || !reflect.DeepEqual(first.Mass[i*size:(i+1)*size], one.Mass) {
			bad("matrices: element %d of a batch of equal ones differs from one alone; does something stay behind in scratch memory?", i)
			return
		}
	}
}

func (s *subject) checkBadShape(bad func(string, ...any)) {
	in := s.batch(triangle, 8, 0)
	per := 3 * s.shape.Nodes
	flat := [3][2]float64{{0, 0}, {2e-3, 0}, {4e-3, 0}}
	copy(in.Nodes[5*per:6*per], s.batch(flat, 1, 0).Nodes)
	_, err := s.matrices(in)
	if shape, ok := err.(*element.ShapeError); !ok || shape.Element != 5 || shape.Reason == "" {
		bad("matrices: element 5 of 8 has no area, and the call gives %v; it must end with an *element.ShapeError that names 5 and a reason", err)
	}
}

func (s *subject) checkCancel(bad func(string, ...any)) {
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	in := s.batch(triangle, 8, 0)
	out := element.NewMatrices(8, s.shape.Unknowns())
	if err := s.kind.Matrices(ended, in, out); fault.KindOf(err) != fault.Cancelled {
		bad("matrices: with a context that has ended it gives %v, not the error of the context", err)
	}
	const many = 3000
	in, out = s.batch(triangle, many, 0), element.NewMatrices(many, s.shape.Unknowns())
	soon, cancel := context.WithTimeout(context.Background(), 2*time.Millisecond)
	defer cancel()
	began := time.Now()
	if err := s.kind.Matrices(soon, in, out); err != nil && time.Since(began) > time.Second {
		bad("matrices: a cancelled call went on for %v; look at the context between elements", time.Since(began).Round(time.Millisecond))
	}
}

// checkOptions wants each option to change something under one of the sets, or to be refused by name.
func checkOptions(e extension.Element, sets []stage.Arguments) (problems []string) {
	bad := func(format string, args ...any) { problems = append(problems, fmt.Sprintf(format, args...)) }
	answer := func(o stage.Arguments) (string, error) {
		s, err := newSubject(e, o, carbon, 0.4)
		if err != nil {
			return "", err
		}
		m, err := s.matrices(s.batch(triangle, 1, 0))
		return fmt.Sprint(s.shape, *m), err
	}
	for _, a := range e.Describe().Arguments {
		var h heeded
		for _, o := range sets {
			usual, err := answer(o)
			if err != nil {
				return nil // has been said
			}
			h.heed("option", a, "", false, others(a, a.Type, o[a.Name]), func(v any) (string, error) { return answer(with(o, a.Name, v)) }, usual, bad)
		}
		switch {
		case len(h.tried) == 0:
			bad("option %s was never varied: the suite cannot guess a value of it; give it one in a set of options", a.Name)
		case !h.changed:
			bad("option %s changes nothing: with %s the matrices are the same to the last byte; is it read?", a.Name, strings.Join(h.tried, ", "))
		}
	}
	return problems
}
