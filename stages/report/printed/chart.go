package printed

import (
	"image/color"
	"math"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	vgdraw "gonum.org/v1/plot/vg/draw"

	"hushframe/stages/report/draw"
)

// Chart draws a chart of the page; nil when it has nothing to show. The description is left as it is, but for the ranges
// that it left open, which are filled in.
func Chart(title string, ch *draw.Chart) *Picture {
	if !ch.Fit() {
		return nil
	}
	width, height := 7.5, 4.2
	if ch.Square {
		width, height = 5, 5.2
	}
	b := &builder{ch: ch, out: sheet(title, ch.X.Label, ch.Y.Label, width, height)}
	b.out.about = ch.About
	b.p = b.out.plot
	for _, axis := range []struct {
		to   *plot.Axis
		from draw.Axis
	}{{&b.p.X, ch.X}, {&b.p.Y, ch.Y}} {
		axis.to.Min, axis.to.Max = axis.from.From, axis.from.To
		if axis.from.Log {
			axis.to.Scale = plot.LogScale{}
			if axis.from.To/axis.from.From >= 100 {
				axis.to.Tick.Marker = decades{}
			}
		}
	}
	if ch.Grid != nil {
		b.cells(ch.Grid)
	} else {
		grid(b.p)
	}
	b.bands()
	b.marks()
	b.curves()
	b.points()
	for _, note := range ch.Notes {
		b.out.legend = append(b.out.legend, entry{words: note})
	}
	b.p.Add(b.words)
	return b.out
}

// builder puts a chart together.
type builder struct {
	ch    *draw.Chart
	out   *Picture
	p     *plot.Plot
	words labels
}

// holds says whether a place lies within the chart from left to right and has a value.
func (b *builder) holds(x, y float64) bool {
	return x >= b.ch.X.From && x <= b.ch.X.To && !math.IsNaN(y) && !math.IsInf(y, 0) && (!b.ch.Y.Log || y > 0)
}

func (b *builder) clip(y float64) float64 {
	return math.Min(b.ch.Y.To, math.Max(b.ch.Y.From, y))
}

func (b *builder) put(x, y float64, words string, c color.Color, dx, dy vg.Length, across text.XAlignment, up text.YAlignment, others ...vg.Length) {
	l := label{x: x, y: y, words: words, style: style(8, c), dx: dx, dy: dy, others: others}
	l.style.XAlign, l.style.YAlign = across, up
	b.words = append(b.words, l)
}

func (b *builder) bands() {
	low, high := b.ch.Y.From, b.ch.Y.To
	for _, x := range b.ch.Bands {
		from, to := math.Max(x.From, b.ch.X.From), math.Min(x.To, b.ch.X.To)
		if !(to > from) {
			continue
		}
		b.p.Add(area(plotter.XYs{{X: from, Y: low}, {X: to, Y: low}, {X: to, Y: high}, {X: from, Y: high}}, faint(quiet, 0x2c)))
		b.put((from+to)/2, low, x.Label, quiet, 0, 3, text.XCenter, text.YBottom, -10, 10, -20, 20, -32, 32)
	}
}

func (b *builder) marks() {
	for _, m := range b.ch.Marks {
		if !(m.X >= b.ch.X.From && m.X <= b.ch.X.To) {
			continue
		}
		b.p.Add(line(plotter.XYs{{X: m.X, Y: b.ch.Y.From}, {X: m.X, Y: b.ch.Y.To}}, faint(quiet, 0x80), 0.6, 1, 2))
		b.put(m.X, b.ch.Y.To, m.Label, quiet, 0, -2, text.XCenter, text.YTop, 7, -7)
	}
}

// look is how curves of a class are drawn; classes differ in their dashes, not in colour alone.
type look struct {
	colour color.NRGBA
	width  vg.Length
	dashes []vg.Length
	over   bool // lies over a map or among many: its name stands at its end
}

var looks = map[string]look{
	"predicted":  {predicted, 1.2, nil, false},
	"observed":   {observed, 1.2, []vg.Length{4, 1.5}, false},
	"flown":      {set[2], 1.1, []vg.Length{1.5, 1.5}, false},
	"second":     {set[3], 1.1, []vg.Length{6, 2}, false},
	"order":      {observed, 0.9, []vg.Length{6, 2}, true},
	"over-order": {ink, 0.9, []vg.Length{6, 2}, true},
	"over-mode":  {color.NRGBA{0xff, 0xff, 0xff, 0xd0}, 0.8, []vg.Length{1, 2}, true},
}

