package mark

import (
	"math"

	"bandwright/render/picture"
)

// Shape is the outline of a marker.
type Shape uint8

const (
	Circle Shape = iota
	Diamond
	Square
	TriangleUp
	TriangleDown
	Cross // two strokes, never filled
)

// Look says how a marker is drawn. Size is the diameter of the circle; the other shapes are sized to look equally heavy.
// A transparent Fill leaves the marker open.
type Look struct {
	Shape  Shape
	Size   float64
	Fill   picture.Color
	Stroke picture.Stroke
}

// Radius is how far the marker reaches from its middle, stroke included, in points.
func (l Look) Radius() float64 {
	r := l.Size / 2
	switch l.Shape {
	case Diamond:
		r *= 1.25
	case Square:
		r *= 1.2
	case TriangleUp, TriangleDown, Cross:
		r *= 1.2
	}
	return r + max(0, l.Stroke.Width)/2
}

// Outline adds the shape about (x, y) to a path.
func (l Look) Outline(path *picture.Path, x, y float64) {
	r := l.Size / 2
	switch l.Shape {
	case Circle:
		path.Circle(x, y, r)
	case Diamond:
		d := 1.25 * r
		path.Polygon(picture.Pt(x, y-d), picture.Pt(x+d, y), picture.Pt(x, y+d), picture.Pt(x-d, y))
	case Square:
		d := 0.886 * r // the area of the circle
		path.Rect(picture.Span(x-d, y-d, x+d, y+d))
	case TriangleUp, TriangleDown:
		s := 1.0
		if l.Shape == TriangleDown {
			s = -1
		}
		d := 1.2 * r
		path.Polygon(picture.Pt(x, y-s*d), picture.Pt(x+0.95*d, y+s*0.6*d), picture.Pt(x-0.95*d, y+s*0.6*d))
	case Cross:
		d := 0.8 * r
		path.Polyline(picture.Pt(x-d, y-d), picture.Pt(x+d, y+d))
		path.Polyline(picture.Pt(x-d, y+d), picture.Pt(x+d, y-d))
	}
}

// Draw draws the marker about (x, y). An open marker can be hit inside all the same.
func (l Look) Draw(p *picture.Picture, path *picture.Path, x, y float64) {
	path.Reset()
	l.Outline(path, x, y)
	if l.Shape != Cross {
		p.Fill(path, picture.Fill{Color: l.Fill})
	}
	p.Stroke(path, l.Stroke)
}

// Head adds a filled arrow head to a path: its tip at (x, y), pointing along (dx, dy), of the given length; its back is
// notched a little so that it stays sharp at small sizes. A direction of no length adds nothing.
func Head(path *picture.Path, x, y, dx, dy, length float64) {
	n := math.Hypot(dx, dy)
	if !(n > 0) || math.IsInf(n, 0) {
		return
	}
	dx, dy = dx/n, dy/n
	w := 0.38 * length
	bx, by := x-length*dx, y-length*dy
	path.Polygon(picture.Pt(x, y), picture.Pt(bx-w*dy, by+w*dx), picture.Pt(x-0.78*length*dx, y-0.78*length*dy), picture.Pt(bx+w*dy, by-w*dx))
}

// Mix is the colour a share t of the way from a to b, in sRGB values; alpha too.
func Mix(a, b picture.Color, t float64) picture.Color {
	m := func(x, y uint8) uint8 { return uint8(math.Round(float64(x) + t*(float64(y)-float64(x)))) }
	return picture.Color{R: m(a.R, b.R), G: m(a.G, b.G), B: m(a.B, b.B), A: m(a.A, b.A)}
}

// Fade is c with a share t of it lost to the paper behind it. It stays as opaque as it was, so that overlapping strokes
// do not show where they join.
func Fade(c, paper picture.Color, t float64) picture.Color {
	a := c.A
	c = Mix(c, paper, t)
	c.A = a
	return c
}
