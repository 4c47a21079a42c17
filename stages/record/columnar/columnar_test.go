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

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"

	"hushframe/core/signal/recording"
)

var schema = arrow.NewSchema([]arrow.Field{
	{Name: "t", Type: &arrow.TimestampType{Unit: arrow.Nanosecond}},
	{Name: "gx", Type: arrow.PrimitiveTypes.Float32, Nullable: true, Metadata: arrow.NewMetadata([]string{"unit"}, []string{"deg/s"})},
	{Name: "rpm", Type: arrow.PrimitiveTypes.Uint16},
	{Name: "mode", Type: arrow.BinaryTypes.String},
}, nil)

// sample writes two batches of three rows, plain or compressed.
func sample(t testing.TB, compressed bool) []byte {
	t.Helper()
	var out bytes.Buffer
	options := []ipc.Option{ipc.WithSchema(schema)}
	if compressed {
		options = append(options, ipc.WithZstd())
	}
	w, err := ipc.NewFileWriter(&out, options...)
	if err != nil {
		t.Fatal(err)
	}
	b := array.NewRecordBuilder(memory.DefaultAllocator, schema)
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
		data := sample(t, compressed)
		for name, source := range map[string]func() io.Reader{
			"file":   func() io.Reader { return bytes.NewReader(data) },
			"stream": func() io.Reader { return io.MultiReader(bytes.NewReader(data)) }, // cannot be read at any place
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
		"damaged":           {data[:len(data)/2], recording.Request{Columns: []string{"gx"}}},
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
	for _, compressed := range []bool{false, true} {
		data := sample(t, compressed)
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
