package path

import (
	"errors"
	"math"
	"strings"
	"testing"

	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
	"pgregory.net/rapid"
)

func silicon(tb testing.TB) lattice.Setting {
	tb.Helper()
	c, err := crystal.FromPrototype("diamond", []string{"Si"}, 5.431)
	if err != nil {
		tb.Fatal(err)
	}
	return c.Setting
}

func TestSpellings(t *testing.T) {
	s := silicon(t)
	for text, want := range map[string]string{
		"Γ X W K Γ L":                    "Γ–X–W–K–Γ–L",
		"G X W K Gamma L":                "Γ–X–W–K–Γ–L",
		`\Gamma-X-W`:                     "Γ–X–W",
		"Γ–X–W | U–X":                    "Γ–X–W | U–X",
		"Γ→L, K":                         "Γ–L–K",
		"0 0 0 0.5 0 0.5":                "Γ–X",
		"(0, 0, 0) (1/2, 0, 1/2)":        "Γ–X",
		"L 0.1 0.2 −0.3":                 "L–(0.1, 0.2, −0.3)",
		"L (0.1,0.2,-0.3) Γ 3/8 3/8 3/4": "L–(0.1, 0.2, −0.3)–Γ–K",
		"[.25 0 .25] X":                  "(0.25, 0, 0.25)–X",
		"  Γ \t X  ":                     "Γ–X",
		"Γ 1e-1 0 0":                     "Γ–(0.1, 0, 0)",
		"Γ 1 1 1":                        "Γ–(1, 1, 1)", // an equivalent of Γ is another place on a path
	} {
		p, err := Parse([]string{text}, lattice.Primitive, s)
		if err != nil {
			t.Errorf("%q: %v", text, err)
			continue
		}
		if got := p.String(); got != want {
			t.Errorf("%q reads as %s, want %s", text, got, want)
		}
	}
}

// X of the fcc lattice is at 2π/a (0,1,0), L at 2π/a (½,½,½) (common practice).
func TestFrames(t *testing.T) {
	s := silicon(t)
	u := 2 * math.Pi / s.A
	for _, test := range []struct {
		frame lattice.Frame
		x     [3]float64
	}{
		{lattice.Primitive, [3]float64{0.5, 0, 0.5}},
		{lattice.Conventional, [3]float64{0, 1, 0}},
		{lattice.TwoPiOverA, [3]float64{0, 1, 0}},
		{lattice.InverseAngstrom, [3]float64{0, u, 0}},
	} {
		p, err := Parse([]string{"Γ " + triple(test.x, " ")}, test.frame, s)
		if err != nil {
			t.Fatal(err)
		}
		k := p.Runs[0][1].K
		if got := s.Lattice.Cart(k).Vec(); math.Abs(got.Len()-u) > 1e-12 || math.Abs(got[1]-u) > 1e-12 {
			t.Errorf("%v in %v is %v Å⁻¹, want (0, %g, 0)", test.x, test.frame, got, u)
		}
		if p.Runs[0][1].Label != "X" {
			t.Errorf("%v in %v is called %s, want X", test.x, test.frame, p.Runs[0][1].Label)
		}
		back, err := Parse(p.Text(test.frame, s), test.frame, s)
		if err != nil || back.String() != p.String() {
			t.Errorf("written as %q, read back as %v, %v", p.Text(test.frame, s), back, err)
		}
	}
}

