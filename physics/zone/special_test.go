package zone

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/go-gl/mathgl/mgl64"
	"github.com/google/go-cmp/cmp"

	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
	"bandwright/physics/symmetry"
)

// Places of the special points in units of 2π/a (L. P. Bouckaert, R. Smoluchowski,
// E. Wigner, Phys. Rev. 50, 58 (1936), figures of the zones; common practice).
func TestCubicSpecialPoints(t *testing.T) {
	for _, test := range []struct {
		prototype string
		points    map[string]lattice.CartK // up to sign and permutation, except where stated
		places    map[string]Place
		path      [][]string
	}{
		{"diamond", map[string]lattice.CartK{"Γ": {}, "X": {0, 1, 0}, "L": {.5, .5, .5}, "W": {.5, 1, 0}, "K": {.75, .75, 0}, "U": {.25, 1, .25}},
			map[string]Place{"Γ": Inside, "X": OnFace, "L": OnFace, "W": AtVertex, "K": OnEdge, "U": OnEdge},
			[][]string{{"Γ", "X", "W", "K", "Γ", "L", "U", "W", "L", "K"}, {"U", "X"}}},
		{"bcc", map[string]lattice.CartK{"Γ": {}, "H": {0, 1, 0}, "N": {.5, .5, 0}, "P": {.5, .5, .5}},
			map[string]Place{"Γ": Inside, "H": AtVertex, "N": OnFace, "P": AtVertex},
			[][]string{{"Γ", "H", "N", "Γ", "P", "H"}, {"P", "N"}}},
		{"sc", map[string]lattice.CartK{"Γ": {}, "X": {0, .5, 0}, "M": {.5, .5, 0}, "R": {.5, .5, .5}},
			map[string]Place{"Γ": Inside, "X": OnFace, "M": OnEdge, "R": AtVertex},
			[][]string{{"Γ", "X", "M", "Γ", "R", "X"}, {"M", "R"}}},
	} {
		c := prototype(t, test.prototype, "Si")
		points, err := SpecialPoints(c.Setting)
		if err != nil {
			t.Fatal(err)
		}
		if len(points) != len(test.points) {
			t.Errorf("%s: %d points, want %d", test.prototype, len(points), len(test.points))
		}
		for _, p := range points {
			got := c.Setting.FromFrac(lattice.TwoPiOverA, p.K)
			want, ok := test.points[p.Label]
			if !ok || mgl64.Vec3(got).Sub(want.Vec()).Len() > 1e-14 {
				t.Errorf("%s: %s at %v, want %v", test.prototype, p.Label, got, want)
			}
			if p.Place != test.places[p.Label] {
				t.Errorf("%s: %s is %s, want %s", test.prototype, p.Label, p.Place, test.places[p.Label])
			}
			if p.Note == "" {
				t.Errorf("%s has no note", p.Label)
			}
		}
		path, err := StandardPath(c.Setting)
		if err != nil {
			t.Fatal(err)
		}
		if d := cmp.Diff(test.path, path); d != "" {
			t.Errorf("%s: path differs (-want +got):\n%s", test.prototype, d)
		}
	}
}

// The vectors of the prototypes are those of the tables, or else fractions would
// not mean the same.
func TestPrototypeVectors(t *testing.T) {
	for _, name := range []string{"fcc", "bcc", "sc"} {
		c := prototype(t, name, "Al")
		table, err := Lookup(c.Setting.Bravais)
		if err != nil {
			t.Fatal(err)
		}
		v, _, err := table.Evaluate(Cell{A: 5.4})
		if err != nil || v != c.Lattice().Vectors() {
			t.Errorf("%s: vectors %v, the table has %v (%v)", name, c.Lattice().Vectors(), v, err)
		}
	}
}

