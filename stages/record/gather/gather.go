// Package gather gets the samples that stages analyse out of a recording: for every stage that takes one, with the same
// arguments, the same guesses and the same words about them.
//
// In order: the header is read and columns are chosen, from the job or by generic words (columns.go, words.go, units.go);
// the samples are read and rows without samples are left out (samples.go); the window is cut and the times are checked
// (window.go); what was guessed and left out is told (tell.go).
package gather

import (
	"context"
	"errors"
	"io"
	"math"

	"hushframe/core/extension"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
	"hushframe/stages/record/columnar"
	"hushframe/stages/record/delimited"
	"hushframe/stages/record/flat"
	"hushframe/stages/record/wave"
)

// builtin are the readers in this executable.
var builtin = []extension.Reader{extension.FromReader(delimited.Reader{}), extension.FromReader(wave.Reader{}),
	extension.FromReader(columnar.Reader{}), extension.FromReader(flat.Reader{})}

// auto stands for the reader that the first bytes call for.
const auto = "auto"

// readerNames lists what the argument reader may be without an extension.
func readerNames() []string {
	names := []string{auto}
	for _, r := range builtin {
		names = append(names, r.Describe().Name)
	}
	return names
}

func readerOptions() map[string][]stage.Argument {
	out := map[string][]stage.Argument{}
	for _, r := range builtin {
		d := r.Describe()
		out[d.Name] = d.Arguments
	}
	return out
}

// Settings are the arguments that say what is read.
type Settings struct {
	File, Reader           string
	Options                stage.Arguments
	Columns, Rotors, Units map[string]string
	Rate                   float64
	Window                 []float64 // empty or two times
	Find                   int       // rotors to find in the signal
	Speeds                 []float64 // their least and greatest speed, rad/s
}

// Arguments describes them.
func Arguments() []stage.Argument {
	zero, most := 0.0, 16.0
	rpm := func(v float64) stage.Quantity {
		return stage.Quantity{SI: v * 2 * math.Pi / 60, Dimension: RotorSpeed}
	}
	texts := stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Text}}
	return []stage.Argument{
		{Name: "file", About: "the recording", Type: stage.Type{Kind: stage.File}, Required: true, Example: `"flights/hover.csv.gz"`},
		{Name: "reader", About: "reader of its format; auto tells all built-in ones but flat by the first bytes",
			Type: stage.Type{Kind: stage.Text}, Default: auto, Example: `"auto"`, Choices: readerNames(), Extension: extension.ReaderKind},
		{Name: "options", About: "options of the reader, by name", Type: texts, Example: `{ separator = "tab" }`, OptionsOf: "reader", Variants: readerOptions()},
		{Name: "columns", About: "columns by role: time, and roll, pitch, yaw (angular rate) or x, y, z (acceleration); left out, found by their names",
			Type: texts, Example: `{ time = "t", roll = "gx", pitch = "-gy", yaw = "-gz" }`},
		{Name: "rotors", About: "columns of rotor speed by rotor; left out, found by their names", Type: texts, Example: `{ fr = "rpm_1" }`},
		{Name: "units", About: "units by column, where the recording does not state them", Type: texts, Example: `{ gx = "rad/s" }`},
		{Name: "rate", About: "sample rate, for a recording without a time column", Type: stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"},
			Example: `"2 kHz"`, Above: &zero},
		{Name: "window", About: "first and last time used; left out, all", Type: stage.Type{Kind: stage.List,
			Element: &stage.Type{Kind: stage.Amount, Dimension: "time", Unit: "s"}}, Example: `["8 s", "60 s"]`},
		{Name: "find_rotors", About: "rotors whose speeds are followed in the signal itself, where none is recorded", Type: stage.Type{Kind: stage.Whole},
			Default: 0.0, Example: "4", Min: &zero, Max: &most},
		{Name: "speed_range", About: "least and greatest speed that is looked for", Type: stage.Type{Kind: stage.List,
			Element: &stage.Type{Kind: stage.Amount, Dimension: "rotational speed", Unit: "rpm"}},
			Default: []any{rpm(7500), rpm(24000)}, Example: `["7500 rpm", "24000 rpm"]`},
	}
}

