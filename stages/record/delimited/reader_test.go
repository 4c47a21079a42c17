package delimited

import (
	"bytes"
	"compress/gzip"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"testing"
	"testing/iotest"

	"hushframe/core/signal/recording"
)

// table is all that Read delivers.
type table struct {
	time   []float64
	values [][]float64
	origin float64
	notes  []string

	findings []recording.Finding
}

func readAll(source io.Reader, request recording.Request) (table, error) {
	out := table{values: make([][]float64, len(request.Columns))}
	row := int64(1)
	err := Reader{}.Read(context.Background(), source, request, func(b recording.Batch) error {
		if b.First != row {
			return fmt.Errorf("batch begins at row %d, want %d", b.First, row)
		}
		row += int64(b.Rows())
		out.time = append(out.time, b.Time...)
		for k, v := range b.Values {
			out.values[k] = append(out.values[k], v...)
		}
		out.origin = b.Origin
		out.notes, out.findings = append(out.notes, b.Notes...), append(out.findings, b.Findings...)
		return nil
	})
	return out, err
}

// same compares with NaN equal to NaN.
func same(a, b []float64) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i] != b[i] && !(math.IsNaN(a[i]) && math.IsNaN(b[i])) {
			return false
		}
	}
	return true
}

func TestLayouts(t *testing.T) {
	for _, c := range []struct {
		name, text string
		names      []string
		units      []string
		notes      string
		values     []float64 // of the last column
	}{
		{"plain", "t,a,b\n0,1,2\n1,3,4\n", []string{"t", "a", "b"}, []string{"", "", ""}, "comma", []float64{2, 4}},
		{"mark, carriage returns, no last end", "\ufefft;a\r\n0;1\r\n1;-3", []string{"t", "a"}, []string{"", ""}, "semicolon", []float64{1, -3}},
		{"units in brackets", "time [s],gyro x (deg/s)\n0,1\n1,2\n", []string{"time [s]", "gyro x (deg/s)"}, []string{"s", "deg/s"}, "comma", []float64{1, 2}},
		{"a line of units", "time\tgx\ns\tdeg/s\n0\t5\n1\t6\n", []string{"time", "gx"}, []string{"s", "deg/s"}, "tab", []float64{5, 6}},
		{"names in a comment", "# flight 3\n# t gx\n0 5\n1 6\n", []string{"t", "gx"}, []string{"", ""}, "blank", []float64{5, 6}},
		{"a comment below the names", "t,gx\n# a,b,c\n0,5\n1,6\n", []string{"t", "gx"}, []string{"", ""}, "comma", []float64{5, 6}},
		{"blanks for a table", "   t     gx\n 0.0   1.5\n 1.0  -2.5\n", []string{"t", "gx"}, []string{"", ""}, "blank", []float64{1.5, -2.5}},
		{"decimal comma", "t;gx\n0,5;1,25\n1,5;2,5\n", []string{"t", "gx"}, []string{"", ""}, "decimal comma", []float64{1.25, 2.5}},
		{"no names", "0|5\n1|6\n", []string{"column 1", "column 2"}, []string{"", ""}, "no line of names", []float64{5, 6}},
		{"quotes in a quoted name", "t,\"gyro \"\"x\"\", rate [deg/s]\"\n0,5\n1,6\n", []string{"t", "gyro \"x\", rate [deg/s]"}, []string{"", "deg/s"}, "comma", []float64{5, 6}},
		{"rows end in a separator", "t,gx\n0,5,\n1,6,\n", []string{"t", "gx", "column 3"}, []string{"", "", ""}, "comma", []float64{math.NaN(), math.NaN()}},
		{"names end in a separator", "t,gx,\n0,5\n1,6\n", []string{"t", "gx"}, []string{"", ""}, "comma", []float64{5, 6}},
		{"no sample in the first rows", "t,gx,gy\n0,nan,null\n,,NaN\n2,6,7\n3,8,9\n", []string{"t", "gx", "gy"}, []string{"", "", ""}, "comma", []float64{math.NaN(), math.NaN(), 7, 9}},
		{"quoted", "\"t, s\",\"gx\"\n\"0\",\"5\"\n\"1\",\"6\"\n", []string{"t, s", "gx"}, []string{"", ""}, "comma", []float64{5, 6}},
		{"preamble", "Recorder 7\nrate,2000\nchannels,2,of,9\n\nt,gx\n0,5\n1,6\n2,7\n", []string{"t", "gx"}, []string{"", ""}, "comma", []float64{5, 6, 7}},
		{"missing samples", "t,gx\n0,\n1,NaN\n2,null\n3,4\n", []string{"t", "gx"}, []string{"", ""}, "comma", []float64{math.NaN(), math.NaN(), math.NaN(), 4}},
		{"one column", "gx\n5\n6\n", []string{"gx"}, []string{""}, "", []float64{5, 6}},
		{"empty lines", "t,gx\n\n0,5\n\n# pause\n1,6\n", []string{"t", "gx"}, []string{"", ""}, "comma", []float64{5, 6}},
	} {
		h, err := Reader{}.Inspect(context.Background(), strings.NewReader(c.text), nil)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		var units []string
		for _, col := range h.Columns {
			units = append(units, col.Unit)
		}
		if !reflect.DeepEqual(h.Names(), c.names) || !reflect.DeepEqual(units, c.units) || !strings.Contains(strings.Join(h.Notes, "; "), c.notes) {
			t.Errorf("%s: %+v", c.name, h)
		}
		got, err := readAll(iotest.OneByteReader(strings.NewReader(c.text)), recording.Request{Columns: c.names[len(c.names)-1:]})
		if err != nil || !same(got.values[0], c.values) {
			t.Errorf("%s: %v, %v", c.name, got.values, err)
		}
	}
}

