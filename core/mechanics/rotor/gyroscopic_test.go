package rotor

import (
	"math"
	"math/cmplx"
	"sort"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
)

// clamped is a beam along x, held at x = 0, with a body at its tip.
type clamped struct {
	section  beam.Section
	length   float64
	elements int
	mass     float64
	above    float64    // height of the centre of gravity over the tip
	inertia  [3]float64 // about the centre of gravity
	bending  bool       // without stretching and torsion
}

// basis gives all modes, or the lowest ones, as a modal basis with the tip as
// rotor "tip" and as gyro.
func (c clamped) basis(t testing.TB, modes int) *modal.Basis {
	t.Helper()
	k, m, keep, tip := c.matrices()
	b, _ := reduced(t, k[0], m, keep, tip, modes)
	return b
}

// matrices gives the stiffness, whole and of either half of the beam, the mass,
// the unknowns that are free and the first of those at the tip.
func (c clamped) matrices() (stiffness [3]*mat.SymDense, m *mat.SymDense, keep []int, tip int) {
	n := 6 * (c.elements + 1)
	for g := range stiffness {
		stiffness[g] = mat.NewSymDense(n, nil)
	}
	m = mat.NewSymDense(n, nil)
	stiff, mass := make([]float64, element.Packed(beam.Unknowns)), make([]float64, element.Packed(beam.Unknowns))
	beam.Matrices(c.section, c.length/float64(c.elements), stiff, mass)
	for e := range c.elements {
		for i := range beam.Unknowns {
			for j := range i + 1 {
				p, q := 6*e+i, 6*e+j
				for _, k := range []*mat.SymDense{stiffness[0], stiffness[1+2*e/c.elements]} {
					k.SetSym(p, q, k.At(p, q)+stiff[element.Packed(i)+j])
				}
				m.SetSym(p, q, m.At(p, q)+mass[element.Packed(i)+j])
			}
		}
	}
	// The centre of gravity moves by u + θ × (0, 0, h).
	tip = 6 * c.elements
	h := c.above
	move := [3][6]float64{{1, 0, 0, 0, h, 0}, {0, 1, 0, -h, 0, 0}, {0, 0, 1, 0, 0, 0}}
	for i := range 6 {
		for j := range i + 1 {
			x := 0.0
			for d := range 3 {
				x += c.mass * move[d][i] * move[d][j]
			}
			if i == j && i >= 3 {
				x += c.inertia[i-3]
			}
			m.SetSym(tip+i, tip+j, m.At(tip+i, tip+j)+x)
		}
	}
	for i := 6; i < n; i++ {
		if !(c.bending && i%3 == 0) {
			keep = append(keep, i)
		}
	}
	return stiffness, m, keep, tip
}

func reduced(t testing.TB, k, m *mat.SymDense, keep []int, tip, modes int) (*modal.Basis, *mat.Dense) {
	t.Helper()
	n := len(keep)
	mk, kk := mat.NewSymDense(n, nil), mat.NewDense(n, n, nil)
	for i, p := range keep {
		for j, q := range keep {
			mk.SetSym(i, j, m.At(p, q))
			kk.Set(i, j, k.At(p, q))
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(mk) {
		t.Fatal("mass not definite")
	}
	var l mat.TriDense
	chol.LTo(&l)
	var half, full mat.Dense
	if err := half.Solve(&l, kk); err != nil {
		t.Fatal(err)
	}
	if err := full.Solve(&l, half.T()); err != nil {
		t.Fatal(err)
	}
	sym := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			sym.SetSym(i, j, (full.At(i, j)+full.At(j, i))/2)
		}
	}
	var eig mat.EigenSym
	if !eig.Factorize(sym, true) {
		t.Fatal("no eigenvalues")
	}
	var y, phi mat.Dense
	eig.VectorsTo(&y)
	if err := phi.Solve(l.T(), &y); err != nil {
		t.Fatal(err)
	}
	if modes == 0 || modes > n {
		modes = n
	}
	b := &modal.Basis{}
	rotor, gyro := modal.Site{Name: "tip", Kind: "rotor"}, modal.Site{Name: "gyro", Kind: "gyro"}
	for v, w2 := range eig.Values(nil)[:modes] {
		b.Kinds = append(b.Kinds, modal.Elastic)
		b.Frequency = append(b.Frequency, math.Sqrt(w2)/(2*math.Pi))
		var motion [6]float64
		for i, p := range keep {
			if p >= tip {
				motion[p-tip] = phi.At(i, v)
			}
		}
		rotor.Motion, gyro.Motion = append(rotor.Motion, motion), append(gyro.Motion, motion)
	}
	b.Sites = []modal.Site{rotor, gyro}
	return b, &phi
}

