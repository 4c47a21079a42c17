package kinds

import (
	"fmt"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
)

// SpectraKind is what `record` makes of a recording.
var SpectraKind = artifact.Kind{
	Name:    "spectra",
	Version: 3,
	About:   "Welch spectra of a recording per axis, with their peaks, bounds, maps and coherence, and the bands of the rotor orders",
	Scalars: []artifact.Column{
		{Name: "rate", Type: artifact.Float, Unit: "Hz", About: "samples per second between gaps"},
		{Name: "step", Type: artifact.Float, Unit: "Hz", About: "width of a bin; bin k lies at k times this"},
		{Name: "resolution", Type: artifact.Float, Unit: "Hz", About: "equivalent noise bandwidth of the window"},
		{Name: "window", Type: artifact.Text, About: "name of the window"},
		{Name: "segment", Type: artifact.Int, About: "samples of a segment"},
		{Name: "overlap", Type: artifact.Int, About: "samples that neighbouring segments share"},
		{Name: "segments", Type: artifact.Int, About: "segments averaged"},
		{Name: "freedom", Type: artifact.Float, Unit: "1", About: "equivalent degrees of freedom of a bin"},
		{Name: "level", Type: artifact.Float, Unit: "1", About: "level of the confidence bounds"},
		{Name: "lower", Type: artifact.Float, Unit: "1", About: "factor from a density to its lower bound"},
		{Name: "upper", Type: artifact.Float, Unit: "1", About: "factor from a density to its upper bound"},
		{Name: "from", Type: artifact.Float, Unit: "s", About: "first time used, on the time column"},
		{Name: "to", Type: artifact.Float, Unit: "s", About: "last time used, on the time column"},
		{Name: "samples", Type: artifact.Int, About: "samples per axis within those times"},
		{Name: "gaps", Type: artifact.Int, About: "gaps within those times"},
		{Name: "missing", Type: artifact.Int, About: "samples missing in the gaps"},
		{Name: "jitter", Type: artifact.Float, Unit: "1", About: "root mean square deviation of a step, over the step"},
		{Name: "chosen_by", Type: artifact.Text, About: "what the pieces were chosen by: window, rotor speed, throttle, or empty where all is used"},
		{Name: "coherence_limit", Type: artifact.Float, Unit: "1", About: "coherence that chance stays below at the level of the bounds; NaN with one average"},
	},
	Tables: []artifact.TableSpec{
		{Name: "axes", About: "one row per axis", Columns: []artifact.Column{
			{Name: "axis", Type: artifact.Text, About: "roll, pitch, yaw (angular rate) or x, y, z (acceleration) in the airframe's axes"},
			{Name: "quantity", Type: artifact.Text, About: "angular rate or acceleration"},
			{Name: "unit", Type: artifact.Text, About: "SI unit of the samples"},
			{Name: "column", Type: artifact.Text, About: "column of the recording, with its sign"},
			{Name: "mean", Type: artifact.Float, Unit: "SI", About: "mean of the samples"},
			{Name: "deviation", Type: artifact.Float, Unit: "SI", About: "standard deviation of the samples"},
			{Name: "largest", Type: artifact.Float, Unit: "SI", About: "largest magnitude of a sample"},
			{Name: "saturated", Type: artifact.Int, About: "samples that stay at an extreme for three or more"},
			{Name: "repeated", Type: artifact.Float, Unit: "1", About: "share of samples equal to the one before"},
			{Name: "density", Type: artifact.FloatList, Unit: "SI^2/Hz", About: "one-sided power spectral density per bin, from 0 Hz"},
		}},
		{Name: "peaks", About: "peaks of the densities, by axis and frequency", Columns: []artifact.Column{
			{Name: "axis", Type: artifact.Int, About: "row of the table axes"},
			{Name: "frequency", Type: artifact.Float, Unit: "Hz", About: ""},
			{Name: "frequency_error", Type: artifact.Float, Unit: "Hz", About: "standard error"},
			{Name: "density", Type: artifact.Float, Unit: "SI^2/Hz", About: "density at the peak"},
			{Name: "prominence", Type: artifact.Float, Unit: "1", About: "density over the higher of the two valleys beside it"},
			{Name: "over_floor", Type: artifact.Float, Unit: "1", About: "density over the local median"},
			{Name: "lower", Type: artifact.Float, Unit: "Hz", About: "lower half-power frequency; NaN if a valley comes first"},
			{Name: "upper", Type: artifact.Float, Unit: "Hz", About: "upper half-power frequency; NaN if a valley comes first"},
			{Name: "damping", Type: artifact.Float, Unit: "1", About: "damping ratio from the width; NaN if there is none"},
			{Name: "damping_error", Type: artifact.Float, Unit: "1", About: "standard error"},
			{Name: "narrow", Type: artifact.Truth, About: "as narrow as the window allows: a line, or damping too low to tell"},
		}},
		{Name: "rotors", About: "rotors with a recorded speed", Columns: []artifact.Column{
			{Name: "rotor", Type: artifact.Text, About: "name"},
			{Name: "column", Type: artifact.Text, About: "column of the recording"},
			{Name: "blades", Type: artifact.Int, About: "number of blades, 0 if not known"},
			{Name: "median", Type: artifact.Float, Unit: "rad/s", About: "median speed within the times used"},
			{Name: "low", Type: artifact.Float, Unit: "rad/s", About: "speed below which it ran for one per cent of the time"},
			{Name: "high", Type: artifact.Float, Unit: "rad/s", About: "speed above which it ran for one per cent of the time"},
		}},
		{Name: "findings", About: "what is not as it should be with the recording", Columns: []artifact.Column{
			{Name: "what", Type: artifact.Text, About: "one or two words, such as gaps or steps"},
			{Name: "where", Type: artifact.Text, About: "column, or empty for the whole recording"},
			{Name: "extent", Type: artifact.Text, About: "how much, and where in time or frequency"},
			{Name: "consequence", Type: artifact.Text, About: "what it does to the spectra"},
		}},
		{Name: "orders", About: "frequencies at which rotor orders appear in the recording", Columns: []artifact.Column{
			{Name: "rotor", Type: artifact.Text, About: "name"},
			{Name: "order", Type: artifact.Float, Unit: "1", About: "multiple of the rotor's speed"},
			{Name: "blade_passing", Type: artifact.Truth, About: "the order is the number of blades"},
			{Name: "low", Type: artifact.Float, Unit: "Hz", About: "lower end of the band, as seen in the recording"},
			{Name: "high", Type: artifact.Float, Unit: "Hz", About: "upper end of the band, as seen in the recording"},
			{Name: "share", Type: artifact.Float, Unit: "1", About: "share of the time the order spends in this band"},
			{Name: "folded", Type: artifact.Truth, About: "lies above half the sample rate and appears mirrored here"},
		}},
		piecesTable, crossTable, setPointsTable, mapsTable,
	},
}

