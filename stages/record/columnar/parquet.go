package columnar

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"

	"github.com/apache/arrow-go/v18/arrow/float16"
	"github.com/apache/arrow-go/v18/parquet"
	"github.com/apache/arrow-go/v18/parquet/file"
	"github.com/apache/arrow-go/v18/parquet/schema"

	"hushframe/core/signal/recording"
)

// Parquet reads Parquet files. The zero value is ready.
type Parquet struct{}

var _ recording.Reader = Parquet{}

const parquetMark = "PAR1"

// MarkParquet tells whether the beginning of a file is that of a Parquet file.
func MarkParquet(head []byte) bool { return bytes.HasPrefix(head, []byte(parquetMark)) }

// Describe implements recording.Reader.
func (Parquet) Describe() recording.Description {
	return recording.Description{Name: "parquet", About: "Apache Parquet file"}
}

const (
	mostFooter = 8 << 20  // bytes of metadata: schemas nest, and a deeper one would exhaust the stack
	mostPage   = 64 << 20 // bytes of a page, packed or not
	batchRows  = 4096
)

// opened is a Parquet file with the columns that hold one value a row.
type opened struct {
	*file.Reader
	columns []parquetColumn
}

// parquetColumn is one leaf of the schema.
type parquetColumn struct {
	recording.Column
	leaf   *schema.Column
	factor float64 // of decimal numbers
}

func openParquet(source io.Reader, options map[string]string) (*opened, error) {
	if len(options) > 0 {
		return nil, &recording.Error{Text: "the reader has no options", Remedy: "leave them out"}
	}
	at, size, err := anywhere(source)
	if err != nil {
		return nil, err
	}
	head := make([]byte, 4)
	if n, _ := at.ReadAt(head, 0); n == 0 {
		return nil, &recording.Error{Text: "the file is empty", Remedy: "give a recording with at least two rows of samples"}
	}
	if !MarkParquet(head) {
		return nil, &recording.Error{Text: "this is no Parquet file", Remedy: "name the reader for its format"}
	}
	tail := make([]byte, 8)
	if _, err := at.ReadAt(tail, max(0, size-8)); err != nil && !errors.Is(err, io.EOF) {
		return nil, err
	}
	length := int64(binary.LittleEndian.Uint32(tail))
	switch {
	case size < 12 || string(tail[4:]) != parquetMark:
		return nil, &recording.Error{Byte: size, Text: "the file is cut short: its end, which says where the columns lie, is missing", Remedy: "copy it again from the recorder"}
	case length > size-12 || length > mostFooter:
		return nil, &recording.Error{Byte: size - 8, Text: fmt.Sprintf("the file claims %d bytes of metadata", length), Remedy: "write the recording again, or export it as text"}
	}
	properties := parquet.NewReaderProperties(newBounded(size))
	properties.BufferedStreamEnabled = true // page by page, not whole columns
	properties.MaxCompressedPageSize, properties.MaxUncompressedPageSize = mostPage, mostPage
	r, err := file.NewParquetReader(at, file.WithReadProps(properties))
	if err != nil {
		return nil, err
	}
	o := &opened{Reader: r}
	s := r.MetaData().Schema
	if s.NumColumns() > mostFields {
		return nil, errors.New("the schema has too many columns")
	}
	for i := range s.NumColumns() {
		leaf := s.Column(i)
		c := parquetColumn{Column: recording.Column{Name: leaf.Path()}, leaf: leaf, factor: 1}
		c.settle()
		o.columns = append(o.columns, c)
	}
	return o, nil
}

