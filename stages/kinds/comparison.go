package kinds

import (
	"fmt"

	"hushframe/core/pipeline/artifact"
)

// ComparisonKind is what `compare` makes of a prediction and a recording. It carries the curves, so that a report needs
// neither of the two.
var ComparisonKind = artifact.Kind{
	Name:    "comparison",
	Version: 2,
	About:   "predicted and observed peaks and modes, paired and alone, a verdict on every observed peak, and one scale factor per axis",
	Scalars: []artifact.Column{
		{Name: "from", Type: artifact.Float, Unit: "Hz", About: "lower end of the band compared"},
		{Name: "to", Type: artifact.Float, Unit: "Hz", About: "upper end of the band compared"},
		{Name: "tolerance", Type: artifact.Float, Unit: "1", About: "relative frequency error taken as one standard deviation"},
		{Name: "reach", Type: artifact.Float, Unit: "1", About: "relative frequency error above which nothing is paired"},
	},
	Tables: []artifact.TableSpec{
		{Name: "axes", About: "one row per axis that both sides have", Columns: []artifact.Column{
			{Name: "axis", Type: artifact.Text, About: "roll, pitch or yaw"},
			{Name: "scale", Type: artifact.Float, Unit: "1", About: "factor on the predicted density that fits the observed one best in the logarithm; NaN if no bin is left"},
			{Name: "residual", Type: artifact.Float, Unit: "dB", About: "root mean square of what is left after it"},
			{Name: "assurance", Type: artifact.Float, Unit: "1", About: "likeness of the two amplitude spectra whatever their levels, 0 to 1; NaN if no bin is left"},
			{Name: "bins", Type: artifact.Int, About: "bins it rests on"},
			{Name: "frequency", Type: artifact.FloatList, Unit: "Hz", About: "frequencies of the two curves"},
			{Name: "predicted", Type: artifact.FloatList, Unit: "(rad/s)^2/Hz", About: "predicted density, without the factor"},
			{Name: "observed", Type: artifact.FloatList, Unit: "(rad/s)^2/Hz", About: "observed density"},
		}},
		{Name: "pairs", About: "paired peaks, by axis and predicted frequency", Columns: []artifact.Column{
			{Name: "axis", Type: artifact.Text, About: "roll, pitch or yaw"},
			{Name: "predicted", Type: artifact.Float, Unit: "Hz", About: "predicted frequency"},
			{Name: "observed", Type: artifact.Float, Unit: "Hz", About: "observed frequency"},
			{Name: "observed_error", Type: artifact.Float, Unit: "Hz", About: "standard error of the observed frequency"},
			{Name: "error", Type: artifact.Float, Unit: "1", About: "predicted over observed frequency, less one"},
			{Name: "confidence", Type: artifact.Float, Unit: "1", About: "0 to 1, as core/match states it"},
			{Name: "predicted_density", Type: artifact.Float, Unit: "(rad/s)^2/Hz", About: "without the scale factor"},
			{Name: "observed_density", Type: artifact.Float, Unit: "(rad/s)^2/Hz", About: ""},
			{Name: "predicted_damping", Type: artifact.Float, Unit: "1", About: "damping ratio; NaN if not known"},
			{Name: "observed_damping", Type: artifact.Float, Unit: "1", About: "damping ratio from the width; NaN if not known"},
			{Name: "observed_damping_error", Type: artifact.Float, Unit: "1", About: "standard error"},
			{Name: "damping_ratio", Type: artifact.Float, Unit: "1", About: "predicted over observed damping; NaN if either is not known"},
			{Name: "near_loop", Type: artifact.Truth, About: "the observed peak lies where the rate loop of the control still changes it"},
			{Name: "modes", Type: artifact.IntList, About: "modes that make the predicted peak, the strongest first"},
		}},
		{Name: "unpaired", About: "peaks without a partner, by side, axis and frequency", Columns: []artifact.Column{
			{Name: "side", Type: artifact.Text, About: "predicted or observed"},
			{Name: "axis", Type: artifact.Text, About: "roll, pitch or yaw"},
			{Name: "frequency", Type: artifact.Float, Unit: "Hz", About: ""},
			{Name: "density", Type: artifact.Float, Unit: "(rad/s)^2/Hz", About: ""},
			{Name: "damping", Type: artifact.Float, Unit: "1", About: "damping ratio; NaN if not known"},
			{Name: "modes", Type: artifact.IntList, About: "modes that make a predicted peak"},
			{Name: "reason", Type: artifact.Text, About: "why it has no partner"},
		}},
		{Name: "masked", About: "peaks that lie where a rotor order may be, by side, axis and frequency", Columns: []artifact.Column{
			{Name: "side", Type: artifact.Text, About: "predicted or observed"},
			{Name: "axis", Type: artifact.Text, About: "roll, pitch or yaw"},
			{Name: "frequency", Type: artifact.Float, Unit: "Hz", About: ""},
			{Name: "density", Type: artifact.Float, Unit: "(rad/s)^2/Hz", About: ""},
			{Name: "damping", Type: artifact.Float, Unit: "1", About: "damping ratio; NaN if not known"},
			{Name: "modes", Type: artifact.IntList, About: "modes that make a predicted peak"},
			{Name: "reason", Type: artifact.Text, About: "the orders whose bands it lies in"},
		}},
		{Name: "verdicts", About: "what every observed peak in the band is taken for, by axis and frequency", Columns: []artifact.Column{
			{Name: "axis", Type: artifact.Text, About: "roll, pitch or yaw"},
			{Name: "frequency", Type: artifact.Float, Unit: "Hz", About: ""},
			{Name: "density", Type: artifact.Float, Unit: "(rad/s)^2/Hz", About: ""},
			{Name: "verdict", Type: artifact.Text, About: "structure, rotor order, loop, alias or unknown"},
			{Name: "reason", Type: artifact.Text, About: "in words"},
		}},
		{Name: "mode_pairs", About: "predicted modes and modes identified in flight, by predicted frequency", Columns: []artifact.Column{
			{Name: "mode", Type: artifact.Int, About: "number of the predicted mode"},
			{Name: "predicted", Type: artifact.Float, Unit: "Hz", About: "predicted frequency"},
			{Name: "observed", Type: artifact.Float, Unit: "Hz", About: "identified frequency"},
			{Name: "observed_error", Type: artifact.Float, Unit: "Hz", About: "standard error of the identified frequency"},
			{Name: "error", Type: artifact.Float, Unit: "1", About: "predicted over identified frequency, less one"},
			{Name: "agreement", Type: artifact.Float, Unit: "1", About: "squared cosine of the angle between the two gyro directions"},
			{Name: "predicted_damping", Type: artifact.Float, Unit: "1", About: "damping ratio"},
			{Name: "observed_damping", Type: artifact.Float, Unit: "1", About: "damping ratio"},
			{Name: "observed_damping_error", Type: artifact.Float, Unit: "1", About: "standard error"},
			{Name: "damping_ratio", Type: artifact.Float, Unit: "1", About: "predicted over observed damping"},
			{Name: "near_loop", Type: artifact.Truth, About: "the observed mode lies where the rate loop of the control still changes it"},
			{Name: "confidence", Type: artifact.Float, Unit: "1", About: "0 to 1, as core/match states it"},
		}},
		{Name: "modes_alone", About: "modes without a partner, predicted first, by frequency", Columns: []artifact.Column{
			{Name: "side", Type: artifact.Text, About: "predicted or observed"},
			{Name: "mode", Type: artifact.Int, About: "number of a predicted mode, 0 for an observed one"},
			{Name: "frequency", Type: artifact.Float, Unit: "Hz", About: ""},
			{Name: "damping", Type: artifact.Float, Unit: "1", About: "damping ratio"},
			{Name: "direction", Type: artifact.FloatList, Unit: "1", About: "gyro direction over roll, pitch, yaw"},
			{Name: "strength", Type: artifact.Float, Unit: "1", About: "gyro strength over that of the strongest mode in the band; NaN for an observed one"},
			{Name: "reason", Type: artifact.Text, About: "why it has no partner"},
		}},
		{Name: "orders", About: "the bands that were masked", Columns: SpectraKind.Table("orders").Columns},
		{Name: "notes", About: "what a reader of the comparison should know", Columns: []artifact.Column{
			{Name: "text", Type: artifact.Text, About: ""},
		}},
	},
}

