package forced

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"hushframe/core/mechanics/modal"
)

// frame is a made-up free frame: six rigid vectors, elastic ones, residual
// ones, two rotors and full damping matrices of three groups.
func frame(elastic, residual int, seed uint64) *modal.Basis {
	r := rand.New(rand.NewPCG(seed, 1))
	b := &modal.Basis{}
	n := 6 + elastic + residual
	for v := range n {
		switch {
		case v < 6:
			b.Kinds, b.Frequency = append(b.Kinds, modal.RigidBody), append(b.Frequency, 0)
		case v < 6+elastic:
			b.Kinds, b.Frequency = append(b.Kinds, modal.Elastic), append(b.Frequency, 80+700*float64(v-6)/float64(elastic)+20*r.Float64())
		default:
			b.Kinds, b.Frequency = append(b.Kinds, modal.Residual), append(b.Frequency, 2000+3000*r.Float64())
		}
	}
	// Rows of any matrix S give stiffness shares D½ SᵀS D½ that can be split
	// over groups; the last group takes the rest so that all add up.
	left := make([]float64, n*n)
	for v, f := range b.Frequency {
		left[v*n+v] = sq(2 * math.Pi * f)
	}
	for g, eta := range []float64{0.01, 0.3} {
		k := make([]float64, n*n)
		for range 3 {
			s := make([]float64, n)
			for v, f := range b.Frequency {
				s[v] = 2 * math.Pi * f * r.NormFloat64() / math.Sqrt(float64(8*n))
			}
			for i := range n {
				for j := range n {
					k[i*n+j] += s[i] * s[j]
					left[i*n+j] -= s[i] * s[j]
				}
			}
		}
		b.Groups = append(b.Groups, modal.LossGroup{Name: fmt.Sprint("group ", g), Kind: "part", LossFactor: eta, Stiffness: k})
	}
	b.Groups = append(b.Groups, modal.LossGroup{Name: "rest", Kind: "part", LossFactor: 0.015, Stiffness: left})
	for _, name := range []string{"front", "rear", "gyro"} {
		site := modal.Site{Name: name, Kind: "rotor"}
		if name == "gyro" {
			site.Kind = "gyro"
		}
		for range n {
			var m [6]float64
			for c := range m {
				m[c] = r.NormFloat64() * []float64{1, 20}[c/3]
			}
			site.Motion = append(site.Motion, m)
		}
		b.Sites = append(b.Sites, site)
	}
	for range n {
		shape := make([]float64, 5*3)
		for k := range shape {
			shape[k] = r.NormFloat64()
		}
		b.Shapes = append(b.Shapes, shape)
	}
	return b
}

