package raster

import (
	"image"
	"image/color"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"testing"

	"bandwright/render/picture"
	"bandwright/render/typeset"
)

type colours struct{ paper, ink, soft, line, face, halo picture.Color }

var (
	light = colours{color.NRGBA{R: 255, G: 255, B: 255, A: 255}, color.NRGBA{R: 28, G: 32, B: 36, A: 255}, color.NRGBA{R: 104, G: 112, B: 124, A: 255},
		color.NRGBA{R: 160, G: 168, B: 176, A: 255}, color.NRGBA{R: 90, G: 120, B: 150, A: 36}, color.NRGBA{R: 255, G: 255, B: 255, A: 230}}
	dark = colours{color.NRGBA{R: 24, G: 27, B: 31, A: 255}, color.NRGBA{R: 228, G: 231, B: 235, A: 255}, color.NRGBA{R: 150, G: 158, B: 168, A: 255},
		color.NRGBA{R: 90, G: 98, B: 108, A: 255}, color.NRGBA{R: 130, G: 170, B: 210, A: 40}, color.NRGBA{R: 24, G: 27, B: 31, A: 230}}
	teal  = color.NRGBA{R: 0x3d, G: 0x8e, B: 0x9c, A: 255}
	brick = color.NRGBA{R: 0x9e, G: 0x3f, B: 0x1c, A: 200}
	gold  = color.NRGBA{R: 0xc8, G: 0xab, B: 0x31, A: 255}
	pink  = color.NRGBA{R: 0xb8, G: 0x40, B: 0x80, A: 255}
)

