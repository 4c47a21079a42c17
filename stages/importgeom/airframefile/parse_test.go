package airframefile

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

func frame(t *testing.T) []byte {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "..", "testdata", "geometry", "frame", "airframe.hcl"))
	if err != nil {
		t.Fatal(err)
	}
	return text
}

func near(t *testing.T, what string, got, want float64) {
	t.Helper()
	if math.Abs(got-want) > 1e-12*math.Max(1, math.Abs(want)) {
		t.Errorf("%s is %g, want %g", what, got, want)
	}
}

func TestParse(t *testing.T) {
	f, err := Parse("frame/airframe.hcl", frame(t), nil)
	if err != nil {
		t.Fatal(err)
	}
	if f.Name != "twig" || f.About != "two-armed test frame" || len(f.Plates) != 3 || len(f.Copies) != 1 || len(f.Rotors) != 2 || len(f.Lumps) != 2 {
		t.Errorf("%q, %d plates, %d copies, %d rotors, %d lumps", f.Name, len(f.Plates), len(f.Copies), len(f.Rotors), len(f.Lumps))
	}
	near(t, "all-up mass", f.AllUpMass, 0.19)
	base := f.Plates[0]
	near(t, "thickness", base.Thickness, 0.002)
	near(t, "fibre", base.Fibre, math.Pi/6)
	if base.Outline != "cut/base.dxf" || len(base.Layers) != 1 || base.Layers[0] != "cut" || base.Material != "sheet" || base.Line != 27 {
		t.Errorf("base %+v", base)
	}
	near(t, "arm", f.Plates[1].Thickness, 0.004)
	near(t, "arm at", f.Plates[1].At[0], 0.016)
	top := f.Plates[2]
	near(t, "stack", top.Thickness, 0.001)
	if len(top.Plies) != 2 || top.Plies[1].Material != "sheet" {
		t.Fatalf("plies %+v", top.Plies)
	}
	near(t, "ply", top.Plies[1].Angle, math.Pi/4)
	if c := f.Copies[0]; c.Of != "arm_front" || c.Mirror != [3]bool{true, false, false} {
		t.Errorf("copy %+v", c)
	}
	m := f.Materials["sheet"]
	near(t, "E2", m.E2, 56e9)
	near(t, "G12", m.G12, 4.5e9) // of the table
	near(t, "loss factor", m.LossFactor, 0.008)
	if m.Typical || m.Isotropic || m.Origin != "test" {
		t.Errorf("material %+v", m)
	}
	r := f.Rotors[0]
	near(t, "hover", r.HoverSpeed, 15000*math.Pi/30)
	if r.Spin != 1 || r.At != nil || r.Base.Given || !r.Diameter.Given || r.Blades.Value != 3 {
		t.Errorf("rotor %+v", r)
	}
	g := f.Lumps[1]
	if !g.Gyro || !g.Lower || g.Mount == nil || g.Mount.Word != "grommet" || len(g.Mount.Places) != 4 || g.Mount.Stiffness != [6]float64{3e4, 3e4, 5e4} {
		t.Errorf("gyro %+v", g)
	}
	if f.Bolts.Joint != "sandwich" || f.Bolts.Smallest != 2e-3 || f.Bolts.Largest != 5.5e-3 || f.Bolts.Gap != 0.2e-3 || f.Bolts.Change["bolt-4"].Mass.Value != 2e-3 {
		t.Errorf("bolts %+v", f.Bolts)
	}
}