// Comparison is the content of a comparison artifact. The docstrings of ComparisonKind hold.
type Comparison struct {
	From, To         float64
	Tolerance, Reach float64

	Axes     []ComparisonAxis
	Pairs    []ComparisonPair
	Unpaired []ComparisonPeak
	Masked   []ComparisonPeak
	Verdicts []Verdict
	// ModePairs and ModesAlone are empty where no identified modes were given.
	ModePairs  []ModePair
	ModesAlone []ModeAlone
	Orders     []OrderBand
	Notes      []string
}

// The verdicts on an observed peak.
const (
	VerdictStructure = "structure"
	VerdictOrder     = "rotor order"
	VerdictLoop      = "loop"
	VerdictAlias     = "alias"
	VerdictUnknown   = "unknown"
)

// Verdict says what an observed peak is taken for.
type Verdict struct {
	Axis               string
	Frequency, Density float64
	Verdict, Reason    string
}

// ModePair is a predicted mode and the identified one taken for the same.
type ModePair struct {
	Mode                                  int
	Predicted, Observed, ObservedError    float64
	Error, Agreement                      float64
	PredictedDamping                      float64
	ObservedDamping, ObservedDampingError float64
	DampingRatio                          float64
	NearLoop                              bool
	Confidence                            float64
}

