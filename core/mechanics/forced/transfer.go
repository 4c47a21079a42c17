package forced

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"slices"
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
	return s.TransferSpun(ctx, frequency, nil, threads)
}

// TransferSpun is Transfer with angular momenta of their own at each frequency:
// momenta[k] is one per gyroscopic coupling, as for Spun; nil keeps those of s.
func (s *System) TransferSpun(ctx context.Context, frequency []float64, momenta [][]float64, threads int) (*Transfer, error) {
	if momenta != nil && len(momenta) != len(frequency) {
		panic(fmt.Sprintf("forced: %d sets of angular momenta for %d frequencies", len(momenta), len(frequency)))
	}
	t := &Transfer{Frequency: frequency, Inputs: s.inputs}
	for axis := range t.Rate {
		t.Rate[axis] = make([][]complex128, len(s.inputs))
		for j := range t.Rate[axis] {
			t.Rate[axis][j] = make([]complex128, len(frequency))
		}
	}
	err := s.each(ctx, len(frequency), threads, func() func(k int) error {
		d := s.driver(momenta != nil)
		return func(k int) error {
			if momenta != nil {
				d.s = s.Spun(momenta[k])
			}
			if err := d.gyroRates(frequency[k]); err != nil {
				return err
			}
			for axis := range 3 {
				for j, h := range d.rates[axis] {
					t.Rate[axis][j][k] = h
				}
			}
			return nil
		}
	})
	if err != nil {
		return nil, err
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
	if q, ok := s.fast(omega, force); ok {
		return q, nil
	}
	q := append([]complex128(nil), force...)
	if !factorSolve(s.matrix(omega), n, q) || !finite(q) {
		return nil, &Unbounded{frequency}
	}
	return q, nil
}

// fast solves by the Hessenberg form, and by Woodbury's identity when rotors
// spin. It gives up when there is no such form, or when the frame at rest has
// no bounded response.
func (s *System) fast(omega float64, force []complex128) ([]complex128, bool) {
	reduced := s.reduced()
	if reduced == nil {
		return nil, false
	}
	n := len(s.vectors)
	sides := [][]complex128{reduced.turn(force)}
	if s.spinning() {
		for _, row := range s.tilt {
			sides = append(sides, reduced.turn(complexRow(row)))
		}
	}
	if !reduced.solve(omega*omega, make([]complex128, n*n), sides...) {
		return nil, false
	}
	for k := range sides {
		sides[k] = reduced.turnBack(sides[k])
	}
	q := sides[0]
	if m := len(sides) - 1; m > 0 {
		p := make([]complex128, m*m)
		answer := make([]complex128, m)
		for i, row := range s.tilt {
			answer[i] = along(row, q)
			for j := range m {
				p[i*m+j] = along(row, sides[1+j])
			}
		}
		if !couple(p, s.momentum, omega) {
			return nil, false
		}
		for i := range m {
			var sum complex128
			for j := range m {
				sum += p[i*m+j] * answer[j]
			}
			for v, z := range sides[1+i] {
				q[v] -= z * sum
			}
		}
	}
	return q, finite(q)
}

func complexRow(row []float64) []complex128 {
	x := make([]complex128, len(row))
	for v := range row {
		x[v] = complex(row[v], 0)
	}
	return x
}

func along(row []float64, q []complex128) complex128 {
	var sum complex128
	for v, x := range row {
		sum += complex(x, 0) * q[v]
	}
	return sum
}

// Drive gives the modal coordinates for one unit of an input.
func (s *System) Drive(frequency float64, input int) ([]complex128, error) {
	return s.Solve(frequency, complexRow(s.load[input]))
}

// driver computes all transfer functions at one frequency after another with
// its own scratch space. It solves with the transposed matrix for the three
// outputs rather than for every input.
type driver struct {
	s       *System
	reduced *hessenberg
	work    []complex128
	load    [][]complex128 // loads, then tilts, in the coordinates of the solve
	output  [][]complex128 // gyro rotation about three axes, then tilts, then other rows, in the same
	side    [][]complex128
	rates   [3][]complex128
	p       []complex128 // tilts under unit moments about the tilt axes
	part    []complex128
}

// driver makes one; spins tells that it will meet rotors that spin although
// those of s may be at rest. Further rows are answered by rest alone.
func (s *System) driver(spins bool, rows ...[]float64) *driver {
	n := len(s.vectors)
	d := &driver{s: s, reduced: s.reduced(), work: make([]complex128, n*n)}
	outputs, loads := s.gyro[:], s.load
	if s.rate == nil && (spins || s.spinning()) {
		outputs = append(append([][]float64{}, outputs...), s.tilt...)
		loads = append(append([][]float64{}, loads...), s.tilt...)
		d.p = make([]complex128, len(s.tilt)*len(s.tilt))
		d.part = make([]complex128, len(s.tilt))
	}
	for _, row := range slices.Concat(outputs, rows) {
		x := complexRow(row)
		if d.reduced != nil {
			x = d.reduced.turn(x)
		}
		d.output = append(d.output, x)
		d.side = append(d.side, make([]complex128, n))
	}
	for _, row := range loads {
		x := complexRow(row)
		if d.reduced != nil {
			// bᵀ Q = (Qᴴ b̄)ᴴ with b real: the conjugate of Qᴴ b.
			x = d.reduced.turn(x)
			for v := range x {
				x[v] = cmplx.Conj(x[v])
			}
		}
		d.load = append(d.load, x)
	}
	for axis := range d.rates {
		d.rates[axis] = make([]complex128, len(s.inputs))
	}
	return d
}

// gyroRates fills d.rates at a frequency.
func (d *driver) gyroRates(frequency float64) error {
	omega := angular(frequency)
	if d.s.rate == nil {
		if d.rest(omega) && d.combine(omega) {
			return nil
		}
		if !d.s.spinning() {
			return &Unbounded{frequency}
		}
		// The frame at rest has no bound here; with spinning rotors it may have.
	}
	return d.direct(frequency)
}

// rest fills d.side with what the outputs need, the rotors taken as at rest;
// false when there are dampers or no bound.
func (d *driver) rest(omega float64) bool {
	if d.s.rate != nil {
		return false
	}
	for k := range d.side {
		copy(d.side[k], d.output[k])
	}
	// The matrix at rest is symmetric and so its own transpose.
	if d.reduced == nil {
		return factorSolve(d.s.still(omega, d.work), len(d.s.vectors), d.side...)
	}
	return d.reduced.solve(omega*omega, d.work, d.side...)
}

// combine fills d.rates from the solutions, with the gyroscopic couplings.
func (d *driver) combine(omega float64) bool {
	inputs, m := len(d.s.inputs), len(d.part)
	for i := range m {
		for j := range m {
			d.p[i*m+j] = product(d.side[3+i], d.load[inputs+j])
		}
	}
	if m > 0 && !couple(d.p, d.s.momentum, omega) {
		return false
	}
	ok := true
	for axis := range 3 {
		x := d.side[axis]
		// oᵀ (B⁻¹ − B⁻¹ Uᵀ M U B⁻¹) with B symmetric: x − Σ_ij (x·u_i) M_ij z_j.
		for j := range m {
			d.part[j] = 0
			for i := range m {
				d.part[j] += product(x, d.load[inputs+i]) * d.p[i*m+j]
			}
		}
		for j, f := range d.part {
			for v, z := range d.side[3+j] {
				x[v] -= f * z
			}
		}
		for j := range inputs {
			d.rates[axis][j] = complex(0, omega) * product(x, d.load[j])
		}
		ok = ok && finite(d.rates[axis])
	}
	return ok
}

// direct fills d.rates by a full factorisation.
func (d *driver) direct(frequency float64) error {
	motion, err := d.s.full(frequency, d.s.gyro[:])
	if err != nil {
		return err
	}
	for axis, x := range motion {
		for j, h := range x {
			d.rates[axis][j] = complex(0, angular(frequency)) * h
		}
	}
	return nil
}

// full gives the motion along some rows under a unit of each input by a full factorisation of the
// transposed matrix.
func (s *System) full(frequency float64, rows [][]float64) (motion [][]complex128, err error) {
	n := len(s.vectors)
	a := s.matrix(angular(frequency))
	for i := range n {
		for j := range i {
			a[i*n+j], a[j*n+i] = a[j*n+i], a[i*n+j]
		}
	}
	var sides [][]complex128
	for _, row := range rows {
		sides = append(sides, complexRow(row))
	}
	if !factorSolve(a, n, sides...) {
		return nil, &Unbounded{frequency}
	}
	for _, x := range sides {
		y := make([]complex128, len(s.load))
		for j, row := range s.load {
			y[j] = along(row, x)
		}
		if !finite(y) {
			return nil, &Unbounded{frequency}
		}
		motion = append(motion, y)
	}
	return motion, nil
}

func product(x, y []complex128) complex128 {
	var sum complex128
	for v, z := range x {
		sum += z * y[v]
	}
	return sum
}

func angular(frequency float64) float64 {
	if !(frequency > 0) || math.IsInf(frequency, 0) {
		panic(fmt.Sprintf("forced: a free frame has no response at %g Hz", frequency))
	}
	return 2 * math.Pi * frequency
}

func finite(z []complex128) bool {
	for _, x := range z {
		if 0*real(x)+0*imag(x) != 0 { // true of a NaN and an infinity
			return false
		}
	}
	return true
}

// At gives the rates at Frequency[k], [axis][input].
func (t *Transfer) At(k int) (rates [3][]complex128) {
	for axis := range rates {
		for j := range t.Inputs {
			rates[axis] = append(rates[axis], t.Rate[axis][j][k])
		}
	}
	return rates
}
