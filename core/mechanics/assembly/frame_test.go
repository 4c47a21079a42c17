package assembly_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
)

func builtin(name string) element.Type {
	for _, kind := range shell.Types() {
		if kind.Describe().Name == name {
			return kind
		}
	}
	return nil
}

// The model weighs what its parts weigh by hand, and so does its matrix.
func TestAirframeMass(t *testing.T) {
	m, p := known.Airframe(0.008)
	f, err := assembly.FromAirframe(m, p, builtin)
	if err != nil {
		t.Fatal(err)
	}
	s := assemble(t, &f.Problem)
	post := math.Pi / 4 * (0.005*0.005 - 0.0026*0.0026) * (0.027 - 0.00075 - 0.00125) * 2700
	want := 0.12*0.09*0.0025*1550 + 0.05*0.02*0.002*1550 + 0.05*0.04*0.0015*1850 + 4*(post+0.018) + 0.085 + 0.014 + 2*0.0006
	if math.Abs(s.Mass-want) > 1e-9 {
		t.Errorf("mass %.9g kg, want %.9g", s.Mass, want)
	}
	my := make([]float64, s.N)
	for k, y := range s.Rigid() {
		s.M.MulVec(my, y)
		got := 0.0
		for i := range y {
			got += y[i] * my[i]
		}
		if k < 3 && math.Abs(got-want) > 1e-9 {
			t.Errorf("the matrix weighs %.9g kg along axis %d, want %.9g", got, k, want)
		}
	}
	if len(s.Merges) == 0 {
		t.Error("rotors are welded to their footprints, but no merge is listed")
	}
	for _, merge := range s.Merges {
		if merge.Shared {
			t.Errorf("no footprints overlap, but %q are said to", merge.Bodies)
		}
	}
}

// frequenciesOf returns the first elastic frequencies of an airframe, in Hz.
func frequenciesOf(t *testing.T, m *mesh.Mesh, p *airframe.Properties, count int) []float64 {
	t.Helper()
	f, err := assembly.FromAirframe(m, p, builtin)
	if err != nil {
		t.Fatal(err)
	}
	return scaled(elastic(t, &f.Problem, count, 6), 1/(2*math.Pi))
}

// A joint that grows stiff tends to the rigid bolt, from below, with the first power of its compliance;
// one with all components infinite is the rigid bolt.
func TestJointsTendToRigid(t *testing.T) {
	m, p := known.Airframe(0.02)
	with := func(stiffness func(k float64) float64, joint string) []float64 {
		q := *p
		q.Joints = append([]airframe.Joint(nil), p.Joints...)
		for c, k := range p.Joints[0].Stiffness {
			q.Joints[0].Stiffness[c] = stiffness(k)
		}
		q.Bolts = append([]airframe.BoltProperties(nil), p.Bolts...)
		for i := range q.Bolts {
			q.Bolts[i].Joint = joint
		}
		return frequenciesOf(t, m, &q, 24)
	}
	rigid := with(func(k float64) float64 { return k }, "")
	infinite := with(func(float64) float64 { return math.Inf(1) }, "tail joint")
	soft := with(func(k float64) float64 { return 100 * k }, "tail joint")
	stiff := with(func(k float64) float64 { return 10000 * k }, "tail joint")
	most := 0.0
	for i := range rigid {
		if math.Abs(infinite[i]/rigid[i]-1) > 1e-7 {
			t.Errorf("mode %d: %.9g Hz with an infinite joint, %.9g with a rigid bolt", i+1, infinite[i], rigid[i])
		}
		a, b := 1-soft[i]/rigid[i], 1-stiff[i]/rigid[i]
		if a < -1e-9 || b < -1e-9 || b > a+1e-9 {
			t.Errorf("mode %d lies %.2g and %.2g below the rigid one", i+1, a, b)
		}
		if a > most {
			most = a
			if r := b / a; a > 1e-5 && (r < 0.009 || r > 0.011) {
				t.Errorf("mode %d: a hundred times the stiffness takes the change from %.3g to %.3g", i+1, a, b)
			}
		}
	}
	if most < 1e-5 {
		t.Errorf("the joint moves no mode: %.2g at most", most)
	}
}

