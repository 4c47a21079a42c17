package peaks

import (
	"math"
	"testing"
)

// A Lorentz curve seen through a Hann window: the widening that refine takes out is what the window adds, within 15 %.
func TestWidening(t *testing.T) {
	kernel := func(d float64) float64 { // power of the periodic Hann window, d in bins
		w := 0.5*sinc(d) + 0.25*sinc(d-1) + 0.25*sinc(d+1)
		return w * w
	}
	for _, gamma := range []float64{2, 3, 5} { // bins
		for _, off := range []float64{0, 0.25, 0.5} {
			const centre = 60
			p := make([]float64, 2*centre+1)
			for i := range p {
				for d := -12.0; d <= 12; d += 0.05 {
					x := (float64(i) + d - centre - off) / gamma
					p[i] += kernel(d) / (1 + x*x)
				}
			}
			got, ok := fit(p, 1, 0, len(p)-1, lorentz{place: centre + off, half: gamma}, 0, Settings{Freedom: 100})
			if !ok {
				t.Fatalf("half-width %g bins, off by %g: no fit", gamma, off)
			}
			added := got.half*got.half - gamma*gamma
			taken := widening * 1.5 * 1.5 // noise bandwidth of the Hann window, squared bins
			if math.Abs(added-taken) > 0.15*taken {
				t.Errorf("half-width %g, off by %g: the window adds %.3f, taken out %.3f", gamma, off, added, taken)
			}
			if math.Abs(got.place-centre-off) > 0.01 {
				t.Errorf("half-width %g, off by %g: place off by %.4f bins", gamma, off, got.place-centre-off)
			}
			found := Find(p, 1, Settings{Freedom: 1e4, Resolution: 1.5, BinCorrelation: 35.0 / 18})
			if len(found) != 1 || math.Abs(found[0].Damping*found[0].Frequency-gamma) > 0.03*gamma {
				t.Errorf("half-width %g, off by %g: %+v", gamma, off, found)
			}
		}
	}
}

func sinc(x float64) float64 {
	if x == 0 {
		return 1
	}
	return math.Sin(math.Pi*x) / (math.Pi * x)
}
