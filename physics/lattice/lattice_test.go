package lattice

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/go-gl/mathgl/mgl64"
	"pgregory.net/rapid"
)

const a0 = 5.431 // Å, silicon

func mustNew(t testing.TB, v [3]mgl64.Vec3) Lattice {
	t.Helper()
	l, err := New(v[0], v[1], v[2])
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func fcc(t testing.TB) Setting {
	h := a0 / 2
	return Setting{
		Lattice:      mustNew(t, [3]mgl64.Vec3{{0, h, h}, {h, 0, h}, {h, h, 0}}),
		Conventional: [3]mgl64.Vec3{{a0, 0, 0}, {0, a0, 0}, {0, 0, a0}},
		A:            a0, Bravais: "cF",
	}
}

func near(a, b [3]float64, tol float64) bool {
	for i := range a {
		if !(math.Abs(a[i]-b[i]) <= tol) {
			return false
		}
	}
	return true
}

func TestReciprocal(t *testing.T) {
	l := fcc(t).Lattice
	for i := range 3 {
		for j := range 3 {
			want := 0.0
			if i == j {
				want = 2 * math.Pi
			}
			if got := l.A(i).Dot(l.B(j)); math.Abs(got-want) > 1e-14 {
				t.Errorf("a%d·b%d = %v, want %v", i+1, j+1, got, want)
			}
		}
	}
	if want := a0 * a0 * a0 / 4; math.Abs(l.Volume()-want) > 1e-12 {
		t.Errorf("volume %v, want a³/4 = %v", l.Volume(), want)
	}
	if want := 4 * math.Pow(2*math.Pi/a0, 3); math.Abs(l.ZoneVolume()-want) > 1e-12 {
		t.Errorf("zone volume %v, want 4(2π/a)³ = %v", l.ZoneVolume(), want)
	}
	// The reciprocal lattice of fcc is bcc (common practice).
	if b := l.B(0); !near(b, mgl64.Vec3{-1, 1, 1}.Mul(2*math.Pi/a0), 1e-14) {
		t.Errorf("b1 = %v, want 2π/a (−1, 1, 1)", b)
	}
	// A left-handed cell has a positive volume too.
	if m := mustNew(t, [3]mgl64.Vec3{l.A(1), l.A(0), l.A(2)}); m.Volume() != l.Volume() || m.A(0).Dot(m.B(0)) < 6 {
		t.Errorf("left-handed: volume %v, a1·b1 %v", m.Volume(), m.A(0).Dot(m.B(0)))
	}
}

// Known points of the fcc zone in every frame (L. P. Bouckaert, R. Smoluchowski,
// E. Wigner, Phys. Rev. 50, 58 (1936); common practice).
func TestFrames(t *testing.T) {
	s := fcc(t)
	u := 2 * math.Pi / a0
	for _, test := range []struct {
		label     string
		primitive FracK
		cubic     [3]float64 // 2π/a
	}{
		{"X", FracK{.5, 0, .5}, [3]float64{0, 1, 0}},
		{"L", FracK{.5, .5, .5}, [3]float64{.5, .5, .5}},
		{"W", FracK{.5, .25, .75}, [3]float64{.5, 1, 0}},
		{"K", FracK{.375, .375, .75}, [3]float64{.75, .75, 0}},
		{"U", FracK{.625, .25, .625}, [3]float64{.25, 1, .25}},
	} {
		for frame, written := range map[Frame][3]float64{
			Primitive: test.primitive, Conventional: test.cubic, TwoPiOverA: test.cubic,
			InverseAngstrom: {test.cubic[0] * u, test.cubic[1] * u, test.cubic[2] * u},
		} {
			if got := s.ToFrac(frame, written); !near(got, test.primitive, 1e-14) {
				t.Errorf("%s in %s: read as %v, want %v", test.label, frame, got, test.primitive)
			}
			if got := s.FromFrac(frame, test.primitive); !near(got, written, 1e-14) {
				t.Errorf("%s in %s: written as %v, want %v", test.label, frame, got, written)
			}
		}
	}
}

func TestRoundTrips(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		number := rapid.Float64Range(-5, 5)
		var v [3]mgl64.Vec3
		var k [3]float64
		for i := range v {
			for j := range v[i] {
				v[i][j] = number.Draw(t, "v")
			}
			v[i][i] += 12 // far from flat
			k[i] = number.Draw(t, "k")
		}
		l, err := New(v[0], v[1], v[2])
		if err != nil {
			t.Skip()
		}
		s := Setting{Lattice: l, Conventional: [3]mgl64.Vec3{v[0].Add(v[1]), v[1].Sub(v[2]), v[2].Add(v[1]).Add(v[0])}, A: v[0].Len()}
		if !near(l.Frac(l.Cart(k)), k, 1e-11) {
			t.Errorf("k %v comes back as %v", k, l.Frac(l.Cart(k)))
		}
		if !near(l.Fraction(l.Position(k)), k, 1e-11) {
			t.Errorf("position %v comes back as %v", k, l.Fraction(l.Position(k)))
		}
		for _, f := range []Frame{Primitive, Conventional, TwoPiOverA, InverseAngstrom} {
			if got := s.FromFrac(f, s.ToFrac(f, k)); !near(got, k, 1e-9) {
				t.Errorf("%s: %v comes back as %v", f, k, got)
			}
		}
		// The phase of a Bloch wave does not depend on the frame: k·R/2π.
		r := [3]float64{1, -2, 3}
		phase := l.Cart(k).Vec().Dot(l.Position(r)) / (2 * math.Pi)
		if want := k[0] - 2*k[1] + 3*k[2]; math.Abs(phase-want) > 1e-10 {
			t.Errorf("k·R/2π = %v, want %v", phase, want)
		}
	})
}

