package planar

import "math"

// An expansion is a sum of floats of rising magnitude that do not overlap, which holds a number exactly
// (J. R. Shewchuk, Adaptive Precision Floating-Point Arithmetic and Fast Robust Geometric Predicates, Discrete &
// Computational Geometry 18, 1997). Its sign is that of its last element; zero elements are left out, and zero itself
// is the empty expansion.

// twoSum returns x = fl(a+b) and the rounding error y, so that a+b = x+y exactly.
func twoSum(a, b float64) (x, y float64) {
	x = a + b
	bv := x - a
	av := x - bv
	return x, (a - av) + (b - bv)
}

// twoProduct returns x = fl(a·b) and the rounding error y. The conversion keeps compilers from fusing the product
// into a later sum.
func twoProduct(a, b float64) (x, y float64) {
	x = float64(a * b)
	return x, math.FMA(a, b, -x)
}

// difference appends the exact value of a−b to dst.
func difference(dst []float64, a, b float64) []float64 {
	x, y := twoSum(a, -b)
	return appendNonzero(dst, y, x)
}

func appendNonzero(dst []float64, small, large float64) []float64 {
	if small != 0 {
		dst = append(dst, small)
	}
	if large != 0 {
		dst = append(dst, large)
	}
	return dst
}

// addExpansions appends e+f to dst, which must be empty and apart from both.
func addExpansions(dst, e, f []float64) []float64 {
	i, j := 0, 0
	next := func() float64 {
		if j == len(f) || i < len(e) && math.Abs(e[i]) < math.Abs(f[j]) {
			i++
			return e[i-1]
		}
		j++
		return f[j-1]
	}
	if len(e)+len(f) == 0 {
		return dst
	}
	q := next()
	for i+j < len(e)+len(f) {
		var h float64
		q, h = twoSum(q, next())
		if h != 0 {
			dst = append(dst, h)
		}
	}
	if q != 0 {
		dst = append(dst, q)
	}
	return dst
}

// scaleExpansion appends b·e to dst, which must be empty and apart from e.
func scaleExpansion(dst, e []float64, b float64) []float64 {
	if len(e) == 0 || b == 0 {
		return dst
	}
	q, h := twoProduct(e[0], b)
	if h != 0 {
		dst = append(dst, h)
	}
	for _, x := range e[1:] {
		p1, p0 := twoProduct(x, b)
		s, h0 := twoSum(q, p0)
		if h0 != 0 {
			dst = append(dst, h0)
		}
		q, h = twoSum(p1, s)
		if h != 0 {
			dst = append(dst, h)
		}
	}
	if q != 0 {
		dst = append(dst, q)
	}
	return dst
}

// multiplyExpansions returns e·f in new memory.
func multiplyExpansions(e, f []float64) []float64 {
	var sum, other, part []float64
	for _, x := range e {
		part = scaleExpansion(part[:0], f, x)
		other = addExpansions(other[:0], sum, part)
		sum, other = other, sum
	}
	return sum
}

func negate(e []float64) []float64 {
	n := make([]float64, len(e))
	for i, x := range e {
		n[i] = -x
	}
	return n
}

// leading returns the element that carries the sign, 0 for zero.
func leading(e []float64) float64 {
	if len(e) == 0 {
		return 0
	}
	return e[len(e)-1]
}
