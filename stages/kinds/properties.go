package kinds

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/artifact"
)

// six are the component names of joints and mounts, in order.
var six = [6]string{"x", "y", "z", "rx", "ry", "rz"}

func stiffnessCols(about string) []artifact.Column {
	var out []artifact.Column
	for i, s := range six {
		unit := "N/m"
		if i > 2 {
			unit = "N·m/rad"
		}
		out = append(out, col("k_"+s, artifact.Float, unit, about))
	}
	return out
}

// tensor are the element names of a symmetric 3×3 tensor, in order.
var tensor = [6]string{"xx", "yy", "zz", "xy", "xz", "yz"}

// PropertiesKind is all of an airframe that meshing does not need.
var PropertiesKind = artifact.Kind{
	Name: "properties", Version: 2,
	About: "materials, joints, mounts, masses, rotors and gyro of an airframe",
	Scalars: []artifact.Column{
		col("gyro_body", artifact.Text, "", "body that carries the gyro"),
		col("gyro_x", artifact.Float, "m", "place of the gyro"), col("gyro_y", artifact.Float, "m", "place of the gyro"), col("gyro_z", artifact.Float, "m", "place of the gyro"),
		col("declared_mass", artifact.Float, "kg", "all-up mass stated by the user, 0 for none"),
		col("floor", artifact.Float, "1", "loss factor added to every group"),
	},
	Tables: []artifact.TableSpec{
		{Name: "materials", About: "homogeneous orthotropic materials, axis 1 along the fibre direction", Columns: columns(
			col("name", artifact.Text, "", "name"),
			col("e1", artifact.Float, "Pa", "modulus along 1"), col("e2", artifact.Float, "Pa", "modulus along 2"), col("e3", artifact.Float, "Pa", "modulus through the thickness, 0 unknown"),
			col("nu12", artifact.Float, "1", "Poisson's ratio"),
			col("g12", artifact.Float, "Pa", "in-plane shear modulus"), col("g13", artifact.Float, "Pa", "transverse shear modulus"), col("g23", artifact.Float, "Pa", "transverse shear modulus"),
			col("density", artifact.Float, "kg/m^3", "density"), col("loss_factor", artifact.Float, "1", "hysteretic loss factor"),
			col("isotropic", artifact.Truth, "", "isotropic"), col("typical", artifact.Truth, "", "from the built-in table, not measured"),
			col("scatter", artifact.Float, "1", "relative standard uncertainty of the moduli, 0 unknown"), col("origin", artifact.Text, "", "where the values come from"),
		)},
		{Name: "plates", About: "what each plate is made of, in the order of the geometry", Columns: columns(
			col("plate", artifact.Text, "", "name of the plate"), col("material", artifact.Text, "", "material, empty for a stack"),
			col("fibre", artifact.Float, "rad", "direction 1 from the plate's x axis"),
			col("ply_materials", artifact.TextList, "", "stack from the lower to the upper face"),
			col("ply_thicknesses", artifact.FloatList, "m", "stack"), col("ply_angles", artifact.FloatList, "rad", "stack, from the fibre direction"),
			col("mass", artifact.Float, "kg", "mass"),
		)},
		{Name: "standoffs", About: "what each standoff is made of, in the order of the geometry", Columns: columns(
			col("standoff", artifact.Text, "", "name"), col("material", artifact.Text, "", "material"), col("mass", artifact.Float, "kg", "mass"),
		)},
		{Name: "bolts", About: "mass and joint of each bolt, in the order of the geometry", Columns: columns(
			col("bolt", artifact.Text, "", "name"), col("mass", artifact.Float, "kg", "screw, washer and nut"), col("joint", artifact.Text, "", "joint, empty for rigid"),
			col("pairs", artifact.FloatList, "N/m and N·m/rad", "own stiffness between each pair of plates from bottom to top, six components each; empty where it is that of the joint"),
		)},
		{Name: "contacts", About: "what ties each contact, in the order of the geometry", Columns: columns(
			col("contact", artifact.Text, "", "name"), col("joint", artifact.Text, "", "joint per area or length"),
			col("stiffness", artifact.FloatList, "N/m and N·m/rad, per m^2 or m", "own stiffness, six components; empty where it is that of the joint"),
		)},
		{Name: "joints", About: "joint groups: six-component elastic connections in the frame of their bolt or contact; infinite is rigid", Columns: columns(
			col("name", artifact.Text, "", "name"), col("per", artifact.Text, "", "what the stiffness counts for: empty for one connection, area (m^2) or length (m) of a contact"),
			stiffnessCols("nominal stiffness"),
			col("loss_factor", artifact.Float, "1", "hysteretic loss factor"),
			col("low", artifact.Float, "1", "lowest likely factor on the stiffness, 0 unknown"), col("high", artifact.Float, "1", "highest likely factor, 0 unknown"),
			col("preload", artifact.Float, "N", "of each bolt, 0 unknown; nothing is computed from it"),
			col("origin", artifact.Text, "", "where the values come from"),
		)},
		{Name: "bodies", About: "rigid bodies", Columns: columns(
			col("name", artifact.Text, "", "name"), col("kind", artifact.Text, "", "rotor, lump or gyro"),
			col("mass", artifact.Float, "kg", "mass"), vecCols("centre", "m", "centre of gravity"),
			func() []artifact.Column {
				var out []artifact.Column
				for _, s := range tensor {
					out = append(out, col("inertia_"+s, artifact.Float, "kg·m^2", "inertia tensor about the centre of gravity, airframe axes"))
				}
				return out
			}(),
			col("patches", artifact.TextList, "", "patches it is tied to rigidly"),
			col("mount", artifact.Text, "", "mount, empty when tied rigidly"),
		)},
		{Name: "mounts", About: "sets of springs between a body and patches", Columns: columns(
			col("name", artifact.Text, "", "name"), col("kind", artifact.Text, "", "grommet, strap, foam, ..."),
			col("loss_factors", artifact.FloatList, "1", "of the components x, y, z, rx, ry, rz; where the law is fractional at its reference; tables and solids bring their own"),
			lawCols(),
			col("preload", artifact.Float, "N", "force it is held with at rest, 0 unknown; nothing is computed from it"),
			col("origin", artifact.Text, "", "where the values come from"),
		)},
		{Name: "mount_points", About: "springs of the mounts, along airframe axes", Columns: columns(
			col("mount", artifact.Text, "", "name of the mount"), vecCols("point", "m", "where it acts"), col("patch", artifact.Text, "", "patch it stands on"), stiffnessCols("stiffness"),
		)},
		{Name: "rotors", About: "motors with their propellers", Columns: columns(
			col("name", artifact.Text, "", "name"), col("body", artifact.Text, "", "its body"),
			vecCols("hub", "m", "where forces and moments act"), vecCols("axis", "1", "shaft, towards thrust"),
			col("blades", artifact.Int, "", "number of blades"), col("spin", artifact.Int, "", "1 counterclockwise about the axis, -1 clockwise"),
			col("hover_speed", artifact.Float, "rad/s", "speed at hover"), col("max_speed", artifact.Float, "rad/s", "highest service speed"),
			col("spinning_mass", artifact.Float, "kg", "bell and propeller"), col("polar_inertia", artifact.Float, "kg·m^2", "spinning part about the axis"),
			col("bell_inertia", artifact.Float, "kg·m^2", "share of the motor's bell in it, 0 unknown"), col("propeller_inertia", artifact.Float, "kg·m^2", "share of the propeller in it, 0 unknown"),
			col("grade", artifact.Float, "m/s", "balance quality grade e·Ω at the highest service speed"),
		)},
	},
}

