package wave

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"math"
	"strings"
	"testing"

	"hushframe/core/signal/recording"
)

// file makes a WAV file: extra chunks, then the format, then the samples, which are given as bytes.
func file(tag, channels, bits int, rate uint32, data []byte, extra ...[]byte) []byte {
	var b bytes.Buffer
	u16 := func(v int) { binary.Write(&b, binary.LittleEndian, uint16(v)) }
	u32 := func(v uint32) { binary.Write(&b, binary.LittleEndian, v) }
	b.WriteString("RIFF")
	u32(0)
	b.WriteString("WAVE")
	for _, e := range extra {
		b.Write(e)
	}
	b.WriteString("fmt ")
	u32(16)
	u16(tag)
	u16(channels)
	u32(rate)
	u32(rate * uint32(channels*bits/8))
	u16(channels * bits / 8)
	u16(bits)
	b.WriteString("data")
	u32(uint32(len(data)))
	b.Write(data)
	return b.Bytes()
}

func readAll(data []byte, r recording.Request) (values [][]float64, notes []string, err error) {
	values = make([][]float64, len(r.Columns))
	err = Reader{}.Read(context.Background(), bytes.NewReader(data), r, func(b recording.Batch) error {
		for k, v := range b.Values {
			values[k] = append(values[k], v...)
		}
		notes = append(notes, b.Notes...)
		return nil
	})
	return values, notes, err
}

// Values of every format, by hand: half of full scale, negative, and the extremes.
func TestFormats(t *testing.T) {
	float := make([]byte, 24)
	binary.LittleEndian.PutUint64(float, math.Float64bits(0.5))
	binary.LittleEndian.PutUint64(float[8:], math.Float64bits(-1))
	binary.LittleEndian.PutUint64(float[16:], math.Float64bits(3.25))
	for name, c := range map[string]struct {
		data []byte
		want []float64
	}{
		"8":  {file(1, 1, 8, 1000, []byte{192, 0, 255}), []float64{0.5, -1, 127.0 / 128}},
		"16": {file(1, 1, 16, 1000, []byte{0x00, 0x40, 0x00, 0x80, 0xff, 0x7f}), []float64{0.5, -1, 32767.0 / 32768}},
		"24": {file(1, 1, 24, 1000, []byte{0, 0, 0x40, 0, 0, 0x80, 0xff, 0xff, 0xff}), []float64{0.5, -1, -1.0 / (1 << 23)}},
		"32": {file(1, 1, 32, 1000, []byte{0, 0, 0, 0x40, 0, 0, 0, 0x80, 1, 0, 0, 0}), []float64{0.5, -1, 1.0 / (1 << 31)}},
		"64": {file(3, 1, 64, 1000, float), []float64{0.5, -1, 3.25}},
	} {
		got, notes, err := readAll(c.data, recording.Request{Columns: []string{"channel_1"}})
		if err != nil || len(notes) > 0 || len(got[0]) != 3 {
			t.Errorf("%s bits: %v %v %v", name, got, notes, err)
			continue
		}
		for i, v := range c.want {
			if got[0][i] != v {
				t.Errorf("%s bits: sample %d is %g, want %g", name, i, got[0][i], v)
			}
		}
	}
}

// Channels keep their order, full scale is what the option says, odd chunks with and without padding are passed over, and
// a file that ends early gives what it holds and says so.
func TestChannelsAndOddChunks(t *testing.T) {
	padded := append([]byte("LIST\x03\x00\x00\x00abc"), 0)
	bare := []byte("note\x05\x00\x00\x00hello")
	data := file(1, 2, 16, 3200, []byte{0x00, 0x40, 0x00, 0x20, 0x00, 0xc0, 0x00, 0x10}, padded, bare)
	h, err := Reader{}.Inspect(context.Background(), bytes.NewReader(data), nil)
	if err != nil || h.Rate != 3200 || strings.Join(h.Names(), " ") != "channel_1 channel_2" {
		t.Fatalf("%+v %v", h, err)
	}
	got, _, err := readAll(data, recording.Request{Columns: []string{"channel_2", "channel_1"}, Options: map[string]string{"scale": "16"}})
	if err != nil || got[0][0] != 4 || got[0][1] != 2 || got[1][0] != 8 || got[1][1] != -8 {
		t.Errorf("%v %v", got, err)
	}
	got, notes, err := readAll(data[:len(data)-3], recording.Request{Columns: []string{"channel_1"}})
	if err != nil || len(got[0]) != 1 || len(notes) != 2 {
		t.Errorf("%v %v %v", got, notes, err)
	}
}

func TestRefusals(t *testing.T) {
	good := file(1, 1, 16, 1000, []byte{0, 0})
	for name, c := range map[string]struct {
		data []byte
		want string
	}{
		"no wav":    {[]byte("time,gx\n0,1\n"), "no WAV file"},
		"packed":    {file(2, 1, 16, 1000, []byte{0, 0}), "format 2"},
		"12 bits":   {file(1, 1, 12, 1000, []byte{0, 0}), "12 bits"},
		"none":      {file(1, 0, 16, 1000, []byte{0, 0}), "0 channels"},
		"no rate":   {file(1, 1, 16, 0, []byte{0, 0}), "rate is zero"},
		"no data":   {good[:36], "ends before its samples"},
		"no sample": {good[:44], "holds no samples"},
		"long list": {append(good[:12:12], "LIST\xff\xff\xff\x7fab"...), "says it has"},
	} {
		_, _, err := readAll(c.data, recording.Request{Columns: []string{"channel_1"}})
		var e *recording.Error
		if !errors.As(err, &e) || !strings.Contains(e.Text, c.want) || e.Remedy == "" {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// Whatever the bytes, the reader ends with samples or with an *Error that has a remedy.
func FuzzRead(f *testing.F) {
	f.Add(file(1, 2, 16, 1000, []byte{0, 1, 2, 3, 4, 5}))
	f.Add(file(3, 1, 32, 1000, []byte{0, 0, 0, 0}, []byte("LIST\x01\x00\x00\x00a")))
	f.Fuzz(func(t *testing.T, data []byte) {
		h, err := Reader{}.Inspect(context.Background(), bytes.NewReader(data), nil)
		if err == nil {
			_, _, err = readAll(data, recording.Request{Columns: h.Names()[:1]})
		}
		var e *recording.Error
		if err != nil && (!errors.As(err, &e) || e.Remedy == "" || e.Text == "") {
			t.Fatalf("%v", err)
		}
	})
}
