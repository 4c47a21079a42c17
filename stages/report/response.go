package report

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

const (
	degree = math.Pi / 180
	square = degree * degree // (deg/s)² in (rad/s)²
	rpm    = 2 * math.Pi / 60
)

// responseSection shows the predicted gyro rate, with the recording over it.
func responseSection(c *content) *section {
	s := &section{ID: "response", Title: "Response at the gyro"}
	if c.response == nil && c.comparison == nil {
		return nil
	}
	s.text(chartLegend(c))
	for axis, name := range kinds.AxisNames {
		ch := axisChart(c, axis)
		svg := ch.Draw()
		if svg == "" {
			continue
		}
		s.heading(strings.ToUpper(name[:1]) + name[1:])
		s.draw(svg, "")
	}
	if r := c.response; r != nil {
		s.aside(fmt.Sprintf("The source is assumed, not measured: %s N²/Hz of force and %s (N·m)²/Hz of moment along each component at each rotor, added over rotors as power. Where the peaks lie and how they compare says more than their level.",
			plainPower(r.Force), plainPower(r.Moment)))
		s.table(peakTable(r))
		s.table(levelTable(r))
		s.table(lineTable(r))
		shapeGallery(s, c)
	}
	return s
}

// axisChart gathers what is known of one axis.
func axisChart(c *content, axis int) *draw.Chart {
	name := kinds.AxisNames[axis]
	ch := &draw.Chart{Name: name, Label: "gyro rate, (deg/s)²/Hz", From: math.Inf(1), To: math.Inf(-1)}
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
		ch.From, ch.To = c.comparison.From, c.comparison.To
		if pair.Scale > 0 {
			scale = pair.Scale
			ch.Notes = append(ch.Notes, fmt.Sprintf("prediction × %s (%+.1f dB), one factor for this axis", significant(scale, 3), 10*math.Log10(scale)))
			ch.Notes[0] = sign(ch.Notes[0])
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
		ch.Curves = append(ch.Curves, curve)
		about = append(about, "the recording over it")
	}
	switch {
	case c.response != nil:
		r := c.response
		ch.From, ch.To = math.Min(ch.From, r.From), math.Max(ch.To, r.To)
		ch.Curves = append(ch.Curves, draw.Curve{Name: "predicted", Class: "predicted", X: r.Frequency, Y: scaled(r.Density[axis], scale/square)})
		for _, m := range r.Modes {
			ch.Marks = append(ch.Marks, draw.Mark{X: m.Frequency, Label: fmt.Sprint(m.Number)})
		}
		ch.Peaks = append(ch.Peaks, predictedPeaks(r, name, scale/square)...)
	case pair != nil:
		ch.Curves = append(ch.Curves, draw.Curve{Name: "predicted", Class: "predicted", X: pair.Frequency, Y: scaled(pair.Predicted, scale/square)})
	}
	if pair != nil {
		ch.Peaks = append(ch.Peaks, observedPeaks(c, name)...)
	}
	ch.Bands = orderBands(c)
	ch.About = fmt.Sprintf("Power spectral density of the %s rate over frequency from %.0f to %.0f Hz, as predicted", name, ch.From, ch.To)
	if len(about) > 0 {
		ch.About += ", with " + strings.Join(about, " and ")
	}
	ch.About += ". Peaks are in the tables below."
	return ch
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

func predictedPeaks(r *kinds.Response, axis string, factor float64) []draw.Peak {
	var peaks []kinds.ResponsePeak
	for _, p := range r.Peaks {
		if p.Axis == axis {
			peaks = append(peaks, p)
		}
	}
	sort.SliceStable(peaks, func(i, j int) bool { return peaks[i].Density > peaks[j].Density })
	var out []draw.Peak
	for i, p := range peaks {
		x := draw.Peak{X: p.Frequency, Y: p.Density * factor, Class: "predicted"}
		if i < labelled {
			x.Label = fmt.Sprintf("%.0f", p.Frequency)
		}
		out = append(out, x)
	}
	return out
}

// observedPeaks are those that found a partner or stand alone, but not those
// that a rotor order explains.
func observedPeaks(c *content, axis string) []draw.Peak {
	var out []draw.Peak
	for _, p := range c.comparison.Pairs {
		if p.Axis == axis {
			out = append(out, draw.Peak{X: p.Observed, Y: p.ObservedDensity / square, Class: "observed", Label: fmt.Sprintf("%.0f", p.Observed)})
		}
	}
	for _, p := range c.comparison.Unpaired {
		if p.Axis == axis && p.Side == kinds.Observed {
			out = append(out, draw.Peak{X: p.Frequency, Y: p.Density / square, Class: "observed", Label: fmt.Sprintf("%.0f", p.Frequency)})
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
			f := x.Hover / (2 * math.Pi)
			add(1, false, false, f*0.99, f*1.01)
			add(2, false, false, 2*f*0.99, 2*f*1.01)
			if x.Blades > 2 {
				add(float64(x.Blades), true, false, float64(x.Blades)*f*0.99, float64(x.Blades)*f*1.01)
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

// chartLegend says once how to read the charts.
func chartLegend(c *content) string {
	var parts []string
	if c.response != nil {
		parts = append(parts, "Rings mark predicted peaks; numbered lines at the top are the modes.")
	}
	if c.comparison != nil {
		parts = append(parts, "Squares mark recorded peaks that no rotor order explains.")
	}
	if c.comparison != nil || c.spectra != nil {
		parts = append(parts, "Hatched: where the rotors' orders may lie, as recorded.")
	} else {
		parts = append(parts, "Hatched: rotor orders within 1 % of hover speed.")
	}
	return strings.Join(parts, " ")
}

func peakTable(r *kinds.Response) *table {
	t := &table{Name: "predicted-peaks", Title: "Predicted peaks",
		About: "A share is what a mode adds to the peak, its phasor projected on the total; negative works against it.",
		Columns: []column{{"axis", "", false}, {"frequency", "Hz", true}, {"density", "(deg/s)²/Hz", true}, {"stands out", "dB", true}, {"damping ratio", "%", true},
			{"made by", "", false}, {"driven most by", "", false}, {"power taken by", "", false}, {"static correction", "dB", true}}}
	for _, p := range r.Peaks {
		var losers []string
		for i, name := range p.Losses {
			if i < 3 {
				losers = append(losers, share(strings.TrimPrefix(name, "part "), p.LossShares[i]))
			}
		}
		t.Rows = append(t.Rows, []cell{
			words(p.Axis), number(p.Frequency, 1), digits(p.Density/square, 3), number(10*math.Log10(p.Prominence), 1), percent(p.Damping, 2),
			words(makers(p)), words(share(p.Rotor+", "+kinds.ComponentNames[p.Component]+",", p.ComponentShare)),
			words(strings.Join(losers, ", ")), signed(-10*math.Log10(p.Uncorrected), 2),
		})
	}
	return t
}

func levelTable(r *kinds.Response) *table {
	t := &table{Name: "gyro-levels", Title: fmt.Sprintf("Gyro rate from %.4g to %.4g Hz", r.From, r.To),
		About:   "Root mean square under the assumed source. The static correction stands for the modes left out; shown is the largest change it makes.",
		Columns: []column{{"axis", "", false}, {"rms", "deg/s", true}, {"static correction", "dB", true}, {"at", "Hz", true}}}
	for _, x := range r.Axes {
		t.Rows = append(t.Rows, []cell{words(x.Axis), digits(x.RMS/degree, 3), signed(x.Correction, 2), number(x.CorrectionAt, 1)})
	}
	return t
}

func lineTable(r *kinds.Response) *table {
	t := &table{Name: "rotor-lines", Title: "Rotor lines at hover speed",
		About: "Peak amplitude of the gyro rate. Unbalance is what each rotor's balance grade permits; the thrust at blade passing is assumed to vary by " + plain(100*r.BladeShare, 2).Text + " %.",
		Columns: []column{{"source", "", false}, {"rotor", "", false}, {"frequency", "Hz", true}, {"force", "N", true},
			{"roll", "deg/s", true}, {"pitch", "deg/s", true}, {"yaw", "deg/s", true}}}
	for _, x := range r.Lines {
		row := []cell{words(x.Source), words(x.Rotor), number(x.Frequency, 1), digits(x.Force, 3)}
		for _, rate := range x.Rate {
			row = append(row, digits(rate/degree, 3))
		}
		if x.Rotor == "all" {
			for i := range row {
				row[i].Strong = true
			}
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// makers puts the makers of a peak in words: "mode 3 91 %, mode 4 −6 %".
func makers(p kinds.ResponsePeak) string {
	const least = 0.05
	var parts []string
	for i, m := range p.Modes {
		parts = append(parts, sign(share(fmt.Sprintf("mode %d", m), p.Shares[i])))
	}
	if math.Abs(p.Rigid) >= least {
		parts = append(parts, sign(share("rigid body", p.Rigid)))
	}
	if math.Abs(p.Residual) >= least {
		parts = append(parts, sign(share("modes left out", p.Residual)))
	}
	return strings.Join(parts, ", ")
}

// glanceTable gives the strongest predicted peak of each axis and what the
// recording has there.
func glanceTable(c *content) *table {
	r := c.response
	if r == nil {
		return nil
	}
	t := &table{Name: "at-a-glance", Title: "Strongest predicted peak of each axis",
		Columns: []column{{"axis", "", false}, {"frequency", "Hz", true}, {"made by", "", false}, {"rms of the axis", "deg/s", true}}}
	if c.comparison != nil {
		t.Columns = append(t.Columns, column{"recorded at", "Hz", true}, column{"error", "%", true})
	}
	for _, axis := range r.Axes {
		var best *kinds.ResponsePeak
		for i := range r.Peaks {
			if p := &r.Peaks[i]; p.Axis == axis.Axis && (best == nil || p.Density > best.Density) {
				best = p
			}
		}
		row := []cell{words(axis.Axis), missing(), words("no peak"), digits(axis.RMS/degree, 3)}
		found, off := missing(), missing()
		if best != nil {
			row[1], row[2] = number(best.Frequency, 1), words(makers(*best))
			if c.comparison != nil {
				for _, p := range c.comparison.Pairs {
					if p.Axis == axis.Axis && math.Abs(p.Predicted-best.Frequency) < 1e-6*best.Frequency {
						found, off = number(p.Observed, 1), signed(100*p.Error, 1)
					}
				}
			}
		}
		if c.comparison != nil {
			row = append(row, found, off)
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// shapeGallery draws the operating shapes at the instant of the greatest motion.
func shapeGallery(s *section, c *content) {
	r := c.response
	var pictures []figure
	var surface *draw.Surface
	var view *draw.View
	for _, x := range r.Shapes {
		if c.mesh == nil || len(x.Real) != 3*len(c.mesh.Nodes) {
			continue
		}
		if view == nil {
			surface, view = c.drawing()
		}
		// Re(u e^{iθ}) is greatest at θ = −½ arg Σ u².
		var re, im float64
		for k := range x.Real {
			re += x.Real[k]*x.Real[k] - x.Imaginary[k]*x.Imaginary[k]
			im += 2 * x.Real[k] * x.Imaginary[k]
		}
		theta := -math.Atan2(im, re) / 2
		cos, sin := math.Cos(theta), math.Sin(theta)
		what := fmt.Sprintf("Driven by the %s at rotor %s", kinds.ComponentNames[x.Component], x.Rotor)
		if x.Axis != "" {
			what += ", the strongest source of this " + x.Axis + " peak"
		}
		title := fmt.Sprintf("%.1f\u00a0Hz", x.Frequency)
		pictures = append(pictures, figure{Title: title, Caption: what + ".", Picture: trusted(view.Shape(surface, restName, draw.Motion{
			About: "Operating shape at " + title + ". " + what + ".",
			Node: func(n int32) airframe.Vec {
				var u airframe.Vec
				for d := range u {
					u[d] = cos*x.Real[3*int(n)+d] - sin*x.Imaginary[3*int(n)+d]
				}
				return u
			},
		}))})
	}
	if len(pictures) > 0 {
		s.heading("Operating shapes")
		s.text("How the frame moves at these frequencies, all modes together, at the instant of the greatest motion.")
		s.Blocks = append(s.Blocks, block{Gallery: pictures})
	}
}

// plainPower writes a number with a power of ten and no trailing zeros.
func plainPower(x float64) string {
	s := significant(x, 2)
	if before, after, ok := strings.Cut(s, ".0·"); ok {
		if before == "1" {
			return after
		}
		return before + "·" + after
	}
	return s
}
