package raster

import (
	"image"
	"math"
	"math/bits"
)

const (
	blockBits = 4
	block     = 1 << blockBits
	// faint is the coverage below which nothing is painted: rounding leaves this much.
	faint = 1.0 / 1024
)

// cover accumulates signed area over the pixels of an image w × h, inside a clip.
//
// acc[y·stride + x] is the change of coverage from pixel x−1 to pixel x of row y; it is zero wherever the bit of its
// block is not set, so that nothing needs clearing between shapes.
type cover struct {
	w, h, stride int
	acc          []float32
	words        int // of touched, for each row
	touched      []uint64
	top, bottom  int // rows that may be touched: top ≤ y < bottom
	clip         image.Rectangle
	x0, y0       float64 // clip as numbers
	x1, y1       float64
}

// resize makes the buffer fit; it must be clean, as it is after every sweep.
func (c *cover) resize(w, h int) {
	c.w, c.h = w, h
	c.stride = (w + 2 + block - 1) &^ (block - 1)
	c.words = (c.stride>>blockBits + 63) / 64
	if n := c.stride * h; cap(c.acc) < n {
		c.acc = make([]float32, n)
	} else {
		c.acc = c.acc[:n]
	}
	if n := c.words * h; cap(c.touched) < n {
		c.touched = make([]uint64, n)
	} else {
		c.touched = c.touched[:n]
	}
	c.top, c.bottom = h, 0
	c.setClip(image.Rect(0, 0, w, h))
}

func (c *cover) setClip(r image.Rectangle) {
	c.clip = r.Intersect(image.Rect(0, 0, c.w, c.h))
	c.x0, c.y0 = float64(c.clip.Min.X), float64(c.clip.Min.Y)
	c.x1, c.y1 = float64(c.clip.Max.X), float64(c.clip.Max.Y)
}

// line adds the edge from a to b, in pixels. Edges of one shape that close leave zero to the right of it.
func (c *cover) line(ax, ay, bx, by float64) {
	if ay == by {
		return
	}
	dir := float32(1)
	if ay > by {
		ax, ay, bx, by = bx, by, ax, ay
		dir = -1
	}
	if by <= c.y0 || ay >= c.y1 || ax >= c.x1 && bx >= c.x1 {
		return
	}
	slope := (bx - ax) / (by - ay)
	if ay < c.y0 {
		ax += slope * (c.y0 - ay)
		ay = c.y0
	}
	if by > c.y1 {
		bx = ax + slope*(c.y1-ay)
		by = c.y1
	}
	// What is left of the clip covers its first column on; what is right of it covers nothing.
	if ax < c.x0 || bx < c.x0 || ax > c.x1 || bx > c.x1 {
		if ax >= c.x1 && bx >= c.x1 {
			return // what the rows of the clip left of it
		}
		if ax <= c.x0 && bx <= c.x0 {
			c.edge(c.x0, ay, c.x0, by, dir)
			return
		}
		if ax < c.x0 {
			y := min(by, ay+(c.x0-ax)/slope)
			c.edge(c.x0, ay, c.x0, y, dir)
			ax, ay = c.x0, y
		} else if bx < c.x0 {
			y := min(by, max(ay, ay+(c.x0-ax)/slope))
			c.edge(c.x0, y, c.x0, by, dir)
			bx, by = c.x0, y
		}
		if ax > c.x1 {
			ay = min(by, ay+(c.x1-ax)/slope)
			ax = c.x1
		} else if bx > c.x1 {
			by = min(by, max(ay, ay+(c.x1-ax)/slope))
			bx = c.x1
		}
		ax, bx = min(max(ax, c.x0), c.x1), min(max(bx, c.x0), c.x1)
	}
	c.edge(ax, ay, bx, by, dir)
}

