package project

import (
	"math"
	"sync"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/render/mark"
	"bandwright/render/picture"
	"bandwright/render/scene"
	"bandwright/render/typeset"
)

// How much of a colour is lost to the paper by what is hidden in the body and by what is hidden beyond it, and by the
// labels of both.
const (
	insideFade = 0.42
	beyondFade = 0.62
	labelFade  = 0.45
)

// Shares of the sizes of arrows.
const (
	shaftEnd   = 0.75 // where the shaft ends inside a head at its tip
	fullLeg    = 4.5  // a leg this many arrows long carries one of full size
	emptyLeg   = 2.0  // one shorter than this none
	shortShaft = 1.6  // an axis shorter than this many heads has a smaller one
)

// What labels would rather not cover, by weight.
const (
	avoidEdge   = 0.7
	avoidHidden = 0.2
	avoidLine   = 0.9
	avoidPath   = 1.2
)

// labelGap is the free space around the letters of a label, points.
const labelGap = 1.5

// Projector draws scenes. Its zero value is ready; keep one per view, so that labels stay where they were.
type Projector struct {
	mu     sync.Mutex
	view   View
	scene  *scene.Scene
	pic    *picture.Picture
	body   occluder
	inner  occluder
	pieces []piece
	order  ordering
	placer mark.Placer
	spans  []span
	labels []pending
	path   picture.Path
	placed []Label
}

// pending is a label given to the placer.
type pending struct {
	index int // in the placer
	id    picture.ID
	label *scene.Label
	text  *picture.Text
	layer layer
	at    picture.Point
}

// Label is where a label went.
type Label struct {
	ID     picture.ID
	Text   string
	Anchor picture.Point
	Box    picture.Rect // around its letters
	Hidden bool
	Placed bool // false: there was no free place
}

// Draw draws s as seen by c into the rectangle r of p, and returns the view for mapping points back. The groups of the
// picture are scene / faces, beyond, far, inside, near, visible, labels.
func (pr *Projector) Draw(p *picture.Picture, s *scene.Scene, c scene.Camera, r picture.Rect) View {
	pr.mu.Lock()
	defer pr.mu.Unlock()
	pr.view, pr.scene, pr.pic = NewView(c, r), s, p
	pr.pieces, pr.labels, pr.placed = pr.pieces[:0], pr.labels[:0], pr.placed[:0]
	pr.placer.Reset(r.Inset(2))
	pr.body.prepare(s.Body, &pr.view)

	p.Begin("scene")
	p.PushClip(r)
	pr.pick()
	pr.collect()
	pr.draw("beyond", beyond)
	pr.faces("far", false)
	p.Begin("inside")
	pr.innerFaces()
	pr.drawPieces(inside)
	p.End()
	pr.faces("near", true)
	pr.draw("visible", visible)
	pr.drawLabels()
	p.SetID(0)
	p.PopClip()
	p.End()
	pr.scene, pr.pic = nil, nil
	return pr.view
}

// Labels is where the labels of the last drawing went, appended to dst.
func (pr *Projector) Labels(dst []Label) []Label {
	pr.mu.Lock()
	defer pr.mu.Unlock()
	return append(dst, pr.placed...)
}

// Forget drops the memory of where labels stood.
func (pr *Projector) Forget() {
	pr.mu.Lock()
	defer pr.mu.Unlock()
	pr.placer.Forget()
}

func (pr *Projector) loop(b *scene.Polyhedron, face int) {
	pr.path.Reset()
	for i, m := range b.Faces[face].Loop {
		at, _ := pr.view.Project(b.Vertices[m])
		if i == 0 {
			pr.path.MoveTo(at.X, at.Y)
		} else {
			pr.path.LineTo(at.X, at.Y)
		}
	}
	pr.path.Close()
}

// pick lays unseen faces under everything, so that a pointer finds what is drawn on them first.
func (pr *Projector) pick() {
	b := pr.scene.Body
	if b == nil {
		return
	}
	pr.pic.Begin("faces")
	for i, f := range b.Faces {
		if !pr.body.front[i] {
			continue
		}
		id := f.ID
		if id == 0 {
			id = b.ID
		}
		if id == 0 {
			continue
		}
		pr.pic.SetID(id)
		pr.loop(b, i)
		pr.pic.Fill(&pr.path, picture.Fill{})
	}
	pr.pic.SetID(0)
	pr.pic.End()
}

