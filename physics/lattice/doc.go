// Package lattice holds the real and the reciprocal lattice of a crystal and
// the two kinds of k-point coordinates.
//
// Lengths are in Å and wave vectors in Å⁻¹ with the 2π inside:
// a_i·b_j = 2π δ_ij (the convention of solid-state physics; the
// crystallographic one drops the 2π). All values are immutable and safe to
// share between goroutines. Nothing here panics: a cell that spans no volume
// or holds a number that is not finite is refused by New.
package lattice
