package assets

import "embed"

// Icons holds the mark of the program: icons/bandwright-512.png and
// icons/bandwright-64.png, rendered from icons/bandwright.svg with
//
//	rsvg-convert -w 512 -h 512 icons/bandwright.svg -o icons/bandwright-512.png
//
//go:embed icons/*.png
var Icons embed.FS
