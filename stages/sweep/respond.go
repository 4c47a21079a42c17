package sweep

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// leastShare is the share of a mode or loss group below which it is not named.
const leastShare = 0.05

// respond computes the whole response.
func respond(ctx context.Context, basis *modal.Basis, p *airframe.Properties, g given, set settings, threads int, report stage.Reporter) (*kinds.Response, error) {
	residual := false
	for _, kind := range basis.Kinds {
		residual = residual || kind == modal.Residual
	}
	residual = residual && set.residual
	fleet, err := newFleet(basis, p, g.recorded, set)
	if err != nil {
		return nil, err
	}
	sys, err := forced.New(basis, fleet.options(set, residual))
	if err != nil {
		return nil, err
	}
	named, err := probes(basis, sys, g, set)
	if err != nil {
		return nil, err
	}
	all, err := fleet.assemble(ctx, basis, p, g, set, threads)
	if err != nil {
		return nil, err
	}
	report.Progress("sweep", 0)
	grid := forced.Grid(set.from, set.to, set.step, sys.Resonances(threads))
	rest, err := sys.Rest(ctx, grid, rows(named), threads)
	if err != nil {
		return nil, err
	}
	tr, err := rest.Transfer(sys.Momenta())
	if err != nil {
		return nil, err
	}
	sp := tr.Broadband(set.source)
	r := &kinds.Response{
		From: set.from, To: set.to, Force: set.source.Force, Moment: set.source.Moment, Residual: residual,
		BladeShare: set.bladeShare, Spinning: set.spinning, Thrust: thrust(p), Frequency: grid, Density: sp.Density,
		GyroNoise: set.noise, FirstMode: first(basis),
	}
	rigid, static := sys.Static(grid)
	r.Rigid, r.Static = rigid.Broadband(set.source).Density, static.Broadband(set.source).Density
	for axis, name := range kinds.AxisNames {
		for k, rotor := range sp.Rotors {
			r.Sources = append(r.Sources, kinds.ResponseSource{Rotor: rotor, Axis: name, Density: sp.ByRotor[axis][k]})
		}
		for j, in := range tr.Inputs {
			x := kinds.ResponseTransfer{Rotor: in.Rotor, Component: in.Component, Axis: name}
			for _, h := range tr.Rate[axis][j] {
				x.Real, x.Imaginary = append(x.Real, real(h)), append(x.Imaginary, imag(h))
			}
			r.Transfer = append(r.Transfer, x)
		}
	}
	report.Progress("sweep", 0.6)
	plain, err := uncorrected(ctx, basis, fleet, residual, grid, set, threads, r)
	if err != nil {
		return nil, err
	}
	for axis, name := range kinds.AxisNames {
		x := kinds.ResponseAxis{Axis: name, RMS: math.Sqrt(forced.MeanSquare(grid, sp.Density[axis]))}
		for j, in := range tr.Inputs {
			give := cmplx.Abs(static.Rate[axis][j][0]-rigid.Rate[axis][j][0]) / (2 * math.Pi * grid[0])
			if in.Moment() {
				x.GiveMoment = math.Hypot(x.GiveMoment, give)
			} else {
				x.GiveForce = math.Hypot(x.GiveForce, give)
			}
		}
		x.Correction, x.CorrectionAt = change(grid, sp.Density[axis], r.Uncorrected[axis])
		r.Axes = append(r.Axes, x)
	}
	report.Progress("whirl", 0.7)
	if err := fleet.whirl(ctx, r, basis, residual, set, threads); err != nil {
		return nil, err
	}
	if err := fleet.separate(r, sys, set); err != nil {
		return nil, err
	}
	report.Progress("peaks", 0.8)
	if err := findPeaks(r, basis, fleet, sys, plain, sp, set); err != nil {
		return nil, err
	}
	for i, eta := range sys.Damping() {
		if v := sys.Vectors()[i]; basis.Kinds[v] == modal.Elastic {
			r.Modes = append(r.Modes, kinds.ResponseMode{Number: len(r.Modes) + 1, Frequency: basis.Frequency[v], Damping: eta / 2})
		}
	}
	fleet.describe(r, p)
	if r.Lines, err = fleet.lines(ctx, sys, set.excitation(r.Thrust)); err != nil {
		return nil, err
	}
	report.Progress("rotor speeds", 0.85)
	if err := fleet.overSpeed(ctx, r, sys, rest, set, threads); err != nil {
		return nil, err
	}
	if err := fleet.speedMap(ctx, r, sys, rest, set, threads); err != nil {
		return nil, err
	}
	report.Progress("motions", 0.9)
	if err := motions(ctx, r, basis, fleet, sys, set, threads); err != nil {
		return nil, err
	}
	if err := points(ctx, r, named, fleet, sys, rest, set, threads); err != nil {
		return nil, err
	}
	if err := all.check(ctx, r, sys, set, threads, report); err != nil {
		return nil, err
	}
	report.Progress("shapes", 0.95)
	return r, shapes(r, sys, set)
}

