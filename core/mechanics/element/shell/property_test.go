package shell_test

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/known"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
)

// shapes are single elements: regular, flat-angled, needle, and (for six nodes) with curved sides.
func shapes(curved bool) map[string]*known.Grid {
	tri := [][3]int32{{0, 1, 2}}
	m := map[string]*known.Grid{
		"regular": known.FromCorners([][2]float64{{0, 0}, {1, 0}, {0.5, 0.8}}, tri),
		"obtuse":  known.FromCorners([][2]float64{{0, 0}, {1, 0}, {0.6, 0.12}}, tri),
		"needle":  known.FromCorners([][2]float64{{0, 0}, {1, 0.1}, {0.05, 0.09}}, tri),
	}
	if curved {
		g := known.FromCorners([][2]float64{{0, 0}, {1, 0}, {0.4, 0.9}}, tri)
		g.Points[3][1] -= 0.1
		g.Points[4][0] -= 0.07
		m["curved"] = g
	}
	return m
}

func woven(t *testing.T, thickness, angle float64) laminate.Section {
	t.Helper()
	s, err := laminate.Homogeneous(laminate.Material{E1: 62e9, E2: 60e9, G12: 4.2e9, Nu12: 0.06, G13: 3.2e9, G23: 3.1e9, Density: 1550}, thickness, angle)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func unsymmetric(t *testing.T, angle float64) laminate.Section {
	t.Helper()
	ud := laminate.Material{E1: 128e9, E2: 8.5e9, G12: 4.5e9, Nu12: 0.3, G13: 4.5e9, G23: 3.2e9, Density: 1580}
	glass := laminate.Material{E1: 38e9, E2: 9e9, G12: 3.6e9, Nu12: 0.3, G13: 3.6e9, G23: 3e9, Density: 1950}
	s, err := laminate.Stack([]laminate.Ply{{Material: ud, Thickness: 0.01, Angle: angle}, {Material: glass, Thickness: 0.02, Angle: angle + 0.8}})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Row C-ELEMENT-RIGID: six zero eigenvalues, and no seventh. The matrix is scaled to comparable
// diagonals first, so that a thin plate's small bending stiffness is not taken for zero.
func TestSixRigidMotions(t *testing.T) {
	want := known.One(t, "C_shells.json", "C-ELEMENT-RIGID").Value(t, "count")
	eachType(t, func(t *testing.T, kind element.Type) {
		for name, grid := range shapes(kind.Describe().Nodes == 6) {
			for _, thickness := range []float64{0.1, 1e-3} {
				md := newModel(t, kind, grid, woven(t, thickness, 0.4))
				n, _ := md.k.Dims()
				scaled := mat.NewSymDense(n, nil)
				for i := range n {
					for j := range i + 1 {
						scaled.SetSym(i, j, md.k.At(i, j)/math.Sqrt(md.k.At(i, i)*md.k.At(j, j)))
					}
				}
				var eig mat.EigenSym
				if !eig.Factorize(scaled, false) {
					t.Fatal("no eigenvalues")
				}
				values := eig.Values(nil)
				zero := 0.0
				for _, v := range values {
					if math.Abs(v) < 1e-9*values[n-1] {
						zero++
					}
				}
				if zero != want || values[0] < -1e-9 {
					t.Errorf("%s, thickness %g: %v zero eigenvalues, lowest %v", name, thickness, zero, values[:8])
				}
			}
		}
	})
}

// Motions of the whole element, for rigid-body checks: translation or turn c about the origin.
func rigid(c int, x, y float64) [6]float64 {
	var m [6]float64
	m[c] = 1
	switch c {
	case 3:
		m[2] = y
	case 4:
		m[2] = -x
	case 5:
		m[0], m[1] = -y, x
	}
	return m
}

// Total mass, first moments and rotary inertia about every axis, as the integral over the plate.
func TestMassOfRigidMotions(t *testing.T) {
	section := unsymmetric(t, 0)
	eachType(t, func(t *testing.T, kind element.Type) {
		md := newModel(t, kind, known.Rectangle(0.3, 0.2, 3, 2, 0.2), section)
		const a, b = 0.3, 0.2
		area := a * b
		// ∫ of the square of the velocity of rigid motion c over the plate: the drilling turn has no
		// rotary inertia of its own.
		want := []float64{
			section.Mass * area, section.Mass * area, section.Mass * area,
			section.Mass*a*b*b*b/3 + section.Rotary*area,
			section.Mass*b*a*a*a/3 + section.Rotary*area,
			section.Mass * (a*b*b*b + b*a*a*a) / 3,
		}
		n, _ := md.m.Dims()
		for c := range 6 {
			u := mat.NewVecDense(n, nil)
			for i := range n / 6 {
				for j, v := range rigid(c, md.grid.Points[i][0], md.grid.Points[i][1]) {
					u.SetVec(6*i+j, v)
				}
			}
			if got := mat.Inner(u, md.m, u); math.Abs(got-want[c]) > 1e-12*want[c] {
				t.Errorf("inertia of rigid motion %d is %.12g, want %.12g", c, got, want[c])
			}
		}
		// Coupling: a forward push of an unsymmetric plate turns it about y.
		u, v := mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
		for i := range n / 6 {
			u.SetVec(6*i, 1)
			v.SetVec(6*i+4, 1)
		}
		if got, want := mat.Inner(u, md.m, v), section.Coupling*area; math.Abs(got-want) > 1e-12*math.Abs(want) {
			t.Errorf("coupling inertia %g, want %g", got, want)
		}
	})
}

// ½ uᵀKu is the sum of the energies by kind, for any motion of any shape.
func TestEnergiesAddUp(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 5))
	eachType(t, func(t *testing.T, kind element.Type) {
		for name, grid := range shapes(kind.Describe().Nodes == 6) {
			md := newModel(t, kind, grid, unsymmetric(t, 0.3))
			n, _ := md.k.Dims()
			u := make([]float64, n)
			for i := range u {
				u[i] = rng.NormFloat64()
			}
			v := mat.NewVecDense(n, u)
			want, got := mat.Inner(v, md.k, v)/2, 0.0
			for _, e := range md.energies(u, nil) {
				got += e
			}
			if math.Abs(got-want) > 1e-11*want {
				t.Errorf("%s: energies add up to %.12g, want %.12g", name, got, want)
			}
		}
	})
}

