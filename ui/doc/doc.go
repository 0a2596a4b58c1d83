// Package doc holds the study: crystal, model, path, mesh, view and pins as
// one value, its file in TOML, its history, and the physics built from it.
//
// Energies are in eV, lengths in Å, k points in fractions of the primitive
// reciprocal vectors unless a frame says otherwise, levels are counted from 0.
// A Document is a value: nobody changes its slices, maps and pins once they are
// in it, so copies may share them. Nothing here panics on the content of a
// file: whatever is wrong comes back as *Problems, each with line, column and
// remedy.
//
// Source of the file's form: TOML 1.0 (toml.io); the keys are our own and
// described at Decode.
package doc
