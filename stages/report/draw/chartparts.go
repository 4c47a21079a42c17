package draw

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"hushframe/stages/report/pack"
)

// power writes ten to a power with raised digits.
func power(d int) string {
	switch d {
	case 0:
		return "1"
	case 1:
		return "10"
	case -1:
		return "0.1"
	}
	raised := strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹")
	return "10" + raised.Replace(fmt.Sprint(d))
}

// step gives a round step that divides a span into at most n parts.
func step(span float64, n int) float64 {
	least := span / float64(n)
	unit := math.Pow(10, math.Floor(math.Log10(least)))
	for _, m := range []float64{1, 2, 5} {
		if m*unit >= least*(1-1e-9) {
			return m * unit
		}
	}
	return 10 * unit
}

// bandLabel is centred at a place of the picture.
type bandLabel struct {
	x, y float64
	text string
}

// bands draws the hatching and says where its labels go.
func (ch *Chart) bands(c *canvas, f frame) (labels []bandLabel) {
	if len(ch.Bands) == 0 {
		return nil
	}
	id := "hatch-" + ch.ID
	c.start("defs")
	c.start("pattern", "id", id, "width", "6", "height", "6", "patternUnits", "userSpaceOnUse", "patternTransform", "rotate(45)")
	c.tag("path", "class", "hatch", "d", "M0 0V6")
	c.end("pattern")
	c.end("defs")
	type label struct{ x0, x1, row float64 }
	var taken []label
	for _, b := range ch.Bands {
		x0, x1 := f.atX(math.Max(b.From, f.x.From)), f.atX(math.Min(b.To, f.x.To))
		if x1 <= left || x0 >= f.right() || x1 < x0 {
			continue
		}
		c.tag("rect", "class", "band", "fill", "url(#"+id+")", "x", x0, "y", top, "width", math.Max(1.5, x1-x0), "height", f.bottom()-top)
		at := math.Min(math.Max((x0+x1)/2, left+30), f.right()-30)
		half := 3.4 * float64(len([]rune(b.Label)))
		at = math.Min(at, f.right()-half)
		free := label{x0: at - half - 4, x1: at + half + 4}
		for i := 0; i < len(taken); i++ {
			if t := taken[i]; t.row == free.row && t.x0 < free.x1 && t.x1 > free.x0 {
				free.row, i = free.row+1, -1
			}
		}
		taken = append(taken, free)
		labels = append(labels, bandLabel{at, f.bottom() - 6 - 13*free.row, b.Label})
	}
	return labels
}

// marks draws lines across, with labels in one row that give way to each other and a leader from each to its line.
func (ch *Chart) marks(c *canvas, f frame) {
	var shown []Mark
	longest := 0
	for _, m := range ch.Marks {
		if f.x.holds(m.X) {
			shown = append(shown, m)
			longest = max(longest, len([]rune(m.Label)))
		}
	}
	sort.SliceStable(shown, func(i, j int) bool { return shown[i].X < shown[j].X })
	width := 7*float64(longest) + 5
	at := make([]float64, len(shown))
	for i, m := range shown {
		at[i] = f.atX(m.X)
	}
	spread := Spread(at, width, left, f.right())
	for i, m := range shown {
		x := at[i]
		c.line(x, top, x, f.bottom(), "mode")
		if spread != nil {
			c.line(x, top, spread[i], top-10, "leader")
			c.text(spread[i], top-14, "mode-label", "middle", m.Label)
		}
	}
}

// Spread moves ascending places as little as possible (by least squares) so that neighbours are at least a width apart
// and all stay within bounds; nil when there is no room. It is the pooling of adjacent violators (R. E. Barlow et al.,
// Statistical Inference under Order Restrictions, 1972) on places less their rank times the width.
func Spread(at []float64, width, from, to float64) []float64 {
	if len(at) == 0 || float64(len(at)-1)*width > to-from {
		return nil
	}
	type pool struct {
		sum float64
		n   int
	}
	var pools []pool
	for i, x := range at {
		pools = append(pools, pool{x - float64(i)*width, 1})
		for k := len(pools) - 1; k > 0 && pools[k].sum/float64(pools[k].n) < pools[k-1].sum/float64(pools[k-1].n); k-- {
			pools[k-1].sum, pools[k-1].n = pools[k-1].sum+pools[k].sum, pools[k-1].n+pools[k].n
			pools = pools[:k]
		}
	}
	out := make([]float64, 0, len(at))
	last := to - float64(len(at)-1)*width
	for _, p := range pools {
		q := math.Max(from, math.Min(last, p.sum/float64(p.n)))
		for range p.n {
			out = append(out, q+float64(len(out))*width)
		}
	}
	return out
}

// spot is the middle of a short label.
type spot struct{ x, y float64 }

