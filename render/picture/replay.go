package picture

import "image"

// Renderer receives a Picture item by item, bottom first. Paths are views that end with the call.
type Renderer interface {
	// Clip hides what follows outside r, until the next Clip; without limits r is infinite.
	Clip(r Rect)
	Fill(path *Path, f Fill)
	Stroke(path *Path, s Stroke)
	// Text has its origin, the left end of the baseline, at (x, y), and is turned about it by s.Angle; s.Align is zero.
	Text(t *Text, x, y float64, s TextStyle)
	Image(img image.Image, r Rect)
}

// Grouper is what a Renderer may also be, to hear of groups and of what items belong to.
type Grouper interface {
	Begin(name string)
	End()
	Belongs(id ID) // to whom the items that follow belong
}

// Replay hands every item to r in the order it was drawn.
func (p *Picture) Replay(r Renderer) { p.replay(r, everywhere) }

// ReplayWithin is Replay of the items that may paint inside area.
func (p *Picture) ReplayWithin(r Renderer, area Rect) { p.replay(r, area) }

func (p *Picture) replay(r Renderer, area Rect) {
	var path Path
	g, _ := r.(Grouper)
	clip, id := int32(0), ID(0)
	for i := range p.items {
		it := &p.items[i]
		switch it.kind {
		case beginItem:
			if g != nil {
				g.Begin(p.names[it.style])
			}
			continue
		case endItem:
			if g != nil {
				g.End()
			}
			continue
		}
		if it.bounds.Intersect(p.clipRect(it.clip)).Intersect(area).Empty() {
			continue
		}
		if it.clip != clip {
			clip = it.clip
			r.Clip(p.clipRect(clip))
		}
		if g != nil && it.id != id {
			id = it.id
			g.Belongs(id)
		}
		switch it.kind {
		case fillItem:
			p.view(it, &path)
			r.Fill(&path, p.fills[it.style])
		case strokeItem:
			p.view(it, &path)
			r.Stroke(&path, p.strokes[it.style])
		case textItem:
			t := &p.texts[it.style]
			r.Text(t.text, t.at.X, t.at.Y, t.style)
		case imageItem:
			r.Image(p.images[it.style].img, p.images[it.style].rect)
		}
	}
}

func (p *Picture) view(it *item, path *Path) {
	path.Verbs, path.Points = p.verbs[it.v0:it.v1:it.v1], p.points[it.p0:it.p1:it.p1]
}
