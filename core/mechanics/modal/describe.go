package modal

import (
	"math"
	"slices"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
)

// worth is the share of the strongest strength on an axis from which a mode counts in gaps.
const worth = 0.1

// Dampen gives the groups of the basis their loss factors and laws, in order, each with floor added.
func (b *Basis) Dampen(loss []float64, laws []airframe.Law, floor float64) {
	for g := range b.Groups {
		b.Groups[g].LossFactor, b.Groups[g].Law = loss[g]+floor, laws[g]
	}
}

// Describe says of each elastic mode what needs no loss factor and no rotor speed: energies, rotation of
// the gyro, shares of the rotors, distances. strain and kinetic are those of Structure; carriers names the
// latter.
func Describe(b *Basis, strain [][][6]float64, kinetic [][]float64, carriers []string) *Survey {
	s := &Survey{Carriers: carriers, Kinds: assembly.EnergyKinds[:]}
	for _, g := range b.Groups {
		s.Groups = append(s.Groups, g.Name)
	}
	hubs, gyro := b.stations()
	for _, hub := range hubs {
		s.Rotors = append(s.Rotors, hub.Name)
	}
	for v, kind := range b.Kinds {
		if kind != Elastic {
			continue
		}
		m := Mode{Number: len(s.Modes) + 1, Vector: v, Frequency: b.Frequency[v], Below: math.Inf(1), Above: math.Inf(1)}
		m.energies(strain[m.Number-1], kinetic[m.Number-1], s)
		force, moment := squares(v, hubs)
		m.RotorShare, m.MomentShare = shares(force), shares(moment)
		if gyro != nil {
			m.Rotation = [3]float64(gyro.Motion[v][3:])
		}
		if k := len(s.Modes); k > 0 {
			last := &s.Modes[k-1]
			m.Below = m.Frequency - last.Frequency
			last.Above = m.Below
		}
		s.Modes = append(s.Modes, m)
	}
	return s
}

// Complete adds what depends on the loss factors of the basis, on rotor speeds, and on the band from
// to to (Hz) in which gaps count. A mode without any loss has infinite strength where it moves the gyro.
func (s *Survey) Complete(b *Basis, rotors []airframe.Rotor, from, to float64) {
	s.From, s.To = from, to
	hubs, _ := b.stations()
	n := len(b.Kinds)
	for i := range s.Modes {
		m := &s.Modes[i]
		omega := 2 * math.Pi * m.Frequency
		m.Loss = 0
		for _, g := range b.Groups {
			m.Loss += imag(g.At(m.Frequency)) * g.Stiffness[m.Vector*n+m.Vector] / (omega * omega)
		}
		force, moment := squares(m.Vector, hubs)
		for axis, turn := range m.Rotation {
			m.Strength[axis] = ratio(math.Abs(turn)*math.Sqrt(total(force)), omega*m.Loss)
			m.MomentStrength[axis] = ratio(math.Abs(turn)*math.Sqrt(total(moment)), omega*m.Loss)
		}
		m.Meetings = meetings(omega, rotors)
	}
	for axis := range s.Gaps {
		s.Gaps[axis] = s.gaps(axis)
	}
}

// stations returns the hubs in order, and the gyro or nil.
func (b *Basis) stations() (hubs []*Site, gyro *Site) {
	for i := range b.Sites {
		switch b.Sites[i].Kind {
		case "rotor":
			hubs = append(hubs, &b.Sites[i])
		case "gyro":
			gyro = &b.Sites[i]
		}
	}
	return hubs, gyro
}

// squares returns, per hub, the sum of squares of the displacement and of the rotation in vector v.
func squares(v int, hubs []*Site) (force, moment []float64) {
	force, moment = make([]float64, len(hubs)), make([]float64, len(hubs))
	for r, hub := range hubs {
		for c, x := range hub.Motion[v] {
			if c < 3 {
				force[r] += x * x
			} else {
				moment[r] += x * x
			}
		}
	}
	return force, moment
}

func total(a []float64) float64 {
	sum := 0.0
	for _, v := range a {
		sum += v
	}
	return sum
}

func shares(a []float64) []float64 {
	out := make([]float64, len(a))
	for i, v := range a {
		out[i] = ratio(v, total(a))
	}
	return out
}

// alike is the share of the greatest strain energy from which a part counts as equal to the first:
// arms that are alike differ by rounding and by their meshes.
const alike = 0.95

func (m *Mode) energies(strain [][6]float64, kinetic []float64, s *Survey) {
	m.ByKind = make([]float64, len(s.Kinds))
	m.ByGroup = make([]float64, len(s.Groups))
	m.ByCarrier = kinetic
	for g := range strain {
		for k, v := range strain[g] {
			m.ByGroup[g] += v
			m.ByKind[k] += v
		}
	}
	most := slices.Max(m.ByGroup)
	top := slices.IndexFunc(m.ByGroup, func(v float64) bool { return v >= alike*most })
	kind := 0
	for k, v := range strain[top] {
		if v > strain[top][kind] {
			kind = k
		}
	}
	m.Part, m.Motion = s.Groups[top], s.Kinds[kind]
}

// Leading lists the groups whose share of the strain energy is the greatest or nearly so, in order, of
// the kind of the first: where a part bends, a mount with as much energy is no part that bends. The groups
// are those of the basis.
func (m *Mode) Leading(groups []LossGroup) []string {
	most := slices.Max(m.ByGroup)
	var names []string
	kind := ""
	for g, v := range m.ByGroup {
		if v < alike*most {
			continue
		}
		if kind == "" {
			kind = groups[g].Kind
		}
		if groups[g].Kind == kind {
			names = append(names, groups[g].Name)
		}
	}
	return names
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
			m.Service = m.Speed <= rotor.MaxSpeed
			m.Hover = m.Service && math.Abs(m.Speed-rotor.HoverSpeed) <= HoverBand*rotor.HoverSpeed
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
