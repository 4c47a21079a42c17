package modal_test

import (
	"context"
	"math"
	"slices"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/modal"
)

func builtin(name string) element.Type {
	for _, kind := range shell.Types() {
		if kind.Describe().Name == name {
			return kind
		}
	}
	return nil
}

// quadrotor is the small airframe, solved.
type quadrotor struct {
	structure  *modal.Structure
	survey     *modal.Survey
	properties *airframe.Properties
}

// solved holds it by number of threads, so that the tests solve it once.
var solved = map[int]*quadrotor{}

func quad(t *testing.T, threads int) (*modal.Structure, *modal.Survey, *airframe.Properties) {
	t.Helper()
	if solved[threads] == nil {
		solved[threads] = build(t, threads)
	}
	q := solved[threads]
	return q.structure, q.survey, q.properties
}

func build(t *testing.T, threads int) *quadrotor {
	t.Helper()
	m, p := known.Airframe(0.015)
	f, err := assembly.FromAirframe(m, p, builtin)
	if err != nil {
		t.Fatal(err)
	}
	s, err := assembly.Assemble(context.Background(), &f.Problem, threads)
	if err != nil {
		t.Fatal(err)
	}
	var places []modal.Place
	for i, r := range p.Rotors {
		places = append(places, modal.Place{Name: r.Name, Kind: "rotor", Body: f.BodyOf[i], Point: r.Hub})
	}
	places = append(places, modal.Place{Name: "stack", Kind: "gyro", Body: f.BodyOf[5], Point: p.Gyro.At})
	st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: 900, Threads: threads})
	if err != nil {
		t.Fatal(err)
	}
	checkBasis(t, "quad", st, s)
	st.Basis.Dampen(f.Loss, f.Laws, p.Floor)
	var carriers []string
	for _, g := range f.Groups {
		carriers = append(carriers, g.Name)
	}
	for _, b := range f.Problem.Bodies {
		carriers = append(carriers, b.Name)
	}
	survey := modal.Describe(st.Basis, st.Strain, st.Kinetic, carriers)
	survey.Complete(st.Basis, p.Rotors, 80, 700)
	return &quadrotor{st, survey, p}
}

// Gyro strength is the peak of the rate of the mode alone, by a scan over frequency.
func TestStrengthIsThePeak(t *testing.T) {
	st, survey, _ := quad(t, 2)
	b := st.Basis
	gyro := b.Sites[len(b.Sites)-1]
	if len(survey.Modes) < 8 {
		t.Fatalf("only %d modes", len(survey.Modes))
	}
	for _, m := range survey.Modes {
		omega := 2 * math.Pi * m.Frequency
		for axis := range 3 {
			peak, moment := 0.0, 0.0
			for k := range 2001 {
				w := omega * (0.99 + 0.02*float64(k)/2000)
				// |iω / (ω_n² (1 + iη) - ω²)|
				h := w / math.Hypot(omega*omega-w*w, m.Loss*omega*omega)
				force, turn := 0.0, 0.0
				for r := range 4 {
					for c := range 3 {
						force += math.Pow(gyro.Motion[m.Vector][3+axis]*b.Sites[r].Motion[m.Vector][c]*h, 2)
						turn += math.Pow(gyro.Motion[m.Vector][3+axis]*b.Sites[r].Motion[m.Vector][3+c]*h, 2)
					}
				}
				peak, moment = max(peak, math.Sqrt(force)), max(moment, math.Sqrt(turn))
			}
			if math.Abs(m.Strength[axis]-peak) > 0.01*peak || math.Abs(m.MomentStrength[axis]-moment) > 0.01*moment {
				t.Errorf("mode %d, axis %d: strengths %g and %g, the scan has %g and %g", m.Number, axis, m.Strength[axis], m.MomentStrength[axis], peak, moment)
			}
		}
		for _, shares := range [][]float64{m.ByGroup, m.ByKind, m.ByCarrier, m.RotorShare, m.MomentShare} {
			sum := 0.0
			for _, v := range shares {
				if v < -1e-12 {
					t.Errorf("mode %d: a share is %g", m.Number, v)
				}
				sum += v
			}
			if math.Abs(sum-1) > 1e-9 {
				t.Errorf("mode %d: shares add up to %g", m.Number, sum)
			}
		}
		// The loss factor of a mode lies between those of the materials it strains.
		if m.Loss < 0.003 || m.Loss > 0.251 {
			t.Errorf("mode %d has the loss factor %g", m.Number, m.Loss)
		}
	}
}

