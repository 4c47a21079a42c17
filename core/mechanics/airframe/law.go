package airframe

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
)

// LawKind names how a stiffness depends on frequency.
type LawKind string

const (
	// Constant: the stiffness holds at every frequency.
	Constant LawKind = ""
	// Table: storage ratio and loss factor at given frequencies, straight
	// between them over the logarithm of frequency, held beyond the ends. That the
	// two fit each other, as they must in a causal material, is not checked.
	Table LawKind = "table"
	// Fractional: a spring beside a fractional dashpot, k + c (iω)^α (R. L.
	// Bagley and P. J. Torvik, A theoretical basis for the application of
	// fractional calculus to viscoelasticity, J. Rheol. 27, 1983).
	Fractional LawKind = "fractional"
	// Solid: the standard linear solid, a spring beside a spring and dashpot in
	// a row (C. Zener, Elasticity and Anelasticity of Metals, 1948).
	Solid LawKind = "solid"
)

// Law says how a stiffness depends on frequency f (Hz): k(f) = k At(f), with k
// the stated stiffness. The zero value is the constant law without loss.
type Law struct {
	Kind LawKind
	// Reference is the frequency (Hz) at which the stated stiffness is the
	// storage stiffness, for laws that are not constant.
	Reference float64
	// Frequency (Hz, ascending), Storage (ratio to the stated stiffness) and
	// Loss are the rows of a table.
	Frequency, Storage, Loss []float64
	// Order is α of a fractional law, 0 < α ≤ 1; LossFactor its loss factor at
	// Reference, below tan(απ/2), which a dashpot without spring has.
	Order, LossFactor float64
	// Rise is the stiffness of a solid at high frequency over that at rest, above
	// 1; PeakAt the frequency of its greatest loss factor, (Rise−1)/(2√Rise).
	Rise, PeakAt float64
}

// At gives the complex ratio to the stated stiffness at f ≥ 0 Hz; its
// imaginary part over its real one is the loss factor. The law must have passed Check.
func (l *Law) At(f float64) complex128 {
	switch l.Kind {
	case Table:
		return l.interpolate(f)
	case Fractional:
		// η = x sin/(1 + x cos) at the reference gives x = c ω^α / k there.
		s, c := math.Sincos(math.Pi / 2 * l.Order)
		x := l.LossFactor / (s - l.LossFactor*c)
		part := complex(x*math.Pow(f/l.Reference, l.Order), 0) * cmplx.Exp(complex(0, math.Pi/2*l.Order))
		return (1 + part) / complex(1+x*c, 0)
	case Solid:
		return l.zener(f) / complex(real(l.zener(l.Reference)), 0)
	}
	return 1
}

// zener is the stiffness of a solid over that at rest: 1 + Δ iωτ/(1 + iωτ) with
// Δ = Rise − 1; the loss factor peaks at ωτ = 1/√Rise.
func (l *Law) zener(f float64) complex128 {
	r := complex(0, f/(l.PeakAt*math.Sqrt(l.Rise)))
	return 1 + complex(l.Rise-1, 0)*r/(1+r)
}

func (l *Law) interpolate(f float64) complex128 {
	n := len(l.Frequency)
	i, found := slices.BinarySearch(l.Frequency, f)
	storage, loss := 0.0, 0.0
	switch {
	case found || i == 0:
		storage, loss = l.Storage[i], l.Loss[i]
	case i == n:
		storage, loss = l.Storage[n-1], l.Loss[n-1]
	default:
		t := math.Log(f/l.Frequency[i-1]) / math.Log(l.Frequency[i]/l.Frequency[i-1])
		storage = (1-t)*l.Storage[i-1] + t*l.Storage[i]
		loss = (1-t)*l.Loss[i-1] + t*l.Loss[i]
	}
	return complex(storage, storage*loss)
}

// Varies tells a law that depends on frequency from a constant one.
func (l *Law) Varies() bool { return l.Kind != Constant }

// Equal reports whether two laws are the same.
func (l *Law) Equal(o *Law) bool {
	return l.Kind == o.Kind && l.Reference == o.Reference && l.Order == o.Order && l.LossFactor == o.LossFactor &&
		l.Rise == o.Rise && l.PeakAt == o.PeakAt &&
		slices.Equal(l.Frequency, o.Frequency) && slices.Equal(l.Storage, o.Storage) && slices.Equal(l.Loss, o.Loss)
}

// mostRise is the greatest factor between the stiffness of a solid at rest and at high frequency: polymers rise by about a
// thousand from rubber to glass (from memory).
const mostRise = 1e4

// Check reports what makes a law impossible.
func (l *Law) Check() error {
	finite := func(x float64) bool { return x > 0 && !math.IsInf(x, 1) }
	if l.Varies() && l.Kind != Table && !finite(l.Reference) {
		return fmt.Errorf("the frequency at which the stiffness holds is %g Hz: it must be positive", l.Reference)
	}
	switch l.Kind {
	case Constant:
	case Table:
		if len(l.Frequency) == 0 || len(l.Storage) != len(l.Frequency) || len(l.Loss) != len(l.Frequency) {
			return fmt.Errorf("the table has %d frequencies, %d stiffnesses and %d loss factors: as many of each are due, one at least", len(l.Frequency), len(l.Storage), len(l.Loss))
		}
		for i, f := range l.Frequency {
			switch {
			case !finite(f) || i > 0 && f <= l.Frequency[i-1]:
				return fmt.Errorf("frequencies of the table must be positive and rise: %g Hz does not", f)
			case !finite(l.Storage[i]):
				return fmt.Errorf("the stiffness at %g Hz is %g of the stated one: it must be positive", f, l.Storage[i])
			case !(l.Loss[i] >= 0) || math.IsInf(l.Loss[i], 1):
				return fmt.Errorf("the loss factor at %g Hz is %g: it must not be negative", f, l.Loss[i])
			}
		}
	case Fractional:
		if !(l.Order > 0 && l.Order <= 1) {
			return fmt.Errorf("the order is %g: it must lie above 0 and not above 1", l.Order)
		}
		most := math.Tan(math.Pi / 2 * l.Order)
		if !(l.LossFactor >= 0) || l.Order < 1 && l.LossFactor >= most || math.IsInf(l.LossFactor, 1) {
			return fmt.Errorf("a loss factor of %g cannot have the order %g: it must be below %.3g", l.LossFactor, l.Order, most)
		}
	case Solid:
		if !(l.Rise > 1 && l.Rise <= mostRise) {
			return fmt.Errorf("the stiffness rises by a factor of %g: it must be above 1 and not above %g", l.Rise, mostRise)
		}
		if !finite(l.PeakAt) {
			return fmt.Errorf("the frequency of the greatest loss is %g Hz: it must be positive", l.PeakAt)
		}
	default:
		return fmt.Errorf("there is no law %q", l.Kind)
	}
	return nil
}
