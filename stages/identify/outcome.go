package identify

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

const (
	degree   = math.Pi / 180
	nearLoop = 1.5 // times the bandwidth of the loop, up to which its influence is mentioned; common practice
)

// outcome sums up what was found in figures, notes, warnings and tables.
func outcome(x *kinds.Identified, notes []string, warnings []stage.Warning, set settings) *stage.Outcome {
	counts := map[string]int{}
	list := []any{}
	near := 0
	for _, m := range x.Modes {
		counts[m.Kind]++
		if m.Kind != kinds.ModeStructure {
			continue
		}
		if m.Frequency < nearLoop*set.loop {
			near++
		}
		direction := []any{}
		for _, v := range m.Direction {
			direction = append(direction, v)
		}
		list = append(list, map[string]any{"frequency": hertz(m.Frequency), "frequency_error": hertz(m.FrequencyError), "damping": m.Damping,
			"damping_error": m.DampingError, "direction": direction, "direction_error": m.DirectionError})
	}
	o := &stage.Outcome{
		Figures: map[string]any{
			"modes": float64(counts[kinds.ModeStructure]), "doubtful": float64(counts[kinds.ModeDoubtful]), "lines": float64(counts[kinds.ModeLine]),
			"order_share": orderShare(x), "crossed": crossed(x), "list": list,
		},
		Notes: notes, Warnings: warnings,
		Summary: []stage.Section{modeTable(x)},
	}
	if counts[kinds.ModeStructure] == 0 {
		o.Warnings = append(o.Warnings, stage.Warning{ID: "identify.no-mode", Where: set.File, Text: "no mode is sure enough to be told",
			Remedy: "see what was taken for no mode and why; a longer steady window helps most"})
	}
	if near > 0 {
		o.Notes = append(o.Notes, fmt.Sprintf("below %.4g Hz what is seen in flight is frame and rate loop together: %s lies there and its damping may differ from that of the frame alone",
			nearLoop*set.loop, plural(near, "mode")))
	}
	if other := otherTable(x); len(other.Rows) > 0 {
		o.Summary = append(o.Summary, other)
	}
	if len(x.Removed) > 0 {
		o.Summary = append(o.Summary, removedTable(x))
	}
	if len(x.Crossings) > 0 {
		o.Summary = append(o.Summary, crossingTable(x))
	}
	return o
}

