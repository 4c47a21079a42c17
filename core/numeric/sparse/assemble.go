package sparse

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"

	"hushframe/core/numeric/dense"
)

// Assembler adds element matrices into a sparse matrix. The pattern and the place of each element entry are found once,
// in NewAssembler; after that, adding an element neither searches nor locks.
//
// An element matrix is symmetric and given as its packed lower triangle, row by row: entry (a, b), b ≤ a, is at
// a(a+1)/2+b. Rows follow the order of the element's unknowns.
type Assembler struct {
	pattern  *Pattern
	elements []int     // start of each element's entries in places
	order    []int     // number of unknowns of each element
	places   []int32   // place of each packed entry, see place
	val      []float64 // nil as long as nothing has been added
}

// A place is the index of an entry, or dropped, or -2 minus the index of a diagonal entry to which the packed entry
// counts twice: two unknowns of the element are one unknown of the matrix, and only one of (a, b) and (b, a) is packed.
const dropped = -1

// NewAssembler finds the pattern of the n unknowns of elements and where each element entry goes. elements[e] lists the
// unknowns of element e; a negative one is left out (its rows and columns are dropped), and one that occurs several
// times gets the sum of its rows and columns. Unknowns in no element get a diagonal entry only.
// It panics when an unknown is not below n.
func NewAssembler(n int, elements [][]int32) *Assembler { return NewAssemblerThreads(n, elements, 1) }

// NewAssemblerThreads is NewAssembler with the given number of threads (0 means one per processor).
func NewAssemblerThreads(n int, elements [][]int32, threads int) *Assembler {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	a := &Assembler{elements: make([]int, len(elements)+1), order: make([]int, len(elements))}
	touching := make([]int, n+1)
	for e, unknowns := range elements {
		a.order[e] = len(unknowns)
		a.elements[e+1] = a.elements[e] + len(unknowns)*(len(unknowns)+1)/2
		for _, u := range unknowns {
			if int(u) >= n {
				panic(fmt.Sprintf("sparse: NewAssembler: element %d has unknown %d of %d", e, u, n))
			}
			if u >= 0 {
				touching[u+1]++
			}
		}
	}
	for u := range n {
		touching[u+1] += touching[u]
	}
	// users[touching[u]:touching[u+1]] are the elements of unknown u with its position there.
	type use struct{ element, position int32 }
	users := make([]use, touching[n])
	next := slices.Clone(touching[:n])
	for e, unknowns := range elements {
		for i, u := range unknowns {
			if u >= 0 {
				users[next[u]] = use{int32(e), int32(i)}
				next[u]++
			}
		}
	}

	a.places = make([]int32, a.elements[len(elements)])
	for i := range a.places {
		a.places[i] = dropped
	}
	// Ranges of columns are dealt with apart: first their rows, then, the start of each known, the places.
	const share = 2048
	shares := (n + share - 1) / share
	workspaces := sync.Pool{New: func() any {
		where := slices.Repeat([]int32{-1}, n)
		return &where
	}}
	p := &Pattern{N: n, Ptr: make([]int, n+1)}
	parts := make([][]int32, shares)
	dense.Parallel(threads, shares, func(t int) {
		where := workspaces.Get().(*[]int32)
		defer workspaces.Put(where)
		var rows []int32
		from := t * share
		last := 0 // start of the last column
		for j := from; j < min(n, from+share); j++ {
			start, uses := len(rows), users[touching[j]:touching[j+1]]
			if j > from && len(uses) > 0 && slices.EqualFunc(uses, users[touching[j-1]:touching[j]], func(x, y use) bool { return x.element == y.element }) {
				// In the elements of the unknown before, as the unknowns of a node are: its column without the first row.
				rows = append(rows, rows[last+1:start]...)
			} else {
				rows = append(rows, int32(j))
				(*where)[j] = 0
				for k, u := range uses {
					if k > 0 && uses[k-1].element == u.element {
						continue
					}
					for _, i := range elements[u.element] {
						if int(i) > j && (*where)[i] < 0 {
							(*where)[i] = 0
							rows = append(rows, i)
						}
					}
				}
				slices.Sort(rows[start:])
				for _, i := range rows[start:] {
					(*where)[i] = -1
				}
			}
			p.Ptr[j+1] = len(rows) - start
			last = start
		}
		parts[t] = rows
	})
	for j := range n {
		p.Ptr[j+1] += p.Ptr[j]
	}
	if p.Ptr[n] > math.MaxInt32 {
		panic("sparse: NewAssembler: more entries than 32-bit places can number")
	}
	p.Row = slices.Concat(parts...)
	dense.Parallel(threads, shares, func(t int) {
		where := workspaces.Get().(*[]int32)
		defer workspaces.Put(where)
		for j := t * share; j < min(n, (t+1)*share); j++ {
			for k := p.Ptr[j]; k < p.Ptr[j+1]; k++ {
				(*where)[p.Row[k]] = int32(k)
			}
			for _, u := range users[touching[j]:touching[j+1]] {
				a.place(u.element, int(u.position), int32(j), elements[u.element], *where)
			}
		}
	})
	a.pattern = p
	return a
}

