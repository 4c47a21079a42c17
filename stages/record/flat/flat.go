// Package flat reads recordings of fixed binary records whose layout the job declares.
//
// Options, all text:
//
//	fields      the fields of a record in order, "name:type" or "name:type:factor", separated by commas; "-:3" passes over
//	            three bytes. Types are i8, u8, i16, u16, i24, u24, i32, u32, i64, u64, f32, f64. A value is multiplied by its factor
//	byte_order  little (default) or big
//	header      bytes before the first record, 0 by default
//
// An example: fields = "time:u32:1e-6, gx:i16:0.0305, gy:i16:0.0305, -:2, rpm:f32".
package flat

import (
	"bufio"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"

	"hushframe/core/signal/recording"
)

// Reader reads fixed binary records. The zero value is ready.
type Reader struct{}

var _ recording.Reader = Reader{}

// Describe implements recording.Reader.
func (Reader) Describe() recording.Description {
	return recording.Description{Name: "flat", About: "binary records of a declared layout", Options: []recording.Option{
		{Name: "fields", About: `fields of a record, such as "time:u32:1e-6, gx:i16:0.0305, -:2, rpm:f32"; -:n passes over n bytes`},
		{Name: "byte_order", About: "order of the bytes of a number; little if left out", Choices: []string{"little", "big"}},
		{Name: "header", About: "bytes before the first record; 0 if left out"},
	}}
}

type field struct {
	name, kind string
	at         int // bytes into the record
	factor     float64
}

type layout struct {
	fields []field
	size   int // bytes of a record
	header int64
	order  binary.ByteOrder
}

var sizes = map[string]int{"i8": 1, "u8": 1, "i16": 2, "u16": 2, "i24": 3, "u24": 3, "i32": 4, "u32": 4, "i64": 8, "u64": 8, "f32": 4, "f64": 8}

const (
	mostRecord = 1 << 16
	batchRows  = 4096
)

func parse(options map[string]string) (layout, error) {
	l := layout{order: binary.LittleEndian}
	refuse := func(remedy, format string, args ...any) (layout, error) {
		return layout{}, &recording.Error{Text: fmt.Sprintf(format, args...), Remedy: remedy}
	}
	var names []string
	for name := range options {
		names = append(names, name)
	}
	slices.Sort(names)
	for _, name := range names {
		if !slices.Contains([]string{"fields", "byte_order", "header"}, name) {
			return refuse(`its options are "fields", "byte_order" and "header"`, "the reader has no option %q", name)
		}
	}
	switch options["byte_order"] {
	case "", "little":
	case "big":
		l.order = binary.BigEndian
	default:
		return refuse("choose little or big", "there is no byte order %q", options["byte_order"])
	}
	if text := options["header"]; text != "" {
		n, err := strconv.ParseInt(text, 10, 64)
		if err != nil || n < 0 {
			return refuse(`give the bytes before the first record, such as "512"`, "the header %q is no number of bytes", text)
		}
		l.header = n
	}
	const example = `declare them, such as fields = "time:u32:1e-6, gx:i16:0.0305"`
	if strings.TrimSpace(options["fields"]) == "" {
		return refuse(example, "the fields of a record are not declared")
	}
	seen := map[string]bool{}
	for i, text := range strings.Split(options["fields"], ",") {
		parts := strings.Split(text, ":")
		for k := range parts {
			parts[k] = strings.TrimSpace(parts[k])
		}
		if parts[0] == "-" && len(parts) == 2 {
			n, err := strconv.Atoi(parts[1])
			if err != nil || n < 1 || n > mostRecord {
				return refuse(`pass over bytes as in "-:3"`, "field %d passes over %q bytes", i+1, parts[1])
			}
			l.size += n
			continue
		}
		if len(parts) < 2 || len(parts) > 3 || parts[0] == "" || sizes[parts[1]] == 0 {
			return refuse("write name:type or name:type:factor, with a type of i8, u8, i16, u16, i24, u24, i32, u32, i64, u64, f32, f64",
				"field %d, %q, has no known form", i+1, strings.TrimSpace(text))
		}
		f := field{name: parts[0], kind: parts[1], at: l.size, factor: 1}
		if len(parts) == 3 {
			v, err := strconv.ParseFloat(parts[2], 64)
			if err != nil || v == 0 || math.IsInf(v, 0) || math.IsNaN(v) {
				return refuse(`give a number, such as "gx:i16:0.0305"`, "the factor %q of field %q is no number other than zero", parts[2], f.name)
			}
			f.factor = v
		}
		if seen[f.name] {
			return refuse("give each field its own name", "two fields are called %q", f.name)
		}
		seen[f.name] = true
		l.size += sizes[f.kind]
		l.fields = append(l.fields, f)
	}
	switch {
	case len(l.fields) == 0:
		return refuse(example, "the fields only pass over bytes")
	case l.size > mostRecord:
		return refuse(example, "a record of %d bytes is too long", l.size)
	}
	return l, nil
}

// Inspect implements recording.Reader.
func (Reader) Inspect(_ context.Context, _ io.Reader, options map[string]string) (recording.Header, error) {
	l, err := parse(options)
	if err != nil {
		return recording.Header{}, err
	}
	h := recording.Header{Notes: []string{fmt.Sprintf("records of %d bytes after %d bytes of header, as declared", l.size, l.header)}}
	for _, f := range l.fields {
		h.Columns = append(h.Columns, recording.Column{Name: f.name})
	}
	return h, nil
}

