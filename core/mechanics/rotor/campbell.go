package rotor

import (
	"context"
	"fmt"
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/numeric/dense"
)

// Fleet is the rotors of one frame, whose speeds keep the ratios that they have
// at hover. Rotor 0 is the reference for speeds.
type Fleet struct {
	Rotors []airframe.Rotor
	// couplings at hover, one per rotor, in the order of Rotors
	couplings []forced.Gyroscopic
}

// NewFleet takes the rotors with their couplings at hover, as Couplings gives
// them. It panics when these differ in number, or there are none; it fails when a rotor does not turn at
// hover.
func NewFleet(rotors []airframe.Rotor, couplings []forced.Gyroscopic) (*Fleet, error) {
	if len(rotors) == 0 || len(rotors) != len(couplings) {
		panic(fmt.Sprintf("rotor: %d rotors with %d couplings", len(rotors), len(couplings)))
	}
	for _, r := range rotors {
		if !(r.HoverSpeed > 0) {
			return nil, fmt.Errorf("rotor %s has a hover speed of %g rad/s", r.Name, r.HoverSpeed)
		}
	}
	return &Fleet{rotors, couplings}, nil
}

// Ratio is the speed of a rotor over that of the reference.
func (f *Fleet) Ratio(r int) float64 { return f.Rotors[r].HoverSpeed / f.Rotors[0].HoverSpeed }

// Momenta gives the angular momenta at a speed of the reference in rad/s, N·m·s.
func (f *Fleet) Momenta(speed float64) []float64 {
	out := make([]float64, len(f.Rotors))
	for r, x := range f.Rotors {
		out[r] = Momentum(x, speed*f.Ratio(r))
	}
	return out
}

// Direction tells how the rotors tilt in a motion with modal coordinates q over
// the vectors of the system: +1 when all tilts go round with the spin of their
// rotor (forward), −1 against it (backward), 0 when they go to and fro; weighted by polar inertia and the
// square of the tilt. NaN when no rotor tilts.
func (f *Fleet) Direction(vectors []int, q []complex128) float64 {
	sum, total := 0.0, 0.0
	for r, x := range f.Rotors {
		var a, b complex128
		for i, v := range vectors {
			a += q[i] * complex(f.couplings[r].First[v], 0)
			b += q[i] * complex(f.couplings[r].Second[v], 0)
		}
		// e^{iωt} with b = −i·a turns from e₁ to e₂.
		with, against := square(a+1i*b), square(a-1i*b)
		sum += x.PolarInertia * float64(x.Spin) * (with - against)
		total += x.PolarInertia * (with + against)
	}
	return sum / total
}

func square(z complex128) float64 { return real(z)*real(z) + imag(z)*imag(z) }

// Diagram holds natural frequencies over rotor speed (W. Campbell, Protection of steam
// turbine disk wheels from axial vibration, 1924) and the speeds at which orders meet them.
type Diagram struct {
	Speeds   []float64 // of the reference, rad/s, ascending from 0
	Lines    []Line    // by frequency at rest
	Critical []Critical
}

// Line is one natural motion followed from rest over the speeds; NaN where it
// could not be followed or lies beyond the range.
type Line struct {
	// Mode is the place among the elastic modes of the basis, from 0, of the mode that it is at rest.
	Mode      int
	Frequency []float64 // Hz
	Damping   []float64 // damping ratio
	Whirl     []float64 // see Fleet.Direction
	shapes    [][]complex128
	// begun is the motion with all laws as they are at one frequency; without shape where it was not followed.
	begun []forced.Pole
}

// Pole is the motion of the line at speed k; ok is false where it could not be
// followed.
func (l *Line) Pole(k int) (pole forced.Pole, ok bool) {
	return forced.Pole{Frequency: l.Frequency[k], Damping: l.Damping[k], Shape: l.shapes[k]}, l.shapes[k] != nil
}

// Critical is a speed at which an order of some rotors has the frequency of a
// natural motion, with the gyroscopic effect at that very speed.
type Critical struct {
	Order     int
	Rotors    []int   // whose order it is; all have the same speed
	Speed     float64 // of these rotors, rad/s
	Frequency float64 // Hz
	Damping   float64
	Whirl     float64
	Line      int // index into Diagram.Lines, -1 for none
}

