package raster

import (
	"math"

	"bandwright/render/picture"
	"bandwright/render/typeset"
)

// phases is how many places within a pixel, along the line of text, a letter is drawn for.
const phases = 4

// cachedMasks is how many letters are kept before the cache starts anew.
const cachedMasks = 4096

// largestCached is the size in pixels above which letters are drawn from their outlines.
const largestCached = 200

type glyphKey struct {
	font  picture.Font
	turn  uint8 // quarter turns
	phase uint8
	index uint16
	size  float32
}

// mask is the coverage of a letter; its origin is the pixel (−x, −y) of it.
type mask struct {
	x, y, w, h int
	a          []uint8
}

// fit maps heights above the baseline, in pixels, so that small letters and capitals end on whole pixels, as a light
// vertical hinting does. Widths stay as they are.
type fit struct{ small, capital, smallTo, capitalTo float64 }

func fitFor(size float64) fit {
	f := fit{small: typeset.XHeight(size), capital: typeset.CapHeight(size)}
	f.smallTo, f.capitalTo = math.Round(f.small), math.Round(f.capital)
	// Tiny letters would be bent too much, large ones gain nothing.
	if size < 6 || size > 48 || f.smallTo < 1 || f.capitalTo <= f.smallTo {
		f.smallTo, f.capitalTo = f.small, f.capital
	}
	return f
}

// y maps a height given as y down.
func (f *fit) y(y float64) float64 {
	switch h := -y; {
	case h <= 0:
		return y
	case h <= f.small:
		return -h * f.smallTo / f.small
	case h <= f.capital:
		return -(f.smallTo + (h-f.small)*(f.capitalTo-f.smallTo)/(f.capital-f.small))
	default:
		return -(f.capitalTo + h - f.capital)
	}
}

// letters is the cache of masks and what makes them.
type letters struct {
	masks map[glyphKey]*mask
	c     cover
	flat  flattener
}

func (l *letters) get(k glyphKey) *mask {
	if m := l.masks[k]; m != nil {
		return m
	}
	if l.masks == nil || len(l.masks) >= cachedMasks {
		l.masks = make(map[glyphKey]*mask, 256)
	}
	m := l.make(k)
	l.masks[k] = m
	return m
}

func (l *letters) make(k glyphKey) *mask {
	size := float64(k.size)
	f := fitFor(size)
	o := typeset.Outline(k.font, k.index)
	if o.Empty() {
		return &mask{}
	}
	shift := float64(k.phase) / phases
	c, s := picture.Turn(90 * float64(k.turn))
	place := func(p point) point {
		x, y := p.X*size+shift, f.y(p.Y*size)
		return picture.Pt(c*x+s*y, -s*x+c*y)
	}
	b := picture.Nowhere
	for _, p := range o.Points {
		q := place(p)
		b = b.Union(picture.Rect{X0: q.X, Y0: q.Y, X1: q.X, Y1: q.Y})
	}
	m := &mask{x: int(math.Floor(b.X0)), y: int(math.Floor(b.Y0))}
	m.w, m.h = int(math.Ceil(b.X1))-m.x, int(math.Ceil(b.Y1))-m.y
	m.a = make([]uint8, m.w*m.h)
	l.c.resize(m.w, m.h)
	dx, dy := float64(-m.x), float64(-m.y)
	l.flat.run(o, func(p point) point { q := place(p); return picture.Pt(q.X+dx, q.Y+dy) }, func(pts []point, closed bool) {
		fillLoop(&l.c, pts)
	})
	l.c.sweepMask(m)
	if size < boldest {
		for i, a := range m.a {
			m.a[i] = inked[a]
		}
	}
	return m
}

// inked strengthens partial coverage of small letters: their stems are thinner than a pixel or two and would look grey.
var inked = func() (t [256]uint8) {
	for i := range t {
		t[i] = uint8(255*math.Pow(float64(i)/255, 0.8) + 0.5)
	}
	return t
}()

// boldest is the size in pixels from which letters are not strengthened.
const boldest = 24

// sweepMask writes what has been accumulated as coverage and leaves the buffer clean.
func (c *cover) sweepMask(m *mask) {
	for y := 0; y < c.h; y++ {
		var sum float32
		row := c.acc[y*c.stride : (y+1)*c.stride]
		for x := 0; x < c.w; x++ {
			sum += row[x]
			m.a[y*m.w+x] = level(sum, false)
		}
		clear(row)
	}
	clear(c.touched)
	c.top, c.bottom = c.h, 0
}

