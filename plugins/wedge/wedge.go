package main

import (
	"context"
	"fmt"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// Wedge is the element type "solid-wedge".
type Wedge struct{}

var _ extension.Element = Wedge{}

// Describe implements extension.Element.
func (Wedge) Describe() stage.Extension {
	zero, one, most, half := 0.0, 1.0, 8.0, 0.49
	return stage.Extension{
		Kind: extension.ElementKind, Name: "solid-wedge",
		About: "quadratic solid wedges of 15 nodes in layers through the thickness",
		Arguments: []stage.Argument{
			{Name: "layers", About: "wedges through the thickness", Type: stage.Type{Kind: stage.Whole}, Default: 2.0, Example: "2", Min: &one, Max: &most},
			{Name: "normal_modulus", About: "Young's modulus along the normal, of plies that are not isotropic; left out, that along direction 2",
				Type: stage.Type{Kind: stage.Amount, Dimension: "pressure", Unit: "GPa"}, Example: `"9 GPa"`, Above: &zero},
			{Name: "normal_ratio", About: "geometric mean of the two Poisson's ratios between the normal and the plane, of such plies",
				Type: stage.Type{Kind: stage.Number}, Default: 0.3, Example: "0.3", Min: &zero, Max: &half},
		},
	}
}

// Shape implements extension.Element.
func (Wedge) Shape(_ context.Context, options stage.Arguments) (element.Description, error) {
	return element.Description{Nodes: 6, Points: points(options.Whole("layers"))}, nil
}

// points lists the levels of a column from the lower face: six points on a face, three in the middle of a layer.
func points(layers int) []element.Point {
	var all []element.Point
	for j := range layers + 1 {
		for n := range 6 {
			all = append(all, element.Point{Node: n, Height: height(2*j, layers)})
		}
		for n := 0; n < 3 && j < layers; n++ {
			all = append(all, element.Point{Node: n, Height: height(2*j+1, layers)})
		}
	}
	return all
}

// height of a level in half thicknesses.
func height(level, layers int) float64 { return float64(level-layers) / float64(layers) }

// place gives the points of a column for the 15 nodes of one layer: six below, six above, three between.
func place(layer int) (p [15]int) {
	for n := range 6 {
		p[n], p[6+n] = 9*layer+n, 9*(layer+1)+n
	}
	for n := range 3 {
		p[12+n] = 9*layer + 6 + n
	}
	return p
}

// chunk is the number of columns a goroutine takes at once.
const chunk = 16

// Matrices implements extension.Element.
func (Wedge) Matrices(ctx context.Context, options stage.Arguments, in *element.Batch, out *element.Matrices) error {
	cuts, err := slices(in, options)
	if err != nil {
		return err
	}
	layers := options.Whole("layers")
	packed := element.Packed(3 * len(points(layers)))
	return element.Each(ctx, in.Count(), chunk, in.Threads, func() *column { return newColumn(layers) }, func(c *column, e int) error {
		if reason := c.locate(in.Nodes[18*e : 18*(e+1)]); reason != "" {
			return &element.ShapeError{Element: e, Reason: reason}
		}
		c.matrices(cuts[in.Section[e]], out.Stiffness[packed*e:packed*(e+1)], out.Mass[packed*e:packed*(e+1)])
		return nil
	})
}

// Energies implements extension.Element. Of the work of the stresses in the plane, the part that the forces N = ∫σ dz
// do on the mean strain is in-plane; of the rest, that of τ_xy is twist and the other bending. All work of the
// stresses along and across the normal counts as shear.
func (Wedge) Energies(ctx context.Context, options stage.Arguments, in *element.Batch, motions, out []float64) error {
	cuts, err := slices(in, options)
	if err != nil {
		return err
	}
	if in.Count() == 0 {
		return ctx.Err()
	}
	layers := options.Whole("layers")
	unknowns := 3 * len(points(layers))
	count := len(motions) / (unknowns * in.Count())
	return element.Each(ctx, in.Count(), chunk, in.Threads, func() *column { return newColumn(layers) }, func(c *column, e int) error {
		if reason := c.locate(in.Nodes[18*e : 18*(e+1)]); reason != "" {
			return &element.ShapeError{Element: e, Reason: reason}
		}
		for m := range count {
			at := e*count + m
			c.energies(cuts[in.Section[e]], motions[unknowns*at:unknowns*(at+1)], out[element.Kinds*at:element.Kinds*(at+1)])
		}
		return nil
	})
}

// slice is a part of a layer that is of one ply.
type slice struct {
	layer     int
	low, high float64 // ζ in the layer
	thickness float64 // m, of the layer
	stiffness [6][6]float64
	density   float64
	total     float64 // m, thickness of the plate
}

// slices cuts the layers of each section at its plies.
func slices(in *element.Batch, options stage.Arguments) ([][]slice, error) {
	layers := options.Whole("layers")
	all := make([][]slice, len(in.Sections))
	for s, layup := range in.Layups {
		if len(layup) == 0 {
			return nil, fault.New(fault.Input, "section %d has no plies; a solid element needs the material", s)
		}
		total := 0.0
		for _, p := range layup {
			total += p.Thickness
		}
		thickness := total / float64(layers)
		z := 0.0
		for i, p := range layup {
			c, err := solid(p.Material, p.Angle, options)
			if err != nil {
				return nil, fmt.Errorf("ply %d of %d: %w", i+1, len(layup), err)
			}
			top := z + p.Thickness
			if i == len(layup)-1 {
				top = total // whatever rounding says
			}
			for l := range layers {
				low, high := max(z, float64(l)*thickness), min(top, float64(l+1)*thickness)
				if high-low > 1e-9*total {
					all[s] = append(all[s], slice{layer: l, thickness: thickness, total: total, stiffness: c, density: p.Material.Density,
						low: 2*(low-float64(l)*thickness)/thickness - 1, high: 2*(high-float64(l)*thickness)/thickness - 1})
				}
			}
			z = top
		}
	}
	return all, nil
}
