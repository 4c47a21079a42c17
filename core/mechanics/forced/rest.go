package forced

import (
	"context"
	"fmt"
)

// Rest is the frame with its rotors at rest at some frequencies, condensed to what the
// gyro rate and the motion along some rows at any rotor speed need. It is immutable and safe for
// concurrent use.
type Rest struct {
	s         *System
	Frequency []float64
	rows      [][]float64 // rotation of the gyro about three axes, then the rows asked for
	at        []condensed // nil where the frame at rest has no bound
}

// condensed holds, with B the matrix at rest, o the rows of a Rest, u the tilts after them and b the loads,
// [oᵀB⁻¹b oᵀB⁻¹uᵀ] row by row, then [uB⁻¹b uB⁻¹uᵀ].
type condensed [][]complex128

func newCondensed(rows, columns int) condensed {
	all := make([]complex128, rows*columns)
	y := make(condensed, rows)
	for i := range y {
		y[i] = all[i*columns : (i+1)*columns : (i+1)*columns]
	}
	return y
}

// Rest condenses the system to the gyro rate and to the motion along some rows (one number per
// vector in use each; nil for none), which a Probe reads. Errors are those of Transfer, but for an unbounded
// response, of which a Reader tells.
func (s *System) Rest(ctx context.Context, frequency []float64, rows [][]float64, threads int) (*Rest, error) {
	for _, row := range rows {
		if len(row) != len(s.vectors) {
			panic(fmt.Sprintf("forced: row of %d numbers over %d vectors", len(row), len(s.vectors)))
		}
	}
	r := &Rest{s: s, Frequency: frequency, at: make([]condensed, len(frequency))}
	r.rows = append(append(r.rows, s.gyro[:]...), rows...)
	if own := s.own(threads); own != nil {
		return r, r.fast(ctx, own, threads)
	}
	if s.rate != nil {
		return r, nil // dampers: the Reader takes the whole matrix
	}
	still := s.Spun(make([]float64, len(s.momentum)))
	inputs, m := len(s.inputs), len(s.tilt)
	return r, s.each(ctx, len(frequency), threads, func() func(k int) error {
		d := still.driver(true, rows...)
		return func(k int) error {
			if !d.rest(angular(frequency[k])) {
				return nil
			}
			y := newCondensed(len(r.rows)+m, inputs+m)
			for i := range y {
				from := i // in the order of the driver: gyro, tilts, other rows
				switch {
				case i >= len(r.rows):
					from = 3 + i - len(r.rows)
				case i >= 3:
					from = i + m
				}
				for j := range y[i] {
					y[i][j] = product(d.side[from], d.load[j])
				}
			}
			r.at[k] = y
			return nil
		}
	})
}

// fast fills r by the spectral form.
func (r *Rest) fast(ctx context.Context, own *spectral, threads int) error {
	s := r.s
	rows := append(append([][]float64{}, r.rows...), s.tilt...)
	loads := append(append([][]float64{}, s.load...), s.tilt...)
	return s.each(ctx, len(r.Frequency), threads, func() func(k int) error {
		b := s.receptor(own, rows, loads)
		return func(k int) error {
			if y := newCondensed(len(rows), len(loads)); b.at(angular(r.Frequency[k]), y) {
				r.at[k] = y
			}
			return nil
		}
	})
}

// Reader reads one Rest at one rotor speed after another with
// scratch space of its own. It is not safe for concurrent use.
type Reader struct {
	r *Rest
	// Rates[axis][input] is the gyro rate per unit of each input, filled by At.
	Rates [3][]complex128
	left  []complex128
}

// Reader makes one.
func (r *Rest) Reader() *Reader {
	d := &Reader{r: r}
	for axis := range d.Rates {
		d.Rates[axis] = make([]complex128, len(r.s.inputs))
	}
	return d
}

// At fills Rates at Frequency[k] with the rotors spinning at the given angular
// momenta, one per gyroscopic coupling. It fails with *Unbounded.
func (d *Reader) At(k int, momenta []float64) error {
	if err := d.read(k, momenta, 0, d.Rates[:]); err != nil {
		return err
	}
	omega := complex(0, angular(d.r.Frequency[k]))
	for _, rates := range d.Rates {
		for j := range rates {
			rates[j] *= omega
		}
	}
	return nil
}