// light is where light comes from in camera coordinates: from the upper left, over the viewer's shoulder.
var light = mgl64.Vec3{-0.42, 0.62, 0.66}.Normalize()

func (pr *Projector) shade(n mgl64.Vec3, st *scene.BodyStyle) picture.Color {
	if st.Lit == (picture.Color{}) {
		return st.Face
	}
	v := &pr.view
	d := light[0]*v.right.Dot(n) + light[1]*v.up.Dot(n) + light[2]*v.towards.Dot(n)
	return mark.Mix(st.Face, st.Lit, max(0, min(1, 0.5+0.62*d)))
}

// faces draws the far or the near faces of the body and the edges of that side.
func (pr *Projector) faces(group string, near bool) {
	b := pr.scene.Body
	if b == nil {
		return
	}
	p := pr.pic
	p.Begin(group)
	for i := range b.Faces {
		if pr.body.front[i] != near {
			continue
		}
		c := b.Style.Back
		if near {
			c = pr.shade(pr.body.faces[i].n, &b.Style)
		}
		if c.A > 0 {
			pr.loop(b, i)
			p.Fill(&pr.path, picture.Fill{Color: c})
		}
	}
	p.SetID(b.ID)
	stroke := b.Style.Hidden
	weight := avoidHidden
	if near {
		stroke, weight = b.Style.Edge, avoidEdge
	}
	for _, e := range pr.body.edges {
		if pr.body.seen(e) != near {
			continue
		}
		a, _ := pr.view.Project(b.Vertices[e.a])
		c, _ := pr.view.Project(b.Vertices[e.b])
		p.Line(a.X, a.Y, c.X, c.Y, stroke)
		pr.placer.Avoid(a, c, weight)
	}
	p.SetID(0)
	p.End()
}

// innerFaces fills the faces of the inner bodies, far ones first; their edges are among the pieces.
func (pr *Projector) innerFaces() {
	for i := range pr.scene.Inner {
		b := &pr.scene.Inner[i]
		pr.inner.prepare(b, &pr.view)
		for _, near := range [2]bool{false, true} {
			for j := range b.Faces {
				if pr.inner.front[j] != near {
					continue
				}
				c := b.Style.Back
				if near {
					c = pr.shade(pr.inner.faces[j].n, &b.Style)
				}
				if c.A == 0 {
					continue
				}
				pr.pic.SetID(b.Faces[j].ID)
				pr.loop(b, j)
				pr.pic.Fill(&pr.path, picture.Fill{Color: c})
			}
		}
	}
	pr.pic.SetID(0)
}

// dim is the stroke of a piece in a layer.
func (pr *Projector) dim(s, behind picture.Stroke, l layer) picture.Stroke {
	switch {
	case l == visible:
		return s
	case behind.Width > 0:
		s = behind
		if l == inside {
			return s
		}
		s.Color = mark.Fade(s.Color, pr.scene.Paper, beyondFade-insideFade)
		return s
	case l == inside:
		s.Color = mark.Fade(s.Color, pr.scene.Paper, insideFade)
	default:
		s.Color = mark.Fade(s.Color, pr.scene.Paper, beyondFade)
	}
	return s
}