// A turned crystal in odd primitive vectors has the same special points in
// space, with the same names.
func TestSpecialPointsOfAnyCell(t *testing.T) {
	c := prototype(t, "fcc", "Al")
	l := c.Lattice()
	turn := mgl64.Rotate3DZ(.3).Mul3(mgl64.Rotate3DX(1.1))
	v := [3]mgl64.Vec3{turn.Mul3x1(l.A(0)), turn.Mul3x1(l.A(1).Add(l.A(0).Mul(3))), turn.Mul3x1(l.A(2).Sub(l.A(0)))}
	odd, err := crystal.FromSites(v, []crystal.Site{{Element: "Al"}})
	if err != nil {
		t.Fatal(err)
	}
	points, err := SpecialPoints(odd.Setting)
	if err != nil {
		t.Fatal(err)
	}
	straight, _ := SpecialPoints(c.Setting)
	for i, p := range points {
		if p.Place != straight[i].Place || p.Label != straight[i].Label {
			t.Errorf("%s is %s, want %s, %s", p.Label, p.Place, straight[i].Label, straight[i].Place)
		}
		if d := odd.Lattice().Cart(p.K).Vec().Len() - l.Cart(straight[i].K).Vec().Len(); math.Abs(d) > 1e-12 {
			t.Errorf("%s is %g too far from Γ", p.Label, d)
		}
		if name := SymmetryName(odd.Setting, p.K); name != p.Label {
			t.Errorf("%s is named %q", p.Label, name)
		}
	}
}

// A lattice typed with seven digits keeps its special points on the spot.
func TestSpecialPointsOfRoundedCell(t *testing.T) {
	const h = 5.431 / 2
	odd, err := crystal.FromSites([3]mgl64.Vec3{{2e-6, h, h}, {h, -1e-6, h + 3e-6}, {h - 2e-6, h, 0}}, []crystal.Site{{Element: "Al"}})
	if err != nil {
		t.Fatal(err)
	}
	points, err := SpecialPoints(odd.Setting)
	if err != nil {
		t.Fatal(err)
	}
	g, err := symmetry.Find(odd, symmetry.DefaultTolerance)
	if err != nil {
		t.Fatal(err)
	}
	straight, _ := SpecialPoints(prototype(t, "fcc", "Al").Setting)
	for i, p := range points {
		if mgl64.Vec3(p.K).Sub(mgl64.Vec3(straight[i].K)).Len() > 1e-14 {
			t.Errorf("%s at %v, want %v", p.Label, p.K, straight[i].K)
		}
		if name := SymmetryName(odd.Setting, p.K); name != p.Label {
			t.Errorf("%s is named %q", p.Label, name)
		}
		if p.Label == "L" && len(g.LittleCoGroup(p.K)) != 12 {
			t.Errorf("L is left in place by %d operations", len(g.LittleCoGroup(p.K)))
		}
	}
	z := mustFirst(t, odd.Lattice())
	if w, err := z.Wedge(g); err != nil || math.Abs(w.Volume()*48/z.Volume()-1) > 1e-5 {
		t.Errorf("wedge: %v", err)
	}
}

func TestSpecialPointsNotAvailable(t *testing.T) {
	c, err := crystal.FromSites([3]mgl64.Vec3{{3, 0, 0}, {0, 4, 0}, {0, 0, 5}}, []crystal.Site{{Element: "Sn"}})
	if err != nil {
		t.Fatal(err)
	}
	for _, bravais := range []string{"", "hP"} {
		s := c.Setting
		s.Bravais = bravais
		if _, err := SpecialPoints(s); err == nil || !strings.Contains(err.Error(), "not available") {
			t.Errorf("%q: %v", bravais, err)
		}
		if _, err := StandardPath(s); err == nil {
			t.Errorf("%q: a path without a table", bravais)
		}
	}
	if _, err := Lookup("xx"); err == nil {
		t.Error("table xx found")
	}
}

