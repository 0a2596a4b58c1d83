package chart

import (
	"math"

	"bandwright/render/picture"
)

// Line draws a curve through (xs[i], ys[i]); it breaks where a number is not
// finite.
func (pl Plot) Line(p *picture.Picture, xs, ys []float64, s picture.Stroke, id picture.ID) {
	var path picture.Path
	pen := false
	for i := range xs {
		x, y := pl.X.At(xs[i]), pl.Y.At(ys[i])
		switch {
		case !finite(x) || !finite(y):
			pen = false
		case pen:
			path.LineTo(x, y)
		default:
			path.MoveTo(x, y)
			pen = true
		}
	}
	if path.Empty() {
		return
	}
	p.SetID(id)
	p.Stroke(&path, s)
	p.SetID(0)
}

// Band is a strip along a curve that Ribbons draws: how wide it is at each
// point, in points, and its fill.
type Band struct {
	Width []float64
	Fill  picture.Fill
}

// Ribbons draws strips side by side across a curve, the whole of them centred
// on it: the first on the side of larger y (the lower side of the picture for
// a rising scale is the last). Widths are measured at right angles to the curve
// as drawn, so that a steep band is as wide as a flat one of equal weight.
func (pl Plot) Ribbons(p *picture.Picture, xs, ys []float64, strips []Band, id picture.ID) {
	p.SetID(id)
	pl.pieces(xs, ys, func(first int, at, normal []picture.Point) {
		edge := make([]float64, len(at)) // offset of the strip's near edge
		for i := range at {
			for _, s := range strips {
				edge[i] -= width(s.Width, first+i) / 2
			}
		}
		far := make([]float64, len(at))
		for _, s := range strips {
			some := false
			for i := range at {
				w := width(s.Width, first+i)
				far[i] = edge[i] + w
				some = some || w > 0.02
			}
			if some {
				strip(p, at, normal, edge, far, s.Fill)
			}
			copy(edge, far)
		}
	})
	p.SetID(0)
}

// TwoSided draws a signed quantity along a curve, in points: positive values
// as a strip on the side of larger y, negative ones on the other.
func (pl Plot) TwoSided(p *picture.Picture, xs, ys, value []float64, above, below picture.Fill, id picture.ID) {
	p.SetID(id)
	pl.pieces(xs, ys, func(first int, at, normal []picture.Point) {
		zero, edge := make([]float64, len(at)), make([]float64, len(at))
		for _, side := range []struct {
			sign float64
			fill picture.Fill
		}{{1, above}, {-1, below}} {
			// Runs in which the value has this sign.
			for i := 0; i < len(at); {
				if !(side.sign*value[first+i] > 0) {
					i++
					continue
				}
				n := i
				for n < len(at) && side.sign*value[first+n] > 0 {
					edge[n] = -value[first+n]
					n++
				}
				a, b := max(0, i-1), min(len(at), n+1)
				if a < i {
					edge[a] = 0
				}
				if b > n {
					edge[n] = 0
				}
				strip(p, at[a:b], normal[a:b], zero[a:b], edge[a:b], side.fill)
				i = n
			}
		}
	})
	p.SetID(0)
}

func width(w []float64, i int) float64 {
	if i >= len(w) || !(w[i] > 0) || math.IsInf(w[i], 0) {
		return 0
	}
	return w[i]
}

// pieces calls draw for each stretch of the curve without a break, with the
// places of its points and the unit normals there, which point down the
// picture.
func (pl Plot) pieces(xs, ys []float64, draw func(first int, at, normal []picture.Point)) {
	at := make([]picture.Point, 0, len(xs))
	normal := make([]picture.Point, len(xs))
	flush := func(first int) {
		n := len(at)
		if n >= 2 {
			for i := range n {
				a, b := at[max(0, i-1)], at[min(n-1, i+1)]
				dx, dy := b.X-a.X, b.Y-a.Y
				if l := math.Hypot(dx, dy); l > 0 {
					normal[i] = picture.Pt(-dy/l, dx/l)
				} else {
					normal[i] = picture.Pt(0, 1)
				}
			}
			draw(first, at, normal[:n])
		}
		at = at[:0]
	}
	first := 0
	for i := range xs {
		x, y := pl.X.At(xs[i]), pl.Y.At(ys[i])
		if !finite(x) || !finite(y) {
			flush(first)
			continue
		}
		if len(at) == 0 {
			first = i
		}
		at = append(at, picture.Pt(x, y))
	}
	flush(first)
}

// strip fills what lies between two offsets along the normals.
func strip(p *picture.Picture, at, normal []picture.Point, near, far []float64, f picture.Fill) {
	var path picture.Path
	for i := range at {
		x, y := at[i].X+near[i]*normal[i].X, at[i].Y+near[i]*normal[i].Y
		if i == 0 {
			path.MoveTo(x, y)
		} else {
			path.LineTo(x, y)
		}
	}
	for i := len(at) - 1; i >= 0; i-- {
		path.LineTo(at[i].X+far[i]*normal[i].X, at[i].Y+far[i]*normal[i].Y)
	}
	path.Close()
	p.Fill(&path, f)
}

// Area fills what lies between two curves of X over the values of Y: densities
// with the energy upwards. from and to are values on the X scale.
func (pl Plot) Area(p *picture.Picture, ys, from, to []float64, f picture.Fill, id picture.ID) {
	var path picture.Path
	n := 0
	for i := range ys {
		x, y := pl.X.At(to[i]), pl.Y.At(ys[i])
		if !finite(x) || !finite(y) {
			continue
		}
		if n == 0 {
			path.MoveTo(x, y)
		} else {
			path.LineTo(x, y)
		}
		n++
	}
	if n < 2 {
		return
	}
	for i := len(ys) - 1; i >= 0; i-- {
		x, y := pl.X.At(from[i]), pl.Y.At(ys[i])
		if finite(x) && finite(y) {
			path.LineTo(x, y)
		}
	}
	path.Close()
	p.SetID(id)
	p.Fill(&path, f)
	p.SetID(0)
}

func finite(v float64) bool { return v-v == 0 }
