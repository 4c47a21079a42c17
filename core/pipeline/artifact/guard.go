package artifact

import (
	"encoding/binary"
	"errors"
	"fmt"
)

// The Arrow reader allocates what the metadata of a file claims, and a claim
// beyond the memory of the machine ends the process where no recover helps.
// guard walks the metadata first and refuses vectors that are longer than the
// file, and what our files never have: dictionaries, compression, big-endian
// bodies. Reads beyond the data panic, which DecodeTable recovers.
//
// Slots are those of the Arrow format's Schema.fbs, Message.fbs and File.fbs.
func guard(data []byte) error {
	const magic, sizeLength = 6, 4
	end := len(data) - magic - sizeLength
	if end < 0 || string(data[end+sizeLength:]) != "ARROW1" {
		return errors.New("the file is no Arrow file or was cut short")
	}
	size := int(binary.LittleEndian.Uint32(data[end:]))
	if size > end {
		return errors.New("the footer is larger than the file")
	}
	footer := root(data[end-size : end])
	schema, ok := footer.table(1)
	if !ok {
		return errors.New("there is no schema")
	}
	if endian, ok := schema.slot(0); ok && schema.buf[endian] != 0 {
		return errors.New("the values are big-endian; little-endian ones are wanted")
	}
	fields := 0
	if err := guardFields(schema, 1, 0, &fields); err != nil {
		return err
	}
	if _, n, _ := schema.vector(2, 4); n > maxMetadata {
		return errors.New("the schema has too much metadata")
	}
	if _, n, _ := footer.vector(2, 24); n > 0 {
		return errors.New("columns encoded by dictionary are not supported")
	}
	at, n, _ := footer.vector(3, 24)
	for i := range n {
		block := footer.buf[at+24*i:]
		offset, length := binary.LittleEndian.Uint64(block), binary.LittleEndian.Uint32(block[8:])
		if offset > uint64(len(data)) || uint64(length) > uint64(len(data))-offset || length < 8 {
			return fmt.Errorf("batch %d lies outside the file", i)
		}
		if err := guardMessage(data[offset : offset+uint64(length)]); err != nil {
			return fmt.Errorf("batch %d: %w", i, err)
		}
	}
	return nil
}

const (
	maxFields   = 4096 // columns and list items of one table
	maxMetadata = 256  // pairs on one field, schema or message
)

// guardFields counts fields down the tree, since offsets may make many
// parents share children.
func guardFields(parent node, slot, depth int, count *int) error {
	at, n, _ := parent.vector(slot, 4)
	if *count += n; *count > maxFields || depth > 4 {
		return errors.New("the schema has too many columns")
	}
	for i := range n {
		f := parent.tableAt(at + 4*i)
		if _, m, _ := f.vector(6, 4); m > maxMetadata {
			return errors.New("a column has too much metadata")
		}
		if err := guardFields(f, 5, depth+1, count); err != nil {
			return err
		}
	}
	return nil
}

func guardMessage(data []byte) error {
	if binary.LittleEndian.Uint32(data) == 0xffffffff { // since format 0.15
		data = data[4:]
	}
	message := root(data[4:])
	if _, n, _ := message.vector(4, 4); n > maxMetadata {
		return errors.New("there is too much metadata")
	}
	batch, ok := message.table(2)
	if !ok {
		return errors.New("there is no header")
	}
	if _, ok := batch.slot(3); ok {
		return errors.New("compressed columns are not supported")
	}
	return nil
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

// vector gives the place of the first entry and the count, and panics when
// entries of that size do not fit.
func (n node) vector(i, size int) (at, count int, ok bool) {
	at, ok = n.slot(i)
	if !ok {
		return 0, 0, false
	}
	at += int(binary.LittleEndian.Uint32(n.buf[at:]))
	count = int(binary.LittleEndian.Uint32(n.buf[at:]))
	at += 4
	_ = n.buf[at : at+count*size]
	return at, count, true
}
