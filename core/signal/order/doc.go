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
// orders themselves can be followed in the signal. Folding needs no care there, since
// the samples of a folded line are those of its mirror image.
package order
