package sparse

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"sync"
	"time"

	"hushframe/core/numeric/dense"
)

// Factor is the factorisation S·A·S = P·L·D·Lᵀ·Pᵀ of a symmetric matrix (see the package doc). Only Refactorise changes
// it; the other methods may be called from several goroutines.
type Factor struct {
	analysis *Analysis
	scale    []float64 // of each unknown, a power of two
	l        []float64 // trapezoids of the supernodes, row by row
	pivots   [][]int32 // positions of each supernode's columns in pivot order
	d, e     []float64 // D in pivot order, see dense.Pivots
	passages sync.Pool // of *passage, which solves use again

	// Stats tells what the factorisation was and cost.
	Stats FactorStats
}

// FactorStats tells what a factorisation was and cost.
type FactorStats struct {
	Unknowns       int
	Entries        int64   // non-zeros of L, those stored in vain by merged supernodes included
	Flops          float64 // additions and multiplications of the elimination
	AnalyseSeconds float64 // pattern work, without finding the ordering
	FactorSeconds  float64
	// SmallestPivot is the least magnitude of a pivot of the scaled matrix, whose diagonal is within a factor of two of
	// one, and SmallestUnknown the unknown where it occurred. Digits lost to cancellation there are about -log10 of it.
	SmallestPivot   float64
	SmallestUnknown int
	// TwoByTwo is the number of pivot blocks of order two, and Exchanges that of pivots taken out of order.
	TwoByTwo, Exchanges int
	// FirstNegative is the unknown of the first negative pivot of order one or of the first block of order two, or -1.
	FirstNegative int
}

// PivotError says that elimination stopped because a pivot was too small or not finite: the matrix is singular to
// working precision, and Unknown is one that takes part in the combination that nothing holds.
type PivotError struct {
	Unknown int
	// Pivot is the magnitude found, in the scaled matrix whose diagonal is about one.
	Pivot float64
}

func (e *PivotError) Error() string {
	return fmt.Sprintf("sparse: matrix is singular at unknown %d (pivot %.3g of a diagonal scaled to one)", e.Unknown, e.Pivot)
}

// ErrNotFinite is wrapped by the error of Factorise for a matrix with an entry that is not a finite number.
var ErrNotFinite = errors.New("sparse: entry is not a finite number")

const (
	// leastPivot is the magnitude, in the scaled matrix, at which a pivot is only the rounding error of its updates.
	leastPivot = 1e-14
	// doubtfulPivot is that below which the sign of a pivot is not trusted by Inertia.
	doubtfulPivot = 1e-12
)

// Factorise analyses the pattern of a in the given order and factorises it with the given number of threads (0 means
// one per processor). The error is a *PivotError when the matrix is singular to working precision.
func Factorise(a *Symmetric, order Ordering, threads int) (*Factor, error) {
	an, err := Analyse(a.Pattern(), order)
	if err != nil {
		return nil, err
	}
	return an.Factorise(context.Background(), a, threads)
}

// Factorise factorises a matrix that has the analysed pattern. When ctx is done it stops between two fronts and returns
// the cause.
func (an *Analysis) Factorise(ctx context.Context, a *Symmetric, threads int) (*Factor, error) {
	last := &supernode{}
	if len(an.nodes) > 0 {
		last = &an.nodes[len(an.nodes)-1]
	}
	f := &Factor{
		analysis: an, l: make([]float64, last.offset+len(last.rows)*int(last.width)),
		pivots: make([][]int32, len(an.nodes)), d: make([]float64, an.pattern.N), e: make([]float64, an.pattern.N),
	}
	if err := f.fill(ctx, a, threads); err != nil {
		return nil, err
	}
	return f, nil
}

// Refactorise overwrites the factorisation by that of another matrix of the same pattern, in the same memory. After an
// error there is no factorisation, and only Refactorise may be called.
func (f *Factor) Refactorise(ctx context.Context, a *Symmetric, threads int) error {
	clear(f.l)
	return f.fill(ctx, a, threads)
}

