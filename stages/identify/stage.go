// Package identify is the stage that finds modes in a recording without knowing the force.
//
// The samples come from package gather; rotor orders are taken out where speeds are recorded, or followed and sure (orders.go); the modes come
// from core/signal/identify; what was found is told in outcome.go.
package identify

import (
	"context"
	"math"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/identify"
	"hushframe/core/signal/recording"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// Stage is the stage "identify".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	zero, most := 0.0, 0.5
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	duration := stage.Type{Kind: stage.Amount, Dimension: "time", Unit: "s"}
	number, whole := stage.Type{Kind: stage.Number}, stage.Type{Kind: stage.Whole}
	return stage.Description{
		Name:  "identify",
		About: "find modes in a recording without knowing the force",
		Doc: `Reads a recording as record does, takes the rotor orders out where speeds are
recorded, and finds the modes behind what is left: frequency, damping and the
direction that the gyro sees, each with its standard error.

Models of rising order are fitted to the covariances of all axes together
(covariance-driven stochastic subspace identification); poles that stay as the order
rises are clustered. Then a model of high order is fitted to all cross spectra at
greatest likelihood, and poles that they do not need are taken out. A pole is a mode
if the spectra need it much, or need it and it stays over two fifths of the models; if
its frequency is sure to 1 %, its damping to 30 % and its direction to 15 deg, and
to half as much again when larger models may disagree. The errors told allow for both.
Poles where a rotor order is or was, and lines that are steady in amplitude, are
told apart from structure. Speeds that are followed in the signal (find_rotors) are
sharpened by the phase of their own orders first; where that fails, orders are only told
apart.

The frame is taken to be driven by broadband force. In flight, the loop of the
control changes what is seen near and below its bandwidth.`,
		Arguments: append(gather.Arguments(), []stage.Argument{
			{Name: "from", About: "lowest frequency searched; left out, 80 Hz, or 1/25 of a lower sample rate", Type: frequency, Example: `"80 Hz"`, Above: &zero},
			{Name: "to", About: "highest frequency searched; left out, a quarter of the sample rate", Type: frequency, Example: `"500 Hz"`, Above: &zero},
			{Name: "orders", About: "multiples of the rotor speeds that are taken out, or told apart", Type: stage.Type{Kind: stage.List, Element: &number},
				Default: []any{1.0, 2.0, 3.0, 4.0, 5.0, 6.0}, Example: "[1, 2, 3]"},
			{Name: "remove", About: "take the orders out; otherwise poles in their bands are told apart", Type: stage.Type{Kind: stage.Truth}, Default: true, Example: "true"},
			{Name: "span", About: "time over which amplitude and phase of an order count as steady", Type: duration, Default: stage.Quantity{SI: 2, Dimension: "time"},
				Example: `"2 s"`, Above: &zero},
			{Name: "highest_damping", About: "damping ratio above which a pole is no mode", Type: number, Default: 0.2, Example: "0.2", Above: &zero, Max: &most},
			{Name: "order", About: "highest order of a model; 0 takes twice what stands above chance, 20 to 120", Type: whole, Default: 0.0, Example: "0", Min: &zero},
			{Name: "loop_bandwidth", About: "frequency up to which the rate loop of the control is taken to act", Type: frequency,
				Default: hertz(80), Example: `"80 Hz"`, Above: &zero},
		}...),
		Outputs: []stage.Output{{Name: "identified", Kind: "identified", About: "modes, stabilisation diagram, singular values, rotor speeds, where orders meet modes, and spectra with and without them"}},
		Figures: []stage.Figure{
			{Name: "modes", About: "number of modes", Type: whole},
			{Name: "doubtful", About: "number of clusters of poles that are too uncertain, or not to be told from a line", Type: whole},
			{Name: "lines", About: "number of clusters that are lines of a machine", Type: whole},
			{Name: "order_share", About: "largest share of the mean square of an axis that rotor orders hold, 0 to 1; not a number where none was taken out", Type: number},
			{Name: "crossed", About: "number of modes that a rotor order meets within the time used", Type: whole},
			{Name: "list", About: "modes as objects with frequency, frequency_error, damping, damping_error, direction and direction_error (rad)",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Any}}},
		},
	}
}

func hertz(f float64) stage.Quantity { return stage.Quantity{SI: f, Dimension: "frequency"} }

// settings are the arguments.
type settings struct {
	gather.Settings
	from, to, span float64
	orders         []float64
	remove         bool
	damping        float64
	order          int
	loop           float64
}

func read(a stage.Arguments) (settings, error) {
	s := settings{
		from: a.SI("from"), to: a.SI("to"), span: a.SI("span"), remove: a.Truth("remove"), damping: a.Number("highest_damping"),
		order: a.Whole("order"), loop: a.SI("loop_bandwidth"),
	}
	var err error
	if s.Settings, err = gather.Read(a, "identify"); err != nil {
		return s, err
	}
	for i, v := range a.List("orders") {
		n := v.(float64)
		if !(n > 0) || math.IsInf(n, 0) {
			return s, fault.New(fault.Input, "order %g at place %d is not above zero", n, i+1).In("identify", "").Of("orders").Do("list multiples such as [1, 2, 3]")
		}
		s.orders = append(s.orders, n)
	}
	if s.order == 1 {
		return s, fault.New(fault.Input, "a model of order 1 has no mode").In("identify", "").Of("order").Do("give 2 for each mode expected, and as many again")
	}
	return s, nil
}

