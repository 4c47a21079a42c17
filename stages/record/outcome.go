package record

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

const degree = math.Pi / 180

// Thresholds of warnings; common practice.
const (
	muchRepeated = 0.5
	fewAverages  = 16
)

// outcome tells what was found, guessed and left out.
func outcome(f *found, r *gather.Recording, set settings) *stage.Outcome {
	s := f.spectra
	saturated := 0.0
	for _, a := range s.Axes {
		saturated = max(saturated, float64(a.Saturated)/float64(s.Samples))
	}
	listed := []any{}
	for _, x := range s.Peaks {
		axis := s.Axes[x.Axis]
		listed = append(listed, map[string]any{
			"axis": axis.Axis, "frequency": hertz(x.Frequency), "frequency_error": hertz(x.FrequencyError),
			"level": stage.Quantity{SI: x.Density, Dimension: axis.Quantity + " density"}, "damping": x.Damping,
		})
	}
	o := &stage.Outcome{
		Figures: map[string]any{
			"rate": hertz(s.Rate), "samples": float64(s.Samples), "gaps": float64(s.Gaps), "averages": float64(s.Segments),
			"saturated": saturated, "peaks": listed,
		},
		Notes:    r.Notes(),
		Warnings: warnings(f, r, set),
	}
	if f.unused > 0 {
		o.Notes = append(o.Notes, fmt.Sprintf("%d of %d samples are in no whole segment", f.unused, s.Samples))
	}
	o.Summary = []stage.Section{axisTable(s, set.File), peakTable(s)}
	if len(s.Rotors) > 0 {
		o.Summary = append(o.Summary, rotorTable(s))
	}
	if len(s.Pieces) > 1 {
		o.Summary = append(o.Summary, pieceTable(s))
	}
	if len(s.Cross) > 0 {
		o.Summary = append(o.Summary, crossTable(s))
	}
	if len(s.Findings) > 0 {
		o.Summary = append(o.Summary, findingTable(s))
	}
	return o
}

// join adds the outcome of the second sensor: its peaks, and its tables under their own heading. What was said once is not said again.
func join(o, second *stage.Outcome) {
	o.Figures["peaks"] = append(o.Figures["peaks"].([]any), second.Figures["peaks"].([]any)...)
	o.Figures["saturated"] = max(o.Figures["saturated"].(float64), second.Figures["saturated"].(float64))
	for _, s := range second.Summary {
		s.Title = "Accelerometer: " + strings.ToLower(s.Title[:1]) + s.Title[1:]
		o.Summary = append(o.Summary, s)
	}
	for _, n := range second.Notes {
		if !slices.Contains(o.Notes, n) {
			o.Notes = append(o.Notes, n)
		}
	}
	for _, w := range second.Warnings {
		if !slices.Contains(o.Warnings, w) {
			o.Warnings = append(o.Warnings, w)
		}
	}
}

func hertz(f float64) stage.Quantity { return stage.Quantity{SI: f, Dimension: "frequency"} }

func warnings(f *found, r *gather.Recording, set settings) []stage.Warning {
	out := r.Warnings("record", f.axes, f.timing)
	s := f.spectra
	add := func(id, where, remedy, format string, args ...any) {
		out = append(out, stage.Warning{ID: "record." + id, Where: where, Remedy: remedy, Text: fmt.Sprintf(format, args...)})
	}
	for _, a := range s.Axes {
		if a.Saturated > 0 {
			add("saturated", a.Column, "choose a wider range of the sensor", "%d samples of %s stay at an extreme of %.4g %s for three or more in turn, as if the sensor were at its limit",
				a.Saturated, a.Axis, shownRate(a, a.Largest), shownUnit(a))
		}
		if a.Repeated > muchRepeated {
			add("repeated", a.Column, "log at the rate of the sensor", "%.0f %% of the samples of %s equal the one before; it seems to be logged faster than it is measured", 100*a.Repeated, a.Axis)
		}
	}
	if s.Segments < fewAverages {
		add("few-averages", set.File, "choose a wider bin or a longer window", "only %d segments are averaged, so a density is known to within a factor of %.2g to %.2g", s.Segments, s.Lower, s.Upper)
	}
	return out
}

