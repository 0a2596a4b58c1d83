package present

import (
	"fmt"
	"math"
	"strings"
	"sync"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
	"bandwright/render/mark"
	"bandwright/render/picture"
	"bandwright/render/project"
	"bandwright/render/scene"
	"bandwright/render/typeset"
	"bandwright/ui/session"
)

// ZonePanel draws the Zone. It remembers where labels stood and the scene of
// the last snapshot, so that turning only projects. It may be used by one
// goroutine at a time; the zero value is ready.
type ZonePanel struct {
	mu        sync.Mutex
	projector project.Projector
	made      zoneKey
	scene     scene.Scene
}

type zoneKey struct {
	sn    *session.Snapshot
	theme *Theme
	wedge bool
}

// ZoneArea is the part of a Zone panel that shows the zone.
func ZoneArea(w, h float64) picture.Rect {
	return picture.Span(8, 44, max(9, w-24), max(45, h-44))
}

// reach is how far the axes stick out of the zone.
const reach = 1.22

// ZoneCamera is the camera of the view, fitted to the zone of the snapshot.
func ZoneCamera(sn *session.Snapshot, v *View) scene.Camera {
	c := v.Camera
	c.Target, c.Radius = mgl64.Vec3{}, 1
	if sn.Built != nil && sn.Built.Zone != nil {
		c.Radius = zoneRadius(sn) * 1.08
	}
	if c.Zoom == 0 {
		c.Zoom = 1
	}
	return c
}

func zoneRadius(sn *session.Snapshot) float64 {
	r := 0.0
	for _, p := range sn.Built.Zone.Vertices {
		r = max(r, p.Vec().Len())
	}
	return r
}

// ZoneView maps between the panel of a size and reciprocal space.
func ZoneView(sn *session.Snapshot, v *View, w, h float64) project.View {
	return project.NewView(ZoneCamera(sn, v), ZoneArea(w, h))
}

// ZoneBody is the first zone as a body to pick in; nil without one.
func ZoneBody(sn *session.Snapshot) *scene.Polyhedron {
	if sn.Built == nil || sn.Built.Zone == nil {
		return nil
	}
	z := sn.Built.Zone
	b := &scene.Polyhedron{}
	for _, p := range z.Vertices {
		b.Vertices = append(b.Vertices, p.Vec())
	}
	for i, f := range z.Faces {
		b.Faces = append(b.Faces, scene.Face{ID: Target{Kind: ZoneFace, I: i}.id(), Loop: f.Loop})
	}
	return b
}

// Draw draws the panel.
func (z *ZonePanel) Draw(sn *session.Snapshot, v *View, w, h float64) *picture.Picture {
	z.mu.Lock()
	defer z.mu.Unlock()
	t := v.Theme
	s := newSheet(t, w, h, "Zone", "drag turns · wheel zooms · click holds *k*")
	if sn.Built == nil || sn.Built.Zone == nil {
		s.message("The zone is not available until the crystal is.", ZoneArea(w, h), t.Soft)
		return s.Picture
	}
	if key := (zoneKey{sn, t, v.Wedge}); z.made != key {
		z.made = key
		z.scene = zoneScene(sn, t, v.Wedge)
	}
	all := z.scene
	if g := v.Glance; g.On {
		at := sn.Built.Crystal.Lattice().Cart(sn.Built.Zone.Fold(g.K)).Vec()
		all.Markers = append(all.Markers[:len(all.Markers):len(all.Markers)], scene.Marker{
			At: at,
			Look: mark.Look{Shape: mark.Circle, Size: 12, Fill: alpha(t.Held, 40),
				Stroke: picture.Stroke{Color: t.Held, Width: 1.6}},
		})
	}
	z.projector.Draw(s.Picture, &all, ZoneCamera(sn, v), ZoneArea(w, h))
	s.zoneFoot(sn, v, w, h)
	return s.Picture
}

