package recording

import (
	"context"
	"fmt"
	"io"
	"strings"
)

// Reader reads one kind of recording. It keeps no state between calls and is safe for concurrent use.
//
// A caller inspects a recording first, chooses columns from what it finds, and then reads them; each call is given the
// source from its beginning. Errors about the recording are *Error.
type Reader interface {
	// Describe says what the reader reads and which options it takes. It is constant and cheap.
	Describe() Description
	// Inspect states the columns of the recording. It need not read further than that takes.
	Inspect(ctx context.Context, source io.Reader, options map[string]string) (Header, error)
	// Read delivers the requested columns to sink in batches of neighbouring rows, in order. The slices of a batch belong
	// to the reader and change after sink returns. An error of sink ends the reading and is returned as it is. A
	// recording without any row is an *Error.
	Read(ctx context.Context, source io.Reader, request Request, sink func(Batch) error) error
}

// Description is what a reader says about itself.
type Description struct {
	Name    string // the word used in jobs
	About   string // one line
	Options []Option
}

// Option is one setting of a reader, given as text.
type Option struct {
	Name    string
	About   string
	Choices []string // the only values allowed, if not empty
}

// Header is what is known of a recording before its samples are read.
type Header struct {
	Columns []Column
	// Rate is the sample rate that the recording states for rows without a time column, in Hz; 0 if it states none.
	Rate float64
	// Timed tells that the reader delivers times by itself, so that no time column need be named.
	Timed bool
	// Notes are facts that the reader guessed, such as the separator.
	Notes []string
}

// Column is one column of a recording.
type Column struct {
	Name string // as in the recording, without surrounding blanks
	Unit string // as the recording states it, "" if it does not
	Text bool   // holds something else than numbers in the rows that were inspected
}

// Names lists the names of the columns.
func (h Header) Names() []string {
	out := make([]string, len(h.Columns))
	for i, c := range h.Columns {
		out[i] = c.Name
	}
	return out
}

// Request says which columns to read.
type Request struct {
	// Columns are names from the header; batches hold them in this order.
	Columns []string
	// Time is the name of the time column, "" for none.
	Time string
	// TimeUnit is the value of one unit of the time column in seconds (1, 1e-3, 1e-6 or 1e-9 as a rule).
	TimeUnit float64
	// Options are those of Describe, as text; a reader from outside has its options as an argument of its own instead.
	Options map[string]string
}

// Batch is a stretch of neighbouring rows.
type Batch struct {
	// First is the number of the first row of the batch.
	First int64
	// Time holds, per row, the seconds since the first row of the recording; nil without a time column. Readers take the
	// difference before they scale, so that nanoseconds since an epoch lose nothing. NaN means that the row has no time.
	Time []float64
	// Origin is the value of the time column in the first row of the recording, in seconds.
	Origin float64
	// Values holds, per requested column, one value per row; NaN means that the row has no sample of that column.
	Values [][]float64
	// Notes are facts met on the way, such as an incomplete last row that was left out; as a rule in the last batch.
	Notes []string
	// Findings are faults of the recording that leave the rest usable; as a rule in the last batch.
	Findings []Finding
}

// Finding is something that is not as it should be with a recording that can be used all the same.
type Finding struct {
	What        string // one or two words
	Where       string // column, "" for the whole recording
	Extent      string // how much, and where in time, rows or frequency
	Consequence string // what it does to what is computed
}

// Rows returns the number of rows of the batch.
func (b Batch) Rows() int {
	if b.Time != nil || len(b.Values) == 0 {
		return len(b.Time)
	}
	return len(b.Values[0])
}

// Error is a fault of a recording. Fields that are zero are not known.
type Error struct {
	Row    int64  // row of samples
	Line   int64  // line of a text file, from 1
	Byte   int64  // offset in the (unpacked) file, from 0; shown only without a line
	Column string // name of the column
	Text   string // what is wrong, without a full stop
	Remedy string // what to do about it
}

// Place tells where the fault is, "" if that is not known.
func (e *Error) Place() string {
	var parts []string
	if e.Line > 0 {
		parts = append(parts, fmt.Sprintf("line %d", e.Line))
	} else if e.Byte > 0 {
		parts = append(parts, fmt.Sprintf("byte %d", e.Byte))
	}
	if e.Row > 0 {
		parts = append(parts, fmt.Sprintf("row %d", e.Row))
	}
	if e.Column != "" {
		parts = append(parts, fmt.Sprintf("column %q", e.Column))
	}
	return strings.Join(parts, ", ")
}

func (e *Error) Error() string {
	out := e.Text
	if place := e.Place(); place != "" {
		out = place + ": " + out
	}
	if e.Remedy != "" {
		out += "; " + e.Remedy
	}
	return out
}
