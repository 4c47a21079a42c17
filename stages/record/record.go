package record

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/delimited"
)

// Stage is the stage "record".
type Stage struct{}

var _ stage.Stage = Stage{}

// builtin are the readers in this executable.
var builtin = []recording.Reader{delimited.Reader{}}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	zero, most := 0.0, 0.95
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	texts := stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Text}}
	return stage.Description{
		Name:  "record",
		About: "read a recording and describe it by spectra",
		Doc: `Reads a recording, checks its times and values, and gives one-sided Welch spectra
per axis with their bounds and peaks, and the bands in which the orders of rotors
with a recorded speed appear.

Columns are named in columns and rotors, or found by generic words such as "time",
"gyro x" and "rpm"; what was found is told. A minus before a column turns its
sign. Axes are those of the airframe: x forward, y left, z up.

The sample rate is that between gaps, and no segment straddles a gap. The window
refers to the time column; where that counts from an epoch, to its first row.`,
		Arguments: []stage.Argument{
			{Name: "file", About: "the recording", Type: stage.Type{Kind: stage.File}, Required: true, Example: `"flights/hover.csv.gz"`},
			{Name: "reader", About: "reader of its format", Type: stage.Type{Kind: stage.Text}, Default: "delimited", Example: `"delimited"`},
			{Name: "options", About: "options of the reader, by name", Type: texts, Example: `{ separator = "tab" }`},
			{Name: "columns", About: "columns by role: time, and roll, pitch, yaw (angular rate) or x, y, z (acceleration); left out, found by their names",
				Type: texts, Example: `{ time = "t", roll = "gx", pitch = "-gy", yaw = "-gz" }`},
			{Name: "rotors", About: "columns of rotor speed by rotor; left out, found by their names", Type: texts, Example: `{ fr = "rpm_1" }`},
			{Name: "units", About: "units by column, where the recording does not state them", Type: texts, Example: `{ gx = "rad/s" }`},
			{Name: "rate", About: "sample rate, for a recording without a time column", Type: frequency, Example: `"2 kHz"`, Above: &zero},
			{Name: "blades", About: "blades of each rotor, 0 if not known", Type: stage.Type{Kind: stage.Whole}, Default: 0.0, Example: "3", Min: &zero},
			{Name: "orders", About: "multiples of the rotor speed whose bands are kept", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Number}},
				Default: []any{1.0, 2.0, 3.0, 4.0, 5.0, 6.0}, Example: "[1, 2, 3]"},
			{Name: "window", About: "first and last time used; left out, all", Type: stage.Type{Kind: stage.List,
				Element: &stage.Type{Kind: stage.Amount, Dimension: "time", Unit: "s"}}, Example: `["8 s", "60 s"]`},
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
		},
		Outputs: []stage.Output{{Name: "spectra", Kind: "spectra", About: "spectra, peaks and order bands"}},
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
	file, reader           string
	options                map[string]string
	columns, rotors, units map[string]string
	rate                   float64
	blades                 int
	orders                 []float64
	window                 []float64
	resolution, overlap    float64
	taper                  spectrum.Window
	detrend                spectrum.Detrend
	level, from, to        float64
	prominence             float64 // power ratio
}

func read(a stage.Arguments) (settings, error) {
	s := settings{
		file: a.Text("file"), reader: a.Text("reader"), options: texts(a, "options"),
		columns: texts(a, "columns"), rotors: texts(a, "rotors"), units: texts(a, "units"),
		rate: a.SI("rate"), blades: a.Whole("blades"), window: a.SIs("window"),
		resolution: a.SI("resolution"), overlap: a.Number("overlap"), level: a.Number("level"),
		from: a.SI("from"), to: a.SI("to"), prominence: math.Pow(10, a.Number("prominence")/10),
		detrend: map[string]spectrum.Detrend{"constant": spectrum.DetrendConstant, "linear": spectrum.DetrendLinear,
			"none": spectrum.DetrendNone}[a.Text("detrend")],
	}
	s.taper, _ = spectrum.ParseWindow(a.Text("taper"))
	for i, v := range a.List("orders") {
		n := v.(float64)
		if !(n > 0) || math.IsInf(n, 0) {
			return s, fault.New(fault.Input, "order %g at place %d is not above zero", n, i+1).In("record", "").Of("orders").Do("list multiples such as [1, 2, 3]")
		}
		s.orders = append(s.orders, n)
	}
	switch {
	case a.Has("window") && len(s.window) != 2:
		return s, fault.New(fault.Input, "the window has %d times", len(s.window)).In("record", "").Of("window").
			Do(`give the first and the last time, such as ["8 s", "60 s"]`)
	case len(s.window) == 2 && !(s.window[1] > s.window[0]):
		return s, fault.New(fault.Input, "the window ends at %g s, where it has not begun", s.window[1]).In("record", "").Of("window").
			Do("make its second time later than the first, which is %g s", s.window[0])
	case s.to > 0 && !(s.to > s.from):
		return s, fault.New(fault.Input, "the band of the peaks ends at %g Hz, where it has not begun", s.to).In("record", "").Of("to").
			Do("make it higher than from, which is %g Hz", s.from)
	}
	return s, nil
}

func texts(a stage.Arguments, name string) map[string]string {
	out := map[string]string{}
	for k, v := range a.Map(name) {
		out[k] = v.(string)
	}
	return out
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	set, err := read(call.Arguments)
	if err != nil {
		return nil, err
	}
	reader, err := choose(set.reader)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("read", -1)
	file, err := call.Files.Open(set.file)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	header, err := reader.Inspect(ctx, file, set.options)
	if err != nil {
		return nil, explain(err, set.file)
	}
	plan, err := assign(header, set)
	if err != nil {
		return nil, explain(err, set.file)
	}
	if _, err := file.Seek(0, io.SeekStart); err != nil {
		return nil, fault.New(fault.Input, "%v", err).In("read recording", set.file)
	}
	data, err := gather(ctx, reader, file, plan, set, header)
	if err != nil {
		return nil, explain(err, set.file)
	}
	call.Report.Progress("spectra", -1)
	found, err := describe(data, plan, set)
	if err != nil {
		return nil, explain(err, set.file)
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["spectra"], kinds.EncodeSpectra(found.spectra)); err != nil {
		return nil, err
	}
	return outcome(found, header, plan, data, set), nil
}

func choose(name string) (recording.Reader, error) {
	var known []string
	for _, r := range builtin {
		if d := r.Describe(); d.Name == name {
			return r, nil
		} else {
			known = append(known, fmt.Sprintf("%q", d.Name))
		}
	}
	return nil, fault.New(fault.Missing, "there is no reader %q", name).In("record", "").Of("reader").Do("the readers are %v", known)
}

// explain turns an error of a reader or kernel into a fault that names the file.
func explain(err error, file string) error {
	var r *recording.Error
	if errors.As(err, &r) {
		return &fault.Error{Kind: fault.Input, Op: "read recording", Item: file, Place: r.Place(), Argument: "file", Text: r.Text, Remedy: r.Remedy}
	}
	f := fault.From(err)
	if f.Kind == fault.Input && f.Item == "" {
		f = f.In("read recording", file)
	}
	return f
}
