package raster

import (
	"image"
	"image/color"
	"image/draw"
	"math"
	"sync"

	xdraw "golang.org/x/image/draw"

	"bandwright/render/picture"
)

// flatness is how far, in pixels, a curve may be from the polyline drawn for it.
const flatness = 0.02

// Rasteriser paints Pictures and keeps buffers and letters for the next one. The zero Rasteriser is ready.
type Rasteriser struct {
	dst     image.RGBA // the image with its bounds moved to (0, 0)
	scale   float64
	cover   cover
	paint   paint
	stroker stroker
	flat    flattener
	letters letters
	view    picture.Rect // what a dash can be seen in, pixels
	corners []point
}

var spare struct {
	sync.Mutex
	list []*Rasteriser
}

// Draw paints p over dst at scale pixels per point.
func Draw(dst *image.RGBA, p *picture.Picture, scale float64) {
	spare.Lock()
	var r *Rasteriser
	if n := len(spare.list); n > 0 {
		r, spare.list = spare.list[n-1], spare.list[:n-1]
	}
	spare.Unlock()
	if r == nil {
		r = new(Rasteriser)
	}
	r.Draw(dst, p, scale)
	spare.Lock()
	if len(spare.list) < 4 {
		spare.list = append(spare.list, r)
	}
	spare.Unlock()
}

// Clear fills dst with one colour.
func Clear(dst *image.RGBA, c color.Color) {
	draw.Draw(dst, dst.Rect, image.NewUniform(c), image.Point{}, draw.Src)
}

// Draw paints p over dst at scale pixels per point.
func (r *Rasteriser) Draw(dst *image.RGBA, p *picture.Picture, scale float64) {
	b := dst.Rect
	if b.Empty() || !(scale > 0) || math.IsInf(scale, 0) {
		return
	}
	r.dst = image.RGBA{Pix: dst.Pix, Stride: dst.Stride, Rect: image.Rect(0, 0, b.Dx(), b.Dy())}
	r.scale = scale
	r.paint.dst = &r.dst
	r.stroker.c = &r.cover
	r.cover.resize(b.Dx(), b.Dy())
	r.view = picture.R(0, 0, float64(b.Dx()), float64(b.Dy())).Inset(-64)
	p.ReplayWithin(r, picture.R(-1, -1, float64(b.Dx())/scale+2, float64(b.Dy())/scale+2))
	r.dst.Pix, r.paint.dst = nil, nil // do not hold on to the image
}

// Clip implements picture.Renderer. The border is moved onto whole pixels.
func (r *Rasteriser) Clip(c picture.Rect) {
	if c.Empty() {
		r.cover.setClip(image.Rectangle{})
		return
	}
	whole := func(v float64) int { return int(math.Floor(min(max(v*r.scale, -1), 1e6) + 0.5)) }
	r.cover.setClip(image.Rect(whole(c.X0), whole(c.Y0), whole(c.X1), whole(c.Y1)))
}

// Fill implements picture.Renderer.
func (r *Rasteriser) Fill(path *picture.Path, f picture.Fill) {
	if r.cover.clip.Empty() {
		return
	}
	if f.Color.A > 0 {
		r.paint.set(f.Color)
		r.fill(path, f)
	}
	if !f.Hatch.None() {
		r.paint.setHatch(f.Hatch, r.scale)
		r.fill(path, f)
	}
}

func (r *Rasteriser) fill(path *picture.Path, f picture.Fill) {
	if b, ok := rectangle(path); ok {
		q := picture.Rect{X0: b.X0 * r.scale, Y0: b.Y0 * r.scale, X1: b.X1 * r.scale, Y1: b.Y1 * r.scale}
		// On whole pixels, unless that would make it vanish.
		if s := (picture.Rect{X0: nearest(q.X0), Y0: q.Y0, X1: nearest(q.X1), Y1: q.Y1}); s.W() > 0 {
			q = s
		}
		if s := (picture.Rect{X0: q.X0, Y0: nearest(q.Y0), X1: q.X1, Y1: nearest(q.Y1)}); s.H() > 0 {
			q = s
		}
		r.box(q.X0, q.Y0, q.X1, q.Y1)
	} else {
		r.flat.run(path, r.place, func(pts []point, closed bool) {
			if f.Crisp {
				r.snap(pts, true, false, 0)
			}
			fillLoop(&r.cover, pts)
		})
	}
	r.cover.sweep(&r.paint, f.EvenOdd)
}

func nearest(v float64) float64 { return math.Floor(v + 0.5) }

func (r *Rasteriser) place(p point) point {
	return picture.Pt(bounded(p.X*r.scale), bounded(p.Y*r.scale))
}

// farthest is the number of pixels beyond which places are as good as there: further out, differences of coordinates
// lose their digits.
const farthest = 1e12

func bounded(v float64) float64 { return min(max(v, -farthest), farthest) }

// rectangle says whether the path is one upright rectangle.
func rectangle(p *picture.Path) (picture.Rect, bool) {
	v, q := p.Verbs, p.Points
	if len(q) != 4 || len(v) < 4 || len(v) > 5 || v[1] != picture.LineTo || v[2] != picture.LineTo || v[3] != picture.LineTo {
		return picture.Rect{}, false
	}
	if q[0].Y == q[1].Y && q[1].X == q[2].X && q[2].Y == q[3].Y && q[3].X == q[0].X ||
		q[0].X == q[1].X && q[1].Y == q[2].Y && q[2].X == q[3].X && q[3].Y == q[0].Y {
		return p.Bounds(), true
	}
	return picture.Rect{}, false
}

