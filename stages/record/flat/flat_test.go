package flat

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"strings"
	"testing"

	"hushframe/core/signal/recording"
)

func readAll(data []byte, r recording.Request) (time []float64, values [][]float64, notes []string, err error) {
	values = make([][]float64, len(r.Columns))
	err = Reader{}.Read(context.Background(), bytes.NewReader(data), r, func(b recording.Batch) error {
		time = append(time, b.Time...)
		for k, v := range b.Values {
			values[k] = append(values[k], v...)
		}
		notes = append(notes, b.Notes...)
		return nil
	})
	return time, values, notes, err
}

// Every type in both byte orders, behind a header and beside bytes that are passed over, with factors.
func TestTypes(t *testing.T) {
	fields := "a:i8, b:u8, -:3, c:i16:0.5, d:u16, e:i24, f:u24:2, g:i32, h:u32, i:i64, j:u64, k:f32, l:f64:-1"
	for name, order := range map[string]binary.AppendByteOrder{"little": binary.LittleEndian, "big": binary.BigEndian} {
		data := []byte("HEADER!")
		for range 2 {
			data = append(data, 0xff, 0xff, 1, 2, 3)
			data = order.AppendUint16(data, 0xfffe)
			data = order.AppendUint16(data, 0xfffe)
			three := []byte{0xfd, 0xff, 0xff} // little-endian -3
			if name == "big" {
				three = []byte{0xff, 0xff, 0xfd}
			}
			data = append(append(data, three...), three...)
			data = order.AppendUint32(data, 0xfffffffc)
			data = order.AppendUint32(data, 0xfffffffc)
			data = order.AppendUint64(data, 0xfffffffffffffffb)
			data = order.AppendUint64(data, 1<<63)
			data = order.AppendUint32(data, 0x3fc00000)         // 1.5
			data = order.AppendUint64(data, 0x4004000000000000) // 2.5
		}
		data = append(data, 9, 9)
		options := map[string]string{"fields": fields, "byte_order": name, "header": "7"}
		h, err := Reader{}.Inspect(context.Background(), nil, options)
		if err != nil || len(h.Columns) != 12 {
			t.Fatalf("%+v %v", h, err)
		}
		_, got, notes, err := readAll(data, recording.Request{Columns: h.Names(), Options: options})
		want := []float64{-1, 255, -1, 65534, -3, 2 * 16777213, -4, 4294967292, -5, 9223372036854775808, 1.5, -2.5}
		if err != nil || len(notes) != 1 || !strings.HasPrefix(notes[0], "2 bytes after") {
			t.Fatalf("%v %v", notes, err)
		}
		for k, v := range want {
			if len(got[k]) != 2 || got[k][0] != v || got[k][1] != v {
				t.Errorf("%s: %s is %v, want %g", name, h.Columns[k].Name, got[k], v)
			}
		}
	}
}

// Nanoseconds since an epoch keep their digits.
func TestTime(t *testing.T) {
	var data []byte
	for i := range uint64(3) {
		data = binary.LittleEndian.AppendUint64(data, 1730147596612924198+i*500)
		data = append(data, byte(i))
	}
	time, got, _, err := readAll(data, recording.Request{Columns: []string{"x"}, Time: "t", TimeUnit: 1e-9, Options: map[string]string{"fields": "t:u64,x:u8"}})
	if err != nil || len(time) != 3 || got[0][2] != 2 {
		t.Fatalf("%v %v %v", time, got, err)
	}
	for i, v := range time {
		if v != float64(500*i)*1e-9 {
			t.Errorf("time %d is %g", i, v)
		}
	}
}

func TestRefusals(t *testing.T) {
	for text, options := range map[string]map[string]string{
		"not declared":             {},
		"has no known form":        {"fields": "gx:int16"},
		"passes over":              {"fields": "-:x"},
		"only pass over":           {"fields": "-:4"},
		"no number other than":     {"fields": "gx:i16:zero"},
		"two fields":               {"fields": "a:i8,a:i8"},
		"too long":                 {"fields": "-:65536,a:i8"},
		"no byte order":            {"fields": "a:i8", "byte_order": "middle"},
		"no number of bytes":       {"fields": "a:i8", "header": "-1"},
		"no option \"rate\"":       {"fields": "a:i8", "rate": "1"},
		"ends within its header":   {"fields": "a:i8", "header": "99"},
		"holds no whole record":    {"fields": "a:f64"},
		"the records have no such": {"fields": "b:i8"},
	} {
		_, _, _, err := readAll([]byte{1, 2, 3}, recording.Request{Columns: []string{"a"}, Options: options})
		var e *recording.Error
		if !errors.As(err, &e) || !strings.Contains(e.Text, text) || e.Remedy == "" {
			t.Errorf("%q: %v", text, err)
		}
	}
}

// Whatever the layout and the bytes, the reader ends with samples or with an *Error that has a remedy.
func FuzzRead(f *testing.F) {
	f.Add("t:u32:1e-6, gx:i16", "4", []byte("abcd0123456789"))
	f.Add("-:2,a:f64", "", []byte("0123456789"))
	f.Fuzz(func(t *testing.T, fields, header string, data []byte) {
		options := map[string]string{"fields": fields, "header": header}
		h, err := Reader{}.Inspect(context.Background(), bytes.NewReader(data), options)
		if err == nil {
			_, _, _, err = readAll(data, recording.Request{Columns: h.Names()[:1], Time: h.Columns[0].Name, TimeUnit: 1, Options: options})
		}
		var e *recording.Error
		if err != nil && (!errors.As(err, &e) || e.Remedy == "" || e.Text == "") {
			t.Fatalf("%v", err)
		}
	})
}
