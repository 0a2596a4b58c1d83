// Package present turns a state of the session into what is seen: pictures of
// the zone, bands, densities, Ladder and Ledger, the lines of text around
// them, and an index that tells what every drawn thing means.
//
// It is where physics meets drawing; it knows no window. Lengths in pictures
// are points, energies eV, k points fractions of the primitive reciprocal
// vectors. All functions only read their arguments, so that they can run
// outside the UI goroutine; the pictures returned belong to the caller.
package present
