package record

import (
	"context"
	"math"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// Stage is the stage "record".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	zero, most := 0.0, 0.95
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	return stage.Description{
		Name:  "record",
		About: "read a recording and describe it by spectra",
		Doc: `Reads a recording, checks its times and values, and gives one-sided Welch spectra
per axis with their bounds and peaks, the coherence of axes with each other and with
their set-points, maps of the spectra over time, throttle and rotor speed, and the
bands in which the orders of rotors with a recorded speed appear.

Columns are named by role, or found by generic words such as "time", "gyro x", "rpm",
"throttle" and "target"; what was found is told. A minus before a column turns its
sign. Axes are those of the airframe: x forward, y left, z up; a sensor that is turned
otherwise states its mounting. A column with a clock of its own names it in clocks.
Where gyro and accelerometer are both named and do not share their rows (rows taken in
turn, another rate, a clock of its own), each is described with its own rate and times,
the accelerometer as accelerations; neither is resampled to the other, so there is no
coherence between them. Rotor speeds, throttle and set-points may have any rows; between
their samples they are taken as straight lines.

Without a window, the steady pieces of the flight are used: by rotor speed, or else
throttle, without ground time, the two seconds after a take-off and the last before a
landing. The maps show all of it. The sample rate is that between gaps, and no segment
straddles a gap. Times are those of the time column; where it counts from an epoch,
from its first row.

Few rows that cannot be read, or whose times go back, are left out and told (up to one
in a hundred), as is a packed file that ends in its middle.`,
		Arguments: append(gather.Arguments(), []stage.Argument{
			{Name: "blades", About: "blades of each rotor, 0 if not known", Type: stage.Type{Kind: stage.Whole}, Default: 0.0, Example: "3", Min: &zero},
			{Name: "orders", About: "multiples of the rotor speed whose bands are kept", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Number}},
				Default: []any{1.0, 2.0, 3.0, 4.0, 5.0, 6.0}, Example: "[1, 2, 3]"},
			{Name: "resolution", About: "width of a bin; left out, about half a hertz, wider where that leaves few averages", Type: frequency, Example: `"1 Hz"`, Above: &zero},
			{Name: "overlap", About: "share of a segment that the next one repeats", Type: stage.Type{Kind: stage.Number}, Default: 0.5, Example: "0.5", Min: &zero, Max: &most},
			{Name: "taper", About: "window function of a segment", Type: stage.Type{Kind: stage.Text}, Default: "hann", Example: `"hann"`, Choices: spectrum.WindowNames()},
			{Name: "detrend", About: "what is taken out of each segment first", Type: stage.Type{Kind: stage.Text}, Default: "constant", Example: `"constant"`,
				Choices: []string{"constant", "linear", "none"}},
			{Name: "level", About: "level of the confidence bounds", Type: stage.Type{Kind: stage.Number}, Default: 0.95, Example: "0.95", Above: &zero, Max: ptr(0.9999)},
			{Name: "from", About: "lowest frequency of a listed peak; left out, ten bins", Type: frequency, Example: `"20 Hz"`, Min: &zero},
			{Name: "to", About: "highest frequency of a listed peak; left out, 0.4 of the sample rate", Type: frequency, Example: `"800 Hz"`, Above: &zero},
			{Name: "prominence", About: "how far a peak stands above the valleys beside it, in dB, to be listed; more where the averages are few",
				Type: stage.Type{Kind: stage.Number}, Default: 3.0, Example: "3", Above: &zero},
		}...),
		Outputs: []stage.Output{{Name: "spectra", Kind: "spectra", About: "spectra, peaks and order bands"},
			{Name: "accelerations", Kind: "spectra", About: "the same of an accelerometer that does not share the rows of the gyro; without axes where there is none"}},
		Figures: []stage.Figure{
			{Name: "rate", About: "samples per second between gaps", Type: frequency},
			{Name: "samples", About: "samples used per axis", Type: stage.Type{Kind: stage.Whole}},
			{Name: "gaps", About: "gaps within the times used", Type: stage.Type{Kind: stage.Whole}},
			{Name: "averages", About: "segments averaged", Type: stage.Type{Kind: stage.Whole}},
			{Name: "saturated", About: "largest share of saturated samples on any axis, 0 to 1", Type: stage.Type{Kind: stage.Number}},
			{Name: "peaks", About: "peaks as objects with axis, frequency, frequency_error, level and damping", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Any}}},
		},
	}
}

func ptr(v float64) *float64 { return &v }

// settings are the arguments.
type settings struct {
	gather.Settings
	blades              int
	orders              []float64
	resolution, overlap float64
	taper               spectrum.Window
	detrend             spectrum.Detrend
	level, from, to     float64
	prominence          float64 // power ratio
}

func read(a stage.Arguments) (settings, error) {
	s := settings{
		blades: a.Whole("blades"), resolution: a.SI("resolution"), overlap: a.Number("overlap"), level: a.Number("level"),
		from: a.SI("from"), to: a.SI("to"), prominence: math.Pow(10, a.Number("prominence")/10),
		detrend: map[string]spectrum.Detrend{"constant": spectrum.DetrendConstant, "linear": spectrum.DetrendLinear,
			"none": spectrum.DetrendNone}[a.Text("detrend")],
	}
	s.taper, _ = spectrum.ParseWindow(a.Text("taper"))
	var err error
	if s.Settings, err = gather.Read(a, "record"); err != nil {
		return s, err
	}
	s.Apart = true
	for i, v := range a.List("orders") {
		n := v.(float64)
		if !(n > 0) || math.IsInf(n, 0) {
			return s, fault.New(fault.Input, "order %g at place %d is not above zero", n, i+1).In("record", "").Of("orders").Do("list multiples such as [1, 2, 3]")
		}
		s.orders = append(s.orders, n)
	}
	if s.to > 0 && !(s.to > s.from) {
		return s, fault.New(fault.Input, "the band of the peaks ends at %g Hz, where it has not begun", s.to).In("record", "").Of("to").
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
	defer r.Frugal()()
	call.Report.Progress("spectra", -1)
	found, err := describe(r, set, call.Threads)
	if err != nil {
		return nil, gather.Explain(err, set.File)
	}
	out := outcome(found, r, set)
	apart := &kinds.Spectra{Rate: found.spectra.Rate, Window: found.spectra.Window, Level: set.level, From: found.spectra.From, To: found.spectra.To}
	if second := r.Second(); second != nil {
		other, err := describe(second, set, call.Threads)
		if err != nil {
			return nil, gather.Explain(err, set.File)
		}
		apart = other.spectra
		join(out, outcome(other, second, set))
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["spectra"], kinds.EncodeSpectra(found.spectra)); err != nil {
		return nil, err
	}
	_, err = artifact.Write(call.Outputs["accelerations"], kinds.EncodeSpectra(apart))
	return out, err
}
