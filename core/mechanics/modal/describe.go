package modal

import (
	"math"
	"slices"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
)

// worth is the share of the strongest strength on an axis from which a mode counts in gaps.
const worth = 0.1

// Dampen gives the groups of the basis their loss factors, in order, each with floor added.
func (b *Basis) Dampen(loss []float64, floor float64) {
	for g := range b.Groups {
		b.Groups[g].LossFactor = loss[g] + floor
	}
}

// Describe says what each elastic mode of a dampened basis is. strain and kinetic are those of
// Structure; carriers names the latter. Gaps count modes between from and to, Hz.
//
// A mode without any loss has infinite strength where it moves the gyro at all.
func Describe(b *Basis, strain [][][6]float64, kinetic [][]float64, carriers []string, rotors []airframe.Rotor, from, to float64) *Survey {
	s := &Survey{From: from, To: to, Carriers: carriers, Kinds: assembly.EnergyKinds[:]}
	for _, g := range b.Groups {
		s.Groups = append(s.Groups, g.Name)
	}
	var hubs []*Site
	var gyro *Site
	for i := range b.Sites {
		switch b.Sites[i].Kind {
		case "rotor":
			hubs = append(hubs, &b.Sites[i])
			s.Rotors = append(s.Rotors, b.Sites[i].Name)
		case "gyro":
			gyro = &b.Sites[i]
		}
	}
	n := len(b.Kinds)
	for v, kind := range b.Kinds {
		if kind != Elastic {
			continue
		}
		m := Mode{Number: len(s.Modes) + 1, Vector: v, Frequency: b.Frequency[v], Below: math.Inf(1), Above: math.Inf(1)}
		omega := 2 * math.Pi * m.Frequency
		for _, g := range b.Groups {
			m.Loss += g.LossFactor * g.Stiffness[v*n+v] / (omega * omega)
		}
		m.energies(strain[m.Number-1], kinetic[m.Number-1], s)
		m.strengths(v, omega, hubs, gyro)
		m.Meetings = meetings(omega, rotors)
		if k := len(s.Modes); k > 0 {
			last := &s.Modes[k-1]
			m.Below = m.Frequency - last.Frequency
			last.Above = m.Below
		}
		s.Modes = append(s.Modes, m)
	}
	for axis := range s.Gaps {
		s.Gaps[axis] = s.gaps(axis)
	}
	return s
}

func (m *Mode) energies(strain [][6]float64, kinetic []float64, s *Survey) {
	m.ByKind = make([]float64, len(s.Kinds))
	m.ByGroup = make([]float64, len(s.Groups))
	m.ByCarrier = kinetic
	top := 0
	for g := range strain {
		for k, v := range strain[g] {
			m.ByGroup[g] += v
			m.ByKind[k] += v
		}
		if m.ByGroup[g] > m.ByGroup[top] {
			top = g
		}
	}
	m.Part = s.Groups[top]
	kind := 0
	for k, v := range strain[top] {
		if v > strain[top][kind] {
			kind = k
		}
	}
	m.Motion = s.Kinds[kind]
}

func (m *Mode) strengths(v int, omega float64, hubs []*Site, gyro *Site) {
	m.RotorShare, m.MomentShare = make([]float64, len(hubs)), make([]float64, len(hubs))
	force, moment := 0.0, 0.0
	for r, hub := range hubs {
		for c, x := range hub.Motion[v] {
			if c < 3 {
				m.RotorShare[r] += x * x
			} else {
				m.MomentShare[r] += x * x
			}
		}
		force += m.RotorShare[r]
		moment += m.MomentShare[r]
	}
	for r := range hubs {
		m.RotorShare[r] = ratio(m.RotorShare[r], force)
		m.MomentShare[r] = ratio(m.MomentShare[r], moment)
	}
	if gyro == nil {
		return
	}
	for axis := range 3 {
		m.Rotation[axis] = gyro.Motion[v][3+axis]
		turn := math.Abs(m.Rotation[axis])
		m.Strength[axis] = ratio(turn*math.Sqrt(force), omega*m.Loss)
		m.MomentStrength[axis] = ratio(turn*math.Sqrt(moment), omega*m.Loss)
	}
}

// ratio is a/b, and 0 for 0/0.
func ratio(a, b float64) float64 {
	if a == 0 {
		return 0
	}
	return a / b
}

// meetings lists the speeds at which orders 1, 2 and blade passing have the frequency omega (rad/s),
// once for all rotors that agree on blades and range.
func meetings(omega float64, rotors []airframe.Rotor) []Meeting {
	var out []Meeting
	for r, rotor := range rotors {
		for _, m := range []Meeting{{Order: 1}, {Order: 2}, {Order: rotor.Blades, Blade: true}} {
			if m.Order < 1 {
				continue
			}
			m.Speed = omega / float64(m.Order)
			m.Hover = math.Abs(m.Speed-rotor.HoverSpeed) <= HoverBand*rotor.HoverSpeed
			m.Service = m.Speed <= rotor.MaxSpeed
			i := slices.IndexFunc(out, func(x Meeting) bool {
				return x.Order == m.Order && x.Blade == m.Blade && x.Hover == m.Hover && x.Service == m.Service
			})
			if i < 0 {
				i = len(out)
				out = append(out, m)
			}
			out[i].Rotors = append(out[i].Rotors, r)
		}
	}
	return out
}

// gaps lists the distances between neighbours among the modes in the band that matter on an axis.
func (s *Survey) gaps(axis int) []Gap {
	strongest := 0.0
	in := func(m *Mode) bool { return m.Frequency >= s.From && m.Frequency <= s.To }
	for i := range s.Modes {
		if in(&s.Modes[i]) {
			strongest = max(strongest, s.Modes[i].Strength[axis])
		}
	}
	var out []Gap
	var last *Mode
	for i := range s.Modes {
		m := &s.Modes[i]
		if !in(m) || strongest == 0 || m.Strength[axis] < worth*strongest {
			continue
		}
		if last != nil {
			out = append(out, Gap{Lower: last.Number, Upper: m.Number, Width: m.Frequency - last.Frequency})
		}
		last = m
	}
	return out
}
