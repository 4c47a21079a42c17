package sweep

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/cmplx"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/direct"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/rotor"
	"hushframe/core/numeric/sparse"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// builtin gives the element types that come with the product.
func builtin(name string) element.Type {
	for _, t := range shell.Types() {
		if t.Describe().Name == name {
			return t
		}
	}
	return nil
}

// check solves the full damped equations at the frequencies of check_at and
// sets the transfer functions beside those of the modal basis.
func (w *whole) check(ctx context.Context, r *kinds.Response, sys *forced.System, set settings, threads int, report stage.Reporter) error {
	if w == nil {
		return nil
	}
	tr, err := sys.Transfer(ctx, set.checkAt, threads)
	if err != nil {
		return err
	}
	for k, frequency := range set.checkAt {
		report.Progress("direct solve", float64(k)/float64(len(set.checkAt)))
		want, err := w.frame.Rates(ctx, frequency, w.gyro, w.at, threads)
		if err != nil {
			return unsolved(err, frequency)
		}
		for axis, name := range kinds.AxisNames {
			var off, size [2]float64 // over forces, over moments
			for j, in := range sys.Inputs() {
				h, d := tr.Rate[axis][j][k], want.Rate[axis][j/6][in.Component]
				r.Direct = append(r.Direct, kinds.ResponseDirect{Frequency: frequency, Rotor: in.Rotor, Component: in.Component, Axis: name, Modal: h, Direct: d})
				kind := in.Component / 3
				off[kind], size[kind] = math.Hypot(off[kind], cmplx.Abs(h-d)), math.Hypot(size[kind], cmplx.Abs(d))
			}
			for kind := range off {
				r.DirectErrors = append(r.DirectErrors, kinds.ResponseDirectError{Frequency: frequency, Axis: name, Moment: kind == 1, Error: off[kind] / size[kind]})
			}
		}
	}
	return nil
}

// whole is the frame of every unknown, with the damping of the basis and the
// rotors as they spin.
type whole struct {
	frame *direct.Frame
	gyro  direct.Place
	at    []direct.Place // rotors
}

// assemble makes it when check_at asks for it, else nil.
func (f *fleet) assemble(ctx context.Context, basis *modal.Basis, p *airframe.Properties, g given, set settings, threads int) (*whole, error) {
	if len(set.checkAt) == 0 {
		return nil, nil
	}
	problem, err := assembly.FromAirframe(g.mesh, p, builtin)
	if err != nil {
		return nil, fault.New(fault.Input, "the frame cannot be assembled again: %v", err).In("sweep", "").Of("check_at").
			Do("give the mesh and properties that solve was given; check_at knows only the element types that come with the product")
	}
	same := len(problem.Groups) == len(basis.Groups)
	for k := 0; same && k < len(problem.Groups); k++ {
		same = problem.Groups[k].Name == basis.Groups[k].Name && problem.Groups[k].Kind == basis.Groups[k].Kind
	}
	if !same || len(basis.Shapes) == 0 || len(basis.Shapes[0]) != 3*len(problem.Nodes) {
		return nil, fault.New(fault.Input, "the modes are not of this mesh and these properties: they have other parts, joints or mounts, or another number of nodes").In("sweep", "").Of("mesh").
			Do("give the mesh and properties that solve was given")
	}
	system, err := assembly.Assemble(ctx, &problem.Problem, threads)
	if err != nil {
		return nil, fault.From(err).In("sweep", "").Of("check_at")
	}
	bodies := map[string]int{}
	for k, b := range p.Bodies {
		bodies[b.Name] = problem.BodyOf[k]
	}
	frame := &direct.Frame{System: system, Complex: func(k int, frequency float64) complex128 { return basis.Groups[k].At(frequency) }}
	var at []direct.Place
	for k, x := range f.rotors {
		place := direct.Place{Body: bodies[x.Body], Point: x.Hub}
		at = append(at, place)
		if c := f.couplings[k]; set.spinning && c.Momentum != 0 {
			e1, e2 := rotor.Square(x.Axis)
			frame.Spins = append(frame.Spins, direct.Spin{Place: place, First: e1, Second: e2, Momentum: c.Momentum})
		}
	}
	return &whole{frame, direct.Place{Body: bodies[p.Gyro.Body], Point: p.Gyro.At}, at}, nil
}

func unsolved(err error, frequency float64) error {
	var pivot *sparse.PivotError
	var loose *direct.NotSettled
	if errors.As(err, &pivot) || errors.As(err, &loose) {
		return fault.New(fault.Numeric, "the full equations have no settled answer: %v", err).In("sweep", fmt.Sprintf("%g Hz", frequency)).Of("check_at").
			Do("choose a frequency off the resonances without damping")
	}
	return err
}

// directError is the greatest of the errors, NaN without any.
func directError(r *kinds.Response) float64 {
	most := math.NaN()
	for _, x := range r.DirectErrors {
		if !(x.Error <= most) {
			most = x.Error
		}
	}
	return most
}

// directTable sets the modal response against the direct solve.
func directTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title: "Modal response against a direct solve",
		Text: "the full damped equations of every unknown solved at single frequencies; the difference of the transfer functions over their size, root sum of squares over all rotors, " +
			"for forces and for moments. Below 1 % the modal response is as good as the mesh",
		Columns: []stage.Column{{Name: "Hz", Right: true}},
	}
	for _, axis := range kinds.AxisNames {
		s.Columns = append(s.Columns, stage.Column{Name: axis + ", forces, %", Right: true}, stage.Column{Name: "moments, %", Right: true})
	}
	for k := 0; k < len(r.DirectErrors); k += 6 {
		row := []string{fmt.Sprintf("%.4g", r.DirectErrors[k].Frequency)}
		for _, x := range r.DirectErrors[k : k+6] {
			row = append(row, fmt.Sprintf("%.3f", 100*x.Error))
		}
		s.Rows = append(s.Rows, row)
	}
	return s
}
