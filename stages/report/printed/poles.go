package printed

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	vgdraw "gonum.org/v1/plot/vg/draw"

	"hushframe/stages/report/draw"
)

// Pole is a pole of a model of some order.
type Pole struct {
	Order     int
	Frequency float64 // Hz
	Stable    bool
}

// Poles draws a stabilisation diagram: poles of models of rising order over frequency, the stable ones filled, with the
// modes made of them as marks. It gives nil without poles in range.
func Poles(title string, from, to float64, poles []Pole, marks []draw.Mark) *Picture {
	var sets [2]plotter.XYs
	least, most := math.Inf(1), 0.0
	for _, q := range poles {
		if q.Frequency < from || q.Frequency > to {
			continue
		}
		k := 0
		if q.Stable {
			k = 1
		}
		sets[k] = append(sets[k], plotter.XY{X: q.Frequency, Y: float64(q.Order)})
		least, most = math.Min(least, float64(q.Order)), math.Max(most, float64(q.Order))
	}
	if most == 0 {
		return nil
	}
	out := sheet(title, "frequency, Hz", "order of the model", 7.5, 4)
	p := out.plot
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = from, to, math.Max(0, least-2), most*1.12+2
	grid(p)
	var words labels
	for _, m := range marks {
		if m.X < from || m.X > to {
			continue
		}
		p.Add(line(plotter.XYs{{X: m.X, Y: p.Y.Min}, {X: m.X, Y: p.Y.Max}}, faint(observed, 0x90), 0.8, 3, 2))
		l := label{x: m.X, y: p.Y.Max, words: m.Label, style: style(8, observed), dy: -2}
		l.style.XAlign, l.style.YAlign = text.XCenter, text.YTop
		words = append(words, l)
	}
	for k, glyph := range []struct {
		name  string
		style vgdraw.GlyphStyle
	}{
		{"not stable", vgdraw.GlyphStyle{Color: color.NRGBA{0x9a, 0xa5, 0xa8, 0xff}, Radius: 1.5, Shape: vgdraw.CrossGlyph{}}},
		{"stable", vgdraw.GlyphStyle{Color: predicted, Radius: 1.7, Shape: vgdraw.CircleGlyph{}}},
	} {
		if len(sets[k]) > 0 {
			s := &plotter.Scatter{XYs: sets[k], GlyphStyle: glyph.style}
			p.Add(s)
			out.legend = append(out.legend, entry{glyph.name, s})
		}
	}
	p.Add(words)
	return out
}
