package main

import (
	"math"
	"math/cmplx"
	"sort"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/rotor"
	"hushframe/core/signal/identify"
)

// plant is the truth in modal coordinates: q″ + (C + G) q′ + Λ q = Bᵀ f, with
// viscous damping C, gyroscopic coupling G of the rotors at hover speed and
// stiffness Λ = diag ω² and what laws of mounts add to it. Outputs are the three rates of the gyro.
type plant struct {
	n     int // modal coordinates
	rigid int // the first ones are rigid-body motions
	a     *mat.Dense
	b     *mat.Dense   // 2n × inputs: six components at each rotor
	gyro  *mat.Dense   // 3 × n, rad/s per unit modal velocity
	omega []float64    // rad/s
	sites []modal.Site // rotors
}

// rateLoop is the bandwidth to which the control loop damps rigid rotation,
// and hold the one of rigid translation (drag and pilot), Hz.
const (
	rateLoop = 18.0
	hold     = 0.3
)

// newPlant builds the equations. Hysteretic losses Σ η_g K_g become the
// equivalent viscous ones C_ij = Σ η_g (K_g)_ij / √(ω_i ω_j), which take the
// same energy per cycle at the resonance of each mode: a time simulation
// cannot be hysteretic and causal at once. Likewise the stiffness of mounts
// with a law is that at √(ω_i ω_j). It fails when a rotor has no site.
func newPlant(b *modal.Basis, p *airframe.Properties, upTo float64) (*plant, error) {
	var keep []int
	rigid := 0
	for v, k := range b.Kinds {
		switch {
		case k == modal.RigidBody:
			keep = append(keep, v)
			rigid++
		case k == modal.Elastic && b.Frequency[v] <= upTo:
			keep = append(keep, v)
		}
	}
	n := len(keep)
	pl := &plant{n: n, rigid: rigid, omega: make([]float64, n)}
	for i, v := range keep {
		pl.omega[i] = 2 * math.Pi * b.Frequency[v]
	}
	for i := range rigid {
		pl.omega[i] = 0
	}

	var gyro modal.Site
	for _, s := range b.Sites {
		switch s.Kind {
		case "gyro":
			gyro = s
		case "rotor":
			pl.sites = append(pl.sites, s)
		}
	}
	pl.gyro = mat.NewDense(3, n, nil)
	for i, v := range keep {
		for d := range 3 {
			pl.gyro.Set(d, i, gyro.Motion[v][3+d])
		}
	}

	damp, stiff := mat.NewDense(n, n, nil), mat.NewDense(n, n, nil)
	total := len(b.Kinds)
	for k := range b.Groups {
		g := &b.Groups[k]
		for i := rigid; i < n; i++ {
			for j := rigid; j < n; j++ {
				// Between two modes that of the frequency half-way; the floor is in it.
				middle := math.Sqrt(pl.omega[i] * pl.omega[j])
				z, share := g.At(middle/(2*math.Pi)), g.Stiffness[keep[i]*total+keep[j]]
				damp.Set(i, j, damp.At(i, j)+imag(z)*share/middle)
				stiff.Set(i, j, stiff.At(i, j)+(real(z)-1)*share)
			}
		}
	}
	pl.holdRigid(damp, gyro, keep)
	if err := pl.spin(damp, b, p, keep); err != nil {
		return nil, err
	}

	pl.a = mat.NewDense(2*n, 2*n, nil)
	for i := range n {
		pl.a.Set(i, n+i, 1)
		pl.a.Set(n+i, i, -pl.omega[i]*pl.omega[i])
		for j := range n {
			pl.a.Set(n+i, j, pl.a.At(n+i, j)-stiff.At(i, j))
			pl.a.Set(n+i, n+j, -damp.At(i, j))
		}
	}
	pl.b = mat.NewDense(2*n, 6*len(pl.sites), nil)
	for r, s := range pl.sites {
		for c := range 6 {
			for i, v := range keep {
				pl.b.Set(n+i, 6*r+c, s.Motion[v][c])
			}
		}
	}
	return pl, nil
}

