package kinds

import "math"

// Strongest is the greatest finite value per axis among those that are shown together.
type Strongest [3]float64

// Add takes note of the values of one row.
func (s *Strongest) Add(values [3]float64) {
	for axis, v := range values {
		if v = math.Abs(v); v > s[axis] && !math.IsInf(v, 0) {
			s[axis] = v
		}
	}
}

// Negligible reports whether a value is below a thousandth of the strongest of its axis: tables show it as 0, files keep it.
func (s *Strongest) Negligible(axis int, v float64) bool { return math.Abs(v) < 1e-3*s[axis] }