// read fills motion with that along the rows of r from one on.
func (d *Reader) read(k int, momenta []float64, from int, motion [][]complex128) error {
	s, frequency := d.r.s, d.r.Frequency[k]
	if len(momenta) != len(s.momentum) {
		panic(fmt.Sprintf("forced: %d angular momenta for %d rotors", len(momenta), len(s.momentum)))
	}
	if y := d.r.at[k]; y != nil && d.spun(y, angular(frequency), momenta, from, motion) {
		return nil
	}
	full, err := s.Spun(momenta).full(frequency, d.r.rows[from:from+len(motion)])
	if err != nil {
		return err
	}
	for i := range motion {
		copy(motion[i], full[i])
	}
	return nil
}

// spun applies Woodbury's identity, as couple does, but to the rows: with t = oᵀB⁻¹uᵀ
// it needs t (I + iω S P)⁻¹ iω S, by a solve with the transposed matrix.
func (d *Reader) spun(y condensed, omega float64, momenta []float64, from int, motion [][]complex128) bool {
	inputs, m := len(d.r.s.inputs), 2*len(momenta)
	tilt := y[len(d.r.rows):]
	width := m + len(motion)
	if len(d.left) < m*width {
		d.left = make([]complex128, m*width)
	}
	left := d.left[:m*width]
	for r, h := range momenta {
		a, b := 2*r, 2*r+1
		g := complex(0, omega*h)
		for j := range m { // (I + iω S P)ᵀ
			left[j*width+a] = g * tilt[b][inputs+j]
			left[j*width+b] = -g * tilt[a][inputs+j]
		}
	}
	for j := range m {
		row := left[j*width : (j+1)*width]
		row[j]++
		for i := range motion {
			row[m+i] = y[from+i][inputs+j]
		}
	}
	if !eliminate(left, m, width) {
		return false
	}
	for i, x := range motion {
		copy(x, y[from+i][:inputs])
		for r, h := range momenta {
			a, b := 2*r, 2*r+1
			g := complex(0, omega*h)
			// z iωS has −g z_b at a and g z_a at b.
			atA, atB := -g*left[b*width+m+i], g*left[a*width+m+i]
			other := tilt[b][:len(x)]
			for j, z := range tilt[a][:len(x)] {
				x[j] -= atA*z + atB*other[j]
			}
		}
		if !finite(x) {
			return false
		}
	}
	return true
}

// Transfer gives the transfer functions at all frequencies with the rotors
// spinning at the given angular momenta. It fails with *Unbounded.
func (r *Rest) Transfer(momenta []float64) (*Transfer, error) {
	t := &Transfer{Frequency: r.Frequency, Inputs: r.s.inputs}
	for axis := range t.Rate {
		t.Rate[axis] = make([][]complex128, len(t.Inputs))
		for j := range t.Inputs {
			t.Rate[axis][j] = make([]complex128, len(r.Frequency))
		}
	}
	d := r.Reader()
	for k := range r.Frequency {
		if err := d.At(k, momenta); err != nil {
			return nil, err
		}
		for axis := range d.Rates {
			for j, h := range d.Rates[axis] {
				t.Rate[axis][j][k] = h
			}
		}
	}
	return t, nil
}

// Probe reads the motion along the rows asked for under one unit of each input, with the rotors
// spinning at the given angular momenta. visit is called as by the Probe of a System. It fails with *Unbounded.
func (r *Rest) Probe(ctx context.Context, momenta []float64, threads int, visit func(k int, motion [][]complex128)) error {
	return r.s.each(ctx, len(r.Frequency), threads, func() func(k int) error {
		d, motion := r.Reader(), newCondensed(len(r.rows)-3, len(r.s.inputs))
		return func(k int) error {
			if err := d.read(k, momenta, 3, motion); err != nil {
				return err
			}
			visit(k, motion)
			return nil
		}
	})
}