// place records where the entries of element e in the column of unknown j, its position-th, go.
func (a *Assembler) place(e int32, position int, j int32, unknowns []int32, where []int32) {
	base := a.elements[e]
	for b, i := range unknowns {
		if i < j {
			continue
		}
		hi, lo := max(b, position), min(b, position)
		at := where[i]
		if i == j && b != position {
			at = -2 - at
		}
		a.places[base+hi*(hi+1)/2+lo] = at
	}
}

// Pattern returns the pattern all matrices of this assembler share.
func (a *Assembler) Pattern() *Pattern { return a.pattern }

// Fork returns an assembler with the same pattern and places and a matrix of its own, so that two matrices (stiffness
// and mass, say) are added side by side.
func (a *Assembler) Fork() *Assembler {
	b := *a
	b.val = nil
	return &b
}

// Add adds the packed matrix of element e. Sums are taken in the order of the calls, so the caller keeps that order
// fixed and calls from one goroutine per fork; AddAll does both.
func (a *Assembler) Add(e int, packed []float64) {
	places := a.places[a.elements[e]:a.elements[e+1]]
	if len(packed) != len(places) {
		panic(fmt.Sprintf("sparse: Add: element %d has %d unknowns and %d packed entries", e, a.order[e], len(packed)))
	}
	val := a.values()
	for k, v := range packed {
		switch at := places[k]; {
		case at >= 0:
			val[at] += v
		case at != dropped:
			val[-2-at] += 2 * v
		}
	}
}

// AddAll computes all element matrices with the given number of threads (0 means one per processor) and adds them in
// the order of the elements. compute fills packed, which is zero, with the matrix of element e, or leaves it so and gives
// false; it is called from several goroutines.
func (a *Assembler) AddAll(threads int, compute func(e int, packed []float64) bool) {
	const batch = 256
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	total := len(a.order)
	var scratch []float64
	var any [batch]bool
	for first := 0; first < total; first += batch {
		last := min(first+batch, total)
		base := a.elements[first]
		scratch = slices.Grow(scratch[:0], a.elements[last]-base)[:a.elements[last]-base]
		dense.Parallel(min(threads, last-first), last-first, func(k int) {
			e := first + k
			packed := scratch[a.elements[e]-base : a.elements[e+1]-base]
			clear(packed)
			any[k] = compute(e, packed)
		})
		for e := first; e < last; e++ {
			if any[e-first] {
				a.Add(e, scratch[a.elements[e]-base:a.elements[e+1]-base])
			}
		}
	}
}

// Matrix hands over the matrix added so far and begins a new one, all zero, with the same pattern.
func (a *Assembler) Matrix() *Symmetric {
	s := &Symmetric{N: a.pattern.N, Ptr: a.pattern.Ptr, Row: a.pattern.Row, Val: a.values()}
	a.val = nil
	return s
}

// values are those added so far.
func (a *Assembler) values() []float64 {
	if a.val == nil {
		a.val = make([]float64, len(a.pattern.Row))
	}
	return a.val
}