// randomCell returns a cell that meets the condition of a table, by trial; the
// conditions are spelt here once more, as the file has them in words. The
// borderline cases of the metric are solved for.
func randomCell(rng *rand.Rand, t *Table) (Cell, bool) {
	r := func() float64 { return 3 + 5*rng.Float64() }
	c := Cell{r(), r(), r(), math.Pi / 2, math.Pi / 2, math.Pi / 2}
	inv := func(x float64) float64 { return 1 / (x * x) }
	monoclinic := func() bool {
		c.Alpha = (35 + 54*rng.Float64()) * math.Pi / 180
		return c.A <= c.C && c.B <= c.C && c.C*math.Cos(c.Alpha) <= c.B/2
	}
	kGamma := func() float64 { // cosine of the angle between b1 and b2
		v, _, _ := t.Evaluate(c)
		l, err := lattice.New(v[0], v[1], v[2])
		if err != nil {
			return math.NaN()
		}
		return l.B(0).Dot(l.B(1)) / l.B(0).Len() / l.B(1).Len()
	}
	ratio := func() float64 {
		return c.B*math.Cos(c.Alpha)/c.C + math.Pow(c.B*math.Sin(c.Alpha)/c.A, 2)
	}
	switch t.Name {
	case "cP", "cF", "cI":
		c.B, c.C = c.A, c.A
	case "tP":
		c.B = c.A
	case "hP":
		c.B, c.Gamma = c.A, 2*math.Pi/3
	case "tI-1":
		c.B = c.A
		return c, c.C < c.A
	case "tI-2":
		c.B = c.A
		return c, c.C > c.A
	case "oP", "oI":
		return c, c.A < c.B && c.B < c.C
	case "oC":
		return c, c.A < c.B
	case "oF-1":
		return c, c.A < c.B && c.B < c.C && inv(c.A) > inv(c.B)+inv(c.C)
	case "oF-2":
		return c, c.A < c.B && c.B < c.C && inv(c.A) < inv(c.B)+inv(c.C)
	case "oF-3":
		c.A = 1 / math.Sqrt(inv(c.B)+inv(c.C))
		return c, c.A < c.B && c.B < c.C
	case "hR-1":
		c.Alpha = (20 + 68*rng.Float64()) * math.Pi / 180
		c.B, c.C, c.Beta, c.Gamma = c.A, c.A, c.Alpha, c.Alpha
	case "hR-2":
		c.Alpha = (92 + 26*rng.Float64()) * math.Pi / 180
		c.B, c.C, c.Beta, c.Gamma = c.A, c.A, c.Alpha, c.Alpha
	case "mP":
		return c, monoclinic()
	case "mC-1":
		return c, monoclinic() && kGamma() < -1e-3
	case "mC-2": // k_gamma = 90° where a = b sin(alpha)
		ok := monoclinic()
		c.A = c.B * math.Sin(c.Alpha)
		return c, ok && c.A <= c.C
	case "mC-3":
		return c, monoclinic() && kGamma() > 1e-3 && ratio() < 1-1e-3
	case "mC-4": // ratio 1, solved for a
		ok := monoclinic()
		c.A = c.B * math.Sin(c.Alpha) / math.Sqrt(1-c.B*math.Cos(c.Alpha)/c.C)
		return c, ok && c.A <= c.C && kGamma() > 1e-3
	case "mC-5":
		return c, monoclinic() && kGamma() > 1e-3 && ratio() > 1+1e-3
	case "aP-1a", "aP-2a", "aP-1b", "aP-2b":
		return randomTriclinic(rng, t.Name)
	default:
		return c, false
	}
	return c, true
}

// randomTriclinic draws the reciprocal cell, where the conditions are, and
// returns the cell it belongs to.
func randomTriclinic(rng *rand.Rand, name string) (Cell, bool) {
	deg := math.Pi / 180
	k := [3]float64{3 + 3*rng.Float64(), 3 + 3*rng.Float64(), 3 + 3*rng.Float64()}
	acute := strings.HasSuffix(name, "b")
	var angle [3]float64
	for i := range angle {
		angle[i] = (91 + 25*rng.Float64()) * deg
		if acute {
			angle[i] = math.Pi - angle[i]
		}
	}
	if strings.Contains(name, "-2") {
		angle[2] = math.Pi / 2
	}
	g := func(i, j int) float64 { return k[i] * k[j] * math.Cos(angle[3-i-j]) }
	b12, b13, b23 := g(0, 1), g(0, 2), g(1, 2)
	// The superbase of the table must be obtuse: b1, b2, b3 and minus their sum, or
	// b1, −b2, b3 − b1, b2 − b3.
	if acute {
		if !(b12 <= b13 && b12 <= b23) {
			return Cell{}, false
		}
		if k[2]*k[2]-b13-b23+b12 < 0 || k[0]*k[0]-b13 < 0 || k[1]*k[1]-b23 < 0 {
			return Cell{}, false
		}
		if angle[2] < angle[0] || angle[2] < angle[1] {
			return Cell{}, false
		}
	} else {
		if k[0]*k[0]+b12+b13 < 0 || k[1]*k[1]+b12+b23 < 0 || k[2]*k[2]+b13+b23 < 0 {
			return Cell{}, false
		}
		if angle[2] > angle[0] || angle[2] > angle[1] {
			return Cell{}, false
		}
	}
	b1 := mgl64.Vec3{k[0], 0, 0}
	b2 := mgl64.Vec3{k[1] * math.Cos(angle[2]), k[1] * math.Sin(angle[2]), 0}
	x := k[2] * math.Cos(angle[1])
	y := (b23 - b2[0]*x) / b2[1]
	z2 := k[2]*k[2] - x*x - y*y
	if !(z2 > .05) {
		return Cell{}, false
	}
	l, err := lattice.New(b1, b2, mgl64.Vec3{x, y, math.Sqrt(z2)})
	if err != nil {
		return Cell{}, false
	}
	a := [3]mgl64.Vec3{l.B(0), l.B(1), l.B(2)} // the lattice that has l as its reciprocal
	between := func(i, j int) float64 { return math.Acos(a[i].Dot(a[j]) / a[i].Len() / a[j].Len()) }
	return Cell{a[0].Len(), a[1].Len(), a[2].Len(), between(1, 2), between(0, 2), between(0, 1)}, true
}

