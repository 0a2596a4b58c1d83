// Package symmetry finds the space-group operations of a crystal from its atoms
// and uses them on k points: stars, little co-groups and reduced meshes.
//
// Operations act on fractional positions, x' = R x + T; k points are fractions
// of the primitive reciprocal vectors and turn with the transposed inverse of R.
// A Group and a Mesh are not changed after they are made and may be shared
// between goroutines; their slices belong to them. Index arguments out of range
// panic as slices do; everything else comes back as an error.
//
// Sources: International Tables for Crystallography, vol. A (symmetry operations
// and point groups); C. J. Bradley, A. P. Cracknell, The Mathematical Theory of
// Symmetry in Solids (1972) (stars and little co-groups); H. J. Monkhorst,
// J. D. Pack, Phys. Rev. B 13, 5188 (1976) (meshes).
package symmetry