// Spectra is the content of a spectra artifact. Units are SI; the docstrings of SpectraKind hold.
type Spectra struct {
	Rate, Step, Resolution float64
	Window                 string
	Segment, Overlap       int
	Segments               int
	Freedom                float64
	Level, Lower, Upper    float64
	From, To               float64
	Samples, Gaps, Missing int
	Jitter                 float64
	ChosenBy               string
	CoherenceLimit         float64

	Axes     []SpectraAxis
	Peaks    []SpectraPeak
	Rotors   []SpectraRotor
	Findings []Finding
	Orders   []OrderBand

	Pieces    []SpectraPiece
	Cross     []SpectraCross
	SetPoints []SpectraSetPoint
	Maps      []SpectraMapRow
}

// Finding is something that is not as it should be with a recording.
type Finding struct{ What, Where, Extent, Consequence string }

// SpectraAxis is one axis of a recording.
type SpectraAxis struct {
	Axis, Quantity, Unit, Column string
	Mean, Deviation, Largest     float64
	Saturated                    int
	Repeated                     float64
	Density                      []float64
}

// SpectraPeak is one peak of one axis.
type SpectraPeak struct {
	Axis                      int
	Frequency, FrequencyError float64
	Density                   float64
	Prominence, OverFloor     float64
	Lower, Upper              float64
	Damping, DampingError     float64
	Narrow                    bool
}

// SpectraRotor is one rotor with a recorded speed.
type SpectraRotor struct {
	Rotor, Column     string
	Blades            int
	Median, Low, High float64
}

// OrderBand is a band of frequencies in which a rotor order appears.
type OrderBand struct {
	Rotor        string
	Order        float64
	BladePassing bool
	Low, High    float64
	Share        float64
	Folded       bool
}

// Name names the order of a band: "order 2", "blade passing" or, of a folded one, "order 6 (folded)".
func (b OrderBand) Name() string {
	name := fmt.Sprintf("order %g", b.Order)
	if b.BladePassing {
		name = "blade passing"
	}
	if b.Folded {
		name += " (folded)"
	}
	return name
}

// Frequency gives the frequency of a bin in Hz.
func (s *Spectra) Frequency(bin int) float64 { return float64(bin) * s.Step }