// settle tells by the type whether the column holds numbers, and in which unit.
func (c *parquetColumn) settle() {
	c.Text = c.leaf.MaxRepetitionLevel() > 0
	switch c.leaf.PhysicalType() {
	case parquet.Types.Boolean, parquet.Types.ByteArray:
		c.Text = true
	case parquet.Types.FixedLenByteArray:
		_, half := c.leaf.LogicalType().(schema.Float16LogicalType)
		c.Text = c.Text || !half || c.leaf.TypeLength() != 2
	case parquet.Types.Int96:
		c.Unit = "ns"
	}
	unit := func(u schema.TimeUnitType) string {
		return map[schema.TimeUnitType]string{schema.TimeUnitMillis: "ms", schema.TimeUnitMicros: "us", schema.TimeUnitNanos: "ns"}[u]
	}
	switch t := c.leaf.LogicalType().(type) {
	case schema.TimestampLogicalType:
		c.Unit = unit(t.TimeUnit())
	case schema.TimeLogicalType:
		c.Unit = unit(t.TimeUnit())
	case schema.DecimalLogicalType:
		c.factor = math.Pow10(-int(t.Scale()))
	}
	switch c.leaf.ConvertedType() {
	case schema.ConvertedTypes.TimestampMillis, schema.ConvertedTypes.TimeMillis:
		c.Unit = "ms"
	case schema.ConvertedTypes.TimestampMicros, schema.ConvertedTypes.TimeMicros:
		c.Unit = "us"
	}
}

// Inspect implements recording.Reader.
func (Parquet) Inspect(_ context.Context, source io.Reader, options map[string]string) (h recording.Header, err error) {
	err = guarded("Parquet", func() error {
		o, err := openParquet(source, options)
		if err != nil {
			return err
		}
		for _, c := range o.columns {
			h.Columns = append(h.Columns, c.Column)
		}
		return nil
	})
	return h, err
}

// Read implements recording.Reader.
func (Parquet) Read(ctx context.Context, source io.Reader, request recording.Request, sink func(recording.Batch) error) error {
	return passSink(guarded("Parquet", func() error { return readParquet(ctx, source, request, sink) }))
}

func readParquet(ctx context.Context, source io.Reader, request recording.Request, sink func(recording.Batch) error) error {
	o, err := openParquet(source, request.Options)
	if err != nil {
		return err
	}
	names := request.Columns
	if request.Time != "" {
		names = append(slices.Clone(names), request.Time)
	}
	var wanted []int
	for _, name := range names {
		k, err := o.find(name)
		if err != nil {
			return err
		}
		wanted = append(wanted, k)
	}
	out := recording.Batch{Values: make([][]float64, len(request.Columns))}
	rows := int64(0)
	var first tick
	for g := range o.NumRowGroups() {
		group := o.RowGroup(g)
		var chunks []*chunk
		for _, k := range wanted {
			c, err := group.Column(k)
			if err != nil {
				return err
			}
			chunks = append(chunks, newChunk(c, o.columns[k].leaf))
		}
		for {
			if err := ctx.Err(); err != nil {
				return err
			}
			n := -1
			for i, c := range chunks {
				got, err := c.next()
				if err != nil {
					return &recording.Error{Row: rows + 1, Column: names[i], Text: fmt.Sprintf("the Parquet data is damaged: %v", err), Remedy: "write the recording again, or export it as text"}
				}
				if n >= 0 && got != n {
					return &recording.Error{Row: rows + int64(min(got, n)) + 1, Column: names[i], Text: "the columns differ in length", Remedy: "write the recording again, or export it as text"}
				}
				n = got
			}
			if n <= 0 {
				break
			}
			out.First = rows + 1
			for i := range request.Columns {
				out.Values[i] = chunks[i].values(out.Values[i][:0], o.columns[wanted[i]].factor)
			}
			if request.Time != "" {
				clock, unit := chunks[len(chunks)-1], o.columns[wanted[len(wanted)-1]].factor*request.TimeUnit
				out.Time = out.Time[:0]
				for i := range n {
					if !clock.held[i] {
						out.Time = append(out.Time, math.NaN())
						continue
					}
					if first.kind == 0 {
						first = clock.ticks[i]
					}
					out.Time = append(out.Time, clock.ticks[i].since(first)*unit)
				}
				out.Origin = first.value() * unit
			}
			rows += int64(n)
			if err := sink(out); err != nil {
				return &sinkError{err}
			}
		}
	}
	if rows == 0 {
		return &recording.Error{Text: "the recording has no rows", Remedy: "give a recording with at least two rows of samples"}
	}
	return nil
}

