// Package tightbinding makes a model of a crystal from a parameter set: a
// two-centre Hamiltonian in an orthogonal basis of s, p, d and s* orbitals,
// with several shells of neighbours and spin–orbit coupling in the p shells.
//
// H(k) is a sum over bonds of two-centre integrals times direction factors
// (J. C. Slater, G. F. Koster, Phys. Rev. 94, 1498 (1954), Table I), with the
// Bloch phase taken at the atoms. Spin–orbit coupling is on-site,
// H = λ L·σ with λ = Δ/3 (D. J. Chadi, Phys. Rev. B 16, 790 (1977)); it
// doubles the basis: first all functions with spin up, then all with spin
// down. Integrals follow V ∝ d^−η from the bond lengths of the set; η = 2 is
// the law of W. A. Harrison, Electronic Structure (1980).
//
// Energies are in eV, lengths in Å. A Model is immutable and shared; its
// evaluators belong to one goroutine each, write only to the matrices and
// slices of the caller, and do not allocate. They panic with an index out of
// range when these are smaller than the basis.
package tightbinding
