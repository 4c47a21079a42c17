// Package sparse stores, orders, factorises and solves large sparse symmetric matrices.
//
// Terms.
//
//   - unknown: a row and column of the matrix, numbered from 0 to N-1.
//   - pattern: where a matrix may be non-zero. Patterns are symmetric and only their lower triangle is kept, column by
//     column, with the rows of a column rising, so that the diagonal comes first. Every diagonal entry is present.
//   - ordering: the order in which unknowns are eliminated; Ordering[k] is the unknown eliminated k-th.
//   - supernode: consecutive columns of the factor with the same rows below them, stored as one dense trapezoid.
//   - front: the dense matrix on the rows of a supernode in which its columns are eliminated; what is left on the rows
//     below is its update, which is added to the front of the parent (the multifrontal method).
//   - inertia: the numbers of negative, zero and positive eigenvalues.
//
// Method. The assembler computes the pattern once and the places of all element entries in it, by blocks of unknowns
// that all elements take alike. Orderings come from nested dissection (A. George, Nested dissection of a regular finite
// element mesh, SIAM J. Numer. Anal. 10, 1973) with separators found geometrically and by level sets and then improved
// on the graph, and from approximate minimum degree (P. Amestoy, T. Davis, I. Duff, An approximate minimum degree
// ordering algorithm, SIAM J. Matrix Anal. Appl. 17, 1996); both work on the graph in which unknowns with the same
// neighbours are one vertex. Analyse finds the elimination tree (J. Liu, The role of elimination trees in sparse
// factorization, SIAM J. Matrix Anal. Appl. 11, 1990), the column counts (J. Gilbert, E. Ng, B. Peyton, An efficient
// algorithm to compute row and column counts for sparse Cholesky factorization, SIAM J. Matrix Anal. Appl. 15, 1994)
// and supernodes, merged where that costs few zeros (C. Ashcraft and R. Grimes, The influence of relaxed supernode
// partitions on the multifrontal method, ACM Trans. Math. Softw. 15, 1989). The numerical factorisation is multifrontal
// (I. Duff and J. Reid, The multifrontal solution of indefinite sparse symmetric linear systems, ACM Trans. Math.
// Softw. 9, 1983): S·A·S = P·L·D·Lᵀ·Pᵀ with S a diagonal scaling by powers of two, and diagonal pivoting of order one
// and two inside the columns of a supernode only.
//
// Pivoting inside supernodes is enough for definite matrices and, in practice, for K − σM with σ inside the spectrum;
// whether it was is for the caller to check by the residual of a solve. A pivot too small to divide by is an error that
// names the unknown.
//
// Determinism. Every sum has an order fixed by the pattern and the ordering: results are equal bit by bit for every
// number of threads.
//
// Failures. Wrong shapes and broken invariants panic with the prefix "sparse:"; numerical failures are errors.
package sparse
