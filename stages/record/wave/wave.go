// Package wave reads recordings in WAV files: the samples of accelerometers and microphones as sound cards and recorders
// store them.
//
// A file is a list of chunks; only "fmt " and "data" count, and the others, of any length and with or without their padding
// byte, are passed over. Samples are integers of 8 (unsigned), 16, 24 or 32 bits, or floating point of 32 or 64 bits. Integers are
// divided by their full scale, so that values run from -1 to 1; the option scale multiplies them by what full scale means.
// The columns are channel_1, channel_2 and so on, and the rate is that of the header.
package wave

import (
	"bufio"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"

	"hushframe/core/signal/recording"
)

// Reader reads WAV files. The zero value is ready.
type Reader struct{}

var _ recording.Reader = Reader{}

// Mark tells whether the beginning of a file is that of a WAV file.
func Mark(head []byte) bool {
	return len(head) >= 12 && string(head[:4]) == "RIFF" && string(head[8:12]) == "WAVE"
}

// Describe implements recording.Reader.
func (Reader) Describe() recording.Description {
	return recording.Description{Name: "wave", About: "WAV file; columns channel_1, channel_2, …", Options: []recording.Option{
		{Name: "scale", About: "value at full scale, in the unit stated in units; 1 if left out"},
	}}
}

// layout is what the header says.
type layout struct {
	float    bool
	channels int
	bytes    int // of one sample
	rate     float64
	scale    float64
	size     int64 // bytes of data, -1 if the header does not know
}

const (
	integerFormat    = 1
	floatFormat      = 3
	extensibleFormat = 0xfffe
	mostChannels     = 256
	batchRows        = 4096
	unknownSize      = 0xffffffff
)

// Inspect implements recording.Reader.
func (Reader) Inspect(_ context.Context, source io.Reader, options map[string]string) (recording.Header, error) {
	_, l, err := open(source, options)
	if err != nil {
		return recording.Header{}, err
	}
	h := recording.Header{Rate: l.rate}
	for c := range l.channels {
		h.Columns = append(h.Columns, recording.Column{Name: fmt.Sprintf("channel_%d", c+1)})
	}
	kind := "integer"
	if l.float {
		kind = "floating-point"
	}
	h.Notes = append(h.Notes, fmt.Sprintf("%d channels of %d-bit %s samples; a value of %g is full scale", l.channels, 8*l.bytes, kind, l.scale))
	return h, nil
}

func open(source io.Reader, options map[string]string) (*bufio.Reader, layout, error) {
	l := layout{scale: 1}
	for name, text := range options {
		if name != "scale" {
			return nil, l, &recording.Error{Text: fmt.Sprintf("the reader has no option %q", name), Remedy: `its only option is "scale"`}
		}
		v, err := strconv.ParseFloat(text, 64)
		if err != nil || !(v > 0) || math.IsInf(v, 0) {
			return nil, l, &recording.Error{Text: fmt.Sprintf("the scale %q is no number above zero", text), Remedy: `give the value at full scale, such as "16"`}
		}
		l.scale = v
	}
	in := bufio.NewReaderSize(source, 1<<16)
	head := make([]byte, 12)
	if _, err := io.ReadFull(in, head); err != nil || !Mark(head) {
		return nil, l, &recording.Error{Text: "this is no WAV file", Remedy: "name the reader for its format"}
	}
	at := int64(12)
	for {
		var chunk [8]byte
		if _, err := io.ReadFull(in, chunk[:]); err != nil {
			return nil, l, &recording.Error{Byte: at, Text: "the file ends before its samples", Remedy: "copy it again from the recorder"}
		}
		name, size := string(chunk[:4]), int64(binary.LittleEndian.Uint32(chunk[4:]))
		at += 8
		switch {
		case name == "data":
			if l.channels == 0 {
				return nil, l, &recording.Error{Byte: at, Text: "the samples come before their format", Remedy: "save the file again with a program that writes the format first"}
			}
			l.size = size
			if size == unknownSize || size == 0 {
				l.size = -1 // written while it was not known; the file ends with the samples
			}
			return in, l, nil
		case name == "fmt ":
			if err := l.format(in, size, at); err != nil {
				return nil, l, err
			}
		default:
			if _, err := io.CopyN(io.Discard, in, size); err != nil {
				return nil, l, &recording.Error{Byte: at, Text: fmt.Sprintf("the chunk %q says it has %d bytes, and the file ends before", name, size),
					Remedy: "copy it again from the recorder"}
			}
		}
		at += size
		if size%2 == 1 {
			// Chunks begin at even places, but not all programs heed it: a padding byte is zero, a name is not.
			if next, err := in.Peek(1); err == nil && next[0] == 0 {
				in.Discard(1)
				at++
			}
		}
	}
}

