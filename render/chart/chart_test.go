package chart

import (
	"math"
	"sort"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"bandwright/render/picture"
)

func TestScaleThereAndBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.Float64Range(-1e3, 1e3)
		s := Scale{n.Draw(t, "lo"), n.Draw(t, "hi"), n.Draw(t, "at0"), n.Draw(t, "at1")}
		v := n.Draw(t, "v")
		if math.Abs(s.Hi-s.Lo) > 1e-3 && math.Abs(s.At1-s.At0) > 1e-3 {
			if got := s.Inv(s.At(v)); math.Abs(got-v) > 1e-6*(1+math.Abs(v)) {
				t.Fatalf("%v: %g comes back as %g", s, v, got)
			}
		}
	})
	if got := (Scale{1, 1, 5, 7}).At(3); got != 6 {
		t.Errorf("a scale without a range gives %g", got)
	}
}

// Steps of 1, 2 and 5 times a power of ten: common practice.
func TestTicks(t *testing.T) {
	for _, c := range []struct {
		lo, hi float64
		most   int
		want   string
	}{
		{-13, 8.4, 8, "−10 −5 0 5"}, {0, 1, 5, "0.0 0.2 0.4 0.6 0.8 1.0"}, {-0.25, 0.25, 5, "−0.2 −0.1 0.0 0.1 0.2"},
		{0, 0.003, 3, "0.000 0.001 0.002 0.003"}, {0, 4700, 4, "0 2000 4000"}, {8, -13, 8, "−10 −5 0 5"},
	} {
		var labels []string
		for _, tick := range Ticks(c.lo, c.hi, c.most) {
			if tick.Major {
				labels = append(labels, tick.Label)
			}
		}
		if got := strings.Join(labels, " "); got != c.want {
			t.Errorf("%g … %g: %s, want %s", c.lo, c.hi, got, c.want)
		}
	}
	for _, r := range [][2]float64{{1, 1}, {math.NaN(), 1}, {0, math.Inf(1)}, {1e20, 1e20 + 1}, {-1e308, 1e308}} {
		if list := Ticks(r[0], r[1], 5); len(list) > 1000 {
			t.Errorf("%v: %d ticks", r, len(list))
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		lo := rapid.Float64Range(-1e6, 1e6).Draw(t, "lo")
		hi := lo + math.Pow(10, rapid.Float64Range(-5, 6).Draw(t, "span"))
		most := rapid.IntRange(1, 12).Draw(t, "most")
		list := Ticks(lo, hi, most)
		majors := 0
		for i, tick := range list {
			if i > 0 && !(tick.Value > list[i-1].Value) {
				t.Fatalf("ticks do not ascend: %v", list)
			}
			if tick.Value < lo-1e-6*(hi-lo) || tick.Value > hi+1e-6*(hi-lo) {
				t.Fatalf("tick %g outside %g … %g", tick.Value, lo, hi)
			}
			if tick.Major {
				majors++
				if strings.Trim(tick.Label, "−0.") == "" && strings.Contains(tick.Label, "−") {
					t.Fatalf("a negative zero: %q", tick.Label)
				}
			}
		}
		if majors > most+1 {
			t.Fatalf("%d major ticks, %d wished", majors, most)
		}
	})
}

func TestSpreadLabels(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 12).Draw(t, "n")
		wished, heights := make([]float64, n), make([]float64, n)
		total := 0.0
		for i := range wished {
			wished[i] = rapid.Float64Range(-20, 120).Draw(t, "at")
			heights[i] = rapid.Float64Range(1, 12).Draw(t, "height")
			total += heights[i]
		}
		sort.Float64s(wished)
		gap := rapid.Float64Range(0, 2).Draw(t, "gap")
		lo, hi := 0.0, 100.0
		total += gap * float64(max(0, n-1))
		got := SpreadLabels(wished, heights, lo, hi, gap)
		if total > hi-lo {
			return // packed
		}
		cost := 0.0
		for i := range got {
			if got[i]-heights[i]/2 < lo-1e-9 || got[i]+heights[i]/2 > hi+1e-9 {
				t.Fatalf("label %d at %g leaves the range", i, got[i])
			}
			if i > 0 && got[i]-got[i-1] < (heights[i]+heights[i-1])/2+gap-1e-9 {
				t.Fatalf("labels %d and %d overlap: %v", i-1, i, got)
			}
			d := got[i] - max(lo, min(hi, wished[i]))
			cost += d * d
		}
		// No small shift of any run of labels that keeps the rules is better.
		for a := range got {
			for b := a + 1; b <= n; b++ {
				for _, d := range []float64{-0.01, 0.01} {
					moved := append([]float64(nil), got...)
					for i := a; i < b; i++ {
						moved[i] += d
					}
					fits, c := true, 0.0
					for i := range moved {
						fits = fits && moved[i]-heights[i]/2 >= lo-1e-9 && moved[i]+heights[i]/2 <= hi+1e-9 &&
							(i == 0 || moved[i]-moved[i-1] >= (heights[i]+heights[i-1])/2+gap-1e-9)
						e := moved[i] - max(lo, min(hi, wished[i]))
						c += e * e
					}
					if fits && c < cost-1e-6 {
						t.Fatalf("moving labels %d to %d by %g is better: %g < %g", a, b-1, d, c, cost)
					}
				}
			}
		}
	})
}

func flat() Plot {
	r := picture.R(0, 0, 100, 80)
	return Plot{Rect: r, X: Scale{0, 10, 0, 100}, Y: Scale{0, 8, 80, 0}}
}

