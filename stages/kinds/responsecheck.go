package kinds

import (
	"hushframe/core/pipeline/artifact"
)

// ResponseDirect is one transfer function at one frequency, from the modal
// basis and from the full equations.
type ResponseDirect struct {
	Frequency     float64
	Rotor         string
	Component     int
	Axis          string
	Modal, Direct complex128
}

// ResponseDirectError sums up how far they are apart.
type ResponseDirectError struct {
	Frequency float64
	Axis      string
	Moment    bool
	Error     float64
}

// ResponsePractice is a fact of the trade set against this frame.
type ResponsePractice struct {
	Name, About, Unit string
	Value, Low, High  float64
	Holds             bool
}

// checkTables describe what the response was held against.
func checkTables() []artifact.TableSpec {
	return []artifact.TableSpec{
		{Name: "direct", About: "transfer functions to the gyro rate at the frequencies of check_at, from the modal basis and from a direct solve of the full damped equations of every unknown", Columns: columns(
			col("frequency", artifact.Float, "Hz", ""),
			col("rotor", artifact.Text, "", "name"),
			col("component", artifact.Int, "", "0 to 2 force along x, y, z; 3 to 5 moment about them"),
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("modal_real", artifact.Float, "rad/s per N or N*m", "by the modal basis"),
			col("modal_imaginary", artifact.Float, "rad/s per N or N*m", "the same"),
			col("direct_real", artifact.Float, "rad/s per N or N*m", "by the direct solve"),
			col("direct_imaginary", artifact.Float, "rad/s per N or N*m", "the same"),
		)},
		{Name: "direct_errors", About: "how far the modal basis is from the direct solve, by frequency and axis", Columns: columns(
			col("frequency", artifact.Float, "Hz", ""),
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("moment", artifact.Truth, "", "over the moment components; else over the force components"),
			col("error", artifact.Float, "1", "root sum of squares of the differences over all rotors and components, over that of the direct solve"),
		)},
		{Name: "practice", About: "facts of the trade set against this frame; common practice without a source, for orientation only", Columns: columns(
			col("name", artifact.Text, "", "short name"),
			col("about", artifact.Text, "", "what common practice says"),
			col("unit", artifact.Text, "", "unit of value, low and high"),
			col("value", artifact.Float, "as the column unit says", "what this frame has"),
			col("low", artifact.Float, "as the column unit says", "least that would agree; -infinity for none"),
			col("high", artifact.Float, "as the column unit says", "most that would agree; infinity for none"),
			col("holds", artifact.Truth, "", "the value lies between"),
		)},
	}
}

func setCheck(a *artifact.Artifact, r *Response) {
	a.Table("direct").
		Set("frequency", list(r.Direct, func(x ResponseDirect) float64 { return x.Frequency })).
		Set("rotor", list(r.Direct, func(x ResponseDirect) string { return x.Rotor })).
		Set("component", list(r.Direct, func(x ResponseDirect) int64 { return int64(x.Component) })).
		Set("axis", list(r.Direct, func(x ResponseDirect) string { return x.Axis })).
		Set("modal_real", list(r.Direct, func(x ResponseDirect) float64 { return real(x.Modal) })).
		Set("modal_imaginary", list(r.Direct, func(x ResponseDirect) float64 { return imag(x.Modal) })).
		Set("direct_real", list(r.Direct, func(x ResponseDirect) float64 { return real(x.Direct) })).
		Set("direct_imaginary", list(r.Direct, func(x ResponseDirect) float64 { return imag(x.Direct) }))
	a.Table("direct_errors").
		Set("frequency", list(r.DirectErrors, func(x ResponseDirectError) float64 { return x.Frequency })).
		Set("axis", list(r.DirectErrors, func(x ResponseDirectError) string { return x.Axis })).
		Set("moment", list(r.DirectErrors, func(x ResponseDirectError) bool { return x.Moment })).
		Set("error", list(r.DirectErrors, func(x ResponseDirectError) float64 { return x.Error }))
	a.Table("practice").
		Set("name", list(r.Practice, func(x ResponsePractice) string { return x.Name })).
		Set("about", list(r.Practice, func(x ResponsePractice) string { return x.About })).
		Set("unit", list(r.Practice, func(x ResponsePractice) string { return x.Unit })).
		Set("value", list(r.Practice, func(x ResponsePractice) float64 { return x.Value })).
		Set("low", list(r.Practice, func(x ResponsePractice) float64 { return x.Low })).
		Set("high", list(r.Practice, func(x ResponsePractice) float64 { return x.High })).
		Set("holds", list(r.Practice, func(x ResponsePractice) bool { return x.Holds }))
}

func getCheck(a *artifact.Artifact, r *Response) error {
	t := a.Table("direct")
	for i := range t.Rows() {
		x := ResponseDirect{t.Floats("frequency")[i], t.Texts("rotor")[i], int(t.Ints("component")[i]), t.Texts("axis")[i],
			complex(t.Floats("modal_real")[i], t.Floats("modal_imaginary")[i]), complex(t.Floats("direct_real")[i], t.Floats("direct_imaginary")[i])}
		if x.Component < 0 || x.Component > 5 {
			return malformed("response", "a direct solve at %g Hz is of component %d", x.Frequency, x.Component)
		}
		r.Direct = append(r.Direct, x)
	}
	t = a.Table("direct_errors")
	for i := range t.Rows() {
		r.DirectErrors = append(r.DirectErrors, ResponseDirectError{t.Floats("frequency")[i], t.Texts("axis")[i], t.Truths("moment")[i], t.Floats("error")[i]})
	}
	t = a.Table("practice")
	for i := range t.Rows() {
		r.Practice = append(r.Practice, ResponsePractice{t.Texts("name")[i], t.Texts("about")[i], t.Texts("unit")[i],
			t.Floats("value")[i], t.Floats("low")[i], t.Floats("high")[i], t.Truths("holds")[i]})
	}
	return nil
}
