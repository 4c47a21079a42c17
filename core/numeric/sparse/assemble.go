package sparse

import (
	"fmt"
	"runtime"

	"hushframe/core/numeric/dense"
)

// Element lists the unknowns of an element matrix. A negative one is left out (its rows and columns are dropped), and one
// that occurs several times gets the sum of its rows and columns.
type Element struct {
	Unknowns []int32
	// Leading, when positive, says that only the first so many columns of the lower triangle exist: these unknowns are
	// coupled with one another and with all that follow, which are not coupled among themselves.
	Leading int
}

// columns is how many columns of the lower triangle exist.
func (e *Element) columns() int {
	if e.Leading > 0 {
		return min(e.Leading, len(e.Unknowns))
	}
	return len(e.Unknowns)
}

// rowStart is where row i of a packed lower triangle with the given number of columns begins.
func rowStart(i, columns int) int {
	if i <= columns {
		return i * (i + 1) / 2
	}
	return columns*(columns+1)/2 + (i-columns)*columns
}

// Packed is the number of entries of the packed lower triangle of the element.
func (e *Element) Packed() int { return rowStart(len(e.Unknowns), e.columns()) }

// Assembler adds element matrices into a sparse matrix. The pattern and the place of each element entry are found once,
// in NewAssembler; after that, adding an element neither searches nor locks.
//
// An element matrix is symmetric and given as its packed lower triangle, row by row: entry (a, b), b ≤ a, is at
// a(a+1)/2+b. Rows follow the order of the element's unknowns. Where only the first columns exist, rows end with them.
//
// Unknowns that follow one another in all their elements, such as those of a node, make a block. Pattern and places are
// those of blocks, so that they cost little; all unknowns of a block are coupled with one another.
type Assembler struct {
	pattern  *Pattern
	blocks   []int32 // first unknown of each, and the number of unknowns
	elements []packing
	portions []portion
	places   []int32   // see packing
	val      []float64 // nil as long as nothing has been added
}

// packing says what an element consists of: portions[portion:portion+count], the first leading of which have columns. The place of
// the pair of portions a and b, b ≤ a, is that of the first entry of their blocks in the pattern; such places are packed from
// places[place] on, as entries are.
type packing struct {
	portion, place  int
	count, leading  int32
	order, columns  int32 // of the matrix
	scratch, before int   // packed entries of it, and of those before it
}

// portion is a block within an element: its unknowns begin at place at of the element's.
type portion struct{ block, at int32 }

// NewAssembler finds the pattern of the n unknowns of elements, whose unknowns are given and whose matrices are full, and
// where each entry goes. Unknowns in no element get a diagonal entry only. It panics when an unknown is not below n.
func NewAssembler(n int, elements [][]int32) *Assembler {
	all := make([]Element, len(elements))
	for e, unknowns := range elements {
		all[e].Unknowns = unknowns
	}
	return NewAssemblerThreads(n, all, 1)
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
	a.values()
	a.add(e, packed, 0, 1)
}

// stripe is the number of blocks whose columns one goroutine adds to before the next one's begin.
const stripe = 16

// add adds those entries of element e that lie in the columns of one goroutine's blocks.
func (a *Assembler) add(e int, packed []float64, mine, threads int) {
	el := &a.elements[e]
	if len(packed) != el.scratch {
		panic(fmt.Sprintf("sparse: Add: element %d has %d unknowns and %d packed entries", e, el.order, len(packed)))
	}
	portions, places := a.portions[el.portion:el.portion+int(el.count)], a.places[el.place:]
	columns := int(el.columns)
	for i := range portions {
		from := &portions[i]
		row := rowStart(int(from.at), columns)
		count := min(i+1, int(el.leading))
		for k, place := range places[:count] {
			to := &portions[k]
			if threads > 1 && int(min(from.block, to.block))/stripe%threads != mine {
				continue
			}
			a.addPair(packed[row+int(to.at):], int(from.at), columns, from.block, to.block, int(place), i == k)
		}
		places = places[count:]
	}
}