// EncodeSpectra makes the artifact.
func EncodeSpectra(s *Spectra) *artifact.Artifact {
	a := artifact.New(SpectraKind)
	a.Scalars = map[string]any{
		"rate": s.Rate, "step": s.Step, "resolution": s.Resolution, "window": s.Window,
		"segment": int64(s.Segment), "overlap": int64(s.Overlap), "segments": int64(s.Segments), "freedom": s.Freedom,
		"level": s.Level, "lower": s.Lower, "upper": s.Upper, "from": s.From, "to": s.To,
		"samples": int64(s.Samples), "gaps": int64(s.Gaps), "missing": int64(s.Missing), "jitter": s.Jitter,
		"chosen_by": s.ChosenBy, "coherence_limit": s.CoherenceLimit,
	}
	a.Table("axes").
		Set("axis", list(s.Axes, func(x SpectraAxis) string { return x.Axis })).
		Set("quantity", list(s.Axes, func(x SpectraAxis) string { return x.Quantity })).
		Set("unit", list(s.Axes, func(x SpectraAxis) string { return x.Unit })).
		Set("column", list(s.Axes, func(x SpectraAxis) string { return x.Column })).
		Set("mean", list(s.Axes, func(x SpectraAxis) float64 { return x.Mean })).
		Set("deviation", list(s.Axes, func(x SpectraAxis) float64 { return x.Deviation })).
		Set("largest", list(s.Axes, func(x SpectraAxis) float64 { return x.Largest })).
		Set("saturated", list(s.Axes, func(x SpectraAxis) int64 { return int64(x.Saturated) })).
		Set("repeated", list(s.Axes, func(x SpectraAxis) float64 { return x.Repeated })).
		Set("density", list(s.Axes, func(x SpectraAxis) []float64 { return x.Density }))
	a.Table("peaks").
		Set("axis", list(s.Peaks, func(x SpectraPeak) int64 { return int64(x.Axis) })).
		Set("frequency", list(s.Peaks, func(x SpectraPeak) float64 { return x.Frequency })).
		Set("frequency_error", list(s.Peaks, func(x SpectraPeak) float64 { return x.FrequencyError })).
		Set("density", list(s.Peaks, func(x SpectraPeak) float64 { return x.Density })).
		Set("prominence", list(s.Peaks, func(x SpectraPeak) float64 { return x.Prominence })).
		Set("over_floor", list(s.Peaks, func(x SpectraPeak) float64 { return x.OverFloor })).
		Set("lower", list(s.Peaks, func(x SpectraPeak) float64 { return x.Lower })).
		Set("upper", list(s.Peaks, func(x SpectraPeak) float64 { return x.Upper })).
		Set("damping", list(s.Peaks, func(x SpectraPeak) float64 { return x.Damping })).
		Set("damping_error", list(s.Peaks, func(x SpectraPeak) float64 { return x.DampingError })).
		Set("narrow", list(s.Peaks, func(x SpectraPeak) bool { return x.Narrow }))
	a.Table("rotors").
		Set("rotor", list(s.Rotors, func(x SpectraRotor) string { return x.Rotor })).
		Set("column", list(s.Rotors, func(x SpectraRotor) string { return x.Column })).
		Set("blades", list(s.Rotors, func(x SpectraRotor) int64 { return int64(x.Blades) })).
		Set("median", list(s.Rotors, func(x SpectraRotor) float64 { return x.Median })).
		Set("low", list(s.Rotors, func(x SpectraRotor) float64 { return x.Low })).
		Set("high", list(s.Rotors, func(x SpectraRotor) float64 { return x.High }))
	a.Table("findings").
		Set("what", list(s.Findings, func(x Finding) string { return x.What })).
		Set("where", list(s.Findings, func(x Finding) string { return x.Where })).
		Set("extent", list(s.Findings, func(x Finding) string { return x.Extent })).
		Set("consequence", list(s.Findings, func(x Finding) string { return x.Consequence }))
	setOrders(a.Table("orders"), s.Orders)
	setDetail(a, s)
	return a
}

