package forced

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"hushframe/core/mechanics/modal"
)

// spinners gives two rotors that tilt about x and y at the sites of a frame.
func spinners(b *modal.Basis, momenta ...float64) []Gyroscopic {
	var out []Gyroscopic
	for r, h := range momenta {
		g := Gyroscopic{Name: b.Sites[r].Name, Momentum: h}
		for _, m := range b.Sites[r].Motion {
			g.First, g.Second = append(g.First, m[3]), append(g.Second, m[4])
		}
		out = append(out, g)
	}
	return out
}

// full is the same as a matrix.
func full(b *modal.Basis, list []Gyroscopic) []float64 {
	n := len(b.Frequency)
	c := make([]float64, n*n)
	for _, g := range list {
		for i := range n {
			for j := range n {
				c[i*n+j] += g.Momentum * (g.First[i]*g.Second[j] - g.Second[i]*g.First[j])
			}
		}
	}
	return c
}

func within(a, b complex128, part float64) bool { return cmplx.Abs(a-b) <= part*cmplx.Abs(b) }

// A system with couplings of low rank must answer as one with the full matrix.
func TestCouplingsAnswerAsTheFullMatrix(t *testing.T) {
	b := frame(20, 5, 21)
	list := spinners(b, 0.4, -0.3)
	slow := build(t, b, Options{Rate: full(b, list)})
	one := build(t, b, Options{Gyroscopic: list})
	other := build(t, b, Options{Gyroscopic: spinners(b, 0, 0)}).Spun([]float64{0.4, -0.3})
	rest := build(t, b, Options{})
	frequency := []float64{0.5, 60, 111, 230, 420}
	want, err := slow.Transfer(t.Context(), frequency, 1)
	if err != nil {
		t.Fatal(err)
	}
	still, err := rest.Transfer(t.Context(), frequency, 1)
	if err != nil {
		t.Fatal(err)
	}
	moved := 0.0
	for _, s := range []*System{one, other} {
		got, err := s.Transfer(t.Context(), frequency, 2)
		if err != nil {
			t.Fatal(err)
		}
		for axis := range 3 {
			for j := range s.Inputs() {
				for k, f := range frequency {
					if !within(got.Rate[axis][j][k], want.Rate[axis][j][k], 1e-8) {
						t.Fatalf("axis %d, input %d, %g Hz: %v, want %v", axis, j, f, got.Rate[axis][j][k], want.Rate[axis][j][k])
					}
					moved = max(moved, cmplx.Abs(still.Rate[axis][j][k]/want.Rate[axis][j][k]-1))
				}
			}
		}
		for j := range s.Inputs() {
			q, err := s.Drive(111, j)
			if err != nil {
				t.Fatal(err)
			}
			p, err := slow.Drive(111, j)
			if err != nil {
				t.Fatal(err)
			}
			for v := range q {
				if cmplx.Abs(q[v]-p[v]) > 1e-8*cmplx.Abs(p[v])+1e-14 {
					t.Errorf("input %d, vector %d: %v, want %v", j, v, q[v], p[v])
				}
			}
		}
	}
	if moved < 0.1 {
		t.Errorf("the rotors change the response by %g at most, which tests nothing", moved)
	}
}

// Gyroscopic forces do no work, and reversing all spins transposes the
// response: what a moment at the gyro does at the rotor with one spin, a force at the rotor
// does at the gyro with the other. With one spin alone reciprocity fails.
func TestSpinningKeepsEnergyAndReversedTransposes(t *testing.T) {
	b := frame(15, 3, 5)
	s := build(t, b, Options{Gyroscopic: spinners(b, 0.5, 0.2)})
	reversed := s.Spun([]float64{-0.5, -0.2})
	const f = 210
	tr, err := s.Transfer(t.Context(), []float64{f}, 1)
	if err != nil {
		t.Fatal(err)
	}
	back := func(s *System, axis, input int) complex128 {
		moment := complexRow(s.gyro[axis])
		q, err := s.Solve(f, moment)
		if err != nil {
			t.Fatal(err)
		}
		groups, more := s.Dissipation(f, q)
		for _, p := range groups {
			more += p
		}
		if in := s.PowerIn(f, moment, q); !(in > 0 && math.Abs(in-more) < 1e-9*in) {
			t.Errorf("%g W in, %g W dissipated", in, more)
		}
		return complex(0, 2*math.Pi*f) * along(s.load[input], q)
	}
	broken := 0.0
	for axis := range 3 {
		for j := range s.Inputs() {
			there := tr.Rate[axis][j][0]
			if got := back(reversed, axis, j); !within(got, there, 1e-9) {
				t.Errorf("axis %d, input %d: %v there, %v back with spins reversed", axis, j, there, got)
			}
			broken = max(broken, cmplx.Abs(back(s, axis, j)/there-1))
		}
	}
	if broken < 0.1 {
		t.Errorf("reciprocity holds to %g although the rotors spin", broken)
	}
}