// addPair adds the entries of a pair of blocks, rows those of one, columns those of the other; at is the first row in the
// element. On the diagonal of the element they are a triangle. Where one block comes twice in an element, only one of
// (a, b) and (b, a) is packed, and diagonal entries count twice.
func (a *Assembler) addPair(packed []float64, at, columns int, rows, cols int32, place int, diagonal bool) {
	height, width := int(a.blocks[rows+1]-a.blocks[rows]), int(a.blocks[cols+1]-a.blocks[cols])
	first := int(a.blocks[min(rows, cols)])
	// From a column of the block to the next, an entry moves on by one less than the length of the column.
	stride := a.pattern.Ptr[first+1] - a.pattern.Ptr[first] - 1
	val := a.val[place:]
	start := 0 // of a row
	switch {
	case diagonal:
		for i := range height {
			to, step := i, stride
			for _, v := range packed[start:][:i+1] {
				val[to] += v
				to += step
				step--
			}
			start += min(at+i+1, columns)
		}
	case rows > cols && height == 6:
		addSix(val, packed, at, columns, width, stride)
	case rows > cols:
		for i := range height {
			to, step := i, stride
			for _, v := range packed[start:][:width] {
				val[to] += v
				to += step
				step--
			}
			start += min(at+i+1, columns)
		}
	case rows < cols && width == 6:
		to := 0
		for i := range height {
			line, from := (*[6]float64)(val[to:]), (*[6]float64)(packed[start:])
			line[0] += from[0]
			line[1] += from[1]
			line[2] += from[2]
			line[3] += from[3]
			line[4] += from[4]
			line[5] += from[5]
			to += stride
			stride--
			start += min(at+i+1, columns)
		}
	case rows < cols:
		to := 0
		for i := range height {
			line := val[to:][:width]
			for k, v := range packed[start:][:width] {
				line[k] += v
			}
			to += stride
			stride--
			start += min(at+i+1, columns)
		}
	default:
		for i := range height {
			for k, v := range packed[start:][:width] {
				hi, lo := max(i, k), min(i, k)
				if hi == lo {
					v *= 2
				}
				val[hi+lo*stride-lo*(lo-1)/2] += v
			}
			start += min(at+i+1, columns)
		}
	}
}

// addSix adds six rows, those of a node, column by column, since columns are what lies together in the matrix.
func addSix(val, packed []float64, at, columns, width, stride int) {
	var lines [6][]float64
	start := 0
	for i := range lines {
		lines[i] = packed[start:][:width]
		start += min(at+i+1, columns)
	}
	l0, l1, l2, l3, l4, l5 := lines[0], lines[1][:width], lines[2][:width], lines[3][:width], lines[4][:width], lines[5][:width]
	to := 0
	for k := range l0[:width] {
		c := (*[6]float64)(val[to:])
		c[0] += l0[k]
		c[1] += l1[k]
		c[2] += l2[k]
		c[3] += l3[k]
		c[4] += l4[k]
		c[5] += l5[k]
		to += stride
		stride--
	}
}

// AddAll computes all element matrices with the given number of threads (0 means one per processor) and adds them in
// the order of the elements. compute gives the packed matrix of element e, in packed, which holds anything, or where it
// stands already; nil adds nothing. It is called from several goroutines.
func (a *Assembler) AddAll(threads int, compute func(e int, packed []float64) []float64) {
	const most, entries = 512, 1 << 18 // of a batch
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	a.values()
	var scratch []float64
	var matrices [most][]float64
	for first := 0; first < len(a.elements); {
		last := first + 1
		base := a.elements[first].before
		size := a.elements[first].scratch
		for last < len(a.elements) && last < first+most && size+a.elements[last].scratch <= entries {
			size += a.elements[last].scratch
			last++
		}
		if len(scratch) < size {
			scratch = make([]float64, max(size, entries))
		}
		const piece = 16
		dense.Parallel(threads, (last-first+piece-1)/piece, func(t int) {
			for e := first + t*piece; e < min(last, first+(t+1)*piece); e++ {
				el := &a.elements[e]
				matrices[e-first] = compute(e, scratch[el.before-base:][:el.scratch:el.scratch])
			}
		})
		// Each goroutine adds to columns of its own, so that every entry is summed in the order of the elements.
		dense.Parallel(threads, threads, func(mine int) {
			for e := first; e < last; e++ {
				if m := matrices[e-first]; m != nil {
					a.add(e, m, mine, threads)
				}
			}
		})
		first = last
	}
}

// Matrix hands over the matrix added so far and begins a new one, all zero, with the same pattern.
func (a *Assembler) Matrix() *Symmetric {
	a.values()
	s := &Symmetric{N: a.pattern.N, Ptr: a.pattern.Ptr, Row: a.pattern.Row, Val: a.val}
	a.val = nil
	return s
}

// values makes room for those to be added.
func (a *Assembler) values() {
	if a.val == nil {
		a.val = make([]float64, len(a.pattern.Row))
	}
}
