package sweep

import (
	"context"
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/rotor"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/stages/kinds"
)

// readSpeed reads rotor_speed; NaN stands for hover.
func readSpeed(text string) (spinning bool, speed float64, err error) {
	switch text {
	case "hover":
		return true, math.NaN(), nil
	case "none":
		return false, math.NaN(), nil
	}
	q, err := quantity.ParseAs(text, "rotational speed")
	if err != nil {
		return false, 0, fault.From(err).In("sweep", "").Of("rotor_speed").Do(`write "hover", "none" or a speed such as "16000 rpm"`)
	}
	if !(q.SI > 0) {
		return false, 0, fault.New(fault.Input, "rotors do not turn at %s", text).In("sweep", "").Of("rotor_speed").
			Do(`write "none" to leave gyroscopic moments out, or a speed above 0 rpm`)
	}
	return true, q.SI, nil
}

// fleet is the rotors with the speeds of this response.
type fleet struct {
	rotors    []airframe.Rotor
	speeds    []float64 // rad/s
	couplings []forced.Gyroscopic
	diagram   *rotor.Diagram // nil when nothing whirls
	upTo      float64        // of the diagram, Hz
	flown     [][]normal     // speeds over a flight, per rotor
}

// newFleet takes the rotors that have a site; properties and basis may come
// from files of different age, and a rotor without a site does nothing.
func newFleet(b *modal.Basis, p *airframe.Properties, recorded *kinds.Spectra, set settings) (*fleet, error) {
	f := &fleet{rotors: p.Rotors}
	if len(p.Rotors) == 0 {
		return f, nil
	}
	for _, r := range p.Rotors {
		speed := r.HoverSpeed
		if !math.IsNaN(set.speed) {
			speed = set.speed
			if first := p.Rotors[0].HoverSpeed; first > 0 {
				speed *= r.HoverSpeed / first
			}
		}
		f.speeds = append(f.speeds, speed)
	}
	var err error
	if f.couplings, err = rotor.Couplings(b, p.Rotors, f.speeds); err != nil {
		return nil, err
	}
	return f, f.fly(set, recorded)
}

// options are those of a system with these rotors.
func (f *fleet) options(set settings, residual bool) forced.Options {
	o := forced.Options{DropResidual: !residual}
	if set.spinning {
		o.Gyroscopic = f.couplings
	}
	return o
}

// describe fills in the table of rotors.
func (f *fleet) describe(r *kinds.Response, p *airframe.Properties) {
	for k, x := range f.rotors {
		row := kinds.ResponseRotor{Rotor: x.Name, Blades: x.Blades, Hover: x.HoverSpeed, Highest: x.MaxSpeed,
			Speed: f.speeds[k], Polar: x.PolarInertia, Tilt: math.NaN(), Equal: math.NaN(), Bell: math.NaN(), Propeller: math.NaN()}
		if x.BellInertia > 0 || x.PropellerInertia > 0 {
			row.Bell, row.Propeller = x.BellInertia, x.PropellerInertia
		}
		for _, body := range p.Bodies {
			if body.Name == x.Body {
				balance := rotor.BalanceOf(x, body, f.speeds[k])
				row.Tilt, row.Equal = balance.Tilt, balance.Equal
			}
		}
		r.Rotors = append(r.Rotors, row)
	}
}

// poles gives the natural motions at the speed of this response, by frequency,
// and the number of the mode that each is at rest; none without a diagram.
func (f *fleet) poles(set settings) (poles []forced.Pole, modes []int) {
	if f.diagram == nil {
		return nil, nil
	}
	k := 0
	if set.spinning {
		k = at(f.diagram.Speeds, f.speeds[0])
	}
	type motion struct {
		pole forced.Pole
		mode int
	}
	var all []motion
	for i := range f.diagram.Lines {
		l := &f.diagram.Lines[i]
		if p, ok := l.Pole(k); ok {
			all = append(all, motion{p, l.Mode + 1})
		}
	}
	sort.SliceStable(all, func(i, j int) bool { return all[i].pole.Frequency < all[j].pole.Frequency })
	for _, x := range all {
		poles, modes = append(poles, x.pole), append(modes, x.mode)
	}
	return poles, modes
}

// polesNear are the poles with mounts of a law taken as at a frequency, each
// recognised by its shape; those of the diagram where no stiffness varies.
func (f *fleet) polesNear(frequency float64, sys *forced.System, set settings) (poles []forced.Pole, modes []int, err error) {
	if f.diagram == nil || !sys.Varies() {
		poles, modes = f.poles(set)
		return poles, modes, nil
	}
	core, err := sys.Frozen(frequency).Core()
	if err != nil {
		return nil, nil, err
	}
	all, err := core.Poles(sys.Momenta(), 1, 1.5*f.upTo)
	if err != nil {
		return nil, nil, err
	}
	k := 0
	if set.spinning {
		k = at(f.diagram.Speeds, f.speeds[0])
	}
	for i, line := range f.diagram.Recognise(all, k) {
		if line >= 0 {
			poles, modes = append(poles, all[i]), append(modes, f.diagram.Lines[line].Mode+1)
		}
	}
	return poles, modes, nil
}

