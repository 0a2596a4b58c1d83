// Package catalog reads parameter sets of two-centre models: the shipped ones
// and the user's own, both from TOML files of one form, described in
// assets/sets/README.md.
//
// Energies are in eV and lengths in Å. A Set is immutable once parsed and
// shared by all. Nothing here panics on the content of a file: whatever is
// wrong comes back as a *FileError with line, column and remedy.
//
// Bond parameters are the two-centre integrals of J. C. Slater and G. F.
// Koster, Phys. Rev. 94, 1498 (1954), with the direction running from the
// atom of the orbital that comes first in s, s*, p, d to the other atom. Sets
// of tetrahedral crystals are often printed as the sums over the four bonds
// that stand in H(k) at Γ and X; the files keep these printed numbers and the
// reader converts them (D. J. Chadi and M. L. Cohen, phys. stat. sol. (b) 68,
// 405 (1975)):
//
//	ssσ = V_ss/4, spσ = √3 V_sp/4, ppσ = (V_xx + 2V_xy)/4, ppπ = (V_xx − V_xy)/4.
package catalog
