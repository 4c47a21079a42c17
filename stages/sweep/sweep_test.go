package sweep

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// frame is a made-up free frame of two rotors that spin against each other.
// Modes: 1 turns the gyro in roll at 150 Hz, 2 in pitch at 230 Hz and 3 in
// pitch at 300 Hz; all are driven by forces along z. A residual vector turns
// it in yaw under forces along x.
func frame() (*kinds.Modes, *airframe.Properties) {
	b := &modal.Basis{
		Kinds: []modal.VectorKind{modal.RigidBody, modal.RigidBody, modal.RigidBody, modal.RigidBody, modal.RigidBody, modal.RigidBody,
			modal.Elastic, modal.Elastic, modal.Elastic, modal.Residual},
		Frequency: []float64{0, 0, 0, 0, 0, 0, 150, 230, 300, 1800},
	}
	n := len(b.Frequency)
	site := func(name, kind string, at airframe.Vec, elastic ...[6]float64) {
		s := modal.Site{Name: name, Kind: kind, Point: at}
		for d := range 6 { // unit mass and 0.01 kg·m² about the origin
			var q [6]float64
			if d < 3 {
				q[d] = 1
			} else {
				w := airframe.Vec{}
				w[d-3] = 10
				q[d] = 10
				q[0], q[1], q[2] = w[1]*at[2]-w[2]*at[1], w[2]*at[0]-w[0]*at[2], w[0]*at[1]-w[1]*at[0]
			}
			s.Motion = append(s.Motion, q)
		}
		s.Motion = append(s.Motion, elastic...)
		b.Sites = append(b.Sites, s)
	}
	site("a", "rotor", airframe.Vec{0.1, 0.1, 0}, [6]float64{0, 0, 3}, [6]float64{0, 0, 2}, [6]float64{0, 0, 1}, [6]float64{4, 0, 0})
	site("b", "rotor", airframe.Vec{0.1, -0.1, 0}, [6]float64{0, 0, -3}, [6]float64{0, 0, 2}, [6]float64{0, 0, -1}, [6]float64{4, 0, 0})
	site("gyro", "gyro", airframe.Vec{}, [6]float64{0, 0, 0, 20, 0, 0}, [6]float64{0, 0, 0, 0, 30, 0}, [6]float64{0, 0, 0, 0, 15, 0}, [6]float64{0, 0, 0, 0, 0, 40})
	for v := range n {
		shape := make([]float64, 4*3)
		for k := range shape {
			shape[k] = float64(v*k%7) - 3
		}
		b.Shapes = append(b.Shapes, shape)
	}
	for g, part := range []float64{0.7, 0.3} {
		k := make([]float64, n*n)
		for v, f := range b.Frequency {
			k[v*n+v] = part * math.Pow(2*math.Pi*f, 2)
		}
		b.Groups = append(b.Groups, modal.LossGroup{Name: fmt.Sprint("g", g), Kind: "part", LossFactor: []float64{0.02, 0.04}[g], Stiffness: k})
	}
	m := &kinds.Modes{UpTo: 750, SweptTo: 500, Basis: b, Survey: &modal.Survey{Rotors: []string{"a", "b"}}}
	p := &airframe.Properties{Materials: []airframe.Material{{Name: "carbon"}}, Bodies: []airframe.Body{{Name: "a", Mass: 0.4}, {Name: "b", Mass: 0.4}}, Plates: []airframe.PlateProperties{{Mass: 0.2}}}
	for k, name := range []string{"a", "b"} {
		p.Rotors = append(p.Rotors, airframe.Rotor{Name: name, Body: name, Axis: airframe.Vec{0, 0, 1}, Blades: 3, Spin: 1 - 2*k, HoverSpeed: 1700, MaxSpeed: 3400, SpinningMass: 0.02, Grade: 6.3e-3})
	}
	return m, p
}

// mapSpeeds is the number of speeds of maps in tests, to save time.
const mapSpeeds = 20

type silent struct{}

func (silent) Progress(string, float64)        {}
func (silent) Log(stage.Level, string, ...any) {}

