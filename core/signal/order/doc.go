// Package order says at which frequencies the orders of rotors with a recorded speed appear in a recording.
//
// Terms
//
//	speed       rotational speed of a rotor in revolutions per second, Hz
//	order       a multiple n of the speed: the line at n·speed. 1 is unbalance, 2 the second harmonic, the number of
//	            blades is blade passing
//	folding     a line above half the sample rate fs appears mirrored: at |f - m·fs| for the nearest multiple m·fs
//	            (H. Nyquist's limit; A. V. Oppenheim and R. W. Schafer, Discrete-Time Signal Processing)
//	occupancy   share of the time that a line spends within one cell of frequency
//	band        a stretch of neighbouring cells that the line occupies
//
// A speed wanders, so an order is a distribution and not a line. Its bands are the fewest cells that together hold a given
// share of the time, joined where they touch and widened by a margin on either side. Two speeds held in turn give two
// bands with the frequencies between them free; a mean would give one band in the wrong place.
//
// Where the angle of a rotor follows from its speed, its orders can be taken out of a signal: what turns with the angle at
// nearly steady amplitude and phase is the order, what is left is structure and noise. Where no speed was recorded, the
// orders themselves can be followed in the signal (FindSpeeds, to a hertz or so) and the speeds sharpened by their phases
// (Sharpen, to a tenth of that), after which they serve as recorded ones do. Folding needs no care there, since
// the samples of a folded line are those of its mirror image.
//
// Terms of sharpening
//
//	reference   speed near those of all rotors, by whose angle the signal is turned back
//	baseband    the signal so turned back, by an order, and thinned
//	phase       of a rotor: its angle less that of the reference, rad; its order n has n times that
//	drift       model of the speeds: accelerations that wander, partly alike
//	evidence    gradient and curvature of the likelihood of the samples at a time, over the phases
package order
