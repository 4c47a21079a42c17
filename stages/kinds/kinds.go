// Package kinds is the one place where the artifacts of the product are
// described: their tables, columns and units, and the conversion from and to
// the plain values that kernels use. One file per kind.
//
// Conventions. Units are SI. Points and vectors in space are three columns
// with suffix _x, _y, _z in airframe axes (x forward, y left, z up). Frames
// are an origin and two unit vectors; the third is their cross product.
// Indices count from 0 within the table they point to. NaN is "not available".
package kinds

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
)

// malformed is the fault of an artifact whose content contradicts itself,
// which only another writer than ours can make.
func malformed(kind, format string, args ...any) error {
	return fault.New(fault.Protocol, format, args...).In("read artifact", kind).
		Do("the stage that wrote it does not keep to the description of this kind")
}

func col(name string, t artifact.ColumnType, unit, about string) artifact.Column {
	return artifact.Column{Name: name, Type: t, Unit: unit, About: about}
}

// vecCols are the three columns of a vector.
func vecCols(name, unit, about string) []artifact.Column {
	return []artifact.Column{
		col(name+"_x", artifact.Float, unit, about+", forward"),
		col(name+"_y", artifact.Float, unit, about+", left"),
		col(name+"_z", artifact.Float, unit, about+", up"),
	}
}

func columns(groups ...any) []artifact.Column {
	var out []artifact.Column
	for _, g := range groups {
		switch x := g.(type) {
		case artifact.Column:
			out = append(out, x)
		case []artifact.Column:
			out = append(out, x...)
		default:
			panic(fmt.Sprintf("kinds: %T is no column", g))
		}
	}
	return out
}

// setVecs stores n vectors given by index.
func setVecs(t *artifact.Table, name string, n int, at func(i int) airframe.Vec) {
	var c [3][]float64
	for d := range c {
		c[d] = make([]float64, n)
		for i := range c[d] {
			c[d][i] = at(i)[d]
		}
	}
	t.Set(name+"_x", c[0]).Set(name+"_y", c[1]).Set(name+"_z", c[2])
}

func getVec(t *artifact.Table, name string, i int) airframe.Vec {
	return airframe.Vec{t.Floats(name + "_x")[i], t.Floats(name + "_y")[i], t.Floats(name + "_z")[i]}
}

// frameCols, setFrames and getFrame hold a frame as origin and two axes.
func frameCols(about string) []artifact.Column {
	return columns(vecCols("origin", "m", about+": origin"), vecCols("axis1", "1", about+": x axis"), vecCols("axis2", "1", about+": y axis"))
}

func setFrames(t *artifact.Table, n int, at func(i int) airframe.Frame) {
	setVecs(t, "origin", n, func(i int) airframe.Vec { return at(i).Origin })
	setVecs(t, "axis1", n, func(i int) airframe.Vec { return at(i).X })
	setVecs(t, "axis2", n, func(i int) airframe.Vec { return at(i).Y })
}

func getFrame(t *artifact.Table, i int) airframe.Frame {
	x, y := getVec(t, "axis1", i), getVec(t, "axis2", i)
	return airframe.Frame{Origin: getVec(t, "origin", i), X: x, Y: y, Z: airframe.Vec{
		x[1]*y[2] - x[2]*y[1], x[2]*y[0] - x[0]*y[2], x[0]*y[1] - x[1]*y[0]}}
}

// each makes a column from n values.
func each[T any](n int, at func(i int) T) []T {
	out := make([]T, n)
	for i := range out {
		out[i] = at(i)
	}
	return out
}

func ints[T ~int | ~int32 | ~int64](s []T) []int64 {
	return each(len(s), func(i int) int64 { return int64(s[i]) })
}

// nodeIndices turns table indices into int32, refusing any outside [0, limit).
func nodeIndices(kind, what string, s []int64, limit int) ([]int32, error) {
	out := make([]int32, len(s))
	for i, v := range s {
		if v < 0 || v >= int64(limit) || v > math.MaxInt32 {
			return nil, malformed(kind, "%s %d is outside 0 to %d", what, v, limit-1)
		}
		out[i] = int32(v)
	}
	return out, nil
}
