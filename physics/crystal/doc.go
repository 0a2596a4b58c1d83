// Package crystal holds crystals: a lattice with atoms on it, made from a named
// prototype or from given vectors and sites, and finds the shells of neighbours.
//
// Lengths are in Å, positions also as fractions of the primitive vectors. A
// Crystal is not changed after it is made; the slices it hands out belong to
// it and must not be written to. Nothing here panics: bad input (a cell without
// volume, atoms on top of each other, an unknown element, numbers that are not
// finite) comes back as an error that names it.
//
// Sources: prototypes after R. W. G. Wyckoff, Crystal Structures, 2nd ed. (1963);
// order of elements in a formula after the IUPAC Nomenclature of Inorganic
// Chemistry (2005), table VI.
package crystal