// EncodeProperties makes the artifact of the properties.
func EncodeProperties(p *airframe.Properties) *artifact.Artifact {
	a := artifact.New(PropertiesKind)
	a.Scalars = map[string]any{"gyro_body": p.Gyro.Body, "gyro_x": p.Gyro.At[0], "gyro_y": p.Gyro.At[1], "gyro_z": p.Gyro.At[2],
		"declared_mass": p.DeclaredMass, "floor": p.Floor}

	n := len(p.Materials)
	t := a.Table("materials")
	t.Set("name", each(n, func(i int) string { return p.Materials[i].Name }))
	for name, at := range materialFields {
		t.Set(name, each(n, func(i int) float64 { return *at(&p.Materials[i]) }))
	}
	t.Set("isotropic", each(n, func(i int) bool { return p.Materials[i].Isotropic }))
	t.Set("typical", each(n, func(i int) bool { return p.Materials[i].Typical }))
	t.Set("origin", each(n, func(i int) string { return p.Materials[i].Origin }))

	n = len(p.Plates)
	t = a.Table("plates")
	t.Set("plate", each(n, func(i int) string { return p.Plates[i].Plate }))
	t.Set("material", each(n, func(i int) string { return p.Plates[i].Material }))
	t.Set("fibre", each(n, func(i int) float64 { return p.Plates[i].Fibre }))
	plies := func(i int) []airframe.Ply { return p.Plates[i].Plies }
	t.Set("ply_materials", each(n, func(i int) []string {
		return each(len(plies(i)), func(j int) string { return plies(i)[j].Material })
	}))
	t.Set("ply_thicknesses", each(n, func(i int) []float64 {
		return each(len(plies(i)), func(j int) float64 { return plies(i)[j].Thickness })
	}))
	t.Set("ply_angles", each(n, func(i int) []float64 {
		return each(len(plies(i)), func(j int) float64 { return plies(i)[j].Angle })
	}))
	t.Set("mass", each(n, func(i int) float64 { return p.Plates[i].Mass }))

	n = len(p.Standoffs)
	t = a.Table("standoffs")
	t.Set("standoff", each(n, func(i int) string { return p.Standoffs[i].Standoff }))
	t.Set("material", each(n, func(i int) string { return p.Standoffs[i].Material }))
	t.Set("mass", each(n, func(i int) float64 { return p.Standoffs[i].Mass }))

	n = len(p.Bolts)
	t = a.Table("bolts")
	t.Set("bolt", each(n, func(i int) string { return p.Bolts[i].Bolt }))
	t.Set("mass", each(n, func(i int) float64 { return p.Bolts[i].Mass }))
	t.Set("joint", each(n, func(i int) string { return p.Bolts[i].Joint }))
	t.Set("pairs", each(n, func(i int) []float64 {
		list := []float64{}
		for _, k := range p.Bolts[i].Pairs {
			list = append(list, k[:]...)
		}
		return list
	}))

	n = len(p.Contacts)
	t = a.Table("contacts")
	t.Set("contact", each(n, func(i int) string { return p.Contacts[i].Contact }))
	t.Set("joint", each(n, func(i int) string { return p.Contacts[i].Joint }))
	t.Set("stiffness", each(n, func(i int) []float64 {
		if k := p.Contacts[i].Stiffness; k != nil {
			return append([]float64{}, k[:]...)
		}
		return []float64{}
	}))

	n = len(p.Joints)
	t = a.Table("joints")
	t.Set("name", each(n, func(i int) string { return p.Joints[i].Name }))
	setStiffness(t, n, func(i int) [6]float64 { return p.Joints[i].Stiffness })
	t.Set("loss_factor", each(n, func(i int) float64 { return p.Joints[i].LossFactor }))
	t.Set("low", each(n, func(i int) float64 { return p.Joints[i].Low }))
	t.Set("high", each(n, func(i int) float64 { return p.Joints[i].High }))
	t.Set("per", each(n, func(i int) string { return string(p.Joints[i].Measure) }))
	t.Set("preload", each(n, func(i int) float64 { return p.Joints[i].Preload }))
	t.Set("origin", each(n, func(i int) string { return p.Joints[i].Origin }))

	n = len(p.Bodies)
	t = a.Table("bodies")
	t.Set("name", each(n, func(i int) string { return p.Bodies[i].Name }))
	t.Set("kind", each(n, func(i int) string { return p.Bodies[i].Kind }))
	t.Set("mass", each(n, func(i int) float64 { return p.Bodies[i].Mass }))
	setVecs(t, "centre", n, func(i int) airframe.Vec { return p.Bodies[i].Centre })
	for c, s := range tensor {
		t.Set("inertia_"+s, each(n, func(i int) float64 { return p.Bodies[i].Inertia[c] }))
	}
	t.Set("patches", each(n, func(i int) []string { return append([]string{}, p.Bodies[i].Patches...) }))
	t.Set("mount", each(n, func(i int) string {
		if p.Bodies[i].Mount == nil {
			return ""
		}
		return p.Bodies[i].Mount.Name
	}))

	var mounts []*airframe.Mount
	type at struct {
		mount string
		airframe.MountPoint
	}
	var points []at
	for _, b := range p.Bodies {
		if b.Mount == nil {
			continue
		}
		mounts = append(mounts, b.Mount)
		for _, q := range b.Mount.Points {
			points = append(points, at{b.Mount.Name, q})
		}
	}
	t = a.Table("mounts")
	t.Set("name", each(len(mounts), func(i int) string { return mounts[i].Name }))
	t.Set("kind", each(len(mounts), func(i int) string { return mounts[i].Kind }))
	t.Set("loss_factors", each(len(mounts), func(i int) []float64 { return append([]float64{}, mounts[i].Loss[:]...) }))
	setLaws(t, len(mounts), func(i int) *airframe.Law { return &mounts[i].Law })
	t.Set("preload", each(len(mounts), func(i int) float64 { return mounts[i].Preload }))
	t.Set("origin", each(len(mounts), func(i int) string { return mounts[i].Origin }))
	t = a.Table("mount_points")
	t.Set("mount", each(len(points), func(i int) string { return points[i].mount }))
	setVecs(t, "point", len(points), func(i int) airframe.Vec { return points[i].Point })
	t.Set("patch", each(len(points), func(i int) string { return points[i].Patch }))
	setStiffness(t, len(points), func(i int) [6]float64 { return points[i].Stiffness })

	n = len(p.Rotors)
	t = a.Table("rotors")
	t.Set("name", each(n, func(i int) string { return p.Rotors[i].Name }))
	t.Set("body", each(n, func(i int) string { return p.Rotors[i].Body }))
	setVecs(t, "hub", n, func(i int) airframe.Vec { return p.Rotors[i].Hub })
	setVecs(t, "axis", n, func(i int) airframe.Vec { return p.Rotors[i].Axis })
	t.Set("blades", each(n, func(i int) int64 { return int64(p.Rotors[i].Blades) }))
	t.Set("spin", each(n, func(i int) int64 { return int64(p.Rotors[i].Spin) }))
	for name, at := range rotorFields {
		t.Set(name, each(n, func(i int) float64 { return *at(&p.Rotors[i]) }))
	}
	return a
}

