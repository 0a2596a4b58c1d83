package project

import (
	"math"
	"testing"

	"github.com/go-gl/mathgl/mgl64"
	"pgregory.net/rapid"

	"bandwright/render/mark"
	"bandwright/render/picture"
	"bandwright/render/scene"
)

// octahedron is the truncated octahedron: all permutations of (0, ±1, ±2).
func octahedron() *scene.Polyhedron {
	b := &scene.Polyhedron{ID: 1}
	for _, perm := range [][3]int{{0, 1, 2}, {0, 2, 1}, {1, 0, 2}, {1, 2, 0}, {2, 0, 1}, {2, 1, 0}} {
		for s := range 4 {
			v := [3]float64{0, 1 - 2*float64(s&1), 2 - 4*float64(s>>1)}
			b.Vertices = append(b.Vertices, mgl64.Vec3{v[perm[0]], v[perm[1]], v[perm[2]]})
		}
	}
	var normals []mgl64.Vec3
	for i := range 3 {
		var n mgl64.Vec3
		n[i] = 1
		normals = append(normals, n, n.Mul(-1))
	}
	for s := range 8 {
		normals = append(normals, mgl64.Vec3{1 - 2*float64(s&1), 1 - 2*float64(s>>1&1), 1 - 2*float64(s>>2)})
	}
	for i, n := range normals {
		limit := 2.0
		if n.Dot(n) > 1 {
			limit = 3
		}
		var loop []int
		for j, v := range b.Vertices {
			if math.Abs(v.Dot(n)-limit) < 1e-9 {
				loop = append(loop, j)
			}
		}
		// Counter-clockwise about the outward normal.
		u := b.Vertices[loop[0]].Sub(n.Mul(limit / n.Dot(n))).Normalize()
		w := n.Normalize().Cross(u)
		angle := func(j int) float64 { return math.Atan2(b.Vertices[j].Dot(w), b.Vertices[j].Dot(u)) }
		for a := range loop {
			for c := a + 1; c < len(loop); c++ {
				if angle(loop[c]) < angle(loop[a]) {
					loop[a], loop[c] = loop[c], loop[a]
				}
			}
		}
		b.Faces = append(b.Faces, scene.Face{ID: picture.ID(100 + i), Loop: loop})
	}
	return b
}

func contained(p mgl64.Vec3) bool {
	x, y, z := math.Abs(p[0]), math.Abs(p[1]), math.Abs(p[2])
	return max(x, y, z) <= 2 && x+y+z <= 3
}

var area = picture.R(10, 20, 400, 300)

func anyCamera(t *rapid.T) scene.Camera {
	turn := rapid.Float64Range(-300, 300)
	c := scene.NewCamera(mgl64.Vec3{}, 2.4).Turned(turn.Draw(t, "dx"), turn.Draw(t, "dy"), area)
	c.Zoom = rapid.Float64Range(0.5, 2).Draw(t, "zoom")
	if rapid.Bool().Draw(t, "perspective") {
		c.Distance = rapid.Float64Range(2, 9).Draw(t, "distance")
	}
	return c
}

// The line of sight through the place where a point is seen meets the point;
// where it enters and leaves the body agrees with small steps along it.
func TestRaysMeetWhatIsSeen(t *testing.T) {
	body := octahedron()
	if err := body.Check(); err != nil {
		t.Fatal(err)
	}
	rapid.Check(t, func(t *rapid.T) {
		v := NewView(anyCamera(t), area)
		n := rapid.Float64Range(-2, 2)
		p := mgl64.Vec3{n.Draw(t, "x"), n.Draw(t, "y"), n.Draw(t, "z")}
		at, _ := v.Project(p)
		o, d := v.Ray(at.X, at.Y)
		if off := p.Sub(o).Cross(d).Len(); off > 1e-9 {
			t.Fatalf("the ray misses the point by %g", off)
		}
		in, out, ok := v.Through(body, at.X, at.Y)
		if !ok {
			if contained(p.Mul(1.001)) {
				t.Fatalf("the ray through %v misses the body", p)
			}
			return
		}
		for _, end := range []mgl64.Vec3{in, out} {
			if contained(end.Mul(1.0001)) || !contained(end.Mul(0.9999)) {
				t.Fatalf("%v is not on the surface", end)
			}
		}
		if in.Sub(out).Dot(d) > 1e-9 {
			t.Fatal("the ray leaves before it enters")
		}
		share := rapid.Float64Range(0, 1).Draw(t, "share")
		if q, ok := v.Within(body, at.X, at.Y, share); !ok || q.Sub(in.Add(out.Sub(in).Mul(share))).Len() > 1e-6 && v.Camera.Distance == 0 {
			t.Fatalf("at share %g: %v", share, q)
		}
		face, ok := v.Under(body, at.X, at.Y)
		if ok && math.Abs(body.Normal(face).Normalize().Dot(in.Sub(body.Vertices[body.Faces[face].Loop[0]]))) > 1e-6 {
			t.Fatalf("face %d is said to be at %v", face, in)
		}
	})
}

// renderer notes strokes and where they are.
type renderer struct {
	strokes []stroke
}
type stroke struct {
	id    picture.ID
	style picture.Stroke
	pts   []picture.Point
}

