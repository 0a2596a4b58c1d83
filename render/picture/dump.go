package picture

import (
	"fmt"
	"strconv"
	"strings"
)

// Dump is the picture as text, one item a line, numbers to a thousandth of a point: equal pictures give equal text, on
// every machine. Tests keep it as their golden file. The glyphs of texts are left out: their source, size, place and
// measure stand for them.
func (p *Picture) Dump() string {
	var b strings.Builder
	fmt.Fprintf(&b, "picture %s %s\n", number(p.Width), number(p.Height))
	depth, clip, id := 0, int32(0), ID(0)
	for i := range p.items {
		it := &p.items[i]
		if it.kind == endItem {
			depth--
		}
		pad := strings.Repeat("  ", max(depth, 0))
		if it.kind != beginItem && it.kind != endItem {
			if it.clip != clip {
				clip = it.clip
				if r := p.clipRect(clip); r == everywhere {
					fmt.Fprintf(&b, "%sclip none\n", pad)
				} else {
					fmt.Fprintf(&b, "%sclip %s\n", pad, rectangle(r))
				}
			}
			if it.id != id {
				id = it.id
				fmt.Fprintf(&b, "%sid %d\n", pad, id)
			}
		}
		b.WriteString(pad)
		switch it.kind {
		case beginItem:
			fmt.Fprintf(&b, "begin %q\n", p.names[it.style])
			depth++
		case endItem:
			b.WriteString("end\n")
		case fillItem:
			f := &p.fills[it.style]
			b.WriteString("fill " + colour(f.Color))
			if f.EvenOdd {
				b.WriteString(" even-odd")
			}
			if f.Crisp {
				b.WriteString(" crisp")
			}
			if h := f.Hatch; !h.None() {
				fmt.Fprintf(&b, " hatch %s %s° every %s width %s through %s %s", colour(h.Color), number(h.Angle),
					number(h.Spacing), number(h.Width), number(h.Origin.X), number(h.Origin.Y))
			}
			p.dumpPath(&b, it)
		case strokeItem:
			s := &p.strokes[it.style]
			fmt.Fprintf(&b, "stroke %s %s", colour(s.Color), number(s.Width))
			if d := s.Dash; !d.Solid() {
				fmt.Fprintf(&b, " dash %s %s %s %s from %s", number(d.On), number(d.Off), number(d.On2), number(d.Off2), number(d.Phase))
			}
			b.WriteString([]string{"", " round", " square"}[min(s.Cap, 2)])
			b.WriteString([]string{"", " round-join", " bevel-join"}[min(s.Join, 2)])
			if s.Crisp {
				b.WriteString(" crisp")
			}
			p.dumpPath(&b, it)
		case textItem:
			t := &p.texts[it.style]
			fmt.Fprintf(&b, "text %q size %s width %s at %s %s %s", t.text.Source, number(t.text.Size), number(t.text.Width),
				number(t.at.X), number(t.at.Y), colour(t.style.Color))
			if t.style.Angle != 0 {
				b.WriteString(" turned " + number(t.style.Angle))
			}
			if t.style.HaloWidth > 0 {
				fmt.Fprintf(&b, " halo %s %s", colour(t.style.Halo), number(t.style.HaloWidth))
			}
			b.WriteByte('\n')
		case imageItem:
			m := &p.images[it.style]
			fmt.Fprintf(&b, "image %d×%d in %s\n", m.img.Bounds().Dx(), m.img.Bounds().Dy(), rectangle(m.rect))
		}
	}
	return b.String()
}

func (p *Picture) dumpPath(b *strings.Builder, it *item) {
	b.WriteString(":")
	pts := p.points[it.p0:it.p1]
	for _, v := range p.verbs[it.v0:it.v1] {
		n := 0
		switch v {
		case MoveTo:
			b.WriteString(" M")
			n = 1
		case LineTo:
			b.WriteString(" L")
			n = 1
		case CubicTo:
			b.WriteString(" C")
			n = 3
		case Close:
			b.WriteString(" Z")
		}
		for _, q := range pts[:n] {
			b.WriteString(" " + number(q.X) + " " + number(q.Y))
		}
		pts = pts[n:]
	}
	b.WriteByte('\n')
}

func rectangle(r Rect) string {
	return number(r.X0) + " " + number(r.Y0) + " " + number(r.X1) + " " + number(r.Y1)
}

func colour(c Color) string { return fmt.Sprintf("#%02x%02x%02x%02x", c.R, c.G, c.B, c.A) }

// number prints to a thousandth, without trailing zeros and without −0.
func number(x float64) string {
	s := strconv.FormatFloat(x, 'f', 3, 64)
	if strings.Contains(s, ".") {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	if s == "-0" {
		return "0"
	}
	return s
}
