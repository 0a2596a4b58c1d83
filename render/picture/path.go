package picture

import "math"

// Verb says what a Path does with its next points.
type Verb uint8

const (
	MoveTo  Verb = iota // one point: start a new subpath there
	LineTo              // one point
	CubicTo             // three points: two controls and the end
	Close               // none: back to the start of the subpath
)

// Path is a sequence of subpaths of lines and cubic curves. The zero Path is empty and ready.
type Path struct {
	Verbs  []Verb
	Points []Point
	broken bool // a point was not finite: the next one starts a new subpath
}

// Reset empties the path and keeps its storage.
func (p *Path) Reset() { p.Verbs, p.Points, p.broken = p.Verbs[:0], p.Points[:0], false }

// Empty says whether nothing has been drawn.
func (p *Path) Empty() bool { return len(p.Verbs) == 0 }

func finite(x, y float64) bool { return x-x == 0 && y-y == 0 }

// MoveTo starts a new subpath.
func (p *Path) MoveTo(x, y float64) {
	if p.broken = !finite(x, y); p.broken {
		return
	}
	// Two moves in a row: the first draws nothing.
	if n := len(p.Verbs); n > 0 && p.Verbs[n-1] == MoveTo {
		p.Points[len(p.Points)-1] = Point{x, y}
		return
	}
	p.Verbs = append(p.Verbs, MoveTo)
	p.Points = append(p.Points, Point{x, y})
}

// LineTo adds a straight line.
func (p *Path) LineTo(x, y float64) {
	if !finite(x, y) {
		p.broken = true
		return
	}
	if p.broken {
		p.MoveTo(x, y)
		return
	}
	p.mustHaveStarted()
	p.Verbs = append(p.Verbs, LineTo)
	p.Points = append(p.Points, Point{x, y})
}

// CubicTo adds a cubic Bézier curve with controls (x1, y1), (x2, y2) and end (x, y).
func (p *Path) CubicTo(x1, y1, x2, y2, x, y float64) {
	if !finite(x1, y1) || !finite(x2, y2) || !finite(x, y) {
		p.broken = true
		return
	}
	if p.broken {
		p.MoveTo(x, y)
		return
	}
	p.mustHaveStarted()
	p.Verbs = append(p.Verbs, CubicTo)
	p.Points = append(p.Points, Point{x1, y1}, Point{x2, y2}, Point{x, y})
}

// QuadTo adds a quadratic Bézier curve, written as the cubic that is the same curve.
func (p *Path) QuadTo(x1, y1, x, y float64) {
	if p.broken || len(p.Points) == 0 {
		p.LineTo(x, y)
		return
	}
	a := p.Points[len(p.Points)-1]
	p.CubicTo(a.X+2*(x1-a.X)/3, a.Y+2*(y1-a.Y)/3, x+2*(x1-x)/3, y+2*(y1-y)/3, x, y)
}

// Close joins the subpath to its start.
func (p *Path) Close() {
	if n := len(p.Verbs); n > 0 && p.Verbs[n-1] != Close && p.Verbs[n-1] != MoveTo {
		p.Verbs = append(p.Verbs, Close)
	}
}

func (p *Path) mustHaveStarted() {
	if n := len(p.Verbs); n == 0 || p.Verbs[n-1] == Close {
		panic("picture: a path draws before its first MoveTo")
	}
}

// Polyline adds an open line through the points.
func (p *Path) Polyline(pts ...Point) {
	for i, q := range pts {
		if i == 0 {
			p.MoveTo(q.X, q.Y)
		} else {
			p.LineTo(q.X, q.Y)
		}
	}
}

// Polygon adds a closed line through the points.
func (p *Path) Polygon(pts ...Point) {
	p.Polyline(pts...)
	p.Close()
}

// Rect adds the border of r, clockwise as seen.
func (p *Path) Rect(r Rect) {
	p.MoveTo(r.X0, r.Y0)
	p.LineTo(r.X1, r.Y0)
	p.LineTo(r.X1, r.Y1)
	p.LineTo(r.X0, r.Y1)
	p.Close()
}

