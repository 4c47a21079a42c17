package forced

import (
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/mechanics/modal"
)

// What is read at the gyro is what Transfer gives, spinning or not, with the
// fast form or the full one; the coordinates are those of Drive.
func TestProbeReadsWhatTransferGives(t *testing.T) {
	b := frame(20, 5, 21)
	list := spinners(b, 0.4, -0.3)
	frequency := []float64{0.5, 60, 111, 230, 420}
	for name, opt := range map[string]Options{"still": {}, "spinning": {Gyroscopic: list}, "laws": {Gyroscopic: list}, "full matrix": {Rate: full(b, list)}} {
		b := b
		if name == "laws" {
			b = lawful()
		}
		s := build(t, b, opt)
		if (s.own(1) == nil) != (opt.Rate != nil) {
			t.Errorf("%s: the spectral form is there: %t", name, s.own(1) != nil)
		}
		want, err := s.Transfer(t.Context(), frequency, 1)
		if err != nil {
			t.Fatal(err)
		}
		var rows [][]float64
		for c := range 3 {
			rows = append(rows, s.SiteRow(&b.Sites[len(b.Sites)-1], 3+c))
		}
		if b.Sites[len(b.Sites)-1].Kind != "gyro" {
			t.Fatal("the last site is not the gyro")
		}
		seen := make([]int, len(frequency))
		err = s.Probe(t.Context(), frequency, rows, 2, func(k int, motion [][]complex128) {
			seen[k]++
			for axis := range 3 {
				for j, x := range motion[axis] {
					if got := complex(0, 2*math.Pi*frequency[k]) * x; !within(got, want.Rate[axis][j][k], 1e-8) {
						t.Errorf("%s: axis %d, input %d, %g Hz: %v, want %v", name, axis, j, frequency[k], got, want.Rate[axis][j][k])
					}
				}
			}
		})
		if err != nil {
			t.Fatal(err)
		}
		err = s.Coordinates(t.Context(), frequency, 2, func(k int, q [][]complex128) {
			seen[k]++
			for j := range q {
				p, err := s.Drive(frequency[k], j)
				if err != nil {
					t.Error(err)
					continue
				}
				for v := range p {
					if cmplx.Abs(q[j][v]-p[v]) > 1e-8*cmplx.Abs(p[v])+1e-14 {
						t.Errorf("%s: input %d, vector %d: %v, want %v", name, j, v, q[j][v], p[v])
					}
				}
			}
		})
		if err != nil {
			t.Fatal(err)
		}
		for k, n := range seen {
			if n != 2 {
				t.Errorf("%s: frequency %d was seen %d times", name, k, n)
			}
		}
	}
}

// A frame condensed at rest answers at any speed as the spinning one does, also
// with a matrix that has no fast form.
func TestRestAnswersAtAnySpeed(t *testing.T) {
	b := frame(20, 5, 21)
	frequency := []float64{0.5, 60, 111, 230, 420}
	for name, opt := range map[string]Options{"fast": {Gyroscopic: spinners(b, 0, 0)}, "with dampers": {Gyroscopic: spinners(b, 0, 0), Rate: make([]float64, len(b.Frequency)*len(b.Frequency))}} {
		s := build(t, b, opt)
		rest, err := s.Rest(t.Context(), frequency, nil, 2)
		if err != nil {
			t.Fatal(err)
		}
		for _, momenta := range [][]float64{{0.4, -0.3}, {0, 0.7}, {0, 0}} {
			want, err := s.Spun(momenta).Transfer(t.Context(), frequency, 1)
			if err != nil {
				t.Fatal(err)
			}
			got, err := rest.Transfer(momenta)
			if err != nil {
				t.Fatal(err)
			}
			for axis := range 3 {
				for j := range s.Inputs() {
					for k, f := range frequency {
						if !within(got.Rate[axis][j][k], want.Rate[axis][j][k], 1e-8) {
							t.Fatalf("%s, momenta %v: axis %d, input %d, %g Hz: %v, want %v", name, momenta, axis, j, f, got.Rate[axis][j][k], want.Rate[axis][j][k])
						}
					}
				}
			}
		}
	}
}

