package spectrum

import (
	"math"

	"gonum.org/v1/gonum/dsp/fourier"
)

// realTransform is the discrete Fourier transform of N real samples, X[k] = Σ x[i]·exp(-2πi·ik/N), at its N/2+1 bins. It owns its
// scratch.
//
// For a power of two the samples are taken in pairs as N/2 complex numbers, which pass through a self-sorting transform in steps
// of four (the autosort of T. G. Stockham, High-speed convolution and correlation, AFIPS 28, 1966, in the form with radix four of C. Van
// Loan, Computational Frameworks for the Fast Fourier Transform, 1992), and are then taken apart. Other lengths go to gonum.
type realTransform struct {
	n      int
	any    *fourier.FFT // for other lengths
	a, b   []complex128 // N/2 each
	passes []pass
	apart  []complex128 // exp(-2πik/N) for k up to N/4
}

// pass is one step of four: length is what is left of the transform before it, stride how many lie side by side.
type pass struct {
	stride  int
	twiddle []complex128 // w, w², w³ for p = 0 … length/4-1
}

func newRealTransform(n int) *realTransform {
	t := &realTransform{n: n}
	if n < 8 || n&(n-1) != 0 {
		t.any = fourier.NewFFT(n)
		return t
	}
	m := n / 2
	t.a, t.b = make([]complex128, m), make([]complex128, m)
	stride := 1
	for length := m; length >= 4; length /= 4 {
		p := pass{stride: stride, twiddle: make([]complex128, 0, 3*length/4)}
		for k := range length / 4 {
			p.twiddle = append(p.twiddle, root(k, length), root(2*k, length), root(3*k, length))
		}
		t.passes = append(t.passes, p)
		stride *= 4
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
	length := m
	for _, p := range t.passes {
		four(other, z, p.twiddle, p.stride)
		z, other = other, z
		length /= 4
	}
	if length == 2 {
		low, high := z[:m/2], z[m/2:]
		for i, v := range low {
			other[i], other[i+m/2] = v+high[i], v-high[i]
		}
		z, other = other, z
	}
	t.a, t.b = z, other
	// X[k] = (Z[k]+Z*[m-k])/2 - i·w^k·(Z[k]-Z*[m-k])/2, and X[m-k] is its mirror.
	dst[0] = complex(real(z[0])+imag(z[0]), 0)
	dst[m] = complex(real(z[0])-imag(z[0]), 0)
	for k := 1; k <= m/2; k++ {
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
