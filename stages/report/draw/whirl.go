package draw

import (
	"fmt"
	"math"
)

// Whirl shows natural frequencies over rotor speed, with the lines of orders
// and a ring where they meet.
type Whirl struct {
	About   string  // what is read aloud
	Fastest float64 // right end, rpm
	Highest float64 // top, Hz
	Lines   []Curve // over rpm; NaN breaks a line
	Orders  []Order
	Meets   []Peak // X in rpm
	Mark    Mark   // a speed set apart
}

// Order is a line of so many hertz per rpm.
type Order struct {
	Slope float64
	Label string
}

// Draw gives the diagram as SVG; "" when nothing has a size.
func (w *Whirl) Draw() string {
	if !(w.Fastest > 0 && w.Highest > 0) {
		return ""
	}
	const end, plot = chartHeight - bottom, chartHeight - top - bottom
	x := func(rpm float64) float64 { return left + rpm/w.Fastest*(chartWidth-left-right) }
	y := func(hz float64) float64 { return end - hz/w.Highest*plot }
	c := &canvas{}
	c.open("chart", w.About, chartWidth, chartHeight)
	for f, d := 0.0, step(w.Highest, 6); f <= w.Highest*(1+1e-9); f += d {
		c.line(left, y(f), chartWidth-right, y(f), "grid")
		c.text(left-8, y(f)+4, "tick", "end", fmt.Sprintf("%g", math.Round(f*1e6)/1e6))
	}
	for v, d := 0.0, step(w.Fastest, 8); v <= w.Fastest*(1+1e-9); v += d {
		c.line(x(v), end, x(v), end+5, "axis")
		c.text(x(v), end+19, "tick", "middle", fmt.Sprintf("%g", math.Round(v)))
	}
	c.line(left, end, chartWidth-right, end, "axis")
	c.text((left+chartWidth-right)/2, chartHeight-8, "label", "middle", "speed of the first rotor, rpm")
	c.start("g", "transform", "translate(16 "+num(top+plot/2)+") rotate(-90)")
	c.text(0, 0, "label", "middle", "natural frequency, Hz")
	c.end("g")
	if m := w.Mark; m.X > 0 && m.X <= w.Fastest {
		c.line(x(m.X), top, x(m.X), end, "mode")
		c.text(x(m.X), top-8, "mode-label", "middle", m.Label)
	}
	for _, o := range w.Orders {
		if !(o.Slope > 0) {
			continue
		}
		rpm := math.Min(w.Fastest, w.Highest/o.Slope)
		c.tag("path", "class", "curve observed", "d", "M"+num(x(0))+" "+num(y(0))+"L"+num(x(rpm))+" "+num(y(rpm*o.Slope)))
		if rpm < w.Fastest {
			c.text(x(rpm), top-22, "curve-label observed", "middle", o.Label)
		} else {
			c.text(x(rpm)+8, y(rpm*o.Slope)+4, "curve-label observed", "start", o.Label)
		}
	}
	lowest := math.Inf(1) // of the labels so far, from the top down
	for i := len(w.Lines) - 1; i >= 0; i-- {
		line := w.Lines[i]
		path, pen, last := "", false, -1
		for k, v := range line.X {
			if f := line.Y[k]; f >= 0 && f <= w.Highest {
				path += map[bool]string{false: "M", true: "L"}[pen] + num(x(v)) + " " + num(y(f))
				pen, last = true, k
			} else {
				pen = false
			}
		}
		if path == "" {
			continue
		}
		c.tag("path", "class", "curve predicted", "d", path)
		if at := y(line.Y[last]); last == len(line.X)-1 && (math.IsInf(lowest, 1) || at > lowest+13) {
			c.text(x(line.X[last])+8, at+4, "curve-label predicted", "start", line.Name)
			lowest = at
		}
	}
	for _, p := range w.Meets {
		if p.X <= w.Fastest && p.Y <= w.Highest {
			c.tag("circle", "class", "point predicted", "cx", x(p.X), "cy", y(p.Y), "r", 3.5)
		}
	}
	return c.close()
}
