package printed

import (
	"fmt"
	"image"
	"image/color"
	"sort"

	"gonum.org/v1/plot/plotter"

	"hushframe/stages/report/draw"
)

// The size of the picture of a grid in pixels; it is stretched over the chart.
const cellsWide, cellsHigh = 720, 360

// cells draws a grid as a picture under all else. Cells are told by where their middle pixel lies, so axes are taken as
// linear; a grid over a logarithmic axis would need another.
func (b *builder) cells(g *draw.Grid) {
	columns := len(g.X) - 1
	img := image.NewNRGBA(image.Rect(0, 0, cellsWide, cellsHigh))
	xs, ys := cellsUnder(b.ch.X, g.X, cellsWide), cellsUnder(b.ch.Y, g.Y, cellsHigh)
	for py := range cellsHigh {
		row := ys[cellsHigh-1-py]
		for px, column := range xs {
			if row >= 0 && column >= 0 {
				if level := g.Cells[row*columns+column]; level > 0 {
					img.SetNRGBA(px, py, shade(level))
				}
			}
		}
	}
	b.p.Add(plotter.NewImage(img, b.ch.X.From, b.ch.Y.From, b.ch.X.To, b.ch.Y.To))
	for _, level := range []byte{255, 128, 1} {
		b.out.legend = append(b.out.legend, entry{fmt.Sprintf("%.2g %s", g.Value(level), g.Label), area(nil, shade(level))})
	}
}

// cellsUnder gives the cell under the middle of each pixel along an axis, -1 for none.
func cellsUnder(a draw.Axis, edges []float64, pixels int) []int {
	out := make([]int, pixels)
	for p := range out {
		v := a.From + (a.To-a.From)*(float64(p)+0.5)/float64(pixels)
		out[p] = sort.Search(len(edges), func(k int) bool { return edges[k] > v }) - 1
		if out[p] >= len(edges)-1 {
			out[p] = -1
		}
	}
	return out
}

// shade is the colour of a level from 1 to 255, that of the page on light paper.
func shade(level byte) color.NRGBA {
	r, g, b := draw.OnLight(float64(level-1) / 254)
	return color.NRGBA{r, g, b, 0xff}
}
