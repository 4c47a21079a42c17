package report

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// axisChart gathers what is known of one axis.
func axisChart(c *content, axis int) *draw.Chart {
	name := kinds.AxisNames[axis]
	ch := &draw.Chart{ID: "response-" + name, Title: upper(name), Follow: "frequency", Axis: name,
		X: draw.Axis{Label: "frequency, Hz", From: math.Inf(1), To: math.Inf(-1), Either: true},
		Y: draw.Axis{Label: "gyro rate, (deg/s)²/Hz", Log: true, Either: true}}
	scale := 1.0
	var pair *kinds.ComparisonAxis
	if c.comparison != nil {
		for i := range c.comparison.Axes {
			if x := &c.comparison.Axes[i]; x.Axis == name {
				pair = x
			}
		}
	}
	var about []string
	if pair != nil {
		ch.X.From, ch.X.To = c.comparison.From, c.comparison.To
		if pair.Scale > 0 {
			scale = pair.Scale
			ch.Notes = append(ch.Notes, sign(fmt.Sprintf("prediction × %s (%+.1f dB), one factor for this axis", significant(scale, 3), 10*math.Log10(scale))))
		} else {
			ch.Notes = append(ch.Notes, "no factor could be fitted; the prediction is as it is")
		}
		curve := draw.Curve{Name: "recorded", Class: "observed", X: pair.Frequency, Y: scaled(pair.Observed, 1/square)}
		if x, y := recorded(c.spectra, name); x != nil { // reaches beyond the sweep
			curve.X, curve.Y = x, scaled(y, 1/square)
		}
		if sp := c.spectra; sp != nil && sp.Lower > 0 && sp.Upper > 0 {
			curve.Lower, curve.Upper = scaled(curve.Y, sp.Lower), scaled(curve.Y, sp.Upper)
			ch.Notes = append(ch.Notes, fmt.Sprintf("shaded: %.0f %% confidence of the recording", 100*sp.Level))
		}
		ch.Curves = append(ch.Curves, draw.Thin(curve, mostPoints))
		about = append(about, "the recording over it")
	}
	switch {
	case c.response != nil:
		r := c.response
		ch.X.From, ch.X.To = math.Min(ch.X.From, r.From), math.Max(ch.X.To, r.To)
		ch.Curves = append(ch.Curves, draw.Thin(draw.Curve{Name: "predicted", Class: "predicted", X: r.Frequency, Y: scaled(r.Density[axis], scale/square)}, mostPoints))
		if flown := r.Flown[axis]; flown != nil && somewhere(flown) {
			ch.Curves = append(ch.Curves, draw.Curve{Name: "with rotor lines", Class: "flown", X: r.Frequency, Y: scaled(flown, scale/square)})
		}
		for _, m := range r.Modes {
			ch.Marks = append(ch.Marks, draw.Mark{X: m.Frequency, Label: fmt.Sprint(m.Number), Mode: m.Number})
		}
		ch.Points = append(ch.Points, predictedPeaks(r, name, scale/square)...)
	case pair != nil:
		ch.Curves = append(ch.Curves, draw.Curve{Name: "predicted", Class: "predicted", X: pair.Frequency, Y: scaled(pair.Predicted, scale/square)})
	}
	if pair != nil {
		ch.Points = append(ch.Points, observedPeaks(c, name)...)
	}
	ch.Bands = orderBands(c)
	ch.About = fmt.Sprintf("Power spectral density of the %s rate over frequency from %.0f to %.0f Hz, as predicted", name, ch.X.From, ch.X.To)
	if len(about) > 0 {
		ch.About += ", with " + strings.Join(about, " and ")
	}
	ch.About += ". Peaks are in the tables below."
	return ch
}

// somewhere says whether a list holds a number at all.
func somewhere(list []float64) bool {
	for _, v := range list {
		if !math.IsNaN(v) {
			return true
		}
	}
	return false
}

func upper(s string) string {
	if s == "" {
		return s
	}
	return strings.ToUpper(s[:1]) + s[1:]
}