// At an undamped resonance of the frame at rest the spinning frame has a
// bounded response, which the matrix at rest cannot give.
func TestSpinningAtTheResonanceAtRest(t *testing.T) {
	b := frame(4, 0, 3)
	for g := range b.Groups {
		b.Groups[g].LossFactor = 0
	}
	list := spinners(b, 0.5, 0.2)
	f := b.Frequency[7]
	got, err := build(t, b, Options{Gyroscopic: list}).Transfer(t.Context(), []float64{f}, 1)
	if err != nil {
		t.Fatal(err)
	}
	want, err := build(t, b, Options{Rate: full(b, list)}).Transfer(t.Context(), []float64{f}, 1)
	if err != nil {
		t.Fatal(err)
	}
	if !within(got.Rate[1][0][0], want.Rate[1][0][0], 1e-6) {
		t.Errorf("%v, want %v", got.Rate[1][0][0], want.Rate[1][0][0])
	}
}

// A pole is where the dynamic stiffness is singular, its shape the null vector.
func TestPolesMakeTheStiffnessSingular(t *testing.T) {
	b := frame(12, 0, 8)
	s := build(t, b, Options{Gyroscopic: spinners(b, 0.5, -0.2)})
	core, err := s.Core()
	if err != nil {
		t.Fatal(err)
	}
	poles, err := core.Poles(s.Momenta(), 1, math.Inf(1))
	if err != nil {
		t.Fatal(err)
	}
	if len(poles) < 12 {
		t.Fatalf("%d poles of 12 elastic modes", len(poles))
	}
	n := len(s.vectors)
	for _, p := range poles {
		omega := complex(2*math.Pi*p.Frequency, 0) * complex(math.Sqrt(1-p.Damping*p.Damping), p.Damping)
		c := make([]complex128, n*n)
		s.addGyroscopic(c, 1i*omega)
		worst, scale := 0.0, 0.0
		for i := range n {
			sum := (complex(s.square[i], 0) - omega*omega) * p.Shape[i]
			for j := range n {
				sum += (c[i*n+j] + complex(0, s.loss[i*n+j])) * p.Shape[j]
			}
			worst = max(worst, cmplx.Abs(sum))
			scale = max(scale, cmplx.Abs(omega*omega*p.Shape[i]))
		}
		if worst > 1e-7*scale {
			t.Errorf("pole at %g Hz: the equation is off by %g of %g", p.Frequency, worst, scale)
		}
	}
}

// The condensed system has the poles of the whole one where the residual
// vectors are stiff.
func TestCoreKeepsThePoles(t *testing.T) {
	b := frame(12, 9, 8)
	list := spinners(b, 0.5, -0.2)
	s := build(t, b, Options{Gyroscopic: list})
	core, err := s.Core()
	if err != nil {
		t.Fatal(err)
	}
	if got := len(core.square); got != 6+12+4 {
		t.Errorf("%d coordinates, want two of each rotor beside the modes", got)
	}
	some, err := core.Poles(s.Momenta(), 1, 800)
	if err != nil {
		t.Fatal(err)
	}
	every := *b // with residual vectors called elastic, nothing is condensed
	every.Kinds = append([]modal.VectorKind(nil), b.Kinds...)
	for v := range every.Kinds {
		if every.Kinds[v] == modal.Residual {
			every.Kinds[v] = modal.Elastic
		}
	}
	core, err = build(t, &every, Options{Gyroscopic: list}).Core()
	if err != nil {
		t.Fatal(err)
	}
	all, err := core.Poles(s.Momenta(), 1, 800)
	if err != nil {
		t.Fatal(err)
	}
	if len(some) != len(all) {
		t.Fatalf("%d poles condensed, %d whole", len(some), len(all))
	}
	for k, p := range some {
		if math.Abs(p.Frequency/all[k].Frequency-1) > 5e-3 {
			t.Errorf("pole %d: %.5g Hz condensed, %.5g Hz whole", k, p.Frequency, all[k].Frequency)
		}
	}
}

