// Package zone builds the first Brillouin zone of any lattice as a polyhedron,
// folds and classifies k points, and knows the special points, standard paths
// and line names of the Bravais lattices.
//
// Wave vectors are in Å⁻¹ with the 2π inside (CartK) or fractions of the
// primitive reciprocal vectors (FracK). Zones, polyhedra and tables are not
// changed after they are made and may be shared between goroutines; their
// slices belong to them. An index out of range panics as slices do; bad input
// comes back as an error.
//
// Sources: J. H. Conway, N. J. A. Sloane, Proc. R. Soc. Lond. A 436, 55 (1992)
// (Voronoi cell from an obtuse superbase); W. Setyawan, S. Curtarolo, Comput.
// Mater. Sci. 49, 299 (2010) (special points and paths); L. P. Bouckaert,
// R. Smoluchowski, E. Wigner, Phys. Rev. 50, 58 (1936) (names of lines).
package zone
