// Package noise is the generator of rows F-LCG and F-LCG-GAUSS of testdata/known/F_signals.json, for tests.
package noise

// Source is the state of the generator; a value converted from the seed is ready.
type Source uint32

// Integer steps the generator and returns its state.
func (s *Source) Integer() uint32 {
	*s = *s*1664525 + 1013904223
	return uint32(*s)
}

// Uniform returns the next uniform value, -0.5 to 0.5.
func (s *Source) Uniform() float64 { return float64(s.Integer())/4294967296 - 0.5 }

// Gauss returns the next near-Gaussian value of unit variance, a sum of twelve uniform ones.
func (s *Source) Gauss() float64 {
	sum := 0.0
	for range 12 {
		sum += s.Uniform()
	}
	return sum
}
