package window

import (
	"fmt"
	"math"
	"time"

	"fyne.io/fyne/v2"
	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/render/picture"
	"bandwright/render/scene"
	"bandwright/ui/doc"
	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

func (w *Window) zoneHandler() view.Handler {
	return view.Handler{
		Hover: func(p view.Pointer) {
			w.v.Glance = w.zonePoint(p)
			w.drawZone()
			w.drawBands()
		},
		Leave: w.leave,
		Click: w.clickZone,
		Drag: func(p view.Pointer, dx, dy float64) {
			area := w.zoneArea()
			switch {
			case p.Ctrl:
				c := area.Centre()
				a, b := math.Atan2(p.Y-c.Y, p.X-c.X), math.Atan2(p.Y-dy-c.Y, p.X-dx-c.X)
				w.v.Camera = w.v.Camera.Rolled(b - a)
			case p.Shift:
				w.v.Camera = w.v.Camera.Moved(dx, dy, area)
			default:
				w.v.Camera = w.v.Camera.Turned(dx, dy, area)
			}
			w.v.Glance = present.Glance{}
			w.drawZone()
		},
		Drop: func(view.Pointer) { w.keepCamera() },
		Wheel: func(p view.Pointer, steps float64) {
			if p.Ctrl {
				w.setDepth(w.v.Depth - 0.05*steps)
				w.v.Glance = w.zonePoint(p)
				w.drawZone()
				return
			}
			w.v.Camera = w.v.Camera.Zoomed(math.Pow(1.12, steps), picture.Pt(p.X, p.Y), w.zoneArea())
			w.drawZone()
			w.keepCamera()
		},
		Key: w.key, Rune: w.rune,
	}
}

func (w *Window) zoneArea() picture.Rect {
	width, height := plotSize(w.zone)
	return present.ZoneArea(width, height)
}

// zonePoint is the k point that the pointer means in the Zone: a marker, a
// place on the path, or a point inside at the chosen depth.
func (w *Window) zonePoint(p view.Pointer) present.Glance {
	built := w.sn.Built
	if built == nil || built.Zone == nil {
		return present.Glance{}
	}
	found := func(k lattice.FracK, note string) present.Glance {
		g := present.Glance{On: true, K: k, Note: note}
		if b := w.sn.Bands; b != nil && b.Sampling != nil {
			if x, _, on := b.Sampling.Nearest(built.Crystal.Lattice(), k, 1e-6); on {
				g.X, g.OnPath = x, true
			}
		}
		return g
	}
	star := func(list []lattice.FracK, j int, note string) present.Glance {
		if j >= len(list) {
			return present.Glance{}
		}
		return found(built.Zone.Fold(list[j]), note)
	}
	switch t := present.TargetOf(p.ID); t.Kind {
	case present.SpecialPoint:
		if t.I < len(built.Points) {
			return found(built.Points[t.I].K, built.Points[t.I].Label)
		}
	case present.StarPoint:
		return star(w.sn.HeldStar, t.I, "star of the held point")
	case present.HeldPoint:
		return found(w.sn.Doc.View.Held, w.sn.HeldLabel)
	case present.EdgePoint:
		if e := w.sn.Edges; e != nil {
			if t.I == int(present.ValenceTop) && e.VBM != nil {
				return star(e.VBM.Star, t.J, "valence top")
			}
			if t.I == int(present.ConductionBottom) && e.CBM != nil {
				return star(e.CBM.Star, t.J, "conduction bottom")
			}
		}
	}
	width, height := plotSize(w.zone)
	v := present.ZoneView(w.sn, &w.v, width, height)
	l := built.Crystal.Lattice()
	if run := w.pathScene(); run != nil {
		if leg, ok := v.NearestLeg(run, p.X, p.Y, view.Reach); ok {
			k := l.Frac(lattice.CartK(leg.At))
			return found(k, w.placeName(k))
		}
	}
	if body := present.ZoneBody(w.sn); body != nil {
		if at, ok := v.Within(body, p.X, p.Y, w.v.Depth); ok {
			k := l.Frac(lattice.CartK(at))
			return found(k, w.placeName(k))
		}
	}
	return present.Glance{}
}

// pathScene is the path alone, to pick on.
func (w *Window) pathScene() *scene.Scene {
	built := w.sn.Built
	if built.PathErr != nil {
		return nil
	}
	l := built.Crystal.Lattice()
	s := &scene.Scene{Paths: []scene.Path{{}}}
	for _, run := range built.Path.Runs {
		var points []mgl64.Vec3
		for _, p := range run {
			points = append(points, l.Cart(p.K).Vec())
		}
		s.Paths[0].Runs = append(s.Paths[0].Runs, points)
	}
	return s
}

func (w *Window) clickZone(p view.Pointer) {
	if p.Double {
		w.lookAlongNearest()
		return
	}
	g := w.zonePoint(p)
	if !g.On {
		return
	}
	if w.picking {
		w.addToPath(g)
		return
	}
	w.do(session.Hold{K: g.K, Level: session.NearestEnergy})
}

// addToPath puts a picked point at the end of the path.
func (w *Window) addToPath(g present.Glance) {
	built := w.sn.Built
	if built == nil {
		return
	}
	label := ""
	for _, p := range built.Points {
		if p.Label == g.Note {
			label = p.Label
		}
	}
	if label == "" {
		label = present.Coordinates(built.Crystal.Setting, lattice.Primitive, g.K)
	}
	w.setPath(present.WithPoint(built.Path, path.Point{Label: label, K: g.K}))
}

func (w *Window) setDepth(d float64) {
	w.v.Depth = max(0, min(1, d))
	w.tools.show()
	w.say(fmt.Sprintf("Picks inside the zone go to %.0f %% of the way through.", 100*w.v.Depth))
}

// keepCamera makes the view of the zone part of the study.
func (w *Window) keepCamera() {
	c := w.v.Camera
	q := c.Orientation
	keep := [5]float64{q.W, q.V[0], q.V[1], q.V[2], c.Zoom}
	if keep == w.sn.Doc.View.Camera {
		return
	}
	w.do(session.SetView{Change: func(v doc.View) doc.View { v.Camera = keep; return v }})
}

// lookAlong turns the zone to be seen along a Cartesian direction.
func (w *Window) lookAlong(direction, up [3]float64) {
	to := w.v.Camera.LookAlong(mgl64.Vec3(direction), mgl64.Vec3(up))
	to.ShiftX, to.ShiftY = 0, 0
	w.turnTo(to)
}

// usualSide turns the zone back to where a study starts.
func (w *Window) usualSide() { w.turnTo(scene.NewCamera(mgl64.Vec3{}, 1)) }

// turnTo moves the camera in a short while, so that the eye can follow.
func (w *Window) turnTo(to scene.Camera) {
	if w.turning != nil {
		w.turning.Stop()
	}
	from := w.v.Camera
	w.turning = fyne.NewAnimation(260*time.Millisecond, func(t float32) {
		w.v.Camera = scene.Between(from, to, scene.Ease(float64(t)))
		w.drawZone()
		if t == 1 {
			w.keepCamera()
		}
	})
	w.turning.Curve = fyne.AnimationLinear
	w.turning.Start()
}

// lookAlongNearest looks along that of the directions ⟨100⟩, ⟨110⟩ and ⟨111⟩
// that is nearest to the line of sight.
func (w *Window) lookAlongNearest() {
	towards := w.v.Camera.Towards()
	var best mgl64.Vec3
	most := -2.0
	for x := -1.0; x <= 1; x++ {
		for y := -1.0; y <= 1; y++ {
			for z := -1.0; z <= 1; z++ {
				d := mgl64.Vec3{x, y, z}
				if d.Len() == 0 {
					continue
				}
				if c := d.Normalize().Dot(towards); c > most {
					most, best = c, d
				}
			}
		}
	}
	_, up, _ := w.v.Camera.Axes()
	// The camera looks against the direction that points at the viewer.
	w.lookAlong([3]float64{-best[0], -best[1], -best[2]}, [3]float64(up))
}
