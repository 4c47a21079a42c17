package kinds

import (
	"fmt"
	"math"
	"slices"

	"hushframe/core/pipeline/artifact"
)

// ResponseKind is what `sweep` makes of a modal basis and assumed sources.
// Elastic modes are numbered from 1 in ascending frequency.
var ResponseKind = artifact.Kind{
	Name: "response", Version: 4,
	About: "gyro rate that forces and moments at the rotors make: transfer functions, spectra, peaks and the modes that make them, lines at hover, operating shapes",
	Scalars: []artifact.Column{
		col("from", artifact.Float, "Hz", "lower end of the sweep"),
		col("to", artifact.Float, "Hz", "upper end of the sweep"),
		col("modes_to", artifact.Float, "Hz", "frequency up to which the basis holds every mode, as far as it shows"),
		col("force_density", artifact.Float, "N^2/Hz", "assumed one-sided density of each force component at each rotor"),
		col("moment_density", artifact.Float, "(N*m)^2/Hz", "assumed one-sided density of each moment component at each rotor"),
		col("residual", artifact.Truth, "", "the basis holds residual vectors and they are in use"),
		col("thrust", artifact.Float, "N", "thrust of one rotor at hover, weight over the number of rotors; NaN if the mass is not known"),
		col("blade_share", artifact.Float, "1", "assumed amplitude of the thrust at blade passing, as a share of the thrust"),
		col("spinning", artifact.Truth, "", "gyroscopic moments of the rotors are in the response"),
	},
	Tables: []artifact.TableSpec{
		{Name: "spectrum", About: "gyro rate under the broadband source, all rotors added as power", Columns: columns(
			col("frequency", artifact.Float, "Hz", "ascending, not evenly spaced"),
			axisCols("", "(rad/s)^2/Hz", "one-sided power spectral density"),
			axisCols("uncorrected_", "(rad/s)^2/Hz", "the same without residual vectors; NaN if the basis has none or they are off"),
			axisCols("flown_", "(rad/s)^2/Hz", "the broadband density with the rotors' lines spread over the speeds of a flight; NaN if rotors have no speed"),
		)},
		{Name: "sources", About: "the part of each rotor in the spectrum", Columns: columns(
			col("rotor", artifact.Text, "", "name"),
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("density", artifact.FloatList, "(rad/s)^2/Hz", "at the frequencies of the spectrum"),
		)},
		{Name: "transfer", About: "gyro rate per force or moment component, time dependence e^(+iωt)", Columns: columns(
			col("rotor", artifact.Text, "", "name"),
			col("component", artifact.Int, "", "0 to 2 force along x, y, z; 3 to 5 moment about them"),
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("real", artifact.FloatList, "rad/s per N or N*m", "at the frequencies of the spectrum"),
			col("imaginary", artifact.FloatList, "rad/s per N or N*m", "at the frequencies of the spectrum"),
		)},
		{Name: "axes", About: "one row per axis: roll, pitch, yaw", Columns: columns(
			col("axis", artifact.Text, "", "name"),
			col("rms", artifact.Float, "rad/s", "root mean square within the sweep"),
			col("correction", artifact.Float, "dB", "largest change that residual vectors make to the density, signed; NaN if not computed"),
			col("correction_at", artifact.Float, "Hz", "where that is"),
		)},
		{Name: "peaks", About: "peaks of the spectrum, by axis and frequency", Columns: columns(
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("frequency", artifact.Float, "Hz", "refined between the frequencies of the spectrum"),
			col("density", artifact.Float, "(rad/s)^2/Hz", "at the peak"),
			col("prominence", artifact.Float, "1", "density over the higher of the two valleys beside it"),
			col("damping", artifact.Float, "1", "damping ratio of the leading mode, at the rotors' speed if they spin and else half its loss factor alone; NaN if none leads"),
			col("modes", artifact.IntList, "", "elastic modes that make the peak, the strongest first; with spinning rotors the natural motions followed from them"),
			col("shares", artifact.FloatList, "1", "what each adds, projected on the total; negative works against it"),
			col("rigid", artifact.Float, "1", "what the rigid-body motion adds"),
			col("residual", artifact.Float, "1", "what the residual vectors add; with spinning rotors all that is left"),
			col("uncorrected", artifact.Float, "1", "density without residual vectors over density; NaN if not computed"),
			col("rotor", artifact.Text, "", "rotor of the strongest component"),
			col("component", artifact.Int, "", "strongest component, 0 to 5"),
			col("component_share", artifact.Float, "1", "its part of the density"),
			col("losses", artifact.TextList, "", "loss groups that take the power put in by it, the greatest first"),
			col("loss_shares", artifact.FloatList, "1", "the part each takes"),
		)},
		{Name: "modes", About: "elastic modes of the basis", Columns: columns(
			col("number", artifact.Int, "", "from 1"),
			col("frequency", artifact.Float, "Hz", "natural frequency without damping"),
			col("damping", artifact.Float, "1", "damping ratio, half the loss factor of the mode alone"),
		)},
		{Name: "rotors", About: "rotors and the speeds of their orders", Columns: columns(
			col("rotor", artifact.Text, "", "name"),
			col("blades", artifact.Int, "", "number of blades"),
			col("hover", artifact.Float, "rad/s", "speed at hover"),
			col("highest", artifact.Float, "rad/s", "highest service speed"),
			col("speed", artifact.Float, "rad/s", "speed in this response, with or without gyroscopic moments"),
			col("polar", artifact.Float, "kg*m^2", "moment of inertia of what spins, about the shaft"),
			col("tilt", artifact.Float, "kg*m^2", "moment of inertia of motor and propeller about an axis square to the shaft; NaN without a body"),
			col("equal", artifact.Float, "Hz", "frequency below which the gyroscopic moment at that speed exceeds the moment of the tilt inertia; NaN without a body"),
		)},
		{Name: "speeds", About: "rotor speeds of the table whirl, ascending from 0", Columns: columns(
			col("speed", artifact.Float, "rad/s", "speed of the first rotor; the others keep the ratio they have at hover"),
		)},
		{Name: "whirl", About: "natural motions of the damped frame over rotor speed, each followed from a mode at rest", Columns: columns(
			col("mode", artifact.Int, "", "elastic mode that it is at rest"),
			col("frequency", artifact.FloatList, "Hz", "at the speeds of the table speeds; NaN where it could not be followed"),
			col("damping", artifact.FloatList, "1", "damping ratio"),
			col("direction", artifact.FloatList, "1", "how rotors tilt: 1 round with their spin, -1 against it, 0 to and fro; NaN if none tilts"),
		)},
		{Name: "separations", About: "neighbouring natural motions at the speed of this response, by frequency", Columns: columns(
			col("lower", artifact.Int, "", "elastic mode that the lower one is at rest"),
			col("upper", artifact.Int, "", "the same of the upper one"),
			col("at", artifact.Float, "Hz", "frequency of the lower one"),
			col("gap", artifact.Float, "Hz", "distance"),
			col("bandwidths", artifact.Float, "1", "the same in half-power bandwidths, the mean of both"),
			axisCols("lower_", "(rad/s)^2/Hz", "highest density that the lower one makes alone under the broadband source"),
			axisCols("upper_", "(rad/s)^2/Hz", "the same of the upper one"),
			axisCols("amplification_", "1", "highest density of both together over the higher of those alone; NaN if neither is felt"),
		)},
		{Name: "map_speeds", About: "rotor speeds of the table map, ascending", Columns: columns(
			col("speed", artifact.Float, "rad/s", "speed of the first rotor; the others keep the ratio they have at hover"),
		)},
		{Name: "map", About: "lines over rotor speed, with the gyroscopic moments of each speed if rotors spin; rotors of one frequency added as power", Columns: columns(
			col("source", artifact.Text, "", "unbalance, blade passing, blade side force or torque ripple"),
			col("order", artifact.Float, "1", "multiple of the speed of the first rotor"),
			col("rotors", artifact.TextList, "", "whose lines they are"),
			col("roll", artifact.FloatList, "rad/s", "peak amplitude at the speeds of the table map_speeds"),
			col("pitch", artifact.FloatList, "rad/s", "the same"),
			col("yaw", artifact.FloatList, "rad/s", "the same"),
		)},
		{Name: "critical", About: "rotor speeds at which an order has the frequency of a natural motion at that very speed", Columns: columns(
			col("order", artifact.Int, "", "multiple of the rotors' speed"),
			col("rotors", artifact.TextList, "", "whose order it is"),
			col("speed", artifact.Float, "rad/s", "of these rotors"),
			col("frequency", artifact.Float, "Hz", "of the motion"),
			col("damping", artifact.Float, "1", "damping ratio"),
			col("direction", artifact.Float, "1", "as in the table whirl"),
			col("mode", artifact.Int, "", "elastic mode that it is at rest"),
		)},
		{Name: "lines", About: "gyro rate at single frequencies at hover speed", Columns: columns(
			col("source", artifact.Text, "", "unbalance, blade passing (of the thrust), blade side force (of unknown direction) or torque ripple"),
			col("rotor", artifact.Text, "", "name; \"all\" is the root sum of squares over rotors of equal frequency"),
			col("order", artifact.Float, "1", "multiple of the rotor's speed"),
			col("frequency", artifact.Float, "Hz", ""),
			col("force", artifact.Float, "N or N*m", "amplitude at one rotor; N*m for torque ripple"),
			axisCols("", "rad/s", "peak amplitude"),
		)},
		{Name: "shapes", About: "operating shapes: motion of the mesh nodes under one unit of one component", Columns: columns(
			col("frequency", artifact.Float, "Hz", ""),
			col("axis", artifact.Text, "", "axis whose peak this is; \"\" when the frequency was asked for"),
			col("rotor", artifact.Text, "", "driven rotor"),
			col("component", artifact.Int, "", "driven component, 0 to 5"),
			col("real", artifact.FloatList, "m", "ux, uy, uz of each node in turn"),
			col("imaginary", artifact.FloatList, "m", "the same"),
		)},
	},
}

