package main

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"encoding/xml"
	"fmt"
	"math"
)

// grid writes an unstructured grid as VTK XML, version 1.0 of the format: arrays in base64, each preceded by its
// length in bytes as UInt32, little-endian.
type grid struct {
	cells  cells
	points int
	fields bytes.Buffer
}

// field adds displacements of the points.
func (g *grid) field(name string, vectors []float64) {
	array(&g.fields, name, 3, vectors, nil, nil)
}

// array writes one DataArray; one of the three slices is given.
func array(w *bytes.Buffer, name string, components int, floats []float64, ints []int32, raw []byte) {
	kind, data := "UInt8", raw
	switch {
	case floats != nil:
		kind = "Float32"
		for _, v := range floats {
			data = binary.LittleEndian.AppendUint32(data, math.Float32bits(float32(v)))
		}
	case ints != nil:
		kind = "Int32"
		for _, v := range ints {
			data = binary.LittleEndian.AppendUint32(data, uint32(v))
		}
	}
	fmt.Fprintf(w, `<DataArray type="%s" Name="`, kind)
	_ = xml.EscapeText(w, []byte(name)) // a buffer cannot fail
	fmt.Fprintf(w, `" NumberOfComponents="%d" format="binary">`, components)
	all := append(binary.LittleEndian.AppendUint32(nil, uint32(len(data))), data...)
	w.WriteString(base64.StdEncoding.EncodeToString(all))
	w.WriteString("</DataArray>\n")
}

// bytes is the whole file.
func (g *grid) bytes() []byte {
	var w bytes.Buffer
	w.WriteString(`<?xml version="1.0"?>` + "\n" +
		`<VTKFile type="UnstructuredGrid" version="1.0" byte_order="LittleEndian" header_type="UInt32">` + "\n<UnstructuredGrid>\n")
	fmt.Fprintf(&w, `<Piece NumberOfPoints="%d" NumberOfCells="%d">`+"\n", g.points, len(g.cells.kinds))
	w.WriteString("<PointData>\n")
	w.Write(g.fields.Bytes())
	w.WriteString("</PointData>\n<CellData>\n")
	array(&w, "part", 1, nil, g.cells.parts, nil)
	w.WriteString("</CellData>\n<Points>\n")
	array(&w, "place", 3, g.cells.places, nil, nil)
	w.WriteString("</Points>\n<Cells>\n")
	array(&w, "connectivity", 1, nil, g.cells.nodes, nil)
	array(&w, "offsets", 1, nil, g.cells.ends, nil)
	array(&w, "types", 1, nil, nil, g.cells.kinds)
	w.WriteString("</Cells>\n</Piece>\n</UnstructuredGrid>\n</VTKFile>\n")
	return w.Bytes()
}
