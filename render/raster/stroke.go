package raster

import (
	"math"

	"bandwright/render/picture"
)

type point = picture.Point

// stroker adds the area of a stroked polyline to a cover. Every piece it adds turns the same way, so that overlaps sum to
// more than one and are cut off there: the union, without double blending.
//
// Along gentle turns neighbouring segments meet on the line that halves the angle: only the two sides need adding. At a
// sharp turn the segments end square and a wedge fills the gap outside.
type stroker struct {
	c     *cover
	half  float64 // half the width, pixels
	cap   picture.Cap
	join  picture.Join
	clean []point
	piece []point
}

// polygon adds a convex polygon, turned to the sense of the stroke's own pieces.
func (s *stroker) polygon(p ...point) {
	area := 0.0
	for i, a := range p {
		b := p[(i+1)%len(p)]
		area += a.X*b.Y - b.X*a.Y
	}
	for i, a := range p {
		b := p[(i+1)%len(p)]
		if area < 0 {
			s.c.line(b.X, b.Y, a.X, a.Y)
		} else {
			s.c.line(a.X, a.Y, b.X, b.Y)
		}
	}
}

// sector adds the part of a disc about o between the radii a and b (vectors of length half), the shorter way round.
func (s *stroker) sector(o, a, b point) {
	angle := math.Atan2(a.X*b.Y-a.Y*b.X, a.X*b.X+a.Y*b.Y)
	// A chord's distance from the arc is r(1 − cos(h/2)) ≤ 0.02 pixels.
	n := 1
	if s.half > 0.02 {
		n = max(1, min(90, int(math.Ceil(math.Abs(angle)/(2*math.Acos(1-0.02/s.half))))))
	}
	sin, cos := math.Sincos(angle / float64(n))
	edge := func(p, q point) {
		if angle < 0 {
			p, q = q, p
		}
		s.c.line(p.X, p.Y, q.X, q.Y)
	}
	r := a
	edge(o, picture.Pt(o.X+a.X, o.Y+a.Y))
	for i := 1; i <= n; i++ {
		q := picture.Pt(r.X*cos-r.Y*sin, r.X*sin+r.Y*cos)
		if i == n {
			q = b
		}
		edge(picture.Pt(o.X+r.X, o.Y+r.Y), picture.Pt(o.X+q.X, o.Y+q.Y))
		r = q
	}
	edge(picture.Pt(o.X+b.X, o.Y+b.Y), o)
}

// line strokes the polyline.
func (s *stroker) line(pts []point, closed bool) {
	p := s.clean[:0]
	for _, q := range pts {
		if n := len(p); n == 0 || math.Abs(q.X-p[n-1].X)+math.Abs(q.Y-p[n-1].Y) > 1e-6 {
			p = append(p, q)
		}
	}
	for closed && len(p) > 1 && math.Abs(p[0].X-p[len(p)-1].X)+math.Abs(p[0].Y-p[len(p)-1].Y) <= 1e-6 {
		p = p[:len(p)-1]
	}
	s.clean = p
	switch {
	case len(p) == 0:
		return
	case len(p) == 1:
		s.dot(p[0])
		return
	case len(p) == 2:
		closed = false
	}
	segments := len(p) - 1
	if closed {
		segments = len(p)
	}
	at := func(i int) point {
		if i >= len(p) {
			i -= len(p)
		}
		return p[i]
	}
	// Direction and length of a segment.
	way := func(i int) (d point, l float64) {
		a, b := at(i), at(i+1)
		d = picture.Pt(b.X-a.X, b.Y-a.Y)
		l = math.Sqrt(d.X*d.X + d.Y*d.Y)
		return picture.Pt(d.X/l, d.Y/l), l
	}
	d, l := way(0)
	// Left and right of the segment's start; left is (d.Y, −d.X).
	var left, right, firstLeft, firstRight point
	if closed {
		e, m := way(segments - 1)
		if k, gentle := s.gentle(e, m, d, l); gentle {
			left, right = s.corner(p[0], e, d, k)
		} else {
			s.turn(p[0], e, d)
			left, right = s.square(p[0], d)
			s.c.line(right.X, right.Y, left.X, left.Y)
		}
		firstLeft, firstRight = left, right
	} else {
		left, right = s.square(p[0], d)
		s.end(p[0], picture.Pt(-d.X, -d.Y))
		s.c.line(right.X, right.Y, left.X, left.Y)
	}
	for i := 0; i < segments; i++ {
		b := at(i + 1)
		var nl, nr point // left and right of the segment's end
		last := i == segments-1
		if last && !closed {
			nl, nr = s.square(b, d)
			s.c.line(nl.X, nl.Y, nr.X, nr.Y)
			s.end(b, d)
			s.sides(left, right, nl, nr)
			break
		}
		j := i + 1
		if j == segments {
			j = 0
		}
		e, m := way(j)
		if k, gentle := s.gentle(d, l, e, m); gentle {
			if last {
				nl, nr = firstLeft, firstRight
			} else {
				nl, nr = s.corner(b, d, e, k)
			}
			s.sides(left, right, nl, nr)
			left, right = nl, nr
		} else {
			nl, nr = s.square(b, d)
			s.c.line(nl.X, nl.Y, nr.X, nr.Y)
			s.sides(left, right, nl, nr)
			if !last {
				s.turn(b, d, e)
				left, right = s.square(b, e)
				s.c.line(right.X, right.Y, left.X, left.Y)
			}
		}
		d, l = e, m
	}
}

