// Package session is the state machine between the window and the physics: it
// holds the open study with its history, applies edits, and keeps what is
// computed from the study up to date in the background.
//
// An edit makes a new immutable document with a new revision. A preview job
// builds the model and computes bands, the levels of the held k point and the
// like; it coalesces, so that a slider always shows the newest document that
// could be computed. Refining jobs follow when edits pause: bands at full
// resolution when the preview had to be coarse, densities of states, edges.
// They give way to newer ones and can be stopped. Each result remembers the
// model it was made from: what still fits is kept, what does not is marked
// stale until its successor replaces it whole. A document that cannot be built
// leaves the last good results in place.
//
// All methods belong to one goroutine, the one that Options.Post runs functions
// on. Snapshots are immutable and may be read anywhere; nobody may write to
// what they point to. Energies are in eV, lengths in Å, k points in fractions
// of the primitive reciprocal vectors, levels are counted from 0. Nothing here
// panics on input: whatever is wrong with an edit comes back as an error, with
// nothing changed, and whatever is wrong with a computation stands in the
// Snapshot.
package session
