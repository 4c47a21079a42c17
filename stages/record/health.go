package record

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// Thresholds of findings; common practice.
const (
	loudSteps  = 0.25 // noise of quantisation over the floor that is worth a word
	steepFloor = -9.0 // dB per octave, of a floor behind a low-pass
	flatFloor  = -3.0
	deepHole   = 10.0          // dB, of a notch
	mostRate   = 70.0          // rad/s, 4000 deg/s: more than gyros of this kind reach
	quietRate  = 0.25 * degree // rad/s about the mean: as quiet as on a table
	gravity    = 9.80665       // m/s²

	enoughForSteps = 1 << 20 // samples that show in what steps a column comes
)

// findings lists what is not as it should be, with its extent and what it does to the spectra.
func findings(f *found, r *gather.Recording) []kinds.Finding {
	s := f.spectra
	var out []kinds.Finding
	add := func(what, where, consequence, extent string, args ...any) {
		out = append(out, kinds.Finding{What: what, Where: where, Extent: fmt.Sprintf(extent, args...), Consequence: consequence})
	}
	for _, x := range r.Findings(f.timing) {
		out = append(out, kinds.Finding{What: x.What, Where: x.Where, Extent: x.Extent, Consequence: x.Consequence})
	}
	if s.Gaps > 0 {
		add("gaps", "", "no segment straddles one", "%d, %s missing, the first at %.6g s", s.Gaps, recording.Count(s.Missing, "sample"), f.axes.Time[f.timing.Gaps[0].After])
	}
	if s.Jitter > 0.01 {
		add("jitter", "", "blurs lines, lowers levels towards high frequencies", "steps differ by %.1f %% (root mean square), at most %.0f %%", 100*s.Jitter, 100*f.timing.Widest)
	}
	for i, a := range s.Axes {
		values := gather.Join(f.axes.Values[i], f.timing.Runs)
		if a.Deviation == 0 {
			add("stuck", a.Column, "there is nothing to describe", "all samples are %.4g %s", shownRate(a, a.Mean), shownUnit(a))
			continue
		}
		spikes := recording.FindSpikes(values)
		if n := len(spikes.At); n > 0 {
			add("spikes", a.Column, gather.SpikesDo, "%s, up to %.4g %s, the first at %.6g s, with %.3g %% of the mean square", gather.StandOut(n),
				shownRate(a, spikes.Largest), shownUnit(a), gather.Join(f.axes.Time, f.timing.Runs)[spikes.At[0]], 100*spikes.Share)
		}
		if a.Saturated > 0 {
			add("saturation", a.Column, "adds harmonics and broadband noise", "%d samples stay at an extreme of %.4g %s", a.Saturated, shownRate(a, a.Largest), shownUnit(a))
		}
		if longest := recording.Longest(values); longest.Unlikely(len(values), a.Repeated) {
			add("stuck", a.Column, "lowers the density; leave that time out", "%d samples stay at %.4g %s from %.6g s", longest.Length, shownRate(a, longest.Value), shownUnit(a),
				gather.Join(f.axes.Time, f.timing.Runs)[longest.First])
		}
		if a.Repeated > muchRepeated {
			add("repeats", a.Column, "mirrors appear above half the true rate", "%.0f %% of the samples equal the one before", 100*a.Repeated)
		}
		steps, floor := recording.Quantised(values[:min(len(values), enoughForSteps)], s.Rate), lowest(a.Density)
		if steps.Step > 0 && steps.Density > loudSteps*floor {
			add("coarse steps", a.Column, "hides what is weaker than that", "steps of %.3g %s add noise at %.0f %% of the floor", shownRate(a, steps.Step), shownUnit(a), 100*steps.Density/floor)
		}
		if math.Abs(a.Mean) > 3*a.Deviation && a.Quantity == gather.AngularRate {
			add("offset", a.Column, "none: means are taken out", "mean of %.3g %s", shownRate(a, a.Mean), shownUnit(a))
		}
		if a.Quantity == gather.AngularRate && spikes.Rest > mostRate {
			switch largest := spikes.Rest / degree; {
			case r.Plan.Axes[i].Unit == "rad/s":
				add("unit", a.Column, "every level is wrong by (180/π)² if so", "reaches %.3g deg/s: the numbers may be deg/s, not rad/s", largest)
			default:
				add("unit", a.Column, "every level is wrong if so", "reaches %.3g deg/s, more than gyros of this kind: the numbers may be counts of the sensor", largest)
			}
		}
		if a.Quantity == gather.AngularRate && a.Deviation < quietRate && len(r.Plan.Rotors) > 0 {
			add("unit", a.Column, "every level is wrong by (180/π)² if so", "only %.2g deg/s about its mean: at rest, or rad/s taken for deg/s", a.Deviation/degree)
		}
	}
	switch g := standing(s) / gravity; {
	case math.Abs(g*gravity-1) < 0.1:
		add("unit", "", "every level is wrong by 96 if so", "the mean acceleration is %.3g m/s²: the numbers may be in g", g*gravity)
	case math.Abs(g/gravity-1) < 0.1:
		add("unit", "", "every level is wrong by 96 if so", "the mean acceleration is %.3g m/s²: the numbers may be in m/s², not g", g*gravity)
	}
	return append(out, spectral(s)...)
}

