package eigen_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

func lowest(t *testing.T, k, m *sparse.Symmetric, opt eigen.Options) *eigen.Result {
	t.Helper()
	order := sparse.MinimumDegree(sparse.Combine(1, k, 1, m).Pattern())
	res, err := eigen.Lowest(context.Background(), k, m, order, opt)
	if err != nil {
		t.Fatal(err)
	}
	return res
}

// sound checks what every result promises: order, norm, sign, and that K·φ = λ·M·φ holds to a part tol of the terms.
func sound(t *testing.T, k, m *sparse.Symmetric, res *eigen.Result, tol float64) {
	t.Helper()
	if !res.Status.Converged || !res.Status.Proved {
		t.Errorf("status %+v", res.Status)
	}
	if !slices.IsSorted(res.Values) {
		t.Errorf("values do not rise: %v", res.Values)
	}
	kx, mx := make([]float64, k.N), make([]float64, k.N)
	for i, x := range res.Vectors {
		m.MulVec(mx, x)
		k.MulVec(kx, x)
		for j := range i + 1 {
			sum := 0.0
			for u := range mx {
				sum += mx[u] * res.Vectors[j][u]
			}
			want := 0.0
			if i == j {
				want = 1
			}
			if math.Abs(sum-want) > 1e-12 {
				t.Errorf("vectors %d and %d: product %g", i, j, sum)
			}
		}
		left, size, most := 0.0, 0.0, 0.0
		for u := range kx {
			left += math.Pow(kx[u]-res.Values[i]*mx[u], 2)
			size += math.Pow((res.Values[i]-res.Shift)*mx[u], 2) + kx[u]*kx[u]
			if math.Abs(x[u]) > math.Abs(most) {
				most = x[u]
			}
		}
		if left > tol*tol*size {
			t.Errorf("pair %d: λ %g leaves %g of the terms", i, res.Values[i], math.Sqrt(left/size))
		}
		if most < 0 {
			t.Errorf("vector %d: largest component is %g", i, most)
		}
	}
}

func agree(t *testing.T, got, want []float64, tol float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%d values, want %d", len(got), len(want))
	}
	for i := range want {
		if math.Abs(got[i]-want[i]) > tol {
			t.Errorf("value %d is %.15g, want %.15g", i, got[i], want[i])
		}
	}
}

func TestFreeChainAgreesWithClosedForm(t *testing.T) {
	for _, n := range []int{1, 2, 3, 8, 50, 3000} {
		if n == 1 {
			res := lowest(t, trial.Diagonal([]float64{3}), trial.Diagonal([]float64{2}), eigen.Options{Modes: 1})
			agree(t, res.Values, []float64{1.5}, 1e-14)
			continue
		}
		k, want := trial.Chain(n)
		modes := min(n, 25)
		res := lowest(t, k, trial.Identity(n), eigen.Options{Modes: modes})
		agree(t, res.Values, want[:modes], 1e-13)
		sound(t, k, trial.Identity(n), res, 1e-8)
	}
}

// A square grid has repeated pairs all along the spectrum.
func TestGridPairsAreAllFound(t *testing.T) {
	k, want, _ := trial.Grid(40, 40)
	m := trial.Identity(k.N)
	for _, block := range []int{1, 2, 3, 8, 20} {
		res := lowest(t, k, m, eigen.Options{Modes: 30, Block: block})
		agree(t, res.Values, want[:30], 1e-12)
		sound(t, k, m, res, 1e-7)
	}
}

func TestLimitTakesAllBelow(t *testing.T) {
	k, want, _ := trial.Grid(30, 40)
	m := trial.Identity(k.N)
	for _, limit := range []float64{1e-3, 0.01, 0.05, 0.2, want[17]} { // the last is an eigenvalue itself
		count := 0
		for _, v := range want {
			if v <= limit*(1+1e-10) {
				count++
			}
		}
		res := lowest(t, k, m, eigen.Options{Limit: limit * (1 + 1e-10)})
		if res.Status.Attempts != 1 {
			t.Errorf("limit %g: the count beforehand was not made use of: %+v", limit, res.Status)
		}
		agree(t, res.Values, want[:count], 1e-12)
		sound(t, k, m, res, 1e-8)
		both := lowest(t, k, m, eigen.Options{Limit: limit * (1 + 1e-10), Modes: 5})
		agree(t, both.Values, want[:max(count, 5)], 1e-12)
	}
}