// points marks points, and labels them where there is room: above, then to one side, then the other.
func (ch *Chart) points(c *canvas, f frame, taken []spot) {
	shown := func(p Point) bool { return f.x.holds(p.X) && f.y.drawable(p.Y) && p.Y <= f.y.To && p.Y >= f.y.From }
	room := func(p spot) bool {
		if p.y < top+8 || p.x < left+14 || p.x > f.right()-14 {
			return false
		}
		for _, t := range taken {
			if math.Abs(t.x-p.x) < 27 && math.Abs(t.y-p.y) < 13 {
				return false
			}
		}
		return true
	}
	for _, p := range ch.Points {
		if shown(p) && p.Label != "" {
			taken = append(taken, spot{f.atX(p.X), f.atY(p.Y) + 4})
		}
	}
	for _, p := range ch.Points {
		if !shown(p) {
			continue
		}
		x, y := f.atX(p.X), f.atY(p.Y)
		c.start("g", "class", "point "+p.Class)
		if p.About != "" {
			c.words("title", p.About)
		}
		switch p.Class {
		case "observed":
			c.tag("rect", "x", x-3.5, "y", y-3.5, "width", 7.0, "height", 7.0)
		case "loose":
			c.tag("path", "d", "M"+num(x-2.5)+" "+num(y-2.5)+"l5 5m0 -5l-5 5")
		case "firm":
			c.tag("circle", "cx", x, "cy", y, "r", 2.4)
		default:
			c.tag("circle", "cx", x, "cy", y, "r", 4.0)
		}
		c.end("g")
		if p.Label == "" {
			continue
		}
		sides := []spot{{x, y - 9.5}, {x + 28, y + 4}, {x - 28, y + 4}}
		if p.Class == "observed" {
			sides = []spot{{x, y - 9.5}, {x - 28, y + 4}, {x + 28, y + 4}}
		}
		for _, at := range sides {
			if room(at) {
				taken = append(taken, at)
				c.text(at.x, at.y, "peak-label "+p.Class, "middle", p.Label)
				break
			}
		}
	}
}

// names writes each curve's name at its right end and says what room that takes.
func (ch *Chart) names(c *canvas, f frame) (taken []spot) {
	type tag struct {
		x, y  float64
		curve Curve
	}
	var ends []tag
	for _, curve := range ch.Curves {
		if x, y, ok := curve.at(f.x.To); ok && curve.Name != "" && f.x.holds(x) && f.shows(y) {
			ends = append(ends, tag{f.atX(x) + 8, f.atY(y), curve})
			continue
		}
		for k := len(curve.X) - 1; k >= 0 && curve.Name != ""; k-- {
			if f.x.holds(curve.X[k]) && f.shows(curve.Y[k]) {
				ends = append(ends, tag{f.atX(curve.X[k]) + 8, f.atY(curve.Y[k]), curve})
				break
			}
		}
	}
	// Names at the right border give way to each other; others stand where their line ends.
	sort.SliceStable(ends, func(i, j int) bool { return ends[i].y < ends[j].y })
	var at []float64
	var border []int
	for i, t := range ends {
		if t.x > f.right() {
			at, border = append(at, t.y), append(border, i)
		}
	}
	height := 15.0
	if room := f.height - 20; float64(len(at)-1)*height > room {
		height = math.Max(9, room/float64(len(at)))
	}
	if spread := Spread(at, height, 12, f.height-8); spread != nil {
		for k, i := range border {
			ends[i].y = spread[k]
		}
	}
	for _, t := range ends {
		c.text(t.x, t.y+4, "curve-label "+t.curve.Class, "start", t.curve.Name)
		for k := 0; k < len(t.curve.Name); k += 3 {
			taken = append(taken, spot{t.x + 8 + 7.5*float64(k), t.y + 4})
		}
	}
	return taken
}

// at gives where a curve is at the right end of a range: its own end, or a place between two of its points.
func (c Curve) at(to float64) (x, y float64, ok bool) {
	n := len(c.X)
	if n == 0 {
		return 0, 0, false
	}
	if c.X[n-1] <= to {
		return c.X[n-1], c.Y[n-1], true
	}
	k := n - 1
	for k > 0 && c.X[k-1] > to {
		k--
	}
	if k == 0 {
		return 0, 0, false
	}
	return to, c.Y[k-1] + (c.Y[k]-c.Y[k-1])*(to-c.X[k-1])/(c.X[k]-c.X[k-1]), true
}

// shows says whether a curve is drawn at a value: not above the chart, and below it only where decades were cut off.
func (f frame) shows(y float64) bool {
	return f.y.drawable(y) && y <= f.y.To && (f.y.Log || y >= f.y.From)
}

// path joins the points in range, leaving out those that would not be seen. A value that cannot be shown breaks the line.
func (f frame) path(xs, ys pack.Floats) string {
	var b strings.Builder
	pen := false
	var px, py float64 // last point drawn
	var hx, hy float64 // last point seen
	held := false      // that point is not drawn yet
	emit := func(x, y float64) {
		if pen {
			b.WriteString("L" + num(x) + " " + num(y))
		} else {
			b.WriteString("M" + num(x) + " " + num(y))
		}
		pen, px, py, held = true, x, y, false
	}
	for k, v := range xs {
		if !f.x.holds(v) {
			continue
		}
		if !f.shows(ys[k]) {
			if held {
				emit(hx, hy)
			}
			pen = false
			continue
		}
		x, y := f.atX(v), f.atY(ys[k])
		if pen && math.Abs(x-px) < 0.8 && math.Abs(y-py) < 0.5 {
			hx, hy, held = x, y, true
			continue
		}
		emit(x, y)
	}
	if held {
		emit(hx, hy)
	}
	return b.String()
}

// around outlines the band between the lower and upper values of a curve.
func (f frame) around(curve Curve) string {
	var up, down []string
	for k, v := range curve.X {
		if !f.x.holds(v) || !f.y.drawable(curve.Lower[k]) || !f.y.drawable(curve.Upper[k]) {
			continue
		}
		up = append(up, num(f.atX(v))+" "+num(f.atY(curve.Upper[k])))
		down = append(down, num(f.atX(v))+" "+num(f.atY(curve.Lower[k])))
	}
	if len(up) == 0 {
		return ""
	}
	for i, j := 0, len(down)-1; i < j; i, j = i+1, j-1 {
		down[i], down[j] = down[j], down[i]
	}
	return "M" + strings.Join(up, "L") + "L" + strings.Join(down, "L") + "Z"
}
