package project

import (
	"math"
	"slices"

	"bandwright/render/mark"
	"bandwright/render/picture"
)

type pieceKind uint8

const (
	linePiece pieceKind = iota
	markerPiece
)

// piece is a part of a line, or a marker, in one layer.
type piece struct {
	kind    pieceKind
	layer   layer
	id      picture.ID
	a, b    picture.Point
	na, nb  float64 // nearness at the ends
	reach   float64 // half the width, or the radius of the marker
	stroke  picture.Stroke
	look    mark.Look
	head    float64 // length of an arrow head; 0 is none
	headAt  picture.Point
	headDir picture.Point
	headTip bool
}

// mostCompared is how many pieces of a layer are compared one by one; more are sorted by their middles alone.
const mostCompared = 600

// ordering sorts pieces; it keeps its storage.
type ordering struct {
	nodes  []int
	before [][]int32 // pieces to be drawn after node i
	wait   []int32   // how many must be drawn before node i
	out    []int
}

// farToNear is the order to draw the pieces of a layer in: where two cross on the screen the nearer comes later; else those
// with farther middles come first. Straight pieces can in principle block each other in a circle; then the farthest middle
// goes first.
func (o *ordering) farToNear(pieces []piece, l layer, tol float64) []int {
	o.nodes, o.out = o.nodes[:0], o.out[:0]
	for i := range pieces {
		if pieces[i].layer == l {
			o.nodes = append(o.nodes, i)
		}
	}
	slices.SortStableFunc(o.nodes, func(i, j int) int {
		a, b := pieces[i].na+pieces[i].nb, pieces[j].na+pieces[j].nb
		switch {
		case a < b-tol:
			return -1
		case a > b+tol:
			return 1
		}
		return int(pieces[i].kind) - int(pieces[j].kind)
	})
	n := len(o.nodes)
	if n > mostCompared {
		return o.nodes
	}
	for len(o.before) < n {
		o.before = append(o.before, nil)
	}
	o.wait = slices.Grow(o.wait[:0], n)[:n]
	clear(o.wait)
	for i := range n {
		o.before[i] = o.before[i][:0]
	}
	for i := range n {
		for j := i + 1; j < n; j++ {
			switch compare(&pieces[o.nodes[i]], &pieces[o.nodes[j]], tol) {
			case -1: // i is farther
				o.before[i] = append(o.before[i], int32(j))
				o.wait[j]++
			case 1:
				o.before[j] = append(o.before[j], int32(i))
				o.wait[i]++
			}
		}
	}
	const done = -1
	for len(o.out) < n {
		next := -1
		for i := range n {
			if o.wait[i] == 0 {
				next = i
				break
			}
			if next < 0 && o.wait[i] > 0 {
				next = i // a circle, unless a free one follows
			}
		}
		o.wait[next] = done
		o.out = append(o.out, o.nodes[next])
		for _, j := range o.before[next] {
			if o.wait[j] > 0 {
				o.wait[j]--
			}
		}
	}
	return o.out
}

// compare says which of two pieces that meet on the screen is farther: −1 the first, 1 the second, 0 neither or they do
// not meet.
func compare(p, q *piece, tol float64) int {
	r := p.reach + q.reach
	if max(p.a.X, p.b.X)+r < min(q.a.X, q.b.X) || max(q.a.X, q.b.X)+r < min(p.a.X, p.b.X) ||
		max(p.a.Y, p.b.Y)+r < min(q.a.Y, q.b.Y) || max(q.a.Y, q.b.Y)+r < min(p.a.Y, p.b.Y) {
		return 0
	}
	switch {
	case p.kind == markerPiece && q.kind == markerPiece:
		if math.Hypot(p.a.X-q.a.X, p.a.Y-q.a.Y) >= r {
			return 0
		}
		return sign(p.na-q.na, tol)
	case p.kind == markerPiece:
		return -compareMarker(q, p, tol)
	case q.kind == markerPiece:
		return compareMarker(p, q, tol)
	}
	ux, uy := p.b.X-p.a.X, p.b.Y-p.a.Y
	vx, vy := q.b.X-q.a.X, q.b.Y-q.a.Y
	det := ux*vy - uy*vx
	if math.Abs(det) <= 1e-9*math.Hypot(ux, uy)*math.Hypot(vx, vy) {
		return 0
	}
	wx, wy := q.a.X-p.a.X, q.a.Y-p.a.Y
	s, t := (wx*vy-wy*vx)/det, (wx*uy-wy*ux)/det
	if s < 0 || s > 1 || t < 0 || t > 1 {
		return 0
	}
	return sign(p.na+s*(p.nb-p.na)-q.na-t*(q.nb-q.na), tol)
}

// compareMarker compares a line with a marker; a marker on a line comes after it.
func compareMarker(l, m *piece, tol float64) int {
	dx, dy := l.b.X-l.a.X, l.b.Y-l.a.Y
	t := 0.0
	if n := dx*dx + dy*dy; n > 0 {
		t = max(0, min(1, ((m.a.X-l.a.X)*dx+(m.a.Y-l.a.Y)*dy)/n))
	}
	if math.Hypot(m.a.X-l.a.X-t*dx, m.a.Y-l.a.Y-t*dy) >= l.reach+m.reach {
		return 0
	}
	// The line within the marker may come nearer than at its closest point: what counts is whether it passes in front of
	// the middle, so a line that ends in the marker stays under it.
	if s := sign(l.na+t*(l.nb-l.na)-m.na, tol); s > 0 && t > 0 && t < 1 {
		return 1
	}
	return -1
}

func sign(d, tol float64) int {
	switch {
	case d < -tol:
		return -1
	case d > tol:
		return 1
	}
	return 0
}