// first is the lowest elastic frequency, NaN for none.
func first(basis *modal.Basis) float64 {
	for v, kind := range basis.Kinds {
		if kind == modal.Elastic {
			return basis.Frequency[v]
		}
	}
	return math.NaN()
}

// uncorrected fills in the spectrum without residual vectors and returns its
// system, nil when there is nothing to leave out.
func uncorrected(ctx context.Context, basis *modal.Basis, fleet *fleet, residual bool, grid []float64, set settings, threads int, r *kinds.Response) (*forced.System, error) {
	if !residual {
		for axis := range r.Uncorrected {
			for range grid {
				r.Uncorrected[axis] = append(r.Uncorrected[axis], math.NaN())
			}
		}
		return nil, nil
	}
	sys, err := forced.New(basis, fleet.options(set, false))
	if err != nil {
		return nil, err
	}
	rest, err := sys.Rest(ctx, grid, nil, threads)
	if err != nil {
		return nil, err
	}
	tr, err := rest.Transfer(sys.Momenta())
	if err != nil {
		return nil, err
	}
	r.Uncorrected = tr.Broadband(set.source).Density
	return sys, nil
}

// change gives the largest ratio of two curves in dB, with its sign, and where.
func change(frequency, with, without []float64) (db, at float64) {
	db, at = math.NaN(), math.NaN()
	for k := range frequency {
		x := 10 * math.Log10(with[k]/without[k])
		if !math.IsNaN(x) && !(math.Abs(x) <= math.Abs(db)) {
			db, at = x, frequency[k]
		}
	}
	return db, at
}

func findPeaks(r *kinds.Response, basis *modal.Basis, fleet *fleet, sys, plain *forced.System, sp *forced.Spectrum, set settings) error {
	peaks, err := sys.Peaks(sp, set.source, set.prominence)
	if err != nil {
		return err
	}
	number := make([]int, len(sys.Vectors())) // 0 for vectors that are no elastic mode
	count := 0
	for i, v := range sys.Vectors() {
		if basis.Kinds[v] == modal.Elastic {
			count++
			number[i] = count
		}
	}
	damping := sys.Damping()
	for _, p := range peaks {
		poles, modes, err := fleet.polesNear(p.Frequency, sys, set)
		if err != nil {
			return err
		}
		x := kinds.ResponsePeak{Axis: kinds.AxisNames[p.Axis], Frequency: p.Frequency, Density: p.Density, Prominence: p.Prominence,
			Damping: math.NaN(), Uncorrected: math.NaN(), ComponentShare: p.InputShare, RotorShares: p.RotorShares, ModeShares: make([]float64, count)}
		in := sys.Inputs()[p.Input]
		x.Rotor, x.Component = in.Rotor, in.Component
		for i, v := range sys.Vectors() {
			switch basis.Kinds[v] {
			case modal.RigidBody:
				x.Rigid += p.Shares[i]
			case modal.Residual:
				x.Residual += p.Shares[i]
			}
		}
		if poles == nil || !set.spinning {
			for i, share := range p.Shares {
				if number[i] > 0 {
					x.ModeShares[number[i]-1] = share
				}
			}
			for _, i := range p.Makers(leastShare) {
				if number[i] > 0 {
					if len(x.Modes) == 0 {
						x.Damping = damping[i] / 2
					}
					x.Modes, x.Shares = append(x.Modes, number[i]), append(x.Shares, p.Shares[i])
				}
			}
		} else if err := whirling(&x, &p, sys, set, poles, modes); err != nil {
			return err
		}
		if plain != nil {
			tr, err := plain.Transfer(context.Background(), []float64{p.Frequency}, 1)
			if err != nil {
				return err
			}
			x.Uncorrected = tr.Broadband(set.source).Density[p.Axis][0] / p.Density
		}
		q, err := sys.Drive(p.Frequency, p.Input)
		if err != nil {
			return err
		}
		x.Losses, x.LossShares = losses(basis, sys, p.Frequency, q)
		r.Peaks = append(r.Peaks, x)
	}
	return nil
}