// AxisNames are the axes of the gyro in order of their index.
var AxisNames = [3]string{"roll", "pitch", "yaw"}

// ComponentNames are the force and moment components in order of their index.
var ComponentNames = [6]string{"force x", "force y", "force z", "moment x", "moment y", "moment z"}

// Response is the content of a response artifact; the descriptions of ResponseKind hold.
type Response struct {
	From, To, ModesTo  float64
	Force, Moment      float64
	Residual           bool
	Thrust, BladeShare float64
	Spinning           bool

	Frequency   []float64
	Density     [3][]float64
	Uncorrected [3][]float64 // NaN when not computed
	Sources     []ResponseSource
	Transfer    []ResponseTransfer
	Axes        []ResponseAxis
	Peaks       []ResponsePeak
	Modes       []ResponseMode
	Rotors      []ResponseRotor
	Lines       []ResponseLine
	Shapes      []ResponseShape

	Speeds   []float64
	Whirl    []ResponseWhirl
	Critical []ResponseCritical

	Separations []ResponseSeparation

	MapSpeeds []float64
	Orders    []ResponseOrder
	Flown     [3][]float64 // nil when rotors have no speed
}

// ResponseSeparation is a pair of neighbours.
type ResponseSeparation struct {
	Lower, Upper           int
	At, Gap, Bandwidths    float64
	LowerAlone, UpperAlone [3]float64
	Amplification          [3]float64
}

