package columnar

import (
	"encoding/binary"
	"errors"
	"fmt"

	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

// The Arrow decoder allocates what the metadata of a file claims, and a claim beyond the memory of the machine ends the
// process where no recover helps. guard walks the metadata first and refuses vectors that are longer than their buffer;
// bounded refuses bodies. Reads beyond a buffer panic, which guarded recovers. Slots are those of the Arrow format's
// Schema.fbs, Message.fbs and File.fbs.
func guard(file ipc.ReadAtSeeker, size int64) error {
	const tail = 10 // length of the footer and the mark
	if size < 2*tail {
		return errors.New("the file is cut short")
	}
	end := make([]byte, tail)
	if _, err := file.ReadAt(end, size-tail); err != nil {
		return err
	}
	if string(end[4:]) != "ARROW1" {
		return errors.New("the file is cut short")
	}
	length := int64(binary.LittleEndian.Uint32(end))
	if length > size-tail || length < 8 {
		return errors.New("the footer is larger than the file")
	}
	buf := make([]byte, length)
	if _, err := file.ReadAt(buf, size-tail-length); err != nil {
		return err
	}
	footer := root(buf)
	footer.vector(4, 4) // metadata of the file
	schema, ok := footer.table(1)
	if !ok {
		return errors.New("there is no schema")
	}
	schema.vector(2, 4)
	fields := 0
	if err := guardFields(schema, 1, 0, &fields); err != nil {
		return err
	}
	for _, slot := range []int{2, 3} { // dictionaries, batches
		at, n := footer.vector(slot, 24)
		for i := range n {
			block := footer.buf[at+24*i:]
			offset, meta, body := int64(binary.LittleEndian.Uint64(block)), int64(int32(binary.LittleEndian.Uint32(block[8:]))), int64(binary.LittleEndian.Uint64(block[16:]))
			if offset < 0 || meta < 12 || body < 0 || offset > size || meta > size-offset || body > size-offset-meta {
				return fmt.Errorf("block %d lies outside the file", i)
			}
			message := make([]byte, meta)
			if _, err := file.ReadAt(message, offset); err != nil {
				return err
			}
			if err := guardMessage(message); err != nil {
				return err
			}
		}
	}
	return nil
}

// mostFields is the most columns and list items of a recording.
const mostFields = 65536

// guardFields counts fields down the tree, since offsets may make many parents share children.
func guardFields(parent node, slot, depth int, count *int) error {
	at, n := parent.vector(slot, 4)
	if *count += n; *count > mostFields || depth > 8 {
		return errors.New("the schema has too many columns")
	}
	for i := range n {
		f := parent.tableAt(at + 4*i)
		f.vector(6, 4)
		if err := guardFields(f, 5, depth+1, count); err != nil {
			return err
		}
	}
	return nil
}

// guardMessage checks one message with its length before it, and, before that, the mark of a message since format 0.15.
func guardMessage(data []byte) error {
	if binary.LittleEndian.Uint32(data) == continuation {
		data = data[4:]
	}
	message := root(data[4:])
	message.vector(4, 4)
	content, ok := message.table(2)
	if !ok {
		return nil
	}
	if message.header() == schemaHeader {
		content.vector(2, 4)
		fields := 0
		return guardFields(content, 1, 0, &fields)
	}
	if inner, ok := content.slot(1); ok && message.header() == dictionaryHeader {
		content = content.tableAt(inner)
	}
	content.vector(1, 16) // nodes
	content.vector(2, 16) // buffers
	content.vector(4, 8)  // counts of variadic buffers
	return nil
}

const (
	continuation     = 0xffffffff
	schemaHeader     = 1
	dictionaryHeader = 2
)

// header is the type of a message.
func (n node) header() byte {
	if at, ok := n.slot(1); ok {
		return n.buf[at]
	}
	return 0
}

// node is a table of a flatbuffer.
type node struct {
	buf []byte
	pos int
}

func root(buf []byte) node { return node{buf, int(binary.LittleEndian.Uint32(buf))} }

// slot gives the place of a field, and whether it is set.
func (n node) slot(i int) (int, bool) {
	vtable := n.pos - int(int32(binary.LittleEndian.Uint32(n.buf[n.pos:])))
	if 4+2*i+2 > int(binary.LittleEndian.Uint16(n.buf[vtable:])) {
		return 0, false
	}
	offset := int(binary.LittleEndian.Uint16(n.buf[vtable+4+2*i:]))
	return n.pos + offset, offset != 0
}

func (n node) table(i int) (node, bool) {
	at, ok := n.slot(i)
	if !ok {
		return node{}, false
	}
	return n.tableAt(at), true
}

func (n node) tableAt(at int) node {
	return node{n.buf, at + int(binary.LittleEndian.Uint32(n.buf[at:]))}
}

// vector gives the place of the first entry and the count, and panics when entries of that size do not fit.
func (n node) vector(i, size int) (at, count int) {
	at, ok := n.slot(i)
	if !ok {
		return 0, 0
	}
	at += int(binary.LittleEndian.Uint32(n.buf[at:]))
	count = int(binary.LittleEndian.Uint32(n.buf[at:]))
	at += 4
	_ = n.buf[at : at+count*size]
	return at, count
}

// bounded is an allocator that refuses bodies which no file of this size can hold.
type bounded struct {
	memory.Allocator
	most int
}

func newBounded(size int64) *bounded {
	return &bounded{memory.NewGoAllocator(), int(min(max(64<<20, 64*size), 1<<31-1))}
}

func (b *bounded) check(size int) {
	if size < 0 || size > b.most {
		panic(fmt.Sprintf("a column claims %d bytes", size))
	}
}

func (b *bounded) Allocate(size int) []byte {
	b.check(size)
	return b.Allocator.Allocate(size)
}

func (b *bounded) Reallocate(size int, buf []byte) []byte {
	b.check(size)
	return b.Allocator.Reallocate(size, buf)
}
