package raster

import (
	"image"
	"image/color"
	"math"
	"math/rand/v2"
	"testing"

	"bandwright/render/picture"
	"bandwright/render/typeset"
)

var black = color.NRGBA{A: 255}

// ink draws p on white and returns how black every pixel is, 0…1.
func ink(p *picture.Picture, w, h int, scale float64) []float64 {
	img := image.NewRGBA(image.Rect(0, 0, w, h))
	Clear(img, color.White)
	new(Rasteriser).Draw(img, p, scale)
	out := make([]float64, w*h)
	for i := range out {
		out[i] = 1 - float64(img.Pix[4*i])/255
	}
	return out
}

func sum(v []float64) (s float64) {
	for _, x := range v {
		s += x
	}
	return s
}

// sampled is the slow and obvious coverage: n × n points in every pixel.
func sampled(w, h, n int, inside func(x, y float64) bool) []float64 {
	out := make([]float64, w*h)
	for y := range h {
		for x := range w {
			hits := 0
			for i := range n * n {
				if inside(float64(x)+(float64(i%n)+0.5)/float64(n), float64(y)+(float64(i/n)+0.5)/float64(n)) {
					hits++
				}
			}
			out[y*w+x] = float64(hits) / float64(n*n)
		}
	}
	return out
}

func winding(pts []picture.Point, x, y float64) (n int) {
	for i, a := range pts {
		b := pts[(i+1)%len(pts)]
		if (a.Y <= y) != (b.Y <= y) && x < a.X+(y-a.Y)*(b.X-a.X)/(b.Y-a.Y) {
			if a.Y <= y {
				n++
			} else {
				n--
			}
		}
	}
	return n
}

func compare(t *testing.T, what string, got, want []float64, w int, worst, mean float64) {
	t.Helper()
	total, bad, at := 0.0, 0.0, 0
	for i := range got {
		d := math.Abs(got[i] - want[i])
		total += d
		if d > bad {
			bad, at = d, i
		}
	}
	if bad > worst || total/float64(len(got)) > mean {
		t.Errorf("%s: worst difference %.3f at (%d, %d): %.3f, want %.3f; mean %.5f", what, bad, at%w, at/w, got[at], want[at], total/float64(len(got)))
	}
}

func TestFillsAgainstSampling(t *testing.T) {
	const w, h = 48, 40
	r := rand.New(rand.NewPCG(1, 2))
	for trial := range 60 {
		// Triangles and quadrilaterals that may leave the image on every side.
		pts := make([]picture.Point, 3+trial%2)
		for i := range pts {
			pts[i] = picture.Pt(r.Float64()*w*1.6-0.3*w, r.Float64()*h*1.6-0.3*h)
		}
		var p picture.Picture
		p.Polygon(picture.Fill{Color: black}, pts...)
		want := sampled(w, h, 16, func(x, y float64) bool { return winding(pts, x, y) != 0 })
		// Where a quadrilateral crosses itself two senses meet in one pixel: there area is not coverage.
		worst := 0.04
		if len(pts) == 4 {
			worst = 0.6
		}
		compare(t, "polygon", ink(&p, w, h, 1), want, w, worst, 0.004)
	}
}

func TestFillRules(t *testing.T) {
	const w, h = 60, 60
	star := make([]picture.Point, 5) // its middle is wound twice
	for i := range star {
		a := float64(i)*4*math.Pi/5 - math.Pi/2
		star[i] = picture.Pt(30+27*math.Cos(a), 30+27*math.Sin(a))
	}
	for _, evenOdd := range []bool{false, true} {
		var p picture.Picture
		p.Polygon(picture.Fill{Color: black, EvenOdd: evenOdd}, star...)
		want := sampled(w, h, 16, func(x, y float64) bool {
			n := winding(star, x, y)
			return n != 0 && !(evenOdd && n%2 == 0)
		})
		compare(t, "star", ink(&p, w, h, 1), want, w, 0.45, 0.004)
	}
}

