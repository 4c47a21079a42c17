package forced

import (
	"math"
	"math/cmplx"
)

// eigenvalues overwrites a and gives its eigenvalues in no set order, by the
// shifted QR method on its Hessenberg form (J. G. F. Francis, The QR
// transformation, 1961; Wilkinson's shift from the last two rows). ok is false
// when one has not settled after 60 steps.
func eigenvalues(a []complex128, n int) (values []complex128, ok bool) {
	h := a
	bring(h, n)
	values = make([]complex128, n)
	cos, sin := make([]float64, n), make([]complex128, n)
	steps := 0
	for hi := n - 1; hi >= 0; {
		lo := hi
		for ; lo > 0; lo-- {
			if size(h[lo*n+lo-1]) <= 0x1p-53*(size(h[lo*n+lo])+size(h[(lo-1)*n+lo-1])) {
				h[lo*n+lo-1] = 0
				break
			}
		}
		if lo == hi {
			values[hi] = h[hi*n+hi]
			hi--
			steps = 0
			continue
		}
		if steps == 60 {
			return values, false
		}
		steps++
		shift := corner(h, n, hi)
		if steps%10 == 0 { // breaks a cycle
			shift = complex(size(h[hi*n+hi-1]), 0) + h[hi*n+hi]
		}
		for i := lo; i <= hi; i++ {
			h[i*n+i] -= shift
		}
		for k := lo; k < hi; k++ { // R = G H with plane rotations
			x, y := h[k*n+k], h[(k+1)*n+k]
			r := math.Hypot(cmplx.Abs(x), cmplx.Abs(y))
			phase := complex(1, 0)
			if x != 0 {
				phase = x / complex(cmplx.Abs(x), 0)
			}
			cos[k] = cmplx.Abs(x) / r
			sin[k] = phase * cmplx.Conj(y) / complex(r, 0)
			c, s, back := cos[k], sin[k], -cmplx.Conj(sin[k])
			top, low := h[k*n:k*n+n], h[(k+1)*n:(k+1)*n+n]
			for j := k; j <= hi; j++ {
				u, v := top[j], low[j]
				top[j] = complex(c*real(u), c*imag(u)) + s*v
				low[j] = complex(c*real(v), c*imag(v)) + back*u
			}
		}
		for k := lo; k < hi; k++ { // H = R Gᴴ
			c, s, back := cos[k], -sin[k], cmplx.Conj(sin[k])
			for i := lo; i <= k+1; i++ {
				u, v := h[i*n+k], h[i*n+k+1]
				h[i*n+k] = complex(c*real(u), c*imag(u)) + back*v
				h[i*n+k+1] = complex(c*real(v), c*imag(v)) + s*u
			}
		}
		for i := lo; i <= hi; i++ {
			h[i*n+i] += shift
		}
	}
	return values, true
}

// corner gives the eigenvalue of the last 2×2 block that is nearer to its last
// entry.
func corner(h []complex128, n, hi int) complex128 {
	a, b, c, d := h[(hi-1)*n+hi-1], h[(hi-1)*n+hi], h[hi*n+hi-1], h[hi*n+hi]
	half := (a - d) / 2
	root := cmplx.Sqrt(half*half + b*c)
	if real(half)*real(root)+imag(half)*imag(root) < 0 {
		root = -root
	}
	if half+root == 0 {
		return d
	}
	return d - b*c/(half+root)
}
