package kinds

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
)

// ModesKind is what `solve` makes of a mesh and properties.
var ModesKind = artifact.Kind{
	Name: "modes", Version: 5,
	About: "modal basis of the free airframe (rigid-body, elastic and residual vectors, mass-normalised) and what each elastic mode is",
	Scalars: []artifact.Column{
		col("up_to", artifact.Float, "Hz", "every mode below this is in the basis"),
		col("swept_to", artifact.Float, "Hz", "highest frequency at which the response is meant to be used"),
		col("proved", artifact.Truth, "", "a count of eigenvalues agrees that no mode is missing"),
		col("unknowns", artifact.Int, "", "order of the matrices"),
		col("mass", artifact.Float, "kg", "all-up mass"),
		col("centre_x", artifact.Float, "m", "centre of gravity, forward"),
		col("centre_y", artifact.Float, "m", "centre of gravity, left"),
		col("centre_z", artifact.Float, "m", "centre of gravity, up"),
		col("rigid_ratio", artifact.Float, "1", "highest computed rigid-body frequency over the first elastic one, before the exact ones took their place; NaN if not computed"),
		col("gaps_from", artifact.Float, "Hz", "lower end of the band in which gaps count"),
		col("gaps_to", artifact.Float, "Hz", "upper end"),
	},
	Tables: []artifact.TableSpec{
		{Name: "vectors", About: "vectors of the basis: rigid-body, then elastic by ascending frequency, then residual", Columns: columns(
			col("kind", artifact.Text, "", "rigid, elastic or residual"),
			col("frequency", artifact.Float, "Hz", "0 for rigid-body vectors; a mere number of the basis for residual ones"),
			col("shape", artifact.FloatList, "m per kg^(1/2)*m", "ux, uy, uz of each mesh node in turn"),
		)},
		{Name: "sites", About: "points where forces act or motion is read", Columns: columns(
			col("name", artifact.Text, "", "name"),
			col("kind", artifact.Text, "", "rotor, gyro or body"),
			vecCols("point", "m", "place"),
			col("motion", artifact.FloatList, "m and rad per kg^(1/2)*m", "ux, uy, uz, rx, ry, rz of the point in each vector in turn"),
		)},
		{Name: "groups", About: "stiffness of each part, joint group and mount in the basis; they add up to the modal stiffness", Columns: columns(
			col("name", artifact.Text, "", "name"),
			col("kind", artifact.Text, "", "part, joint or mount"),
			col("loss_factor", artifact.Float, "1", "loss factor, floor included; where the law varies, the floor alone"),
			lawCols(),
			col("stiffness", artifact.FloatList, "rad^2/s^2", "n by n, row by row, symmetric"),
		)},
		{Name: "masses", About: "what carries mass: parts, then bodies", Columns: columns(
			col("name", artifact.Text, "", "name"),
			col("kind", artifact.Text, "", "part or body"),
			col("mass", artifact.Float, "kg", ""),
			vecCols("centre", "m", "centre of gravity"),
		)},
		{Name: "kinds", About: "kinds of strain energy in the order of the shares below", Columns: columns(
			col("name", artifact.Text, "", "name"),
		)},
		{Name: "rotors", About: "rotors in the order of the shares below", Columns: columns(
			col("name", artifact.Text, "", "name"),
		)},
		{Name: "modes", About: "elastic modes", Columns: columns(
			col("number", artifact.Int, "", "from 1"),
			col("vector", artifact.Int, "", "index into vectors"),
			col("frequency", artifact.Float, "Hz", "natural frequency without damping"),
			col("loss", artifact.Float, "1", "loss factor of the mode alone; the damping ratio is half of it"),
			col("part", artifact.Text, "", "part, joint or mount with the greatest strain energy"),
			col("motion", artifact.Text, "", "its greatest kind of strain energy"),
			col("strain_groups", artifact.FloatList, "1", "share of the strain energy of each group"),
			col("strain_kinds", artifact.FloatList, "1", "share of each kind"),
			col("strain_elements", artifact.FloatList, "1", "share of the strain energy of each triangle of the mesh, of the plate itself; what contacts, joints, standoffs and mounts store is in strain_groups alone; may be empty"),
			col("kinetic", artifact.FloatList, "1", "share of the kinetic energy of each row of masses"),
			axisCols("rotation_", "rad per kg^(1/2)*m", "rotation of the gyro"),
			axisCols("strength_", "rad/s per N", "gyro strength: peak rate of the mode alone, root sum of squares over unit forces at all hubs"),
			axisCols("moment_strength_", "rad/s per N*m", "the same over unit moments"),
			col("rotor_shares", artifact.FloatList, "1", "part of each rotor in the square of the strength"),
			col("moment_shares", artifact.FloatList, "1", "the same for moments"),
			col("below", artifact.Float, "Hz", "distance to the elastic mode below; infinite for none"),
			col("above", artifact.Float, "Hz", "distance to the elastic mode above; infinite for none"),
		)},
		{Name: "mesh_errors", About: "how far the mesh is thought to put frequencies off, by comparison with another mesh; empty if not asked for", Columns: columns(
			col("mode", artifact.Int, "", "number of the mode"),
			col("other", artifact.Float, "Hz", "frequency of the same mode on the other mesh"),
			col("error", artifact.Float, "Hz", "estimated error of the frequency"),
		)},
		{Name: "meetings", About: "rotor speeds at which orders meet modes", Columns: columns(
			col("mode", artifact.Int, "", "number of the mode"),
			col("order", artifact.Int, "", "multiple of the rotor speed"),
			col("what", artifact.Text, "", "order or blade passing"),
			col("speed", artifact.Float, "rad/s", "rotor speed"),
			col("rotors", artifact.IntList, "", "rows of rotors this is for"),
			col("range", artifact.Text, "", "hover: near the hover speed; service: not above the highest speed; beyond: above it"),
		)},
		{Name: "gaps", About: "neighbours among modes with at least a tenth of the strongest strength on an axis", Columns: columns(
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("lower", artifact.Int, "", "number of the lower mode"),
			col("upper", artifact.Int, "", "number of the upper mode"),
			col("width", artifact.Float, "Hz", "distance"),
		)},
	},
}

