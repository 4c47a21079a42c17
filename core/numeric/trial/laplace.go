package trial

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/numeric/sparse"
)

// Chain returns the stiffness of n unit masses in a row joined by n-1 unit springs, free at both ends, and its n
// eigenvalues, rising: 2-2·cos(πk/n), k = 0..n-1 (the discrete cosine transform of type two diagonalises it: G. Strang,
// The discrete cosine transform, SIAM Review 41, 1999).
func Chain(n int) (*sparse.Symmetric, []float64) {
	elements := make([][]int32, n-1)
	for e := range elements {
		elements[e] = []int32{int32(e), int32(e + 1)}
	}
	values := make([]float64, n)
	for k := range values {
		s := math.Sin(math.Pi * float64(k) / float64(2*n))
		values[k] = 4 * s * s
	}
	return springs(n, elements), values
}

// Grid returns the stiffness of nx by ny unit masses joined to their neighbours in both directions by unit springs,
// free at the edges, and its eigenvalues, rising: the sums of those of the two chains. A square grid has repeated
// pairs. Coordinates are those of the masses.
func Grid(nx, ny int) (k *sparse.Symmetric, values []float64, coords [][3]float64) {
	var elements [][]int32
	at := func(i, j int) int32 { return int32(j*nx + i) }
	for j := range ny {
		for i := range nx {
			coords = append(coords, [3]float64{float64(i), float64(j)})
			if i+1 < nx {
				elements = append(elements, []int32{at(i, j), at(i+1, j)})
			}
			if j+1 < ny {
				elements = append(elements, []int32{at(i, j), at(i, j+1)})
			}
		}
	}
	for j := range ny {
		for i := range nx {
			si := math.Sin(math.Pi * float64(i) / float64(2*nx))
			sj := math.Sin(math.Pi * float64(j) / float64(2*ny))
			values = append(values, 4*si*si+4*sj*sj)
		}
	}
	slices.Sort(values)
	return springs(nx*ny, elements), values, coords
}

func springs(n int, elements [][]int32) *sparse.Symmetric {
	a := sparse.NewAssembler(n, elements)
	for e := range elements {
		a.Add(e, []float64{1, -1, 1})
	}
	return a.Matrix()
}

// Diagonal returns a diagonal matrix.
func Diagonal(d []float64) *sparse.Symmetric {
	s := &sparse.Symmetric{N: len(d), Ptr: make([]int, len(d)+1), Row: make([]int32, len(d)), Val: slices.Clone(d)}
	for i := range d {
		s.Ptr[i+1], s.Row[i] = i+1, int32(i)
	}
	return s
}

// Full returns the matrix in dense form.
func Full(s *sparse.Symmetric) *mat.SymDense {
	d := mat.NewSymDense(s.N, nil)
	for j := range s.N {
		for p := s.Ptr[j]; p < s.Ptr[j+1]; p++ {
			d.SetSym(int(s.Row[p]), j, s.Val[p])
		}
	}
	return d
}

// Identity returns the unit matrix.
func Identity(n int) *sparse.Symmetric { return Diagonal(slices.Repeat([]float64{1}, n)) }
