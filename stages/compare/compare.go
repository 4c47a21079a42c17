// Package compare is the stage that sets predicted peaks against observed ones.
//
// Pairing is per axis. Observed peaks within the bands of rotor orders are masked first: they may be the rotors' own. A
// predicted peak there still takes part, since its observed partner may lie beside the band; only if it stays alone does
// it count as masked.
package compare

import (
	"context"

	"hushframe/core/match"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "compare".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	zero, one := 0.0, 1.0
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	number, whole := stage.Type{Kind: stage.Number}, stage.Type{Kind: stage.Whole}
	d := stage.Description{
		Name:  "compare",
		About: "pair predicted with observed peaks, and fit one level per axis",
		Doc: `Observed peaks within the bands of rotor orders are masked; the others are paired
with predicted ones, axis by axis, so that the total cost is least. What stays
alone on either side is listed with a reason.

The cost of a pair is its relative frequency error over the tolerance, squared. Its
confidence, 0 to 1, is the weight of exp(-cost/2) among all pairs that share one
of its peaks and the case that they do not belong together (exp(-9/2)).

The level of the prediction rests on an assumed source, so one factor per axis is
fitted to it, in the logarithm of the density over the band without the masked
parts. The factor moves no peak.

Every observed peak in the band gets a verdict: structure, rotor order, loop, alias
or unknown, with the reason. Modes identified in flight, where given, decide first,
since rotor orders were taken out before they were found. With the modes of the
frame they are paired by frequency, gyro direction, damping and gyro strength.`,
		Arguments: []stage.Argument{
			{Name: "predicted", About: "response from sweep", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"response"}}, Required: true, Example: "stage.flight.response"},
			{Name: "observed", About: "spectra from record", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"spectra"}}, Required: true, Example: "stage.hover.spectra"},
			{Name: "identified", About: "modes found in flight, from identify; with modes, they are paired with those of the frame",
				Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"identified"}}, Example: "stage.inflight.identified"},
			{Name: "modes", About: "modes of the frame, from solve", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"modes"}}, Example: "stage.modes.modes"},
			{Name: "band", About: "lowest and highest frequency compared; left out, 80 Hz to 0.4 of the sample rate",
				Type: stage.Type{Kind: stage.List, Element: &frequency}, Example: `["80 Hz", "800 Hz"]`},
			{Name: "orders", About: "rotor orders to mask besides blade passing", Type: stage.Type{Kind: stage.List, Element: &number},
				Default: []any{1.0, 2.0}, Example: "[1, 2]"},
			{Name: "blades", About: "blades of each rotor; 0 takes what the recording or the airframe says", Type: whole, Default: 0.0, Example: "3", Min: &zero},
			{Name: "tolerance", About: "relative frequency error of a prediction taken as one standard deviation", Type: number,
				Default: match.DefaultTolerance, Example: "0.05", Above: &zero, Max: &one},
			{Name: "reach", About: "relative frequency difference above which nothing is paired", Type: number,
				Default: match.DefaultReach, Example: "0.2", Above: &zero, Max: &one},
			{Name: "loop_bandwidth", About: "frequency up to which the rate loop of the control is taken to act", Type: frequency,
				Default: hertz(80), Example: `"80 Hz"`, Above: &zero},
		},
		Outputs: []stage.Output{{Name: "comparison", Kind: "comparison", About: "pairs, peaks that stand alone, and the two curves of each axis"}},
		Figures: []stage.Figure{
			{Name: "paired", About: "number of pairs", Type: whole},
			{Name: "largest_error", About: "largest relative frequency error of a pair, without sign; not a number without pairs", Type: number},
			{Name: "median_error", About: "median relative frequency error of the pairs, without sign", Type: number},
			{Name: "bias", About: "median relative frequency error of the pairs; positive where the prediction is too high", Type: number},
			{Name: "least_confidence", About: "lowest confidence of a pair, 0 to 1", Type: number},
			{Name: "unpaired_predicted", About: "predicted peaks without a partner", Type: whole},
			{Name: "unpaired_observed", About: "observed peaks without a partner", Type: whole},
			{Name: "masked_predicted", About: "predicted peaks without a partner where a rotor order may be", Type: whole},
			{Name: "masked_observed", About: "observed peaks where a rotor order may be", Type: whole},
			{Name: "modes_paired", About: "number of pairs of modes; 0 where no identified modes were given", Type: whole},
			{Name: "modes_largest_error", About: "largest relative frequency error of a pair of modes, without sign; not a number without pairs", Type: number},
			{Name: "modes_median_error", About: "median of the same", Type: number},
			{Name: "modes_unpaired", About: "identified modes without a partner", Type: whole},
			{Name: "unknown", About: "observed peaks with the verdict unknown", Type: whole},
			{Name: "pairs", About: "pairs as objects with axis, predicted, observed, error, confidence and modes", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Any}}},
		},
	}
	for _, axis := range kinds.AxisNames {
		d.Figures = append(d.Figures,
			stage.Figure{Name: "scale_" + axis, About: "factor on the predicted density of " + axis + "; not a number if the axis was not recorded", Type: number},
			stage.Figure{Name: "residual_" + axis, About: "root mean square of what is left of the ratio after it, in dB", Type: number},
			stage.Figure{Name: "assurance_" + axis, About: "likeness of the two amplitude spectra whatever their levels, 0 to 1", Type: number},
		)
	}
	return d
}