func TestFaults(t *testing.T) {
	s := silicon(t)
	for _, test := range []struct {
		legs      []string
		leg, item int
		offset    int
		says      []string
	}{
		{nil, -1, 0, 0, []string{"no legs"}},
		{[]string{""}, 0, 0, 0, []string{"leg 1", "empty"}},
		{[]string{"Γ X", "Γ H"}, 1, 2, 3, []string{"leg 2, point 2 (H)", "cF", "Γ", "X", "L", "W", "K", "U"}},
		{[]string{"Γ X X L"}, 0, 3, 5, []string{"same as the one before"}},
		{[]string{"Γ 0 0 0"}, 0, 2, 3, []string{"same"}},
		{[]string{"Γ"}, 0, 1, 0, []string{"two points"}},
		{[]string{"Γ X | L"}, 0, 3, 7, []string{"two points"}},
		{[]string{"| Γ X"}, 0, 0, 0, []string{"beside a break"}},
		{[]string{"Γ X |"}, 0, 2, 5, []string{"beside a break"}},
		{[]string{"Γ 0.5 0.5"}, 0, 2, 3, []string{"three numbers", "2"}},
		{[]string{"0.5 0.5 X"}, 0, 1, 0, []string{"three numbers"}},
		{[]string{"Γ 0.5 nan 0"}, 0, 2, 7, []string{"finite"}},
		{[]string{"Γ 0.5 1e999 0"}, 0, 2, 7, []string{"finite"}},
		{[]string{"Γ 0.5 -Inf 0"}, 0, 2, 7, []string{"finite"}},
		{[]string{"Γ 1/0 0 0"}, 0, 2, 3, []string{"finite"}},
		{[]string{"Γ 0.5.5 0 0"}, 0, 2, 3, []string{"not a number"}},
		{[]string{"Γ 1e308 1e308 1e308"}, 0, 2, 3, []string{"finite"}},
	} {
		frame := lattice.Primitive
		if strings.Contains(strings.Join(test.legs, ""), "1e308") {
			frame = lattice.TwoPiOverA
		}
		_, err := Parse(test.legs, frame, s)
		var e *Error
		if !errors.As(err, &e) {
			t.Errorf("%q: error is %v, want an *Error", test.legs, err)
			continue
		}
		if e.Leg != test.leg || e.Item != test.item || e.Offset != test.offset || e.Remedy == "" {
			t.Errorf("%q: leg %d, item %d, offset %d (%v), want %d, %d, %d", test.legs, e.Leg, e.Item, e.Offset, e, test.leg, test.item, test.offset)
		}
		for _, part := range test.says {
			if !strings.Contains(e.Error(), part) {
				t.Errorf("%q: message %q does not say %q", test.legs, e, part)
			}
		}
	}
}

func TestStandard(t *testing.T) {
	s := silicon(t)
	p, err := Standard(s)
	if err != nil {
		t.Fatal(err)
	}
	// W. Setyawan, S. Curtarolo, Comput. Mater. Sci. 49, 299 (2010), fcc.
	if got, want := p.String(), "Γ–X–W–K–Γ–L–U–W–L–K | U–X"; got != want {
		t.Errorf("standard fcc path is %s, want %s", got, want)
	}
	sampling := p.Sample(s.Lattice, 0.02)
	var labels []string
	for _, tick := range sampling.Ticks {
		labels = append(labels, tick.Label)
	}
	if got, want := strings.Join(labels, ","), "Γ,X,W,K,Γ,L,U,W,L,K | U,X"; got != want {
		t.Errorf("ticks %s, want %s", got, want)
	}
	// Γ–X is 2π/a long, Γ–L √3/2 of that.
	u := 2 * math.Pi / s.A
	if got := sampling.Legs[0].Length; math.Abs(got-u) > 1e-12 {
		t.Errorf("Γ–X is %g Å⁻¹, want %g", got, u)
	}
	if got := sampling.Legs[4].Length; math.Abs(got-u*math.Sqrt(3)/2) > 1e-12 {
		t.Errorf("Γ–L is %g Å⁻¹, want %g", got, u*math.Sqrt(3)/2)
	}
}

