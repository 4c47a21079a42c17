package assembly

import (
	"slices"

	"hushframe/core/mechanics/element"
)

// unknowns is the number of unknowns of each node of the part's elements.
func (p *PlatePart) unknowns() int {
	if p.Points != nil {
		return element.PointUnknowns
	}
	return element.NodeUnknowns
}

// lists gives the nodes that carry the unknowns of each element.
func (p *PlatePart) lists() func(e int) []int32 {
	if p.Points != nil {
		return func(e int) []int32 { return p.Points[e] }
	}
	n := p.Type.Describe().Nodes
	return func(e int) []int32 { return p.Elements[e][:n] }
}

// Extrude gives a part of solid elements its points, above and below the nodes of its triangles. Parts of other
// elements stay as they are.
func (p *Problem) Extrude(part *PlatePart) {
	d := part.Type.Describe()
	if !d.Solid() {
		return
	}
	half := part.Section.Thickness / 2
	fibres := map[int32]int{} // place in Fibres
	part.Points, part.Fibres = make([][]int32, len(part.Elements)), nil
	for e, nodes := range part.Elements {
		for _, at := range d.Points {
			v, height := nodes[at.Node], at.Height*half
			f, ok := fibres[v]
			if !ok {
				f = len(part.Fibres)
				fibres[v] = f
				part.Fibres = append(part.Fibres, Fibre{Node: v})
			}
			fibre := &part.Fibres[f]
			i, found := slices.BinarySearch(fibre.Heights, height)
			if !found {
				fibre.Heights = slices.Insert(fibre.Heights, i, height)
				fibre.Points = slices.Insert(fibre.Points, i, int32(len(p.Nodes)))
				p.Nodes = append(p.Nodes, add(p.Nodes[v], scale(height, part.Axes[2])))
				p.Own++
			}
			part.Points[e] = append(part.Points[e], fibre.Points[i])
		}
	}
}

// line fits a straight line to the motion of the points of a fibre: the motion of its middle, in airframe axes, as a
// plate has it. It does not turn about itself.
func (f *Fibre) line(nodes []float64, axes Axes) [6]float64 {
	n := float64(len(f.Points))
	var mean, slope Vec
	middle, spread := 0.0, 0.0
	for i, v := range f.Points {
		mean = add(mean, scale(1/n, Vec(nodes[6*v:6*v+3])))
		middle += f.Heights[i] / n
	}
	for i, v := range f.Points {
		z := f.Heights[i] - middle
		slope = add(slope, scale(z, Vec(nodes[6*v:6*v+3])))
		spread += z * z
	}
	slope = scale(1/spread, slope)
	b := axes.in(slope)
	return join(sub(mean, scale(middle, slope)), axes.out(Vec{-b[1], b[0], 0}))
}
