// Package linalg finds the energies and states of small dense Hermitian
// matrices: H c = E c, and H c = E S c with an overlap matrix S.
//
// Matrices are complex, at most a few hundred rows, stored as separate real
// and imaginary parts; numbers carry the units of the caller (eV here).
//
// A Solver or GeneralSolver owns all the memory a solve needs, so a solve
// allocates nothing; arguments are never kept and, destinations apart, never
// changed. One solver serves one goroutine at a time. Wrong lengths of
// arguments panic: they are mistakes of the program. Bad numbers (NaN,
// infinity, an overlap that is not positive) are errors: they come from input.
//
// # Method
//
// The matrix is reduced to a real symmetric tridiagonal one by Householder
// reflections (Householder 1958), taken from the last row upward so that each
// reflection's vector is a contiguous row (tridiagonal.go). The tridiagonal
// matrix is diagonalised by the QL method of Pal, Walker and Kahan, which
// works on squared off-diagonal elements and needs no square root within a
// sweep (ql.go; Parlett, The Symmetric Eigenvalue Problem, SIAM 1998, §8.14-8.15). For
// vectors the rotations of each sweep are recovered from their squared
// cosines, applied to a real matrix, and the reflections are applied to its
// rows at the end (vectors.go). The inner loops are in kernels.go, and again
// for processors with AVX2 in kernels_amd64.s; the tests run both. The problem with overlap is brought to the
// plain one by the Cholesky factors of S (general.go; Golub and Van Loan,
// Matrix Computations, 4th ed. 2013, §8.7).
//
// The results are backward stable: ‖Hc − Ec‖ and the deviation of the vectors
// from orthonormality stay within a small multiple of the rounding unit times
// ‖H‖, n. Vectors of equal energies are an arbitrary orthonormal basis of
// their level.
package linalg
