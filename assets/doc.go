// Package assets holds the files that are built into the programs: fonts, the
// icon, parameter sets, tables of special points and example studies.
//
// It is data alone: whoever needs a file opens it by name and reads it with
// the package that knows its form. Every font lies beside its licence, and
// every table says where its figures come from. The embedded files are
// read-only and safe to use from any goroutine; nothing here panics. assets
// imports no other package of the module and may be imported by all of them.
package assets