func (r *renderer) record(p *picture.Picture) {
	r.strokes = nil
	p.Replay(&tap{r: r})
}

// What the body hides of a line is drawn with the stroke for hidden parts, the
// rest with the other: against points along the line and their lines of sight.
func TestHiddenPartsAgainstRays(t *testing.T) {
	body := octahedron()
	solid := picture.Stroke{Color: picture.Color{R: 200, A: 255}, Width: 2}
	behind := picture.Stroke{Color: picture.Color{B: 200, A: 255}, Width: 1}
	rapid.Check(t, func(t *rapid.T) {
		c := anyCamera(t)
		n := rapid.Float64Range(-4, 4)
		a, b := mgl64.Vec3{n.Draw(t, "ax"), n.Draw(t, "ay"), n.Draw(t, "az")}, mgl64.Vec3{n.Draw(t, "bx"), n.Draw(t, "by"), n.Draw(t, "bz")}
		if c.Distance > 0 && c.Distance < 3.5 || a.Sub(b).Len() < 0.5 {
			return // points behind the eye have a test of their own
		}
		s := &scene.Scene{Body: body, Lines: []scene.Line{{ID: 7, From: a, To: b, Stroke: solid, Behind: behind}}}
		p := picture.New(420, 340)
		var pr Projector
		v := pr.Draw(p, s, c, area)
		var r renderer
		r.record(p)
		for i := range 40 {
			q := a.Add(b.Sub(a).Mul((float64(i) + 0.5) / 40))
			at, _ := v.Project(q)
			if !area.Inset(5).Contains(at.X, at.Y) {
				continue
			}
			in, _, hit := v.Through(body, at.X, at.Y)
			_, d := v.Ray(at.X, at.Y)
			depth := math.Inf(-1)
			if hit {
				depth = q.Sub(in).Dot(d)
				if math.Abs(depth) < 0.12 {
					continue // at the surface
				}
			}
			// What lies beyond the body is faded further: red means seen, blue hidden.
			seen, dimmed := false, false
			for _, st := range r.strokes {
				if st.id == 7 && on(st.pts, at) {
					seen, dimmed = seen || st.style.Color.R > 0, dimmed || st.style.Color.B > 0
				}
			}
			want := !(hit && depth > 0)
			if nearOutline(v, body, at) > 3 && (seen != want || dimmed == want) {
				t.Fatalf("at %v (hit %v, depth %.3f) the line is drawn as seen: %v, as hidden: %v", q, hit, depth, seen, dimmed)
			}
		}
	})
}

// nearOutline is how far, in points, a place is from the nearest edge.
func nearOutline(v View, b *scene.Polyhedron, at picture.Point) float64 {
	least := math.Inf(1)
	for _, f := range b.Faces {
		for i, j := range f.Loop {
			_, _, d := v.NearestOn(b.Vertices[j], b.Vertices[f.Loop[(i+1)%len(f.Loop)]], at.X, at.Y)
			least = min(least, d)
		}
	}
	return least
}

func on(pts []picture.Point, at picture.Point) bool {
	for i := 1; i < len(pts); i++ {
		a, b := pts[i-1], pts[i]
		dx, dy := b.X-a.X, b.Y-a.Y
		l := dx*dx + dy*dy
		if l == 0 {
			continue
		}
		t := max(0, min(1, ((at.X-a.X)*dx+(at.Y-a.Y)*dy)/l))
		if math.Hypot(at.X-a.X-t*dx, at.Y-a.Y-t*dy) < 0.3 {
			return true
		}
	}
	return false
}

func TestMarkersAndLegsArePicked(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := anyCamera(t)
		c.Distance = 0
		n := rapid.Float64Range(-2, 2)
		s := &scene.Scene{Body: octahedron()}
		for i := range 5 {
			s.Markers = append(s.Markers, scene.Marker{ID: picture.ID(10 + i), At: mgl64.Vec3{n.Draw(t, "x"), n.Draw(t, "y"), n.Draw(t, "z")}, Look: mark.Look{Size: 6}})
		}
		s.Paths = []scene.Path{{Runs: [][]mgl64.Vec3{{{0, 0, 0}, {0, 2, 0}, {1, 2, 0}}, {{0, 0, 0}, {1, 1, 1}}}}}
		v := NewView(c, area)
		at, _ := v.Project(s.Markers[3].At)
		i, ok := v.NearestMarker(s, at.X, at.Y, 3)
		if !ok {
			t.Fatal("no marker where one is")
		}
		if q, _ := v.Project(s.Markers[i].At); i != 3 && math.Hypot(q.X-at.X, q.Y-at.Y) > 6.01 {
			t.Fatalf("marker %d is %v away", i, q)
		}
		share := rapid.Float64Range(0.1, 0.9).Draw(t, "share")
		p := mgl64.Vec3{share, 2, 0}
		at, _ = v.Project(p)
		leg, ok := v.NearestLeg(s, at.X, at.Y, 2)
		if !ok {
			t.Fatal("no leg where one is")
		}
		if q, _ := v.Project(leg.At); math.Hypot(q.X-at.X, q.Y-at.Y) > 2.01 {
			t.Fatalf("the leg is picked at %v, not at %v", q, at)
		}
	})
}
