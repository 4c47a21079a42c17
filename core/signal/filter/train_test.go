package filter

import (
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/known"
	"hushframe/core/signal/internal/noise"
)

// A train without followers is its chain: the values of row F-CHAIN-DELAY of testdata/known/F_signals.json.
func TestTrainIsChain(t *testing.T) {
	row := known.One(t, "F_signals.json", "F-CHAIN-DELAY")
	const rate, f = 8000, 30
	c := Chain{FirstOrder(150, rate), FirstOrder(250, rate), Notch(200, 3.5, rate), Notch(400, 3.5, rate)}
	train := Train{Rate: rate}
	var got []float64
	for _, s := range c {
		train.Filters = append(train.Filters, Filter{Fixed: Chain{s}})
		got = append(got, 1e3*s.Delay(f, rate))
	}
	row.Check(t, 1, append(got, 1e3*train.Delay(f), math.Sqrt(train.Power(f)), -train.Lag(f))...)
}

// A follower at a steady speed is the fixed notch, in power, lag and delay, on either side of its centre.
func TestSteadyFollowerIsNotch(t *testing.T) {
	follow := Train{Rate: 4000, Filters: []Filter{{Follow: &Follower{Order: 2, Q: 3, Lowest: 50}}}, Speeds: [][]float64{{100, 100, 100}, {130, 130, 130}}}
	fixed := Train{Rate: 4000, Filters: []Filter{{Fixed: Chain{Notch(200, 3, 4000), Notch(260, 3, 4000)}}}}
	for _, f := range []float64{20, 150, 199, 230, 400, 1500} {
		for what, v := range map[string][2]float64{
			"power": {follow.Power(f), fixed.Power(f)}, "lag": {follow.Lag(f), fixed.Lag(f)}, "delay": {1e3 * follow.Delay(f), 1e3 * fixed.Delay(f)},
		} {
			if math.Abs(v[0]-v[1]) > 1e-9 {
				t.Errorf("%g Hz: %s %.12g, want %.12g", f, what, v[0], v[1])
			}
		}
	}
	// Without rotors there is nothing to follow.
	follow.Speeds = nil
	if follow.Power(200) != 1 || follow.Lag(30) != 0 {
		t.Errorf("a notch without a rotor leaves %g and lags %g", follow.Power(200), follow.Lag(30))
	}
}

// What a train says it leaves is what it leaves in the time domain: of white noise, of a line that the notch follows, and of one
// of another order that passes beside it.
func TestLeavesWhatPasses(t *testing.T) {
	const rate, n = 4000.0, 160000
	source := noise.Source(9)
	speeds, white, one, two := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	angle := 0.0
	for i := range speeds {
		speeds[i] = 200 + 10*math.Sin(2*math.Pi*0.1*float64(i)/rate)
		angle += 2 * math.Pi * speeds[i] / rate
		white[i], one[i], two[i] = source.Gauss(), math.Sin(angle), math.Sin(1.2*angle)
	}
	// The density of a line is the share of the time per bin.
	const step = 1.0
	line := func(order float64) Line {
		l := Line{Order: order, Density: make([]float64, 2001), True: make([]float64, 2001)}
		for k := range l.True {
			l.True[k] = float64(k) * step
		}
		for _, v := range speeds {
			l.Density[int(math.Round(order*v/step))] += 0.5 / n / step
		}
		return l
	}
	flat := make([]float64, 2001)
	for k := range flat {
		flat[k] = 2 / rate
	}
	few := make([]float64, 400)
	for k := range few {
		few[k] = speeds[k*n/len(few)]
	}
	follower := Follower{Order: 1, Q: 4, Lowest: 50}
	train := Train{Rate: rate, Filters: []Filter{{Follow: &follower}, {Fixed: Chain{LowPass(300, 0.7, rate)}}}, Speeds: [][]float64{few}}
	power := func(x []float64) float64 {
		sum := 0.0
		for _, v := range x {
			sum += v * v
		}
		return sum / n
	}
	for what, c := range map[string]struct {
		signal []float64
		noise  Noise
		by     float64
	}{
		"white noise":     {white, Noise{Step: step, Rest: flat}, 0.02},
		"the line":        {one, Noise{Step: step, Rest: make([]float64, 2001), Lines: []Line{line(1)}}, 1e-3},
		"the line beside": {two, Noise{Step: step, Rest: make([]float64, 2001), Lines: []Line{line(1.2)}}, 0.02},
	} {
		passed := power(Chain{LowPass(300, 0.7, rate)}.Apply(follower.Apply(c.signal, speeds, rate)))
		left := math.Pow(RMS(train.Leaves(c.noise), step, 0, 2000), 2)
		if math.Abs(passed-left) > c.by {
			t.Errorf("%s: %.4f passes, %.4f is said to", what, passed, left)
		}
	}
}