// One Rest answers rows at any speed as Probe of the spinning frame does, by the spectral form, by the
// Hessenberg form where there is none, and with the whole matrix where there are dampers. Equal rows share an answer.
func TestRestProbesAtAnySpeed(t *testing.T) {
	b := frame(20, 5, 21)
	n := len(b.Frequency)
	frequency := []float64{0.5, 60, 111, 230, 420}
	for name, opt := range map[string]Options{"spectral": {}, "laws": {}, "hessenberg": {}, "dampers": {Rate: make([]float64, n*n)}} {
		b := b
		if name == "laws" {
			b = lawful()
		}
		opt.Gyroscopic = spinners(b, 0, 0)
		s := build(t, b, opt)
		if name == "hessenberg" {
			s.own = func(int) *spectral { return nil }
		}
		rotor, gyro := &b.Sites[0], &b.Sites[len(b.Sites)-1]
		rows := [][]float64{s.SiteRow(rotor, 2), s.SiteRow(gyro, 0), s.SiteRow(gyro, 4), s.SiteRow(rotor, 2)}
		rest, err := s.Rest(t.Context(), frequency, rows, 2)
		if err != nil {
			t.Fatal(err)
		}
		for _, momenta := range [][]float64{{0.4, -0.3}, {0, 0}} {
			spun := s.Spun(momenta)
			err := rest.Probe(t.Context(), momenta, 2, func(k int, motion [][]complex128) {
				for j := range s.Inputs() {
					q, err := spun.Drive(frequency[k], j)
					if err != nil {
						t.Error(err)
						return
					}
					for i, row := range rows {
						if want := along(row, q); !within(motion[i][j], want, 1e-8) {
							t.Errorf("%s, momenta %v: row %d, input %d, %g Hz: %v, want %v", name, momenta, i, j, frequency[k], motion[i][j], want)
						}
					}
				}
			})
			if err != nil {
				t.Fatal(err)
			}
		}
	}
}

// The motion in step with an axis turns the gyro about it at a rate whose
// square is the density, and its rate about another axis is the cross density over the root.
func TestMotionInStep(t *testing.T) {
	b := frame(20, 5, 21)
	s := build(t, b, Options{Gyroscopic: spinners(b, 0.4, -0.3)})
	source := Broadband{Force: 2, Moment: 0.03, Together: []Correlation{{100, 150, 0.4}}}
	frequency := []float64{60, 111, 230}
	tr, err := s.Transfer(t.Context(), frequency, 1)
	if err != nil {
		t.Fatal(err)
	}
	sp := tr.Broadband(source)
	err = s.Coordinates(t.Context(), frequency, 1, func(k int, q [][]complex128) {
		omega := complex(0, 2*math.Pi*frequency[k])
		for axis := range 3 {
			all := s.InStep(frequency[k], q, source, axis, "")
			if got, want := omega*along(s.gyro[axis], all), complex(math.Sqrt(sp.Density[axis][k]), 0); !within(got, want, 1e-9) {
				t.Errorf("axis %d at %g Hz: rate %v, want %v", axis, frequency[k], got, want)
			}
			other := (axis + 1) % 3
			var cross complex128
			for _, part := range source.drives(s.inputs, frequency[k]) {
				var a, o complex128
				for _, j := range part.inputs {
					a, o = a+tr.Rate[axis][j][k], o+tr.Rate[other][j][k]
				}
				cross += complex(part.weight, 0) * o * cmplx.Conj(a)
			}
			if got, want := omega*along(s.gyro[other], all), cross/complex(math.Sqrt(sp.Density[axis][k]), 0); !within(got, want, 1e-8) {
				t.Errorf("axis %d with %d at %g Hz: rate %v, want %v", other, axis, frequency[k], got, want)
			}
			for r, rotor := range sp.Rotors {
				one := s.InStep(frequency[k], q, source, axis, rotor)
				if got, want := omega*along(s.gyro[axis], one), complex(math.Sqrt(sp.ByRotor[axis][r][k]), 0); !within(got, want, 1e-9) {
					t.Errorf("axis %d at %g Hz from rotor %s: rate %v, want %v", axis, frequency[k], rotor, got, want)
				}
			}
			if got, want := source.Density(frequency[k], s.inputs, tr.At(k)[axis]), sp.Density[axis][k]; math.Abs(got-want) > 1e-12*want {
				t.Errorf("axis %d at %g Hz: density %g, want %g", axis, frequency[k], got, want)
			}
		}
	})
	if err != nil {
		t.Fatal(err)
	}
}

