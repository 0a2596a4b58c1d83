// Command bandcalc computes what the window shows, without a window: levels,
// Ledgers, bands, densities of states and band edges of a study, as CSV or
// JSON. It needs no C compiler.
//
//	bandcalc COMMAND [flags] STUDY
//
// It exits with status 0 when done, 1 when the input is at fault (what, where
// and what to do stand on standard error), and 2 on wrong usage.
package main
