package sparse_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"hushframe/core/numeric/sparse"
)

// Elements on nodes of several unknowns, over more columns than one goroutine takes at a time: the pattern and the sums are
// those of a map, for every number of threads. Some unknowns are left out, some occur twice, some nodes lie in no element.
func TestNodesInManyRanges(t *testing.T) {
	const nodes, per = 1100, 5
	r := rand.New(rand.NewPCG(6, 2))
	n := nodes * per
	var elements [][]int32
	var packed [][]float64
	for range 900 {
		var unknowns []int32
		first := r.IntN(nodes - 60)
		for range 3 {
			v := first + r.IntN(50)
			for c := range per {
				unknowns = append(unknowns, int32(v*per+c)) // a node may come twice
			}
		}
		unknowns[r.IntN(len(unknowns))] = -1
		p := make([]float64, len(unknowns)*(len(unknowns)+1)/2)
		for i := range p {
			p[i] = r.Float64() + 0.5
		}
		elements, packed = append(elements, unknowns), append(packed, p)
	}
	want := map[[2]int32]float64{}
	for u := range int32(n) {
		want[[2]int32{u, u}] = 0
	}
	for e, unknowns := range elements {
		for a, i := range unknowns {
			for b, j := range unknowns {
				if i >= j && j >= 0 {
					want[[2]int32{i, j}] += packed[e][max(a, b)*(max(a, b)+1)/2+min(a, b)]
				}
			}
		}
	}
	var first *sparse.Symmetric
	for threads := 1; threads <= 3; threads++ {
		a := sparse.NewAssemblerThreads(n, elements, threads)
		a.AddAll(threads, func(e int, p []float64) bool { return copy(p, packed[e]) > 0 })
		s := a.Matrix()
		if first != nil {
			if !slices.Equal(s.Ptr, first.Ptr) || !slices.Equal(s.Row, first.Row) || !slices.Equal(s.Val, first.Val) {
				t.Errorf("%d threads give another matrix", threads)
			}
			continue
		}
		first = s
		if err := s.Check(); err != nil {
			t.Fatal(err)
		}
		if len(s.Row) != len(want) {
			t.Fatalf("%d entries, want %d", len(s.Row), len(want))
		}
		for j := range n {
			for p := s.Ptr[j]; p < s.Ptr[j+1]; p++ {
				if v, ok := want[[2]int32{s.Row[p], int32(j)}]; !ok || math.Abs(v-s.Val[p]) > 1e-12 {
					t.Fatalf("entry (%d, %d) is %g, want %g", s.Row[p], j, s.Val[p], v)
				}
			}
		}
	}
}