// whirling names the natural motions of the spinning frame that make a peak.
func whirling(x *kinds.ResponsePeak, p *forced.Peak, sys *forced.System, set settings, poles []forced.Pole, modes []int) error {
	shares, err := sys.Attribute(p, set.source, poles)
	if err != nil {
		return err
	}
	x.Residual = 1 - x.Rigid
	for k, share := range shares {
		x.Residual -= share
		x.ModeShares[modes[k]-1] = share
	}
	by := forced.Peak{Shares: shares}
	for _, k := range by.Makers(leastShare) {
		if len(x.Modes) == 0 {
			x.Damping = poles[k].Damping
		}
		x.Modes, x.Shares = append(x.Modes, modes[k]), append(x.Shares, shares[k])
	}
	return nil
}

// losses names the groups that take the power, the greatest first.
func losses(basis *modal.Basis, sys *forced.System, frequency float64, q []complex128) (names []string, shares []float64) {
	power, _ := sys.Dissipation(frequency, q)
	total := 0.0
	order := make([]int, len(power))
	for g, w := range power {
		total += w
		order[g] = g
	}
	sort.SliceStable(order, func(a, b int) bool { return power[order[a]] > power[order[b]] })
	for _, g := range order {
		if share := power[g] / total; share >= leastShare {
			names = append(names, fmt.Sprintf("%s %s", basis.Groups[g].Kind, basis.Groups[g].Name))
			shares = append(shares, share)
		}
	}
	return names, shares
}

// thrust is the weight that one rotor carries at hover, N.
func thrust(p *airframe.Properties) float64 {
	mass := p.DeclaredMass
	if mass == 0 {
		for _, x := range p.Plates {
			mass += x.Mass
		}
		for _, x := range p.Standoffs {
			mass += x.Mass
		}
		for _, x := range p.Bolts {
			mass += x.Mass
		}
		for _, x := range p.Bodies {
			mass += x.Mass
		}
	}
	const gravity = 9.80665 // m/s², standard
	if !(mass > 0) || len(p.Rotors) == 0 {
		return math.NaN()
	}
	return mass * gravity / float64(len(p.Rotors))
}

// shapes keeps operating shapes: at the frequencies asked for under the
// component that is strongest at the nearest peak, or at the strongest peak of
// each axis.
func shapes(r *kinds.Response, sys *forced.System, set settings) error {
	var wanted []kinds.ResponseShape
	for _, f := range set.shapesAt {
		x := kinds.ResponseShape{Frequency: f, Rotor: sys.Inputs()[0].Rotor, Component: 2}
		near := math.Inf(1)
		for _, p := range r.Peaks {
			if d := math.Abs(p.Frequency - f); d < near {
				near, x.Rotor, x.Component = d, p.Rotor, p.Component
			}
		}
		wanted = append(wanted, x)
	}
	if len(set.shapesAt) == 0 {
		for _, axis := range kinds.AxisNames {
			if p, ok := strongest(r, axis); ok {
				wanted = append(wanted, kinds.ResponseShape{Frequency: p.Frequency, Axis: axis, Rotor: p.Rotor, Component: p.Component})
			}
		}
	}
	for _, x := range wanted {
		for j, in := range sys.Inputs() {
			if in.Rotor != x.Rotor || in.Component != x.Component {
				continue
			}
			q, err := sys.Drive(x.Frequency, j)
			if err != nil {
				return err
			}
			for _, u := range sys.Nodes(q) {
				x.Real, x.Imaginary = append(x.Real, real(u)), append(x.Imaginary, imag(u))
			}
		}
		r.Shapes = append(r.Shapes, x)
	}
	return nil
}

// strongest gives the highest peak of an axis.
func strongest(r *kinds.Response, axis string) (kinds.ResponsePeak, bool) {
	var best kinds.ResponsePeak
	found := false
	for _, p := range r.Peaks {
		if p.Axis == axis && (!found || p.Density > best.Density) {
			best, found = p, true
		}
	}
	return best, found
}