func TestDegenerateCurves(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	fill := picture.Fill{Color: picture.Color{A: 255}}
	stroke := picture.Stroke{Color: picture.Color{A: 255}, Width: 1}
	for _, pl := range []Plot{flat(), {}, {Rect: picture.R(0, 0, 1, 1), X: Scale{nan, nan, 0, 1}, Y: Scale{0, inf, 0, 1}}} {
		for _, ys := range [][]float64{nil, {1}, {nan, nan, nan}, {1, nan, 2}, {inf, 1, -inf}, {1, 1, 1}} {
			xs := make([]float64, len(ys))
			for i := range xs {
				xs[i] = float64(i)
			}
			p := picture.New(100, 80)
			pl.Line(p, xs, ys, stroke, 1)
			pl.Ribbons(p, xs, ys, []Band{{Width: ys, Fill: fill}, {Width: nil, Fill: fill}}, 2)
			pl.TwoSided(p, xs, ys, ys, fill, fill, 3)
			pl.Area(p, ys, xs, ys, fill, 4)
			pl.YAxis(p, Ticks(pl.Y.Lo, pl.Y.Hi, 5), "*E*", AxisStyle{Size: 10, Title: 10})
			pl.XTicks(p, Ticks(pl.X.Lo, pl.X.Hi, 5), AxisStyle{Size: 10})
			pl.Frame(p, AxisStyle{})
			_ = p.Dump()
		}
	}
}

// A steep ribbon is as wide as a flat one, and strips lie side by side.
func TestRibbonWidth(t *testing.T) {
	pl := flat()
	fill := picture.Fill{Color: picture.Color{A: 255}}
	for _, slope := range []float64{0, 0.3, 0.8} {
		var xs, ys, w1, w2 []float64
		for i := range 41 {
			x := float64(i) / 4
			xs, ys = append(xs, x), append(ys, slope*x)
			w1, w2 = append(w1, 3), append(w2, 5)
		}
		p := picture.New(100, 80)
		pl.Ribbons(p, xs, ys, []Band{{w1, fill}, {w2, fill}}, 7)
		length := math.Hypot(100, slope*100)
		b := p.Bounds()
		// The box of a turned strip of length l and width w.
		if want := 100 + 8*math.Sin(math.Atan(slope)); math.Abs(b.W()-want) > 1e-6 {
			t.Errorf("slope %g: the ribbon's box is %g wide, want %g", slope, b.W(), want)
		}
		if want := slope*100 + 8*math.Cos(math.Atan(slope)); math.Abs(b.H()-want) > 1e-6 {
			t.Errorf("slope %g: the ribbon's box is %g high, want %g (length %g)", slope, b.H(), want, length)
		}
		if id, ok := p.HitTest(50, 80-slope*50, 0.5); !ok || id != 7 {
			t.Errorf("slope %g: the ribbon cannot be hit", slope)
		}
	}
}

func TestTwoSides(t *testing.T) {
	pl := flat()
	above, below := picture.Fill{Color: picture.Color{R: 9, A: 255}}, picture.Fill{Color: picture.Color{B: 9, A: 255}}
	xs, ys := []float64{0, 2, 4, 6, 8, 10}, []float64{4, 4, 4, 4, 4, 4}
	p := picture.New(100, 80)
	pl.TwoSided(p, xs, ys, []float64{5, 5, 5, -3, -3, -3}, above, below, 0)
	dump := p.Dump()
	if strings.Count(dump, "fill") != 2 {
		t.Fatalf("not two sides:\n%s", dump)
	}
	if b := p.Bounds(); math.Abs(b.Y0-35) > 1e-9 || math.Abs(b.Y1-43) > 1e-9 {
		t.Errorf("positive values rise to %g, negative ones sink to %g; the curve is at 40", b.Y0, b.Y1)
	}
}

// BenchmarkFatBands records ten bands of 400 points with four strips each: the
// content of a panel of bands, in a frame that has 16.7 ms. The peer beside it
// records the same as one polygon for each piece of each strip.
func BenchmarkFatBands(b *testing.B) {
	pl := Plot{Rect: picture.R(0, 0, 900, 700), X: Scale{0, 1, 0, 900}, Y: Scale{-10, 10, 700, 0}}
	xs := make([]float64, 400)
	ys := make([][]float64, 10)
	strips := make([]Band, 4)
	for i := range xs {
		xs[i] = float64(i) / 399
	}
	for n := range ys {
		ys[n] = make([]float64, len(xs))
		for i := range xs {
			ys[n][i] = 9 * math.Sin(float64(n)+5*xs[i])
		}
	}
	for s := range strips {
		strips[s] = Band{Width: make([]float64, len(xs)), Fill: picture.Fill{Color: picture.Color{A: 255}}}
		for i := range xs {
			strips[s].Width[i] = 1 + math.Sin(float64(s)+7*xs[i])
		}
	}
	p := picture.New(900, 700)
	b.Run("ribbons", func(b *testing.B) {
		for b.Loop() {
			p.Reset(900, 700)
			for n := range ys {
				pl.Ribbons(p, xs, ys[n], strips, 1)
			}
		}
	})
	b.Run("peer/pieces", func(b *testing.B) {
		for b.Loop() {
			p.Reset(900, 700)
			for n := range ys {
				for i := 1; i < len(xs); i++ {
					part := make([]Band, len(strips))
					for s := range part {
						part[s] = Band{strips[s].Width[i-1 : i+1], strips[s].Fill}
					}
					pl.Ribbons(p, xs[i-1:i+1], ys[n][i-1:i+1], part, 1)
				}
			}
		}
	})
}
