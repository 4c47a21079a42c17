package order

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/signal/internal/noise"
)

// The smoother against the normal distribution of all moments at once, written down without recursion: phases, their errors and the
// likelihood.
func TestSmoothIsThePosterior(t *testing.T) {
	const n, r = 9, 2
	d := drift{own: 3, common: 5, memory: 0.2, step: 0.1}
	source := noise.Source(5)
	at, said := make([][]float64, n), make([]evidence, n)
	for k := range n {
		at[k] = []float64{0.3 * float64(k), 1 - 0.1*float64(k)}
		a, b, c := source.Gauss(), source.Gauss(), 2+source.Gauss()
		said[k] = evidence{[]float64{3 * source.Gauss(), source.Gauss()}, []float64{1 + a*a, a * b / 2, a * b / 2, c*c + b*b}}
	}
	got := smooth(at, said, d, withErrors)

	// Mean and covariance of the states of all moments: x_k = F·x_k-1 + noise of the accelerations.
	const m = 3 * r
	f := mat.NewDense(m, m, nil)
	kept := math.Exp(-d.step / d.memory)
	q, p0 := mat.NewDense(m, m, nil), mat.NewDense(m, m, nil)
	for i := range r {
		f.Set(i, i, 1)
		f.Set(i, r+i, d.step)
		f.Set(i, 2*r+i, d.step*d.step/2)
		f.Set(r+i, r+i, 1)
		f.Set(r+i, 2*r+i, d.step)
		f.Set(2*r+i, 2*r+i, kept)
		p0.Set(i, i, 10)
		p0.Set(r+i, r+i, startError*startError)
		for j := range r {
			v := 25.0
			if i == j {
				v += 9
			}
			p0.Set(2*r+i, 2*r+j, v)
			q.Set(2*r+i, 2*r+j, v*(1-kept*kept))
		}
	}
	mean := mat.NewVecDense(m, []float64{at[0][0], at[0][1], (at[1][0] - at[0][0]) / d.step, (at[1][1] - at[0][1]) / d.step, 0, 0})
	prior, centre := mat.NewDense(n*r, n*r, nil), mat.NewVecDense(n*r, nil)
	p := mat.DenseCopyOf(p0)
	for k := range n {
		cross := mat.DenseCopyOf(p) // of moment j ≥ k with moment k
		for j := k; j < n; j++ {
			for a := range r {
				for b := range r {
					prior.Set(j*r+a, k*r+b, cross.At(a, b))
					prior.Set(k*r+b, j*r+a, cross.At(a, b))
				}
			}
			next := mat.NewDense(m, m, nil)
			next.Mul(f, cross)
			cross = next
		}
		for a := range r {
			centre.SetVec(k*r+a, mean.AtVec(a))
		}
		moved := mat.NewVecDense(m, nil)
		moved.MulVec(f, mean)
		mean = moved
		next := mat.NewDense(m, m, nil)
		next.Mul(f, p)
		next.Mul(next, f.T())
		next.Add(next, q)
		p = next
	}
	var precision, posterior mat.Dense
	if err := precision.Inverse(prior); err != nil {
		t.Fatal(err)
	}
	right := mat.NewVecDense(n*r, nil)
	right.MulVec(&precision, centre)
	for k := range n {
		for a := range r {
			v := said[k].slope[a]
			for b := range r {
				h := said[k].curve[a*r+b]
				v += h * at[k][b]
				precision.Set(k*r+a, k*r+b, precision.At(k*r+a, k*r+b)+h)
			}
			right.SetVec(k*r+a, right.AtVec(k*r+a)+v)
		}
	}
	if err := posterior.Inverse(&precision); err != nil {
		t.Fatal(err)
	}
	want := mat.NewVecDense(n*r, nil)
	want.MulVec(&posterior, right)
	for k := range n {
		for a := range r {
			if math.Abs(got.phase[k][a]-want.AtVec(k*r+a)) > 1e-6 {
				t.Errorf("moment %d, rotor %d: phase %.9f, want %.9f", k, a, got.phase[k][a], want.AtVec(k*r+a))
			}
			if e := math.Sqrt(posterior.At(k*r+a, k*r+a)); math.Abs(got.phaseError[k][a]/e-1) > 1e-6 {
				t.Errorf("moment %d, rotor %d: error %.9f, want %.9f", k, a, got.phaseError[k][a], e)
			}
		}
	}

	// The likelihood up to what the drift does not change: log of the mean over the prior of exp(g·e - e·H·e/2).
	var both mat.Dense
	h := mat.NewDense(n*r, n*r, nil)
	for k := range n {
		for a := range r {
			for b := range r {
				h.Set(k*r+a, k*r+b, said[k].curve[a*r+b])
			}
		}
	}
	both.Mul(h, prior)
	for i := range n * r {
		both.Set(i, i, both.At(i, i)+1)
	}
	like := -math.Log(mat.Det(&both)) / 2
	off := mat.NewVecDense(n*r, nil)
	for k := range n {
		for a := range r {
			off.SetVec(k*r+a, centre.AtVec(k*r+a)-at[k][a])
		}
	}
	bent := mat.NewVecDense(n*r, nil)
	bent.MulVec(h, off)
	rest := mat.NewVecDense(n*r, nil)
	for k := range n {
		for a := range r {
			i := k*r + a
			like += said[k].slope[a]*off.AtVec(i) - bent.AtVec(i)*off.AtVec(i)/2
			rest.SetVec(i, said[k].slope[a]-bent.AtVec(i))
		}
	}
	spread := mat.NewVecDense(n*r, nil)
	spread.MulVec(&posterior, rest)
	like += mat.Dot(spread, rest) / 2
	if math.Abs(got.likelihood-like) > 1e-6*math.Abs(like) {
		t.Errorf("likelihood %.9f, want %.9f", got.likelihood, like)
	}
	if forward := smooth(at, said, d, likelihoodOnly); forward.likelihood != got.likelihood || forward.phase != nil {
		t.Error("the filter alone gives another likelihood, or phases")
	}
	for k, v := range smooth(at, said, d, withoutErrors).phase {
		for a := range r {
			if math.Abs(v[a]-got.phase[k][a]) > 1e-9 {
				t.Errorf("moment %d: phase %g without errors, %g with", k, v[a], got.phase[k][a])
			}
		}
	}
}