// Rows that are hurt stand right below the names, and are told as any others.
func TestFirstRowsAreHurt(t *testing.T) {
	for _, c := range []struct {
		name, text string
		hurt       int
		values     []float64 // of the last column
	}{
		{"infinite", "0,nan,inf\n1,2,-Infinity\n", 2, []float64{math.NaN(), math.NaN()}},
		{"short", "0\n", 1, []float64{math.NaN()}},
		{"long", "0,1,5,3\n", 0, []float64{5}},
	} {
		text := "t,gx,gy\n" + c.text + strings.Repeat("2,6,7\n", 400)
		h, err := Reader{}.Inspect(context.Background(), strings.NewReader(text), nil)
		if err != nil || !reflect.DeepEqual(h.Names(), []string{"t", "gx", "gy"}) {
			t.Errorf("%s: %v, %v", c.name, h.Names(), err)
			continue
		}
		got, err := readAll(strings.NewReader(text), recording.Request{Columns: []string{"gy"}})
		if err != nil || !same(got.values[0], append(c.values, slices.Repeat([]float64{7}, 400)...)) {
			t.Errorf("%s: %.4g, %v", c.name, got.values, err)
		}
		if told := fmt.Sprint(got.findings); c.hurt > 0 && !strings.Contains(told, fmt.Sprintf("in %d of ", c.hurt)) || c.hurt == 0 && len(got.findings) > 0 {
			t.Errorf("%s: %s", c.name, told)
		}
	}
}

// Bytes after the end of a compressed text are told; all rows of the text are read.
func TestBytesAfterTheCompressedEnd(t *testing.T) {
	var packed bytes.Buffer
	z := gzip.NewWriter(&packed)
	io.WriteString(z, "t,gx\n0,5\n1,6\n2,7")
	z.Close()
	packed.WriteString("not a second part of it")
	got, err := readAll(&packed, recording.Request{Columns: []string{"gx"}})
	if err != nil || !same(got.values[0], []float64{5, 6, 7}) || len(got.findings) != 1 || !strings.Contains(got.findings[0].Extent, "ends after byte 16, and bytes follow") {
		t.Errorf("%v, %+v, %v", got.values, got.findings, err)
	}
}