func (s *stroker) sides(left, right, nl, nr point) {
	s.c.line(left.X, left.Y, nl.X, nl.Y)
	s.c.line(nr.X, nr.Y, right.X, right.Y)
}

func (s *stroker) square(p, d point) (left, right point) {
	x, y := d.Y*s.half, -d.X*s.half
	return picture.Pt(p.X+x, p.Y+y), picture.Pt(p.X-x, p.Y-y)
}

// gentle says whether the turn from d to e can be taken on the line that halves the angle, and the factor on the sum of
// the two left vectors that leads there: 1/(1 + d·e).
func (s *stroker) gentle(d point, l float64, e point, m float64) (float64, bool) {
	c := d.X*e.X + d.Y*e.Y
	if c < 0.8 {
		return 0, false
	}
	// The corner moves back by half·tan(angle/2) along both segments.
	t := math.Abs(d.X*e.Y-d.Y*e.X) / (1 + c) * s.half
	return 1 / (1 + c), t < 0.5*l && t < 0.5*m
}

func (s *stroker) corner(p, d, e point, k float64) (left, right point) {
	x, y := (d.Y+e.Y)*k*s.half, -(d.X+e.X)*k*s.half
	return picture.Pt(p.X+x, p.Y+y), picture.Pt(p.X-x, p.Y-y)
}

// turn fills the outside of a sharp turn at p from direction d to e.
func (s *stroker) turn(p, d, e point) {
	cross, c := d.X*e.Y-d.Y*e.X, d.X*e.X+d.Y*e.Y
	h := s.half
	if cross < 0 {
		h = -h // the outside is on the right
	}
	a, b := picture.Pt(d.Y*h, -d.X*h), picture.Pt(e.Y*h, -e.X*h)
	pa, pb := picture.Pt(p.X+a.X, p.Y+a.Y), picture.Pt(p.X+b.X, p.Y+b.Y)
	switch {
	case s.join == picture.RoundJoin:
		s.sector(p, a, b)
		return
	// Miter length over width is 1/sin(inner angle/2), and sin² of it is (1 + cos of the turn)/2.
	case s.join == picture.Miter && (1+c)/2*picture.MiterLimit*picture.MiterLimit >= 1:
		k := 1 / (1 + c)
		s.polygon(p, pa, picture.Pt(p.X+(a.X+b.X)*k, p.Y+(a.Y+b.Y)*k), pb)
		return
	}
	s.polygon(p, pa, pb)
}