// Modes is the content of a modes artifact; the descriptions of ModesKind hold.
type Modes struct {
	UpTo, SweptTo float64
	Proved        bool
	Unknowns      int
	Mass          float64
	Centre        airframe.Vec
	RigidRatio    float64
	Basis         *modal.Basis
	Survey        *modal.Survey
	Masses        []MassRow // same order as Survey.Carriers
}

// MassRow is one carrier of mass.
type MassRow struct {
	Name, Kind string
	Mass       float64
	Centre     airframe.Vec
}

// EncodeModes makes the artifact.
func EncodeModes(m *Modes) *artifact.Artifact {
	a := artifact.New(ModesKind)
	s, b := m.Survey, m.Basis
	a.Scalars = map[string]any{
		"up_to": m.UpTo, "swept_to": m.SweptTo, "proved": m.Proved, "unknowns": int64(m.Unknowns), "mass": m.Mass,
		"centre_x": m.Centre[0], "centre_y": m.Centre[1], "centre_z": m.Centre[2], "rigid_ratio": m.RigidRatio,
		"gaps_from": s.From, "gaps_to": s.To,
	}
	a.Table("vectors").
		Set("kind", list(b.Kinds, func(k modal.VectorKind) string { return string(k) })).
		Set("frequency", b.Frequency).
		Set("shape", b.Shapes)
	t := a.Table("sites").
		Set("name", list(b.Sites, func(x modal.Site) string { return x.Name })).
		Set("kind", list(b.Sites, func(x modal.Site) string { return x.Kind })).
		Set("motion", list(b.Sites, func(x modal.Site) []float64 {
			flat := make([]float64, 0, 6*len(x.Motion))
			for _, q := range x.Motion {
				flat = append(flat, q[:]...)
			}
			return flat
		}))
	setVecs(t, "point", len(b.Sites), func(i int) airframe.Vec { return b.Sites[i].Point })
	t = a.Table("groups").
		Set("name", list(b.Groups, func(x modal.LossGroup) string { return x.Name })).
		Set("kind", list(b.Groups, func(x modal.LossGroup) string { return x.Kind })).
		Set("loss_factor", list(b.Groups, func(x modal.LossGroup) float64 { return x.LossFactor })).
		Set("stiffness", list(b.Groups, func(x modal.LossGroup) []float64 { return x.Stiffness }))
	setLaws(t, len(b.Groups), func(i int) *airframe.Law { return &b.Groups[i].Law })
	t = a.Table("masses").
		Set("name", list(m.Masses, func(x MassRow) string { return x.Name })).
		Set("kind", list(m.Masses, func(x MassRow) string { return x.Kind })).
		Set("mass", list(m.Masses, func(x MassRow) float64 { return x.Mass }))
	setVecs(t, "centre", len(m.Masses), func(i int) airframe.Vec { return m.Masses[i].Centre })
	a.Table("kinds").Set("name", s.Kinds)
	a.Table("rotors").Set("name", s.Rotors)
	setModes(a.Table("modes"), s.Modes)

	var numbers []int
	var meetings []modal.Meeting
	for _, mode := range s.Modes {
		for _, x := range mode.Meetings {
			numbers, meetings = append(numbers, mode.Number), append(meetings, x)
		}
	}
	a.Table("mesh_errors").
		Set("mode", list(s.MeshErrors, func(x modal.MeshError) int64 { return int64(x.Mode) })).
		Set("other", list(s.MeshErrors, func(x modal.MeshError) float64 { return x.Other })).
		Set("error", list(s.MeshErrors, func(x modal.MeshError) float64 { return x.Error }))
	a.Table("meetings").
		Set("mode", ints(numbers)).
		Set("order", list(meetings, func(x modal.Meeting) int64 { return int64(x.Order) })).
		Set("what", list(meetings, func(x modal.Meeting) string {
			if x.Blade {
				return bladePassing
			}
			return "order"
		})).
		Set("speed", list(meetings, func(x modal.Meeting) float64 { return x.Speed })).
		Set("rotors", list(meetings, func(x modal.Meeting) []int64 { return ints(x.Rotors) })).
		Set("range", list(meetings, func(x modal.Meeting) string {
			switch {
			case x.Hover:
				return "hover"
			case x.Service:
				return "service"
			}
			return "beyond"
		}))
	var axes []string
	var gaps []modal.Gap
	for axis, name := range AxisNames {
		for _, g := range s.Gaps[axis] {
			axes, gaps = append(axes, name), append(gaps, g)
		}
	}
	a.Table("gaps").
		Set("axis", list(axes, func(x string) string { return x })).
		Set("lower", list(gaps, func(x modal.Gap) int64 { return int64(x.Lower) })).
		Set("upper", list(gaps, func(x modal.Gap) int64 { return int64(x.Upper) })).
		Set("width", list(gaps, func(x modal.Gap) float64 { return x.Width }))
	return a
}

