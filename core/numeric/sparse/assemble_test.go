package sparse_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"testing"

	"hushframe/core/numeric/sparse"
)

// Elements on nodes of several unknowns, over more columns than one goroutine takes at a time: the pattern and the sums are
// those of a map, for every number of threads. Some unknowns are left out, some occur twice, some nodes lie in no element.
func TestNodesInManyRanges(t *testing.T) {
	for _, per := range []int{1, 5, 6} {
		t.Run(strconv.Itoa(per), func(t *testing.T) { nodesInManyRanges(t, per) })
	}
}

func nodesInManyRanges(t *testing.T, per int) {
	const nodes = 1100
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
	lists := make([]sparse.Element, len(elements))
	for e := range elements {
		lists[e].Unknowns = elements[e]
	}
	var first *sparse.Symmetric
	for threads := 1; threads <= 3; threads++ {
		a := sparse.NewAssemblerThreads(n, lists, threads)
		a.AddAll(threads, func(e int, p []float64) []float64 {
			if e%2 == 0 {
				return packed[e]
			}
			copy(p, packed[e])
			return p
		})
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

// Elements of which only the first columns exist: the sums are those of a map, for every number of threads, and what is
// not coupled has no entry. Elements may name unknowns twice, in the columns, beyond them, or in both.
func TestLeadingColumns(t *testing.T) {
	for _, per := range []int{1, 4, 6} {
		t.Run(strconv.Itoa(per), func(t *testing.T) { leadingColumns(t, per) })
	}
}

func leadingColumns(t *testing.T, per int) {
	const nodes = 700
	r := rand.New(rand.NewPCG(6, 3))
	n := nodes * per
	var elements []sparse.Element
	var packed [][]float64
	type entry = [2]int32
	want := map[entry]float64{}
	for u := range int32(n) {
		want[entry{u, u}] = 0
	}
	for range 400 {
		var unknowns []int32
		first := r.IntN(nodes - 40)
		for range 2 + r.IntN(6) {
			v := first + r.IntN(30)
			for c := range per {
				unknowns = append(unknowns, int32(v*per+c))
			}
		}
		leading := per * r.IntN(3) // 0: all
		columns := leading
		if leading == 0 {
			columns = len(unknowns)
		}
		if r.IntN(3) == 0 {
			for c := range per {
				unknowns[len(unknowns)-per+c] = -1
			}
		}
		var p []float64
		for a, i := range unknowns {
			for c := range int32(a % per) {
				if i >= 0 {
					want[entry{i, i - c - 1}] += 0 // a node is a block
				}
			}
			for b, j := range unknowns[:min(a+1, columns)] {
				v := r.Float64() + 0.5
				p = append(p, v)
				switch {
				case i < 0 || j < 0:
				case i == j && a != b:
					want[entry{i, j}] += 2 * v
				default:
					want[entry{max(i, j), min(i, j)}] += v
				}
			}
		}
		elements, packed = append(elements, sparse.Element{Unknowns: unknowns, Leading: leading}), append(packed, p)
	}
	var first *sparse.Symmetric
	for threads := 1; threads <= 3; threads++ {
		a := sparse.NewAssemblerThreads(n, elements, threads)
		a.AddAll(threads, func(e int, _ []float64) []float64 {
			if e == 7 {
				return nil
			}
			return packed[e]
		})
		b := a.Fork()
		if threads == 1 {
			a.Add(7, packed[7])
		}
		if first != nil {
			b.Add(7, packed[7])
			rest := a.Matrix()
			if !slices.Equal(rest.Ptr, first.Ptr) || !slices.Equal(rest.Row, first.Row) {
				t.Errorf("%d threads give another pattern", threads)
			}
			sum := sparse.Combine(1, rest, 1, b.Matrix())
			for p, v := range sum.Val {
				if math.Abs(v-first.Val[p]) > 1e-12 {
					t.Fatalf("%d threads: entry %d is %g, not %g", threads, p, v, first.Val[p])
				}
			}
			continue
		}
		first = a.Matrix()
		if err := first.Check(); err != nil {
			t.Fatal(err)
		}
		if len(first.Row) != len(want) {
			t.Errorf("%d entries, want %d", len(first.Row), len(want))
		}
		for j := range n {
			for p := first.Ptr[j]; p < first.Ptr[j+1]; p++ {
				if v, ok := want[entry{first.Row[p], int32(j)}]; !ok || math.Abs(v-first.Val[p]) > 1e-12 {
					t.Fatalf("entry (%d, %d) is %g, want %g", first.Row[p], j, first.Val[p], v)
				}
			}
		}
	}
}

// The columns of an element end within a row of unknowns that follow one another.
func TestLeadingColumnsEndWithinARun(t *testing.T) {
	a := sparse.NewAssemblerThreads(4, []sparse.Element{{Unknowns: []int32{0, 1, 2, 3}, Leading: 2}}, 1)
	a.Add(0, []float64{1, 2, 3, 4, 5, 6, 7})
	s := a.Matrix()
	for _, x := range []struct {
		i, j int
		want float64
	}{{0, 0, 1}, {1, 0, 2}, {1, 1, 3}, {2, 0, 4}, {2, 1, 5}, {2, 2, 0}, {3, 0, 6}, {3, 1, 7}, {3, 2, 0}, {3, 3, 0}} {
		if got := s.At(x.i, x.j); got != x.want {
			t.Errorf("entry (%d, %d) is %g, want %g", x.i, x.j, got, x.want)
		}
	}
}
