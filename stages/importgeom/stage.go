// Package importgeom is the stage that turns an airframe file and its cut files into geometry and properties.
package importgeom

import (
	"context"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/importgeom/airframefile"
	"hushframe/stages/importgeom/assemble"
	"hushframe/stages/importgeom/mounts"
	"hushframe/stages/kinds"
)

// Stage is the stage "import".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	amount := func(dimension, unit string) stage.Type {
		return stage.Type{Kind: stage.Amount, Dimension: dimension, Unit: unit}
	}
	whole := stage.Type{Kind: stage.Whole}
	texts := stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Text}}
	d := stage.Description{
		Name:  "import",
		About: "read an airframe file and its cut files",
		Doc: `Reads airframe.hcl and the DXF outlines it names, puts plates in place, finds
outer and hole loops, infers bolts from coaxial holes of plates that touch, and
places standoffs, rotors, lumps and the gyro. Whatever was assumed, joined,
dropped or merged is noted. All that meshing needs goes into geometry, all the
rest into properties.

Joints are rigid, of given stiffness, or computed from plates and screw; faces
press, seams are glued, keys stop, each a joint group with a range of a common
factor. Mounts may take the values of a typical piece (like = "..."), of common
practice, from memory, without source:

` + mounts.Text(),
		Arguments: []stage.Argument{
			{Name: "airframe", About: "description of the frame", Type: stage.Type{Kind: stage.File}, Required: true, Example: `"airframe.hcl"`},
			{Name: "with", About: "values for inputs of the airframe file, by name", Type: stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Any}},
				Example: `{ arm_thickness = setting.arm_thickness }`},
		},
		Outputs: []stage.Output{
			{Name: "geometry", Kind: "geometry", About: "plates, patches, bolts and standoffs"},
			{Name: "properties", Kind: "properties", About: "materials, masses, joints, mounts, rotors and gyro"},
		},
		Figures: []stage.Figure{
			{Name: "total_mass", About: "mass of all parts", Type: amount("mass", "g")},
			{Name: "structure_mass", About: "mass of plates, standoffs with their screws, and bolts", Type: amount("mass", "g")},
		},
	}
	for _, axis := range [3]string{"x", "y", "z"} {
		d.Figures = append(d.Figures, stage.Figure{Name: "centre_" + axis, About: "centre of gravity, " + axis, Type: amount("length", "mm")})
	}
	for _, axis := range kinds.AxisNames {
		d.Figures = append(d.Figures, stage.Figure{Name: "inertia_" + axis, About: "moment of inertia about the centre of gravity, " + axis, Type: amount("inertia", "kg*mm2")})
	}
	d.Figures = append(d.Figures,
		stage.Figure{Name: "plates", About: "number of plates", Type: whole},
		stage.Figure{Name: "standoffs", About: "number of standoffs", Type: whole},
		stage.Figure{Name: "bolts", About: "number of bolts", Type: whole},
		stage.Figure{Name: "bolt_names", About: "names of the bolts, inferred ones among them", Type: texts},
		stage.Figure{Name: "bodies", About: "number of rigid bodies, screws of standoffs left out", Type: whole},
		stage.Figure{Name: "rotors", About: "number of rotors", Type: whole},
		stage.Figure{Name: "parts", About: "number of plates, standoffs and bodies", Type: whole},
	)
	return d
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	name := call.Arguments.Text("airframe")
	call.Report.Progress("airframe file", 0)
	text, err := call.Files.Read(name)
	if err != nil {
		return nil, fault.From(err).Of("airframe")
	}
	file, err := airframefile.Parse(name, text, call.Arguments.Map("with"))
	if err != nil {
		return nil, err
	}
	read := 0
	built, err := assemble.Build(file, func(path string) ([]byte, error) {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		read++
		call.Report.Progress("cut files", float64(read)/float64(len(file.Plates)+1))
		return call.Files.Read(path)
	})
	if err != nil {
		if stopped := ctx.Err(); stopped != nil {
			return nil, fault.From(stopped)
		}
		return nil, err
	}
	call.Report.Progress("writing", 1)
	if _, err := artifact.Write(call.Outputs["geometry"], kinds.EncodeGeometry(&built.Geometry)); err != nil {
		return nil, err
	}
	if _, err := artifact.Write(call.Outputs["properties"], kinds.EncodeProperties(&built.Properties)); err != nil {
		return nil, err
	}
	return outcome(file, built), nil
}
