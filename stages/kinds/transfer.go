package kinds

import (
	"fmt"

	"hushframe/core/pipeline/artifact"
)

// TransferKind is what `transfer` makes of a bench recording with a force channel.
var TransferKind = artifact.Kind{
	Name:    "transfer",
	Version: 1,
	About:   "Transfer functions from a force to each response of a bench recording, with their coherence and peaks",
	Scalars: []artifact.Column{
		{Name: "rate", Type: artifact.Float, Unit: "Hz", About: "samples per second between gaps"},
		{Name: "step", Type: artifact.Float, Unit: "Hz", About: "width of a bin; bin k lies at k times this"},
		{Name: "segment", Type: artifact.Int, About: "samples of a segment"},
		{Name: "averages", Type: artifact.Int, About: "strikes or segments averaged"},
		{Name: "method", Type: artifact.Text, About: "strikes or steady"},
		{Name: "decay", Type: artifact.Float, Unit: "s", About: "time constant of the exponential window; 0 for none"},
		{Name: "force_column", Type: artifact.Text, About: "column of the force, with its sign"},
		{Name: "excited_to", Type: artifact.Float, Unit: "Hz", About: "frequency up to which the force lies within 20 dB of its greatest density"},
	},
	Tables: []artifact.TableSpec{
		{Name: "responses", About: "one row per response", Columns: []artifact.Column{
			{Name: "axis", Type: artifact.Text, About: "roll, pitch, yaw (angular rate) or x, y, z (acceleration) in the airframe's axes"},
			{Name: "quantity", Type: artifact.Text, About: "angular rate or acceleration"},
			{Name: "unit", Type: artifact.Text, About: "SI unit of the transfer function"},
			{Name: "column", Type: artifact.Text, About: "column of the recording, with its sign"},
			{Name: "h1_real", Type: artifact.FloatList, Unit: "SI/N", About: "H1 per bin from 0 Hz, real part: noise in the response averages out"},
			{Name: "h1_imaginary", Type: artifact.FloatList, Unit: "SI/N", About: "imaginary part, for a time dependence of e^{+iωt}"},
			{Name: "h2_real", Type: artifact.FloatList, Unit: "SI/N", About: "H2 per bin, real part: noise in the force averages out"},
			{Name: "h2_imaginary", Type: artifact.FloatList, Unit: "SI/N", About: "imaginary part"},
			{Name: "coherence", Type: artifact.FloatList, Unit: "1", About: "share of the response's power that the force explains, 0 to 1"},
		}},
		{Name: "force", About: "density of the force, one row", Columns: []artifact.Column{
			{Name: "density", Type: artifact.FloatList, Unit: "N^2/Hz", About: "one-sided power spectral density per bin, as the segments were transformed"},
		}},
		{Name: "strikes", About: "strikes found, in order; none where the force is steady", Columns: []artifact.Column{
			{Name: "time", Type: artifact.Float, Unit: "s", About: "time of the peak, on the time column"},
			{Name: "force", Type: artifact.Float, Unit: "N", About: "force at the peak"},
			{Name: "length", Type: artifact.Float, Unit: "s", About: "length of the pulse"},
			{Name: "used", Type: artifact.Truth, About: "counts in the averages"},
			{Name: "why", Type: artifact.Text, About: "why it is left out: double, long, overloaded, no room or early; empty where it is used"},
		}},
		{Name: "peaks", About: "peaks of the transfer functions, by response and frequency", Columns: []artifact.Column{
			{Name: "response", Type: artifact.Int, About: "row of the table responses"},
			{Name: "frequency", Type: artifact.Float, Unit: "Hz", About: ""},
			{Name: "damping", Type: artifact.Float, Unit: "1", About: "damping ratio from the half-power width, without what the window adds; NaN where a valley comes first"},
			{Name: "magnitude", Type: artifact.Float, Unit: "SI/N", About: "|H1| at the peak"},
			{Name: "coherence", Type: artifact.Float, Unit: "1", About: "coherence at the peak"},
		}},
	},
}

// Transfer is the content of a transfer artifact. Units are SI; the docstrings of TransferKind hold.
type Transfer struct {
	Rate, Step        float64
	Segment, Averages int
	Method            string
	Decay             float64
	ForceColumn       string
	ExcitedTo         float64
	Force             []float64

	Responses []TransferResponse
	Strikes   []TransferStrike
	Peaks     []TransferPeak
}

// TransferResponse is the transfer function of one response.
type TransferResponse struct {
	Axis, Quantity, Unit, Column string
	H1, H2                       []complex128
	Coherence                    []float64
}

// TransferStrike is one strike of the hammer.
type TransferStrike struct {
	Time, Force, Length float64
	Used                bool
	Why                 string
}

// TransferPeak is one peak of a transfer function.
type TransferPeak struct {
	Response                                 int
	Frequency, Damping, Magnitude, Coherence float64
}

