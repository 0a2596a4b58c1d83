// Package edges finds the band edges of a model over the whole zone, not just
// on a path: valence top, conduction bottom, smallest vertical gap, whether
// the gap is direct, and where the edges lie.
//
// Energies are in eV, k points are fractions of the primitive reciprocal
// vectors, distances in k are in Å⁻¹ unless stated. Edges are found to 1e-7 eV
// and 1e-5·2π/a. Results are plain values owned by the caller; nothing panics.
//
// Sources: velocities are those of Hellmann and Feynman; the search without
// derivatives, for edges where bands touch, is compass search with turning
// directions (T. G. Kolda, R. M. Lewis, V. Torczon, SIAM Review 45, 385
// (2003)). That minima on the faces of the zone count once for two halves is
// common practice (four L valleys in germanium).
package edges
