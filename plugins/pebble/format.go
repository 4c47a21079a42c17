package main

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"io"
	"math"

	"hushframe/core/signal/recording"
)

const (
	mark         = "PEBBLE1\n"
	blockMark    = "BK"
	mostChannels = 16
	mostRows     = 4096
	noSample     = math.MinInt16
	blockHead    = 16 // bytes
	channelSize  = 24
)

type channel struct {
	name, unit string
	factor     float64
}

// file reads a recording from its beginning; at counts the bytes read.
type file struct {
	in       io.Reader
	at       int64
	channels []channel
}

// take reads n bytes: io.EOF when there are none left, io.ErrUnexpectedEOF when there are fewer.
func (f *file) take(n int) ([]byte, error) {
	b := make([]byte, n)
	k, err := io.ReadFull(f.in, b)
	f.at += int64(k)
	return b[:k], err
}

// cut says that the header is not all there; other errors of the source pass.
func (f *file) cut(err error) error {
	if errors.Is(err, io.EOF) || errors.Is(err, io.ErrUnexpectedEOF) {
		return &recording.Error{Byte: f.at, Text: "the file ends within its header", Remedy: "copy the recording again from the logger"}
	}
	return err
}

// open reads the header.
func open(in io.Reader) (*file, error) {
	f := &file{in: in}
	head, err := f.take(12)
	if err == nil && string(head[:8]) != mark {
		return nil, &recording.Error{Text: "this is no recording of a Pebble logger: it does not begin with PEBBLE1", Remedy: "name the reader of its format"}
	}
	if err != nil {
		return nil, f.cut(err)
	}
	n := int(binary.LittleEndian.Uint16(head[8:]))
	if n < 1 || n > mostChannels {
		return nil, &recording.Error{Byte: 8, Text: fmt.Sprintf("the header states %d channels; a Pebble has 1 to %d", n, mostChannels), Remedy: "copy the recording again from the logger"}
	}
	seen := map[string]bool{}
	for i := range n {
		from := f.at
		b, err := f.take(channelSize)
		if err != nil {
			return nil, f.cut(err)
		}
		c := channel{name: text(b[:12]), unit: text(b[12:20]), factor: float64(math.Float32frombits(binary.LittleEndian.Uint32(b[20:])))}
		if c.name == "" || seen[c.name] || c.factor == 0 || math.IsNaN(c.factor) || math.IsInf(c.factor, 0) {
			return nil, &recording.Error{Byte: from, Text: fmt.Sprintf("channel %d is called %q with %g per count, which cannot be", i+1, c.name, c.factor), Remedy: "copy the recording again from the logger"}
		}
		seen[c.name] = true
		f.channels = append(f.channels, c)
	}
	return f, nil
}

func text(b []byte) string {
	b, _, _ = bytes.Cut(b, []byte{0})
	return string(bytes.ToValidUTF8(b, []byte("?")))
}

// block is a stretch of rows; counts are row by row.
type block struct {
	from   int64 // byte where it begins
	rows   int
	start  uint64 // µs
	step   uint32 // ns
	counts []byte
	whole  bool // it matches its checksum
}

// next reads a block: io.EOF at the end of the file, io.ErrUnexpectedEOF when it ends within a block.
func (f *file) next() (*block, error) {
	b := &block{from: f.at}
	head, err := f.take(blockHead)
	if err != nil {
		return nil, err
	}
	b.rows = int(binary.LittleEndian.Uint16(head[2:]))
	b.start, b.step = binary.LittleEndian.Uint64(head[4:]), binary.LittleEndian.Uint32(head[12:])
	if string(head[:2]) != blockMark || b.rows < 1 || b.rows > mostRows || b.step == 0 {
		return nil, &recording.Error{Byte: b.from, Text: "no block begins where one is due; the recording is damaged from here on",
			Remedy: "copy the recording again from the logger"}
	}
	if b.counts, err = f.take(2 * b.rows * len(f.channels)); err != nil {
		return nil, short(err)
	}
	sum, err := f.take(4)
	if err != nil {
		return nil, short(err)
	}
	b.whole = crc32.Update(crc32.ChecksumIEEE(head), crc32.IEEETable, b.counts) == binary.LittleEndian.Uint32(sum)
	return b, nil
}

func short(err error) error {
	if errors.Is(err, io.EOF) {
		return io.ErrUnexpectedEOF
	}
	return err
}

// value gives a sample in the unit of its channel.
func (f *file) value(b *block, row, channel int) float64 {
	count := int16(binary.LittleEndian.Uint16(b.counts[2*(row*len(f.channels)+channel):]))
	if count == noSample {
		return math.NaN()
	}
	return float64(count) * f.channels[channel].factor
}
