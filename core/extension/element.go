package extension

import (
	"context"

	"hushframe/core/mechanics/element"
	"hushframe/core/pipeline/stage"
)

// Kinds of extensions that stages call.
const (
	ElementKind = "element"
	ReaderKind  = "reader"
)

// Element is an element type for plates.
//
// It keeps no state between calls, is safe for concurrent use and gives equal bytes for equal input, whatever
// the number of threads. Every call has the options of the job, checked against Describe, defaults filled in.
// Coordinates, motions and matrices are in the element frame; see package element for terms and units.
type Element interface {
	// Describe states kind ("element"), name, a line of help, and the options. Constant and cheap.
	Describe() stage.Extension
	// Shape says where the element has its unknowns. An option that makes no element is a fault that names
	// it as argument. Name and About of the result may be left empty.
	Shape(ctx context.Context, options stage.Arguments) (element.Description, error)
	// Matrices fills out, sized for the batch, with packed stiffness and mass of every element. An element that
	// cannot be computed ends the call with an *element.ShapeError for the lowest such index.
	Matrices(ctx context.Context, options stage.Arguments, in *element.Batch, out *element.Matrices) error
	// Energies fills out[(e·motions + m)·4 + k] with the strain energy (J) of kind k (in-plane, bending, twist,
	// shear) in element e under motion m; together they are ½ uᵀKu. Motions holds the vectors of unknowns, element
	// by element, then motion by motion.
	Energies(ctx context.Context, options stage.Arguments, in *element.Batch, motions, out []float64) error
}

// FromType offers an element type without options as an Element.
func FromType(t element.Type) Element { return plain{t} }

type plain struct{ t element.Type }

func (p plain) Describe() stage.Extension {
	d := p.t.Describe()
	return stage.Extension{Kind: ElementKind, Name: d.Name, About: d.About}
}

func (p plain) Shape(context.Context, stage.Arguments) (element.Description, error) {
	return p.t.Describe(), nil
}

func (p plain) Matrices(ctx context.Context, _ stage.Arguments, in *element.Batch, out *element.Matrices) error {
	return p.t.Matrices(ctx, in, out)
}

func (p plain) Energies(ctx context.Context, _ stage.Arguments, in *element.Batch, motions, out []float64) error {
	return p.t.Energies(ctx, in, motions, out)
}

// Bind settles the options of an element, so that assembly can call it.
func Bind(ctx context.Context, e Element, options stage.Arguments) (element.Type, error) {
	if p, ok := e.(plain); ok {
		return p.t, nil
	}
	d, err := e.Shape(ctx, options)
	if err != nil {
		return nil, err
	}
	about := e.Describe()
	d.Name, d.About = about.Name, about.About
	if err := checkShape(d); err != nil {
		return nil, err
	}
	return &bound{e, options, d}, nil
}

type bound struct {
	element     Element
	options     stage.Arguments
	description element.Description
}

var _ element.Type = (*bound)(nil)

func (b *bound) Describe() element.Description { return b.description }

func (b *bound) Matrices(ctx context.Context, in *element.Batch, out *element.Matrices) error {
	element.CheckShape(b.description, in, len(out.Stiffness), len(out.Mass))
	return b.element.Matrices(ctx, b.options, in, out)
}

func (b *bound) Energies(ctx context.Context, in *element.Batch, motions, out []float64) error {
	element.CheckShape(b.description, in, -1, -1)
	return b.element.Energies(ctx, b.options, in, motions, out)
}