func TestParseFrame(t *testing.T) {
	for text, want := range map[string]Frame{"": Primitive, "primitive": Primitive, "conventional": Conventional, "2pi/a": TwoPiOverA, "2π/a": TwoPiOverA, "1/Å": InverseAngstrom, "1/A": InverseAngstrom, "1/\u212b": InverseAngstrom} {
		if got, err := ParseFrame(text); err != nil || got != want {
			t.Errorf("%q: %v, %v", text, got, err)
		}
	}
	for _, f := range []Frame{Primitive, Conventional, TwoPiOverA, InverseAngstrom} {
		if got, err := ParseFrame(f.String()); err != nil || got != f {
			t.Errorf("%v comes back as %v, %v", f, got, err)
		}
	}
	if _, err := ParseFrame("cartesian"); err == nil || !strings.Contains(err.Error(), "2pi/a") {
		t.Errorf("unknown frame: %v", err)
	}
	if s := Frame(9).String(); s != "Frame(9)" {
		t.Errorf("Frame(9) is %q", s)
	}
}

func TestNewRefuses(t *testing.T) {
	x, y := mgl64.Vec3{1, 0, 0}, mgl64.Vec3{0, 1, 0}
	for _, test := range []struct {
		v    [3]mgl64.Vec3
		want string
	}{
		{[3]mgl64.Vec3{x, y, x.Add(y)}, "one plane"},
		{[3]mgl64.Vec3{x, x, y}, "one plane"},
		{[3]mgl64.Vec3{x, y, {1, 1, 1e-12}}, "one plane"},
		{[3]mgl64.Vec3{x, y, {}}, "a3"},
		{[3]mgl64.Vec3{{math.NaN(), 0, 0}, x, y}, "a1"},
		{[3]mgl64.Vec3{x, {0, math.Inf(-1), 0}, y}, "a2"},
		{[3]mgl64.Vec3{x, y, {1e200, 1e200, 1e200}}, ""},
	} {
		if _, err := New(test.v[0], test.v[1], test.v[2]); err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%v: %v, want %q", test.v, err, test.want)
		}
	}
}

// oblique replaces vectors by sums with others: another basis of the lattice.
func oblique(rng *rand.Rand, v [3]mgl64.Vec3, size int) [3]mgl64.Vec3 {
	for range 5 {
		if i, j := rng.IntN(3), rng.IntN(3); i != j {
			v[i] = v[i].Add(v[j].Mul(float64(rng.IntN(2*size+1) - size)))
		}
	}
	return v
}

