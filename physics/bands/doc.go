// Package bands computes the levels of a model along a sampled k-path, with
// the weights of every state on atoms and angular momenta, its net bond
// energy, and which levels belong to one continuous curve.
//
// Energies are in eV. Compute owns everything in the Bands it returns; the
// caller may keep it and share it between goroutines as long as nobody
// writes. Nothing panics; a Hamiltonian that is not finite gives an error
// that names the k point.
//
// Sources: levels of different symmetry cross and levels of the same symmetry
// do not (J. von Neumann, E. P. Wigner, Phys. Z. 30, 467 (1929)); levels move
// by no more than the norm of the change of H (H. Weyl, Math. Ann. 71, 441
// (1912)).
package bands