func hertz(f float64) stage.Quantity { return stage.Quantity{SI: f, Dimension: "frequency"} }

// settings are the arguments.
type settings struct {
	band             []float64 // empty or two
	orders           []float64
	blades           int
	tolerance, reach float64
	loop             float64
}

func read(a stage.Arguments) (settings, error) {
	s := settings{
		band: a.SIs("band"), blades: a.Whole("blades"), tolerance: a.Number("tolerance"), reach: a.Number("reach"), loop: a.SI("loop_bandwidth"),
	}
	for _, v := range a.List("orders") {
		s.orders = append(s.orders, v.(float64))
	}
	switch {
	case a.Has("band") && len(s.band) != 2:
		return s, fault.New(fault.Input, "the band has %d frequencies", len(s.band)).In("compare", "").Of("band").
			Do(`give the lowest and the highest, such as ["80 Hz", "800 Hz"]`)
	case len(s.band) == 2 && !(s.band[1] > s.band[0] && s.band[0] >= 0):
		return s, fault.New(fault.Input, "the band runs from %g Hz to %g Hz", s.band[0], s.band[1]).In("compare", "").Of("band").
			Do("make its second frequency higher than the first")
	}
	return s, nil
}

// Run implements stage.Stage.
func (Stage) Run(_ context.Context, call *stage.Call) (*stage.Outcome, error) {
	set, err := read(call.Arguments)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("read", -1)
	predicted, err := input(call, "predicted", kinds.DecodeResponse)
	if err != nil {
		return nil, err
	}
	observed, err := input(call, "observed", kinds.DecodeSensor)
	if err != nil {
		return nil, err
	}
	identified, err := input(call, "identified", kinds.DecodeIdentified)
	if err != nil {
		return nil, err
	}
	modes, err := input(call, "modes", kinds.DecodeModes)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("pair", -1)
	c, err := compare(predicted, observed, modes, identified, set)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["comparison"], kinds.EncodeComparison(c)); err != nil {
		return nil, err
	}
	return outcome(c, observed), nil
}

// input reads an artifact; nil if the job gives none.
func input[T any](call *stage.Call, name string, decode func(*artifact.Artifact) (*T, error)) (*T, error) {
	given := call.Inputs[name]
	if len(given) == 0 {
		return nil, nil
	}
	a, err := artifact.Open(given[0].Folder, kinds.Registry())
	if err != nil {
		return nil, err
	}
	return decode(a)
}