// holdRigid damps the rigid-body motions: rotation to the bandwidth of the
// rate loop, translation to that of drag and pilot. The rotation of a
// mass-normalised rigid vector at the gyro tells which it is.
func (pl *plant) holdRigid(damp *mat.Dense, gyro modal.Site, keep []int) {
	var most float64
	turn := make([]float64, pl.rigid)
	for i := range pl.rigid {
		m := gyro.Motion[keep[i]]
		turn[i] = math.Hypot(math.Hypot(m[3], m[4]), m[5])
		most = math.Max(most, turn[i])
	}
	for i := range pl.rigid {
		f := hold
		if turn[i] > 1e-3*most {
			f = rateLoop
		}
		damp.Set(i, i, 2*math.Pi*f)
	}
}

// spin adds the gyroscopic matrix of the rotors at hover speed.
func (pl *plant) spin(damp *mat.Dense, b *modal.Basis, p *airframe.Properties, keep []int) error {
	var speeds []float64
	for _, r := range p.Rotors {
		speeds = append(speeds, r.HoverSpeed)
	}
	g, err := rotor.Matrix(b, p.Rotors, speeds)
	if err != nil {
		return err
	}
	for i, v := range keep {
		for j, w := range keep {
			damp.Set(i, j, damp.At(i, j)+g[v*len(b.Kinds)+w])
		}
	}
	return nil
}

// trueMode is one mode of the truth at hover speed.
type trueMode struct {
	Frequency float64    `json:"frequency_hz"`
	Damping   float64    `json:"damping_ratio"`
	Direction [3]float64 `json:"gyro_direction_roll_pitch_yaw"`
	// Strength is the peak gyro rate of this mode alone per newton, root sum
	// of squares over unit forces in three directions at all rotor hubs.
	Strength float64 `json:"gyro_strength_deg_s_per_n"`
	// BestFrequency and BestDamping are the least standard errors in Hz and of the damping ratio with which a steady recording can tell
	// the mode, with all modes that it shows unknown; absent where the mode lies beyond what was looked at.
	BestFrequency float64 `json:"best_frequency_error_hz,omitempty"`
	BestDamping   float64 `json:"best_damping_error,omitempty"`
}

// modes gives the elastic modes of the plant, by ascending frequency. The gyro direction is the unit vector along
// which the complex rotation of the gyro is largest.
func (pl *plant) modes(terms []term, best map[complex128]identify.Best) []trueMode {
	var out []trueMode
	for _, t := range terms {
		if !t.elastic() {
			continue
		}
		var rate [3]complex128
		copy(rate[:], t.rate)
		m := trueMode{Frequency: cmplx.Abs(t.lambda) / (2 * math.Pi), Damping: -real(t.lambda) / cmplx.Abs(t.lambda), Direction: direction(rate),
			BestFrequency: best[t.lambda].Frequency, BestDamping: best[t.lambda].Damping}
		var sum float64
		for site := range pl.sites {
			for c := range 3 {
				for d := range 3 {
					h := cmplx.Abs(rate[d] * t.force[6*site+c] / complex(real(t.lambda), 0))
					sum += h * h
				}
			}
		}
		m.Strength = math.Sqrt(sum) * 180 / math.Pi
		out = append(out, m)
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Frequency < out[j].Frequency })
	return out
}

// direction turns a complex vector to the phase at which its real part is
// longest and gives that as a unit vector, largest component positive.
func direction(v [3]complex128) [3]float64 {
	var sq complex128
	for _, c := range v {
		sq += c * c
	}
	turn := cmplx.Exp(complex(0, -cmplx.Phase(sq)/2))
	var out [3]float64
	var norm, most float64
	for d, c := range v {
		out[d] = real(c * turn)
		norm = math.Hypot(norm, out[d])
		if math.Abs(out[d]) > math.Abs(most) {
			most = out[d]
		}
	}
	if norm == 0 {
		return out
	}
	for d := range out {
		out[d] /= math.Copysign(norm, most)
	}
	return out
}

// discretise gives the exact step matrices for inputs held over dt.
func (pl *plant) discretise(dt float64) (ad, bd *mat.Dense) {
	s, m := 2*pl.n, pl.b.RawMatrix().Cols
	block := mat.NewDense(s+m, s+m, nil)
	for i := range s {
		for j := range s {
			block.Set(i, j, pl.a.At(i, j)*dt)
		}
		for j := range m {
			block.Set(i, s+j, pl.b.At(i, j)*dt)
		}
	}
	var e mat.Dense
	e.Exp(block)
	return mat.DenseCopyOf(e.Slice(0, s, 0, s)), mat.DenseCopyOf(e.Slice(0, s, s, s+m))
}