func (o *opened) find(name string) (int, error) {
	at := -1
	for i, c := range o.columns {
		if c.Name != name {
			continue
		}
		if at >= 0 {
			return 0, &recording.Error{Column: name, Text: "several columns have this name", Remedy: "give the columns different names"}
		}
		at = i
	}
	switch {
	case at < 0:
		return 0, &recording.Error{Column: name, Text: "the recording has no such column", Remedy: "name one of its columns"}
	case o.columns[at].Text:
		return 0, &recording.Error{Column: name, Text: fmt.Sprintf("the column holds %s, not numbers", o.columns[at].leaf.PhysicalType()), Remedy: "name a column of numbers"}
	}
	return at, nil
}

// chunk reads one column of a row group, a batch at a time.
type chunk struct {
	read     func() (rows int64, values int, err error)
	value    func(i int) tick
	levels   []int16
	most     int16 // definition level of a value that is there
	rows     int   // of the batch
	ticks    []tick
	held     []bool
	unsigned bool
}

// reading is what all typed readers of a column have in common.
type reading[T any] interface {
	ReadBatch(size int64, values []T, definition, repetition []int16) (total int64, valuesRead int, err error)
}

func typed[T any](c *chunk, r reading[T], value func(T) tick) {
	buffer := make([]T, batchRows)
	c.read = func() (int64, int, error) { return r.ReadBatch(batchRows, buffer, c.levels, nil) }
	c.value = func(i int) tick { return value(buffer[i]) }
}

func newChunk(r file.ColumnChunkReader, leaf *schema.Column) *chunk {
	c := &chunk{levels: make([]int16, batchRows), most: leaf.MaxDefinitionLevel(), ticks: make([]tick, batchRows), held: make([]bool, batchRows)}
	if t, ok := leaf.LogicalType().(schema.IntLogicalType); ok && !t.IsSigned() {
		c.unsigned = true
	}
	real := func(v float64) tick { return tick{real: v, kind: 'f'} }
	whole := func(v int64) tick { return tick{whole: v, kind: 'i'} }
	switch r := r.(type) {
	case *file.Int32ColumnChunkReader:
		typed(c, r, func(v int32) tick {
			if c.unsigned {
				return whole(int64(uint32(v)))
			}
			return whole(int64(v))
		})
	case *file.Int64ColumnChunkReader:
		typed(c, r, func(v int64) tick {
			if c.unsigned {
				return tick{whole: v, kind: 'u'}
			}
			return whole(v)
		})
	case *file.Int96ColumnChunkReader:
		typed(c, r, func(v parquet.Int96) tick { return whole(v.ToTime().UnixNano()) })
	case *file.Float32ColumnChunkReader:
		typed(c, r, func(v float32) tick { return real(float64(v)) })
	case *file.Float64ColumnChunkReader:
		typed(c, r, real)
	case *file.FixedLenByteArrayColumnChunkReader:
		typed(c, r, func(v parquet.FixedLenByteArray) tick { return real(float64(float16.FromLEBytes(v).Float32())) })
	default:
		panic(fmt.Sprintf("a column of type %s holds no numbers", leaf.PhysicalType()))
	}
	return c
}

// next reads up to batchRows rows into ticks and held and gives their number, 0 at the end.
func (c *chunk) next() (int, error) {
	rows, values, err := c.read()
	if err != nil {
		return 0, err
	}
	if rows < 0 || rows > batchRows || values < 0 || int64(values) > rows || c.most == 0 && int64(values) != rows {
		return 0, fmt.Errorf("%d values stand for %d rows", values, rows)
	}
	at := 0
	for i := range int(rows) {
		c.held[i] = c.most == 0 || c.levels[i] == c.most
		if !c.held[i] {
			continue
		}
		if at == values {
			return 0, errors.New("there are fewer values than rows that have one")
		}
		c.ticks[i] = c.value(at)
		at++
		if c.ticks[i].kind == 'f' && math.IsNaN(c.ticks[i].real) {
			c.held[i] = false
		}
	}
	c.rows = int(rows)
	return c.rows, nil
}

// values appends the numbers of the batch, NaN where a row has none.
func (c *chunk) values(out []float64, factor float64) []float64 {
	for i := range c.rows {
		v := math.NaN()
		if c.held[i] {
			v = c.ticks[i].value() * factor
		}
		out = append(out, v)
	}
	return out
}
