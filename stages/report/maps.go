package report

import (
	"fmt"
	"math"
	"sort"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// Bounds of a map on the page: rows of frequency, columns, and how far below the loudest cell colours go.
const (
	mostRows    = 360
	mostColumns = 240
	mapDecades  = 5
)

// mapSection shows spectra over rotor speed, throttle and time.
func mapSection(c *content) *section {
	sp := c.spectra
	if sp == nil || len(sp.Maps) == 0 {
		return nil
	}
	s := &section{ID: "maps", Title: "Spectra over rotor speed and time"}
	s.text("Each column is a spectrum of the recording. What follows a dashed line is a rotor order; what stays at one height is the frame; what does neither comes from elsewhere. Dotted lines with numbers are predicted modes.")
	for _, against := range []string{kinds.MapRotorSpeed, kinds.MapThrottle, kinds.MapTime} {
		var charts []*draw.Chart
		for axis := range sp.Axes {
			if ch := spectrumMap(c, axis, against); ch != nil {
				charts = append(charts, ch)
			}
		}
		if len(charts) == 0 {
			continue
		}
		into := s
		if against != kinds.MapRotorSpeed {
			into = &section{Title: "Spectra over " + against}
		}
		for _, ch := range charts {
			into.heading(ch.Title)
			into.chart(c, ch, "")
		}
		if into != s {
			s.fold(into)
		}
	}
	return s
}

// spectrumMap makes one map; nil when the recording has none of that kind.
func spectrumMap(c *content, axis int, against string) *draw.Chart {
	sp := c.spectra
	rows := sp.MapOf(axis, against)
	if len(rows) == 0 {
		return nil
	}
	unit, factor, label := "s", 1.0, "time, s"
	switch against {
	case kinds.MapRotorSpeed:
		unit, factor, label = "rpm", 1/rpm, "mean speed of the rotors, rpm"
	case kinds.MapThrottle:
		unit, factor, label = "%", 100, "throttle, %"
	}
	x := sp.Axes[axis]
	values, name := 1.0, x.Unit+"²/Hz"
	if x.Unit == "rad/s" {
		values, name = 1/square, "(deg/s)²/Hz"
	}
	g := mapGrid(rows, factor, values, name)
	if g == nil {
		return nil
	}
	ch := &draw.Chart{ID: slug("map-" + x.Axis + "-" + against), Title: upper(x.Axis) + " over " + against, X: draw.Axis{Label: label}, Y: draw.Axis{Label: "frequency, Hz"}, Grid: g}
	ch.About = fmt.Sprintf("Map of the density of the recorded %s over %s and frequency, from %.4g to %.4g %s and up to %.4g Hz. Colours run from %.2g to %.2g %s.",
		x.Axis, against, g.X[0], g.X[len(g.X)-1], unit, g.Y[len(g.Y)-1], g.Low, g.High, name)
	ch.X.From, ch.X.To = g.X[0], g.X[len(g.X)-1]
	ch.Y.From, ch.Y.To = g.Y[0], g.Y[len(g.Y)-1]
	switch against {
	case kinds.MapRotorSpeed:
		ch.Curves = append(orderOverlay(sp, ch), modeOverlay(c.response, ch)...)
	case kinds.MapTime:
		ch.Curves = trackOverlay(c.identified, ch)
	}
	return ch
}

// mapGrid puts the cells of a map side by side. Where there are more rows or columns than a page can show, the loudest
// of those that fall together is kept, so that no line is lost.
func mapGrid(rows []kinds.SpectraMapRow, factor, values float64, name string) *draw.Grid {
	bins := len(rows[0].Density)
	step := rows[0].Step
	for _, r := range rows {
		if len(r.Density) != bins || r.Step != step {
			return nil
		}
	}
	perRow, perColumn := (bins+mostRows-1)/mostRows, (len(rows)+mostColumns-1)/mostColumns
	if bins == 0 {
		return nil
	}
	height := (bins + perRow - 1) / perRow
	var x, y []float64
	for k := 0; k <= height; k++ {
		y = append(y, math.Max(0, (float64(min(k*perRow, bins))-0.5)*step))
	}
	// Columns with empty ones where the cells leave a gap.
	var columns [][]kinds.SpectraMapRow
	for i := 0; i < len(rows); i += perColumn {
		group := rows[i:min(len(rows), i+perColumn)]
		low, high := group[0].Low*factor, group[len(group)-1].High*factor
		if !(high > low) {
			continue
		}
		switch {
		case len(x) == 0:
			x = append(x, low)
		case low > x[len(x)-1]*(1+1e-9)+1e-12:
			x = append(x, low)
			columns = append(columns, nil)
		}
		if high <= x[len(x)-1] {
			continue
		}
		x = append(x, high)
		columns = append(columns, group)
	}
	if len(columns) == 0 {
		return nil
	}
	cells := make([]float64, height*len(columns))
	for k, group := range columns {
		for _, r := range group {
			for bin, v := range r.Density {
				if at := bin/perRow*len(columns) + k; v*values > cells[at] {
					cells[at] = v * values
				}
			}
		}
	}
	return draw.NewGrid(name, x, y, cells, mapDecades)
}

// orderOverlay draws the orders that the recording was searched for, mirrored at half the sample rate.
func orderOverlay(sp *kinds.Spectra, ch *draw.Chart) []draw.Curve {
	orders := map[float64]bool{}
	for _, b := range sp.Orders {
		orders[b.Order] = true
	}
	var list []float64
	for o := range orders {
		list = append(list, o)
	}
	sort.Float64s(list)
	var out []draw.Curve
	for _, o := range list {
		c := draw.Curve{Name: fmt.Sprintf("×%g", o), Class: "over-order"}
		const pieces = 96
		for k := range pieces + 1 {
			speed := ch.X.From + (ch.X.To-ch.X.From)*float64(k)/pieces
			c.X, c.Y = append(c.X, speed), append(c.Y, mirrored(o*speed/60, sp.Rate))
		}
		out = append(out, c)
	}
	return out
}

// mirrored gives where a frequency appears in samples taken at a rate.
func mirrored(f, rate float64) float64 {
	if !(rate > 0) {
		return f
	}
	return math.Abs(f - rate*math.Round(f/rate))
}

// modeOverlay draws predicted natural frequencies over rotor speed.
func modeOverlay(r *kinds.Response, ch *draw.Chart) []draw.Curve {
	if r == nil {
		return nil
	}
	var out []draw.Curve
	speeds := scaled(r.Speeds, 1/rpm)
	for _, w := range r.Whirl {
		if w.Frequency[0] <= math.Min(ch.Y.To, r.To) {
			out = append(out, draw.Curve{Name: fmt.Sprint(w.Mode), Class: "over-mode", X: speeds, Y: w.Frequency})
		}
	}
	return out
}

// trackOverlay draws the first order of each rotor over time.
func trackOverlay(x *kinds.Identified, ch *draw.Chart) []draw.Curve {
	if x == nil {
		return nil
	}
	var out []draw.Curve
	for _, t := range x.Tracks {
		curve := draw.Curve{Name: "order 1 of " + t.Rotor, Class: "over-order", X: t.Time}
		for _, v := range t.Speed {
			f := v / (2 * math.Pi)
			if !(v > 0) || f > ch.Y.To {
				f = math.NaN()
			}
			curve.Y = append(curve.Y, f)
		}
		out = append(out, draw.Thin(curve, mostPoints))
	}
	return out
}

// mostPoints is how many places of a curve the page carries.
const mostPoints = 6000

// slug makes a name fit for an id and a file.
func slug(s string) string {
	out := []byte(nil)
	for _, r := range s {
		switch {
		case r >= 'a' && r <= 'z', r >= '0' && r <= '9', r == '-':
			out = append(out, byte(r))
		case r >= 'A' && r <= 'Z':
			out = append(out, byte(r)+32)
		default:
			if len(out) > 0 && out[len(out)-1] != '-' {
				out = append(out, '-')
			}
		}
	}
	return string(out)
}

// predictedMap shows the predicted spectrum of an axis over rotor speed; nil when the response holds none.
func predictedMap(r *kinds.Response, axis int) *draw.Chart {
	m := r.Map
	if len(m.Rows) < 2 || len(m.Frequency) == 0 {
		return nil
	}
	var x, y []float64
	for k := range m.Rows {
		speed := m.Rows[k].Speed / rpm
		if k == 0 {
			x = append(x, speed-(m.Rows[1].Speed/rpm-speed)/2)
		}
		next := speed + (speed - x[k])
		if k+1 < len(m.Rows) {
			next = (speed + m.Rows[k+1].Speed/rpm) / 2
		}
		x = append(x, next)
	}
	x[0] = math.Max(0, x[0])
	for _, f := range m.Frequency {
		y = append(y, f-m.Width/2)
	}
	y = append(y, m.Frequency[len(m.Frequency)-1]+m.Width/2)
	cells := make([]float64, len(m.Rows)*len(m.Frequency))
	for k, row := range m.Rows {
		for band, v := range row.Density[axis] {
			cells[band*len(m.Rows)+k] = v / square
		}
	}
	g := draw.NewGrid("(deg/s)²/Hz", x, y, cells, mapDecades)
	if g == nil {
		return nil
	}
	name := kinds.AxisNames[axis]
	ch := &draw.Chart{ID: "predicted-map-" + name, Title: upper(name) + " over rotor speed, predicted", Grid: g,
		X: draw.Axis{Label: "speed of the first rotor, rpm", From: x[0], To: x[len(x)-1]}, Y: draw.Axis{Label: "frequency, Hz", From: y[0], To: y[len(y)-1]}}
	ch.About = fmt.Sprintf("Map of the predicted density of the %s rate over rotor speed and frequency, with the lines of orders and the natural frequencies. Colours run from %.2g to %.2g (deg/s)²/Hz.", name, g.Low, g.High)
	seen := map[float64]bool{}
	for _, o := range r.Orders {
		if !seen[o.Order] {
			seen[o.Order] = true
			line := orderLine(fmt.Sprintf("×%.3g", o.Order), o.Order, ch.X.To)
			line.Class = "over-order"
			ch.Curves = append(ch.Curves, line)
		}
	}
	ch.Curves = append(ch.Curves, modeOverlay(r, ch)...)
	return ch
}
