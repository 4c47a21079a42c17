package printed

import (
	"math"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	vgdraw "gonum.org/v1/plot/vg/draw"

	"hushframe/stages/report/draw"
)

// Campbell draws natural frequencies over rotor speed, with the lines of orders and rings where they meet. It gives nil when
// nothing has a size.
func Campbell(title string, w *draw.Whirl) *Picture {
	if !(w.Fastest > 0 && w.Highest > 0) {
		return nil
	}
	out := sheet(title, "rotor speed, rpm", "natural frequency, Hz", 7.5, 4.8)
	p := out.plot
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = 0, w.Fastest, 0, w.Highest
	grid(p)
	var words labels
	put := func(x, y float64, t string, dx, dy vg.Length, xalign text.XAlignment, yalign text.YAlignment, others ...vg.Length) {
		l := label{x: x, y: y, words: t, style: style(8, quiet), dx: dx, dy: dy, others: others}
		l.style.XAlign, l.style.YAlign = xalign, yalign
		words = append(words, l)
	}
	if w.Mark.X > 0 && w.Mark.X <= w.Fastest {
		p.Add(line(plotter.XYs{{X: w.Mark.X, Y: 0}, {X: w.Mark.X, Y: w.Highest}}, quiet, 1, 4, 3))
		put(w.Mark.X, 0, w.Mark.Label, 4, 3, text.XLeft, text.YBottom)
	}
	for i, o := range w.Orders {
		end := math.Min(w.Fastest, w.Highest/o.Slope)
		l := line(plotter.XYs{{X: 0, Y: 0}, {X: end, Y: end * o.Slope}}, set[i%len(set)], 0.9, 6, 2)
		p.Add(l)
		put(end*0.97, end*0.97*o.Slope, o.Label, -3, 1, text.XRight, text.YBottom)
	}
	for _, c := range w.Lines {
		for _, piece := range pieces(c.X, c.Y, func(x, y float64) bool { return x <= w.Fastest && y >= 0 && y <= w.Highest }) {
			p.Add(line(piece, predicted, 1.2))
			last := piece[len(piece)-1]
			put(last.X, last.Y, c.Name, -3, 1, text.XRight, text.YBottom, -18, -33, -48)
		}
	}
	for _, m := range w.Meets {
		if m.X <= w.Fastest && m.Y <= w.Highest {
			p.Add(&plotter.Scatter{XYs: plotter.XYs{{X: m.X, Y: m.Y}}, GlyphStyle: vgdraw.GlyphStyle{Color: observed, Radius: 2.2, Shape: vgdraw.RingGlyph{}}})
		}
	}
	p.Add(words)
	return out
}
