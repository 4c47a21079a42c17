// Package solve is the stage that finds the modes of a meshed airframe.
package solve

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"hushframe/core/extension"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/numeric/eigen"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "solve".
type Stage struct {
	lowest modal.Solver // nil: the eigen-solver of the kernels
}

var _ stage.Stage = Stage{}

// rule is how far modes should reach beyond the highest swept frequency (common practice, no source).
const rule = 1.5

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	frequency := amount("frequency", "Hz")
	zero := 0.0
	d := stage.Description{
		Name:  "solve",
		About: "find the modes of the free airframe",
		Doc: `Assembles plates, standoffs, rigid bodies, bolts and mounts, and finds every
mode below up_to; a count of eigenvalues proves that none was missed. Rotors,
clamps and lumps tie their whole footprint rigidly; footprints that share a node
become one body, which is noted.

For each mode it reports frequency, damping, where and how it strains, how
strongly the gyro feels it on roll, pitch and yaw per newton at the rotor hubs,
the distance to its neighbours, and the rotor speeds at which orders 1, 2 and
blade passing meet it. Residual vectors stand in for the modes above up_to.

With estimate_error the modes are found once more with every element cut in four,
paired by shape and energies, and each frequency gets an estimate of what the mesh
puts it off (Richardson extrapolation, taken to be of second order). That takes four
times the unknowns and about five times as long.

A changed loss factor, unbalance grade or rotor speed does not solve again.`,
		Arguments: []stage.Argument{
			{Name: "mesh", About: "mesh from mesh", Type: artifactOf("mesh"), Required: true},
			{Name: "properties", About: "properties from import", Type: artifactOf("properties"), Required: true},
			{Name: "up_to", About: "every mode below this is found", Type: frequency, Default: hertz(750), Example: `"750 Hz"`, Above: &zero},
			{Name: "swept_to", About: "highest frequency that later stages look at; modes should reach 1.5 times as high", Type: frequency,
				Default: hertz(500), Example: `"500 Hz"`, Above: &zero},
			{Name: "gaps_from", About: "gaps count modes from here to swept_to", Type: frequency, Default: hertz(80), Example: `"80 Hz"`, Min: &zero},
			{Name: "estimate_error", About: "solve again with every element cut in four, and estimate the error of each frequency", Type: stage.Type{Kind: stage.Truth}, Default: false, Example: "true"},
			{Name: "matrices", About: "where the stiffness goes in Matrix Market form; the mass goes to mass.mtx beside it", Type: stage.Type{Kind: stage.Target}, Example: `"matrices/stiffness.mtx"`},
		},
		Outputs: []stage.Output{
			{Name: "modes", Kind: "modes", About: "modal basis and what each mode is"},
			{Name: "matrices", Kind: "matrices", About: "stiffness and mass, if asked for", Publish: "matrices"},
		},
		Figures: []stage.Figure{
			{Name: "modes", About: "elastic modes as objects with number, frequency, damping, part, motion, and strength per axis",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Any}}},
			{Name: "lowest", About: "frequency of the lowest elastic mode", Type: frequency},
			{Name: "modes_below", About: "number of elastic modes below up_to", Type: stage.Type{Kind: stage.Whole}},
			{Name: "modes_wanted", About: "number of elastic modes below 1.5 times swept_to", Type: stage.Type{Kind: stage.Whole}},
			{Name: "mass", About: "all-up mass of the model", Type: amount("mass", "g")},
			{Name: "largest_error", About: "greatest estimated error of a frequency below up_to, relative; infinite without estimate_error or when a mode is not found again", Type: stage.Type{Kind: stage.Number}},
			{Name: "rigid_ratio", About: "highest computed rigid-body frequency over the lowest elastic one", Type: stage.Type{Kind: stage.Number}},
		},
	}
	for _, axis := range kinds.AxisNames {
		d.Figures = append(d.Figures,
			stage.Figure{Name: "smallest_gap_" + axis, About: "distance of the two nearest modes that the gyro feels on " + axis + "; infinite when there are not two", Type: frequency},
			stage.Figure{Name: "strongest_" + axis, About: "frequency of the mode with the greatest gyro strength on " + axis, Type: frequency},
			stage.Figure{Name: "strength_" + axis, About: "that gyro strength", Type: amount("angular rate per force", "deg/s/N")},
		)
	}
	return d
}

func amount(dimension, unit string) stage.Type {
	return stage.Type{Kind: stage.Amount, Dimension: dimension, Unit: unit}
}