// zoneFoot says where the pointer is, or else the held point.
func (s *sheet) zoneFoot(sn *session.Snapshot, v *View, w, h float64) {
	setting := sn.Built.Crystal.Setting
	frame := sn.Doc.View.Frame
	s.Begin("foot")
	defer s.End()
	if g := v.Glance; g.On {
		name := g.Note
		if name != "" {
			name += "  "
		}
		s.fit(name+"k = "+Coordinates(setting, frame, g.K)+" "+unit(frame), edgePad, h-26, textSize, s.t.Soft, w-2*edgePad)
	}
	held := "held"
	if sn.HeldLabel != "" {
		held += " " + sn.HeldLabel + " "
	}
	held += " k = " + Coordinates(setting, frame, sn.Doc.View.Held) + " " + unit(frame) + "  "
	if text := typeset.Layout(typeset.Escape(held)+barred(heldFacts(sn)), textSize, typeset.Style{}); text.Width <= w-2*edgePad {
		s.Text(text, edgePad, h-10, picture.TextStyle{Color: s.t.Ink})
	} else {
		s.fit(held+heldFacts(sn), edgePad, h-10, textSize, s.t.Ink, w-2*edgePad)
	}
}

// barred sets the rotoinversions of a point group's name with a bar above.
func barred(name string) string {
	for _, n := range []string{"1", "3", "4", "6"} {
		name = strings.ReplaceAll(name, "-"+n, "\\overline{"+n+"}")
	}
	return name
}

func unit(f lattice.Frame) string {
	switch f {
	case lattice.TwoPiOverA, lattice.InverseAngstrom:
		return FrameName(f)
	}
	return FrameName(f) + " cell"
}

func heldFacts(sn *session.Snapshot) string {
	facts := ""
	if sn.HeldCoGroup != "" {
		facts = "co-group " + sn.HeldCoGroup
	}
	if n := len(sn.HeldStar); n > 0 {
		if facts != "" {
			facts += ", "
		}
		facts += fmt.Sprintf("star of %d", n)
	}
	return facts
}

// zoneScene gathers what the Zone shows of a snapshot, but for the pointer.
func zoneScene(sn *session.Snapshot, t *Theme, wedge bool) scene.Scene {
	built := sn.Built
	l := built.Crystal.Lattice()
	body := ZoneBody(sn)
	body.Style = scene.BodyStyle{
		Face: t.Face, Lit: alpha(t.Face, t.Face.A*3/5), Back: alpha(t.Face, t.Face.A/2),
		Edge:   picture.Stroke{Color: mark.Mix(t.Ink, t.Panel, 0.25), Width: 1.3, Join: picture.RoundJoin, Cap: picture.Round},
		Hidden: picture.Stroke{Color: t.Faint, Width: 0.8, Dash: picture.Dash{On: 3.5, Off: 3}},
	}
	s := scene.Scene{Paper: t.Panel, Body: body}
	place := func(k lattice.FracK) mgl64.Vec3 { return l.Cart(built.Zone.Fold(k)).Vec() }

	if wedge {
		if part, err := built.Zone.Wedge(built.Group); err == nil {
			inner := scene.Polyhedron{Style: scene.BodyStyle{
				Face: t.Wedge, Lit: t.Wedge, Back: alpha(t.Wedge, t.Wedge.A/2),
				Edge:   picture.Stroke{Color: alpha(t.Wedge, 200), Width: 1},
				Hidden: picture.Stroke{Color: alpha(t.Wedge, 120), Width: 0.7, Dash: picture.Dash{On: 2, Off: 2}},
			}}
			for _, p := range part.Vertices {
				inner.Vertices = append(inner.Vertices, p.Vec())
			}
			for _, f := range part.Faces {
				inner.Faces = append(inner.Faces, scene.Face{Loop: f.Loop})
			}
			s.Inner = append(s.Inner, inner)
		}
	}
	s.Lines = zoneAxes(sn, t)

	// The path. Points outside the first zone are drawn where they are.
	leg := 0
	path := scene.Path{
		Stroke: picture.Stroke{Color: t.Path, Width: 2.6, Cap: picture.Round, Join: picture.RoundJoin},
		Behind: picture.Stroke{Color: mark.Fade(t.Path, t.Panel, 0.45), Width: 2, Cap: picture.Round, Join: picture.RoundJoin},
		Arrow:  8,
	}
	for _, run := range built.Path.Runs {
		var points []mgl64.Vec3
		for i, p := range run {
			points = append(points, l.Cart(p.K).Vec())
			if i > 0 {
				path.Legs = append(path.Legs, Target{Kind: PathLeg, I: leg}.id())
				leg++
			}
		}
		path.Runs = append(path.Runs, points)
	}
	s.Paths = append(s.Paths, path)

	s.Markers = zoneMarkers(sn, t, place)
	return s
}

