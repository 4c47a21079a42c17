package sweep

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/mechanics/forced"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

const degree = math.Pi / 180

// outcome sums up a response in figures, warnings and tables.
func outcome(r *kinds.Response, g given, set settings) *stage.Outcome {
	o := &stage.Outcome{Figures: map[string]any{}, Warnings: warnings(r, set)}
	for axis, name := range kinds.AxisNames {
		frequency, level := math.NaN(), math.NaN()
		if p, ok := strongest(r, name); ok {
			frequency, level = p.Frequency, p.Density
		}
		o.Figures["peak_"+name] = hertz(frequency)
		o.Figures["peak_level_"+name] = stage.Quantity{SI: level, Dimension: "angular rate density"}
		o.Figures["rms_"+name] = stage.Quantity{SI: r.Axes[axis].RMS, Dimension: "angular rate"}
	}
	list := []any{}
	for _, p := range r.Peaks {
		modes := []any{}
		for _, m := range p.Modes {
			modes = append(modes, float64(m))
		}
		list = append(list, map[string]any{
			"axis": p.Axis, "frequency": hertz(p.Frequency), "damping": p.Damping, "modes": modes,
			"level": stage.Quantity{SI: p.Density, Dimension: "angular rate density"},
		})
	}
	o.Figures["peaks"] = list
	o.Figures["points"] = pointFigure(r)
	o.Figures["direct_error"] = directError(r)
	o.Notes = append(o.Notes,
		fmt.Sprintf("the source is assumed, not measured: %.3g N²/Hz and %.3g (N·m)²/Hz along each component at each rotor", set.source.Force, set.source.Moment))
	if !math.IsNaN(r.Thrust) && set.bladeShare > 0 {
		o.Notes = append(o.Notes, fmt.Sprintf("the thrust of %.3g N per rotor is assumed to vary by %.3g %% at blade passing", r.Thrust, 100*set.bladeShare))
	}
	if two := twoBladed(r); two != "" {
		o.Notes = append(o.Notes, two)
	}
	flown := ""
	if len(r.Orders) > 0 {
		flown = flownNote(set, g.recorded != nil)
		o.Notes = append(o.Notes, flown)
	}
	o.Summary = []stage.Section{peakTable(r), sharesTable(r), axisTable(r, flown), staticTable(r), pointTable(r)}
	if len(r.Lines) > 0 {
		o.Summary = append(o.Summary, lineTable(r))
	}
	if len(r.Orders) > 0 {
		o.Summary = append(o.Summary, mapTable(r))
	}
	if len(r.Direct) > 0 {
		o.Summary = append(o.Summary, directTable(r))
	}
	if len(r.Whirl) > 0 {
		o.Summary = append(o.Summary, rotorTable(r), whirlTable(r), separationTable(r))
	}
	o.Summary = append(o.Summary, practiceTable(r))
	return o
}

// twoBladed names the spinning rotors whose tilt inertia is not that of a disc.
func twoBladed(r *kinds.Response) string {
	var names []string
	for _, x := range r.Rotors {
		if x.Blades == 2 && x.Polar > 0 {
			names = append(names, x.Rotor)
		}
	}
	if len(names) == 0 || !r.Spinning {
		return ""
	}
	return fmt.Sprintf("two blades (%s): their tilt inertia changes twice a turn, which the model takes as its mean; tilting modes near twice the rotors' speed may couple through it", strings.Join(names, ", "))
}

// leastDamping is the damping ratio below which a mode is as good as undamped.
const leastDamping = 1e-4

