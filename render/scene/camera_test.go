package scene

import (
	"math"
	"testing"

	"github.com/go-gl/mathgl/mgl64"
	"pgregory.net/rapid"

	"bandwright/render/picture"
)

var view = picture.R(0, 0, 400, 300)

func turn(t *rapid.T, name string) float64 { return rapid.Float64Range(-200, 200).Draw(t, name) }

// However often the camera is turned, its orientation is a rotation, and small
// drags make small turns: nothing flips.
func TestTurningNeverFlips(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := NewCamera(mgl64.Vec3{}, 1)
		for range 200 {
			dx, dy := turn(t, "dx")/20, turn(t, "dy")/20
			next := c.Turned(dx, dy, view)
			if n := next.Orientation.Len(); math.Abs(n-1) > 1e-12 {
				t.Fatalf("the orientation has length %.15f", n)
			}
			// The angle between the two, from their scalar product.
			angle := 2 * math.Acos(min(1, math.Abs(c.Orientation.Dot(next.Orientation))))
			if way := math.Hypot(dx, dy); angle > way/40+1e-6 {
				t.Fatalf("a drag of %.2f points turns by %.3f", way, angle)
			}
			c = next
		}
	})
}

// A drag there and back along one line leaves the camera where it was.
func TestThereAndBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := NewCamera(mgl64.Vec3{}, 1).Turned(turn(t, "x"), turn(t, "y"), view)
		dx, dy := turn(t, "dx"), turn(t, "dy")
		back := c.Turned(dx, dy, view).Turned(-dx, -dy, view)
		if d := math.Abs(c.Orientation.Dot(back.Orientation)); math.Abs(d-1) > 1e-9 {
			t.Fatalf("there and back leaves a turn of cosine %.12f", d)
		}
	})
}

// The point under the pointer follows it: at the middle of the view a ball
// rolls by as much as the pointer moves.
func TestADragMovesWhatIsUnderIt(t *testing.T) {
	c := NewCamera(mgl64.Vec3{}, 1)
	_, _, front := c.Axes()
	after := c.Turned(5, 0, view)
	right, up, _ := after.Axes()
	if x := front.Dot(right); x <= 0 {
		t.Errorf("a drag to the right moves the front to %.3f", x)
	}
	if y := front.Dot(up); math.Abs(y) > 1e-9 {
		t.Errorf("a level drag moves the front up by %.3g", y)
	}
	_, up, _ = c.Turned(0, 5, view).Axes()
	if y := front.Dot(up); y >= 0 {
		t.Errorf("a drag downwards moves the front up by %.3f", y)
	}
}

func TestLookAlong(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.Float64Range(-1, 1)
		d, up := mgl64.Vec3{n.Draw(t, "x"), n.Draw(t, "y"), n.Draw(t, "z")}, mgl64.Vec3{0, 0, 1}
		if d.Len() < 0.1 {
			return
		}
		c := NewCamera(mgl64.Vec3{}, 1).LookAlong(d, up)
		if got := c.Towards().Dot(d.Normalize()); math.Abs(got+1) > 1e-9 {
			t.Fatalf("looking along %v the viewer stands at %v", d, c.Towards())
		}
		right, u, towards := c.Axes()
		if right.Cross(u).Sub(towards).Len() > 1e-9 {
			t.Fatal("the axes are not right-handed")
		}
		if math.Hypot(d[0], d[1]) > 0.05 && (u.Dot(up) < 0 || math.Abs(right.Dot(up)) > 1e-9) {
			t.Fatalf("up points to %v", u)
		}
	})
	c := NewCamera(mgl64.Vec3{}, 1)
	if c.LookAlong(mgl64.Vec3{}, mgl64.Vec3{0, 0, 1}) != c {
		t.Error("no direction changes the camera")
	}
}

func TestZoomKeepsThePointUnderThePointer(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := NewCamera(mgl64.Vec3{}, 1)
		at := picture.Pt(rapid.Float64Range(0, 400).Draw(t, "x"), rapid.Float64Range(0, 300).Draw(t, "y"))
		z := c.Zoomed(rapid.Float64Range(0.2, 5).Draw(t, "factor"), at, view)
		// In units of half the smaller side, what is seen at the pointer.
		seen := func(c Camera) (x, y float64) {
			return ((at.X-200)/150 - c.ShiftX) / c.Zoom, ((at.Y-150)/150 - c.ShiftY) / c.Zoom
		}
		x0, y0 := seen(c)
		x1, y1 := seen(z)
		if math.Hypot(x1-x0, y1-y0) > 1e-9 {
			t.Fatalf("under the pointer was (%g, %g), now (%g, %g)", x0, y0, x1, y1)
		}
	})
	c := NewCamera(mgl64.Vec3{}, 1)
	for range 1000 {
		c = c.Zoomed(1.5, picture.Pt(1, 1), view)
	}
	if c.Zoom > MaxZoom {
		t.Errorf("zoom %g", c.Zoom)
	}
}

func TestBetween(t *testing.T) {
	a := NewCamera(mgl64.Vec3{}, 1)
	b := a.Turned(100, -40, view)
	b.Zoom = 4
	if Between(a, b, 0) != a || Between(a, b, 1) != b {
		t.Error("the ends are not met")
	}
	m := Between(a, b, 0.5)
	angle := func(p, q Camera) float64 { return 2 * math.Acos(min(1, math.Abs(p.Orientation.Dot(q.Orientation)))) }
	if d := angle(a, m) - angle(m, b); math.Abs(d) > 1e-9 || math.Abs(m.Zoom-2) > 1e-9 {
		t.Errorf("the middle is %g off, zoom %g", d, m.Zoom)
	}
}

func TestCheckFindsFaults(t *testing.T) {
	cube := &Polyhedron{}
	for i := range 8 {
		cube.Vertices = append(cube.Vertices, mgl64.Vec3{float64(i & 1), float64(i >> 1 & 1), float64(i >> 2)})
	}
	for _, loop := range [][]int{{0, 2, 3, 1}, {4, 5, 7, 6}, {0, 1, 5, 4}, {2, 6, 7, 3}, {0, 4, 6, 2}, {1, 3, 7, 5}} {
		cube.Faces = append(cube.Faces, Face{Loop: loop})
	}
	if err := cube.Check(); err != nil {
		t.Errorf("a cube: %v", err)
	}
	for name, change := range map[string]func(*Polyhedron){
		"index":        func(b *Polyhedron) { b.Faces[0].Loop[0] = 9 },
		"inside out":   func(b *Polyhedron) { l := b.Faces[0].Loop; l[1], l[3] = l[3], l[1] },
		"missing face": func(b *Polyhedron) { b.Faces = b.Faces[:5] },
		"two corners":  func(b *Polyhedron) { b.Faces[0].Loop = b.Faces[0].Loop[:2] },
	} {
		b := &Polyhedron{Vertices: cube.Vertices}
		for _, f := range cube.Faces {
			b.Faces = append(b.Faces, Face{Loop: append([]int(nil), f.Loop...)})
		}
		change(b)
		if b.Check() == nil {
			t.Errorf("%s is not seen", name)
		}
	}
}
