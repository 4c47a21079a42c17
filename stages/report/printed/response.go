package printed

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	vgdraw "gonum.org/v1/plot/vg/draw"

	"hushframe/stages/report/draw"
)

// decadesShown is how far below the highest value a response is drawn.
const decadesShown = 6

// Response draws densities over frequency on a logarithmic scale: curves with the band around them, ranges set apart, marks
// of modes and peaks. It gives nil when no curve has a positive value in range.
func Response(title string, ch *draw.Chart) *Picture {
	low, high := math.Inf(1), 0.0
	inRange := func(x, y float64) bool { return x >= ch.X.From && x <= ch.X.To && y > 0 && !math.IsInf(y, 0) }
	for _, c := range ch.Curves {
		for k, x := range c.X {
			if inRange(x, c.Y[k]) {
				low, high = math.Min(low, c.Y[k]), math.Max(high, c.Y[k])
			}
		}
	}
	if !(high > 0) {
		return nil
	}
	out := sheet(title, "frequency, Hz", ch.Y.Label, 7.5, 4)
	p := out.plot
	p.X.Min, p.X.Max = ch.X.From, ch.X.To
	logarithmic(p, low, high)
	grid(p)
	clip := func(y float64) float64 { return math.Min(p.Y.Max, math.Max(p.Y.Min, y)) }

	var words labels
	for _, b := range ch.Bands {
		from, to := math.Max(b.From, ch.X.From), math.Min(b.To, ch.X.To)
		if to <= from {
			continue
		}
		p.Add(area(plotter.XYs{{X: from, Y: p.Y.Min}, {X: to, Y: p.Y.Min}, {X: to, Y: p.Y.Max}, {X: from, Y: p.Y.Max}}, faint(quiet, 0x2c)))
		l := label{x: (from + to) / 2, y: p.Y.Min, words: b.Label, style: style(8, quiet), dy: 3, others: []vg.Length{-10, 10, -20, 20, -32, 32}}
		l.style.XAlign, l.style.YAlign = text.XCenter, text.YBottom
		words = append(words, l)
	}
	for _, m := range ch.Marks {
		if m.X < ch.X.From || m.X > ch.X.To {
			continue
		}
		p.Add(line(plotter.XYs{{X: m.X, Y: p.Y.Min}, {X: m.X, Y: p.Y.Max}}, faint(quiet, 0x60), 0.5, 1, 2))
		l := label{x: m.X, y: p.Y.Max, words: m.Label, style: style(8, quiet), dy: -2}
		l.style.XAlign, l.style.YAlign = text.XCenter, text.YTop
		words = append(words, l)
	}
	for _, c := range ch.Curves {
		colour := predicted
		switch c.Class {
		case "observed":
			colour = observed
		case "flown":
			colour = set[2]
		}
		if c.Lower != nil {
			for _, piece := range around(c, inRange, clip) {
				p.Add(area(piece, faint(colour, 0x38)))
			}
		}
		first := true
		for _, piece := range pieces(c.X, c.Y, inRange) {
			for i := range piece {
				piece[i].Y = clip(piece[i].Y)
			}
			l := line(piece, colour, 1.2)
			if c.Class == "observed" {
				l.Dashes = []vg.Length{4, 1.5} // not by colour alone
			}
			if c.Class == "flown" {
				l.Dashes = []vg.Length{1.5, 1.5}
			}
			p.Add(l)
			if first {
				out.legend = append(out.legend, entry{c.Name, l})
				first = false
			}
		}
	}
	for _, q := range ch.Points {
		if !inRange(q.X, q.Y) || q.Y < p.Y.Min {
			continue
		}
		glyph := vgdraw.GlyphStyle{Color: predicted, Radius: 2.4, Shape: vgdraw.RingGlyph{}}
		if q.Class == "observed" {
			glyph = vgdraw.GlyphStyle{Color: observed, Radius: 2.4, Shape: vgdraw.BoxGlyph{}}
		}
		p.Add(&plotter.Scatter{XYs: plotter.XYs{{X: q.X, Y: q.Y}}, GlyphStyle: glyph})
		if q.Label != "" {
			l := label{x: q.X, y: q.Y, words: q.Label, style: style(8, glyph.Color), dy: 5}
			l.style.XAlign, l.style.YAlign = text.XCenter, text.YBottom
			words = append(words, l)
		}
	}
	p.Add(words)
	for _, n := range ch.Notes {
		out.legend = append(out.legend, entry{words: n})
	}
	return out
}

// logarithmic sets the scale upwards, over whole decades that hold the values.
func logarithmic(p *plot.Plot, low, high float64) {
	p.Y.Max = math.Pow(10, math.Ceil(math.Log10(high)+0.3))
	p.Y.Min = math.Max(math.Pow(10, math.Floor(math.Log10(low))), p.Y.Max/math.Pow(10, decadesShown))
	p.Y.Scale, p.Y.Tick.Marker = plot.LogScale{}, decades{}
}

// area is a filled outline.
func area(points plotter.XYs, c interface{ RGBA() (r, g, b, a uint32) }) *plotter.Polygon {
	return &plotter.Polygon{XYs: []plotter.XYs{points}, Color: c, LineStyle: vgdraw.LineStyle{Width: 0}}
}

// around outlines the band of a curve, piece by piece.
func around(c draw.Curve, use func(x, y float64) bool, clip func(float64) float64) (out []plotter.XYs) {
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
		if !use(x, c.Lower[k]) || !use(x, c.Upper[k]) {
			flush()
			continue
		}
		up, down = append(up, plotter.XY{X: x, Y: clip(c.Upper[k])}), append(down, plotter.XY{X: x, Y: clip(c.Lower[k])})
	}
	flush()
	return out
}
