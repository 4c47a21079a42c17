package report

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
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
		s.heading(upper(name))
		s.chart(c, axisChart(c, axis), "")
	}
	if r := c.response; r != nil {
		s.aside(fmt.Sprintf("The source is assumed, not measured: %s N²/Hz of force and %s (N·m)²/Hz of moment along each component at each rotor, added over rotors as power. Where the peaks lie and how they compare says more than their level.",
			plainPower(r.Force), plainPower(r.Moment)))
		s.bars(makerBars(r))
		s.bars(driverBars(r))
		s.table(peakTable(r))
		s.table(levelTable(r))
		s.table(lineTable(r))
		s.table(pointTable(r))
		whirlSection(s, c)
		shapeGallery(s, c)
		s.fold(planes(c))
	}
	return s
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
		parts = append(parts, fmt.Sprintf("Hatched: where the rotors' orders lie in gentle flight, within %.0f %% of hover speed.", 100*modal.HoverBand))
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
	t := &table{Name: "rotor-lines", Title: "Rotor lines at " + spinName(r),
		About: "Peak amplitude of the gyro rate. Unbalance is what each rotor's balance grade permits; the thrust at blade passing is assumed to vary by " + plain(100*r.BladeShare, 2).Text + " %.",
		Columns: []column{{"source", "", false}, {"rotor", "", false}, {"frequency", "Hz", true}, {"force", "N", true},
			{"roll", "deg/s", true}, {"pitch", "deg/s", true}, {"yaw", "deg/s", true}}}
	rough := false
	for _, x := range r.Lines {
		rough = rough || x.Frequency > r.ModesTo/1.5*(1+1e-9)
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
	if rough {
		t.About += fmt.Sprintf(" Lines above %.4g Hz are rough: the modes go to %.4g Hz, which carries a response to two thirds of that.", r.ModesTo/1.5, r.ModesTo)
	}
	return t
}

// pointTable gives how far and how hard the named points shake.
func pointTable(r *kinds.Response) *table {
	t := &table{Name: "named-points", Title: fmt.Sprintf("Named points from %.4g to %.4g Hz", r.From, r.To),
		About: "Root sum of squares over x, y and z. Root mean square under the assumed source, and the frequency at which the acceleration is greatest; the last columns are the peak amplitude that the unbalance of all rotors makes at hover.",
		Columns: []column{{"point", "", false}, {"kind", "", false}, {"displacement rms", "µm", true}, {"acceleration rms", "m/s²", true}, {"loudest at", "Hz", true},
			{"displacement by unbalance", "µm", true}, {"acceleration by unbalance", "m/s²", true}}}
	for _, p := range r.Points {
		kind := p.Kind
		if kind == "node" {
			kind = "on " + p.Part
		}
		move, shake, at := r.Shaken(p.Name)
		row := []cell{words(p.Name), words(kind), digits(1e6*move, 3), digits(shake, 3), number(at, 1), missing(), missing()}
		if move, shake := r.ShakenByLine(p.Name, "unbalance"); shake > 0 {
			row[5], row[6] = digits(1e6*move, 3), digits(shake, 3)
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
		best := strongestPeak(r, axis.Axis)
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
