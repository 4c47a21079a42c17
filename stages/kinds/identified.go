package kinds

import (
	"hushframe/core/pipeline/artifact"
)

// IdentifiedKind is what `identify` makes of a recording: modes found without knowing the force.
var IdentifiedKind = artifact.Kind{
	Name: "identified", Version: 1,
	About: "modes found in a recording without known force, with the stabilisation diagram, the singular values of the cross spectra, and the rotor orders that were taken out",
	Scalars: []artifact.Column{
		col("from", artifact.Float, "Hz", "lower end of the band searched"),
		col("to", artifact.Float, "Hz", "upper end of the band searched"),
		col("start", artifact.Float, "s", "first time used, on the time column"),
		col("end", artifact.Float, "s", "last time used, on the time column"),
		col("rate", artifact.Float, "Hz", "samples per second of the recording"),
		col("samples", artifact.Int, "", "samples per channel within those times"),
		col("decimation", artifact.Int, "", "samples of the recording for one analysed"),
		col("rows", artifact.Int, "", "block rows: lags of the covariances used, less one, halved"),
		col("order", artifact.Int, "", "highest order of a model"),
		col("span", artifact.Float, "s", "time over which an order that was taken out counts as steady; NaN if none was taken out"),
		col("step", artifact.Float, "Hz", "width of a bin of the singular values; bin k lies at k times this"),
		col("segments", artifact.Int, "", "segments averaged in them"),
	},
	Tables: []artifact.TableSpec{
		{Name: "channels", About: "channels analysed together, in the order of directions and shapes", Columns: columns(
			col("axis", artifact.Text, "", "roll, pitch, yaw (angular rate) or x, y, z (acceleration) in the airframe's axes"),
			col("quantity", artifact.Text, "", "angular rate or acceleration"),
			col("column", artifact.Text, "", "column of the recording, with its sign"),
			col("mean_square", artifact.Float, "SI^2", "about the mean, before orders were taken out"),
		)},
		{Name: "modes", About: "clusters of stable poles, by frequency", Columns: columns(
			col("kind", artifact.Text, "", "structure, line (of a machine) or doubtful"),
			col("reason", artifact.Text, "", "why it is no structure"),
			col("frequency", artifact.Float, "Hz", "natural frequency"),
			col("frequency_error", artifact.Float, "Hz", "standard error"),
			col("damping", artifact.Float, "1", "damping ratio"),
			col("damping_error", artifact.Float, "1", "standard error"),
			col("direction", artifact.FloatList, "1", "unit vector over the channels, the largest component positive"),
			col("direction_error", artifact.Float, "rad", "standard error of its angle"),
			col("collinearity", artifact.Float, "1", "share of the complex shape that the direction holds, 0.5 to 1"),
			col("shape_real", artifact.FloatList, "SI", "complex shape, of free scale"),
			col("shape_imaginary", artifact.FloatList, "SI", "complex shape, of free scale"),
			col("models", artifact.Float, "1", "share of the models that have it"),
			col("first_order", artifact.Int, "", "lowest order that has it"),
			col("kurtosis", artifact.Float, "1", "of the band about it; 3 for the response to noise, 1.5 for a steady line; NaN if not known"),
			col("worth", artifact.Float, "1", "by how much the log-likelihood of the spectra would sink without it, at least; 0 if they need it not, NaN if no model was fitted to them"),
			col("peak_frequency", artifact.Float, "Hz", "of the same mode by decomposition of the cross spectra; NaN if it shows none"),
			col("peak_damping", artifact.Float, "1", "damping ratio by the same; NaN if it shows none"),
		)},
		{Name: "diagram", About: "poles of models of rising order: the stabilisation diagram", Columns: columns(
			col("order", artifact.Int, "", "order of the model"),
			col("frequency", artifact.Float, "Hz", ""),
			col("damping", artifact.Float, "1", "damping ratio"),
			col("stable", artifact.Truth, "", "the order before has nearly the same pole"),
			col("mode", artifact.Int, "", "row of modes, -1 for none"),
		)},
		{Name: "singular", About: "singular values of the cross-spectral matrix, the largest first", Columns: columns(
			col("density", artifact.FloatList, "SI^2/Hz", "per bin, from 0 Hz"),
		)},
		{Name: "removed", About: "rotor orders that were taken out, by channel, rotor and order", Columns: columns(
			col("axis", artifact.Text, "", "channel"),
			col("rotor", artifact.Text, "", "name"),
			col("order", artifact.Float, "1", "multiple of the rotor's speed"),
			col("mean_square", artifact.Float, "SI^2", "of what was taken out"),
		)},
		{Name: "orders", About: "the bands in which rotor orders that are seen appear", Columns: SpectraKind.Table("orders").Columns},
		{Name: "densities", About: "spectra before and after rotor orders were taken out, in the order of channels; the same where none was", Columns: columns(
			col("axis", artifact.Text, "", "channel"),
			col("before", artifact.FloatList, "SI^2/Hz", "one-sided density per bin of width step, from 0 Hz"),
			col("after", artifact.FloatList, "SI^2/Hz", "the same without the orders"),
		)},
		{Name: "tracks", About: "rotor speeds over the time used; an order n lies at n times the speed over 2 pi", Columns: columns(
			col("rotor", artifact.Text, "", "name"),
			col("source", artifact.Text, "", "recorded, or followed in the signal"),
			col("time", artifact.FloatList, "s", "on the time column, rising"),
			col("speed", artifact.FloatList, "rad/s", "mean speed about that time; 0 where it stands or is not known"),
			col("speed_error", artifact.Float, "rad/s", "standard error of a speed that was followed and sharpened by the phase of its orders; NaN of others"),
		)},
		{Name: "crossings", About: "where an order of a rotor meets a mode within the time used, by mode, order and rotor", Columns: columns(
			col("mode", artifact.Int, "", "row of modes"),
			col("rotor", artifact.Text, "", "name"),
			col("order", artifact.Float, "1", "multiple of the rotor's speed"),
			col("folded", artifact.Truth, "", "the order lies above half the sample rate and meets the mode only in the recording, not in the frame"),
			col("speed", artifact.Float, "rad/s", "speed at which they meet"),
			col("share", artifact.Float, "1", "share of the time the order spends within the half-power width of the mode"),
		)},
	},
}

