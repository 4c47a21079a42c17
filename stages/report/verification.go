package report

import (
	"math"

	"hushframe/stages/kinds"
)

// verificationSection shows known problems beside ours: the worst value of each on the page, all values in
// a file.
func verificationSection(v *kinds.Verification) *section {
	s := &section{ID: "verification", Title: "Known problems"}
	s.text("Problems whose answers are known from outside, solved with the elements, the assembly and the eigen-solver of this program. " +
		"The share is the size of the difference over the tolerance that the row of the table of known answers states for the mesh; above 100\u00a0% it is missed.")
	worst := &table{Name: "known-problems", Title: "The value of each problem that takes most of its tolerance", Columns: []column{
		{Name: "problem"}, {Name: "what"}, {Name: "source"}, {Name: "value"}, {Name: "reference", Right: true}, {Name: "ours", Right: true},
		{Name: "error", Unit: "%", Right: true}, {Name: "share of tolerance", Unit: "%", Right: true}, {Name: "mesh"}}}
	all := &table{Name: "known-values", Title: "All values", Columns: []column{
		{Name: "problem"}, {Name: "quantity"}, {Name: "unit"}, {Name: "value"}, {Name: "reference", Right: true}, {Name: "ours", Right: true},
		{Name: "error", Unit: "%", Right: true}, {Name: "share of tolerance", Unit: "%", Right: true}}}
	for i := range v.Problems {
		p := &v.Problems[i]
		for _, x := range p.Values {
			all.Rows = append(all.Rows, []cell{words(p.ID), words(p.Quantity), words(p.Unit), words(x.Label), digits(x.Reference, 7), digits(x.Computed, 7), offBy(x), shareOf(x)})
		}
		x, ok := p.Worst()
		row := []cell{words(p.ID), words(p.Title), words(p.Source), words(x.Label), digits(x.Reference, 6), digits(x.Computed, 6), offBy(x), shareOf(x), words(p.Mesh)}
		if !ok {
			row = []cell{words(p.ID), words(p.Title), words(p.Source), {Text: p.Failure, Raw: p.Failure, Strong: true}, missing(), missing(), missing(), missing(), words(p.Mesh)}
		}
		worst.Rows = append(worst.Rows, row)
	}
	s.table(worst)
	s.table(all)
	return s
}

// offBy is the relative error in per cent, a dash where the reference is zero.
func offBy(x kinds.VerifiedValue) cell {
	if x.Reference == 0 {
		return missing()
	}
	return signed(100*(x.Computed/x.Reference-1), 3)
}

func shareOf(x kinds.VerifiedValue) cell {
	c := percent(x.Share, 0)
	c.Strong = !(x.Share <= 1) || math.IsNaN(x.Share)
	return c
}
