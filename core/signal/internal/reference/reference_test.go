package reference

import "testing"

// Rows F-LCG and F-LCG-GAUSS of testdata/known/F_signals.json.
func TestNoise(t *testing.T) {
	n := Noise(12345)
	Get(t, "F-LCG", nil).CheckAll(t, func() []float64 {
		var got []float64
		for range 3 {
			got = append(got, float64(n.Integer()))
		}
		n = 12345
		for range 5 {
			got = append(got, n.Uniform())
		}
		return got
	}()...)
	n = 12345
	Get(t, "F-LCG-GAUSS", nil).CheckAll(t, n.Gauss(), n.Gauss(), n.Gauss())
}