func (pr *Projector) collect() {
	s := pr.scene
	for i := range s.Inner {
		b := &s.Inner[i]
		pr.inner.prepare(b, &pr.view)
		for _, e := range pr.inner.edges {
			st := b.Style.Edge
			if !pr.inner.seen(e) {
				st = b.Style.Hidden
			}
			pr.line(b.ID, b.Vertices[e.a], b.Vertices[e.b], st, picture.Stroke{}, arrow{}, avoidHidden)
		}
	}
	for i := range s.Lines {
		l := &s.Lines[i]
		from, _ := pr.view.Project(l.From)
		tip, _ := pr.view.Project(l.To)
		var a arrow
		if l.Arrow > 0 {
			length := math.Hypot(tip.X-from.X, tip.Y-from.Y)
			a = arrow{at: 1, size: min(l.Arrow, length/shortShaft)}
		}
		pr.line(l.ID, l.From, l.To, l.Stroke, l.Behind, a, avoidLine)
		if l.Label.Text != "" {
			pr.label(l.ID, l.To, tip, 2.5, &l.Label, picture.Pt(tip.X-from.X, tip.Y-from.Y))
		}
	}
	for i := range s.Paths {
		pr.collectPath(&s.Paths[i])
	}
	centre := picture.Pt(pr.view.cx, pr.view.cy)
	for i := range s.Markers {
		m := &s.Markers[i]
		at, near := pr.view.Project(m.At)
		if !finite(at) {
			continue
		}
		r := m.Look.Radius()
		pr.pieces = append(pr.pieces, piece{kind: markerPiece, layer: pr.body.where(m.At), id: m.ID, a: at, b: at, na: near, nb: near,
			reach: r, look: m.Look})
		pr.placer.Block(picture.Rect{X0: at.X - r, Y0: at.Y - r, X1: at.X + r, Y1: at.Y + r})
		if m.Label.Text != "" {
			pr.label(m.ID, m.At, at, r, &m.Label, picture.Pt(at.X-centre.X, at.Y-centre.Y))
		}
	}
}

func (pr *Projector) collectPath(l *scene.Path) {
	n := 0
	for _, run := range l.Runs {
		for k := 0; k+1 < len(run); k++ {
			id := l.ID
			if n < len(l.Legs) {
				id = l.Legs[n]
			}
			n++
			var a arrow
			if l.Arrow > 0 {
				p, _ := pr.view.Project(run[k])
				q, _ := pr.view.Project(run[k+1])
				length := math.Hypot(q.X-p.X, q.Y-p.Y) / l.Arrow
				a = arrow{at: 0.5, size: l.Arrow * max(0, min(1, (length-emptyLeg)/(fullLeg-emptyLeg)))}
			}
			pr.line(id, run[k], run[k+1], l.Stroke, l.Behind, a, avoidPath)
		}
	}
}

// arrow is a head on a line: at its end (at = 1) or with its middle at a share of the way.
type arrow struct {
	at   float64
	size float64
}

// line cuts a line into pieces by layer.
func (pr *Projector) line(id picture.ID, a, b mgl64.Vec3, s, behind picture.Stroke, h arrow, weight float64) {
	if pr.view.eye > 0 { // leave out what is at or behind the eye
		limit := pr.view.Camera.Target.Dot(pr.view.towards) + (1-2*nearest)*pr.view.eye
		t0, t1, ok := cut([]plane{{pr.view.towards, limit}}, a, b, 0)
		if !ok {
			return
		}
		d := b.Sub(a)
		a, b = a.Add(d.Mul(t0)), a.Add(d.Mul(t1))
		if t1 < 1 {
			h.size = 0
		}
	}
	from, _ := pr.view.Project(a)
	to, _ := pr.view.Project(b)
	if !finite(from) || !finite(to) {
		return
	}
	pr.placer.Avoid(from, to, weight)
	pr.spans = pr.body.spans(pr.spans[:0], a, b)
	d := b.Sub(a)
	for _, sp := range pr.spans {
		p, np := pr.view.Project(a.Add(d.Mul(sp.t0)))
		q, nq := pr.view.Project(a.Add(d.Mul(sp.t1)))
		if sp.t0 == 0 {
			p = from
		}
		if sp.t1 == 1 {
			q = to
		}
		c := piece{kind: linePiece, layer: sp.layer, id: id, a: p, b: q, na: np, nb: nq, stroke: pr.dim(s, behind, sp.layer)}
		c.reach = c.stroke.Width / 2
		if h.size > 0 && h.at > sp.t0 && h.at <= sp.t1 {
			c.head = h.size
			c.headDir = picture.Pt(to.X-from.X, to.Y-from.Y)
			m, _ := pr.view.Project(a.Add(d.Mul(h.at)))
			if c.headTip = h.at == 1; !c.headTip {
				l := math.Hypot(c.headDir.X, c.headDir.Y)
				m.X += 0.5 * h.size * c.headDir.X / l
				m.Y += 0.5 * h.size * c.headDir.Y / l
			}
			c.headAt = m
		}
		pr.pieces = append(pr.pieces, c)
	}
}

func finite(p picture.Point) bool { return p.X-p.X == 0 && p.Y-p.Y == 0 }

