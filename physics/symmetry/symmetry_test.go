package symmetry

import (
	"encoding/csv"
	"math"
	"math/rand/v2"
	"os"
	"sort"
	"strconv"
	"testing"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
)

func prototype(t testing.TB, name string, elements ...string) *crystal.Crystal {
	t.Helper()
	c, err := crystal.FromPrototype(name, elements, 5.4)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

func mustFind(t testing.TB, c *crystal.Crystal) *Group {
	t.Helper()
	g, err := Find(c, DefaultTolerance)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func free(t testing.TB, v [3]mgl64.Vec3, sites ...crystal.Site) *crystal.Crystal {
	t.Helper()
	c, err := crystal.FromSites(v, sites)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

var hexagonal = [3]mgl64.Vec3{{1.5, -1.5 * math.Sqrt(3), 0}, {1.5, 1.5 * math.Sqrt(3), 0}, {0, 0, 5}}

// Point groups of the structures (common practice; W: Wyckoff's space groups).
func TestPointGroups(t *testing.T) {
	third := 1.0 / 3
	for _, test := range []struct {
		name            string
		c               *crystal.Crystal
		order           int
		hm, schoenflies string
		symmorphic      bool
	}{
		{"fcc", prototype(t, "fcc", "Al"), 48, "m-3m", "Oh", true},
		{"bcc", prototype(t, "bcc", "Fe"), 48, "m-3m", "Oh", true},
		{"sc", prototype(t, "sc", "Po"), 48, "m-3m", "Oh", true},
		{"diamond", prototype(t, "diamond", "Si"), 48, "m-3m", "Oh", false}, // Fd-3m, half of the operations with a glide or screw
		{"zincblende", prototype(t, "zincblende", "As", "Ga"), 24, "-43m", "Td", true},
		{"zincblende of one element", prototype(t, "zincblende", "Si", "Si"), 48, "m-3m", "Oh", false},
		{"rock salt", prototype(t, "rock-salt", "Na", "Cl"), 48, "m-3m", "Oh", true},
		{"caesium chloride", prototype(t, "caesium-chloride", "Cs", "Cl"), 48, "m-3m", "Oh", true},
		{"hcp, P6_3/mmc", free(t, hexagonal, crystal.Site{Element: "Mg", Fraction: [3]float64{third, 2 * third, .25}}, crystal.Site{Element: "Mg", Fraction: [3]float64{2 * third, third, .75}}), 24, "6/mmm", "D6h", false},
		{"wurtzite, P6_3mc", free(t, hexagonal,
			crystal.Site{Element: "Ga", Fraction: [3]float64{third, 2 * third, 0}}, crystal.Site{Element: "Ga", Fraction: [3]float64{2 * third, third, .5}},
			crystal.Site{Element: "N", Fraction: [3]float64{third, 2 * third, .377}}, crystal.Site{Element: "N", Fraction: [3]float64{2 * third, third, .877}}), 12, "6mm", "C6v", false},
		{"tetragonal", free(t, [3]mgl64.Vec3{{4, 0, 0}, {0, 4, 0}, {0, 0, 5}}, crystal.Site{Element: "Sn"}), 16, "4/mmm", "D4h", true},
		{"orthorhombic", free(t, [3]mgl64.Vec3{{3, 0, 0}, {0, 4, 0}, {0, 0, 5}}, crystal.Site{Element: "Sn"}), 8, "mmm", "D2h", true},
		{"triclinic", free(t, [3]mgl64.Vec3{{3, 0, 0}, {.3, 4, 0}, {.4, .7, 5}}, crystal.Site{Element: "Sn"}), 2, "-1", "Ci", true},
		{"polar triclinic", free(t, [3]mgl64.Vec3{{3, 0, 0}, {.3, 4, 0}, {.4, .7, 5}}, crystal.Site{Element: "Sn"}, crystal.Site{Element: "Ge", Fraction: [3]float64{.3, .4, .45}}, crystal.Site{Element: "C", Fraction: [3]float64{.6, .1, .7}}), 1, "1", "C1", true},
	} {
		t.Run(test.name, func(t *testing.T) {
			g := mustFind(t, test.c)
			hm, schoenflies := g.PointGroup()
			if len(g.Ops) != test.order || hm != test.hm || schoenflies != test.schoenflies {
				t.Errorf("%d operations, %s, %s; want %d, %s, %s", len(g.Ops), hm, schoenflies, test.order, test.hm, test.schoenflies)
			}
			if len(g.Translations) != 0 {
				t.Errorf("%d translations in a primitive cell", len(g.Translations))
			}
			if g.Ops[0].R != identity || g.Ops[0].T != [3]float64{} {
				t.Errorf("the first operation is %+v, want the identity", g.Ops[0])
			}
			symmorphic := true
			for _, o := range g.Ops {
				if o.T != [3]float64{} {
					symmorphic = false
				}
			}
			// Holds for these choices of origin.
			if symmorphic != test.symmorphic {
				t.Errorf("all translations zero: %v, want %v", symmorphic, test.symmorphic)
			}
			checkOperations(t, test.c, g)
		})
	}
}

// checkOperations verifies by Cartesian geometry that each operation is an
// isometry that carries each atom onto an atom of its element.
func checkOperations(t *testing.T, c *crystal.Crystal, g *Group) {
	t.Helper()
	l := c.Lattice()
	for i, o := range append(g.Ops[:len(g.Ops):len(g.Ops)], g.Translations...) {
		if i < len(g.Ops) {
			r := g.Rotation(i, l)
			for _, d := range r.Mul3(r.Transpose()).Sub(mgl64.Ident3()) {
				if math.Abs(d) > 1e-9 {
					t.Fatalf("operation %d is no isometry: %v", i, r)
				}
			}
			// k turns as vectors do.
			k := lattice.FracK{.13, .27, -.41}
			want := r.Mul3x1(l.Cart(k).Vec())
			if got := l.Cart(g.ApplyK(i, k)).Vec(); got.Sub(want).Len() > 1e-9 {
				t.Errorf("operation %d turns k to %v, want %v", i, got, want)
			}
		}
		for s, site := range c.Sites {
			image := c.Sites[o.Permutation[s]]
			x := rotate(o.R, site.Fraction)
			for m := range x {
				d := x[m] + o.T[m] - image.Fraction[m]
				if math.Abs(d-math.Round(d)) > 1e-6 || image.Element != site.Element {
					t.Errorf("operation %d does not carry %s onto %s", i, site.Label, image.Label)
				}
			}
		}
	}
}

// A conventional cell of diamond: same point group, and the centring is found.
func TestNotPrimitive(t *testing.T) {
	var sites []crystal.Site
	for _, base := range [][3]float64{{}, {.25, .25, .25}} {
		for _, f := range [][3]float64{{}, {0, .5, .5}, {.5, 0, .5}, {.5, .5, 0}} {
			sites = append(sites, crystal.Site{Element: "Si", Fraction: [3]float64{base[0] + f[0], base[1] + f[1], base[2] + f[2]}})
		}
	}
	c := free(t, [3]mgl64.Vec3{{5.4, 0, 0}, {0, 5.4, 0}, {0, 0, 5.4}}, sites...)
	g := mustFind(t, c)
	if len(g.Ops) != 48 || len(g.Translations) != 3 {
		t.Errorf("%d operations and %d translations, want 48 and 3", len(g.Ops), len(g.Translations))
	}
	checkOperations(t, c, g)
	if e := g.EquivalentSites(); len(e) != 1 || len(e[0]) != 8 {
		t.Errorf("equivalent sites %v, want all eight together", e)
	}
}

func TestEquivalentSites(t *testing.T) {
	if e := mustFind(t, prototype(t, "diamond", "Si")).EquivalentSites(); len(e) != 1 {
		t.Errorf("diamond: %v, want both atoms equivalent", e)
	}
	if e := mustFind(t, prototype(t, "zincblende", "As", "Ga")).EquivalentSites(); len(e) != 2 {
		t.Errorf("zincblende: %v, want each atom on its own", e)
	}
}

// The same crystal in oblique vectors and with another origin has the same group.
func TestChoiceOfCell(t *testing.T) {
	c := prototype(t, "diamond", "Si")
	l := c.Lattice()
	v := [3]mgl64.Vec3{l.A(0).Add(l.A(1).Mul(4)), l.A(1), l.A(2).Sub(l.A(1).Mul(9)).Add(l.A(0).Mul(2))}
	m, err := lattice.New(v[0], v[1], v[2])
	if err != nil {
		t.Fatal(err)
	}
	shift := mgl64.Vec3{.31, -.7, 1.2}
	var sites []crystal.Site
	for _, s := range c.Sites {
		sites = append(sites, crystal.Site{Element: s.Element, Fraction: m.Fraction(s.Position.Add(shift))})
	}
	odd := free(t, v, sites...)
	g := mustFind(t, odd)
	if hm, _ := g.PointGroup(); hm != "m-3m" {
		t.Errorf("point group %s, want m-3m", hm)
	}
	checkOperations(t, odd, g)
}

// A structure distorted about as much as the tolerance still gives a group.
func TestNearlySymmetric(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for range 200 {
		c := prototype(t, "diamond", "Si")
		l := c.Lattice()
		var v [3]mgl64.Vec3
		for i := range v {
			v[i] = l.A(i)
			for j := range v[i] {
				v[i][j] += (rng.Float64() - .5) * 2e-3
			}
		}
		sites := []crystal.Site{{Element: "Si"}, {Element: "Si", Fraction: [3]float64{.25 + (rng.Float64()-.5)*4e-4, .25, .25}}}
		g := mustFind(t, free(t, v, sites...))
		if hm, _ := g.PointGroup(); hm == "" || !g.closed() {
			t.Fatalf("%d operations do not form a point group", len(g.Ops))
		}
	}
}

// Orders of the little co-groups (L. P. Bouckaert, R. Smoluchowski, E. Wigner,
// Phys. Rev. 50, 58 (1936), tables of the groups of k; common practice). Points
// as fractions of the primitive reciprocal vectors.
func TestLittleCoGroups(t *testing.T) {
	type point struct {
		label string
		k     lattice.FracK
		order int
	}
	third := 0.11
	fcc := []point{
		{"Γ", lattice.FracK{}, 48}, {"X", lattice.FracK{.5, 0, .5}, 16}, {"W", lattice.FracK{.5, .25, .75}, 8},
		{"K", lattice.FracK{.375, .375, .75}, 4}, {"L", lattice.FracK{.5, .5, .5}, 12}, {"U", lattice.FracK{.625, .25, .625}, 4},
		{"Δ", lattice.FracK{third, 0, third}, 8}, {"Λ", lattice.FracK{third, third, third}, 6}, {"Σ", lattice.FracK{third, third, 2 * third}, 4},
		{"general", lattice.FracK{.11, .23, .31}, 1},
	}
	bcc := []point{{"H", lattice.FracK{.5, -.5, .5}, 48}, {"P", lattice.FracK{.25, .25, .25}, 24}, {"N", lattice.FracK{0, 0, .5}, 8}}
	sc := []point{{"X", lattice.FracK{0, .5, 0}, 16}, {"M", lattice.FracK{.5, .5, 0}, 16}, {"R", lattice.FracK{.5, .5, .5}, 48}}
	for _, test := range []struct {
		c      *crystal.Crystal
		points []point
	}{{prototype(t, "fcc", "Al"), fcc}, {prototype(t, "diamond", "Si"), fcc}, {prototype(t, "bcc", "Fe"), bcc}, {prototype(t, "sc", "Po"), sc}} {
		g := mustFind(t, test.c)
		for _, p := range test.points {
			n := len(g.LittleCoGroup(p.k))
			if n != p.order {
				t.Errorf("%s: little co-group of %s has order %d, want %d", test.c.Prototype, p.label, n, p.order)
			}
			// Orbit and stabiliser: star × co-group = group.
			if star := len(g.Star(p.k, false)); star*n != len(g.Ops) {
				t.Errorf("%s: star of %s has %d points", test.c.Prototype, p.label, star)
			}
		}
	}
	// Six valleys on Δ, four at L (common practice), also in zincblende, where
	// the star of L needs no time reversal and a general point has it double.
	zb := mustFind(t, prototype(t, "zincblende", "As", "Ga"))
	for _, test := range []struct {
		k            lattice.FracK
		with, single int
	}{{lattice.FracK{.4, 0, .4}, 6, 6}, {lattice.FracK{.5, .5, .5}, 4, 4}, {lattice.FracK{.1, .1, .1}, 8, 4}, {lattice.FracK{.11, .23, .31}, 48, 24}} {
		if n := len(zb.Star(test.k, true)); n != test.with {
			t.Errorf("star of %v with time reversal: %d, want %d", test.k, n, test.with)
		}
		if n := len(zb.Star(test.k, false)); n != test.single {
			t.Errorf("star of %v: %d, want %d", test.k, n, test.single)
		}
	}
}

func TestMeshCounts(t *testing.T) {
	f, err := os.Open("../../testdata/geometry/kpoint_counts.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	crystals := map[string]*crystal.Crystal{
		"fcc_G": prototype(t, "zincblende", "As", "Ga"), "bcc_G": prototype(t, "bcc", "Fe"), "sc_G": prototype(t, "sc", "Po"),
		"hex_G": free(t, hexagonal, crystal.Site{Element: "Mg"}),
		"tet_G": free(t, [3]mgl64.Vec3{{4, 0, 0}, {0, 4, 0}, {0, 0, 5}}, crystal.Site{Element: "Sn"}),
	}
	checked := 0
	for column, name := range rows[0][1:] {
		g := mustFind(t, crystals[name])
		for _, row := range rows[1:] {
			if row[column+1] == "" {
				continue
			}
			n, err1 := strconv.Atoi(row[0])
			want, err2 := strconv.Atoi(row[column+1])
			if err1 != nil || err2 != nil {
				t.Fatalf("row %v: %v %v", row, err1, err2)
			}
			m, err := g.Mesh([3]int{n, n, n})
			if err != nil {
				t.Fatal(err)
			}
			if len(m.K) != want {
				t.Errorf("%s, %d: %d irreducible points, want %d", name, n, len(m.K), want)
			}
			checked++
		}
	}
	if checked < 100 {
		t.Errorf("only %d counts checked", checked)
	}
}

// The mesh against the slow way: stars of every point.
func TestMesh(t *testing.T) {
	for _, test := range []struct {
		c   *crystal.Crystal
		div [3]int
	}{
		{prototype(t, "diamond", "Si"), [3]int{6, 6, 6}},
		{prototype(t, "zincblende", "As", "Ga"), [3]int{5, 5, 5}},
		{prototype(t, "bcc", "Fe"), [3]int{4, 4, 4}},
		{free(t, hexagonal, crystal.Site{Element: "Mg"}), [3]int{6, 6, 3}},
		{prototype(t, "fcc", "Al"), [3]int{4, 4, 2}}, // lower than the crystal
		{prototype(t, "sc", "Po"), [3]int{2, 3, 4}},
		{prototype(t, "sc", "Po"), [3]int{1, 1, 7}},
	} {
		g := mustFind(t, test.c)
		m, err := g.Mesh(test.div)
		if err != nil {
			t.Fatal(err)
		}
		sum := 0.0
		for _, w := range m.Weight {
			sum += w
		}
		if math.Abs(sum-1) > 1e-12 {
			t.Errorf("weights sum to %v", sum)
		}
		count := make([]int, len(m.K))
		for l := range test.div[2] {
			for j := range test.div[1] {
				for i := range test.div[0] {
					k := lattice.FracK{float64(i) / float64(test.div[0]), float64(j) / float64(test.div[1]), float64(l) / float64(test.div[2])}
					id := m.Index[i+test.div[0]*(j+test.div[1]*l)]
					count[id]++
					found := false
					for _, s := range g.Star(m.K[id], true) {
						found = found || SameK(s, k)
					}
					if !found {
						t.Fatalf("%v: point %v is not in the star of its irreducible point %v", test.div, k, m.K[id])
					}
				}
			}
		}
		for id, n := range count {
			if math.Abs(float64(n)/float64(len(m.Index))-m.Weight[id]) > 1e-15 {
				t.Errorf("weight of %v is %v, but %d points of %d go to it", m.K[id], m.Weight[id], n, len(m.Index))
			}
		}
		if test.div[0] == test.div[1] && test.div[1] == test.div[2] {
			for id, k := range m.K {
				if n := len(g.Star(k, true)); n != count[id] {
					t.Errorf("star of %v has %d points, the mesh gives %d", k, n, count[id])
				}
			}
		}
	}
	g := mustFind(t, prototype(t, "sc", "Po"))
	for _, bad := range [][3]int{{0, 1, 1}, {1, -3, 1}, {1000, 1000, 1000}, {1 << 62, 1 << 62, 4}} {
		if _, err := g.Mesh(bad); err == nil {
			t.Errorf("divisions %v accepted", bad)
		}
	}
}

func TestBadTolerance(t *testing.T) {
	for _, tol := range []float64{math.NaN(), 0, -1, 5} {
		if _, err := Find(prototype(t, "fcc", "Al"), tol); err == nil {
			t.Errorf("tolerance %v accepted", tol)
		}
	}
}

// Mean of cos(k·R) over the star-weighted mesh is zero for the short lattice
// vectors R, as over the full mesh (H. J. Monkhorst, J. D. Pack 1976).
func TestMeshQuadrature(t *testing.T) {
	g := mustFind(t, prototype(t, "fcc", "Al"))
	m, err := g.Mesh([3]int{8, 8, 8})
	if err != nil {
		t.Fatal(err)
	}
	sums := []float64{}
	for _, r := range [][3]float64{{1, 0, 0}, {1, 1, -1}, {2, 0, 0}} {
		sum := 0.0
		for i, k := range m.K {
			star := g.Star(k, true)
			for _, s := range star {
				sum += m.Weight[i] / float64(len(star)) * math.Cos(2*math.Pi*(s[0]*r[0]+s[1]*r[1]+s[2]*r[2]))
			}
		}
		sums = append(sums, math.Abs(sum))
	}
	sort.Float64s(sums)
	if sums[len(sums)-1] > 1e-12 {
		t.Errorf("means %v, want 0", sums)
	}
}

func BenchmarkMesh48(b *testing.B) {
	g := mustFind(b, prototype(b, "diamond", "Si"))
	for b.Loop() {
		if _, err := g.Mesh([3]int{48, 48, 48}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkFindDiamond(b *testing.B) {
	c := prototype(b, "diamond", "Si")
	for b.Loop() {
		if _, err := Find(c, DefaultTolerance); err != nil {
			b.Fatal(err)
		}
	}
}
