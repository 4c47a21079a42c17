package report

import (
	"fmt"
	"math"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// planes draws the transfer function about each peak in the complex plane, where a mode alone makes a circle.
func planes(c *content) *section {
	s := &section{Title: "Peaks in the complex plane"}
	s.text("Gyro rate per newton or newton metre of the strongest source about each peak, real and imaginary part, along frequency. A mode alone makes a circle; a neighbour dents or shifts it.")
	n := 0
	for _, p := range c.response.Peaks {
		if ch := planeChart(c.response, p, n); ch != nil {
			n++
			s.heading(ch.Title)
			s.chart(c, ch, "")
		}
	}
	if n == 0 {
		return nil
	}
	return s
}

// planeReach is how many half-power bandwidths about a peak its loop covers.
const planeReach = 6

func planeChart(r *kinds.Response, p kinds.ResponsePeak, n int) *draw.Chart {
	for _, t := range r.Transfer {
		if t.Rotor != p.Rotor || t.Component != p.Component || t.Axis != p.Axis {
			continue
		}
		damping := p.Damping
		if !(damping > 0) {
			damping = 0.01
		}
		reach := planeReach * damping * p.Frequency
		unit := "(deg/s)/N"
		if p.Component > 2 {
			unit = "(deg/s)/(N·m)"
		}
		ch := &draw.Chart{ID: fmt.Sprintf("plane-%d", n+1), Title: fmt.Sprintf("%s, %.1f Hz", upper(p.Axis), p.Frequency), Square: true,
			X: draw.Axis{Label: "real part, " + unit}, Y: draw.Axis{Label: "imaginary part, " + unit}}
		curve := draw.Curve{Class: "predicted"}
		near := -1
		for k, f := range r.Frequency {
			if math.Abs(f-p.Frequency) > reach {
				continue
			}
			if near < 0 || math.Abs(f-p.Frequency) < math.Abs(r.Frequency[near]-p.Frequency) {
				near = k
			}
			curve.X, curve.Y = append(curve.X, t.Real[k]/degree), append(curve.Y, t.Imaginary[k]/degree)
		}
		if len(curve.X) < 8 {
			return nil
		}
		ch.Curves = []draw.Curve{curve}
		ch.Points = []draw.Point{{X: t.Real[near] / degree, Y: t.Imaginary[near] / degree, Class: "predicted", Label: fmt.Sprintf("%.0f", r.Frequency[near]), About: fmt.Sprintf("at %.1f Hz", r.Frequency[near])}}
		ch.About = fmt.Sprintf("Transfer function from the %s at rotor %s to the %s rate in the complex plane, from %.1f to %.1f Hz.", kinds.ComponentNames[p.Component], p.Rotor, p.Axis, p.Frequency-reach, p.Frequency+reach)
		return ch
	}
	return nil
}
