// Package filter is the stage that says what a chain of gyro filters buys and costs, or chooses a small one for a target.
//
// The chain is read in chain.go; what reaches it is taken from artifacts in noise.go; both meet in weigh.go; outcome.go tells the result.
package filter

import (
	"context"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "filter".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	zero := 0.0
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	number, whole := stage.Type{Kind: stage.Number}, stage.Type{Kind: stage.Whole}
	rate := stage.Type{Kind: stage.Amount, Dimension: "angular rate", Unit: "deg/s"}
	d := stage.Description{
		Name:  "filter",
		About: "say what a chain of gyro filters buys and costs, or choose one",
		Doc: `Weighs a chain of filters between gyro and control: what it leaves of the recorded
and the predicted gyro spectra, and by how much it is late at the bandwidth of the
control. Of each filter it says how much more noise would be left without it.

With residual instead of filters, the smallest sensible chain is chosen: notches
that follow rotor orders, fixed notches at the strongest other peaks, and one
low-pass with the highest cut-off that leaves no axis more than that. Each filter
more must save a fifth of the lag.

A notch that follows an order takes that order out wherever it goes; of what does
not move with the rotors it takes its mean over the flight. The two are told apart
with the modes found in flight (identified), which hold the spectra with and
without rotor orders. A recording says nothing of noise above half its sample rate
but what folds.`,
		Arguments: []stage.Argument{
			{Name: "observed", About: "spectra from record", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"spectra"}}, Required: true, Example: "stage.hover.spectra"},
			{Name: "predicted", About: "response from sweep", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"response"}}, Example: "stage.flight.response"},
			{Name: "identified", About: "from identify: rotor speeds over time, and what rotor orders hold of the spectra",
				Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"identified"}}, Example: "stage.inflight.identified"},
			{Name: "filters", About: "the chain, in order; left out, one is chosen for residual",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Object, Fields: []stage.Argument{
					{Name: "type", About: "what it is", Type: stage.Type{Kind: stage.Text}, Required: true, Example: `"low-pass"`,
						Choices: []string{kinds.FilterFirstOrder, kinds.FilterLowPass, kinds.FilterNotch, kinds.FilterRotorNotch}},
					{Name: "at", About: "cut-off or centre; of a rotor-notch its lowest centre, left out 60 Hz", Type: frequency, Example: `"120 Hz"`, Above: &zero},
					{Name: "q", About: "centre over width; left out, 0.707 of a low-pass, 4 of a notch, 5 of a rotor-notch", Type: number, Example: "4", Above: &zero},
					{Name: "count", About: "equal first-order filters in a row, together 3 dB down at the cut-off", Type: whole, Example: "2", Above: &zero},
					{Name: "order", About: "multiple of the rotor speeds that a rotor-notch follows, on every rotor; left out, 1", Type: number, Example: "1", Above: &zero},
				}}}, Example: `[{ type = "rotor-notch", order = 1 }, { type = "low-pass", at = "120 Hz" }]`},
			{Name: "residual", About: "root mean square that no axis may be left with; with filters it is only judged", Type: rate, Example: `"1.5 deg/s"`, Above: &zero},
			{Name: "follow_orders", About: "orders that a chosen chain may follow, the most worth first; left out, those that stand out, or 1 and 2",
				Type: stage.Type{Kind: stage.List, Element: &number}, Example: "[1, 2]"},
			{Name: "fixed_notches", About: "how many fixed notches a chosen chain may have", Type: whole, Default: 2.0, Example: "2", Min: &zero},
			{Name: "loop_rate", About: "rate at which the control runs the filters", Type: frequency, Default: hertz(8000), Example: `"8 kHz"`, Above: &zero},
			{Name: "control_bandwidth", About: "frequency at which delay and lag are weighed", Type: frequency, Default: hertz(40), Example: `"40 Hz"`, Above: &zero},
			{Name: "band", About: "lowest and highest frequency of the noise that counts; left out, twice the control's bandwidth to 0.45 of the sample rate of the recording",
				Type: stage.Type{Kind: stage.List, Element: &frequency}, Example: `["80 Hz", "900 Hz"]`},
		},
		Outputs: []stage.Output{{Name: "filtered", Kind: "filtered", About: "the chain, its response, and the spectra before and behind it"}},
		Figures: []stage.Figure{
			{Name: "filters", About: "number of filters of the chain", Type: whole},
			{Name: "lag", About: "phase by which the chain is late at the control's bandwidth", Type: stage.Type{Kind: stage.Amount, Dimension: "angle", Unit: "deg"}},
			{Name: "delay", About: "the same as phase delay", Type: stage.Type{Kind: stage.Amount, Dimension: "time", Unit: "ms"}},
			{Name: "group_delay", About: "group delay at the control's bandwidth", Type: stage.Type{Kind: stage.Amount, Dimension: "time", Unit: "ms"}},
			{Name: "gain", About: "magnitude at the control's bandwidth", Type: number},
			{Name: "largest_left", About: "largest root mean square left on an axis, of the recording", Type: rate},
			{Name: "met", About: "whether that is within residual; true where none was given", Type: stage.Type{Kind: stage.Truth}},
		},
	}
	for _, axis := range kinds.AxisNames {
		d.Figures = append(d.Figures,
			stage.Figure{Name: "left_" + axis, About: "root mean square left on " + axis + "; not a number if the axis was not recorded", Type: rate},
			stage.Figure{Name: "cut_" + axis, About: "by how many dB the recorded noise on " + axis + " is cut", Type: number},
			stage.Figure{Name: "cut_predicted_" + axis, About: "by how many dB the predicted noise on " + axis + " is cut; not a number without a prediction", Type: number},
		)
	}
	return d
}

func hertz(f float64) stage.Quantity { return stage.Quantity{SI: f, Dimension: "frequency"} }

// Run implements stage.Stage.
func (Stage) Run(_ context.Context, call *stage.Call) (*stage.Outcome, error) {
	set, err := read(call.Arguments)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("read", -1)
	observed, err := input(call, "observed", kinds.DecodeSensor)
	if err != nil {
		return nil, err
	}
	predicted, err := input(call, "predicted", kinds.DecodeResponse)
	if err != nil {
		return nil, err
	}
	identified, err := input(call, "identified", kinds.DecodeIdentified)
	if err != nil {
		return nil, err
	}
	s, err := gather(observed, predicted, identified, &set)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("weigh", -1)
	x, err := weigh(s, set)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["filtered"], kinds.EncodeFiltered(x)); err != nil {
		return nil, err
	}
	return outcome(x, s), nil
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

func refuse(argument, format string, args ...any) *fault.Error {
	return fault.New(fault.Input, format, args...).In("filter", "").Of(argument)
}