// Stroke implements picture.Renderer.
func (r *Rasteriser) Stroke(path *picture.Path, s picture.Stroke) {
	if r.cover.clip.Empty() || s.Color.A == 0 {
		return
	}
	width := min(s.Width*r.scale, farthest)
	crisp := s.Crisp
	if !crisp && len(path.Points) == 2 {
		a, b := path.Points[0], path.Points[1]
		crisp = a.X == b.X || a.Y == b.Y
	}
	if !crisp {
		_, crisp = rectangle(path)
	}
	if crisp {
		width = max(1, nearest(width))
	}
	r.stroker.half, r.stroker.cap, r.stroker.join = width/2, s.Cap, s.Join
	var pattern [4]float64
	n := 0
	if d := s.Dash; !d.Solid() {
		pattern = [4]float64{d.On * r.scale, d.Off * r.scale, d.On2 * r.scale, d.Off2 * r.scale}
		n = 2
		if d.On2+d.Off2 > 0 {
			n = 4
		}
	}
	r.flat.run(path, r.place, func(pts []point, closed bool) {
		if crisp {
			r.snap(pts, closed, true, width)
		}
		if n > 0 {
			r.stroker.dashes(pts, closed, pattern[:n], s.Dash.Phase*r.scale, r.view)
		} else {
			r.stroker.line(pts, closed)
		}
	})
	r.paint.set(s.Color)
	r.cover.sweep(&r.paint, false)
}

// snap moves the upright and level segments of a polyline onto whole pixels: their borders for a stroke of whole width,
// themselves for the border of a fill. Ends of a line go to borders of pixels.
func (r *Rasteriser) snap(pts []point, closed, stroke bool, width float64) {
	middle := nearest
	if stroke && int(width)%2 == 1 {
		middle = func(v float64) float64 { return math.Floor(v) + 0.5 }
	}
	// The places before moving, for a neighbour moved already would no longer be level.
	r.corners = append(r.corners[:0], pts...)
	n := len(pts)
	for i, p := range r.corners {
		upright, level := false, false
		look := func(j int) {
			if q := r.corners[j]; q != p {
				upright = upright || q.X == p.X
				level = level || q.Y == p.Y
			}
		}
		if i > 0 || closed {
			look((i + n - 1) % n)
		}
		if i < n-1 || closed {
			look((i + 1) % n)
		}
		switch {
		case upright && level:
			pts[i] = picture.Pt(middle(p.X), middle(p.Y))
		case upright:
			pts[i] = picture.Pt(middle(p.X), nearest(p.Y))
		case level:
			pts[i] = picture.Pt(nearest(p.X), middle(p.Y))
		}
	}
}

// Text implements picture.Renderer.
func (r *Rasteriser) Text(t *picture.Text, x, y float64, s picture.TextStyle) {
	if !r.cover.clip.Empty() {
		r.text(t, x*r.scale, y*r.scale, s)
	}
}

// Image implements picture.Renderer.
func (r *Rasteriser) Image(img image.Image, q picture.Rect) {
	to := image.Rect(int(nearest(q.X0*r.scale)), int(nearest(q.Y0*r.scale)), int(nearest(q.X1*r.scale)), int(nearest(q.Y1*r.scale)))
	clipped, ok := r.dst.SubImage(r.cover.clip).(*image.RGBA)
	if !ok || clipped.Rect.Empty() || to.Empty() {
		return
	}
	if to.Size() == img.Bounds().Size() {
		xdraw.Draw(clipped, to, img, img.Bounds().Min, xdraw.Over)
		return
	}
	xdraw.ApproxBiLinear.Scale(clipped, to, img, img.Bounds(), xdraw.Over, nil)
}

// flattener turns paths into polylines of pixels, in storage of its own.
type flattener struct{ pts []point }

// run calls f for every subpath with the points mapped by place. A closed one does not repeat its first point.
func (l *flattener) run(path *picture.Path, place func(point) point, f func(pts []point, closed bool)) {
	pts := l.pts[:0]
	k := 0
	for _, v := range path.Verbs {
		switch v {
		case picture.MoveTo:
			if len(pts) > 0 {
				f(pts, false)
			}
			pts = append(pts[:0], place(path.Points[k]))
			k++
		case picture.LineTo:
			pts = append(pts, place(path.Points[k]))
			k++
		case picture.CubicTo:
			pts = picture.AppendCubic(pts, pts[len(pts)-1], place(path.Points[k]), place(path.Points[k+1]), place(path.Points[k+2]), flatness)
			k += 3
		case picture.Close:
			if n := len(pts); n > 1 && pts[0] == pts[n-1] {
				pts = pts[:n-1]
			}
			f(pts, true)
			pts = pts[:0]
		}
	}
	if len(pts) > 0 {
		f(pts, false)
	}
	l.pts = pts[:0]
}

// fillLoop adds a polygon.
func fillLoop(c *cover, pts []point) {
	if len(pts) < 3 {
		return
	}
	a := pts[len(pts)-1]
	for _, b := range pts {
		c.line(a.X, a.Y, b.X, b.Y)
		a = b
	}
}
