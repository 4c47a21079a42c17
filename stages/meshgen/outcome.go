package meshgen

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/mesh"
	"hushframe/core/pipeline/stage"
)

// narrow is the angle below which a triangle is counted and, if there are more than a few, warned about.
const narrow = 25 * math.Pi / 180

// outcome reports counts and the shape of the triangles, by part.
func outcome(m *mesh.Mesh, types map[string]elementType) *stage.Outcome {
	s := stage.Section{Title: "Mesh", Columns: []stage.Column{
		{Name: "part"}, {Name: "element"}, {Name: "triangles", Right: true}, {Name: "beams", Right: true},
		{Name: "smallest angle, deg", Right: true}, {Name: "below 25 deg", Right: true}, {Name: "shortest side, mm", Right: true}}}
	all := mesh.Quality{SmallestAngle: math.Inf(1), ShortestSide: math.Inf(1)}
	for p := range m.Parts {
		part := &m.Parts[p]
		if part.Standoff {
			continue
		}
		q := m.Quality(int32(p), narrow)
		all.Triangles += q.Triangles
		all.Narrow += q.Narrow
		all.SmallestAngle = math.Min(all.SmallestAngle, q.SmallestAngle)
		all.ShortestSide = math.Min(all.ShortestSide, q.ShortestSide)
		s.Rows = append(s.Rows, row(part.Name, part.Element, q, 0))
	}
	standoffs := len(m.Parts) - len(s.Rows)
	if standoffs > 0 {
		s.Rows = append(s.Rows, []string{fmt.Sprintf("%d standoffs", standoffs), "beam", "", fmt.Sprint(len(m.Beams)), "", "", ""})
	}
	s.Rows = append(s.Rows, row("all", "", all, len(m.Beams)))
	nodes, count := unknowns(m, types)
	s.Text = fmt.Sprintf("%d nodes, %d unknowns before rigid ties", nodes, count)
	if all.Narrow > 0 {
		s.Text += "; flat triangles lie in the stretched rows along free edges and at sharp corners"
	}
	return &stage.Outcome{
		Figures: map[string]any{
			"nodes":            float64(nodes),
			"triangles":        float64(len(m.Triangles)),
			"beams":            float64(len(m.Beams)),
			"unknowns":         float64(count),
			"smallest_angle":   stage.Quantity{SI: all.SmallestAngle, Dimension: "angle"},
			"narrow_triangles": float64(all.Narrow),
			"shortest_side":    stage.Quantity{SI: all.ShortestSide, Dimension: "length"},
		},
		Summary: sections(s, m),
	}
}

// sections are the parts and, where there are contacts, what these tie.
func sections(parts stage.Section, m *mesh.Mesh) []stage.Section {
	if len(m.Contacts) == 0 {
		return []stage.Section{parts}
	}
	s := stage.Section{Title: "Contacts", Text: "area of pressed faces without what bolts clamp, length of seams and keys",
		Columns: []stage.Column{{Name: "contact"}, {Name: "points", Right: true}, {Name: "mm² or mm", Right: true}}}
	for _, c := range m.Contacts {
		sum := 0.0
		for _, p := range c.Points {
			sum += p.Measure
		}
		by := 1e3 // of a length
		if c.Area {
			by = 1e6
		}
		s.Rows = append(s.Rows, []string{c.Name, fmt.Sprint(len(c.Points)), fmt.Sprintf("%.4g", by*sum)})
	}
	return []stage.Section{parts, s}
}

func row(name, element string, q mesh.Quality, beams int) []string {
	b := ""
	if beams > 0 {
		b = fmt.Sprint(beams)
	}
	return []string{name, element, fmt.Sprint(q.Triangles), b, fmt.Sprintf("%.1f", q.SmallestAngle*180/math.Pi),
		fmt.Sprint(q.Narrow), fmt.Sprintf("%.3f", q.ShortestSide*1e3)}
}