// ModeAlone is a mode without a partner.
type ModeAlone struct {
	Side               string
	Mode               int
	Frequency, Damping float64
	Direction          []float64
	Strength           float64
	Reason             string
}

// ComparisonAxis is one axis with its two curves.
type ComparisonAxis struct {
	Axis                           string
	Scale, Residual, Assurance     float64
	Bins                           int
	Frequency, Predicted, Observed []float64
}

// ComparisonPair is a predicted peak and the observed one taken for the same.
type ComparisonPair struct {
	Axis                                  string
	Predicted, Observed, ObservedError    float64
	Error, Confidence                     float64
	PredictedDensity, ObservedDensity     float64
	PredictedDamping                      float64
	ObservedDamping, ObservedDampingError float64
	DampingRatio                          float64
	NearLoop                              bool
	Modes                                 []int
}

// The sides of a comparison.
const (
	Predicted = "predicted"
	Observed  = "observed"
)

// ComparisonPeak is a peak that stands alone.
type ComparisonPeak struct {
	Side, Axis                  string
	Frequency, Density, Damping float64
	Modes                       []int
	Reason                      string
}

// EncodeComparison makes the artifact.
func EncodeComparison(c *Comparison) *artifact.Artifact {
	a := artifact.New(ComparisonKind)
	a.Scalars = map[string]any{"from": c.From, "to": c.To, "tolerance": c.Tolerance, "reach": c.Reach}
	a.Table("axes").
		Set("axis", list(c.Axes, func(x ComparisonAxis) string { return x.Axis })).
		Set("scale", list(c.Axes, func(x ComparisonAxis) float64 { return x.Scale })).
		Set("residual", list(c.Axes, func(x ComparisonAxis) float64 { return x.Residual })).
		Set("assurance", list(c.Axes, func(x ComparisonAxis) float64 { return x.Assurance })).
		Set("bins", list(c.Axes, func(x ComparisonAxis) int64 { return int64(x.Bins) })).
		Set("frequency", list(c.Axes, func(x ComparisonAxis) []float64 { return x.Frequency })).
		Set("predicted", list(c.Axes, func(x ComparisonAxis) []float64 { return x.Predicted })).
		Set("observed", list(c.Axes, func(x ComparisonAxis) []float64 { return x.Observed }))
	a.Table("pairs").
		Set("axis", list(c.Pairs, func(x ComparisonPair) string { return x.Axis })).
		Set("predicted", list(c.Pairs, func(x ComparisonPair) float64 { return x.Predicted })).
		Set("observed", list(c.Pairs, func(x ComparisonPair) float64 { return x.Observed })).
		Set("observed_error", list(c.Pairs, func(x ComparisonPair) float64 { return x.ObservedError })).
		Set("error", list(c.Pairs, func(x ComparisonPair) float64 { return x.Error })).
		Set("confidence", list(c.Pairs, func(x ComparisonPair) float64 { return x.Confidence })).
		Set("predicted_density", list(c.Pairs, func(x ComparisonPair) float64 { return x.PredictedDensity })).
		Set("observed_density", list(c.Pairs, func(x ComparisonPair) float64 { return x.ObservedDensity })).
		Set("predicted_damping", list(c.Pairs, func(x ComparisonPair) float64 { return x.PredictedDamping })).
		Set("observed_damping", list(c.Pairs, func(x ComparisonPair) float64 { return x.ObservedDamping })).
		Set("observed_damping_error", list(c.Pairs, func(x ComparisonPair) float64 { return x.ObservedDampingError })).
		Set("damping_ratio", list(c.Pairs, func(x ComparisonPair) float64 { return x.DampingRatio })).
		Set("near_loop", list(c.Pairs, func(x ComparisonPair) bool { return x.NearLoop })).
		Set("modes", list(c.Pairs, func(x ComparisonPair) []int64 { return ints(x.Modes) }))
	setPeaks(a.Table("unpaired"), c.Unpaired)
	setPeaks(a.Table("masked"), c.Masked)
	setVerdicts(a, c)
	setOrders(a.Table("orders"), c.Orders)
	a.Table("notes").Set("text", append([]string{}, c.Notes...))
	return a
}