// Field tables: one place where a column meets its struct field, used by both
// directions. Columns are stored by name, so the order of iteration is of no
// consequence.
var materialFields = map[string]func(m *airframe.Material) *float64{
	"e1": func(m *airframe.Material) *float64 { return &m.E1 }, "e2": func(m *airframe.Material) *float64 { return &m.E2 },
	"e3":   func(m *airframe.Material) *float64 { return &m.E3 },
	"nu12": func(m *airframe.Material) *float64 { return &m.Nu12 }, "g12": func(m *airframe.Material) *float64 { return &m.G12 },
	"g13": func(m *airframe.Material) *float64 { return &m.G13 }, "g23": func(m *airframe.Material) *float64 { return &m.G23 },
	"density": func(m *airframe.Material) *float64 { return &m.Density }, "loss_factor": func(m *airframe.Material) *float64 { return &m.LossFactor },
	"scatter": func(m *airframe.Material) *float64 { return &m.Scatter },
}

var rotorFields = map[string]func(r *airframe.Rotor) *float64{
	"hover_speed": func(r *airframe.Rotor) *float64 { return &r.HoverSpeed }, "max_speed": func(r *airframe.Rotor) *float64 { return &r.MaxSpeed },
	"spinning_mass": func(r *airframe.Rotor) *float64 { return &r.SpinningMass }, "polar_inertia": func(r *airframe.Rotor) *float64 { return &r.PolarInertia },
	"bell_inertia": func(r *airframe.Rotor) *float64 { return &r.BellInertia }, "propeller_inertia": func(r *airframe.Rotor) *float64 { return &r.PropellerInertia },
	"grade": func(r *airframe.Rotor) *float64 { return &r.Grade },
}

