package printed

import (
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	vgdraw "gonum.org/v1/plot/vg/draw"

	"hushframe/stages/report/draw"
)

// Campbell draws natural frequencies over rotor speed (curves), with the lines of orders (curves of class "order") and
// rings where they meet (points). It gives nil when nothing has a size.
func Campbell(title string, ch *draw.Chart) *Picture {
	if !(ch.X.To > ch.X.From && ch.Y.To > ch.Y.From) {
		return nil
	}
	out := sheet(title, ch.X.Label, ch.Y.Label, 7.5, 4.8)
	p := out.plot
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = ch.X.From, ch.X.To, ch.Y.From, ch.Y.To
	grid(p)
	inRange := func(x, y float64) bool { return x >= ch.X.From && x <= ch.X.To && y >= ch.Y.From && y <= ch.Y.To }
	var words labels
	put := func(x, y float64, t string, dx, dy vg.Length, xalign text.XAlignment, yalign text.YAlignment, others ...vg.Length) {
		l := label{x: x, y: y, words: t, style: style(8, quiet), dx: dx, dy: dy, others: others}
		l.style.XAlign, l.style.YAlign = xalign, yalign
		words = append(words, l)
	}
	for _, m := range ch.Marks {
		if m.X > ch.X.From && m.X <= ch.X.To {
			p.Add(line(plotter.XYs{{X: m.X, Y: ch.Y.From}, {X: m.X, Y: ch.Y.To}}, quiet, 1, 4, 3))
			put(m.X, ch.Y.From, m.Label, 4, 3, text.XLeft, text.YBottom)
		}
	}
	orders := 0
	for _, c := range ch.Curves {
		for _, piece := range pieces(c.X, c.Y, inRange) {
			last := piece[len(piece)-1]
			if c.Class == "order" {
				p.Add(line(piece, set[orders%len(set)], 0.9, 6, 2))
				put(last.X, last.Y, c.Name, -3, 1, text.XRight, text.YBottom)
				continue
			}
			p.Add(line(piece, predicted, 1.2))
			put(last.X, last.Y, c.Name, -3, 1, text.XRight, text.YBottom, -18, -33, -48)
		}
		if c.Class == "order" {
			orders++
		}
	}
	for _, m := range ch.Points {
		if inRange(m.X, m.Y) {
			p.Add(&plotter.Scatter{XYs: plotter.XYs{{X: m.X, Y: m.Y}}, GlyphStyle: vgdraw.GlyphStyle{Color: observed, Radius: 2.2, Shape: vgdraw.RingGlyph{}}})
		}
	}
	p.Add(words)
	return out
}
