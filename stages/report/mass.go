package report

import (
	"fmt"
	"math"
	"slices"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/stages/importgeom/assemble"
)

// massTable lists what the frame is made of, with alike standoffs, screws and
// bolts as one; the geometry may be missing.
func massTable(g *airframe.Geometry, p *airframe.Properties) *table {
	t := &table{Name: "masses", Title: "Masses",
		Columns: []column{{"part", "", false}, {"number", "", true}, {"material", "", false}, {"mass", "g", true}, {"share", "%", true}}}
	masses, total := assemble.Masses(g, p), 0.0
	for _, m := range masses {
		total += m.Mass
	}
	for _, m := range masses {
		t.Rows = append(t.Rows, []cell{words(m.Name), count(m.Number), words(m.Material), number(1000*m.Mass, 2), percent(m.Mass/total, 1)})
	}
	sum := []cell{words("total"), words(""), words(""), number(1000*total, 2), percent(1, 1)}
	for i := range sum {
		sum[i].Strong = true
	}
	t.Rows = append(t.Rows, sum)
	if p.DeclaredMass > 0 {
		t.Rows = append(t.Rows, []cell{words("declared in the airframe"), words(""), words(""), number(1000*p.DeclaredMass, 2), words("")})
	}
	return t
}

// materialTable states the constants used and where they come from.
func materialTable(p *airframe.Properties) *table {
	t := &table{Name: "materials", Title: "Materials",
		Columns: []column{{"material", "", false}, {"E1", "GPa", true}, {"E2", "GPa", true}, {"G12", "GPa", true}, {"ν12", "", true}, {"density", "kg/m³", true},
			{"loss factor", "", true}, {"scatter of E", "%", true}, {"origin", "", false}}}
	rows := append([]airframe.Material{}, p.Materials...)
	sort.SliceStable(rows, func(i, j int) bool { return rows[i].Name < rows[j].Name })
	for _, m := range rows {
		scatter := percent(m.Scatter, 0)
		if m.Scatter == 0 {
			scatter = missing()
		}
		origin := m.Origin
		if m.Typical {
			origin = "typical value, not measured; " + origin
		}
		t.Rows = append(t.Rows, []cell{words(m.Name), digits(m.E1/1e9, 3), digits(m.E2/1e9, 3), digits(m.G12/1e9, 3), digits(m.Nu12, 2), digits(m.Density, 4),
			digits(m.LossFactor, 2), scatter, words(origin)})
	}
	return t
}

// jointTable lists joints and mounts, the softest and least certain parts.
func jointTable(p *airframe.Properties) *table {
	t := &table{Name: "joints", Title: "Joints and mounts", About: "Forces in N/mm, moments in N·m/rad, in the frame of the bolt or contact or, for mounts, along the airframe's axes per point; contacts per mm² or mm. The range is that of a common factor on the group.",
		Columns: []column{{"name", "", false}, {"what", "", false}, {"points", "", true}, {"x", "N/mm", true}, {"y", "N/mm", true}, {"z", "N/mm", true},
			{"about x", "N·m/rad", true}, {"about y", "N·m/rad", true}, {"about z", "N·m/rad", true}, {"loss factor", "", true}, {"range", "", true}, {"from", "", false}}}
	add := func(name, what string, points int, k [6]float64, loss, within, origin string) {
		row := []cell{words(name), words(what), count(points)}
		for i, x := range k {
			switch {
			case math.IsInf(x, 1):
				row = append(row, words("rigid"))
			case x == 0:
				row = append(row, words("free"))
			case i < 3:
				row = append(row, digits(x/1000, 3))
			default:
				row = append(row, digits(x, 3))
			}
		}
		t.Rows = append(t.Rows, append(row, words(loss), words(within), words(origin)))
	}
	held := map[string]int{}
	for _, b := range p.Bolts {
		held[b.Joint]++
	}
	for _, c := range p.Contacts {
		held[c.Joint]++
	}
	for _, j := range p.Joints {
		k, what := perMillimetre(j)
		within := "unknown"
		if j.Low > 0 {
			within = fmt.Sprintf("%.2g to %.2g", j.Low, j.High)
		}
		add(j.Name, what, held[j.Name], k, lossOf(j.LossFactor), within, j.Origin)
	}
	for _, b := range p.Bodies {
		if b.Mount != nil && len(b.Mount.Points) > 0 {
			add(b.Mount.Name, b.Mount.Kind+" under "+b.Name, len(b.Mount.Points), b.Mount.Points[0].Stiffness, mountLoss(b.Mount), "unknown", b.Mount.Origin)
		}
	}
	return t
}

// perMillimetre gives the stiffness of a joint for one, a mm² or a mm of it, and what it is.
func perMillimetre(j airframe.Joint) (k [6]float64, what string) {
	by := 1.0
	switch what = "joint"; j.Measure {
	case airframe.PerArea:
		by, what = 1e-6, "faces, per mm²"
	case airframe.PerLength:
		by, what = 1e-3, "line, per mm"
	}
	for c, x := range j.Stiffness {
		k[c] = by * x
	}
	return k, what
}

func lossOf(x float64) string { return fmt.Sprintf("%.2g", x) }

// mountLoss gives the loss factor of a mount, or the range of those of its components, and its law.
func mountLoss(m *airframe.Mount) string {
	low, high := math.Inf(1), 0.0
	switch m.Law.Kind {
	case airframe.Table:
		return fmt.Sprintf("%s to %s over its table", lossOf(slices.Min(m.Law.Loss)), lossOf(slices.Max(m.Law.Loss)))
	case airframe.Solid:
		z := m.Law.At(m.Law.Reference)
		return fmt.Sprintf("%s at %.4g Hz", lossOf(imag(z)/real(z)), m.Law.Reference)
	}
	for c, k := range m.Points[0].Stiffness {
		if k != 0 {
			low, high = min(low, m.Loss[c]), max(high, m.Loss[c])
		}
	}
	text := lossOf(low)
	if high > low {
		text += " to " + lossOf(high)
	}
	if m.Law.Varies() {
		text += fmt.Sprintf(" at %.4g Hz", m.Law.Reference)
	}
	return text
}

func rotorTable(p *airframe.Properties) *table {
	t := &table{Name: "rotors", Title: "Rotors", Columns: []column{{"rotor", "", false}, {"blades", "", true}, {"spin", "", false}, {"hover", "rpm", true}, {"highest", "rpm", true},
		{"spinning mass", "g", true}, {"balance grade", "mm/s", true}}}
	for _, r := range p.Rotors {
		spin := "counterclockwise"
		if r.Spin < 0 {
			spin = "clockwise"
		}
		t.Rows = append(t.Rows, []cell{words(r.Name), count(r.Blades), words(spin), number(r.HoverSpeed/rpm, 0), number(r.MaxSpeed/rpm, 0),
			number(1000*r.SpinningMass, 2), digits(1000*r.Grade, 2)})
	}
	return t
}