func artifactOf(kind string) stage.Type {
	return stage.Type{Kind: stage.Artifact, Kinds: []string{kind}}
}

func hertz(f float64) stage.Quantity { return stage.Quantity{SI: f, Dimension: "frequency"} }

// settings are the arguments in SI units.
type settings struct {
	upTo, sweptTo, gapsFrom float64
}

// Run implements stage.Stage.
func (x Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	set := settings{call.Arguments.SI("up_to"), call.Arguments.SI("swept_to"), call.Arguments.SI("gaps_from")}
	if !(set.gapsFrom < set.sweptTo) {
		return nil, fault.New(fault.Input, "gaps count from %g Hz, where the sweep has ended", set.gapsFrom).In("solve", "").Of("gaps_from").
			Do("make it lower than swept_to, which is %g Hz", set.sweptTo)
	}
	call.Report.Progress("read", -1)
	m, err := read(call, "mesh", kinds.DecodeMesh)
	if err != nil {
		return nil, err
	}
	p, err := read(call, "properties", kinds.DecodeProperties)
	if err != nil {
		return nil, err
	}
	types, err := elementTypes(ctx, call, m)
	if err != nil {
		return nil, err
	}
	problem, err := assembly.FromAirframe(m, p, types)
	if err != nil {
		return nil, explain(err)
	}
	modes, notes, err := kept(ctx, call, task{problem, p, set, false, x.lowest})
	if err != nil {
		return nil, explain(err)
	}
	if call.Arguments.Truth("estimate_error") {
		if err := x.estimate(ctx, call, modes, m, p, types, set); err != nil {
			return nil, explain(err)
		}
	}
	complete(modes, problem, p, set)
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["modes"], kinds.EncodeModes(modes)); err != nil {
		return nil, err
	}
	if err := writeMatrices(ctx, call, problem); err != nil {
		return nil, explain(err)
	}
	return outcome(modes, p, set, notes), nil
}

func read[T any](call *stage.Call, name string, decode func(*artifact.Artifact) (T, error)) (T, error) {
	a, err := artifact.Open(call.Inputs[name][0].Folder, kinds.Registry())
	if err != nil {
		var none T
		return none, err
	}
	return decode(a)
}

// elementTypes binds the element types of the plates to their options: built-in ones and those that the step can reach.
func elementTypes(ctx context.Context, call *stage.Call, m *mesh.Mesh) (func(name string) element.Type, error) {
	var builtin []extension.Element
	for _, t := range shell.Types() {
		builtin = append(builtin, extension.FromType(t))
	}
	types := map[string]element.Type{}
	for _, part := range m.Parts {
		if part.Standoff || types[part.Element] != nil {
			continue
		}
		e, err := extension.FindElement(ctx, part.Element, builtin, call)
		if err != nil {
			return nil, fault.From(err).In("solve plate", part.Name).Of("mesh")
		}
		options, err := stage.DecodeValues([]byte(part.Options))
		if err != nil {
			return nil, fault.New(fault.Protocol, "the options of its element type cannot be read: %v", err).In("solve plate", part.Name).Of("mesh")
		}
		if types[part.Element], err = extension.Bind(ctx, e, options); err != nil {
			return nil, err
		}
	}
	return func(name string) element.Type { return types[name] }, nil
}

// task is one solution: on the mesh or on its refinement, which needs no response.
type task struct {
	frame      *assembly.Frame
	properties *airframe.Properties
	set        settings
	refined    bool
	lowest     modal.Solver
}

