package assemble

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
	"hushframe/stages/importgeom/airframefile"
)

const (
	// headRatio is the diameter of screw heads, washers and nuts by the hole; common practice.
	headRatio = 1.8
	// defaultHole is the hole of a declared bolt where the plates have none (m).
	defaultHole = 3e-3
	// same is the distance (m) below which a declared bolt or standoff is at the place of an inferred one.
	same = 0.5e-3
)

// bolts adds the declared bolts and then the inferred ones.
func (b *builder) bolts() *fault.Error {
	stacks, sites, err := b.stacks()
	if err != nil {
		return err
	}
	b.sites = sites
	names := map[string]bool{}
	for i := range b.file.Bolted {
		d := &b.file.Bolted[i]
		for k, at := range d.Places {
			name := d.Name
			if len(d.Places) > 1 {
				name = fmt.Sprintf("%s-%d", d.Name, k+1)
			}
			if names[name] {
				return d.Fault("", "a second bolt is called %q", name).Do("rename one of them")
			}
			names[name] = true
			if err := b.declaredBolt(d, name, at); err != nil {
				return err
			}
		}
	}
	rule := &b.file.Bolts
	if !rule.Infer {
		return nil
	}
	remove := map[string]bool{}
	for _, n := range rule.Remove {
		remove[n] = true
	}
	changed := map[string]bool{}
	var inferred, groups []string
	n := 0
	for _, s := range stacks {
		n++
		name := fmt.Sprintf("bolt-%d", n)
		inferred = append(inferred, name)
		if names[name] {
			return rule.Fault("", "bolt %q is declared and another one of that name is inferred from holes", name).Do("rename the declared one")
		}
		if by := b.boltAt(s); by != "" {
			b.note("bolt %s takes the place of %s, which the holes suggest", by, name)
			delete(remove, name)
			continue
		}
		if remove[name] {
			delete(remove, name)
			b.out.Removed = append(b.out.Removed, name)
			continue
		}
		f := rule.Fastening
		// What is said of the group holds for its bolts, what is said of a bolt goes before.
		group := b.groupOf(s)
		if !slices.Contains(groups, group) {
			groups = append(groups, group)
		}
		for _, of := range []string{group, name} {
			if c, ok := rule.Change[of]; ok {
				changed[of] = true
				f = with(f, c)
			}
		}
		part := rule.Part
		part.Kind, part.Name = "bolt", name
		if err := b.addBolt(part, name, s, f, true); err != nil {
			return err
		}
	}
	for _, wanted := range rule.Remove {
		if remove[wanted] {
			return rule.Fault("remove", "no bolt %q is inferred%s", wanted, near(wanted, inferred)).Do("the inferred bolts are %s", listNames(inferred))
		}
	}
	for _, wanted := range sortedNames(rule.Change) {
		if !changed[wanted] {
			return rule.Fault("change", "no bolt or group of bolts %q is inferred%s", wanted, near(wanted, append(inferred, groups...))).
				Do("the inferred bolts are %s, in the groups %s", listNames(inferred), listNames(groups))
		}
	}
	return nil
}

// with gives a fastening what a change says.
func with(f, change airframefile.Fastening) airframefile.Fastening {
	if change.Clamp.Given {
		f.Clamp = change.Clamp
	}
	if change.Mass.Given {
		f.Mass = change.Mass
	}
	if change.Joint != "" {
		f.Joint = change.Joint
	}
	return f
}

// groupOf names the group of a stack's bolt after the plates it clamps, from bottom to top.
func (b *builder) groupOf(s stack) string {
	var names []string
	for _, h := range s.holes {
		names = append(names, b.plates[b.holes[h].plate].name)
	}
	return strings.Join(names, "+")
}

func near(name string, names []string) string {
	if n := nearest.Name(name, names); n != "" {
		return fmt.Sprintf("; did you mean %q?", n)
	}
	return ""
}

func listNames(names []string) string {
	if len(names) == 0 {
		return "none"
	}
	return strings.Join(names, ", ")
}

func sortedNames[V any](m map[string]V) []string {
	var names []string
	for n := range m {
		names = append(names, n)
	}
	sort.Strings(names)
	return names
}

// boltAt gives the declared bolt at the place of a stack that shares a plate with it.
func (b *builder) boltAt(s stack) string {
	for _, o := range b.out.Geometry.Bolts {
		if o.Inferred || math.Abs(dot(o.Axis, s.axis)) < 0.99996 {
			continue
		}
		d := sub(o.Point, s.point)
		if norm(along(d, s.axis, -dot(d, s.axis))) > same {
			continue
		}
		for _, p := range o.Patches {
			for _, h := range s.holes {
				if b.out.Geometry.Patches[p].Plate == b.holes[h].plate {
					return o.Name
				}
			}
		}
	}
	return ""
}

