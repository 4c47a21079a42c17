package identify

import "math"

// Decimate returns the record at rate/factor, after a linear-phase low-pass that is flat up to 0.4 of the new rate (within
// 0.1 %) and 60 dB down at 0.6 of it: a sinc under a Kaiser window. Runs shorter than the filter are left out.
func Decimate(r Record, factor int) Record {
	r.check()
	if factor < 1 {
		panic("identify: a record is decimated by at least one")
	}
	if factor == 1 {
		return r
	}
	// Transition of 0.2 of the new rate at 60 dB: (60-7.95)/(14.36·0.2) new samples (J. F. Kaiser, Proc. IEEE ISCAS, 1974).
	reach := 9 * factor
	const beta = 5.65
	filter := make([]float64, 2*reach+1)
	sum := 0.0
	for i := range filter {
		x := float64(i - reach)
		u := x / float64(reach+1)
		filter[i] = sinc(x/float64(factor)) * bessel(beta*math.Sqrt(1-u*u))
		sum += filter[i]
	}
	for i := range filter {
		filter[i] /= sum
	}
	out := Record{Rate: r.Rate / float64(factor)}
	for _, run := range r.Runs {
		n := len(run[0])
		if n < len(filter)+factor {
			continue
		}
		thin := make([][]float64, len(run))
		for c, x := range run {
			for at := reach; at+reach < n; at += factor {
				y := 0.0
				for i, h := range filter {
					y += h * x[at-reach+i]
				}
				thin[c] = append(thin[c], y)
			}
		}
		out.Runs = append(out.Runs, thin)
	}
	return out
}

func sinc(x float64) float64 {
	if x == 0 {
		return 1
	}
	return math.Sin(math.Pi*x) / (math.Pi * x)
}

// bessel is the modified Bessel function I0 by its series.
func bessel(x float64) float64 {
	sum, term := 1.0, 1.0
	for k := 1.0; term > 1e-17*sum; k++ {
		term *= x / (2 * k) * x / (2 * k)
		sum += term
	}
	return sum
}