// spectral lists what the densities show: filters and mirrored orders.
func spectral(s *kinds.Spectra) []kinds.Finding {
	var out []kinds.Finding
	var densities [][]float64
	steep, flat := 0, 0
	slope := math.Inf(-1)
	for _, a := range s.Axes {
		if a.Deviation == 0 { // a constant has no floor
			continue
		}
		densities = append(densities, a.Density)
		fall := recording.Fall(a.Density)
		if fall.Slope < steepFloor && fall.Steady {
			steep++
			slope = max(slope, fall.Slope)
		}
		if fall.Slope > flatFloor {
			flat++
		}
	}
	if steep > 0 && steep == len(densities) {
		out = append(out, kinds.Finding{What: "low-pass", Extent: fmt.Sprintf("the floor falls by %.0f dB per octave or more above %.4g Hz on all axes", -slope, 0.55*s.Rate/2),
			Consequence: "peaks up there are stronger than they look"})
	}
	if len(densities) > 1 {
		for _, k := range recording.Dips(densities, deepHole) {
			out = append(out, kinds.Finding{What: "notch", Extent: fmt.Sprintf("a hole at %.4g Hz on all axes", s.Frequency(k)), Consequence: "hides what rings there"})
		}
	}
	var orders []float64
	for _, b := range s.Orders {
		if b.Folded && !slices.Contains(orders, b.Order) {
			orders = append(orders, b.Order)
		}
	}
	for _, n := range orders {
		low, high := math.Inf(1), 0.0
		var rotors []string
		for _, b := range s.Orders {
			if b.Order == n && b.Folded {
				low, high = min(low, b.Low), max(high, b.High)
				if !slices.Contains(rotors, b.Rotor) {
					rotors = append(rotors, b.Rotor)
				}
			}
		}
		out = append(out, kinds.Finding{What: "alias", Extent: fmt.Sprintf("order %g of %s appears mirrored at %.0f to %.0f Hz", n, strings.Join(rotors, ", "), low, high),
			Consequence: "a peak there need not be one of the frame"})
	}
	if len(s.Rotors) == 0 && flat > 0 && flat == len(densities) {
		out = append(out, kinds.Finding{What: "alias", Extent: fmt.Sprintf("no filter before sampling shows in the floor up to %.4g Hz", s.Rate/2),
			Consequence: fmt.Sprintf("what lies at f above that appears at %.5g Hz - f", s.Rate)})
	}
	return out
}

// lowest is the density that a twentieth of the bins, without the first tenth, do not reach.
func lowest(density []float64) float64 {
	sorted := slices.Clone(density[len(density)/10:])
	slices.Sort(sorted)
	return sorted[len(sorted)/20]
}

// standing is the length of the mean acceleration where all three axes are recorded, else 0.
func standing(s *kinds.Spectra) float64 {
	sum, count := 0.0, 0
	for _, a := range s.Axes {
		if a.Quantity == "acceleration" {
			sum += a.Mean * a.Mean
			count++
		}
	}
	if count < 3 {
		return 0
	}
	return math.Sqrt(sum)
}

func findingTable(s *kinds.Spectra) stage.Section {
	t := stage.Section{
		Title:   "Health of the recording",
		Columns: []stage.Column{{Name: "what"}, {Name: "where"}, {Name: "extent"}, {Name: "consequence"}},
	}
	for _, f := range s.Findings {
		t.Rows = append(t.Rows, []string{f.What, f.Where, f.Extent, f.Consequence})
	}
	return t
}
