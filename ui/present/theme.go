package present

import (
	"image/color"

	"bandwright/physics/hamiltonian"
)

// Theme is the colours of the window and its pictures, by role. Orbital
// colours keep the distances of the design: ΔE₀₀ ≥ 20 between any two under
// simulated colour blindness and 12 in lightness, tested in this package.
type Theme struct {
	Dark bool

	Paper  color.NRGBA // behind the panels
	Panel  color.NRGBA // of a panel
	Raised color.NRGBA // buttons, chips
	Ink    color.NRGBA // text, bands
	Soft   color.NRGBA // secondary text
	Faint  color.NRGBA // ticks, borders of plots
	Rule   color.NRGBA // hairlines
	Glow   color.NRGBA // behind the focused level

	Path     color.NRGBA // the k-path
	Held     color.NRGBA // the held k point and level
	Face     color.NRGBA // faces of the zone
	Wedge    color.NRGBA // the irreducible wedge
	Bonding  color.NRGBA // solid
	Against  color.NRGBA // antibonding: open and hatched
	OnSite   color.NRGBA
	Good     color.NRGBA
	Caution  color.NRGBA
	Bad      color.NRGBA
	Orbital  [4]color.NRGBA // by hamiltonian.AngularMomentum
	OrbitInk [4]color.NRGBA // text on the orbital colour
}

func rgb(v uint32) color.NRGBA {
	return color.NRGBA{R: uint8(v >> 16), G: uint8(v >> 8), B: uint8(v), A: 255}
}

func alpha(c color.NRGBA, a uint8) color.NRGBA { c.A = a; return c }

var white, black = rgb(0xffffff), rgb(0x101214)

// Light is the theme of paper.
func Light() *Theme {
	return &Theme{
		Paper: rgb(0xf1efe9), Panel: rgb(0xffffff), Raised: rgb(0xf7f5f0),
		Ink: rgb(0x1d2126), Soft: rgb(0x5f6670), Faint: rgb(0x9aa1aa), Rule: rgb(0xdcd9d0), Glow: rgb(0xfbf0d3),
		Path: rgb(0xc07f00), Held: rgb(0x16324f), Face: alpha(rgb(0x9fb3c4), 46), Wedge: alpha(rgb(0xe2a63b), 70),
		Bonding: rgb(0x1d3d68), Against: rgb(0xcf6f97), OnSite: rgb(0xa9afb7),
		Good: rgb(0x2b7a3d), Caution: rgb(0x8f5a00), Bad: rgb(0xb3261e),
		Orbital:  [4]color.NRGBA{rgb(0x3d8e9c), rgb(0x9e3f1c), rgb(0x352144), rgb(0xc8ab31)},
		OrbitInk: [4]color.NRGBA{white, white, white, black},
	}
}

// Night is the theme of a dark room.
func Night() *Theme {
	return &Theme{
		Dark:  true,
		Paper: rgb(0x14171b), Panel: rgb(0x1c2026), Raised: rgb(0x272c34),
		Ink: rgb(0xe9ebee), Soft: rgb(0xa3abb6), Faint: rgb(0x6f7883), Rule: rgb(0x343a43), Glow: rgb(0x3a3420),
		Path: rgb(0xe3a93c), Held: rgb(0x9cc7f5), Face: alpha(rgb(0x8fb0cc), 30), Wedge: alpha(rgb(0xe2a63b), 70),
		Bonding: rgb(0x93bee9), Against: rgb(0xd2386e), OnSite: rgb(0x7d8691),
		Good: rgb(0x7fce8f), Caution: rgb(0xe6b455), Bad: rgb(0xff8a80),
		Orbital:  [4]color.NRGBA{rgb(0x43c1d1), rgb(0xc75f28), rgb(0x5e4283), rgb(0xf1ebba)},
		OrbitInk: [4]color.NRGBA{black, black, white, black},
	}
}

// OrbitalColour returns the colour of a shell.
func (t *Theme) OrbitalColour(l hamiltonian.AngularMomentum) color.NRGBA { return t.Orbital[l] }