// recorded gives the whole spectrum of an axis, nil when there is none.
func recorded(sp *kinds.Spectra, axis string) (frequency, density []float64) {
	if sp == nil {
		return nil, nil
	}
	for _, x := range sp.Axes {
		if x.Axis == axis && x.Unit == "rad/s" {
			for bin := range x.Density {
				frequency = append(frequency, sp.Frequency(bin))
			}
			return frequency, x.Density
		}
	}
	return nil, nil
}

func scaled(y []float64, factor float64) []float64 {
	out := make([]float64, len(y))
	for k, v := range y {
		out[k] = v * factor
	}
	return out
}

// labelled is how many peaks of a curve carry their frequency.
const labelled = 7

func predictedPeaks(r *kinds.Response, axis string, factor float64) []draw.Point {
	var peaks []kinds.ResponsePeak
	for _, p := range r.Peaks {
		if p.Axis == axis {
			peaks = append(peaks, p)
		}
	}
	sort.SliceStable(peaks, func(i, j int) bool { return peaks[i].Density > peaks[j].Density })
	var out []draw.Point
	for i, p := range peaks {
		x := draw.Point{X: p.Frequency, Y: p.Density * factor, Class: "predicted", About: fmt.Sprintf("predicted peak at %.1f Hz: %s", p.Frequency, makers(p))}
		if i < labelled {
			x.Label = fmt.Sprintf("%.0f", p.Frequency)
		}
		out = append(out, x)
	}
	return out
}

// observedPeaks are those that found a partner or stand alone, but not those
// that a rotor order explains.
func observedPeaks(c *content, axis string) []draw.Point {
	var out []draw.Point
	for _, p := range c.comparison.Pairs {
		if p.Axis == axis {
			out = append(out, draw.Point{X: p.Observed, Y: p.ObservedDensity / square, Class: "observed", Label: fmt.Sprintf("%.0f", p.Observed), About: fmt.Sprintf("recorded peak at %.1f Hz", p.Observed)})
		}
	}
	for _, p := range c.comparison.Unpaired {
		if p.Axis == axis && p.Side == kinds.Observed {
			out = append(out, draw.Point{X: p.Frequency, Y: p.Density / square, Class: "observed", Label: fmt.Sprintf("%.0f", p.Frequency), About: fmt.Sprintf("recorded peak at %.1f Hz", p.Frequency)})
		}
	}
	return out
}

// joinBands is the relative gap below which two bands of an order are drawn as
// one.
const joinBands = 0.02

// orderBands are the recorded ones, or the orders at hover when nothing was
// recorded; bands of one order are joined over rotors.
func orderBands(c *content) []draw.Band {
	type key struct {
		label    string
		from, to float64
	}
	var all []key
	add := func(order float64, blade, folded bool, low, high float64) {
		label := fmt.Sprintf("order %g", order)
		if blade {
			label = "blade passing"
		}
		if folded {
			label += " (folded)"
		}
		all = append(all, key{label, low, high})
	}
	recorded := []kinds.OrderBand(nil)
	switch {
	case c.comparison != nil:
		recorded = c.comparison.Orders
	case c.spectra != nil:
		recorded = c.spectra.Orders
	}
	for _, b := range recorded {
		add(b.Order, b.BladePassing, b.Folded, b.Low, b.High)
	}
	if recorded == nil && c.response != nil {
		for _, x := range c.response.Rotors {
			low, high := x.Hover/(2*math.Pi)*(1-modal.HoverBand), math.Min(x.Highest, x.Hover*(1+modal.HoverBand))/(2*math.Pi)
			add(1, false, false, low, high)
			add(2, false, false, 2*low, 2*high)
			if n := float64(x.Blades); x.Blades > 2 {
				add(n, true, false, n*low, n*high)
			}
		}
	}
	sort.SliceStable(all, func(i, j int) bool {
		if all[i].label != all[j].label {
			return all[i].label < all[j].label
		}
		return all[i].from < all[j].from
	})
	var out []draw.Band
	for i, b := range all {
		if i > 0 && all[i-1].label == b.label && b.from <= out[len(out)-1].To*(1+joinBands) {
			out[len(out)-1].To = math.Max(out[len(out)-1].To, b.to)
			continue
		}
		out = append(out, draw.Band{From: b.from, To: b.to, Label: b.label})
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].From < out[j].From })
	return out
}