// Read takes the settings out of the arguments of a stage.
func Read(a stage.Arguments, name string) (Settings, error) {
	s := Settings{
		File: a.Text("file"), Reader: a.Text("reader"), Options: a.Map("options"),
		Columns: texts(a, "columns"), Rotors: texts(a, "rotors"), Units: texts(a, "units"), Rate: a.SI("rate"), Window: a.SIs("window"),
		Find: a.Whole("find_rotors"), Speeds: a.SIs("speed_range"),
	}
	switch {
	case s.Find > 0 && (len(s.Speeds) != 2 || !(s.Speeds[0] > 0 && s.Speeds[1] > s.Speeds[0])):
		return s, fault.New(fault.Input, "the range of speeds is no two rising speeds").In(name, "").Of("speed_range").
			Do(`give the least and the greatest, such as ["7500 rpm", "24000 rpm"]`)
	case a.Has("window") && len(s.Window) != 2:
		return s, fault.New(fault.Input, "the window has %d times", len(s.Window)).In(name, "").Of("window").
			Do(`give the first and the last time, such as ["8 s", "60 s"]`)
	case len(s.Window) == 2 && !(s.Window[1] > s.Window[0]):
		return s, fault.New(fault.Input, "the window ends at %g s, where it has not begun", s.Window[1]).In(name, "").Of("window").
			Do("make its second time later than the first, which is %g s", s.Window[0])
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

// Recording is what was read.
type Recording struct {
	Header recording.Header
	Plan   Plan
	Data   *Data
	// Found tells that the speeds of the rotors were found in the signal: to within a hertz or so, and not which rotor is which.
	Found bool
	set   Settings
}

// Load reads the channels of a recording.
func Load(ctx context.Context, call *stage.Call, set Settings) (*Recording, error) {
	if set.Reader != auto { // a wrong name before a missing file
		if _, err := choose(ctx, call, set.Reader, nil); err != nil {
			return nil, err
		}
	}
	file, err := call.Files.Open(set.File)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	head := make([]byte, 16)
	n, _ := file.ReadAt(head, 0) // a file that cannot be read says so to its reader
	reader, err := choose(ctx, call, set.Reader, head[:n])
	if err != nil {
		return nil, err
	}
	header, err := reader.Inspect(ctx, file, set.Options)
	if err != nil {
		return nil, Explain(err, set.File)
	}
	plan, err := assign(header, set)
	if err != nil {
		return nil, Explain(err, set.File)
	}
	if _, err := file.Seek(0, io.SeekStart); err != nil {
		return nil, fault.New(fault.Input, "%v", err).In("read recording", set.File)
	}
	data, err := samples(ctx, reader, file, plan, set, header)
	if err != nil {
		return nil, Explain(err, set.File)
	}
	return &Recording{Header: header, Plan: plan, Data: data, set: set}, nil
}

// choose returns the reader of that name; for auto, the one whose mark the file begins with, or the reader of text.
func choose(ctx context.Context, call *stage.Call, name string, head []byte) (extension.Reader, error) {
	switch {
	case name == auto && wave.Mark(head):
		return extension.FromReader(wave.Reader{}), nil
	case name == auto && columnar.Mark(head):
		return extension.FromReader(columnar.Reader{}), nil
	case name == auto:
		return extension.FromReader(delimited.Reader{}), nil
	}
	r, err := extension.FindReader(ctx, name, builtin, call)
	if err != nil {
		return nil, fault.From(err).Of("reader")
	}
	return r, nil
}

// Explain turns an error of a reader or kernel into a fault that names the file.
func Explain(err error, file string) error {
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