// Every point of every table lies where its table says, on the Voronoi cell of
// the reciprocal lattice, and every leg of the path within the cell.
func TestTables(t *testing.T) {
	all, err := Tables()
	if err != nil {
		t.Fatal(err)
	}
	if len(all) != 25 {
		t.Fatalf("%d tables, want 25", len(all))
	}
	want := map[string]Place{"centre": Inside, "face": OnFace, "edge": OnEdge, "vertex": AtVertex, "outside": Outside}
	bravais := map[string]bool{}
	for _, table := range all {
		bravais[table.Bravais] = true
		t.Run(table.Name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(21, 22))
			cells := 0
			for try := 0; cells < 40; try++ {
				if try > 200_000 {
					t.Fatalf("only %d cells meet %q", cells, table.Condition)
				}
				cell, ok := randomCell(rng, table)
				if !ok {
					continue
				}
				cells++
				v, points, err := table.Evaluate(cell)
				if err != nil {
					t.Fatal(err)
				}
				l, err := lattice.New(v[0], v[1], v[2])
				if err != nil {
					t.Fatal(err)
				}
				z := mustFirst(t, l)
				at := map[string]lattice.FracK{}
				for i, p := range table.Points {
					at[p.Label] = points[i]
					place, ok := want[p.At]
					if !ok {
						t.Fatalf("%s: unknown place %q", p.Label, p.At)
					}
					if got := z.Place(points[i]); got != place {
						t.Errorf("%s = %v is %s, want %s (cell %+v)", p.Label, points[i], got, place, cell)
					}
					half := true
					for _, x := range points[i] {
						half = half && math.Abs(2*x-math.Round(2*x)) < 1e-12
					}
					if half != (p.At == "face" || p.At == "centre" || p.HalfG) && p.At != "outside" {
						t.Errorf("%s = %v: half a reciprocal vector: %v", p.Label, points[i], half)
					}
				}
				for _, run := range table.Path {
					for i := 1; i < len(run); i++ {
						a, b := at[run[i-1]], at[run[i]]
						mid := lattice.FracK{(a[0] + b[0]) / 2, (a[1] + b[1]) / 2, (a[2] + b[2]) / 2}
						if z.Place(mid) == Outside {
							t.Errorf("the leg %s–%s leaves the zone", run[i-1], run[i])
						}
					}
				}
				if t.Failed() {
					return
				}
			}
		})
	}
	if len(bravais) != 14 {
		t.Errorf("%d Bravais lattices, want 14", len(bravais))
	}
}