func warnings(r *kinds.Response, set settings) []stage.Warning {
	var out []stage.Warning
	if r.To > r.ModesTo/1.5*(1+1e-9) {
		out = append(out, stage.Warning{
			ID:     "sweep.beyond-modes",
			Text:   fmt.Sprintf("the sweep goes to %.4g Hz with modes to %.4g Hz; by common practice modes should reach 1.5 times as high as the sweep", r.To, r.ModesTo),
			Where:  "to",
			Remedy: fmt.Sprintf("raise up_to of solve to %.4g Hz, or end the sweep at %.4g Hz", math.Ceil(1.5*r.To), math.Floor(r.ModesTo/1.5)),
		})
	}
	if set.residual && !r.Residual {
		out = append(out, stage.Warning{
			ID: "sweep.no-residual", Text: "the modal basis holds no residual vectors, so nothing stands in for the modes left out",
			Where: "residual", Remedy: "let solve compute them, or raise its up_to",
		})
	}
	var undamped []string
	for _, m := range r.Modes {
		if m.Damping < leastDamping && m.Frequency > r.From && m.Frequency < r.To {
			undamped = append(undamped, fmt.Sprintf("%d at %.4g Hz", m.Number, m.Frequency))
		}
	}
	if len(undamped) > 0 {
		out = append(out, stage.Warning{
			ID: "sweep.undamped", Text: fmt.Sprintf("modes with a damping ratio below %g, whose peaks mean little: %s", leastDamping, strings.Join(undamped, ", ")),
			Where: "damping", Remedy: "give their materials, joints and mounts a loss factor, or the airframe a floor",
		})
	}
	for _, x := range r.Rotors {
		if x.Highest > 0 && x.Speed > x.Highest*(1+1e-9) {
			out = append(out, stage.Warning{
				ID: "sweep.beyond-speed", Text: fmt.Sprintf("rotor %s turns at %.0f rpm here, and by its airframe at no more than %.0f rpm", x.Rotor, x.Speed/rpm, x.Highest/rpm),
				Where: "rotor_speed", Remedy: "lower rotor_speed, or raise max_speed in the airframe file",
			})
		}
	}
	out = append(out, flownTooFast(r, set)...)
	for axis, name := range kinds.AxisNames {
		p, ok := strongest(r, name)
		y := r.Density[axis]
		for _, end := range []int{0, len(y) - 1} {
			if ok && y[end] > p.Density {
				out = append(out, stage.Warning{
					ID: "sweep.edge", Text: fmt.Sprintf("%s is loudest at %.4g Hz, an end of the sweep, and so no peak there is listed", name, r.Frequency[end]),
					Where: name, Remedy: "widen the sweep",
				})
			}
		}
	}
	return out
}

func peakTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title: "Predicted peaks of the gyro rate",
		Text:  "under the assumed broadband source; a share is what a mode adds to the peak, negative if it works against it",
		Columns: []stage.Column{{Name: "axis"}, {Name: "Hz", Right: true}, {Name: "(deg/s)²/Hz", Right: true}, {Name: "stands out, dB", Right: true},
			{Name: "damping, %", Right: true}, {Name: "modes and their shares"}},
	}
	for _, p := range r.Peaks {
		s.Rows = append(s.Rows, []string{
			p.Axis, fmt.Sprintf("%.1f", p.Frequency), fmt.Sprintf("%.3g", p.Density/degree/degree), fmt.Sprintf("%.1f", 10*math.Log10(p.Prominence)),
			percent(p.Damping, "%.2f"), makers(p),
		})
	}
	return s
}

// sharesTable gives what each rotor makes of each peak, and the residual vectors.
func sharesTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title:   "What each rotor makes of the peaks, %",
		Text:    "alone, of the density; they add up to more or less than 100 where rotors are correlated. The last column is what the correction for modes left out changes",
		Columns: []stage.Column{{Name: "axis"}, {Name: "Hz", Right: true}},
	}
	for _, x := range r.Rotors {
		s.Columns = append(s.Columns, stage.Column{Name: x.Rotor, Right: true})
	}
	s.Columns = append(s.Columns, stage.Column{Name: "most by"}, stage.Column{Name: "takes its power"}, stage.Column{Name: "correction, dB", Right: true})
	for _, p := range r.Peaks {
		row := []string{p.Axis, fmt.Sprintf("%.1f", p.Frequency)}
		for k := range r.Rotors {
			share := "–"
			if k < len(p.RotorShares) {
				share = fmt.Sprintf("%.0f", 100*p.RotorShares[k])
			}
			row = append(row, share)
		}
		losses := "–"
		if len(p.Losses) > 0 {
			losses = fmt.Sprintf("%s %.0f %%", p.Losses[0], 100*p.LossShares[0])
		}
		s.Rows = append(s.Rows, append(row, kinds.ComponentNames[p.Component]+" of "+p.Rotor, losses, dash("%+.2f", -10*math.Log10(p.Uncorrected))))
	}
	return s
}

func percent(x float64, format string) string {
	if math.IsNaN(x) {
		return "–"
	}
	return fmt.Sprintf(format, 100*x)
}

// makers puts the makers of a peak in words: "3: 91 %, 4: −6 %, rigid body: 8 %".
func makers(p kinds.ResponsePeak) string {
	var parts []string
	add := func(name string, share float64) {
		parts = append(parts, fmt.Sprintf("%s: %s %%", name, strings.Replace(fmt.Sprintf("%.0f", 100*share), "-", "−", 1)))
	}
	for i, m := range p.Modes {
		add(fmt.Sprint(m), p.Shares[i])
	}
	if math.Abs(p.Rigid) >= leastShare {
		add("rigid body", p.Rigid)
	}
	if math.Abs(p.Residual) >= leastShare {
		add("modes left out", p.Residual)
	}
	return strings.Join(parts, ", ")
}