// Read implements recording.Reader.
func (Reader) Read(ctx context.Context, source io.Reader, request recording.Request, sink func(recording.Batch) error) error {
	l, err := parse(request.Options)
	if err != nil {
		return err
	}
	find := func(name string) (field, error) {
		for _, f := range l.fields {
			if f.name == name {
				return f, nil
			}
		}
		return field{}, &recording.Error{Column: name, Text: "the records have no such field", Remedy: "declare it in fields"}
	}
	var wanted []field
	for _, name := range request.Columns {
		f, err := find(name)
		if err != nil {
			return err
		}
		wanted = append(wanted, f)
	}
	var clock field
	if request.Time != "" {
		if clock, err = find(request.Time); err != nil {
			return err
		}
	}
	in := bufio.NewReaderSize(source, 1<<16)
	if n, err := io.CopyN(io.Discard, in, l.header); err != nil {
		return &recording.Error{Byte: n, Text: fmt.Sprintf("the file ends within its header of %d bytes", l.header), Remedy: "declare a shorter header, or copy the file again"}
	}
	data := make([]byte, batchRows*l.size)
	values := make([][]float64, len(wanted))
	for k := range values {
		values[k] = make([]float64, batchRows)
	}
	times := make([]float64, batchRows)
	rows := int64(0)
	var first ticks
	for {
		if err := ctx.Err(); err != nil {
			return err
		}
		n, err := io.ReadFull(in, data)
		if err != nil && !errors.Is(err, io.EOF) && !errors.Is(err, io.ErrUnexpectedEOF) {
			return &recording.Error{Byte: l.header + rows*int64(l.size) + int64(n), Text: err.Error(), Remedy: "check that the file can be read"}
		}
		whole := n / l.size
		batch := recording.Batch{First: rows + 1}
		for k, f := range wanted {
			for i := range whole {
				values[k][i] = f.factor * l.number(data[i*l.size+f.at:], f.kind)
			}
			batch.Values = append(batch.Values, values[k][:whole])
		}
		if request.Time != "" {
			if rows == 0 && whole > 0 {
				first = l.ticks(data[clock.at:], clock.kind)
			}
			for i := range whole {
				times[i] = l.ticks(data[i*l.size+clock.at:], clock.kind).since(first) * clock.factor * request.TimeUnit
			}
			batch.Time = times[:whole]
			batch.Origin = first.value() * clock.factor * request.TimeUnit
		}
		rows += int64(whole)
		if n%l.size != 0 {
			batch.Notes = append(batch.Notes, fmt.Sprintf("%d bytes after the last whole record were left out", n%l.size))
		}
		if whole > 0 || len(batch.Notes) > 0 && rows > 0 {
			if err := sink(batch); err != nil {
				return err
			}
		}
		if err != nil {
			break
		}
	}
	if rows == 0 {
		return &recording.Error{Byte: l.header, Text: "the file holds no whole record", Remedy: fmt.Sprintf("check the layout: a record has %d bytes after %d of header", l.size, l.header)}
	}
	return nil
}

// number reads one value.
func (l layout) number(b []byte, kind string) float64 {
	switch kind {
	case "f32":
		return float64(math.Float32frombits(l.order.Uint32(b)))
	case "f64":
		return math.Float64frombits(l.order.Uint64(b))
	}
	return l.ticks(b, kind).value()
}

// ticks is a time as it stands in the file: whole numbers keep all their digits.
type ticks struct {
	whole    int64
	unsigned bool // whole holds the bits of an unsigned number
	real     float64
	isReal   bool
}

func (l layout) ticks(b []byte, kind string) ticks {
	u24 := func() uint32 {
		if l.order == binary.ByteOrder(binary.BigEndian) {
			return uint32(b[0])<<16 | uint32(b[1])<<8 | uint32(b[2])
		}
		return uint32(b[2])<<16 | uint32(b[1])<<8 | uint32(b[0])
	}
	switch kind {
	case "i8":
		return ticks{whole: int64(int8(b[0]))}
	case "u8":
		return ticks{whole: int64(b[0])}
	case "i16":
		return ticks{whole: int64(int16(l.order.Uint16(b)))}
	case "u16":
		return ticks{whole: int64(l.order.Uint16(b))}
	case "i24":
		return ticks{whole: int64(int32(u24()<<8) >> 8)}
	case "u24":
		return ticks{whole: int64(u24())}
	case "i32":
		return ticks{whole: int64(int32(l.order.Uint32(b)))}
	case "u32":
		return ticks{whole: int64(l.order.Uint32(b))}
	case "i64":
		return ticks{whole: int64(l.order.Uint64(b))}
	case "u64":
		return ticks{whole: int64(l.order.Uint64(b)), unsigned: true}
	}
	return ticks{real: l.number(b, kind), isReal: true}
}

func (t ticks) value() float64 {
	switch {
	case t.isReal:
		return t.real
	case t.unsigned:
		return float64(uint64(t.whole))
	}
	return float64(t.whole)
}

// since is the difference, taken before anything is rounded.
func (t ticks) since(first ticks) float64 {
	if t.isReal {
		return t.real - first.real
	}
	return float64(t.whole - first.whole)
}
