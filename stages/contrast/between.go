// Package contrast says what a change did to a frame: it sets two states of it side by side, from two branches of one job
// (the stage "contrast") or from two runs (Between, for the program).
package contrast

import (
	"fmt"
	"math"
	"slices"
	"sort"

	"hushframe/core/match"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/counterpart"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
)

// Side is one state of the frame; what is not known of it is nil. Modes need their mesh to be followed.
type Side struct {
	Mesh       *mesh.Mesh
	Modes      *kinds.Modes
	Response   *kinds.Response
	Properties *airframe.Properties // inertia of the bodies, for the shapes; masses where there are no modes
}

// Options are settings of Between; the zero value of each field means its default.
type Options struct {
	match.TrackOptions
	// From and To, in Hz, narrow the range in which responses are set side by side; 0 leaves an end to the sweeps.
	From, To float64
}

// Between sets two states side by side. What either side lacks is left out. A range that the sweeps do not reach gives an
// error.
func Between(before, after Side, o Options) (*kinds.Difference, error) {
	nan := math.NaN()
	d := &kinds.Difference{SharedBefore: nan, SharedAfter: nan, MassBefore: nan, MassAfter: nan, From: nan, To: nan}
	sides := [2]Side{before, after}
	masses(d, sides)
	var partner map[int]float64
	if before.Modes != nil && after.Modes != nil && before.Mesh != nil && after.Mesh != nil {
		partner = modes(d, sides, o.TrackOptions)
	}
	if before.Response != nil && after.Response != nil {
		if err := response(d, before.Response, after.Response, partner, o); err != nil {
			return nil, err
		}
	}
	return d, nil
}

// masses sets the masses side by side, in the order of the side before, then what only the side after has.
func masses(d *kinds.Difference, sides [2]Side) {
	var rows [2][]kinds.MassRow
	for k, s := range sides {
		switch {
		case s.Modes != nil:
			rows[k] = s.Modes.Masses
		case s.Properties != nil:
			rows[k] = carriers(s.Properties)
		default:
			return
		}
	}
	type key struct{ name, kind string }
	at := map[key]int{}
	totals := [2]float64{}
	for k := range rows {
		for _, r := range rows[k] {
			id := key{r.Name, r.Kind}
			i, ok := at[id]
			if !ok {
				i = len(d.Masses)
				at[id] = i
				d.Masses = append(d.Masses, kinds.MassChange{Name: r.Name, Kind: r.Kind})
			}
			d.Masses[i].Mass[k] += r.Mass
			totals[k] += r.Mass
		}
	}
	d.MassBefore, d.MassAfter = totals[0], totals[1]
}

// carriers lists what has mass, by the names that modes have.
func carriers(p *airframe.Properties) (rows []kinds.MassRow) {
	for _, x := range p.Plates {
		rows = append(rows, kinds.MassRow{Name: x.Plate, Kind: "part", Mass: x.Mass})
	}
	for _, x := range p.Standoffs {
		rows = append(rows, kinds.MassRow{Name: x.Standoff, Kind: "part", Mass: x.Mass})
	}
	for _, x := range p.Bodies {
		rows = append(rows, kinds.MassRow{Name: x.Name, Kind: "body", Mass: x.Mass, Centre: x.Centre})
	}
	bolts := kinds.MassRow{Name: "bolts", Kind: "body"}
	for _, x := range p.Bolts {
		bolts.Mass += x.Mass
	}
	if bolts.Mass > 0 {
		rows = append(rows, bolts)
	}
	return rows
}

