package shell_test

import (
	"context"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/known"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
)

// model is a grid of one element type and one section, assembled densely.
type model struct {
	t       *testing.T
	kind    element.Type
	grid    *known.Grid
	nodes   int // per element
	section laminate.Section
	batch   element.Batch
	k, m    *mat.SymDense
	fixed   map[int]float64
}

func newModel(t *testing.T, kind element.Type, grid *known.Grid, section laminate.Section) *model {
	t.Helper()
	md := &model{t: t, kind: kind, grid: grid, nodes: kind.Describe().Nodes, section: section, fixed: map[int]float64{}}
	md.batch = batchOf(grid, md.nodes, section)
	out := element.NewMatrices(len(grid.Triangles), 6*md.nodes)
	if err := kind.Matrices(context.Background(), &md.batch, out); err != nil {
		t.Fatal(err)
	}
	n := 6 * grid.Nodes(md.nodes)
	md.k, md.m = mat.NewSymDense(n, nil), mat.NewSymDense(n, nil)
	packed := element.Packed(6 * md.nodes)
	for e := range grid.Triangles {
		at := e * packed
		for i := range 6 * md.nodes {
			for j := range i + 1 {
				gi, gj := md.unknown(e, i), md.unknown(e, j)
				md.k.SetSym(gi, gj, md.k.At(gi, gj)+out.Stiffness[at])
				md.m.SetSym(gi, gj, md.m.At(gi, gj)+out.Mass[at])
				at++
			}
		}
	}
	return md
}

func batchOf(grid *known.Grid, nodes int, sections ...laminate.Section) element.Batch {
	b := element.Batch{Sections: sections, Section: make([]int32, len(grid.Triangles))}
	for _, tri := range grid.Triangles {
		for _, n := range tri[:nodes] {
			b.Nodes = append(b.Nodes, grid.Points[n][0], grid.Points[n][1], 0)
		}
	}
	return b
}

func (md *model) unknown(e, i int) int { return 6*int(md.grid.Triangles[e][i/6]) + i%6 }

func (md *model) fix(node int32, component int, value float64) {
	md.fixed[6*int(node)+component] = value
}

// solve returns the displacement under the given forces and the prescribed values.
func (md *model) solve(load []float64) []float64 {
	md.t.Helper()
	n, _ := md.k.Dims()
	var free []int
	u := make([]float64, n)
	for i := range n {
		if v, ok := md.fixed[i]; ok {
			u[i] = v
		} else {
			free = append(free, i)
		}
	}
	if len(free) == 0 {
		return u
	}
	a, b := mat.NewSymDense(len(free), nil), mat.NewVecDense(len(free), nil)
	// Diagonal scaling: a Cholesky factor is as exact with it, and its condition number means more.
	scale := make([]float64, len(free))
	for i, gi := range free {
		scale[i] = 1 / math.Sqrt(md.k.At(gi, gi))
	}
	for i, gi := range free {
		r := 0.0
		if load != nil {
			r = load[gi]
		}
		for gj, v := range md.fixed {
			r -= md.k.At(gi, gj) * v
		}
		b.SetVec(i, r*scale[i])
		for j := range i + 1 {
			a.SetSym(i, j, md.k.At(gi, free[j])*scale[i]*scale[j])
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(a) {
		md.t.Fatal("stiffness of the supported model is not positive definite")
	}
	var x mat.VecDense
	if err := chol.SolveVecTo(&x, b); err != nil {
		if _, ok := err.(mat.Condition); !ok {
			md.t.Fatal(err)
		}
	}
	for i, gi := range free {
		u[gi] = x.AtVec(i) * scale[i]
	}
	return u
}

// energies returns the strain energy by kind of all elements for which in holds.
func (md *model) energies(u []float64, in func(e int) bool) (sum [element.Kinds]float64) {
	md.t.Helper()
	motions := make([]float64, 0, len(md.grid.Triangles)*6*md.nodes)
	for e := range md.grid.Triangles {
		for i := range 6 * md.nodes {
			motions = append(motions, u[md.unknown(e, i)])
		}
	}
	out := make([]float64, len(md.grid.Triangles)*element.Kinds)
	if err := md.kind.Energies(context.Background(), &md.batch, motions, out); err != nil {
		md.t.Fatal(err)
	}
	for e := range md.grid.Triangles {
		if in == nil || in(e) {
			for k := range element.Kinds {
				sum[k] += out[e*element.Kinds+k]
			}
		}
	}
	return sum
}

// pressure returns the consistent nodal forces of a unit pressure along z.
func (md *model) pressure() []float64 {
	n, _ := md.m.Dims()
	ones := mat.NewVecDense(n, nil)
	for i := 2; i < n; i += 6 {
		ones.SetVec(i, 1/md.section.Mass)
	}
	var f mat.VecDense
	f.MulVec(md.m, ones)
	return f.RawVector().Data
}

func eachType(t *testing.T, run func(t *testing.T, kind element.Type)) {
	for _, kind := range shell.Types() {
		t.Run(kind.Describe().Name, func(t *testing.T) { run(t, kind) })
	}
}

func byName(t *testing.T, name string) element.Type {
	t.Helper()
	for _, kind := range shell.Types() {
		if kind.Describe().Name == name {
			return kind
		}
	}
	t.Fatalf("no element type %s", name)
	return nil
}

func isotropic(t *testing.T, e, nu, thickness float64) laminate.Section {
	t.Helper()
	s, err := laminate.Homogeneous(laminate.Isotropic(e, nu, 1000), thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	return s
}