// shownRate turns a value into the unit it is shown in.
func shownRate(a kinds.SpectraAxis, v float64) float64 {
	if a.Quantity == gather.AngularRate {
		return v / degree
	}
	return v
}

func shownUnit(a kinds.SpectraAxis) string {
	if a.Quantity == gather.AngularRate {
		return "deg/s"
	}
	return "m/s²"
}

// densityUnit heads a column of densities: in the unit of the axes, or in words where they differ.
func densityUnit(s *kinds.Spectra) string {
	for _, a := range s.Axes[1:] {
		if a.Quantity != s.Axes[0].Quantity {
			return "unit²/Hz"
		}
	}
	return "(" + shownUnit(s.Axes[0]) + ")²/Hz"
}

func axisTable(s *kinds.Spectra, file string) stage.Section {
	t := stage.Section{
		Title: "Recording " + file,
		Text: fmt.Sprintf("%.5g Hz, %.5g s to %.5g s, %d gaps; %d averages of %.3g s in bins of %.3g Hz, %g %% bounds at %.2f and %.2f times the density",
			s.Rate, s.From, s.To, s.Gaps, s.Segments, float64(s.Segment)/s.Rate, s.Step, 100*s.Level, s.Lower, s.Upper),
		Columns: []stage.Column{{Name: "axis"}, {Name: "column"}, {Name: "unit"}, {Name: "mean", Right: true}, {Name: "rms about it", Right: true},
			{Name: "largest", Right: true}, {Name: "peaks", Right: true}},
	}
	for i, a := range s.Axes {
		count := 0
		for _, p := range s.Peaks {
			if p.Axis == i {
				count++
			}
		}
		t.Rows = append(t.Rows, []string{a.Axis, a.Column, shownUnit(a), fmt.Sprintf("%.3g", shownRate(a, a.Mean)),
			fmt.Sprintf("%.3g", shownRate(a, a.Deviation)), fmt.Sprintf("%.4g", shownRate(a, a.Largest)), fmt.Sprint(count)})
	}
	return t
}

func peakTable(s *kinds.Spectra) stage.Section {
	t := stage.Section{
		Title: "Observed peaks",
		Text:  "± is one standard error; a narrow peak is a line, or a mode with less damping than can be seen",
		Columns: []stage.Column{{Name: "axis"}, {Name: "Hz", Right: true}, {Name: "±", Right: true}, {Name: densityUnit(s), Right: true},
			{Name: "stands out, dB", Right: true}, {Name: "damping, %", Right: true}, {Name: "±", Right: true}, {Name: "rotor order there"}},
	}
	for _, p := range s.Peaks {
		a := s.Axes[p.Axis]
		damping, by := "–", "–"
		switch {
		case p.Narrow:
			damping = fmt.Sprintf("< %.2f", 100*p.Damping)
		case !math.IsNaN(p.Damping):
			damping, by = fmt.Sprintf("%.2f", 100*p.Damping), fmt.Sprintf("%.2f", 100*p.DampingError)
		}
		t.Rows = append(t.Rows, []string{a.Axis, fmt.Sprintf("%.1f", p.Frequency), fmt.Sprintf("%.2f", p.FrequencyError),
			fmt.Sprintf("%.3g", shownRate(a, shownRate(a, p.Density))), fmt.Sprintf("%.1f", 10*math.Log10(p.Prominence)), damping, by, holding(s, p.Frequency)})
	}
	return t
}

// holding names the orders in whose bands a frequency lies: 1, 2 and blade passing, the strong ones. Higher orders, whose
// bands are wide, are kept for those who know the number of blades.
func holding(s *kinds.Spectra, f float64) string {
	var out []string
	seen := map[string]bool{}
	for _, b := range s.Orders {
		if !b.BladePassing && b.Order > 2 {
			continue
		}
		name := b.Name()
		if b.Low <= f && f <= b.High && !seen[name] {
			seen[name] = true
			out = append(out, name)
		}
	}
	return strings.Join(out, ", ")
}

