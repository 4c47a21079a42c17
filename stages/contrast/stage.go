package contrast

import (
	"context"

	"hushframe/core/match"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "contrast".
type Stage struct{}

var _ stage.Stage = Stage{}

// readable lists the kinds of artifacts a side is made of.
var readable = []string{"mesh", "modes", "response", "properties"}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	zero, one := 0.0, 1.0
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	number, whole := stage.Type{Kind: stage.Number}, stage.Type{Kind: stage.Whole}
	mass := stage.Type{Kind: stage.Amount, Dimension: "mass", Unit: "g"}
	side := stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Artifact, Kinds: readable}}
	d := stage.Description{
		Name:  "contrast",
		About: "say what a change did: modes followed by their shapes, response per axis, mass",
		Doc: `Sets two states of a frame side by side, each given as a list of artifacts: mesh and
modes to follow the modes, response for the change in dB, properties for the
inertia of bodies (or for masses alone). What either side lacks is left out.

A mode is the same on both sides when their shapes are alike: the modal assurance
criterion, weighted with the mass, of motions at points that both have. Parts and
bodies of equal name are the same; meshes need not be. A mode without a partner is
lost or new, with the reason. Peaks of the response are paired where their leading
modes have gone. Changes are in dB of amplitude, after over before: +6 dB is twice.`,
		Arguments: []stage.Argument{
			{Name: "reference", About: "artifacts of the frame before the change: mesh, modes, response, properties", Type: side, Required: true,
				Example: "[stage.shells.mesh, stage.modes.modes, stage.flight.response]"},
			{Name: "changed", About: "artifacts of the frame after the change", Type: side, Required: true,
				Example: "[stage.shells_b.mesh, stage.modes_b.modes, stage.flight_b.response]"},
			{Name: "least", About: "modal assurance below which two modes are not the same, 0 to 1", Type: number, Default: match.DefaultLeast, Above: &zero, Max: &one, Example: "0.5"},
			{Name: "band", About: "lowest and highest frequency at which responses are set side by side; left out, all that both sweep",
				Type: stage.Type{Kind: stage.List, Element: &frequency}, Example: `["100 Hz", "400 Hz"]`},
		},
		Outputs: []stage.Output{{Name: "difference", Kind: "difference", About: "modes, bands, peaks, lines and masses of both sides"}},
		Figures: []stage.Figure{
			{Name: "tracked", About: "modes that both sides have", Type: whole},
			{Name: "lost", About: "modes that only the side before has", Type: whole},
			{Name: "new", About: "modes that only the side after has", Type: whole},
			{Name: "least_assurance", About: "lowest modal assurance of a mode that both have; not a number without any", Type: number},
			{Name: "largest_shift", About: "largest relative change of frequency of such a mode, without sign; not a number without any", Type: number},
			{Name: "mass_change", About: "mass after less mass before; none when a mass is not known", Type: mass},
		},
	}
	for _, axis := range kinds.AxisNames {
		d.Figures = append(d.Figures,
			stage.Figure{Name: "change_" + axis, About: "change of the root mean square on " + axis + " over all that both sweep, in dB; not a number without responses", Type: number},
			stage.Figure{Name: "worst_band_" + axis, About: "largest change in a third-octave band on " + axis + ", in dB", Type: number},
		)
	}
	return d
}

// Run implements stage.Stage.
func (Stage) Run(_ context.Context, call *stage.Call) (*stage.Outcome, error) {
	o := Options{TrackOptions: match.TrackOptions{Least: call.Arguments.Number("least")}}
	if call.Arguments.Has("band") {
		band := call.Arguments.SIs("band")
		if len(band) != 2 || !(band[0] > 0) || !(band[1] > band[0]) {
			return nil, fault.New(fault.Input, "the band is not a lower and a higher frequency").In("contrast", "").Of("band").
				Do(`give two, such as ["100 Hz", "400 Hz"]`)
		}
		o.From, o.To = band[0], band[1]
	}
	call.Report.Progress("read", -1)
	var sides [2]Side
	for k, name := range []string{"reference", "changed"} {
		for _, in := range call.Inputs[name] {
			a, err := artifact.Open(in.Folder, kinds.Registry())
			if err != nil {
				return nil, err
			}
			if err := sides[k].Add(a); err != nil {
				return nil, fault.From(err).In("contrast", in.From).Of(name)
			}
		}
		if sides[k].Modes != nil && sides[k].Mesh == nil {
			return nil, fault.New(fault.Input, "there are modes without their mesh, so their shapes have no place").In("contrast", name).Of(name).
				Do("add the mesh that they were solved on")
		}
	}
	call.Report.Progress("follow", -1)
	d, err := Between(sides[0], sides[1], o)
	if err != nil {
		return nil, fault.New(fault.Input, "%v", err).In("contrast", "").Of("changed").Do("sweep a common range")
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["difference"], kinds.EncodeDifference(d)); err != nil {
		return nil, err
	}
	return outcome(d), nil
}

// Add reads an artifact of one of the kinds mesh, modes, response and properties into its place, which must be free. Modes
// and a mesh of another number of nodes are refused.
func (s *Side) Add(a *artifact.Artifact) (err error) {
	taken := false
	switch a.Kind.Name {
	case "mesh":
		taken = s.Mesh != nil
		s.Mesh, err = kinds.DecodeMesh(a)
	case "modes":
		taken = s.Modes != nil
		s.Modes, err = kinds.DecodeModes(a)
	case "response":
		taken = s.Response != nil
		s.Response, err = kinds.DecodeResponse(a)
	case "properties":
		taken = s.Properties != nil
		s.Properties, err = kinds.DecodeProperties(a)
	default:
		return fault.New(fault.Input, "an artifact of kind %s says nothing about a change", a.Kind.Name).Do("give mesh, modes, response or properties")
	}
	switch {
	case err != nil:
		return err
	case taken:
		return fault.New(fault.Input, "two artifacts of kind %s are on one side", a.Kind.Name).Do("give one of each kind")
	case s.Mesh != nil && s.Modes != nil && len(s.Modes.Basis.Shapes) > 0 && len(s.Modes.Basis.Shapes[0]) != 3*len(s.Mesh.Nodes):
		return fault.New(fault.Input, "the modes were solved on another mesh: they have %d nodes, it has %d", len(s.Modes.Basis.Shapes[0])/3, len(s.Mesh.Nodes)).
			Do("give the mesh that the modes were solved on")
	}
	return nil
}