// Campbell follows the poles of a system from rest to the given speeds of the
// reference (rad/s, ascending from 0) on some threads, for elastic modes from
// 0 Hz up to a frequency; elastic lists the places of the elastic modes among the vectors of the system.
// Critical speeds are those up to the last speed. Stiffness that depends on frequency is taken at that of each motion;
// the search begins with it as it is at lawsAt, Hz. The result does not depend on threads.
func (f *Fleet) Campbell(ctx context.Context, s *forced.System, elastic []int, speeds []float64, lawsAt, upTo float64, threads int) (*Diagram, error) {
	if len(speeds) == 0 || speeds[0] != 0 || !sort.Float64sAreSorted(speeds) {
		panic("rotor: the speeds of a diagram ascend from 0")
	}
	core, err := s.CoreAt(lawsAt)
	if err != nil {
		return nil, err
	}
	const margin = 1.5 // lines may leave the range upward and come back
	poles := make([][]forced.Pole, len(speeds))
	failed := make([]error, len(speeds))
	dense.Parallel(threads, len(speeds), func(k int) {
		if failed[k] = ctx.Err(); failed[k] == nil {
			poles[k], failed[k] = core.Poles(f.Momenta(speeds[k]), 1, margin*upTo)
		}
	})
	for _, err := range failed {
		if err != nil {
			return nil, err
		}
	}
	d := &Diagram{Speeds: speeds, Lines: begin(poles[0], elastic, len(speeds), upTo)}
	d.follow(poles)
	dense.Parallel(threads, len(d.Lines), func(i int) {
		for k, speed := range speeds {
			d.Lines[i].settle(f, core, s.Vectors(), k, f.Momenta(speed))
		}
	})
	if err := d.critical(f, core, s.Vectors(), upTo); err != nil {
		return nil, err
	}
	return d, nil
}

// begin makes one line of each pole at rest that is mostly one elastic mode.
func begin(poles []forced.Pole, elastic []int, speeds int, upTo float64) []Line {
	score := func(mode, p int) float64 { return square(poles[p].Shape[elastic[mode]]) }
	var lines []Line
	for mode, p := range match(len(elastic), len(poles), score) {
		if p < 0 || poles[p].Frequency > upTo {
			continue
		}
		l := Line{Mode: mode, shapes: make([][]complex128, speeds), begun: make([]forced.Pole, speeds)}
		for range speeds {
			l.Frequency, l.Damping, l.Whirl = append(l.Frequency, math.NaN()), append(l.Damping, math.NaN()), append(l.Whirl, math.NaN())
		}
		l.begun[0] = poles[p]
		lines = append(lines, l)
	}
	return lines
}

// follow carries each line from speed to speed to the pole whose shape and
// frequency are most like the last of the line.
func (d *Diagram) follow(poles [][]forced.Pole) {
	last := make([]int, len(d.Lines)) // speed at which the line was last seen
	for k := range d.Speeds {
		score := func(line, p int) float64 {
			from := d.Lines[line].begun[last[line]]
			off := (poles[k][p].Frequency/from.Frequency - 1) / 0.05
			return forced.Likeness(from.Shape, poles[k][p].Shape) / (1 + off*off)
		}
		for line, p := range match(len(d.Lines), len(poles[k]), score) {
			if p >= 0 {
				d.Lines[line].begun[k] = poles[k][p]
				last[line] = k
			}
		}
	}
}

// settle fills in the line at speed k with the laws at its own frequency.
func (l *Line) settle(f *Fleet, core *forced.Core, vectors []int, k int, momenta []float64) {
	if l.begun[k].Shape == nil {
		return
	}
	var p forced.Pole
	ok := false
	if k > 0 && l.shapes[k-1] != nil && l.begun[k-1].Shape != nil {
		near, _ := l.Pole(k - 1)
		near.Frequency *= l.begun[k].Frequency / l.begun[k-1].Frequency
		p, ok = core.Continue(near, momenta, nil)
	}
	if !ok {
		p, ok = core.Settle(l.begun[k], momenta, nil)
	}
	if !ok {
		return
	}
	l.Frequency[k], l.Damping[k], l.shapes[k] = p.Frequency, p.Damping, p.Shape
	l.Whirl[k] = f.Direction(vectors, p.Shape)
}

