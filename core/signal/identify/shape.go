package identify

import (
	"math"
	"math/cmplx"
	"slices"
)

// Agreement returns the modal assurance criterion |aᴴb|²/(aᴴa·bᴴb) of two shapes, 0 to 1; 0 if either is zero.
func Agreement(a, b []complex128) float64 {
	var ab complex128
	var aa, bb float64
	for i, v := range a {
		ab += cmplx.Conj(v) * b[i]
		aa += real(v)*real(v) + imag(v)*imag(v)
		bb += real(b[i])*real(b[i]) + imag(b[i])*imag(b[i])
	}
	if aa == 0 || bb == 0 {
		return 0
	}
	return (real(ab)*real(ab) + imag(ab)*imag(ab)) / (aa * bb)
}

// Direction turns a complex shape into the real unit vector nearest to it, its largest component positive, and tells how
// much of the shape it holds: 1 if all components move in step or against, ½ for one that circles.
func Direction(shape []complex128) (direction []float64, collinearity float64) {
	var square complex128
	total := 0.0
	for _, v := range shape {
		square += v * v
		total += real(v)*real(v) + imag(v)*imag(v)
	}
	direction = make([]float64, len(shape))
	if total == 0 {
		return direction, 0
	}
	turn := cmplx.Exp(complex(0, -cmplx.Phase(square)/2))
	norm, largest := 0.0, 0
	for i, v := range shape {
		direction[i] = real(v * turn)
		norm += direction[i] * direction[i]
		if math.Abs(direction[i]) > math.Abs(direction[largest]) {
			largest = i
		}
	}
	by := 1 / math.Sqrt(norm)
	if direction[largest] < 0 {
		by = -by
	}
	for i := range direction {
		direction[i] *= by
	}
	return direction, norm / total
}

// sortBy sorts by a rising number, keeping the order of equals.
func sortBy[T any](rows []T, by func(T) float64) {
	slices.SortStableFunc(rows, func(a, b T) int {
		switch x, y := by(a), by(b); {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return 0
	})
}
