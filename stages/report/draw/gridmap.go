package draw

import (
	"bytes"
	"encoding/base64"
	"image"
	"image/color"
	"image/png"
	"math"

	"hushframe/stages/report/pack"
)

// Grid holds values over cells of a plane as levels of the colour scale, even in decades.
type Grid struct {
	Label string      `json:"label"` // what the values are, with their unit
	X     pack.Floats `json:"x"`     // edges of the columns, ascending
	Y     pack.Floats `json:"y"`     // edges of the rows, ascending
	Low   float64     `json:"low"`   // value of level 1; level 0 is no value
	High  float64     `json:"high"`  // value of level 255
	Cells pack.Bytes  `json:"cells"` // row after row
}

// NewGrid levels values (row after row) between the highest and so many decades below it. Values of zero and NaN have
// no colour. It gives nil when there is none to show.
func NewGrid(label string, x, y []float64, values []float64, decades float64) *Grid {
	if len(values) != (len(x)-1)*(len(y)-1) {
		panic("draw: a grid has as many values as cells")
	}
	low, high := math.Inf(1), 0.0
	for _, v := range values {
		if v > 0 && !math.IsInf(v, 0) {
			low, high = math.Min(low, v), math.Max(high, v)
		}
	}
	if high == 0 {
		return nil
	}
	low = math.Max(low, high*math.Pow(10, -decades))
	if low == high {
		low = high / 10
	}
	g := &Grid{Label: label, X: x, Y: y, Low: low, High: high, Cells: make([]byte, len(values))}
	for i, v := range values {
		if v > 0 {
			t := math.Log(math.Max(low, math.Min(high, v))/low) / math.Log(high/low)
			g.Cells[i] = byte(1 + math.Round(254*t))
		}
	}
	return g
}

func (g *Grid) see(edges pack.Floats, see func(float64)) {
	if len(edges) > 0 {
		see(edges[0])
		see(edges[len(edges)-1])
	}
}

// Value gives the value that a level stands for; NaN for none.
func (g *Grid) Value(level byte) float64 {
	if level == 0 {
		return math.NaN()
	}
	return g.Low * math.Pow(g.High/g.Low, float64(level-1)/254)
}

// The size of the picture of a grid in pixels; it is stretched over the plot.
const gridWidth, gridHeight = 520, 260

// picture gives the cells as PNG in a data URL, in the colours of light paper.
func (g *Grid) picture(f frame) string {
	colours := color.Palette{color.NRGBA{}}
	for k := 1; k < 256; k++ {
		r, gr, b := onLight.mixed(float64(k-1) / 254)
		colours = append(colours, color.NRGBA{r, gr, b, 255})
	}
	img := image.NewPaletted(image.Rect(0, 0, gridWidth, gridHeight), colours)
	columns := len(g.X) - 1
	xs := cellsAlong(f.x, g.X, gridWidth)
	ys := cellsAlong(f.y, g.Y, gridHeight)
	for py := range gridHeight {
		row := ys[gridHeight-1-py]
		for px := range gridWidth {
			if row >= 0 && xs[px] >= 0 {
				img.SetColorIndex(px, py, g.Cells[row*columns+xs[px]])
			}
		}
	}
	var b bytes.Buffer
	if err := png.Encode(&b, img); err != nil {
		panic("draw: " + err.Error()) // a buffer takes everything
	}
	return "data:image/png;base64," + base64.StdEncoding.EncodeToString(b.Bytes())
}

// cellsAlong gives the cell under each pixel of an axis, −1 for none.
func cellsAlong(a Axis, edges pack.Floats, pixels int) []int {
	out := make([]int, pixels)
	cell := 0
	for p := range out {
		t := (float64(p) + 0.5) / float64(pixels)
		v := a.From + t*(a.To-a.From)
		if a.Log {
			v = a.From * math.Pow(a.To/a.From, t)
		}
		for cell < len(edges)-1 && edges[cell+1] <= v {
			cell++
		}
		out[p] = cell
		if v < edges[0] || cell >= len(edges)-1 {
			out[p] = -1
		}
	}
	return out
}
