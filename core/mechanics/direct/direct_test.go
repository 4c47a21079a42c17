package direct_test

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/direct"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/rotor"
	"hushframe/core/numeric/sparse"
)

// bars is a bar along x with a motor at each end and a soft lossy mount in the
// middle that carries the gyro.
func bars(nodes int) *assembly.Problem {
	p := &assembly.Problem{Groups: []assembly.Group{{Name: "left", Kind: assembly.PartGroup}, {Name: "right", Kind: assembly.PartGroup}, {Name: "grommets", Kind: assembly.MountGroup}}}
	for i := range nodes {
		p.Nodes = append(p.Nodes, assembly.Vec{0.1 * float64(i-nodes/2) / float64(nodes/2), 0, 0})
	}
	for g := range 2 {
		part := assembly.BeamPart{Group: g, Section: beam.Rectangle(0.012, 0.005, 55e9, 0.3, 1550), Y: assembly.Vec{0, 1, 0}}
		for i := range nodes / 2 {
			at := int32(i + g*(nodes/2))
			part.Elements = append(part.Elements, [2]int32{at, at + 1})
		}
		p.Beams = append(p.Beams, part)
	}
	body := func(name string, node int32, mass, height float64, inertia float64) {
		b := assembly.Body{Name: name, Inertia: []assembly.Inertia{{Mass: mass, Centre: assembly.Vec{0, 0, height}, Tensor: [6]float64{inertia, inertia, 1.5 * inertia}}}}
		if node >= 0 {
			b.Nodes = []int32{node}
			b.Inertia[0].Centre = assembly.Vec{p.Nodes[node][0], 0, height}
		}
		p.Bodies = append(p.Bodies, b)
	}
	body("a", 0, 0.032, 0.01, 4e-6)
	body("b", int32(nodes-1), 0.032, 0.01, 4e-6)
	body("stack", -1, 0.026, 0.008, 8e-6)
	body("pad", int32(nodes/2), 0.002, 0, 1e-7)
	for _, q := range [][2]float64{{1, 1}, {-1, 1}, {-1, -1}, {1, -1}} {
		p.Springs = append(p.Springs, assembly.Spring{Group: 2, A: 3, B: 2, Point: assembly.Vec{0.015 * q[0], 0.015 * q[1], 0.004}, Axes: assembly.Global, Stiffness: [6]float64{2e4, 2e4, 4e4}})
	}
	return p
}

var (
	eta    = []float64{0.01, 0.02, 0.6}
	rotors = []airframe.Rotor{
		{Name: "a", Hub: airframe.Vec{-0.1, 0, 0.02}, Axis: airframe.Vec{0, 0, 1}, Spin: 1, PolarInertia: 6e-6},
		{Name: "b", Hub: airframe.Vec{0.1, 0, 0.02}, Axis: airframe.Vec{0, 0.6, 0.8}, Spin: -1, PolarInertia: 6e-6},
	}
	speeds = []float64{1700, 2400}
)

func frame(s *assembly.System) (*direct.Frame, direct.Place, []direct.Place) {
	f := &direct.Frame{System: s, Complex: func(g int, _ float64) complex128 { return complex(1, eta[g]) }}
	var at []direct.Place
	for i, r := range rotors {
		e1, e2 := rotor.Square(r.Axis)
		p := direct.Place{Body: i, Point: r.Hub}
		at = append(at, p)
		f.Spins = append(f.Spins, direct.Spin{Place: p, First: e1, Second: e2, Momentum: rotor.Momentum(r, speeds[i])})
	}
	return f, direct.Place{Body: 2, Point: assembly.Vec{0, 0, 0.01}}, at
}

