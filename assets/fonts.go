package assets

import "embed"

// Fonts holds the font files of fonts/, named as there: Inter in four cuts for all text and DejaVu Sans for the signs
// that Inter lacks. Their licences lie beside them.
//
//go:embed fonts/*.otf fonts/*.ttf
var Fonts embed.FS
