package dxf

import (
	"math"
	"strings"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
)

func fold(s string) string { return strings.ToLower(s) }

// insert puts the entities of a block in place, once for each row and column.
func (r *reader) insert(rec record, own outline.Affine, layer string, p placement) *fault.Error {
	name := blockName(rec.text(2))
	b, ok := r.blocks[name]
	if !ok {
		return fault.New(fault.Input, "it inserts the block %q, which the drawing does not have", rec.text(2)).
			Do("bind or embed external references before export")
	}
	mark := "\x00" + name + "\x00"
	if strings.Contains(p.open, mark) || p.depth >= maxDepth {
		return fault.New(fault.Input, "the block %q contains itself", rec.text(2)).Do("take the block apart before export")
	}
	v, err := rec.reals(10, 20, 50, 44, 45)
	if err != nil {
		return err
	}
	scale := [2]float64{}
	for i, code := range [2]int{41, 42} {
		if scale[i], err = rec.real(code, 1); err != nil {
			return err
		}
	}
	columns, err := rec.whole(70, 1)
	if err != nil {
		return err
	}
	rows, err := rec.whole(71, 1)
	if err != nil {
		return err
	}
	columns, rows = max(columns, 1), max(rows, 1)
	turn := outline.Turn(v[2] * math.Pi / 180)
	// An array without spacing puts all copies on one place.
	if v[3] == 0 {
		columns = 1
	}
	if v[4] == 0 {
		rows = 1
	}
	if float64(columns)*float64(rows) > maxCurves {
		return fault.New(fault.Limit, "it inserts %d by %d copies", columns, rows).Do("leave out what is not cut")
	}
	inner := placement{layer: layer, depth: p.depth + 1, open: p.open + mark}
	shape := outline.Shift(b.base.Scale(-1)).Then(outline.Stretch(scale[0], scale[1])).Then(turn)
	for i := range rows {
		for j := range columns {
			step := turn.ApplyVector(outline.Point{X: float64(j) * v[3], Y: float64(i) * v[4]})
			to := outline.Point{X: v[0], Y: v[1]}.Add(step)
			inner.at = shape.Then(outline.Shift(to)).Then(own).Then(p.at)
			if err := r.readEntities(b.records, inner); err != nil {
				return err
			}
			if r.visits++; r.visits > maxCurves {
				return fault.New(fault.Limit, "the drawing inserts more than %d blocks", maxCurves).Do("leave out what is not cut")
			}
		}
	}
	return nil
}