func TestCirclesHaveTheirArea(t *testing.T) {
	for _, radius := range []float64{0.7, 2, 3.3, 20, 70} {
		var p picture.Picture
		p.Circle(80.3, 79.6, radius, picture.Fill{Color: black})
		if got, want := sum(ink(&p, 160, 160, 1)), math.Pi*radius*radius; math.Abs(got-want) > 0.01*want+0.05 {
			t.Errorf("radius %g: area %.3f, want %.3f", radius, got, want)
		}
	}
}

// A stroke with round joins and caps covers what is nearer to the line than half the width.
func TestStrokesAgainstSampling(t *testing.T) {
	if testing.Short() {
		t.Skip("sampling is slow")
	}
	const w, h = 64, 48
	r := rand.New(rand.NewPCG(3, 4))
	for trial := range 40 {
		pts := make([]picture.Point, 2+trial%5)
		for i := range pts {
			pts[i] = picture.Pt(r.Float64()*w*1.4-0.2*w, r.Float64()*h*1.4-0.2*h)
		}
		width := []float64{0.6, 1, 2.5, 7, 15}[trial/3%5]
		var p picture.Picture
		p.Polyline(picture.Stroke{Color: black, Width: width, Cap: picture.Round, Join: picture.RoundJoin}, pts...)
		want := sampled(w, h, 16, func(x, y float64) bool {
			for i := 1; i < len(pts); i++ {
				if distance(picture.Pt(x, y), pts[i-1], pts[i]) <= width/2 {
					return true
				}
			}
			return false
		})
		// Parts that meet in one pixel add up: a thin line shows it most, at its sharp corners and crossings.
		compare(t, "stroke", ink(&p, w, h, 1), want, w, 0.55, 0.006)
	}
}

func distance(p, a, b picture.Point) float64 {
	dx, dy := b.X-a.X, b.Y-a.Y
	t := min(1, max(0, ((p.X-a.X)*dx+(p.Y-a.Y)*dy)/(dx*dx+dy*dy)))
	return math.Hypot(p.X-a.X-t*dx, p.Y-a.Y-t*dy)
}

// Smooth curves, where the two sides are joined on half angles, follow the same rule closely.
func TestSmoothStrokeAgainstSampling(t *testing.T) {
	if testing.Short() {
		t.Skip("sampling is slow")
	}
	const w, h = 100, 60
	var pts []picture.Point
	for i := range 200 {
		u := float64(i) / 199
		pts = append(pts, picture.Pt(6+88*u, 30+20*math.Sin(9*u)))
	}
	for _, width := range []float64{1.5, 9} {
		var p picture.Picture
		p.Polyline(picture.Stroke{Color: black, Width: width, Cap: picture.Round}, pts...)
		want := sampled(w, h, 16, func(x, y float64) bool {
			for i := 1; i < len(pts); i++ {
				if math.Abs(pts[i].X-x) < 10 && distance(picture.Pt(x, y), pts[i-1], pts[i]) <= width/2 {
					return true
				}
			}
			return false
		})
		compare(t, "curve", ink(&p, w, h, 1), want, w, 0.09, 0.003)
	}
}

func TestJoinsAndCapsHaveTheirArea(t *testing.T) {
	// A right angle with arms of 30 and a width of 8, off the pixel grid and turned so that nothing snaps.
	for _, c := range []struct {
		join picture.Join
		cap  picture.Cap
		want float64
	}{
		{picture.Miter, picture.Butt, 2*30*8 + 16 - 16}, // the square outside, less the one counted twice
		{picture.BevelJoin, picture.Butt, 2*30*8 + 8 - 16},
		{picture.RoundJoin, picture.Butt, 2*30*8 + 4*math.Pi - 16},
		{picture.Miter, picture.Square, 2*30*8 + 2*32},
		{picture.Miter, picture.Round, 2*30*8 + 16*math.Pi},
	} {
		cos, sin := math.Cos(0.3), math.Sin(0.3)
		var p picture.Picture
		p.Polyline(picture.Stroke{Color: black, Width: 8, Join: c.join, Cap: c.cap},
			picture.Pt(40.3+30*cos, 40.7+30*sin), picture.Pt(40.3, 40.7), picture.Pt(40.3-30*sin, 40.7+30*cos))
		if got := sum(ink(&p, 90, 90, 1)); math.Abs(got-c.want) > 2 {
			t.Errorf("join %d, cap %d: area %.2f, want %.2f", c.join, c.cap, got, c.want)
		}
	}
}