// band fills in the ends of the band for a sample rate.
func (s *settings) band(rate float64) error {
	if s.from == 0 {
		s.from = min(80, rate/25)
	}
	if s.to == 0 {
		s.to = rate / 4
	}
	if s.to >= 0.45*rate {
		return fault.New(fault.Input, "the band ends at %g Hz, too near half the sample rate of %.5g Hz", s.to, rate).In("identify", "").Of("to").
			Do("end it below %.4g Hz", 0.45*rate)
	}
	if !(s.to > s.from) {
		return fault.New(fault.Input, "the band ends at %g Hz, where it has not begun", s.to).In("identify", "").Of("to").Do("make it higher than from, which is %g Hz", s.from)
	}
	return nil
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
	if err := set.band(timing.Rate); err != nil {
		return nil, err
	}
	call.Report.Progress("rotor orders", -1)
	sharpen := set.orders
	if !set.remove {
		sharpen = nil
	}
	r.FindRotors(axes, timing, sharpen, set.span, call.Threads)
	lines, err := takeOut(r, axes, timing, set, call.Threads)
	if err != nil {
		return nil, gather.Explain(refuse(err), set.File)
	}
	if err := ctx.Err(); err != nil {
		return nil, fault.From(err)
	}
	call.Report.Progress("modes", -1)
	found, err := identify.Identify(lines.record, identify.Settings{
		From: set.from, To: set.to, Order: set.order, MaxDamping: set.damping, Bands: lines.bands, Left: lines.left, Threads: call.Threads,
	})
	if err != nil {
		return nil, gather.Explain(refuse(err), set.File)
	}
	content, err := collect(r, axes, timing, set, lines, found)
	if err != nil {
		return nil, gather.Explain(refuse(err), set.File)
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["identified"], kinds.EncodeIdentified(content)); err != nil {
		return nil, err
	}
	notes := r.Notes()
	if r.Sharp != nil && len(lines.removed) > 0 {
		notes = append(notes, together(lines.turning, set.span)...)
	}
	return outcome(content, notes, r.Warnings("identify", axes, timing), set), nil
}

func refuse(err error) error {
	return &recording.Error{Text: err.Error(), Remedy: "give a longer recording or window, one with fewer gaps, or only columns that measure something"}
}

// collect puts the findings into the form of the artifact.
func collect(r *gather.Recording, axes gather.Series, timing recording.Timing, set settings, lines *orders, found *identify.Result) (*kinds.Identified, error) {
	x := &kinds.Identified{
		From: set.from, To: set.to, Start: timing.Start, End: timing.End, Rate: timing.Rate, Samples: timing.Samples, Decimation: found.Decimation,
		Rows: found.Rows, Order: found.Order, Span: lines.span, Step: found.Spectra.Step, Segments: found.Spectra.Segments,
		Removed: lines.removed, Orders: lines.seen,
	}
	for i, c := range r.Plan.Axes {
		x.Channels = append(x.Channels, kinds.IdentifiedChannel{Axis: c.Name, Quantity: c.Of, Column: c.Shown(), MeanSquare: variance(gather.Join(axes.Values[i], timing.Runs))})
	}
	for _, m := range found.Modes {
		mode := kinds.IdentifiedMode{
			Kind: string(m.Kind), Reason: m.Reason, Frequency: m.Frequency, FrequencyError: m.FrequencyError, Damping: m.Damping, DampingError: m.DampingError,
			Direction: m.Direction, DirectionError: m.DirectionError, Collinearity: m.Collinearity, Models: m.Share, FirstOrder: m.First, Kurtosis: m.Kurtosis, Worth: m.Worth,
			PeakFrequency: m.PeakFrequency, PeakDamping: m.PeakDamping,
		}
		for _, v := range m.Shape {
			mode.ShapeReal, mode.ShapeImaginary = append(mode.ShapeReal, real(v)), append(mode.ShapeImaginary, imag(v))
		}
		x.Modes = append(x.Modes, mode)
	}
	for _, e := range found.Diagram.Entries {
		x.Diagram = append(x.Diagram, kinds.IdentifiedPole{Order: e.Order, Frequency: e.Frequency, Damping: e.Damping, Stable: e.Stable, Mode: e.Mode})
	}
	for w := range x.Channels {
		density := make([]float64, len(found.Spectra.Values))
		for k, v := range found.Spectra.Values {
			density[k] = v[w]
		}
		x.Singular = append(x.Singular, density)
	}
	x.Tracks = tracks(r, lines, axes.Time)
	x.Crossings = crossings(x, lines.turning, set.orders)
	var err error
	x.Densities, err = densities(x, lines, found.Spectra.Settings)
	return x, err
}

func variance(x []float64) float64 {
	mean, square := 0.0, 0.0
	for _, v := range x {
		mean += v / float64(len(x))
	}
	for _, v := range x {
		square += (v - mean) * (v - mean) / float64(len(x))
	}
	return square
}
