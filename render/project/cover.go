package project

import (
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/render/scene"
)

// layer says where a piece lies with regard to the body.
type layer uint8

const (
	beyond  layer = iota // hidden, behind the whole body
	inside               // hidden by a front face, in the body or on a back face
	visible              // in front of the body, beside it, or on a front face
)

// slack is the tolerance of positions relative to the radius of the body: what lies on a face within it is on the face.
const slack = 1e-6

// grazing is the sine of the angle to the line of sight below which a face counts as seen from its edge, hence not seen.
const grazing = 1e-7

// plane is the half-space n·p ≤ c.
type plane struct {
	n mgl64.Vec3
	c float64
}

// edge is a side of a body with the faces it separates.
type edge struct {
	a, b        int
	left, right int // faces; right is −1 if the body does not close
}

// occluder is a body made ready for a view.
type occluder struct {
	body  *scene.Polyhedron
	faces []plane
	front []bool // per face
	edges []edge
	tol   float64
	hides []plane // bounds of what the body hides
}

// prepare computes what depends on the body and the view. Storage is reused.
func (o *occluder) prepare(b *scene.Polyhedron, v *View) {
	o.body = b
	o.faces, o.front, o.edges, o.hides = o.faces[:0], o.front[:0], o.edges[:0], o.hides[:0]
	if b == nil {
		return
	}
	centre := b.Centre()
	o.tol = slack * b.Radius(centre)
	for i := range b.Faces {
		n := b.Normal(i)
		if l := n.Len(); l > 0 {
			n = n.Mul(1 / l)
		}
		p := b.Vertices[b.Faces[i].Loop[0]]
		s := v.sight(p)
		o.faces = append(o.faces, plane{n, n.Dot(p)})
		o.front = append(o.front, n.Dot(s) > grazing*s.Len())
		for j, m := range b.Faces[i].Loop {
			o.side(m, b.Faces[i].Loop[(j+1)%len(b.Faces[i].Loop)], i)
		}
	}
	for i, f := range o.faces {
		if o.front[i] {
			o.hides = append(o.hides, plane{f.n, f.c - o.tol})
		}
	}
	for _, e := range o.edges {
		if e.right < 0 || o.front[e.left] == o.front[e.right] {
			continue
		}
		p := b.Vertices[e.a]
		n := b.Vertices[e.b].Sub(p).Cross(v.sight(p))
		l := n.Len()
		if !(l > 0) {
			continue
		}
		n = n.Mul(1 / l)
		if n.Dot(centre) > n.Dot(p) {
			n = n.Mul(-1)
		}
		o.hides = append(o.hides, plane{n, n.Dot(p) - o.tol})
	}
}

func (o *occluder) side(a, b, face int) {
	if a > b {
		a, b = b, a
	}
	for i := range o.edges {
		if e := &o.edges[i]; e.a == a && e.b == b {
			e.right = face
			return
		}
	}
	o.edges = append(o.edges, edge{a, b, face, -1})
}

// seen says whether an edge of the body is on its near side.
func (o *occluder) seen(e edge) bool { return o.front[e.left] || e.right >= 0 && o.front[e.right] }

// cut is the part of the line from a to b inside all half-spaces, each moved out by grow (Cyrus, Beck 1978).
func cut(planes []plane, a, b mgl64.Vec3, grow float64) (t0, t1 float64, ok bool) {
	t0, t1 = 0, 1
	for i := range planes {
		p := &planes[i]
		da, db := p.n.Dot(a)-p.c-grow, p.n.Dot(b)-p.c-grow
		switch {
		case da > 0 && db > 0:
			return 0, 0, false
		case da > 0:
			t0 = max(t0, da/(da-db))
		case db > 0:
			t1 = min(t1, da/(da-db))
		}
	}
	return t0, t1, t1 > t0
}

// where is the layer of a point.
func (o *occluder) where(p mgl64.Vec3) layer {
	if o.body == nil || len(o.hides) == 0 {
		return visible
	}
	for i := range o.hides {
		if o.hides[i].n.Dot(p) > o.hides[i].c {
			return visible
		}
	}
	for i := range o.faces {
		if o.faces[i].n.Dot(p) > o.faces[i].c+o.tol {
			return beyond
		}
	}
	return inside
}

// span is a part of a line from share t0 to t1 that lies in one layer.
type span struct {
	t0, t1 float64
	layer  layer
}

// spans appends the parts of the line from a to b, in order.
func (o *occluder) spans(dst []span, a, b mgl64.Vec3) []span {
	if o.body == nil || len(o.hides) == 0 {
		return append(dst, span{0, 1, visible})
	}
	h0, h1, hidden := cut(o.hides, a, b, 0)
	if !hidden {
		return append(dst, span{0, 1, visible})
	}
	add := func(t0, t1 float64, l layer) {
		if t1-t0 > 1e-9 {
			dst = append(dst, span{t0, t1, l})
		}
	}
	add(0, h0, visible)
	if i0, i1, in := cut(o.faces, a, b, o.tol); in && max(i0, h0) < min(i1, h1) {
		i0, i1 = max(i0, h0), min(i1, h1)
		add(h0, i0, beyond)
		add(i0, i1, inside)
		add(i1, h1, beyond)
	} else {
		add(h0, h1, beyond)
	}
	add(h1, 1, visible)
	if math.IsNaN(h0) || math.IsNaN(h1) {
		return dst[:0]
	}
	return dst
}
