// Package filter says what a chain of digital filters buys and costs: its response, its delay, and its output.
//
// Terms and symbols
//
//	fs      sample rate, Hz, of the loop that runs the filters
//	H       response b(z)/a(z) at z = e^(iω), ω = 2πf/fs; time dependence e^(+iωt), so a delay has falling phase
//	delay   group delay -dφ/dω: how late the filter passes a slow change of a tone at f, s
//	Q       centre frequency over the width between the -3 dB edges of a notch
//	biquad  a section with b = [b0 b1 b2], a = [1 a1 a2]
//
// First-order low-passes come in two forms: the running form y += k·(x - y), k = dt/(RC + dt), that small controllers
// use, whose cut-off sinks below the nominal one as it nears fs, and the bilinear form, exact at its cut-off. Cascades of
// equal first-order filters are corrected so that the cascade is 3 dB down at the nominal cut-off. Biquads are those of
// R. Bristow-Johnson, Cookbook formulae for audio equalizer biquad filter coefficients. Delay follows from the
// coefficients without differences (A. V. Oppenheim and R. W. Schafer, Discrete-Time Signal Processing).
//
//	train   filters in a row of which some are notches that follow rotors
//	lag     by how much the phase at a frequency is late, rad; over 2πf it is the phase delay
//
// A notch that follows a rotor order has no response of its own: its mean power over the time that the rotor spends at each speed
// tells what it leaves of a spectrum, and its mean lag and delay what it costs. The order that it follows it takes out
// wherever that goes.
package filter
