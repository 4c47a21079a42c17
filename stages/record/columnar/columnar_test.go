package columnar

import (
	"bytes"
	"context"
	"errors"
	"io"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
	"testing/iotest"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"

	"hushframe/core/signal/recording"
)

var sampleSchema = arrow.NewSchema([]arrow.Field{
	{Name: "t", Type: &arrow.TimestampType{Unit: arrow.Nanosecond}},
	{Name: "gx", Type: arrow.PrimitiveTypes.Float32, Nullable: true, Metadata: arrow.NewMetadata([]string{"unit"}, []string{"deg/s"})},
	{Name: "rpm", Type: arrow.PrimitiveTypes.Uint16},
	{Name: "mode", Type: arrow.BinaryTypes.String},
}, nil)

// sample writes two batches of three rows as a file, plain or compressed.
func sample(t testing.TB, compressed bool) []byte {
	t.Helper()
	return written(t, compressed, func(out io.Writer, options ...ipc.Option) (writer, error) { return ipc.NewFileWriter(out, options...) })
}

// sampleStream writes the same as a stream.
func sampleStream(t testing.TB, compressed bool) []byte {
	t.Helper()
	return written(t, compressed, func(out io.Writer, options ...ipc.Option) (writer, error) { return ipc.NewWriter(out, options...), nil })
}

type writer interface {
	Write(arrow.RecordBatch) error
	Close() error
}

