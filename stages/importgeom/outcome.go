package importgeom

import (
	"fmt"
	"strings"

	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/importgeom/airframefile"
	"hushframe/stages/importgeom/assemble"
	"hushframe/stages/kinds"
)

// outcome reports masses, bolts and what was assumed.
func outcome(file *airframefile.File, a *assemble.Assembly) *stage.Outcome {
	g, p := &a.Geometry, &a.Properties
	out := &stage.Outcome{Notes: a.Notes}
	for _, w := range a.Warnings {
		out.Warnings = append(out.Warnings, stage.Warning{ID: "import." + w.ID, Text: w.Text, Where: w.Where, Remedy: w.Remedy})
	}
	structure := 0.0
	for _, m := range a.Masses() {
		if m.Structure {
			structure += m.Mass
		}
	}
	bodies := 0
	for _, b := range p.Bodies {
		if _, screw := p.ScrewOf(b.Name); !screw {
			bodies++
		}
	}
	names := []any{}
	for _, b := range g.Bolts {
		names = append(names, b.Name)
	}
	out.Figures = map[string]any{
		"total_mass":     stage.Quantity{SI: a.Totals.Mass, Dimension: "mass"},
		"structure_mass": stage.Quantity{SI: structure, Dimension: "mass"},
		"plates":         float64(len(g.Plates)),
		"standoffs":      float64(len(g.Standoffs)),
		"bolts":          float64(len(g.Bolts)),
		"bolt_names":     names,
		"bodies":         float64(bodies),
		"rotors":         float64(len(p.Rotors)),
		"parts":          float64(len(g.Plates) + len(g.Standoffs) + bodies),
	}
	for i, axis := range [3]string{"x", "y", "z"} {
		out.Figures["centre_"+axis] = stage.Quantity{SI: a.Totals.Centre[i], Dimension: "length"}
		out.Figures["inertia_"+kinds.AxisNames[i]] = stage.Quantity{SI: a.Totals.Inertia[i], Dimension: "inertia"}
	}
	out.Summary = []stage.Section{masses(a), totals(file, a)}
	if len(g.Bolts)+len(a.Removed) > 0 {
		out.Summary = append(out.Summary, bolts(a))
	}
	if len(p.Joints) > 0 {
		out.Summary = append(out.Summary, groups(p))
	}
	if s := mounted(p); len(s.Rows) > 0 {
		out.Summary = append(out.Summary, s)
	}
	return out
}

func number(x float64, digits int) string {
	s := fmt.Sprintf("%.*f", digits, x)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return s
}

func masses(a *assemble.Assembly) stage.Section {
	s := stage.Section{Title: "Mass by part", Columns: []stage.Column{
		{Name: "part"}, {Name: "number", Right: true}, {Name: "material"}, {Name: "mass, g", Right: true}, {Name: "share, %", Right: true}}}
	for _, m := range a.Masses() {
		s.Rows = append(s.Rows, []string{m.Name, fmt.Sprint(m.Number), m.Material, number(m.Mass*1e3, 2), number(100*m.Mass/a.Totals.Mass, 1)})
	}
	s.Rows = append(s.Rows, []string{"total", "", "", number(a.Totals.Mass*1e3, 2), "100.0"})
	return s
}

func totals(file *airframefile.File, a *assemble.Assembly) stage.Section {
	t := a.Totals
	s := stage.Section{Title: "Centre of gravity and inertia", Columns: []stage.Column{
		{Name: "axis"}, {Name: "centre, mm", Right: true}, {Name: "inertia, kg·mm²", Right: true}}}
	for i, axis := range [3]string{"x forward, roll", "y left, pitch", "z up, yaw"} {
		s.Rows = append(s.Rows, []string{axis, number(t.Centre[i]*1e3, 2), number(t.Inertia[i]*1e6, 1)})
	}
	if file.Name != "" {
		s.Text = file.Name
		if file.About != "" {
			s.Text += ": " + file.About
		}
	}
	return s
}

func bolts(a *assemble.Assembly) stage.Section {
	g, p := &a.Geometry, &a.Properties
	s := stage.Section{Title: "Bolts", Columns: []stage.Column{
		{Name: "bolt"}, {Name: "through"}, {Name: "x, mm", Right: true}, {Name: "y, mm", Right: true},
		{Name: "hole, mm", Right: true}, {Name: "clamp, mm", Right: true}, {Name: "mass, g", Right: true}, {Name: "joint"}, {Name: "from"}}}
	for i, b := range g.Bolts {
		var plates []string
		for _, k := range b.Patches {
			plates = append(plates, g.Plates[g.Patches[k].Plate].Name)
		}
		from, joint := "airframe file", p.Bolts[i].Joint
		if b.Inferred {
			from = "holes"
		}
		if joint == "" {
			joint = "rigid"
		}
		s.Rows = append(s.Rows, []string{b.Name, strings.Join(plates, ", "), number(b.Point[0]*1e3, 2), number(b.Point[1]*1e3, 2),
			quantityIn(2 * b.HoleRadius), quantityIn(2 * b.ClampRadius), number(p.Bolts[i].Mass*1e3, 2), joint, from})
	}
	if len(a.Removed) > 0 {
		s.Text = "removed by name: " + strings.Join(a.Removed, ", ")
	}
	return s
}

func quantityIn(x float64) string {
	s, _, _ := strings.Cut(quantity.Format(x, "length", "mm"), " ")
	return s
}
