package rotor

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
)

// Momentum gives the angular momentum Jp Ω of what spins, N·m·s, positive
// counterclockwise about the axis, at a speed Ω in rad/s that is not negative.
func Momentum(r airframe.Rotor, speed float64) float64 {
	if !(speed >= 0) || math.IsInf(speed, 0) {
		panic(fmt.Sprintf("rotor: speed of %g rad/s", speed))
	}
	return float64(r.Spin) * r.PolarInertia * speed
}

// Couplings gives the gyroscopic coupling of each rotor at its speed in rad/s,
// in the order of the rotors. It fails when a rotor has no site in the basis.
func Couplings(b *modal.Basis, rotors []airframe.Rotor, speeds []float64) ([]forced.Gyroscopic, error) {
	if len(speeds) != len(rotors) {
		panic(fmt.Sprintf("rotor: %d speeds for %d rotors", len(speeds), len(rotors)))
	}
	var out []forced.Gyroscopic
	for k, r := range rotors {
		site := site(b, r.Name)
		if site == nil {
			return nil, fmt.Errorf("the modal basis has no site for rotor %s", r.Name)
		}
		e1, e2 := Square(r.Axis)
		g := forced.Gyroscopic{Name: r.Name, Momentum: Momentum(r, speeds[k])}
		for _, m := range site.Motion {
			turn := airframe.Vec{m[3], m[4], m[5]}
			g.First, g.Second = append(g.First, dot(e1, turn)), append(g.Second, dot(e2, turn))
		}
		out = append(out, g)
	}
	return out, nil
}

// Matrix gives the gyroscopic matrix G of the whole basis, n×n row-major and
// skew, N·m·s in the basis: the term G q′ on the left of the equation of
// motion. It fails as Couplings does.
func Matrix(b *modal.Basis, rotors []airframe.Rotor, speeds []float64) ([]float64, error) {
	list, err := Couplings(b, rotors, speeds)
	if err != nil {
		return nil, err
	}
	n := len(b.Frequency)
	g := make([]float64, n*n)
	for _, c := range list {
		for i := range n {
			for j := range n {
				g[i*n+j] += c.Momentum * (c.First[i]*c.Second[j] - c.Second[i]*c.First[j])
			}
		}
	}
	return g, nil
}

func site(b *modal.Basis, name string) *modal.Site {
	for k := range b.Sites {
		if s := &b.Sites[k]; s.Kind == "rotor" && s.Name == name {
			return s
		}
	}
	return nil
}

// Balance compares the two moments of a rotor that tilts at a frequency.
type Balance struct {
	// Tilt is the moment of inertia about an axis square to the shaft through
	// the centre of gravity, the mean over directions, kg·m².
	Tilt float64
	// Polar is the moment of inertia of what spins, about the shaft, kg·m².
	Polar float64
	// Equal is the frequency in Hz at which the gyroscopic moment Jp Ω θ′ has
	// the size of the inertia moment Jt θ″; below it the gyroscopic one is
	// greater. +Inf without tilt inertia.
	Equal float64
}

// BalanceOf gives it for a rotor, its body and a speed in rad/s.
func BalanceOf(r airframe.Rotor, body airframe.Body, speed float64) Balance {
	j := body.Inertia
	about := 0.0 // about the shaft: axisᵀ J axis
	full := [3][3]float64{{j[0], j[3], j[4]}, {j[3], j[1], j[5]}, {j[4], j[5], j[2]}}
	for a := range 3 {
		for b := range 3 {
			about += r.Axis[a] * full[a][b] * r.Axis[b]
		}
	}
	out := Balance{Tilt: (j[0] + j[1] + j[2] - about) / 2, Polar: r.PolarInertia}
	out.Equal = r.PolarInertia * speed / out.Tilt / (2 * math.Pi)
	return out
}