// Closed forms: the zone of a body-centred tetragonal lattice with c → a is that
// of bcc, and a rhombohedral one of 60° is fcc.
func TestTablesMeet(t *testing.T) {
	for _, test := range []struct {
		table    string
		cell     Cell
		faces    int
		vertices int
	}{
		{"tI-1", Cell{A: 4, C: 4}, 12, 14},
		{"tI-2", Cell{A: 4, C: 4 * math.Sqrt2}, 14, 24}, // fcc of constant c
		{"hR-1", Cell{A: 4, Alpha: math.Pi / 3}, 14, 24},
		{"hR-2", Cell{A: 4, Alpha: math.Acos(-1. / 3)}, 12, 14},
	} {
		table, err := Lookup(test.table)
		if err != nil {
			t.Fatal(err)
		}
		v, _, err := table.Evaluate(test.cell)
		if err != nil {
			t.Fatal(err)
		}
		l, err := lattice.New(v[0], v[1], v[2])
		if err != nil {
			t.Fatal(err)
		}
		if z := mustFirst(t, l); len(z.Faces) != test.faces || len(z.Vertices) != test.vertices {
			t.Errorf("%s: %d faces, %d vertices; want %d, %d", test.table, len(z.Faces), len(z.Vertices), test.faces, test.vertices)
		}
	}
}

func TestTablesRefuse(t *testing.T) {
	table, err := Lookup("hR-1")
	if err != nil {
		t.Fatal(err)
	}
	for _, cell := range []Cell{{A: math.NaN()}, {A: -1}, {A: math.Inf(1)}, {A: 4, Alpha: 2.8}} {
		if _, _, err := table.Evaluate(cell); err == nil {
			t.Errorf("cell %+v accepted", cell)
		}
	}
	good := "[xP]\ncondition = \"none\"\nvectors = [[\"a\",\"0\",\"0\"],[\"0\",\"a\",\"0\"],[\"0\",\"0\",\"a\"]]\npath = [[\"Gamma\"]]\n[xP.points]\nGamma = { k = [\"0\",\"0\",\"0\"], at = \"centre\" }\n"
	if _, err := parseTables(good); err != nil {
		t.Fatal(err)
	}
	for old, change := range map[string][2]string{
		"vectors = [[\"a\"":       {"vectors = [[\"q\"", "unknown name"},
		"path = [[\"Gamma\"":      {"path = [[\"Y\"", "names Y"},
		"[\"0\",\"0\",\"0\"], at": {"[\"0\",\"0\"], at", "2 components"},
		"condition":               {"conditon", "unknown key"},
		"[\"0\",\"0\",\"a\"]]":    {"]", "2 vectors"},
	} {
		if _, err := parseTables(strings.Replace(good, old, change[0], 1)); err == nil || !strings.Contains(err.Error(), change[1]) {
			t.Errorf("%s instead of %s: %v, want %q", change[0], old, err, change[1])
		}
	}
}

func TestExpressions(t *testing.T) {
	v := map[string]float64{"a": 2, "b": 3, "alpha": .7}
	known := map[string]bool{"a": true, "b": true, "alpha": true}
	for text, want := range map[string]float64{
		"1/2": .5, "-a": -2, "a-b-1": -2, "a/b/2": 1. / 3, "2^3^2": 512, "-a^2": -4, "(-a)^2": 4, "a^-1": .5,
		"2*-a": -4, " ( a + b ) * 2 ": 10, "sqrt(a*a)": 2, "cos(alpha)^2+sin(alpha)^2": 1, "tan(alpha)": math.Tan(.7),
		"1.5e": math.NaN(), // refused, below
		".5":   .5, "1-a*b+b": -2, "a+b*a^2": 14, "--a": 2,
	} {
		e, err := parseExpression(text, known)
		if math.IsNaN(want) {
			if err == nil {
				t.Errorf("%q accepted", text)
			}
			continue
		}
		if err != nil {
			t.Errorf("%q: %v", text, err)
			continue
		}
		if got := e(v); math.Abs(got-want) > 1e-15*math.Max(1, math.Abs(want)) {
			t.Errorf("%q = %v, want %v", text, got, want)
		}
	}
	for text, wanted := range map[string]string{
		"": "column 1", "1+": "column 3", "(1": ") is missing", "1)": "column 2", "q": `unknown name "q"`, "sin a": "( should follow sin",
		"1..2": "not a number", "a b": "column 3", "α": "column 1", "1 + §": "column 5", "a^": "column 3", "exp(a)": "unknown name",
		strings.Repeat("(", 1000): "deep", strings.Repeat("-", 1000) + "a": "deep",
	} {
		_, err := parseExpression(text, known)
		if err == nil || !strings.Contains(err.Error(), wanted) {
			t.Errorf("%q: %v, want %q", text, err, wanted)
		}
	}
}

