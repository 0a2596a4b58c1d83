package scene

import (
	"fmt"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/render/mark"
	"bandwright/render/picture"
)

// Scene is what is seen. The zero Scene is empty.
type Scene struct {
	Paper   picture.Color // behind everything: what is hidden fades towards it
	Body    *Polyhedron   // the convex body that hides things; nil if there is none
	Inner   []Polyhedron  // further translucent convex bodies, usually inside Body
	Lines   []Line
	Paths   []Path
	Markers []Marker
}

// Polyhedron is a convex body; its edges are the sides of its faces.
type Polyhedron struct {
	ID       picture.ID // of its edges, and of faces without an ID of their own
	Vertices []mgl64.Vec3
	Faces    []Face
	Style    BodyStyle
}

// Face is one face; Loop runs counter-clockwise as seen from outside.
type Face struct {
	ID   picture.ID
	Loop []int
}

// BodyStyle says how a body is drawn. Faces turned to the light (upper left, towards the viewer) take Lit, those turned
// away Face; Back is for the faces on the far side. Hidden is the stroke of edges on the far side, usually dashed.
type BodyStyle struct {
	Face, Lit, Back picture.Color
	Edge, Hidden    picture.Stroke
}

// Label is the text beside an item, in the markup of package typeset. Labels of higher priority choose their place first.
type Label struct {
	Text     string
	Size     float64
	Bold     bool
	Italic   bool
	Color    picture.Color
	Priority int
}

// Line is a straight line, such as an axis. What the body hides of it is drawn with Behind; a zero Behind is Stroke faded
// towards the paper. Arrow is the length of a head at To in points; 0 is none. The label stands at To.
type Line struct {
	ID             picture.ID
	From, To       mgl64.Vec3
	Stroke, Behind picture.Stroke
	Arrow          float64
	Label          Label
}

// Path is a path of straight legs in unbroken runs. Legs gives each leg its own id, in order over all runs; where it is too
// short, ID serves. Arrow is the length of a direction arrow at the middle of each leg in points; 0 is none.
type Path struct {
	ID             picture.ID
	Legs           []picture.ID
	Runs           [][]mgl64.Vec3
	Stroke, Behind picture.Stroke
	Arrow          float64
}

// Marker is a sign at a place, with a label. Behind the body it fades towards the paper.
type Marker struct {
	ID    picture.ID
	At    mgl64.Vec3
	Look  mark.Look
	Label Label
}

// Normal is the outward normal of a face, of the length of twice its area (Newell's sum); zero if it has no area.
func (b *Polyhedron) Normal(face int) mgl64.Vec3 {
	var n mgl64.Vec3
	loop := b.Faces[face].Loop
	for i, v := range loop {
		p, q := b.Vertices[v], b.Vertices[loop[(i+1)%len(loop)]]
		n[0] += (p[1] - q[1]) * (p[2] + q[2])
		n[1] += (p[2] - q[2]) * (p[0] + q[0])
		n[2] += (p[0] - q[0]) * (p[1] + q[1])
	}
	return n
}

// Centre is the mean of the vertices.
func (b *Polyhedron) Centre() mgl64.Vec3 {
	var c mgl64.Vec3
	for _, v := range b.Vertices {
		c = c.Add(v)
	}
	if n := len(b.Vertices); n > 0 {
		c = c.Mul(1 / float64(n))
	}
	return c
}

// Radius is the distance of the farthest vertex from p.
func (b *Polyhedron) Radius(p mgl64.Vec3) (r float64) {
	for _, v := range b.Vertices {
		r = max(r, v.Sub(p).Len())
	}
	return r
}

// Check says what is wrong with the body: an index out of range, a face with less than three corners or seen from inside,
// a side that does not belong to exactly two faces.
func (b *Polyhedron) Check() error {
	sides := make(map[[2]int]int)
	c := b.Centre()
	for i, f := range b.Faces {
		if len(f.Loop) < 3 {
			return fmt.Errorf("face %d has %d corners, not three or more", i, len(f.Loop))
		}
		for j, v := range f.Loop {
			if v < 0 || v >= len(b.Vertices) {
				return fmt.Errorf("face %d names vertex %d of %d", i, v, len(b.Vertices))
			}
			w := f.Loop[(j+1)%len(f.Loop)]
			sides[[2]int{v, w}]++
		}
		if n := b.Normal(i); !(n.Dot(b.Vertices[f.Loop[0]].Sub(c)) > 0) {
			return fmt.Errorf("face %d does not run counter-clockwise as seen from outside", i)
		}
	}
	for s, n := range sides {
		if n != 1 || sides[[2]int{s[1], s[0]}] != 1 {
			return fmt.Errorf("the side between vertices %d and %d does not belong to two faces", s[0], s[1])
		}
	}
	return nil
}

// Bounds is the radius about p that holds the body, the inner bodies, the lines, the paths and the markers.
func (s *Scene) Bounds(p mgl64.Vec3) (r float64) {
	far := func(q mgl64.Vec3) {
		if d := q.Sub(p).Len(); d > r && d-d == 0 {
			r = d
		}
	}
	if s.Body != nil {
		r = max(r, s.Body.Radius(p))
	}
	for i := range s.Inner {
		r = max(r, s.Inner[i].Radius(p))
	}
	for i := range s.Lines {
		far(s.Lines[i].From)
		far(s.Lines[i].To)
	}
	for i := range s.Paths {
		for _, run := range s.Paths[i].Runs {
			for _, q := range run {
				far(q)
			}
		}
	}
	for i := range s.Markers {
		far(s.Markers[i].At)
	}
	return r
}
