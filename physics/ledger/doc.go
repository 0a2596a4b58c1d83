// Package ledger breaks the energy of every level at a k point down into
// on-site, spin–orbit and bond terms that add up to it, and compares two
// levels term by term.
//
// All figures are means over a set of levels of equal energy: those of a
// single member depend on the solver's choice of basis. For c†c = 1,
//
//	E = Σ ε_l w_l + ⟨H_SO⟩ + Σ_shells Σ_channels ⟨2 Re Σ c_μ* H_μν e^{ik·d} c_ν⟩,
//
// each pair of atoms once. The bond terms are the energy-resolved ones of
// R. Dronskowski, P. E. Blöchl, J. Phys. Chem. 97, 8617 (1993), at one k
// point. H is linear in its parameters, so a term is also parameter ×
// ∂E/∂parameter (Hellmann–Feynman), and with V ∝ d^−η, dE/d ln d is −η times
// the bond terms.
//
// Energies are in eV. A Ledger owns its slices; nothing here keeps or changes
// those of the States it was made from. Nothing panics on finite input.
package ledger