// Twelve equal chains make every eigenvalue twelvefold: blocks of two cannot see that, the count does.
func TestCountMendsMissedCopies(t *testing.T) {
	const copies, n = 12, 40
	var elements [][]int32
	for c := range int32(copies) {
		for i := range int32(n - 1) {
			elements = append(elements, []int32{c*n + i, c*n + i + 1})
		}
	}
	a := sparse.NewAssembler(copies*n, elements)
	for e := range elements {
		a.Add(e, []float64{1, -1, 1})
	}
	k, m := a.Matrix(), trial.Identity(copies*n)
	_, chain := trial.Chain(n)
	var want []float64
	for _, v := range chain[:3] {
		want = append(want, slices.Repeat([]float64{v}, copies)...)
	}
	// Counted beforehand, and after the search, when the factorisation at the shift has to be made again.
	for _, opt := range []eigen.Options{{Limit: (chain[2] + chain[3]) / 2, Block: 2}, {Modes: 3 * copies, Block: 2, Static: true}} {
		res := lowest(t, k, m, opt)
		agree(t, res.Values, want, 1e-12)
		sound(t, k, m, res, 1e-7)
		if res.Status.Attempts < 2 || !strings.Contains(strings.Join(res.Status.Notes, "\n"), "were missing") {
			t.Errorf("status %+v does not tell of a second search", res.Status)
		}
		if (res.Factor != nil) != opt.Static {
			t.Errorf("a factor %v, asked for %v", res.Factor != nil, opt.Static)
		}
	}
}

// randomPencil assembles random positive semi-definite element matrices.
func randomPencil(r *rand.Rand, n int) (k, m *sparse.Symmetric) {
	var elements [][]int32
	for i := range n {
		elements = append(elements, []int32{int32(i), int32((i + 1) % n), int32(r.IntN(n)), int32(r.IntN(n))})
	}
	a := sparse.NewAssembler(n, elements)
	b := a.Fork()
	for e := range elements {
		for _, target := range []*sparse.Assembler{a, b} {
			for range 2 {
				v := [4]float64{r.NormFloat64(), r.NormFloat64(), r.NormFloat64(), r.NormFloat64()}
				packed := make([]float64, 0, 10)
				for i := range 4 {
					for j := range i + 1 {
						packed = append(packed, v[i]*v[j])
					}
				}
				target.Add(e, packed)
			}
		}
	}
	return a.Matrix(), b.Matrix()
}

// denseValues solves K·x = λ·M·x for positive definite M by gonum's Cholesky factor and symmetric eigen-solver.
func denseValues(t *testing.T, k, m mat.Symmetric) []float64 {
	t.Helper()
	var chol mat.Cholesky
	if !chol.Factorize(m) {
		t.Fatal("M is not positive definite")
	}
	var l mat.TriDense
	chol.LTo(&l)
	var half, c mat.Dense
	if err := half.Solve(&l, k); err != nil {
		t.Fatal(err)
	}
	if err := c.Solve(&l, half.T()); err != nil {
		t.Fatal(err)
	}
	n := m.SymmetricDim()
	sym := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			sym.SetSym(i, j, (c.At(i, j)+c.At(j, i))/2)
		}
	}
	var e mat.EigenSym
	if !e.Factorize(sym, false) {
		t.Fatal("dense eigen-solver failed")
	}
	return e.Values(nil)
}

func TestRandomPencilsAgreeWithDense(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 1))
	for _, n := range []int{5, 12, 40, 150} {
		k, m := randomPencil(r, n)
		want := denseValues(t, trial.Full(k), trial.Full(m))
		modes := min(n, 20)
		res := lowest(t, k, m, eigen.Options{Modes: modes})
		agree(t, res.Values, want[:modes], 1e-9)
		sound(t, k, m, res, 1e-7)
	}
}

