package draw

import (
	"fmt"
	"math"
	"sort"
	"strings"
)

// Chart shows densities on a logarithmic scale over frequency. Classes of
// curves are "predicted" and "observed".
type Chart struct {
	About    string  // what is read aloud
	Name     string  // unique on the page, for patterns
	From, To float64 // Hz
	Label    string  // of the vertical axis
	Curves   []Curve
	Bands    []Band
	Marks    []Mark
	Peaks    []Peak
	Notes    []string // printed within the chart
}

// Curve is a line with an optional band around it (nil for none).
type Curve struct {
	Name, Class  string
	X, Y         []float64
	Lower, Upper []float64
}

// Band is a range of frequency set apart by hatching.
type Band struct {
	From, To float64
	Label    string
}

// Mark is a tick at the top.
type Mark struct {
	X     float64
	Label string
}

// Peak is a marked point: a ring for "predicted", a square for "observed".
type Peak struct {
	X, Y         float64
	Label, Class string
}

const (
	chartWidth, chartHeight = 960.0, 400.0
	left, right             = 66.0, 104.0
	top, bottom             = 44.0, 48.0
)

// frame maps data to the picture.
type frame struct {
	from, to   float64 // Hz
	low, high  float64 // decades
	plotHeight float64
}

func (f frame) x(hz float64) float64 {
	return left + (hz-f.from)/(f.to-f.from)*(chartWidth-left-right)
}

func (f frame) y(density float64) float64 {
	d := math.Log10(density)
	d = math.Max(f.low, math.Min(f.high, d))
	return top + (f.high-d)/(f.high-f.low)*f.plotHeight
}

// Draw gives the chart as SVG; "" when no curve has a positive value in range.
func (ch *Chart) Draw() string {
	f, ok := ch.frame()
	if !ok {
		return ""
	}
	c := &canvas{}
	c.open("chart", ch.About, chartWidth, chartHeight)
	labels := ch.bands(c, f)
	ch.grid(c, f)
	ch.marks(c, f)
	for _, curve := range ch.Curves {
		if curve.Lower != nil {
			c.tag("path", "class", "around "+curve.Class, "d", f.around(curve))
		}
	}
	for _, curve := range ch.Curves {
		c.tag("path", "class", "curve "+curve.Class, "d", f.path(curve.X, curve.Y))
	}
	for _, l := range labels { // over the curves, or they would be crossed out
		c.text(l.x, l.y, "band-label", "middle", l.text)
	}
	ch.peaks(c, f, ch.names(c, f))
	for i, note := range ch.Notes {
		c.text(chartWidth-right-8, top+18+16*float64(i), "note", "end", note)
	}
	return c.close()
}

// frame spans whole decades around the values, seven at most.
func (ch *Chart) frame() (frame, bool) {
	low, high := math.Inf(1), math.Inf(-1)
	for _, curve := range ch.Curves {
		for k, x := range curve.X {
			if y := curve.Y[k]; x >= ch.From && x <= ch.To && y > 0 && !math.IsInf(y, 0) {
				low, high = math.Min(low, math.Log10(y)), math.Max(high, math.Log10(y))
			}
		}
	}
	if low > high {
		return frame{}, false
	}
	f := frame{from: ch.From, to: ch.To, low: math.Floor(low), high: math.Ceil(high + 0.08), plotHeight: chartHeight - top - bottom}
	f.low = math.Max(f.low, f.high-7)
	if f.high <= f.low {
		f.high = f.low + 1
	}
	return f, true
}

func (ch *Chart) grid(c *canvas, f frame) {
	end := chartHeight - bottom
	for d := int(f.low); d <= int(f.high); d++ {
		y := f.y(math.Pow(10, float64(d)))
		c.line(left, y, chartWidth-right, y, "grid")
		c.text(left-8, y+4, "tick", "end", power(d))
	}
	width := step(f.to-f.from, 9)
	for x := math.Ceil(f.from/width-1e-9) * width; x <= f.to+1e-9*width; x += width {
		c.line(f.x(x), end, f.x(x), end+5, "axis")
		c.text(f.x(x), end+19, "tick", "middle", fmt.Sprintf("%g", math.Round(x*1e6)/1e6))
	}
	c.line(left, end, chartWidth-right, end, "axis")
	c.text((left+chartWidth-right)/2, chartHeight-8, "label", "middle", "frequency, Hz")
	c.start("g", "transform", "translate(16 "+num(top+f.plotHeight/2)+") rotate(-90)")
	c.text(0, 0, "label", "middle", ch.Label)
	c.end("g")
}

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
	id := "hatch-" + ch.Name
	c.b.WriteString(`<defs><pattern id="` + id + `" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path class="hatch" d="M0 0V6"/></pattern></defs>`)
	type label struct{ x0, x1, row float64 }
	var taken []label
	for _, b := range ch.Bands {
		x0, x1 := f.x(math.Max(b.From, f.from)), f.x(math.Min(b.To, f.to))
		if x1 <= left || x0 >= chartWidth-right || x1 < x0 {
			continue
		}
		c.tag("rect", "class", "band", "fill", "url(#"+id+")", "x", x0, "y", top, "width", math.Max(1.5, x1-x0), "height", f.plotHeight)
		at := math.Min(math.Max((x0+x1)/2, left+30), chartWidth-right-30)
		half := 3.4 * float64(len([]rune(b.Label)))
		at = math.Min(at, chartWidth-right-half)
		free := label{x0: at - half - 4, x1: at + half + 4}
		for i := 0; i < len(taken); i++ {
			if t := taken[i]; t.row == free.row && t.x0 < free.x1 && t.x1 > free.x0 {
				free.row, i = free.row+1, -1
			}
		}
		taken = append(taken, free)
		labels = append(labels, bandLabel{at, chartHeight - bottom - 6 - 13*free.row, b.Label})
	}
	return labels
}

