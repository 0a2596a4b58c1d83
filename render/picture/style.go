package picture

import "image/color"

// Color is a colour with straight (not premultiplied) alpha in sRGB.
type Color = color.NRGBA

// Cap is the shape of the open ends of a stroke.
type Cap uint8

// Join is the shape of the corners of a stroke.
type Join uint8

const (
	Butt   Cap = iota // cut at the end point
	Round             // half a circle beyond it
	Square            // half a square beyond it
)

const (
	Miter      Join  = iota // pointed, cut off to a bevel beyond a miter limit of 4
	RoundJoin               // a circle about the corner
	BevelJoin               // cut across
	MiterLimit = 4.0        // miter length over stroke width beyond which a miter becomes a bevel
)

// Dash is a pattern along a stroke in points: On drawn, Off left out, then On2 and Off2 when given, and so on again.
// The zero Dash is a solid line. Phase is how far into the pattern each subpath starts.
type Dash struct{ On, Off, On2, Off2, Phase float64 }

// Solid says whether the dash leaves nothing out.
func (d Dash) Solid() bool {
	return !(d.On >= 0 && d.Off >= 0 && d.On2 >= 0 && d.Off2 >= 0 && d.Off+d.Off2 > 0 && d.On+d.On2+d.Off+d.Off2 < 1e9)
}

// Stroke says how a path is drawn. Width is in points; a width of zero or less draws nothing.
type Stroke struct {
	Color Color
	Width float64
	Dash  Dash
	Cap   Cap
	Join  Join
	// Crisp asks a pixel renderer to move upright and level lines onto its pixels, for axes, ticks and rules.
	Crisp bool
}

// Hatch is a pattern of parallel lines inside a fill: the mark that tells two fills apart without colour. The zero Hatch
// is none. Lines run at Angle, Spacing apart, and one of them passes through Origin (Append moves it along).
type Hatch struct {
	Color   Color
	Angle   float64 // degrees counter-clockwise as seen; 0 is level
	Spacing float64 // points between neighbouring lines
	Width   float64 // points
	Origin  Point
}

// None says whether there is nothing to draw.
func (h Hatch) None() bool { return !(h.Spacing > 0 && h.Width > 0) || h.Color.A == 0 }

// Fill says how the inside of a path is painted: first Color, then Hatch. Both transparent makes an area that is not seen
// but can be hit.
type Fill struct {
	Color   Color
	Hatch   Hatch
	EvenOdd bool // inside by the even–odd rule; otherwise by nonzero winding
	// Crisp asks a pixel renderer to move upright and level sides onto its pixels, for bars and panels.
	Crisp bool
}

// Font is the number of a font; package typeset says which.
type Font uint8

// Glyph is one shape of a font at its place relative to the origin of its Text.
type Glyph struct {
	Font  Font
	Index uint16  // number of the shape in the font
	X, Y  float64 // points; Y is the baseline, negative above
	Size  float64 // points per em
}

// Text is a laid-out line of text, its origin at the left end of the baseline. It must not be changed once made: many
// Pictures may share it.
type Text struct {
	Source  string // what it was made from, for dumps and for files that keep text
	Size    float64
	Glyphs  []Glyph
	Rules   []Rect  // bars over or under letters, relative to the origin
	Width   float64 // advance
	Ascent  float64 // reach above the baseline, points, positive
	Descent float64 // reach below the baseline, points, positive
	Cap     float64 // height of capitals, points: half of it is the optical middle
}

// Box is the rectangle of the text relative to its origin.
func (t *Text) Box() Rect { return Rect{0, -t.Ascent, t.Width, t.Descent} }

// Align says which place of a text lies at the given point.
type Align uint8

// Horizontal and vertical place, joined with |. The zero Align is the left end of the baseline.
const (
	Left     Align = 0
	Center   Align = 1
	Right    Align = 2
	Baseline Align = 0
	Middle   Align = 1 << 2 // half the height of capitals
	Top      Align = 2 << 2 // the ascent
	Bottom   Align = 3 << 2 // the descent
	CapTop   Align = 4 << 2 // the height of capitals
)

// Offset is the place of the origin of t relative to the point that a names.
func (a Align) Offset(t *Text) Point {
	var o Point
	switch a & 3 {
	case Center:
		o.X = -t.Width / 2
	case Right:
		o.X = -t.Width
	}
	switch a &^ 3 {
	case Middle:
		o.Y = t.Cap / 2
	case Top:
		o.Y = t.Ascent
	case Bottom:
		o.Y = -t.Descent
	case CapTop:
		o.Y = t.Cap
	}
	return o
}

// TextStyle says how a text is drawn. A Halo of the given width around the letters keeps them readable over lines.
type TextStyle struct {
	Color     Color
	Align     Align
	Angle     float64 // degrees counter-clockwise as seen; 90 reads upwards
	Halo      Color
	HaloWidth float64 // points on each side of the letter; 0 is none
}