// Recognise says which line each of some poles continues at speed k: places in
// Lines, −1 for none. The poles are of the same frame with all laws taken at some frequency.
func (d *Diagram) Recognise(poles []forced.Pole, k int) []int {
	score := func(line, p int) float64 {
		from := d.Lines[line].begun[k]
		if from.Shape == nil {
			return 0
		}
		off := (poles[p].Frequency/from.Frequency - 1) / 0.2
		return forced.Likeness(from.Shape, poles[p].Shape) / (1 + off*off)
	}
	out := make([]int, len(poles))
	for p := range out {
		out[p] = -1
	}
	for line, p := range match(len(d.Lines), len(poles), score) {
		if p >= 0 {
			out[p] = line
		}
	}
	return out
}

// match pairs rows with columns, the highest score first, each once; -1 for a
// row left without. Scores below a tenth are no pair.
func match(rows, cols int, score func(row, col int) float64) []int {
	type pair struct {
		row, col int
		score    float64
	}
	var all []pair
	for i := range rows {
		for j := range cols {
			if x := score(i, j); x >= 0.1 {
				all = append(all, pair{i, j, x})
			}
		}
	}
	sort.SliceStable(all, func(a, b int) bool { return all[a].score > all[b].score })
	out, taken := make([]int, rows), make([]bool, cols)
	for i := range out {
		out[i] = -1
	}
	for _, p := range all {
		if out[p.row] < 0 && !taken[p.col] {
			out[p.row], taken[p.col] = p.col, true
		}
	}
	return out
}

// critical finds the critical speeds of orders 1, 2, blade passing and twice
// that, for each set of rotors with one speed and number of blades.
func (d *Diagram) critical(f *Fleet, core *forced.Core, vectors []int, upTo float64) error {
	highest := d.Speeds[len(d.Speeds)-1]
	done := make([]bool, len(f.Rotors))
	for first, x := range f.Rotors {
		if done[first] {
			continue
		}
		var alike []int
		for r, y := range f.Rotors {
			if y.HoverSpeed == x.HoverSpeed && y.Blades == x.Blades {
				alike, done[r] = append(alike, r), true
			}
		}
		for _, order := range orders(x.Blades) {
			ratio := make([]float64, len(f.Rotors))
			for r := range ratio {
				ratio[r] = Momentum(f.Rotors[r], f.Ratio(r)/f.Ratio(first)/float64(order))
			}
			poles, err := core.Synchronous(ratio, 1, upTo)
			if err != nil {
				return err
			}
			for _, p := range core.SettleAll(poles, nil, ratio) {
				// The order meets the frequency of the motion, Re λ.
				omega := 2 * math.Pi * p.Frequency * math.Sqrt(1-p.Damping*p.Damping)
				c := Critical{Order: order, Rotors: alike, Speed: omega / float64(order), Frequency: omega / (2 * math.Pi),
					Damping: p.Damping, Whirl: f.Direction(vectors, p.Shape)}
				at := c.Speed / f.Ratio(first)
				if at > highest*(1+1e-12) {
					continue
				}
				if c.Line = d.nearest(at, p); c.Line >= 0 {
					d.Critical = append(d.Critical, c)
				}
			}
		}
	}
	return nil
}

// nearest is the line that a pole at a speed of the reference belongs to.
func (d *Diagram) nearest(speed float64, p forced.Pole) int {
	k := sort.SearchFloat64s(d.Speeds, speed)
	if k == len(d.Speeds) || k > 0 && d.Speeds[k]-speed > speed-d.Speeds[k-1] {
		k--
	}
	best, at := 0.1, -1
	for i, l := range d.Lines {
		if l.shapes[k] == nil {
			continue
		}
		off := (p.Frequency/l.Frequency[k] - 1) / 0.05
		if x := forced.Likeness(l.shapes[k], p.Shape) / (1 + off*off); x > best {
			best, at = x, i
		}
	}
	return at
}

// orders lists 1, 2, the number of blades and twice that, ascending.
func orders(blades int) []int {
	var out []int
	for _, k := range []int{1, 2, blades, 2 * blades} {
		seen := k < 1
		for _, have := range out {
			seen = seen || have == k
		}
		if !seen {
			out = append(out, k)
		}
	}
	sort.Ints(out)
	return out
}