func FuzzExpression(f *testing.F) {
	f.Add("(1+a^2/b^2-a^2/c^2)/4")
	f.Add("-cos(alpha)*(")
	f.Fuzz(func(t *testing.T, text string) {
		if e, err := parseExpression(text, map[string]bool{"a": true}); err == nil {
			e(map[string]float64{"a": 1})
		} else if err.Error() == "" {
			t.Error("empty message")
		}
	})
}

func TestTypographic(t *testing.T) {
	for in, want := range map[string]string{"Gamma": "Γ", "X": "X", "Sigma": "Σ", "Sigma1": "Σ₁", "Z1": "Z₁", "H2": "H₂", "M10": "M₁₀"} {
		if got := Typographic(in); got != want {
			t.Errorf("%s → %s, want %s", in, got, want)
		}
	}
}

// Names after Bouckaert, Smoluchowski, Wigner (1936); points in units of 2π/a.
func TestLineName(t *testing.T) {
	for _, test := range []struct {
		prototype string
		k         [3]float64
		want      string
	}{
		{"fcc", [3]float64{0, 0, 0}, "Γ"}, {"fcc", [3]float64{2, 0, 0}, "Γ"}, {"fcc", [3]float64{1, 1, 1}, "Γ"}, {"fcc", [3]float64{1, 1, 0}, "X"},
		{"fcc", [3]float64{0, 1, 0}, "X"}, {"fcc", [3]float64{0, 0, -1}, "X"}, {"fcc", [3]float64{.5, .5, .5}, "L"}, {"fcc", [3]float64{-.5, .5, .5}, "L"},
		{"fcc", [3]float64{.5, 1, 0}, "W"}, {"fcc", [3]float64{.75, 0, .75}, "K"}, {"fcc", [3]float64{.25, 1, .25}, "U"}, {"fcc", [3]float64{1, .5, 0}, "W"},
		{"fcc", [3]float64{0, .3, 0}, "Δ"}, {"fcc", [3]float64{.7311, 0, 0}, "Δ"}, {"fcc", [3]float64{0, 1.7, 0}, "Δ"},
		{"fcc", [3]float64{.2, -.2, .2}, "Λ"}, {"fcc", [3]float64{.3, .3, 0}, "Σ"}, {"fcc", [3]float64{.9, .9, 0}, "S"}, {"fcc", [3]float64{1, .1, .1}, "S"},
		{"fcc", [3]float64{1, .2, 0}, "Z"}, {"fcc", [3]float64{.7, .5, .3}, "Q"}, {"fcc", [3]float64{.3, .5, .7}, "Q"},
		{"fcc", [3]float64{.3, .2, 0}, "plane Γ X W K"}, {"fcc", [3]float64{.3, .3, .1}, "plane Γ X U L K"}, {"fcc", [3]float64{.4, .1, .1}, "plane Γ X U L K"},
		{"fcc", [3]float64{1, .2, .1}, "plane X W U"}, {"fcc", [3]float64{.4, .2, .1}, ""},
		{"bcc", [3]float64{0, 0, 0}, "Γ"}, {"bcc", [3]float64{0, 1, 0}, "H"}, {"bcc", [3]float64{1, 1, 1}, "H"}, {"bcc", [3]float64{1, 1, 0}, "Γ"},
		{"bcc", [3]float64{.5, .5, 0}, "N"}, {"bcc", [3]float64{.5, .5, -.5}, "P"}, {"bcc", [3]float64{.4, 0, 0}, "Δ"}, {"bcc", [3]float64{.2, .2, 0}, "Σ"},
		{"bcc", [3]float64{.2, .2, .2}, "Λ"}, {"bcc", [3]float64{.5, .5, .2}, "D"}, {"bcc", [3]float64{.8, .2, 0}, "G"}, {"bcc", [3]float64{.7, .3, .3}, "F"},
		{"bcc", [3]float64{.4, .2, 0}, "plane Γ H N"}, {"bcc", [3]float64{.7, .3, .1}, "plane H N P"}, {"bcc", [3]float64{.4, .2, .1}, ""},
		{"bcc", [3]float64{.3, .3, .1}, "plane Γ N P"}, {"bcc", [3]float64{.4, .1, .1}, "plane Γ H P"},
		{"sc", [3]float64{0, 0, 0}, "Γ"}, {"sc", [3]float64{0, .5, 0}, "X"}, {"sc", [3]float64{.5, 0, 1.5}, "M"}, {"sc", [3]float64{.5, -.5, .5}, "R"},
		{"sc", [3]float64{.2, 0, 0}, "Δ"}, {"sc", [3]float64{.2, 0, .2}, "Σ"}, {"sc", [3]float64{.2, .2, .2}, "Λ"}, {"sc", [3]float64{.5, .1, 0}, "Z"},
		{"sc", [3]float64{.5, .2, .2}, "S"}, {"sc", [3]float64{.5, .5, .2}, "T"}, {"sc", [3]float64{.3, .2, 0}, "plane Γ X M"},
		{"sc", [3]float64{.5, .2, .1}, "plane X M R"}, {"sc", [3]float64{.2, .2, .1}, "plane Γ M R"}, {"sc", [3]float64{.3, .1, .1}, "plane Γ X R"},
		{"sc", [3]float64{.3, .2, .1}, ""},
	} {
		c := prototype(t, test.prototype, "Al")
		k := c.Setting.ToFrac(lattice.TwoPiOverA, test.k)
		if got := LineName(c.Setting.Bravais, k); got != test.want {
			t.Errorf("%s %v: %q, want %q", test.prototype, test.k, got, test.want)
		}
		if got := SymmetryName(c.Setting, k); got != test.want {
			t.Errorf("%s %v: by its setting %q, want %q", test.prototype, test.k, got, test.want)
		}
	}
	for _, k := range []lattice.FracK{{math.NaN(), 0, 0}, {math.Inf(1), 0, 0}} {
		if got := LineName("cF", k); got != "" {
			t.Errorf("%v has the name %q", k, got)
		}
	}
	if got := LineName("hP", lattice.FracK{}); got != "" {
		t.Errorf("hP: %q", got)
	}
}

