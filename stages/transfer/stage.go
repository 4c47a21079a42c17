// Package transfer is the stage that makes transfer functions of a bench recording with a force channel.
//
// The samples come from package gather; strikes are found and averaged, or a steady force is averaged as it is (measure.go); what was
// found is told (outcome.go).
package transfer

import (
	"context"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// Stage is the stage "transfer".
type Stage struct{}

var _ stage.Stage = Stage{}

// The methods.
const (
	auto    = "auto"
	strikes = "strikes"
	steady  = "steady"
)

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	zero, one := 0.0, 1.0
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	duration := stage.Type{Kind: stage.Amount, Dimension: "time", Unit: "s"}
	force := stage.Type{Kind: stage.Amount, Dimension: "force", Unit: "N"}
	return stage.Description{
		Name:  "transfer",
		About: "transfer functions of a bench recording with a force channel",
		Doc: `Reads a bench recording of a hammer, or of another force, and gives the transfer
functions H1 and H2 from the force to every response, with their coherence and
peaks. Responses are accelerations, or angular rates of the gyro itself.

Strikes are found in the force. One that bounces, is too long, overloads the sensor,
follows too soon or has no room is left out and told. The force is silenced after
its pulse, and both channels decay to a hundredth at the end of the segment; what
that adds to the damping is taken off again.

A force without strikes, such as that of a shaker, is averaged in overlapping Hann
segments. Lines then have a coherence; the bins between them do not.`,
		Arguments: append(gather.BenchArguments(), []stage.Argument{
			{Name: "method", About: "strikes, steady, or auto, which takes strikes where the force has them", Type: stage.Type{Kind: stage.Text}, Default: auto,
				Example: `"auto"`, Choices: []string{auto, strikes, steady}},
			{Name: "segment", About: "time that is transformed after each strike, or averaged; left out, the time between strikes, 2 s at most", Type: duration,
				Example: `"1 s"`, Above: &zero},
			{Name: "decay", About: "time constant of the exponential window of strikes, 0 for none; left out, a hundredth remains at the end", Type: duration,
				Example: `"0.2 s"`, Min: &zero},
			{Name: "level", About: "share of the greatest force above which a pulse is a strike", Type: stage.Type{Kind: stage.Number}, Default: 0.2, Example: "0.2", Above: &zero, Max: &one},
			{Name: "overload", About: "force at which the sensor is at its limit; left out, none", Type: force, Example: `"220 N"`, Above: &zero},
			{Name: "from", About: "lowest frequency of a listed peak; left out, five bins", Type: frequency, Example: `"20 Hz"`, Min: &zero},
			{Name: "to", About: "highest frequency of a listed peak; left out, where the force fades", Type: frequency, Example: `"800 Hz"`, Above: &zero},
			{Name: "prominence", About: "how far a peak stands above the valleys beside it, in dB, to be listed", Type: stage.Type{Kind: stage.Number}, Default: 6.0, Example: "6", Above: &zero},
		}...),
		Outputs: []stage.Output{{Name: "transfer", Kind: "transfer", About: "transfer functions, coherence, strikes and peaks"}},
		Figures: []stage.Figure{
			{Name: "averages", About: "strikes or segments averaged", Type: stage.Type{Kind: stage.Whole}},
			{Name: "left_out", About: "strikes left out", Type: stage.Type{Kind: stage.Whole}},
			{Name: "excited_to", About: "frequency up to which the force lies within 20 dB of its greatest density", Type: frequency},
			{Name: "coherence", About: "least coherence at a listed peak, 0 to 1; not a number without peaks", Type: stage.Type{Kind: stage.Number}},
			{Name: "peaks", About: "peaks as objects with axis, frequency, damping and coherence", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Any}}},
		},
	}
}

// settings are the arguments.
type settings struct {
	gather.Settings
	method                   string
	segment                  float64
	decay                    float64
	decayGiven               bool
	level, overload          float64
	from, to, prominenceInDB float64
}

func read(a stage.Arguments) (settings, error) {
	s := settings{
		method: a.Text("method"), segment: a.SI("segment"), decay: a.SI("decay"), decayGiven: a.Has("decay"), level: a.Number("level"),
		overload: a.SI("overload"), from: a.SI("from"), to: a.SI("to"), prominenceInDB: a.Number("prominence"),
	}
	var err error
	if s.Settings, err = gather.Read(a, "transfer"); err != nil {
		return s, err
	}
	s.Force = true
	if s.to > 0 && !(s.to > s.from) {
		return s, fault.New(fault.Input, "the band of the peaks ends at %g Hz, where it has not begun", s.to).In("transfer", "").Of("to").
			Do("make it higher than from, which is %g Hz", s.from)
	}
	return s, nil
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	set, err := read(call.Arguments)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("read", -1)
	r, err := gather.Load(ctx, call, set.Settings)
	if err != nil {
		return nil, err
	}
	axes, timing, err := r.Window()
	if err != nil {
		return nil, gather.Explain(err, set.File)
	}
	call.Report.Progress("transfer functions", -1)
	found, err := measure(r, axes, timing, set)
	if err != nil {
		return nil, gather.Explain(err, set.File)
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["transfer"], kinds.EncodeTransfer(found)); err != nil {
		return nil, err
	}
	return outcome(found, r.Notes(), r.Warnings("transfer", axes, timing), set), nil
}
