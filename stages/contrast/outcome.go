package contrast

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

const degree = math.Pi / 180

// outcome sums up a difference in figures and tables.
func outcome(d *kinds.Difference) *stage.Outcome {
	least, shift := math.NaN(), math.NaN()
	for _, m := range d.Modes {
		if !(m.Assurance >= least) {
			least = m.Assurance
		}
		if s := math.Abs(m.Frequency[1]/m.Frequency[0] - 1); !(s <= shift) {
			shift = s
		}
	}
	alone := map[string]float64{}
	for _, m := range d.Alone {
		alone[m.Side]++
	}
	o := &stage.Outcome{
		Figures: map[string]any{
			"tracked": float64(len(d.Modes)), "lost": alone[kinds.Before], "new": alone[kinds.After], "least_assurance": least, "largest_shift": shift,
		},
		Summary: Tables(d),
	}
	if change := d.MassAfter - d.MassBefore; !math.IsNaN(change) {
		o.Figures["mass_change"] = stage.Quantity{SI: change, Dimension: "mass"}
	}
	for _, axis := range kinds.AxisNames {
		all, worst := math.NaN(), math.NaN()
		for _, b := range d.Bands {
			switch {
			case b.Axis != axis:
			case b.Whole:
				all = b.Change
			case !(b.Change <= worst):
				worst = b.Change
			}
		}
		o.Figures["change_"+axis], o.Figures["worst_band_"+axis] = all, worst
	}
	if len(d.Unshared) > 0 {
		o.Notes = append(o.Notes, unsharedWords(d))
	}
	return o
}

func unsharedWords(d *kinds.Difference) string {
	var names [2][]string
	for _, u := range d.Unshared {
		k := 0
		if u.Side == kinds.After {
			k = 1
		}
		names[k] = append(names[k], u.Name)
	}
	var parts []string
	for k, words := range []string{"only before: ", "only after: "} {
		if len(names[k]) > 0 {
			parts = append(parts, words+strings.Join(names[k], ", "))
		}
	}
	return "left out of the comparison of shapes: " + strings.Join(parts, "; ")
}

// Tables gives a difference in tables for the terminal; those without rows are left out.
func Tables(d *kinds.Difference) []stage.Section {
	var out []stage.Section
	for _, s := range []stage.Section{modeTable(d), aloneTable(d), levelTable(d), peakTable(d), lineTable(d), massTable(d)} {
		if len(s.Rows) > 0 {
			out = append(out, s)
		}
	}
	return out
}

func modeTable(d *kinds.Difference) stage.Section {
	s := stage.Section{Title: "Modes before and after", Columns: []stage.Column{{Name: "mode", Right: true}, {Name: "is", Right: true}, {Name: "Hz", Right: true},
		{Name: "now", Right: true}, {Name: "shift, %", Right: true}, {Name: "MAC", Right: true}, {Name: "damping, %", Right: true}, {Name: "now", Right: true},
		{Name: "motion before"}}}
	if !math.IsNaN(d.SharedBefore) {
		s.Text = "MAC: modal assurance criterion of the shapes, weighted with the mass; 1 is the same shape"
		if math.Min(d.SharedBefore, d.SharedAfter) < 0.9995 {
			s.Text += fmt.Sprintf(". Taken over what both have, %.0f %% of the mass before and %.0f %% of that after; %s",
				100*d.SharedBefore, 100*d.SharedAfter, unsharedWords(d))
		}
	}
	for _, m := range d.Modes {
		motion := m.Motion
		if m.Part != "" {
			motion += " of " + m.Part
		}
		s.Rows = append(s.Rows, []string{fmt.Sprint(m.Number[0]), fmt.Sprint(m.Number[1]), fmt.Sprintf("%.1f", m.Frequency[0]), fmt.Sprintf("%.1f", m.Frequency[1]),
			signed("%+.1f", 100*(m.Frequency[1]/m.Frequency[0]-1)), fmt.Sprintf("%.3f", m.Assurance), fmt.Sprintf("%.2f", 100*m.Damping[0]),
			fmt.Sprintf("%.2f", 100*m.Damping[1]), motion})
	}
	return s
}

func aloneTable(d *kinds.Difference) stage.Section {
	s := stage.Section{Title: "Modes lost and new", Columns: []stage.Column{{Name: ""}, {Name: "mode", Right: true}, {Name: "Hz", Right: true},
		{Name: "most like", Right: true}, {Name: "MAC", Right: true}, {Name: "why"}}}
	for _, m := range d.Alone {
		side, nearest := "lost", "none"
		if m.Side == kinds.After {
			side = "new"
		}
		if m.Nearest > 0 {
			nearest = fmt.Sprint(m.Nearest)
		}
		s.Rows = append(s.Rows, []string{side, fmt.Sprint(m.Number), fmt.Sprintf("%.1f", m.Frequency), nearest, fmt.Sprintf("%.3f", m.Assurance), m.Reason})
	}
	return s
}

