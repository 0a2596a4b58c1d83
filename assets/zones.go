package assets

import "embed"

// Zones holds the tables of special points and standard paths:
// zones/special_points.toml.
//
//go:embed zones
var Zones embed.FS
