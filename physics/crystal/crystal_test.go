package crystal

import (
	"math"
	"strings"
	"testing"

	"github.com/go-gl/mathgl/mgl64"
)

func mustPrototype(t *testing.T, name string, a float64, elements ...string) *Crystal {
	t.Helper()
	c, err := FromPrototype(name, elements, a)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// Neighbour shells of the cubic prototypes (common practice; e.g. C. Kittel,
// Introduction to Solid State Physics, chapter 1, table of cubic lattices).
// Distances in units of a.
func TestShells(t *testing.T) {
	type shell struct {
		distance float64
		count    []int
	}
	for _, test := range []struct {
		name     string
		elements []string
		shells   []shell
	}{
		{"fcc", []string{"Al"}, []shell{{math.Sqrt(.5), []int{12}}, {1, []int{6}}, {math.Sqrt(1.5), []int{24}}}},
		{"bcc", []string{"Fe"}, []shell{{math.Sqrt(.75), []int{8}}, {1, []int{6}}, {math.Sqrt2, []int{12}}}},
		{"sc", []string{"Po"}, []shell{{1, []int{6}}, {math.Sqrt2, []int{12}}, {math.Sqrt(3), []int{8}}}},
		{"diamond", []string{"Si"}, []shell{{math.Sqrt(3) / 4, []int{4, 4}}, {math.Sqrt(.5), []int{12, 12}}, {math.Sqrt(11) / 4, []int{12, 12}}}},
		{"zincblende", []string{"As", "Ga"}, []shell{{math.Sqrt(3) / 4, []int{4, 4}}, {math.Sqrt(.5), []int{12, 12}}, {math.Sqrt(11) / 4, []int{12, 12}}}},
		{"rock salt", []string{"Na", "Cl"}, []shell{{.5, []int{6, 6}}, {math.Sqrt(.5), []int{12, 12}}, {math.Sqrt(.75), []int{8, 8}}}},
		{"caesium chloride", []string{"Cs", "Cl"}, []shell{{math.Sqrt(.75), []int{8, 8}}, {1, []int{6, 6}}, {math.Sqrt2, []int{12, 12}}}},
	} {
		t.Run(test.name, func(t *testing.T) {
			const a = 4.7
			c := mustPrototype(t, test.name, a, test.elements...)
			bonds, shells, err := c.Bonds(len(test.shells), 0)
			if err != nil {
				t.Fatal(err)
			}
			pairs := 0
			for i, want := range test.shells {
				got := shells[i]
				if math.Abs(got.Distance-want.distance*a) > 1e-12*a || got.Index != i+1 {
					t.Errorf("shell %d at %v Å, want %v", got.Index, got.Distance, want.distance*a)
				}
				for j, n := range want.count {
					pairs += n
					if got.Count[j] != n {
						t.Errorf("shell %d: site %d has %d neighbours, want %d", i+1, j, got.Count[j], n)
					}
				}
			}
			if len(bonds) != pairs/2 {
				t.Errorf("%d bonds, want each pair once: %d", len(bonds), pairs/2)
			}
			checkBonds(t, c, bonds)
		})
	}
}

func checkBonds(t *testing.T, c *Crystal, bonds []Bond) {
	t.Helper()
	type key struct {
		from, to int
		cell     [3]int
	}
	seen := map[key]bool{}
	for _, b := range bonds {
		shift := c.Lattice().Position([3]float64{float64(b.Cell[0]), float64(b.Cell[1]), float64(b.Cell[2])})
		want := c.Sites[b.To].Position.Add(shift).Sub(c.Sites[b.From].Position)
		if want.Sub(b.Vector).Len() > 1e-10 || math.Abs(b.Vector.Len()-b.Length) > 1e-12 {
			t.Errorf("bond %+v: vector should be %v", b, want)
		}
		k := key{b.From, b.To, b.Cell}
		back := key{b.To, b.From, [3]int{-b.Cell[0], -b.Cell[1], -b.Cell[2]}}
		if seen[k] || seen[back] {
			t.Errorf("bond %+v counted twice", b)
		}
		seen[k] = true
	}
}

// The same crystal in badly chosen vectors has the same shells and, here, the
// same lattice: recognised as cF with the same constant.
func TestObliqueVectors(t *testing.T) {
	good := mustPrototype(t, "diamond", 5.431, "Si")
	l := good.Lattice()
	a, b, c := l.A(0), l.A(1), l.A(2)
	b = b.Add(a.Mul(7))
	c = c.Add(b.Mul(-11)).Add(a.Mul(3))
	a = a.Add(c.Mul(5))
	odd, err := FromSites([3]mgl64.Vec3{a, b, c}, []Site{{Element: "Si"}, {Element: "Si", Fraction: mustFraction(t, [3]mgl64.Vec3{a, b, c}, good.Sites[1].Position)}})
	if err != nil {
		t.Fatal(err)
	}
	if odd.Setting.Bravais != "cF" || math.Abs(odd.Setting.A-5.431) > 1e-9 {
		t.Errorf("recognised as %q with a = %v, want cF, 5.431", odd.Setting.Bravais, odd.Setting.A)
	}
	for i, v := range odd.Setting.Conventional {
		want := mgl64.Vec3{}
		want[i] = 5.431
		if v.Sub(want).Len() > 1e-9 {
			t.Errorf("conventional vector %d is %v, want %v", i, v, want)
		}
	}
	bonds, shells, err := odd.Bonds(3, 0)
	if err != nil {
		t.Fatal(err)
	}
	_, want, _ := good.Bonds(3, 0)
	for i := range want {
		if math.Abs(shells[i].Distance-want[i].Distance) > 1e-9 || shells[i].Count[0] != want[i].Count[0] {
			t.Errorf("shell %d: %+v, want %+v", i+1, shells[i], want[i])
		}
	}
	checkBonds(t, odd, bonds)
}

func mustFraction(t *testing.T, v [3]mgl64.Vec3, r mgl64.Vec3) [3]float64 {
	t.Helper()
	return mgl64.Mat3FromCols(v[0], v[1], v[2]).Inv().Mul3x1(r)
}

func TestPrototypes(t *testing.T) {
	for _, p := range Prototypes() {
		elements := []string{"Si", "C"}[:p.Elements]
		c := mustPrototype(t, p.Name, 5, elements...)
		if c.Setting.Bravais != p.Bravais || c.Setting.A != 5 || c.Prototype != p.Name {
			t.Errorf("%s: %+v", p.Name, c.Setting)
		}
		d, err := c.WithLatticeConstant(6)
		if err != nil {
			t.Fatal(err)
		}
		e := mustPrototype(t, p.Name, 6, elements...)
		for i := range e.Sites {
			if d.Sites[i].Position.Sub(e.Sites[i].Position).Len() > 1e-14 || d.Sites[i].Label != e.Sites[i].Label {
				t.Errorf("%s scaled: site %+v, want %+v", p.Name, d.Sites[i], e.Sites[i])
			}
		}
		if math.Abs(d.Lattice().Volume()-e.Lattice().Volume()) > 1e-12*e.Lattice().Volume() || d.Setting.A != 6 {
			t.Errorf("%s scaled: volume %v", p.Name, d.Lattice().Volume())
		}
	}
	zb := mustPrototype(t, "zincblende", 5.6533, "As", "Ga")
	if zb.Sites[0].Label != "As1" || zb.Sites[0].Position.Len() != 0 || zb.Sites[1].Position.Sub(mgl64.Vec3{1, 1, 1}.Mul(5.6533/4)).Len() > 1e-14 {
		t.Errorf("zincblende sites: %+v", zb.Sites)
	}
}

// Formulas as the trade writes them (common practice).
func TestFormula(t *testing.T) {
	for _, test := range []struct {
		prototype string
		elements  []string
		want      string
	}{
		{"diamond", []string{"Si"}, "Si"},
		{"zincblende", []string{"As", "Ga"}, "GaAs"},
		{"zincblende", []string{"C", "Si"}, "SiC"},
		{"zincblende", []string{"Te", "Zn"}, "ZnTe"},
		{"rock-salt", []string{"Cl", "Na"}, "NaCl"},
		{"rock-salt", []string{"O", "Mg"}, "MgO"},
		{"rock-salt", []string{"H", "Li"}, "LiH"},
		{"caesium-chloride", []string{"Cl", "Cs"}, "CsCl"},
	} {
		if got := mustPrototype(t, test.prototype, 5, test.elements...).Formula(); got != test.want {
			t.Errorf("%v: formula %s, want %s", test.elements, got, test.want)
		}
	}
	c, err := FromSites([3]mgl64.Vec3{{4, 0, 0}, {0, 4, 0}, {0, 0, 4}}, []Site{
		{Element: "O", Fraction: [3]float64{.5, .5, 0}}, {Element: "O", Fraction: [3]float64{.5, 0, .5}},
		{Element: "O", Fraction: [3]float64{0, .5, .5}}, {Element: "Ti", Fraction: [3]float64{.5, .5, .5}}, {Element: "Sr"},
	})
	if err != nil {
		t.Fatal(err)
	}
	if got := c.Formula(); got != "SrTiO3" {
		t.Errorf("formula %s, want SrTiO3", got)
	}
	if got := c.Sites[1].Label; got != "O2" {
		t.Errorf("label %s, want O2", got)
	}
}

// Atomic numbers of the periodic table (common practice).
func TestElements(t *testing.T) {
	for symbol, want := range map[string]int{"H": 1, "C": 6, "Al": 13, "Si": 14, "Ga": 31, "Ge": 32, "As": 33, "Cd": 48, "Sn": 50, "Te": 52, "Cs": 55, "La": 57, "Lu": 71, "Hf": 72, "Au": 79, "Pb": 82, "Po": 84, "U": 92, "Og": 118} {
		if z, ok := AtomicNumber(symbol); !ok || z != want {
			t.Errorf("%s: Z = %d, %v, want %d", symbol, z, ok, want)
		}
	}
	for _, symbol := range []string{"", "si", "SI", "Xx", "Si1", " Si"} {
		if ValidElement(symbol) {
			t.Errorf("%q taken for an element", symbol)
		}
	}
	// Groups of the periodic table (common practice).
	for symbol, want := range map[string]int{"H": 1, "He": 18, "Li": 1, "Be": 2, "B": 13, "C": 14, "F": 17, "Sc": 3, "Ti": 4, "Zn": 12, "Ga": 13, "As": 15, "Ba": 2, "La": 3, "Gd": 3, "Lu": 3, "Hf": 4, "Hg": 12, "Pb": 14, "Rn": 18, "Ra": 2, "U": 3, "Rf": 4, "Og": 18} {
		if got, _ := group(numbers[symbol]); got != want {
			t.Errorf("%s: group %d, want %d", symbol, got, want)
		}
	}
}

func TestBadInput(t *testing.T) {
	cube := [3]mgl64.Vec3{{4, 0, 0}, {0, 4, 0}, {0, 0, 4}}
	nan := math.NaN()
	for _, test := range []struct {
		name string
		make func() (*Crystal, error)
		want []string
	}{
		{"unknown prototype", func() (*Crystal, error) { return FromPrototype("hcp5", []string{"Mg"}, 3) }, []string{"hcp5", "diamond"}},
		{"too few elements", func() (*Crystal, error) { return FromPrototype("zincblende", []string{"Ga"}, 5) }, []string{"2 element", "anion"}},
		{"unknown element", func() (*Crystal, error) { return FromPrototype("diamond", []string{"Sx"}, 5) }, []string{`"Sx"`, "element 1"}},
		{"wrong case", func() (*Crystal, error) { return FromPrototype("diamond", []string{"SI"}, 5) }, []string{`did you mean "Si"`}},
		{"NaN constant", func() (*Crystal, error) { return FromPrototype("diamond", []string{"Si"}, nan) }, []string{"NaN", "Å"}},
		{"negative constant", func() (*Crystal, error) { return FromPrototype("diamond", []string{"Si"}, -5) }, []string{"-5", "positive"}},
		{"nanometres", func() (*Crystal, error) { return FromPrototype("diamond", []string{"Si"}, .5431) }, []string{"nm"}},
		{"singular", func() (*Crystal, error) {
			return FromSites([3]mgl64.Vec3{{1, 0, 0}, {0, 1, 0}, {1, 1, 0}}, []Site{{Element: "Si"}})
		}, []string{"plane"}},
		{"infinite vector", func() (*Crystal, error) {
			return FromSites([3]mgl64.Vec3{{math.Inf(1), 0, 0}, {0, 1, 0}, {1, 1, 0}}, []Site{{Element: "Si"}})
		}, []string{"a1"}},
		{"no atoms", func() (*Crystal, error) { return FromSites(cube, nil) }, []string{"no atoms"}},
		{"overlap", func() (*Crystal, error) {
			return FromSites(cube, []Site{{Element: "Si"}, {Element: "C", Fraction: [3]float64{.99, 0, 1}}})
		}, []string{"Si1", "C1", "0.04"}},
		{"same place", func() (*Crystal, error) {
			return FromSites(cube, []Site{{Element: "Si"}, {Element: "Si", Fraction: [3]float64{3, -2, 0}}})
		}, []string{"Si1", "Si2"}},
		{"NaN site", func() (*Crystal, error) {
			return FromSites(cube, []Site{{Element: "Si", Fraction: [3]float64{nan, 0, 0}}})
		}, []string{"site 1", "NaN"}},
		{"unknown element of a site", func() (*Crystal, error) { return FromSites(cube, []Site{{Element: "Si"}, {Element: "Qq"}}) }, []string{"site 2", "Qq"}},
		{"label twice", func() (*Crystal, error) {
			return FromSites(cube, []Site{{Element: "Si", Label: "A"}, {Element: "C", Label: "A", Fraction: [3]float64{.5, 0, 0}}})
		}, []string{`"A"`, "1 and 2"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			_, err := test.make()
			if err == nil {
				t.Fatal("accepted")
			}
			for _, w := range test.want {
				if !strings.Contains(err.Error(), w) {
					t.Errorf("message %q does not tell %q", err, w)
				}
			}
		})
	}
	c := mustPrototype(t, "fcc", 4, "Al")
	for _, shells := range []int{0, -1, MaxShells + 1} {
		if _, _, err := c.Bonds(shells, 0); err == nil {
			t.Errorf("%d shells accepted", shells)
		}
	}
	if _, _, err := c.Bonds(1, nan); err == nil {
		t.Error("tolerance NaN accepted")
	}
	if _, err := c.WithLatticeConstant(nan); err == nil {
		t.Error("constant NaN accepted")
	}
}
