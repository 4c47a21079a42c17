package draw

import (
	"fmt"
	"math"
	"slices"

	"hushframe/stages/report/pack"
)

// Chart describes a picture of values over an axis. The same description is drawn here as SVG and, on a moving page,
// by the front end, which adds zoom and read-out.
type Chart struct {
	ID    string `json:"id"`    // unique on the page
	Title string `json:"title"` // in words
	About string `json:"about"` // read aloud in its place
	X     Axis   `json:"x"`
	Y     Axis   `json:"y"`

	Grid   *Grid    `json:"grid,omitempty"`
	Bands  []Band   `json:"bands,omitempty"`
	Curves []Curve  `json:"curves,omitempty"`
	Marks  []Mark   `json:"marks,omitempty"`
	Points []Point  `json:"points,omitempty"`
	Notes  []string `json:"notes,omitempty"` // printed within the chart

	// Follow says what the horizontal axis is for the rest of the page: "frequency" lets the frame follow.
	Follow string `json:"follow,omitempty"`
	Axis   string `json:"axis,omitempty"`   // of the gyro that the chart is about
	Square bool   `json:"square,omitempty"` // both axes have one scale
}

// Axis is one axis; From equal to To asks for a range that holds the values.
type Axis struct {
	Label  string  `json:"label"` // with its unit
	From   float64 `json:"from"`
	To     float64 `json:"to"`
	Log    bool    `json:"log,omitempty"`
	Either bool    `json:"either,omitempty"` // a reader may choose between linear and logarithmic
}

// Curve is a line with an optional band around it (nil for none). Its class says how it looks.
type Curve struct {
	Name  string      `json:"name"`
	Class string      `json:"class"`
	X     pack.Floats `json:"x"`
	Y     pack.Floats `json:"y"`
	Lower pack.Floats `json:"lower,omitempty"`
	Upper pack.Floats `json:"upper,omitempty"`
}

// Band is a range of the horizontal axis set apart by hatching.
type Band struct {
	From  float64 `json:"from"`
	To    float64 `json:"to"`
	Label string  `json:"label"`
}

// Mark is a line across the chart with a label at the top, of a mode where Mode is not 0.
type Mark struct {
	X     float64 `json:"x"`
	Label string  `json:"label"`
	Mode  int     `json:"mode,omitempty"`
}

// Point is a marked point. Classes differ in shape, not in colour alone: "observed" is a square, "loose" a cross,
// "firm" a disc, all others a ring.
type Point struct {
	X     float64 `json:"x"`
	Y     float64 `json:"y"`
	Label string  `json:"label,omitempty"`
	Class string  `json:"class"`
	About string  `json:"about,omitempty"` // shown when a reader points at it
}

const (
	chartWidth, chartHeight = 960.0, 400.0
	squareWidth             = 560.0
	left, right             = 66.0, 112.0
	top, bottom             = 44.0, 48.0
)

// frame maps data to the picture.
type frame struct {
	x, y          Axis
	width, height float64 // of the whole picture
}

func (f frame) right() float64  { return f.width - right }
func (f frame) bottom() float64 { return f.height - bottom }

// place gives where a value lies along an axis, 0 to 1 within its range.
func (a Axis) place(v float64) float64 {
	if a.Log {
		return (math.Log10(v) - math.Log10(a.From)) / (math.Log10(a.To) - math.Log10(a.From))
	}
	return (v - a.From) / (a.To - a.From)
}

func (a Axis) holds(v float64) bool { return v >= a.From && v <= a.To }

func (f frame) atX(v float64) float64 { return left + f.x.place(v)*(f.right()-left) }

// atY keeps what lies above or below on the border.
func (f frame) atY(v float64) float64 {
	p := 0.0
	if !f.y.Log || v > 0 {
		p = math.Max(0, math.Min(1, f.y.place(v)))
	}
	return f.bottom() - p*(f.bottom()-top)
}

// drawable says whether a value can be shown on an axis at all.
func (a Axis) drawable(v float64) bool {
	return !math.IsNaN(v) && !math.IsInf(v, 0) && (!a.Log || v > 0)
}

