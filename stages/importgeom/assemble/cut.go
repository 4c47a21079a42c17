package assemble

import (
	"fmt"
	"math"
	"path"
	"sort"
	"strings"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
	"hushframe/stages/importgeom/airframefile"
	"hushframe/stages/importgeom/dxf"
	"hushframe/stages/importgeom/loops"
)

// DefaultTolerance is the distance (m) within which ends of curves are joined unless the plate says otherwise.
const DefaultTolerance = 0.02e-3

// Extents of drawings (m) beyond which the unit must be wrong.
const (
	smallest = 1e-3
	largest  = 100
)

// cut is one cut file as read for some layers, unit and tolerance.
type cut struct {
	drawing *dxf.Drawing
	found   loops.Result
	noted   bool
}

// Outlines reads the outlines of a cut file. The drawing and what was found are returned for those who want to know
// more than the outlines.
func Outlines(name string, data []byte, options dxf.Options, tolerance float64) (*dxf.Drawing, loops.Result, error) {
	d, err := dxf.Read(name, data, options)
	if err != nil {
		return nil, loops.Result{}, err
	}
	var pieces []loops.Piece
	box := outline.EmptyBox()
	for _, e := range d.Entities {
		for _, c := range e.Curves {
			box = box.Union(c.Bounds())
			pieces = append(pieces, loops.Piece{Curve: c, Source: e.String()})
		}
	}
	if size := math.Max(box.Width(), box.Height()); len(pieces) > 0 && (size > largest || size < smallest) {
		return nil, loops.Result{}, fault.New(fault.Input, "the drawing spans %.3g m in units of %q, which is no size for a plate", size, d.Unit).
			In("read cut file", name).Do(`say units = "mm", or what it is drawn in, where the file is named`)
	}
	return d, loops.Find(pieces, tolerance), nil
}

// region finds the outline of a plate in its cut file.
func (b *builder) region(pl *airframefile.Plate) (outline.Region, *fault.Error) {
	name := pl.Outline
	if !path.IsAbs(name) {
		name = path.Join(path.Dir(b.file.Path), name)
	}
	tolerance := pl.Tolerance.Or(DefaultTolerance)
	key := fmt.Sprintf("%q %q %q %g", name, pl.Layers, pl.Units, tolerance)
	c, ok := b.cuts[key]
	if !ok {
		data, err := b.read(name)
		if err != nil {
			return outline.Region{}, under(pl.Part, "outline", fault.From(err))
		}
		c = &cut{}
		c.drawing, c.found, err = Outlines(name, data, dxf.Options{Unit: pl.Units, Layers: pl.Layers}, tolerance)
		if err != nil {
			return outline.Region{}, under(pl.Part, "outline", fault.From(err))
		}
		b.cuts[key] = c
	}
	o, err := choose(c, pl)
	if err != nil {
		// What is wrong with a drawing is named by the drawing; the plate says who asked for it.
		err = err.In("read cut file", name).Of("airframe")
		return outline.Region{}, under(pl.Part, "outline", err)
	}
	if !c.noted {
		c.noted = true
		b.noteCut(name, c, o)
	}
	return o.Region, nil
}

// under puts the plate that names a file before the fault of the file.
func under(part airframefile.Part, attribute string, f *fault.Error) *fault.Error {
	out := part.Fault(attribute, "its cut file cannot be used")
	c := *f
	out.Kind, out.Remedy, c.Remedy, c.Argument = f.Kind, f.Remedy, "", ""
	out.Cause = &c
	return out
}

func choose(c *cut, pl *airframefile.Plate) (*loops.Outline, *fault.Error) {
	d, r := c.drawing, c.found
	if len(d.Entities) == 0 {
		var layers []string
		for _, l := range d.Layers {
			layers = append(layers, l.Name)
		}
		if len(layers) == 0 {
			return nil, fault.New(fault.Input, "the drawing has no curves").Do("export the outline as lines, arcs, polylines or splines")
		}
		wanted := strings.Join(pl.Layers, ", ")
		f := fault.New(fault.Input, "layer %q has no curves", wanted).Do("the drawing has the layers %s", strings.Join(layers, ", "))
		if n := nearest.Name(wanted, layers); n != "" {
			f = f.Do("did you mean %q? The drawing has the layers %s", n, strings.Join(layers, ", "))
		}
		return nil, f
	}
	if len(r.Tangles) > 0 {
		t := r.Tangles[0].Places[0]
		more := ""
		if n := len(r.Tangles[0].Places) - 1; n > 0 {
			more = fmt.Sprintf(", and in %d more places", n)
		}
		return nil, fault.New(fault.Input, "an outline crosses or touches itself or another one at %s: %s%s", place(t.At), strings.Join(t.Sources, ", "), more).
			Do("mend the drawing there, or name the layer with the outline alone")
	}
	if f := OpenOutline(r, pl.Tolerance.Or(DefaultTolerance)); f != nil {
		return nil, f
	}
	if pl.Pick != nil {
		var best *loops.Outline
		for i := range r.Outlines {
			o := &r.Outlines[i]
			if o.Region.Outer.Contains(*pl.Pick) && (best == nil || o.Depth > best.Depth) {
				best = o
			}
		}
		if best == nil {
			return nil, fault.New(fault.Input, "no outline contains the point of pick, %s", place(*pl.Pick)).Do("the outlines are %s", list(r.Outlines))
		}
		return best, nil
	}
	var top []loops.Outline
	for _, o := range r.Outlines {
		if o.Depth == 0 {
			top = append(top, o)
		}
	}
	switch len(top) {
	case 0:
		return nil, fault.New(fault.Input, "no outline is closed: %s", open(r)).Do("close the outline in the drawing")
	case 1:
		return &top[0], nil
	}
	return nil, fault.New(fault.Input, "there are %d separate outlines: %s", len(top), list(top)).
		Do(`choose one by a point inside it, as in pick = ["%.4g mm", "%.4g mm"], or by its layer`, Inside(top[0].Region).X*1e3, Inside(top[0].Region).Y*1e3)
}

