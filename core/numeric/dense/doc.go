// Package dense holds the small dense kernels that the sparse factorisation and the eigen-solver spend their time in.
//
// Terms. All matrices are real and stored row by row: entry (i, j) of a matrix with leading dimension ld is at i*ld+j,
// and ld is at least the number of columns. A "block of vectors" is a matrix whose rows are the vectors, so that
// vectors of length n lie one after another. Symmetric matrices use their lower triangle only; what is above the
// diagonal is neither read nor kept.
//
// Determinism. Every kernel adds its terms in an order fixed by the shapes alone. Kernels that take a number of
// threads split their work at places which do not depend on it, so that results are the same bit by bit for every
// number of threads on one machine. From one kind of machine to another last digits differ: the assembly fuses each
// multiplication with its addition and rounds once, the Go code may round twice.
//
// Method. All products end in one kernel, Strip: it subtracts a product from up to eight columns of C, a tile of which
// stays in registers while the inner index runs. One operand is read in any storage; the other has the eight entries of
// a step side by side, which Panels arranges (K. Goto and R. van de Geijn, Anatomy of high-performance matrix
// multiplication, ACM Trans. Math. Softw. 34, 2008). The kernel exists in assembly for AVX2 with FMA (tiles of 6 by 8)
// and for AVX-512 (12 by 8), chosen when the program starts, and in Go for all other processors. The build tag purego
// leaves the assembly out. The generator of the assembly, in folder gen, is a module of its own.
//
// Failures. Wrong shapes panic with the prefix "dense:"; numerical failures are part of the result.
package dense
