package zone

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
	"bandwright/physics/symmetry"
)

func prototype(t testing.TB, name string, elements ...string) *crystal.Crystal {
	t.Helper()
	c, err := crystal.FromPrototype(name, elements, 5.4)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

func mustFirst(t testing.TB, l lattice.Lattice) *Zone {
	t.Helper()
	z, err := First(l)
	if err != nil {
		t.Fatal(err)
	}
	return z
}

// Shapes of the cubic zones (common practice; C. Kittel, Introduction to Solid
// State Physics, chapter 2): truncated octahedron, rhombic dodecahedron, cube.
func TestCubicZones(t *testing.T) {
	for _, test := range []struct {
		name                   string
		faces, vertices, edges int
		loops                  map[int]int // faces by number of corners
	}{
		{"fcc", 14, 24, 36, map[int]int{4: 6, 6: 8}},
		{"bcc", 12, 14, 24, map[int]int{4: 12}},
		{"sc", 6, 8, 12, map[int]int{4: 6}},
	} {
		c := prototype(t, test.name, "Al")
		z := mustFirst(t, c.Lattice())
		if len(z.Faces) != test.faces || len(z.Vertices) != test.vertices || len(z.Edges) != test.edges {
			t.Errorf("%s: %d faces, %d vertices, %d edges; want %d, %d, %d", test.name, len(z.Faces), len(z.Vertices), len(z.Edges), test.faces, test.vertices, test.edges)
		}
		loops := map[int]int{}
		for _, f := range z.Faces {
			loops[len(f.Loop)]++
		}
		for n, want := range test.loops {
			if loops[n] != want {
				t.Errorf("%s: %d faces of %d corners, want %d", test.name, loops[n], n, want)
			}
		}
		// (2π)³/V with V the cell volume a³/n.
		n := map[string]float64{"fcc": 4, "bcc": 2, "sc": 1}[test.name]
		want := math.Pow(2*math.Pi/5.4, 3) * n
		if math.Abs(z.Volume()-want) > 1e-13*want {
			t.Errorf("%s: volume %v, want %v", test.name, z.Volume(), want)
		}
	}
	// Hexagonal: a prism of 8 faces.
	l, _ := lattice.New(mgl64.Vec3{1.5, -1.5 * math.Sqrt(3), 0}, mgl64.Vec3{1.5, 1.5 * math.Sqrt(3), 0}, mgl64.Vec3{0, 0, 5})
	if z := mustFirst(t, l); len(z.Faces) != 8 || len(z.Vertices) != 12 {
		t.Errorf("hexagonal: %d faces, %d vertices, want 8, 12", len(z.Faces), len(z.Vertices))
	}
}

// randomLattice returns lattices of many kinds: general, nearly cubic, plates,
// needles, and all of these in very oblique vectors.
func randomLattice(rng *rand.Rand, n int) (lattice.Lattice, error) {
	var v [3]mgl64.Vec3
	switch n % 5 {
	case 0:
		for i := range v {
			v[i] = mgl64.Vec3{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}.Mul(4)
		}
	case 1, 2:
		base := [...][3]mgl64.Vec3{
			{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}, {{0, .5, .5}, {.5, 0, .5}, {.5, .5, 0}}, {{-.5, .5, .5}, {.5, -.5, .5}, {.5, .5, -.5}},
		}[rng.IntN(3)]
		size := math.Pow(10, -15+14*rng.Float64()) // distortion from 1e-15 to 0.1
		for i := range v {
			v[i] = base[i].Mul(5).Add(mgl64.Vec3{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}.Mul(size))
		}
	case 3:
		for i := range v {
			v[i] = mgl64.Vec3{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64() * math.Pow(10, 4*rng.Float64()-2)}
		}
	case 4:
		a, c := 2+rng.Float64(), 2+4*rng.Float64()
		v = [3]mgl64.Vec3{{a / 2, -a * math.Sqrt(3) / 2, 0}, {a / 2, a * math.Sqrt(3) / 2, 0}, {0, 0, c}}
		if rng.IntN(2) == 0 {
			v = [3]mgl64.Vec3{{-a / 2, a / 2, c / 2}, {a / 2, -a / 2, c / 2}, {a / 2, a / 2, -c / 2}}
		}
	}
	if n%3 != 0 { // very oblique vectors of the same lattice
		for range 4 {
			i, j := rng.IntN(3), rng.IntN(3)
			if i != j {
				v[i] = v[i].Add(v[j].Mul(float64(rng.IntN(41) - 20)))
			}
		}
	}
	return lattice.New(v[0], v[1], v[2])
}

func TestRandomZones(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	n := 10_000
	if testing.Short() {
		n = 1000
	}
	built := 0
	for i := 0; built < n; i++ {
		l, err := randomLattice(rng, i)
		if err != nil {
			continue
		}
		built++
		z := mustFirst(t, l)
		checkZone(t, z)
		if built%10 == 0 {
			checkAgainstNeighbours(t, z)
		}
		if t.Failed() {
			t.Fatalf("lattice %d: %v", i, l)
		}
	}
}

func checkZone(t *testing.T, z *Zone) {
	t.Helper()
	want := z.Lattice.ZoneVolume()
	if d := math.Abs(z.Volume()/want - 1); !(d <= 1e-5) {
		t.Errorf("volume %v, want %v", z.Volume(), want)
	}
	if len(z.Vertices)-len(z.Edges)+len(z.Faces) != 2 {
		t.Errorf("%d vertices, %d edges, %d faces break Euler's relation", len(z.Vertices), len(z.Edges), len(z.Faces))
	}
	if f := len(z.Faces); f < 6 || f > 14 || f%2 != 0 {
		t.Errorf("%d faces", f)
	}
	if len(z.Vertices) > 24 || len(z.Vertices)%2 != 0 {
		t.Errorf("%d vertices", len(z.Vertices))
	}
	// Each edge belongs to two faces, which pass it in opposite senses.
	sense := map[[2]int]int{}
	for _, f := range z.Faces {
		for i, a := range f.Loop {
			sense[[2]int{a, f.Loop[(i+1)%len(f.Loop)]}]++
		}
	}
	for e, n := range sense {
		if n != 1 || sense[[2]int{e[1], e[0]}] != 1 {
			t.Errorf("edge %v is passed %d and %d times", e, n, sense[[2]int{e[1], e[0]}])
		}
	}
	if len(sense) != 2*len(z.Edges) {
		t.Errorf("%d edges, but the faces have %d sides", len(z.Edges), len(sense))
	}
	tol := 3 * Tolerance * z.scale
	for _, v := range z.Vertices {
		if !z.body.Contains(v, tol) {
			t.Errorf("vertex %v outside", v)
		}
		inverse := false
		for _, w := range z.Vertices {
			inverse = inverse || v.Vec().Add(w.Vec()).Len() < tol
		}
		if !inverse {
			t.Errorf("vertex %v has no inverse", v)
		}
	}
	for _, f := range z.Faces {
		opposite := false
		for _, g := range z.Faces {
			opposite = opposite || g.G == [3]int{-f.G[0], -f.G[1], -f.G[2]}
		}
		if !opposite {
			t.Errorf("face %v has no inverse", f.G)
		}
		if d := z.Lattice.Cart(lattice.FracK{float64(f.G[0]), float64(f.G[1]), float64(f.G[2])}).Vec().Mul(.5).Sub(f.Normal).Len(); d > 1e-9*f.Normal.Len()+tol {
			t.Errorf("face %v: normal %v is not G/2", f.G, f.Normal)
		}
		if loopNormal(z.Vertices, f.Loop).Dot(f.Normal) <= 0 {
			t.Errorf("face %v runs clockwise", f.G)
		}
		// Faces are centred on G/2.
		var c mgl64.Vec3
		for _, v := range f.Loop {
			p := z.Vertices[v].Vec()
			c = c.Add(p.Mul(1 / float64(len(f.Loop))))
			if d := p.Dot(f.Normal.Normalize()) - f.Normal.Len(); math.Abs(d) > tol {
				t.Errorf("face %v: vertex %v is %g off its plane", f.G, p, d)
			}
		}
		if c.Sub(f.Normal).Len() > tol {
			t.Errorf("face %v has its centre at %v, want %v", f.G, c, f.Normal)
		}
	}
}

// checkAgainstNeighbours is the definition: no vertex is nearer to another
// lattice point than to Γ, and every vertex is as near to three others, with
// independent directions, as to Γ.
func checkAgainstNeighbours(t *testing.T, z *Zone) {
	t.Helper()
	s := lattice.Obtuse(z.Lattice.ReciprocalVectors())
	for _, v := range z.Vertices {
		own := v.Vec().Len()
		equal := 0
		for p := -2; p <= 2; p++ {
			for q := -2; q <= 2; q++ {
				for r := -2; r <= 2; r++ {
					g := s.V[0].Mul(float64(p)).Add(s.V[1].Mul(float64(q))).Add(s.V[2].Mul(float64(r)))
					d := v.Vec().Sub(g).Len()
					if d < own-3*Tolerance*z.scale {
						t.Errorf("vertex %v is nearer to %v than to Γ", v, g)
					}
					if g.Len() > 0 && math.Abs(d-own) < 3*Tolerance*z.scale {
						equal++
					}
				}
			}
		}
		if equal < 3 {
			t.Errorf("vertex %v lies on %d bisectors", v, equal)
		}
	}
}

// A zone built from a lattice that misses the cubic shape by rounding is that of
// the cubic one, however its vectors are chosen.
func TestContraction(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for _, name := range []string{"fcc", "bcc", "sc"} {
		l := prototype(t, name, "Al").Lattice()
		want := mustFirst(t, l)
		for range 300 {
			var v [3]mgl64.Vec3
			for i := range v {
				v[i] = l.A(i)
				for j := range v[i] {
					v[i][j] += 1e-7 * (rng.Float64() - .5)
				}
			}
			v[0] = v[0].Add(v[1].Mul(float64(rng.IntN(9) - 4)))
			v[2] = v[2].Add(v[0].Mul(float64(rng.IntN(9) - 4)))
			m, err := lattice.New(v[0], v[1], v[2])
			if err != nil {
				t.Fatal(err)
			}
			z := mustFirst(t, m)
			if len(z.Faces) != len(want.Faces) || len(z.Vertices) != len(want.Vertices) || len(z.Edges) != len(want.Edges) {
				t.Fatalf("%s off by 1e-7: %d faces, %d vertices, %d edges", name, len(z.Faces), len(z.Vertices), len(z.Edges))
			}
		}
	}
}

func TestFold(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 8))
	built := 0
	for i := 0; built < 500; i++ {
		l, err := randomLattice(rng, i)
		if err != nil {
			continue
		}
		built++
		z := mustFirst(t, l)
		s := lattice.Obtuse(l.ReciprocalVectors())
		for range 20 {
			var k lattice.FracK
			size := math.Pow(10, 3*rng.Float64()-1)
			for j := range k {
				k[j] = (rng.Float64() - .5) * size
			}
			f := z.Fold(k)
			for j := range k {
				if d := k[j] - f[j]; math.Abs(d-math.Round(d)) > 1e-9 {
					t.Fatalf("%v folds to %v: not a lattice vector apart", k, f)
				}
			}
			if z.Place(f) == Outside {
				t.Fatalf("%v folds to %v, outside", k, f)
			}
			if g := z.Fold(f); g != f {
				t.Fatalf("folding %v again gives %v", f, g)
			}
			// By definition: no lattice point nearer than Γ.
			c := l.Cart(f).Vec()
			for p := -2; p <= 2; p++ {
				for q := -2; q <= 2; q++ {
					for r := -2; r <= 2; r++ {
						g := s.V[0].Mul(float64(p)).Add(s.V[1].Mul(float64(q))).Add(s.V[2].Mul(float64(r)))
						if c.Sub(g).Len() < c.Len()*(1-1e-7)-1e-7*z.scale {
							t.Fatalf("%v folds to %v, but %v is nearer", k, c, g)
						}
					}
				}
			}
		}
	}
	z := mustFirst(t, prototype(t, "fcc", "Al").Lattice())
	for _, k := range []lattice.FracK{{}, {.5, 0, .5}, {.5, .25, .75}, {.375, .375, .75}, {-.5, -.5, -.5}} {
		if got := z.Fold(k); got != k {
			t.Errorf("%v lies in the closed zone, but folds to %v", k, got)
		}
	}
	if got := z.Fold(lattice.FracK{math.NaN(), 0, 0}); !math.IsNaN(got[0]) {
		t.Errorf("NaN folds to %v", got)
	}
	if got := z.Fold(lattice.FracK{math.Inf(1), 0, 0}); !math.IsNaN(got[0]) {
		t.Errorf("infinity folds to %v", got)
	}
}

