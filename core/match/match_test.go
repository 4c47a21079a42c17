package match

import (
	"math"
	"math/rand/v2"
	"reflect"
	"testing"
)

// least tries every pairing.
func least(cost []float64, rows, columns int, cut float64) float64 {
	taken := make([]bool, columns)
	var best func(row int) float64
	best = func(row int) float64 {
		if row == rows {
			return 0
		}
		out := cut + best(row+1)
		for j := range columns {
			if c := cost[row*columns+j]; !taken[j] && !math.IsInf(c, 0) && !math.IsNaN(c) {
				taken[j] = true
				out = min(out, c+best(row+1))
				taken[j] = false
			}
		}
		return out
	}
	return best(0)
}

func TestAssignIsOptimal(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for trial := range 3000 {
		rows, columns := random.IntN(7), random.IntN(7)
		cut := random.Float64() * 1.2
		cost := make([]float64, rows*columns)
		for i := range cost {
			switch cost[i] = random.Float64() - 0.1; random.IntN(8) {
			case 0:
				cost[i] = math.Inf(1)
			case 1:
				cost[i] = math.NaN()
			case 2:
				cost[i] = 0.5 // ties
			}
		}
		got := Assign(cost, rows, columns, cut)
		total, taken := 0.0, map[int]bool{}
		for i, j := range got {
			if j < 0 {
				total += cut
				continue
			}
			if taken[j] {
				t.Fatalf("trial %d: column %d twice", trial, j)
			}
			taken[j] = true
			total += cost[i*columns+j]
		}
		if want := least(cost, rows, columns, cut); math.Abs(total-want) > 1e-12 || math.IsNaN(total) {
			t.Fatalf("trial %d: total %g, least %g (%d×%d, cut %g): %v, %v", trial, total, want, rows, columns, cut, cost, got)
		}
	}
}

// The nearest neighbour would take 110 for 108 and leave 100 with nothing near; together they shift alike.
func TestPairsShiftTogether(t *testing.T) {
	axis := []float64{0, 1, 0}
	predicted := []Peak{{Frequency: 108, Direction: axis}, {Frequency: 121, Direction: axis}}
	observed := []Peak{{Frequency: 100, Direction: axis}, {Frequency: 110, Direction: axis}}
	got := Pairs(predicted, observed, Options{})
	if len(got.Pairs) != 2 || got.Pairs[0].Observed != 0 || got.Pairs[1].Observed != 1 || got.Predicted != nil || got.Observed != nil {
		t.Fatalf("%+v", got)
	}
	if e := got.Pairs[0].Error; math.Abs(e-0.08) > 1e-12 {
		t.Errorf("error %g", e)
	}
	// By the formulas of the package comment.
	c := func(p, o float64) float64 { return math.Pow(math.Log(p/o)/0.05, 2) }
	if want := c(108, 100); math.Abs(got.Pairs[0].Cost-want) > 1e-12 {
		t.Errorf("cost %g, want %g", got.Pairs[0].Cost, want)
	}
	w := func(c float64) float64 { return math.Exp(-c / 2) }
	// 121 to 100 is within reach too: ln 1.21 = 0.19.
	want := w(c(108, 100)) / (w(9) + w(c(108, 100)) + w(c(108, 110)) + w(c(121, 100)))
	if math.Abs(got.Pairs[0].Confidence-want) > 1e-12 {
		t.Errorf("confidence %g, want %g", got.Pairs[0].Confidence, want)
	}
}

func TestPairsKeepTheRest(t *testing.T) {
	roll, pitch := []float64{1, 0, 0}, []float64{0, 1, 0}
	predicted := []Peak{
		{Frequency: 60, Direction: roll},  // below the band
		{Frequency: 200, Direction: roll}, // its only neighbour is on another axis
		{Frequency: 300, Direction: roll}, // paired
		{Frequency: 500, Direction: roll}, // nothing near
	}
	observed := []Peak{
		{Frequency: 302, Direction: roll},
		{Frequency: 201, Direction: pitch},
		{Frequency: 900, Direction: roll}, // above the band
		{Frequency: 700, Direction: roll},
	}
	got := Pairs(predicted, observed, Options{From: 80, To: 800, Turning: 100})
	if len(got.Pairs) != 1 || got.Pairs[0].Predicted != 2 || got.Pairs[0].Observed != 0 {
		t.Fatalf("%+v", got)
	}
	if c := got.Pairs[0].Confidence; c < 0.98 || c > 1 {
		t.Errorf("confidence of a lone pair %g", c)
	}
	if !reflect.DeepEqual(got.Predicted, []int{1, 3}) || !reflect.DeepEqual(got.Observed, []int{1, 3}) {
		t.Errorf("%+v", got)
	}
}

func TestConfidenceOfEqualCandidates(t *testing.T) {
	axis := []float64{1}
	got := Pairs([]Peak{{Frequency: 100, Direction: axis}},
		[]Peak{{Frequency: 100 / 1.01, Direction: axis}, {Frequency: 100 * 1.01, Direction: axis}}, Options{})
	if len(got.Pairs) != 1 || math.Abs(got.Pairs[0].Confidence-0.5) > 0.01 {
		t.Errorf("%+v", got)
	}
	// A frequency known to 10 % widens what counts as near.
	wide := Pairs([]Peak{{Frequency: 100, Direction: axis}}, []Peak{{Frequency: 118, Error: 11.8, Direction: axis}}, Options{})
	none := Pairs([]Peak{{Frequency: 100, Direction: axis}}, []Peak{{Frequency: 118, Direction: axis}}, Options{})
	if len(wide.Pairs) != 1 || len(none.Pairs) != 0 {
		t.Errorf("%+v, %+v", wide, none)
	}
}

func TestScale(t *testing.T) {
	predicted := []float64{1, 10, 100, 5, 0}
	observed := []float64{2, 40, 200, 1e9, 7}
	got := Scale(predicted, observed, []bool{true, true, true, false, true})
	// Ratios 2, 4, 2: geometric mean 16^(1/3); logarithms deviate by (-1, 2, -1)/3·ln 2, rms √2/3·ln 2.
	if math.Abs(got.Factor-math.Cbrt(16)) > 1e-12 || got.Bins != 3 ||
		math.Abs(got.Residual-10*math.Log10(2)*math.Sqrt2/3) > 1e-12 {
		t.Errorf("%+v", got)
	}
	if none := Scale(predicted, observed, make([]bool, 5)); !math.IsNaN(none.Factor) || none.Bins != 0 {
		t.Errorf("%+v", none)
	}
}

func TestResample(t *testing.T) {
	x, y := []float64{1, 2, 4}, []float64{1, 100, 0}
	got := Resample(x, y, []float64{0.9, 1, 1.5, 2, 3, 4, 4.1, 1.25})
	want := []float64{math.NaN(), 1, 10, 100, 50, 0, math.NaN(), math.Sqrt(10)}
	for i := range want {
		if math.Abs(got[i]-want[i]) > 1e-12 || math.IsNaN(got[i]) != math.IsNaN(want[i]) {
			t.Errorf("place %d: %g, want %g", i, got[i], want[i])
		}
	}
}

func BenchmarkAssign100(b *testing.B) {
	random := rand.New(rand.NewPCG(3, 4))
	const n = 100
	cost := make([]float64, n*n)
	for i := range cost {
		cost[i] = random.Float64()
	}
	for b.Loop() {
		Assign(cost, n, n, 0.5)
	}
}
