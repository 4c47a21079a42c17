package printed

import (
	"bytes"
	"fmt"
	"html"
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	vgdraw "gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// Formats of pictures.
const (
	PNG = "png"
	SVG = "svg"
)

// Picture is a chart ready to be written.
type Picture struct {
	plot          *plot.Plot
	width, height vg.Length
	about         string
	title, y      string // drawn here: the library places the name of a logarithmic axis badly
	legend        []entry
}

// entry is a line of the legend; without a sample it is a note.
type entry struct {
	words  string
	sample plot.Thumbnailer
}

// resolution of PNG pictures, dots per inch: 1650 wide for a picture of 7 inches and a half.
const resolution = 220

// Write gives the picture in a format. An unknown format is a mistake of the program and panics.
func (p *Picture) Write(format string) ([]byte, error) {
	var b bytes.Buffer
	switch format {
	case PNG:
		c := vgimg.NewWith(vgimg.UseWH(p.width, p.height), vgimg.UseDPI(resolution))
		p.draw(vgdraw.New(c))
		if _, err := (vgimg.PngCanvas{Canvas: c}).WriteTo(&b); err != nil {
			return nil, err
		}
	case SVG:
		c := vgsvg.New(p.width, p.height)
		p.draw(vgdraw.New(c))
		if _, err := c.WriteTo(&b); err != nil {
			return nil, err
		}
		return p.readable(b.Bytes()), nil
	default:
		panic("printed: no format " + format)
	}
	return b.Bytes(), nil
}

// readable gives an SVG picture a title for those who cannot see it, and typefaces to fall back on.
func (p *Picture) readable(svg []byte) []byte {
	svg = bytes.ReplaceAll(svg, []byte("font-family:Liberation Sans;"), []byte("font-family:'Liberation Sans',Arial,Helvetica,sans-serif;"))
	if i := bytes.Index(svg, []byte("<svg")); i >= 0 {
		if j := bytes.IndexByte(svg[i:], '>'); j >= 0 {
			at := i + j + 1
			svg = slices.Concat(svg[:at], []byte("\n<title>"+html.EscapeString(p.title)+"</title>\n<desc>"+html.EscapeString(p.about)+"</desc>"), svg[at:])
		}
	}
	return svg
}

// The margins of a picture and the distances in its head, points.
const (
	margin = 8
	row    = 13
	sample = 18
)

// draw lays out title, legend and the name of the upward axis around the chart.
func (p *Picture) draw(c vgdraw.Canvas) {
	c.SetColor(color.White)
	c.Fill(c.Rectangle.Path())
	c = vgdraw.Crop(c, margin, -margin-6, margin, -margin)
	head := style(12, ink)
	head.XAlign, head.YAlign = text.XLeft, text.YTop
	c.FillText(head, vg.Point{X: c.Min.X, Y: c.Max.Y}, p.title)
	top := c.Max.Y - 20
	words := style(9, ink)
	words.XAlign, words.YAlign = text.XLeft, text.YCenter
	at := c.Min.X
	for _, e := range p.legend {
		width := words.Width(e.words) + 14
		if e.sample != nil {
			width += sample + 4
		}
		if at > c.Min.X && at+width-14 > c.Max.X {
			at, top = c.Min.X, top-row
		}
		x := at
		if e.sample != nil {
			e.sample.Thumbnail(&vgdraw.Canvas{Canvas: c.Canvas, Rectangle: vg.Rectangle{Min: vg.Point{X: x, Y: top - row + 2}, Max: vg.Point{X: x + sample, Y: top - 2}}})
			x += sample + 4
		}
		c.FillText(words, vg.Point{X: x, Y: top - row/2}, e.words)
		at += width
	}
	if len(p.legend) > 0 {
		top -= row + 4
	}
	c.Max.Y = top - 4
	if p.y != "" {
		side := style(10, ink)
		side.Rotation, side.XAlign, side.YAlign = math.Pi/2, text.XCenter, text.YTop
		c.FillText(side, vg.Point{X: c.Min.X, Y: c.Center().Y}, p.y)
		c.Min.X += 18
	}
	p.plot.Draw(c)
}

// The palette: two colours for what is predicted and recorded, and a set for categories that readers with any colour vision
// can tell apart (M. Okabe and K. Ito, Color universal design, 2008), by lightness too.
var (
	ink       = color.NRGBA{0x20, 0x28, 0x2c, 0xff}
	quiet     = color.NRGBA{0x5a, 0x67, 0x6d, 0xff}
	rule      = color.NRGBA{0xd9, 0xdc, 0xd8, 0xff}
	predicted = color.NRGBA{0x0f, 0x6a, 0x73, 0xff}
	observed  = color.NRGBA{0xb0, 0x4a, 0x12, 0xff}
	set       = []color.NRGBA{
		{0x00, 0x72, 0xb2, 0xff}, {0xe6, 0x9f, 0x00, 0xff}, {0x00, 0x9e, 0x73, 0xff}, {0xcc, 0x79, 0xa7, 0xff},
		{0x56, 0xb4, 0xe9, 0xff}, {0xd5, 0x5e, 0x00, 0xff}, {0xf0, 0xe4, 0x42, 0xff}, {0x46, 0x50, 0x54, 0xff},
	}
	leftOver = color.NRGBA{0xd0, 0xd4, 0xd3, 0xff}
)

func faint(c color.NRGBA, alpha uint8) color.NRGBA {
	c.A = alpha
	return c
}

// typeface is without serifs, at a size in points.
func typeface(size vg.Length) font.Font {
	return font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}
}