func call(t testing.TB, m *kinds.Modes, p *airframe.Properties, change stage.Arguments) *stage.Call {
	t.Helper()
	c := &stage.Call{Arguments: stage.Arguments{}, Inputs: map[string][]stage.Input{}, Outputs: map[string]string{"response": t.TempDir()}, Threads: 2, Report: silent{}}
	for _, a := range (Stage{}).Describe().Arguments {
		if a.Default != nil {
			c.Arguments[a.Name] = a.Default
		}
	}
	c.Arguments["map_speeds"] = float64(mapSpeeds)
	for name, v := range change {
		c.Arguments[name] = v
	}
	for name, a := range map[string]*artifact.Artifact{"modes": kinds.EncodeModes(m), "properties": kinds.EncodeProperties(p)} {
		folder := t.TempDir()
		if _, err := artifact.Write(folder, a); err != nil {
			t.Fatal(err)
		}
		c.Inputs[name] = []stage.Input{{Folder: folder, Kind: name}}
	}
	return c
}

func run(t testing.TB, m *kinds.Modes, p *airframe.Properties, change stage.Arguments) (*kinds.Response, *stage.Outcome) {
	t.Helper()
	c := call(t, m, p, change)
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

func TestPeaksAreNamedAfterTheirModes(t *testing.T) {
	m, p := frame()
	r, out := run(t, m, p, nil)
	near := func(axis string, f float64) *kinds.ResponsePeak {
		for i := range r.Peaks {
			if x := &r.Peaks[i]; x.Axis == axis && math.Abs(x.Frequency-f) < 1 {
				return x
			}
		}
		t.Fatalf("no %s peak near %g Hz among %+v", axis, f, r.Peaks)
		return nil
	}
	for _, x := range []struct {
		axis string
		f    float64
		mode int
	}{{"roll", 150, 1}, {"pitch", 230, 2}, {"pitch", 300, 3}} {
		peak := near(x.axis, x.f)
		if len(peak.Modes) == 0 || peak.Modes[0] != x.mode || peak.Shares[0] < 0.8 || peak.Component != 2 {
			t.Errorf("peak %+v", peak)
		}
		// Loss factors 0.02 and 0.04 over 0.7 and 0.3 of the stiffness: 0.026,
		// damping ratio half of it; the power goes as 0.014 to 0.012.
		if math.Abs(peak.Damping-0.013) > 1e-12 {
			t.Errorf("damping ratio %g", peak.Damping)
		}
		if len(peak.Losses) != 2 || peak.Losses[0] != "part g0" || math.Abs(peak.LossShares[0]-0.014/0.026) > 1e-9 {
			t.Errorf("power goes to %v %v", peak.Losses, peak.LossShares)
		}
	}
	if len(r.Modes) != 3 || r.Modes[2].Number != 3 || r.Modes[2].Frequency != 300 {
		t.Errorf("modes %+v", r.Modes)
	}
	roll := near("roll", 150)
	if got := out.Figures["peak_roll"].(stage.Quantity); got.SI != roll.Frequency || got.Dimension != "frequency" {
		t.Errorf("figure peak_roll %v", got)
	}
	if got := out.Figures["peak_level_roll"].(stage.Quantity); got.SI != roll.Density {
		t.Errorf("figure peak_level_roll %v", got)
	}
	if got := len(out.Figures["peaks"].([]any)); got != len(r.Peaks) {
		t.Errorf("%d peaks in the figure, %d in the artifact", got, len(r.Peaks))
	}
	if len(out.Warnings) != 0 {
		t.Errorf("warnings %v", out.Warnings)
	}
	if len(r.Shapes) == 0 || r.Shapes[0].Axis != "roll" || len(r.Shapes[0].Real) != 4*3 {
		t.Errorf("shapes %+v", r.Shapes)
	}
	for name, v := range out.Figures {
		declared := false
		for _, f := range (Stage{}).Describe().Figures {
			declared = declared || f.Name == name
		}
		if !declared {
			t.Errorf("figure %s is not declared", name)
		}
		if _, err := stage.EncodeValue(v); err != nil {
			t.Errorf("figure %s: %v", name, err)
		}
	}
}

// Root mean square is that of the density, and the density is the sum of the
// transfer functions squared times the source.
func TestSpectrumIsTheSumOfTransferFunctions(t *testing.T) {
	m, p := frame()
	r, _ := run(t, m, p, nil)
	if len(r.Transfer) != 2*6*3 || len(r.Sources) != 2*3 {
		t.Fatalf("%d transfer functions, %d sources", len(r.Transfer), len(r.Sources))
	}
	k := len(r.Frequency) / 3
	for axis, name := range kinds.AxisNames {
		sum, by := 0.0, 0.0
		for _, x := range r.Transfer {
			if x.Axis == name {
				s := r.Force
				if x.Component >= 3 {
					s = r.Moment
				}
				sum += s * (x.Real[k]*x.Real[k] + x.Imaginary[k]*x.Imaginary[k])
			}
		}
		for _, x := range r.Sources {
			if x.Axis == name {
				by += x.Density[k]
			}
		}
		if got := r.Density[axis][k]; math.Abs(sum-got) > 1e-12*got || math.Abs(by-got) > 1e-12*got {
			t.Errorf("%s: density %g, transfer functions give %g, rotors %g", name, got, sum, by)
		}
	}
}

func TestResidualVectorsAndWhatTheyChange(t *testing.T) {
	m, p := frame()
	with, _ := run(t, m, p, nil)
	without, out := run(t, m, p, stage.Arguments{"residual": false})
	if !with.Residual || without.Residual || len(out.Warnings) != 0 {
		t.Errorf("residual %v and %v, warnings %v", with.Residual, without.Residual, out.Warnings)
	}
	for k := range with.Frequency {
		if with.Uncorrected[2][k] != without.Density[2][k] || !math.IsNaN(without.Uncorrected[2][k]) {
			t.Fatalf("yaw at %g Hz: %g, %g, %g", with.Frequency[k], with.Uncorrected[2][k], without.Density[2][k], without.Uncorrected[2][k])
		}
	}
	// In yaw there is nothing but rigid motion and the residual vector, and the
	// density falls with the one and is lifted by the other.
	last := len(with.Frequency) - 1
	want := 10 * math.Log10(with.Density[2][last]/without.Density[2][last])
	if yaw := with.Axes[2]; math.Abs(yaw.Correction-want) > 1e-9 || yaw.CorrectionAt != 500 {
		t.Errorf("correction %+v, want %g dB at 500 Hz", yaw, want)
	}
	m.Basis.Kinds[9] = modal.Elastic
	if _, out := run(t, m, p, nil); len(out.Warnings) != 1 || out.Warnings[0].ID != "sweep.no-residual" {
		t.Errorf("warnings %v", out.Warnings)
	}
}

// The two rotors turn against each other. Unbalance turns in the plane of the
// rotor, so its two components act a quarter turn apart: the rigid pitch and
// yaw that they cause follow by hand for a body without elastic modes.
func TestLinesAtHover(t *testing.T) {
	m, p := frame()
	for s := range m.Basis.Sites {
		for v := 6; v < 10; v++ {
			m.Basis.Sites[s].Motion[v] = [6]float64{}
		}
	}
	r, _ := run(t, m, p, nil)
	if len(r.Lines) != 6 {
		t.Fatalf("%d lines", len(r.Lines))
	}
	omega := 1700.0
	force := 0.02 * 6.3e-3 / 3400 * omega * omega
	// Yaw acceleration per inertia 0.01: moment x·Fy − y·Fx with Fx, Fy in
	// quadrature; rate amplitude = F·√(x²+y²)/(J ω), whatever the spin.
	yaw := force * math.Hypot(0.1, 0.1) / 0.01 / omega
	for k := range 2 {
		x := r.Lines[k]
		if x.Source != "unbalance" || math.Abs(x.Frequency-omega/2/math.Pi) > 1e-9 || math.Abs(x.Force-force) > 1e-12 || math.Abs(x.Rate[2]-yaw) > 1e-9*yaw {
			t.Errorf("line %+v, want force %g and yaw %g", x, force, yaw)
		}
	}
	all := r.Lines[2]
	if all.Rotor != "all" || math.Abs(all.Rate[2]-yaw*math.Sqrt2) > 1e-9*yaw || math.Abs(all.Force-force) > 1e-12 {
		t.Errorf("together %+v", all)
	}
	// Unbalances that differ have no common amplitude.
	other := []kinds.ResponseLine{{Frequency: 1, Force: 1}, {Frequency: 1, Force: 2}}
	if x, ok := together(other); !ok || !math.IsNaN(x.Force) {
		t.Errorf("different rotors together: %+v, %v", x, ok)
	}
	// 1 kg on two rotors, 1 % of the thrust at three times the speed, along z:
	// roll moment y·Fz, pitch moment −x·Fz.
	blade := r.Lines[3]
	thrust := 9.80665 / 2
	roll := 0.01 * thrust * 0.1 / 0.01 / (3 * omega)
	if blade.Source != "blade passing" || math.Abs(blade.Rate[0]-roll) > 1e-9*roll || math.Abs(blade.Rate[1]-roll) > 1e-9*roll || blade.Rate[2] > 1e-12 {
		t.Errorf("line %+v, want %g in roll and pitch", blade, roll)
	}
}

func TestSpinMatters(t *testing.T) {
	m, p := frame()
	m.Basis.Sites[0].Motion[6] = [6]float64{2, 1.5, 0}
	m.Basis.Sites[0].Motion[7] = [6]float64{-1, 3, 0}
	m.Basis.Sites[2].Motion[7] = [6]float64{0, 0, 0, 25, 0, 0}
	one, _ := run(t, m, p, nil)
	p.Rotors[0].Spin = -p.Rotors[0].Spin
	other, _ := run(t, m, p, nil)
	if a, b := one.Lines[0].Rate[0], other.Lines[0].Rate[0]; math.Abs(a-b) < 0.01*a {
		t.Errorf("roll %g with one spin, %g with the other", a, b)
	}
}

func TestWarnings(t *testing.T) {
	m, p := frame()
	m.UpTo = 700
	_, out := run(t, m, p, nil)
	if len(out.Warnings) != 1 || out.Warnings[0].ID != "sweep.beyond-modes" || !strings.Contains(out.Warnings[0].Remedy, "750 Hz") {
		t.Errorf("warnings %+v", out.Warnings)
	}
	// Pitch still has its peak at 300 Hz, but is louder at the lower end, on the
	// flank of mode 2.
	m, p = frame()
	_, out = run(t, m, p, stage.Arguments{"from": hertz(232), "to": hertz(450)})
	if len(out.Warnings) != 1 || out.Warnings[0].ID != "sweep.edge" || out.Warnings[0].Where != "pitch" || !strings.Contains(out.Warnings[0].Text, "232 Hz") {
		t.Errorf("warnings %+v", out.Warnings)
	}
	if roll := out.Figures["peak_roll"].(stage.Quantity); !math.IsNaN(roll.SI) {
		t.Errorf("peak_roll is %v without a peak", roll)
	}
	m, p = frame()
	for g := range m.Basis.Groups {
		m.Basis.Groups[g].LossFactor = 1e-5
	}
	_, out = run(t, m, p, nil)
	if len(out.Warnings) != 1 || out.Warnings[0].ID != "sweep.undamped" || !strings.Contains(out.Warnings[0].Text, "1 at 150 Hz, 2 at 230 Hz, 3 at 300 Hz") {
		t.Errorf("warnings %+v", out.Warnings)
	}
	m, p = frame()
	_, out = run(t, m, p, stage.Arguments{"rotor_speed": fmt.Sprintf("%g rad/s", 1.1*p.Rotors[0].MaxSpeed)})
	if len(out.Warnings) != 2 || out.Warnings[0].ID != "sweep.beyond-speed" || !strings.Contains(out.Warnings[1].Text, "rotor b") {
		t.Errorf("warnings %+v", out.Warnings)
	}
	flown := func(factor float64) []any {
		return []any{map[string]any{"speed": stage.Quantity{SI: factor * p.Rotors[0].MaxSpeed, Dimension: "rotational speed"}, "share": 1.0},
			map[string]any{"speed": stage.Quantity{SI: 0.5 * p.Rotors[0].MaxSpeed, Dimension: "rotational speed"}, "share": 3.0}}
	}
	_, out = run(t, m, p, stage.Arguments{"speeds_flown": flown(1.1)})
	if len(out.Warnings) != 2 || out.Warnings[1].ID != "sweep.flown-beyond-speed" || !strings.Contains(out.Warnings[1].Text, "rotor b") || out.Warnings[1].Where != "speeds_flown" {
		t.Errorf("warnings %+v", out.Warnings)
	}
	if _, out = run(t, m, p, stage.Arguments{"speeds_flown": flown(1)}); len(out.Warnings) != 0 {
		t.Errorf("warnings %+v", out.Warnings)
	}
}

func TestFaults(t *testing.T) {
	for name, x := range map[string]struct {
		change   stage.Arguments
		spoil    func(m *kinds.Modes)
		kind     fault.Kind
		argument string
	}{
		"ends before it begins": {stage.Arguments{"to": hertz(50)}, nil, fault.Input, "to"},
		"too fine":              {stage.Arguments{"resolution": hertz(1e-4)}, nil, fault.Input, "resolution"},
		"no source": {stage.Arguments{"force_density": stage.Quantity{SI: 0, Dimension: "force density"}, "moment_density": stage.Quantity{SI: 0, Dimension: "moment density"}},
			nil, fault.Input, "force_density"},
		"shape at rest":          {stage.Arguments{"shapes_at": []any{hertz(0)}}, nil, fault.Input, "shapes_at"},
		"shape beyond the modes": {stage.Arguments{"shapes_at": []any{hertz(751)}}, nil, fault.Input, "shapes_at"},
		"beyond the modes":       {stage.Arguments{"from": hertz(600), "to": hertz(760)}, nil, fault.Input, "to"},
		"contradictory bands": {stage.Arguments{"correlation": []any{
			map[string]any{"from": hertz(0), "to": hertz(80), "coefficient": 0.8},
			map[string]any{"from": hertz(70), "coefficient": 0.1}}}, nil, fault.Input, "correlation"},
		"no gyro": {nil, func(m *kinds.Modes) { m.Basis.Sites[2].Kind = "body" }, fault.Input, "modes"},
		"undamped": {stage.Arguments{"shapes_at": []any{hertz(150)}}, func(m *kinds.Modes) {
			for g := range m.Basis.Groups {
				m.Basis.Groups[g].LossFactor = 0
			}
		}, fault.Numeric, ""},
	} {
		m, p := frame()
		if x.spoil != nil {
			x.spoil(m)
		}
		_, err := Stage{}.Run(context.Background(), call(t, m, p, x.change))
		if err == nil {
			t.Errorf("%s: no fault", name)
			continue
		}
		if f := fault.From(err); f.Kind != x.kind || f.Argument != x.argument || f.Remedy == "" && x.kind != fault.Input {
			t.Errorf("%s: %#v", name, f)
		}
	}
	m, p := frame()
	p.Rotors = nil
	_, err := Stage{}.Run(context.Background(), call(t, m, p, nil))
	if f := fault.From(err); err == nil || f.Argument != "properties" || f.Remedy == "" {
		t.Errorf("no rotors: %#v", err)
	}
	m, p = frame()
	p.Rotors[1].Blades = 0
	_, err = Stage{}.Run(context.Background(), call(t, m, p, nil))
	if f := fault.From(err); err == nil || f.Kind != fault.Input || f.Item != "rotor b" || f.Remedy == "" {
		t.Errorf("no blades: %#v", err)
	}
	m, p = frame()
	both := recorded(t, call(t, m, p, stage.Arguments{"speeds_flown": []any{map[string]any{"speed": stage.Quantity{SI: 1700, Dimension: "rotational speed"}, "share": 1.0}}}), &kinds.Spectra{})
	_, err = Stage{}.Run(context.Background(), both)
	if f := fault.From(err); err == nil || f.Argument != "speeds_flown" || f.Remedy == "" {
		t.Errorf("two flights: %#v", err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := (Stage{}).Run(ctx, call(t, m, p, nil)); fault.KindOf(err) != fault.Cancelled {
		t.Errorf("cancelled: %v", err)
	}
}

func TestShapesWhereAsked(t *testing.T) {
	m, p := frame()
	r, _ := run(t, m, p, stage.Arguments{"shapes_at": []any{hertz(120), hertz(301)}})
	if len(r.Shapes) != 2 || r.Shapes[0].Frequency != 120 || r.Shapes[1].Frequency != 301 || r.Shapes[1].Axis != "" {
		t.Errorf("shapes %+v", r.Shapes)
	}
}

func TestSummary(t *testing.T) {
	m, p := frame()
	_, out := run(t, m, p, nil)
	if len(out.Summary) != 8 {
		t.Fatalf("%d tables", len(out.Summary))
	}
	for _, s := range out.Summary {
		for _, row := range s.Rows {
			if len(row) != len(s.Columns) {
				t.Errorf("%s: %d cells under %d columns", s.Title, len(row), len(s.Columns))
			}
		}
	}
	// Where rotors differ in speed it is said whose turns the orders count.
	p.Rotors[1].HoverSpeed *= 1.2
	_, unlike := run(t, m, p, nil)
	const whose = "orders and rpm are those of rotor a"
	for i, o := range []*stage.Outcome{out, unlike} {
		for _, s := range o.Summary {
			if strings.HasPrefix(s.Title, "Rotor lines up to") && strings.Contains(s.Text, whose) != (i == 1) {
				t.Errorf("%s: %q", s.Title, s.Text)
			}
		}
	}
	// Rotors a and b drive mode 1 alike; of the loss 0.014 of 0.026 is in g0.
	if row := strings.Join(out.Summary[1].Rows[0], "|"); !strings.HasPrefix(row, "roll|150.0|50|50|force z of ") || !strings.Contains(row, "|part g0 54 %|") {
		t.Errorf("shares read %q", row)
	}
	if row := out.Summary[0].Rows[0]; row[0] != "roll" || row[1] != "150.0" || row[5] != "1: 100 %" {
		t.Errorf("first peak reads %q", row)
	}
}
