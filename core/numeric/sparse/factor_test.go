package sparse_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

// randomSymmetric is a random sparse symmetric matrix, indefinite.
func randomSymmetric(r *rand.Rand, n, elements int) *sparse.Symmetric {
	e, packed := randomElements(r, n, elements)
	a := sparse.NewAssembler(n, e)
	for k := range e {
		a.Add(k, packed[k])
	}
	return a.Matrix()
}

func randomOrder(r *rand.Rand, n int) sparse.Ordering {
	o := make(sparse.Ordering, n)
	for k, u := range r.Perm(n) {
		o[k] = int32(u)
	}
	return o
}

// solves checks solutions against gonum's dense LU.
func solves(t *testing.T, s *sparse.Symmetric, f *sparse.Factor, tol float64) {
	t.Helper()
	const nrhs = 6
	b := mat.NewDense(s.N, nrhs, nil)
	x := make([]float64, s.N*nrhs)
	r := rand.New(rand.NewPCG(4, 1))
	for i := range s.N {
		for v := range nrhs {
			x[v*s.N+i] = r.Float64() - 0.5
			b.Set(i, v, x[v*s.N+i])
		}
	}
	f.Solve(x, nrhs)
	var want mat.Dense
	if err := want.Solve(trial.Full(s), b); err != nil {
		t.Fatal(err)
	}
	size := mat.Norm(&want, math.Inf(1))
	for v := range nrhs {
		for i := range s.N {
			if math.Abs(x[v*s.N+i]-want.At(i, v)) > tol*size {
				t.Fatalf("right-hand side %d component %d: %g, want %g", v, i, x[v*s.N+i], want.At(i, v))
			}
		}
	}
}

func TestDefiniteAgreesWithDense(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 2))
	for n := 1; n < 120; n += 17 {
		a := randomSymmetric(r, n, n)
		for j := range n {
			a.Val[a.Ptr[j]] += 12
		}
		for _, o := range []sparse.Ordering{sparse.MinimumDegree(a.Pattern()), randomOrder(r, n)} {
			f, err := sparse.Factorise(a, o, 2)
			if err != nil {
				t.Fatal(err)
			}
			solves(t, a, f, 1e-11)
			if neg, zero, pos := f.Inertia(); neg != 0 || zero != 0 || pos != n {
				t.Errorf("n %d: inertia %d %d %d", n, neg, zero, pos)
			}
		}
	}
}

// The shift walks through the spectrum; the signs of the dense eigenvalues are the reference.
func TestInertiaAgreesWithDenseEigenvalues(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 3))
	const n = 90
	a := randomSymmetric(r, n, 120)
	var e mat.EigenSym
	if !e.Factorize(trial.Full(a), false) {
		t.Fatal("dense eigenvalues failed")
	}
	values := e.Values(nil)
	order := sparse.MinimumDegree(a.Pattern())
	for k := 0; k+1 < n; k++ {
		if values[k+1]-values[k] < 1e-9 {
			continue
		}
		f, err := sparse.Factorise(sparse.Combine(1, a, -(values[k]+values[k+1])/2, trial.Identity(n)), order, 1)
		if err != nil {
			t.Fatal(err)
		}
		if neg, zero, pos := f.Inertia(); neg != k+1 || zero != 0 || pos != n-k-1 {
			t.Errorf("between %g and %g: inertia %d %d %d, want %d negative", values[k], values[k+1], neg, zero, pos, k+1)
		}
	}
}

// One dense block has all its pivots inside one supernode of several panels, where pivoting is complete.
func TestIndefiniteDenseBlockIsStable(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	const n = 170
	e := [][]int32{make([]int32, n)}
	for i := range e[0] {
		e[0][i] = int32(i)
	}
	packed := make([]float64, n*(n+1)/2)
	for i := range n {
		for j := range i {
			packed[i*(i+1)/2+j] = r.NormFloat64()
		}
	}
	a := sparse.NewAssembler(n, e) // zero diagonal: every pivot is found off the diagonal or made by updates
	a.Add(0, packed)
	s := a.Matrix()
	f, err := sparse.Factorise(s, randomOrder(r, n), 2)
	if err != nil {
		t.Fatal(err)
	}
	solves(t, s, f, 1e-10)
	var eig mat.EigenSym
	eig.Factorize(trial.Full(s), false)
	want := 0
	for _, v := range eig.Values(nil) {
		if v < 0 {
			want++
		}
	}
	if neg, _, _ := f.Inertia(); neg != want || f.Stats.TwoByTwo == 0 {
		t.Errorf("%d negative, want %d; %d blocks of order two", neg, want, f.Stats.TwoByTwo)
	}
}

// The last pivot of a panel of 48 columns is nearly cancelled by the first, until a column of the next panel joins it.
func TestLonePivotAtPanelEndIsPutOff(t *testing.T) {
	const n = 60
	e := [][]int32{make([]int32, n)}
	for i := range e[0] {
		e[0][i] = int32(i)
	}
	packed := make([]float64, n*(n+1)/2)
	set := func(i, j int, v float64) { packed[i*(i+1)/2+j] = v }
	for i := range n {
		for j := range i {
			set(i, j, 1e-3/float64(1+i-j)) // couples all, so that there is one supernode
		}
		set(i, i, 2)
	}
	set(47, 0, 2)
	set(59, 47, 1)
	a := sparse.NewAssembler(n, e)
	a.Add(0, packed)
	s := a.Matrix()
	f, err := sparse.Factorise(s, e[0], 1)
	if err != nil {
		t.Fatal(err)
	}
	solves(t, s, f, 1e-13)
	if f.Stats.SmallestPivot < 1e-3 {
		t.Errorf("a pivot of %g was used", f.Stats.SmallestPivot)
	}
}