const bladePassing = "blade passing"

func setModes(t *artifact.Table, modes []modal.Mode) {
	t.Set("number", list(modes, func(x modal.Mode) int64 { return int64(x.Number) })).
		Set("vector", list(modes, func(x modal.Mode) int64 { return int64(x.Vector) })).
		Set("frequency", list(modes, func(x modal.Mode) float64 { return x.Frequency })).
		Set("loss", list(modes, func(x modal.Mode) float64 { return x.Loss })).
		Set("part", list(modes, func(x modal.Mode) string { return x.Part })).
		Set("motion", list(modes, func(x modal.Mode) string { return x.Motion })).
		Set("strain_groups", list(modes, func(x modal.Mode) []float64 { return x.ByGroup })).
		Set("strain_kinds", list(modes, func(x modal.Mode) []float64 { return x.ByKind })).
		Set("strain_elements", list(modes, func(x modal.Mode) []float64 { return append([]float64{}, x.ByElement...) })).
		Set("kinetic", list(modes, func(x modal.Mode) []float64 { return x.ByCarrier })).
		Set("rotor_shares", list(modes, func(x modal.Mode) []float64 { return x.RotorShare })).
		Set("moment_shares", list(modes, func(x modal.Mode) []float64 { return x.MomentShare })).
		Set("below", list(modes, func(x modal.Mode) float64 { return x.Below })).
		Set("above", list(modes, func(x modal.Mode) float64 { return x.Above }))
	for axis, name := range AxisNames {
		t.Set("rotation_"+name, list(modes, func(x modal.Mode) float64 { return x.Rotation[axis] })).
			Set("strength_"+name, list(modes, func(x modal.Mode) float64 { return x.Strength[axis] })).
			Set("moment_strength_"+name, list(modes, func(x modal.Mode) float64 { return x.MomentStrength[axis] }))
	}
}

