package solve

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

const (
	degree = math.Pi / 180
	rpm    = 2 * math.Pi / 60
)

// outcome sums up the modes in figures, warnings and tables.
func outcome(m *kinds.Modes, p *airframe.Properties, set settings, notes []string) *stage.Outcome {
	s := m.Survey
	o := &stage.Outcome{Notes: notes, Warnings: warnings(m, p, set)}
	below, wanted := 0, 0
	objects := []any{}
	for i := range s.Modes {
		mode := &s.Modes[i]
		if mode.Frequency <= set.upTo {
			below++
		}
		if mode.Frequency <= rule*set.sweptTo {
			wanted++
		}
		object := map[string]any{
			"number": float64(mode.Number), "frequency": hertz(mode.Frequency), "damping": mode.Loss / 2, "part": mode.Part, "motion": mode.Motion,
		}
		for axis, name := range kinds.AxisNames {
			object["strength_"+name] = stage.Quantity{SI: mode.Strength[axis], Dimension: "angular rate per force"}
		}
		objects = append(objects, object)
	}
	o.Figures = map[string]any{
		"modes": objects, "lowest": hertz(s.Modes[0].Frequency), "modes_below": float64(below), "modes_wanted": float64(wanted),
		"mass": stage.Quantity{SI: m.Mass, Dimension: "mass"}, "rigid_ratio": m.RigidRatio, "largest_error": largestError(m, set.upTo),
	}
	for axis, name := range kinds.AxisNames {
		width := math.Inf(1)
		if g, ok := s.SmallestGap(axis); ok {
			width = g.Width
		}
		top := &s.Modes[0]
		for i := range s.Modes {
			if s.Modes[i].Strength[axis] > top.Strength[axis] {
				top = &s.Modes[i]
			}
		}
		o.Figures["smallest_gap_"+name] = hertz(width)
		o.Figures["strongest_"+name] = hertz(top.Frequency)
		o.Figures["strength_"+name] = stage.Quantity{SI: top.Strength[axis], Dimension: "angular rate per force"}
	}
	what := "modes to %.4g Hz are wanted for a sweep to %.4g Hz: "
	if set.upTo >= rule*set.sweptTo*(1-1e-9) {
		what += fmt.Sprintf("%d elastic modes", wanted)
		if m.Proved {
			what += ", all found"
		}
	} else {
		what += fmt.Sprintf("found are the %d below %.4g Hz", below, set.upTo)
	}
	o.Notes = append(o.Notes, fmt.Sprintf(what, rule*set.sweptTo, set.sweptTo),
		fmt.Sprintf("%d unknowns; six rigid-body motions below %.1g of the lowest elastic frequency", m.Unknowns, m.RigidRatio))
	o.Summary = []stage.Section{modeTable(m), meetingTable(m)}
	if g := gapTable(m); len(g.Rows) > 0 {
		o.Summary = append(o.Summary, g)
	}
	return o
}

// undamped is the loss factor below which a mode is as good as undamped.
const undamped = 2e-4

func warnings(m *kinds.Modes, p *airframe.Properties, set settings) []stage.Warning {
	var out []stage.Warning
	if set.upTo < rule*set.sweptTo*(1-1e-9) {
		out = append(out, stage.Warning{
			ID:     "solve.short-of-sweep",
			Text:   fmt.Sprintf("modes go to %.4g Hz for a sweep to %.4g Hz; by common practice they should go 1.5 times as high", set.upTo, set.sweptTo),
			Where:  "up_to",
			Remedy: fmt.Sprintf("raise up_to to %.4g Hz, or set swept_to to where the sweep ends, %.4g Hz or less", math.Ceil(rule*set.sweptTo), math.Floor(set.upTo/rule)),
		})
	}
	if !m.Proved {
		out = append(out, stage.Warning{
			ID: "solve.unproved", Text: "the count of eigenvalues does not confirm that every mode was found",
			Where: "up_to", Remedy: "move up_to a little, away from a cluster of modes",
		})
	}
	var ringing, parts []string
	for i := range m.Survey.Modes {
		if mode := &m.Survey.Modes[i]; mode.Loss < undamped {
			ringing = append(ringing, fmt.Sprintf("%d at %.4g Hz", mode.Number, mode.Frequency))
			if !slices.Contains(parts, mode.Part) {
				parts = append(parts, mode.Part)
			}
		}
	}
	if len(ringing) > 0 {
		out = append(out, stage.Warning{
			ID: "solve.undamped", Text: fmt.Sprintf("modes with a loss factor below %g, whose gyro strength means little: %s", undamped, strings.Join(ringing, ", ")),
			Where: strings.Join(parts, ", "), Remedy: "give their materials, joints and mounts a loss factor, or the airframe a floor",
		})
	}
	if p.DeclaredMass > 0 && math.Abs(m.Mass/p.DeclaredMass-1) > 0.05 {
		out = append(out, stage.Warning{
			ID: "solve.mass", Text: fmt.Sprintf("the model weighs %.1f g, the airframe declares %.1f g", 1e3*m.Mass, 1e3*p.DeclaredMass),
			Where: "mass", Remedy: "see whether lumps are missing or counted twice",
		})
	}
	return out
}

