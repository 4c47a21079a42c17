package recording

// Quality is what the values of one column say about their own worth.
type Quality struct {
	Min, Max float64
	// Saturated counts samples in stretches of at least three that stay at the largest or at the smallest value.
	Saturated int
	// Repeated is the share of samples equal to the one before, 0 to 1: near 1 for a column that is logged faster than
	// it is measured, 1 for one that never changes.
	Repeated float64
}

// saturationRun is the number of neighbouring samples at an extreme that count as saturation: a peak that is sampled
// well touches its extreme once, or twice when it falls between samples.
const saturationRun = 3

// Inspect judges the values of a column; NaN is not expected. A column that never changes is not called saturated.
func Inspect(values []float64) Quality {
	if len(values) == 0 {
		return Quality{}
	}
	q := Quality{Min: values[0], Max: values[0]}
	for _, v := range values[1:] {
		q.Min, q.Max = min(q.Min, v), max(q.Max, v)
	}
	same, equal := 1, 0
	flush := func(end int) {
		v := values[end-1]
		if same >= saturationRun && q.Min != q.Max && (v == q.Min || v == q.Max) {
			q.Saturated += same
		}
		same = 1
	}
	for i := 1; i < len(values); i++ {
		if values[i] == values[i-1] {
			same++
			equal++
			continue
		}
		flush(i)
	}
	flush(len(values))
	if len(values) > 1 {
		q.Repeated = float64(equal) / float64(len(values)-1)
	}
	return q
}