// ResponseOrder is one line over the speeds of the map.
type ResponseOrder struct {
	Source string
	Order  float64
	Rotors []string
	Rate   [3][]float64
}

// ResponseWhirl is one natural motion over the rotor speeds.
type ResponseWhirl struct {
	Mode                          int
	Frequency, Damping, Direction []float64
}

// ResponseCritical is one critical speed.
type ResponseCritical struct {
	Order                                int
	Rotors                               []string
	Speed, Frequency, Damping, Direction float64
	Mode                                 int
}

// ResponseSource is the part of one rotor in the spectrum of one axis.
type ResponseSource struct {
	Rotor, Axis string
	Density     []float64
}

// ResponseTransfer is one transfer function over the frequencies of the spectrum.
type ResponseTransfer struct {
	Rotor           string
	Component       int
	Axis            string
	Real, Imaginary []float64
}

// ResponseAxis sums up one axis.
type ResponseAxis struct {
	Axis                          string
	RMS, Correction, CorrectionAt float64
}

// ResponsePeak is one peak of one axis.
type ResponsePeak struct {
	Axis                           string
	Frequency, Density, Prominence float64
	Damping                        float64
	Modes                          []int
	Shares                         []float64
	Rigid, Residual, Uncorrected   float64
	Rotor                          string
	Component                      int
	ComponentShare                 float64
	Losses                         []string
	LossShares                     []float64
}

