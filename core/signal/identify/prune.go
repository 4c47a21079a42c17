package identify

import (
	"math"
	"math/cmplx"
	"slices"
)

// mostTried is the worth, over the price, above which a pair is not tried: to second order it is too rough to decide nearer than that.
const mostTried = 2

// kept is what pruning says of a pair that it leaves.
type kept struct {
	// loss is by how much the log-likelihood would sink without it: at most what makes it sure if that was tried, and to second order otherwise.
	loss float64
	scatter
}

// rival is a larger model that was given up for one without a pair.
type rival struct {
	value      float64
	parameters int
	errors     []scatter // by the pairs of the largest model; zero for those it has no more
}

// prune takes pairs out of a fitted model, the least worth first, as long as the log-likelihood of the model fitted again sinks by less than
// least; a pair whose loss is at least sure is not tried again. The errors of the pairs that are left allow for what was taken out, see doubted.
func (w *likelihood) prune(f fitted, least, sure float64) (fitted, []kept) {
	loss := make([]float64, len(f.pairs)) // 0 for pairs not tried
	places := make([]int, len(f.pairs))   // in the largest model
	for i := range places {
		places[i] = i
	}
	largest := len(places)
	var way []rival
	for len(f.pairs) > 1 {
		lowest, at := mostTried*sure, -1
		for i := range f.pairs {
			if v := f.worth(i); loss[i] == 0 && v < lowest {
				lowest, at = v, i
			}
		}
		if at < 0 {
			break
		}
		next := f.innovation.clone()
		next.pairs = append(next.pairs[:at], next.pairs[at+1:]...)
		g, ok := w.fit(next, f.value-sure)
		switch sunk := f.value - g.value; {
		case !ok || sunk >= sure:
			loss[at] = sure
		case sunk >= least:
			loss[at] = sunk
		default:
			r := rival{value: f.value, parameters: f.parameters(), errors: make([]scatter, largest)}
			for i, place := range places {
				r.errors[place] = f.errors(i)
			}
			way = append(way, r)
			f, loss, places = g, slices.Delete(loss, at, at+1), slices.Delete(places, at, at+1)
		}
	}
	out := make([]kept, len(loss))
	for i := range out {
		if loss[i] == 0 {
			loss[i] = max(sure, f.worth(i))
		}
		out[i] = kept{loss: loss[i], scatter: doubted(f.errors(i), places[i], way, f.value, f.parameters())}
	}
	return f, out
}

// doubted widens the errors of a pair in the model that was kept by what leaving pairs out may have moved it. If nothing real was left out, an
// estimate of the larger model differs from that of the smaller by a variance that is the difference of the two (J. A. Hausman, Specification tests
// in econometrics, Econometrica 46, 1978), and the likelihood sinks by half for each parameter left out; what was real sinks it further and moves
// the estimate in proportion (N. L. Hjort and G. Claeskens, Frequentist model average estimators, J. Am. Statist. Assoc. 98, 2003). So the square
// of the move is taken for
//
//	(σ² of the larger - σ² of the smaller) · 2·loss/parameters,
//
// at most that difference, and the largest over all larger models is added.
func doubted(own scatter, place int, way []rival, value float64, parameters int) scatter {
	out := own
	for _, r := range way {
		share := max(0, min(1, 2*(r.value-value)/float64(r.parameters-parameters)))
		wider := func(own, larger, sofar float64) float64 {
			return max(sofar, math.Sqrt(own*own+share*max(0, larger*larger-own*own)))
		}
		e := r.errors[place]
		out.frequency, out.damping, out.angle = wider(own.frequency, e.frequency, out.frequency), wider(own.damping, e.damping, out.damping), wider(own.angle, e.angle, out.angle)
	}
	return out
}

// errors of a pair follow from the covariance of decay (by its logarithm), turn (in units of decay) and shape.
func (f fitted) errors(i int) scatter {
	p := f.pairs[i]
	first := i * f.perPair()
	w := math.Hypot(p.decay, p.turn)
	// Changes with the two parameters of the pole, both of which are in units of decay.
	gradient := func(byDecay, byTurn float64) float64 {
		a, b := byDecay*p.decay, byTurn*p.decay
		v := a*a*f.covariance.At(first, first) + 2*a*b*f.covariance.At(first, first+1) + b*b*f.covariance.At(first+1, first+1)
		return math.Sqrt(max(0, v))
	}
	out := scatter{frequency: gradient(p.decay/w, p.turn/w) / (2 * math.Pi), damping: gradient(p.turn*p.turn/(w*w*w), -p.decay*p.turn/(w*w*w))}
	var square complex128
	norm := 0.0
	for _, v := range p.c {
		square += v * v
	}
	turn := cmplx.Exp(complex(0, -cmplx.Phase(square)/2))
	for _, v := range p.c {
		norm = math.Hypot(norm, real(v*turn))
	}
	at, sum := first+2, 0.0
	for q := range p.c {
		if q == p.fixed {
			continue
		}
		a, b := real(turn), -imag(turn) // of the real part of δc·turn
		sum += a*a*f.covariance.At(at, at) + 2*a*b*f.covariance.At(at, at+1) + b*b*f.covariance.At(at+1, at+1)
		at += 2
	}
	out.angle = math.Sqrt(max(0, sum)) / norm
	return out
}
