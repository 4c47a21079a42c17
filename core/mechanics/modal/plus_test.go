package modal_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/known/cases"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/modal"
	"hushframe/core/numeric/sparse"
)

// Rows C-PLUS-*: the frequencies, and what every basis must be.
func TestPlusFrames(t *testing.T) {
	for _, row := range known.Rows(t, "C_shells.json", "C-PLUS-") {
		var c cases.PlusFrame
		row.Decode(t, &c)
		p, places := c.Problem(t, 1.0/4)
		s, err := assembly.Assemble(context.Background(), p, 2)
		if err != nil {
			t.Fatal(err)
		}
		st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: 1.02 * row.Values[len(row.Values)-1], Threads: 2})
		if err != nil {
			t.Fatal(err)
		}
		var got []float64
		for v, kind := range st.Basis.Kinds {
			if kind == modal.Elastic {
				got = append(got, st.Basis.Frequency[v])
			}
		}
		t.Logf("%s: %d unknowns, %d vectors, rigid ratio %.1g, %.6g Hz, notes %q", row.ID, s.N, len(st.Basis.Kinds), st.RigidRatio, got, st.Notes)
		row.Check(t, 0.5, got[:len(row.Values)]...)
		if !st.Proved {
			t.Errorf("row %s: no proof that all modes were found", row.ID)
		}
		checkBasis(t, row.ID, st, s)
	}
}

// checkBasis holds M-orthonormality, K-orthogonality by groups, and shares that add up.
func checkBasis(t *testing.T, id string, st *modal.Structure, s *assembly.System) {
	t.Helper()
	n := len(st.Basis.Kinds)
	sum := make([]float64, n*n)
	for _, g := range st.Basis.Groups {
		for i, v := range g.Stiffness {
			sum[i] += v
		}
	}
	for i := range n {
		wi := 2 * math.Pi * st.Basis.Frequency[i]
		for j := range n {
			wj := 2 * math.Pi * st.Basis.Frequency[j]
			want := 0.0
			if i == j {
				want = wi * wi
			}
			if math.Abs(sum[i*n+j]-want) > 1e-6*max(wi*wj, 1) {
				t.Fatalf("row %s: φ_%d K φ_%d = %g, want %g (%s, %s)", id, i, j, sum[i*n+j], want, st.Basis.Kinds[i], st.Basis.Kinds[j])
			}
		}
	}
	for m := range st.Strain {
		strain, kinetic := 0.0, 0.0
		for _, g := range st.Strain[m] {
			for _, v := range g {
				strain += v
			}
		}
		for _, v := range st.Kinetic[m] {
			kinetic += v
		}
		if math.Abs(strain-1) > 1e-12 || math.Abs(kinetic-1) > 1e-12 {
			t.Errorf("row %s: mode %d: shares add up to %g and %g", id, m+1, strain, kinetic)
		}
	}
}

// The basis answers forces at the rotors as the full matrices do, between the modes of the band and
// close to zero, though it holds few modes: residual vectors stand in for the others. Compared with a
// direct solve of (K - ω²M) x = f at the hub that carries the gyro, and at the driven motor itself.
func TestResidualVectors(t *testing.T) {
	row := known.One(t, "C_shells.json", "C-PLUS-MOTORS-CARBON")
	var c cases.PlusFrame
	row.Decode(t, &c)
	p, places := c.Problem(t, 1.0/2)
	// The hub hangs on a soft mount instead, so that the mount's own flexibility matters.
	const hub = 4
	p.Bodies = append(p.Bodies, assembly.Body{Name: "pad", Nodes: p.Bodies[hub].Nodes})
	p.Bodies[hub].Nodes = nil
	p.Groups = append(p.Groups, assembly.Group{Name: "grommets", Kind: assembly.MountGroup})
	for _, q := range [][2]float64{{1, 1}, {-1, 1}, {-1, -1}, {1, -1}} {
		p.Springs = append(p.Springs, assembly.Spring{Group: 1, A: len(p.Bodies) - 1, B: hub,
			Point: assembly.Vec{0.015 * q[0], 0.015 * q[1], 0.004}, Axes: assembly.Global, Stiffness: [6]float64{1e5, 1e5, 2e5}})
	}
	s, err := assembly.Assemble(context.Background(), p, 2)
	if err != nil {
		t.Fatal(err)
	}
	st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: 450, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	checkBasis(t, row.ID, st, s)
	order := s.Ordering()
	worst, without := 0.0, 0.0
	for _, f := range []float64{3, 130, 270, 299} {
		w2 := 4 * math.Pi * math.Pi * f * f
		factor, err := sparse.Factorise(sparse.Combine(1, s.K, -w2, s.M), order, 2)
		if err != nil {
			t.Fatal(err)
		}
		for comp := range 6 {
			x := make([]float64, s.N)
			var force [6]float64
			force[comp] = 1
			s.Load(x, places[0].Body, places[0].Point, force)
			factor.Solve(x, 1)
			for _, at := range []int{0, hub} {
				want := s.Motion(places[at].Body, places[at].Point, x)
				var got, few [6]float64
				for v, kind := range st.Basis.Kinds {
					wv := 2 * math.Pi * st.Basis.Frequency[v]
					q := st.Basis.Sites[0].Motion[v][comp] / (wv*wv - w2)
					for k := range 6 {
						got[k] += q * st.Basis.Sites[at].Motion[v][k]
						if kind != modal.Residual {
							few[k] += q * st.Basis.Sites[at].Motion[v][k]
						}
					}
				}
				for _, half := range [][2]int{{0, 3}, {3, 6}} {
					size, err, plain := 0.0, 0.0, 0.0
					for k := half[0]; k < half[1]; k++ {
						size = max(size, math.Abs(want[k]))
						err = max(err, math.Abs(got[k]-want[k]))
						plain = max(plain, math.Abs(few[k]-want[k]))
					}
					worst, without = max(worst, err/size), max(without, plain/size)
				}
			}
		}
	}
	t.Logf("worst error %.2g with residual vectors, %.2g without", worst, without)
	if !(worst < 0.01) {
		t.Errorf("the basis is off by %.2g of the direct solution", worst)
	}
	if !(without > 5*worst) {
		t.Errorf("residual vectors make no difference: %.2g without", without)
	}
}