func TestTextColumnsAndEmptyCells(t *testing.T) {
	text := "state,t,ax,note\nS,0,,x\nS,1,5,\nM,2,,y\n"
	h, err := Reader{}.Inspect(context.Background(), strings.NewReader(text), map[string]string{"separator": "comma"})
	if err != nil {
		t.Fatal(err)
	}
	var kinds []bool
	for _, c := range h.Columns {
		kinds = append(kinds, c.Text)
	}
	if !reflect.DeepEqual(kinds, []bool{true, false, false, true}) {
		t.Errorf("%+v", h.Columns)
	}
	got, err := readAll(strings.NewReader(text), recording.Request{Columns: []string{"ax"}, Time: "t", TimeUnit: 1e-3})
	if err != nil || !same(got.values[0], []float64{math.NaN(), 5, math.NaN()}) || !same(got.time, []float64{0, 0.001, 0.002}) {
		t.Errorf("%+v, %v", got, err)
	}
}

func TestBatchesAndGzip(t *testing.T) {
	var text strings.Builder
	text.WriteString("t,a\n")
	const rows = 3*batchRows + 17
	for i := range rows {
		fmt.Fprintf(&text, "%d,%d\n", 1000+i, i*i)
	}
	packed := zip(t, text.String())
	got, err := readAll(bytes.NewReader(packed), recording.Request{Columns: []string{"a"}, Time: "t", TimeUnit: 1e-3})
	if err != nil || len(got.time) != rows || got.origin != 1 {
		t.Fatalf("%d rows, origin %g, %v", len(got.time), got.origin, err)
	}
	for i, v := range got.values[0] {
		if v != float64(i*i) || math.Abs(got.time[i]-float64(i)/1000) > 1e-12 {
			t.Fatalf("row %d: %g at %g", i, v, got.time[i])
		}
	}
	stop := errors.New("enough")
	err = Reader{}.Read(context.Background(), bytes.NewReader(packed), recording.Request{Columns: []string{"a"}},
		func(recording.Batch) error { return stop })
	if err != stop {
		t.Errorf("an error of the sink came back as %v", err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	err = Reader{}.Read(ctx, bytes.NewReader(packed), recording.Request{Columns: []string{"a"}}, func(recording.Batch) error { return nil })
	if !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
}

func zip(t testing.TB, text string) []byte {
	var packed bytes.Buffer
	w := gzip.NewWriter(&packed)
	if _, err := w.Write([]byte(text)); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return packed.Bytes()
}

func TestLastLineCutOff(t *testing.T) {
	got, err := readAll(strings.NewReader("t,a,b\n0,1,2\n1,3,4\n2,5"), recording.Request{Columns: []string{"a", "b"}, Time: "t", TimeUnit: 1})
	if err != nil || !same(got.values[0], []float64{1, 3}) || len(got.time) != 2 || len(got.notes) != 1 {
		t.Errorf("%+v, %v", got, err)
	}
}

func TestRefusals(t *testing.T) {
	var long bytes.Buffer
	for i := range 60000 {
		fmt.Fprintf(&long, "%d,%d\n", i, rand.IntN(1e9))
	}
	packed := zip(t, long.String())
	flipped := bytes.Clone(packed)
	flipped[len(flipped)-6] ^= 0xff // within the checksum
	for _, c := range []struct {
		name   string
		text   string
		column string
		want   string // substrings, separated by …
	}{
		{"nothing", "", "a", "the file is empty"},
		{"blank", "\n \n\n", "a", "the file is empty"},
		{"no numbers", "one\ntwo\n", "a", "no line holds numbers"},
		{"binary", "t,a\n0,1\x00", "a", "byte 7…zero byte…UTF-8"},
		{"utf-16", "\xff\xfet\x00", "a", "UTF-16"},
		{"text in a number", "t,a,c\n0,1,1\n1,x1,2\n2,3,3\n", "a", `line 3, row 2, column "a": "x1" is not a number; mend`},
		{"infinite", "t,a,c\n0,1,1\n1,inf,2\n2,3,3\n", "a", `"inf" is not a number`},
		{"short row", "t,a,b\n0,1,2\n1,3\n2,5,6\n", "b", `line 3, row 2, column "b": the row ends after field 2 of 3`},
		{"no column", "t,gyro_x\n0,1\n1,2\n", "gyro_y", `column "gyro_y": the recording has no such column`},
		{"two of a name", "t,a,a\n0,1,2\n1,3,4\n", "a", "no such column"},
		{"cut off at once", string(packed[:12]), "column 2", "ends in its middle"},
		{"damaged", string(flipped), "column 2", "damaged"},
		{"one endless line", "t,a\n0,1\n1,2\n" + strings.Repeat("3,", blockSize), "a", "longer than"},
	} {
		_, err := readAll(strings.NewReader(c.text), recording.Request{Columns: []string{c.column}})
		var e *recording.Error
		if !errors.As(err, &e) {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		for _, part := range strings.Split(c.want, "…") {
			if !strings.Contains(e.Error(), part) {
				t.Errorf("%s: %q lacks %q", c.name, e.Error(), part)
			}
		}
		if e.Remedy == "" {
			t.Errorf("%s: no remedy", c.name)
		}
	}
	if got, err := readAll(bytes.NewReader(packed[:len(packed)/2]), recording.Request{Columns: []string{"column 2"}}); err != nil || len(got.values[0]) < 20000 ||
		len(got.findings) != 1 || got.findings[0].What != "cut off" {
		t.Errorf("what is left of a packed file: %d rows, %+v, %v", len(got.values[0]), got.findings, err)
	}
	h, err := (Reader{}).Inspect(context.Background(), strings.NewReader("t,a,a,\n0,1,2,5\n1,3,4,5\n"), nil)
	if names := strings.Join(h.Names(), "|"); err != nil || names != "t|a #2|a #3|column 4" {
		t.Errorf("%s, %v", names, err)
	}
	if _, err := readAll(strings.NewReader("t,a\n0,1\nlate,2\n2,3\n"), recording.Request{Columns: []string{"a"}, Time: "t", TimeUnit: 1}); err == nil ||
		!strings.Contains(err.Error(), `line 3, row 2, column "t": the time "late" is not a number`) {
		t.Error(err)
	}
	if _, err := (Reader{}).Inspect(context.Background(), strings.NewReader("1,2\n"), map[string]string{"separator": "dot"}); err == nil ||
		!strings.Contains(err.Error(), `no separator "dot"`) {
		t.Error(err)
	}
}

// A minute at 2 kHz with nine columns, of which eight are read.
func BenchmarkRead(b *testing.B) {
	random := rand.New(rand.NewPCG(1, 1))
	var text bytes.Buffer
	text.WriteString("time_us,gx,gy,gz,throttle_pct,rpm_1,rpm_2,rpm_3,rpm_4\n")
	var line []byte
	for i := range 120000 {
		line = strconv.AppendInt(line[:0], 4_000_000+int64(i)*500, 10)
		for range 3 {
			line = strconv.AppendFloat(append(line, ','), random.NormFloat64()*20, 'f', 2, 64)
		}
		line = strconv.AppendFloat(append(line, ','), 31, 'f', 1, 64)
		for range 4 {
			line = strconv.AppendFloat(append(line, ','), 16000+500*random.NormFloat64(), 'f', 0, 64)
		}
		text.Write(append(line, '\n'))
	}
	request := recording.Request{Columns: []string{"gx", "gy", "gz", "rpm_1", "rpm_2", "rpm_3", "rpm_4"}, Time: "time_us", TimeUnit: 1e-6}
	for name, data := range map[string][]byte{"plain": text.Bytes(), "gzip": zip(b, text.String())} {
		b.Run(name, func(b *testing.B) {
			b.SetBytes(int64(text.Len()))
			b.ReportAllocs()
			for b.Loop() {
				err := Reader{}.Read(context.Background(), bytes.NewReader(data), request, func(recording.Batch) error { return nil })
				if err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
