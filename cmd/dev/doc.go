// Command dev sets Bandwright up, runs it, tests it and measures it:
//
//	go run ./cmd/dev setup    install what is missing and build
//	go run ./cmd/dev run      build and open the window
//	go run ./cmd/dev test     every check, as continuous integration runs them
//	go run ./cmd/dev bench    measured speed beside LAPACK and numpy
//	go run ./cmd/dev shots    pictures of the window in several states
//
// It is plain standard library, so that it runs before anything is installed
// or downloaded: Go itself is all it needs. What it does to the machine is
// decided by functions that only look at a snapshot of it (planInstall,
// checkPlan) and is printed before it happens.
//
// The tests of this package also hold the rules of the repository: which
// package may import which, what may lie at the top level, that every package
// says its job in a doc.go, and that every font has its licence beside it.
package main
