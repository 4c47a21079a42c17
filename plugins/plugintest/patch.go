package plugintest

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/extension"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/sparse"
	"hushframe/core/pipeline/stage"
)

// sheet is a rectangle from the origin, divided into triangles, assembled.
type sheet struct {
	problem assembly.Problem
	system  *assembly.System
	length  float64
	width   float64
}

// newSheet divides a rectangle into along × across cells of two triangles; bend moves inner corners off the grid.
func (s *subject) newSheet(length, width float64, along, across int, bend float64) (*sheet, error) {
	h := &sheet{length: length, width: width}
	p := &h.problem
	p.Groups = []assembly.Group{{Name: "sheet", Kind: assembly.PartGroup}}
	part := assembly.PlatePart{Type: s.kind, Axes: assembly.Global, Section: s.section, Layup: s.layup}
	node := func(x, y float64) int32 {
		p.Nodes = append(p.Nodes, assembly.Vec{x, y, 0})
		return int32(len(p.Nodes) - 1)
	}
	corner := make([][]int32, along+1)
	for i := range corner {
		corner[i] = make([]int32, across+1)
		for j := range corner[i] {
			x, y := float64(i)/float64(along), float64(j)/float64(across)
			if i > 0 && i < along && j > 0 && j < across {
				x += bend * math.Sin(float64(3*i+5*j)) / float64(along)
				y += bend * math.Cos(float64(7*i+2*j)) / float64(across)
			}
			corner[i][j] = node(x*length, y*width)
		}
	}
	middles := map[[2]int32]int32{}
	middle := func(a, b int32) int32 {
		key := [2]int32{min(a, b), max(a, b)}
		v, ok := middles[key]
		if !ok {
			v = node((p.Nodes[a][0]+p.Nodes[b][0])/2, (p.Nodes[a][1]+p.Nodes[b][1])/2)
			middles[key] = v
		}
		return v
	}
	add := func(a, b, c int32) {
		part.Elements = append(part.Elements, [6]int32{a, b, c, middle(a, b), middle(b, c), middle(c, a)})
	}
	for i := range along {
		for j := range across {
			a, b, c, d := corner[i][j], corner[i+1][j], corner[i+1][j+1], corner[i][j+1]
			if (i+j)%2 == 0 {
				add(a, b, c)
				add(a, c, d)
			} else {
				add(a, b, d)
				add(b, c, d)
			}
		}
	}
	p.Extrude(&part)
	p.Plates = []assembly.PlatePart{part}
	var err error
	h.system, err = assembly.Assemble(context.Background(), p, 1)
	return h, err
}

// each calls f for every node that has unknowns, with the unknowns, -1 for none.
func (h *sheet) each(f func(at assembly.Vec, unknowns [6]int32)) {
	for v := range h.problem.Nodes {
		u := h.system.NodeUnknowns(int32(v))
		for _, i := range u {
			if i >= 0 {
				f(h.problem.Nodes[v], u)
				break
			}
		}
	}
}

func (h *sheet) edge(at assembly.Vec) bool {
	const near = 1e-9
	return at[0] < near || at[0] > h.length-near || at[1] < near || at[1] > h.width-near
}

func times(a *sparse.Symmetric, x []float64) []float64 {
	y := make([]float64, a.N)
	for j := range a.N {
		for p := a.Ptr[j]; p < a.Ptr[j+1]; p++ {
			i := a.Row[p]
			y[i] += a.Val[p] * x[j]
			if int(i) != j {
				y[j] += a.Val[p] * x[i]
			}
		}
	}
	return y
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i := range a {
		sum += a[i] * b[i]
	}
	return sum
}

// checkPatch wants no forces within a patch under constant strain, whatever the shape of its triangles.
func (s *subject) checkPatch(bad func(string, ...any)) {
	h, err := s.newSheet(12e-3, 8e-3, 3, 3, 0.3)
	if err != nil {
		bad("patch: a patch of distorted triangles gives %v", err)
		return
	}
	fields := strains
	if s.shape.Nodes == 6 {
		fields = append(fields[:len(fields):len(fields)], curvatures...)
	}
	for _, f := range fields {
		u, thick := make([]float64, h.system.N), make([]float64, h.system.N)
		h.each(func(at assembly.Vec, unknowns [6]int32) {
			m := f.at(at[0], at[1])
			if s.shape.Solid() {
				moved := f.motion(at[0], at[1], at[2])
				m = [6]float64{moved[0], moved[1], moved[2]}
				thick[unknowns[2]] = math.Pow(at[2], float64(f.thick))
			}
			for k, i := range unknowns {
				if i >= 0 {
					u[i] = m[k]
				}
			}
		})
		if kt := times(h.system.K, thick); s.shape.Solid() {
			c := -dot(kt, u) / dot(kt, thick)
			for i := range u {
				u[i] += c * thick[i]
			}
		}
		force := times(h.system.K, u)
		// Moments are weighed by the thickness.
		inside, outside := 0.0, 0.0
		h.each(func(at assembly.Vec, unknowns [6]int32) {
			for k, i := range unknowns {
				if i < 0 {
					continue
				}
				v := math.Abs(force[i])
				if k >= 3 {
					v /= s.section.Thickness
				}
				if h.edge(at) {
					outside = max(outside, v)
				} else {
					inside = max(inside, v)
				}
			}
		})
		if !(inside <= 1e-6*outside) {
			bad("patch: under %s a node within a patch of distorted triangles is pushed by %.2g of the largest force at the edge; neighbours do not agree, so results will not converge", f.name, inside/outside)
		}
	}
}