// ResponseMode is one elastic mode of the basis.
type ResponseMode struct {
	Number             int
	Frequency, Damping float64
}

// ResponseRotor is one rotor.
type ResponseRotor struct {
	Rotor          string
	Blades         int
	Hover, Highest float64
	Speed          float64
	// Polar and Tilt are moments of inertia; Tilt and Equal are NaN without a body.
	Polar, Tilt, Equal float64
}

// ResponseLine is the answer to one rotor order at hover.
type ResponseLine struct {
	Source, Rotor           string
	Order, Frequency, Force float64
	Rate                    [3]float64
}

// ResponseShape is the motion of all nodes at one frequency.
type ResponseShape struct {
	Frequency       float64
	Axis, Rotor     string
	Component       int
	Real, Imaginary []float64
}

// axisCols are three columns named after the axes.
func axisCols(prefix, unit, about string) []artifact.Column {
	var out []artifact.Column
	for _, name := range AxisNames {
		out = append(out, col(prefix+name, artifact.Float, unit, about))
	}
	return out
}

// EncodeResponse makes the artifact.
func EncodeResponse(r *Response) *artifact.Artifact {
	a := artifact.New(ResponseKind)
	a.Scalars = map[string]any{
		"from": r.From, "to": r.To, "modes_to": r.ModesTo, "force_density": r.Force, "moment_density": r.Moment,
		"residual": r.Residual, "thrust": r.Thrust, "blade_share": r.BladeShare, "spinning": r.Spinning,
	}
	t := a.Table("spectrum").Set("frequency", r.Frequency)
	for axis, name := range AxisNames {
		flown := r.Flown[axis]
		if flown == nil {
			flown = slices.Repeat([]float64{math.NaN()}, len(r.Frequency))
		}
		t.Set(name, r.Density[axis]).Set("uncorrected_"+name, r.Uncorrected[axis]).Set("flown_"+name, flown)
	}
	a.Table("sources").
		Set("rotor", list(r.Sources, func(x ResponseSource) string { return x.Rotor })).
		Set("axis", list(r.Sources, func(x ResponseSource) string { return x.Axis })).
		Set("density", list(r.Sources, func(x ResponseSource) []float64 { return x.Density }))
	a.Table("transfer").
		Set("rotor", list(r.Transfer, func(x ResponseTransfer) string { return x.Rotor })).
		Set("component", list(r.Transfer, func(x ResponseTransfer) int64 { return int64(x.Component) })).
		Set("axis", list(r.Transfer, func(x ResponseTransfer) string { return x.Axis })).
		Set("real", list(r.Transfer, func(x ResponseTransfer) []float64 { return x.Real })).
		Set("imaginary", list(r.Transfer, func(x ResponseTransfer) []float64 { return x.Imaginary }))
	a.Table("axes").
		Set("axis", list(r.Axes, func(x ResponseAxis) string { return x.Axis })).
		Set("rms", list(r.Axes, func(x ResponseAxis) float64 { return x.RMS })).
		Set("correction", list(r.Axes, func(x ResponseAxis) float64 { return x.Correction })).
		Set("correction_at", list(r.Axes, func(x ResponseAxis) float64 { return x.CorrectionAt }))
	setResponsePeaks(a.Table("peaks"), r.Peaks)
	a.Table("modes").
		Set("number", list(r.Modes, func(x ResponseMode) int64 { return int64(x.Number) })).
		Set("frequency", list(r.Modes, func(x ResponseMode) float64 { return x.Frequency })).
		Set("damping", list(r.Modes, func(x ResponseMode) float64 { return x.Damping }))
	a.Table("rotors").
		Set("rotor", list(r.Rotors, func(x ResponseRotor) string { return x.Rotor })).
		Set("blades", list(r.Rotors, func(x ResponseRotor) int64 { return int64(x.Blades) })).
		Set("hover", list(r.Rotors, func(x ResponseRotor) float64 { return x.Hover })).
		Set("highest", list(r.Rotors, func(x ResponseRotor) float64 { return x.Highest })).
		Set("speed", list(r.Rotors, func(x ResponseRotor) float64 { return x.Speed })).
		Set("polar", list(r.Rotors, func(x ResponseRotor) float64 { return x.Polar })).
		Set("tilt", list(r.Rotors, func(x ResponseRotor) float64 { return x.Tilt })).
		Set("equal", list(r.Rotors, func(x ResponseRotor) float64 { return x.Equal }))
	a.Table("speeds").Set("speed", append([]float64{}, r.Speeds...))
	t = a.Table("separations").
		Set("lower", list(r.Separations, func(x ResponseSeparation) int64 { return int64(x.Lower) })).
		Set("upper", list(r.Separations, func(x ResponseSeparation) int64 { return int64(x.Upper) })).
		Set("at", list(r.Separations, func(x ResponseSeparation) float64 { return x.At })).
		Set("gap", list(r.Separations, func(x ResponseSeparation) float64 { return x.Gap })).
		Set("bandwidths", list(r.Separations, func(x ResponseSeparation) float64 { return x.Bandwidths }))
	for axis, name := range AxisNames {
		t.Set("lower_"+name, list(r.Separations, func(x ResponseSeparation) float64 { return x.LowerAlone[axis] })).
			Set("upper_"+name, list(r.Separations, func(x ResponseSeparation) float64 { return x.UpperAlone[axis] })).
			Set("amplification_"+name, list(r.Separations, func(x ResponseSeparation) float64 { return x.Amplification[axis] }))
	}
	a.Table("map_speeds").Set("speed", append([]float64{}, r.MapSpeeds...))
	t = a.Table("map").
		Set("source", list(r.Orders, func(x ResponseOrder) string { return x.Source })).
		Set("order", list(r.Orders, func(x ResponseOrder) float64 { return x.Order })).
		Set("rotors", list(r.Orders, func(x ResponseOrder) []string { return x.Rotors }))
	for axis, name := range AxisNames {
		t.Set(name, list(r.Orders, func(x ResponseOrder) []float64 { return x.Rate[axis] }))
	}
	a.Table("whirl").
		Set("mode", list(r.Whirl, func(x ResponseWhirl) int64 { return int64(x.Mode) })).
		Set("frequency", list(r.Whirl, func(x ResponseWhirl) []float64 { return x.Frequency })).
		Set("damping", list(r.Whirl, func(x ResponseWhirl) []float64 { return x.Damping })).
		Set("direction", list(r.Whirl, func(x ResponseWhirl) []float64 { return x.Direction }))
	a.Table("critical").
		Set("order", list(r.Critical, func(x ResponseCritical) int64 { return int64(x.Order) })).
		Set("rotors", list(r.Critical, func(x ResponseCritical) []string { return x.Rotors })).
		Set("speed", list(r.Critical, func(x ResponseCritical) float64 { return x.Speed })).
		Set("frequency", list(r.Critical, func(x ResponseCritical) float64 { return x.Frequency })).
		Set("damping", list(r.Critical, func(x ResponseCritical) float64 { return x.Damping })).
		Set("direction", list(r.Critical, func(x ResponseCritical) float64 { return x.Direction })).
		Set("mode", list(r.Critical, func(x ResponseCritical) int64 { return int64(x.Mode) }))
	t = a.Table("lines").
		Set("source", list(r.Lines, func(x ResponseLine) string { return x.Source })).
		Set("rotor", list(r.Lines, func(x ResponseLine) string { return x.Rotor })).
		Set("order", list(r.Lines, func(x ResponseLine) float64 { return x.Order })).
		Set("frequency", list(r.Lines, func(x ResponseLine) float64 { return x.Frequency })).
		Set("force", list(r.Lines, func(x ResponseLine) float64 { return x.Force }))
	for axis, name := range AxisNames {
		t.Set(name, list(r.Lines, func(x ResponseLine) float64 { return x.Rate[axis] }))
	}
	a.Table("shapes").
		Set("frequency", list(r.Shapes, func(x ResponseShape) float64 { return x.Frequency })).
		Set("axis", list(r.Shapes, func(x ResponseShape) string { return x.Axis })).
		Set("rotor", list(r.Shapes, func(x ResponseShape) string { return x.Rotor })).
		Set("component", list(r.Shapes, func(x ResponseShape) int64 { return int64(x.Component) })).
		Set("real", list(r.Shapes, func(x ResponseShape) []float64 { return x.Real })).
		Set("imaginary", list(r.Shapes, func(x ResponseShape) []float64 { return x.Imaginary }))
	return a
}