// fill makes the factorisation of a. The trapezoids must be zero.
func (f *Factor) fill(ctx context.Context, a *Symmetric, threads int) error {
	an := f.analysis
	if a.N != an.pattern.N || len(a.Val) != len(an.pattern.Row) {
		panic("sparse: Factorise: matrix does not have the analysed pattern")
	}
	began := time.Now()
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	var err error
	if f.scale, err = scaling(a); err != nil {
		return err
	}
	if err := f.eliminate(ctx, a, threads); err != nil {
		return err
	}
	f.Stats = FactorStats{
		Unknowns: a.N, Entries: an.Entries, Flops: an.Flops, AnalyseSeconds: an.Seconds,
		SmallestPivot: math.Inf(1), SmallestUnknown: -1, FirstNegative: -1,
	}
	f.takeStock()
	f.Stats.FactorSeconds = time.Since(began).Seconds()
	return nil
}

// scaling returns powers of two that bring the diagonal near one. An unknown with a zero diagonal is scaled by its
// largest entry.
func scaling(a *Symmetric) ([]float64, error) {
	largest := make([]float64, a.N)
	for j := range a.N {
		for p := a.Ptr[j]; p < a.Ptr[j+1]; p++ {
			v := math.Abs(a.Val[p])
			if !(v <= math.MaxFloat64) {
				return nil, fmt.Errorf("%w: (%d, %d) is %g", ErrNotFinite, a.Row[p], j, a.Val[p])
			}
			i := a.Row[p]
			largest[i] = max(largest[i], v)
			largest[j] = max(largest[j], v)
		}
	}
	scale := make([]float64, a.N)
	for j := range a.N {
		v := math.Abs(a.Val[a.Ptr[j]])
		if v == 0 {
			v = largest[j]
		}
		scale[j] = 1
		if v > 0 {
			_, exp := math.Frexp(v)
			scale[j] = math.Ldexp(1, -exp>>1)
		}
	}
	return scale, nil
}

// takeStock gathers what the pivots tell.
func (f *Factor) takeStock() {
	st := &f.Stats
	for s := range f.pivots {
		first := int(f.analysis.nodes[s].first)
		for k, position := range f.pivots[s] {
			u := int(f.analysis.order[position])
			if int(position) != first+k {
				st.Exchanges++
			}
			small, negative := math.Abs(f.d[first+k]), f.d[first+k] < 0
			if e := f.e[first+k]; e != 0 {
				st.TwoByTwo++
				small, negative = dense.SmallerOfTwo(f.d[first+k], f.d[first+k+1], e), true
			} else if k > 0 && f.e[first+k-1] != 0 {
				continue
			}
			if small < st.SmallestPivot {
				st.SmallestPivot, st.SmallestUnknown = small, u
			}
			if negative && st.FirstNegative < 0 {
				st.FirstNegative = u
			}
		}
	}
}

// Inertia returns the numbers of negative and positive eigenvalues of the matrix, by Sylvester's law from the signs of
// the pivots. Pivots too small for their sign to be trusted are counted as zero.
func (f *Factor) Inertia() (neg, zero, pos int) {
	for k := 0; k < len(f.d); k++ {
		d := f.d[k]
		if e := f.e[k]; e != 0 {
			// A block of order two chosen by the pivot rule has a negative determinant.
			if dense.SmallerOfTwo(d, f.d[k+1], e) < doubtfulPivot {
				zero++
				if d+f.d[k+1] < 0 {
					neg++
				} else {
					pos++
				}
			} else {
				neg++
				pos++
			}
			k++
			continue
		}
		switch {
		case math.Abs(d) < doubtfulPivot:
			zero++
		case d < 0:
			neg++
		default:
			pos++
		}
	}
	return neg, zero, pos
}