// Well below the first mode the frame follows as at rest: the static answer is
// that of the damped one but for terms of the loss factor and of (f/f₁)², and the
// rigid one lacks what the modes give.
func TestStaticAnswer(t *testing.T) {
	b := frame(20, 5, 21)
	for g := range b.Groups {
		b.Groups[g].LossFactor = 1e-9
	}
	s := build(t, b, Options{})
	f := b.Frequency[6] / 30
	rigid, static := s.Static([]float64{f})
	tr, err := s.Transfer(t.Context(), []float64{f}, 1)
	if err != nil {
		t.Fatal(err)
	}
	most := 0.0
	for axis := range 3 {
		for j := range s.Inputs() {
			want, give := tr.Rate[axis][j][0]-rigid.Rate[axis][j][0], static.Rate[axis][j][0]-rigid.Rate[axis][j][0]
			scale := 0.0
			for v, k := range s.square {
				if k > 0 {
					scale += math.Abs(s.gyro[axis][v]*s.load[j][v]) / k * 2 * math.Pi * f
				}
			}
			if cmplx.Abs(give-want) > 2.0/900*scale {
				t.Errorf("axis %d, input %d: %v, want %v", axis, j, give, want)
			}
			most = max(most, cmplx.Abs(give/static.Rate[axis][j][0]))
		}
	}
	if most < 1e-3 {
		t.Errorf("the modes give %g of the static answer at most, which tests nothing", most)
	}
}

// A sound frame is answered by its spectral form, which agrees with
// elimination; two motions of one frequency that share it are not, and still right.
func TestSpectralForm(t *testing.T) {
	b := frame(20, 5, 21)
	s := build(t, b, Options{})
	own := s.own(1)
	if own == nil {
		t.Fatal("no spectral form")
	}
	n := len(b.Frequency)
	for j, x := range own.vector {
		for k, y := range own.vector {
			want := complex(0, 0)
			if j == k {
				want = 1
			}
			if cmplx.Abs(product(x, y)-want) > alike {
				t.Errorf("vectors %d and %d: %v", j, k, product(x, y))
			}
		}
	}
	a := s.still(0, make([]complex128, n*n))
	for k, x := range own.vector {
		for i := range n {
			if d := cmplx.Abs(product(a[i*n:i*n+n], x) - own.value[k]*x[i]); d > alike*cmplx.Abs(own.value[k]) {
				t.Errorf("vector %d, row %d: off by %g", k, i, d)
			}
		}
	}
	// Equal frequencies without damping have no vectors of their own to find by value.
	twin := frame(6, 0, 3)
	twin.Frequency[8] = twin.Frequency[7]
	twin.Groups = twin.Groups[:0]
	k := make([]float64, len(twin.Frequency)*len(twin.Frequency))
	for v, f := range twin.Frequency {
		k[v*len(twin.Frequency)+v] = sq(2 * math.Pi * f)
	}
	twin.Groups = append(twin.Groups, modal.LossGroup{Name: "all", Kind: "part", LossFactor: 0.01, Stiffness: k})
	s = build(t, twin, Options{})
	if s.own(1) != nil {
		t.Error("twins were told apart")
	}
	rest, err := s.Rest(t.Context(), []float64{90, 200}, nil, 1)
	if err != nil {
		t.Fatal(err)
	}
	got, err := rest.Transfer(nil)
	if err != nil {
		t.Fatal(err)
	}
	want, err := s.Transfer(t.Context(), []float64{90, 200}, 1)
	if err != nil {
		t.Fatal(err)
	}
	for axis := range 3 {
		for j := range s.Inputs() {
			for k := range want.Frequency {
				if !within(got.Rate[axis][j][k], want.Rate[axis][j][k], 1e-9) {
					t.Errorf("axis %d, input %d: %v, want %v", axis, j, got.Rate[axis][j][k], want.Rate[axis][j][k])
				}
			}
		}
	}
}