// whirl is a frequency with its direction.
type whirl struct{ frequency, direction float64 }

// whirls gives the natural motions at a speed two ways, by the coupling of low rank
// and by the full matrix, which must agree.
func whirls(t testing.TB, b *modal.Basis, r airframe.Rotor, speed float64) []whirl {
	t.Helper()
	rotors := []airframe.Rotor{r}
	couplings, err := Couplings(b, rotors, []float64{speed})
	if err != nil {
		t.Fatal(err)
	}
	s, err := forced.New(b, forced.Options{Gyroscopic: couplings})
	if err != nil {
		t.Fatal(err)
	}
	full, err := Matrix(b, rotors, []float64{speed})
	if err != nil {
		t.Fatal(err)
	}
	other, err := forced.New(b, forced.Options{Rate: full})
	if err != nil {
		t.Fatal(err)
	}
	one, two := poles(t, s), poles(t, other)
	if len(one) != len(two) {
		t.Fatalf("%d natural motions one way, %d the other", len(one), len(two))
	}
	r.HoverSpeed = 1
	fleet, err := NewFleet([]airframe.Rotor{r}, couplings)
	if err != nil {
		t.Fatal(err)
	}
	var out []whirl
	for k, p := range one {
		if math.Abs(p.Frequency-two[k].Frequency) > 1e-9*p.Frequency || math.Abs(p.Damping) > 1e-9 {
			t.Errorf("motion %d: %+v and %+v", k, p, two[k])
		}
		out = append(out, whirl{p.Frequency, fleet.Direction(s.Vectors(), p.Shape)})
	}
	return out
}

