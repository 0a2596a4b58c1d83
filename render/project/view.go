package project

import (
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/render/picture"
	"bandwright/render/scene"
)

// View maps between a scene and a rectangle of a picture.
type View struct {
	Camera scene.Camera
	Rect   picture.Rect

	right, up, towards mgl64.Vec3
	scale              float64 // points per scene length, at the depth of the target
	cx, cy             float64 // where the target stands
	eye                float64 // distance of the eye from the target along towards; 0 is orthographic
}

// NewView is what camera c sees in r.
func NewView(c scene.Camera, r picture.Rect) View {
	v := View{Camera: c, Rect: r}
	if c.Orientation.Len() == 0 {
		v.Camera.Orientation = mgl64.QuatIdent()
	}
	v.right, v.up, v.towards = v.Camera.Axes()
	half := 0.5 * min(r.W(), r.H())
	radius := c.Radius
	if !(radius > 0) {
		radius = 1
	}
	zoom := c.Zoom
	if !(zoom > 0) {
		zoom = 1
	}
	v.scale = half * scene.Margin * zoom / radius
	if c.Distance > 0 {
		d := max(c.Distance, scene.NearestEye)
		v.eye = d * radius
		v.scale *= math.Sqrt(d*d-1) / d // the ball of that radius still fits
	}
	m := r.Centre()
	v.cx, v.cy = m.X+half*c.ShiftX, m.Y+half*c.ShiftY
	return v
}

// nearest is how close to the eye, as a share of its distance, something may be and still be drawn.
const nearest = 0.02

func (v *View) camera(p mgl64.Vec3) (x, y, z float64) {
	q := p.Sub(v.Camera.Target)
	return v.right.Dot(q), v.up.Dot(q), v.towards.Dot(q)
}

// Project is where a scene point is seen, and its nearness. A point behind the eye is nowhere (NaN).
func (v *View) Project(p mgl64.Vec3) (at picture.Point, near float64) {
	x, y, z := v.camera(p)
	if v.eye == 0 {
		return picture.Pt(v.cx+v.scale*x, v.cy-v.scale*y), z
	}
	d := v.eye - z
	if !(d > nearest*v.eye) {
		return picture.Pt(math.NaN(), math.NaN()), math.NaN()
	}
	w := v.scale * v.eye / d
	return picture.Pt(v.cx+w*x, v.cy-w*y), 1 / d
}

// Scale is how many points a scene length has at the depth of the camera's target.
func (v *View) Scale() float64 { return v.scale }

// sight is the direction from p towards the eye, not normalised.
func (v *View) sight(p mgl64.Vec3) mgl64.Vec3 {
	if v.eye == 0 {
		return v.towards
	}
	return v.Eye().Sub(p)
}

// Eye is where a perspective camera stands; for an orthographic one, a place far along its axis.
func (v *View) Eye() mgl64.Vec3 {
	d := v.eye
	if d == 0 {
		d = 1e6 * max(v.Camera.Radius, 1e-300)
	}
	return v.Camera.Target.Add(v.towards.Mul(d))
}

// Ray is the line of sight through a point of the picture: a scene point on it and its direction away from the viewer, of
// length 1.
func (v *View) Ray(x, y float64) (origin, direction mgl64.Vec3) {
	a, b := (x-v.cx)/v.scale, (v.cy-y)/v.scale
	on := v.Camera.Target.Add(v.right.Mul(a)).Add(v.up.Mul(b))
	if v.eye == 0 {
		return on, v.towards.Mul(-1)
	}
	eye := v.Eye()
	return eye, on.Sub(eye).Normalize()
}

// Through is where the line of sight at a point of the picture enters the body and where it leaves it.
func (v *View) Through(b *scene.Polyhedron, x, y float64) (in, out mgl64.Vec3, ok bool) {
	o, d := v.Ray(x, y)
	t0, t1 := math.Inf(-1), math.Inf(1)
	if v.eye > 0 {
		t0 = 0
	}
	for i := range b.Faces {
		n := b.Normal(i)
		num, den := n.Dot(b.Vertices[b.Faces[i].Loop[0]].Sub(o)), n.Dot(d)
		switch {
		case den < 0:
			t0 = max(t0, num/den)
		case den > 0:
			t1 = min(t1, num/den)
		case num < 0:
			return in, out, false
		}
	}
	if !(t0 <= t1) || math.IsInf(t0, 0) || math.IsInf(t1, 0) {
		return in, out, false
	}
	return o.Add(d.Mul(t0)), o.Add(d.Mul(t1)), true
}

