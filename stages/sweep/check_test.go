package sweep

import (
	"context"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// solved gives a small invented quadrotor with its modes up to 1200 Hz.
func solved(t testing.TB, change func(p *airframe.Properties)) (*mesh.Mesh, *airframe.Properties, *kinds.Modes) {
	t.Helper()
	m, p := known.Airframe(0.02)
	if change != nil {
		change(p)
	}
	f, err := assembly.FromAirframe(m, p, builtin)
	if err != nil {
		t.Fatal(err)
	}
	s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
	if err != nil {
		t.Fatal(err)
	}
	var places []modal.Place
	for i, r := range p.Rotors {
		places = append(places, modal.Place{Name: r.Name, Kind: "rotor", Body: f.BodyOf[i], Point: r.Hub})
	}
	places = append(places, modal.Place{Name: "stack", Kind: "gyro", Body: f.BodyOf[5], Point: p.Gyro.At})
	const upTo = 1200
	st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: upTo, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	st.Basis.Dampen(f.Loss, f.Laws, p.Floor)
	return m, p, &kinds.Modes{UpTo: upTo, SweptTo: 800, Basis: st.Basis, Survey: &modal.Survey{}}
}

func decoded(t testing.TB, c *stage.Call) (*kinds.Response, *stage.Outcome) {
	t.Helper()
	out, err := Stage{}.Run(context.Background(), c)
	if err != nil {
		t.Fatal(err)
	}
	a, err := artifact.Open(c.Outputs["response"], kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	r, err := kinds.DecodeResponse(a)
	if err != nil {
		t.Fatal(err)
	}
	return r, out
}

// In band the modal response is within 1 % of the direct solve, with soft lossy
// mounts, one of which stiffens with frequency, and spinning rotors; without
// residual vectors it is not, and with the law left out neither.
func TestModalResponseAgreesWithADirectSolve(t *testing.T) {
	stiffens := func(p *airframe.Properties) {
		mount := p.Bodies[len(p.Bodies)-1].Mount
		mount.Law = airframe.Law{Kind: airframe.Fractional, Reference: 50, Order: 0.4}
	}
	m, p, modes := solved(t, stiffens)
	where := []any{hertz(90), hertz(240), hertz(410), hertz(780)}
	try := func(change stage.Arguments) (*kinds.Response, *stage.Outcome) {
		change["check_at"], change["to"] = where, hertz(800)
		return decoded(t, withMesh(t, call(t, modes, p, change), m))
	}
	r, out := try(stage.Arguments{})
	if len(r.Direct) != 4*3*24 || len(r.DirectErrors) != 4*3*2 {
		t.Fatalf("%d transfer functions, %d errors", len(r.Direct), len(r.DirectErrors))
	}
	most := out.Figures["direct_error"].(float64)
	t.Logf("greatest error %.2g", most)
	if !(most < 0.01) {
		t.Errorf("off by %.2g of the direct solve: %+v", most, r.DirectErrors)
	}
	shown := false
	for _, s := range out.Summary {
		shown = shown || s.Title == "Modal response against a direct solve" && len(s.Rows) == 4 && len(s.Rows[0]) == len(s.Columns)
	}
	if !shown {
		t.Error("the difference is not shown")
	}
	// The direct side reads the same thing as the modal one, row by row.
	for _, x := range r.Direct {
		if d := cmplx.Abs(x.Modal - x.Direct); d > 0.01*cmplx.Abs(x.Direct) && d > 1e-3 {
			t.Errorf("%+v", x)
		}
	}
	if _, out := try(stage.Arguments{"residual": false}); !(out.Figures["direct_error"].(float64) > 5*most) {
		t.Errorf("residual vectors make no difference: %v", out.Figures["direct_error"])
	}
	kept := modes.Basis.Groups
	modes.Basis.Groups = append([]modal.LossGroup(nil), kept...)
	for g := range modes.Basis.Groups {
		modes.Basis.Groups[g].Law = airframe.Law{}
	}
	constant, _ := try(stage.Arguments{})
	moved := 0.0
	for k := range r.Direct {
		moved = max(moved, math.Abs(real(constant.Direct[k].Direct-r.Direct[k].Direct))/math.Hypot(real(r.Direct[k].Direct), imag(r.Direct[k].Direct)))
	}
	if moved < 0.05 {
		t.Errorf("the law moves the direct solve by %g, which tests nothing", moved)
	}
}

func TestBadChecks(t *testing.T) {
	m, p, modes := solved(t, nil)
	at := stage.Arguments{"check_at": []any{hertz(200)}}
	for name, x := range map[string]struct {
		call     func() *stage.Call
		argument string
		text     string
	}{
		"no mesh": {func() *stage.Call { return call(t, modes, p, at) }, "check_at", "mesh"},
		"at rest": {func() *stage.Call {
			return withMesh(t, call(t, modes, p, stage.Arguments{"check_at": []any{hertz(0)}}), m)
		}, "check_at", "0 Hz"},
		"other mesh": {func() *stage.Call {
			other, _ := known.Airframe(0.015)
			return withMesh(t, call(t, modes, p, at), other)
		}, "mesh", "not of this mesh"},
		"other mounts": {func() *stage.Call {
			_, q := known.Airframe(0.02)
			q.Bodies[len(q.Bodies)-1].Mount.Name = "foam"
			return withMesh(t, call(t, modes, q, at), m)
		}, "mesh", "not of this mesh"},
		"unknown element": {func() *stage.Call {
			other := *m
			other.Parts = append([]mesh.Part(nil), m.Parts...)
			other.Parts[0].Element = "cubic-square"
			return withMesh(t, call(t, modes, p, at), &other)
		}, "check_at", "element types"},
	} {
		_, err := Stage{}.Run(context.Background(), x.call())
		f := fault.From(err)
		if err == nil || f.Kind != fault.Input || f.Argument != x.argument || f.Remedy == "" || !strings.Contains(f.Error(), x.text) {
			t.Errorf("%s: %#v", name, err)
		}
	}
}

// With a mount that stiffens fast the shares of each peak add up all the same, for the
// motions are taken with the mount as it is at the peak; neighbours stand in order.
func TestSharesOfPeaksUnderALaw(t *testing.T) {
	_, p, modes := solved(t, func(p *airframe.Properties) {
		p.Bodies[len(p.Bodies)-1].Mount.Law = airframe.Law{Kind: airframe.Solid, Reference: 1, Rise: 8, PeakAt: 300}
	})
	r, _ := decoded(t, call(t, modes, p, stage.Arguments{"to": hertz(800)}))
	worst := 0.0
	for _, x := range r.Peaks {
		if len(x.Modes) == 0 {
			t.Errorf("nothing makes the %s peak at %g Hz", x.Axis, x.Frequency)
		}
		worst = max(worst, math.Abs(x.Residual))
	}
	t.Logf("%d peaks, up to %.2g left out", len(r.Peaks), worst)
	if len(r.Peaks) < 4 || worst > 0.2 {
		t.Errorf("%d peaks, up to %g left out", len(r.Peaks), worst)
	}
	for _, s := range r.Separations {
		if !(s.Gap >= 0) || s.Lower == s.Upper {
			t.Errorf("neighbours %+v", s)
		}
	}
}
