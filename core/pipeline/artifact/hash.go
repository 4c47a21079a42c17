package artifact

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"hash"
	"math"
)

// The content hash is SHA-256 over a plain byte form, the same for every
// writer and independent of how Arrow lays out buffers: lengths and integers
// as 8 bytes little-endian, texts as length and UTF-8, floats as their IEEE
// bits with every NaN made equal, truths as one byte, lists as length and
// entries. An artifact hashes kind, version, scalars (sorted by name), tables
// (in the order of the kind; per column its name, type, unit and values) and
// loose files (sorted by path; each by its own SHA-256).

// Hash gives the content hash as hex.
func (a *Artifact) Hash() string {
	h := hasher{Hash: sha256.New()}
	h.text("hushframe artifact 1")
	h.text(a.Kind.Name)
	h.number(uint64(a.Kind.Version))
	h.number(uint64(len(a.Scalars)))
	for _, name := range sortedKeys(a.Scalars) {
		h.text(name)
		h.scalar(a.Scalars[name])
	}
	h.number(uint64(len(a.Kind.Tables)))
	for _, spec := range a.Kind.Tables {
		h.table(a.Tables[spec.Name], spec)
	}
	h.number(uint64(len(a.Files)))
	for _, path := range sortedKeys(a.Files) {
		h.text(path)
		sum := sha256.Sum256(a.Files[path])
		h.Write(sum[:])
	}
	return hex.EncodeToString(h.Sum(nil))
}

type hasher struct {
	hash.Hash
	buf []byte
}

func (h *hasher) number(x uint64) {
	h.buf = binary.LittleEndian.AppendUint64(h.buf[:0], x)
	h.Write(h.buf)
}

func (h *hasher) text(s string) {
	h.buf = binary.LittleEndian.AppendUint64(h.buf[:0], uint64(len(s)))
	h.buf = append(h.buf, s...)
	h.Write(h.buf)
}

func (h *hasher) truth(b bool) {
	if b {
		h.Write([]byte{1})
	} else {
		h.Write([]byte{0})
	}
}

func (h *hasher) scalar(v any) {
	h.text(string(scalarType(v)))
	switch x := v.(type) {
	case float64:
		h.number(floatBits(x))
	case int64:
		h.number(uint64(x))
	case string:
		h.text(x)
	case bool:
		h.truth(x)
	}
}

func (h *hasher) table(t *Table, spec TableSpec) {
	h.text(spec.Name)
	h.number(uint64(t.Rows()))
	for _, c := range spec.Columns {
		h.text(c.Name)
		h.text(string(c.Type))
		h.text(c.Unit)
		switch s := t.columns[c.Name].(type) {
		case []float64:
			h.floats(s)
		case []int64:
			h.ints(s)
		case []string:
			for _, x := range s {
				h.text(x)
			}
		case []bool:
			for _, x := range s {
				h.truth(x)
			}
		case [][]float64:
			for _, x := range s {
				h.number(uint64(len(x)))
				h.floats(x)
			}
		case [][]int64:
			for _, x := range s {
				h.number(uint64(len(x)))
				h.ints(x)
			}
		case [][]string:
			for _, x := range s {
				h.number(uint64(len(x)))
				for _, y := range x {
					h.text(y)
				}
			}
		}
	}
}

// hashBlock is how many numbers are turned to bytes at a time.
const hashBlock = 1024

func (h *hasher) floats(s []float64) {
	for len(s) > 0 {
		n := min(len(s), hashBlock)
		h.buf = h.buf[:0]
		for _, x := range s[:n] {
			h.buf = binary.LittleEndian.AppendUint64(h.buf, floatBits(x))
		}
		h.Write(h.buf)
		s = s[n:]
	}
}

func (h *hasher) ints(s []int64) {
	for len(s) > 0 {
		n := min(len(s), hashBlock)
		h.buf = h.buf[:0]
		for _, x := range s[:n] {
			h.buf = binary.LittleEndian.AppendUint64(h.buf, uint64(x))
		}
		h.Write(h.buf)
		s = s[n:]
	}
}

func floatBits(x float64) uint64 {
	if math.IsNaN(x) {
		return 0x7ff8000000000000
	}
	return math.Float64bits(x)
}
