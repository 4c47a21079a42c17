// Package columnar reads recordings in Apache Arrow files (the IPC file format, also known as Feather) and streams (stream.go), and in
// Apache Parquet files (parquet.go).
//
// Columns are those of the schema; the unit of a column is the value of the key "unit" of its metadata, or that of its timestamp or
// duration. Columns that hold no numbers are text. A null is a row without a sample of that column. Whole numbers and
// timestamps keep their digits: the first time is taken off before anything is rounded.
package columnar

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"

	"hushframe/core/signal/recording"
)

// Reader reads Arrow files. The zero value is ready.
type Reader struct{}

var _ recording.Reader = Reader{}

// Mark tells whether the beginning of a file is that of an Arrow file or stream.
func Mark(head []byte) bool { return bytes.HasPrefix(head, []byte("ARROW1")) || markStream(head) }

// Describe implements recording.Reader.
func (Reader) Describe() recording.Description {
	return recording.Description{Name: "arrow", About: "Apache Arrow file or stream"}
}

// mostInMemory bounds what is kept of a source that cannot be read at any place.
const mostInMemory = 1 << 30

// guarded runs f, in which the decoder may panic on hostile bytes, and makes an *Error of what it says.
func guarded(format string, f func() error) (err error) {
	damaged := func(what any) error {
		return &recording.Error{Text: fmt.Sprintf("the %s data is damaged: %v", format, what), Remedy: "write the recording again, or export it as text"}
	}
	defer func() {
		if r := recover(); r != nil {
			err = damaged(r)
		}
	}()
	err = f()
	var e *recording.Error
	var passed *sinkError
	if err == nil || errors.As(err, &e) || errors.As(err, &passed) || errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return err
	}
	return damaged(err)
}

// sinkError carries an error of the sink past guarded.
type sinkError struct{ err error }

func (s *sinkError) Error() string { return s.err.Error() }

// passSink gives an error of the sink as it was.
func passSink(err error) error {
	var passed *sinkError
	if errors.As(err, &passed) {
		return passed.err
	}
	return err
}

// anywhere makes a source one that can be read at any place, and tells its size.
func anywhere(source io.Reader) (ipc.ReadAtSeeker, int64, error) {
	at, ok := source.(ipc.ReadAtSeeker)
	if !ok {
		all, err := io.ReadAll(io.LimitReader(source, mostInMemory+1))
		if err != nil {
			return nil, 0, err
		}
		if len(all) > mostInMemory {
			return nil, 0, &recording.Error{Text: "the recording is too large to be read from a stream", Remedy: "give it as a file"}
		}
		at = bytes.NewReader(all)
	}
	size, err := at.Seek(0, io.SeekEnd)
	return at, size, err
}

// batches are the record batches of a file or stream, in order; io.EOF ends them.
type batches struct {
	schema *arrow.Schema
	next   func() (arrow.RecordBatch, error)
}

func open(source io.Reader, options map[string]string) (*batches, error) {
	if len(options) > 0 {
		return nil, &recording.Error{Text: "the reader has no options", Remedy: "leave them out"}
	}
	head := make([]byte, 8)
	n, err := io.ReadFull(source, head)
	if err != nil && !errors.Is(err, io.EOF) && !errors.Is(err, io.ErrUnexpectedEOF) {
		return nil, err
	}
	head = head[:n]
	switch {
	case n == 0:
		return nil, &recording.Error{Text: "the file is empty", Remedy: "give a recording with at least two rows of samples"}
	case markStream(head):
		return openStream(io.MultiReader(bytes.NewReader(head), source))
	case !Mark(head):
		return nil, &recording.Error{Text: "this is no Arrow file", Remedy: "name the reader for its format"}
	}
	if seeker, ok := source.(ipc.ReadAtSeeker); ok {
		return openFile(seeker)
	}
	return openFile(io.MultiReader(bytes.NewReader(head), source))
}

func openFile(source io.Reader) (*batches, error) {
	at, size, err := anywhere(source)
	if err != nil {
		return nil, err
	}
	if err := guard(at, size); err != nil {
		return nil, err
	}
	r, err := ipc.NewFileReader(at, ipc.WithAllocator(newBounded(size)))
	if err != nil {
		return nil, err
	}
	k := 0
	return &batches{schema: r.Schema(), next: func() (arrow.RecordBatch, error) {
		if k == r.NumRecords() {
			return nil, io.EOF
		}
		k++
		return r.RecordBatch(k - 1)
	}}, nil
}

// Inspect implements recording.Reader.
func (Reader) Inspect(_ context.Context, source io.Reader, options map[string]string) (h recording.Header, err error) {
	err = guarded("Arrow", func() error {
		b, err := open(source, options)
		if err != nil {
			return err
		}
		for _, f := range b.schema.Fields() {
			c := recording.Column{Name: f.Name, Text: !numeric(f.Type)}
			if i := f.Metadata.FindKey("unit"); i >= 0 {
				c.Unit = f.Metadata.Values()[i]
			}
			switch t := f.Type.(type) {
			case *arrow.TimestampType:
				c.Unit = unitOf(t.Unit)
			case *arrow.DurationType:
				c.Unit = unitOf(t.Unit)
			}
			h.Columns = append(h.Columns, c)
		}
		return nil
	})
	return h, err
}

func unitOf(u arrow.TimeUnit) string {
	return map[arrow.TimeUnit]string{arrow.Second: "s", arrow.Millisecond: "ms", arrow.Microsecond: "us", arrow.Nanosecond: "ns"}[u]
}