func TestPlace(t *testing.T) {
	z := mustFirst(t, prototype(t, "fcc", "Al").Lattice())
	for i := range z.Vertices {
		if p := z.Place(z.Vertex(i)); p != AtVertex {
			t.Errorf("vertex %d is %s", i, p)
		}
	}
	for i := range z.Edges {
		if p := z.Place(z.EdgeMidpoint(i)); p != OnEdge {
			t.Errorf("middle of edge %d is %s", i, p)
		}
	}
	for i := range z.Faces {
		k := z.FaceCentre(i)
		if p := z.Place(k); p != OnFace {
			t.Errorf("centre of face %d is %s", i, p)
		}
		for m := range k {
			k[m] *= 1 - 1e-5
		}
		if p := z.Place(k); p != Inside {
			t.Errorf("a point under face %d is %s", i, p)
		}
		for m := range k {
			k[m] *= 1 + 2e-5
		}
		if p := z.Place(k); p != Outside {
			t.Errorf("a point above face %d is %s", i, p)
		}
	}
	if p := z.Place(lattice.FracK{}); p != Inside {
		t.Errorf("Γ is %s", p)
	}
	if p := z.Place(lattice.FracK{math.NaN(), 0, 0}); p != Outside {
		t.Errorf("NaN is %s", p)
	}
}

