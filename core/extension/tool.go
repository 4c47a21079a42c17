package extension

import (
	"bufio"
	"context"
	"errors"
	"os"
	"strconv"

	"hushframe/core/mechanics/element"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// ElementTool offers an element type by method, for the process that serves it.
func ElementTool(e Element) stage.Tool { return elementTool{e} }

type elementTool struct{ e Element }

func (x elementTool) Describe() stage.Extension { return x.e.Describe() }

func (x elementTool) Call(ctx context.Context, r stage.ExtensionRequest) error {
	d, err := x.e.Shape(ctx, r.Arguments)
	if err != nil {
		return err
	}
	switch r.Method {
	case "shape":
		return artifact.WriteUnsealed(r.Out, encodeShape(d))
	case "matrices":
		in, _, err := readBatch(r, d)
		if err != nil {
			return err
		}
		out := element.NewMatrices(in.Count(), d.Unknowns())
		if err := x.e.Matrices(ctx, r.Arguments, in, out); err != nil {
			return encodeElementError(err)
		}
		a, packed := artifact.New(matricesKind), element.Packed(d.Unknowns())
		a.Table("matrices").Set("stiffness", rows(out.Stiffness, in.Count(), packed)).Set("mass", rows(out.Mass, in.Count(), packed))
		return artifact.WriteUnsealed(r.Out, a)
	case "energies":
		in, a, err := readBatch(r, d)
		if err != nil {
			return err
		}
		vectors := a.Table("motions").FloatLists("unknowns")
		if len(vectors) != in.Count() {
			return fault.New(fault.Protocol, "%d elements have %d rows of motions", in.Count(), len(vectors))
		}
		length := 0
		if len(vectors) > 0 {
			length = len(vectors[0])
		}
		motions := make([]float64, in.Count()*length)
		if err := flatten(motions, vectors, length, "motions"); err != nil || length%d.Unknowns() != 0 {
			return fault.New(fault.Protocol, "the motions do not fit the element: %d values for %d unknowns (%v)", length, d.Unknowns(), err)
		}
		per := length / d.Unknowns() * element.Kinds
		out := make([]float64, in.Count()*per)
		if err := x.e.Energies(ctx, r.Arguments, in, motions, out); err != nil {
			return encodeElementError(err)
		}
		b := artifact.New(energiesKind)
		b.Table("energies").Set("energies", rows(out, in.Count(), per))
		return artifact.WriteUnsealed(r.Out, b)
	}
	return unknownMethod(ElementKind, r.Method)
}

func unknownMethod(kind, method string) error {
	return fault.New(fault.Protocol, "an %s has no method %q", kind, method).Do("the program may be newer than this extension; build it again")
}

func readBatch(r stage.ExtensionRequest, d element.Description) (*element.Batch, *artifact.Artifact, error) {
	a, err := artifact.Open(r.In, Kinds())
	if err != nil {
		return nil, nil, err
	}
	in, err := decodeBatch(a, d.Nodes, r.Threads)
	if err != nil {
		return nil, nil, fault.New(fault.Protocol, "%v", err).In("read batch", a.Kind.Name)
	}
	return in, a, nil
}

// elementOperation marks the fault that stands for an *element.ShapeError, with the index as item.
const elementOperation = "compute element"

func encodeElementError(err error) error {
	var s *element.ShapeError
	if errors.As(err, &s) {
		return fault.New(fault.Numeric, "%s", s.Reason).In(elementOperation, strconv.Itoa(s.Element))
	}
	return err
}

// decodeElementError gives back the *element.ShapeError of an element of a batch that began at first.
func decodeElementError(err error, first int) error {
	var f *fault.Error
	if errors.As(err, &f) && f.Op == elementOperation {
		if i, e := strconv.Atoi(f.Item); e == nil && i >= 0 {
			return &element.ShapeError{Element: first + i, Reason: f.Text}
		}
	}
	return err
}

// ReaderTool offers a reader by method, for the process that serves it.
func ReaderTool(r Reader) stage.Tool { return readerTool{r} }

type readerTool struct{ r Reader }

func (x readerTool) Describe() stage.Extension { return x.r.Describe() }

func (x readerTool) Call(ctx context.Context, r stage.ExtensionRequest) error {
	file, err := os.Open(r.In)
	if err != nil {
		return fault.New(fault.Missing, "%v", err)
	}
	defer file.Close()
	source := bufio.NewReaderSize(file, 1<<20)
	switch r.Method {
	case "inspect":
		h, err := x.r.Inspect(ctx, source, r.Arguments)
		if err != nil {
			return encodeReaderError(err)
		}
		return artifact.WriteUnsealed(r.Out, encodeHeader(h))
	case "read":
		q := stage.Arguments(r.Request)
		request := recording.Request{Columns: q.Texts("columns"), Time: q.Text("time"), TimeUnit: q.Number("time_unit")}
		var g gathered
		if err := x.r.Read(ctx, source, r.Arguments, request, g.add); err != nil {
			return encodeReaderError(err)
		}
		return artifact.WriteUnsealed(r.Out, g.encode())
	}
	return unknownMethod(ReaderKind, r.Method)
}

func encodeReaderError(err error) error {
	var e *recording.Error
	if errors.As(err, &e) {
		return &fault.Error{Kind: fault.Input, Place: e.Place(), Text: e.Text, Remedy: e.Remedy}
	}
	return err
}
