package spectrum

import (
	"math"

	"gonum.org/v1/gonum/dsp/fourier"
)

// realTransform is the discrete Fourier transform of N real samples, X[k] = Σ x[i]·exp(-2πi·ik/N), at its N/2+1 bins. It owns its
// scratch.
//
// For an even N of no prime factors but 2, 3 and 5 the samples are taken in pairs as N/2 complex numbers, which pass through a
// self-sorting transform in steps of four, five, three and two (the autosort of T. G. Stockham, High-speed convolution and correlation,
// AFIPS 28, 1966, in the form of C. Van Loan, Computational Frameworks for the Fast Fourier Transform, 1992), and are then taken apart.
// Other lengths go to gonum.
type realTransform struct {
	n      int
	any    *fourier.FFT // for other lengths
	a, b   []complex128 // N/2 each
	passes []pass
	apart  []complex128 // exp(-2πik/N) for k up to N/4
}

// pass is one step: stride is how many transforms lie side by side.
type pass struct {
	radix, stride int
	twiddle       []complex128 // w, w², … w^(radix-1) for each of the length/radix places of what is left of the transform
}

func newRealTransform(n int) *realTransform {
	t := &realTransform{n: n}
	var radices []int
	rest := n / 2
	for _, r := range []int{4, 5, 3, 2} {
		for rest%r == 0 && rest > 1 {
			radices = append(radices, r)
			rest /= r
		}
	}
	if n < 8 || n%2 == 1 || rest > 1 {
		t.any = fourier.NewFFT(n)
		return t
	}
	m := n / 2
	t.a, t.b = make([]complex128, m), make([]complex128, m)
	stride := 1
	for _, r := range radices {
		length := m / stride
		p := pass{radix: r, stride: stride, twiddle: make([]complex128, 0, (r-1)*length/r)}
		for k := range length / r {
			for j := 1; j < r; j++ {
				p.twiddle = append(p.twiddle, root(j*k, length))
			}
		}
		t.passes = append(t.passes, p)
		stride *= r
	}
	for k := range n/4 + 1 {
		t.apart = append(t.apart, root(k, n))
	}
	return t
}

// root is exp(-2πik/n).
func root(k, n int) complex128 {
	sin, cos := math.Sincos(2 * math.Pi * float64(k%n) / float64(n))
	return complex(cos, -sin)
}

// coefficients writes the transform of x (N samples) into dst (N/2+1 bins).
func (t *realTransform) coefficients(dst []complex128, x []float64) {
	if t.any != nil {
		t.any.Coefficients(dst, x)
		return
	}
	m := t.n / 2
	z, other := t.a, t.b
	for i := range z {
		z[i] = complex(x[2*i], x[2*i+1])
	}
	for _, p := range t.passes {
		switch p.radix {
		case 4:
			four(other, z, p.twiddle, p.stride)
		case 5:
			five(other, z, p.twiddle, p.stride)
		case 3:
			three(other, z, p.twiddle, p.stride)
		default:
			two(other, z, p.twiddle, p.stride)
		}
		z, other = other, z
	}
	t.a, t.b = z, other
	// X[k] = (Z[k]+Z*[m-k])/2 - i·w^k·(Z[k]-Z*[m-k])/2, and X[m-k] is its mirror.
	dst[0] = complex(real(z[0])+imag(z[0]), 0)
	dst[m] = complex(real(z[0])-imag(z[0]), 0)
	for k := 1; 2*k <= m; k++ {
		u, v := z[k], z[m-k]
		er, ei := (real(u)+real(v))/2, (imag(u)-imag(v))/2
		dr, di := (real(u)-real(v))/2, (imag(u)+imag(v))/2
		w := t.apart[k]
		pr, pi := real(w)*di+imag(w)*dr, imag(w)*di-real(w)*dr // -i·w·d
		dst[k] = complex(er+pr, ei+pi)
		dst[m-k] = complex(er-pr, pi-ei)
	}
}