// DecodeModes reads the artifact; the fault names what contradicts.
func DecodeModes(a *artifact.Artifact) (*Modes, error) {
	m := &Modes{
		UpTo: a.Float("up_to"), SweptTo: a.Float("swept_to"), Proved: a.Truth("proved"), Unknowns: int(a.Int("unknowns")), Mass: a.Float("mass"),
		Centre: airframe.Vec{a.Float("centre_x"), a.Float("centre_y"), a.Float("centre_z")}, RigidRatio: a.Float("rigid_ratio"),
		Basis:  &modal.Basis{},
		Survey: &modal.Survey{From: a.Float("gaps_from"), To: a.Float("gaps_to")},
	}
	m.Survey.Kinds = a.Table("kinds").Texts("name")
	if err := decodeBasis(a, m.Basis); err != nil {
		return nil, err
	}
	t := a.Table("masses")
	for i := range t.Rows() {
		m.Masses = append(m.Masses, MassRow{t.Texts("name")[i], t.Texts("kind")[i], t.Floats("mass")[i], getVec(t, "centre", i)})
	}
	if err := decodeSurvey(a, m); err != nil {
		return nil, err
	}
	return m, nil
}

func decodeBasis(a *artifact.Artifact, b *modal.Basis) error {
	t := a.Table("vectors")
	b.Frequency, b.Shapes = t.Floats("frequency"), t.FloatLists("shape")
	n := t.Rows()
	for i, kind := range t.Texts("kind") {
		k := modal.VectorKind(kind)
		if k != modal.RigidBody && k != modal.Elastic && k != modal.Residual {
			return malformed("modes", "vector %d is of kind %q", i, kind)
		}
		if len(b.Shapes[i]) != len(b.Shapes[0]) || len(b.Shapes[i])%3 != 0 {
			return malformed("modes", "vector %d has %d components", i, len(b.Shapes[i]))
		}
		b.Kinds = append(b.Kinds, k)
	}
	t = a.Table("sites")
	for i := range t.Rows() {
		s := modal.Site{Name: t.Texts("name")[i], Kind: t.Texts("kind")[i], Point: getVec(t, "point", i)}
		flat := t.FloatLists("motion")[i]
		if len(flat) != 6*n {
			return malformed("modes", "site %s has %d components over %d vectors", s.Name, len(flat), n)
		}
		for v := range n {
			s.Motion = append(s.Motion, [6]float64(flat[6*v:6*v+6]))
		}
		b.Sites = append(b.Sites, s)
	}
	t = a.Table("groups")
	for i := range t.Rows() {
		g := modal.LossGroup{Name: t.Texts("name")[i], Kind: t.Texts("kind")[i], LossFactor: t.Floats("loss_factor")[i], Stiffness: t.FloatLists("stiffness")[i]}
		var err error
		if g.Law, err = getLaw(t, "modes", g.Kind+" "+g.Name, i); err != nil {
			return err
		}
		if len(g.Stiffness) != n*n {
			return malformed("modes", "group %s has a stiffness of %d numbers over %d vectors", g.Name, len(g.Stiffness), n)
		}
		b.Groups = append(b.Groups, g)
	}
	return nil
}

