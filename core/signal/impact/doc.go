// Package impact cuts a bench recording into the strikes of a hammer, for transfer functions by averaging over strikes.
//
// Terms and symbols
//
//	strike    one pulse of force; its time is that of its highest sample
//	double    a strike whose force comes back within its segment: the tip has bounced
//	segment   N samples from a little before a strike, in which force and response are transformed
//	τ         time constant of the exponential window w(t) = exp(-t/τ) on force and response alike, t from the strike
//	FRF       frequency response function H(f) of a response over the force
//
// The force is set to zero after its pulse, which takes out the noise of the sensor; the mean before the strike is taken out of both
// channels. An exponential window adds 1/(τ·ω) to every damping ratio; Damping takes it off. The practice is that of W. G. Halvorsen and
// D. L. Brown, Impulse technique for structural frequency response testing, Sound and Vibration, November 1977, and of D. J. Ewins, Modal
// Testing: Theory, Practice and Application, 2nd ed., 2000, chapter 3.
package impact