// modes follows the modes and gives, for each mode before that has a partner, the ratio of frequencies.
func modes(d *kinds.Difference, sides [2]Side, o match.TrackOptions) map[int]float64 {
	common := counterpart.Read(frame(sides[0]), frame(sides[1]))
	d.SharedBefore, d.SharedAfter = common.Shared[0], common.Shared[1]
	for k, side := range []string{kinds.Before, kinds.After} {
		for _, name := range common.Alone[k] {
			d.Unshared = append(d.Unshared, kinds.Unshared{Side: side, Name: name})
		}
	}
	surveys := [2]*modal.Survey{sides[0].Modes.Survey, sides[1].Modes.Survey}
	shapes := [2]match.Shapes{}
	for k, motion := range [][][]float64{common.A, common.B} {
		shapes[k] = shapesOf(sides[k].Modes, motion)
	}
	t := match.Track(shapes[0], shapes[1], common.Weights, o)
	ratios := map[int]float64{}
	for _, p := range t.Pairs {
		a, b := surveys[0].Modes[p.Before], surveys[1].Modes[p.After]
		d.Modes = append(d.Modes, kinds.ModeChange{
			Number: [2]int{a.Number, b.Number}, Frequency: [2]float64{a.Frequency, b.Frequency}, Damping: [2]float64{a.Loss / 2, b.Loss / 2},
			Assurance: p.MAC, Strength: [2][3]float64{a.Strength, b.Strength}, Part: a.Part, Motion: a.Motion,
		})
		ratios[a.Number] = b.Frequency / a.Frequency
	}
	var shifts []float64
	for _, r := range ratios {
		shifts = append(shifts, r)
	}
	slices.Sort(shifts)
	typical := 1.0
	if n := len(shifts); n > 0 {
		typical = shifts[n/2]
	}
	least := o.Least
	if least == 0 {
		least = match.DefaultLeast
	}
	columns := len(shapes[1].Motion)
	for _, i := range t.Lost {
		d.Alone = append(d.Alone, without(kinds.Before, surveys[0].Modes[i], surveys[1].Modes, sides[1].Modes.UpTo/typical, least,
			func(j int) float64 { return t.MAC[i*columns+j] }))
	}
	for _, j := range t.New {
		d.Alone = append(d.Alone, without(kinds.After, surveys[1].Modes[j], surveys[0].Modes, sides[0].Modes.UpTo*typical, least,
			func(i int) float64 { return t.MAC[i*columns+j] }))
	}
	return ratios
}

// shapesOf orders the motion of the elastic vectors by the modes of the survey.
func shapesOf(m *kinds.Modes, motion [][]float64) match.Shapes {
	row := map[int]int{}
	for v, kind := range m.Basis.Kinds {
		if kind == modal.Elastic {
			row[v] = len(row)
		}
	}
	var s match.Shapes
	for _, x := range m.Survey.Modes {
		s.Frequency, s.Motion = append(s.Frequency, x.Frequency), append(s.Motion, motion[row[x.Vector]])
	}
	return s
}

// atLimit is how near to the end of what was solved a mode must come, with the shift that is typical of the others, to be
// thought beyond it, as a share of frequency.
const atLimit = 0.15

// whole is the share of a motion from which other modes make all of it together.
const whole = 0.8

// without says why a mode has no partner. A partner above limit, on the scale of this side, may lie where the other was not
// solved; mac gives how like it each mode of the other side is.
func without(side string, m modal.Mode, others []modal.Mode, limit, least float64, mac func(k int) float64) kinds.ModeWithout {
	x := kinds.ModeWithout{Side: side, Number: m.Number, Frequency: m.Frequency}
	for k, other := range others {
		v := mac(k)
		x.Spanned += v
		if v > x.Assurance {
			x.Nearest, x.Assurance = other.Number, v
		}
	}
	x.Spanned = math.Min(1, x.Spanned)
	switch {
	case len(others) == 0:
		x.Reason = "the other side has no modes"
	case x.Spanned < whole && m.Frequency > (1-atLimit)*limit:
		x.Reason = "its like may lie above what was solved on the other side"
	case x.Assurance >= least:
		x.Reason = fmt.Sprintf("mode %d, most like it, goes better with another", x.Nearest)
	case x.Spanned >= whole:
		x.Reason = "its motion is shared out among several modes"
	default:
		x.Reason = "nothing on the other side moves like it"
	}
	return x
}

// frame gives a side as the kernel takes it.
func frame(s Side) counterpart.Frame {
	f := counterpart.Frame{Mesh: s.Mesh, Basis: s.Modes.Basis, Masses: map[string]float64{}}
	inertia := map[string][3]float64{}
	if s.Properties != nil {
		for _, b := range s.Properties.Bodies {
			inertia[b.Name] = [3]float64(b.Inertia[:3])
		}
	}
	for _, m := range s.Modes.Masses {
		if m.Kind == "part" {
			f.Masses[m.Name] = m.Mass
			continue
		}
		f.Solids = append(f.Solids, counterpart.Solid{Name: m.Name, Mass: m.Mass, Centre: m.Centre, Inertia: inertia[m.Name]})
	}
	sort.Slice(f.Solids, func(i, j int) bool { return f.Solids[i].Name < f.Solids[j].Name })
	return f
}
