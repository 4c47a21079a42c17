package dense

// Transposed gives Aᵀ of an n×n row-major matrix.
func Transposed(a []float64, n int) []float64 {
	out := make([]float64, n*n)
	for i := range n {
		for j := range n {
			out[j*n+i] = a[i*n+j]
		}
	}
	return out
}
