package assemble

import (
	"math"
	"sort"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
)

// coaxial is the distance (m) within which the axes of holes are one.
const coaxial = 0.2e-3

// hole is a round hole of screw size.
type hole struct {
	plate  int
	centre outline.Point // in the plate's frame
	radius float64
	at     vec  // on the mid-surface
	taken  bool // by a bolt or a standoff
}

// stack is a run of plates whose holes are coaxial and whose faces touch, from bottom to top.
type stack struct {
	holes []int
	point vec // on the axis, at the middle of the stack
	axis  vec
}

// site is a gap between coaxial holes of two plates.
type site struct {
	lower, upper int // plates
	at           outline.Point
	gap          float64
}

func (b *builder) findHoles() *fault.Error {
	lo, hi := b.file.Bolts.Smallest/2, b.file.Bolts.Largest/2
	for i, p := range b.plates {
		for _, l := range p.region.Holes {
			c, r, ok := outline.CircleOf(l)
			if ok && r >= lo*(1-1e-6) && r <= hi*(1+1e-6) {
				b.holes = append(b.holes, hole{plate: i, centre: c, radius: r, at: inSpace(p.frame, c, 0)})
			}
		}
	}
	return nil
}

// holeAt finds the hole of a plate nearest to a place of its frame, -1 when none is within reach.
func (b *builder) holeAt(plate int, p outline.Point, reach float64) int {
	best, bestD := -1, reach
	for i, h := range b.holes {
		if h.plate == plate {
			if d := h.centre.Distance(p); d <= bestD {
				best, bestD = i, d
			}
		}
	}
	return best
}

// stacks finds the bolts and the sites among coaxial holes, in order of place: from bottom to top, then from front
// to back, then from left to right.
func (b *builder) stacks() ([]stack, []site, *fault.Error) {
	root := make([]int, len(b.holes))
	for i := range root {
		root[i] = i
	}
	find := func(i int) int {
		for root[i] != i {
			i = root[i]
		}
		return i
	}
	for i, h := range b.holes {
		for j := i + 1; j < len(b.holes); j++ {
			k := b.holes[j]
			if h.plate == k.plate {
				continue
			}
			z := b.plates[h.plate].frame.Z
			d := sub(k.at, h.at)
			off := norm(along(d, z, -dot(d, z)))
			if off <= coaxial && math.Abs(dot(z, b.plates[k.plate].frame.Z)) > 0.99996 {
				a, c := find(i), find(j)
				root[max(a, c)] = min(a, c)
			}
		}
	}
	groups := map[int][]int{}
	var roots []int
	for i := range b.holes {
		r := find(i)
		if groups[r] == nil {
			roots = append(roots, r)
		}
		groups[r] = append(groups[r], i)
	}
	var stacks []stack
	var sites []site
	for _, r := range roots {
		if len(groups[r]) < 2 {
			continue
		}
		s, g, err := b.split(groups[r])
		if err != nil {
			return nil, nil, err
		}
		stacks, sites = append(stacks, s...), append(sites, g...)
	}
	sort.SliceStable(stacks, func(i, j int) bool { return before(stacks[i].point, stacks[j].point) })
	sort.SliceStable(sites, func(i, j int) bool {
		p, q := sites[i], sites[j]
		if p.lower != q.lower || p.upper != q.upper {
			return p.lower < q.lower || p.lower == q.lower && p.upper < q.upper
		}
		return before(vec{p.at.X, p.at.Y, 0}, vec{q.at.X, q.at.Y, 0})
	})
	return stacks, sites, nil
}

// before orders places from bottom to top, front to back and left to right; differences below a micrometre do not
// count, so that rounding cannot change a name.
func before(p, q vec) bool {
	for _, c := range [3]int{2, 0, 1} {
		a, b := math.Round(p[c]*1e6), math.Round(q[c]*1e6)
		if a != b {
			return (a > b) != (c == 2)
		}
	}
	return false
}

// split sorts coaxial holes along their axis and cuts them where faces do not touch.
func (b *builder) split(holes []int) ([]stack, []site, *fault.Error) {
	axis := b.plates[b.holes[holes[0]].plate].frame.Z
	level := func(i int) float64 { return dot(b.holes[i].at, axis) }
	sort.SliceStable(holes, func(x, y int) bool { return level(holes[x]) < level(holes[y]) })
	var stacks []stack
	var sites []site
	run := []int{holes[0]}
	end := func() {
		if len(run) > 1 {
			stacks = append(stacks, b.stacked(run, axis))
		}
	}
	for _, next := range holes[1:] {
		last := run[len(run)-1]
		p, q := b.plates[b.holes[last].plate], b.plates[b.holes[next].plate]
		gap := level(next) - level(last) - (p.thickness+q.thickness)/2
		at := b.holes[next].at
		where := outline.Point{X: at[0], Y: at[1]}
		switch {
		case math.Abs(gap) < b.file.Bolts.Gap:
			run = append(run, next)
			continue
		case gap < 0:
			return nil, nil, q.part.Fault("at", "plates %q and %q lie %s deep in each other where their holes line up, at %s", p.name, q.name, mm(-gap), place(where)).
				Do("at is the LOWER face of a plate: put %q at least %s higher", q.name, mm(-gap))
		case !b.blocked(b.holes[last], b.holes[next], axis):
			sites = append(sites, site{b.holes[last].plate, b.holes[next].plate, where, gap})
		}
		end()
		run = []int{next}
	}
	end()
	return stacks, sites, nil
}

func (b *builder) stacked(run []int, axis vec) stack {
	first, last := b.holes[run[0]], b.holes[run[len(run)-1]]
	low := along(first.at, axis, -b.plates[first.plate].thickness/2)
	high := along(last.at, axis, b.plates[last.plate].thickness/2)
	return stack{holes: append([]int(nil), run...), point: scale(add(low, high), 0.5), axis: axis}
}

// blocked reports whether another plate has material on the axis between two holes, so that no screw passes.
func (b *builder) blocked(lower, upper hole, axis vec) bool {
	lo, hi := dot(lower.at, axis), dot(upper.at, axis)
	for i, p := range b.plates {
		if i == lower.plate || i == upper.plate {
			continue
		}
		at, _, ok := p.faces(lower.at, axis)
		if !ok || dot(at, axis) <= lo || dot(at, axis) >= hi {
			continue
		}
		d := sub(at, p.frame.Origin)
		if p.region.Contains(outline.Point{X: dot(d, p.frame.X), Y: dot(d, p.frame.Y)}) {
			return true
		}
	}
	return false
}