func TestShiftedLatticeSolves(t *testing.T) {
	l := trial.Sheet{Nx: 12, Ny: 8, Cell: 5e-3, Thick: 2e-3}.Lattice()
	order := sparse.Order(l.K.Pattern(), l.NodeOf, l.Coords)
	for _, shift := range []float64{-1e6, 1e9} { // below and inside the spectrum
		a := sparse.Combine(1, l.K, -shift, l.M)
		f, err := sparse.Factorise(a, order, 2)
		if err != nil {
			t.Fatal(err)
		}
		r := rand.New(rand.NewPCG(1, 2))
		x, b := make([]float64, 5*a.N), make([]float64, 5*a.N)
		for i := range x {
			x[i] = r.Float64() - 0.5
		}
		a.MulBlock(b, x, 5)
		f.Solve(b, 5)
		for i := range x {
			if math.Abs(x[i]-b[i]) > 1e-6 {
				t.Fatalf("shift %g: component %d is %g, want %g", shift, i, b[i], x[i])
			}
		}
	}
}

func TestThreadsChangeNoBit(t *testing.T) {
	l := trial.Sheet{Nx: 24, Ny: 20, Cell: 5e-3, Thick: 2e-3}.Lattice()
	an, err := sparse.Analyse(l.K.Pattern(), sparse.Order(l.K.Pattern(), l.NodeOf, l.Coords))
	if err != nil {
		t.Fatal(err)
	}
	const nrhs = 9
	b := make([]float64, nrhs*l.K.N)
	for i := range b {
		b[i] = math.Sin(float64(i))
	}
	for _, shift := range []float64{-1e6, 1e9} {
		a := sparse.Combine(1, l.K, -shift, l.M)
		var first []float64
		for _, threads := range []int{1, 2, 5} {
			f, err := an.Factorise(context.Background(), a, threads)
			if err != nil {
				t.Fatal(err)
			}
			x := slices.Clone(b)
			f.SolveThreads(x, nrhs, threads)
			if first == nil {
				first = x
			} else if !slices.Equal(first, x) {
				t.Errorf("shift %g: %d threads give other bits", shift, threads)
			}
		}
		// One right-hand side alone gets the bits it gets among others.
		f, err := an.Factorise(context.Background(), a, 1)
		if err != nil {
			t.Fatal(err)
		}
		alone := slices.Clone(b[5*l.K.N : 6*l.K.N])
		f.Solve(alone, 1)
		if !slices.Equal(alone, first[5*l.K.N:6*l.K.N]) {
			t.Errorf("shift %g: a right-hand side alone gets other bits", shift)
		}
	}
}

func TestSingularMatrixNamesUnknown(t *testing.T) {
	// Unknowns 0..9 are a chain held at one end, 10..19 one that is free to move.
	var elements [][]int32
	for i := range int32(19) {
		if i != 9 {
			elements = append(elements, []int32{i, i + 1})
		}
	}
	elements = append(elements, []int32{0, -1})
	a := sparse.NewAssembler(20, elements)
	for e := range elements {
		a.Add(e, []float64{1, -1, 1})
	}
	s := a.Matrix()
	_, err := sparse.Factorise(s, sparse.MinimumDegree(s.Pattern()), 1)
	var pivot *sparse.PivotError
	if !errors.As(err, &pivot) || pivot.Unknown < 10 {
		t.Errorf("got %v, want a pivot error for an unknown of the free chain", err)
	}
}

func TestUnheldUnknownAndNaNAreRefused(t *testing.T) {
	s := trial.Diagonal([]float64{1, 0, 2})
	_, err := sparse.Factorise(s, sparse.Ordering{0, 1, 2}, 1)
	var pivot *sparse.PivotError
	if !errors.As(err, &pivot) || pivot.Unknown != 1 {
		t.Errorf("got %v, want unknown 1", err)
	}
	s.Val[1] = math.NaN()
	if _, err = sparse.Factorise(s, sparse.Ordering{0, 1, 2}, 1); !errors.Is(err, sparse.ErrNotFinite) {
		t.Errorf("got %v, want ErrNotFinite", err)
	}
}

func TestCancelledFactorisationStops(t *testing.T) {
	l := trial.Sheet{Nx: 6, Ny: 6, Cell: 5e-3, Thick: 2e-3}.Lattice()
	a := sparse.Combine(1, l.K, 1e6, l.M)
	an, err := sparse.Analyse(a.Pattern(), sparse.MinimumDegree(a.Pattern()))
	if err != nil {
		t.Fatal(err)
	}
	reason := errors.New("enough")
	ctx, cancel := context.WithCancelCause(context.Background())
	cancel(reason)
	if _, err := an.Factorise(ctx, a, 2); !errors.Is(err, reason) {
		t.Errorf("got %v, want the cause", err)
	}
}

func TestEmptyMatrix(t *testing.T) {
	s := sparse.NewAssembler(0, nil).Matrix()
	f, err := sparse.Factorise(s, nil, 2)
	if err != nil {
		t.Fatal(err)
	}
	f.Solve(nil, 3)
	if got := fmt.Sprint(f.Inertia()); got != "0 0 0" {
		t.Error(got)
	}
}
