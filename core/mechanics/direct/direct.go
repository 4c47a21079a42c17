package direct

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/sparse"
)

// Place is a point fixed to a body of the problem.
type Place struct {
	Body  int
	Point assembly.Vec
}

// Spin is a spinning rotor: its tilts about two unit axes square to its shaft,
// First × Second along the shaft, are coupled by its angular momentum.
type Spin struct {
	Place
	First, Second assembly.Vec
	Momentum      float64 // Jp Ω, N·m·s, positive for a spin from First to Second
}

// Frame is a structure with damping and spinning rotors.
type Frame struct {
	System *assembly.System
	// Complex gives the complex stiffness of every group of the problem over its
	// real one at a frequency in Hz.
	Complex func(group int, frequency float64) complex128
	Spins   []Spin
}

// Answer is what a solve found.
type Answer struct {
	// Rate[axis][place][component] is the rate of rotation, rad/s, of the gyro
	// about an axis per N (components 0 to 2, force along x, y, z) or N·m (3 to 5) at a place.
	Rate [3][][6]complex128
	// Steps is the greatest number of iterations of the three solves, and Change
	// the greatest by which the last round of one changed its answer, relative.
	Steps  int
	Change float64
}

// NotSettled is the error of a solve whose answer still changes.
type NotSettled struct {
	Frequency, Change float64
	Steps             int
}

func (e *NotSettled) Error() string {
	return fmt.Sprintf("the full equations at %g Hz still change by %.2g of the answer after %d steps", e.Frequency, e.Change, e.Steps)
}

const (
	// reduction is the residual over the load at which a round ends, settled the change
	// of the answer by a round at which no other follows.
	reduction, settled    = 1e-8, 1e-7
	mostRounds, mostSteps = 6, 120
)

// Rates solves at a frequency above 0 Hz (it panics otherwise) for the rate of
// rotation of a place, under each unit component at other places. It solves the transposed equations for the
// three rotations read rather than for every load. Errors: *sparse.PivotError
// when the undamped structure rings at that very frequency, *NotSettled, or ctx.
func (f *Frame) Rates(ctx context.Context, frequency float64, gyro Place, at []Place, threads int) (*Answer, error) {
	if !(frequency > 0) || math.IsInf(frequency, 0) {
		panic(fmt.Sprintf("direct: a free frame has no response at %g Hz", frequency))
	}
	e, err := f.equations(ctx, frequency, threads)
	if err != nil {
		return nil, err
	}
	out := &Answer{}
	n := f.System.N
	for axis := range 3 {
		load := make([]float64, 2*n)
		var unit [6]float64
		unit[3+axis] = 1
		f.System.Load(load[:n], gyro.Body, gyro.Point, unit)
		x, steps, change, err := e.solve(ctx, load)
		if err != nil {
			return nil, err
		}
		out.Steps, out.Change = max(out.Steps, steps), max(out.Change, change)
		if !(change <= settled) {
			return nil, &NotSettled{frequency, change, steps}
		}
		for _, p := range at {
			re, im := f.System.Motion(p.Body, p.Point, x[:n]), f.System.Motion(p.Body, p.Point, x[n:])
			var rate [6]complex128
			for c := range rate {
				rate[c] = complex(0, e.omega) * complex(re[c], im[c])
			}
			out.Rate[axis] = append(out.Rate[axis], rate)
		}
	}
	return out, nil
}

// equations is the transposed matrix at one frequency. Complex vectors hold n
// real parts, then n imaginary ones.
type equations struct {
	n       int
	threads int
	omega   float64
	re, im  *sparse.Symmetric
	factor  *sparse.Factor // of re
	// tilt[2r] and tilt[2r+1] are the moments of rotor r about its axes, over the unknowns.
	tilt     [][]float64
	momentum []float64
	half     []float64
}

func (f *Frame) equations(ctx context.Context, frequency float64, threads int) (*equations, error) {
	s := f.System
	e := &equations{n: s.N, threads: threads, omega: 2 * math.Pi * frequency, half: make([]float64, 2*s.N)}
	groups := len(s.Problem().Groups)
	re, im := make([]float64, groups), make([]float64, groups)
	for g := range groups {
		c := f.Complex(g, frequency)
		if re[g], im[g] = real(c), imag(c); cmplx.IsNaN(c) || cmplx.IsInf(c) {
			return nil, fmt.Errorf("the complex stiffness of %s at %g Hz is %v", s.Problem().Groups[g].Name, frequency, c)
		}
	}
	e.re = sparse.Combine(1, s.Weighted(re, threads), -e.omega*e.omega, s.M)
	e.im = s.Weighted(im, threads)
	analysis, err := sparse.Analyse(e.re.Pattern(), s.Ordering())
	if err != nil {
		return nil, err
	}
	if e.factor, err = analysis.Factorise(ctx, e.re, threads); err != nil {
		return nil, err
	}
	for _, spin := range f.Spins {
		for _, axis := range []assembly.Vec{spin.First, spin.Second} {
			t := make([]float64, s.N)
			s.Load(t, spin.Body, spin.Point, [6]float64{3: axis[0], 4: axis[1], 5: axis[2]})
			e.tilt = append(e.tilt, t)
		}
		e.momentum = append(e.momentum, spin.Momentum)
	}
	return e, nil
}

// multiply sets dst to the transposed matrix times x.
func (e *equations) multiply(dst, x []float64) {
	n := e.n
	e.re.MulBlock(dst, x, 2)
	e.im.MulBlock(e.half, x, 2)
	for i := range n {
		dst[i] -= e.half[n+i]
		dst[n+i] += e.half[i]
	}
	for r, h := range e.momentum { // iω Gᵀ with G = H (a bᵀ − b aᵀ)
		a, b := e.tilt[2*r], e.tilt[2*r+1]
		f := complex(0, -e.omega*h)
		onA, onB := f*e.along(b, x), -f*e.along(a, x)
		for i, y := range a {
			if y != 0 {
				dst[i] += real(onA) * y
				dst[n+i] += imag(onA) * y
			}
		}
		for i, y := range b {
			if y != 0 {
				dst[i] += real(onB) * y
				dst[n+i] += imag(onB) * y
			}
		}
	}
}

func (e *equations) along(row, x []float64) complex128 {
	re, im := 0.0, 0.0
	for i, y := range row {
		if y != 0 {
			re += y * x[i]
			im += y * x[e.n+i]
		}
	}
	return complex(re, im)
}