func rotorTable(s *kinds.Spectra) stage.Section {
	t := stage.Section{
		Title:   "Rotor speeds within the window",
		Columns: []stage.Column{{Name: "rotor"}, {Name: "column"}, {Name: "median, rpm", Right: true}, {Name: "98 % of the time, rpm"}, {Name: "order 1, Hz"}},
	}
	const rpm = 2 * math.Pi / 60
	for _, r := range s.Rotors {
		t.Rows = append(t.Rows, []string{r.Rotor, r.Column, fmt.Sprintf("%.0f", r.Median/rpm),
			fmt.Sprintf("%.0f to %.0f", r.Low/rpm, r.High/rpm), fmt.Sprintf("%.1f to %.1f", r.Low/(2*math.Pi), r.High/(2*math.Pi))})
	}
	return t
}

func pieceTable(s *kinds.Spectra) stage.Section {
	level := "throttle"
	if s.ChosenBy == kinds.MapRotorSpeed {
		level = "mean speed, rpm"
	}
	t := stage.Section{
		Title:   "Pieces of the recording",
		Columns: []stage.Column{{Name: "from, s", Right: true}, {Name: "to, s", Right: true}, {Name: level, Right: true}, {Name: "used"}, {Name: "why"}},
	}
	if s.ChosenBy == "window" {
		t.Columns[2].Name = "samples"
	}
	for _, p := range s.Pieces {
		shown, used := fmt.Sprintf("%.2f", p.Level), "no"
		switch s.ChosenBy {
		case kinds.MapRotorSpeed:
			shown = fmt.Sprintf("%.0f", p.Level*60/(2*math.Pi))
		case "window":
			shown = fmt.Sprint(p.Samples)
		}
		if p.Used {
			used = "yes"
		}
		t.Rows = append(t.Rows, []string{fmt.Sprintf("%.2f", p.From), fmt.Sprintf("%.2f", p.To), shown, used, p.Why})
	}
	return t
}

// crossTable tells how much of the axes has a common cause, at the listed peaks of either.
func crossTable(s *kinds.Spectra) stage.Section {
	t := stage.Section{
		Title:   "Coherence between axes",
		Text:    fmt.Sprintf("chance stays below %.2f for %g %% of the bins; the greatest is looked for at the listed peaks", s.CoherenceLimit, 100*s.Level),
		Columns: []stage.Column{{Name: "axes"}, {Name: "bins above chance, %", Right: true}, {Name: "greatest at a peak", Right: true}, {Name: "Hz", Right: true}},
	}
	row := func(name string, coherence []float64, axes ...int) {
		above, greatest, at := 0, math.NaN(), math.NaN()
		for _, v := range coherence[1:] {
			if v > s.CoherenceLimit {
				above++
			}
		}
		for _, p := range s.Peaks {
			if k := int(math.Round(p.Frequency / s.Step)); slices.Contains(axes, p.Axis) && k < len(coherence) && !(coherence[k] <= greatest) {
				greatest, at = coherence[k], p.Frequency
			}
		}
		cells := []string{name, fmt.Sprintf("%.0f", 100*float64(above)/float64(len(coherence)-1)), "–", "–"}
		if !math.IsNaN(greatest) {
			cells[2], cells[3] = fmt.Sprintf("%.2f", greatest), fmt.Sprintf("%.1f", at)
		}
		t.Rows = append(t.Rows, cells)
	}
	for _, x := range s.Cross {
		row(s.Axes[x.A].Axis+", "+s.Axes[x.B].Axis, x.Coherence, x.A, x.B)
	}
	for _, x := range s.SetPoints {
		row(s.Axes[x.Axis].Axis+", its set-point", x.Coherence, x.Axis)
	}
	return t
}