func build(t testing.TB, b *modal.Basis, opt Options) *System {
	t.Helper()
	s, err := New(b, opt)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// The matrix equation itself is the check of both ways of solving it.
func TestSolutionMeetsTheEquation(t *testing.T) {
	b := frame(20, 4, 7)
	n := len(b.Frequency)
	r := rand.New(rand.NewPCG(3, 3))
	rate := make([]float64, n*n)
	for i := range rate {
		rate[i] = r.NormFloat64() // neither symmetric nor skew
	}
	for name, opt := range map[string]Options{"without C": {}, "with C": {Rate: rate}} {
		s := build(t, b, opt)
		for _, f := range []float64{0.1, 97, 250.5, 800} {
			force := make([]complex128, n)
			for i := range force {
				force[i] = complex(r.NormFloat64(), r.NormFloat64())
			}
			q, err := s.Solve(f, force)
			if err != nil {
				t.Fatal(err)
			}
			a := s.matrix(2 * math.Pi * f)
			for i := range n {
				sum := -force[i]
				scale := cmplx.Abs(force[i])
				for j := range n {
					sum += a[i*n+j] * q[j]
					scale += cmplx.Abs(a[i*n+j] * q[j])
				}
				if !(cmplx.Abs(sum) < 1e-11*scale) {
					t.Errorf("%s, %g Hz: row %d is off by %g of %g", name, f, i, cmplx.Abs(sum), scale)
				}
			}
		}
	}
}

// A matrix with nothing on its diagonal can be solved only by changing rows.
func TestEliminationChangesRows(t *testing.T) {
	a := []complex128{0, 2, 0, 1i, 0, 3, 0, 4, 0.5}
	want := []complex128{1, 2i, -1}
	side := make([]complex128, 3)
	for i := range side {
		for j := range want {
			side[i] += a[3*i+j] * want[j]
		}
	}
	direct := append([]complex128(nil), side...)
	var beside []complex128 // the matrix with two sides right of it
	for i := range want {
		beside = append(append(beside, a[3*i:3*i+3]...), side[i], 2*side[i])
	}
	r := reduce(append([]complex128(nil), a...), 3)
	x := r.turn(side)
	if !r.solve(0, make([]complex128, 9), x) || !factorSolve(a, 3, direct) || !eliminate(beside, 3, 5) {
		t.Fatal("called singular")
	}
	x = r.turnBack(x)
	for i := range want {
		if cmplx.Abs(x[i]-want[i]) > 1e-14 || cmplx.Abs(direct[i]-want[i]) > 1e-14 {
			t.Errorf("x[%d] = %v and %v, want %v", i, x[i], direct[i], want[i])
		}
		if got := beside[5*i+3 : 5*i+5]; cmplx.Abs(got[0]-want[i]) > 1e-14 || cmplx.Abs(got[1]-2*want[i]) > 1e-14 {
			t.Errorf("sides give %v, want %v and its double", got, want[i])
		}
	}
}

// The transfer functions come from a transposed solve; driving each input must
// give the same.
func TestTransferAgreesWithDriving(t *testing.T) {
	b := frame(15, 3, 11)
	n := len(b.Frequency)
	rate := make([]float64, n*n)
	for i := range n {
		for j := range i {
			rate[i*n+j], rate[j*n+i] = float64(i-j), -float64(i-j)
		}
	}
	for _, opt := range []Options{{}, {DropResidual: true}, {Rate: rate}} {
		s := build(t, b, opt)
		frequency := []float64{50, 123, 400}
		tr, err := s.Transfer(t.Context(), frequency, 1)
		if err != nil {
			t.Fatal(err)
		}
		for j := range s.Inputs() {
			for k, f := range frequency {
				q, err := s.Drive(f, j)
				if err != nil {
					t.Fatal(err)
				}
				for axis := range 3 {
					var want complex128
					for i, v := range s.Vectors() {
						want += complex(0, 2*math.Pi*f*b.Sites[2].Motion[v][3+axis]) * q[i]
					}
					if got := tr.Rate[axis][j][k]; !(cmplx.Abs(got-want) < 1e-10*cmplx.Abs(want)) {
						t.Errorf("axis %d, input %d, %g Hz: %v, want %v", axis, j, f, got, want)
					}
				}
			}
		}
	}
}

func TestReciprocity(t *testing.T) {
	b := frame(15, 3, 5)
	s := build(t, b, Options{})
	const f = 210
	tr, err := s.Transfer(t.Context(), []float64{f}, 1)
	if err != nil {
		t.Fatal(err)
	}
	for axis := range 3 {
		// A moment on the gyro moves the rotor as a force there turns the gyro.
		moment := make([]complex128, len(s.Vectors()))
		for v, x := range s.gyro[axis] {
			moment[v] = complex(x, 0)
		}
		q, err := s.Solve(f, moment)
		if err != nil {
			t.Fatal(err)
		}
		for j := range s.Inputs() {
			var rate complex128
			for v, x := range s.load[j] {
				rate += complex(0, 2*math.Pi*f*x) * q[v]
			}
			if got := tr.Rate[axis][j][0]; !(cmplx.Abs(got-rate) < 1e-10*cmplx.Abs(got)) {
				t.Errorf("axis %d, input %d: %v there, %v back", axis, j, got, rate)
			}
		}
	}
}

func TestPowerPutInIsDissipated(t *testing.T) {
	b := frame(15, 3, 9)
	n := len(b.Frequency)
	rate := make([]float64, n*n)
	for i := range n {
		rate[i*n+i] = 3
		for j := range i {
			rate[i*n+j], rate[j*n+i] = 40, -40 // gyroscopic: takes no power
		}
	}
	for _, opt := range []Options{{}, {Rate: rate}} {
		s := build(t, b, opt)
		for _, f := range []float64{20, 115, 333} {
			for j := range s.Inputs() {
				load := s.Load(j, complex(0.3, -1.1))
				q, err := s.Solve(f, load)
				if err != nil {
					t.Fatal(err)
				}
				in := s.PowerIn(f, load, q)
				groups, out := s.Dissipation(f, q)
				for _, p := range groups {
					out += p
				}
				if !(in > 0 && math.Abs(in-out) < 1e-9*in) {
					t.Errorf("%g Hz, input %d: %g W in, %g W dissipated", f, j, in, out)
				}
			}
		}
	}
}

// At low frequency a free frame answers as a rigid body: rate × frequency
// tends to a constant, Σ rigid φ_gyro φ_hub / (iω).
func TestLowFrequencyIsRigid(t *testing.T) {
	b := frame(10, 0, 2)
	s := build(t, b, Options{})
	const f = 0.01
	tr, err := s.Transfer(t.Context(), []float64{f}, 1)
	if err != nil {
		t.Fatal(err)
	}
	for j, in := range s.Inputs() {
		site := b.Sites[j/6]
		sum := 0.0
		for v := range 6 {
			sum += b.Sites[2].Motion[v][3] * site.Motion[v][in.Component]
		}
		want := complex(sum, 0) / complex(0, 2*math.Pi*f)
		if got := tr.Rate[0][j][0]; !(cmplx.Abs(got-want) < 1e-4*cmplx.Abs(want)) {
			t.Errorf("input %d: %v, want %v", j, got, want)
		}
	}
}

func TestThreadsChangeNothing(t *testing.T) {
	s := build(t, frame(30, 10, 1), Options{})
	grid := Grid(60, 900, 5, s.Resonances(1))
	one, err := s.Transfer(t.Context(), grid, 1)
	if err != nil {
		t.Fatal(err)
	}
	many, err := s.Transfer(t.Context(), grid, 7)
	if err != nil {
		t.Fatal(err)
	}
	for axis := range 3 {
		for j := range one.Inputs {
			for k := range grid {
				if one.Rate[axis][j][k] != many.Rate[axis][j][k] {
					t.Fatalf("axis %d, input %d, %g Hz differ", axis, j, grid[k])
				}
			}
		}
	}
}

// One lightly damped mode: the peak of the rate lies at f_n (a hysteretic
// oscillator has |ω/(ω_n²−ω²+iηω_n²)| greatest at f_n·(1+η²)^¼), its density is
// known, and the mode makes all of it.
func TestPeakOfOneMode(t *testing.T) {
	const fn, eta, phi, theta = 200.0, 0.03, 2.0, 30.0
	b := &modal.Basis{Kinds: allElastic(1), Frequency: []float64{fn}, Groups: proportional([]float64{fn}, eta),
		Sites: []modal.Site{
			{Name: "r", Kind: "rotor", Motion: [][6]float64{{0, 0, phi, 0, 0.5, 0}}},
			{Name: "g", Kind: "gyro", Motion: [][6]float64{{0, 0, 0, 0, theta, 0}}},
		}}
	s := build(t, b, Options{})
	grid := Grid(100, 400, 3, s.Resonances(1))
	tr, err := s.Transfer(t.Context(), grid, 2)
	if err != nil {
		t.Fatal(err)
	}
	source := Broadband{Force: 1e-4, Moment: 1e-6}
	sp := tr.Broadband(source)
	peaks, err := s.Peaks(sp, source, 1.26)
	if err != nil {
		t.Fatal(err)
	}
	if len(peaks) != 1 || peaks[0].Axis != 1 {
		t.Fatalf("peaks: %+v", peaks)
	}
	p := peaks[0]
	at := fn * math.Pow(1+eta*eta, 0.25)
	if !(math.Abs(p.Frequency-at) < 1e-6*at) {
		t.Errorf("peak at %.9g Hz, want %.9g", p.Frequency, at)
	}
	w, wn := 2*math.Pi*at, 2*math.Pi*fn
	gain := sq(w*theta) / (sq(wn*wn-w*w) + sq(eta*wn*wn))
	want := gain * (1e-4*phi*phi + 1e-6*0.25)
	if !(math.Abs(p.Density-want) < 1e-9*want) {
		t.Errorf("density %g, want %g", p.Density, want)
	}
	if math.Abs(p.Shares[0]-1) > 1e-12 || s.Inputs()[p.Input] != (Input{"r", 2}) {
		t.Errorf("shares %v, input %v", p.Shares, s.Inputs()[p.Input])
	}
	// White force through one mode: mean square rate = S·π/2·f_n/η · (φθ/(2π f_n))²
	// over all frequencies for light damping (J. W. Miles, 1954); the band
	// holds all but what lies beyond its ends.
	mean := MeanSquare(grid, sp.Density[1])
	white := (1e-4*phi*phi + 1e-6*0.25) * math.Pi / 2 * fn / eta * sq(theta/(2*math.Pi*fn))
	if !(mean < white && mean > 0.97*white) {
		t.Errorf("mean square %g, of %g over all frequencies", mean, white)
	}
}

func TestSharesAddUp(t *testing.T) {
	b := frame(20, 6, 4)
	s := build(t, b, Options{})
	grid := Grid(60, 900, 2, s.Resonances(1))
	tr, err := s.Transfer(t.Context(), grid, 2)
	if err != nil {
		t.Fatal(err)
	}
	source := Broadband{Force: 1e-6, Moment: 1e-9}
	sp := tr.Broadband(source)
	peaks, err := s.Peaks(sp, source, 1.26)
	if err != nil {
		t.Fatal(err)
	}
	if len(peaks) < 10 {
		t.Fatalf("only %d peaks", len(peaks))
	}
	for _, p := range peaks {
		sum := 0.0
		for _, x := range p.Shares {
			sum += x
		}
		if !(math.Abs(sum-1) < 1e-9) {
			t.Errorf("shares of the peak at %g Hz add up to %g", p.Frequency, sum)
		}
		if p.Prominence < 1.26 || p.InputShare <= 0 || p.InputShare > 1 {
			t.Errorf("peak %+v", p)
		}
		for i, makers := 1, p.Makers(0.05); i < len(makers); i++ {
			if math.Abs(p.Shares[makers[i]]) > math.Abs(p.Shares[makers[i-1]]) {
				t.Errorf("makers out of order at %g Hz", p.Frequency)
			}
		}
	}
	for axis := range 3 {
		for k := range grid {
			sum := 0.0
			for r := range sp.Rotors {
				sum += sp.ByRotor[axis][r][k]
			}
			if !(math.Abs(sum-sp.Density[axis][k]) < 1e-12*sum) {
				t.Fatalf("rotors do not add up at %g Hz", grid[k])
			}
		}
	}
}

func TestNodesMoveAsTheShapesSay(t *testing.T) {
	b := frame(6, 2, 8)
	s := build(t, b, Options{DropResidual: true})
	q := make([]complex128, len(s.Vectors()))
	q[3], q[7] = 2i, 1
	u := s.Nodes(q)
	for k := range u {
		want := complex(b.Shapes[s.Vectors()[7]][k], 2*b.Shapes[s.Vectors()[3]][k])
		if u[k] != want {
			t.Fatalf("component %d is %v, want %v", k, u[k], want)
		}
	}
}

func TestGrid(t *testing.T) {
	g := Grid(100, 500, 1, []Resonance{{250.3, 0.004}, {90, 0.02}, {400, 0}, {501, 0.02}})
	if g[0] != 100 || g[len(g)-1] != 500 {
		t.Errorf("grid goes from %g to %g", g[0], g[len(g)-1])
	}
	inside := 0
	for k := 1; k < len(g); k++ {
		if !(g[k] > g[k-1] && g[k]-g[k-1] <= 1+1e-9) {
			t.Fatalf("step from %g to %g", g[k-1], g[k])
		}
		if math.Abs(g[k]-250.3) <= 250.3*0.002*(1+1e-9) {
			inside++
		}
	}
	if inside < 13 {
		t.Errorf("%d samples within the half-power points", inside)
	}
}

func TestBadBasesAreRefused(t *testing.T) {
	for name, spoil := range map[string]func(b *modal.Basis){
		"two gyros":      func(b *modal.Basis) { b.Sites[0].Kind = "gyro" },
		"no gyro":        func(b *modal.Basis) { b.Sites[2].Kind = "body" },
		"no rotor":       func(b *modal.Basis) { b.Sites[0].Kind, b.Sites[1].Kind = "body", "body" },
		"negative loss":  func(b *modal.Basis) { b.Groups[1].LossFactor = -0.1 },
		"not a number":   func(b *modal.Basis) { b.Frequency[8] = math.NaN() },
		"infinite group": func(b *modal.Basis) { b.Groups[0].Stiffness[5] = math.Inf(1) },
	} {
		b := frame(4, 0, 3)
		spoil(b)
		if _, err := New(b, Options{}); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	b := frame(4, 0, 3)
	for g := range b.Groups {
		b.Groups[g].LossFactor = 0
	}
	s := build(t, b, Options{})
	_, err := s.Transfer(t.Context(), []float64{60, b.Frequency[7], 900}, 2)
	var unbounded *Unbounded
	if !errors.As(err, &unbounded) {
		t.Errorf("undamped resonance: %v", err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if _, err := s.Transfer(ctx, []float64{60}, 1); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
}

func BenchmarkTransfer(b *testing.B) {
	s := build(b, frame(60, 40, 1), Options{})
	grid := Grid(60, 900, 1, s.Resonances(1))
	b.ReportMetric(float64(len(grid)), "frequencies")
	for b.Loop() {
		if _, err := s.Transfer(context.Background(), grid, 1); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkTransferWithRate(b *testing.B) {
	basis := frame(60, 40, 1)
	n := len(basis.Frequency)
	s := build(b, basis, Options{Rate: make([]float64, n*n)})
	grid := Grid(60, 900, 20, nil)
	b.ReportMetric(float64(len(grid)), "frequencies")
	for b.Loop() {
		if _, err := s.Transfer(context.Background(), grid, 1); err != nil {
			b.Fatal(err)
		}
	}
}
