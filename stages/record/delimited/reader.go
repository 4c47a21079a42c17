package delimited

import (
	"bufio"
	"bytes"
	"compress/gzip"
	"context"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/klauspost/compress/zstd"

	"hushframe/core/signal/recording"
)

// Reader reads delimited text. The zero value is ready.
type Reader struct{}

var _ recording.Reader = Reader{}

const (
	sampleSize = 64 << 10  // bytes from which the layout is guessed
	blockSize  = 256 << 10 // bytes parsed at a time; no line may be longer
	batchRows  = 4096
)

// Describe implements recording.Reader.
func (Reader) Describe() recording.Description {
	return recording.Description{
		Name:  "delimited",
		About: "text with one row per line, plain, gzip or zstd",
		Options: []recording.Option{{
			Name: "separator", About: "what stands between two fields: auto, comma, semicolon, tab, bar, blank, or any one character",
		}},
	}
}

// Inspect implements recording.Reader.
func (Reader) Inspect(_ context.Context, source io.Reader, options map[string]string) (recording.Header, error) {
	_, l, err := open(source, options)
	if err != nil {
		return recording.Header{}, err
	}
	return l.header(), nil
}

// open unpacks the source and guesses its layout; the returned reader is at the beginning of the text.
func open(source io.Reader, options map[string]string) (*bufio.Reader, layout, error) {
	separator, err := separatorOf(options)
	if err != nil {
		return nil, layout{}, err
	}
	text, err := unpack(source)
	if err != nil {
		return nil, layout{}, err
	}
	sample, err := text.Peek(sampleSize)
	if err != nil && !errors.Is(err, io.EOF) && !((errors.Is(err, io.ErrUnexpectedEOF) || errors.Is(err, gzip.ErrHeader)) && len(sample) > 0) {
		return nil, layout{}, readError(err, int64(len(sample)))
	}
	if bytes.IndexByte(sample, '\n') < 0 && bytes.IndexByte(sample, '\r') >= 0 {
		// Lines end with carriage returns alone.
		text = bufio.NewReaderSize(&returns{in: text}, blockSize)
		sample, _ = text.Peek(sampleSize)
	}
	if len(bytes.TrimSpace(sample)) == 0 {
		return nil, layout{}, &recording.Error{Text: "the file is empty", Remedy: "give a recording with at least two rows of samples"}
	}
	if i := bytes.IndexByte(sample, 0); i >= 0 {
		return nil, layout{}, &recording.Error{Byte: int64(i), Text: "this is not text: it holds a zero byte",
			Remedy: "export the recording as comma-separated text in UTF-8, or name a reader for its format"}
	}
	if len(sample) == sampleSize {
		if end := bytes.LastIndexByte(sample, '\n'); end >= 0 {
			sample = sample[:end]
		}
	}
	lines := bytes.Split(sample, []byte("\n"))
	l, ok := guess(lines, separator)
	if !ok {
		return nil, layout{}, &recording.Error{Text: "no line holds numbers in columns",
			Remedy: "give a recording with one row of numbers per line, and its separator if that is unusual"}
	}
	return text, l, nil
}

func separatorOf(options map[string]string) (byte, error) {
	for name := range options {
		if name != "separator" {
			return 0, &recording.Error{Text: fmt.Sprintf("the reader has no option %q", name), Remedy: `its only option is "separator"`}
		}
	}
	given := options["separator"]
	if given == "" || given == "auto" {
		return 0, nil
	}
	for _, s := range separatorNames {
		if s.name == given {
			return s.mark, nil
		}
	}
	if len(given) == 1 && strings.IndexByte("0123456789+-.eE\"\r\n", given[0]) < 0 {
		return given[0], nil
	}
	return 0, &recording.Error{Text: fmt.Sprintf("there is no separator %q", given), Remedy: "one of auto, comma, semicolon, tab, bar, blank, or one character that stands in no number"}
}

