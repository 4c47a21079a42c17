// Package kindstest makes artifacts of the product by formulas, for tests of what reads them.
package kindstest

import (
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
)

const length, width = 0.1, 0.02

// PlankMesh is a plank 100 mm long and 20 mm wide of a thickness h (m), of two rows of cells of two quadratic triangles each.
func PlankMesh(h float64, columns int) *mesh.Mesh {
	const rows = 2
	across := 2*columns + 1
	at := func(i, j int) int32 { return int32(j*across + i) }
	m := &mesh.Mesh{Parts: []mesh.Part{{Name: "deck", Element: "quadratic-triangle", Thickness: h,
		Frame: airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}}}}
	for j := range 2*rows + 1 {
		for i := range across {
			m.Nodes = append(m.Nodes, airframe.Vec{length * float64(i) / float64(across-1), width * (float64(j)/(2*rows) - 0.5), 0})
		}
	}
	for j := 0; j < 2*rows; j += 2 {
		for i := 0; i < across-1; i += 2 {
			m.Triangles = append(m.Triangles,
				[6]int32{at(i, j), at(i+2, j), at(i+2, j+2), at(i+1, j), at(i+2, j+1), at(i+1, j+1)},
				[6]int32{at(i, j), at(i+2, j+2), at(i, j+2), at(i+1, j+1), at(i+1, j+2), at(i, j+1)})
			m.TrianglePart = append(m.TrianglePart, 0, 0)
		}
	}
	return m
}

// PlankModes has shapes cos(kπx/L) at 20 Hz per mm of thickness times k², up to 800 Hz: 40, 160, 360, 640 Hz at 2 mm; the damping ratio is 1 %.
func PlankModes(m *mesh.Mesh, h float64) *kinds.Modes {
	mass := 1500 * length * width * h
	out := &kinds.Modes{UpTo: 800, SweptTo: 500, Proved: true, Mass: mass, Basis: &modal.Basis{},
		Masses: []kinds.MassRow{{Name: "deck", Kind: "part", Mass: mass}}, Survey: &modal.Survey{From: 80, To: 500, Groups: []string{"deck"},
			Kinds: []string{"bending"}, Carriers: []string{"deck"}}}
	for k := 1; ; k++ {
		f := 20e3 * h * float64(k*k)
		if f > out.UpTo {
			break
		}
		shape := make([]float64, 0, 3*len(m.Nodes))
		for _, n := range m.Nodes {
			shape = append(shape, 0, 0, math.Cos(float64(k)*math.Pi*n[0]/length))
		}
		out.Survey.Modes = append(out.Survey.Modes, modal.Mode{Number: k, Vector: len(out.Basis.Kinds), Frequency: f, Loss: 0.02, Part: "deck", Motion: "bending",
			ByGroup: []float64{1}, ByKind: []float64{1}, ByCarrier: []float64{1}, Below: math.Inf(1), Above: math.Inf(1)})
		out.Basis.Kinds, out.Basis.Frequency, out.Basis.Shapes = append(out.Basis.Kinds, modal.Elastic), append(out.Basis.Frequency, f), append(out.Basis.Shapes, shape)
	}
	n := len(out.Basis.Kinds)
	out.Basis.Groups = []modal.LossGroup{{Name: "deck", Kind: "part", LossFactor: 0.02, Stiffness: make([]float64, n*n)}}
	return out
}

// PlankResponse has the density of single modes, with peaks in proportion to 1/f² on pitch and a quarter of it on roll.
func PlankResponse(m *kinds.Modes) *kinds.Response {
	r := &kinds.Response{From: 80, To: 500, ModesTo: m.UpTo, Force: 1, Thrust: math.NaN()}
	for f := 80.0; f <= 500; f += 0.5 {
		r.Frequency = append(r.Frequency, f)
	}
	scale := [3]float64{0.25, 1, 0}
	for axis := range r.Density {
		for _, f := range r.Frequency {
			sum := 0.0
			for _, x := range m.Survey.Modes {
				u := f/x.Frequency - x.Frequency/f
				sum += scale[axis] / (x.Frequency * x.Frequency) / (u*u + x.Loss*x.Loss)
			}
			r.Density[axis] = append(r.Density[axis], sum)
			r.Uncorrected[axis] = append(r.Uncorrected[axis], math.NaN())
		}
		for _, x := range m.Survey.Modes {
			if x.Frequency >= r.From && x.Frequency <= r.To && scale[axis] > 0 {
				r.Peaks = append(r.Peaks, kinds.ResponsePeak{Axis: kinds.AxisNames[axis], Frequency: x.Frequency, Density: scale[axis] / math.Pow(x.Frequency*x.Loss, 2),
					Prominence: 10, Damping: x.Loss / 2, Modes: []int{x.Number}, Shares: []float64{1}, Uncorrected: math.NaN(), Losses: []string{}, LossShares: []float64{}})
			}
		}
		r.Axes = append(r.Axes, kinds.ResponseAxis{Axis: kinds.AxisNames[axis], RMS: 1, Correction: math.NaN(), CorrectionAt: math.NaN()})
	}
	for _, x := range m.Survey.Modes {
		r.Modes = append(r.Modes, kinds.ResponseMode{Number: x.Number, Frequency: x.Frequency, Damping: x.Loss / 2})
	}
	return r
}
