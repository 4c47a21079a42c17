package printed

import (
	"fmt"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
)

// Bars are shares that add up to one, a row of them for each name.
type Bars struct {
	Rows   []string
	Parts  []string
	Shares [][]float64 // by row, then part; 0 to 1
}

// mostParts is how many parts have a colour of their own; the others are drawn together.
var mostParts = len(set)

// Shares draws a bar for each row, divided into the parts with the greatest shares in any row. It gives nil without rows. It
// panics when the shares do not fit rows and parts.
func Shares(title, axis string, b Bars) *Picture {
	if len(b.Rows) == 0 || len(b.Parts) == 0 {
		return nil
	}
	if len(b.Shares) != len(b.Rows) {
		panic("printed: shares of other rows")
	}
	sums := make([]float64, len(b.Parts))
	for _, row := range b.Shares {
		if len(row) != len(b.Parts) {
			panic("printed: shares of other parts")
		}
		for k, x := range row {
			sums[k] += x
		}
	}
	order := ranked(sums)
	own := order[:min(mostParts, len(order))]
	out := sheet(title, axis, "", 7.5, 1.1+0.2*float64(len(b.Rows)))
	p := out.plot
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = 0, 1, -0.6, float64(len(b.Rows))-0.4
	var ticks plot.ConstantTicks
	for i, name := range b.Rows {
		ticks = append(ticks, plot.Tick{Value: float64(len(b.Rows) - 1 - i), Label: name})
	}
	p.Y.Tick.Marker = ticks
	out.legend = append(out.legend, entry{words: "from the left:"}) // not by colour alone
	p.X.Tick.Marker = plot.ConstantTicks{{Value: 0, Label: "0"}, {Value: 0.25, Label: "25 %"}, {Value: 0.5, Label: "50 %"}, {Value: 0.75, Label: "75 %"}, {Value: 1, Label: "100 %"}}
	for i, row := range b.Shares {
		y, at, rest := float64(len(b.Rows)-1-i), 0.0, 1.0
		bar := func(to float64, colour interface{ RGBA() (r, g, b, a uint32) }) {
			to = math.Min(1, to)
			if to > at {
				q := area(plotter.XYs{{X: at, Y: y - 0.36}, {X: to, Y: y - 0.36}, {X: to, Y: y + 0.36}, {X: at, Y: y + 0.36}}, colour)
				q.LineStyle.Width, q.LineStyle.Color = 0.5, rule
				p.Add(q)
				at = to
			}
		}
		for k, part := range own {
			bar(at+row[part], set[k])
			rest -= row[part]
		}
		if rest > 1e-3 {
			bar(1, leftOver)
		}
	}
	for k, part := range own {
		out.legend = append(out.legend, entry{b.Parts[part], area(nil, set[k])})
	}
	if len(order) > len(own) {
		out.legend = append(out.legend, entry{fmt.Sprintf("%d others", len(order)-len(own)), area(nil, leftOver)})
	}
	return out
}

// ranked gives the indices of values, the greatest first and equal ones in their order.
func ranked(values []float64) []int {
	out := make([]int, 0, len(values))
	for i := range values {
		k := len(out)
		for k > 0 && values[out[k-1]] < values[i] {
			k--
		}
		out = append(out, 0)
		copy(out[k+1:], out[k:])
		out[k] = i
	}
	return out
}