// Invariants of a sampling, for random paths in a random lattice.
func TestSampling(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-1, 1)
		vector := func(i int) (v [3]float64) {
			for j := range v {
				v[j] = x.Draw(t, "component")
			}
			v[i] += 3
			return v
		}
		l, err := lattice.New(vector(0), vector(1), vector(2))
		if err != nil {
			t.Skip("flat cell")
		}
		var p Path
		for range rapid.IntRange(1, 3).Draw(t, "runs") {
			var run []Point
			for range rapid.IntRange(2, 5).Draw(t, "points") {
				k := lattice.FracK{x.Draw(t, "k"), x.Draw(t, "k"), x.Draw(t, "k")}
				if len(run) > 0 && distance(run[len(run)-1].K, k) < 1e-3 {
					continue
				}
				run = append(run, Point{Label: "P", K: k})
			}
			if len(run) < 2 {
				t.Skip("equal points")
			}
			p.Runs = append(p.Runs, run)
		}
		step := rapid.Float64Range(0.02, 0.3).Draw(t, "step")
		s := p.Sample(l, step)
		legs := p.Legs()
		if len(s.Legs) != len(legs) || len(s.K) != len(s.X) || len(s.K) != len(s.Leg) {
			t.Fatalf("%d legs of %d, %d k, %d x, %d leg numbers", len(s.Legs), len(legs), len(s.K), len(s.X), len(s.Leg))
		}
		for i, span := range s.Legs {
			if s.K[span.First] != legs[i].From.K || s.K[span.Last] != legs[i].To.K {
				t.Fatalf("leg %d does not begin and end exactly at its points", i)
			}
			n := float64(span.Last - span.First)
			spacing := span.Length / n
			// The number of steps is the nearest whole number.
			if n > 1 && math.Abs(span.Length/step-n) > 0.5+1e-9 {
				t.Fatalf("leg %d of length %g has %g steps of %g", i, span.Length, n, step)
			}
			for j := span.First; j < span.Last; j++ {
				if d := s.X[j+1] - s.X[j]; math.Abs(d-spacing) > 1e-9 {
					t.Fatalf("leg %d: step %g, want %g", i, d, spacing)
				}
				d := l.Cart(lattice.FracK{s.K[j+1][0] - s.K[j][0], s.K[j+1][1] - s.K[j][1], s.K[j+1][2] - s.K[j][2]}).Vec().Len()
				if math.Abs(d-spacing) > 1e-9 {
					t.Fatalf("leg %d: neighbours %g Å⁻¹ apart, want %g", i, d, spacing)
				}
			}
		}
		for i, k := range s.K {
			if at, off, on := s.Nearest(l, k, 1e-9); !on {
				t.Fatalf("sample %d lies %g off its own path (at %g)", i, off, at)
			}
			if q := s.At(s.X[i]); distance(q, k) > 1e-9 && s.Index(s.X[i]) == i {
				t.Fatalf("At(%g) = %v, sample %d is %v", s.X[i], q, i, k)
			}
		}
	})
}

func TestNearestOffPath(t *testing.T) {
	s := silicon(t)
	p, err := Parse([]string{"Γ X"}, lattice.Primitive, s)
	if err != nil {
		t.Fatal(err)
	}
	sampling := p.Sample(s.Lattice, 0.05)
	u := 2 * math.Pi / s.A
	// 0.3 of Γ–X plus a reciprocal vector, shifted off the line by 0.01·2π/a.
	k := s.ToFrac(lattice.TwoPiOverA, [3]float64{0.01, 0.3, 0}).Add(lattice.FracK{1, -2, 3})
	x, off, on := sampling.Nearest(s.Lattice, k, 0.001)
	if math.Abs(x-0.3*u) > 1e-9 || math.Abs(off-0.01*u) > 1e-9 || on {
		t.Errorf("nearest at %g, %g off, on %v; want %g, %g, false", x, off, on, 0.3*u, 0.01*u)
	}
}

func TestStepOutOfBounds(t *testing.T) {
	s := silicon(t)
	p, err := Parse([]string{"Γ X"}, lattice.Primitive, s)
	if err != nil {
		t.Fatal(err)
	}
	for _, step := range []float64{math.NaN(), 1e-300} {
		if n := len(p.Sample(s.Lattice, step).K); n < 2 || n > maxPoints+1 {
			t.Errorf("step %g gives %d points", step, n)
		}
	}
	if n := len(p.Sample(s.Lattice, math.Inf(1)).K); n != 2 {
		t.Errorf("an infinite step gives %d points, want the two ends", n)
	}
}

func FuzzParse(f *testing.F) {
	s := silicon(f)
	for _, text := range []string{"Γ X W", "0.5 0 0.5 L", "Γ|X", "(1/3,2/3,−1)", "Γ-X", "G–"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		p, err := Parse([]string{text}, lattice.Primitive, s)
		if err != nil {
			var e *Error
			if !errors.As(err, &e) || e.Remedy == "" || e.Offset > len(text) || e.Error() == "" {
				t.Fatalf("%q: %#v", text, err)
			}
			return
		}
		back, err := Parse(p.Text(lattice.Primitive, s), lattice.Primitive, s)
		if err != nil || len(back.Legs()) != len(p.Legs()) {
			t.Fatalf("%q: written as %q and read back as %v, %v", text, p.Text(lattice.Primitive, s), back, err)
		}
	})
}