// Names against the groups of k: a point has a name exactly if more than the
// identity leaves it in place; orders after Bouckaert, Smoluchowski, Wigner (1936).
func TestNamesFollowSymmetry(t *testing.T) {
	order := map[string]map[string]int{
		"fcc": {"Γ": 48, "X": 16, "L": 12, "W": 8, "K": 4, "U": 4, "Δ": 8, "Λ": 6, "Σ": 4, "S": 4, "Z": 4, "Q": 2},
		"bcc": {"Γ": 48, "H": 48, "P": 24, "N": 8, "Δ": 8, "Λ": 6, "Σ": 4, "F": 6, "G": 4, "D": 4},
		"sc":  {"Γ": 48, "R": 48, "X": 16, "M": 16, "Δ": 8, "Λ": 6, "Σ": 4, "S": 4, "Z": 4, "T": 8},
	}
	rng := rand.New(rand.NewPCG(31, 32))
	for name, orders := range order {
		c := prototype(t, name, "Al")
		g, err := symmetry.Find(c, symmetry.DefaultTolerance)
		if err != nil {
			t.Fatal(err)
		}
		seen := map[string]bool{}
		for range 20_000 {
			// Multiples of 1/12 meet all that is special, with many general points.
			var u [3]float64
			for i := range u {
				u[i] = float64(rng.IntN(49)-24) / 12
			}
			k := c.Setting.ToFrac(lattice.TwoPiOverA, u)
			got := LineName(c.Setting.Bravais, k)
			seen[got] = true
			n := len(g.LittleCoGroup(k))
			want := orders[got]
			if got == "" {
				want = 1
			} else if want == 0 {
				want = 2 // a plane
			}
			if n != want {
				t.Fatalf("%s: %v is named %q but %d operations leave it in place", name, u, got, n)
			}
			// Equivalent points have the same name; K and U are equivalent.
			i := rng.IntN(len(g.Ops))
			q := g.ApplyK(i, k)
			for m := range q {
				q[m] += float64(rng.IntN(5) - 2)
			}
			if other := LineName(c.Setting.Bravais, q); other != got && got != "K" && got != "U" {
				t.Fatalf("%s: %v is named %q, its equivalent %q", name, u, got, other)
			}
		}
		for label := range orders {
			if !seen[label] && label != "W" && label != "P" {
				t.Errorf("%s: %s was never met", name, label)
			}
		}
	}
}
