package solve

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// kept computes the modes, or takes those kept from an earlier run in which all that matters to K and M
// was the same. Either way the result has passed through the same files, so that both give equal bytes.
func kept(ctx context.Context, call *stage.Call, k task) (*kinds.Modes, []string, error) {
	key := fmt.Sprintf("solve modes mesh=%s properties=%s up_to=%v refined=%v", call.Inputs["mesh"][0].Hash, kinds.EncodeProperties(neutral(k.properties)).Hash(), k.set.upTo, k.refined)
	const modesFolder, notesFile = "modes", "notes.json"
	folder, found, err := call.Services.Keep(ctx, key, func(folder string) error {
		modes, notes, err := compute(ctx, call, k)
		if err != nil {
			return explain(err)
		}
		text, err := json.Marshal(notes)
		if err != nil {
			return err
		}
		if err := os.WriteFile(filepath.Join(folder, notesFile), text, 0o644); err != nil {
			return err
		}
		inner := filepath.Join(folder, modesFolder)
		if err := os.Mkdir(inner, 0o755); err != nil {
			return err
		}
		_, err = artifact.Write(inner, kinds.EncodeModes(modes))
		return err
	})
	if err != nil {
		return nil, nil, err
	}
	if found {
		call.Report.Log(stage.Info, "modes are those of an earlier run: nothing that stiffness or mass depends on has changed")
	}
	a, err := artifact.Open(filepath.Join(folder, modesFolder), kinds.Registry())
	if err != nil {
		return nil, nil, err
	}
	modes, err := kinds.DecodeModes(a)
	if err != nil {
		return nil, nil, err
	}
	text, err := os.ReadFile(filepath.Join(folder, notesFile))
	if err != nil {
		return nil, nil, err
	}
	var notes []string
	if err := json.Unmarshal(text, &notes); err != nil {
		return nil, nil, err
	}
	return modes, notes, nil
}

// neutral returns the properties without what neither stiffness, mass nor the sites depend on.
func neutral(p *airframe.Properties) *airframe.Properties {
	n := *p
	n.DeclaredMass, n.Floor = 0, 0
	n.Materials = slices.Clone(p.Materials)
	for i := range n.Materials {
		m := &n.Materials[i]
		m.LossFactor, m.Scatter, m.Typical, m.Origin, m.E3 = 0, 0, false, "", 0
	}
	n.Plates = slices.Clone(p.Plates)
	for i := range n.Plates {
		n.Plates[i].Mass = 0 // follows from density and thickness
	}
	n.Standoffs = slices.Clone(p.Standoffs)
	for i := range n.Standoffs {
		n.Standoffs[i].Mass = 0
	}
	n.Joints = slices.Clone(p.Joints)
	for i := range n.Joints {
		j := &n.Joints[i]
		j.LossFactor, j.Low, j.High, j.Preload, j.Origin = 0, 0, 0, 0, ""
	}
	n.Bodies = slices.Clone(p.Bodies)
	for i := range n.Bodies {
		if m := n.Bodies[i].Mount; m != nil {
			n.Bodies[i].Mount = alike(m)
		}
	}
	n.Rotors = slices.Clone(p.Rotors)
	for i := range n.Rotors {
		r := &n.Rotors[i]
		n.Rotors[i] = airframe.Rotor{Name: r.Name, Body: r.Body, Hub: r.Hub}
	}
	return &n
}

// alike returns a mount that says of its damping only which components share it: these are a group of their
// own among the modes.
func alike(m *airframe.Mount) *airframe.Mount {
	plain := airframe.Mount{Name: m.Name, Points: m.Points}
	for k, class := range assembly.MountClasses(m) {
		for _, c := range class {
			plain.Loss[c] = float64(k)
		}
	}
	return &plain
}

// complete fills in what depends on loss factors, rotor speeds and the arguments.
func complete(m *kinds.Modes, f *assembly.Frame, p *airframe.Properties, set settings) {
	m.SweptTo = set.sweptTo
	m.Basis.Dampen(f.Loss, f.Laws, p.Floor)
	m.Survey.Complete(m.Basis, p.Rotors, set.gapsFrom, set.sweptTo)
}

// masses lists parts, bodies and, in one row, bolts.
func masses(s *assembly.System, f *assembly.Frame, p *airframe.Properties) []kinds.MassRow {
	var rows []kinds.MassRow
	for _, g := range carrierGroups(f) {
		rows = append(rows, kinds.MassRow{Name: f.Groups[g].Name, Kind: "part", Mass: s.GroupMass[g], Centre: s.GroupCentre[g]})
	}
	for _, b := range p.Bodies {
		rows = append(rows, kinds.MassRow{Name: b.Name, Kind: "body", Mass: b.Mass, Centre: b.Centre})
	}
	var bolts kinds.MassRow
	for b, body := range f.Problem.Bodies {
		if slices.Contains(f.BodyOf, b) {
			continue
		}
		for _, in := range body.Inertia {
			bolts.Mass += in.Mass
			for k := range 3 {
				bolts.Centre[k] += in.Mass * in.Centre[k]
			}
		}
	}
	if bolts.Mass > 0 {
		for k := range 3 {
			bolts.Centre[k] /= bolts.Mass
		}
		bolts.Name, bolts.Kind = "bolts", "body"
		rows = append(rows, bolts)
	}
	return rows
}

func carrierGroups(f *assembly.Frame) (groups []int) {
	for g := range f.Groups {
		if f.Groups[g].Kind == assembly.PartGroup {
			groups = append(groups, g)
		}
	}
	return groups
}

// carried brings shares of kinetic energy, by group then body of the problem, into the order of
// masses.
func carried(kinetic [][]float64, f *assembly.Frame) [][]float64 {
	groups := carrierGroups(f)
	bolted := false
	for b, body := range f.Problem.Bodies {
		bolted = bolted || !slices.Contains(f.BodyOf, b) && len(body.Inertia) > 0
	}
	var out [][]float64
	for _, all := range kinetic {
		var row []float64
		for _, g := range groups {
			row = append(row, all[g])
		}
		bodies := all[len(f.Groups):]
		for _, b := range f.BodyOf {
			row = append(row, bodies[b])
		}
		if bolted {
			sum := 0.0
			for b, v := range bodies {
				if !slices.Contains(f.BodyOf, b) {
					sum += v
				}
			}
			row = append(row, sum)
		}
		out = append(out, row)
	}
	return out
}

func names(rows []kinds.MassRow) []string {
	out := make([]string, len(rows))
	for i, r := range rows {
		out[i] = r.Name
	}
	return out
}

// list joins names, at most eight of them.
func list(names []string) string {
	if len(names) > 8 {
		names = append(slices.Clone(names[:7]), fmt.Sprintf("%d more", len(names)-7))
	}
	return strings.Join(names, ", ")
}
