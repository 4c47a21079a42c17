package sparse_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"hushframe/core/numeric/sparse"
)

// randomElements makes elements of two to six unknowns of n, some left out and some repeated, and their packed matrices.
func randomElements(r *rand.Rand, n, count int) (elements [][]int32, packed [][]float64) {
	for range count {
		size := 2 + r.IntN(5)
		e := make([]int32, size)
		for i := range e {
			e[i] = int32(r.IntN(n+1)) - 1
		}
		p := make([]float64, size*(size+1)/2)
		for i := range p {
			p[i] = 2*r.Float64() - 1
		}
		elements, packed = append(elements, e), append(packed, p)
	}
	return elements, packed
}

// full adds elements into a dense matrix, entry by entry of both triangles.
func full(n int, elements [][]int32, packed [][]float64) []float64 {
	out := make([]float64, n*n)
	for e, unknowns := range elements {
		for a, i := range unknowns {
			for b, j := range unknowns {
				hi, lo := max(a, b), min(a, b)
				if i >= 0 && j >= 0 {
					out[int(i)*n+int(j)] += packed[e][hi*(hi+1)/2+lo]
				}
			}
		}
	}
	return out
}

func TestAssemblerAgreesWithDenseSum(t *testing.T) {
	const n = 40
	r := rand.New(rand.NewPCG(2, 1))
	elements, packed := randomElements(r, n, 70)
	want := full(n, elements, packed)
	a := sparse.NewAssembler(n, elements)
	b := a.Fork()
	for e := range elements {
		a.Add(e, packed[e])
	}
	s := a.Matrix()
	if err := s.Check(); err != nil {
		t.Fatal(err)
	}
	for i := range n {
		for j := range n {
			if got := s.At(i, j); math.Abs(got-want[i*n+j]) > 1e-14 {
				t.Fatalf("entry (%d, %d) is %g, want %g", i, j, got, want[i*n+j])
			}
		}
	}
	// The other ways to the same sums give the same bits, and a matrix handed over is not added to.
	for threads := 1; threads <= 3; threads++ {
		b.AddAll(threads, func(e int, _ []float64) []float64 { return packed[e] })
		if got := b.Matrix(); !slices.Equal(got.Val, s.Val) {
			t.Errorf("%d threads: sums differ", threads)
		}
	}
	before := slices.Clone(s.Val)
	a.Add(0, packed[0])
	if !slices.Equal(before, s.Val) {
		t.Error("a matrix handed over was changed")
	}
}

func TestProductsAgreeWithDense(t *testing.T) {
	const n, nvec = 30, 7
	r := rand.New(rand.NewPCG(2, 2))
	elements, packed := randomElements(r, n, 50)
	want := full(n, elements, packed)
	a := sparse.NewAssembler(n, elements)
	for e := range elements {
		a.Add(e, packed[e])
	}
	s := a.Matrix()
	x, y, single := make([]float64, n*nvec), make([]float64, n*nvec), make([]float64, n)
	for i := range x {
		x[i] = r.Float64()
	}
	s.MulBlock(y, x, nvec)
	for v := range nvec {
		s.MulVec(single, x[v*n:][:n])
		if !slices.Equal(single, y[v*n:][:n]) {
			t.Errorf("vector %d: MulBlock and MulVec differ", v)
		}
		for i := range n {
			sum := 0.0
			for j := range n {
				sum += want[i*n+j] * x[v*n+j]
			}
			if math.Abs(sum-single[i]) > 1e-13 {
				t.Fatalf("vector %d component %d: %g, want %g", v, i, single[i], sum)
			}
		}
	}
}

func TestCombineUnitesPatterns(t *testing.T) {
	const n = 25
	r := rand.New(rand.NewPCG(2, 3))
	make1 := func() (*sparse.Symmetric, []float64) {
		elements, packed := randomElements(r, n, 12)
		a := sparse.NewAssembler(n, elements)
		for e := range elements {
			a.Add(e, packed[e])
		}
		return a.Matrix(), full(n, elements, packed)
	}
	a, fa := make1()
	b, fb := make1()
	for _, s := range []*sparse.Symmetric{sparse.Combine(2, a, -3, b), sparse.Combine(2, a, -3, b).DropZeros()} {
		if err := s.Check(); err != nil {
			t.Fatal(err)
		}
		for i := range n {
			for j := range n {
				if want := 2*fa[i*n+j] - 3*fb[i*n+j]; math.Abs(s.At(i, j)-want) > 1e-13 {
					t.Fatalf("entry (%d, %d) is %g, want %g", i, j, s.At(i, j), want)
				}
			}
		}
	}
	if same := sparse.Combine(1, a, 1, a); &same.Row[0] != &a.Row[0] {
		t.Error("matrices of one pattern do not keep it")
	}
}

func TestDropZerosKeepsDiagonal(t *testing.T) {
	a := sparse.NewAssembler(3, [][]int32{{0, 1, 2}})
	a.Add(0, []float64{1, 0, 0, 0, 0, 5})
	s := a.Matrix().DropZeros()
	if err := s.Check(); err != nil {
		t.Fatal(err)
	}
	if len(s.Val) != 3 || s.At(0, 0) != 1 || s.At(1, 1) != 0 || s.At(2, 2) != 5 {
		t.Errorf("values %v", s.Val)
	}
}

func TestCheckNamesTheFault(t *testing.T) {
	good := func() *sparse.Symmetric {
		return &sparse.Symmetric{N: 2, Ptr: []int{0, 2, 3}, Row: []int32{0, 1, 1}, Val: []float64{1, 2, 3}}
	}
	if err := good().Check(); err != nil {
		t.Fatal(err)
	}
	for want, spoil := range map[string]func(*sparse.Symmetric){
		"(1, 0) is NaN":               func(s *sparse.Symmetric) { s.Val[1] = math.NaN() },
		"2 values for 3":              func(s *sparse.Symmetric) { s.Val = s.Val[:2] },
		"column 1 does not begin":     func(s *sparse.Symmetric) { s.Row[2] = 0 },
		"rows of column 0 do not":     func(s *sparse.Symmetric) { s.Row[1] = 2 },
		"column 0 is empty":           func(s *sparse.Symmetric) { s.Ptr[1] = 0 },
		"order 2 has 2 column starts": func(s *sparse.Symmetric) { s.Ptr = s.Ptr[:2] },
	} {
		s := good()
		spoil(s)
		if err := s.Check(); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %q", err, want)
		}
	}
}
