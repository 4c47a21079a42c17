package forced

import (
	"fmt"
	"math"
	"sync"

	"hushframe/core/mechanics/modal"
)

// Options of New. The zero value is the whole basis without C.
type Options struct {
	// DropResidual leaves the residual vectors out, to show what they do.
	DropResidual bool
	// Rate is C over the whole basis, n×n row-major, N·s/m in the basis: its
	// symmetric part dissipates, its skew part is gyroscopic. nil is none.
	Rate []float64
	// Gyroscopic lists the spinning rotors whose couplings are added to C.
	// They cost little where Rate is nil.
	Gyroscopic []Gyroscopic
}

// Input is one force or moment component at a rotor.
type Input struct {
	Rotor     string
	Component int // 0 to 2 force along x, y, z in N; 3 to 5 moment about them in N·m
}

// Moment tells a moment from a force.
func (in Input) Moment() bool { return in.Component >= 3 }

// System is a frame in its modal coordinates, ready to be driven. It is
// immutable and safe for concurrent use.
type System struct {
	basis   *modal.Basis
	vectors []int     // vectors of the basis in use, ascending
	square  []float64 // ω_v²
	loss    []float64 // Σ η_g K_g, n×n, over groups and floors that do not depend on frequency
	shift   []float64 // change of stiffness against square, n×n, or nil: laws taken at one frequency
	laws    []law     // groups whose stiffness depends on frequency
	rate    []float64 // C without gyroscopic couplings, n×n, or nil
	inputs  []Input
	load    [][]float64                 // load[input][v]: modal force of a unit of the input
	gyro    [3][]float64                // gyro[axis][v]: rotation of the gyro in vector v, rad
	reduced func() *hessenberg          // nil when there are dampers or laws
	own     func(threads int) *spectral // of the matrix without laws, nil when there are dampers
	// Gyroscopic couplings: rows 2r and 2r+1 of tilt are those of rotor r.
	tilt     [][]float64
	momentum []float64
}

// New builds the system of a basis. Inputs are all six components at each site
// of kind "rotor", in the order of the sites; the output is the site of kind
// "gyro". It panics on slices of the wrong length, and fails when there is no
// gyro or rotor site, a number is not finite or a loss factor is negative.
func New(basis *modal.Basis, opt Options) (*System, error) {
	all := len(basis.Frequency)
	if len(basis.Kinds) != all {
		panic(fmt.Sprintf("forced: %d kinds for %d vectors", len(basis.Kinds), all))
	}
	s := &System{basis: basis}
	for v, kind := range basis.Kinds {
		if kind != modal.Residual || !opt.DropResidual {
			s.vectors = append(s.vectors, v)
		}
	}
	n := len(s.vectors)
	s.square = make([]float64, n)
	for i, v := range s.vectors {
		s.square[i] = sq(2 * math.Pi * basis.Frequency[v])
	}
	s.loss = make([]float64, n*n)
	for k := range basis.Groups {
		g := &basis.Groups[k]
		if !(g.LossFactor >= 0) || math.IsInf(g.LossFactor, 0) {
			return nil, fmt.Errorf("loss factor of %s %s is %g", g.Kind, g.Name, g.LossFactor)
		}
		s.add(s.loss, g.Stiffness, g.LossFactor)
		if g.Law.Varies() {
			if err := g.Law.Check(); err != nil {
				return nil, fmt.Errorf("the law of %s %s: %w", g.Kind, g.Name, err)
			}
			x := law{law: &g.Law, stiffness: make([]float64, n*n)}
			s.add(x.stiffness, g.Stiffness, 1)
			s.laws = append(s.laws, x)
		}
	}
	if opt.Rate != nil {
		s.rate = make([]float64, n*n)
		s.add(s.rate, opt.Rate, 1)
	}
	if err := s.sites(); err != nil {
		return nil, err
	}
	if err := s.spins(opt.Gyroscopic); err != nil {
		return nil, err
	}
	for _, part := range [][]float64{s.square, s.loss, s.rate} {
		for _, x := range part {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return nil, fmt.Errorf("the modal basis holds a number that is not finite")
			}
		}
	}
	for i := range s.laws {
		s.laws[i].factor()
	}
	s.prepare()
	return s, nil
}

// add adds a multiple of the rows and columns in use of a matrix over the
// whole basis.
func (s *System) add(to, from []float64, factor float64) {
	all, n := len(s.basis.Frequency), len(s.vectors)
	if len(from) != all*all {
		panic(fmt.Sprintf("forced: matrix of %d numbers over %d vectors", len(from), all))
	}
	for i, v := range s.vectors {
		for j, w := range s.vectors {
			to[i*n+j] += factor * from[v*all+w]
		}
	}
}