func poles(t testing.TB, s *forced.System) []forced.Pole {
	t.Helper()
	core, err := s.Core()
	if err != nil {
		t.Fatal(err)
	}
	p, err := core.Poles(s.Momenta(), 0, math.Inf(1))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// overhung reads the setup of the overhung rows: a disc on a round shaft along x.
func overhung(t testing.TB, row known.Row) (c clamped, r airframe.Rotor, spin float64) {
	var s struct {
		L    float64 `json:"shaft_length_m"`
		D    float64 `json:"shaft_diameter_m"`
		E    float64 `json:"E_Pa"`
		Rho  float64 `json:"rho_kgm3"`
		M    float64 `json:"disc_mass_kg"`
		Jd   float64 `json:"Jd_kgm2"`
		Jp   float64 `json:"Jp_kgm2"`
		Spin float64 `json:"spin_rad_s"`
	}
	row.Decode(t, &s)
	section := beam.Tube(s.D, 0, s.E, 0.3, s.Rho)
	section.GAy, section.GAz, section.Jy, section.Jz = math.Inf(1), math.Inf(1), 0, 0
	c = clamped{section: section, length: s.L, elements: 1, mass: s.M, inertia: [3]float64{s.Jp, s.Jd, s.Jd}, bending: true}
	if s.Rho > 0 {
		c.elements = 20
	}
	return c, airframe.Rotor{Name: "tip", Axis: airframe.Vec{1, 0, 0}, Spin: 1, PolarInertia: s.Jp}, s.Spin
}

// Rows E-OVERHUNG and E-CONT-OVERHUNG: whirl of a disc on a shaft, its labels by direction.
func TestOverhungDiscWhirls(t *testing.T) {
	rows := known.Rows(t, "E_gyroscopic.json", "E-OVERHUNG-0", "E-OVERHUNG-1", "E-OVERHUNG-3", "E-CONT-OVERHUNG")
	if len(rows) != 5 {
		t.Fatalf("%d rows", len(rows))
	}
	for _, row := range rows {
		c, r, speed := overhung(t, row)
		b := c.basis(t, 0)
		for _, spin := range []int{1, -1} {
			r.Spin = spin
			list := whirls(t, b, r, speed)
			var got []float64
			seen := map[string]int{}
			for _, label := range row.Labels {
				way := strings.Fields(label)[0]
				sign := map[string]float64{"backward": -1, "forward": 1}[way]
				if speed == 0 {
					sign = 0 // neither
				}
				count := 0
				for i, w := range list {
					if sign*w.direction > 0.999 || sign == 0 && i%2 == map[string]int{"backward": 0, "forward": 1}[way] {
						if count == seen[way] {
							got = append(got, w.frequency)
							break
						}
						count++
					}
				}
				seen[way]++
			}
			row.Check(t, 1, got...)
		}
	}
}

// Row E-OVERHUNG-CRIT: speeds at which the whirl has the speed of the shaft.
func TestOverhungDiscIsCritical(t *testing.T) {
	row := known.One(t, "E_gyroscopic.json", "E-OVERHUNG-CRIT")
	c, r, _ := overhung(t, row)
	r.HoverSpeed, r.Blades = 1, 1
	b := c.basis(t, 0)
	couplings, err := Couplings(b, []airframe.Rotor{r}, []float64{1})
	if err != nil {
		t.Fatal(err)
	}
	s, err := forced.New(b, forced.Options{Gyroscopic: couplings})
	if err != nil {
		t.Fatal(err)
	}
	fleet, err := NewFleet([]airframe.Rotor{r}, couplings)
	if err != nil {
		t.Fatal(err)
	}
	const rpm = 2 * math.Pi / 60
	speeds := make([]float64, 61)
	for k := range speeds {
		speeds[k] = float64(k) * 2000 * rpm
	}
	d, err := fleet.Campbell(t.Context(), s, []int{0, 1, 2, 3}, speeds, 100, 4000, 2)
	if err != nil {
		t.Fatal(err)
	}
	byLabel := map[string]float64{}
	for _, x := range d.Critical {
		if x.Order != 1 {
			continue
		}
		way := "forward"
		if x.Whirl < 0 {
			way = "backward"
		}
		name := way + " 1"
		if _, have := byLabel[name]; have {
			name = way + " 2"
		}
		byLabel[name] = x.Speed / rpm
		// The line it lies on has that frequency there.
		l := d.Lines[x.Line]
		k := sort.SearchFloat64s(d.Speeds, x.Speed)
		part := (x.Speed - d.Speeds[k-1]) / (d.Speeds[k] - d.Speeds[k-1])
		if f := l.Frequency[k-1] + part*(l.Frequency[k]-l.Frequency[k-1]); math.Abs(f-x.Frequency) > 2e-3*f || l.Whirl[k]*x.Whirl < 0 {
			t.Errorf("critical speed %+v is not on its line, which has %g Hz there and whirls by %g", x, f, l.Whirl[k])
		}
	}
	if len(byLabel) != len(row.Labels) {
		t.Errorf("critical speeds %v, want those of %v", byLabel, row.Labels)
	}
	var got []float64
	for _, label := range row.Labels {
		got = append(got, byLabel[label])
	}
	row.Check(t, 1, got...)
}

// Rows E-TILT: a rigid rotor on tilt springs about x and y that spins about z.
func TestRotorOnTiltSprings(t *testing.T) {
	rows := known.Rows(t, "E_gyroscopic.json", "E-TILT")
	if len(rows) != 5 {
		t.Fatalf("%d rows", len(rows))
	}
	for _, row := range rows {
		var s struct {
			Jd, Jx, Jy, K, Kx, Ky float64
			JdJ                   float64 `json:"Jd_kgm2"`
			JxJ                   float64 `json:"Jx_kgm2"`
			JyJ                   float64 `json:"Jy_kgm2"`
			Jp                    float64 `json:"Jp_kgm2"`
			KJ                    float64 `json:"k_Nm_per_rad"`
			KxJ                   float64 `json:"kx_Nm_per_rad"`
			KyJ                   float64 `json:"ky_Nm_per_rad"`
			Spin                  float64 `json:"spin_rad_s"`
		}
		row.Decode(t, &s)
		jx, jy, kx, ky := s.JxJ, s.JyJ, s.KxJ, s.KyJ
		if s.JdJ > 0 {
			jx, jy, kx, ky = s.JdJ, s.JdJ, s.KJ, s.KJ
		}
		motion := [][6]float64{{0, 0, 0, 1 / math.Sqrt(jx)}, {0, 0, 0, 0, 1 / math.Sqrt(jy)}}
		b := &modal.Basis{Kinds: []modal.VectorKind{modal.Elastic, modal.Elastic},
			Frequency: []float64{math.Sqrt(kx/jx) / (2 * math.Pi), math.Sqrt(ky/jy) / (2 * math.Pi)},
			Sites:     []modal.Site{{Name: "tip", Kind: "rotor", Motion: motion}, {Name: "gyro", Kind: "gyro", Motion: motion}}}
		list := whirls(t, b, airframe.Rotor{Name: "tip", Axis: airframe.Vec{0, 0, 1}, Spin: 1, PolarInertia: s.Jp}, s.Spin)
		got := []float64{list[0].frequency, list[1].frequency}
		if s.Spin > 0 && !(list[0].direction < 0 && list[1].direction > 0) {
			t.Errorf("%s: directions %+v, want backward below forward", row.ID, list)
		}
		if len(row.Labels) == 3 { // and at rest
			got = append(got, b.Frequency[0])
		}
		row.Check(t, 1, got...)
	}
}

// Rows E-ARM-MOTOR-SPIN: bending and torsion of an arm coupled by a motor that spins about z.
func TestArmWithSpinningMotor(t *testing.T) {
	rows := known.Rows(t, "E_gyroscopic.json", "E-ARM-MOTOR-SPIN")
	if len(rows) != 3 {
		t.Fatalf("%d rows", len(rows))
	}
	for _, row := range rows {
		var s struct {
			L       float64 `json:"L_m"`
			W       float64 `json:"width_y_m"`
			H       float64 `json:"height_z_m"`
			E       float64 `json:"E_Pa"`
			Nu      float64
			Rho     float64                         `json:"rho_kgm3"`
			Mass    float64                         `json:"motor_mass_kg"`
			Above   float64                         `json:"motor_cg_above_tip_m"`
			Inertia struct{ Ixx, Iyy, Izz float64 } `json:"total_inertia_cg_kgm2"`
			Jp      float64                         `json:"spinning_polar_inertia_kgm2"`
			Spin    float64                         `json:"spin_rad_s"`
		}
		row.Decode(t, &s)
		c := clamped{section: beam.Rectangle(s.W, s.H, s.E, s.Nu, s.Rho), length: s.L, elements: 20, mass: s.Mass, above: s.Above,
			inertia: [3]float64{s.Inertia.Ixx, s.Inertia.Iyy, s.Inertia.Izz}}
		list := whirls(t, c.basis(t, 24), airframe.Rotor{Name: "tip", Axis: airframe.Vec{0, 0, 1}, Spin: 1, PolarInertia: s.Jp}, s.Spin)
		var got []float64
		for k := range row.Labels {
			got = append(got, list[k].frequency)
		}
		row.Check(t, 1, got...)
	}
}

// With all modes of a small model the response is that of the full damped
// equation [K + iΣ η_g K_g + iωG − ω²M] u = f, solved directly: two halves of
// an arm with loss factors a hundred times apart, and a spinning motor at its tip.
func TestModalResponseIsThatOfTheFullEquation(t *testing.T) {
	c := clamped{section: beam.Rectangle(0.012, 0.005, 55e9, 0.3, 1550), length: 0.09, elements: 6, mass: 0.032, above: 0.01, inertia: [3]float64{4e-6, 4e-6, 6e-6}}
	stiffness, mass, keep, tip := c.matrices()
	b, phi := reduced(t, stiffness[0], mass, keep, tip, 0)
	n := len(keep)
	eta := [2]float64{0.3, 0.003}
	for g := range eta {
		k := mat.NewDense(n, n, nil)
		for i, p := range keep {
			for j, q := range keep {
				k.Set(i, j, stiffness[1+g].At(p, q))
			}
		}
		var half, full mat.Dense
		half.Mul(phi.T(), k)
		full.Mul(&half, phi)
		b.Groups = append(b.Groups, modal.LossGroup{Name: "half", LossFactor: eta[g], Stiffness: full.RawMatrix().Data})
	}
	r := airframe.Rotor{Name: "tip", Axis: airframe.Vec{0, 0, 1}, Spin: -1, PolarInertia: 6e-6}
	const speed = 2500.0
	couplings, err := Couplings(b, []airframe.Rotor{r}, []float64{speed})
	if err != nil {
		t.Fatal(err)
	}
	s, err := forced.New(b, forced.Options{Gyroscopic: couplings})
	if err != nil {
		t.Fatal(err)
	}
	frequency := []float64{20, 140, 311, 500, 740}
	tr, err := s.Transfer(t.Context(), frequency, 1)
	if err != nil {
		t.Fatal(err)
	}
	for at, f := range frequency {
		omega := 2 * math.Pi * f
		// Real and imaginary parts as one real system.
		a, sides := mat.NewDense(2*n, 2*n, nil), mat.NewDense(2*n, 6, nil)
		for i, p := range keep {
			for j, q := range keep {
				re := stiffness[0].At(p, q) - omega*omega*mass.At(p, q)
				im := eta[0]*stiffness[1].At(p, q) + eta[1]*stiffness[2].At(p, q)
				switch { // H = −Jp Ω about z
				case p == tip+3 && q == tip+4:
					im -= omega * r.PolarInertia * speed
				case p == tip+4 && q == tip+3:
					im += omega * r.PolarInertia * speed
				}
				a.Set(i, j, re)
				a.Set(n+i, n+j, re)
				a.Set(i, n+j, -im)
				a.Set(n+i, j, im)
			}
			if p >= tip {
				sides.Set(i, p-tip, 1)
			}
		}
		var u mat.Dense
		if err := u.Solve(a, sides); err != nil {
			t.Fatal(err)
		}
		for axis := range 3 {
			row := n - 3 + axis
			for j := range 6 {
				want := complex(0, omega) * complex(u.At(row, j), u.At(n+row, j))
				got := tr.Rate[axis][j][at]
				if d := cmplx.Abs(got - want); d > 1e-6*cmplx.Abs(want) && d > 1e-9 {
					t.Errorf("%g Hz, axis %d, component %d: %v, directly %v", f, axis, j, got, want)
				}
			}
		}
	}
}

func TestBalanceOfMoments(t *testing.T) {
	// About a shaft tilted by 3-4-5 the tilt inertia is that of the two axes square to it.
	r := airframe.Rotor{Axis: airframe.Vec{0.6, 0, 0.8}, PolarInertia: 2e-6}
	jx, jy, jz := 1e-6, 3e-6, 5e-6
	b := BalanceOf(r, airframe.Body{Inertia: [6]float64{jx, jy, jz}}, 1000)
	want := (jy + 0.64*jx + 0.36*jz) / 2
	if math.Abs(b.Tilt-want) > 1e-15 || math.Abs(b.Equal-2e-6*1000/want/(2*math.Pi)) > 1e-9 {
		t.Errorf("%+v, want tilt inertia %g", b, want)
	}
}

func TestRotorWithoutSite(t *testing.T) {
	b := &modal.Basis{Frequency: []float64{1}, Sites: []modal.Site{{Name: "a", Kind: "body"}}}
	if _, err := Couplings(b, []airframe.Rotor{{Name: "a"}}, []float64{1}); err == nil {
		t.Error("a rotor without a site was accepted")
	}
}

// With a mount that follows a law each line of the diagram, at every speed, is a natural motion of the frame with the law
// as it is at the frequency of that motion.
func TestLinesUnderALaw(t *testing.T) {
	row := known.One(t, "E_gyroscopic.json", "E-OVERHUNG-CRIT")
	c, r, _ := overhung(t, row)
	r.HoverSpeed, r.Blades = 1, 1
	b := c.basis(t, 0)
	n := len(b.Frequency)
	group := modal.LossGroup{Name: "m", Kind: "mount", LossFactor: 1e-3, Stiffness: make([]float64, n*n),
		Law: airframe.Law{Kind: airframe.Table, Frequency: []float64{1, 1e5}, Storage: []float64{0.6, 1.5}, Loss: []float64{0.02, 0.05}}}
	for v, f := range b.Frequency {
		group.Stiffness[v*n+v] = 0.5 * 4 * math.Pi * math.Pi * f * f
	}
	b.Groups = append(b.Groups, group)
	couplings, err := Couplings(b, []airframe.Rotor{r}, []float64{1})
	if err != nil {
		t.Fatal(err)
	}
	s, err := forced.New(b, forced.Options{Gyroscopic: couplings})
	if err != nil {
		t.Fatal(err)
	}
	fleet, err := NewFleet([]airframe.Rotor{r}, couplings)
	if err != nil {
		t.Fatal(err)
	}
	const lawsAt = 100
	speeds := []float64{0, 100, 200, 300, 400, 500, 600}
	d, err := fleet.Campbell(t.Context(), s, []int{0, 1, 2, 3}, speeds, lawsAt, 4000, 2)
	if err != nil {
		t.Fatal(err)
	}
	if len(d.Lines) < 4 {
		t.Fatalf("%d lines", len(d.Lines))
	}
	moved, points := 0.0, 0
	for i, l := range d.Lines {
		for k, f := range l.Frequency {
			if math.IsNaN(f) { // it left the range, or was not followed
				continue
			}
			points++
			core, err := s.Frozen(f).Core()
			if err != nil {
				t.Fatal(err)
			}
			poles, err := core.Poles(fleet.Momenta(speeds[k]), 0.99*f, 1.01*f)
			if err != nil {
				t.Fatal(err)
			}
			found := false
			for _, p := range poles {
				found = found || math.Abs(p.Frequency/f-1) < 1e-8 && math.Abs(p.Damping-l.Damping[k]) < 1e-8
			}
			if !found {
				t.Errorf("line %d at %g rad/s: %g Hz, %g is no natural motion: %+v", i, speeds[k], f, l.Damping[k], poles)
			}
			moved = max(moved, math.Abs(f/l.begun[k].Frequency-1))
		}
	}
	if points < 24 {
		t.Errorf("lines have %d points, which tests little", points)
	}
	if moved < 0.01 {
		t.Errorf("the law moves lines by %g at most, which tests nothing", moved)
	}
}
