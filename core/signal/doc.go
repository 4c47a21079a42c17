// Package signal holds the kernels that describe recorded vibration. It has no code of its own; the parts are
//
//   - spectrum: windows, Welch power and cross spectra, their confidence bounds
//   - peaks: local maxima of a power spectrum, their frequency, width and uncertainty
//   - order: the frequency bands that rotor orders occupy in a recording, and what is left without them
//   - identify: modes without known force, by subspace identification and frequency-domain decomposition
//   - filter: what chains of filters buy and cost
//   - recording: the interface of recording readers, the checks on a time column, and the steady pieces of a flight
//   - impact: the strikes of a hammer on the bench
//
// Everything is in SI units. Frequencies are in hertz, sample rates in samples per second (also written Hz). Power
// spectral densities are one-sided: their integral over 0 Hz to half the sample rate is the mean square.
package signal