// compute assembles and solves; nothing in the result depends on what neutral leaves out.
func compute(ctx context.Context, call *stage.Call, k task) (*kinds.Modes, []string, error) {
	f, p, set := k.frame, k.properties, k.set
	sites, err := places(f, p)
	if err != nil {
		return nil, nil, err
	}
	most, err := afford(call, &f.Problem)
	if err != nil {
		return nil, nil, err
	}
	call.Report.Progress("assemble", -1)
	s, err := assembly.Assemble(ctx, &f.Problem, call.Threads)
	if err != nil {
		return nil, nil, err
	}
	call.Report.Log(stage.Info, "assembled", "unknowns", s.N, "entries", len(s.K.Val), "mass_g", fmt.Sprintf("%.1f", 1e3*s.Mass))
	st, err := modal.Build(ctx, s, sites, modal.Options{UpTo: set.upTo, Most: most, Threads: call.Threads, Progress: call.Report.Progress, Bare: k.refined, Solve: k.lowest})
	var many *eigen.TooManyError
	if errors.As(err, &many) {
		return nil, nil, crowded(many, set.upTo)
	}
	if err != nil {
		return nil, nil, placed(s, err)
	}
	modes := &kinds.Modes{
		UpTo: set.upTo, SweptTo: set.sweptTo, Proved: st.Proved, Unknowns: s.N, Mass: s.Mass, Centre: s.Centre, RigidRatio: st.RigidRatio,
		Basis: st.Basis, Masses: masses(s, f, p),
	}
	modes.Survey = modal.Describe(st.Basis, st.Strain, carried(st.Kinetic, f), names(modes.Masses))
	for i := range modes.Survey.Modes {
		modes.Survey.Modes[i].ByElement = st.Plates[i]
	}
	var notes []string
	for _, merge := range s.Merges {
		if merge.Shared {
			notes = append(notes, fmt.Sprintf("footprints that share nodes are one rigid body: %s", list(once(merge.Bodies))))
		}
	}
	return modes, append(notes, st.Notes...), nil
}

// once leaves out bodies whose footprint is named too: "r" beside "rotor r".
func once(names []string) []string {
	return slices.DeleteFunc(slices.Clone(names), func(name string) bool {
		return slices.ContainsFunc(names, func(other string) bool { return strings.HasSuffix(other, " "+name) })
	})
}

// places are the hubs, the gyro and the other bodies; screws of standoffs are no places that anybody looks for.
func places(f *assembly.Frame, p *airframe.Properties) ([]modal.Place, error) {
	body := map[string]int{}
	for i, b := range p.Bodies {
		body[b.Name] = f.BodyOf[i]
	}
	var out []modal.Place
	for _, r := range p.Rotors {
		at, ok := body[r.Body]
		if !ok {
			return nil, fault.New(fault.Input, "its body %q does not exist", r.Body).In("solve", "rotor "+r.Name)
		}
		out = append(out, modal.Place{Name: r.Name, Kind: "rotor", Body: at, Point: r.Hub})
	}
	if p.Gyro.Body != "" {
		at, ok := body[p.Gyro.Body]
		if !ok {
			return nil, fault.New(fault.Input, "its body %q does not exist", p.Gyro.Body).In("solve", "gyro")
		}
		out = append(out, modal.Place{Name: p.Gyro.Body, Kind: "gyro", Body: at, Point: p.Gyro.At})
	}
	for i, b := range p.Bodies {
		if _, screw := p.ScrewOf(b.Name); b.Kind == "lump" && !screw {
			out = append(out, modal.Place{Name: b.Name, Kind: "body", Body: f.BodyOf[i], Point: b.Centre})
		}
	}
	return out, nil
}

// explain turns what the kernels say into a fault with a remedy.
func explain(err error) error {
	var (
		f     *fault.Error
		input *assembly.InputError
		part  *assembly.PartError
		loose *assembly.Loose
		free  *assembly.Free
		rigid *modal.RigidError
		lost  *modal.MissingError
		shape *element.ShapeError
	)
	switch {
	case errors.As(err, &f):
		return f
	case errors.Is(err, context.Canceled), errors.Is(err, context.DeadlineExceeded):
		return fault.From(err)
	case errors.As(err, &input):
		return fault.New(fault.Input, "%v", input.Err).In("solve", input.What).Do("mend it in the airframe file")
	case errors.As(err, &loose):
		return fault.New(fault.Input, "%v", loose).In("solve", "").
			Do("add a bolt, standoff or mount that ties it, or see whether an inferred bolt was removed")
	case errors.As(err, &free):
		return fault.New(fault.Input, "%v", free).In("solve", free.Body)
	case errors.As(err, &shape):
		where := ""
		if errors.As(err, &part) {
			where = part.Part
		}
		return fault.New(fault.Numeric, "%v", err).In("solve", where).Do("mesh again with another size")
	case errors.As(err, &lost):
		return fault.New(fault.Numeric, "%v", lost).In("solve", "").Of("up_to").
			Do("move up_to a little, away from a cluster of modes, or mesh again with another size")
	case errors.As(err, &rigid):
		return fault.New(fault.Numeric, "%v", rigid).In("solve", rigid.Moving).Do("see whether what holds it leaves it free and whether all stiffnesses are in the units meant")
	}
	return fault.New(fault.Numeric, "%v", err).In("solve", "")
}