// label gives a label to the placer.
func (pr *Projector) label(id picture.ID, p mgl64.Vec3, at picture.Point, clear float64, l *scene.Label, toward picture.Point) {
	if !finite(at) || !pr.view.Rect.Contains(at.X, at.Y) {
		return
	}
	t := typeset.Layout(l.Text, l.Size, typeset.Style{Bold: l.Bold, Italic: l.Italic})
	n := pr.placer.Add(mark.Label{Key: labelKey(id, l.Text), Anchor: at, Clear: clear, Text: t, Priority: l.Priority, Toward: toward, Pad: labelGap})
	pr.labels = append(pr.labels, pending{n, id, l, t, pr.body.where(p), at})
}

// labelKey tells labels apart from drawing to drawing, by id and text (FNV-1a).
func labelKey(id picture.ID, text string) uint64 {
	h := uint64(14695981039346656037)
	for i := range 4 {
		h = (h ^ uint64(byte(id>>(8*i)))) * 1099511628211
	}
	for i := range len(text) {
		h = (h ^ uint64(text[i])) * 1099511628211
	}
	return h | 1
}

func (pr *Projector) draw(group string, l layer) {
	pr.pic.Begin(group)
	pr.drawPieces(l)
	pr.pic.End()
}

func (pr *Projector) drawPieces(l layer) {
	p := pr.pic
	for _, i := range pr.order.farToNear(pr.pieces, l, pr.near()) {
		c := &pr.pieces[i]
		p.SetID(c.id)
		if c.kind == markerPiece {
			look := c.look
			if fade := [...]float64{beyond: beyondFade, inside: insideFade, visible: 0}[l]; fade > 0 {
				look.Fill = mark.Fade(look.Fill, pr.scene.Paper, fade)
				look.Stroke.Color = mark.Fade(look.Stroke.Color, pr.scene.Paper, fade)
			}
			look.Draw(p, &pr.path, c.a.X, c.a.Y)
			continue
		}
		b := c.b
		if c.head > 0 && c.headTip { // the shaft ends inside its head
			if n := math.Hypot(c.headDir.X, c.headDir.Y); n > 0 {
				k := min(shaftEnd*c.head, math.Hypot(b.X-c.a.X, b.Y-c.a.Y)) / n
				b.X -= k * c.headDir.X
				b.Y -= k * c.headDir.Y
			}
		}
		p.Line(c.a.X, c.a.Y, b.X, b.Y, c.stroke)
		if c.head > 0 {
			pr.path.Reset()
			mark.Head(&pr.path, c.headAt.X, c.headAt.Y, c.headDir.X, c.headDir.Y, c.head)
			p.Fill(&pr.path, picture.Fill{Color: c.stroke.Color})
		}
	}
	p.SetID(0)
}

// near is the tolerance of nearness: what differs less lies at the same depth.
func (pr *Projector) near() float64 {
	r := slack * max(pr.view.Camera.Radius, 1e-300)
	if pr.view.eye > 0 {
		return r / (pr.view.eye * pr.view.eye)
	}
	return r
}

func (pr *Projector) drawLabels() {
	p := pr.pic
	p.Begin("labels")
	placed := pr.placer.Solve()
	for i := range pr.labels {
		l := &pr.labels[i]
		at := placed[l.index]
		pr.placed = append(pr.placed, Label{ID: l.id, Text: l.label.Text, Anchor: l.at, Box: at.Box, Hidden: l.layer != visible, Placed: at.Placed})
		if !at.Placed {
			continue
		}
		c := l.label.Color
		if l.layer != visible {
			c = mark.Fade(c, pr.scene.Paper, labelFade)
		}
		p.SetID(l.id)
		if at.Far {
			p.Line(at.Leader[0].X, at.Leader[0].Y, at.Leader[1].X, at.Leader[1].Y, picture.Stroke{Color: mark.Fade(c, pr.scene.Paper, 0.4), Width: 0.6})
		}
		halo := pr.scene.Paper
		halo.A = uint8(0.78 * float64(halo.A))
		p.Text(l.text, at.Origin.X, at.Origin.Y, picture.TextStyle{Color: c, Halo: halo, HaloWidth: 1.6})
	}
	p.SetID(0)
	p.End()
}
