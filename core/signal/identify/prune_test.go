package identify

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// Errors are widened by the share of the difference of variances that the likelihood given up calls for: none for none, all of it from half of
// each parameter on, and never narrowed.
func TestDoubted(t *testing.T) {
	own := scatter{frequency: 3, damping: 0.1, angle: 0.2}
	larger := func(value float64) rival {
		return rival{value: value, parameters: 114, errors: []scatter{{}, {frequency: 5, damping: 0.1, angle: 0.1}}}
	}
	for _, c := range []struct{ given, want float64 }{{-2, 3}, {0, 3}, {3.5, math.Sqrt(9 + 16*0.5)}, {7, 5}, {20, 5}} {
		got := doubted(own, 1, []rival{larger(50 + c.given)}, 50, 100)
		if math.Abs(got.frequency-c.want) > 1e-12 || got.damping != own.damping || got.angle != own.angle {
			t.Errorf("%g of the log-likelihood given up for 14 parameters: %+v, want a frequency error of %g", c.given, got, c.want)
		}
	}
	// Of several larger models the one that doubts most counts.
	if got := doubted(own, 1, []rival{larger(57), larger(50)}, 50, 100); got.frequency != 5 {
		t.Errorf("two larger models: %+v", got)
	}
	if got := doubted(own, 0, []rival{larger(57)}, 50, 100); got != own {
		t.Errorf("a larger model without the pair: %+v", got)
	}
}

// Pruning hands on what the larger models said of the pair that is left, and of no other: of a narrow mode and two broad ones beside each other one
// is taken out.
func TestPruningDoubts(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 11))
	s := system{rate: 2000, frequency: []float64{315, 150, 300}, damping: []float64{0.06, 0.01, 0.05}, shape: [][]float64{{-0.1, 0.995}, {1, 0}, {0.2, 0.98}}}
	r := Record{Rate: s.rate, Runs: [][][]float64{s.shake(rng, 40000, 2)}}
	w, err := newLikelihood(r, 2048, 80, 560, nil, 0.004, 2)
	if err != nil {
		t.Fatal(err)
	}
	start := &innovation{rate: s.rate, l: 2, noise: []float64{0.3, 0, 0.1, 0.2}}
	for m, f := range s.frequency {
		p := pair{decay: 2 * math.Pi * f * s.damping[m], turn: 2 * math.Pi * f, c: []complex128{complex(s.shape[m][0], 0), complex(s.shape[m][1], 0)},
			k: []complex128{0.05, 0.05i}}
		p.normal()
		start.pairs = append(start.pairs, p)
	}
	three, ok := w.fit(start, math.Inf(-1))
	if !ok {
		t.Fatal("no fit")
	}
	// Nothing is taken out for nothing, and every loss is told; then the least is given up, and that alone.
	_, all := w.prune(three, 0, 1e9)
	losses := []float64{all[0].loss, all[1].loss, all[2].loss}
	slices.Sort(losses)
	two, left := w.prune(three, (losses[0]+losses[1])/2, 1e9)
	if len(two.pairs) != 2 || len(left) != 2 {
		t.Fatalf("%d pairs, %d told of, losses %v", len(two.pairs), len(left), losses)
	}
	for i, p := range two.pairs {
		place := 0
		for j, q := range three.pairs {
			if math.Abs(p.turn-q.turn) < math.Abs(p.turn-three.pairs[place].turn) {
				place = j
			}
		}
		// What was taken out was worth more than half of each parameter: all of the difference counts.
		own, larger, got := two.errors(i), three.errors(place), left[i].scatter
		want := scatter{max(own.frequency, larger.frequency), max(own.damping, larger.damping), max(own.angle, larger.angle)}
		if math.Abs(got.frequency/want.frequency-1) > 1e-9 || math.Abs(got.damping/want.damping-1) > 1e-9 || math.Abs(got.angle/want.angle-1) > 1e-9 {
			t.Errorf("%.1f Hz: told %+v; alone %+v, with the others %+v", p.turn/(2*math.Pi), got, own, larger)
		}
		if broad := p.turn > 2*math.Pi*250; broad && !(larger.frequency > 1.1*own.frequency) {
			t.Errorf("the broad neighbour adds nothing: alone %+v, with it %+v", own, larger)
		}
	}
}