// unpack takes off gzip and a byte-order mark.
func unpack(source io.Reader) (*bufio.Reader, error) {
	raw := bufio.NewReaderSize(source, blockSize)
	mark, err := raw.Peek(3)
	if err != nil && !errors.Is(err, io.EOF) {
		return nil, readError(err, 0)
	}
	switch {
	case bytes.HasPrefix(mark, []byte{0x1f, 0x8b}):
		unzipped, err := gzip.NewReader(raw)
		if err != nil {
			return nil, readError(err, 0)
		}
		raw = bufio.NewReaderSize(unzipped, blockSize)
		mark, _ = raw.Peek(3)
	case bytes.HasPrefix(mark, []byte{0x28, 0xb5, 0x2f}):
		// One goroutine and a bounded window: a hostile frame may ask for gigabytes.
		unzipped, err := zstd.NewReader(raw, zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxWindow(128<<20))
		if err != nil {
			return nil, readError(errDamaged, 0)
		}
		raw = bufio.NewReaderSize(&unpacked{decoder: unzipped}, blockSize)
		mark, err = raw.Peek(3)
		if err != nil && !errors.Is(err, io.EOF) {
			return nil, readError(err, 0)
		}
	case bytes.HasPrefix(mark, []byte{0xff, 0xfe}), bytes.HasPrefix(mark, []byte{0xfe, 0xff}):
		return nil, &recording.Error{Text: "the text is in UTF-16", Remedy: "save it in UTF-8"}
	}
	if bytes.HasPrefix(mark, []byte{0xef, 0xbb, 0xbf}) {
		raw.Discard(3)
	}
	return raw, nil
}

// returns makes line feeds of carriage returns.
type returns struct{ in io.Reader }

func (r *returns) Read(p []byte) (int, error) {
	n, err := r.in.Read(p)
	for i, c := range p[:n] {
		if c == '\r' {
			p[i] = '\n'
		}
	}
	return n, err
}

// errDamaged stands for whatever a decoder finds wrong with packed bytes.
var errDamaged = errors.New("damaged")

// unpacked makes the many errors of a decoder one.
type unpacked struct {
	decoder *zstd.Decoder
	ended   error
}

func (u *unpacked) Read(p []byte) (int, error) {
	if u.ended != nil {
		return 0, u.ended
	}
	n, err := u.decoder.Read(p)
	switch {
	case err == nil:
		return n, nil
	case errors.Is(err, io.ErrUnexpectedEOF):
		err = io.ErrUnexpectedEOF
	case !errors.Is(err, io.EOF):
		err = errDamaged
	}
	u.decoder.Close()
	u.ended = err
	return n, err
}

// readError explains why bytes end, after that many of them.
func readError(err error, at int64) error {
	switch {
	case errors.Is(err, io.ErrUnexpectedEOF):
		return &recording.Error{Byte: at, Text: "the compressed file ends in its middle",
			Remedy: "copy it again from the recorder, or unpack what is there and give the text"}
	case errors.Is(err, gzip.ErrChecksum), errors.Is(err, gzip.ErrHeader), errors.Is(err, errDamaged):
		return &recording.Error{Byte: at, Text: "the compressed file is damaged", Remedy: "copy it again from the recorder"}
	}
	var corrupt interface{ Error() string }
	if errors.As(err, &corrupt) && strings.HasPrefix(corrupt.Error(), "flate:") {
		return &recording.Error{Byte: at, Text: "the compressed file is damaged", Remedy: "copy it again from the recorder"}
	}
	return &recording.Error{Byte: at, Text: err.Error(), Remedy: "check that the file can be read"}
}

// Read implements recording.Reader.
func (Reader) Read(ctx context.Context, source io.Reader, request recording.Request, sink func(recording.Batch) error) error {
	text, l, err := open(source, request.Options)
	if err != nil {
		return err
	}
	p, err := newParser(l, request)
	if err != nil {
		return err
	}
	if err := p.run(ctx, text, sink); err != nil {
		return err
	}
	return p.finish(sink)
}

// find returns the place of a column by its name in the header.
func find(names []string, wanted string) (int, error) {
	if i := slices.Index(names, wanted); i >= 0 {
		return i, nil
	}
	return -1, &recording.Error{Column: wanted, Text: "the recording has no such column", Remedy: "name one of its header"}
}
