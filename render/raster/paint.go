package raster

import (
	"encoding/binary"
	"image"
	"image/color"
	"math"

	"bandwright/render/picture"
)

// paint blends one colour, or the lines of a hatch, into rows of an image whose bounds start at (0, 0).
type paint struct {
	dst   *image.RGBA
	alpha uint32 // of the colour
	rb    uint32 // red and blue of the opaque colour in the low bytes of two halves
	ga    uint32 // green and 255 likewise
	solid uint32 // the four bytes of the opaque colour

	hatched        bool
	nx, ny, offset float64 // place across the lines, in spacings, is nx·x + ny·y + offset
	spacing, half  float64 // pixels
	levels         []uint8
}

func (p *paint) set(c color.NRGBA) {
	p.alpha = uint32(c.A)
	p.rb = uint32(c.R) | uint32(c.B)<<16
	p.ga = uint32(c.G) | 255<<16
	p.solid = p.rb | p.ga<<8
	p.hatched = false
}

func (p *paint) setHatch(h picture.Hatch, scale float64) {
	p.set(h.Color)
	c, s := picture.Turn(h.Angle)
	// The lines run along (c, −s); across them is (s, c).
	p.hatched = true
	p.spacing = max(h.Spacing*scale, 2) // finer lines would be a tint anyway
	p.half = h.Width * scale / 2
	p.nx, p.ny = s/p.spacing, c/p.spacing
	p.offset = -(h.Origin.X*p.nx + h.Origin.Y*p.ny) * scale
}

// times is a·b/255, rounded.
func times(a, b uint32) uint32 {
	t := a*b + 128
	return (t + t>>8) >> 8
}

// blend puts the colour over a pixel with opacity a of 255.
func (p *paint) blend(d, a uint32) uint32 {
	i := 255 - a
	rb := (d&0xff00ff)*i + p.rb*a + 0x800080
	rb = (rb + rb>>8&0xff00ff) >> 8 & 0xff00ff
	ga := (d>>8&0xff00ff)*i + p.ga*a + 0x800080
	ga = (ga + ga>>8&0xff00ff) >> 8 & 0xff00ff
	return rb | ga<<8
}

// run paints pixels x0 ≤ x < x1 of row y with one coverage.
func (p *paint) run(y, x0, x1 int, coverage uint8) {
	if p.hatched {
		if n := x1 - x0; cap(p.levels) < n {
			p.levels = make([]uint8, n)
		}
		l := p.levels[:x1-x0]
		for i := range l {
			l[i] = coverage
		}
		p.cells(y, x0, l)
		return
	}
	a := times(uint32(coverage), p.alpha)
	pix := p.dst.Pix[y*p.dst.Stride+4*x0 : y*p.dst.Stride+4*x1]
	if a == 255 {
		for len(pix) >= 4 {
			binary.LittleEndian.PutUint32(pix, p.solid)
			pix = pix[4:]
		}
		return
	}
	for len(pix) >= 4 {
		binary.LittleEndian.PutUint32(pix, p.blend(binary.LittleEndian.Uint32(pix), a))
		pix = pix[4:]
	}
}

// cells paints pixels of row y from x on with a coverage each.
func (p *paint) cells(y, x int, coverage []uint8) {
	if p.hatched {
		p.cutHatch(y, x, coverage)
	}
	pix := p.dst.Pix[y*p.dst.Stride+4*x : y*p.dst.Stride+4*(x+len(coverage))]
	for _, c := range coverage {
		if c != 0 {
			if a := times(uint32(c), p.alpha); a == 255 {
				binary.LittleEndian.PutUint32(pix, p.solid)
			} else {
				binary.LittleEndian.PutUint32(pix, p.blend(binary.LittleEndian.Uint32(pix), a))
			}
		}
		pix = pix[4:]
	}
}

// cutHatch multiplies coverage by that of the hatch lines: the part of a box, one pixel wide across the lines, that a
// line covers.
func (p *paint) cutHatch(y, x int, coverage []uint8) {
	u := p.nx*(float64(x)+0.5) + p.ny*(float64(y)+0.5) + p.offset
	u -= math.Floor(u)
	for i, c := range coverage {
		if c != 0 {
			d := min(u, 1-u) * p.spacing // to the nearest line's middle
			part := min(d+0.5, p.half) - max(d-0.5, -p.half)
			coverage[i] = uint8(float64(c)*min(1, max(0, part)) + 0.5)
		}
		if u += p.nx; u >= 1 {
			u--
		} else if u < 0 {
			u++
		}
	}
}

// mask blends the colour through a mask whose top left pixel is at (x, y), inside clip.
func (p *paint) mask(m *mask, x, y int, clip image.Rectangle) {
	r := image.Rect(x, y, x+m.w, y+m.h).Intersect(clip)
	if r.Empty() {
		return
	}
	for row := r.Min.Y; row < r.Max.Y; row++ {
		at := (row-y)*m.w - x
		p.cells(row, r.Min.X, m.a[at+r.Min.X:at+r.Max.X])
	}
}