// Identified is the content of an identified artifact. The descriptions of IdentifiedKind hold.
type Identified struct {
	From, To, Start, End      float64
	Rate                      float64
	Samples, Decimation, Rows int
	Order                     int
	Span, Step                float64
	Segments                  int

	Channels []IdentifiedChannel
	Modes    []IdentifiedMode
	Diagram  []IdentifiedPole
	Singular [][]float64
	Removed  []RemovedOrder
	Orders   []OrderBand

	Densities []IdentifiedDensity
	Tracks    []RotorTrack
	Crossings []OrderCrossing
}

// IdentifiedDensity is the density of one channel with and without the rotor orders.
type IdentifiedDensity struct {
	Axis          string
	Before, After []float64
}

// The sources of a track.
const (
	TrackRecorded = "recorded"
	TrackFollowed = "followed in the signal"
)

// RotorTrack is the speed of a rotor over time.
type RotorTrack struct {
	Rotor, Source string
	Time, Speed   []float64
	SpeedError    float64
}

// OrderCrossing is a meeting of an order with a mode.
type OrderCrossing struct {
	Mode         int
	Rotor        string
	Order        float64
	Folded       bool
	Speed, Share float64
}

// IdentifiedChannel is one channel.
type IdentifiedChannel struct {
	Axis, Quantity, Column string
	MeanSquare             float64
}

// The kinds of an identified mode.
const (
	ModeStructure = "structure"
	ModeLine      = "line"
	ModeDoubtful  = "doubtful"
)