func setResponsePeaks(t *artifact.Table, peaks []ResponsePeak) {
	t.Set("axis", list(peaks, func(x ResponsePeak) string { return x.Axis })).
		Set("frequency", list(peaks, func(x ResponsePeak) float64 { return x.Frequency })).
		Set("density", list(peaks, func(x ResponsePeak) float64 { return x.Density })).
		Set("prominence", list(peaks, func(x ResponsePeak) float64 { return x.Prominence })).
		Set("damping", list(peaks, func(x ResponsePeak) float64 { return x.Damping })).
		Set("modes", list(peaks, func(x ResponsePeak) []int64 { return ints(x.Modes) })).
		Set("shares", list(peaks, func(x ResponsePeak) []float64 { return x.Shares })).
		Set("rigid", list(peaks, func(x ResponsePeak) float64 { return x.Rigid })).
		Set("residual", list(peaks, func(x ResponsePeak) float64 { return x.Residual })).
		Set("uncorrected", list(peaks, func(x ResponsePeak) float64 { return x.Uncorrected })).
		Set("rotor", list(peaks, func(x ResponsePeak) string { return x.Rotor })).
		Set("component", list(peaks, func(x ResponsePeak) int64 { return int64(x.Component) })).
		Set("component_share", list(peaks, func(x ResponsePeak) float64 { return x.ComponentShare })).
		Set("losses", list(peaks, func(x ResponsePeak) []string { return x.Losses })).
		Set("loss_shares", list(peaks, func(x ResponsePeak) []float64 { return x.LossShares }))
}