func TestRay(t *testing.T) {
	c := prototype(t, "fcc", "Al")
	z := mustFirst(t, c.Lattice())
	u := 2 * math.Pi / 5.4
	// Along x through Γ: in and out by the square faces at ±2π/a.
	hit, ok := z.Ray(lattice.CartK{-5, 0, 0}, mgl64.Vec3{2, 0, 0})
	if !ok || math.Abs(-5+2*hit.Enter+u) > 1e-12 || math.Abs(-5+2*hit.Exit-u) > 1e-12 {
		t.Errorf("ray along x: %+v, %v", hit, ok)
	}
	if n := z.Polyhedron().Faces[hit.EnterFace].Normal; n.Sub(mgl64.Vec3{-1, 0, 0}).Len() > 1e-12 {
		t.Errorf("enters by the face of normal %v", n)
	}
	if n := z.Faces[hit.ExitFace].Normal; n.Sub(mgl64.Vec3{u, 0, 0}).Len() > 1e-12 {
		t.Errorf("leaves by the face of normal %v", n)
	}
	// Along [111]: the hexagons at half of |(1,1,1)|2π/a.
	hit, ok = z.Ray(lattice.CartK{}, mgl64.Vec3{1, 1, 1}.Normalize())
	if !ok || math.Abs(hit.Exit-u*math.Sqrt(3)/2) > 1e-12 || math.Abs(hit.Enter+hit.Exit) > 1e-12 {
		t.Errorf("ray along [111]: %+v, %v", hit, ok)
	}
	for _, miss := range []struct {
		o lattice.CartK
		d mgl64.Vec3
	}{{lattice.CartK{0, 0, 2 * u}, mgl64.Vec3{1, 0, 0}}, {lattice.CartK{}, mgl64.Vec3{}}, {lattice.CartK{math.NaN(), 0, 0}, mgl64.Vec3{1, 0, 0}}, {lattice.CartK{}, mgl64.Vec3{math.NaN(), 0, 0}}} {
		if hit, ok := z.Ray(miss.o, miss.d); ok {
			t.Errorf("ray %v %v hits at %+v", miss.o, miss.d, hit)
		}
	}
	rng := rand.New(rand.NewPCG(9, 9))
	for range 2000 {
		o := lattice.CartK{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}
		d := mgl64.Vec3{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}
		hit, ok := z.Ray(o, d)
		at := func(x float64) Place {
			return z.Place(z.Lattice.Frac(lattice.CartK(o.Vec().Add(d.Mul(x)))))
		}
		if !ok {
			for i := range 200 {
				if p := at(float64(i-100) / 10); p == Inside {
					t.Fatalf("ray %v %v passes inside but is said to miss", o, d)
				}
			}
			continue
		}
		if p, q, r := at(hit.Enter), at((hit.Enter+hit.Exit)/2), at(hit.Exit); p < OnFace || r < OnFace || q != Inside {
			t.Fatalf("ray %v %v: %v, %v, %v", o, d, p, q, r)
		}
	}
}