func TestMiterLimit(t *testing.T) {
	// Miter length over width is 1/sin(half the angle between the arms): 4 at 29°.
	for _, c := range []struct {
		degrees float64
		pointed bool
	}{{40, true}, {31, true}, {27, false}, {10, false}} {
		a := c.degrees * math.Pi / 360
		var p picture.Picture
		p.Polyline(picture.Stroke{Color: black, Width: 4}, picture.Pt(90, 50-60*math.Tan(a)), picture.Pt(30, 50), picture.Pt(90, 50+60*math.Tan(a)))
		v := ink(&p, 100, 100, 1)
		tip := 30 - 2/math.Sin(a) // where the point would be
		reached := v[50*100+int(tip+1.5)] > 0.2
		if reached != c.pointed {
			t.Errorf("at %g° the corner is pointed: %v", c.degrees, reached)
		}
	}
}

func TestDashes(t *testing.T) {
	length := func(d picture.Dash, cap picture.Cap) float64 {
		var p picture.Picture
		p.Line(10.3, 20.2, 210.3, 20.2001, picture.Stroke{Color: black, Width: 2, Dash: d, Cap: cap})
		return sum(ink(&p, 240, 40, 1)) / 2
	}
	for _, c := range []struct {
		d    picture.Dash
		want float64
	}{
		{picture.Dash{On: 6, Off: 4}, 120}, {picture.Dash{On: 6, Off: 4, On2: 1, Off2: 9}, 70},
		{picture.Dash{On: 10, Off: 190, Phase: 5}, 5 + 5}, {picture.Dash{On: 10, Off: 190, Phase: -20}, 10},
		{picture.Dash{}, 200}, {picture.Dash{On: 5}, 200}, {picture.Dash{On: math.NaN(), Off: 2}, 200},
	} {
		if got := length(c.d, picture.Butt); math.Abs(got-c.want) > 0.5 {
			t.Errorf("%+v draws %.2f of 200, want %g", c.d, got, c.want)
		}
	}
	if got := length(picture.Dash{Off: 10}, picture.Butt); got > 0.01 {
		t.Errorf("dashes without length and caps draw %g", got)
	}
	if got, want := length(picture.Dash{Off: 10}, picture.Round), 21*math.Pi/2; math.Abs(got-want) > 1 {
		t.Errorf("round dots cover %g, want %g", got, want)
	}
}

// Dashes far outside the view are passed over, and those inside are where they would be.
func TestDashesOfALongLine(t *testing.T) {
	d := picture.Dash{On: 7, Off: 5}
	var far, near picture.Picture
	far.Line(-1.2e9, 20.5, 1.2e9, 30.5, picture.Stroke{Color: black, Width: 3, Dash: d})
	y := func(x float64) float64 { return 25.5 + 5*x/1.2e9 }
	d.Phase = math.Mod(1.2e9-100, 12) // along x: the slope adds less than a millionth
	near.Line(-100, y(-100), 300, y(300), picture.Stroke{Color: black, Width: 3, Dash: d})
	compare(t, "long dashed line", ink(&far, 200, 50, 1), ink(&near, 200, 50, 1), 200, 0.02, 0.001)
}

func TestCrossingsAreBlendedOnce(t *testing.T) {
	half := color.NRGBA{A: 128}
	var p picture.Picture
	var pts []picture.Point
	for i := range 300 {
		a := float64(i) * 0.05
		pts = append(pts, picture.Pt(50+35*math.Sin(2*a), 50+35*math.Sin(3*a)))
	}
	p.Polyline(picture.Stroke{Color: half, Width: 6, Join: picture.RoundJoin}, pts...)
	for i, v := range ink(&p, 100, 100, 1) {
		if v > 129.0/255 {
			t.Fatalf("pixel (%d, %d) is %.3f", i%100, i/100, v)
		}
	}
}

