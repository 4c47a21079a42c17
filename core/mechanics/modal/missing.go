package modal

import (
	"fmt"
	"math"

	"hushframe/core/numeric/eigen"
)

// MissingError says that fewer modes were found than a count of eigenvalues tells of, however often the search was
// repeated.
type MissingError struct {
	Below          float64 // Hz
	Counted, Found int     // motions below it, rigid-body ones included
	Searches       int
}

func (e *MissingError) Error() string {
	return fmt.Sprintf("a count of eigenvalues tells of %d modes below %.6g Hz, rigid-body motions included, of which %d were found in %d searches",
		e.Counted, e.Below, e.Found, e.Searches)
}

// unproved says in what a count does not confirm the modes.
func unproved(st *eigen.Status) string {
	if !st.Trusted {
		return fmt.Sprintf("the count of eigenvalues below %.6g Hz cannot be trusted", hertz(st.CountShift))
	}
	return fmt.Sprintf("%d modes were found below %.6g Hz, rigid-body motions included, but %d counted", st.Found, hertz(st.CountShift), st.Counted)
}

// hertz is the frequency of an eigenvalue (rad²/s²).
func hertz(lambda float64) float64 { return math.Sqrt(max(lambda, 0)) / (2 * math.Pi) }
