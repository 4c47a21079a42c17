package assemble

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/stages/importgeom/airframefile"
	"hushframe/stages/importgeom/materials"
)

// Assembly is a frame put together.
type Assembly struct {
	Geometry   airframe.Geometry
	Properties airframe.Properties
	Totals     Totals
	// Removed are the names of inferred bolts that the file takes out.
	Removed []string
	// Notes are facts worth a line: what was assumed, joined, dropped or merged.
	Notes []string
	// Warnings are findings that deserve a look.
	Warnings []Warning
}

// Warning is a finding with a stable name, such as "standoff-expected".
type Warning struct {
	ID, Text, Where, Remedy string
}

// Build puts a frame together. read gives the content of a file by its path relative to the job, as Files.Read does.
// Faults are of kind Input or Missing and name the part and its line.
func Build(file *airframefile.File, read func(name string) ([]byte, error)) (*Assembly, error) {
	b := &builder{file: file, read: read, index: map[string]int{}, cuts: map[string]*cut{}, assumed: map[string][]string{}}
	if err := b.build(); err != nil {
		return nil, err
	}
	return &b.out, nil
}

type builder struct {
	file   *airframefile.File
	read   func(name string) ([]byte, error)
	out    Assembly
	cuts   map[string]*cut
	index  map[string]int // of plates by name
	plates []built
	holes  []hole
	sites  []site
	// assumed lists parts by what was assumed for them; order keeps first appearance.
	assumed map[string][]string
	order   []string
}

func (b *builder) build() *fault.Error {
	for _, step := range []func() *fault.Error{
		b.buildPlates, b.findHoles, b.bolts, b.standoffs, b.joints, b.contacts, b.rotors, b.lumps, b.connected, b.materials,
	} {
		if err := step(); err != nil {
			return err
		}
	}
	b.overlaps()
	b.bareFaces()
	b.out.Properties.DeclaredMass, b.out.Properties.Floor = b.file.AllUpMass, b.file.LossFloor
	b.out.Totals = total(&b.out.Geometry, &b.out.Properties)
	b.compareMass()
	b.noteAssumed()
	return nil
}

func (b *builder) note(format string, args ...any) {
	b.out.Notes = append(b.out.Notes, fmt.Sprintf(format, args...))
}

func (b *builder) warn(id, where, remedy, format string, args ...any) {
	b.out.Warnings = append(b.out.Warnings, Warning{id, fmt.Sprintf(format, args...), where, remedy})
}

// assume notes that a part took a value that the file does not give; parts with the same text share a line.
func (b *builder) assume(p airframefile.Part, format string, args ...any) {
	key := p.Kind + "\x00" + fmt.Sprintf(format, args...)
	if b.assumed[key] == nil {
		b.order = append(b.order, key)
	}
	if names := b.assumed[key]; len(names) == 0 || names[len(names)-1] != p.Name {
		b.assumed[key] = append(names, p.Name)
	}
}

func (b *builder) noteAssumed() {
	for _, key := range b.order {
		kind, text, _ := strings.Cut(key, "\x00")
		if names := strings.Join(b.assumed[key], ", "); names != "" {
			kind += " " + names
		}
		b.note("%s: %s", kind, text)
	}
}

// mm writes a length in millimetres.
func mm(x float64) string { return quantity.Format(x, "length", "mm") }

// grams writes a mass in grams.
func grams(x float64) string { return quantity.Format(x, "mass", "g") }

// place writes a point in millimetres.
func place(p outline.Point) string { return fmt.Sprintf("x %s, y %s", mm(p.X), mm(p.Y)) }

func (b *builder) material(name string) airframe.Material {
	if m, ok := b.file.Materials[name]; ok {
		return m
	}
	m, ok := materials.Find(name)
	if !ok {
		panic("assemble: the airframe file names the unknown material " + name)
	}
	return m
}

