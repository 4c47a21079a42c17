//go:build !amd64 || purego

package dense

func stripFast(int, int, int, []float64, int, int, []float64, int, []float64, int) bool { return false }
