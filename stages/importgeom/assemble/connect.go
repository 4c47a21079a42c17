package assemble

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/fault"
)

// connected checks that every plate hangs together with the others through bolts and standoffs.
func (b *builder) connected() *fault.Error {
	n := len(b.plates)
	root := make([]int, n)
	for i := range root {
		root[i] = i
	}
	find := func(i int) int {
		for root[i] != i {
			i = root[i]
		}
		return i
	}
	join := func(patches []int) {
		for _, p := range patches[1:] {
			x, y := find(b.out.Geometry.Patches[patches[0]].Plate), find(b.out.Geometry.Patches[p].Plate)
			root[max(x, y)] = min(x, y)
		}
	}
	for _, o := range b.out.Geometry.Bolts {
		join(o.Patches)
	}
	for _, s := range b.out.Geometry.Standoffs {
		join(s.Patches[:])
	}
	for _, c := range b.out.Geometry.Contacts {
		if c.Kind != airframe.Key { // a key alone stops one direction
			x, y := find(c.Plates[0]), find(c.Plates[1])
			root[max(x, y)] = min(x, y)
		}
	}
	volume := map[int]float64{}
	for i, p := range b.plates {
		volume[find(i)] += p.region.Area() * p.thickness
	}
	main := 0
	for i := range b.plates {
		if volume[find(i)] > volume[find(main)]*(1+1e-9) {
			main = i
		}
	}
	var loose []int
	for i := range b.plates {
		if find(i) != find(main) {
			loose = append(loose, i)
		}
	}
	if len(loose) == 0 {
		return nil
	}
	var names []string
	for _, i := range loose {
		names = append(names, fmt.Sprintf("%q", b.plates[i].name))
	}
	p := b.plates[loose[0]]
	text := "plate " + names[0] + " is not connected to the rest"
	if len(names) > 1 {
		text = "plates " + strings.Join(names, ", ") + " are not connected to the rest"
	}
	f := p.part.Fault("", "%s", text)
	// The smallest gap at lined-up holes tells a misplaced plate from a missing standoff.
	best := math.Inf(1)
	var at site
	for _, s := range b.sites {
		if (find(s.lower) != find(s.upper)) && s.gap < best {
			best, at = s.gap, s
		}
	}
	if !math.IsInf(best, 1) {
		return f.Do("holes of %q and %q line up at %s across a gap of %s: declare a standoff there, or move a plate so that the faces touch",
			b.plates[at.lower].name, b.plates[at.upper].name, place(at.at), mm(at.gap))
	}
	if len(b.out.Removed) > 0 {
		return f.Do("the bolts %s were removed; keep one, or declare a bolt or standoff", strings.Join(b.out.Removed, ", "))
	}
	return f.Do("no holes of it line up with those of another plate: check at and turn, or declare a bolt or standoff")
}