func TestObtuse(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for range 5000 {
		var v [3]mgl64.Vec3
		for i := range v {
			v[i] = mgl64.Vec3{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}
		}
		det := math.Abs(v[0].Dot(v[1].Cross(v[2])))
		if det < 1e-3 {
			continue
		}
		s := Obtuse(oblique(rng, v, 5))
		var sum mgl64.Vec3
		for i := range 4 {
			sum = sum.Add(s.V[i])
			for j := range i {
				if d := s.V[i].Dot(s.V[j]); d > 1e-9*s.V[i].Len()*s.V[j].Len() {
					t.Fatalf("vectors %d and %d make an acute angle: %v", i, j, d)
				}
			}
		}
		if sum.Len() > 1e-8 {
			t.Fatalf("the sum is %v", sum)
		}
		if d := math.Abs(s.V[0].Dot(s.V[1].Cross(s.V[2]))); math.Abs(d-det) > 1e-6*det {
			t.Fatalf("cell volume %v, want %v", d, det)
		}
		// The shortest lattice vector is among the seven of the superbase (Conway,
		// Sloane 1992).
		shortest := math.Inf(1)
		for p := -4; p <= 4; p++ {
			for q := -4; q <= 4; q++ {
				for r := -4; r <= 4; r++ {
					g := v[0].Mul(float64(p)).Add(v[1].Mul(float64(q))).Add(v[2].Mul(float64(r)))
					if g.Len() > 0 {
						shortest = math.Min(shortest, g.Len())
					}
				}
			}
		}
		best := math.Inf(1)
		for i := range 4 {
			best = math.Min(best, s.V[i].Len())
			if i > 0 {
				best = math.Min(best, s.V[0].Add(s.V[i]).Len())
			}
		}
		if best > shortest*(1+1e-8) {
			t.Fatalf("shortest vector of the superbase %v, of the lattice at most %v", best, shortest)
		}
	}
}

func TestReduced(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 2))
	for range 500 {
		l, err := New(unpack(oblique(rng, [3]mgl64.Vec3{{3, 0, 0}, {.4, 4, 0}, {1, -1, 5}}, 9)))
		if err != nil {
			continue
		}
		r, n := l.Reduced()
		for i := range r {
			if got := l.Position([3]float64{float64(n[i][0]), float64(n[i][1]), float64(n[i][2])}); got.Sub(r[i]).Len() > 1e-9 {
				t.Fatalf("r%d = %v, but its coordinates give %v", i, r[i], got)
			}
		}
		// Lengths of the lattice's own short vectors.
		if r[0].Len()+r[1].Len()+r[2].Len() > 3+math.Hypot(.4, 4)+math.Sqrt(27)+1e-9 {
			t.Fatalf("not reduced: %v", r)
		}
	}
}

func unpack(v [3]mgl64.Vec3) (a, b, c mgl64.Vec3) { return v[0], v[1], v[2] }

func TestCubicSetting(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 3))
	bases := map[string][3]mgl64.Vec3{
		"cP": {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}, "cF": {{0, .5, .5}, {.5, 0, .5}, {.5, .5, 0}}, "cI": {{-.5, .5, .5}, {.5, -.5, .5}, {.5, .5, -.5}},
	}
	for want, base := range bases {
		for n := range 200 {
			turn := mgl64.QuatRotate(rng.Float64()*6, mgl64.Vec3{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}.Normalize()).Mat4().Mat3()
			if n%2 == 0 {
				turn = mgl64.Ident3()
			}
			var v [3]mgl64.Vec3
			for i := range v {
				v[i] = turn.Mul3x1(base[i]).Mul(a0)
			}
			l, err := New(unpack(oblique(rng, v, 6)))
			if err != nil {
				t.Fatal(err)
			}
			s, ok := CubicSetting(l)
			if !ok || s.Bravais != want || math.Abs(s.A-a0) > 1e-8 {
				t.Fatalf("%s recognised as %q, a = %v", want, s.Bravais, s.A)
			}
			for i, c := range s.Conventional {
				for j := range i {
					if math.Abs(c.Dot(s.Conventional[j])) > 1e-7 {
						t.Fatalf("axes %v are not at right angles", s.Conventional)
					}
				}
				want := mgl64.Vec3{}
				want[i] = a0
				if n%2 == 0 && c.Sub(want).Len() > 1e-8 {
					t.Fatalf("axis %d is %v, want %v", i, c, want)
				}
			}
		}
	}
	for _, v := range [][3]mgl64.Vec3{
		{{4, 0, 0}, {0, 4, 0}, {0, 0, 4.001}},
		{{-2, 2, 2.1}, {2, -2, 2.1}, {2, 2, -2.1}},
		{{1.5, -1.5 * math.Sqrt(3), 0}, {1.5, 1.5 * math.Sqrt(3), 0}, {0, 0, 5}},
		{{3, 0, 0}, {.3, 4, 0}, {.4, .7, 5}},
		{{4, 4, 0}, {-4, 4, 0}, {0, 0, 4}}, // tetragonal, c/a = 1/√2: has three equal right angles only in a sublattice
	} {
		if s, ok := CubicSetting(mustNew(t, v)); ok {
			t.Errorf("%v recognised as %s", v, s.Bravais)
		}
	}
}