func (l *layout) format(in io.Reader, size, at int64) error {
	if size < 16 || size > 1024 {
		return &recording.Error{Byte: at, Text: fmt.Sprintf("the format has %d bytes, and at least 16 are due", size), Remedy: "save the file again"}
	}
	f := make([]byte, size)
	if _, err := io.ReadFull(in, f); err != nil {
		return &recording.Error{Byte: at, Text: "the file ends in its format", Remedy: "copy it again from the recorder"}
	}
	u16 := func(i int) int { return int(binary.LittleEndian.Uint16(f[i:])) }
	tag, bits := u16(0), u16(14)
	if tag == extensibleFormat && size >= 26 {
		tag = u16(24)
	}
	l.channels, l.rate, l.bytes, l.float = u16(2), float64(binary.LittleEndian.Uint32(f[4:])), bits/8, tag == floatFormat
	frame := u16(12)
	switch {
	case tag != integerFormat && tag != floatFormat:
		return &recording.Error{Byte: at, Text: fmt.Sprintf("samples of format %d are not read", tag), Remedy: "save it as uncompressed integers or floating point"}
	case l.channels < 1 || l.channels > mostChannels:
		return &recording.Error{Byte: at, Text: fmt.Sprintf("the file says it has %d channels", l.channels), Remedy: fmt.Sprintf("1 to %d are read", mostChannels)}
	case bits%8 != 0 || l.float && bits != 32 && bits != 64 || !l.float && (bits < 8 || bits > 32):
		return &recording.Error{Byte: at, Text: fmt.Sprintf("samples of %d bits are not read", bits), Remedy: "save it with 8, 16, 24 or 32 bits, or floating point of 32 or 64"}
	case frame != l.channels*l.bytes:
		return &recording.Error{Byte: at, Text: fmt.Sprintf("%d channels of %d bytes do not make the %d bytes of a frame", l.channels, l.bytes, frame), Remedy: "save the file again"}
	case !(l.rate > 0):
		return &recording.Error{Byte: at, Text: "the sample rate is zero", Remedy: "save the file again with its rate"}
	}
	return nil
}

// Read implements recording.Reader.
func (Reader) Read(ctx context.Context, source io.Reader, request recording.Request, sink func(recording.Batch) error) error {
	in, l, err := open(source, request.Options)
	if err != nil {
		return err
	}
	if request.Time != "" {
		return &recording.Error{Column: request.Time, Text: "a WAV file has no time column", Remedy: "leave it out; the rate is in the file"}
	}
	var wanted []int
	for _, name := range request.Columns {
		var c int
		if _, err := fmt.Sscanf(name, "channel_%d", &c); err != nil || c < 1 || c > l.channels {
			return &recording.Error{Column: name, Text: "the recording has no such column", Remedy: fmt.Sprintf("its columns are channel_1 to channel_%d", l.channels)}
		}
		wanted = append(wanted, c-1)
	}
	frame := l.channels * l.bytes
	data := make([]byte, batchRows*frame)
	values := make([][]float64, len(wanted))
	for k := range values {
		values[k] = make([]float64, batchRows)
	}
	left, rows := l.size, int64(0)
	for {
		if err := ctx.Err(); err != nil {
			return err
		}
		want := len(data)
		if left >= 0 {
			want = int(min(int64(want), left))
		}
		n, err := io.ReadFull(in, data[:want])
		if err != nil && !errors.Is(err, io.EOF) && !errors.Is(err, io.ErrUnexpectedEOF) {
			return &recording.Error{Text: err.Error(), Remedy: "check that the file can be read"}
		}
		ended := want == 0 || err != nil
		if left >= 0 {
			left -= int64(n)
		}
		whole := n / frame
		batch := recording.Batch{First: rows + 1}
		for k, c := range wanted {
			for i := range whole {
				values[k][i] = l.scale * l.sample(data[i*frame+c*l.bytes:])
			}
			batch.Values = append(batch.Values, values[k][:whole])
		}
		rows += int64(whole)
		if ended && left > 0 {
			batch.Notes = append(batch.Notes, fmt.Sprintf("the file ends %d bytes before its header says", left))
		}
		if n%frame != 0 {
			batch.Notes = append(batch.Notes, "the incomplete last frame was left out")
		}
		if whole > 0 || len(batch.Notes) > 0 {
			if err := sink(batch); err != nil {
				return err
			}
		}
		if ended || left == 0 {
			break
		}
	}
	if rows == 0 {
		return &recording.Error{Text: "the file holds no samples", Remedy: "give a recording with at least two rows of samples"}
	}
	return nil
}

// sample reads one sample; integers over their full scale.
func (l layout) sample(b []byte) float64 {
	switch {
	case l.float && l.bytes == 4:
		return float64(math.Float32frombits(binary.LittleEndian.Uint32(b)))
	case l.float:
		return math.Float64frombits(binary.LittleEndian.Uint64(b))
	}
	switch l.bytes {
	case 1:
		return (float64(b[0]) - 128) / 128
	case 2:
		return float64(int16(binary.LittleEndian.Uint16(b))) / (1 << 15)
	case 3:
		return float64(int32(b[0])<<8|int32(b[1])<<16|int32(b[2])<<24) / (1 << 31)
	}
	return float64(int32(binary.LittleEndian.Uint32(b))) / (1 << 31)
}
