// Package eigen finds the lowest eigenpairs of large sparse symmetric pencils K·φ = λ·M·φ.
//
// Terms. K is symmetric and positive semi-definite; M is symmetric and positive semi-definite; no vector but zero is in
// the null space of both. λ is real and not negative (with K in N/m and M in kg, λ = ω² in rad²/s²). Null vectors of K
// (rigid motions) have λ = 0. Null vectors of M have no finite λ and are never returned. θ = 1/(λ-σ) is the eigenvalue
// of the operator A⁻¹M with A = K-σM and the shift σ < 0, which makes A positive definite. A Ritz pair is an eigenpair
// of the operator restricted to the vectors at hand.
//
// Method. Block Lanczos on A⁻¹M in the inner product of M (T. Ericsson and A. Ruhe, The spectral transformation Lanczos
// method, Math. Comp. 35, 1980; R. Grimes, J. Lewis, H. Simon, A shifted block Lanczos algorithm for solving sparse
// symmetric generalized eigenproblems, SIAM J. Matrix Anal. Appl. 15, 1994), with each new block made orthogonal to all
// earlier ones twice, and with thick restarts (K. Wu and H. Simon, Thick-restart Lanczos method for large symmetric
// eigenvalue problems, SIAM J. Matrix Anal. Appl. 22, 2000). Starting vectors are random (fixed seed) and multiplied
// once by the operator, and the final vectors are multiplied by it once more, so that no part of a null vector of M
// survives (B. Nour-Omid, B. Parlett, T. Ericsson, P. Jensen, How to implement the spectral transformation, Math. Comp.
// 48, 1987). Problems small enough are solved as dense ones.
//
// Proof that none is missing. By Sylvester's law of inertia, K-sM has as many negative pivots as there are λ < s. The
// result is compared with that count at a shift s in a gap above the wanted values (B. Parlett, The Symmetric
// Eigenvalue Problem, section 3.3). If they differ, the search goes on in the complement of what was found, from new
// random vectors in larger blocks, and Status says so.
//
// Memory. One factorisation is held at a time: the count overwrites that at the shift, which is made again only if the
// search goes on or the caller asked to keep it. Beside it there are the vectors of the search, some three times as many
// as are wanted, and one copy of the values of K-sM while it is factorised.
//
// Determinism. The same input gives the same bits for every number of threads.
//
// Failures. Wrong shapes panic with the prefix "eigen:". Numbers that are not finite, an M with a negative direction, a K
// with one below the shift, and unknowns that neither K nor M holds are errors. How the iteration ended, and whether
// the count agreed, is in Status.
package eigen