func TestBlendIsExact(t *testing.T) {
	var p paint
	for a := range uint32(256) {
		for _, d := range []uint32{0, 1, 77, 128, 200, 255} {
			for _, s := range []uint8{0, 13, 128, 255} {
				p.set(color.NRGBA{R: s, G: s, B: s, A: 255})
				want := uint32(math.Round((float64(s)*float64(a) + float64(d)*float64(255-a)) / 255))
				got := p.blend(d|d<<8|d<<16|255<<24, a)
				if got != want|want<<8|want<<16|255<<24 {
					t.Fatalf("%d over %d with %d: %08x, want %02x", s, d, a, got, want)
				}
				// A run blends like single pixels, whatever its length.
				img := image.NewRGBA(image.Rect(0, 0, 5, 1))
				for i := range 5 {
					copy(img.Pix[4*i:], []uint8{uint8(d), uint8(d), uint8(d), 255})
				}
				p.dst, p.alpha = img, 255
				p.run(0, 0, 5, uint8(a))
				for i := range 20 {
					if i%4 < 3 && img.Pix[i] != uint8(want) || i%4 == 3 && img.Pix[i] != 255 {
						t.Fatalf("run of %d over %d with %d: %v, want %d", s, d, a, img.Pix, want)
					}
				}
			}
		}
	}
}

func TestClip(t *testing.T) {
	var all, cut picture.Picture
	samplePicture(&all, light)
	cut.PushClip(picture.R(60, 40, 250, 150))
	cut.Append(&all, 0, 0)
	cut.PopClip()
	full, part := ink(&all, 420, 300, 1), ink(&cut, 420, 300, 1)
	for i := range full {
		x, y := i%420, i/420
		want := 0.0
		if x >= 60 && x < 310 && y >= 40 && y < 190 {
			want = full[i]
		}
		if math.Abs(part[i]-want) > 1.5/255 {
			t.Fatalf("pixel (%d, %d) is %.3f, want %.3f", x, y, part[i], want)
		}
	}
}

// What is drawn does not depend on where the image ends.
func TestMovedPictureIsTheSame(t *testing.T) {
	var p, q picture.Picture
	samplePicture(&p, light)
	q.Append(&p, -150, -90)
	full, part := ink(&p, 420, 300, 1), ink(&q, 200, 150, 1)
	for y := range 150 {
		for x := range 200 {
			if d := math.Abs(part[y*200+x] - full[(y+90)*420+x+150]); d > 2.5/255 {
				t.Fatalf("pixel (%d, %d) is %.3f, want %.3f", x, y, part[y*200+x], full[(y+90)*420+x+150])
			}
		}
	}
}

func TestOnlyTheImageIsWritten(t *testing.T) {
	whole := image.NewRGBA(image.Rect(0, 0, 200, 160))
	Clear(whole, color.White)
	part := whole.SubImage(image.Rect(50, 40, 150, 120)).(*image.RGBA)
	var p picture.Picture
	p.FillRect(picture.R(-500, -500, 1000, 1000), picture.Fill{Color: black})
	Draw(part, &p, 1.5)
	for y := range 160 {
		for x := range 200 {
			in := image.Pt(x, y).In(part.Rect)
			if got := whole.RGBAAt(x, y).R == 0; got != in {
				t.Fatalf("pixel (%d, %d) painted: %v", x, y, got)
			}
		}
	}
}

func TestRulesAreCrisp(t *testing.T) {
	for _, scale := range []float64{1, 1.25, 4. / 3, 2} {
		var p picture.Picture
		p.Line(3.3, 10.1, 50.2, 10.1, picture.Stroke{Color: black, Width: 0.75})
		p.Line(20.7, 20, 20.7, 40, picture.Stroke{Color: black, Width: 1})
		p.FillRect(picture.R(30.2, 20.4, 9.7, 7.1), picture.Fill{Color: black})
		p.StrokeRect(picture.R(45.2, 20.4, 9.7, 7.1), picture.Stroke{Color: black, Width: 0.75})
		for i, v := range ink(&p, 120, 90, scale) {
			if v > 0.01 && v < 0.99 {
				t.Fatalf("scale %g: pixel %d is grey (%.2f)", scale, i, v)
			}
		}
	}
	// A bar too thin for a pixel is pale rather than gone.
	var p picture.Picture
	p.FillRect(picture.R(10.1, 10, 0.2, 10), picture.Fill{Color: black})
	if got := sum(ink(&p, 40, 40, 1)); math.Abs(got-2) > 0.1 {
		t.Errorf("a bar of 0.2 × 10 has ink %g", got)
	}
}