// fewNames is how many curves are named in the legend; the names of more stand at their ends.
const fewNames = 6

func (b *builder) curves() {
	plain := 0
	for _, c := range b.ch.Curves {
		if !looks[c.Class].over {
			plain++
		}
	}
	turn := 0
	for _, c := range b.ch.Curves {
		l, known := looks[c.Class]
		if !known {
			l = look{set[turn%len(set)], 1.1, dashes[turn%len(dashes)], false}
			turn++
		}
		named := c.Name == ""
		if c.Lower != nil && c.Upper != nil {
			for _, piece := range b.around(c) {
				b.p.Add(area(piece, faint(l.colour, 0x38)))
			}
		}
		var last plotter.XYs
		for _, piece := range path(b.ch, c.X, c.Y) {
			drawn := line(piece, l.colour, l.width, l.dashes...)
			b.p.Add(drawn)
			if !named && !l.over && plain <= fewNames {
				b.out.legend = append(b.out.legend, entry{c.Name, drawn})
				named = true
			}
			last = piece
		}
		if !named && len(last) > 0 {
			words := quiet
			if b.ch.Grid != nil {
				words = ink
			}
			end := last[len(last)-1]
			b.put(end.X, end.Y, c.Name, words, -3, 1, text.XRight, text.YBottom, -18, -33, -48)
		}
	}
}

// dashes tell curves without a look of their own apart.
var dashes = [][]vg.Length{nil, {5, 2}, {2, 2}, {7, 2, 2, 2}}

// around outlines the band of a curve, piece by piece.
func (b *builder) around(c draw.Curve) (out []plotter.XYs) {
	var up, down plotter.XYs
	flush := func() {
		if len(up) > 1 {
			for i := len(down) - 1; i >= 0; i-- {
				up = append(up, down[i])
			}
			out = append(out, up)
		}
		up, down = nil, nil
	}
	for k, x := range c.X {
		if !b.holds(x, c.Lower[k]) || !b.holds(x, c.Upper[k]) {
			flush()
			continue
		}
		up, down = append(up, plotter.XY{X: x, Y: b.clip(c.Upper[k])}), append(down, plotter.XY{X: x, Y: b.clip(c.Lower[k])})
	}
	flush()
	return out
}

// glyphs of the classes of points; they differ in shape.
var glyphs = map[string]vgdraw.GlyphStyle{
	"observed": {Color: observed, Radius: 2.4, Shape: vgdraw.BoxGlyph{}},
	"firm":     {Color: predicted, Radius: 1.7, Shape: vgdraw.CircleGlyph{}},
	"loose":    {Color: color.NRGBA{0x9a, 0xa5, 0xa8, 0xff}, Radius: 1.5, Shape: vgdraw.CrossGlyph{}},
	"critical": {Color: observed, Radius: 2.2, Shape: vgdraw.RingGlyph{}},
}

func (b *builder) points() {
	sets := map[string]plotter.XYs{}
	var order []string
	for _, q := range b.ch.Points {
		if !b.holds(q.X, q.Y) || q.Y < b.ch.Y.From || q.Y > b.ch.Y.To {
			continue
		}
		if sets[q.Class] == nil {
			order = append(order, q.Class)
		}
		sets[q.Class] = append(sets[q.Class], plotter.XY{X: q.X, Y: q.Y})
		if q.Label != "" {
			b.put(q.X, q.Y, q.Label, glyphOf(q.Class).Color, 0, 5, text.XCenter, text.YBottom)
		}
	}
	for _, class := range order {
		b.p.Add(&plotter.Scatter{XYs: sets[class], GlyphStyle: glyphOf(class)})
	}
}

func glyphOf(class string) vgdraw.GlyphStyle {
	if g, ok := glyphs[class]; ok {
		return g
	}
	return vgdraw.GlyphStyle{Color: predicted, Radius: 2.4, Shape: vgdraw.RingGlyph{}}
}

// area is a filled outline.
func area(points plotter.XYs, c color.Color) *plotter.Polygon {
	return &plotter.Polygon{XYs: []plotter.XYs{points}, Color: c, LineStyle: vgdraw.LineStyle{Width: 0}}
}

// FileName makes a name fit for a file of a chart.
func FileName(id string) string {
	return strings.Map(func(r rune) rune {
		if r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || r == '-' || r == '_' {
			return r
		}
		return '-'
	}, id)
}
