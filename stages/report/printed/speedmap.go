package printed

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"hushframe/stages/report/draw"
)

// Map is a density over rotor speed and frequency, in cells of speed.
type Map struct {
	Across string // what runs across, with its unit
	Label  string // of the density, with its unit
	Cells  []Cell
	Top    float64 // highest frequency drawn, Hz
	Orders []Order
	Modes  []draw.Mark // at a frequency (X)
}

// Order is a line of so many Hz per unit of what runs across.
type Order struct {
	Slope float64
	Label string
}

// Cell is the spectrum at one range of speed.
type Cell struct {
	From, To float64
	Start    float64 // Hz, of the first value; one at 0 Hz is not drawn
	Step     float64 // Hz between values
	Density  []float64
}

// rows gives the highest value in each of the rows of pixels up to top.
func (c Cell) rows(top float64) []float64 {
	out := make([]float64, mapRows)
	for k, v := range c.Density {
		f := c.Start + float64(k)*c.Step
		if f <= 0 {
			continue
		}
		for at := max(0, int((f-c.Step/2)/top*mapRows)); at < mapRows && at <= int((f+c.Step/2)/top*mapRows); at++ {
			out[at] = math.Max(out[at], v)
		}
	}
	return out
}

// mapRows is how many rows of pixels a cell has: each takes the highest value there, so that no line is lost.
const mapRows = 240

// mapDepth is how far below the highest value the colours go, dB.
const mapDepth = 50

// SpeedMap draws a map with the lines of orders and the frequencies of modes over it. It gives nil without a positive value.
func SpeedMap(title string, m Map) *Picture {
	low, high, loudest := math.Inf(1), math.Inf(-1), 0.0
	for _, c := range m.Cells {
		low, high = math.Min(low, c.From), math.Max(high, c.To)
		for k, v := range c.Density {
			if f := c.Start + float64(k)*c.Step; f <= m.Top && f > 0 {
				loudest = math.Max(loudest, v)
			}
		}
	}
	if !(loudest > 0) || !(high > low) || !(m.Top > 0) {
		return nil
	}
	out := sheet(title, m.Across, "frequency, Hz", 7.5, 4.8)
	p := out.plot
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = low, high, 0, m.Top
	for i, c := range m.Cells {
		rows := c.rows(m.Top)
		if i+1 < len(m.Cells) && m.Cells[i+1].From <= c.To {
			c.To += (c.To - c.From) / 10 // under the next one, so that no seam shows
		}
		for from := 0; from < mapRows; {
			shade := shadeOf(rows[from], loudest)
			to := from + 1
			for to < mapRows && shadeOf(rows[to], loudest) == shade {
				to++
			}
			if shade > 0 {
				y0, y1 := float64(from)/mapRows*m.Top, float64(to)/mapRows*m.Top
				q := area(plotter.XYs{{X: c.From, Y: y0}, {X: c.To, Y: y0}, {X: c.To, Y: y1}, {X: c.From, Y: y1}}, shades[shade])
				p.Add(q)
			}
			from = to
		}
	}
	var words labels
	put := func(x, y float64, t string, xalign text.XAlignment, others ...vg.Length) {
		l := label{x: x, y: y, words: t, style: style(8, ink), dy: 2, others: others}
		l.style.XAlign, l.style.YAlign = xalign, text.YBottom
		words = append(words, l)
	}
	for _, o := range m.Orders {
		from, to := low, math.Min(high, m.Top/o.Slope)
		if to <= from {
			continue
		}
		p.Add(line(plotter.XYs{{X: from, Y: from * o.Slope}, {X: to, Y: to * o.Slope}}, ink, 0.9, 6, 2))
		if end := to - 0.03*(high-low); to < high {
			put(end, end*o.Slope, o.Label, text.XRight)
		} else {
			put(from+0.01*(high-low), from*o.Slope, o.Label, text.XLeft)
		}
	}
	for _, mode := range m.Modes {
		if mode.X <= m.Top {
			p.Add(line(plotter.XYs{{X: low, Y: mode.X}, {X: high, Y: mode.X}}, faint(predicted, 0xa0), 0.6, 1, 2))
			put(high-0.005*(high-low), mode.X, mode.Label, text.XRight, -18, -33)
		}
	}
	p.Add(words)
	for _, k := range []int{draw.Levels, draw.Levels / 2, 1} {
		out.legend = append(out.legend, entry{fmt.Sprintf("%.2g %s", loudest*math.Pow(10, -mapDepth/10*(1-float64(k)/draw.Levels)), m.Label), area(nil, shades[k])})
	}
	return out
}

// shadeOf is the step of a value, 0 when it is too low to show.
func shadeOf(v, loudest float64) int {
	if !(v > 0) {
		return 0
	}
	return max(0, min(draw.Levels, int(math.Ceil(draw.Levels*(1+10*math.Log10(v/loudest)/mapDepth)))))
}

// shades are those of the page for displacements, on white.
var shades = func() []color.NRGBA {
	out := []color.NRGBA{{0xff, 0xff, 0xff, 0xff}}
	for k := range draw.Levels {
		var c color.NRGBA
		fmt.Sscanf(draw.OnLight(k), "#%02x%02x%02x", &c.R, &c.G, &c.B)
		c.A = 0xff
		out = append(out, c)
	}
	return out
}()

// Lines draws amplitudes over rotor speed on a logarithmic scale, one curve for each source. It gives nil without a positive value.
func Lines(title, unit string, curves []draw.Curve, mark draw.Mark) *Picture {
	low, high, left, right := math.Inf(1), 0.0, math.Inf(1), 0.0
	for _, c := range curves {
		for k, y := range c.Y {
			if y > 0 && !math.IsInf(y, 0) {
				low, high = math.Min(low, y), math.Max(high, y)
				left, right = math.Min(left, c.X[k]), math.Max(right, c.X[k])
			}
		}
	}
	if !(high > 0) || !(right > left) {
		return nil
	}
	out := sheet(title, "rotor speed, rpm", unit, 7.5, 4)
	p := out.plot
	p.X.Min, p.X.Max = left, right
	logarithmic(p, low, high)
	grid(p)
	var words labels
	if mark.X > left && mark.X < right {
		p.Add(line(plotter.XYs{{X: mark.X, Y: p.Y.Min}, {X: mark.X, Y: p.Y.Max}}, quiet, 1, 4, 3))
		l := label{x: mark.X, y: p.Y.Max, words: mark.Label, style: style(8, quiet), dx: 4, dy: -2}
		l.style.XAlign, l.style.YAlign = text.XLeft, text.YTop
		words = append(words, l)
	}
	for i, c := range curves {
		first := true
		for _, piece := range pieces(c.X, c.Y, func(_, y float64) bool { return y >= p.Y.Min && !math.IsInf(y, 0) }) {
			l := line(piece, set[i%len(set)], 1.3, dashes[i%len(dashes)]...)
			p.Add(l)
			if first {
				out.legend = append(out.legend, entry{c.Name, l})
				first = false
			}
		}
	}
	p.Add(words)
	return out
}

// dashes tell curves apart without colours.
var dashes = [][]vg.Length{nil, {5, 2}, {2, 2}, {7, 2, 2, 2}}
