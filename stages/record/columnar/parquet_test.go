package columnar

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/parquet"
	"github.com/apache/arrow-go/v18/parquet/compress"
	"github.com/apache/arrow-go/v18/parquet/file"
	"github.com/apache/arrow-go/v18/parquet/schema"

	"hushframe/core/signal/recording"
)

// parquetSample writes two groups of rows: nanoseconds, a float with nulls, an unsigned number, a decimal, a text.
func parquetSample(t testing.TB, groups, rows int, codec compress.Compression) []byte {
	t.Helper()
	stamp := schema.NewTimestampLogicalType(true, schema.TimeUnitNanos)
	node := func(n schema.Node, err error) schema.Node {
		if err != nil {
			t.Fatal(err)
		}
		return n
	}
	root, err := schema.NewGroupNode("recording", parquet.Repetitions.Required, schema.FieldList{
		node(schema.NewPrimitiveNodeLogical("t", parquet.Repetitions.Required, stamp, parquet.Types.Int64, 0, -1)),
		schema.NewFloat32Node("gx", parquet.Repetitions.Optional, -1),
		node(schema.NewPrimitiveNodeLogical("rpm", parquet.Repetitions.Required, schema.NewIntLogicalType(16, false), parquet.Types.Int32, 0, -1)),
		node(schema.NewPrimitiveNodeLogical("throttle", parquet.Repetitions.Required, schema.NewDecimalLogicalType(6, 2), parquet.Types.Int32, 0, -1)),
		schema.NewByteArrayNode("mode", parquet.Repetitions.Required, -1),
	}, -1)
	if err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	w := file.NewParquetWriter(&out, root, file.WithWriterProps(parquet.NewWriterProperties(parquet.WithCompression(codec), parquet.WithDataPageSize(2048))))
	at := 0
	for range groups {
		g, err := w.AppendRowGroupChecked()
		if err != nil {
			t.Fatal(err)
		}
		next := func() file.ColumnChunkWriter {
			c, err := g.NextColumn()
			if err != nil {
				t.Fatal(err)
			}
			return c
		}
		var times []int64
		var gx []float32
		var levels []int16
		var rpm, throttle []int32
		var mode []parquet.ByteArray
		for i := at; i < at+rows; i++ {
			times = append(times, 1730147596612924198+int64(i)*500)
			if i%3 == 1 {
				levels = append(levels, 0)
			} else {
				levels, gx = append(levels, 1), append(gx, float32(i)/2)
			}
			rpm, throttle, mode = append(rpm, int32(60000+i%3)), append(throttle, int32(1234)), append(mode, []byte("x"))
		}
		at += rows
		for _, write := range []func() error{
			func() error { _, err := next().(*file.Int64ColumnChunkWriter).WriteBatch(times, nil, nil); return err },
			func() error {
				_, err := next().(*file.Float32ColumnChunkWriter).WriteBatch(gx, levels, nil)
				return err
			},
			func() error { _, err := next().(*file.Int32ColumnChunkWriter).WriteBatch(rpm, nil, nil); return err },
			func() error {
				_, err := next().(*file.Int32ColumnChunkWriter).WriteBatch(throttle, nil, nil)
				return err
			},
			func() error {
				_, err := next().(*file.ByteArrayColumnChunkWriter).WriteBatch(mode, nil, nil)
				return err
			},
			g.Close,
		} {
			if err := write(); err != nil {
				t.Fatal(err)
			}
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func TestParquet(t *testing.T) {
	for _, codec := range []compress.Compression{compress.Codecs.Uncompressed, compress.Codecs.Snappy, compress.Codecs.Gzip, compress.Codecs.Zstd, compress.Codecs.Brotli, compress.Codecs.Lz4Raw} {
		data := parquetSample(t, 2, 5000, codec)
		h, err := Parquet{}.Inspect(context.Background(), bytes.NewReader(data), nil)
		if err != nil || strings.Join(h.Names(), " ") != "t gx rpm throttle mode" || h.Columns[0].Unit != "ns" || !h.Columns[4].Text || h.Columns[2].Text {
			t.Fatalf("%s: %+v %v", codec, h, err)
		}
		rows := 0
		err = Parquet{}.Read(context.Background(), bytes.NewReader(data), recording.Request{Columns: []string{"rpm", "gx", "throttle"}, Time: "t", TimeUnit: 1e-9}, func(b recording.Batch) error {
			if b.First != int64(rows+1) {
				t.Fatalf("%s: a batch begins at row %d after %d", codec, b.First, rows)
			}
			for i := range b.Time {
				k := rows + i
				if b.Time[i] != float64(500*k)*1e-9 || b.Values[0][i] != float64(60000+k%3) || k%3 == 1 != math.IsNaN(b.Values[1][i]) ||
					k%3 != 1 && b.Values[1][i] != float64(float32(k)/2) || math.Abs(b.Values[2][i]-12.34) > 1e-12 {
					t.Fatalf("%s: row %d: %g %g %g %g", codec, k+1, b.Time[i], b.Values[0][i], b.Values[1][i], b.Values[2][i])
				}
			}
			rows += b.Rows()
			return nil
		})
		if err != nil || rows != 10000 {
			t.Fatalf("%s: %d rows, %v", codec, rows, err)
		}
	}
}

func TestParquetRefusals(t *testing.T) {
	data := parquetSample(t, 1, 50, compress.Codecs.Snappy)
	claim := bytes.Clone(data)
	binary.LittleEndian.PutUint32(claim[len(claim)-8:], 1<<31)
	stop := errors.New("enough")
	err := Parquet{}.Read(context.Background(), bytes.NewReader(data), recording.Request{Columns: []string{"gx"}}, func(recording.Batch) error { return stop })
	if err != stop {
		t.Errorf("an error of the sink came back as %v", err)
	}
	for text, c := range map[string]struct {
		data    []byte
		request recording.Request
	}{
		"no such column":                {data, recording.Request{Columns: []string{"gy"}}},
		"holds BYTE_ARRAY, not numbers": {data, recording.Request{Columns: []string{"mode"}}},
		"the file is empty":             {nil, recording.Request{Columns: []string{"gx"}}},
		"this is no Parquet file":       {[]byte("time,gx\n0,1\n"), recording.Request{Columns: []string{"gx"}}},
		"the file is cut short":         {data[:len(data)-20], recording.Request{Columns: []string{"gx"}}},
		"claims 2147483648 bytes":       {claim, recording.Request{Columns: []string{"gx"}}},
		"has no rows":                   {parquetSample(t, 1, 0, compress.Codecs.Snappy), recording.Request{Columns: []string{"gx"}}},
		"has no options":                {data, recording.Request{Columns: []string{"gx"}, Options: map[string]string{"a": "b"}}},
	} {
		err := Parquet{}.Read(context.Background(), bytes.NewReader(c.data), c.request, func(recording.Batch) error { return nil })
		var e *recording.Error
		if !errors.As(err, &e) || !strings.Contains(e.Text, text) || e.Remedy == "" {
			t.Errorf("%q: %v", text, err)
		}
	}
}

// What a page unpacks to is bounded by what it may hold, not by what the packed bytes claim.
func TestPackedClaims(t *testing.T) {
	claim := binary.AppendUvarint(nil, 1<<31)
	if _, err := decodeSnappy(make([]byte, 100), append(claim, 0, 'x')); !errors.Is(err, errClaim) {
		t.Errorf("snappy: %v", err)
	}
	codec, err := compress.GetCodec(compress.Codecs.Zstd)
	if err != nil {
		t.Fatal(err)
	}
	bomb := codec.Encode(nil, make([]byte, mostPage+1))
	if _, err := compress.Decode(codec, make([]byte, 100), bomb); err == nil {
		t.Errorf("zstd: %d bytes made more than a page", len(bomb))
	}
}

func readsOrTells(t *testing.T, data []byte) {
	t.Helper()
	h, err := Parquet{}.Inspect(context.Background(), bytes.NewReader(data), nil)
	if err == nil {
		request := recording.Request{}
		for _, c := range h.Columns {
			if !c.Text && len(request.Columns) < 3 {
				request.Columns = append(request.Columns, c.Name)
			}
		}
		err = Parquet{}.Read(context.Background(), bytes.NewReader(data), request, func(recording.Batch) error { return nil })
	}
	var e *recording.Error
	if err != nil && (!errors.As(err, &e) || e.Remedy == "" || e.Text == "") {
		t.Fatalf("%v", err)
	}
}

// Whatever the bytes, the reader ends with samples or with an *Error that has a remedy.
func FuzzParquet(f *testing.F) {
	for _, codec := range []compress.Compression{compress.Codecs.Uncompressed, compress.Codecs.Snappy, compress.Codecs.Zstd, compress.Codecs.Gzip} {
		f.Add(parquetSample(f, 2, 20, codec))
	}
	f.Fuzz(func(t *testing.T, data []byte) { readsOrTells(t, data) })
}

// Turned and missing bytes anywhere give samples or an *Error.
func TestTurnedParquet(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	for _, codec := range []compress.Compression{compress.Codecs.Uncompressed, compress.Codecs.Snappy, compress.Codecs.Zstd, compress.Codecs.Lz4Raw} {
		data := parquetSample(t, 2, 100, codec)
		for range 200 {
			hurt := bytes.Clone(data)
			for range 1 + random.IntN(3) {
				hurt[random.IntN(len(hurt))] = byte(random.IntN(256))
			}
			readsOrTells(t, hurt)
			from := random.IntN(len(data))
			readsOrTells(t, append(bytes.Clone(data[:from]), data[min(len(data), from+1+random.IntN(50)):]...))
		}
	}
}

// A schema of many nested groups, one so deep that its metadata is refused unread, and a metadata of endless lists, end
// with an *Error.
func TestHostileSchema(t *testing.T) {
	// Thrift's compact form: field 2, a list of schema elements, each a group of one child.
	nested := func(depth uint64) []byte {
		out := binary.AppendUvarint([]byte{0x15, 2, 0x19, 0xfc}, depth)
		for range depth {
			out = append(out, 0x48, 1, 'a', 0x15, 2, 0) // name, num_children = 1
		}
		return append(out, 0x16, 0, 0x19, 0x0c, 0)
	}
	for name, c := range map[string]struct {
		metadata []byte
		want     string
	}{
		"nested": {nested(300_000), "damaged"},
		"deep":   {nested(1_500_000), "the file claims 9000012 bytes of metadata"},
		"claims": {[]byte{0x15, 2, 0x19, 0xfc, 0xff, 0xff, 0xff, 0xff, 0x07, 0}, "damaged"},
	} {
		data := append([]byte(parquetMark), c.metadata...)
		data = append(binary.LittleEndian.AppendUint32(data, uint32(len(c.metadata))), parquetMark...)
		_, err := Parquet{}.Inspect(context.Background(), bytes.NewReader(data), nil)
		var e *recording.Error
		if !errors.As(err, &e) || !strings.Contains(e.Text, c.want) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func ExampleParquet() {
	_, err := Parquet{}.Inspect(context.Background(), strings.NewReader("PAR1 and no more than that"), nil)
	fmt.Fprintln(os.Stdout, err)
	// Output: byte 26: the file is cut short: its end, which says where the columns lie, is missing; copy it again from the recorder
}
