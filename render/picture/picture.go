package picture

import "image"

// ID is what an item belongs to, as the one who draws it chose; 0 is nothing.
type ID uint32

type kind uint8

const (
	fillItem kind = iota
	strokeItem
	textItem
	imageItem
	beginItem
	endItem
)

// item is one entry of the display list. Its path is a range of the shared storage.
type item struct {
	kind   kind
	id     ID
	clip   int32 // index into Picture.clips; 0 is none
	style  int32 // index into the list of its kind
	v0, v1 int32
	p0, p1 int32
	bounds Rect // what is painted, not clipped
}

type placedText struct {
	text  *Text
	at    Point // origin, alignment already applied
	style TextStyle
}

type placedImage struct {
	img  image.Image
	rect Rect
}

// Picture is a recorded drawing. The zero Picture is empty and ready; set Width and Height to its size in points.
type Picture struct {
	Width, Height float64

	items   []item
	verbs   []Verb
	points  []Point
	fills   []Fill
	strokes []Stroke
	texts   []placedText
	images  []placedImage
	names   []string
	clips   []Rect

	id      ID
	stack   []int32 // open clips
	open    []int32 // names of the open groups
	scratch Path
}

// New is an empty Picture of the given size in points.
func New(width, height float64) *Picture { return &Picture{Width: width, Height: height} }

// Reset empties the picture, sets its size and keeps its storage.
func (p *Picture) Reset(width, height float64) {
	clear(p.texts) // let go of what is kept by reference
	clear(p.images)
	p.Width, p.Height = width, height
	p.items, p.verbs, p.points = p.items[:0], p.verbs[:0], p.points[:0]
	p.fills, p.strokes, p.texts, p.images = p.fills[:0], p.strokes[:0], p.texts[:0], p.images[:0]
	p.names, p.clips, p.stack, p.open = p.names[:0], p.clips[:0], p.stack[:0], p.open[:0]
	p.id = 0
}

// Len is the number of recorded items, group marks included.
func (p *Picture) Len() int { return len(p.items) }

// SetID says what the items that follow belong to; 0 is nothing.
func (p *Picture) SetID(id ID) { p.id = id }

// Begin opens a named group; groups nest.
func (p *Picture) Begin(name string) {
	p.names = append(p.names, name)
	p.open = append(p.open, int32(len(p.names)-1))
	p.items = append(p.items, item{kind: beginItem, style: int32(len(p.names) - 1), clip: p.clip(), bounds: Nowhere})
}

// End closes the group opened last.
func (p *Picture) End() {
	n := len(p.open)
	if n == 0 {
		panic("picture: End without Begin")
	}
	p.open = p.open[:n-1]
	p.items = append(p.items, item{kind: endItem, clip: p.clip(), bounds: Nowhere})
}

// PushClip hides what follows outside r, and outside the clip in force.
func (p *Picture) PushClip(r Rect) {
	p.stack = append(p.stack, p.addClip(r.Intersect(p.clipRect(p.clip()))))
}

// PopClip ends the last PushClip.
func (p *Picture) PopClip() {
	n := len(p.stack)
	if n == 0 {
		panic("picture: PopClip without PushClip")
	}
	p.stack = p.stack[:n-1]
}

func (p *Picture) clip() int32 {
	if n := len(p.stack); n > 0 {
		return p.stack[n-1]
	}
	return 0
}

func (p *Picture) addClip(r Rect) int32 {
	if len(p.clips) == 0 {
		p.clips = append(p.clips, everywhere)
	}
	if n := len(p.clips); p.clips[n-1] == r {
		return int32(n - 1)
	}
	p.clips = append(p.clips, r)
	return int32(len(p.clips) - 1)
}

func (p *Picture) clipRect(i int32) Rect {
	if i == 0 {
		return everywhere
	}
	return p.clips[i]
}

func (p *Picture) add(k kind, style int, path *Path, grow float64) {
	it := item{kind: k, id: p.id, clip: p.clip(), style: int32(style), v0: int32(len(p.verbs)), p0: int32(len(p.points))}
	p.verbs = append(p.verbs, path.Verbs...)
	p.points = append(p.points, path.Points...)
	it.v1, it.p1 = int32(len(p.verbs)), int32(len(p.points))
	it.bounds = path.Bounds().Inset(-grow)
	p.items = append(p.items, it)
}

// Fill paints the inside of a path. The path is copied.
func (p *Picture) Fill(path *Path, f Fill) {
	if path.Empty() {
		return
	}
	if n := len(p.fills); n == 0 || p.fills[n-1] != f {
		p.fills = append(p.fills, f)
	}
	p.add(fillItem, len(p.fills)-1, path, 0)
}

// Stroke draws along a path. The path is copied.
func (p *Picture) Stroke(path *Path, s Stroke) {
	if path.Empty() || !(s.Width > 0) {
		return
	}
	if n := len(p.strokes); n == 0 || p.strokes[n-1] != s {
		p.strokes = append(p.strokes, s)
	}
	grow := s.Width / 2
	switch {
	case s.Join == Miter && len(path.Points) > 2:
		grow *= MiterLimit
	case s.Cap == Square:
		grow *= 1.4142135623730951
	}
	p.add(strokeItem, len(p.strokes)-1, path, grow)
}

