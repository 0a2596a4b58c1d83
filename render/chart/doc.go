// Package chart draws axes, curves, fat bands, densities and bars into a
// picture, from numbers alone: it knows neither crystals nor bands.
//
// Units: data in the caller's, sizes and places in points, y down. A Scale maps
// one to the other. Everything is recorded into a picture.Picture under the id
// that the caller gives, so that it can be hit.
//
// Memory: nothing is kept; slices are read during the call only. Nothing here
// panics: numbers that are not finite break a curve, and an empty or
// degenerate scale draws an empty frame.
//
// Sources: tick steps of 1, 2 and 5 times a power of ten are common practice;
// labels are spread by pool adjacent violators (Barlow, Bartholomew, Bremner,
// Brunk, Statistical Inference under Order Restrictions, 1972).
package chart
