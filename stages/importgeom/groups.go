package importgeom

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/stage"
)

// groups lists the joint groups: what is first to be corrected from flight data.
func groups(p *airframe.Properties) stage.Section {
	s := stage.Section{Title: "Joint groups",
		Text: "kN/mm and N·m/rad of one connection, per mm² or mm of contacts; the range is that of a common factor on the group",
		Columns: []stage.Column{{Name: "group"}, {Name: "number", Right: true}, {Name: "x", Right: true}, {Name: "y", Right: true}, {Name: "z", Right: true},
			{Name: "rx", Right: true}, {Name: "ry", Right: true}, {Name: "rz", Right: true}, {Name: "per"}, {Name: "loss", Right: true}, {Name: "range"}, {Name: "from"}}}
	held := map[string]int{}
	for _, b := range p.Bolts {
		held[b.Joint]++
	}
	for _, c := range p.Contacts {
		held[c.Joint]++
	}
	for _, j := range p.Joints {
		row := []string{j.Name, fmt.Sprint(held[j.Name])}
		per, by := "", 1.0
		switch j.Measure {
		case airframe.PerArea:
			per, by = "mm²", 1e-6
		case airframe.PerLength:
			per, by = "mm", 1e-3
		}
		for c, k := range j.Stiffness {
			switch {
			case math.IsInf(k, 1):
				row = append(row, "rigid")
			case k == 0:
				row = append(row, "free")
			case c < 3:
				row = append(row, fmt.Sprintf("%.3g", by*k/1e6))
			default:
				row = append(row, fmt.Sprintf("%.3g", by*k))
			}
		}
		within := "unknown"
		if j.Low > 0 {
			within = fmt.Sprintf("%.2g to %.2g", j.Low, j.High)
		}
		s.Rows = append(s.Rows, append(row, per, fmt.Sprintf("%.2g", j.LossFactor), within, j.Origin))
	}
	return s
}

// mounted lists what sits on springs.
func mounted(p *airframe.Properties) stage.Section {
	s := stage.Section{Title: "Mounts", Text: "N/mm of each spring along the airframe's axes, and its loss factors where stiffness and loss are stated",
		Columns: []stage.Column{{Name: "body"}, {Name: "mount"}, {Name: "springs", Right: true}, {Name: "x", Right: true}, {Name: "y", Right: true}, {Name: "z", Right: true},
			{Name: "loss x, y, z"}, {Name: "over frequency"}, {Name: "preload, N", Right: true}, {Name: "from"}}}
	for _, b := range p.Bodies {
		m := b.Mount
		if m == nil || len(m.Points) == 0 {
			continue
		}
		row := []string{b.Name, m.Kind, fmt.Sprint(len(m.Points))}
		losses := ""
		for c := range 3 {
			row = append(row, fmt.Sprintf("%.3g", m.Points[0].Stiffness[c]/1e3))
			loss, law := m.Component(c)
			if law.Varies() {
				f := law.Reference
				if law.Kind == airframe.Table {
					f = law.Frequency[0]
				}
				z := law.At(f)
				loss = imag(z) / real(z)
			}
			losses += fmt.Sprintf(", %.2g", loss)
		}
		over, preload := "constant", "-"
		switch m.Law.Kind {
		case airframe.Fractional:
			over = fmt.Sprintf("order %.2g from %.4g Hz", m.Law.Order, m.Law.Reference)
		case airframe.Solid:
			over = fmt.Sprintf("solid, x%.3g, most loss at %.4g Hz", m.Law.Rise, m.Law.PeakAt)
		case airframe.Table:
			over = fmt.Sprintf("table from %.4g to %.4g Hz", m.Law.Frequency[0], m.Law.Frequency[len(m.Law.Frequency)-1])
		}
		if m.Preload > 0 {
			preload = fmt.Sprintf("%.3g", m.Preload)
		}
		s.Rows = append(s.Rows, append(row, losses[2:], over, preload, m.Origin))
	}
	return s
}