// IdentifiedMode is one cluster of stable poles.
type IdentifiedMode struct {
	Kind, Reason               string
	Frequency, FrequencyError  float64
	Damping, DampingError      float64
	Direction                  []float64
	DirectionError             float64
	Collinearity               float64
	ShapeReal, ShapeImaginary  []float64
	Models                     float64
	FirstOrder                 int
	Kurtosis, Worth            float64
	PeakFrequency, PeakDamping float64
}

// IdentifiedPole is one pole of one model.
type IdentifiedPole struct {
	Order              int
	Frequency, Damping float64
	Stable             bool
	Mode               int
}

// RemovedOrder is an order of a rotor that was taken out of a channel.
type RemovedOrder struct {
	Axis, Rotor       string
	Order, MeanSquare float64
}

// EncodeIdentified makes the artifact.
func EncodeIdentified(x *Identified) *artifact.Artifact {
	a := artifact.New(IdentifiedKind)
	a.Scalars = map[string]any{
		"from": x.From, "to": x.To, "start": x.Start, "end": x.End, "rate": x.Rate, "samples": int64(x.Samples), "decimation": int64(x.Decimation),
		"rows": int64(x.Rows), "order": int64(x.Order), "span": x.Span, "step": x.Step, "segments": int64(x.Segments),
	}
	a.Table("channels").
		Set("axis", list(x.Channels, func(c IdentifiedChannel) string { return c.Axis })).
		Set("quantity", list(x.Channels, func(c IdentifiedChannel) string { return c.Quantity })).
		Set("column", list(x.Channels, func(c IdentifiedChannel) string { return c.Column })).
		Set("mean_square", list(x.Channels, func(c IdentifiedChannel) float64 { return c.MeanSquare }))
	float := func(of func(IdentifiedMode) float64) []float64 { return list(x.Modes, of) }
	a.Table("modes").
		Set("kind", list(x.Modes, func(m IdentifiedMode) string { return m.Kind })).
		Set("reason", list(x.Modes, func(m IdentifiedMode) string { return m.Reason })).
		Set("frequency", float(func(m IdentifiedMode) float64 { return m.Frequency })).
		Set("frequency_error", float(func(m IdentifiedMode) float64 { return m.FrequencyError })).
		Set("damping", float(func(m IdentifiedMode) float64 { return m.Damping })).
		Set("damping_error", float(func(m IdentifiedMode) float64 { return m.DampingError })).
		Set("direction", list(x.Modes, func(m IdentifiedMode) []float64 { return m.Direction })).
		Set("direction_error", float(func(m IdentifiedMode) float64 { return m.DirectionError })).
		Set("collinearity", float(func(m IdentifiedMode) float64 { return m.Collinearity })).
		Set("shape_real", list(x.Modes, func(m IdentifiedMode) []float64 { return m.ShapeReal })).
		Set("shape_imaginary", list(x.Modes, func(m IdentifiedMode) []float64 { return m.ShapeImaginary })).
		Set("models", float(func(m IdentifiedMode) float64 { return m.Models })).
		Set("first_order", list(x.Modes, func(m IdentifiedMode) int64 { return int64(m.FirstOrder) })).
		Set("kurtosis", float(func(m IdentifiedMode) float64 { return m.Kurtosis })).
		Set("worth", float(func(m IdentifiedMode) float64 { return m.Worth })).
		Set("peak_frequency", float(func(m IdentifiedMode) float64 { return m.PeakFrequency })).
		Set("peak_damping", float(func(m IdentifiedMode) float64 { return m.PeakDamping }))
	a.Table("diagram").
		Set("order", list(x.Diagram, func(p IdentifiedPole) int64 { return int64(p.Order) })).
		Set("frequency", list(x.Diagram, func(p IdentifiedPole) float64 { return p.Frequency })).
		Set("damping", list(x.Diagram, func(p IdentifiedPole) float64 { return p.Damping })).
		Set("stable", list(x.Diagram, func(p IdentifiedPole) bool { return p.Stable })).
		Set("mode", list(x.Diagram, func(p IdentifiedPole) int64 { return int64(p.Mode) }))
	a.Table("singular").Set("density", x.Singular)
	a.Table("removed").
		Set("axis", list(x.Removed, func(r RemovedOrder) string { return r.Axis })).
		Set("rotor", list(x.Removed, func(r RemovedOrder) string { return r.Rotor })).
		Set("order", list(x.Removed, func(r RemovedOrder) float64 { return r.Order })).
		Set("mean_square", list(x.Removed, func(r RemovedOrder) float64 { return r.MeanSquare }))
	setOrders(a.Table("orders"), x.Orders)
	setTracks(a, x)
	return a
}

