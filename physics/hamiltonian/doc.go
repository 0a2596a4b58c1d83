// Package hamiltonian says what every model of a crystal offers: a basis, a
// Hamiltonian at any k point, and the terms that its energies are made of.
//
// Bands, densities, edges and the ledger depend on this package alone, never
// on the kind of model behind it.
//
// Energies are in eV, lengths in Å, k points in fractions of the primitive
// reciprocal vectors. Bloch sums carry atomic positions,
//
//	H_μν(k) = Σ_R e^{ik·(R+τ_ν−τ_μ)} H_μν(R),
//
// so that ∂H/∂k is free of the choice of cell (Slater, Koster, Phys. Rev. 94,
// 1498 (1954), eq. 4, with the phase taken at the atoms).
//
// A Model is immutable and shared by goroutines. An Evaluator and a States
// belong to one goroutine each; the slices and matrices that States returns
// are views of its workspace, overwritten by the next call. Slices and
// matrices of the wrong size panic with an index out of range; a k point that
// is not finite is an error of the solver.
package hamiltonian
