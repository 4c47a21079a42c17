package assemble

import (
	"fmt"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/airframefile"
)

func (b *builder) standoffs() *fault.Error {
	names := map[string]bool{}
	for i := range b.file.Standoffs {
		s := &b.file.Standoffs[i]
		for k, at := range s.Places {
			name := s.Name
			if len(s.Places) > 1 {
				name = fmt.Sprintf("%s-%d", s.Name, k+1)
			}
			if names[name] {
				return s.Fault("", "a second standoff is called %q", name).Do("rename one of them")
			}
			names[name] = true
			if err := b.standoff(s, name, at); err != nil {
				return err
			}
		}
	}
	b.expect()
	return nil
}

func (b *builder) standoff(s *airframefile.Standoff, name string, at outline.Point) *fault.Error {
	lower, upper := b.index[s.Between[0]], b.index[s.Between[1]]
	axis := vec{0, 0, 1}
	start := vec{at.X, at.Y, 0}
	attribute := "at"
	if len(s.Places) > 1 {
		attribute = "places"
	}
	span := func(lo, hi int) (from, to vec, ok bool) {
		_, from, okA := b.plates[lo].faces(start, axis)
		to, _, okB := b.plates[hi].faces(start, axis)
		return from, to, okA && okB
	}
	from, to, ok := span(lower, upper)
	if !ok {
		return s.Fault("between", "one of its plates stands upright").Do("standoffs join plates that lie flat")
	}
	if to[2] <= from[2] {
		if f, t, _ := span(upper, lower); t[2] > f[2] {
			lower, upper, from, to = upper, lower, f, t
		} else {
			return s.Fault("between", "there is no room between plates %q and %q at %s", s.Between[0], s.Between[1], place(at)).
				Do("bolts join plates that touch; a standoff needs a gap")
		}
	}
	clamp := s.Clamp.Or(s.Outer)
	var patches [2]int
	for i, p := range [2]int{lower, upper} {
		local, err := b.locate(s.Part, attribute, p, at)
		if err != nil {
			return err
		}
		if patches[i], err = b.disc(s.Part, attribute, "standoff "+name, [2]string{"lower", "upper"}[i], p, local, clamp); err != nil {
			return err
		}
		if h := b.holeAt(p, local, same); h >= 0 {
			b.holes[h].taken = true
		}
		if s.ScrewMass > 0 {
			b.screw(name, i, b.out.Geometry.Patches[patches[i]].Name, inSpace(b.plates[p].frame, local, 0), s)
		}
	}
	b.out.Geometry.Standoffs = append(b.out.Geometry.Standoffs, airframe.Standoff{Name: name, Patches: patches, Ends: [2]vec{from, to}, Outer: s.Outer, Inner: s.Inner})
	b.out.Properties.Standoffs = append(b.out.Properties.Standoffs, airframe.StandoffProperties{Standoff: name, Material: s.Material})
	return nil
}

// screw adds the screw of a standoff's end as a small body in the plate: a ball of half the standoff's diameter.
func (b *builder) screw(standoff string, end int, patch string, at vec, s *airframefile.Standoff) {
	j := 0.4 * s.ScrewMass * s.Outer * s.Outer / 16
	b.out.Properties.Bodies = append(b.out.Properties.Bodies, airframe.Body{
		Name: standoff + airframe.ScrewSuffix[end], Kind: "lump", Mass: s.ScrewMass, Centre: at, Inertia: [6]float64{j, j, j}, Patches: []string{patch},
	})
}

// expect warns of coaxial holes across a gap at which no standoff is declared.
func (b *builder) expect() {
	var missing []string
	for _, s := range b.sites {
		found := false
		for _, o := range b.out.Geometry.Standoffs {
			p, q := b.out.Geometry.Patches[o.Patches[0]].Plate, b.out.Geometry.Patches[o.Patches[1]].Plate
			at := outline.Point{X: o.Ends[0][0], Y: o.Ends[0][1]}
			// A standoff through another plate of the same stack serves as well.
			if at.Distance(s.at) <= same && (p == s.lower || q == s.upper) {
				found = true
			}
		}
		if !found {
			missing = append(missing, fmt.Sprintf("%s and %s at %s, %s apart", b.plates[s.lower].name, b.plates[s.upper].name, place(s.at), mm(s.gap)))
		}
	}
	if len(missing) == 0 {
		return
	}
	const most = 8
	text := missing
	if len(text) > most {
		text = append(append([]string(nil), missing[:most]...), fmt.Sprintf("and %d more", len(missing)-most))
	}
	b.warn("standoff-expected", "", "declare the standoffs, or ignore this where there is none",
		"holes line up across a gap where no standoff is declared: %s", strings.Join(text, "; "))
}