func numeric(t arrow.DataType) bool {
	return slices.Contains([]arrow.Type{arrow.INT8, arrow.INT16, arrow.INT32, arrow.INT64, arrow.UINT8, arrow.UINT16, arrow.UINT32, arrow.UINT64,
		arrow.FLOAT16, arrow.FLOAT32, arrow.FLOAT64, arrow.TIMESTAMP, arrow.DURATION}, t.ID())
}

// Read implements recording.Reader.
func (Reader) Read(ctx context.Context, source io.Reader, request recording.Request, sink func(recording.Batch) error) error {
	return passSink(guarded("Arrow", func() error { return read(ctx, source, request, sink) }))
}

func read(ctx context.Context, source io.Reader, request recording.Request, sink func(recording.Batch) error) error {
	b, err := open(source, request.Options)
	if err != nil {
		return err
	}
	find := func(name string) (int, error) {
		at := b.schema.FieldIndices(name)
		switch {
		case len(at) == 0:
			return 0, &recording.Error{Column: name, Text: "the recording has no such column", Remedy: "name one of its columns"}
		case len(at) > 1:
			return 0, &recording.Error{Column: name, Text: fmt.Sprintf("%d columns have this name", len(at)), Remedy: "give the columns different names"}
		case !numeric(b.schema.Field(at[0]).Type):
			return 0, &recording.Error{Column: name, Text: fmt.Sprintf("the column holds %s, not numbers", b.schema.Field(at[0]).Type), Remedy: "name a column of numbers"}
		}
		return at[0], nil
	}
	var wanted []int
	for _, name := range request.Columns {
		k, err := find(name)
		if err != nil {
			return err
		}
		wanted = append(wanted, k)
	}
	clock := -1
	if request.Time != "" {
		if clock, err = find(request.Time); err != nil {
			return err
		}
	}
	rows := int64(0)
	var first tick
	for {
		if err := ctx.Err(); err != nil {
			return err
		}
		record, err := b.next()
		if errors.Is(err, io.EOF) {
			break
		}
		if errors.Is(err, io.ErrUnexpectedEOF) && rows > 0 {
			return cutOff(rows, len(wanted), clock >= 0, sink)
		}
		if err != nil {
			return err
		}
		n := int(record.NumRows())
		if n == 0 {
			continue
		}
		batch := recording.Batch{First: rows + 1}
		for _, k := range wanted {
			values := make([]float64, n)
			for i := range values {
				values[i] = math.NaN()
				if t, ok := at(record.Column(k), i); ok {
					values[i] = t.value()
				}
			}
			batch.Values = append(batch.Values, values)
		}
		if clock >= 0 {
			batch.Time = make([]float64, n)
			for i := range n {
				t, ok := at(record.Column(clock), i)
				if !ok {
					batch.Time[i] = math.NaN()
					continue
				}
				if first.kind == 0 {
					first = t
				}
				batch.Time[i] = t.since(first) * request.TimeUnit
			}
			batch.Origin = first.value() * request.TimeUnit
		}
		rows += int64(n)
		if err := sink(batch); err != nil {
			return &sinkError{err}
		}
	}
	if rows == 0 {
		return &recording.Error{Text: "the recording has no rows", Remedy: "give a recording with at least two rows of samples"}
	}
	return nil
}

// cutOff ends a reading whose source ends in its middle, with what came before.
func cutOff(rows int64, columns int, timed bool, sink func(recording.Batch) error) error {
	b := recording.Batch{First: rows + 1, Values: make([][]float64, columns), Findings: []recording.Finding{{
		What: "cut off", Extent: fmt.Sprintf("the file ends in its middle, after row %d", rows), Consequence: "what came after is lost"}}}
	if timed {
		b.Time = []float64{}
	}
	if err := sink(b); err != nil {
		return &sinkError{err}
	}
	return nil
}

// tick is one value with all its digits.
type tick struct {
	whole int64
	real  float64
	kind  byte // 'i' whole, 'u' unsigned in whole, 'f' real
}

func (t tick) value() float64 {
	switch t.kind {
	case 'f':
		return t.real
	case 'u':
		return float64(uint64(t.whole))
	}
	return float64(t.whole)
}

func (t tick) since(first tick) float64 {
	if t.kind == 'f' {
		return t.real - first.real
	}
	return float64(t.whole - first.whole)
}

// at reads one value; ok is false for a null and for a value that is not a number.
func at(column arrow.Array, i int) (tick, bool) {
	if column.IsNull(i) {
		return tick{}, false
	}
	whole := func(v int64) (tick, bool) { return tick{whole: v, kind: 'i'}, true }
	real := func(v float64) (tick, bool) { return tick{real: v, kind: 'f'}, !math.IsNaN(v) }
	switch c := column.(type) {
	case *array.Float64:
		return real(c.Value(i))
	case *array.Float32:
		return real(float64(c.Value(i)))
	case *array.Float16:
		return real(float64(c.Value(i).Float32()))
	case *array.Int8:
		return whole(int64(c.Value(i)))
	case *array.Int16:
		return whole(int64(c.Value(i)))
	case *array.Int32:
		return whole(int64(c.Value(i)))
	case *array.Int64:
		return whole(c.Value(i))
	case *array.Uint8:
		return whole(int64(c.Value(i)))
	case *array.Uint16:
		return whole(int64(c.Value(i)))
	case *array.Uint32:
		return whole(int64(c.Value(i)))
	case *array.Uint64:
		return tick{whole: int64(c.Value(i)), kind: 'u'}, true
	case *array.Timestamp:
		return whole(int64(c.Value(i)))
	case *array.Duration:
		return whole(int64(c.Value(i)))
	}
	return tick{}, false
}
