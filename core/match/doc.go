// Package match pairs predicted with observed peaks, and fits the level of one curve to another.
//
// Terms and symbols
//
//	fp, fo  predicted and observed frequency, Hz
//	d       ln(fp/fo), the relative frequency error
//	τ       tolerance: the relative error of a prediction that counts as one standard deviation
//	u       relative standard errors of fp and fo, added to τ by squares: s² = τ² + up² + uo²
//	ap, ao  direction: how much of the peak is on each axis, as non-negative amplitudes; only the angle θ between counts
//	c       cost of a pair, d²/s² + w·(1 - cos θ)
//	cut     cost above which two peaks are better left alone
//
// The pairing is the one of least total cost in which every peak has at most one partner and a predicted peak without one
// costs the cut. It is found by shortest augmenting paths (R. Jonker and A. Volgenant, A shortest augmenting path
// algorithm for dense and sparse linear assignment problems, Computing 38, 1987), which is exact: taking the nearest
// neighbour first is not.
//
// Confidence of a pair is the weight of its likelihood among all that could be instead, each alternative and the case that
// the peaks do not belong together at all counted by exp(-c/2):
//
//	confidence = e^(-c/2) / ( e^(-cut/2) + Σ e^(-c'/2) )
//
// where the sum runs over all pairs, this one included, that share the predicted or the observed peak. It nears 1 for a
// lone pair in the right place, ½ for two equal candidates, and is at most ½ at the cut. It rests on τ and w, which are
// judgement, and is no probability in the strict sense.
//
// Track finds the modes of a structure before a change among those after it by their shapes, with the modal assurance
// criterion (MAC) of motions at common points.
//
// Modes are paired alike, with signed directions whose sense means nothing, damping, and how well a mode can be seen.
package match
