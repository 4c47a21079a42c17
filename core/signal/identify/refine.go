package identify

import (
	"math"
)

const (
	fitOrder  = 60   // highest order of a model whose likelihood is raised
	fitBeyond = 1.12 // factor on either end of the band within which spectra are fitted
	leastFit  = 64   // bins that a fit needs
	// leastLoss is what a parameter must be worth for its pole to stay in the fit: a little above the one of H. Akaike's criterion (IEEE Trans.
	// Automat. Contr. 19, 1974), so that what is left out bends the other poles little. To be told alone a pole must be worth more.
	leastLoss = 1.5
)

// refine raises the likelihood of the model of highest order, or of fitOrder, over the cross spectra of all channels, takes out the poles that are
// worth nothing, and returns those within the band as modes with the errors that the information gives. ok is false where there is no
// such model.
func refine(r Record, sub *Subspace, c *Covariance, clusters []Mode, s Settings, order int) ([]Mode, bool) {
	// Long segments blur narrow modes little; their few averages are no loss, since neighbouring bins are averaged instead.
	segment := 64
	for float64(segment) < 640*r.Rate/s.From && 3*segment <= longest(r) {
		segment *= 2
	}
	w, err := newLikelihood(r, segment, s.From/fitBeyond/fitBeyond, min(s.To*fitBeyond, 0.48*r.Rate), s.Left, width(clusters), s.Threads)
	if err != nil || len(w.bins) < leastFit {
		return nil, false
	}
	order = min(order, fitOrder, (sub.Rows-1)*sub.Channels) &^ 1
	means := c.Mean(-1)
	for ; order >= 2; order -= 2 {
		v, ok := sub.innovation(order, means)
		if !ok {
			continue
		}
		f, ok := w.fit(v, math.Inf(-1))
		if !ok {
			continue
		}
		sure := w.price(f.perPair())
		f, kept := w.prune(f, leastLoss*float64(f.perPair()), sure)
		var modes []Mode
		for i, p := range f.pairs {
			m := f.mode(i)
			m.Worth, m.lone = kept[i].loss, kept[i].loss < sure
			m.own = f.errors(i)
			m.FrequencyError, m.DampingError, m.DirectionError = kept[i].frequency, kept[i].damping, kept[i].angle
			if m.Frequency < s.From || m.Frequency > s.To || m.Damping > s.MaxDamping || p.turn <= 0 {
				continue
			}
			modes = append(modes, m)
		}
		sortBy(modes, func(m Mode) float64 { return m.Frequency })
		return modes, true
	}
	return nil, false
}

// width returns the width, over the frequency, of parts of the spectra that are averaged: a fifth of the half-power width of the narrowest
// sure mode, at most that at one per cent of damping.
func width(clusters []Mode) float64 {
	const part, least = 0.4, 0.001
	damping := 0.01
	for _, m := range clusters {
		if m.sure() {
			damping = min(damping, m.Damping)
		}
	}
	return max(least, part*damping)
}

// mode turns a pair into a mode, without errors.
func (f fitted) mode(i int) Mode {
	p := f.pairs[i]
	w := math.Hypot(p.decay, p.turn)
	m := Mode{Kind: Structure, Shape: p.c, Frequency: w / (2 * math.Pi), Damping: p.decay / w, Kurtosis: math.NaN(), PeakFrequency: math.NaN(), PeakDamping: math.NaN(), cluster: -1}
	m.Direction, m.Collinearity = Direction(p.c)
	return m
}

// settle gives each mode of greatest likelihood the standing that its cluster of stable poles has in the diagram. Clusters without a partner
// stay, as doubtful ones.
func settle(clusters, likely []Mode) []Mode {
	taken := make([]bool, len(likely))
	out := make([]Mode, 0, len(clusters)+len(likely))
	for i := range clusters {
		c := clusters[i]
		best := -1
		for k, m := range likely {
			if taken[k] || Agreement(m.Shape, c.Shape) < sameShape {
				continue
			}
			off := math.Abs(m.Frequency - c.Frequency)
			if off > max(m.Damping*m.Frequency, agrees*math.Hypot(m.FrequencyError, c.FrequencyError)) {
				continue
			}
			if best < 0 || off < math.Abs(likely[best].Frequency-c.Frequency) {
				best = k
			}
		}
		if best < 0 {
			c.Worth = 0
			out = append(out, c)
			continue
		}
		taken[best] = true
		m := likely[best]
		m.Orders, m.Share, m.First, m.cluster = c.Orders, c.Share, c.First, c.cluster
		out = append(out, m)
	}
	for k, m := range likely {
		if !taken[k] {
			out = append(out, m)
		}
	}
	sortBy(out, func(m Mode) float64 { return m.Frequency })
	return out
}
