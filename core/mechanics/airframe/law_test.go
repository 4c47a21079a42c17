package airframe

import (
	"math"
	"math/cmplx"
	"testing"
)

// The loss factor of a standard linear solid peaks at (r−1)/(2√r) where the
// storage stiffness is 2r/(1+r) of that at rest (Zener 1948): r = 4 gives 0.75 and 1.6.
func TestSolid(t *testing.T) {
	l := Law{Kind: Solid, Reference: 1e-9, Rise: 4, PeakAt: 120}
	if err := l.Check(); err != nil {
		t.Fatal(err)
	}
	at := l.At(120)
	if e := math.Abs(imag(at)/real(at) - 0.75); e > 1e-12 {
		t.Errorf("loss factor %g at its peak, not 0.75", imag(at)/real(at))
	}
	if e := math.Abs(real(at) - 1.6); e > 1e-9 {
		t.Errorf("storage ratio %g at the peak, not 1.6", real(at))
	}
	for _, f := range []float64{110, 131} {
		if z := l.At(f); imag(z)/real(z) >= 0.75 {
			t.Errorf("the loss factor at %g Hz, %g, is above that of the peak", f, imag(z)/real(z))
		}
	}
	if z := l.At(1e9); math.Abs(real(z)-4) > 1e-6 || imag(z) > 1e-6 {
		t.Errorf("%v at very high frequency, not 4", z)
	}
	l.Reference = 300
	if z := l.At(300); math.Abs(real(z)-1) > 1e-15 {
		t.Errorf("storage ratio %g at the reference", real(z))
	}
}

// Of order 1 a fractional law is a spring beside a dashpot, 1 + iη f/f₀ (Kelvin
// and Voigt); of order ½ with loss factor η it is 1 + x√(f/f₀) e^{iπ/4}, x = √2 η/(1−η), over 1 + x/√2.
func TestFractional(t *testing.T) {
	l := Law{Kind: Fractional, Reference: 50, Order: 1, LossFactor: 0.2}
	if z := l.At(150); cmplx.Abs(z-(1+0.6i)) > 1e-12 {
		t.Errorf("%v, not 1+0.6i", z)
	}
	l = Law{Kind: Fractional, Reference: 100, Order: 0.5, LossFactor: 0.3}
	if err := l.Check(); err != nil {
		t.Fatal(err)
	}
	if z := l.At(100); math.Abs(real(z)-1) > 1e-12 || math.Abs(imag(z)-0.3) > 1e-12 {
		t.Errorf("%v at the reference, not 1+0.3i", z)
	}
	x := math.Sqrt2 * 0.3 / 0.7
	want := (1 + complex(2*x, 0)*cmplx.Exp(1i*math.Pi/4)) / complex(1+x/math.Sqrt2, 0)
	if z := l.At(400); cmplx.Abs(z-want) > 1e-12 {
		t.Errorf("%v at four times the reference, not %v", z, want)
	}
}

// A table is met at its rows, straight between them over log f, and held beyond.
func TestTable(t *testing.T) {
	l := Law{Kind: Table, Frequency: []float64{10, 1000}, Storage: []float64{1, 3}, Loss: []float64{0.1, 0.3}}
	if err := l.Check(); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ f, storage, loss float64 }{{10, 1, 0.1}, {1000, 3, 0.3}, {100, 2, 0.2}, {1, 1, 0.1}, {5000, 3, 0.3}, {0, 1, 0.1}} {
		if z := l.At(c.f); math.Abs(real(z)-c.storage) > 1e-12 || math.Abs(imag(z)-c.storage*c.loss) > 1e-12 {
			t.Errorf("%v at %g Hz, not storage %g with loss factor %g", z, c.f, c.storage, c.loss)
		}
	}
}

func TestImpossibleLaws(t *testing.T) {
	for name, l := range map[string]Law{
		"unknown":         {Kind: "spring"},
		"no reference":    {Kind: Solid, Rise: 2, PeakAt: 100},
		"falling solid":   {Kind: Solid, Reference: 100, Rise: 0.9, PeakAt: 100},
		"soaring solid":   {Kind: Solid, Reference: 100, Rise: 1.1e4, PeakAt: 100},
		"order":           {Kind: Fractional, Reference: 100, Order: 1.4, LossFactor: 0.2},
		"loss for order":  {Kind: Fractional, Reference: 100, Order: 0.2, LossFactor: 0.4},
		"falling table":   {Kind: Table, Frequency: []float64{20, 10}, Storage: []float64{1, 1}, Loss: []float64{0, 0}},
		"ragged table":    {Kind: Table, Frequency: []float64{20}, Storage: []float64{1, 1}, Loss: []float64{0}},
		"negative loss":   {Kind: Table, Frequency: []float64{20}, Storage: []float64{1}, Loss: []float64{-0.1}},
		"no stiffness":    {Kind: Table, Frequency: []float64{20}, Storage: []float64{0}, Loss: []float64{0.1}},
		"solid, no place": {Kind: Solid, Reference: 100, Rise: 2},
	} {
		if l.Check() == nil {
			t.Errorf("%s: passes", name)
		}
	}
	if (&Law{}).Check() != nil || (&Law{}).At(77) != 1 {
		t.Error("the zero law is not constant")
	}
}
