package direct

import (
	"context"
	"math"
	"math/cmplx"
	"slices"
)

// solve gives x of A x = b by rounds of GMRES, each for what the last left
// over, with the steps taken and the last change of x over x.
func (e *equations) solve(ctx context.Context, b []float64) (x []float64, steps int, change float64, err error) {
	x = make([]float64, len(b))
	if norm(b) == 0 {
		return x, 0, 0, nil
	}
	rest := slices.Clone(b)
	work := make([]float64, len(b))
	change = math.Inf(1)
	for range mostRounds {
		more, took, err := e.round(ctx, rest)
		if err != nil {
			return nil, steps, change, err
		}
		steps += took
		for i, d := range more {
			x[i] += d
		}
		if change = norm(more) / norm(x); change <= settled {
			break
		}
		e.multiply(work, x)
		for i := range rest {
			rest[i] = b[i] - work[i]
		}
	}
	return x, steps, change, nil
}

// round gives x of A x = b but for a residual of reduction times b.
func (e *equations) round(ctx context.Context, b []float64) (x []float64, steps int, err error) {
	size := norm(b)
	x = make([]float64, len(b))
	if size == 0 {
		return x, 0, nil
	}
	basis := [][]float64{scaled(b, 1/size)}
	// Columns of the Hessenberg matrix, reduced to triangular form by rotations
	// as they come.
	var h [][]complex128
	var cos []float64
	var sin []complex128
	g := []complex128{complex(size, 0)} // rotated right-hand side
	work := make([]float64, len(b))
	for steps < mostSteps && cmplx.Abs(g[steps]) > reduction*size {
		if err := ctx.Err(); err != nil {
			return nil, steps, err
		}
		z := slices.Clone(basis[steps])
		e.factor.SolveThreads(z, 2, e.threads)
		e.multiply(work, z)
		column := make([]complex128, steps+2)
		for range 2 { // twice, so that rounding does not spoil orthogonality
			for j, v := range basis {
				d := dot(v, work)
				column[j] += d
				subtract(work, v, d)
			}
		}
		length := norm(work)
		column[steps+1] = complex(length, 0)
		for j := range steps {
			a, c := column[j], column[j+1]
			column[j] = complex(cos[j], 0)*a + sin[j]*c
			column[j+1] = -cmplx.Conj(sin[j])*a + complex(cos[j], 0)*c
		}
		a := column[steps]
		r := math.Hypot(cmplx.Abs(a), length)
		phase := complex(1, 0)
		if a != 0 {
			phase = a / complex(cmplx.Abs(a), 0)
		}
		c, s := cmplx.Abs(a)/r, phase*complex(length/r, 0)
		column[steps] = phase * complex(r, 0)
		cos, sin = append(cos, c), append(sin, s)
		g = append(g, -cmplx.Conj(s)*g[steps])
		g[steps] *= complex(c, 0)
		h = append(h, column)
		steps++
		if length == 0 {
			break
		}
		basis = append(basis, scaled(work, 1/length))
	}
	y := make([]complex128, steps)
	for i := steps - 1; i >= 0; i-- {
		y[i] = g[i]
		for j := i + 1; j < steps; j++ {
			y[i] -= h[j][i] * y[j]
		}
		y[i] /= h[i][i]
	}
	for j, f := range y {
		subtract(x, basis[j], -f)
	}
	e.factor.SolveThreads(x, 2, e.threads)
	return x, steps, nil
}

// dot is vᴴ w.
func dot(v, w []float64) complex128 {
	n := len(v) / 2
	re, im := 0.0, 0.0
	for i := range n {
		re += v[i]*w[i] + v[n+i]*w[n+i]
		im += v[i]*w[n+i] - v[n+i]*w[i]
	}
	return complex(re, im)
}

// subtract takes f v from w.
func subtract(w, v []float64, f complex128) {
	n := len(v) / 2
	a, b := real(f), imag(f)
	for i := range n {
		w[i] -= a*v[i] - b*v[n+i]
		w[n+i] -= a*v[n+i] + b*v[i]
	}
}

func norm(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum)
}

func scaled(v []float64, f float64) []float64 {
	out := make([]float64, len(v))
	for i, x := range v {
		out[i] = f * x
	}
	return out
}