func plural(n int, what string) string {
	if n == 1 {
		return "one " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// orderShare is the largest share of an axis that orders hold.
func orderShare(x *kinds.Identified) float64 {
	out := math.NaN()
	for _, c := range x.Channels {
		sum := 0.0
		for _, r := range x.Removed {
			if r.Axis == c.Axis {
				sum += r.MeanSquare
			}
		}
		if len(x.Removed) > 0 && c.MeanSquare > 0 && !(out >= sum/c.MeanSquare) {
			out = sum / c.MeanSquare
		}
	}
	return out
}

func modeTable(x *kinds.Identified) stage.Section {
	t := stage.Section{
		Title: "Modes found in flight",
		Text: fmt.Sprintf("%.4g to %.4g Hz, %.5g s to %.5g s, models to order %d; ± is one standard error; by peak: from the cross spectra",
			x.From, x.To, x.Start, x.End, x.Order),
		Columns: []stage.Column{{Name: "Hz", Right: true}, {Name: "±", Right: true}, {Name: "damping, %", Right: true}, {Name: "±", Right: true}},
	}
	for _, c := range x.Channels {
		t.Columns = append(t.Columns, stage.Column{Name: c.Axis, Right: true})
	}
	t.Columns = append(t.Columns, stage.Column{Name: "± deg", Right: true}, stage.Column{Name: "models, %", Right: true},
		stage.Column{Name: "by peak, Hz", Right: true}, stage.Column{Name: "damping, %", Right: true})
	for _, m := range x.Modes {
		if m.Kind != kinds.ModeStructure {
			continue
		}
		row := []string{fmt.Sprintf("%.4g", m.Frequency), fmt.Sprintf("%.2g", m.FrequencyError), fmt.Sprintf("%.2f", 100*m.Damping), fmt.Sprintf("%.2f", 100*m.DampingError)}
		for _, v := range m.Direction {
			row = append(row, fmt.Sprintf("%.2f", v))
		}
		t.Rows = append(t.Rows, append(row, fmt.Sprintf("%.0f", m.DirectionError/degree), fmt.Sprintf("%.0f", 100*m.Models), number("%.4g", m.PeakFrequency), number("%.1f", 100*m.PeakDamping)))
	}
	return t
}

func number(format string, v float64) string {
	if math.IsNaN(v) {
		return "–"
	}
	return fmt.Sprintf(format, v)
}

func otherTable(x *kinds.Identified) stage.Section {
	t := stage.Section{
		Title:   "Poles taken for no mode",
		Columns: []stage.Column{{Name: "taken for"}, {Name: "Hz", Right: true}, {Name: "±", Right: true}, {Name: "damping, %", Right: true}, {Name: "why"}},
	}
	for _, m := range x.Modes {
		if m.Kind != kinds.ModeStructure {
			t.Rows = append(t.Rows, []string{m.Kind, fmt.Sprintf("%.4g", m.Frequency), fmt.Sprintf("%.2g", m.FrequencyError), fmt.Sprintf("%.2f", 100*m.Damping), m.Reason})
		}
	}
	return t
}

// removedTable adds the rotors up: one row per order, one column per axis.
func removedTable(x *kinds.Identified) stage.Section {
	t := stage.Section{
		Title:   "Rotor orders taken out",
		Text:    fmt.Sprintf("root mean square over all rotors; amplitude and phase steady over %g s", x.Span),
		Columns: []stage.Column{{Name: "order", Right: true}},
	}
	var orders []float64
	sums := map[string]map[float64]float64{}
	for _, r := range x.Removed {
		if !slices.Contains(orders, r.Order) {
			orders = append(orders, r.Order)
		}
		if sums[r.Axis] == nil {
			sums[r.Axis] = map[float64]float64{}
		}
		sums[r.Axis][r.Order] += r.MeanSquare
	}
	for _, c := range x.Channels {
		unit := "m/s²"
		if c.Quantity == gather.AngularRate {
			unit = "deg/s"
		}
		t.Columns = append(t.Columns, stage.Column{Name: c.Axis + ", " + unit, Right: true})
	}
	t.Columns = append(t.Columns, stage.Column{Name: "stands out"})
	for _, n := range orders {
		row := []string{fmt.Sprintf("%g", n)}
		for _, c := range x.Channels {
			v := math.Sqrt(sums[c.Axis][n])
			if c.Quantity == gather.AngularRate {
				v /= degree
			}
			row = append(row, fmt.Sprintf("%.3g", v))
		}
		seen := "no"
		if at := slices.IndexFunc(x.Orders, func(b kinds.OrderBand) bool { return b.Order == n }); at >= 0 {
			seen = "yes"
			if x.Orders[at].Folded {
				seen = "yes, folded"
			}
		}
		t.Rows = append(t.Rows, append(row, seen))
	}
	return t
}

// crossed counts the modes that an order meets in the frame itself: not those that it only meets folded.
func crossed(x *kinds.Identified) float64 {
	met := map[int]bool{}
	for _, c := range x.Crossings {
		if !c.Folded {
			met[c.Mode] = true
		}
	}
	return float64(len(met))
}

// crossingTable gives one row per mode and order, the rotors together.
func crossingTable(x *kinds.Identified) stage.Section {
	t := stage.Section{
		Title:   "Rotor orders that meet modes",
		Text:    "share of the time that the order of the busiest rotor spends within the half-power width of the mode; a folded order meets it in the recording only, not in the frame",
		Columns: []stage.Column{{Name: "mode, Hz", Right: true}, {Name: "order"}, {Name: "at, rpm", Right: true}, {Name: "of the time, %", Right: true}, {Name: "rotors"}},
	}
	for i, c := range x.Crossings {
		if i > 0 && x.Crossings[i-1].Mode == c.Mode && x.Crossings[i-1].Order == c.Order {
			continue
		}
		share, speed, count := 0.0, 0.0, 0.0
		var rotors []string
		for _, other := range x.Crossings {
			if other.Mode == c.Mode && other.Order == c.Order {
				share = max(share, other.Share)
				speed += other.Speed
				count++
				rotors = append(rotors, other.Rotor)
			}
		}
		name := fmt.Sprintf("%g", c.Order)
		if c.Folded {
			name += ", folded"
		}
		t.Rows = append(t.Rows, []string{fmt.Sprintf("%.4g", x.Modes[c.Mode].Frequency), name, fmt.Sprintf("%.0f", speed/count*30/math.Pi), fmt.Sprintf("%.0f", 100*share),
			strings.Join(rotors, ", ")})
	}
	return t
}