// Half of the unknowns have no mass. Condensing them exactly (R. Guyan, Reduction of stiffness and mass matrices, AIAA J.
// 3, 1965, which loses nothing then) leaves a definite dense problem.
func TestMasslessUnknownsAgreeWithCondensation(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 2))
	const n, heavy = 60, 30
	k, _ := randomPencil(r, n)
	mass := make([]float64, n)
	for i := range heavy {
		mass[2*i] = 0.5 + r.Float64()
	}
	m := trial.Diagonal(mass)
	kd := trial.Full(k)
	part := func(ri, rj int) *mat.Dense {
		d := mat.NewDense(heavy, heavy, nil)
		for i := range heavy {
			for j := range heavy {
				d.Set(i, j, kd.At(2*i+ri, 2*j+rj))
			}
		}
		return d
	}
	var inner, outer mat.Dense
	if err := inner.Solve(part(1, 1), part(1, 0)); err != nil {
		t.Fatal(err)
	}
	outer.Mul(part(0, 1), &inner)
	kc, mc := mat.NewSymDense(heavy, nil), mat.NewSymDense(heavy, nil)
	for i := range heavy {
		mc.SetSym(i, i, mass[2*i])
		for j := range i + 1 {
			kc.SetSym(i, j, kd.At(2*i, 2*j)-(outer.At(i, j)+outer.At(j, i))/2)
		}
	}
	want := denseValues(t, kc, mc)

	res := lowest(t, k, m, eigen.Options{Modes: 12})
	agree(t, res.Values, want[:12], 1e-9)
	sound(t, k, m, res, 1e-7)

	// More than exist: all thirty, and the status says so.
	all := lowest(t, k, m, eigen.Options{Modes: 45})
	agree(t, all.Values, want, 1e-8)
	if !all.Status.Exhausted || !all.Status.Converged {
		t.Errorf("status %+v", all.Status)
	}
}

func TestSheetHasSixRigidMotions(t *testing.T) {
	for _, massless := range []bool{false, true} {
		l := trial.Sheet{Nx: 12, Ny: 9, Cell: 5e-3, Thick: 2e-3, Massless: massless}.Lattice()
		free := lowest(t, l.K, l.M, eigen.Options{Modes: 20})
		sound(t, l.K, l.M, free, 1e-4) // of terms that for rigid motions are rounding themselves
		for i := range 6 {
			if math.Abs(free.Values[i]) > 1e-9*free.Values[6] {
				t.Errorf("rigid value %d is %g, first elastic %g", i, free.Values[i], free.Values[6])
			}
		}
		given := lowest(t, l.K, l.M, eigen.Options{Modes: 20, Rigid: l.Rigid()})
		sound(t, l.K, l.M, given, 1e-4)
		for i := range given.Values {
			if i < 6 && given.Values[i] != 0 || i >= 6 && math.Abs(given.Values[i]-free.Values[i]) > 1e-8*free.Values[i] {
				t.Errorf("value %d with rigid motions given is %g, without %g", i, given.Values[i], free.Values[i])
			}
		}
		// The computed null vectors span the rigid motions: in the norm of M nothing of those is left outside.
		mx := make([]float64, l.K.N)
		for c, r := range l.Rigid() {
			l.M.MulVec(mx, r)
			size, inside := 0.0, 0.0
			for u := range r {
				size += r[u] * mx[u]
			}
			for _, x := range free.Vectors[:6] {
				s := 0.0
				for u := range x {
					s += x[u] * mx[u]
				}
				inside += s * s
			}
			if math.Abs(inside-size) > 1e-10*size {
				t.Errorf("motion %d: %g of %g is spanned", c, inside, size)
			}
		}
	}
}