// At rest poles are modes, so their shares are those of the vectors; with
// spinning rotors they still add up where all poles are given.
func TestPolesShareAPeak(t *testing.T) {
	b := frame(10, 0, 4)
	for g := range b.Groups {
		b.Groups[g].LossFactor *= 0.05
	}
	for _, momenta := range [][]float64{{0, 0}, {0.3, -0.4}} {
		s := build(t, b, Options{Gyroscopic: spinners(b, momenta...)})
		core, err := s.Core()
		if err != nil {
			t.Fatal(err)
		}
		poles, err := core.Poles(momenta, 1, math.Inf(1))
		if err != nil {
			t.Fatal(err)
		}
		grid := Grid(60, 900, 2, s.Resonances(1))
		tr, err := s.Transfer(t.Context(), grid, 2)
		if err != nil {
			t.Fatal(err)
		}
		source := Broadband{Force: 1e-6, Moment: 1e-9}
		peaks, err := s.Peaks(tr.Broadband(source), source, 1.26)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range peaks {
			shares, err := s.Attribute(&p, source, poles)
			if err != nil {
				t.Fatal(err)
			}
			sum := 0.0
			for k, x := range shares {
				sum += x
				if momenta[0] == 0 && math.Abs(x-p.Shares[6+k]) > 0.02 {
					t.Errorf("%g Hz at rest: pole %d adds %g, its vector %g", p.Frequency, k, x, p.Shares[6+k])
				}
			}
			if momenta[0] == 0 {
				for v := range 6 {
					sum += p.Shares[v]
				}
				if math.Abs(sum-1) > 0.02 {
					t.Errorf("%g Hz at rest: shares add up to %g", p.Frequency, sum)
				}
			} else if math.Abs(sum-1) > 0.15 { // rigid motion is missing
				t.Errorf("%g Hz: shares %v add up to %g", p.Frequency, shares, sum)
			}
		}
	}
}

// However light the damping, and although spinning moves them, the grid finds
// every pole as a peak: each has twelve samples within its half-power points.
func TestNoPeakIsMissed(t *testing.T) {
	for _, loss := range []float64{1e-2, 1e-4, 1e-5, 1e-6} {
		b := frame(14, 3, 10)
		for g := range b.Groups {
			b.Groups[g].LossFactor = loss
		}
		s := build(t, b, Options{Gyroscopic: spinners(b, 0.3, -0.4)})
		core, err := s.Core()
		if err != nil {
			t.Fatal(err)
		}
		poles, err := core.Poles(s.Momenta(), 25, 850)
		if err != nil {
			t.Fatal(err)
		}
		moved := false
		for _, p := range poles {
			near := math.Inf(1)
			for _, f := range b.Frequency {
				near = min(near, math.Abs(f-p.Frequency))
			}
			moved = moved || near > 2
		}
		if !moved {
			t.Fatal("spinning moves nothing, which tests nothing")
		}
		grid := Grid(20, 900, 5, s.Resonances(1))
		tr, err := s.Transfer(t.Context(), grid, 2)
		if err != nil {
			t.Fatal(err)
		}
		source := Broadband{Force: 1e-6, Moment: 1e-9}
		peaks, err := s.Peaks(tr.Broadband(source), source, 1.05)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range poles {
			seen := false
			for _, x := range peaks {
				seen = seen || math.Abs(x.Frequency-p.Frequency) < (0.01+3*p.Damping)*p.Frequency
			}
			// A pole that a wider or stronger one covers makes no peak of its own.
			if !seen && loss < 1e-3 {
				t.Errorf("loss %g: no peak at the pole of %g Hz", loss, p.Frequency)
			}
		}
	}
}