// materials lists those in use, by name, and computes the masses of plates and standoffs.
func (b *builder) materials() *fault.Error {
	used := map[string]bool{}
	p := &b.out.Properties
	for i := range p.Plates {
		pl := &p.Plates[i]
		area := b.out.Geometry.Plates[i].Region.Area()
		if pl.Material != "" {
			used[pl.Material] = true
			pl.Mass = area * b.out.Geometry.Plates[i].Thickness * b.material(pl.Material).Density
		}
		for _, ply := range pl.Plies {
			used[ply.Material] = true
			pl.Mass += area * ply.Thickness * b.material(ply.Material).Density
		}
	}
	for i, s := range p.Standoffs {
		g := b.out.Geometry.Standoffs[i]
		used[s.Material] = true
		p.Standoffs[i].Mass = math.Pi / 4 * (g.Outer*g.Outer - g.Inner*g.Inner) * norm(sub(g.Ends[1], g.Ends[0])) * b.material(s.Material).Density
	}
	var names []string
	for n := range used {
		names = append(names, n)
	}
	sort.Strings(names)
	var typical []string
	for _, n := range names {
		m := b.material(n)
		p.Materials = append(p.Materials, m)
		if m.Typical {
			typical = append(typical, fmt.Sprintf("%s (±%.0f %%)", n, 100*m.Scatter))
		}
	}
	if len(typical) > 0 {
		b.note("typical values from the built-in table, not measured: %s", strings.Join(typical, ", "))
	}
	return nil
}

// patch adds a patch and checks that the plate is below it.
func (b *builder) patch(part airframefile.Part, attribute string, p airframe.Patch) (int, *fault.Error) {
	region := b.plates[p.Plate].region
	inside, all := 0, 0
	const n = 12
	shape := footprint(p)
	box := outline.EmptyBox()
	for _, q := range shape {
		box = box.With(q)
	}
	loop := outline.Polygon(shape...)
	for i := range n {
		for j := range n {
			q := outline.Point{X: box.Min.X + box.Width()*(float64(i)+0.5)/n, Y: box.Min.Y + box.Height()*(float64(j)+0.5)/n}
			if !loop.Contains(q) {
				continue
			}
			all++
			if region.Contains(q) {
				inside++
			}
		}
	}
	name := b.plates[p.Plate].name
	if inside == 0 {
		at := inSpace(b.plates[p.Plate].frame, p.Centre, 0)
		return 0, part.Fault(attribute, "its footprint at %s does not lie on plate %q", place(outline.Point{X: at[0], Y: at[1]}), name).
			Do("the plate spans %s", b.span(p.Plate))
	}
	if 4*inside < all {
		b.warn("small-footprint", part.String(), "check its place and size",
			"only %d %% of the footprint %s lie on plate %q", 100*inside/all, p.Name, name)
	}
	b.out.Geometry.Patches = append(b.out.Geometry.Patches, p)
	return len(b.out.Geometry.Patches) - 1, nil
}

// span gives the extent of a plate in airframe axes, in words.
func (b *builder) span(i int) string {
	box := outline.EmptyBox()
	for _, q := range b.plates[i].region.Outer.Flatten(1e-3) {
		at := inSpace(b.plates[i].frame, q, 0)
		box = box.With(outline.Point{X: at[0], Y: at[1]})
	}
	return fmt.Sprintf("x %s to %s, y %s to %s", mm(box.Min.X), mm(box.Max.X), mm(box.Min.Y), mm(box.Max.Y))
}

// disc adds a round patch of an owner, such as "rotor fr"; what names it among the owner's.
func (b *builder) disc(part airframefile.Part, attribute, owner, what string, plate int, centre outline.Point, diameter float64) (int, *fault.Error) {
	return b.patch(part, attribute, airframe.Patch{Name: owner + "/" + what, Owner: owner, Plate: plate, Shape: airframe.Disc, Centre: centre, Radius: diameter / 2})
}

// locate puts airframe x, y onto a plate.
func (b *builder) locate(part airframefile.Part, attribute string, plate int, at outline.Point) (outline.Point, *fault.Error) {
	p, ok := onPlate(b.plates[plate].frame, at)
	if !ok {
		return p, part.Fault(attribute, "plate %q stands upright, so that x and y do not say where on it", b.plates[plate].name).
			Do("fasten the part to a plate that lies flat")
	}
	return p, nil
}