// DecodeSpectra reads the artifact; the error names what does not fit together.
func DecodeSpectra(a *artifact.Artifact) (*Spectra, error) {
	if a.Kind.Name != SpectraKind.Name {
		return nil, fmt.Errorf("this is a %s artifact, not %s", a.Kind.Name, SpectraKind.Name)
	}
	s := &Spectra{
		Rate: a.Float("rate"), Step: a.Float("step"), Resolution: a.Float("resolution"), Window: a.Text("window"),
		Segment: int(a.Int("segment")), Overlap: int(a.Int("overlap")), Segments: int(a.Int("segments")),
		Freedom: a.Float("freedom"), Level: a.Float("level"), Lower: a.Float("lower"), Upper: a.Float("upper"),
		From: a.Float("from"), To: a.Float("to"), Samples: int(a.Int("samples")), Gaps: int(a.Int("gaps")),
		Missing: int(a.Int("missing")), Jitter: a.Float("jitter"), ChosenBy: a.Text("chosen_by"), CoherenceLimit: a.Float("coherence_limit"),
	}
	t := a.Table("axes")
	for i := range t.Rows() {
		s.Axes = append(s.Axes, SpectraAxis{
			Axis: t.Texts("axis")[i], Quantity: t.Texts("quantity")[i], Unit: t.Texts("unit")[i], Column: t.Texts("column")[i],
			Mean: t.Floats("mean")[i], Deviation: t.Floats("deviation")[i], Largest: t.Floats("largest")[i],
			Saturated: int(t.Ints("saturated")[i]), Repeated: t.Floats("repeated")[i], Density: t.FloatLists("density")[i],
		})
		if len(s.Axes[i].Density) != s.Segment/2+1 {
			return nil, malformed("spectra", "axis %s has %d bins, %d samples a segment make %d",
				s.Axes[i].Axis, len(s.Axes[i].Density), s.Segment, s.Segment/2+1)
		}
	}
	t = a.Table("peaks")
	for i := range t.Rows() {
		p := SpectraPeak{
			Axis: int(t.Ints("axis")[i]), Frequency: t.Floats("frequency")[i], FrequencyError: t.Floats("frequency_error")[i],
			Density: t.Floats("density")[i], Prominence: t.Floats("prominence")[i], OverFloor: t.Floats("over_floor")[i],
			Lower: t.Floats("lower")[i], Upper: t.Floats("upper")[i],
			Damping: t.Floats("damping")[i], DampingError: t.Floats("damping_error")[i], Narrow: t.Truths("narrow")[i],
		}
		if p.Axis < 0 || p.Axis >= len(s.Axes) {
			return nil, malformed("spectra", "peak %d names axis %d of %d", i, p.Axis, len(s.Axes))
		}
		s.Peaks = append(s.Peaks, p)
	}
	t = a.Table("rotors")
	for i := range t.Rows() {
		s.Rotors = append(s.Rotors, SpectraRotor{
			Rotor: t.Texts("rotor")[i], Column: t.Texts("column")[i], Blades: int(t.Ints("blades")[i]),
			Median: t.Floats("median")[i], Low: t.Floats("low")[i], High: t.Floats("high")[i],
		})
	}
	t = a.Table("findings")
	for i := range t.Rows() {
		s.Findings = append(s.Findings, Finding{t.Texts("what")[i], t.Texts("where")[i], t.Texts("extent")[i], t.Texts("consequence")[i]})
	}
	s.Orders = orders(a.Table("orders"))
	return s, s.detail(a)
}

// DecodeSensor reads spectra that are to be used, and refuses those of a sensor that the recording does not have.
func DecodeSensor(a *artifact.Artifact) (*Spectra, error) {
	s, err := DecodeSpectra(a)
	if err == nil && len(s.Axes) == 0 {
		return nil, fault.New(fault.Input, "the spectra have no axis: the recording has no accelerometer with rows of its own").
			Do("take the output spectra of that step, which has the axes that share their rows; or name the accelerometer in its columns")
	}
	return s, err
}

func setOrders(t *artifact.Table, bands []OrderBand) {
	t.Set("rotor", list(bands, func(x OrderBand) string { return x.Rotor })).
		Set("order", list(bands, func(x OrderBand) float64 { return x.Order })).
		Set("blade_passing", list(bands, func(x OrderBand) bool { return x.BladePassing })).
		Set("low", list(bands, func(x OrderBand) float64 { return x.Low })).
		Set("high", list(bands, func(x OrderBand) float64 { return x.High })).
		Set("share", list(bands, func(x OrderBand) float64 { return x.Share })).
		Set("folded", list(bands, func(x OrderBand) bool { return x.Folded }))
}

func orders(t *artifact.Table) []OrderBand {
	var out []OrderBand
	for i := range t.Rows() {
		out = append(out, OrderBand{
			Rotor: t.Texts("rotor")[i], Order: t.Floats("order")[i], BladePassing: t.Truths("blade_passing")[i],
			Low: t.Floats("low")[i], High: t.Floats("high")[i], Share: t.Floats("share")[i], Folded: t.Truths("folded")[i],
		})
	}
	return out
}

// list takes one column out of rows.
func list[R, V any](rows []R, value func(R) V) []V {
	out := make([]V, len(rows))
	for i, r := range rows {
		out[i] = value(r)
	}
	return out
}
