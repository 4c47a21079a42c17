// Package identify finds the modes of a structure from its vibration alone, without knowing the force.
//
// Terms and symbols
//
//	y[j]   the l channels at sample j, taken as the response of a linear structure to broadband force
//	R_k    covariance at lag k, mean of y[j+k]·y[j]ᵀ over all j of all runs; pairs never straddle a gap
//	i      block rows: the lags 1 to 2i-1 are used
//	T      block Toeplitz matrix, block (a, b) = R_{i+a-b}, a, b = 0 … i-1
//	n      order of a model: number of its states, two for each mode
//	O      observability matrix C, CA, CA²… of a model
//	μ, λ   pole of A per sample, and λ = ln(μ)·rate in 1/s
//	f, ζ   |λ|/2π in Hz, and -Re λ/|λ|
//	φ      shape, the l complex components C·v of an eigenvector v of A
//
// Subspace identification. R_k = C·A^(k-1)·G for a response to white force, so T = O·Γ has rank n. A singular value
// decomposition of T gives O = U·√S for every order at once, A from O without its last and without its first block row by
// least squares, and the modes from A and C (B. Peeters and G. De Roeck, Reference-based stochastic subspace
// identification for output-only modal analysis, Mech. Syst. Signal Process. 13, 1999). With canonical weights T is first
// divided by the square roots of the covariances of future and past, so that weak modes count as much as strong ones
// (P. Van Overschee and B. De Moor, Subspace Identification for Linear Systems, 1996).
//
// A pole is stable when a pole of the order before has nearly its frequency, damping and shape. Stable poles of all orders
// are clustered by these three; a cluster that reaches through enough orders is a mode. A line is a pole without damping.
//
// Uncertainty. The record is cut into groups of time; leaving out one group at a time changes R_k, and through the fixed
// right singular vectors O, A and the modes to first order. The variance is that of the jackknife (B. Efron, The
// Jackknife, the Bootstrap and Other Resampling Plans, 1982), to which the scatter over the orders of the cluster is added.
//
// Likelihood. Such a model in innovation form, y = H(z)·e with white e, has the spectrum H·Σ·Hᴴ, and each averaged cross-spectral
// matrix of the record scatters about it as a complex Wishart matrix, independent of its neighbours (P. Whittle, The analysis of multiple
// stationary time series, J. R. Statist. Soc. B 15, 1953). Fisher scoring raises the likelihood over poles, shapes and forces together; poles
// without which it hardly sinks are taken out; the inverse of the information is the covariance of what is left, close neighbours and
// all. A pole is told alone if it is worth more than half the logarithm of the number of values for each of its
// parameters (G. Schwarz, Estimating the dimension of a model, Ann. Statist. 6, 1978), otherwise only if its cluster reaches
// through the models.
//
// What leaving poles out may have moved is put into the errors: an estimate of a larger model, on the way from the largest to the one that is kept, may
// differ by the difference of the two variances, the more of it the more likelihood was given up (J. A. Hausman, Specification tests in
// econometrics, Econometrica 46, 1978; N. L. Hjort and G. Claeskens, Frequentist model average estimators, J. Am. Statist. Assoc. 98, 2003).
//
// Bound. What no method can do better is told by the information of the true spectrum (Bound): a mode of large damping beside others of like shape cannot
// be known from a short record, whoever looks at it.
//
// Decomposition. The cross-spectral matrix of all channels is decomposed into singular values per bin; a peak of the first
// one is a mode whose shape is the singular vector. Around it the bins whose vector agrees with that shape are turned into
// a covariance, whose zero crossings and decay give frequency and damping (R. Brincker, L. Zhang, P. Andersen, Modal
// identification of output-only systems using frequency domain decomposition, Smart Mater. Struct. 10, 2001).
//
// Lines of machines satisfy none of the assumptions. They are told by their bands where speeds are known, and by the
// kurtosis of the band-passed signal: 3 for the response to noise, 1.5 for a steady sine.
package identify
