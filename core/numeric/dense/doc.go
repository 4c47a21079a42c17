// Package dense holds the small dense kernels that the sparse factorisation and the eigen-solver spend their time in.
//
// Terms. All matrices are real and stored row by row: entry (i, j) of a matrix with leading dimension ld is at i*ld+j,
// and ld is at least the number of columns. A "block of vectors" is a matrix whose rows are the vectors, so that
// vectors of length n lie one after another. Symmetric matrices use their lower triangle only; what is above the
// diagonal is neither read nor kept.
//
// Determinism. Every kernel adds its terms in an order fixed by the shapes alone. Kernels that take a number of
// threads split their work at places which do not depend on it, so that results are the same bit by bit for every
// number of threads.
//
// Method. The products work on tiles of 3 by 2 results kept in registers while the inner index runs. Larger tiles would
// read less, but the compiler then keeps sums in memory, which costs a third of the speed; this one runs at the rate of
// the scalar multiply and add units. Operands are taken in pieces that stay in the first-level cache (K. Goto and R. van de Geijn, Anatomy of high-performance matrix
// multiplication, ACM Trans. Math. Softw. 34, 2008). There is no assembly.
//
// Failures. Wrong shapes panic with the prefix "dense:"; numerical failures are part of the result.
package dense