// Fit chooses the ranges that were not given and drops what has no place; false when there is nothing to show.
func (ch *Chart) Fit() bool {
	nowhere := func(v ...float64) bool {
		return slices.ContainsFunc(v, func(x float64) bool { return math.IsNaN(x) || math.IsInf(x, 0) })
	}
	ch.Points = slices.DeleteFunc(ch.Points, func(p Point) bool { return nowhere(p.X, p.Y) })
	ch.Marks = slices.DeleteFunc(ch.Marks, func(m Mark) bool { return nowhere(m.X) })
	ch.Bands = slices.DeleteFunc(ch.Bands, func(b Band) bool { return nowhere(b.From, b.To) })
	if !ch.X.fit(func(see func(float64)) {
		for _, c := range ch.Curves {
			for _, v := range c.X {
				see(v)
			}
		}
		for _, p := range ch.Points {
			see(p.X)
		}
		if ch.Grid != nil {
			ch.Grid.see(ch.Grid.X, see)
		}
	}) {
		return false
	}
	return ch.Y.fit(func(see func(float64)) {
		for _, c := range ch.Curves {
			for k, v := range c.Y {
				if ch.X.holds(c.X[k]) {
					see(v)
				}
			}
		}
		for _, p := range ch.Points {
			if ch.X.holds(p.X) {
				see(p.Y)
			}
		}
		if ch.Grid != nil {
			ch.Grid.see(ch.Grid.Y, see)
		}
	})
}

// decades is the most that a logarithmic axis shows by itself.
const decades = 7

func (a *Axis) fit(values func(see func(float64))) bool {
	low, high := math.Inf(1), math.Inf(-1)
	values(func(v float64) {
		if a.drawable(v) {
			low, high = math.Min(low, v), math.Max(high, v)
		}
	})
	if low > high {
		return false
	}
	if a.From != a.To {
		return a.To > a.From && (!a.Log || a.From > 0)
	}
	if a.Log {
		from, to := math.Floor(math.Log10(low)), math.Ceil(math.Log10(high)+0.08)
		from = math.Max(from, to-decades)
		if to <= from {
			to = from + 1
		}
		a.From, a.To = math.Pow(10, from), math.Pow(10, to)
		return true
	}
	if high == low {
		high, low = high+1, low-1
	}
	d := step(high-low, 6)
	a.From, a.To = math.Floor(low/d)*d, math.Ceil(high/d)*d
	return true
}

// Draw gives the chart as SVG; "" when there is nothing to show.
func (ch *Chart) Draw() string {
	if !ch.Fit() {
		return ""
	}
	f := frame{x: ch.X, y: ch.Y, width: chartWidth, height: chartHeight}
	if ch.Square {
		f.width, f.height = squareWidth, squareWidth
	}
	c := &canvas{}
	c.open("chart", ch.About, f.width, f.height)
	if ch.Grid != nil {
		c.image(left, top, f.right()-left, f.bottom()-top, ch.Grid.picture(f))
	}
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
	ch.points(c, f, ch.names(c, f))
	for i, note := range ch.Notes {
		c.text(f.right()-8, top+18+16*float64(i), "note", "end", note)
	}
	return c.close()
}

func (ch *Chart) grid(c *canvas, f frame) {
	end := f.bottom()
	for _, v := range f.y.ticks(6) {
		y := f.atY(v)
		if ch.Grid == nil {
			c.line(left, y, f.right(), y, "grid")
		}
		c.text(left-8, y+4, "tick", "end", f.y.tick(v))
	}
	for _, v := range f.x.ticks(9) {
		c.line(f.atX(v), end, f.atX(v), end+5, "axis")
		c.text(f.atX(v), end+19, "tick", "middle", f.x.tick(v))
	}
	c.line(left, end, f.right(), end, "axis")
	c.text((left+f.right())/2, f.height-8, "label", "middle", f.x.Label)
	c.start("g", "transform", "translate(16 "+num((top+end)/2)+") rotate(-90)")
	c.text(0, 0, "label", "middle", f.y.Label)
	c.end("g")
}

// ticks gives round values within the range, about n of them; on a logarithmic axis of some width the powers of ten.
func (a Axis) ticks(n int) []float64 {
	var out []float64
	if a.Log && a.To/a.From >= 100 {
		for d := math.Ceil(math.Log10(a.From) - 1e-9); d <= math.Log10(a.To)+1e-9; d++ {
			out = append(out, math.Pow(10, d))
		}
		return out
	}
	d := step(a.To-a.From, n)
	for v := math.Ceil(a.From/d-1e-9) * d; v <= a.To+1e-9*d; v += d {
		out = append(out, math.Round(v/d)*d)
	}
	return out
}

func (a Axis) tick(v float64) string {
	if a.Log && a.To/a.From >= 100 {
		return power(int(math.Round(math.Log10(v))))
	}
	return fmt.Sprintf("%g", math.Round(v*1e9)/1e9)
}