// The matrices do not know which corner comes first, nor where the axes of the frame point.
func TestNumberingAndAxes(t *testing.T) {
	eachType(t, func(t *testing.T, kind element.Type) {
		nodes := kind.Describe().Nodes
		n := 6 * nodes
		for name, grid := range shapes(nodes == 6) {
			base := newModel(t, kind, grid, unsymmetric(t, 0.3))
			compare := func(what string, map6 func(i int) (int, [6]float64), other *model) {
				t.Helper()
				// Both matrices as quadratic forms over the same random motions.
				rng := rand.New(rand.NewPCG(8, 9))
				for range 4 {
					u, v := mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
					for i := range nodes {
						var m [6]float64
						for c := range m {
							m[c] = rng.NormFloat64()
							u.SetVec(6*i+c, m[c])
						}
						to, cs := map6(i)
						for _, off := range []int{0, 3} {
							v.SetVec(6*to+off, cs[0]*m[off]+cs[1]*m[off+1])
							v.SetVec(6*to+off+1, -cs[1]*m[off]+cs[0]*m[off+1])
							v.SetVec(6*to+off+2, m[off+2])
						}
					}
					for _, pair := range [][2]*mat.SymDense{{base.k, other.k}, {base.m, other.m}} {
						want, got := mat.Inner(u, pair[0], u), mat.Inner(v, pair[1], v)
						if math.Abs(got-want) > 1e-10*math.Abs(want) {
							t.Errorf("%s, %s: %.12g, was %.12g", name, what, got, want)
						}
					}
				}
			}
			// Next corner first.
			turn := [6]int{2, 0, 1, 5, 3, 4} // new place of each old node
			moved := &known.Grid{Points: make([][2]float64, len(grid.Points)), Corners: 3, Triangles: grid.Triangles}
			for i, p := range grid.Points {
				moved.Points[turn[i]] = p
			}
			compare("renumbered", func(i int) (int, [6]float64) { return turn[i], [6]float64{1, 0} }, newModel(t, kind, moved, base.section))
			// Axes turned by 0.7 rad: coordinates, section and motion all seen from them.
			s, c := math.Sincos(0.7)
			turned := &known.Grid{Points: slices.Clone(grid.Points), Corners: 3, Triangles: grid.Triangles}
			turned.Map(func(x, y float64) (float64, float64) { return c*x + s*y, -s*x + c*y })
			compare("turned", func(i int) (int, [6]float64) { return i, [6]float64{c, s} }, newModel(t, kind, turned, base.section.Turn(0.7)))
		}
	})
}

// Any number of threads gives the same bits, and of several bad elements the lowest is named.
func TestThreadsAndBadShapes(t *testing.T) {
	eachType(t, func(t *testing.T, kind element.Type) {
		nodes := kind.Describe().Nodes
		grid := known.Rectangle(0.3, 0.2, 14, 11, 0.2)
		batch := batchOf(grid, nodes, woven(t, 0.002, 0.1))
		count := batch.Count()
		one, many := element.NewMatrices(count, 6*nodes), element.NewMatrices(count, 6*nodes)
		if err := kind.Matrices(context.Background(), &batch, one); err != nil {
			t.Fatal(err)
		}
		batch.Threads = 7
		if err := kind.Matrices(context.Background(), &batch, many); err != nil {
			t.Fatal(err)
		}
		if !slices.Equal(one.Stiffness, many.Stiffness) || !slices.Equal(one.Mass, many.Mass) {
			t.Error("the number of threads changes the matrices")
		}
		for _, e := range []int{250, 71, 300} {
			at := batch.Nodes[3*nodes*e:]
			at[3], at[4], at[6], at[7] = at[6], at[7], at[3], at[4] // corners swapped
		}
		var bad *element.ShapeError
		if err := kind.Matrices(context.Background(), &batch, many); !errors.As(err, &bad) || bad.Element != 71 {
			t.Errorf("turned elements: got %v", err)
		}
		batch.Nodes[3*nodes*40+5] = 0.01
		if err := kind.Matrices(context.Background(), &batch, many); !errors.As(err, &bad) || bad.Element != 40 {
			t.Errorf("node off the plane: got %v", err)
		}
		gone, cancel := context.WithCancel(context.Background())
		cancel()
		if err := kind.Matrices(gone, &batch, many); !errors.Is(err, context.Canceled) {
			t.Errorf("cancelled: got %v", err)
		}
	})
}

func BenchmarkMatrices(b *testing.B) {
	for _, kind := range shell.Types() {
		b.Run(kind.Describe().Name, func(b *testing.B) {
			nodes := kind.Describe().Nodes
			s, err := laminate.Homogeneous(laminate.Isotropic(70e9, 0.33, 2700), 0.002, 0)
			if err != nil {
				b.Fatal(err)
			}
			batch := batchOf(known.Rectangle(0.3, 0.2, 20, 20, 0.2), nodes, s)
			out := element.NewMatrices(batch.Count(), 6*nodes)
			for b.Loop() {
				if err := kind.Matrices(context.Background(), &batch, out); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*batch.Count()), "ns/element")
		})
	}
}