// declaredBolt places a bolt that the file declares, through plates whose faces touch.
func (b *builder) declaredBolt(d *airframefile.Bolt, name string, at outline.Point) *fault.Error {
	var plates []int
	for _, n := range d.Through {
		plates = append(plates, b.index[n])
	}
	sort.SliceStable(plates, func(i, j int) bool { return b.plates[plates[i]].frame.Origin[2] < b.plates[plates[j]].frame.Origin[2] })
	axis := b.plates[plates[0]].frame.Z
	start, err := b.locate(d.Part, "at", plates[0], at)
	if err != nil {
		return err
	}
	s := stack{axis: axis, point: inSpace(b.plates[plates[0]].frame, start, 0)}
	radius := 0.0
	var discs []spot
	var low, last vec
	for i, p := range plates {
		lower, upper, ok := b.plates[p].faces(s.point, axis)
		if !ok {
			return d.Fault("through", "plate %q is not parallel to %q", b.plates[p].name, b.plates[plates[0]].name).Do("bolts join parallel plates")
		}
		if i == 0 {
			low = lower
		} else if gap := dot(sub(lower, last), axis); math.Abs(gap) >= b.file.Bolts.Gap {
			f := d.Fault("through", "the faces of %q and %q are %s apart at %s", b.plates[plates[i-1]].name, b.plates[p].name, mm(gap), place(at))
			if gap < 0 {
				return f.Do("at is the LOWER face of a plate; put %q higher", b.plates[p].name)
			}
			return f.Do("a bolt clamps plates that touch; declare a standoff, or move a plate")
		}
		last = upper
		mid := sub(scale(add(lower, upper), 0.5), b.plates[p].frame.Origin)
		local := outline.Point{X: dot(mid, b.plates[p].frame.X), Y: dot(mid, b.plates[p].frame.Y)}
		discs = append(discs, spot{p, local})
		if h := b.holeAt(p, local, same); h >= 0 {
			b.holes[h].taken = true
			radius = math.Max(radius, b.holes[h].radius)
		}
	}
	s.point = scale(add(low, last), 0.5)
	if d.Hole.Given {
		radius = d.Hole.Value / 2
	} else if radius == 0 {
		radius = defaultHole / 2
		b.assume(d.Part, "no hole is there; a hole of %s assumed", mm(defaultHole))
	}
	return b.fasten(d.Part, name, s, discs, radius, dot(sub(last, low), axis), d.Fastening, false)
}

// spot is a place on a plate.
type spot struct {
	plate  int
	centre outline.Point
}

// addBolt turns a stack of holes into a bolt.
func (b *builder) addBolt(part airframefile.Part, name string, s stack, f airframefile.Fastening, inferred bool) *fault.Error {
	var discs []spot
	radius, thick := 0.0, 0.0
	for _, i := range s.holes {
		h := &b.holes[i]
		h.taken = true
		radius = math.Max(radius, h.radius)
		thick += b.plates[h.plate].thickness
		discs = append(discs, spot{h.plate, h.centre})
	}
	return b.fasten(part, name, s, discs, radius, thick, f, inferred)
}

func (b *builder) fasten(part airframefile.Part, name string, s stack, discs []spot, radius, thick float64, f airframefile.Fastening, inferred bool) *fault.Error {
	clamp := f.Clamp.Or(headRatio * 2 * radius)
	if clamp <= 2*radius {
		return part.Fault("clamp", "the clamped disc of %s has a diameter of %s and the hole one of %s", name, mm(clamp), mm(2*radius)).
			Do("give the diameter of the screw head or washer")
	}
	all := b.file.Bolts.Part
	all.Kind, all.Name = "bolts", ""
	if !f.Clamp.Given {
		b.assume(all, "clamped discs of %.2g times the hole where no clamp is given", headRatio)
	}
	mass := f.Mass.Value
	if !f.Mass.Given {
		mass = screwMass(2*radius, thick)
		b.assume(all, "masses of steel screw, washer and nut estimated from hole and stack where no mass is given")
	}
	bolt := airframe.Bolt{Name: name, Point: s.point, Axis: s.axis, HoleRadius: radius, ClampRadius: clamp / 2, Inferred: inferred}
	var names []string
	for _, d := range discs {
		i, err := b.disc(part, "at", "bolt "+name, b.plates[d.plate].name, d.plate, d.centre, clamp)
		if err != nil {
			return err
		}
		bolt.Patches = append(bolt.Patches, i)
		names = append(names, b.plates[d.plate].name)
	}
	bolt.Group = strings.Join(names, "+")
	b.out.Geometry.Bolts = append(b.out.Geometry.Bolts, bolt)
	b.out.Properties.Bolts = append(b.out.Properties.Bolts, airframe.BoltProperties{Bolt: name, Mass: mass, Joint: f.Joint})
	return nil
}

// screwMass estimates a steel screw with head and nut for a hole and the thickness it clamps: the thread is the next
// common size below the hole and one diameter longer than the stack, the head 1.8 by 0.6 diameters, the nut 1.8 by
// 0.8; common practice.
func screwMass(hole, thick float64) float64 {
	d := hole
	for _, size := range []float64{5e-3, 4e-3, 3e-3, 2.5e-3, 2e-3} {
		if hole >= size-1e-6 {
			d = size
			break
		}
	}
	disc := math.Pi / 4 * d * d
	head := headRatio * headRatio
	return 7850 * disc * (thick + d + head*0.6*d + (head-1)*0.8*d)
}
