package sparse

import (
	"fmt"
	"math"
	"slices"
	"sort"
)

// Pattern is the lower triangle of the pattern of a symmetric matrix, compressed by columns: the rows of column j are
// Row[Ptr[j]:Ptr[j+1]], rising, j itself first. It is not changed once made and may be shared.
type Pattern struct {
	N   int
	Ptr []int
	Row []int32
}

// Symmetric is a sparse symmetric matrix of order N given by its lower triangle, stored as in Pattern. Matrices may
// share Ptr and Row, which nobody changes.
type Symmetric struct {
	N   int
	Ptr []int
	Row []int32
	Val []float64
}

// Pattern returns the pattern of the matrix; it shares memory with it.
func (s *Symmetric) Pattern() *Pattern { return &Pattern{N: s.N, Ptr: s.Ptr, Row: s.Row} }

// Check returns an error when the matrix breaks a rule of its storage or holds a number that is not finite.
func (s *Symmetric) Check() error {
	if err := s.Pattern().Check(); err != nil {
		return err
	}
	if len(s.Val) != len(s.Row) {
		return fmt.Errorf("sparse: %d values for %d entries", len(s.Val), len(s.Row))
	}
	for j := range s.N {
		for p := s.Ptr[j]; p < s.Ptr[j+1]; p++ {
			if v := s.Val[p]; math.IsNaN(v) || math.IsInf(v, 0) {
				return fmt.Errorf("sparse: entry (%d, %d) is %g", s.Row[p], j, v)
			}
		}
	}
	return nil
}

// Check returns an error when the pattern breaks a rule of its storage.
func (p *Pattern) Check() error {
	if p.N < 0 || len(p.Ptr) != p.N+1 || p.Ptr[0] != 0 || p.Ptr[p.N] != len(p.Row) {
		return fmt.Errorf("sparse: pattern of order %d has %d column starts for %d entries", p.N, len(p.Ptr), len(p.Row))
	}
	for j := range p.N {
		if p.Ptr[j+1] <= p.Ptr[j] || p.Ptr[j+1] > len(p.Row) {
			return fmt.Errorf("sparse: column %d is empty or out of order", j)
		}
		rows := p.Row[p.Ptr[j]:p.Ptr[j+1]]
		if int(rows[0]) != j {
			return fmt.Errorf("sparse: column %d does not begin with its diagonal", j)
		}
		for i := 1; i < len(rows); i++ {
			if rows[i] <= rows[i-1] || int(rows[i]) >= p.N {
				return fmt.Errorf("sparse: rows of column %d do not rise or leave the matrix", j)
			}
		}
	}
	return nil
}

// At returns entry (i, j).
func (s *Symmetric) At(i, j int) float64 {
	if i < j {
		i, j = j, i
	}
	rows := s.Row[s.Ptr[j]:s.Ptr[j+1]]
	p := sort.Search(len(rows), func(p int) bool { return int(rows[p]) >= i })
	if p < len(rows) && int(rows[p]) == i {
		return s.Val[s.Ptr[j]+p]
	}
	return 0
}

// MulVec computes dst = S·x. The slices have length N and do not overlap.
func (s *Symmetric) MulVec(dst, x []float64) {
	if len(dst) != s.N || len(x) != s.N {
		panic("sparse: MulVec: bad length")
	}
	clear(dst)
	for j := range s.N {
		p, end := s.Ptr[j], s.Ptr[j+1]
		xj := x[j]
		sum := s.Val[p] * xj
		rows, vals := s.Row[p+1:end], s.Val[p+1:end]
		for q, v := range vals {
			i := rows[q]
			dst[i] += v * xj
			sum += v * x[i]
		}
		dst[j] += sum
	}
}

// MulBlock computes dst = S·x for nvec vectors stored one after another, each of length N. The slices do not overlap.
// Each vector gets the same bits as from MulVec.
func (s *Symmetric) MulBlock(dst, x []float64, nvec int) {
	if nvec < 0 || len(dst) != s.N*nvec || len(x) != s.N*nvec {
		panic("sparse: MulBlock: bad length")
	}
	n, v := s.N, 0
	for ; v+4 <= nvec; v += 4 {
		s.mulFour(dst[v*n:(v+4)*n], x[v*n:(v+4)*n])
	}
	for ; v < nvec; v++ {
		s.MulVec(dst[v*n:(v+1)*n], x[v*n:(v+1)*n])
	}
}

