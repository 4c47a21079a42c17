package main

import (
	"context"
	"errors"
	"fmt"
	"io"

	"hushframe/core/extension"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// Reader reads the recordings of Pebble loggers.
type Reader struct{}

var _ extension.Reader = Reader{}

// Describe implements extension.Reader.
func (Reader) Describe() stage.Extension {
	return stage.Extension{
		Kind: extension.ReaderKind, Name: "pebble", About: "recordings of Pebble loggers",
		Arguments: []stage.Argument{{
			Name: "damaged", About: "what becomes of a block that does not match its checksum: skip leaves a gap",
			Type: stage.Type{Kind: stage.Text}, Default: "skip", Choices: []string{"skip", "refuse"}, Example: `"refuse"`,
		}},
	}
}

// Inspect implements extension.Reader.
func (Reader) Inspect(_ context.Context, source io.Reader, _ stage.Arguments) (recording.Header, error) {
	f, err := open(source)
	if err != nil {
		return recording.Header{}, err
	}
	h := recording.Header{Timed: true}
	for _, c := range f.channels {
		h.Columns = append(h.Columns, recording.Column{Name: c.name, Unit: c.unit})
	}
	return h, nil
}

// Read implements extension.Reader. A batch is a block.
func (Reader) Read(ctx context.Context, source io.Reader, options stage.Arguments, request recording.Request, sink func(recording.Batch) error) error {
	f, err := open(source)
	if err != nil {
		return err
	}
	columns, err := f.columns(request.Columns)
	if err != nil {
		return err
	}
	var (
		row     int64
		origin  uint64
		last    float64
		pending *recording.Batch // held back, so that notes can go with the last
		notes   []string
	)
	for {
		if err := ctx.Err(); err != nil {
			return err
		}
		b, err := f.next()
		if errors.Is(err, io.ErrUnexpectedEOF) {
			notes = append(notes, "the last block is cut short and left out")
			err = io.EOF
		}
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return err
		}
		if !b.whole {
			if options.Text("damaged") == "refuse" {
				return &recording.Error{Byte: b.from, Row: row + 1, Text: "a block does not match its checksum", Remedy: `set damaged = "skip" to leave a gap there`}
			}
			notes = append(notes, fmt.Sprintf("the block at byte %d does not match its checksum and is left out", b.from))
			continue
		}
		if row == 0 {
			origin = b.start
		}
		next := recording.Batch{First: row + 1, Origin: float64(origin) * 1e-6}
		start := (float64(b.start) - float64(origin)) * 1e-6
		if row > 0 && !(start > last) {
			return &recording.Error{Byte: b.from, Row: row + 1, Text: "a block begins before the last one ends", Remedy: "copy the recording again from the logger"}
		}
		for r := range b.rows {
			last = start + float64(r)*float64(b.step)*1e-9
			next.Time = append(next.Time, last)
		}
		for _, c := range columns {
			values := make([]float64, b.rows)
			for r := range values {
				values[r] = f.value(b, r, c)
			}
			next.Values = append(next.Values, values)
		}
		row += int64(b.rows)
		if pending != nil {
			if err := sink(*pending); err != nil {
				return err
			}
		}
		pending = &next
	}
	if pending == nil {
		return &recording.Error{Byte: f.at, Text: "the recording holds no whole block", Remedy: "give a recording of at least one block"}
	}
	pending.Notes = notes
	return sink(*pending)
}

// columns finds the channels of names.
func (f *file) columns(names []string) ([]int, error) {
	var out []int
	for _, name := range names {
		at := -1
		for i, c := range f.channels {
			if c.name == name {
				at = i
			}
		}
		if at < 0 {
			return nil, &recording.Error{Column: name, Text: "there is no such channel", Remedy: "name one that the recording has"}
		}
		out = append(out, at)
	}
	return out, nil
}
