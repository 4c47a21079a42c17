package extension

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/signal/recording"
)

// each builds a column.
func each[T any](n int, f func(i int) T) []T {
	out := make([]T, n)
	for i := range out {
		out[i] = f(i)
	}
	return out
}

// rows cuts flat values into rows of equal length.
func rows(flat []float64, n, length int) [][]float64 {
	return each(n, func(i int) []float64 { return flat[i*length : (i+1)*length : (i+1)*length] })
}

// flatten joins rows that must have one length.
func flatten(dst []float64, from [][]float64, length int, what string) error {
	for i, r := range from {
		if len(r) != length {
			return fmt.Errorf("row %d of %s has %d values, %d are due", i, what, len(r), length)
		}
		copy(dst[i*length:], r)
	}
	return nil
}

func encodeShape(d element.Description) *artifact.Artifact {
	a := artifact.New(shapeKind)
	a.Scalars["nodes"] = int64(d.Nodes)
	a.Table("points").Set("node", each(len(d.Points), func(i int) int64 { return int64(d.Points[i].Node) })).
		Set("height", each(len(d.Points), func(i int) float64 { return d.Points[i].Height }))
	return a
}

func decodeShape(a *artifact.Artifact) element.Description {
	d := element.Description{Nodes: int(a.Int("nodes"))}
	t := a.Table("points")
	for i, v := range t.Ints("node") {
		d.Points = append(d.Points, element.Point{Node: int(v), Height: t.Floats("height")[i]})
	}
	return d
}

// checkShape refuses what no plate can be divided into.
func checkShape(d element.Description) error {
	const most = 200 // points over one triangle
	if d.Nodes != 3 && d.Nodes != 6 {
		return fmt.Errorf("it stands on %d nodes; an element stands on 3 or 6", d.Nodes)
	}
	if len(d.Points) > most {
		return fmt.Errorf("it has %d points; %d are the most", len(d.Points), most)
	}
	seen, spread := map[element.Point]bool{}, make([]map[float64]bool, d.Nodes)
	for i, p := range d.Points {
		switch {
		case p.Node < 0 || p.Node >= d.Nodes:
			return fmt.Errorf("point %d stands on node %d of %d", i, p.Node, d.Nodes)
		case !(math.Abs(p.Height) <= 1):
			return fmt.Errorf("point %d lies at height %g; the faces are at -1 and 1", i, p.Height)
		case seen[p]:
			return fmt.Errorf("point %d is there twice", i)
		}
		seen[p] = true
		if spread[p.Node] == nil {
			spread[p.Node] = map[float64]bool{}
		}
		spread[p.Node][p.Height] = true
	}
	for n, heights := range spread {
		if d.Solid() && len(heights) < 2 {
			return fmt.Errorf("node %d carries %d points; two at least are needed to tell how a fibre through the plate turns", n, len(heights))
		}
	}
	return nil
}

func encodeBatch(kind artifact.Kind, in *element.Batch) *artifact.Artifact {
	a, n := artifact.New(kind), in.Count()
	a.Table("elements").Set("section", each(n, func(i int) int64 { return int64(in.Section[i]) })).
		Set("nodes", rows(in.Nodes, n, len(in.Nodes)/max(n, 1)))
	s := in.Sections
	matrix := func(name string, of func(i int) [3][3]float64) {
		a.Table("sections").Set(name, each(len(s), func(i int) []float64 {
			m := of(i)
			return []float64{m[0][0], m[0][1], m[0][2], m[1][0], m[1][1], m[1][2], m[2][0], m[2][1], m[2][2]}
		}))
	}
	matrix("a", func(i int) [3][3]float64 { return s[i].A })
	matrix("b", func(i int) [3][3]float64 { return s[i].B })
	matrix("d", func(i int) [3][3]float64 { return s[i].D })
	a.Table("sections").
		Set("shear", each(len(s), func(i int) []float64 {
			m := s[i].Shear
			return []float64{m[0][0], m[0][1], m[1][0], m[1][1]}
		})).
		Set("thickness", each(len(s), func(i int) float64 { return s[i].Thickness })).
		Set("mass", each(len(s), func(i int) float64 { return s[i].Mass })).
		Set("coupling", each(len(s), func(i int) float64 { return s[i].Coupling })).
		Set("rotary", each(len(s), func(i int) float64 { return s[i].Rotary }))
	var owner []int64
	var plies []laminate.Ply
	for i, layup := range in.Layups {
		for _, p := range layup {
			owner, plies = append(owner, int64(i)), append(plies, p)
		}
	}
	t := a.Table("plies").Set("section", owner)
	for name, of := range plyColumns {
		t.Set(name, each(len(plies), func(i int) float64 { return *of(&plies[i]) }))
	}
	return a
}