// DecodeResponse reads the artifact; the fault names what contradicts.
func DecodeResponse(a *artifact.Artifact) (*Response, error) {
	if a.Kind.Name != ResponseKind.Name {
		return nil, fmt.Errorf("this is a %s artifact, not %s", a.Kind.Name, ResponseKind.Name)
	}
	r := &Response{
		From: a.Float("from"), To: a.Float("to"), ModesTo: a.Float("modes_to"), Force: a.Float("force_density"),
		Moment: a.Float("moment_density"), Residual: a.Truth("residual"), Thrust: a.Float("thrust"), BladeShare: a.Float("blade_share"),
		Spinning: a.Truth("spinning"), Speeds: a.Table("speeds").Floats("speed"),
	}
	t := a.Table("spectrum")
	r.Frequency = t.Floats("frequency")
	for axis, name := range AxisNames {
		r.Density[axis], r.Uncorrected[axis] = t.Floats(name), t.Floats("uncorrected_"+name)
		if flown := t.Floats("flown_" + name); len(flown) > 0 && !math.IsNaN(flown[0]) {
			r.Flown[axis] = flown
		}
	}
	for k := 1; k < len(r.Frequency); k++ {
		if !(r.Frequency[k] > r.Frequency[k-1]) {
			return nil, malformed("response", "the frequencies of the spectrum do not ascend at row %d", k)
		}
	}
	n := len(r.Frequency)
	t = a.Table("sources")
	for i := range t.Rows() {
		x := ResponseSource{t.Texts("rotor")[i], t.Texts("axis")[i], t.FloatLists("density")[i]}
		if len(x.Density) != n {
			return nil, malformed("response", "the source of rotor %s has %d values over %d frequencies", x.Rotor, len(x.Density), n)
		}
		r.Sources = append(r.Sources, x)
	}
	t = a.Table("transfer")
	for i := range t.Rows() {
		x := ResponseTransfer{t.Texts("rotor")[i], int(t.Ints("component")[i]), t.Texts("axis")[i], t.FloatLists("real")[i], t.FloatLists("imaginary")[i]}
		if len(x.Real) != n || len(x.Imaginary) != n {
			return nil, malformed("response", "a transfer function of rotor %s has %d and %d values over %d frequencies", x.Rotor, len(x.Real), len(x.Imaginary), n)
		}
		if x.Component < 0 || x.Component > 5 {
			return nil, malformed("response", "a transfer function of rotor %s is of component %d", x.Rotor, x.Component)
		}
		r.Transfer = append(r.Transfer, x)
	}
	t = a.Table("axes")
	for i := range t.Rows() {
		r.Axes = append(r.Axes, ResponseAxis{t.Texts("axis")[i], t.Floats("rms")[i], t.Floats("correction")[i], t.Floats("correction_at")[i]})
	}
	var err error
	if r.Peaks, err = responsePeaks(a.Table("peaks")); err != nil {
		return nil, err
	}
	t = a.Table("modes")
	for i := range t.Rows() {
		r.Modes = append(r.Modes, ResponseMode{int(t.Ints("number")[i]), t.Floats("frequency")[i], t.Floats("damping")[i]})
	}
	t = a.Table("rotors")
	for i := range t.Rows() {
		r.Rotors = append(r.Rotors, ResponseRotor{t.Texts("rotor")[i], int(t.Ints("blades")[i]), t.Floats("hover")[i], t.Floats("highest")[i],
			t.Floats("speed")[i], t.Floats("polar")[i], t.Floats("tilt")[i], t.Floats("equal")[i]})
	}
	t = a.Table("separations")
	for i := range t.Rows() {
		x := ResponseSeparation{Lower: int(t.Ints("lower")[i]), Upper: int(t.Ints("upper")[i]), At: t.Floats("at")[i], Gap: t.Floats("gap")[i], Bandwidths: t.Floats("bandwidths")[i]}
		for axis, name := range AxisNames {
			x.LowerAlone[axis], x.UpperAlone[axis], x.Amplification[axis] = t.Floats("lower_" + name)[i], t.Floats("upper_" + name)[i], t.Floats("amplification_" + name)[i]
		}
		r.Separations = append(r.Separations, x)
	}
	r.MapSpeeds = a.Table("map_speeds").Floats("speed")
	t = a.Table("map")
	for i := range t.Rows() {
		x := ResponseOrder{Source: t.Texts("source")[i], Order: t.Floats("order")[i], Rotors: t.TextLists("rotors")[i]}
		for axis, name := range AxisNames {
			x.Rate[axis] = t.FloatLists(name)[i]
			if len(x.Rate[axis]) != len(r.MapSpeeds) {
				return nil, malformed("response", "%s of order %g has %d values over %d speeds", x.Source, x.Order, len(x.Rate[axis]), len(r.MapSpeeds))
			}
		}
		r.Orders = append(r.Orders, x)
	}
	t = a.Table("whirl")
	for i := range t.Rows() {
		x := ResponseWhirl{int(t.Ints("mode")[i]), t.FloatLists("frequency")[i], t.FloatLists("damping")[i], t.FloatLists("direction")[i]}
		if n := len(r.Speeds); len(x.Frequency) != n || len(x.Damping) != n || len(x.Direction) != n {
			return nil, malformed("response", "the whirl of mode %d has %d frequencies over %d speeds", x.Mode, len(x.Frequency), n)
		}
		r.Whirl = append(r.Whirl, x)
	}
	t = a.Table("critical")
	for i := range t.Rows() {
		r.Critical = append(r.Critical, ResponseCritical{int(t.Ints("order")[i]), t.TextLists("rotors")[i], t.Floats("speed")[i],
			t.Floats("frequency")[i], t.Floats("damping")[i], t.Floats("direction")[i], int(t.Ints("mode")[i])})
	}
	t = a.Table("lines")
	for i := range t.Rows() {
		x := ResponseLine{Source: t.Texts("source")[i], Rotor: t.Texts("rotor")[i], Order: t.Floats("order")[i],
			Frequency: t.Floats("frequency")[i], Force: t.Floats("force")[i]}
		for axis, name := range AxisNames {
			x.Rate[axis] = t.Floats(name)[i]
		}
		r.Lines = append(r.Lines, x)
	}
	t = a.Table("shapes")
	for i := range t.Rows() {
		x := ResponseShape{t.Floats("frequency")[i], t.Texts("axis")[i], t.Texts("rotor")[i], int(t.Ints("component")[i]), t.FloatLists("real")[i], t.FloatLists("imaginary")[i]}
		if len(x.Real) != len(x.Imaginary) || len(x.Real)%3 != 0 {
			return nil, malformed("response", "the shape at %g Hz has %d real and %d imaginary values", x.Frequency, len(x.Real), len(x.Imaginary))
		}
		r.Shapes = append(r.Shapes, x)
	}
	return r, nil
}

func responsePeaks(t *artifact.Table) ([]ResponsePeak, error) {
	var out []ResponsePeak
	for i := range t.Rows() {
		x := ResponsePeak{
			Axis: t.Texts("axis")[i], Frequency: t.Floats("frequency")[i], Density: t.Floats("density")[i], Prominence: t.Floats("prominence")[i],
			Damping: t.Floats("damping")[i], Modes: narrow(t.IntLists("modes")[i]), Shares: t.FloatLists("shares")[i],
			Rigid: t.Floats("rigid")[i], Residual: t.Floats("residual")[i], Uncorrected: t.Floats("uncorrected")[i],
			Rotor: t.Texts("rotor")[i], Component: int(t.Ints("component")[i]), ComponentShare: t.Floats("component_share")[i],
			Losses: t.TextLists("losses")[i], LossShares: t.FloatLists("loss_shares")[i],
		}
		if len(x.Modes) != len(x.Shares) || len(x.Losses) != len(x.LossShares) || x.Component < 0 || x.Component > 5 {
			return nil, malformed("response", "the peak at %g Hz contradicts itself", x.Frequency)
		}
		out = append(out, x)
	}
	return out, nil
}