func style(size vg.Length, c color.Color) text.Style {
	return text.Style{Color: c, Font: typeface(size), Handler: plot.DefaultTextHandler}
}

// sheet is an empty chart of a size in inches with its axes named.
func sheet(title, x, y string, width, height float64) *Picture {
	p := plot.New()
	p.BackgroundColor = nil
	for _, axis := range []*plot.Axis{&p.X, &p.Y} {
		axis.Label.TextStyle.Font, axis.Label.TextStyle.Color = typeface(10), ink
		axis.Tick.Label.Font, axis.Tick.Label.Color = typeface(9), ink
		axis.LineStyle.Color, axis.Tick.LineStyle.Color = quiet, quiet
		axis.Padding = 0
		axis.Tick.Marker = plain{}
	}
	p.X.Label.Text = x
	return &Picture{plot: p, title: title, y: y, width: vg.Length(width) * vg.Inch, height: vg.Length(height) * vg.Inch}
}

// grid lies under all that is added later.
func grid(p *plot.Plot) {
	g := plotter.NewGrid()
	g.Vertical.Color, g.Horizontal.Color = rule, rule
	g.Vertical.Width, g.Horizontal.Width = 0.5, 0.5
	p.Add(g)
}

// decades are ticks of a logarithmic axis: 10 to a power at each decade, plain lines between.
type decades struct{}

// Ticks implements plot.Ticker.
func (decades) Ticks(low, high float64) (out []plot.Tick) {
	first, last := int(math.Floor(math.Log10(low)+1e-9)), int(math.Ceil(math.Log10(high)-1e-9))
	every := max(1, (last-first+7)/8)
	for d := first; d <= last; d++ {
		t := plot.Tick{Value: math.Pow(10, float64(d))}
		if (d-first)%every == 0 {
			t.Label = power(d)
		}
		if t.Value >= low*(1-1e-9) && t.Value <= high*(1+1e-9) {
			out = append(out, t)
		}
	}
	return out
}

// power writes ten to a power without raised digits, which not every font has.
func power(d int) string {
	if d >= -3 && d <= 4 {
		return fmt.Sprintf("%g", math.Pow(10, float64(d)))
	}
	return fmt.Sprintf("1e%d", d)
}

// plain are ticks at 1, 2 or 5 times a power of ten, nine at most.
type plain struct{}

// Ticks implements plot.Ticker.
func (plain) Ticks(low, high float64) (out []plot.Tick) {
	if !(high > low) {
		return nil
	}
	step := math.Pow(10, math.Floor(math.Log10((high-low)/9)))
	for _, m := range []float64{1, 2, 5, 10} {
		if m*step >= (high-low)/9*(1-1e-9) {
			step *= m
			break
		}
	}
	for k := math.Ceil(low/step - 1e-9); k*step <= high+1e-9*step; k++ {
		out = append(out, plot.Tick{Value: k * step, Label: fmt.Sprintf("%g", math.Round(k*step*1e6)/1e6+0)})
	}
	return out
}

func line(points plotter.XYs, c color.Color, width vg.Length, dashes ...vg.Length) *plotter.Line {
	return &plotter.Line{XYs: points, LineStyle: vgdraw.LineStyle{Color: c, Width: width, Dashes: dashes}}
}

// label is a text at a point of the chart.
type label struct {
	x, y   float64
	words  string
	style  text.Style
	dx, dy vg.Length
	// others are further offsets to the right, tried in turn where there is no room.
	others []vg.Length
}

// labels draws texts over all else, those left out that would cover one before them.
type labels []label

// Plot implements plot.Plotter.
func (ls labels) Plot(c vgdraw.Canvas, p *plot.Plot) {
	tx, ty := p.Transforms(&c)
	var taken []vg.Rectangle
	room := func(box vg.Rectangle) bool {
		for _, t := range taken {
			if box.Min.X < t.Max.X+2 && box.Max.X > t.Min.X-2 && box.Min.Y < t.Max.Y && box.Max.Y > t.Min.Y {
				return false
			}
		}
		return box.Min.X >= c.Min.X-1 && box.Max.X <= c.Max.X+1
	}
	for _, l := range ls {
		for _, dx := range append([]vg.Length{l.dx}, l.others...) {
			at := vg.Point{X: tx(l.x) + dx, Y: ty(l.y) + l.dy}
			box := l.style.Rectangle(l.words).Add(at)
			if room(box) {
				taken = append(taken, box)
				c.FillText(l.style, at, l.words)
				break
			}
		}
	}
}
