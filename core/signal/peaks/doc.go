// Package peaks finds the peaks of a power spectrum and says what their place and width are worth.
//
// Terms and symbols
//
//	P           one-sided power spectral density, unit²/Hz, at equal steps df from 0 Hz
//	ν           equivalent degrees of freedom of each value; 0 for an exact spectrum, without scatter
//	prominence  P at a maximum over the higher of the two lowest values that separate it from higher ground on either
//	            side (or from the end of the spectrum)
//	floor       median of P over an octave around a maximum, within the band that is searched
//	half-power  the two frequencies beside a maximum where P is half of it, |H| is 1/√2
//	ζ           damping ratio, (upper - lower)/(2·f0) of the half-power frequencies
//	γ           half of the half-power width, ζ·f0, Hz
//
// Which maxima count. Scatter makes a maximum of every third bin. A maximum counts when its prominence reaches the larger
// of Settings.Prominence and exp(7·√(2/ν)): the logarithm of a value scatters by √(2/ν), the highest and the lowest of a
// thousand values of pure noise lie about six of these apart, and seven make a peak of it in about one spectrum of fifty (6 of 300 measured).
//
// Place and width. With scatter, and at least five values between the half-power points, the reciprocal of P is fitted by
// a parabola within 1.5·γ of the maximum: for a lightly damped mode under broadband force 1/P is one. The values have a
// gamma distribution, for which the reciprocal is the canonical link, so that the fit by reweighted least squares is that
// of maximum likelihood and its covariance follows (P. McCullagh and J. A. Nelder, Generalized Linear Models, 2nd ed.,
// 1989, chapter 8). Otherwise the place is that of the parabola through the logarithms of the three highest values, and
// the width is that between the half-power points, interpolated linearly in amplitude.
//
// A window of noise bandwidth b widens what it shows. The fit takes the widening out in the mean (γ² less b²/3, measured
// on exact Lorentz curves seen through a Hann window) and counts half of that as uncertain; below 1.5·b the width
// is the window's own, Narrow is set, and ζ is an upper bound whose error is as large as itself.
package peaks
