package picture

import "math"

// hitFlatness is how far, in points, a curve may be from the line that stands for it in a hit test.
const hitFlatness = 0.05

// Hit is one item under a point.
type Hit struct {
	ID       ID
	Distance float64 // points from the painted shape; 0 inside it
}

// HitTest is what the topmost item within tolerance points of (x, y) belongs to; items that belong to nothing are passed
// over, and so is what a clip hides.
//
// Fills count from their outline and are hit inside, by their own rule; strokes count from their edge, dashes as if solid;
// texts and images are their boxes.
func (p *Picture) HitTest(x, y, tolerance float64) (ID, bool) {
	for i := len(p.items) - 1; i >= 0; i-- {
		if d := p.distance(&p.items[i], x, y, tolerance); d <= tolerance {
			return p.items[i].id, true
		}
	}
	return 0, false
}

// HitNearest is what the item nearest to (x, y) within tolerance belongs to, the upper one of equals. It suits crowded
// lines, where HitTest would prefer one further away that was drawn later.
func (p *Picture) HitNearest(x, y, tolerance float64) (ID, bool) {
	id, found, best := ID(0), false, math.Inf(1)
	for i := len(p.items) - 1; i >= 0; i-- {
		if d := p.distance(&p.items[i], x, y, tolerance); d <= tolerance && d < best {
			if id, found, best = p.items[i].id, true, d; d == 0 {
				break
			}
		}
	}
	return id, found
}

// HitAll appends to dst every item within tolerance of (x, y) that belongs to something, topmost first. One ID appears as
// often as its items are hit.
func (p *Picture) HitAll(dst []Hit, x, y, tolerance float64) []Hit {
	for i := len(p.items) - 1; i >= 0; i-- {
		if d := p.distance(&p.items[i], x, y, tolerance); d <= tolerance {
			dst = append(dst, Hit{p.items[i].id, d})
		}
	}
	return dst
}

// BoundsOf is the box around all that belongs to id, clips applied; Nowhere if there is nothing.
func (p *Picture) BoundsOf(id ID) Rect {
	r := Nowhere
	for i := range p.items {
		if it := &p.items[i]; it.id == id {
			if b := it.bounds.Intersect(p.clipRect(it.clip)); !b.Empty() {
				r = r.Union(b)
			}
		}
	}
	return r
}

// distance is how far (x, y) is from what the item paints; +Inf if surely more than tolerance, hidden, or nobody's.
func (p *Picture) distance(it *item, x, y, tolerance float64) float64 {
	if it.id == 0 || !(it.bounds.distance(x, y) <= tolerance) || !p.clipRect(it.clip).Contains(x, y) {
		return math.Inf(1)
	}
	var path Path
	at := Point{x, y}
	switch it.kind {
	case fillItem:
		p.view(it, &path)
		best, winding, odd := math.Inf(1), 0, false
		path.segments(hitFlatness, true, func(a, b Point) {
			best = min(best, segmentDistance(at, a, b))
			if (a.Y <= y) != (b.Y <= y) && x < a.X+(y-a.Y)*(b.X-a.X)/(b.Y-a.Y) {
				odd = !odd
				if a.Y <= y {
					winding++
				} else {
					winding--
				}
			}
		})
		if f := &p.fills[it.style]; f.EvenOdd && odd || !f.EvenOdd && winding != 0 {
			return 0
		}
		return best
	case strokeItem:
		p.view(it, &path)
		best := math.Inf(1)
		path.segments(hitFlatness, false, func(a, b Point) { best = min(best, segmentDistance(at, a, b)) })
		return max(0, best-p.strokes[it.style].Width/2)
	case textItem:
		t := &p.texts[it.style]
		c, s := Turn(t.style.Angle)
		dx, dy := x-t.at.X, y-t.at.Y
		return t.text.Box().distance(c*dx-s*dy, s*dx+c*dy)
	case imageItem:
		return p.images[it.style].rect.distance(x, y)
	}
	return math.Inf(1)
}
