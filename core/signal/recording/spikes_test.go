package recording

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// What stands alone is found wherever it is, and what is loud for longer, rounded, constant or has heavy tails is not.
func TestSpikes(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	noise := make([]float64, 20000)
	for i := range noise {
		noise[i] = 3 + random.NormFloat64()
	}
	with := func(change func(v []float64)) []float64 {
		v := slices.Clone(noise)
		change(v)
		return v
	}
	for _, c := range []struct {
		name   string
		values []float64
		at     []int
	}{
		{"noise", noise, nil},
		{"one", with(func(v []float64) { v[700] = 100 }), []int{700}},
		{"at the ends", with(func(v []float64) { v[0], v[19999] = -90, 90 }), []int{0, 19999}},
		{"a pair", with(func(v []float64) { v[700], v[701] = 100, 90 }), []int{700, 701}},
		{"a blow that rings", with(func(v []float64) {
			for i := range 4000 {
				v[5000+i] += 100 * math.Exp(-float64(i)/500) * math.Sin(float64(i)/3)
			}
		}), nil},
		{"many", with(func(v []float64) {
			for i := 0; i < len(v); i += 100 {
				v[i] = 100
			}
		}), nil},
		{"a step", with(func(v []float64) {
			for i := range v[10000:] {
				v[10000+i] += 500
			}
		}), nil},
		{"coarse steps at rest", with(func(v []float64) {
			for i := range v {
				v[i] = 0
			}
			v[300], v[9000] = 1, -1
		}), nil},
		{"too short", []float64{0, 0, 9, 0}, nil},
	} {
		got := FindSpikes(c.values)
		if !slices.Equal(got.At, c.at) {
			t.Errorf("%s: at %v, want %v", c.name, got.At, c.at)
		}
	}
	// One value of 1000 among n of variance 1 about 3 adds (997² − 1)/n to the mean square, to within the noise.
	got := FindSpikes(with(func(v []float64) { v[700] = 1000 }))
	added := 997. * 997 / 20000
	if want := added / (added + 1); math.Abs(got.Share-want) > 0.002 || got.Largest != 1000 || got.Rest > 10 {
		t.Errorf("share %.4f, want %.4f; largest %g, rest %g", got.Share, want, got.Largest, got.Rest)
	}
	if got := FindSpikes(with(func(v []float64) { v[700] = 1e300 })); got.Share != 1 {
		t.Errorf("share %g of a square that overflows", got.Share)
	}
}

func TestCount(t *testing.T) {
	if Count(1, "gap") != "1 gap" || Count(0, "gap") != "0 gaps" || Count(7, "sample") != "7 samples" {
		t.Error(Count(1, "gap"), Count(0, "gap"), Count(7, "sample"))
	}
}

func BenchmarkSpikes(b *testing.B) {
	random := rand.New(rand.NewPCG(5, 6))
	values := make([]float64, 240000)
	for i := range values {
		values[i] = random.NormFloat64()
	}
	for b.Loop() {
		FindSpikes(values)
	}
}