func (s *System) sites() error {
	found := false
	for k := range s.basis.Sites {
		site := &s.basis.Sites[k]
		if len(site.Motion) != len(s.basis.Frequency) {
			panic(fmt.Sprintf("forced: site %s has %d motions for %d vectors", site.Name, len(site.Motion), len(s.basis.Frequency)))
		}
		switch site.Kind {
		case "rotor":
			for c := range 6 {
				s.inputs = append(s.inputs, Input{site.Name, c})
				s.load = append(s.load, s.component(site, c))
			}
		case "gyro":
			if found {
				return fmt.Errorf("the modal basis has two gyro sites")
			}
			found = true
			for axis := range 3 {
				s.gyro[axis] = s.component(site, 3+axis)
			}
		}
	}
	if !found {
		return fmt.Errorf("the modal basis has no gyro site")
	}
	if len(s.inputs) == 0 {
		return fmt.Errorf("the modal basis has no rotor site")
	}
	return nil
}

// component gives the motion of a site along one component in each vector in
// use, which is also the modal force of a unit force along it.
func (s *System) component(site *modal.Site, c int) []float64 {
	row := make([]float64, len(s.vectors))
	for i, v := range s.vectors {
		row[i] = site.Motion[v][c]
	}
	return row
}

// Inputs lists the inputs; the index into it is used throughout.
func (s *System) Inputs() []Input { return s.inputs }

// Vectors lists the vectors of the basis in use, ascending. Modal coordinates
// are in this order.
func (s *System) Vectors() []int { return s.vectors }

// prepare says how the matrix is brought to its forms for many frequencies, once and when first asked for.
func (s *System) prepare() {
	var once sync.Once
	var own *spectral
	s.own = func(threads int) *spectral {
		once.Do(func() {
			for i := range s.laws {
				if len(s.laws[i].factors) == 0 {
					return
				}
			}
			if s.rate == nil {
				own = s.spectral(threads)
			}
		})
		return own
	}
	s.reduced = sync.OnceValue(func() *hessenberg {
		if s.rate != nil || len(s.laws) > 0 {
			return nil
		}
		return reduce(s.still(0, make([]complex128, len(s.loss))), len(s.vectors))
	})
}

// matrix builds the dynamic stiffness at ω, row-major.
func (s *System) matrix(omega float64) []complex128 {
	a := s.still(omega, make([]complex128, len(s.loss)))
	s.addGyroscopic(a, complex(0, omega))
	return a
}

// still builds the dynamic stiffness at ω without gyroscopic couplings in a.
func (s *System) still(omega float64, a []complex128) []complex128 {
	s.lawless(omega, a)
	for _, l := range s.laws {
		f := l.law.At(omega/(2*math.Pi)) - 1
		for i, x := range l.stiffness {
			if x != 0 {
				a[i] += f * complex(x, 0)
			}
		}
	}
	return a
}

// lawless is still with every law at its reference and without its loss.
func (s *System) lawless(omega float64, a []complex128) []complex128 {
	n := len(s.vectors)
	for i, x := range s.loss {
		a[i] = complex(0, x)
	}
	for i, x := range s.shift {
		a[i] += complex(x, 0)
	}
	for i, x := range s.rate {
		a[i] += complex(0, omega*x)
	}
	for i, x := range s.square {
		a[i*n+i] += complex(x-omega*omega, 0)
	}
	return a
}

// Damping gives the loss factor of each vector in use on its own, η_v =
// Σ η_g (K_g)_vv / Σ (K_g)_vv, 0 for rigid-body vectors; groups that depend on frequency
// are taken at that of the vector. Half of it is the damping
// ratio. Coupling by damping between modes is not in it.
func (s *System) Damping() []float64 {
	n := len(s.vectors)
	eta := make([]float64, n)
	for i, k := range s.square {
		if !(k > 0) {
			continue
		}
		whole := complex(k, s.loss[i*n+i])
		if s.shift != nil {
			whole += complex(s.shift[i*n+i], 0)
		}
		for _, l := range s.laws {
			whole += (l.law.At(math.Sqrt(k)/(2*math.Pi)) - 1) * complex(l.stiffness[i*n+i], 0)
		}
		eta[i] = imag(whole) / real(whole)
	}
	return eta
}

func sq(x float64) float64 { return x * x }