// Within is the scene point at a share t of the way from where the line of sight enters the body (0) to where it leaves
// it (1).
func (v *View) Within(b *scene.Polyhedron, x, y, t float64) (mgl64.Vec3, bool) {
	in, out, ok := v.Through(b, x, y)
	return in.Add(out.Sub(in).Mul(t)), ok
}

// Under is the face of the body that is seen at a point of the picture.
func (v *View) Under(b *scene.Polyhedron, x, y float64) (face int, ok bool) {
	in, _, ok := v.Through(b, x, y)
	if !ok {
		return 0, false
	}
	best := math.Inf(1)
	for i := range b.Faces {
		n := b.Normal(i)
		if n.Dot(v.sight(in)) <= 0 {
			continue
		}
		if d := math.Abs(n.Normalize().Dot(b.Vertices[b.Faces[i].Loop[0]].Sub(in))); d < best {
			face, best = i, d
		}
	}
	return face, !math.IsInf(best, 0)
}

// NearestMarker is the marker seen closest to a point of the picture, within tolerance points of its edge; of several
// equally close, the one nearest to the viewer.
func (v *View) NearestMarker(s *scene.Scene, x, y, tolerance float64) (index int, ok bool) {
	best, front := tolerance, math.Inf(-1)
	for i := range s.Markers {
		at, near := v.Project(s.Markers[i].At)
		d := max(0, math.Hypot(at.X-x, at.Y-y)-s.Markers[i].Look.Radius())
		if d < best-0.5 || d <= best && near > front {
			index, ok, best, front = i, true, d, near
		}
	}
	return index, ok
}

// NearestOn is the point of the line from a to b seen closest to a point of the picture, its share t of the way from a,
// and how far off it is in points.
func (v *View) NearestOn(a, b mgl64.Vec3, x, y float64) (p mgl64.Vec3, t, distance float64) {
	pa, na := v.Project(a)
	pb, nb := v.Project(b)
	dx, dy := pb.X-pa.X, pb.Y-pa.Y
	u := 0.0
	if l := dx*dx + dy*dy; l > 0 {
		u = max(0, min(1, ((x-pa.X)*dx+(y-pa.Y)*dy)/l))
	}
	t = u
	if v.eye > 0 { // shares on the screen are not shares in space
		t = u * nb / (na + u*(nb-na))
	}
	return a.Add(b.Sub(a).Mul(t)), t, math.Hypot(x-pa.X-u*dx, y-pa.Y-u*dy)
}

// NearestEdge is the edge of the body seen closest to a point of the picture within tolerance, the point on it and its
// share of the way; of several equally close, the one nearest to the viewer.
func (v *View) NearestEdge(b *scene.Polyhedron, x, y, tolerance float64) (edge [2]int, p mgl64.Vec3, t float64, ok bool) {
	best, front := tolerance, math.Inf(-1)
	for _, f := range b.Faces {
		for i, m := range f.Loop {
			n := f.Loop[(i+1)%len(f.Loop)]
			if m > n {
				continue
			}
			q, share, d := v.NearestOn(b.Vertices[m], b.Vertices[n], x, y)
			_, near := v.Project(q)
			if d < best-0.5 || d <= best && near > front {
				edge, p, t, ok, best, front = [2]int{m, n}, q, share, true, d, near
			}
		}
	}
	return edge, p, t, ok
}

// Leg is a place on a path of a scene.
type Leg struct {
	Path, Run, Leg int // Leg counts within its run
	Share          float64
	At             mgl64.Vec3
}

// NearestLeg is the place on a path seen closest to a point of the picture within tolerance points.
func (v *View) NearestLeg(s *scene.Scene, x, y, tolerance float64) (leg Leg, ok bool) {
	best, front := tolerance, math.Inf(-1)
	for i := range s.Paths {
		for j, run := range s.Paths[i].Runs {
			for k := 0; k+1 < len(run); k++ {
				q, t, d := v.NearestOn(run[k], run[k+1], x, y)
				_, near := v.Project(q)
				if d < best-0.5 || d <= best && near > front {
					leg, ok, best, front = Leg{i, j, k, t, q}, true, d, near
				}
			}
		}
	}
	return leg, ok
}
