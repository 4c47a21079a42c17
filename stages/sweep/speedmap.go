package sweep

import (
	"context"
	"math"
	"slices"
	"sync"

	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/rotor"
	"hushframe/stages/kinds"
)

// mostBands bounds the bands of the map over rotor speed.
const mostBands = 400

// speedMap fills in the broadband spectrum over rotor speed: at the speeds of the lines, in even bands not
// narrower than the resolution. There is none where rotors have no speeds.
func (f *fleet) speedMap(ctx context.Context, r *kinds.Response, sys *forced.System, rest *forced.Rest, set settings, threads int) error {
	if len(r.MapSpeeds) == 0 {
		return nil
	}
	bands := max(1, min(mostBands, int((set.to-set.from)/set.step)))
	m := &r.Map
	m.Width = (set.to - set.from) / float64(bands)
	for k := range bands {
		m.Frequency = append(m.Frequency, set.from+m.Width*(float64(k)+0.5))
	}
	m.Rows = make([]kinds.ResponseMapRow, len(r.MapSpeeds))
	core, err := f.narrow(r, sys, set)
	if err != nil {
		return err
	}
	failed := make([]error, len(m.Rows))
	var group sync.WaitGroup
	threads = max(1, min(threads, len(m.Rows)))
	for w := range threads {
		group.Go(func() {
			for k := w; k < len(m.Rows); k += threads {
				if failed[k] = ctx.Err(); failed[k] == nil {
					m.Rows[k], failed[k] = f.mapRow(ctx, m, r.MapSpeeds[k], sys, core, rest, set)
				}
			}
		})
	}
	group.Wait()
	for _, err := range failed {
		if err != nil {
			return err
		}
	}
	return nil
}

// narrow gives the core of the system when some motion is too lightly damped for the
// frequencies of the sweep to find it at another speed; else nil.
func (f *fleet) narrow(r *kinds.Response, sys *forced.System, set settings) (*forced.Core, error) {
	if !set.spinning {
		return nil, nil
	}
	for _, w := range r.Whirl {
		for k, freq := range w.Frequency {
			if freq >= set.from && freq <= set.to && thin(freq, w.Damping[k], set) {
				return sys.CoreAt(set.middle())
			}
		}
	}
	return nil, nil
}

// thin tells a resonance with fewer than two steps of the sweep within its
// half-power width.
func thin(frequency, damping float64, set settings) bool { return 2*damping*frequency < 2*set.step }

// momenta are those of all rotors at a speed of the first; those of a frame
// whose rotors are taken as still are none.
func (f *fleet) momenta(speed float64, set settings) []float64 {
	if !set.spinning {
		return nil
	}
	var out []float64
	for k, x := range f.rotors {
		out = append(out, rotor.Momentum(x, speed*f.ratio(k)))
	}
	return out
}

// ratio is the speed of a rotor over that of the first.
func (f *fleet) ratio(k int) float64 {
	if f.rotors[0].HoverSpeed > 0 {
		return f.rotors[k].HoverSpeed / f.rotors[0].HoverSpeed
	}
	return 1
}

func (f *fleet) mapRow(ctx context.Context, m *kinds.ResponseMap, speed float64, sys *forced.System, core *forced.Core, rest *forced.Rest, set settings) (kinds.ResponseMapRow, error) {
	row := kinds.ResponseMapRow{Speed: speed}
	momenta := f.momenta(speed, set)
	density, err := spectrumAt(rest, sys, momenta, set)
	if err != nil {
		return row, err
	}
	frequency := rest.Frequency
	if core != nil {
		if frequency, density, err = sharpen(ctx, frequency, density, sys, core, momenta, set); err != nil {
			return row, err
		}
	}
	for axis := range density {
		row.Density[axis] = means(frequency, density[axis], m.Frequency, m.Width)
	}
	return row, nil
}

// spectrumAt gives the broadband density per axis at the frequencies of the
// sweep, at some angular momenta.
func spectrumAt(rest *forced.Rest, sys *forced.System, momenta []float64, set settings) (density [3][]float64, err error) {
	for axis := range density {
		density[axis] = make([]float64, len(rest.Frequency))
	}
	reader := rest.Reader()
	for k, f := range rest.Frequency {
		if err := reader.At(k, momenta); err != nil {
			return density, err
		}
		for axis, rates := range reader.Rates {
			density[axis][k] = set.source.Density(f, sys.Inputs(), rates)
		}
	}
	return density, nil
}

// sharpen adds the frequencies about thin resonances of this speed.
func sharpen(ctx context.Context, frequency []float64, density [3][]float64, sys *forced.System, core *forced.Core, momenta []float64, set settings) ([]float64, [3][]float64, error) {
	const margin = 1.5 // laws may bring a motion in or out
	poles, err := core.Poles(momenta, set.from/margin, margin*set.to)
	if err != nil {
		return nil, density, err
	}
	var sharp []forced.Resonance
	for _, p := range core.SettleAll(poles, momenta, nil) {
		if thin(p.Frequency, p.Damping, set) {
			sharp = append(sharp, forced.Resonance{Frequency: p.Frequency, LossFactor: 2 * p.Damping})
		}
	}
	more := forced.Around(set.from, set.to, sharp)
	if len(more) == 0 {
		return frequency, density, nil
	}
	tr, err := sys.Spun(momenta).Transfer(ctx, more, 1)
	if err != nil {
		return nil, density, err
	}
	all := slices.Concat(frequency, more)
	added := tr.Broadband(set.source)
	order := make([]int, len(all))
	for k := range order {
		order[k] = k
	}
	slices.SortStableFunc(order, func(a, b int) int {
		switch {
		case all[a] < all[b]:
			return -1
		case all[a] > all[b]:
			return 1
		}
		return 0
	})
	out := make([]float64, len(all))
	for i, k := range order {
		out[i] = all[k]
	}
	for axis := range density {
		y := slices.Concat(density[axis], added.Density[axis])
		sorted := make([]float64, len(y))
		for i, k := range order {
			sorted[i] = y[k]
		}
		density[axis] = sorted
	}
	return out, density, nil
}

// means gives the mean of a curve, taken as straight between its points,
// within even bands about the middles.
func means(x, y, middles []float64, width float64) []float64 {
	out := make([]float64, len(middles))
	k, area := 0, 0.0 // area up to x[k]
	upTo := func(at float64) float64 {
		for k+2 < len(x) && x[k+1] <= at {
			area += (x[k+1] - x[k]) * (y[k] + y[k+1]) / 2
			k++
		}
		d := math.Min(at, x[k+1]) - x[k]
		slope := 0.0
		if x[k+1] > x[k] {
			slope = (y[k+1] - y[k]) / (x[k+1] - x[k])
		}
		return area + d*(y[k]+slope*d/2)
	}
	before := upTo(middles[0] - width/2)
	for i, f := range middles {
		after := upTo(f + width/2)
		out[i] = (after - before) / width
		before = after
	}
	return out
}
