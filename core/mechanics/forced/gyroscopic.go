package forced

import (
	"fmt"
	"math"
)

// Gyroscopic is the coupling that a spinning rotor makes between its tilts
// about two unit axes e₁ and e₂ square to its shaft, e₁ × e₂ along the shaft:
// it adds H (a bᵀ − b aᵀ) to C, so that H θ₂′ stands in the equation of θ₁ and
// −H θ₁′ in that of θ₂.
type Gyroscopic struct {
	Name string
	// First and Second are the tilts a and b of the rotor about e₁ and e₂ in
	// each vector of the whole basis, rad per unit modal coordinate.
	First, Second []float64
	// Momentum is H = Jp Ω in N·m·s, positive for a spin from e₁ to e₂.
	Momentum float64
}

// spins takes the gyroscopic couplings in.
func (s *System) spins(list []Gyroscopic) error {
	all := len(s.basis.Frequency)
	for _, g := range list {
		if len(g.First) != all || len(g.Second) != all {
			panic(fmt.Sprintf("forced: rotor %s tilts in %d and %d of %d vectors", g.Name, len(g.First), len(g.Second), all))
		}
		for _, tilt := range [][]float64{g.First, g.Second} {
			row := make([]float64, len(s.vectors))
			for i, v := range s.vectors {
				row[i] = tilt[v]
				if math.IsNaN(row[i]) || math.IsInf(row[i], 0) {
					return fmt.Errorf("the tilt of rotor %s in vector %d is not finite", g.Name, v)
				}
			}
			s.tilt = append(s.tilt, row)
		}
		if math.IsNaN(g.Momentum) || math.IsInf(g.Momentum, 0) {
			return fmt.Errorf("the angular momentum of rotor %s is not finite", g.Name)
		}
		s.momentum = append(s.momentum, g.Momentum)
	}
	return nil
}

// Momenta gives the angular momentum of each gyroscopic coupling, N·m·s, in
// the order of Options.Gyroscopic.
func (s *System) Momenta() []float64 { return append([]float64(nil), s.momentum...) }

// Spun gives the same system with other angular momenta, one per gyroscopic
// coupling. It shares all that costs with s. It panics on a wrong number of
// them or one that is not finite.
func (s *System) Spun(momenta []float64) *System {
	if len(momenta) != len(s.momentum) {
		panic(fmt.Sprintf("forced: %d angular momenta for %d rotors", len(momenta), len(s.momentum)))
	}
	for _, h := range momenta {
		if math.IsNaN(h) || math.IsInf(h, 0) {
			panic("forced: an angular momentum is not finite")
		}
	}
	c := *s
	c.momentum = append([]float64(nil), momenta...)
	return &c
}

// spinning tells whether any rotor has angular momentum.
func (s *System) spinning() bool {
	for _, h := range s.momentum {
		if h != 0 {
			return true
		}
	}
	return false
}

// addGyroscopic adds factor times the gyroscopic part of C.
func (s *System) addGyroscopic(a []complex128, factor complex128) {
	n := len(s.vectors)
	for r, h := range s.momentum {
		if h == 0 {
			continue
		}
		first, second := s.tilt[2*r], s.tilt[2*r+1]
		for i := range n {
			for j := range n {
				a[i*n+j] += factor * complex(h*(first[i]*second[j]-second[i]*first[j]), 0)
			}
		}
	}
}

// The gyroscopic part of C has rank two per rotor, C = Uᵀ S U with the tilts
// as rows of U and S of blocks [0 H; −H 0]. With B the matrix without it,
//
//	(B + iω Uᵀ S U)⁻¹ = B⁻¹ − B⁻¹ Uᵀ M U B⁻¹,   M = (I + iω S P)⁻¹ iω S,   P = U B⁻¹ Uᵀ
//
// (M. A. Woodbury, Inverting modified matrices, 1950). couple overwrites P with
// M; false when the coupled matrix is singular.
func couple(p []complex128, momentum []float64, omega float64) bool {
	m := 2 * len(momentum)
	left := make([]complex128, m*m)
	sides := make([][]complex128, m)
	for j := range sides {
		sides[j] = make([]complex128, m)
	}
	for r, h := range momentum {
		a, b := 2*r, 2*r+1
		g := complex(0, omega*h)
		for j := range m {
			left[a*m+j] = g * p[b*m+j]
			left[b*m+j] = -g * p[a*m+j]
		}
		sides[b][a] = g
		sides[a][b] = -g
	}
	for i := range m {
		left[i*m+i]++
	}
	if !factorSolve(left, m, sides...) {
		return false
	}
	for j, x := range sides {
		for i := range m {
			p[i*m+j] = x[i]
		}
	}
	return true
}