// edge adds a downward edge inside the clip. Within a row its area is shared among the pixels it crosses.
func (c *cover) edge(ax, ay, bx, by float64, dir float32) {
	if !(ay < by) {
		return
	}
	y, last := int(ay), int(math.Ceil(by))
	c.top, c.bottom = min(c.top, y), max(c.bottom, last)
	slope := float32((bx - ax) / (by - ay))
	x, fy, fend := float32(ax), float32(ay), float32(by)
	lo, hi := x, float32(bx)
	if lo > hi {
		lo, hi = hi, lo
	}
	for ; y < last; y++ {
		next := min(float32(y+1), fend)
		dy := next - fy
		fy = next
		// Rounding must not carry the edge beyond its ends, which the clip holds inside the row.
		xn := min(max(x+slope*dy, lo), hi)
		d := dy * dir
		l, r := x, xn
		if l > r {
			l, r = r, l
		}
		x = xn
		li := int(l)
		row := c.acc[y*c.stride : (y+1)*c.stride]
		lf := float32(li)
		if r <= lf+1 {
			m := d * (0.5*(l+r) - lf)
			row[li] += d - m
			row[li+1] += m
			b := li >> blockBits
			c.touched[y*c.words+b>>6] |= 1 << (b & 63)
			if b2 := (li + 1) >> blockBits; b2 != b {
				c.touched[y*c.words+b2>>6] |= 1 << (b2 & 63)
			}
			continue
		}
		// The edge crosses several pixels of the row: a triangle in the first, trapezia, and a triangle in the last.
		ri := int(math.Ceil(float64(r)))
		s := d / (r - l) // change of area for each pixel of way
		a := 1 - (l - lf)
		first := 0.5 * s * a * a
		row[li] += first
		if ri == li+2 {
			z := r - lf - 1
			end := 0.5 * s * z * z
			row[li+1] += d - first - end
			row[li+2] += end
		} else {
			row[li+1] += s*(a+0.5) - first
			for i := li + 2; i < ri-1; i++ {
				row[i] += s
			}
			z := r - float32(ri-1)
			end := 0.5 * s * z * z
			// Sum so far is the coverage of pixel ri−2: s·(a + ri − li − 2.5).
			row[ri-1] += d - s*(a+float32(ri-li)-2.5) - end
			row[ri] += end
		}
		for b := li >> blockBits; b <= ri>>blockBits; b++ {
			c.touched[y*c.words+b>>6] |= 1 << (b & 63)
		}
	}
}

// sweep paints what has been accumulated and leaves the buffer clean.
func (c *cover) sweep(p *paint, evenOdd bool) {
	var levels [block]uint8
	left, right := c.clip.Min.X, c.clip.Max.X
	for y := c.top; y < c.bottom; y++ {
		var sum float32
		done := left
		words := c.touched[y*c.words : (y+1)*c.words]
		row := c.acc[y*c.stride : (y+1)*c.stride]
		for w, word := range words {
			if word == 0 {
				continue
			}
			words[w] = 0
			for word != 0 {
				x := (w<<6 + bits.TrailingZeros64(word)) << blockBits
				word &= word - 1
				if x > done {
					if to := min(x, right); to > done {
						if a := level(sum, evenOdd); a != 0 {
							p.run(y, done, to, a)
						}
						done = to
					}
				}
				cells := (*[block]float32)(row[x : x+block])
				any := uint8(0)
				for i, v := range cells {
					sum += v
					a := level(sum, evenOdd)
					levels[i] = a
					any |= a
				}
				*cells = [block]float32{}
				from, to := max(x, left), min(x+block, right)
				if any != 0 && from < to {
					p.cells(y, from, levels[from-x:to-x])
				}
				done = max(done, to)
			}
		}
		if done < right {
			if a := level(sum, evenOdd); a != 0 {
				p.run(y, done, right, a)
			}
		}
	}
	c.top, c.bottom = c.h, 0
}

// level turns a sum of signed areas into coverage 0…255.
func level(s float32, evenOdd bool) uint8 {
	if s < 0 {
		s = -s
	}
	if s < faint {
		return 0
	}
	if evenOdd && s > 1 {
		s -= 2 * float32(int(s/2))
		if s > 1 {
			s = 2 - s
		}
	}
	if s >= 1 {
		return 255
	}
	return uint8(s*255 + 0.5)
}