// four makes one step of four from x into y.
func four(y, x, twiddle []complex128, stride int) {
	quarter := len(x) / 4
	for p, at := 0, 0; at < quarter; p, at = p+1, at+stride {
		w1, w2, w3 := twiddle[3*p], twiddle[3*p+1], twiddle[3*p+2]
		xa, xb := x[at:at+stride], x[at+quarter:at+quarter+stride]
		xc, xd := x[at+2*quarter:at+2*quarter+stride], x[at+3*quarter:at+3*quarter+stride]
		out := y[4*at : 4*at+4*stride]
		ya, yb, yc, yd := out[:stride], out[stride:2*stride], out[2*stride:3*stride], out[3*stride:]
		xb, xc, xd, yb, yc, yd = xb[:len(xa)], xc[:len(xa)], xd[:len(xa)], yb[:len(ya)], yc[:len(ya)], yd[:len(ya)]
		for q, a := range xa {
			b, c, d := xb[q], xc[q], xd[q]
			sr, si := real(a)+real(c), imag(a)+imag(c)
			tr, ti := real(a)-real(c), imag(a)-imag(c)
			ur, ui := real(b)+real(d), imag(b)+imag(d)
			vr, vi := imag(b)-imag(d), real(d)-real(b) // -i·(b-d)
			ya[q] = complex(sr+ur, si+ui)
			er, ei := tr+vr, ti+vi
			yb[q] = complex(er*real(w1)-ei*imag(w1), er*imag(w1)+ei*real(w1))
			er, ei = sr-ur, si-ui
			yc[q] = complex(er*real(w2)-ei*imag(w2), er*imag(w2)+ei*real(w2))
			er, ei = tr-vr, ti-vi
			yd[q] = complex(er*real(w3)-ei*imag(w3), er*imag(w3)+ei*real(w3))
		}
	}
}

// two, three and five make the other steps.
func two(y, x, twiddle []complex128, stride int) {
	half := len(x) / 2
	for p, at := 0, 0; at < half; p, at = p+1, at+stride {
		w := twiddle[p]
		low, high := x[at:at+stride], x[at+half:at+half+stride]
		out := y[2*at : 2*at+2*stride]
		for q, a := range low {
			b := high[q]
			out[q] = a + b
			out[q+stride] = times(w, real(a)-real(b), imag(a)-imag(b))
		}
	}
}

func three(y, x, twiddle []complex128, stride int) {
	const s = 0.86602540378443864676 // sin 120°
	third := len(x) / 3
	for p, at := 0, 0; at < third; p, at = p+1, at+stride {
		w1, w2 := twiddle[2*p], twiddle[2*p+1]
		xa, xb, xc := x[at:at+stride], x[at+third:at+third+stride], x[at+2*third:at+2*third+stride]
		out := y[3*at : 3*at+3*stride]
		for q, a := range xa {
			b, c := xb[q], xc[q]
			tr, ti := real(b)+real(c), imag(b)+imag(c)
			mr, mi := real(a)-tr/2, imag(a)-ti/2
			nr, ni := s*(real(b)-real(c)), s*(imag(b)-imag(c))
			out[q] = complex(real(a)+tr, imag(a)+ti)
			out[q+stride] = times(w1, mr+ni, mi-nr) // m - i·n
			out[q+2*stride] = times(w2, mr-ni, mi+nr)
		}
	}
}

func five(y, x, twiddle []complex128, stride int) {
	const (
		c1, s1 = 0.30901699437494742410, 0.95105651629515357212  // cos 72°, sin 72°
		c2, s2 = -0.80901699437494742410, 0.58778525229247312917 // cos 144°, sin 144°
	)
	fifth := len(x) / 5
	for p, at := 0, 0; at < fifth; p, at = p+1, at+stride {
		w1, w2, w3, w4 := twiddle[4*p], twiddle[4*p+1], twiddle[4*p+2], twiddle[4*p+3]
		xa, xb, xc := x[at:at+stride], x[at+fifth:at+fifth+stride], x[at+2*fifth:at+2*fifth+stride]
		xd, xe := x[at+3*fifth:at+3*fifth+stride], x[at+4*fifth:at+4*fifth+stride]
		out := y[5*at : 5*at+5*stride]
		for q, a := range xa {
			b, c, d, e := xb[q], xc[q], xd[q], xe[q]
			tr, ti := real(b)+real(e), imag(b)+imag(e)
			ur, ui := real(c)+real(d), imag(c)+imag(d)
			vr, vi := real(b)-real(e), imag(b)-imag(e)
			zr, zi := real(c)-real(d), imag(c)-imag(d)
			out[q] = complex(real(a)+tr+ur, imag(a)+ti+ui)
			mr, mi := real(a)+c1*tr+c2*ur, imag(a)+c1*ti+c2*ui
			nr, ni := s1*vr+s2*zr, s1*vi+s2*zi
			out[q+stride] = times(w1, mr+ni, mi-nr) // m - i·n
			out[q+4*stride] = times(w4, mr-ni, mi+nr)
			mr, mi = real(a)+c2*tr+c1*ur, imag(a)+c2*ti+c1*ui
			nr, ni = s2*vr-s1*zr, s2*vi-s1*zi
			out[q+2*stride] = times(w2, mr+ni, mi-nr)
			out[q+3*stride] = times(w3, mr-ni, mi+nr)
		}
	}
}

func times(w complex128, re, im float64) complex128 {
	return complex(re*real(w)-im*imag(w), re*imag(w)+im*real(w))
}