// EncodeTransfer makes the artifact.
func EncodeTransfer(x *Transfer) *artifact.Artifact {
	a := artifact.New(TransferKind)
	a.Scalars = map[string]any{
		"rate": x.Rate, "step": x.Step, "segment": int64(x.Segment), "averages": int64(x.Averages), "method": x.Method, "decay": x.Decay,
		"force_column": x.ForceColumn, "excited_to": x.ExcitedTo,
	}
	part := func(pick func(complex128) float64, of func(TransferResponse) []complex128) [][]float64 {
		return list(x.Responses, func(r TransferResponse) []float64 { return list(of(r), pick) })
	}
	re, im := func(v complex128) float64 { return real(v) }, func(v complex128) float64 { return imag(v) }
	h1, h2 := func(r TransferResponse) []complex128 { return r.H1 }, func(r TransferResponse) []complex128 { return r.H2 }
	a.Table("responses").
		Set("axis", list(x.Responses, func(r TransferResponse) string { return r.Axis })).
		Set("quantity", list(x.Responses, func(r TransferResponse) string { return r.Quantity })).
		Set("unit", list(x.Responses, func(r TransferResponse) string { return r.Unit })).
		Set("column", list(x.Responses, func(r TransferResponse) string { return r.Column })).
		Set("h1_real", part(re, h1)).Set("h1_imaginary", part(im, h1)).Set("h2_real", part(re, h2)).Set("h2_imaginary", part(im, h2)).
		Set("coherence", list(x.Responses, func(r TransferResponse) []float64 { return r.Coherence }))
	a.Table("force").Set("density", [][]float64{x.Force})
	a.Table("strikes").
		Set("time", list(x.Strikes, func(s TransferStrike) float64 { return s.Time })).
		Set("force", list(x.Strikes, func(s TransferStrike) float64 { return s.Force })).
		Set("length", list(x.Strikes, func(s TransferStrike) float64 { return s.Length })).
		Set("used", list(x.Strikes, func(s TransferStrike) bool { return s.Used })).
		Set("why", list(x.Strikes, func(s TransferStrike) string { return s.Why }))
	a.Table("peaks").
		Set("response", list(x.Peaks, func(p TransferPeak) int64 { return int64(p.Response) })).
		Set("frequency", list(x.Peaks, func(p TransferPeak) float64 { return p.Frequency })).
		Set("damping", list(x.Peaks, func(p TransferPeak) float64 { return p.Damping })).
		Set("magnitude", list(x.Peaks, func(p TransferPeak) float64 { return p.Magnitude })).
		Set("coherence", list(x.Peaks, func(p TransferPeak) float64 { return p.Coherence }))
	return a
}

// DecodeTransfer reads the artifact; the error names what does not fit together.
func DecodeTransfer(a *artifact.Artifact) (*Transfer, error) {
	if a.Kind.Name != TransferKind.Name {
		return nil, fmt.Errorf("this is a %s artifact, not %s", a.Kind.Name, TransferKind.Name)
	}
	x := &Transfer{
		Rate: a.Float("rate"), Step: a.Float("step"), Segment: int(a.Int("segment")), Averages: int(a.Int("averages")), Method: a.Text("method"),
		Decay: a.Float("decay"), ForceColumn: a.Text("force_column"), ExcitedTo: a.Float("excited_to"),
	}
	bins := x.Segment/2 + 1
	t := a.Table("force")
	if t.Rows() != 1 || len(t.FloatLists("density")[0]) != bins {
		return nil, malformed("transfer", "the force has no density of %d bins", bins)
	}
	x.Force = t.FloatLists("density")[0]
	t = a.Table("responses")
	for i := range t.Rows() {
		r := TransferResponse{Axis: t.Texts("axis")[i], Quantity: t.Texts("quantity")[i], Unit: t.Texts("unit")[i], Column: t.Texts("column")[i],
			Coherence: t.FloatLists("coherence")[i]}
		for _, name := range []string{"h1", "h2"} {
			re, im := t.FloatLists(name + "_real")[i], t.FloatLists(name + "_imaginary")[i]
			if len(re) != bins || len(im) != bins || len(r.Coherence) != bins {
				return nil, malformed("transfer", "response %s does not have %d bins", r.Axis, bins)
			}
			h := each(bins, func(k int) complex128 { return complex(re[k], im[k]) })
			if name == "h1" {
				r.H1 = h
			} else {
				r.H2 = h
			}
		}
		x.Responses = append(x.Responses, r)
	}
	t = a.Table("strikes")
	for i := range t.Rows() {
		x.Strikes = append(x.Strikes, TransferStrike{Time: t.Floats("time")[i], Force: t.Floats("force")[i], Length: t.Floats("length")[i],
			Used: t.Truths("used")[i], Why: t.Texts("why")[i]})
	}
	t = a.Table("peaks")
	for i := range t.Rows() {
		p := TransferPeak{Response: int(t.Ints("response")[i]), Frequency: t.Floats("frequency")[i], Damping: t.Floats("damping")[i],
			Magnitude: t.Floats("magnitude")[i], Coherence: t.Floats("coherence")[i]}
		if p.Response < 0 || p.Response >= len(x.Responses) {
			return nil, malformed("transfer", "peak %d names response %d of %d", i, p.Response, len(x.Responses))
		}
		x.Peaks = append(x.Peaks, p)
	}
	return x, nil
}
