// Package pack writes lists of numbers so that a page carries them in few bytes and a browser reads them without parsing.
package pack

import (
	"encoding/base64"
	"encoding/binary"
	"encoding/json"
	"math"
)

// Floats travel as 32-bit little-endian numbers in base64, NaN included: seven digits, four bytes.
type Floats []float64

// MarshalJSON implements json.Marshaler.
func (x Floats) MarshalJSON() ([]byte, error) {
	b := make([]byte, 0, 4*len(x))
	for _, v := range x {
		b = binary.LittleEndian.AppendUint32(b, math.Float32bits(float32(v)))
	}
	return json.Marshal(base64.StdEncoding.EncodeToString(b))
}

// Indices travel as 32-bit little-endian integers in base64.
type Indices []int32

// MarshalJSON implements json.Marshaler.
func (x Indices) MarshalJSON() ([]byte, error) {
	b := make([]byte, 0, 4*len(x))
	for _, v := range x {
		b = binary.LittleEndian.AppendUint32(b, uint32(v))
	}
	return json.Marshal(base64.StdEncoding.EncodeToString(b))
}

// Steps travel as 16-bit little-endian integers in base64; what one step is worth stands beside them.
type Steps []int16

// MarshalJSON implements json.Marshaler.
func (x Steps) MarshalJSON() ([]byte, error) {
	b := make([]byte, 0, 2*len(x))
	for _, v := range x {
		b = binary.LittleEndian.AppendUint16(b, uint16(v))
	}
	return json.Marshal(base64.StdEncoding.EncodeToString(b))
}

// Stepped rounds values to whole steps, the largest of them at 32767 steps, and says what a step is worth.
func Stepped(values []float64) (Steps, float64) {
	most := 0.0
	for _, v := range values {
		if a := math.Abs(v); a > most && !math.IsInf(a, 0) {
			most = a
		}
	}
	out := make(Steps, len(values))
	if most == 0 {
		return out, 0
	}
	step := most / math.MaxInt16
	for i, v := range values {
		if s := math.Round(v / step); s >= -math.MaxInt16 && s <= math.MaxInt16 { // not NaN, not infinite
			out[i] = int16(s)
		}
	}
	return out, step
}

// Number is a number that may be NaN or infinite, which JSON has no word for: both travel as null.
type Number float64

// MarshalJSON implements json.Marshaler.
func (x Number) MarshalJSON() ([]byte, error) {
	if v := float64(x); math.IsNaN(v) || math.IsInf(v, 0) {
		return []byte("null"), nil
	}
	return json.Marshal(float64(x))
}

// Bytes travel as base64.
type Bytes []byte

// MarshalJSON implements json.Marshaler.
func (x Bytes) MarshalJSON() ([]byte, error) {
	return json.Marshal(base64.StdEncoding.EncodeToString(x))
}

// Numbers converts a list.
func Numbers(x []float64) []Number {
	out := make([]Number, len(x))
	for i, v := range x {
		out[i] = Number(v)
	}
	return out
}
