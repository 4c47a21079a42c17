package peaks

import "math"

// Decrement returns the logarithmic decrement δ = 2π·ζ/√(1-ζ²) of a free decay: the logarithm of the ratio of two maxima
// one cycle apart. It panics unless 0 ≤ ζ < 1.
func Decrement(zeta float64) float64 {
	checkDamping(zeta)
	return 2 * math.Pi * zeta / math.Sqrt(1-zeta*zeta)
}

// DecayDamping returns ζ from the ratio (above 1) of two maxima of a free decay that lie a number of cycles apart:
// δ = ln(ratio)/cycles, ζ = δ/√(4π²+δ²). It panics unless ratio ≥ 1 and cycles > 0.
func DecayDamping(ratio, cycles float64) float64 {
	if !(ratio >= 1) || !(cycles > 0) {
		panic("peaks: a decay has a ratio of at least one over more than no cycles")
	}
	delta := math.Log(ratio) / cycles
	return delta / math.Hypot(2*math.Pi, delta)
}

// DampedFrequency returns f0·√(1-ζ²), the frequency of a free decay. It panics unless 0 ≤ ζ < 1.
func DampedFrequency(f0, zeta float64) float64 {
	checkDamping(zeta)
	return f0 * math.Sqrt(1-zeta*zeta)
}

func checkDamping(zeta float64) {
	if !(zeta >= 0 && zeta < 1) {
		panic("peaks: damping ratio must lie between zero and one")
	}
}
