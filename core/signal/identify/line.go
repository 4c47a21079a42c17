package identify

import (
	"math"
	"math/cmplx"
)

// Kurtosis returns that of the record, projected on a direction and band-passed about f Hz with a Hann filter of that
// bandwidth in Hz (half-power): mean(x⁴)/mean(x²)². It is 3 for the response of a structure to noise and 1.5 for a steady
// sine; a sine that comes and goes has more. NaN where no run is as long as the filter.
//
// A narrow band is x = Re(a·e^(iωt)) with a slow a, for which mean(x⁴)/mean(x²)² = 1.5·mean|a|⁴/mean(|a|²)².
func Kurtosis(r Record, direction []float64, f, bandwidth float64) float64 {
	r.check()
	length := max(4, int(1.44*r.Rate/bandwidth))
	window := make([]complex128, length)
	for i := range window {
		w := 0.5 - 0.5*math.Cos(2*math.Pi*(float64(i)+0.5)/float64(length))
		window[i] = cmplx.Rect(w, -2*math.Pi*f*float64(i)/r.Rate)
	}
	step := max(1, length/4)
	var second, fourth, count float64
	for _, run := range r.Runs {
		for at := 0; at+length <= len(run[0]); at += step {
			var a complex128
			for c, by := range direction {
				if by == 0 {
					continue
				}
				var re, im float64
				for i, x := range run[c][at : at+length] {
					re += x * real(window[i])
					im += x * imag(window[i])
				}
				a += complex(by*re, by*im)
			}
			power := real(a)*real(a) + imag(a)*imag(a)
			second += power
			fourth += power * power
			count++
		}
	}
	if count == 0 || second == 0 {
		return math.NaN()
	}
	return 1.5 * count * fourth / (second * second)
}

// Band is a band in which a line of a machine may be.
type Band struct {
	Low, High float64 // Hz
	// Removed tells that the line was taken out of the record, so that only remains of it can be there.
	Removed bool
}