// zoneAxes are the axes of the frame in which coordinates are shown.
func zoneAxes(sn *session.Snapshot, t *Theme) []scene.Line {
	built := sn.Built
	l := built.Crystal.Lattice()
	var directions [3]mgl64.Vec3
	names := [3]string{"*k*_{x}", "*k*_{y}", "*k*_{z}"}
	switch sn.Doc.View.Frame {
	case lattice.Primitive:
		for i := range directions {
			directions[i] = l.B(i).Normalize()
			names[i] = fmt.Sprintf("**b**_{%d}", i+1)
		}
	default:
		for i := range directions {
			directions[i][i] = 1
		}
	}
	r := zoneRadius(sn) * reach
	var lines []scene.Line
	for i, d := range directions {
		lines = append(lines, scene.Line{
			From: mgl64.Vec3{}, To: d.Mul(r),
			Stroke: picture.Stroke{Color: t.Soft, Width: 1},
			Behind: picture.Stroke{Color: t.Faint, Width: 0.6, Dash: picture.Dash{On: 2, Off: 3}},
			Arrow:  7,
			Label:  scene.Label{Text: names[i], Size: textSize, Color: t.Soft, Priority: 1},
		})
	}
	return lines
}

func zoneMarkers(sn *session.Snapshot, t *Theme, place func(lattice.FracK) mgl64.Vec3) []scene.Marker {
	built := sn.Built
	l := built.Crystal.Lattice()
	var list []scene.Marker
	for i, p := range built.Points {
		list = append(list, scene.Marker{
			ID: Target{Kind: SpecialPoint, I: i}.id(), At: l.Cart(p.K).Vec(),
			Look:  mark.Look{Shape: mark.Circle, Size: 8, Fill: t.Panel, Stroke: picture.Stroke{Color: t.Ink, Width: 1.5}},
			Label: scene.Label{Text: p.Label, Size: 14, Bold: true, Color: t.Ink, Priority: 5},
		})
	}
	if e := sn.Edges; e != nil {
		if e.CBM != nil {
			for j, k := range e.CBM.Star {
				list = append(list, scene.Marker{
					ID: Target{Kind: EdgePoint, I: int(ConductionBottom), J: j}.id(), At: place(k),
					Look: mark.Look{Shape: mark.TriangleDown, Size: 8, Fill: t.Panel, Stroke: picture.Stroke{Color: t.Against, Width: 1.5}},
				})
			}
		}
		if e.VBM != nil {
			for j, k := range e.VBM.Star {
				list = append(list, scene.Marker{
					ID: Target{Kind: EdgePoint, I: int(ValenceTop), J: j}.id(), At: place(k),
					Look: mark.Look{Shape: mark.TriangleUp, Size: 8, Fill: t.Bonding, Stroke: picture.Stroke{Color: t.Bonding, Width: 1}},
				})
			}
		}
	}
	for j, k := range sn.HeldStar {
		if at := place(k); at.Sub(place(sn.Doc.View.Held)).Len() > 1e-6*zoneRadius(sn) {
			list = append(list, scene.Marker{
				ID: Target{Kind: StarPoint, I: j}.id(), At: at,
				Look: mark.Look{Shape: mark.Diamond, Size: 5.5, Fill: t.Panel, Stroke: picture.Stroke{Color: t.Held, Width: 1.2}},
			})
		}
	}
	held := scene.Marker{
		ID: Target{Kind: HeldPoint}.id(), At: place(sn.Doc.View.Held),
		Look: mark.Look{Shape: mark.Diamond, Size: 9, Fill: t.Held, Stroke: picture.Stroke{Color: t.Panel, Width: 1}},
	}
	if !onSpecial(sn) {
		held.Label = scene.Label{Text: "*k*", Size: 13, Bold: true, Color: t.Held, Priority: 6}
	}
	return append(list, held)
}

// onSpecial says whether the held point bears the label of a special point of
// the zone already.
func onSpecial(sn *session.Snapshot) bool {
	held := sn.Built.Zone.Fold(sn.Doc.View.Held)
	for _, p := range sn.Built.Points {
		d := 0.0
		for i := range held {
			d = max(d, math.Abs(held[i]-p.K[i]))
		}
		if d < 1e-6 {
			return true
		}
	}
	return false
}