// end adds the cap at p, where the line leaves in direction d.
func (s *stroker) end(p, d point) {
	l, r := s.square(p, d)
	h := s.half
	switch s.cap {
	case picture.Square:
		s.polygon(l, picture.Pt(l.X+d.X*h, l.Y+d.Y*h), picture.Pt(r.X+d.X*h, r.Y+d.Y*h), r)
	case picture.Round:
		f := picture.Pt(d.X*h, d.Y*h)
		s.sector(p, picture.Pt(l.X-p.X, l.Y-p.Y), f)
		s.sector(p, f, picture.Pt(r.X-p.X, r.Y-p.Y))
	}
}

// dot is what a line without length draws: its caps.
func (s *stroker) dot(p point) {
	if s.cap != picture.Butt {
		s.end(p, picture.Pt(1, 0))
		s.end(p, picture.Pt(-1, 0))
	}
}

// dashes strokes the polyline in pieces. pattern is in pixels, on and off in turn; start is the place in it.
func (s *stroker) dashes(pts []point, closed bool, pattern []float64, start float64, view picture.Rect) {
	period := 0.0
	for _, v := range pattern {
		period += v
	}
	if period < 0.5 { // finer than anyone can see
		s.line(pts, closed)
		return
	}
	start = math.Mod(start, period)
	if start < 0 {
		start += period
	}
	k := 0
	for start > 0 && start >= pattern[k] {
		start -= pattern[k]
		k = (k + 1) % len(pattern)
	}
	left := pattern[k] - start // of the present dash or gap
	on := k%2 == 0
	n := len(pts)
	if closed {
		n++
	}
	piece := s.piece[:0]
	if on && len(pts) > 0 {
		piece = append(piece, pts[0])
	}
	flush := func() {
		if len(piece) > 0 {
			s.line(piece, false)
		}
		piece = piece[:0]
	}
	advance := func() {
		k = (k + 1) % len(pattern)
		on, left = k%2 == 0, pattern[k]
	}
	for i := 1; i < n; i++ {
		a, b := pts[i-1], pts[i%len(pts)]
		dx, dy := b.X-a.X, b.Y-a.Y
		length := math.Hypot(dx, dy)
		if length == 0 {
			continue
		}
		if length > 1e12*period {
			// The place in the pattern is beyond the digits of a number: the
			// line is drawn whole.
			flush()
			s.line([]point{a, b}, false)
			if on {
				piece = append(piece, b)
			}
			continue
		}
		done := 0.0
		// Of a segment far longer than the view only what can be seen is dashed, and the pattern goes on as if all were.
		from, to := within(a, b, view)
		skip := func(upTo float64) {
			if upTo-done < 16*period {
				return
			}
			flush()
			whole := math.Floor((upTo-done)/period) * period
			done += whole
			if on {
				piece = append(piece, picture.Pt(a.X+dx*done/length, a.Y+dy*done/length))
			}
		}
		skip(from * length)
		for done+left <= length {
			done += left
			q := picture.Pt(a.X+dx*done/length, a.Y+dy*done/length)
			if on {
				piece = append(piece, q)
				flush()
			}
			advance()
			if on {
				piece = append(piece, q)
			}
			if done > to*length {
				skip(length)
			}
		}
		left -= length - done
		if on {
			piece = append(piece, b)
		}
	}
	if on {
		flush()
	}
	s.piece = piece[:0]
}

// within is the part of the way from a to b, 0…1, that lies inside r; from > to never happens.
func within(a, b point, r picture.Rect) (from, to float64) {
	from, to = 0, 1
	cut := func(p, d, lo, hi float64) {
		if d == 0 {
			if p < lo || p > hi {
				from = 1
			}
			return
		}
		u, v := (lo-p)/d, (hi-p)/d
		if u > v {
			u, v = v, u
		}
		from, to = max(from, u), min(to, v)
	}
	cut(a.X, b.X-a.X, r.X0, r.X1)
	cut(a.Y, b.Y-a.Y, r.Y0, r.Y1)
	if from >= to {
		return 1, 1
	}
	return from, to
}
