package sparse

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"

	"hushframe/core/numeric/dense"
)

// NewAssemblerThreads is NewAssembler with elements of which only the first columns may exist, and with the given number of
// threads (0 means one per processor).
func NewAssemblerThreads(n int, elements []Element, threads int) *Assembler {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	a := &Assembler{blocks: findBlocks(n, elements)}
	a.divide(n, elements, threads)
	a.findPattern(n, threads)
	return a
}

// findBlocks divides the unknowns where any element does: where one begins, ends or skips.
func findBlocks(n int, elements []Element) []int32 {
	const cut, used = 1, 2
	marks := make([]byte, n+1)
	for e := range elements {
		el := &elements[e]
		columns, last := el.columns(), int32(-1)
		for i, u := range el.Unknowns {
			if int(u) >= n {
				panic(fmt.Sprintf("sparse: NewAssembler: element %d has unknown %d of %d", e, u, n))
			}
			if last < 0 || u != last+1 || i == columns {
				if last >= 0 {
					marks[last+1] |= cut
				}
				if u >= 0 {
					marks[u] |= cut
				}
			}
			if u >= 0 {
				marks[u] |= used
			}
			last = u
		}
		if last >= 0 {
			marks[last+1] |= cut
		}
	}
	var blocks []int32
	for u := range n {
		if marks[u]&cut != 0 || marks[u]&used == 0 || u == 0 {
			blocks = append(blocks, int32(u))
		}
	}
	return append(blocks, int32(n))
}

// divide writes the elements as portions of blocks.
func (a *Assembler) divide(n int, elements []Element, threads int) {
	blockOf := make([]int32, n)
	for b := range len(a.blocks) - 1 {
		for u := a.blocks[b]; u < a.blocks[b+1]; u++ {
			blockOf[u] = int32(b)
		}
	}
	a.elements = make([]packing, len(elements))
	const share = 256
	parts := make([][]portion, (len(elements)+share-1)/share)
	dense.Parallel(threads, len(parts), func(t int) {
		var portions []portion
		for e := t * share; e < min(len(elements), (t+1)*share); e++ {
			el, to, start := &elements[e], &a.elements[e], len(portions)
			to.order, to.columns, to.scratch = int32(len(el.Unknowns)), int32(el.columns()), el.Packed()
			for i := 0; i < len(el.Unknowns); {
				u := el.Unknowns[i]
				if u < 0 {
					i++
					continue
				}
				b := blockOf[u]
				if i < int(to.columns) {
					to.leading++
				}
				portions = append(portions, portion{b, int32(i)})
				i += int(a.blocks[b+1] - a.blocks[b])
			}
			to.count = int32(len(portions) - start)
		}
		parts[t] = portions
	})
	a.portions = slices.Concat(parts...)
	portions, places, before := 0, 0, 0
	for e := range a.elements {
		el := &a.elements[e]
		el.portion, el.place, el.before = portions, places, before
		portions += int(el.count)
		places += rowStart(int(el.count), int(el.leading))
		before += el.scratch
	}
	a.places = make([]int32, places)
}

// use is where a block occurs: which portion of which element.
type use struct{ element, portion int32 }

// users sorts the portions by block: those of block b are list[start[b]:start[b+1]], in the order of the elements.
func (a *Assembler) users() (start []int, list []use) {
	start = make([]int, len(a.blocks))
	for i := range a.portions {
		start[a.portions[i].block+1]++
	}
	for b := range len(start) - 1 {
		start[b+1] += start[b]
	}
	next := slices.Clone(start)
	list = make([]use, len(a.portions))
	for e := range a.elements {
		el := &a.elements[e]
		for i, r := range a.portions[el.portion:][:el.count] {
			list[next[r.block]] = use{int32(e), int32(i)}
			next[r.block]++
		}
	}
	return start, list
}

// partners are the portions with which portion i of an element is coupled.
func (a *Assembler) partners(el *packing, i int32) []portion {
	if i < el.leading {
		return a.portions[el.portion:][:el.count]
	}
	return a.portions[el.portion:][:el.leading]
}

// findPattern finds which blocks meet, the pattern of the unknowns, and the places of all pairs of portions. Ranges of blocks
// are dealt with apart: first the blocks below each, then, the start of each column known, rows and places.
func (a *Assembler) findPattern(n, threads int) {
	blocks := len(a.blocks) - 1
	start, users := a.users()
	const share = 256
	below := make([][]int32, (blocks+share-1)/share) // of all blocks of a share, one after another
	count := make([]int32, blocks)                   // of blocks below each, itself among them
	width := func(b int32) int { return int(a.blocks[b+1] - a.blocks[b]) }
	p := &Pattern{N: n, Ptr: make([]int, n+1)}
	spaces := sync.Pool{New: func() any {
		space := slices.Repeat([]int32{-1}, blocks)
		return &space
	}}
	dense.Parallel(threads, len(below), func(t int) {
		space := spaces.Get().(*[]int32)
		defer spaces.Put(space)
		seen := *space
		var list []int32
		for b := int32(t * share); int(b) < min(blocks, (t+1)*share); b++ {
			from := len(list)
			list = append(list, b)
			seen[b] = b
			for _, u := range users[start[b]:start[b+1]] {
				for _, r := range a.partners(&a.elements[u.element], u.portion) {
					if r.block > b && seen[r.block] != b {
						seen[r.block] = b
						list = append(list, r.block)
					}
				}
			}
			slices.Sort(list[from:])
			rows := 0
			for _, r := range list[from:] {
				rows += width(r)
			}
			count[b] = int32(len(list) - from)
			for u := a.blocks[b]; u < a.blocks[b+1]; u++ {
				p.Ptr[u+1] = rows
				rows--
			}
		}
		below[t] = list
	})
	for j := range n {
		p.Ptr[j+1] += p.Ptr[j]
	}
	if p.Ptr[n] > math.MaxInt32 {
		panic("sparse: NewAssembler: more entries than 32-bit places can number")
	}
	p.Row = make([]int32, p.Ptr[n])
	dense.Parallel(threads, len(below), func(t int) {
		space := spaces.Get().(*[]int32)
		defer spaces.Put(space)
		where, list := *space, below[t]
		for b := int32(t * share); int(b) < min(blocks, (t+1)*share); b++ {
			at := p.Ptr[a.blocks[b]]
			for _, r := range list[:count[b]] {
				where[r] = int32(at)
				for u := a.blocks[r]; u < a.blocks[r+1]; u++ {
					p.Row[at] = u
					at++
				}
			}
			list = list[count[b]:]
			for u := int(a.blocks[b]) + 1; u < int(a.blocks[b+1]); u++ {
				copy(p.Row[p.Ptr[u]:p.Ptr[u+1]], p.Row[p.Ptr[u-1]+1:])
			}
			a.place(b, users[start[b]:start[b+1]], where)
		}
	})
	a.pattern = p
}

// place records where the pairs of portions begin whose columns are those of a block.
func (a *Assembler) place(b int32, users []use, where []int32) {
	for _, u := range users {
		el := &a.elements[u.element]
		for i, r := range a.partners(el, u.portion) {
			if r.block >= b {
				hi, lo := max(i, int(u.portion)), min(i, int(u.portion))
				a.places[el.place+rowStart(hi, int(el.leading))+lo] = where[r.block]
			}
		}
	}
}