// Inside gives a place well inside a region: the centre of its box if that is material, else the first hit of ever finer
// grids over the box.
func Inside(region outline.Region) outline.Point {
	box := region.Bounds()
	for n := 1; n < 40; n++ {
		for i := range n {
			for j := range n {
				p := outline.Point{X: box.Min.X + box.Width()*(float64(i)+0.5)/float64(n), Y: box.Min.Y + box.Height()*(float64(j)+0.5)/float64(n)}
				if region.Contains(p) {
					return p
				}
			}
		}
	}
	return region.Outer[0].P0
}

// list describes outlines by size and place.
func list(all []loops.Outline) string {
	var parts []string
	for i, o := range all {
		if i == 5 {
			parts = append(parts, fmt.Sprintf("and %d more", len(all)-5))
			break
		}
		box := o.Region.Bounds()
		parts = append(parts, fmt.Sprintf("%s by %s about %s", mm(box.Width()), mm(box.Height()), place(box.Min.Lerp(box.Max, 0.5))))
	}
	return strings.Join(parts, "; ")
}

// OpenOutline finds an open run that was meant to be closed: one whose ends are near each other for its length, or
// one that reaches beyond every closed outline. Other runs, such as engravings, centre lines and what hangs on a closed
// outline, do no harm.
func OpenOutline(r loops.Result, tolerance float64) *fault.Error {
	box := outline.EmptyBox()
	for _, o := range r.Outlines {
		box = box.Union(o.Region.Bounds())
	}
	for _, c := range r.Open {
		if c.Length <= 2*tolerance || c.Attached {
			continue
		}
		apart, other := c.From.Distance(c.To), c.To
		if c.Nearest < apart {
			apart, other = c.Nearest, c.NearestAt
		}
		if apart > 0.1*c.Length && box.Holds(c.From) && box.Holds(c.To) {
			continue
		}
		f := fault.New(fault.Input, "an outline is open: %s ends at %s, and the nearest other loose end, at %s, is %s away", c.FromPiece, place(c.From), place(other), mm(apart))
		if math.IsInf(apart, 0) || apart == 0 {
			f = fault.New(fault.Input, "an outline is open: %s ends at %s", c.FromPiece, place(c.From))
		}
		if apart > 0 && apart < 1e-3 {
			return f.Do(`close it in the drawing, or, if that is meant to be one point, give tolerance = "%.2g mm"`, math.Ceil(apart*1.05e5)/100)
		}
		return f.Do("close it in the drawing, or name the layer with the outline alone")
	}
	return nil
}

func open(r loops.Result) string {
	if len(r.Open) == 0 {
		return "the curves have no length"
	}
	c := r.Open[0]
	return fmt.Sprintf("%s ends at %s", c.FromPiece, place(c.From))
}

// noteCut says what was done to a drawing.
func (b *builder) noteCut(name string, c *cut, o *loops.Outline) {
	d, r := c.drawing, c.found
	var facts []string
	fact := func(format string, args ...any) { facts = append(facts, fmt.Sprintf(format, args...)) }
	if d.Overruled != "" {
		fact("drawn in %s by its header, taken as %s as the airframe file says", d.Overruled, d.Unit)
	}
	if n := len(r.Joined); n > 0 {
		widest := r.Joined[0]
		for _, g := range r.Joined {
			if g.Width > widest.Width {
				widest = g
			}
		}
		fact("%s closed, the widest %s at %s", plural(n, "gap"), mm(widest.Width), place(widest.At))
	}
	if r.Dropped > 0 {
		fact("%s on top of others dropped (%s)", plural(r.Dropped, "curve"), strings.Join(r.DroppedSources, ", "))
	}
	if r.Trimmed > 0 {
		fact("%s beyond a crossing trimmed", plural(r.Trimmed, "end"))
	}
	if n := len(r.Countersinks); n > 0 {
		fact("%s taken as its inner circle", plural(n, "countersink"))
	}
	stray := 0
	for _, q := range r.Open {
		if q.Length > 2*DefaultTolerance {
			stray++
		}
	}
	if stray > 0 {
		fact("%s ignored, the first at %s", plural(stray, "open run"), place(r.Open[0].From))
	}
	if n := len(r.Outlines) - 1; n > 0 {
		fact("%s besides the one used", plural(n, "outline"))
	}
	if len(d.Skipped) > 0 {
		var kinds []string
		for _, s := range d.Skipped {
			kinds = append(kinds, fmt.Sprintf("%d %s", s.N, s.Name))
		}
		sort.Strings(kinds)
		fact("not read: %s", strings.Join(kinds, ", "))
	}
	if len(facts) > 0 {
		b.note("%s: %s", name, strings.Join(facts, "; "))
	}
	if d.Cut {
		b.warn("cut-file-ends-early", name, "export it again", "the cut file has no end mark: a part of it may be missing")
	}
}

func plural(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
