// Package gather gets the samples that stages analyse out of a recording: for every stage that takes one, with the same
// arguments, the same guesses and the same words about them.
//
// In order: the reader is chosen (readers.go); the header is read and columns are chosen, from the job or by generic words
// (columns.go, find.go, words.go, units.go); the samples are read, once per clock, and rows without samples are left out (samples.go,
// column.go, series.go); accelerations with rows of their own become a second sensor (apart.go); the window is cut, or the steady
// pieces are found, and the times are checked (window.go); what was guessed and left out is told (tell.go).
package gather

import (
	"context"
	"errors"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// Recording is what was read.
type Recording struct {
	Header recording.Header
	Plan   Plan
	Data   *Data
	// Pieces are the stretches of the recording that Window chose from, in order, and ChosenBy what it went by: window, rotor speed,
	// throttle, or "" where all is used.
	Pieces   []Piece
	ChosenBy string
	// Found tells that the speeds of the rotors were found in the signal: to within a hertz or so, and not which rotor is which.
	Found bool
	// Sharp tells, by rotor, how well such speeds are known since they were sharpened; nil where they were not.
	Sharp []Sharpness
	set   Settings
	whole *recording.Timing // of all axes, once known
}

// Load reads the channels of a recording.
func Load(ctx context.Context, call *stage.Call, set Settings) (*Recording, error) {
	if set.Reader != auto { // a wrong name before a missing file
		if _, err := choose(ctx, call, set.Reader, nil); err != nil {
			return nil, err
		}
	}
	opened, err := call.Files.Open(set.File)
	if err != nil {
		return nil, err
	}
	defer opened.Close()
	head := make([]byte, 16)
	n, _ := opened.ReadAt(head, 0) // a file that cannot be read says so to its reader
	reader, err := choose(ctx, call, set.Reader, head[:n])
	if err != nil {
		return nil, err
	}
	open := again(opened, call.Report, isBuiltin(reader))
	header, err := reader.Inspect(ctx, opened, set.Options)
	if err != nil {
		return nil, Explain(err, set.File)
	}
	plan, err := assign(header, set)
	if err != nil {
		return nil, Explain(err, set.File)
	}
	data, err := samples(ctx, reader, open, &plan, set, header)
	if err != nil {
		return nil, Explain(err, set.File)
	}
	if f, odd := twice(ctx, reader, open, header, plan, set); odd {
		data.Findings = append(data.Findings, f)
	}
	return &Recording{Header: header, Plan: plan, Data: data, set: set}, nil
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