// mulFour reads the matrix once for four vectors, since reading it is what the product costs.
func (s *Symmetric) mulFour(dst, x []float64) {
	n := s.N
	clear(dst)
	x0, x1, x2, x3 := x[:n], x[n:][:n], x[2*n:][:n], x[3*n:][:n]
	y0, y1, y2, y3 := dst[:n], dst[n:][:n], dst[2*n:][:n], dst[3*n:][:n]
	for j := range n {
		p, end := s.Ptr[j], s.Ptr[j+1]
		a0, a1, a2, a3 := x0[j], x1[j], x2[j], x3[j]
		d := s.Val[p]
		s0, s1, s2, s3 := d*a0, d*a1, d*a2, d*a3
		rows, vals := s.Row[p+1:end], s.Val[p+1:end]
		for q, v := range vals {
			i := rows[q]
			y0[i] += v * a0
			s0 += v * x0[i]
			y1[i] += v * a1
			s1 += v * x1[i]
			y2[i] += v * a2
			s2 += v * x2[i]
			y3[i] += v * a3
			s3 += v * x3[i]
		}
		y0[j] += s0
		y1[j] += s1
		y2[j] += s2
		y3[j] += s3
	}
}

// Diagonal returns a copy of the diagonal.
func (s *Symmetric) Diagonal() []float64 {
	d := make([]float64, s.N)
	for j := range d {
		d[j] = s.Val[s.Ptr[j]]
	}
	return d
}

// DropZeros returns the matrix without its zero entries off the diagonal, or the matrix itself when few are zero.
func (s *Symmetric) DropZeros() *Symmetric {
	zeros := 0
	for _, v := range s.Val {
		if v == 0 {
			zeros++
		}
	}
	if zeros < len(s.Val)/4 {
		return s
	}
	out := &Symmetric{N: s.N, Ptr: make([]int, s.N+1)}
	for j := range s.N {
		for p := s.Ptr[j]; p < s.Ptr[j+1]; p++ {
			if s.Val[p] != 0 || p == s.Ptr[j] {
				out.Row, out.Val = append(out.Row, s.Row[p]), append(out.Val, s.Val[p])
			}
		}
		out.Ptr[j+1] = len(out.Row)
	}
	return out
}

// Combine returns alpha·a + beta·b on the union of the patterns. When both share one pattern, so does the result.
func Combine(alpha float64, a *Symmetric, beta float64, b *Symmetric) *Symmetric {
	if a.N != b.N {
		panic("sparse: Combine: orders differ")
	}
	if samePattern(a, b) {
		val := make([]float64, len(a.Val))
		for p, v := range a.Val {
			val[p] = alpha*v + beta*b.Val[p]
		}
		return &Symmetric{N: a.N, Ptr: a.Ptr, Row: a.Row, Val: val}
	}
	out := &Symmetric{N: a.N, Ptr: make([]int, a.N+1)}
	out.Row = make([]int32, 0, max(len(a.Row), len(b.Row)))
	out.Val = make([]float64, 0, cap(out.Row))
	for j := range a.N {
		p, pe := a.Ptr[j], a.Ptr[j+1]
		q, qe := b.Ptr[j], b.Ptr[j+1]
		for p < pe || q < qe {
			switch {
			case q == qe || p < pe && a.Row[p] < b.Row[q]:
				out.Row, out.Val = append(out.Row, a.Row[p]), append(out.Val, alpha*a.Val[p])
				p++
			case p == pe || b.Row[q] < a.Row[p]:
				out.Row, out.Val = append(out.Row, b.Row[q]), append(out.Val, beta*b.Val[q])
				q++
			default:
				out.Row, out.Val = append(out.Row, a.Row[p]), append(out.Val, alpha*a.Val[p]+beta*b.Val[q])
				p++
				q++
			}
		}
		out.Ptr[j+1] = len(out.Row)
	}
	return out
}

func samePattern(a, b *Symmetric) bool {
	if len(a.Row) != len(b.Row) {
		return false
	}
	if len(a.Row) == 0 || &a.Row[0] == &b.Row[0] && &a.Ptr[0] == &b.Ptr[0] {
		return true
	}
	return slices.Equal(a.Ptr, b.Ptr) && slices.Equal(a.Row, b.Row)
}