// separate compares neighbours of which one lies within the sweep.
func (f *fleet) separate(r *kinds.Response, sys *forced.System, set settings) error {
	poles, modes := f.poles(set)
	for k := 1; k < len(poles); k++ {
		a, b := poles[k-1], poles[k]
		if b.Frequency < set.from || a.Frequency > set.to {
			continue
		}
		near, names, err := f.polesNear(math.Sqrt(a.Frequency*b.Frequency), sys, set)
		if err != nil {
			return err
		}
		for i, name := range names {
			switch name {
			case modes[k-1]:
				a = near[i]
			case modes[k]:
				b = near[i]
			}
		}
		lower, upper := modes[k-1], modes[k]
		if a.Frequency > b.Frequency { // a law brings them past one another
			a, b, lower, upper = b, a, upper, lower
		}
		s := sys.Separate(a, b, set.source)
		r.Separations = append(r.Separations, kinds.ResponseSeparation{Lower: lower, Upper: upper, At: a.Frequency, Gap: s.Gap, Bandwidths: s.Bandwidths,
			LowerAlone: s.Alone[0], UpperAlone: s.Alone[1], Amplification: s.Amplification})
	}
	return nil
}

// whirlSteps is the number of even steps from rest to the highest speed.
const whirlSteps = 40

// whirl follows the natural motions over rotor speed. Frames whose rotors have
// no hover speed, no highest speed or no polar inertia have no such table.
func (f *fleet) whirl(ctx context.Context, r *kinds.Response, basis *modal.Basis, residual bool, set settings, threads int) error {
	inertia := 0.0
	for _, x := range f.rotors {
		inertia += x.PolarInertia
	}
	highest := f.highest()
	if !(highest > 0 && inertia > 0) {
		return nil
	}
	sys, err := forced.New(basis, forced.Options{DropResidual: !residual, Gyroscopic: f.couplings})
	if err != nil {
		return err
	}
	list, err := rotor.NewFleet(f.rotors, f.couplings)
	if err != nil {
		return err
	}
	var elastic []int
	upTo := 0.0
	for i, v := range sys.Vectors() {
		if basis.Kinds[v] == modal.Elastic {
			elastic = append(elastic, i)
			upTo = max(upTo, 1.1*basis.Frequency[v])
		}
	}
	d, err := list.Campbell(ctx, sys, elastic, ladder(highest, f.rotors[0].HoverSpeed, f.speeds[0]), set.middle(), upTo, threads)
	if err != nil {
		return err
	}
	f.diagram, f.upTo = d, upTo
	r.Speeds = d.Speeds
	for _, l := range d.Lines {
		if math.IsNaN(l.Frequency[0]) {
			continue // a law damps it so that it does not swing
		}
		r.Whirl = append(r.Whirl, kinds.ResponseWhirl{Mode: l.Mode + 1, Frequency: l.Frequency, Damping: l.Damping, Direction: l.Whirl})
	}
	for _, c := range d.Critical {
		if c.Frequency > set.to {
			continue
		}
		x := kinds.ResponseCritical{Order: c.Order, Speed: c.Speed, Frequency: c.Frequency, Damping: c.Damping, Direction: c.Whirl, Mode: d.Lines[c.Line].Mode + 1}
		for _, k := range c.Rotors {
			x.Rotors = append(x.Rotors, f.rotors[k].Name)
		}
		r.Critical = append(r.Critical, x)
	}
	return nil
}

// middle is the frequency of the sweep from which the search for natural motions under
// laws over frequency begins.
func (s settings) middle() float64 { return math.Sqrt(s.from * s.to) }

// ladder gives even speeds from 0 to the highest with the marked ones among
// them.
func ladder(highest float64, marked ...float64) []float64 {
	var out []float64
	for k := range whirlSteps + 1 {
		out = append(out, highest*float64(k)/whirlSteps)
	}
	for _, x := range marked {
		near := false
		for _, have := range out {
			near = near || math.Abs(have-x) < 1e-9*highest
		}
		if !near && x > 0 {
			out = append(out, x)
		}
	}
	sort.Float64s(out)
	return out
}

// at is the place of a speed among the speeds of the whirl table, -1 for none.
func at(speeds []float64, speed float64) int {
	for k, x := range speeds {
		if math.Abs(x-speed) <= 1e-9*speeds[len(speeds)-1] {
			return k
		}
	}
	return -1
}
