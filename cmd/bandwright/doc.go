// Command bandwright is the window: the first zone of a crystal beside its
// bands, densities and levels, and what every level is made of.
//
//	bandwright [flags] [STUDY]
//
// Without a study it opens on silicon. It exits with status 0 when the window
// was closed, 1 when it could not be opened, and 2 on wrong usage.
package main