func written(t testing.TB, compressed bool, open func(io.Writer, ...ipc.Option) (writer, error)) []byte {
	t.Helper()
	var out bytes.Buffer
	options := []ipc.Option{ipc.WithSchema(sampleSchema)}
	if compressed {
		options = append(options, ipc.WithZstd())
	}
	w, err := open(&out, options...)
	if err != nil {
		t.Fatal(err)
	}
	b := array.NewRecordBuilder(memory.DefaultAllocator, sampleSchema)
	for k := range 2 {
		for i := range 3 {
			b.Field(0).(*array.TimestampBuilder).Append(arrow.Timestamp(1730147596612924198 + int64(3*k+i)*500))
			if i == 1 {
				b.Field(1).(*array.Float32Builder).AppendNull()
			} else {
				b.Field(1).(*array.Float32Builder).Append(float32(3*k+i) / 2)
			}
			b.Field(2).(*array.Uint16Builder).Append(uint16(60000 + i))
			b.Field(3).(*array.StringBuilder).Append("x")
		}
		record := b.NewRecordBatch()
		if err := w.Write(record); err != nil {
			t.Fatal(err)
		}
		record.Release()
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func TestRead(t *testing.T) {
	for _, compressed := range []bool{false, true} {
		data, stream := sample(t, compressed), sampleStream(t, compressed)
		for name, source := range map[string]func() io.Reader{
			"file":        func() io.Reader { return bytes.NewReader(data) },
			"file, piped": func() io.Reader { return io.MultiReader(bytes.NewReader(data)) }, // cannot be read at any place
			"stream":      func() io.Reader { return iotest.OneByteReader(bytes.NewReader(stream)) },
		} {
			h, err := Reader{}.Inspect(context.Background(), source(), nil)
			if err != nil || len(h.Columns) != 4 || h.Columns[0].Unit != "ns" || h.Columns[1].Unit != "deg/s" || !h.Columns[3].Text || h.Columns[2].Text {
				t.Fatalf("%s: %+v %v", name, h, err)
			}
			var time, gx, rpm []float64
			var first []int64
			err = Reader{}.Read(context.Background(), source(), recording.Request{Columns: []string{"rpm", "gx"}, Time: "t", TimeUnit: 1e-9}, func(b recording.Batch) error {
				time, rpm, gx, first = append(time, b.Time...), append(rpm, b.Values[0]...), append(gx, b.Values[1]...), append(first, b.First)
				return nil
			})
			if err != nil || len(time) != 6 || len(first) != 2 || first[1] != 4 {
				t.Fatalf("%s: %v %v %v", name, time, first, err)
			}
			for i := range time {
				if time[i] != float64(500*i)*1e-9 || rpm[i] != float64(60000+i%3) || i%3 == 1 != math.IsNaN(gx[i]) || i%3 != 1 && gx[i] != float64(i)/2 {
					t.Errorf("%s: row %d: %g %g %g", name, i+1, time[i], rpm[i], gx[i])
				}
			}
		}
	}
}

func TestRefusals(t *testing.T) {
	data := sample(t, false)
	stop := errors.New("enough")
	err := Reader{}.Read(context.Background(), bytes.NewReader(data), recording.Request{Columns: []string{"gx"}}, func(recording.Batch) error { return stop })
	if err != stop {
		t.Errorf("an error of the sink came back as %v", err)
	}
	for text, c := range map[string]struct {
		data    []byte
		request recording.Request
	}{
		"no such column":    {data, recording.Request{Columns: []string{"gy"}}},
		"holds utf8":        {data, recording.Request{Columns: []string{"mode"}}},
		"cut short":         {data[:len(data)/2], recording.Request{Columns: []string{"gx"}}},
		"the file is empty": {nil, recording.Request{Columns: []string{"gx"}}},
		"has no options":    {data, recording.Request{Columns: []string{"gx"}, Options: map[string]string{"a": "b"}}},
		"this is no Arrow":  {[]byte("time,gx\n0,1\n1,2\n"), recording.Request{Columns: []string{"gx"}}},
	} {
		err := Reader{}.Read(context.Background(), bytes.NewReader(c.data), c.request, func(recording.Batch) error { return nil })
		var e *recording.Error
		if !errors.As(err, &e) || !strings.Contains(e.Text, text) || e.Remedy == "" {
			t.Errorf("%q: %v", text, err)
		}
	}
}

// Whatever the bytes, the reader ends with samples or with an *Error that has a remedy.
func FuzzRead(f *testing.F) {
	f.Add(sample(f, false))
	f.Add(sample(f, true))
	f.Add(sampleStream(f, false))
	f.Add(sampleStream(f, true))
	f.Fuzz(func(t *testing.T, data []byte) {
		h, err := Reader{}.Inspect(context.Background(), bytes.NewReader(data), nil)
		if err == nil && len(h.Columns) > 0 {
			err = Reader{}.Read(context.Background(), bytes.NewReader(data), recording.Request{Columns: h.Names()[:1]}, func(recording.Batch) error { return nil })
		}
		var e *recording.Error
		if err != nil && (!errors.As(err, &e) || e.Remedy == "" || e.Text == "") {
			t.Fatalf("%v", err)
		}
	})
}

// Turned bytes anywhere give samples or an *Error, and never more memory than the file may claim.
func TestTurnedBytes(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for _, data := range [][]byte{sample(t, false), sample(t, true), sampleStream(t, false), sampleStream(t, true)} {
		for range 1500 {
			hurt := bytes.Clone(data)
			for range 1 + random.IntN(3) {
				hurt[random.IntN(len(hurt))] = byte(random.IntN(256))
			}
			err := Reader{}.Read(context.Background(), bytes.NewReader(hurt), recording.Request{Columns: []string{"gx"}, Time: "t", TimeUnit: 1}, func(recording.Batch) error { return nil })
			var e *recording.Error
			if err != nil && (!errors.As(err, &e) || e.Remedy == "") {
				t.Fatalf("%v", err)
			}
		}
	}
}

// A stream that ends in its middle gives what came before, and says so.
func TestStreamCutOff(t *testing.T) {
	data := sampleStream(t, false)
	for _, n := range []int{len(data) - 40, len(data) - 200} {
		rows := 0
		var found []recording.Finding
		err := Reader{}.Read(context.Background(), bytes.NewReader(data[:n]), recording.Request{Columns: []string{"rpm"}, Time: "t", TimeUnit: 1}, func(b recording.Batch) error {
			rows += b.Rows()
			found = append(found, b.Findings...)
			return nil
		})
		if err != nil || rows != 3 || len(found) != 1 || found[0].What != "cut off" || !strings.Contains(found[0].Extent, "after row 3") {
			t.Errorf("%d bytes: %d rows, %+v, %v", n, rows, found, err)
		}
	}
	err := Reader{}.Read(context.Background(), bytes.NewReader(data[:300]), recording.Request{Columns: []string{"rpm"}}, func(recording.Batch) error { return nil })
	var e *recording.Error
	if !errors.As(err, &e) || e.Remedy == "" {
		t.Errorf("%v", err)
	}
}