var plyColumns = map[string]func(*laminate.Ply) *float64{
	"thickness": func(p *laminate.Ply) *float64 { return &p.Thickness }, "angle": func(p *laminate.Ply) *float64 { return &p.Angle },
	"e1": func(p *laminate.Ply) *float64 { return &p.Material.E1 }, "e2": func(p *laminate.Ply) *float64 { return &p.Material.E2 },
	"g12": func(p *laminate.Ply) *float64 { return &p.Material.G12 }, "nu12": func(p *laminate.Ply) *float64 { return &p.Material.Nu12 },
	"g13": func(p *laminate.Ply) *float64 { return &p.Material.G13 }, "g23": func(p *laminate.Ply) *float64 { return &p.Material.G23 },
	"density": func(p *laminate.Ply) *float64 { return &p.Material.Density },
}

func decodeBatch(a *artifact.Artifact, nodes, threads int) (*element.Batch, error) {
	in := &element.Batch{Threads: threads}
	t := a.Table("sections")
	n := t.Rows()
	in.Sections, in.Layups = make([]laminate.Section, n), make([][]laminate.Ply, n)
	flat := make([]float64, 9)
	for i := range in.Sections {
		s := &in.Sections[i]
		for name, m := range map[string]*[3][3]float64{"a": &s.A, "b": &s.B, "d": &s.D} {
			if err := flatten(flat, t.FloatLists(name)[i:i+1], 9, name); err != nil {
				return nil, err
			}
			for k, v := range flat {
				m[k/3][k%3] = v
			}
		}
		if err := flatten(flat, t.FloatLists("shear")[i:i+1], 4, "shear"); err != nil {
			return nil, err
		}
		s.Shear = [2][2]float64{{flat[0], flat[1]}, {flat[2], flat[3]}}
		s.Thickness, s.Mass, s.Coupling, s.Rotary = t.Floats("thickness")[i], t.Floats("mass")[i], t.Floats("coupling")[i], t.Floats("rotary")[i]
	}
	t = a.Table("plies")
	for i, owner := range t.Ints("section") {
		if owner < 0 || int(owner) >= n {
			return nil, fmt.Errorf("ply %d belongs to section %d of %d", i, owner, n)
		}
		var p laminate.Ply
		for name, of := range plyColumns {
			*of(&p) = t.Floats(name)[i]
		}
		in.Layups[owner] = append(in.Layups[owner], p)
	}
	t = a.Table("elements")
	in.Nodes = make([]float64, 3*nodes*t.Rows())
	if err := flatten(in.Nodes, t.FloatLists("nodes"), 3*nodes, "nodes"); err != nil {
		return nil, err
	}
	for i, v := range t.Ints("section") {
		if v < 0 || int(v) >= n {
			return nil, fmt.Errorf("element %d has section %d of %d", i, v, n)
		}
		in.Section = append(in.Section, int32(v))
	}
	return in, nil
}

func encodeHeader(h recording.Header) *artifact.Artifact {
	a := artifact.New(headerKind)
	a.Scalars["rate"], a.Scalars["timed"] = h.Rate, h.Timed
	n := len(h.Columns)
	a.Table("columns").Set("name", each(n, func(i int) string { return h.Columns[i].Name })).
		Set("unit", each(n, func(i int) string { return h.Columns[i].Unit })).
		Set("text", each(n, func(i int) bool { return h.Columns[i].Text }))
	a.Table("notes").Set("text", append([]string(nil), h.Notes...))
	return a
}

