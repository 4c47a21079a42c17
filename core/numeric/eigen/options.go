package eigen

import (
	"fmt"

	"hushframe/core/numeric/sparse"
)

// Options says what is wanted. Limit, Modes or both must be positive; everything else may be zero.
type Options struct {
	// Limit asks for all λ ≤ Limit.
	Limit float64
	// Modes asks for this many of the lowest λ. With both Limit and Modes set, both are met.
	Modes int
	// Most, when positive, refuses to search when more eigenvalues than this are counted below Limit: time and memory
	// grow with their number.
	Most int
	// Shift is σ < 0; 0 lets Lowest choose, from Limit or from the matrices and what the first steps show. Errors of λ
	// are relative to λ-σ, so a shift far below the wanted values costs digits as well as steps.
	Shift float64
	// Block is the number of vectors multiplied at a time; 0 means 8. Values repeated more often than Block are found
	// only through the count.
	Block int
	// Tol is the greatest residual ‖A⁻¹Mφ-θφ‖/θ in the norm of M at which a pair counts as converged; 0 means 1e-9. The
	// relative error of λ-σ is of the order of its square.
	Tol float64
	// Static asks for Result.Factor.
	Static bool
	// Threads is the number of goroutines; 0 means one per processor.
	Threads int
	// Progress, when not nil, is called now and then with the fraction done, rising to 1.
	Progress func(fraction float64)
	// Rigid lists known null vectors of K, each of length N. They are checked, made M-orthonormal and returned with λ = 0
	// in place of computed ones.
	Rigid [][]float64
}

// Result holds eigenpairs by rising λ.
type Result struct {
	// Values are the λ. Those of rigid motions are zero to rounding and may be slightly negative.
	Values []float64
	// Vectors are the φ, each of length N: φᵢᵀMφⱼ is one for i = j and zero otherwise, and the component of largest
	// magnitude (the first of equals) is positive.
	Vectors [][]float64
	// Residuals are ‖A⁻¹Mφ-θφ‖/θ in the norm of M, by an explicit multiplication. One of the exact eigenvalues of λ-σ is
	// within that relative distance.
	Residuals []float64
	Status    Status
	Stats     Stats
	// Factor is the factorisation of K-Shift·M, for static solutions, if Static asked for it.
	Factor *sparse.Factor
	// Shift is the σ used.
	Shift float64
}

// Status tells how the search ended.
type Status struct {
	// Converged says that every returned pair met the tolerance (and kept within a thousand times of it when its residual
	// was worked out), that there are as many as were asked for or no more exist, and that no count tells of missing
	// ones.
	Converged bool
	// Proved says that the inertia count at CountShift was made, is trustworthy, and equals Found.
	Proved bool
	// CountShift is the s of the count: Counted eigenvalues of the pencil are below it, Found of those computed.
	CountShift     float64
	Counted, Found int
	// Trusted says that the count was made and that rounding leaves no doubt of it.
	Trusted bool
	// Steps is the number of block multiplications, Restarts that of thick restarts, Attempts that of searches from new
	// starting vectors.
	Steps, Restarts, Attempts int
	// Exhausted says that the pencil has no further finite eigenvalues.
	Exhausted bool
	// Notes are sentences about what was done beyond the ordinary.
	Notes []string
}

func (s *Status) note(format string, args ...any) {
	s.Notes = append(s.Notes, fmt.Sprintf(format, args...))
}

// Stats tells what the work was.
type Stats struct {
	Unknowns int
	// Factor describes the factorisation at the shift.
	Factor sparse.FactorStats
	// Factorisations counts all, those for inertia included; Solves counts right-hand sides.
	Factorisations, Solves int
	// Seconds of wall time: for factorisations at shifts, for solves with them, for making vectors orthogonal
	// (multiplications by M included), for Ritz pairs, for counts by inertia, and in all.
	FactorSeconds, SolveSeconds, OrthogonalSeconds, RitzSeconds, CountSeconds, TotalSeconds float64
}

// TooManyError says that more eigenvalues were counted below Limit than are to be searched for.
type TooManyError struct {
	Counted, Most int
}

func (e *TooManyError) Error() string {
	return fmt.Sprintf("eigen: %d eigenvalues lie below the limit, at most %d are searched for", e.Counted, e.Most)
}

// IndefiniteError says that a matrix is not positive semi-definite.
type IndefiniteError struct {
	// Matrix is "K" or "M", or "K or M" when it cannot be told.
	Matrix string
	// Unknown takes part in the negative direction.
	Unknown int
	Detail  string
}

func (e *IndefiniteError) Error() string {
	return fmt.Sprintf("eigen: %s is not positive semi-definite at unknown %d: %s", e.Matrix, e.Unknown, e.Detail)
}

// SingularError says that an unknown is held neither by K nor by M.
type SingularError struct {
	Unknown int
	Cause   error
}

func (e *SingularError) Error() string {
	return fmt.Sprintf("eigen: unknown %d takes part in a motion that neither K nor M resists: %v", e.Unknown, e.Cause)
}

func (e *SingularError) Unwrap() error { return e.Cause }

// RigidError says that a vector given as a null vector of K is none.
type RigidError struct {
	Vector, Unknown int
	// Ratio is |K·r| at the unknown over the largest sum of the magnitudes of the terms of any row, both divided by the
	// root of the diagonal of their row.
	Ratio float64
}

func (e *RigidError) Error() string {
	return fmt.Sprintf("eigen: Rigid[%d] is not a null vector of K: at unknown %d, %.2g of the largest terms is left", e.Vector, e.Unknown, e.Ratio)
}