// strength shows a gyro strength in deg/s per newton with three digits, 0 if it is negligible, and no
// power of ten unless the strongest itself is tiny.
func strength(x float64, negligible bool) string {
	x /= degree
	if negligible || x == 0 {
		return "0"
	}
	magnitude := math.Floor(math.Log10(x))
	if math.IsInf(x, 0) {
		return "–" // nothing damps the mode
	}
	if magnitude < -6 {
		return fmt.Sprintf("%.3g", x)
	}
	return fmt.Sprintf("%.*f", max(0, 2-int(magnitude)), x)
}

// gap shows the distance to the nearer neighbour.
func gap(m *modal.Mode) string {
	d := min(m.Below, m.Above)
	if math.IsInf(d, 1) {
		return "-"
	}
	return fmt.Sprintf("%.1f", d)
}

func modeTable(m *kinds.Modes) stage.Section {
	s := stage.Section{
		Title: "Modes",
		Text:  "roll, pitch, yaw: peak gyro rate of the mode alone in deg/s, root sum of squares over 1 N along each axis at every hub;\n0 is below a thousandth of the strongest",
		Columns: []stage.Column{{Name: "mode", Right: true}, {Name: "Hz", Right: true}, {Name: "damping, %", Right: true}, {Name: "motion"},
			{Name: "roll", Right: true}, {Name: "pitch", Right: true}, {Name: "yaw", Right: true}, {Name: "gap, Hz", Right: true}},
	}
	var strongest kinds.Strongest
	unbounded := false
	for i := range m.Survey.Modes {
		strongest.Add(m.Survey.Modes[i].Strength)
		unbounded = unbounded || math.IsInf(m.Survey.Modes[i].Strength[0], 1)
	}
	if unbounded {
		s.Text += ", – where nothing damps the mode"
	}
	estimated := len(m.Survey.MeshErrors) > 0
	if estimated {
		s.Columns = append(s.Columns, stage.Column{Name: "mesh error, %", Right: true})
	}
	for i := range m.Survey.Modes {
		mode := &m.Survey.Modes[i]
		row := []string{fmt.Sprint(mode.Number), fmt.Sprintf("%.1f", mode.Frequency), fmt.Sprintf("%.2f", 50*mode.Loss), motion(mode, m.Basis.Groups)}
		for axis, v := range mode.Strength {
			row = append(row, strength(v, strongest.Negligible(axis, v)))
		}
		row = append(row, gap(mode))
		if e, ok := m.Survey.MeshError(mode.Number); ok {
			row = append(row, fmt.Sprintf("%.2g", 100*e.Error/mode.Frequency))
		} else if estimated {
			row = append(row, "-")
		}
		s.Rows = append(s.Rows, row)
	}
	return s
}

// motion says in words what a mode is: "bending of arm_fl, arm_fr (41 % each)", with the share of the
// strain energy in the part.
func motion(m *modal.Mode, groups []modal.LossGroup) string {
	leading := m.Leading(groups)
	each := ""
	if len(leading) > 1 {
		each = " each"
	}
	return fmt.Sprintf("%s of %s (%.0f %%%s)", m.Motion, list(leading), 100*slices.Max(m.ByGroup), each)
}

// meetingTable lists, per mode, the speeds of orders 1, 2 and blade passing within the service range.
func meetingTable(m *kinds.Modes) stage.Section {
	s := stage.Section{
		Title:   "Rotor speeds at which orders meet modes",
		Text:    fmt.Sprintf("only speeds that the rotors reach; a star marks those within %.0f %% of hover", 100*modal.HoverBand),
		Columns: []stage.Column{{Name: "mode", Right: true}, {Name: "frequency, Hz", Right: true}, {Name: "order 1, rpm", Right: true}, {Name: "order 2, rpm", Right: true}, {Name: "blade passing, rpm", Right: true}},
	}
	for i := range m.Survey.Modes {
		mode := &m.Survey.Modes[i]
		row := []string{fmt.Sprint(mode.Number), fmt.Sprintf("%.1f", mode.Frequency), "-", "-", "-"}
		seen := [3][]string{}
		for _, x := range mode.Meetings {
			if !x.Service {
				continue
			}
			column := x.Order - 1
			if x.Blade {
				column = 2
			}
			text := fmt.Sprintf("%.0f", math.Round(x.Speed/rpm))
			if x.Hover {
				text += "*"
			}
			if !slices.Contains(seen[column], text) {
				seen[column] = append(seen[column], text)
			}
		}
		for c, texts := range seen {
			if len(texts) > 0 {
				row[2+c] = strings.Join(texts, ", ")
			}
		}
		s.Rows = append(s.Rows, row)
	}
	return s
}

// gapTable lists the narrowest gap of each axis.
func gapTable(m *kinds.Modes) stage.Section {
	s := stage.Section{
		Title:   "Narrowest gaps",
		Text:    fmt.Sprintf("between neighbours from %.4g to %.4g Hz with at least a tenth of the strongest gyro strength on the axis", m.Survey.From, m.Survey.To),
		Columns: []stage.Column{{Name: "axis"}, {Name: "gap, Hz", Right: true}, {Name: "between modes"}, {Name: "at, Hz"}},
	}
	for axis, name := range kinds.AxisNames {
		g, ok := m.Survey.SmallestGap(axis)
		if !ok {
			continue
		}
		lower, upper := m.Survey.Modes[g.Lower-1].Frequency, m.Survey.Modes[g.Upper-1].Frequency
		s.Rows = append(s.Rows, []string{name, fmt.Sprintf("%.1f", g.Width), fmt.Sprintf("%d and %d", g.Lower, g.Upper), fmt.Sprintf("%.1f and %.1f", lower, upper)})
	}
	return s
}