func assembled(t testing.TB, nodes int) *assembly.System {
	t.Helper()
	s, err := assembly.Assemble(context.Background(), bars(nodes), 1)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// The answer is that of the equations written out and solved by elimination, real and
// imaginary parts as one real system.
func TestAnswerIsThatOfTheEquationsWrittenOut(t *testing.T) {
	s := assembled(t, 9)
	f, gyro, at := frame(s)
	n := s.N
	for _, hz := range []float64{1, 90, 233, 480} {
		omega := 2 * math.Pi * hz
		a := mat.NewDense(2*n, 2*n, nil)
		put := func(i, j int, re, im float64) {
			for _, x := range []struct {
				i, j int
				v    float64
			}{{i, j, re}, {n + i, n + j, re}, {i, n + j, -im}, {n + i, j, im}} {
				a.Set(x.i, x.j, a.At(x.i, x.j)+x.v)
			}
		}
		for g := range eta {
			weights := make([]float64, len(eta))
			weights[g] = 1
			k := s.Weighted(weights, 1)
			for i := range n {
				for j := range n {
					put(i, j, k.At(i, j), eta[g]*k.At(i, j))
				}
			}
		}
		for i := range n {
			for j := range n {
				put(i, j, -omega*omega*s.M.At(i, j), 0)
			}
		}
		for r, spin := range f.Spins {
			tilt := func(axis assembly.Vec) []float64 {
				y := make([]float64, n)
				s.Load(y, r, at[r].Point, [6]float64{3: axis[0], 4: axis[1], 5: axis[2]})
				return y
			}
			one, two := tilt(spin.First), tilt(spin.Second)
			h := rotor.Momentum(rotors[r], speeds[r])
			for i := range n {
				for j := range n {
					put(i, j, 0, omega*h*(one[i]*two[j]-two[i]*one[j]))
				}
			}
		}
		sides := mat.NewDense(2*n, 12, nil)
		for r := range at {
			for c := range 6 {
				y := make([]float64, n)
				var unit [6]float64
				unit[c] = 1
				s.Load(y, r, at[r].Point, unit)
				for i, v := range y {
					sides.Set(i, 6*r+c, v)
				}
			}
		}
		var u mat.Dense
		if err := u.Solve(a, sides); err != nil {
			t.Fatal(err)
		}
		got, err := f.Rates(t.Context(), hz, gyro, at, 2)
		if err != nil {
			t.Fatal(err)
		}
		if !(got.Change <= 1e-7) || got.Steps < 1 {
			t.Errorf("%g Hz: change %g after %d steps", hz, got.Change, got.Steps)
		}
		for r := range at {
			for c := range 6 {
				part := func(from int) []float64 {
					y := make([]float64, n)
					for i := range y {
						y[i] = u.At(from+i, 6*r+c)
					}
					return y
				}
				re, im := s.Motion(gyro.Body, gyro.Point, part(0)), s.Motion(gyro.Body, gyro.Point, part(n))
				for axis := range 3 {
					want := complex(0, omega) * complex(re[3+axis], im[3+axis])
					if d := cmplx.Abs(got.Rate[axis][r][c] - want); d > 1e-7*cmplx.Abs(want)+1e-9 {
						t.Errorf("%g Hz, axis %d, rotor %d, component %d: %v, want %v", hz, axis, r, c, got.Rate[axis][r][c], want)
					}
				}
			}
		}
	}
}

// Weights of one give the stiffness; groups do not mix: of any motion, the matrix of a group stores what the energies
// say of that group, which are computed without it.
func TestWeightedStiffness(t *testing.T) {
	s := assembled(t, 9)
	ones := s.Weighted([]float64{1, 1, 1}, 1)
	mixed := s.Weighted([]float64{2, 0, -1}, 2)
	a, b, c := s.Weighted([]float64{1, 0, 0}, 1), s.Weighted([]float64{0, 1, 0}, 1), s.Weighted([]float64{0, 0, 1}, 1)
	y, ky := make([]float64, s.N), make([]float64, s.N)
	for i := range y {
		y[i] = math.Sin(1.3*float64(i) + 0.2) // any motion
	}
	e, err := s.Energies(t.Context(), [][]float64{y}, 1)
	if err != nil {
		t.Fatal(err)
	}
	for g, m := range []*sparse.Symmetric{a, b, c} {
		got, want := 0.0, 0.0
		m.MulVec(ky, y)
		for i := range y {
			got += y[i] * ky[i] / 2
		}
		for _, v := range e.Strain[0][g] {
			want += v
		}
		if !(want > 0) || math.Abs(got/want-1) > 1e-9 {
			t.Errorf("group %d alone stores %g J, want %g", g, got, want)
		}
	}
	for k := range s.K.Val {
		scale := math.Abs(a.Val[k]) + math.Abs(b.Val[k]) + math.Abs(c.Val[k])
		if math.Abs(ones.Val[k]-s.K.Val[k]) > 1e-12*scale {
			t.Fatalf("entry %d is %g, want %g", k, ones.Val[k], s.K.Val[k])
		}
		if want := 2*a.Val[k] - c.Val[k]; math.Abs(mixed.Val[k]-want) > 1e-12*scale {
			t.Fatalf("entry %d is %g, want %g", k, mixed.Val[k], want)
		}
	}
}

// With every mode of a small model the modal response is the direct one to 1e-6;
// with few modes and residual vectors, to 1 %. The frame has a soft and lossy mount and
// spinning rotors, one of them with a tilted shaft.
func TestModalResponseIsTheDirectOne(t *testing.T) {
	places := []modal.Place{{Name: "a", Kind: "rotor", Body: 0, Point: rotors[0].Hub}, {Name: "b", Kind: "rotor", Body: 1, Point: rotors[1].Hub}, {Name: "stack", Kind: "gyro", Body: 2, Point: assembly.Vec{0, 0, 0.01}}}
	worst := map[string]float64{}
	for name, upTo := range map[string]float64{"all": 1e6, "few": 750} {
		s := assembled(t, map[string]int{"all": 9, "few": 41}[name])
		f, gyro, at := frame(s)
		st, err := modal.Build(t.Context(), s, places, modal.Options{UpTo: upTo, Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		modes := 0
		for _, kind := range st.Basis.Kinds {
			if kind != modal.Residual {
				modes++
			}
		}
		if name == "all" && modes != s.N || name == "few" && len(st.Basis.Kinds) > s.N/3 {
			t.Fatalf("%s: %d modes of %d", name, modes, s.N)
		}
		for g := range st.Basis.Groups {
			st.Basis.Groups[g].LossFactor = eta[g]
		}
		couplings, err := rotor.Couplings(st.Basis, rotors, speeds)
		if err != nil {
			t.Fatal(err)
		}
		for _, drop := range []bool{false, true} {
			label := name
			if drop {
				label += " alone"
			}
			sys, err := forced.New(st.Basis, forced.Options{Gyroscopic: couplings, DropResidual: drop})
			if err != nil {
				t.Fatal(err)
			}
			frequency := []float64{20, 110, 260, 340, 500}
			tr, err := sys.Transfer(t.Context(), frequency, 1)
			if err != nil {
				t.Fatal(err)
			}
			for k, hz := range frequency {
				want, err := f.Rates(t.Context(), hz, gyro, at, 1)
				if err != nil {
					t.Fatal(err)
				}
				for axis := range 3 {
					for _, moment := range []bool{false, true} {
						off, size := 0.0, 0.0
						for j, in := range sys.Inputs() {
							if in.Moment() == moment {
								w := want.Rate[axis][j/6][in.Component]
								off, size = math.Hypot(off, cmplx.Abs(tr.Rate[axis][j][k]-w)), math.Hypot(size, cmplx.Abs(w))
							}
						}
						worst[label] = max(worst[label], off/size)
					}
				}
			}
		}
	}
	t.Logf("worst errors %v", worst)
	if !(worst["all"] < 1e-6) {
		t.Errorf("with all modes the modal response is off by %.2g", worst["all"])
	}
	if !(worst["few"] < 0.01) {
		t.Errorf("with few modes and residual vectors it is off by %.2g", worst["few"])
	}
	if !(worst["few alone"] > 5*worst["few"]) {
		t.Errorf("residual vectors make no difference: %.2g without", worst["few alone"])
	}
}

func TestSolvesThatCannotBe(t *testing.T) {
	s := assembled(t, 9)
	f, gyro, at := frame(s)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := f.Rates(ctx, 100, gyro, at, 1); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
	f.Complex = func(int, float64) complex128 { return cmplx.NaN() }
	if _, err := f.Rates(context.Background(), 100, gyro, at, 1); err == nil || !strings.Contains(err.Error(), "left") {
		t.Errorf("a stiffness that is no number: %v", err)
	}
}