func TestInputs(t *testing.T) {
	text := frame(t)
	f, err := Parse("a.hcl", text, map[string]any{
		"arm_thickness": stage.Quantity{SI: 0.0055, Dimension: "length"}, "loss_factor": 0.02})
	if err != nil {
		t.Fatal(err)
	}
	if f.Plates[1].Thickness != 0.0055 || f.Materials["sheet"].LossFactor != 0.02 || !f.Inputs[0].Overridden {
		t.Errorf("%g m, loss factor %g, inputs %+v", f.Plates[1].Thickness, f.Materials["sheet"].LossFactor, f.Inputs)
	}
	if f, err = Parse("a.hcl", text, map[string]any{"arm_thickness": "6 mm"}); err != nil || f.Plates[1].Thickness != 0.006 {
		t.Errorf("as text: %v", err)
	}
	for _, c := range []struct {
		with map[string]any
		want string
	}{
		{map[string]any{"arm_thicknes": "6 mm"}, `no input "arm_thicknes"; did you mean "arm_thickness"?`},
		{map[string]any{"wing": "6 mm"}, `no input "wing"; it has the inputs arm_thickness, loss_factor`},
		{map[string]any{"arm_thickness": "6 g"}, `input "arm_thickness" is a length (4 mm in the airframe file), and 6 g is a mass`},
		{map[string]any{"arm_thickness": 6.0}, `and 6 is a number; give it a length`},
		{map[string]any{"loss_factor": "0.02"}, `input "loss_factor" is a number`},
		{map[string]any{"loss_factor": math.NaN()}, `the value for input "loss_factor" cannot be used`},
		{map[string]any{"loss_factor": map[string]any{}}, `the value for input "loss_factor" cannot be used`},
	} {
		_, err := Parse("a.hcl", text, c.with)
		if err == nil || !strings.Contains(err.Error(), c.want) || fault.From(err).Argument != "with" {
			t.Errorf("%v: %v (argument %q)", c.with, err, fault.From(err).Argument)
		}
	}
	// A value that the file itself would refuse is refused with the line where it is used.
	if _, err := Parse("a.hcl", text, map[string]any{"arm_thickness": "0 mm"}); err == nil || !strings.Contains(err.Error(), "line 37: plate \"arm_front\": thickness is 0 mm and must be positive") {
		t.Errorf("0 mm: %v", err)
	}
}

// minimal is a file that parses; cases add to it.
const minimal = `
plate "p" {
  outline   = "p.dxf"
  thickness = "2 mm"
  material  = "steel"
}
`

func TestMaterials(t *testing.T) {
	f, err := Parse("a.hcl", []byte(minimal+`
material "steel" {
  loss_factor = 0.01
}
material "soft" {
  like = "steel"
  E    = "100 GPa"
}
material "weave" {
  E1      = "30 GPa"
  E2      = "28 GPa"
  G12     = "4 GPa"
  nu12    = 0.1
  density = "1800 kg/m^3"
}
`), nil)
	if err != nil {
		t.Fatal(err)
	}
	steel, soft, weave := f.Materials["steel"], f.Materials["soft"], f.Materials["weave"]
	near(t, "steel's loss factor", steel.LossFactor, 0.01)
	near(t, "steel's modulus", steel.E1, 205e9)
	if !steel.Typical || !steel.Isotropic {
		t.Error("steel with another loss factor is not typical any more")
	}
	near(t, "soft's loss factor", soft.LossFactor, 0.01) // of the steel above it
	near(t, "soft's shear modulus", soft.G23, 100e9/(2*1.29))
	if soft.Typical {
		t.Error("a given modulus is marked typical")
	}
	near(t, "weave's G13", weave.G13, 4e9)
	near(t, "weave's density", weave.Density, 1800)
	if weave.Isotropic || weave.Origin != "airframe file" {
		t.Errorf("weave %+v", weave)
	}
}