func decodeSurvey(a *artifact.Artifact, m *Modes) error {
	s := m.Survey
	s.Rotors = a.Table("rotors").Texts("name")
	for _, g := range m.Basis.Groups {
		s.Groups = append(s.Groups, g.Name)
	}
	for _, x := range m.Masses {
		s.Carriers = append(s.Carriers, x.Name)
	}
	t := a.Table("modes")
	for i := range t.Rows() {
		x := modal.Mode{
			Number: int(t.Ints("number")[i]), Vector: int(t.Ints("vector")[i]), Frequency: t.Floats("frequency")[i], Loss: t.Floats("loss")[i],
			Part: t.Texts("part")[i], Motion: t.Texts("motion")[i],
			ByGroup: t.FloatLists("strain_groups")[i], ByKind: t.FloatLists("strain_kinds")[i], ByCarrier: t.FloatLists("kinetic")[i],
			RotorShare: t.FloatLists("rotor_shares")[i], MomentShare: t.FloatLists("moment_shares")[i],
			Below: t.Floats("below")[i], Above: t.Floats("above")[i],
		}
		if list := t.FloatLists("strain_elements")[i]; len(list) > 0 {
			x.ByElement = list
		}
		for axis, name := range AxisNames {
			x.Rotation[axis], x.Strength[axis], x.MomentStrength[axis] = t.Floats("rotation_" + name)[i], t.Floats("strength_" + name)[i], t.Floats("moment_strength_" + name)[i]
		}
		if len(s.Modes) > 0 && len(x.ByElement) != len(s.Modes[0].ByElement) {
			return malformed("modes", "mode %d has the strain energy of %d elements, mode 1 of %d", i+1, len(x.ByElement), len(s.Modes[0].ByElement))
		}
		if x.Number != i+1 || x.Vector < 0 || x.Vector >= len(m.Basis.Kinds) || len(x.ByGroup) != len(s.Groups) || len(x.ByKind) != len(s.Kinds) ||
			len(x.ByCarrier) != len(s.Carriers) || len(x.RotorShare) != len(s.Rotors) || len(x.MomentShare) != len(s.Rotors) {
			return malformed("modes", "mode %d contradicts the other tables", i+1)
		}
		s.Modes = append(s.Modes, x)
	}
	t = a.Table("mesh_errors")
	for i := range t.Rows() {
		x := modal.MeshError{Mode: int(t.Ints("mode")[i]), Other: t.Floats("other")[i], Error: t.Floats("error")[i]}
		if x.Mode < 1 || x.Mode > len(s.Modes) {
			return malformed("modes", "an error is of mode %d", x.Mode)
		}
		s.MeshErrors = append(s.MeshErrors, x)
	}
	t = a.Table("meetings")
	for i := range t.Rows() {
		x := modal.Meeting{Order: int(t.Ints("order")[i]), Blade: t.Texts("what")[i] == bladePassing, Speed: t.Floats("speed")[i],
			Rotors: narrow(t.IntLists("rotors")[i]), Hover: t.Texts("range")[i] == "hover", Service: t.Texts("range")[i] != "beyond"}
		mode := t.Ints("mode")[i]
		if mode < 1 || mode > int64(len(s.Modes)) {
			return malformed("modes", "a meeting is of mode %d", mode)
		}
		for _, r := range x.Rotors {
			if r < 0 || r >= len(s.Rotors) {
				return malformed("modes", "a meeting is of rotor %d", r)
			}
		}
		s.Modes[mode-1].Meetings = append(s.Modes[mode-1].Meetings, x)
	}
	t = a.Table("gaps")
	for i := range t.Rows() {
		found := false
		for axis, name := range AxisNames {
			if found = t.Texts("axis")[i] == name; found {
				s.Gaps[axis] = append(s.Gaps[axis], modal.Gap{Lower: int(t.Ints("lower")[i]), Upper: int(t.Ints("upper")[i]), Width: t.Floats("width")[i]})
				break
			}
		}
		if !found {
			return malformed("modes", "a gap is on axis %q", t.Texts("axis")[i])
		}
	}
	return nil
}
