package picture

import "math"

// Point is a place in points, y down.
type Point struct{ X, Y float64 }

// Pt is the point (x, y).
func Pt(x, y float64) Point { return Point{x, y} }

// Rect is the rectangle X0 ≤ x ≤ X1, Y0 ≤ y ≤ Y1 in points. It is empty when X1 < X0 or Y1 < Y0.
type Rect struct{ X0, Y0, X1, Y1 float64 }

// Nowhere is the empty rectangle that any union starts from.
var Nowhere = Rect{math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)}

// everywhere is the clip when there is none.
var everywhere = Rect{math.Inf(-1), math.Inf(-1), math.Inf(1), math.Inf(1)}

// R is the rectangle with a corner at x, y and the given width and height.
func R(x, y, width, height float64) Rect { return Rect{x, y, x + width, y + height} }

// Span is the rectangle between two corners in any order.
func Span(x0, y0, x1, y1 float64) Rect {
	return Rect{min(x0, x1), min(y0, y1), max(x0, x1), max(y0, y1)}
}

// W is the width.
func (r Rect) W() float64 { return r.X1 - r.X0 }

// H is the height.
func (r Rect) H() float64 { return r.Y1 - r.Y0 }

// Centre is the middle of the rectangle.
func (r Rect) Centre() Point { return Point{(r.X0 + r.X1) / 2, (r.Y0 + r.Y1) / 2} }

// Empty says whether no point lies in r.
func (r Rect) Empty() bool { return !(r.X0 <= r.X1 && r.Y0 <= r.Y1) }

// Contains says whether the point lies in r, border included.
func (r Rect) Contains(x, y float64) bool { return x >= r.X0 && x <= r.X1 && y >= r.Y0 && y <= r.Y1 }

// Inset is r with each side moved inwards by d (outwards if negative).
func (r Rect) Inset(d float64) Rect { return Rect{r.X0 + d, r.Y0 + d, r.X1 - d, r.Y1 - d} }

// Shift is r moved by dx, dy.
func (r Rect) Shift(dx, dy float64) Rect { return Rect{r.X0 + dx, r.Y0 + dy, r.X1 + dx, r.Y1 + dy} }

// Intersect is the part common to r and q; empty if there is none.
func (r Rect) Intersect(q Rect) Rect {
	return Rect{max(r.X0, q.X0), max(r.Y0, q.Y0), min(r.X1, q.X1), min(r.Y1, q.Y1)}
}

// Union is the smallest rectangle around r and q.
func (r Rect) Union(q Rect) Rect {
	if r.Empty() {
		return q
	}
	if q.Empty() {
		return r
	}
	return Rect{min(r.X0, q.X0), min(r.Y0, q.Y0), max(r.X1, q.X1), max(r.Y1, q.Y1)}
}

// Overlaps says whether r and q share more than a border.
func (r Rect) Overlaps(q Rect) bool {
	return r.X0 < q.X1 && q.X0 < r.X1 && r.Y0 < q.Y1 && q.Y0 < r.Y1
}

func (r Rect) with(p Point) Rect {
	return Rect{min(r.X0, p.X), min(r.Y0, p.Y), max(r.X1, p.X), max(r.Y1, p.Y)}
}

func (r Rect) distance(x, y float64) float64 {
	dx := max(r.X0-x, 0, x-r.X1)
	dy := max(r.Y0-y, 0, y-r.Y1)
	return math.Hypot(dx, dy)
}

// turned is the box around r turned by degrees about the origin o and moved there.
func (r Rect) turned(degrees float64, o Point) Rect {
	if degrees == 0 {
		return r.Shift(o.X, o.Y)
	}
	c, s := Turn(degrees)
	out := Nowhere
	for _, p := range [4]Point{{r.X0, r.Y0}, {r.X1, r.Y0}, {r.X0, r.Y1}, {r.X1, r.Y1}} {
		out = out.with(Point{o.X + c*p.X + s*p.Y, o.Y - s*p.X + c*p.Y})
	}
	return out
}

// Turn is the cosine and sine of an angle in degrees, exact at multiples of 90°. A vector (x, y) turned
// counter-clockwise as seen, y down, is (c·x + s·y, −s·x + c·y).
func Turn(degrees float64) (c, s float64) {
	switch math.Mod(math.Mod(degrees, 360)+360, 360) {
	case 0:
		return 1, 0
	case 90:
		return 0, 1
	case 180:
		return -1, 0
	case 270:
		return 0, -1
	}
	s, c = math.Sincos(degrees * math.Pi / 180)
	return c, s
}

func segmentDistance(p, a, b Point) float64 {
	dx, dy := b.X-a.X, b.Y-a.Y
	t := 0.0
	if l := dx*dx + dy*dy; l > 0 {
		t = min(1, max(0, ((p.X-a.X)*dx+(p.Y-a.Y)*dy)/l))
	}
	return math.Hypot(p.X-a.X-t*dx, p.Y-a.Y-t*dy)
}

// AppendCubic appends to dst points of the cubic Bézier curve from a to d with control points b and c, without a and with
// d, so that the polyline stays within tolerance of the curve. The number of steps follows from the bound on the second
// derivative, max|p″|·h²/8 ≤ tolerance with p″ ≤ 6·max(|a−2b+c|, |b−2c+d|).
func AppendCubic(dst []Point, a, b, c, d Point, tolerance float64) []Point {
	u := math.Hypot(a.X-2*b.X+c.X, a.Y-2*b.Y+c.Y)
	v := math.Hypot(b.X-2*c.X+d.X, b.Y-2*c.Y+d.Y)
	n := math.Ceil(math.Sqrt(0.75 * max(u, v) / tolerance))
	steps := 1
	if n > 1 {
		steps = int(min(n, 256))
	}
	for i := 1; i < steps; i++ {
		t := float64(i) / float64(steps)
		s := 1 - t
		w0, w1, w2, w3 := s*s*s, 3*s*s*t, 3*s*t*t, t*t*t
		dst = append(dst, Point{w0*a.X + w1*b.X + w2*c.X + w3*d.X, w0*a.Y + w1*b.Y + w2*c.Y + w3*d.Y})
	}
	return append(dst, d)
}
