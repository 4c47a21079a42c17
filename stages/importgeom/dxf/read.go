package dxf

import (
	"fmt"
	"sort"
	"strconv"
	"strings"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
)

// Options say what the drawing itself may leave open. The zero value reads all layers in the drawing's own unit.
type Options struct {
	// Unit is the name of the unit of length, such as "mm"; it wins over the drawing. Empty takes the drawing's.
	Unit string
	// Layers keeps only entities on these; names do not distinguish capitals. Empty keeps all.
	Layers []string
	// Tolerance (m) bounds the deviation of rational splines and those of degree above three; 0 is 1e-7.
	Tolerance float64
}

// Drawing is the flat geometry of one file.
type Drawing struct {
	// Release is the value of $ACADVER, "" when absent.
	Release string
	// Unit is the unit used, Declared whether the drawing states it, and Overruled the drawing's own when
	// Options.Unit differs from it.
	Unit      string
	Declared  bool
	Overruled string
	Entities  []Entity
	// Skipped counts, by what and why, entities that are no flat geometry, sorted.
	Skipped []Count
	// Layers counts the entities read on each layer, kept or not, sorted by name.
	Layers []Count
	// Cut is true when the file has no end mark, as when a copy was interrupted.
	Cut bool
}

// Count is a number of things of one name.
type Count struct {
	Name string
	N    int
}

// Entity is one entity of the drawing, blocks taken apart.
type Entity struct {
	Type   string // "LINE", "ARC", ...
	Layer  string
	Handle string // as in the file; "" when it has none
	Line   int    // of the file, where it begins
	// Curves are in metres, in order, each beginning where the one before it ends.
	Curves []outline.Curve
}

// String names the entity as error messages do.
func (e Entity) String() string {
	s := e.Type
	if e.Handle != "" {
		s += " " + e.Handle
	}
	return fmt.Sprintf("%s (line %d)", s, e.Line)
}

const (
	maxCurves = 400_000
	maxDepth  = 24
)

// Read reads a drawing. The name is used in faults, which are of kind Input.
func Read(name string, data []byte, options Options) (*Drawing, error) {
	d, err := read(data, options)
	if err != nil {
		return nil, err.In("read cut file", name)
	}
	return d, nil
}

func read(data []byte, options Options) (*Drawing, *fault.Error) {
	sections, cut, err := records(data)
	if err != nil {
		return nil, err
	}
	entities, ok := sections["ENTITIES"]
	if !ok {
		return nil, fault.New(fault.Input, "the file has no ENTITIES section: it is no DXF drawing, or a part of one").
			Do("export the drawing again as ASCII DXF")
	}
	d := &Drawing{Cut: cut}
	code := 0
	for _, v := range sections["HEADER"] {
		switch v.kind {
		case "$ACADVER":
			d.Release = v.text(1)
		case "$INSUNITS":
			if code, err = v.whole(70, 0); err != nil {
				return nil, err
			}
		}
	}
	own, declared := unitOf(code)
	d.Declared = declared
	metre := own.metre
	if declared {
		d.Unit = own.names[0]
	}
	if options.Unit != "" {
		m, ok := UnitLength(options.Unit)
		if !ok {
			return nil, fault.New(fault.Input, "%q is no unit of length", options.Unit).
				Do("use one of %s", strings.Join(UnitNames(), ", "))
		}
		if declared && m != metre {
			d.Overruled = d.Unit
		}
		metre, d.Unit = m, options.Unit
	}
	r := reader{
		tolerance: options.Tolerance,
		keep:      map[string]bool{},
		blocks:    map[string]block{},
		skipped:   map[string]int{},
		layers:    map[string]int{},
	}
	if r.tolerance <= 0 {
		r.tolerance = 1e-7
	}
	if metre > 0 {
		r.tolerance /= metre // the reader works in units of the drawing
	}
	for _, l := range options.Layers {
		r.keep[strings.ToLower(l)] = true
	}
	if err := r.readBlocks(sections["BLOCKS"]); err != nil {
		return nil, err
	}
	if err := r.readEntities(grouped(entities), placement{at: outline.Identity()}); err != nil {
		return nil, err
	}
	d.Skipped, d.Layers = counts(r.skipped), counts(r.layers)
	if metre == 0 {
		return nil, noUnit(code, r.entities)
	}
	scale := outline.Stretch(metre, metre)
	for _, e := range r.entities {
		for i := range e.Curves {
			e.Curves[i] = e.Curves[i].Transform(scale)
		}
	}
	d.Entities = r.entities
	return d, nil
}

// noUnit says how large the drawing would be in the units people use, which tells the right one at a glance.
func noUnit(code int, entities []Entity) *fault.Error {
	f := fault.New(fault.Input, "the drawing does not state its unit of length ($INSUNITS is missing or unitless)")
	if _, known := unitOf(code); !known && code != 0 {
		f = fault.New(fault.Input, "the drawing states an unknown unit of length ($INSUNITS is %d)", code)
	}
	box := outline.EmptyBox()
	for _, e := range entities {
		for _, c := range e.Curves {
			box = box.Union(c.Bounds())
		}
	}
	if box.Width() < 0 {
		return f.Do(`say units = "mm", or what it is drawn in, where the file is named`)
	}
	w, h := box.Width(), box.Height()
	return f.Do(`say units = "mm" where the file is named if the part is %.4g mm by %.4g mm, or units = "inch" if it is %.4g inch by %.4g inch`, w, h, w, h)
}

func counts(m map[string]int) []Count {
	var out []Count
	for n, c := range m {
		out = append(out, Count{n, c})
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Name < out[j].Name })
	return out
}

// grouped puts vertices below their polyline and leaves out the attributes of an insert.
func grouped(flat []record) []record {
	var out []record
	for i := 0; i < len(flat); i++ {
		r := flat[i]
		if r.kind == "POLYLINE" || r.kind == "INSERT" && r.text(66) == "1" {
			for i+1 < len(flat) && (flat[i+1].kind == "VERTEX" || flat[i+1].kind == "ATTRIB") {
				i++
				r.below = append(r.below, flat[i])
			}
			if i+1 < len(flat) && flat[i+1].kind == "SEQEND" {
				i++
			}
		}
		out = append(out, r)
	}
	return out
}

// block is a named group of entities with the point that an insert puts in place.
type block struct {
	base    outline.Point
	records []record
}

func (r *reader) readBlocks(flat []record) *fault.Error {
	var name string
	var b block
	open := false
	for _, rec := range flat {
		switch {
		case rec.kind == "BLOCK":
			p, err := rec.reals(10, 20)
			if err != nil {
				return err
			}
			name, b, open = blockName(rec.text(2)), block{base: outline.Point{X: p[0], Y: p[1]}}, true
		case rec.kind == "ENDBLK":
			if open {
				b.records = grouped(b.records)
				r.blocks[name] = b
			}
			open = false
		case open:
			b.records = append(b.records, rec)
		}
	}
	return nil
}

func blockName(s string) string { return strings.ToUpper(s) }

// handle gives the handle of an entity, which may be empty or absent.
func (rec record) handle() string {
	h := rec.text(5)
	if _, err := strconv.ParseUint(h, 16, 64); err != nil {
		return ""
	}
	return strings.ToUpper(h)
}

func (rec record) at(err *fault.Error) *fault.Error {
	return err.At("%s", Entity{Type: rec.kind, Handle: rec.handle(), Line: rec.line})
}
