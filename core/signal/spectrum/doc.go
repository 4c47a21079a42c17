// Package spectrum estimates power spectra and cross spectra of sampled signals by averaging windowed segments.
//
// Terms and symbols
//
//	N     samples of a segment
//	S     step between the starts of neighbouring segments, N minus the overlap
//	fs    sample rate in Hz
//	df    bin width fs/N in Hz; bin k lies at k·df, k = 0 … N/2 (rounded down)
//	w     window, in its periodic form: its cosines have the period N, not N-1
//	K     number of segments averaged
//	ν     equivalent degrees of freedom of the average, 2K for independent segments
//	run   a stretch of a signal without a gap
//
// A signal is given as its runs. Segments are cut from each run by itself, so none straddles a gap; samples after the
// last whole segment of a run, and runs shorter than a segment, are not used and are counted.
//
// Scaling. Density is one-sided in unit²/Hz: |X|²/(fs·Σw²), doubled except at 0 Hz and, for even N, at fs/2. Spectrum is
// in unit² and reads the mean square of a line directly (a²/2 for a sine of amplitude a on a bin): |X|²/(Σw)², doubled
// alike. Density times the equivalent noise bandwidth in Hz is the spectrum.
//
// Sources. P. D. Welch, The use of fast Fourier transform for the estimation of power spectra, IEEE Trans. Audio
// Electroacoust. 15, 1967. F. J. Harris, On the use of windows for harmonic analysis with the discrete Fourier
// transform, Proc. IEEE 66, 1978. J. S. Bendat and A. G. Piersol, Random Data, 4th ed., 2010.
package spectrum
