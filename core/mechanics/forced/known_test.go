package forced

import (
	"fmt"
	"math"
	"math/cmplx"
	"sort"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/modal"
)

// chain is a set of points on one line in modal coordinates: shape[p][v] is
// the motion of point p in vector v. Each point takes a force along x as rotor
// p; the first three are read as roll, pitch and yaw of the gyro.
type chain struct {
	kinds     []modal.VectorKind
	frequency []float64
	groups    []modal.LossGroup
	rate      []float64
	shape     [][]float64
}

func (c chain) system(t testing.TB, opt Options) *System {
	t.Helper()
	b := &modal.Basis{Kinds: c.kinds, Frequency: c.frequency, Groups: c.groups}
	gyro := modal.Site{Name: "gyro", Kind: "gyro", Motion: make([][6]float64, len(c.frequency))}
	for p, row := range c.shape {
		site := modal.Site{Name: fmt.Sprint("point ", p), Kind: "rotor", Motion: make([][6]float64, len(c.frequency))}
		for v, x := range row {
			site.Motion[v][0] = x
			if p < 3 {
				gyro.Motion[v][3+p] = x
			}
		}
		b.Sites = append(b.Sites, site)
	}
	b.Sites = append(b.Sites, gyro)
	opt.Rate = c.rate
	s, err := New(b, opt)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// receptance is motion at point to per force at point from.
func receptance(t testing.TB, s *System, frequency float64, to, from int) complex128 {
	t.Helper()
	tr, err := s.Transfer(t.Context(), []float64{frequency}, 1)
	if err != nil {
		t.Fatal(err)
	}
	return tr.Rate[to][6*from][0] / complex(0, 2*math.Pi*frequency)
}

func proportional(frequency []float64, eta float64) []modal.LossGroup {
	n := len(frequency)
	k := make([]float64, n*n)
	for i, f := range frequency {
		k[i*n+i] = sq(2 * math.Pi * f)
	}
	return []modal.LossGroup{{Name: "all", Kind: "part", LossFactor: eta, Stiffness: k}}
}

func allElastic(n int) []modal.VectorKind {
	kinds := make([]modal.VectorKind, n)
	for i := range kinds {
		kinds[i] = modal.Elastic
	}
	return kinds
}

func oscillator(m, k, zeta, eta float64) (chain, float64) {
	omega := math.Sqrt(k / m)
	c := chain{kinds: allElastic(1), frequency: []float64{omega / (2 * math.Pi)}, shape: [][]float64{{1 / math.Sqrt(m)}}}
	c.groups = proportional(c.frequency, eta)
	c.rate = []float64{2 * zeta * omega}
	if zeta == 0 {
		c.rate = nil
	}
	return c, c.frequency[0]
}

func TestOneDegreeOfFreedom(t *testing.T) {
	for _, row := range known.Rows(t, "D_harmonic.json", "D-SDOF-VISC", "D-SDOF-HYST") {
		var setup struct {
			M    float64 `json:"m_kg"`
			K    float64 `json:"k_N_per_m"`
			Zeta float64
			Eta  float64 `json:"loss_factor"`
		}
		row.Decode(t, &setup)
		c, fn := oscillator(setup.M, setup.K, setup.Zeta, setup.Eta)
		s := c.system(t, Options{})
		var got []float64
		for i := 0; i+1 < len(row.Labels); i += 2 {
			var r float64
			fmt.Sscanf(row.Labels[i], "r=%g", &r)
			h := receptance(t, s, r*fn, 0, 0)
			got = append(got, real(h), imag(h))
		}
		row.Check(t, 1, got...)
	}
}

// A moving base pulls by (k + iωc)·Y on the mass.
func TestMovingBase(t *testing.T) {
	for _, row := range known.Rows(t, "D_harmonic.json", "D-SDOF-BASE") {
		var setup struct{ Zeta float64 }
		row.Decode(t, &setup)
		c, fn := oscillator(1, sq(2*math.Pi*10), setup.Zeta, 0)
		s := c.system(t, Options{})
		var got []float64
		for i := 0; i+1 < len(row.Labels); i += 2 {
			var r float64
			fmt.Sscanf(row.Labels[i], "r=%g", &r)
			omega := 2 * math.Pi * r * fn
			pull := complex(sq(2*math.Pi*fn), omega*c.rate[0])
			h := receptance(t, s, r*fn, 0, 0) * pull
			got = append(got, real(h), imag(h))
		}
		row.Check(t, 1, got...)
	}
}

// maximum of a function with one top between lo and hi, by golden sections.
func maximum(lo, hi float64, y func(float64) float64) float64 {
	const g = 0.3819660112501051
	for hi-lo > 1e-10*hi {
		a, b := lo+g*(hi-lo), hi-g*(hi-lo)
		if y(a) > y(b) {
			hi = b
		} else {
			lo = a
		}
	}
	return (lo + hi) / 2
}

// crossing of a level between lo and hi, by halving.
func crossing(lo, hi float64, y func(float64) float64) float64 {
	up := y(lo) < 0
	for range 100 {
		mid := (lo + hi) / 2
		if (y(mid) < 0) == up {
			lo = mid
		} else {
			hi = mid
		}
	}
	return (lo + hi) / 2
}

func TestResonancePeakAndHalfPower(t *testing.T) {
	for _, row := range known.Rows(t, "D_harmonic.json", "D-SDOF-PEAK") {
		var setup struct{ Zeta float64 }
		row.Decode(t, &setup)
		c, fn := oscillator(1, sq(2*math.Pi*10), setup.Zeta, 0)
		s := c.system(t, Options{})
		gain := func(r float64) float64 {
			return cmplx.Abs(receptance(t, s, r*fn, 0, 0)) * sq(2*math.Pi*fn)
		}
		top := maximum(0.5, 1.2, gain)
		half := func(r float64) float64 { return gain(r) - gain(top)/math.Sqrt2 }
		lo, hi := crossing(0.1, top, half), crossing(top, 3, half)
		row.Check(t, 1, top, gain(top), lo, hi, (hi-lo)/2)
	}
}

// Row D-MILES-150: an oscillator on a base of white acceleration. The integral over all frequencies is
// taken over u with f = f_n tan u, which has no ends.
func TestWhiteBase(t *testing.T) {
	row := known.One(t, "D_harmonic.json", "D-MILES-150")
	var setup struct {
		Frequency float64 `json:"fn_Hz"`
		Zeta      float64
		Density   float64 `json:"base_acceleration_PSD_one_sided_g2_per_Hz"`
	}
	row.Decode(t, &setup)
	c, fn := oscillator(1, sq(2*math.Pi*setup.Frequency), setup.Zeta, 0)
	s := c.system(t, Options{})
	const steps = 4000
	sum := 0.0
	for k := range steps {
		u := (float64(k) + 0.5) / steps * math.Pi / 2
		f := fn * math.Tan(u)
		pull := complex(sq(2*math.Pi*fn), 2*math.Pi*f*c.rate[0])
		sum += sq(cmplx.Abs(receptance(t, s, f, 0, 0)*pull)) * fn / sq(math.Cos(u)) * math.Pi / 2 / steps
	}
	exact := math.Sqrt(setup.Density * sum)
	row.Check(t, 1, exact/math.Sqrt(1+4*sq(setup.Zeta)), exact)
}

// pair is the two-mass chain of the D-TWODOF rows, its modes in closed form.
func pair(m1, m2, k1, k2 float64) chain {
	a, b, d := (k1+k2)/m1, -k2/math.Sqrt(m1*m2), k2/m2
	c := chain{kinds: allElastic(2), shape: [][]float64{make([]float64, 2), make([]float64, 2)}}
	for v, sign := range []float64{-1, 1} {
		lambda := (a+d)/2 + sign*math.Hypot((a-d)/2, b)
		x, y := b, lambda-a
		norm := math.Hypot(x, y)
		c.frequency = append(c.frequency, math.Sqrt(lambda)/(2*math.Pi))
		c.shape[0][v] = x / norm / math.Sqrt(m1)
		c.shape[1][v] = y / norm / math.Sqrt(m2)
	}
	return c
}

// between gives a symmetric modal matrix of an element that joins two points
// (or one and ground, to = -1) with a coefficient.
func (c chain) between(from, to int, coefficient float64) []float64 {
	n := len(c.frequency)
	stretch := make([]float64, n)
	for v := range stretch {
		stretch[v] = c.shape[from][v]
		if to >= 0 {
			stretch[v] -= c.shape[to][v]
		}
	}
	m := make([]float64, n*n)
	for i := range n {
		for j := range n {
			m[i*n+j] = coefficient * stretch[i] * stretch[j]
		}
	}
	return m
}

type pairSetup struct {
	M1          float64 `json:"m1_kg"`
	M2          float64 `json:"m2_kg"`
	K1          float64 `json:"k1_ground_to_1"`
	K2          float64 `json:"k2_between"`
	Alpha, Beta float64
	Eta         float64   `json:"loss_factor"`
	C           float64   `json:"c_between_Ns_per_m"`
	Frequencies []float64 `json:"frequencies_Hz"`
}

func TestTwoDegreesOfFreedom(t *testing.T) {
	for _, id := range []string{"D-TWODOF-A-PROP", "D-TWODOF-A-HYST", "D-TWODOF-A-NONPROP"} {
		row := known.One(t, "D_harmonic.json", id)
		var setup pairSetup
		row.Decode(t, &setup)
		c := pair(setup.M1, setup.M2, setup.K1, setup.K2)
		// The two springs as loss groups, so that their sum is tested too.
		c.groups = []modal.LossGroup{
			{Name: "ground", LossFactor: setup.Eta, Stiffness: c.between(0, -1, setup.K1)},
			{Name: "between", LossFactor: setup.Eta, Stiffness: c.between(1, 0, setup.K2)},
		}
		switch {
		case setup.Alpha != 0:
			c.rate = make([]float64, 4)
			for v, f := range c.frequency {
				c.rate[v*2+v] = setup.Alpha + setup.Beta*sq(2*math.Pi*f)
			}
		case setup.C != 0:
			c.rate = c.between(1, 0, setup.C)
		}
		s := c.system(t, Options{})
		var got []float64
		for _, f := range setup.Frequencies {
			for _, h := range []complex128{receptance(t, s, f, 0, 0), receptance(t, s, f, 0, 1), receptance(t, s, f, 1, 1)} {
				got = append(got, real(h), imag(h))
			}
		}
		if len(got) != len(row.Values) {
			t.Fatalf("%s: %d values, want %d", id, len(got), len(row.Values))
		}
		row.Check(t, 1, got...)
	}
}

// The absorber on an undamped main mass: m1 = k1 = 1 kg, N/m, so r is ω.
func TestTunedAbsorber(t *testing.T) {
	for _, row := range known.Rows(t, "D_harmonic.json", "D-ABSORBER") {
		var setup struct {
			Mu float64 `json:"mass_ratio"`
		}
		row.Decode(t, &setup)
		peak := func(tuning, zeta float64) float64 {
			m2 := setup.Mu
			own := tuning // absorber alone, rad/s
			c := pair(1, m2, 1, m2*own*own)
			c.rate = c.between(1, 0, 2*zeta*m2*own)
			s := c.system(t, Options{})
			gain := func(r float64) float64 { return cmplx.Abs(receptance(t, s, r/(2*math.Pi), 0, 0)) }
			top := 0.0 // the higher of the two peaks
			for r := 0.5; r < 1.5; r += 0.01 {
				if g := gain(r); g > gain(r-0.01) && g > gain(r+0.01) {
					top = max(top, gain(maximum(r-0.01, r+0.01, gain)))
				}
			}
			return top
		}
		check := func(label string, got float64) {
			for i, l := range row.Labels {
				if l == label && !(math.Abs(got-row.Values[i]) <= row.TolAbs[i]+row.TolRel[i]*row.Values[i]) {
					t.Errorf("%s, %s: got %.10g, want %.10g", row.ID, label, got, row.Values[i])
				}
			}
		}
		check("peak with Den Hartog values", peak(row.Value(t, "f_opt"), row.Value(t, "zeta_opt")))
		check("numerical peak", peak(row.Value(t, "numerical f_opt"), row.Value(t, "numerical zeta_opt")))
	}
}

// beam is a free-free Bernoulli beam: two rigid vectors and exact modes.
type beam struct {
	length, mass, stiffness float64 // m, kg, E·I in N·m²
}

// eigenvalue i (from 1) is β·L, a root of cosh z · cos z = 1.
func (b beam) eigenvalue(i int) float64 {
	z := (float64(i) + 0.5) * math.Pi
	for range 50 {
		e := 1 / math.Cosh(z)
		z -= (math.Cos(z) - e) / (-math.Sin(z) + e*math.Tanh(z))
	}
	return z
}

func (b beam) frequency(i int) float64 {
	z := b.eigenvalue(i)
	return z * z * math.Sqrt(b.stiffness/(b.mass*b.length*b.length*b.length)) / (2 * math.Pi)
}

// shape gives deflection and slope of mode i at x, M-normalised (R. D. Blevins,
// table of single-span beams), written so that no large exponentials cancel.
func (b beam) shape(i int, x float64) (w, slope float64) {
	z := b.eigenvalue(i)
	d := math.Sinh(z) - math.Sin(z)
	less := (math.Cos(z) - math.Sin(z) - math.Exp(-z)) / d // 1 − σ
	sigma := 1 - less
	k := z / b.length
	grow, fall := less*math.Exp(k*x)/2, (1+sigma)*math.Exp(-k*x)/2
	w = grow + fall + math.Cos(k*x) - sigma*math.Sin(k*x)
	slope = k * (grow - fall - math.Sin(k*x) - sigma*math.Cos(k*x))
	return w / math.Sqrt(b.mass), slope / math.Sqrt(b.mass)
}

// chain lists w at the points, then slope at the points in slopes.
func (b beam) chain(modes int, eta float64, points, slopes []float64) chain {
	c := chain{kinds: []modal.VectorKind{modal.RigidBody, modal.RigidBody}, frequency: []float64{0, 0}}
	for _, x := range points {
		c.shape = append(c.shape, []float64{1 / math.Sqrt(b.mass), (x - b.length/2) * math.Sqrt(12/b.mass) / b.length})
	}
	for range slopes {
		c.shape = append(c.shape, []float64{0, math.Sqrt(12/b.mass) / b.length})
	}
	for i := 1; i <= modes; i++ {
		c.kinds = append(c.kinds, modal.Elastic)
		c.frequency = append(c.frequency, b.frequency(i))
		for p, x := range points {
			w, _ := b.shape(i, x)
			c.shape[p] = append(c.shape[p], w)
		}
		for p, x := range slopes {
			_, slope := b.shape(i, x)
			c.shape[len(points)+p] = append(c.shape[len(points)+p], slope)
		}
	}
	c.groups = proportional(c.frequency, eta)
	return c
}

func freeBeam(t testing.TB, row known.Row) (beam, float64) {
	var s struct {
		L   float64 `json:"L_m"`
		W   float64 `json:"width_m"`
		H   float64 `json:"height_m"`
		E   float64 `json:"E_Pa"`
		Rho float64 `json:"rho_kgm3"`
		Eta float64 `json:"loss_factor"`
	}
	row.Decode(t, &s)
	return beam{s.L, s.Rho * s.L * s.W * s.H, s.E * s.W * s.H * s.H * s.H / 12}, s.Eta
}

func TestFreeBeamIsDrivenRightIncludingItsRigidMotion(t *testing.T) {
	row := known.One(t, "D_harmonic.json", "D-FFBEAM-FRF")
	b, eta := freeBeam(t, row)
	s := b.chain(60, eta, []float64{0, 0.3 * b.length, b.length}, nil).system(t, Options{})
	at := map[string]int{"w(0)": 0, "w(0.3L)": 1, "w(L)": 2}
	checkBeam(t, row, s, at)

	row = known.One(t, "D_harmonic.json", "D-FFBEAM-ROT")
	s = b.chain(60, eta, []float64{0}, []float64{0, b.length / 2}).system(t, Options{})
	checkBeam(t, row, s, map[string]int{"w'(0)": 1, "w'(L/2)": 2})
}

func checkBeam(t *testing.T, row known.Row, s *System, at map[string]int) {
	t.Helper()
	var got []float64
	for _, label := range row.Labels {
		var where, part string
		var f float64
		if _, err := fmt.Sscanf(label, "%s %g Hz %s", &where, &f, &part); err != nil {
			t.Fatal(label, err)
		}
		h := receptance(t, s, f, at[where], 0)
		if part == "re" {
			got = append(got, real(h))
		} else {
			got = append(got, imag(h))
		}
	}
	row.Check(t, 1, got...)
}

func TestStaticResidualOfAFreeBody(t *testing.T) {
	row := known.One(t, "D_harmonic.json", "D-FFBEAM-RESIDUAL")
	b, _ := freeBeam(t, row)
	const f = 450
	exact := row.Value(t, "exact")
	got := []float64{real(receptance(t, b.chain(400, 0, []float64{0}, nil).system(t, Options{}), f, 0, 0))}
	got = append(got, real(receptance(t, b.chain(0, 0, []float64{0}, nil).system(t, Options{}), f, 0, 0)))
	for _, modes := range []int{1, 2, 4} {
		c := b.chain(modes, 0, []float64{0}, nil)
		got = append(got, real(receptance(t, c.system(t, Options{}), f, 0, 0)))

		// The residual flexibility of the row as a vector without inertia.
		flex := math.Pow(b.length, 3) / (105 * b.stiffness)
		for i := 1; i <= modes; i++ {
			flex -= 4 / (b.mass * sq(2*math.Pi*b.frequency(i)))
		}
		static := c.with(1e9, math.Sqrt(flex)*2*math.Pi*1e9)
		corrected := real(receptance(t, static.system(t, Options{}), f, 0, 0))
		got = append(got, corrected)

		// A residual vector with its own inertia, as the basis holds them: the
		// displacement under the modes left out, made M-orthonormal. It must
		// come closer than the static term.
		var mass, stiffness float64
		for i := modes + 1; i <= 400; i++ {
			w2 := sq(2 * math.Pi * b.frequency(i))
			mass += 4 / b.mass / (w2 * w2)
			stiffness += 4 / b.mass / w2
		}
		full := c.with(math.Sqrt(stiffness/mass)/(2*math.Pi), stiffness/math.Sqrt(mass))
		best := real(receptance(t, full.system(t, Options{}), f, 0, 0))
		if !(math.Abs(best-exact) < math.Abs(corrected-exact)) {
			t.Errorf("%d modes: residual vector gives %.9g, static term %.9g, exact %.9g", modes, best, corrected, exact)
		}
		dropped := real(receptance(t, full.system(t, Options{DropResidual: true}), f, 0, 0))
		if dropped != got[len(got)-2] {
			t.Errorf("%d modes: dropping the residual vector gives %g, not %g", modes, dropped, got[len(got)-2])
		}
	}
	row.Check(t, 1, got...)
}

// with adds a residual vector that moves point 0 by the given amount.
func (c chain) with(frequency, motion float64) chain {
	out := chain{
		kinds:     append(append([]modal.VectorKind{}, c.kinds...), modal.Residual),
		frequency: append(append([]float64{}, c.frequency...), frequency),
		shape:     [][]float64{append(append([]float64{}, c.shape[0]...), motion)},
	}
	return out
}

// A thin simply supported plate has the modes sin·sin; the slope is what a
// gyro integrates: rotation about x is dw/dy, about y −dw/dx.
func TestPlateRotation(t *testing.T) {
	row := known.One(t, "D_harmonic.json", "D-SSPLATE-GYRO-w")
	var p struct {
		A     float64 `json:"a_m"`
		B     float64 `json:"b_m"`
		H     float64 `json:"thickness_m"`
		E     float64 `json:"E_Pa"`
		Nu    float64
		Rho   float64    `json:"rho_kgm3"`
		Eta   float64    `json:"loss_factor"`
		Force [2]float64 `json:"force_at_m"`
		Gyro  [2]float64 `json:"response_at_m"`
	}
	row.Decode(t, &p)
	d := p.E * p.H * p.H * p.H / (12 * (1 - p.Nu*p.Nu))
	norm := 2 / math.Sqrt(p.Rho*p.H*p.A*p.B)
	type mode struct{ f, force, w, dx, dy float64 }
	var modes []mode
	for m := 1; m <= 16; m++ {
		for n := 1; n <= 16; n++ {
			kx, ky := float64(m)*math.Pi/p.A, float64(n)*math.Pi/p.B
			modes = append(modes, mode{
				(kx*kx + ky*ky) * math.Sqrt(d/(p.Rho*p.H)) / (2 * math.Pi),
				norm * math.Sin(kx*p.Force[0]) * math.Sin(ky*p.Force[1]),
				norm * math.Sin(kx*p.Gyro[0]) * math.Sin(ky*p.Gyro[1]),
				norm * kx * math.Cos(kx*p.Gyro[0]) * math.Sin(ky*p.Gyro[1]),
				norm * ky * math.Sin(kx*p.Gyro[0]) * math.Cos(ky*p.Gyro[1]),
			})
		}
	}
	sort.Slice(modes, func(i, j int) bool { return modes[i].f < modes[j].f })
	b := &modal.Basis{Kinds: allElastic(len(modes))}
	rotor := modal.Site{Name: "force", Kind: "rotor"}
	gyro := modal.Site{Name: "gyro", Kind: "gyro"}
	for _, m := range modes {
		b.Frequency = append(b.Frequency, m.f)
		rotor.Motion = append(rotor.Motion, [6]float64{0, 0, m.force})
		// The deflection is read in the place of yaw.
		gyro.Motion = append(gyro.Motion, [6]float64{0, 0, 0, m.dy, -m.dx, m.w})
	}
	b.Sites = []modal.Site{rotor, gyro}
	b.Groups = proportional(b.Frequency, p.Eta)
	s, err := New(b, Options{})
	if err != nil {
		t.Fatal(err)
	}
	frequencies := []float64{100, 400, 580, 1000}
	tr, err := s.Transfer(t.Context(), frequencies, 2)
	if err != nil {
		t.Fatal(err)
	}
	for id, part := range map[string]struct {
		axis int
		sign complex128
	}{"D-SSPLATE-GYRO-w": {2, 1}, "D-SSPLATE-GYRO-dwdx": {1, -1}, "D-SSPLATE-GYRO-dwdy": {0, 1}} {
		var got []float64
		for k, f := range frequencies {
			h := part.sign * tr.Rate[part.axis][2][k] / complex(0, 2*math.Pi*f)
			got = append(got, real(h), imag(h))
		}
		known.One(t, "D_harmonic.json", id).Check(t, 1, got...)
	}
}
