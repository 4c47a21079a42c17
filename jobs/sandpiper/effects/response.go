package main

import (
	"context"
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/rotor"
)

// The sweep, Hz, and its source: densities of the baseline job's defaults.
const (
	from, to, step = 80.0, 500.0, 0.5
	forceDensity   = 1e-6
	momentDensity  = 1e-9
	prominence     = 1.26 // 1 dB
)

// way is what the response takes into account.
type way struct {
	laws, gyroscopic, residual, coupled bool
}

var usual = way{laws: true, gyroscopic: true, residual: true, coupled: true}

var dynamic = []struct {
	name string
	how  way
}{
	{"laws of the mounts", way{gyroscopic: true, residual: true, coupled: true}},
	{"gyroscopic moments", way{laws: true, residual: true, coupled: true}},
	{"residual vectors", way{laws: true, gyroscopic: true, coupled: true}},
	{"coupling by damping", way{laws: true, gyroscopic: true, residual: true}},
}

// peak is a peak of the gyro rate; level in dB of (rad/s)²/Hz.
type peak struct{ frequency, level float64 }

// response lists peaks per axis.
type response [3][]peak

// respond sweeps a model.
func (m *model) respond(ctx context.Context, how way) (response, error) {
	var out response
	basis := *m.basis
	basis.Groups = groups(m.basis, how)
	opt := forced.Options{DropResidual: !how.residual}
	if how.gyroscopic {
		speeds := make([]float64, len(m.properties.Rotors))
		for i, r := range m.properties.Rotors {
			speeds[i] = r.HoverSpeed
		}
		var err error
		if opt.Gyroscopic, err = rotor.Couplings(&basis, m.properties.Rotors, speeds); err != nil {
			return out, err
		}
	}
	sys, err := forced.New(&basis, opt)
	if err != nil {
		return out, err
	}
	tr, err := sys.Transfer(ctx, forced.Grid(from, to, step, sys.Resonances(2)), 2)
	if err != nil {
		return out, err
	}
	source := forced.Broadband{Force: forceDensity, Moment: momentDensity}
	peaks, err := sys.Peaks(tr.Broadband(source), source, prominence)
	if err != nil {
		return out, err
	}
	for _, p := range peaks {
		out[p.Axis] = append(out[p.Axis], peak{p.Frequency, 10 * math.Log10(p.Density)})
	}
	return out, nil
}

// groups are the loss groups without what is left out. Without laws a mount has
// the loss factor that its law gives at its reference; without coupling the
// whole stiffness is one group per vector, with the loss of that vector alone.
func groups(b *modal.Basis, how way) []modal.LossGroup {
	list := append([]modal.LossGroup(nil), b.Groups...)
	if !how.laws {
		for k := range list {
			g := &list[k]
			if g.Law.Varies() {
				z := g.Law.At(g.Law.Reference)
				g.LossFactor += imag(z) / real(z)
				g.Law = airframe.Law{}
			}
		}
	}
	if how.coupled {
		return list
	}
	n := len(b.Frequency)
	var alone []modal.LossGroup
	for k := range list {
		g := list[k]
		diagonal := make([]float64, n*n)
		for v := range n {
			diagonal[v*n+v] = g.Stiffness[v*n+v]
		}
		g.Stiffness = diagonal
		alone = append(alone, g)
	}
	return alone
}

// strongest gives the strongest peaks, by frequency.
func strongest(all []peak, count int) []peak {
	list := append([]peak(nil), all...)
	sort.SliceStable(list, func(i, j int) bool { return list[i].level > list[j].level })
	list = list[:min(count, len(list))]
	sort.Slice(list, func(i, j int) bool { return list[i].frequency < list[j].frequency })
	return list
}

// near is the level of the peak nearest to p on an axis, not a number if there is none.
func (r response) near(axis int, p peak) float64 {
	best, level := math.Inf(1), math.NaN()
	for _, q := range r[axis] {
		if d := math.Abs(math.Log(q.frequency / p.frequency)); d < best {
			best, level = d, q.level
		}
	}
	return level
}
