package shell

import (
	"context"

	"hushframe/core/mechanics/element"
)

// Types returns the built-in plate elements.
func Types() []element.Type {
	return []element.Type{QuadraticTriangle(), LinearTriangle()}
}

// QuadraticTriangle returns the six-node element, the default of the product.
func QuadraticTriangle() element.Type {
	return &triangle{
		f: quadratic(), drilling: drilling,
		description: element.Description{
			Name:  "quadratic-triangle",
			About: "six-node shear-deformable triangle, straight or curved sides, second order in deflection and rotation",
			Nodes: 6,
		},
	}
}

// QuadraticFacet returns the six-node element as a flat facet of a curved shell. Where facets are tilted
// against each other the turn about the normal of one bends the next, so it must follow the turn of the
// surface closely: the drilling stiffness is the full shear stiffness, as T. J. R. Hughes and F. Brezzi
// advise. With the small share of QuadraticTriangle, right for plates that are flat, a twisted strip of
// facets is too soft by more than half.
func QuadraticFacet() element.Type {
	t := *QuadraticTriangle().(*triangle)
	t.drilling = 1
	t.description.Name = "quadratic-facet"
	t.description.About = "six-node shear-deformable triangle as a flat facet of a curved shell"
	return &t
}

// LinearTriangle returns the three-node element.
func LinearTriangle() element.Type {
	return &triangle{
		f: linear(), drilling: drilling,
		description: element.Description{
			Name:  "linear-triangle",
			About: "three-node shear-deformable triangle, constant strain in its plane",
			Nodes: 3,
		},
	}
}

// chunk is the number of elements a goroutine takes at once.
const chunk = 64

type triangle struct {
	f           *formulation
	drilling    float64
	description element.Description
}

var _ element.Type = (*triangle)(nil)

func (t *triangle) Describe() element.Description { return t.description }

func (t *triangle) Matrices(ctx context.Context, in *element.Batch, out *element.Matrices) error {
	element.CheckShape(t.description, in, len(out.Stiffness), len(out.Mass))
	xyz, packed := 3*t.description.Nodes, element.Packed(t.description.Unknowns())
	return element.Each(ctx, in.Count(), chunk, in.Threads, t.kernel, func(k *kernel, e int) error {
		nodes, section := in.Nodes[xyz*e:xyz*(e+1)], &in.Sections[in.Section[e]]
		if reason := k.locate(nodes); reason != "" {
			return &element.ShapeError{Element: e, Reason: reason}
		}
		k.stiffness(section)
		k.pack(out.Stiffness[packed*e : packed*(e+1)])
		k.mass(nodes, section, out.Mass[packed*e:packed*(e+1)])
		return nil
	})
}

func (t *triangle) Energies(ctx context.Context, in *element.Batch, motions, out []float64) error {
	element.CheckShape(t.description, in, -1, -1)
	xyz, unknowns := 3*t.description.Nodes, t.description.Unknowns()
	if in.Count() == 0 {
		return ctx.Err()
	}
	count := len(motions) / (unknowns * in.Count())
	if len(motions) != count*unknowns*in.Count() || len(out) != count*element.Kinds*in.Count() {
		panic("element: " + t.description.Name + ": motions and energies do not fit the batch")
	}
	return element.Each(ctx, in.Count(), chunk, in.Threads, t.kernel, func(k *kernel, e int) error {
		section := &in.Sections[in.Section[e]]
		if reason := k.locate(in.Nodes[xyz*e : xyz*(e+1)]); reason != "" {
			return &element.ShapeError{Element: e, Reason: reason}
		}
		k.stiffness(section) // for the bubble
		for m := range count {
			at := e*count + m
			k.energies(section, motions[unknowns*at:unknowns*(at+1)], out[element.Kinds*at:element.Kinds*(at+1)])
		}
		return nil
	})
}

func (t *triangle) kernel() *kernel { return newKernel(t.f, t.drilling) }
