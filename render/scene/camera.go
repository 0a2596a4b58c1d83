package scene

import (
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/render/picture"
)

// Camera is where a scene is seen from. It is a value: each method returns the camera that results.
type Camera struct {
	Orientation mgl64.Quat // turns scene directions into camera directions; of unit length
	Target      mgl64.Vec3 // the scene point that turning leaves in place
	Radius      float64    // scene length about Target that fits the view at Zoom 1
	Zoom        float64    // magnification; 1 fits
	ShiftX      float64    // where Target stands, from the middle of the view, in half its smaller side; x right
	ShiftY      float64    // the same, y down
	Distance    float64    // of the eye from Target in radii for a perspective view; 0 is orthographic
}

// Limits of Zoom.
const (
	MinZoom = 0.05
	MaxZoom = 200
)

// NearestEye is the least Distance of a perspective view, in radii: closer, the eye would stand inside what it looks at.
const NearestEye = 1.25

// Margin is the share of the smaller half of the view that Radius takes at Zoom 1.
const Margin = 0.86

// NewCamera looks at target from the side a practitioner draws a zone from: x to the front left, y to the right, z up.
func NewCamera(target mgl64.Vec3, radius float64) Camera {
	c := Camera{Target: target, Radius: radius, Zoom: 1}
	return c.LookAlong(mgl64.Vec3{-1, -0.42, -0.36}, mgl64.Vec3{0, 0, 1})
}

// Turned is the camera after a drag by (dx, dy) points in view r: a ball of the size of what is seen rolls along under the
// pointer. The axis lies in the view and at right angles to the drag, so that no direction is special and nothing flips.
func (c Camera) Turned(dx, dy float64, r picture.Rect) Camera {
	ball := 0.5 * min(r.W(), r.H()) * Margin
	d := math.Hypot(dx, dy)
	if !(d > 0) || !(ball > 0) || math.IsInf(d, 0) {
		return c
	}
	return c.rotated(d/ball, mgl64.Vec3{dy / d, dx / d, 0})
}

// Rolled is the camera with the picture turned counter-clockwise by an angle in radians.
func (c Camera) Rolled(angle float64) Camera { return c.rotated(angle, mgl64.Vec3{0, 0, 1}) }

func (c Camera) rotated(angle float64, axis mgl64.Vec3) Camera {
	c.Orientation = mgl64.QuatRotate(angle, axis).Mul(c.Orientation).Normalize()
	return c
}

// Zoomed is the camera with everything magnified by factor, the scene point under the given point of view r staying where
// it is. Beyond the limits the zoom stops.
func (c Camera) Zoomed(factor float64, about picture.Point, r picture.Rect) Camera {
	if !(factor > 0) || math.IsInf(factor, 0) {
		return c
	}
	z := max(MinZoom, min(MaxZoom, c.Zoom*factor))
	f := z / c.Zoom
	half := 0.5 * min(r.W(), r.H())
	m := r.Centre()
	if half > 0 {
		x, y := (about.X-m.X)/half, (about.Y-m.Y)/half
		c.ShiftX, c.ShiftY = x+f*(c.ShiftX-x), y+f*(c.ShiftY-y)
	}
	c.Zoom = z
	return c
}

// Moved is the camera with the picture moved by (dx, dy) points in view r.
func (c Camera) Moved(dx, dy float64, r picture.Rect) Camera {
	if half := 0.5 * min(r.W(), r.H()); half > 0 && dx-dx == 0 && dy-dy == 0 {
		c.ShiftX += dx / half
		c.ShiftY += dy / half
	}
	return c
}

// Fitted is the camera with Target in the middle and Radius fitting the view, seen from the same side.
func (c Camera) Fitted() Camera {
	c.Zoom, c.ShiftX, c.ShiftY = 1, 0, 0
	return c
}

// LookAlong is the camera that looks along a scene direction with up pointing upwards as far as it can; any other up is
// chosen when up lies along the direction. A direction of no length changes nothing.
func (c Camera) LookAlong(direction, up mgl64.Vec3) Camera {
	n := direction.Len()
	if !(n > 0) || math.IsInf(n, 0) {
		return c
	}
	z := direction.Mul(-1 / n) // towards the viewer
	x := up.Cross(z)
	if !(x.Len() > 1e-9*up.Len()) || !(up.Len() > 0) {
		for _, other := range []mgl64.Vec3{{0, 0, 1}, {0, 1, 0}, {1, 0, 0}} {
			if x = other.Cross(z); x.Len() > 0.1 {
				break
			}
		}
	}
	x = x.Normalize()
	y := z.Cross(x)
	m := mgl64.Mat4FromRows(x.Vec4(0), y.Vec4(0), z.Vec4(0), mgl64.Vec4{0, 0, 0, 1})
	c.Orientation = mgl64.Mat4ToQuat(m).Normalize()
	return c
}

// Upright is the camera looking along the same direction, rolled so that up points upwards.
func (c Camera) Upright(up mgl64.Vec3) Camera { return c.LookAlong(c.Towards().Mul(-1), up) }

// Axes are the scene directions that point right, up and towards the viewer.
func (c Camera) Axes() (right, up, towards mgl64.Vec3) {
	q := c.Orientation.Conjugate()
	return q.Rotate(mgl64.Vec3{1, 0, 0}), q.Rotate(mgl64.Vec3{0, 1, 0}), q.Rotate(mgl64.Vec3{0, 0, 1})
}

// Towards is the scene direction that points at the viewer.
func (c Camera) Towards() mgl64.Vec3 { return c.Orientation.Conjugate().Rotate(mgl64.Vec3{0, 0, 1}) }

// Between is the camera a share t of the way from a to b, turning about one axis by the shorter way (Shoemake 1985) and
// zooming evenly.
func Between(a, b Camera, t float64) Camera {
	if !(t > 0) {
		return a
	}
	if t >= 1 {
		return b
	}
	lerp := func(x, y float64) float64 { return x + t*(y-x) }
	c := b
	c.Orientation = slerp(a.Orientation, b.Orientation, t)
	c.Target = a.Target.Add(b.Target.Sub(a.Target).Mul(t))
	c.Radius = lerp(a.Radius, b.Radius)
	c.Zoom = math.Exp(lerp(math.Log(a.Zoom), math.Log(b.Zoom)))
	c.ShiftX, c.ShiftY = lerp(a.ShiftX, b.ShiftX), lerp(a.ShiftY, b.ShiftY)
	if a.Distance > 0 && b.Distance > 0 {
		c.Distance = lerp(a.Distance, b.Distance)
	}
	return c
}

// Ease is the share of a movement done at share t of its time: it starts and ends at rest.
func Ease(t float64) float64 {
	t = max(0, min(1, t))
	return t * t * t * (t*(6*t-15) + 10)
}

func slerp(a, b mgl64.Quat, t float64) mgl64.Quat {
	d := a.Dot(b)
	if d < 0 { // q and −q are the same rotation
		b, d = b.Scale(-1), -d
	}
	if d > 1-1e-9 {
		return a.Add(b.Sub(a).Scale(t)).Normalize()
	}
	w := math.Acos(d)
	s := math.Sin(w)
	return a.Scale(math.Sin((1-t)*w) / s).Add(b.Scale(math.Sin(t*w) / s)).Normalize()
}
