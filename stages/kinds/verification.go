package kinds

import "hushframe/core/pipeline/artifact"

// VerificationKind is what `verify` makes of known problems.
var VerificationKind = artifact.Kind{
	Name: "verification", Version: 1,
	About: "values computed for problems whose answers are known, beside these",
	Tables: []artifact.TableSpec{
		{Name: "problems", About: "one row per problem", Columns: columns(
			col("id", artifact.Text, "", "row of the table of known answers"),
			col("family", artifact.Text, "", "problems that are built alike"),
			col("title", artifact.Text, "", "what it is"),
			col("mesh", artifact.Text, "", "what it was solved on"),
			col("source", artifact.Text, "", "where the problem or its formula is published"),
			col("known", artifact.Text, "", "how its values are known"),
			col("quantity", artifact.Text, "", "what they are"),
			col("unit", artifact.Text, "", "their unit, as the table of known answers has it"),
			col("failure", artifact.Text, "", "why nothing could be computed; empty if it could"),
		)},
		{Name: "values", About: "one row per value", Columns: columns(
			col("problem", artifact.Int, "", "row of problems"),
			col("label", artifact.Text, "", "which value of the problem"),
			col("reference", artifact.Float, "", "the known value, in the unit of the problem"),
			col("computed", artifact.Float, "", "ours"),
			col("share", artifact.Float, "1", "size of the difference over the tolerance of the row"),
		)},
	},
}

// Verification is the content of a verification artifact; the descriptions of VerificationKind hold.
type Verification struct {
	Problems []VerifiedProblem
}

// VerifiedProblem is one problem with its values.
type VerifiedProblem struct {
	ID, Family, Title, Mesh, Source, Known, Quantity, Unit, Failure string
	Values                                                          []VerifiedValue
}

// VerifiedValue is one value.
type VerifiedValue struct {
	Label                      string
	Reference, Computed, Share float64
}

// Worst is the value with the greatest share, and whether there is one.
func (p *VerifiedProblem) Worst() (worst VerifiedValue, ok bool) {
	for i, v := range p.Values {
		if i == 0 || v.Share > worst.Share {
			worst, ok = v, true
		}
	}
	return worst, ok
}

// EncodeVerification makes the artifact.
func EncodeVerification(v *Verification) *artifact.Artifact {
	a := artifact.New(VerificationKind)
	text := func(get func(p VerifiedProblem) string) []string { return list(v.Problems, get) }
	a.Table("problems").
		Set("id", text(func(p VerifiedProblem) string { return p.ID })).
		Set("family", text(func(p VerifiedProblem) string { return p.Family })).
		Set("title", text(func(p VerifiedProblem) string { return p.Title })).
		Set("mesh", text(func(p VerifiedProblem) string { return p.Mesh })).
		Set("source", text(func(p VerifiedProblem) string { return p.Source })).
		Set("known", text(func(p VerifiedProblem) string { return p.Known })).
		Set("quantity", text(func(p VerifiedProblem) string { return p.Quantity })).
		Set("unit", text(func(p VerifiedProblem) string { return p.Unit })).
		Set("failure", text(func(p VerifiedProblem) string { return p.Failure }))
	var problem []int64
	var values []VerifiedValue
	for i, p := range v.Problems {
		for _, x := range p.Values {
			problem, values = append(problem, int64(i)), append(values, x)
		}
	}
	a.Table("values").
		Set("problem", problem).
		Set("label", list(values, func(x VerifiedValue) string { return x.Label })).
		Set("reference", list(values, func(x VerifiedValue) float64 { return x.Reference })).
		Set("computed", list(values, func(x VerifiedValue) float64 { return x.Computed })).
		Set("share", list(values, func(x VerifiedValue) float64 { return x.Share }))
	return a
}

// DecodeVerification reads the artifact.
func DecodeVerification(a *artifact.Artifact) (*Verification, error) {
	v := &Verification{}
	t := a.Table("problems")
	for i := range t.Rows() {
		get := func(name string) string { return t.Texts(name)[i] }
		v.Problems = append(v.Problems, VerifiedProblem{ID: get("id"), Family: get("family"), Title: get("title"), Mesh: get("mesh"),
			Source: get("source"), Known: get("known"), Quantity: get("quantity"), Unit: get("unit"), Failure: get("failure")})
	}
	t = a.Table("values")
	for i := range t.Rows() {
		at := t.Ints("problem")[i]
		if at < 0 || at >= int64(len(v.Problems)) {
			return nil, malformed("verification", "a value is of problem %d", at)
		}
		p := &v.Problems[at]
		p.Values = append(p.Values, VerifiedValue{t.Texts("label")[i], t.Floats("reference")[i], t.Floats("computed")[i], t.Floats("share")[i]})
	}
	return v, nil
}
