package columnar

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/ipc"
)

// markStream tells whether the beginning of a file is that of an Arrow stream: the mark of a message and a sensible length.
func markStream(head []byte) bool {
	if len(head) < 8 || binary.LittleEndian.Uint32(head) != continuation {
		return false
	}
	n := binary.LittleEndian.Uint32(head[4:])
	return n >= 8 && n <= mostMessage
}

const (
	mostMessage = 16 << 20 // bytes of the metadata of a message
	mostBody    = 1 << 30  // bytes of the columns of a batch
)

func openStream(source io.Reader) (*batches, error) {
	g := &streamGuard{in: source}
	r, err := ipc.NewReader(g, ipc.WithAllocator(newBounded(mostBody/64)))
	if err != nil {
		return nil, g.of(err)
	}
	return &batches{schema: r.Schema(), next: func() (arrow.RecordBatch, error) {
		if r.Next() {
			return r.RecordBatch(), nil
		}
		if err := r.Err(); err != nil {
			return nil, g.of(err)
		}
		if g.failed != nil { // the decoder takes an end within a message for the end of all
			return nil, g.failed
		}
		return nil, io.EOF
	}}, nil
}

// streamGuard passes a stream on message by message, each of whose metadata it has checked: see guard.
type streamGuard struct {
	in     io.Reader
	head   []byte // checked and not yet passed on
	body   int64  // bytes to pass on after it
	ended  bool
	failed error // why the stream cannot be read further
}

// of prefers what the guard knows to what the decoder makes of it.
func (g *streamGuard) of(err error) error {
	if g.failed != nil {
		return g.failed
	}
	return err
}

func (g *streamGuard) Read(p []byte) (int, error) {
	if g.failed != nil {
		return 0, g.failed
	}
	if len(g.head) == 0 && g.body == 0 {
		if g.ended {
			return 0, io.EOF
		}
		if err := g.message(); err != nil {
			if errors.Is(err, io.EOF) {
				g.ended = true
				return 0, io.EOF
			}
			g.failed = err
			return 0, err
		}
	}
	if len(g.head) > 0 {
		n := copy(p, g.head)
		g.head = g.head[n:]
		return n, nil
	}
	n, err := g.in.Read(p[:min(int64(len(p)), g.body)])
	g.body -= int64(n)
	if errors.Is(err, io.EOF) && g.body > 0 {
		err = io.ErrUnexpectedEOF
	}
	if err != nil && !errors.Is(err, io.EOF) {
		g.failed = err
	} else {
		err = nil
	}
	return n, err
}

// message reads and checks the metadata of the next message.
func (g *streamGuard) message() error {
	prefix := make([]byte, 8)
	if _, err := io.ReadFull(g.in, prefix[:4]); err != nil {
		return err
	}
	if binary.LittleEndian.Uint32(prefix) != continuation {
		return errors.New("a message does not begin as one")
	}
	if _, err := io.ReadFull(g.in, prefix[4:]); err != nil {
		return within(err)
	}
	length := binary.LittleEndian.Uint32(prefix[4:])
	if length == 0 { // the end of the stream
		g.head, g.ended = prefix, true
		return nil
	}
	if length < 8 || length > mostMessage {
		return fmt.Errorf("a message claims %d bytes of metadata", length)
	}
	data := make([]byte, 8+length)
	copy(data, prefix)
	if _, err := io.ReadFull(g.in, data[8:]); err != nil {
		return within(err)
	}
	if err := guardMessage(data); err != nil {
		return err
	}
	body := root(data[8:]).long(3)
	if body < 0 || body > mostBody {
		return fmt.Errorf("a batch claims %d bytes", body)
	}
	g.head, g.body = data, body
	return nil
}

// within makes an end within a message one that was not due.
func within(err error) error {
	if errors.Is(err, io.EOF) {
		return io.ErrUnexpectedEOF
	}
	return err
}

// long reads a field of 64 bits, 0 if it is not set.
func (n node) long(i int) int64 {
	at, ok := n.slot(i)
	if !ok {
		return 0
	}
	return int64(binary.LittleEndian.Uint64(n.buf[at:]))
}