// checkBeam bends a strip clamped at one end by a force at the other. Poisson's ratio is nil, so that the strip is a
// beam: w = FL³/(3EI) + FL/(κGA), κ = 5/6 (S. P. Timoshenko, Strength of Materials, part I, 3rd ed., 1955).
func checkBeam(e extension.Element, o stage.Arguments, bad func(string, ...any)) {
	m := aluminium
	m.Nu12 = 0
	m.G12, m.G13, m.G23 = m.E1/2, m.E1/2, m.E1/2
	s, err := newSubject(e, o, m, 0)
	if err != nil {
		bad("beam: %v", err)
		return
	}
	const length, width = 40e-3, 8e-3
	area, inertia := width*plateThickness, width*plateThickness*plateThickness*plateThickness/12
	want := length*length*length/(3*m.E1*inertia) + length/(5.0/6*m.G13*area)
	var errors [3]float64
	for i, n := range [3]int{2, 4, 8} {
		got, err := s.tip(length, width, n)
		if err != nil {
			bad("beam: a strip of %d cells gives %v", n, err)
			return
		}
		errors[i] = got/want - 1
	}
	finest := math.Abs(errors[2])
	table := fmt.Sprintf("%+.3f %%, %+.3f %%, %+.3f %% off at 2, 4 and 8 cells along", 100*errors[0], 100*errors[1], 100*errors[2])
	if s.shape.Nodes == 6 && !(finest < 0.01) || !(finest < 0.1) {
		bad("beam: a cantilever does not bend as a beam does: %s", table)
	} else if finest > 2e-3 && finest > 0.7*math.Abs(errors[0]) {
		bad("beam: a cantilever does not come nearer to the beam with finer division: %s", table)
	}
}

// tip is the deflection of the free end under a unit force spread over it.
func (s *subject) tip(length, width float64, along int) (float64, error) {
	h, err := s.newSheet(length, width, along, 2, 0)
	if err != nil {
		return 0, err
	}
	n := h.system.N
	held, load := make([]bool, n), make([]float64, n)
	var tip []int32
	const near = 1e-9
	h.each(func(at assembly.Vec, unknowns [6]int32) {
		switch {
		case at[0] < near:
			for _, i := range unknowns {
				if i >= 0 {
					held[i] = true
				}
			}
		case at[0] > length-near:
			tip = append(tip, unknowns[2])
		}
	})
	for _, i := range tip {
		load[i] = 1 / float64(len(tip))
	}
	var free []int
	for i := range n {
		if !held[i] {
			free = append(free, i)
		}
	}
	place := make(map[int]int, len(free))
	for k, i := range free {
		place[i] = k
	}
	k, f := mat.NewSymBandDense(len(free), len(free)-1, nil), mat.NewVecDense(len(free), nil)
	for j := range n {
		for p := h.system.K.Ptr[j]; p < h.system.K.Ptr[j+1]; p++ {
			i := int(h.system.K.Row[p])
			if !held[i] && !held[j] {
				k.SetSymBand(place[i], place[j], h.system.K.Val[p])
			}
		}
		if !held[j] {
			f.SetVec(place[j], load[j])
		}
	}
	var chol mat.BandCholesky
	if !chol.Factorize(k) {
		return 0, fmt.Errorf("a stiffness that is not positive: something can move without energy, or pushes back")
	}
	var u mat.VecDense
	if err := chol.SolveVecTo(&u, f); err != nil {
		if _, warned := err.(mat.Condition); !warned {
			return 0, err
		}
	}
	sum := 0.0
	for _, i := range tip {
		sum += u.AtVec(place[int(i)]) / float64(len(tip))
	}
	return sum, nil
}
