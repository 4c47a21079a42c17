package forced

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"sync"
)

// Transfer holds the gyro rate per unit of each input.
type Transfer struct {
	Frequency []float64 // Hz
	Inputs    []Input
	// Rate[axis][input][k] in rad/s per N or per N·m at Frequency[k].
	Rate [3][][]complex128
}

// Unbounded is the error of a response at an undamped resonance.
type Unbounded struct{ Frequency float64 }

func (e *Unbounded) Error() string {
	return fmt.Sprintf("the response has no bound at %.6g Hz: a mode there has no damping at all", e.Frequency)
}

// Transfer computes the transfer functions at the given frequencies, all above
// 0 Hz (it panics otherwise), on up to the given number of threads. The result
// does not depend on threads. It fails with *Unbounded, or when ctx ends.
func (s *System) Transfer(ctx context.Context, frequency []float64, threads int) (*Transfer, error) {
	t := &Transfer{Frequency: frequency, Inputs: s.inputs}
	for axis := range t.Rate {
		t.Rate[axis] = make([][]complex128, len(s.inputs))
		for j := range t.Rate[axis] {
			t.Rate[axis][j] = make([]complex128, len(frequency))
		}
	}
	threads = max(1, min(threads, len(frequency)))
	failed := make([]error, threads)
	var group sync.WaitGroup
	for w := range threads {
		group.Go(func() {
			d := s.driver()
			for k := w; k < len(frequency); k += threads {
				if err := ctx.Err(); err != nil {
					failed[w] = err
					return
				}
				if err := d.gyroRates(frequency[k]); err != nil {
					failed[w] = err
					return
				}
				for axis := range 3 {
					for j, h := range d.rates[axis] {
						t.Rate[axis][j][k] = h
					}
				}
			}
		})
	}
	group.Wait()
	for _, err := range failed {
		if err != nil {
			return nil, err
		}
	}
	return t, nil
}

// Solve gives the modal coordinates for a modal force at a frequency above 0 Hz.
func (s *System) Solve(frequency float64, force []complex128) ([]complex128, error) {
	if len(force) != len(s.vectors) {
		panic(fmt.Sprintf("forced: modal force of %d numbers over %d vectors", len(force), len(s.vectors)))
	}
	omega := angular(frequency)
	n := len(s.vectors)
	var q []complex128
	var ok bool
	if s.reduced != nil {
		x := s.reduced.turn(force)
		ok = s.reduced.solve(omega*omega, make([]complex128, n*n), x)
		q = s.reduced.turnBack(x)
	} else {
		q = append([]complex128(nil), force...)
		ok = factorSolve(s.matrix(omega), n, q)
	}
	if !ok || !finite(q) {
		return nil, &Unbounded{frequency}
	}
	return q, nil
}

// Drive gives the modal coordinates for one unit of an input.
func (s *System) Drive(frequency float64, input int) ([]complex128, error) {
	force := make([]complex128, len(s.vectors))
	for v, x := range s.load[input] {
		force[v] = complex(x, 0)
	}
	return s.Solve(frequency, force)
}

// driver computes all transfer functions at one frequency after another with
// its own scratch space. It solves with the transposed matrix for the three
// outputs rather than for every input.
type driver struct {
	s      *System
	work   []complex128
	load   [][]complex128  // load in the coordinates of the solve
	output [3][]complex128 // gyro rotation in the same
	side   [3][]complex128
	rates  [3][]complex128
}

func (s *System) driver() *driver {
	n := len(s.vectors)
	d := &driver{s: s, work: make([]complex128, n*n)}
	for axis := range 3 {
		d.output[axis] = make([]complex128, n)
		for v, x := range s.gyro[axis] {
			d.output[axis][v] = complex(x, 0)
		}
		if s.reduced != nil {
			d.output[axis] = s.reduced.turn(d.output[axis])
		}
		d.side[axis] = make([]complex128, n)
		d.rates[axis] = make([]complex128, len(s.inputs))
	}
	for _, row := range s.load {
		x := make([]complex128, n)
		for v := range row {
			x[v] = complex(row[v], 0)
		}
		if s.reduced != nil {
			// bᵀ Q = (Qᴴ b̄)ᴴ with b real: the conjugate of Qᴴ b.
			x = s.reduced.turn(x)
			for v := range x {
				x[v] = cmplx.Conj(x[v])
			}
		}
		d.load = append(d.load, x)
	}
	return d
}

// gyroRates fills d.rates at a frequency.
func (d *driver) gyroRates(frequency float64) error {
	omega := angular(frequency)
	for axis := range 3 {
		copy(d.side[axis], d.output[axis])
	}
	var ok bool
	if d.s.reduced != nil {
		// Without C the matrix is symmetric and so its own transpose.
		ok = d.s.reduced.solve(omega*omega, d.work, d.side[0], d.side[1], d.side[2])
	} else {
		n := len(d.s.vectors)
		a := d.s.matrix(omega)
		for i := range n {
			for j := range n {
				d.work[j*n+i] = a[i*n+j]
			}
		}
		ok = factorSolve(d.work, n, d.side[0], d.side[1], d.side[2])
	}
	for axis := range 3 {
		for j, b := range d.load {
			var sum complex128
			for v, x := range d.side[axis] {
				sum += x * b[v]
			}
			d.rates[axis][j] = complex(0, omega) * sum
		}
		ok = ok && finite(d.rates[axis])
	}
	if !ok {
		return &Unbounded{frequency}
	}
	return nil
}

func angular(frequency float64) float64 {
	if !(frequency > 0) || math.IsInf(frequency, 0) {
		panic(fmt.Sprintf("forced: a free frame has no response at %g Hz", frequency))
	}
	return 2 * math.Pi * frequency
}

func finite(z []complex128) bool {
	for _, x := range z {
		if cmplx.IsNaN(x) || cmplx.IsInf(x) {
			return false
		}
	}
	return true
}

// Respond gives the complex gyro rate per axis, rad/s, at Frequency[k] under
// coherent loads: load gives the complex amplitude of each input, N or N·m.
func (t *Transfer) Respond(k int, load func(Input) complex128) [3]complex128 {
	var out [3]complex128
	for j, in := range t.Inputs {
		f := load(in)
		for axis := range out {
			out[axis] += t.Rate[axis][j][k] * f
		}
	}
	return out
}