func TestTextStandsOnPixels(t *testing.T) {
	var p picture.Picture
	l := typeset.Plain("EHTLFI", 9, typeset.Style{})
	p.Text(l, 5.3, 20.2, picture.TextStyle{Color: black})
	v := ink(&p, 80, 40, 4./3)
	// Row above the baseline inked, row below it clean; likewise at the top.
	base, top := int(math.Round(20.2*4/3)), int(math.Round(20.2*4/3))-int(math.Round(l.Cap*4/3))
	row := func(y int) float64 { return sum(v[y*80 : (y+1)*80]) }
	if row(base) > 0.05 || row(base-1) < 5 || row(top-1) > 0.05 || row(top) < 5 {
		t.Errorf("ink of rows at the baseline %.2f | %.2f, at the top %.2f | %.2f", row(base-1), row(base), row(top-1), row(top))
	}
}

func TestTurnedTextIsTheSameTurned(t *testing.T) {
	l := typeset.Layout("E_{F} (eV) Γ", 9, typeset.Style{})
	draw := func(angle float64) []float64 {
		var p picture.Picture
		p.Text(l, 60, 60, picture.TextStyle{Color: black, Angle: angle})
		return ink(&p, 120, 120, 1)
	}
	level := draw(0)
	for k, angle := range []float64{90, 180, 270} {
		got := draw(angle)
		for y := range 120 {
			for x := range 120 {
				u, v := x, y
				for range k + 1 { // back by quarter turns about the middle
					u, v = 119-v, u
				}
				if math.Abs(got[y*120+x]-level[v*120+u]) > 0.02 {
					t.Fatalf("%g°: pixel (%d, %d) is %.3f, want %.3f", angle, x, y, got[y*120+x], level[v*120+u])
				}
			}
		}
	}
}

func TestHatchCoversItsShare(t *testing.T) {
	for _, angle := range []float64{0, 30, 45, 90, 135, -60} {
		var p picture.Picture
		p.FillRect(picture.R(10, 10, 100, 100), picture.Fill{Hatch: picture.Hatch{Color: black, Angle: angle, Spacing: 5, Width: 1.2}})
		if got := sum(ink(&p, 120, 120, 1)) / 10000; math.Abs(got-0.24) > 0.01 {
			t.Errorf("%g°: hatch covers %.4f, want 0.24", angle, got)
		}
	}
	// The line through the origin of the hatch runs as its angle says: 45° rises to the right.
	var p picture.Picture
	p.FillRect(picture.R(0, 0, 60, 60), picture.Fill{Hatch: picture.Hatch{Color: black, Angle: 45, Spacing: 40, Width: 4, Origin: picture.Pt(30, 30)}})
	v := ink(&p, 60, 60, 1)
	if v[20*60+39] < 0.9 || v[39*60+20] < 0.9 || v[20*60+20] > 0.1 {
		t.Errorf("a hatch at 45°: %.2f %.2f on the line, %.2f off it", v[20*60+39], v[39*60+20], v[20*60+20])
	}
}

func TestImageIsPlaced(t *testing.T) {
	img := image.NewRGBA(image.Rect(0, 0, 4, 4))
	Clear(img, color.Black)
	for _, scale := range []float64{1, 2} {
		var p picture.Picture
		p.PushClip(picture.R(0, 0, 12, 100))
		p.Image(img, picture.R(10, 10, 4, 4))
		if got, want := sum(ink(&p, 60, 60, scale)), 8*scale*scale; math.Abs(got-want) > 0.1 {
			t.Errorf("scale %g: image covers %g, want %g", scale, got, want)
		}
	}
}