// text draws a laid-out text with its origin at (x, y) in pixels.
func (r *Rasteriser) text(t *picture.Text, x, y float64, s picture.TextStyle) {
	if s.Color.A == 0 && !(s.HaloWidth > 0) {
		return
	}
	cos, sin := picture.Turn(s.Angle)
	turn := uint8(0)
	upright := true
	switch {
	case cos == 1:
	case sin == 1:
		turn = 1
	case cos == -1:
		turn = 2
	case sin == -1:
		turn = 3
	default:
		upright = false
	}
	if s.HaloWidth > 0 && s.Halo.A > 0 {
		r.stroker.half, r.stroker.cap, r.stroker.join = s.HaloWidth*r.scale, picture.Round, picture.RoundJoin
		for i := range t.Glyphs {
			r.glyph(t, &t.Glyphs[i], x, y, cos, sin, true)
		}
		r.paint.set(s.Halo)
		r.cover.sweep(&r.paint, false)
	}
	r.paint.set(s.Color)
	for i := range t.Glyphs {
		g := &t.Glyphs[i]
		size := g.Size * r.scale
		gx, gy := g.X*r.scale, g.Y*r.scale
		px, py := x+cos*gx+sin*gy, y-sin*gx+cos*gy
		if !upright || size > largestCached {
			r.glyph(t, g, x, y, cos, sin, false)
			continue
		}
		if math.Abs(px) > 1e6 || math.Abs(py) > 1e6 {
			continue
		}
		// Along the line a quarter of a pixel counts; across it letters stand on whole pixels.
		k := glyphKey{font: g.Font, turn: turn, index: g.Index, size: float32(size)}
		along, across := px, py
		switch turn {
		case 1:
			along, across = -py, px
		case 2:
			along, across = -px, -py
		case 3:
			along, across = py, -px
		}
		q := int(math.Floor(along*phases + 0.5))
		a, b := q>>2, int(math.Floor(across+0.5))
		k.phase = uint8(q & 3)
		m := r.letters.get(k)
		switch turn {
		case 1:
			a, b = b, -a
		case 2:
			a, b = -a, -b
		case 3:
			a, b = -b, a
		}
		r.paint.mask(m, a+m.x, b+m.y, r.cover.clip)
	}
	r.cover.sweep(&r.paint, false) // of the letters that no mask was used for
	for _, q := range t.Rules {
		if turn == 0 && upright {
			top := math.Floor(y + q.Y0*r.scale + 0.5)
			h := max(1, math.Floor(q.H()*r.scale+0.5))
			r.box(x+q.X0*r.scale, top, x+q.X1*r.scale, top+h)
		} else {
			at := func(u, v float64) point {
				u, v = u*r.scale, v*r.scale
				return picture.Pt(x+cos*u+sin*v, y-sin*u+cos*v)
			}
			r.stroker.polygon(at(q.X0, q.Y0), at(q.X1, q.Y0), at(q.X1, q.Y1), at(q.X0, q.Y1))
		}
		r.cover.sweep(&r.paint, false)
	}
}

// box adds a rectangle.
func (r *Rasteriser) box(x0, y0, x1, y1 float64) {
	r.cover.line(x0, y0, x0, y1)
	r.cover.line(x1, y1, x1, y0)
}

// glyph adds a letter, or the halo around it with the stroker as it is set, from its outline.
func (r *Rasteriser) glyph(t *picture.Text, g *picture.Glyph, x, y, cos, sin float64, halo bool) {
	size := g.Size * r.scale
	gx, gy := g.X*r.scale, g.Y*r.scale
	px, py := x+cos*gx+sin*gy, y-sin*gx+cos*gy
	place := func(p point) point {
		u, v := p.X*size, p.Y*size
		return picture.Pt(px+cos*u+sin*v, py-sin*u+cos*v)
	}
	r.flat.run(typeset.Outline(g.Font, g.Index), place, func(pts []point, closed bool) {
		fillLoop(&r.cover, pts)
		if halo {
			r.stroker.line(pts, true)
		}
	})
}
