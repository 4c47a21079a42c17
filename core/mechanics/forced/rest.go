package forced

import (
	"context"
	"fmt"
)

// Rest is the frame with its rotors at rest at some frequencies, condensed to what the
// gyro rate at any rotor speed needs. It is immutable and safe for concurrent use.
type Rest struct {
	s         *System
	Frequency []float64
	at        []*restPoint // nil where the frame at rest has no bound
}

// restPoint holds, with B the matrix at rest, o the outputs, b the loads and u the tilts:
// oᵀB⁻¹b, oᵀB⁻¹uᵀ, uB⁻¹uᵀ, uB⁻¹b.
type restPoint struct {
	direct [3][]complex128
	toTilt [3][]complex128
	tilt   []complex128
	loaded [][]complex128
}

// Rest condenses the system. Errors are those of Transfer, but for an unbounded
// response, of which a Reader tells.
func (s *System) Rest(ctx context.Context, frequency []float64, threads int) (*Rest, error) {
	r := &Rest{s: s, Frequency: frequency, at: make([]*restPoint, len(frequency))}
	if own := s.own(); own != nil {
		return r, r.fast(ctx, own, threads)
	}
	still := s.Spun(make([]float64, len(s.momentum)))
	inputs, m := len(s.inputs), len(s.tilt)
	return r, s.each(ctx, len(frequency), threads, func() func(k int) error {
		d := still.driver(true)
		return func(k int) error {
			if !d.rest(angular(frequency[k])) {
				return nil
			}
			p := &restPoint{tilt: make([]complex128, m*m)}
			read := func(x []complex128, from, count int) []complex128 {
				out := make([]complex128, count)
				for j := range out {
					out[j] = product(x, d.load[from+j])
				}
				return out
			}
			for axis := range 3 {
				p.direct[axis], p.toTilt[axis] = read(d.side[axis], 0, inputs), read(d.side[axis], inputs, m)
			}
			for i := range m {
				copy(p.tilt[i*m:], read(d.side[3+i], inputs, m))
				p.loaded = append(p.loaded, read(d.side[3+i], 0, inputs))
			}
			r.at[k] = p
			return nil
		}
	})
}

// fast fills r by the spectral form.
func (r *Rest) fast(ctx context.Context, own *spectral, threads int) error {
	s := r.s
	inputs, m := len(s.inputs), len(s.tilt)
	rows := append(append([][]float64{}, s.gyro[:]...), s.tilt...)
	loads := append(append([][]float64{}, s.load...), s.tilt...)
	return s.each(ctx, len(r.Frequency), threads, func() func(k int) error {
		b := s.receptor(own, rows, loads)
		return func(k int) error {
			y := make([][]complex128, len(rows))
			for i := range y {
				y[i] = make([]complex128, len(loads))
			}
			if !b.at(angular(r.Frequency[k]), y) {
				return nil
			}
			p := &restPoint{}
			for axis := range 3 {
				p.direct[axis], p.toTilt[axis] = y[axis][:inputs], y[axis][inputs:]
			}
			for i := range m {
				p.loaded, p.tilt = append(p.loaded, y[3+i][:inputs]), append(p.tilt, y[3+i][inputs:]...)
			}
			r.at[k] = p
			return nil
		}
	})
}

// Reader reads the gyro rates of one Rest after another speed with scratch
// space of its own. It is not safe for concurrent use.
type Reader struct {
	r *Rest
	// Rates[axis][input] is the gyro rate per unit of each input, filled by At.
	Rates [3][]complex128
	left  []complex128
	part  [3][]complex128
}

// Reader makes one.
func (r *Rest) Reader() *Reader {
	m := len(r.s.tilt)
	d := &Reader{r: r, left: make([]complex128, m*m)}
	for axis := range d.Rates {
		d.Rates[axis], d.part[axis] = make([]complex128, len(r.s.inputs)), make([]complex128, m)
	}
	return d
}

// At fills Rates at Frequency[k] with the rotors spinning at the given angular
// momenta, one per gyroscopic coupling. It fails with *Unbounded.
func (d *Reader) At(k int, momenta []float64) error {
	s := d.r.s
	if len(momenta) != len(s.momentum) {
		panic(fmt.Sprintf("forced: %d angular momenta for %d rotors", len(momenta), len(s.momentum)))
	}
	frequency := d.r.Frequency[k]
	if p := d.r.at[k]; p != nil && d.spun(p, angular(frequency), momenta) {
		return nil
	}
	full := s.Spun(momenta).driver(false)
	if err := full.direct(frequency); err != nil {
		return err
	}
	for axis := range d.Rates {
		copy(d.Rates[axis], full.rates[axis])
	}
	return nil
}

// spun applies Woodbury's identity, as couple does, but to the outputs: with t = oᵀB⁻¹uᵀ
// it needs t (I + iω S P)⁻¹ iω S, by a solve with the transposed matrix.
func (d *Reader) spun(p *restPoint, omega float64, momenta []float64) bool {
	m := 2 * len(momenta)
	for r, h := range momenta {
		a, b := 2*r, 2*r+1
		g := complex(0, omega*h)
		for j := range m { // (I + iω S P)ᵀ
			d.left[j*m+a] = g * p.tilt[b*m+j]
			d.left[j*m+b] = -g * p.tilt[a*m+j]
		}
	}
	for i := range m {
		d.left[i*m+i]++
	}
	for axis := range d.part {
		copy(d.part[axis], p.toTilt[axis])
	}
	if m > 0 && !factorSolve(d.left, m, d.part[0], d.part[1], d.part[2]) {
		return false
	}
	for axis, y := range d.part {
		rates := d.Rates[axis]
		copy(rates, p.direct[axis])
		for r, h := range momenta {
			a, b := 2*r, 2*r+1
			g := complex(0, omega*h)
			// y iωS has −g y_b at a and g y_a at b.
			atA, atB := -g*y[b], g*y[a]
			for j, z := range p.loaded[a] {
				rates[j] -= atA*z + atB*p.loaded[b][j]
			}
		}
		for j := range rates {
			rates[j] *= complex(0, omega)
		}
		if !finite(rates) {
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