// A line that the recording shows folded is filtered where it is in truth.
func TestFoldedLine(t *testing.T) {
	n := Noise{Step: 100, Rest: make([]float64, 11), Lines: []Line{{Order: 6, Density: make([]float64, 11), True: make([]float64, 11)}}}
	n.Lines[0].Density[4], n.Lines[0].True[4] = 1, 1600
	c := LowPass(300, 0.7, 8000)
	h := cmplx.Abs(c.Response(1600, 8000))
	if got := (Train{Rate: 8000, Filters: []Filter{{Fixed: Chain{c}}}}).Leaves(n)[4]; math.Abs(got-h*h) > 1e-12 {
		t.Errorf("%g is left, want %g", got, h*h)
	}
}

// The chosen chain meets the target where a cut-off a tenth higher would not, and no chain of as few filters that meets it lags less. An order
// that holds nearly all is followed rather than filtered by a low-pass.
func TestChoose(t *testing.T) {
	const step = 2.0
	rest := make([]float64, 501)
	for k := range rest {
		f := float64(k) * step
		rest[k] = 1e-4 + 0.02*math.Exp(-math.Pow((f-320)/6, 2))
	}
	line := Line{Order: 1, Density: make([]float64, 501), True: make([]float64, 501)}
	for k := range line.True {
		line.True[k] = float64(k) * step
	}
	line.Density[80] = 2 // 160 Hz, in the way of any low-pass
	noises := []Noise{{Step: step, Rest: rest, Lines: []Line{line}}}
	g := Goal{Rate: 8000, Speeds: [][]float64{{160, 161, 159}}, From: 80, To: 1000, Target: 0.35, Bandwidth: 40,
		Orders: []float64{1}, Centres: []float64{320}, Q: []float64{4}, FollowQ: 5, Lowest: 60}
	trials, best := Choose(noises, g)
	if best < 0 {
		t.Fatal("no chain meets the target")
	}
	b := trials[best]
	for _, tr := range trials {
		t.Logf("orders %d centres %d low-pass %d at %.0f Hz: lag %.1f deg, left %.3f, met %v", tr.Orders, tr.Centres, tr.LowPass, tr.Cutoff, tr.Lag*180/math.Pi, tr.Left, tr.Met)
		if tr.Met && tr.Filters() <= b.Filters() && tr.Lag < b.Lag*(1-1e-9) {
			t.Errorf("a chain of %d filters lags only %.3f rad", tr.Filters(), tr.Lag)
		}
		if tr.Met != (tr.Left <= g.Target) {
			t.Errorf("left %.3f of %.3f is said to be met: %v", tr.Left, g.Target, tr.Met)
		}
		if tr.LowPass > 0 && tr.Met && tr.Cutoff < 3000 {
			above := tr.Train
			above.Filters = append([]Filter{}, tr.Train.Filters...)
			above.Filters[len(above.Filters)-1] = Filter{Fixed: map[int]Chain{1: {FirstOrder(1.1*tr.Cutoff, g.Rate)}, 2: {LowPass(1.1*tr.Cutoff, math.Sqrt2/2, g.Rate)}}[tr.LowPass]}
			if left := RMS(above.Leaves(noises[0]), step, g.From, g.To); left <= g.Target {
				t.Errorf("a cut-off of %.0f Hz would do: %.3f", 1.1*tr.Cutoff, left)
			}
		}
	}
	if b.Orders != 1 {
		t.Errorf("the line of order 1 is not followed: %+v", b)
	}
	g.Target = 1e-9
	if _, best := Choose(noises, g); best >= 0 {
		t.Error("an impossible target is met")
	}
}
