package airframe

import (
	"fmt"

	"gonum.org/v1/gonum/mat"
)

// CheckInertia reports a tensor (xx, yy, zz, xy, xz, yz) that no distribution
// of mass has: principal moments must not be negative, and none may exceed the
// sum of the other two.
func CheckInertia(t [6]float64) error {
	var eig mat.EigenSym
	if !eig.Factorize(mat.NewSymDense(3, []float64{t[0], t[3], t[4], t[3], t[1], t[5], t[4], t[5], t[2]}), false) {
		return fmt.Errorf("inertia %v is not finite", t)
	}
	v := eig.Values(nil)
	if slack := 1e-9 * v[2]; v[0] < -slack || v[2] > v[0]+v[1]+slack {
		return fmt.Errorf("principal moments of inertia %.4g, %.4g, %.4g kg·m² are impossible: none may be negative or exceed the sum of the others", v[0], v[1], v[2])
	}
	return nil
}