// Stiffer, thicker and heavier parts move modes the right way.
func TestAirframeTrends(t *testing.T) {
	m, p := known.Airframe(0.02)
	base := frequenciesOf(t, m, p, 10)
	sum := func(f []float64) (s float64) {
		for _, v := range f {
			s += v
		}
		return s
	}
	stiff := *p
	stiff.Materials = append([]airframe.Material(nil), p.Materials...)
	for _, c := range []*float64{&stiff.Materials[0].E1, &stiff.Materials[0].E2, &stiff.Materials[0].G12, &stiff.Materials[0].G13, &stiff.Materials[0].G23} {
		*c *= 2
	}
	up := frequenciesOf(t, m, &stiff, 10)
	heavy := *p
	heavy.Bodies = append([]airframe.Body(nil), p.Bodies...)
	for i := range heavy.Bodies {
		if b := &heavy.Bodies[i]; b.Kind == "rotor" {
			b.Mass *= 2
			for k := range b.Inertia {
				b.Inertia[k] *= 2
			}
		}
	}
	down := frequenciesOf(t, m, &heavy, 10)
	for i := range base {
		// Each frequency rises with stiffness and falls with mass (Courant and Fischer).
		if up[i] < base[i]*(1-1e-9) || down[i] > base[i]*(1+1e-9) {
			t.Errorf("mode %d: %.5g Hz, %.5g with twice the moduli, %.5g with twice the motors", i+1, base[i], up[i], down[i])
		}
	}
	if sum(up) < 1.03*sum(base) || sum(down) > 0.95*sum(base) {
		t.Errorf("the sum of ten modes is %.4g, %.4g with twice the moduli, %.4g with twice the motors", sum(base), sum(up), sum(down))
	}
}

// Mistakes in the airframe are refused by name.
func TestAirframeRefusals(t *testing.T) {
	for want, spoil := range map[string]func(*mesh.Mesh, *airframe.Properties){
		`material "glass": G12 = 0 is impossible`:               func(_ *mesh.Mesh, p *airframe.Properties) { p.Materials[1].G12 = 0 },
		`material "aluminium": nu = 0.6 is impossible`:          func(_ *mesh.Mesh, p *airframe.Properties) { p.Materials[2].Nu12 = 0.6 },
		`plate "tail": there is no material "wood"`:             func(_ *mesh.Mesh, p *airframe.Properties) { p.Plates[1].Material = "wood" },
		`plate "roof": its plies add up to 1.25 mm`:             func(_ *mesh.Mesh, p *airframe.Properties) { p.Plates[2].Plies[1].Thickness = 0.0005 },
		`plate "deck": there is no element type "square"`:       func(m *mesh.Mesh, _ *airframe.Properties) { m.Parts[0].Element = "square" },
		`standoff "post fl": the properties do not know it`:     func(_ *mesh.Mesh, p *airframe.Properties) { p.Standoffs = p.Standoffs[1:] },
		`patch "head rr": no node of plate "roof" lies in it`:   func(m *mesh.Mesh, _ *airframe.Properties) { clearPatch(m, "head rr") },
		`bolt "bolt far": there is no joint "loose"`:            func(_ *mesh.Mesh, p *airframe.Properties) { p.Bolts[1].Joint = "loose" },
		`joint "tail joint": stiffness of component ry is 0`:    func(_ *mesh.Mesh, p *airframe.Properties) { p.Joints[0].Stiffness[4] = 0 },
		`mount "strap": stiffness of component x is -1`:         func(_ *mesh.Mesh, p *airframe.Properties) { p.Bodies[4].Mount.Points[0].Stiffness[0] = -1 },
		`body "fl": there is no patch "nowhere"`:                func(_ *mesh.Mesh, p *airframe.Properties) { p.Bodies[0].Patches = []string{"nowhere"} },
		`"tail", "bolt near under", "bolt far under" are not c`: func(m *mesh.Mesh, _ *airframe.Properties) { m.Links = m.Links[:4] },
		`body "rl": its mass is -1000 g`:                        func(_ *mesh.Mesh, p *airframe.Properties) { p.Bodies[1].Mass = -1 },
		`body "stack" can move freely on its mount`:             func(_ *mesh.Mesh, p *airframe.Properties) { p.Bodies[5].Mount.Points = p.Bodies[5].Mount.Points[:1] },
	} {
		m, p := known.Airframe(0.02)
		spoil(m, p)
		f, err := assembly.FromAirframe(m, p, builtin)
		if err == nil {
			_, err = assembly.Assemble(context.Background(), &f.Problem, 1)
		}
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %s", err, want)
		}
	}
	m, p := known.Airframe(0.02)
	p.Plates[1].Material = "wood"
	_, err := assembly.FromAirframe(m, p, builtin)
	var input *assembly.InputError
	if !errors.As(err, &input) || input.What != `plate "tail"` {
		t.Errorf("got %#v", err)
	}
}

func clearPatch(m *mesh.Mesh, name string) {
	for i := range m.Patches {
		if m.Patches[i].Name == name {
			m.Patches[i].Nodes = nil
		}
	}
}