// Text draws a laid-out text with the place that s.Align names at (x, y), turned about that point.
func (p *Picture) Text(t *Text, x, y float64, s TextStyle) {
	if t == nil || !finite(x, y) {
		return
	}
	o := s.Align.Offset(t)
	s.Align = 0
	c, sn := Turn(s.Angle)
	at := Point{x + c*o.X + sn*o.Y, y - sn*o.X + c*o.Y}
	p.addText(placedText{t, at, s}, p.id, p.clip())
}

func (p *Picture) addText(t placedText, id ID, clip int32) {
	p.texts = append(p.texts, t)
	box := t.text.Box()
	for _, r := range t.text.Rules {
		box = box.Union(r)
	}
	b := box.Inset(-t.style.HaloWidth).turned(t.style.Angle, t.at)
	p.items = append(p.items, item{kind: textItem, id: id, clip: clip, style: int32(len(p.texts) - 1), bounds: b})
}

// Image draws an image to fill r. The image is kept by reference.
func (p *Picture) Image(img image.Image, r Rect) {
	if img == nil || r.Empty() {
		return
	}
	p.images = append(p.images, placedImage{img, r})
	p.items = append(p.items, item{kind: imageItem, id: p.id, clip: p.clip(), style: int32(len(p.images) - 1), bounds: r})
}

// Line draws a straight line.
func (p *Picture) Line(x0, y0, x1, y1 float64, s Stroke) {
	p.scratch.Reset()
	p.scratch.MoveTo(x0, y0)
	if p.scratch.Empty() || !finite(x1, y1) {
		return
	}
	p.scratch.LineTo(x1, y1)
	p.Stroke(&p.scratch, s)
}

// FillRect paints a rectangle.
func (p *Picture) FillRect(r Rect, f Fill) {
	p.scratch.Reset()
	p.scratch.Rect(r)
	p.Fill(&p.scratch, f)
}

// StrokeRect draws the border of a rectangle.
func (p *Picture) StrokeRect(r Rect, s Stroke) {
	p.scratch.Reset()
	p.scratch.Rect(r)
	p.Stroke(&p.scratch, s)
}

// Circle paints a disc.
func (p *Picture) Circle(x, y, radius float64, f Fill) {
	p.scratch.Reset()
	p.scratch.Circle(x, y, radius)
	p.Fill(&p.scratch, f)
}

// Ring draws the border of a circle.
func (p *Picture) Ring(x, y, radius float64, s Stroke) {
	p.scratch.Reset()
	p.scratch.Circle(x, y, radius)
	p.Stroke(&p.scratch, s)
}

// Polygon paints a closed polygon.
func (p *Picture) Polygon(f Fill, pts ...Point) {
	p.scratch.Reset()
	p.scratch.Polygon(pts...)
	p.Fill(&p.scratch, f)
}

// Polyline draws an open line through points; it breaks at a point that is not finite.
func (p *Picture) Polyline(s Stroke, pts ...Point) {
	p.scratch.Reset()
	p.scratch.Polyline(pts...)
	p.Stroke(&p.scratch, s)
}

// Bounds is the box around everything painted, clips applied; Nowhere if there is nothing.
func (p *Picture) Bounds() Rect {
	r := Nowhere
	for i := range p.items {
		if b := p.items[i].bounds.Intersect(p.clipRect(p.items[i].clip)); !b.Empty() {
			r = r.Union(b)
		}
	}
	return r
}

// Append draws all of q into p, moved by (dx, dy), with its ids and groups, inside the clip in force. The pictures must
// not be the same.
func (p *Picture) Append(q *Picture, dx, dy float64) {
	if len(q.open) > 0 {
		panic("picture: Append of a picture with an open group")
	}
	outer, outerRect := p.clip(), p.clipRect(p.clip())
	from, to := int32(0), outer // last clip of q and what it became here
	v, pt := int32(len(p.verbs)), int32(len(p.points))
	fl, st := int32(len(p.fills)), int32(len(p.strokes))
	p.verbs = append(p.verbs, q.verbs...)
	for _, a := range q.points {
		p.points = append(p.points, Point{a.X + dx, a.Y + dy})
	}
	for _, f := range q.fills {
		f.Hatch.Origin.X += dx
		f.Hatch.Origin.Y += dy
		p.fills = append(p.fills, f)
	}
	p.strokes = append(p.strokes, q.strokes...)
	for _, it := range q.items {
		if it.clip != from {
			from, to = it.clip, outer
			if from != 0 {
				to = p.addClip(q.clips[from].Shift(dx, dy).Intersect(outerRect))
			}
		}
		it.clip = to
		it.bounds = it.bounds.Shift(dx, dy)
		it.v0, it.v1, it.p0, it.p1 = it.v0+v, it.v1+v, it.p0+pt, it.p1+pt
		switch it.kind {
		case fillItem:
			it.style += fl
		case strokeItem:
			it.style += st
		case textItem:
			t := q.texts[it.style]
			t.at.X += dx
			t.at.Y += dy
			it.style = int32(len(p.texts))
			p.texts = append(p.texts, t)
		case imageItem:
			m := q.images[it.style]
			m.rect = m.rect.Shift(dx, dy)
			it.style = int32(len(p.images))
			p.images = append(p.images, m)
		case beginItem:
			p.names = append(p.names, q.names[it.style])
			it.style = int32(len(p.names) - 1)
		}
		p.items = append(p.items, it)
	}
}