// Two equal modes: in step at one frequency they are twice as loud (four times in
// power), far apart each is alone.
func TestOverlappingModesAmplify(t *testing.T) {
	pair := func(gap float64) Separation {
		f := []float64{200 - gap/2, 200 + gap/2}
		b := &modal.Basis{Kinds: allElastic(2), Frequency: f, Groups: proportional(f, 0.02), Sites: []modal.Site{
			{Name: "r", Kind: "rotor", Motion: [][6]float64{{0, 0, 2}, {0, 0, 2}}},
			{Name: "g", Kind: "gyro", Motion: [][6]float64{{0, 0, 0, 0, 30}, {0, 0, 0, 0, 30}}}}}
		s := build(t, b, Options{})
		core, err := s.Core()
		if err != nil {
			t.Fatal(err)
		}
		poles, err := core.Poles(nil, 1, 1000)
		if err != nil {
			t.Fatal(err)
		}
		return s.Separate(poles[0], poles[1], Broadband{Force: 1e-6})
	}
	near, far := pair(0.02), pair(60)
	if math.Abs(near.Amplification[1]-4) > 0.01 || math.Abs(far.Amplification[1]-1) > 0.1 || !math.IsNaN(near.Amplification[0]) {
		t.Errorf("amplified by %v together and %v apart", near.Amplification, far.Amplification)
	}
	// 60 Hz in bandwidths of 0.02 · 200 Hz; the peak alone is S (ω φ θ / (η ω_n²))².
	if math.Abs(far.Gap-60) > 0.01 || math.Abs(far.Bandwidths-15) > 0.01 {
		t.Errorf("%g Hz, %g bandwidths", far.Gap, far.Bandwidths)
	}
	want := 1e-6 * sq(2*30/(0.02*2*math.Pi*200))
	if got := near.Alone[0][1]; math.Abs(got-want) > 1e-3*want {
		t.Errorf("alone %g, want %g", got, want)
	}
}

func TestEigenvalues(t *testing.T) {
	// The companion matrix of (z − 1)(z − 2i)(z + 3)(z − 4 − i) and a random matrix whose trace and
	// determinant its eigenvalues must give.
	roots := []complex128{1, 2i, -3, 4 + 1i}
	poly := []complex128{1}
	for _, r := range roots {
		next := make([]complex128, len(poly)+1)
		for i, c := range poly {
			next[i] += c
			next[i+1] -= r * c
		}
		poly = next
	}
	a := make([]complex128, 16)
	for j := range 4 {
		a[j] = -poly[j+1]
		if j < 3 {
			a[(j+1)*4+j] = 1
		}
	}
	got, ok := eigenvalues(a, 4)
	if !ok {
		t.Fatal("not settled")
	}
	for _, r := range roots {
		near := math.Inf(1)
		for _, z := range got {
			near = min(near, cmplx.Abs(z-r))
		}
		if near > 1e-12 {
			t.Errorf("no eigenvalue at %v among %v", r, got)
		}
	}
	r := rand.New(rand.NewPCG(1, 2))
	const n = 40
	b := make([]complex128, n*n)
	var trace, square complex128
	for i := range b {
		b[i] = complex(r.NormFloat64(), r.NormFloat64())
	}
	for i := range n {
		trace += b[i*n+i]
		for j := range n {
			square += b[i*n+j] * b[j*n+i]
		}
	}
	values, ok := eigenvalues(append([]complex128(nil), b...), n)
	if !ok {
		t.Fatal("not settled")
	}
	for _, z := range values {
		trace -= z
		square -= z * z
	}
	if cmplx.Abs(trace) > 1e-11 || cmplx.Abs(square) > 1e-9 {
		t.Errorf("sums of eigenvalues and of their squares are off by %v and %v", trace, square)
	}
}

func BenchmarkTransferSpinning(b *testing.B) {
	base := frame(60, 40, 1)
	s := build(b, base, Options{Gyroscopic: spinners(base, 0.4, -0.4)})
	grid := Grid(60, 600, 1, s.Resonances(1))
	b.ReportMetric(float64(len(grid)), "frequencies")
	for b.Loop() {
		if _, err := s.Transfer(b.Context(), grid, 1); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPoles(b *testing.B) {
	base := frame(30, 40, 1)
	s := build(b, base, Options{Gyroscopic: spinners(base, 0.4, -0.4)})
	core, err := s.Core()
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := core.Poles(s.Momenta(), 1, 900); err != nil {
			b.Fatal(err)
		}
	}
}
