package match

import "math"

// Power integrates a density y(x), given at rising x, from one place to another by trapezia, its ends read as by Resample;
// NaN when x does not reach that far. It panics if x and y differ in length.
func Power(x, y []float64, from, to float64) float64 {
	ends := Resample(x, y, []float64{from, to})
	if math.IsNaN(ends[0]) || math.IsNaN(ends[1]) || to < from {
		return math.NaN()
	}
	sum, at, v := 0.0, from, ends[0]
	for k, next := range x {
		if next > from && next < to {
			sum += (next - at) * (v + y[k]) / 2
			at, v = next, y[k]
		}
	}
	return sum + (to-at)*(v+ends[1])/2
}

// Band is a range of frequency, Hz.
type Band struct{ From, To float64 }

// ThirdOctaves gives the third-octave bands that overlap a range, clipped to it: the midbands are 1000·10^(n/10) Hz and the
// edges a twentieth of a decade off (IEC 61260-1:2014, base-ten system). Ends so close to an edge that a band would be
// narrower than a hundredth of itself do not make one. It panics unless 0 < from < to.
func ThirdOctaves(from, to float64) []Band {
	if !(from > 0) || !(to > from) {
		panic("match: no range of frequency")
	}
	var out []Band
	edge := func(n int) float64 { return 1000 * math.Pow(10, (float64(n)-0.5)/10) }
	for n := int(math.Floor(10*math.Log10(from/1000))) - 1; edge(n) < to; n++ {
		b := Band{math.Max(edge(n), from), math.Min(edge(n+1), to)}
		if b.To-b.From > 0.01*(edge(n+1)-edge(n)) {
			out = append(out, b)
		}
	}
	return out
}