// DecodeComparison reads the artifact; the error names what does not fit together.
func DecodeComparison(a *artifact.Artifact) (*Comparison, error) {
	if a.Kind.Name != ComparisonKind.Name {
		return nil, fmt.Errorf("this is a %s artifact, not %s", a.Kind.Name, ComparisonKind.Name)
	}
	c := &Comparison{From: a.Float("from"), To: a.Float("to"), Tolerance: a.Float("tolerance"), Reach: a.Float("reach")}
	t := a.Table("axes")
	for i := range t.Rows() {
		x := ComparisonAxis{
			Axis: t.Texts("axis")[i], Scale: t.Floats("scale")[i], Residual: t.Floats("residual")[i], Assurance: t.Floats("assurance")[i], Bins: int(t.Ints("bins")[i]),
			Frequency: t.FloatLists("frequency")[i], Predicted: t.FloatLists("predicted")[i], Observed: t.FloatLists("observed")[i],
		}
		if len(x.Predicted) != len(x.Frequency) || len(x.Observed) != len(x.Frequency) {
			return nil, malformed("comparison", "the curves of axis %s differ in length", x.Axis)
		}
		c.Axes = append(c.Axes, x)
	}
	t = a.Table("pairs")
	for i := range t.Rows() {
		c.Pairs = append(c.Pairs, ComparisonPair{
			Axis: t.Texts("axis")[i], Predicted: t.Floats("predicted")[i], Observed: t.Floats("observed")[i],
			ObservedError: t.Floats("observed_error")[i], Error: t.Floats("error")[i], Confidence: t.Floats("confidence")[i],
			PredictedDensity: t.Floats("predicted_density")[i], ObservedDensity: t.Floats("observed_density")[i],
			PredictedDamping: t.Floats("predicted_damping")[i], ObservedDamping: t.Floats("observed_damping")[i],
			ObservedDampingError: t.Floats("observed_damping_error")[i],
			DampingRatio:         t.Floats("damping_ratio")[i], NearLoop: t.Truths("near_loop")[i], Modes: narrow(t.IntLists("modes")[i]),
		})
	}
	c.Unpaired = peaks(a.Table("unpaired"))
	c.Masked = peaks(a.Table("masked"))
	decodeVerdicts(a, c)
	c.Orders = orders(a.Table("orders"))
	c.Notes = a.Table("notes").Texts("text")
	return c, nil
}

func setPeaks(t *artifact.Table, rows []ComparisonPeak) {
	t.Set("side", list(rows, func(x ComparisonPeak) string { return x.Side })).
		Set("axis", list(rows, func(x ComparisonPeak) string { return x.Axis })).
		Set("frequency", list(rows, func(x ComparisonPeak) float64 { return x.Frequency })).
		Set("density", list(rows, func(x ComparisonPeak) float64 { return x.Density })).
		Set("damping", list(rows, func(x ComparisonPeak) float64 { return x.Damping })).
		Set("modes", list(rows, func(x ComparisonPeak) []int64 { return ints(x.Modes) })).
		Set("reason", list(rows, func(x ComparisonPeak) string { return x.Reason }))
}

func peaks(t *artifact.Table) []ComparisonPeak {
	var out []ComparisonPeak
	for i := range t.Rows() {
		out = append(out, ComparisonPeak{
			Side: t.Texts("side")[i], Axis: t.Texts("axis")[i], Frequency: t.Floats("frequency")[i],
			Density: t.Floats("density")[i], Damping: t.Floats("damping")[i], Modes: narrow(t.IntLists("modes")[i]),
			Reason: t.Texts("reason")[i],
		})
	}
	return out
}

func narrow(in []int64) []int { return list(in, func(v int64) int { return int(v) }) }
