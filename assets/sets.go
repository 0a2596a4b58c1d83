package assets

import "embed"

// Sets holds the shipped parameter sets: sets/FAMILY/NAME.toml, one file per
// set, in the form described in sets/README.md.
//
//go:embed sets
var Sets embed.FS