func TestWedge(t *testing.T) {
	hexagonal := [3]mgl64.Vec3{{1.5, -1.5 * math.Sqrt(3), 0}, {1.5, 1.5 * math.Sqrt(3), 0}, {0, 0, 5}}
	free := func(v [3]mgl64.Vec3, sites ...crystal.Site) *crystal.Crystal {
		c, err := crystal.FromSites(v, sites)
		if err != nil {
			t.Fatal(err)
		}
		return c
	}
	for _, test := range []struct {
		name  string
		c     *crystal.Crystal
		order int // of the point group with time reversal
	}{
		{"diamond", prototype(t, "diamond", "Si"), 48},
		{"zincblende", prototype(t, "zincblende", "As", "Ga"), 48},
		{"bcc", prototype(t, "bcc", "Fe"), 48},
		{"sc", prototype(t, "sc", "Po"), 48},
		{"hexagonal", free(hexagonal, crystal.Site{Element: "Mg"}), 24},
		{"orthorhombic", free([3]mgl64.Vec3{{3, 0, 0}, {0, 4, 0}, {0, 0, 5}}, crystal.Site{Element: "Sn"}), 8},
		{"body-centred tetragonal", free([3]mgl64.Vec3{{-2, 2, 2.5}, {2, -2, 2.5}, {2, 2, -2.5}}, crystal.Site{Element: "Sn"}), 16},
		{"triclinic", free([3]mgl64.Vec3{{3, 0, 0}, {.3, 4, 0}, {.4, .7, 5}}, crystal.Site{Element: "Sn"}, crystal.Site{Element: "Ge", Fraction: [3]float64{.3, .4, .45}}), 2},
		{"fcc in oblique vectors", free([3]mgl64.Vec3{{0, 2.7, 2.7}, {2.7, 2.7 * 2, 2.7 * 3}, {2.7 * 4, 2.7 * 7, 2.7 * 9}}, crystal.Site{Element: "Al"}), 48},
	} {
		t.Run(test.name, func(t *testing.T) {
			z := mustFirst(t, test.c.Lattice())
			g, err := symmetry.Find(test.c, symmetry.DefaultTolerance)
			if err != nil {
				t.Fatal(err)
			}
			w, err := z.Wedge(g)
			if err != nil {
				t.Fatal(err)
			}
			if want := z.Volume() / float64(test.order); math.Abs(w.Volume()-want) > 1e-9*want {
				t.Errorf("volume is 1/%v of the zone, want 1/%d", z.Volume()/w.Volume(), test.order)
			}
			if len(w.Vertices)-len(w.Edges)+len(w.Faces) != 2 {
				t.Errorf("%d vertices, %d edges, %d faces break Euler's relation", len(w.Vertices), len(w.Edges), len(w.Faces))
			}
			// Every point of the zone has an image in the wedge; a general one
			// has exactly one.
			rng := rand.New(rand.NewPCG(11, 12))
			for range 300 {
				k := z.Fold(lattice.FracK{rng.Float64(), rng.Float64(), rng.Float64()})
				n := 0
				for i := range g.Ops {
					q := g.ApplyK(i, k)
					if w.Contains(z.Lattice.Cart(q), 1e-12) {
						n++
					}
					if !g.HasInversion() && w.Contains(z.Lattice.Cart(lattice.FracK{-q[0], -q[1], -q[2]}), 1e-12) {
						n++
					}
				}
				if n != 1 {
					t.Fatalf("%v has %d images in the wedge", k, n)
				}
			}
			if points, err := SpecialPoints(test.c.Setting); err == nil {
				for _, p := range points {
					if !w.Contains(z.Lattice.Cart(p.K), 1e-9) {
						t.Errorf("the special point %s lies outside the wedge", p.Label)
					}
				}
			}
		})
	}
	z := mustFirst(t, prototype(t, "fcc", "Al").Lattice())
	if _, err := z.Wedge(nil); err == nil {
		t.Error("no group accepted")
	}
	hex, err := symmetry.Find(free(hexagonal, crystal.Site{Element: "Mg"}), symmetry.DefaultTolerance)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := z.Wedge(hex); err == nil {
		t.Error("the group of another lattice accepted")
	}
	// fcc: the wedge has the corners Γ X W U K L (common practice).
	g, _ := symmetry.Find(prototype(t, "fcc", "Al"), symmetry.DefaultTolerance)
	w, _ := z.Wedge(g)
	points, _ := SpecialPoints(prototype(t, "fcc", "Al").Setting)
	if len(w.Vertices) != len(points) {
		t.Errorf("the wedge of fcc has %d corners, want 6", len(w.Vertices))
	}
}

func TestFirstRefuses(t *testing.T) {
	if _, err := First(lattice.Lattice{}); err == nil {
		t.Error("a lattice without volume accepted")
	}
}

func BenchmarkFirst(b *testing.B) {
	l := prototype(b, "fcc", "Al").Lattice()
	for b.Loop() {
		if _, err := First(l); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkFold(b *testing.B) {
	z := mustFirst(b, prototype(b, "fcc", "Al").Lattice())
	b.ReportAllocs()
	for b.Loop() {
		z.Fold(lattice.FracK{1.3, -.7, 2.9})
	}
}