// circular is the distance of the controls, in radii, of the cubic that best follows a quarter of a circle:
// 4(√2 − 1)/3 (common practice; radial error 2.7e-4).
const circular = 0.5522847498307936

// RoundedRect adds the border of r with corners of the given radius.
func (p *Path) RoundedRect(r Rect, radius float64) {
	c := min(radius, r.W()/2, r.H()/2)
	if !(c > 0) {
		p.Rect(r)
		return
	}
	k := c * (1 - circular)
	p.MoveTo(r.X0+c, r.Y0)
	p.LineTo(r.X1-c, r.Y0)
	p.CubicTo(r.X1-k, r.Y0, r.X1, r.Y0+k, r.X1, r.Y0+c)
	p.LineTo(r.X1, r.Y1-c)
	p.CubicTo(r.X1, r.Y1-k, r.X1-k, r.Y1, r.X1-c, r.Y1)
	p.LineTo(r.X0+c, r.Y1)
	p.CubicTo(r.X0+k, r.Y1, r.X0, r.Y1-k, r.X0, r.Y1-c)
	p.LineTo(r.X0, r.Y0+c)
	p.CubicTo(r.X0, r.Y0+k, r.X0+k, r.Y0, r.X0+c, r.Y0)
	p.Close()
}

// Circle adds a circle about (x, y).
func (p *Path) Circle(x, y, radius float64) { p.Ellipse(x, y, radius, radius) }

// Ellipse adds an ellipse with axes along x and y.
func (p *Path) Ellipse(x, y, rx, ry float64) {
	kx, ky := rx*circular, ry*circular
	p.MoveTo(x+rx, y)
	p.CubicTo(x+rx, y+ky, x+kx, y+ry, x, y+ry)
	p.CubicTo(x-kx, y+ry, x-rx, y+ky, x-rx, y)
	p.CubicTo(x-rx, y-ky, x-kx, y-ry, x, y-ry)
	p.CubicTo(x+kx, y-ry, x+rx, y-ky, x+rx, y)
	p.Close()
}

// Arc adds an arc of a circle from one angle to another, in degrees counter-clockwise as seen; it starts a new subpath.
func (p *Path) Arc(x, y, radius, from, to float64) {
	steps := max(1, int(math.Ceil(math.Abs(to-from)/90)))
	if steps > 64 {
		steps = 64
	}
	h := (to - from) / float64(steps)
	k := radius * 4 / 3 * math.Tan(h*math.Pi/720)
	c, s := Turn(from)
	p.MoveTo(x+radius*c, y-radius*s)
	for i := 1; i <= steps; i++ {
		d, t := Turn(from + h*float64(i))
		p.CubicTo(x+radius*c-k*s, y-radius*s-k*c, x+radius*d+k*t, y-radius*t+k*d, x+radius*d, y-radius*t)
		c, s = d, t
	}
}

// Bounds is the box around all points and controls; Nowhere for an empty path.
func (p *Path) Bounds() Rect {
	r := Nowhere
	for _, q := range p.Points {
		r = r.with(q)
	}
	return r
}

// segments calls f for every straight piece of the path, curves followed within tolerance. With closed set, open
// subpaths are closed as a fill closes them.
func (p *Path) segments(tolerance float64, closed bool, f func(a, b Point)) {
	var store [64]Point
	var start, at Point
	i := 0
	for _, v := range p.Verbs {
		switch v {
		case MoveTo:
			if closed && at != start {
				f(at, start)
			}
			start, at = p.Points[i], p.Points[i]
			i++
		case LineTo:
			f(at, p.Points[i])
			at = p.Points[i]
			i++
		case CubicTo:
			for _, q := range AppendCubic(store[:0], at, p.Points[i], p.Points[i+1], p.Points[i+2], tolerance) {
				f(at, q)
				at = q
			}
			i += 3
		case Close:
			f(at, start)
			at = start
		}
	}
	if closed && at != start {
		f(at, start)
	}
}