func TestMistakes(t *testing.T) {
	for _, c := range []struct{ name, add, want string }{
		{"attribute outside", "mass = \"2 g\"\n", `line 7: "mass" stands outside of any block`},
		{"two names", "lump \"a\" \"b\" {\n}\n", "a lump has one name in quotes"},
		{"named bolts", "bolts \"b\" {\n}\n", "the block bolts has no name"},
		{"attribute for block", "gyro \"g\" {\n  on = plate.p\n  at = [\"0 mm\", \"0 mm\"]\n  mass = \"2 g\"\n  size = [\"1 mm\", \"1 mm\", \"1 mm\"]\n  grommets = 3\n}\n", "grommets is a block: write grommets { ... } without ="},
		{"block for attribute", "joint \"j\" {\n  x {\n  }\n}\n", "x is an attribute: write x = ..."},
		{"copy as reference", "copy \"c\" {\n  of = copy.p\n}\n", "a copy is a plate: write plate.p"},
		{"joint as plate", "joint \"j\" {\n}\ncopy \"c\" {\n  of = joint.j\n}\n", "of: a plate is due, and joint.j is a joint"},
		{"material reference", "plate \"q\" {\n  outline   = \"q.dxf\"\n  thickness = \"1 mm\"\n  material  = material.steel\n}\n", `materials are named in quotes: write "steel"`},
		{"incomplete", "copy \"c\" {\n  of = plate\n}\n", "a name is due: plate.NAME"},
		{"unknown root", "copy \"c\" {\n  of = plates.p\n}\n", `"plates" is nothing that can be referred to; did you mean "plate"?`},
		{"self copy", "copy \"c\" {\n  of = plate.c\n}\n", "it is a copy of itself"},
		{"axis", "copy \"c\" {\n  of     = plate.p\n  mirror = \"w\"\n}\n", `mirror: "w" is no axis; the axes are x, y, z`},
		{"wrong length of list", "copy \"c\" {\n  of   = plate.p\n  move = [\"1 mm\", \"2 mm\"]\n}\n", "move has 2 elements where 3 are due"},
		{"no list", "copy \"c\" {\n  of   = plate.p\n  move = \"1 mm\"\n}\n", "move: a list in brackets is due"},
		{"null in list", "copy \"c\" {\n  of   = plate.p\n  move = [\"1 mm\", null, \"1 mm\"]\n}\n", "move: an element of the list is null"},
		{"twice in between", "standoff \"s\" {\n  between = [plate.p, plate.p]\n  at = [\"0 mm\", \"0 mm\"]\n  outer = \"5 mm\"\n  material = \"steel\"\n}\n", "between names plate.p twice"},
		{"no place", "bolt \"b\" {\n  through = [plate.p]\n}\n", "a place is missing"},
		{"two places", "bolt \"b\" {\n  through = [plate.p]\n  at = [\"0 mm\", \"0 mm\"]\n  places = []\n}\n", "both at and places are given"},
		{"bore", "standoff \"s\" {\n  between = [plate.p, plate.p]\n  at = [\"0 mm\", \"0 mm\"]\n  outer = \"5 mm\"\n  inner = \"5 mm\"\n  material = \"steel\"\n}\n", "the inner diameter is not below the outer one"},
		{"mixed material", "material \"m\" {\n  E  = \"1 GPa\"\n  E1 = \"1 GPa\"\n}\n", "give one kind"},
		{"isotropic half", "material \"m\" {\n  like = \"glass\"\n  nu   = 0.3\n}\n", "give both E and nu"},
		{"empty material", "material \"m\" {\n}\n", "its moduli are missing"},
		{"share", "airframe \"a\" {\n  loss_floor = 2\n}\n", "loss_floor is 2 and must lie between 0 and 1"},
		{"text for number", "airframe \"a\" {\n  loss_floor = \"0.1\"\n}\n", `"0.1" is a text where a number without a unit is due`},
		{"truth", "bolts {\n  infer = \"yes\"\n}\n", "infer: true or false is due, without quotes"},
		{"plies and thickness", "plate \"q\" {\n  outline = \"q.dxf\"\n  thickness = \"1 mm\"\n  plies = [{ material = \"glass\", thickness = \"1 mm\" }]\n}\n", "thickness and plies are both given"},
		{"ply", "plate \"q\" {\n  outline = \"q.dxf\"\n  plies = [{ material = \"glass\", thicknes = \"1 mm\" }]\n}\n", `plies: there is no attribute "thicknes"; did you mean "thickness"?`},
		{"bad input", "input \"i\" {\n  value = { a = 1 }\n}\n", "a text, number, truth value or list is due"},
		{"input without value", "input \"i\" {\n}\n", "value is missing"},
		{"input from below", "input \"i\" {\n  value = input.j\n}\ninput \"j\" {\n  value = 1\n}\n", `there is no input "j"`},
		{"only one mistake for what depends on another", "input \"i\" {\n  value = 1 + \"2 mm\"\n}\nairframe \"a\" {\n  loss_floor = input.i\n}\n", "line 8: \"2 mm\" is a quantity"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Parse("a.hcl", []byte(minimal+c.add), nil)
			if err == nil {
				t.Fatal("was parsed")
			}
			f := fault.From(err)
			if !strings.Contains(err.Error(), c.want) || f.Kind != fault.Input || f.Argument != "airframe" || f.Item != "a.hcl" {
				t.Errorf("%+v\nwant %q", err, c.want)
			}
			if strings.HasPrefix(c.name, "only one") && strings.Contains(err.Error(), "mistakes") {
				t.Errorf("%v", err)
			}
		})
	}
}

// Whatever the text, parsing ends with a file or a fault.
func FuzzParse(f *testing.F) {
	text, err := os.ReadFile(filepath.Join("..", "..", "..", "testdata", "geometry", "frame", "airframe.hcl"))
	if err != nil {
		f.Fatal(err)
	}
	f.Add(text)
	f.Add([]byte(minimal))
	f.Fuzz(func(t *testing.T, text []byte) {
		file, err := Parse("a.hcl", text, map[string]any{"loss_factor": 0.1})
		if (file == nil) == (err == nil) {
			t.Fatalf("%v, %v", file, err)
		}
	})
}
