// Package dos computes densities of states by linear tetrahedra on a
// symmetry-reduced mesh: total, projected on atoms and angular momenta,
// resolved by the terms of the Hamiltonian (COHP), integrated, and the Fermi
// level.
//
// Energies are in eV, densities in states eV⁻¹ per primitive cell with both
// spins, COHP in eV per eV and cell. A DOS owns its arrays and is safe for
// concurrent readers; Evaluate returns fresh curves. Nothing panics on
// numbers of the user's; energies that are not finite or not ascending are
// refused with an error.
//
// Sources: O. Jepsen, O. K. Andersen, Solid State Commun. 9, 1763 (1971);
// G. Lehmann, M. Taut, phys. stat. sol. (b) 54, 469 (1972); P. E. Blöchl,
// O. Jepsen, O. K. Andersen, Phys. Rev. B 49, 16223 (1994), for integrals and
// their correction; R. Dronskowski, P. E. Blöchl, J. Phys. Chem. 97, 8617
// (1993), for COHP.
package dos