// zonePicture draws what a zone panel draws: a truncated octahedron seen from the side, hidden edges dashed, axes, a path
// with arrows, markers and labels. Angle turns it.
func zonePicture(p *picture.Picture, w, h, angle float64, c colours) {
	p.Reset(w, h)
	// Vertices of the truncated octahedron: all permutations of (0, ±1, ±2).
	var vs [][3]float64
	for _, perm := range [][3]int{{0, 1, 2}, {0, 2, 1}, {1, 0, 2}, {1, 2, 0}, {2, 0, 1}, {2, 1, 0}} {
		for s := 0; s < 4; s++ {
			v := [3]float64{0, 1 - 2*float64(s&1), 2 - 4*float64(s>>1)}
			vs = append(vs, [3]float64{v[perm[0]], v[perm[1]], v[perm[2]]})
		}
	}
	ca, sa := math.Cos(angle), math.Sin(angle)
	scale := min(w, h) / 6
	project := func(v [3]float64) (picture.Point, float64) {
		x, y := v[0]*ca-v[1]*sa, v[0]*sa+v[1]*ca
		return picture.Pt(w/2+scale*x, h/2-scale*(v[2]*0.95-y*0.3)), y
	}
	p.Begin("zone")
	var path picture.Path
	normals := [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	for i := 0; i < 8; i++ {
		normals = append(normals, [3]float64{1 - 2*float64(i&1), 1 - float64(i&2), 1 - float64(i&4)/2})
	}
	for i := range 3 {
		normals = append(normals, [3]float64{-normals[i][0], -normals[i][1], -normals[i][2]})
	}
	id := picture.ID(1)
	for _, n := range normals {
		limit := 2.0
		if n[0]*n[1]*n[2] != 0 {
			limit = 3
		}
		var loop []picture.Point
		for _, v := range vs {
			if math.Abs(v[0]*n[0]+v[1]*n[1]+v[2]*n[2]-limit) < 1e-9 {
				q, _ := project(v)
				loop = append(loop, q)
			}
		}
		var m picture.Point
		for _, q := range loop {
			m.X += q.X / float64(len(loop))
			m.Y += q.Y / float64(len(loop))
		}
		sortAround(loop, m)
		p.SetID(id)
		id++
		p.Polygon(picture.Fill{Color: c.face}, loop...)
	}
	for i, a := range vs {
		for j, b := range vs {
			d := math.Hypot(math.Hypot(a[0]-b[0], a[1]-b[1]), a[2]-b[2])
			if j <= i || math.Abs(d-math.Sqrt2) > 1e-9 {
				continue
			}
			q, y := project(a)
			r, z := project(b)
			s := picture.Stroke{Color: c.ink, Width: 1.1, Join: picture.RoundJoin, Cap: picture.Round}
			if y+z > 1 {
				s = picture.Stroke{Color: c.line, Width: 0.7, Dash: picture.Dash{On: 3, Off: 2.2}}
			}
			p.SetID(id)
			id++
			p.Line(q.X, q.Y, r.X, r.Y, s)
		}
	}
	for i, t := range []string{"k_{*x*}", "k_{*y*}", "k_{*z*}"} {
		var a, b [3]float64
		a[i], b[i] = 2, 3
		q, _ := project(a)
		r, _ := project(b)
		p.Line(q.X, q.Y, r.X, r.Y, picture.Stroke{Color: c.soft, Width: 0.8})
		l := math.Hypot(r.X-q.X, r.Y-q.Y) + 1e-9
		ux, uy := (r.X-q.X)/l, (r.Y-q.Y)/l
		p.Polygon(picture.Fill{Color: c.soft}, picture.Pt(r.X, r.Y), picture.Pt(r.X-6*ux+2*uy, r.Y-6*uy-2*ux), picture.Pt(r.X-6*ux-2*uy, r.Y-6*uy+2*ux))
		p.Text(typeset.Layout(t, 9, typeset.Style{Italic: true}), r.X+4, r.Y-4, picture.TextStyle{Color: c.soft})
	}
	route := []struct {
		l string
		k [3]float64
	}{{"Γ", [3]float64{}}, {"X", [3]float64{2, 0, 0}}, {"W", [3]float64{2, 1, 0}}, {"K", [3]float64{1.5, 1.5, 0}}, {"Γ", [3]float64{}}, {"L", [3]float64{1, 1, 1}}}
	path.Reset()
	for i, s := range route {
		q, _ := project(s.k)
		if i == 0 {
			path.MoveTo(q.X, q.Y)
		} else {
			path.LineTo(q.X, q.Y)
		}
	}
	p.Stroke(&path, picture.Stroke{Color: gold, Width: 2.2, Join: picture.RoundJoin, Cap: picture.Round})
	for _, s := range route {
		q, _ := project(s.k)
		p.SetID(id)
		id++
		p.Circle(q.X, q.Y, 3, picture.Fill{Color: c.paper})
		p.Ring(q.X, q.Y, 3, picture.Stroke{Color: c.ink, Width: 1.1})
		p.Text(typeset.Layout(s.l, 11, typeset.Style{Bold: true}), q.X+5, q.Y-5, picture.TextStyle{Color: c.ink, Halo: c.halo, HaloWidth: 1.5})
	}
	p.SetID(0)
	p.End()
}

func sortAround(l []picture.Point, m picture.Point) {
	for i := range l {
		for j := i; j > 0 && math.Atan2(l[j].Y-m.Y, l[j].X-m.X) < math.Atan2(l[j-1].Y-m.Y, l[j-1].X-m.X); j-- {
			l[j], l[j-1] = l[j-1], l[j]
		}
	}
}

// bandPicture draws n fat bands of m points each: a ribbon, translucent, and a thin line in its middle.
func bandPicture(p *picture.Picture, w, h float64, n, m int, c colours) {
	p.Reset(w, h)
	p.Begin("bands")
	r := picture.R(44, 10, w-54, h-34)
	p.StrokeRect(r, picture.Stroke{Color: c.line, Width: 0.75})
	for _, f := range []float64{0.2, 0.35, 0.7} {
		x := r.X0 + f*r.W()
		p.Line(x, r.Y0, x, r.Y1, picture.Stroke{Color: c.line, Width: 0.5})
		p.Text(typeset.Layout("X", 9, typeset.Style{}), x, r.Y1+4, picture.TextStyle{Color: c.ink, Align: picture.Center | picture.CapTop})
	}
	for i := 0; i <= 8; i++ {
		y := r.Y0 + float64(i)*r.H()/8
		p.Line(r.X0-4, y, r.X0, y, picture.Stroke{Color: c.line, Width: 0.75})
		p.Text(typeset.Plain([]string{"7.5", "5.0", "2.5", "0.0", "−2.5", "−5.0", "−7.5", "−10.0", "−12.5"}[i], 8.5, typeset.Style{}), r.X0-7, y, picture.TextStyle{Color: c.ink, Align: picture.Right | picture.Middle})
	}
	p.Text(typeset.Layout("*E* − *E*_{VBM} (eV)", 9, typeset.Style{}), 10, h/2, picture.TextStyle{Color: c.ink, Align: picture.Center | picture.Middle, Angle: 90})
	p.PushClip(r)
	var path picture.Path
	for b := range n {
		at := func(i int) (x, y, half float64) {
			u := float64(i) / float64(m-1)
			x = r.X0 + u*r.W()
			y = r.Y0 + r.H()*(0.5+0.42*math.Sin(2*math.Pi*u*(1+float64(b%4)/2)+float64(b))*math.Cos(float64(b)*0.7+u))
			return x, y, 1 + 3*math.Abs(math.Sin(3*u+float64(b)))
		}
		path.Reset()
		for i := range m {
			x, y, d := at(i)
			if i == 0 {
				path.MoveTo(x, y-d)
			} else {
				path.LineTo(x, y-d)
			}
		}
		for i := m - 1; i >= 0; i-- {
			x, y, d := at(i)
			path.LineTo(x, y+d)
		}
		path.Close()
		p.SetID(picture.ID(b + 1))
		p.Fill(&path, picture.Fill{Color: []picture.Color{teal, brick, gold}[b%3]})
		path.Reset()
		for i := range m {
			x, y, _ := at(i)
			if i == 0 {
				path.MoveTo(x, y)
			} else {
				path.LineTo(x, y)
			}
		}
		p.Stroke(&path, picture.Stroke{Color: c.ink, Width: 0.8, Join: picture.RoundJoin})
	}
	p.SetID(0)
	p.PopClip()
	p.Line(r.X0, r.Centre().Y, r.X1, r.Centre().Y, picture.Stroke{Color: c.soft, Width: 0.75, Dash: picture.Dash{On: 4, Off: 3}})
	p.End()
}

// samplePicture has one of everything: hatches, joins, caps, dashes, text of all kinds and sizes, bars.
func samplePicture(p *picture.Picture, c colours) {
	p.Reset(420, 300)
	text := func(m string, size, x, y float64, s typeset.Style, col picture.Color) {
		p.Text(typeset.Layout(m, size, s), x, y, picture.TextStyle{Color: col})
	}
	p.Begin("sample")
	text("Ladder  at (0.731, 0, 0)", 11, 10, 18, typeset.Style{Bold: true}, c.ink)
	text("First-neighbour sp³s*: the transverse mass at the minimum is not reliable; empty bands above 6 eV are indicative.", 7.5, 10, 32, typeset.Style{}, c.soft)
	text(`Γ_{25}^{′}  Γ–X–W–K–Γ–L | U–X   [1\overline{1}0]  *E*_{F} = 11.519 eV  Å⁻¹  ½ ⅜ ¾  ⊥ ∥ ≤ ≈ → ▸ ▾ ✓ ⚠`, 10, 10, 48, typeset.Style{}, c.ink)
	for i, size := range []float64{6, 7, 8, 9, 10, 12, 14} {
		text("*E* = −10.073 eV ppσ sp³ Hamburg ΓΔΛΣ", size, 10, 64+float64(i)*14.5, typeset.Style{}, c.ink)
	}
	y := 168.0
	for i, v := range []float64{-0.694, 0.8, 2.464, -0.563, 2.901, -4.064} {
		text([]string{"on-site 3s", "on-site 3p", "on-site s\\*", "bonds ssσ", "bonds spσ", "bonds s\\*pσ"}[i], 8.5, 10, y+8, typeset.Style{}, c.ink)
		f := picture.Fill{Color: color.NRGBA{R: 38, G: 72, B: 112, A: 255}}
		if v > 0 {
			f = picture.Fill{Hatch: picture.Hatch{Color: pink, Angle: 45, Spacing: 3, Width: 0.8}}
		}
		r := picture.Span(180, y, 180+v*22, y+9)
		p.SetID(picture.ID(i + 1))
		p.FillRect(r, f)
		if v > 0 {
			p.StrokeRect(r, picture.Stroke{Color: pink, Width: 0.9})
		}
		p.SetID(0)
		y += 14
	}
	p.Line(180, 162, 180, y+2, picture.Stroke{Color: c.soft, Width: 0.75})
	var path picture.Path
	for i, j := range []picture.Join{picture.Miter, picture.RoundJoin, picture.BevelJoin} {
		path.Reset()
		path.Polyline(picture.Pt(270+50*float64(i), 100), picture.Pt(290+50*float64(i), 70), picture.Pt(300+50*float64(i), 100))
		p.Stroke(&path, picture.Stroke{Color: color.NRGBA{R: teal.R, G: teal.G, B: teal.B, A: 140}, Width: 8, Join: j, Cap: picture.Cap(i)})
		p.Stroke(&path, picture.Stroke{Color: c.ink, Width: 0.6})
	}
	path.Reset()
	path.Circle(310, 150, 28)
	p.Fill(&path, picture.Fill{Color: c.face, Hatch: picture.Hatch{Color: teal, Angle: 60, Spacing: 4, Width: 0.7}})
	p.Stroke(&path, picture.Stroke{Color: c.ink, Width: 1, Dash: picture.Dash{On: 4, Off: 2, On2: 1, Off2: 2}})
	path.Reset()
	path.RoundedRect(picture.R(350, 125, 60, 18), 5)
	p.Fill(&path, picture.Fill{Color: c.face})
	p.Stroke(&path, picture.Stroke{Color: c.line, Width: 0.75})
	p.Text(typeset.Layout("pin A", 8.5, typeset.Style{}), 380, 134, picture.TextStyle{Color: c.ink, Align: picture.Center | picture.Middle})
	path.Reset()
	path.MoveTo(290, 200)
	for i := 1; i <= 100; i++ {
		u := float64(i) / 100
		path.LineTo(290+110*u, 225-25*math.Sin(9*u)*(1-u))
	}
	p.Stroke(&path, picture.Stroke{Color: brick, Width: 5, Join: picture.RoundJoin})
	p.Stroke(&path, picture.Stroke{Color: c.ink, Width: 0.7})
	for i := range 8 {
		p.Line(290, 255+float64(i)*4, 400, 255+float64(i)*4, picture.Stroke{Color: c.ink, Width: 0.25 * float64(i+1), Dash: picture.Dash{On: float64(i), Off: 2}})
	}
	p.Text(typeset.Layout("turned 30°", 9, typeset.Style{}), 350, 190, picture.TextStyle{Color: c.soft, Angle: 30})
	p.End()
}

func TestDemo(t *testing.T) {
	dir := os.Getenv("BANDWRIGHT_SHOTS")
	if dir == "" {
		dir = t.TempDir()
	}
	for _, c := range []struct {
		name string
		c    colours
	}{{"light", light}, {"dark", dark}} {
		for _, scale := range []float64{1, 4. / 3, 2} {
			var p picture.Picture
			for i, draw := range []func(){
				func() { samplePicture(&p, c.c) },
				func() { zonePicture(&p, 300, 300, 0.5, c.c) },
				func() { bandPicture(&p, 420, 320, 8, 300, c.c) },
			} {
				draw()
				img := image.NewRGBA(image.Rect(0, 0, int(p.Width*scale), int(p.Height*scale)))
				Clear(img, c.c.paper)
				Draw(img, &p, scale)
				name := filepath.Join(dir, c.name+"-"+[]string{"sample", "zone", "bands"}[i]+"-"+map[float64]string{1: "1", 2: "2"}[scale]+".png")
				f, err := os.Create(name)
				if err != nil {
					t.Fatal(err)
				}
				if err := png.Encode(f, img); err != nil {
					t.Fatal(err)
				}
				if err := f.Close(); err != nil {
					t.Fatal(err)
				}
			}
		}
	}
}
