// Package picture records a two-dimensional drawing so that the screen, a file and a hit test can all replay the same one.
//
// Units: points (1/72 inch), x to the right, y down, angles in degrees counter-clockwise as seen by the reader. Nothing
// here knows of pixels, fonts or files: a renderer turns a Picture into them. Text arrives already laid out, as glyphs of
// a numbered font with their places (package typeset makes it and knows the outlines).
//
// Memory: a Picture copies every path into storage of its own, which Reset keeps, so one Path and one Picture can be used
// again for frame after frame without allocation. Laid-out texts and images are kept by reference and must not change.
// A Picture is built by one goroutine; once built, any number may replay or hit-test it at the same time.
//
// Panics: End without Begin, PopClip without PushClip, and a Path that draws before its first MoveTo: all are mistakes of
// the caller, never of the data. Coordinates that are NaN or infinite are left out: a path breaks there and goes on at
// the next finite point.
package picture
