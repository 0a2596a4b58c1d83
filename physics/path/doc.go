// Package path holds k-paths: runs of points through the zone, read from text
// or from the standard path of a lattice, and sampled at constant spacing.
//
// k points are fractions of the primitive reciprocal vectors; distances and
// spacings are in Å⁻¹ with the 2π inside. A Path and a Sampling are plain
// values: whoever made one owns its slices, and nothing here keeps a
// reference to them. Nothing panics; text that cannot be read is refused with
// an *Error that names leg, item and remedy.
//
// Sources: the standard paths and labels come from package zone (Setyawan,
// Curtarolo, Comput. Mater. Sci. 49, 299 (2010)); drawing the two ends of a
// break on one tick is common practice.
package path