// The first guess of the shift goes by the size of the matrices; here it is far too near to zero (all values are above
// one), and far too low (one stiff spring lifts the scale).
func TestShiftFindsItsPlace(t *testing.T) {
	k, want := trial.Chain(2000)
	res := lowest(t, sparse.Combine(1, k, 1, trial.Identity(k.N)), trial.Identity(k.N), eigen.Options{Modes: 10})
	for i, v := range res.Values {
		if math.Abs(v-1-want[i]) > 1e-13 {
			t.Errorf("value %d is %.15g, want %.15g", i, v, 1+want[i])
		}
	}
	if -res.Shift < 0.01 {
		t.Errorf("shift %g stayed far from the first value: %v", res.Shift, res.Status.Notes)
	}

	a := sparse.NewAssembler(200, [][]int32{{198, 199}})
	a.Add(0, []float64{1e6, -1e6, 1e6})
	k, _ = trial.Chain(200)
	k = sparse.Combine(1e-3, k, 1, a.Matrix())
	res = lowest(t, k, trial.Identity(200), eigen.Options{Modes: 5})
	near := lowest(t, k, trial.Identity(200), eigen.Options{Modes: 5, Shift: -1e-6})
	agree(t, res.Values, near.Values, 1e-9) // of the stiff spring, rounding leaves some 1e-10
	if -res.Shift > 1e-3 {                  // the values of the chain alone reach to 4e-3
		t.Errorf("shift %g stayed far below the first value %g: %v", res.Shift, res.Values[1], res.Status.Notes)
	}
}

func TestThreadsChangeNoBit(t *testing.T) {
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(0))
	l := trial.Sheet{Nx: 20, Ny: 14, Cell: 5e-3, Thick: 2e-3}.Lattice()
	var first *eigen.Result
	for _, threads := range []int{1, 2, 3} {
		runtime.GOMAXPROCS(threads)
		res := lowest(t, l.K, l.M, eigen.Options{Modes: 15, Threads: threads})
		if first == nil {
			first = res
			continue
		}
		if !slices.Equal(first.Values, res.Values) || !slices.Equal(first.Residuals, res.Residuals) {
			t.Errorf("%d threads give other values", threads)
		}
		for i, x := range res.Vectors {
			if !slices.Equal(x, first.Vectors[i]) {
				t.Errorf("%d threads give another vector %d", threads, i)
			}
		}
	}
}

func TestFactorServesStaticSolutions(t *testing.T) {
	l := trial.Sheet{Nx: 6, Ny: 6, Cell: 5e-3, Thick: 2e-3}.Lattice()
	res := lowest(t, l.K, l.M, eigen.Options{Modes: 7, Static: true})
	x := make([]float64, l.K.N)
	x[17] = 1
	res.Factor.Solve(x, 1)
	b := make([]float64, l.K.N)
	sparse.Combine(1, l.K, -res.Shift, l.M).MulVec(b, x)
	for i, v := range b {
		want := 0.0
		if i == 17 {
			want = 1
		}
		if math.Abs(v-want) > 1e-6 {
			t.Errorf("component %d of (K-σM)·x is %g, want %g", i, v, want)
		}
	}
}

func TestProgressRisesToOne(t *testing.T) {
	k, _, _ := trial.Grid(20, 20)
	var told []float64
	lowest(t, k, trial.Identity(k.N), eigen.Options{Modes: 20, Progress: func(f float64) { told = append(told, f) }})
	if len(told) < 5 || !slices.IsSorted(told) || told[len(told)-1] != 1 {
		t.Errorf("progress %v", told)
	}
}

func TestCancelStopsWithCause(t *testing.T) {
	k, _, _ := trial.Grid(40, 40)
	reason := errors.New("enough")
	ctx, cancel := context.WithCancelCause(context.Background())
	opt := eigen.Options{Modes: 50, Progress: func(f float64) {
		if f > 0.41 {
			cancel(reason) // in the middle of the iteration
		}
	}}
	_, err := eigen.Lowest(ctx, k, trial.Identity(k.N), sparse.MinimumDegree(k.Pattern()), opt)
	if !errors.Is(err, reason) {
		t.Errorf("got %v, want the cause", err)
	}
}

func ExampleLowest() {
	// Three unit masses in a row, joined by two unit springs, free in space.
	a := sparse.NewAssembler(3, [][]int32{{0, 1}, {1, 2}})
	for e := range 2 {
		a.Add(e, []float64{1, -1, 1})
	}
	k := a.Matrix()
	res, err := eigen.Lowest(context.Background(), k, trial.Identity(3), sparse.MinimumDegree(k.Pattern()), eigen.Options{Limit: 2})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.6f, none missed: %v\n", math.Abs(res.Values[0]), res.Status.Proved)
	fmt.Printf("%.6f, end masses move by %.6f\n", res.Values[1], math.Abs(res.Vectors[1][0]))
	// Output:
	// 0.000000, none missed: true
	// 1.000000, end masses move by 0.707107
}
