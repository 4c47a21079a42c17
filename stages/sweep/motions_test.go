package sweep

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// rate is iω times the rotation of the gyro in an operating motion.
func rate(b *modal.Basis, x kinds.ResponseMotion, axis int) complex128 {
	var sum complex128
	for v, m := range b.Sites[2].Motion {
		sum += complex(x.Real[v], x.Imaginary[v]) * complex(m[3+axis], 0)
	}
	return complex(0, 2*math.Pi*x.Frequency) * sum
}

// With the basis, the motions are what the spectrum, the peaks and the lines
// say of the gyro.
func TestMotionsAreThoseOfTheSpectrum(t *testing.T) {
	m, p := tilting()
	r, _ := run(t, m, p, stage.Arguments{"torque_ripple": newton(1e-3), "ripple_order": 2.5, "shapes_at": []any{hertz(123.4)}})
	byRotor, lines, asked := 0, 0, 0
	for _, x := range r.Motions {
		if len(x.Real) != len(m.Basis.Kinds) {
			t.Fatalf("%d amplitudes over %d vectors", len(x.Real), len(m.Basis.Kinds))
		}
		axis := 0
		for a, name := range kinds.AxisNames {
			if x.Axis == name {
				axis = a
			}
		}
		if x.Frequency == 123.4 {
			asked++
		}
		for _, peak := range r.Peaks {
			if x.Axis != peak.Axis || x.Frequency != peak.Frequency {
				continue
			}
			want := peak.Density
			for i, y := range r.Rotors {
				if y.Rotor == x.Rotor {
					want *= peak.RotorShares[i]
					byRotor++
				}
			}
			if got := rate(m.Basis, x, axis); cmplx.Abs(got-complex(math.Sqrt(want), 0)) > 1e-6*math.Sqrt(want) {
				t.Errorf("%s of rotor %s at %g Hz: rate %v, want %g", x.Axis, x.Rotor, x.Frequency, got, math.Sqrt(want))
			}
		}
		for _, line := range r.Lines {
			if x.Source != line.Source || x.Rotor != line.Rotor {
				continue
			}
			lines++
			for a := range 3 {
				if got := cmplx.Abs(rate(m.Basis, x, a)); math.Abs(got-line.Rate[a]) > 1e-9*line.Rate[a]+1e-18 {
					t.Errorf("%s of %s on axis %d: rate %g, want %g", x.Source, x.Rotor, a, got, line.Rate[a])
				}
			}
		}
	}
	if byRotor != 2*len(r.Peaks) || lines != 6 || asked != 3 {
		t.Errorf("%d motions of one rotor for %d peaks, %d of lines, %d where asked", byRotor, len(r.Peaks), lines, asked)
	}
	for _, peak := range r.Peaks {
		sum := 0.0
		for _, x := range peak.RotorShares {
			sum += x
		}
		if math.Abs(sum-1) > 1e-9 {
			t.Errorf("rotors make %g of the peak at %g Hz", sum, peak.Frequency)
		}
		for i, number := range peak.Modes {
			if peak.ModeShares[number-1] != peak.Shares[i] {
				t.Errorf("mode %d makes %g and %g of the peak at %g Hz", number, peak.ModeShares[number-1], peak.Shares[i], peak.Frequency)
			}
		}
	}
}

// flat is a mesh of two triangles over the four nodes of the made-up basis.
func flat() *mesh.Mesh {
	return &mesh.Mesh{
		Nodes:     []airframe.Vec{{0, 0, 0}, {0.1, 0, 0}, {0.1, 0.1, 0}, {0, 0.1, 0}},
		Parts:     []mesh.Part{{Name: "top", Element: "e", Thickness: 1e-3}, {Name: "post", Standoff: true}},
		Triangles: [][6]int32{{0, 1, 2, 0, 1, 2}}, TrianglePart: []int32{0},
		Beams: [][2]int32{{2, 3}}, BeamPart: []int32{1},
	}
}