// marks draws the ticks at the top, their labels in two rows where they crowd.
func (ch *Chart) marks(c *canvas, f frame) {
	ends := [2]float64{-math.MaxFloat64, -math.MaxFloat64}
	for _, m := range ch.Marks {
		if m.X < f.from || m.X > f.to {
			continue
		}
		x := f.x(m.X)
		c.line(x, top, x, chartHeight-bottom, "mode")
		half := 4 * float64(len([]rune(m.Label)))
		for row := range ends {
			if x-half > ends[row] {
				c.text(x, top-8-14*float64(row), "mode-label", "middle", m.Label)
				ends[row] = x + half
				break
			}
		}
	}
}

// spot is the middle of a short label.
type spot struct{ x, y float64 }

// peaks marks points, and labels them where there is room: above, then to one
// side, then the other.
func (ch *Chart) peaks(c *canvas, f frame, taken []spot) {
	room := func(p spot) bool {
		if p.y < top+8 || p.x < left+14 || p.x > chartWidth-right-14 {
			return false
		}
		for _, t := range taken {
			if math.Abs(t.x-p.x) < 27 && math.Abs(t.y-p.y) < 13 {
				return false
			}
		}
		return true
	}
	for _, p := range ch.Peaks {
		if p.X >= f.from && p.X <= f.to && p.Y > 0 {
			taken = append(taken, spot{f.x(p.X), f.y(p.Y) + 4})
		}
	}
	for _, p := range ch.Peaks {
		if p.X < f.from || p.X > f.to || !(p.Y > 0) {
			continue
		}
		x, y := f.x(p.X), f.y(p.Y)
		if p.Class == "observed" {
			c.tag("rect", "class", "point observed", "x", x-3.5, "y", y-3.5, "width", 7.0, "height", 7.0)
		} else {
			c.tag("circle", "class", "point predicted", "cx", x, "cy", y, "r", 4.0)
		}
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

// names writes each curve's name at its right end and says what room that
// takes.
func (ch *Chart) names(c *canvas, f frame) (taken []spot) {
	type tag struct {
		x, y  float64
		curve Curve
	}
	var tags []tag
	for _, curve := range ch.Curves {
		for k := len(curve.X) - 1; k >= 0; k-- {
			if curve.X[k] <= f.to && curve.Y[k] > 0 {
				tags = append(tags, tag{f.x(curve.X[k]) + 8, f.y(curve.Y[k]), curve})
				break
			}
		}
	}
	sort.SliceStable(tags, func(i, j int) bool { return tags[i].y < tags[j].y })
	for i := range tags {
		if i > 0 && math.Abs(tags[i].x-tags[i-1].x) < 80 {
			tags[i].y = math.Max(tags[i].y, tags[i-1].y+16)
		}
	}
	for _, t := range tags {
		c.text(t.x, t.y+4, "curve-label "+t.curve.Class, "start", t.curve.Name)
		for k := 0; k < len(t.curve.Name); k += 3 {
			taken = append(taken, spot{t.x + 8 + 7.5*float64(k), t.y + 4})
		}
	}
	return taken
}

// path joins the points in range, leaving out those that would not be seen. A
// value that is not positive breaks the line.
func (f frame) path(xs, ys []float64) string {
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
	for k, hz := range xs {
		if hz < f.from || hz > f.to {
			continue
		}
		if !(ys[k] > 0) || math.IsInf(ys[k], 0) {
			if held {
				emit(hx, hy)
			}
			pen = false
			continue
		}
		x, y := f.x(hz), f.y(ys[k])
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
	for k, hz := range curve.X {
		if hz < f.from || hz > f.to || !(curve.Lower[k] > 0) || !(curve.Upper[k] > 0) {
			continue
		}
		up = append(up, num(f.x(hz))+" "+num(f.y(curve.Upper[k])))
		down = append(down, num(f.x(hz))+" "+num(f.y(curve.Lower[k])))
	}
	if len(up) == 0 {
		return ""
	}
	for i, j := 0, len(down)-1; i < j; i, j = i+1, j-1 {
		down[i], down[j] = down[j], down[i]
	}
	return "M" + strings.Join(up, "L") + "L" + strings.Join(down, "L") + "Z"
}