// Mirror symmetry: on a frame that is alike left and right, a mode moves the gyro either on pitch alone
// or on roll and yaw alone; but for the diagonals of the mesh, which are not alike.
func TestSymmetryOfTheGyro(t *testing.T) {
	_, survey, _ := quad(t, 2)
	most := 0.0
	for _, m := range survey.Modes {
		for _, r := range m.Rotation {
			most = max(most, math.Abs(r))
		}
	}
	for _, m := range survey.Modes {
		r := m.Rotation
		pitch, other := math.Abs(r[1]), math.Hypot(r[0], r[2])
		if min(pitch, other) > 0.1*max(pitch, other) && max(pitch, other) > 0.01*most {
			t.Errorf("mode %d at %.1f Hz turns the gyro by %.3g", m.Number, m.Frequency, r)
		}
	}
}

func TestMeetings(t *testing.T) {
	_, survey, p := quad(t, 2)
	for _, m := range survey.Modes {
		for _, x := range m.Meetings {
			if f := x.Speed * float64(x.Order) / (2 * math.Pi); math.Abs(f-m.Frequency) > 1e-9*f {
				t.Errorf("mode %d at %g Hz: order %d at %g rad/s is %g Hz", m.Number, m.Frequency, x.Order, x.Speed, f)
			}
			if x.Blade && x.Order != 3 {
				t.Errorf("blade passing of three blades is order %d", x.Order)
			}
			hover, top := p.Rotors[0].HoverSpeed, p.Rotors[0].MaxSpeed
			if x.Service != (x.Speed <= top) || x.Hover != (math.Abs(x.Speed-hover) <= 0.15*hover) {
				t.Errorf("order %d at %g rad/s: hover %v, service %v", x.Order, x.Speed, x.Hover, x.Service)
			}
			if !slices.Equal(x.Rotors, []int{0, 1, 2, 3}) {
				t.Errorf("equal rotors are told apart: %v", x.Rotors)
			}
		}
		if len(m.Meetings) != 3 {
			t.Errorf("mode %d has %d meetings", m.Number, len(m.Meetings))
		}
	}
}

// Gaps by hand: only modes in the band with a tenth of the strongest strength count.
func TestGaps(t *testing.T) {
	s := &modal.Survey{}
	b := &modal.Basis{Sites: []modal.Site{{Name: "r", Kind: "rotor"}, {Name: "g", Kind: "gyro"}},
		Groups: []modal.LossGroup{{Name: "all", LossFactor: 0.02, Stiffness: make([]float64, 36)}}}
	// Frequency and rotation in roll; strength goes with rotation/frequency.
	for v, x := range [][2]float64{{90, 1}, {150, 5}, {160, 0.2}, {190, 4}, {200, 3}, {900, 5}} {
		b.Kinds, b.Frequency = append(b.Kinds, modal.Elastic), append(b.Frequency, x[0])
		w := 2 * math.Pi * x[0]
		b.Groups[0].Stiffness[v*6+v] = w * w
		b.Sites[0].Motion = append(b.Sites[0].Motion, [6]float64{0, 0, 1})
		b.Sites[1].Motion = append(b.Sites[1].Motion, [6]float64{3: x[1]})
		s.Modes = append(s.Modes, modal.Mode{Number: v + 1, Vector: v, Frequency: x[0], Rotation: [3]float64{x[1]}})
	}
	s.Complete(b, nil, 100, 500)
	want := []modal.Gap{{Lower: 2, Upper: 4, Width: 40}, {Lower: 4, Upper: 5, Width: 10}}
	if !slices.Equal(s.Gaps[0], want) {
		t.Errorf("gaps %v, want %v", s.Gaps[0], want)
	}
	if g, ok := s.SmallestGap(0); !ok || g != want[1] {
		t.Errorf("smallest gap %v", g)
	}
	if _, ok := s.SmallestGap(1); ok || len(s.Gaps[1]) != 0 {
		t.Errorf("no mode turns in pitch, but gaps are %v", s.Gaps[1])
	}
	for _, m := range s.Modes {
		if math.Abs(m.Loss-0.02) > 1e-15 {
			t.Errorf("loss factor %g", m.Loss)
		}
	}
}