func setStiffness(t *artifact.Table, n int, at func(i int) [6]float64) {
	for c, s := range six {
		t.Set("k_"+s, each(n, func(i int) float64 { return at(i)[c] }))
	}
}

func getStiffness(t *artifact.Table, i int) (k [6]float64) {
	for c, s := range six {
		k[c] = t.Floats("k_" + s)[i]
	}
	return k
}

// DecodeProperties reads the artifact back; the fault names what contradicts.
func DecodeProperties(a *artifact.Artifact) (*airframe.Properties, error) {
	p := &airframe.Properties{DeclaredMass: a.Float("declared_mass"), Floor: a.Float("floor"),
		Gyro: airframe.Gyro{Body: a.Text("gyro_body"), At: airframe.Vec{a.Float("gyro_x"), a.Float("gyro_y"), a.Float("gyro_z")}}}
	t := a.Table("materials")
	for i := range t.Rows() {
		m := airframe.Material{Name: t.Texts("name")[i], Isotropic: t.Truths("isotropic")[i], Typical: t.Truths("typical")[i], Origin: t.Texts("origin")[i]}
		for name, at := range materialFields {
			*at(&m) = t.Floats(name)[i]
		}
		p.Materials = append(p.Materials, m)
	}
	t = a.Table("plates")
	for i := range t.Rows() {
		q := airframe.PlateProperties{Plate: t.Texts("plate")[i], Material: t.Texts("material")[i], Fibre: t.Floats("fibre")[i], Mass: t.Floats("mass")[i]}
		names, thick, angles := t.TextLists("ply_materials")[i], t.FloatLists("ply_thicknesses")[i], t.FloatLists("ply_angles")[i]
		if len(thick) != len(names) || len(angles) != len(names) {
			return nil, malformed("properties", "the stack of plate %q has %d materials, %d thicknesses and %d angles", q.Plate, len(names), len(thick), len(angles))
		}
		for j := range names {
			q.Plies = append(q.Plies, airframe.Ply{Material: names[j], Thickness: thick[j], Angle: angles[j]})
		}
		p.Plates = append(p.Plates, q)
	}
	t = a.Table("standoffs")
	for i := range t.Rows() {
		p.Standoffs = append(p.Standoffs, airframe.StandoffProperties{Standoff: t.Texts("standoff")[i], Material: t.Texts("material")[i], Mass: t.Floats("mass")[i]})
	}
	t = a.Table("bolts")
	for i := range t.Rows() {
		b := airframe.BoltProperties{Bolt: t.Texts("bolt")[i], Mass: t.Floats("mass")[i], Joint: t.Texts("joint")[i]}
		pairs := t.FloatLists("pairs")[i]
		if len(pairs)%6 != 0 {
			return nil, malformed("properties", "the pairs of bolt %q have %d numbers", b.Bolt, len(pairs))
		}
		for ; len(pairs) > 0; pairs = pairs[6:] {
			b.Pairs = append(b.Pairs, [6]float64(pairs))
		}
		p.Bolts = append(p.Bolts, b)
	}
	t = a.Table("contacts")
	for i := range t.Rows() {
		c := airframe.ContactProperties{Contact: t.Texts("contact")[i], Joint: t.Texts("joint")[i]}
		switch k := t.FloatLists("stiffness")[i]; len(k) {
		case 0:
		case 6:
			c.Stiffness = (*[6]float64)(k)
		default:
			return nil, malformed("properties", "the stiffness of contact %q has %d numbers", c.Contact, len(k))
		}
		p.Contacts = append(p.Contacts, c)
	}
	t = a.Table("joints")
	for i := range t.Rows() {
		p.Joints = append(p.Joints, airframe.Joint{Name: t.Texts("name")[i], Stiffness: getStiffness(t, i), LossFactor: t.Floats("loss_factor")[i],
			Low: t.Floats("low")[i], High: t.Floats("high")[i], Measure: airframe.Measure(t.Texts("per")[i]), Preload: t.Floats("preload")[i], Origin: t.Texts("origin")[i]})
	}
	mounts := map[string]*airframe.Mount{}
	t = a.Table("mounts")
	for i := range t.Rows() {
		m := &airframe.Mount{Name: t.Texts("name")[i], Kind: t.Texts("kind")[i], Preload: t.Floats("preload")[i], Origin: t.Texts("origin")[i]}
		if copy(m.Loss[:], t.FloatLists("loss_factors")[i]) != len(m.Loss) || len(t.FloatLists("loss_factors")[i]) != len(m.Loss) {
			return nil, malformed("properties", "mount %q has %d loss factors", m.Name, len(t.FloatLists("loss_factors")[i]))
		}
		var err error
		if m.Law, err = getLaw(t, "properties", "mount "+m.Name, i); err != nil {
			return nil, err
		}
		mounts[m.Name] = m
	}
	t = a.Table("mount_points")
	for i := range t.Rows() {
		m, ok := mounts[t.Texts("mount")[i]]
		if !ok {
			return nil, malformed("properties", "a mount point belongs to mount %q, which does not exist", t.Texts("mount")[i])
		}
		m.Points = append(m.Points, airframe.MountPoint{Point: getVec(t, "point", i), Patch: t.Texts("patch")[i], Stiffness: getStiffness(t, i)})
	}
	t = a.Table("bodies")
	for i := range t.Rows() {
		b := airframe.Body{Name: t.Texts("name")[i], Kind: t.Texts("kind")[i], Mass: t.Floats("mass")[i], Centre: getVec(t, "centre", i), Patches: t.TextLists("patches")[i]}
		for c, s := range tensor {
			b.Inertia[c] = t.Floats("inertia_" + s)[i]
		}
		if name := t.Texts("mount")[i]; name != "" {
			m, ok := mounts[name]
			if !ok {
				return nil, malformed("properties", "body %q sits on mount %q, which does not exist", b.Name, name)
			}
			b.Mount = m
		}
		p.Bodies = append(p.Bodies, b)
	}
	t = a.Table("rotors")
	for i := range t.Rows() {
		r := airframe.Rotor{Name: t.Texts("name")[i], Body: t.Texts("body")[i], Hub: getVec(t, "hub", i), Axis: getVec(t, "axis", i),
			Blades: int(t.Ints("blades")[i]), Spin: int(t.Ints("spin")[i])}
		for name, at := range rotorFields {
			*at(&r) = t.Floats(name)[i]
		}
		p.Rotors = append(p.Rotors, r)
	}
	return p, nil
}