// axisTable gives the rates; flown says what the flight in it rests on.
func axisTable(r *kinds.Response, flown string) stage.Section {
	s := stage.Section{
		Title: fmt.Sprintf("Gyro rate from %.4g to %.4g Hz", r.From, r.To),
		Text: "root mean square under the assumed broadband source; with the lines of the rotors and the noise of the gyro as over a flight, spread over its rotor speeds; " +
			"and the greatest change that the correction for modes left out makes",
		Columns: []stage.Column{{Name: "axis"}, {Name: "rms, deg/s", Right: true}, {Name: "with lines, deg/s", Right: true}, {Name: "strongest peak, Hz", Right: true}, {Name: "static correction, dB", Right: true}},
	}
	if flown != "" {
		s.Text += "; " + flown
	}
	for axis, x := range r.Axes {
		seen := "–"
		if y := r.Flown[axis]; y != nil {
			seen = fmt.Sprintf("%.3g", math.Sqrt(forced.MeanSquare(r.Frequency, y))/degree)
		}
		top, correction := "–", "–"
		if p, ok := strongest(r, x.Axis); ok {
			top = fmt.Sprintf("%.1f", p.Frequency)
		}
		if !math.IsNaN(x.Correction) {
			correction = fmt.Sprintf("%+.2f at %.1f Hz", x.Correction, x.CorrectionAt)
		}
		s.Rows = append(s.Rows, []string{x.Axis, fmt.Sprintf("%.3g", x.RMS/degree), seen, top, correction})
	}
	return s
}

// mapTable gives the speeds at which lines are loudest.
func mapTable(r *kinds.Response) stage.Section {
	last := r.MapSpeeds[len(r.MapSpeeds)-1]
	s := stage.Section{
		Title: fmt.Sprintf("Rotor lines up to %.0f rpm, largest amplitude and its speed", last/rpm),
		Columns: []stage.Column{{Name: "source"}, {Name: "order", Right: true}, {Name: "roll, deg/s", Right: true}, {Name: "at rpm", Right: true},
			{Name: "pitch, deg/s", Right: true}, {Name: "at rpm", Right: true}, {Name: "yaw, deg/s", Right: true}, {Name: "at rpm", Right: true}},
	}
	reach := r.ModesTo / 1.5
	for _, x := range r.Orders {
		row := []string{x.Source, fmt.Sprintf("%.4g", x.Order)}
		for axis := range x.Rate {
			best, at := 0.0, math.NaN()
			for k, a := range x.Rate[axis] {
				if a > best && x.Order*r.MapSpeeds[k]/(2*math.Pi) <= reach*(1+1e-9) {
					best, at = a, r.MapSpeeds[k]
				}
			}
			row = append(row, fmt.Sprintf("%.3g", best/degree), dash("%.0f", at/rpm))
		}
		s.Rows = append(s.Rows, row)
	}
	s.Text = fmt.Sprintf("rotors added as power; only lines up to %.4g Hz, to which the modes carry", reach)
	for _, x := range r.Orders {
		if len(x.Rotors) < len(r.Rotors) {
			s.Text += fmt.Sprintf("; orders and rpm are those of rotor %s, the others turn in the ratio of their hover speeds", r.Rotors[0].Rotor)
			break
		}
	}
	return s
}

func lineTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title: "Rotor lines at " + speedName(r) + ", peak amplitude",
		Columns: []stage.Column{{Name: "source"}, {Name: "rotor"}, {Name: "Hz", Right: true}, {Name: "N or N·m", Right: true},
			{Name: "roll, deg/s", Right: true}, {Name: "pitch, deg/s", Right: true}, {Name: "yaw, deg/s", Right: true}},
	}
	for _, x := range r.Lines {
		if reach := r.ModesTo / 1.5; x.Frequency > reach*(1+1e-9) {
			s.Text = fmt.Sprintf("lines above %.4g Hz are rough: the modes go to %.4g Hz, which carries a response to two thirds of that", reach, r.ModesTo)
		}
		row := []string{x.Source, x.Rotor, fmt.Sprintf("%.1f", x.Frequency), dash("%.3g", x.Force)}
		for _, rate := range x.Rate {
			row = append(row, fmt.Sprintf("%.3g", rate/degree))
		}
		s.Rows = append(s.Rows, row)
	}
	return s
}