func decodeHeader(a *artifact.Artifact) (recording.Header, error) {
	h := recording.Header{Rate: a.Float("rate"), Timed: a.Truth("timed"), Notes: a.Table("notes").Texts("text")}
	if !(h.Rate >= 0) || math.IsInf(h.Rate, 1) {
		return h, fmt.Errorf("the rate is %g Hz", h.Rate)
	}
	t, seen := a.Table("columns"), map[string]bool{}
	for i, name := range t.Texts("name") {
		if name == "" || seen[name] {
			return h, fmt.Errorf("the column name %q is empty or there twice", name)
		}
		seen[name] = true
		h.Columns = append(h.Columns, recording.Column{Name: name, Unit: t.Texts("unit")[i], Text: t.Truths("text")[i]})
	}
	return h, nil
}

// gathered collects the batches of a reading, whose slices change after each.
type gathered struct {
	first, rows, batch, column []int64
	origin                     []float64
	time, values               [][]float64
	notes                      []string
	findings                   []recording.Finding
}

func (g *gathered) add(b recording.Batch) error {
	at := int64(len(g.first))
	g.first, g.rows, g.origin = append(g.first, b.First), append(g.rows, int64(b.Rows())), append(g.origin, b.Origin)
	g.time = append(g.time, append([]float64{}, b.Time...))
	for c, v := range b.Values {
		g.batch, g.column, g.values = append(g.batch, at), append(g.column, int64(c)), append(g.values, append([]float64{}, v...))
	}
	g.notes, g.findings = append(g.notes, b.Notes...), append(g.findings, b.Findings...)
	return nil
}

func (g *gathered) encode() *artifact.Artifact {
	a := artifact.New(samplesKind)
	a.Table("batches").Set("first", g.first).Set("rows", g.rows).Set("origin", g.origin).Set("time", g.time)
	a.Table("values").Set("batch", g.batch).Set("column", g.column).Set("values", g.values)
	a.Table("notes").Set("text", g.notes)
	n := len(g.findings)
	a.Table("findings").Set("what", each(n, func(i int) string { return g.findings[i].What })).
		Set("where", each(n, func(i int) string { return g.findings[i].Where })).
		Set("extent", each(n, func(i int) string { return g.findings[i].Extent })).
		Set("consequence", each(n, func(i int) string { return g.findings[i].Consequence }))
	return a
}

// deliver checks the samples against what was asked for and hands them on.
func deliver(a *artifact.Artifact, request recording.Request, sink func(recording.Batch) error) error {
	t, v := a.Table("batches"), a.Table("values")
	columns, at, next := len(request.Columns), 0, int64(1)
	for i := range t.Rows() {
		n := t.Ints("rows")[i]
		b := recording.Batch{First: t.Ints("first")[i], Origin: t.Floats("origin")[i]}
		if n < 0 || b.First != next {
			return fmt.Errorf("batch %d has %d rows from row %d; row %d is due", i, n, b.First, next)
		}
		next += n
		if times := t.FloatLists("time")[i]; len(times) > 0 || n == 0 {
			b.Time = times
		}
		if request.Time != "" && int64(len(b.Time)) != n || b.Time != nil && int64(len(b.Time)) != n {
			return fmt.Errorf("batch %d has %d times for %d rows", i, len(b.Time), n)
		}
		for c := range columns {
			if at >= v.Rows() || v.Ints("batch")[at] != int64(i) || v.Ints("column")[at] != int64(c) {
				return fmt.Errorf("batch %d has no values of column %q where they are due", i, request.Columns[c])
			}
			values := v.FloatLists("values")[at]
			if int64(len(values)) != n {
				return fmt.Errorf("batch %d has %d values of column %q for %d rows", i, len(values), request.Columns[c], n)
			}
			b.Values = append(b.Values, values)
			at++
		}
		if i == t.Rows()-1 {
			b.Notes = a.Table("notes").Texts("text")
			f := a.Table("findings")
			for k, what := range f.Texts("what") {
				b.Findings = append(b.Findings, recording.Finding{What: what, Where: f.Texts("where")[k], Extent: f.Texts("extent")[k], Consequence: f.Texts("consequence")[k]})
			}
		}
		if err := sink(b); err != nil {
			return sinkError{err}
		}
	}
	if at != v.Rows() {
		return fmt.Errorf("%d rows of values belong to no batch", v.Rows()-at)
	}
	if next == 1 {
		return fmt.Errorf("there is no row and no error that says why")
	}
	return nil
}

// sinkError is an error of the caller on its way back to it.
type sinkError struct{ error }