func withMesh(t testing.TB, c *stage.Call, m *mesh.Mesh) *stage.Call {
	t.Helper()
	folder := t.TempDir()
	if _, err := artifact.Write(folder, kinds.EncodeMesh(m)); err != nil {
		t.Fatal(err)
	}
	c.Inputs["mesh"] = []stage.Input{{Folder: folder, Kind: "mesh"}}
	return c
}

func place(name, part string, x, y, z float64) map[string]any {
	at := []any{}
	for _, v := range []float64{x, y, z} {
		at = append(at, stage.Quantity{SI: v, Dimension: "length"})
	}
	out := map[string]any{"name": name, "at": at}
	if part != "" {
		out["part"] = part
	}
	return out
}

// Points move as the transfer functions of the basis say: the gyro as the
// spectrum does; a rotor by hand, where forces along z move it through mode 1 alone; a node as its shape.
func TestNamedPoints(t *testing.T) {
	m, p := frame()
	c := withMesh(t, call(t, m, p, stage.Arguments{"points": []any{place("nose", "top", 0.099, 0.002, 0.001), place("end", "post", 0.1, 0.1, 0)}}), flat())
	if _, err := (Stage{}).Run(context.Background(), c); err != nil {
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
	if len(r.Points) != 5 || r.Points[3] != (kinds.ResponsePoint{Name: "nose", Kind: "node", Part: "top", At: airframe.Vec{0.1, 0, 0}}) || r.Points[4].At != (airframe.Vec{0.1, 0.1, 0}) {
		t.Fatalf("points %+v", r.Points)
	}
	if len(r.PointSpectra) != 5*6+6 {
		t.Errorf("%d spectra", len(r.PointSpectra))
	}
	find := func(point, quantity, axis string) kinds.ResponsePointSpectrum {
		for _, x := range r.PointSpectra {
			if x.Point == point && x.Quantity == quantity && x.Axis == axis {
				return x
			}
		}
		t.Fatalf("no %s of %s along %s", quantity, point, axis)
		return kinds.ResponsePointSpectrum{}
	}
	sys, err := forced.New(m.Basis, forced.Options{})
	if err != nil {
		t.Fatal(err)
	}
	k := len(r.Frequency) / 3
	omega := 2 * math.Pi * r.Frequency[k]
	for axis, name := range kinds.AxisNames {
		if got, want := find("gyro", kinds.Rate, name).Density[k], r.Density[axis][k]; math.Abs(got-want) > 1e-9*want {
			t.Errorf("%s rate %g, want %g", name, got, want)
		}
		if got, want := find("gyro", kinds.Rotation, name).Density[k], r.Density[axis][k]/omega/omega; math.Abs(got-want) > 1e-9*want {
			t.Errorf("%s rotation %g, want %g", name, got, want)
		}
		if x := find("gyro", kinds.Rate, name); math.Abs(x.RMS-r.Axes[axis].RMS) > 1e-9*x.RMS {
			t.Errorf("%s rms %g, want %g", name, x.RMS, r.Axes[axis].RMS)
		}
	}
	for c, axis := range []string{"x", "y", "z"} {
		for point, motion := range map[string]func(v int) float64{
			"b":    func(v int) float64 { return m.Basis.Sites[1].Motion[v][c] },
			"nose": func(v int) float64 { return m.Basis.Shapes[v][3+c] },
		} {
			want := 0.0
			for j, in := range sys.Inputs() {
				q, err := sys.Drive(r.Frequency[k], j)
				if err != nil {
					t.Fatal(err)
				}
				var u complex128
				for v := range q {
					u += q[v] * complex(motion(v), 0)
				}
				s := r.Force
				if in.Moment() {
					s = r.Moment
				}
				want += s * math.Pow(cmplx.Abs(u), 2)
			}
			if got := find(point, kinds.Displacement, axis).Density[k]; math.Abs(got-want) > 1e-9*want {
				t.Errorf("%s along %s: displacement %g, want %g", point, axis, got, want)
			}
			if got := find(point, kinds.Acceleration, axis).Density[k]; math.Abs(got-want*math.Pow(omega, 4)) > 1e-9*got {
				t.Errorf("%s along %s: acceleration %g, want %g", point, axis, got, want*math.Pow(omega, 4))
			}
		}
	}
	// The line of the unbalance at a: both rotors as power, a quarter turn between the components.
	for _, x := range r.PointLines {
		if x.Point != "a" || x.Source != "unbalance" {
			continue
		}
		sum := 0.0
		for rot := range 2 {
			var u complex128
			for c, f := range []complex128{1, complex(0, -float64(1-2*rot))} { // e₁ and e₂ are x and y up to a common turn
				q, err := sys.Drive(x.Frequency, 6*rot+c)
				if err != nil {
					t.Fatal(err)
				}
				for v := range q {
					u += f * q[v] * complex(m.Basis.Sites[0].Motion[v][0], 0)
				}
			}
			sum += math.Pow(cmplx.Abs(u)*r.Lines[rot].Force, 2)
		}
		if math.Abs(x.Displacement[0]-math.Sqrt(sum)) > 1e-9*x.Displacement[0] || math.Abs(x.Acceleration[0]-x.Displacement[0]*1700*1700) > 1e-9*x.Acceleration[0] {
			t.Errorf("line %+v, want %g m", x, math.Sqrt(sum))
		}
	}
	if len(r.PointLines) != 5*2 {
		t.Errorf("%d lines of points", len(r.PointLines))
	}
}

func TestBadPoints(t *testing.T) {
	m, p := frame()
	for name, x := range map[string]struct {
		points   []any
		mesh     *mesh.Mesh
		argument string
	}{
		"no mesh":       {[]any{place("nose", "", 0, 0, 0)}, nil, "points"},
		"no such part":  {[]any{place("nose", "bottom", 0, 0, 0)}, flat(), "points"},
		"in the air":    {[]any{place("nose", "", 0, 0, 0.05)}, flat(), "points"},
		"taken":         {[]any{place("gyro", "", 0, 0, 0)}, flat(), "points"},
		"twice":         {[]any{place("nose", "", 0, 0, 0), place("nose", "", 0, 0, 0)}, flat(), "points"},
		"flat place":    {[]any{map[string]any{"name": "nose", "at": []any{}}}, flat(), "points"},
		"another mesh":  {[]any{place("nose", "", 0, 0, 0)}, &mesh.Mesh{Nodes: flat().Nodes[:3], Parts: flat().Parts, Triangles: flat().Triangles, TrianglePart: []int32{0}}, "mesh"},
		"without place": {[]any{place("", "", 0, 0, 0)}, flat(), "points"},
	} {
		c := call(t, m, p, stage.Arguments{"points": x.points})
		if x.mesh != nil {
			withMesh(t, c, x.mesh)
		}
		_, err := Stage{}.Run(context.Background(), c)
		if f := fault.From(err); err == nil || f.Kind != fault.Input || f.Argument != x.argument || f.Remedy == "" {
			t.Errorf("%s: %#v", name, err)
		}
	}
}

// The map over rotor speed holds the power of the spectrum: at the speed of the
// response all of it, and with hardly any damping that of a fine sweep at another speed.
func TestMapKeepsThePower(t *testing.T) {
	m, p := tilting()
	power := func(r *kinds.Response, k, axis int) float64 {
		sum := 0.0
		for _, y := range r.Map.Rows[k].Density[axis] {
			sum += y * r.Map.Width
		}
		return sum
	}
	narrow := stage.Arguments{"to": hertz(480)}
	r, _ := run(t, m, p, narrow)
	k := mapSpeeds/2 - 1
	if len(r.Map.Rows) != mapSpeeds || r.Map.Rows[k].Speed != 1700 || len(r.Map.Frequency) != mostBands || r.Map.Frequency[0] != r.From+r.Map.Width/2 {
		t.Fatalf("%d rows, row %d at %g, %d bands", len(r.Map.Rows), k, r.Map.Rows[k].Speed, len(r.Map.Frequency))
	}
	for axis, x := range r.Axes {
		if got, want := power(r, k, axis), x.RMS*x.RMS; math.Abs(got-want) > 1e-9*want {
			t.Errorf("%s: the map has a mean square of %g, the spectrum %g", x.Axis, got, want)
		}
	}
	for g := range m.Basis.Groups {
		m.Basis.Groups[g].LossFactor = 1e-4
	}
	r, _ = run(t, m, p, narrow)
	other, _ := run(t, m, p, stage.Arguments{"to": hertz(480), "rotor_speed": fmt.Sprintf("%.9f rpm", 2550/rpm)})
	found := false
	for k := range r.Map.Rows {
		if math.Abs(r.Map.Rows[k].Speed-2550) > 1e-9 {
			continue
		}
		found = true
		// The peak is where that speed puts it, with its power.
		for axis, x := range other.Axes[:2] {
			if got, want := power(r, k, axis), x.RMS*x.RMS; math.Abs(got/want-1) > 0.02 {
				t.Errorf("%s at %g rad/s: the map has a mean square of %g, a sweep %g", x.Axis, r.Map.Rows[k].Speed, got, want)
			}
		}
	}
	if !found {
		t.Error("no row of the map is of that speed")
	}
}

// Over a flight the broadband part is that of the speeds flown, weighted.
func TestFlightIsWeighted(t *testing.T) {
	m, p := tilting()
	quiet := func(change stage.Arguments) stage.Arguments {
		change["unbalance"], change["blade_share"] = stage.Quantity{Dimension: "unbalance"}, 0.0
		change["speed_spread"] = 1e-3
		return change
	}
	at := func(speed float64) stage.Quantity { return stage.Quantity{SI: speed, Dimension: "rotational speed"} }
	noise := stage.Quantity{SI: 3e-9, Dimension: "angular rate density"}
	r, _ := run(t, m, p, quiet(stage.Arguments{"gyro_noise": noise, "speeds_flown": []any{
		map[string]any{"speed": at(1000), "share": 1.0}, map[string]any{"speed": at(3000), "share": 3.0}}}))
	low, _ := run(t, m, p, quiet(stage.Arguments{"rotor_speed": "9549.296585513721 rpm"}))
	high, _ := run(t, m, p, quiet(stage.Arguments{"rotor_speed": "28647.88975654116 rpm"}))
	interpolate := func(r *kinds.Response, f float64) float64 {
		for k := 1; k < len(r.Frequency); k++ {
			if r.Frequency[k] >= f {
				w := (f - r.Frequency[k-1]) / (r.Frequency[k] - r.Frequency[k-1])
				return (1-w)*r.Density[0][k-1] + w*r.Density[0][k]
			}
		}
		return math.NaN()
	}
	differ := false
	for k, f := range r.Frequency {
		a, b := interpolate(low, f), interpolate(high, f)
		differ = differ || b > 2*a
		want := a/4 + b*3/4 + 3e-9
		if math.Abs(r.Flown[0][k]/want-1) > 0.01 {
			t.Fatalf("at %g Hz the flight has %g, want %g", f, r.Flown[0][k], want)
		}
	}
	if !differ {
		t.Error("the speeds make no difference, which tests nothing")
	}
	sum := 0.0
	for _, x := range r.Flight {
		sum += x.Share
	}
	if math.Abs(sum-1) > 1e-12 {
		t.Errorf("the parts of the flight add up to %g", sum)
	}
}

func recorded(t testing.TB, c *stage.Call, s *kinds.Spectra) *stage.Call {
	t.Helper()
	folder := t.TempDir()
	if _, err := artifact.Write(folder, kinds.EncodeSpectra(s)); err != nil {
		t.Fatal(err)
	}
	c.Inputs["recording"] = []stage.Input{{Folder: folder, Kind: "spectra"}}
	return c
}

// With a recording each rotor's line is spread about its own recorded speed.
func TestFlightAsRecorded(t *testing.T) {
	m, p := frame()
	s := &kinds.Spectra{Axes: []kinds.SpectraAxis{{Density: []float64{1}}}, Rotors: []kinds.SpectraRotor{
		{Rotor: "b", Column: "r2", Blades: 3, Median: 1300, Low: 1290, High: 1310},
		{Rotor: "a", Column: "r1", Blades: 3, Median: 2000, Low: 1980, High: 2020},
	}}
	c := recorded(t, call(t, m, p, stage.Arguments{"rotor_speed": "none", "force_density": stage.Quantity{SI: 1e-16, Dimension: "force density"}, "moment_density": stage.Quantity{Dimension: "moment density"}}), s)
	r, out := decoded(t, c)
	peak := func(from, to float64) float64 {
		best, at := 0.0, 0.0
		for k, f := range r.Frequency {
			if f > from && f < to && r.Flown[2][k] > best {
				best, at = r.Flown[2][k], f
			}
		}
		return at
	}
	if f := peak(150, 260); math.Abs(f-1300/2/math.Pi) > 1 {
		t.Errorf("rotor b is heard at %g Hz, want %g", f, 1300/2/math.Pi)
	}
	if f := peak(260, 400); math.Abs(f-2000/2/math.Pi) > 1 {
		t.Errorf("rotor a is heard at %g Hz, want %g", f, 2000/2/math.Pi)
	}
	// Without unbalance at b, b is not heard.
	p.Rotors[1].Grade = 0
	alone, _ := decoded(t, recorded(t, call(t, m, p, stage.Arguments{"rotor_speed": "none", "force_density": stage.Quantity{SI: 1e-16, Dimension: "force density"}, "moment_density": stage.Quantity{Dimension: "moment density"}}), s))
	loudest := func(from, to float64) float64 {
		best := 0.0
		for k, f := range alone.Frequency {
			if f > from && f < to {
				best = max(best, alone.Flown[2][k]-alone.GyroNoise)
			}
		}
		return best
	}
	if b, a := loudest(150, 260), loudest(260, 400); !(b < 1e-6*a) {
		t.Errorf("rotor b is heard with %g, a with %g", b, a)
	}
	said := false
	for _, n := range out.Notes {
		said = said || n == "rotor speeds over a flight are those of the recording"
	}
	if !said {
		t.Errorf("notes %q", out.Notes)
	}
	for name, bad := range map[string][]kinds.SpectraRotor{"no speeds": nil, "another rotor": s.Rotors[:1], "stood still": {s.Rotors[0], {Rotor: "a", Median: math.NaN(), Low: math.NaN(), High: math.NaN()}}} {
		_, err := Stage{}.Run(context.Background(), recorded(t, call(t, m, p, nil), &kinds.Spectra{Rotors: bad}))
		if f := fault.From(err); err == nil || f.Argument != "recording" || f.Remedy == "" {
			t.Errorf("%s: %#v", name, err)
		}
	}
}

// However many threads, the same bytes.
func TestThreadsChangeNoByte(t *testing.T) {
	m, p := tilting()
	hash := func(threads int) string {
		c := withMesh(t, call(t, m, p, stage.Arguments{"points": []any{place("nose", "top", 0.1, 0, 0)}}), flat())
		c.Threads = threads
		if _, err := (Stage{}).Run(context.Background(), c); err != nil {
			t.Fatal(err)
		}
		a, err := artifact.Open(c.Outputs["response"], kinds.Registry())
		if err != nil {
			t.Fatal(err)
		}
		return a.Hash()
	}
	if one, four := hash(1), hash(4); one != four {
		t.Errorf("%s with one thread, %s with four", one, four)
	}
}