// DecodeIdentified reads the artifact; the fault names what does not fit together.
func DecodeIdentified(a *artifact.Artifact) (*Identified, error) {
	if a.Kind.Name != IdentifiedKind.Name {
		return nil, malformed("identified", "this is a %s artifact", a.Kind.Name)
	}
	x := &Identified{
		From: a.Float("from"), To: a.Float("to"), Start: a.Float("start"), End: a.Float("end"), Rate: a.Float("rate"), Samples: int(a.Int("samples")),
		Decimation: int(a.Int("decimation")), Rows: int(a.Int("rows")), Order: int(a.Int("order")), Span: a.Float("span"), Step: a.Float("step"),
		Segments: int(a.Int("segments")), Singular: a.Table("singular").FloatLists("density"),
	}
	t := a.Table("channels")
	for i := range t.Rows() {
		x.Channels = append(x.Channels, IdentifiedChannel{t.Texts("axis")[i], t.Texts("quantity")[i], t.Texts("column")[i], t.Floats("mean_square")[i]})
	}
	l := len(x.Channels)
	for i, s := range x.Singular {
		if len(s) != len(x.Singular[0]) || len(x.Singular) != l {
			return nil, malformed("identified", "singular value %d of %d channels has %d bins", i, l, len(s))
		}
	}
	t = a.Table("modes")
	for i := range t.Rows() {
		m := IdentifiedMode{
			Kind: t.Texts("kind")[i], Reason: t.Texts("reason")[i], Frequency: t.Floats("frequency")[i], FrequencyError: t.Floats("frequency_error")[i],
			Damping: t.Floats("damping")[i], DampingError: t.Floats("damping_error")[i], Direction: t.FloatLists("direction")[i],
			DirectionError: t.Floats("direction_error")[i], Collinearity: t.Floats("collinearity")[i], ShapeReal: t.FloatLists("shape_real")[i],
			ShapeImaginary: t.FloatLists("shape_imaginary")[i], Models: t.Floats("models")[i], FirstOrder: int(t.Ints("first_order")[i]),
			Kurtosis: t.Floats("kurtosis")[i], Worth: t.Floats("worth")[i], PeakFrequency: t.Floats("peak_frequency")[i], PeakDamping: t.Floats("peak_damping")[i],
		}
		if len(m.Direction) != l || len(m.ShapeReal) != l || len(m.ShapeImaginary) != l || !(m.Frequency > 0) {
			return nil, malformed("identified", "mode %d at %g Hz does not fit %d channels", i, m.Frequency, l)
		}
		x.Modes = append(x.Modes, m)
	}
	t = a.Table("diagram")
	for i := range t.Rows() {
		p := IdentifiedPole{int(t.Ints("order")[i]), t.Floats("frequency")[i], t.Floats("damping")[i], t.Truths("stable")[i], int(t.Ints("mode")[i])}
		if p.Mode < -1 || p.Mode >= len(x.Modes) {
			return nil, malformed("identified", "a pole of order %d belongs to mode %d of %d", p.Order, p.Mode, len(x.Modes))
		}
		x.Diagram = append(x.Diagram, p)
	}
	t = a.Table("removed")
	for i := range t.Rows() {
		x.Removed = append(x.Removed, RemovedOrder{t.Texts("axis")[i], t.Texts("rotor")[i], t.Floats("order")[i], t.Floats("mean_square")[i]})
	}
	x.Orders = orders(a.Table("orders"))
	return x, readTracks(a, x)
}