// levelTable has a row for each band and a column for each axis.
func levelTable(d *kinds.Difference) stage.Section {
	s := stage.Section{Title: "Change of the response", Text: "root mean square of the gyro rate before, under the broadband source, and its change; +6 dB is twice",
		Columns: []stage.Column{{Name: "from, Hz", Right: true}, {Name: "to, Hz", Right: true}}}
	type span struct {
		from, to float64
		whole    bool
	}
	var rows []span
	cells := map[span]map[string]kinds.BandChange{}
	for _, b := range d.Bands {
		at := span{b.From, b.To, b.Whole}
		if cells[at] == nil {
			cells[at] = map[string]kinds.BandChange{}
			rows = append(rows, at)
		}
		cells[at][b.Axis] = b
	}
	for _, axis := range kinds.AxisNames {
		s.Columns = append(s.Columns, stage.Column{Name: axis + ", deg/s", Right: true}, stage.Column{Name: "dB", Right: true})
	}
	for _, at := range rows {
		row := []string{fmt.Sprintf("%.1f", at.from), fmt.Sprintf("%.1f", at.to)}
		for _, axis := range kinds.AxisNames {
			b := cells[at][axis]
			row = append(row, fmt.Sprintf("%.3g", b.RMS[0]/degree), signed("%+.1f", b.Change))
		}
		s.Rows = append(s.Rows, row)
	}
	return s
}

func peakTable(d *kinds.Difference) stage.Section {
	s := stage.Section{Title: "Peaks before and after", Columns: []stage.Column{{Name: "axis"}, {Name: "Hz", Right: true}, {Name: "now", Right: true},
		{Name: "(deg/s)²/Hz", Right: true}, {Name: "now", Right: true}, {Name: "dB", Right: true}, {Name: "modes"}, {Name: "now"}}}
	text := func(format string, x float64) string {
		if math.IsNaN(x) {
			return "none"
		}
		return fmt.Sprintf(format, x)
	}
	for _, p := range d.Peaks {
		change := ""
		if !math.IsNaN(p.Change) {
			change = signed("%+.1f", p.Change)
		}
		s.Rows = append(s.Rows, []string{p.Axis, text("%.1f", p.Frequency[0]), text("%.1f", p.Frequency[1]), text("%.3g", p.Density[0]/degree/degree),
			text("%.3g", p.Density[1]/degree/degree), change, modeWords(p.Modes[0]), modeWords(p.Modes[1])})
	}
	return s
}

// modeWords lists up to three modes.
func modeWords(modes []int) string {
	var parts []string
	for _, m := range modes[:min(3, len(modes))] {
		parts = append(parts, fmt.Sprint(m))
	}
	return strings.Join(parts, ", ")
}

func lineTable(d *kinds.Difference) stage.Section {
	s := stage.Section{Title: "Rotor lines at hover before and after", Columns: []stage.Column{{Name: "source"}, {Name: "order", Right: true}, {Name: "axis"},
		{Name: "Hz", Right: true}, {Name: "now", Right: true}, {Name: "deg/s", Right: true}, {Name: "now", Right: true}, {Name: "dB", Right: true}}}
	var strongest [2]kinds.Strongest
	for _, l := range d.Lines {
		for k := range strongest {
			strongest[k].Add([3]float64{l.Rate[k]})
		}
	}
	for _, l := range d.Lines {
		if strongest[0].Negligible(0, l.Rate[0]) && strongest[1].Negligible(0, l.Rate[1]) {
			continue
		}
		s.Rows = append(s.Rows, []string{l.Source, fmt.Sprintf("%g", l.Order), l.Axis, fmt.Sprintf("%.1f", l.Frequency[0]), fmt.Sprintf("%.1f", l.Frequency[1]),
			fmt.Sprintf("%.3g", l.Rate[0]/degree), fmt.Sprintf("%.3g", l.Rate[1]/degree), signed("%+.1f", l.Change)})
	}
	return s
}

// massTable lists what has changed, and the total.
func massTable(d *kinds.Difference) stage.Section {
	s := stage.Section{Title: "Mass before and after", Columns: []stage.Column{{Name: "part or body"}, {Name: "g", Right: true}, {Name: "now", Right: true}, {Name: "change, g", Right: true}}}
	row := func(name string, a, b float64) {
		s.Rows = append(s.Rows, []string{name, fmt.Sprintf("%.2f", 1000*a), fmt.Sprintf("%.2f", 1000*b), signed("%+.2f", 1000*(b-a))})
	}
	for _, m := range d.Masses {
		if math.Abs(m.Mass[1]-m.Mass[0]) > 1e-9*(m.Mass[0]+m.Mass[1]) {
			row(m.Name, m.Mass[0], m.Mass[1])
		}
	}
	if !math.IsNaN(d.MassBefore) && !math.IsNaN(d.MassAfter) {
		row("total", d.MassBefore, d.MassAfter)
	}
	return s
}

// signed writes a difference; what rounds to nothing has no sign.
func signed(format string, x float64) string {
	if math.IsNaN(x) {
		return "–"
	}
	s := fmt.Sprintf(format, x)
	if strings.Trim(s, "+-0.") == "" {
		return strings.Trim(s, "+-")
	}
	return s
}