// The number of threads changes no bit of the basis.
func TestThreads(t *testing.T) {
	one, _, _ := quad(t, 1)
	many, _, _ := quad(t, 3)
	for v := range one.Basis.Shapes {
		if one.Basis.Frequency[v] != many.Basis.Frequency[v] || !slices.Equal(one.Basis.Shapes[v], many.Basis.Shapes[v]) {
			t.Fatalf("vector %d differs", v)
		}
	}
	for g := range one.Basis.Groups {
		if !slices.Equal(one.Basis.Groups[g].Stiffness, many.Basis.Groups[g].Stiffness) {
			t.Fatalf("group %s differs", one.Basis.Groups[g].Name)
		}
	}
}

// A structure with a hinge has a seventh free motion, and is refused.
func TestHingeIsRefused(t *testing.T) {
	m, p := known.Airframe(0.02)
	// The tail hangs on one bolt only, whose joint turns freely about its axis.
	m.Links = m.Links[:len(m.Links)-1]
	p.Bolts = p.Bolts[:1]
	p.Joints[0].Stiffness[5] = 1e-6
	f, err := assembly.FromAirframe(m, p, builtin)
	if err != nil {
		t.Fatal(err)
	}
	s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
	if err != nil {
		t.Fatal(err)
	}
	_, err = modal.Build(context.Background(), s, nil, modal.Options{UpTo: 300, Threads: 2})
	if e, ok := err.(*modal.RigidError); !ok || e.Moving != "tail" || e.Against != "tail joint" {
		t.Errorf("got %v", err)
	}
}

// The error that a comparison with the refined mesh gives, against what further refinement shows.
func TestMeshErrors(t *testing.T) {
	m, p := known.Airframe(0.03)
	var structures []*modal.Structure
	var surveys []*modal.Survey
	for range 3 {
		f, err := assembly.FromAirframe(m, p, builtin)
		if err != nil {
			t.Fatal(err)
		}
		s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
		if err != nil {
			t.Fatal(err)
		}
		var places []modal.Place
		for i, b := range p.Bodies {
			places = append(places, modal.Place{Name: b.Name, Kind: "body", Body: f.BodyOf[i], Point: b.Centre})
		}
		st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: 700, Threads: 2, Bare: true})
		if err != nil {
			t.Fatal(err)
		}
		carriers := make([]string, len(st.Kinetic[0]))
		structures, surveys = append(structures, st), append(surveys, modal.Describe(st.Basis, st.Strain, st.Kinetic, carriers))
		m = assembly.Refine(m)
	}
	errs := surveys[0].CompareMeshes(structures[0].Basis, surveys[1], structures[1].Basis, 0.5)
	best := surveys[0].CompareMeshes(structures[0].Basis, surveys[2], structures[2].Basis, 0.25)
	if len(errs) < 8 || len(best) != len(errs) {
		t.Fatalf("%d and %d of %d modes are found again", len(errs), len(best), len(surveys[0].Modes))
	}
	for i, e := range errs {
		f := surveys[0].Modes[e.Mode-1].Frequency
		shown := math.Abs(f - best[i].Other)
		t.Logf("mode %d at %.1f Hz: estimated %.3f %%, shown %.3f %%", e.Mode, f, 100*e.Error/f, 100*shown/f)
		if e.Mode != best[i].Mode || e.Error < 0.5*shown || e.Error > 2*shown+1e-4*f {
			t.Errorf("mode %d at %g Hz: the estimate is %g Hz, two refinements show %g", e.Mode, f, e.Error, shown)
		}
	}
}