// randomPicture draws anything, sensible or not.
func randomPicture(p *picture.Picture, r *rand.Rand) {
	p.Reset(100, 100)
	number := func() float64 {
		switch r.IntN(30) {
		case 0:
			return math.NaN()
		case 1:
			return math.Inf(1 - 2*r.IntN(2))
		case 2:
			return (r.Float64() - 0.5) * 1e300
		case 3:
			return (r.Float64() - 0.5) * 1e7
		case 4:
			return 0
		}
		return r.Float64()*160 - 30
	}
	for range 1 + r.IntN(12) {
		var path picture.Path
		path.MoveTo(r.Float64()*100, r.Float64()*100)
		for range r.IntN(12) {
			switch r.IntN(6) {
			case 0:
				path.CubicTo(number(), number(), number(), number(), number(), number())
			case 1:
				path.Close()
				path.MoveTo(50, number()*0+r.Float64()*100)
				path.LineTo(number(), 3)
			case 2:
				path.Circle(number(), number(), number())
				path.MoveTo(1, 1)
			default:
				path.LineTo(number(), number())
			}
		}
		c := color.NRGBA{R: uint8(r.Uint32()), A: uint8(r.Uint32())}
		switch r.IntN(5) {
		case 0:
			p.Fill(&path, picture.Fill{Color: c, EvenOdd: r.IntN(2) == 0, Crisp: r.IntN(2) == 0, Hatch: picture.Hatch{Color: c, Angle: number(), Spacing: number(), Width: number()}})
		case 1:
			p.Text(typeset.Layout("a_{b}Γ", number(), typeset.Style{}), number(), number(), picture.TextStyle{Color: c, Angle: float64(r.IntN(9)) * 45, Halo: c, HaloWidth: float64(r.IntN(3))})
		case 2:
			p.PushClip(picture.Span(number(), number(), number(), number()))
		default:
			p.Stroke(&path, picture.Stroke{Color: c, Width: math.Abs(number()) / 4, Cap: picture.Cap(r.IntN(3)), Join: picture.Join(r.IntN(3)), Crisp: r.IntN(4) == 0,
				Dash: picture.Dash{On: number(), Off: number(), On2: float64(r.IntN(3)), Phase: number()}})
		}
	}
}

// Whatever is drawn, nothing panics, the buffer is clean for the next shape, and the next picture is as from a new one.
func TestAnyPictureLeavesTheRasteriserClean(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	var used Rasteriser
	var p, sample picture.Picture
	samplePicture(&sample, light)
	want := image.NewRGBA(image.Rect(0, 0, 420, 300))
	new(Rasteriser).Draw(want, &sample, 1)
	n := 3000
	if testing.Short() {
		n = 300
	}
	for i := range n {
		randomPicture(&p, r)
		img := image.NewRGBA(image.Rect(0, 0, 1+r.IntN(120), 1+r.IntN(120)))
		used.Draw(img, &p, []float64{1, 2, 0.5, 4. / 3}[i%4])
		for j, v := range used.cover.acc[:cap(used.cover.acc)] {
			if v != 0 {
				t.Fatalf("picture %d leaves %g at %d\n%s", i, v, j, p.Dump())
			}
		}
	}
	got := image.NewRGBA(want.Rect)
	used.Draw(got, &sample, 1)
	for i := range got.Pix {
		if got.Pix[i] != want.Pix[i] {
			t.Fatalf("byte %d is %d after other pictures, %d at first", i, got.Pix[i], want.Pix[i])
		}
	}
}

func TestOddScalesDrawNothing(t *testing.T) {
	var p picture.Picture
	p.FillRect(picture.R(0, 0, 10, 10), picture.Fill{Color: black})
	for _, s := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if sum(ink(&p, 10, 10, s)) != 0 {
			t.Errorf("scale %g draws", s)
		}
	}
}

func TestDrawingAgainAllocatesNextToNothing(t *testing.T) {
	var p picture.Picture
	var r Rasteriser
	img := image.NewRGBA(image.Rect(0, 0, 500, 400))
	bandPicture(&p, 500, 400, 10, 200, light)
	r.Draw(img, &p, 1)
	if n := testing.AllocsPerRun(10, func() { r.Draw(img, &p, 1) }); n > 20 {
		t.Errorf("%g allocations for a frame", n)
	}
}
