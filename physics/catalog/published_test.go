package catalog

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/BurntSushi/toml"

	"bandwright/physics/hamiltonian"
)

// The published tables stand in testdata/models, with sources and flags.
func readTables(t *testing.T, name string) map[string]map[string]any {
	t.Helper()
	var out map[string]map[string]any
	if _, err := toml.DecodeFile(filepath.Join("..", "..", "testdata", "models", name), &out); err != nil {
		t.Fatal(err)
	}
	return out
}

func readCSV(t *testing.T, name string) [][]string {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "..", "testdata", "models", name))
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
	return rows[1:]
}

func lookup(t *testing.T, id string) *Set {
	t.Helper()
	s, err := Lookup(id)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// integral returns a two-centre integral, l1 on the first element.
func integral(t *testing.T, s *Set, shell int, first, second string, l1, l2 Shell, symmetry Symmetry) float64 {
	t.Helper()
	if rank(l1) > rank(l2) {
		first, second, l1, l2 = second, first, l2, l1
	}
	for _, p := range s.Bonds {
		if p.Shell == shell && p.L1 == l1 && p.L2 == l2 && p.Symmetry == symmetry &&
			(p.First == first && p.Second == second || l1 == l2 && p.First == second && p.Second == first) {
			return p.Value
		}
	}
	t.Fatalf("%s: no integral %s%s%s between %s and %s in shell %d", s.ID, l1, l2, symmetry, first, second, shell)
	return 0
}

// ends returns the elements of a set: anion and cation, or the same twice.
func ends(s *Set) (anion, cation string) { return s.Elements[0], s.Elements[len(s.Elements)-1] }

type check struct {
	t     *testing.T
	id    string
	table map[string]any
	seen  map[string]bool
}

func newCheck(t *testing.T, id string, table map[string]any) *check {
	return &check{t, id, table, make(map[string]bool)}
}

// same compares a number of a set with the printed one under key.
func (c *check) same(key string, got float64) {
	c.t.Helper()
	want, ok := toNumber(c.table[key])
	if !ok {
		c.t.Errorf("%s: the table has no %s", c.id, key)
	} else if !(math.Abs(got-want) < 1e-12*(1+math.Abs(want))) {
		c.t.Errorf("%s: %s = %.12g, printed %.12g", c.id, key, got, want)
	}
	c.seen[key] = true
}

// rest makes sure that no parameter of the table was left out.
func (c *check) rest(prefixes ...string) {
	c.t.Helper()
	for key := range c.table {
		if !c.seen[key] && !slices.ContainsFunc(prefixes, func(p string) bool { return strings.HasPrefix(key, p) }) {
			c.t.Errorf("%s: %s of the table is not compared", c.id, key)
		}
	}
}

const (
	s0, p0, d0, s1 = hamiltonian.S, hamiltonian.P, hamiltonian.D, hamiltonian.SStar
)

// The sums over four bonds, formed again from the integrals that the reader
// made of them (D. J. Chadi, M. L. Cohen 1975).
func (c *check) sums(s *Set, sp, ps string) {
	a, k := ends(s)
	v := func(l1, l2 Shell, symmetry Symmetry) float64 { return integral(c.t, s, 1, a, k, l1, l2, symmetry) }
	c.same("V_ss", 4*v(s0, s0, Sigma))
	c.same("V_xx", 4*(v(p0, p0, Sigma)+2*v(p0, p0, Pi))/3)
	c.same("V_xy", 4*(v(p0, p0, Sigma)-v(p0, p0, Pi))/3)
	c.same(sp, 4/math.Sqrt(3)*v(s0, p0, Sigma))
	if ps != "" {
		c.same(ps, 4/math.Sqrt(3)*v(p0, s0, Sigma))
	}
}

// P. Vogl, H. P. Hjalmarson, J. D. Dow, J. Phys. Chem. Solids 44, 365 (1983),
// Table 1: every parameter of the sixteen sets.
func TestVogl1983(t *testing.T) {
	tables := readTables(t, "sp3s_star_vogl1983.toml")
	if len(tables) != 16 {
		t.Fatalf("%d tables, want 16", len(tables))
	}
	for name, table := range tables {
		s := lookup(t, "vogl1983/"+name)
		a, k := ends(s)
		c := newCheck(t, s.ID, table)
		c.same("a", s.A)
		for suffix, element := range map[string]string{"a": a, "c": k} {
			key := "E_s" + suffix
			if _, corrected := table[key+"_corrected"]; corrected {
				c.same(key, lookup(t, s.ID+"-as-printed").OnSite[element][s0])
				key += "_corrected"
			}
			c.same(key, s.OnSite[element][s0])
			c.same("E_p"+suffix, s.OnSite[element][p0])
			c.same("E_s*"+suffix, s.OnSite[element][s1])
		}
		c.sums(s, "V_sapc", "V_pasc")
		c.same("V_s*apc", 4/math.Sqrt(3)*integral(t, s, 1, a, k, s1, p0, Sigma))
		c.same("V_pas*c", 4/math.Sqrt(3)*integral(t, s, 1, a, k, p0, s1, Sigma))
		c.rest("levels_", "flag", "note")
		for _, p := range s.Bonds {
			if p.L1 == s1 && p.L2 == s1 || p.L1 == s0 && p.L2 == s1 {
				t.Errorf("%s: s* is coupled to an s shell by %s", s.ID, p.Channel())
			}
		}
		if s.Source.Year != 1983 || !strings.Contains(s.Source.Authors, "Vogl") {
			t.Errorf("%s: source %v", s.ID, s.Source)
		}
	}
	// ZnTe as printed differs by one sign, and says so.
	right, printed := lookup(t, "vogl1983/ZnTe"), lookup(t, "vogl1983/ZnTe-as-printed")
	if e, f := right.OnSite["Zn"][s0], printed.OnSite["Zn"][s0]; e != -f || f != 0.935 {
		t.Errorf("E_s of Zn: %g, as printed %g, want ∓0.935", e, f)
	}
	if !strings.Contains(strings.Join(right.Notes, " "), "printed as +0.9350") {
		t.Error("ZnTe does not state the doubt about its sign")
	}
}

// D. J. Chadi, M. L. Cohen, phys. stat. sol. (b) 68, 405 (1975).
func TestChadiCohen1975(t *testing.T) {
	for name, table := range readTables(t, "sp3_chadi_cohen1975.toml") {
		s := lookup(t, "chadi-cohen1975/"+name)
		a, k := ends(s)
		c := newCheck(t, s.ID, table)
		if a == k {
			c.same("E_s", s.OnSite[a][s0])
			c.same("E_p", s.OnSite[a][p0])
			c.sums(s, "V_sp", "")
		} else {
			c.same("E_s0", s.OnSite[a][s0])
			c.same("E_p0", s.OnSite[a][p0])
			c.same("E_s1", s.OnSite[k][s0])
			c.same("E_p1", s.OnSite[k][p0])
			c.sums(s, "V_s0p", "V_s1p")
		}
		c.rest("levels_", "flag", "note")
		if !s.Fit.ValenceOnly {
			t.Errorf("%s was fitted to valence bands only and does not say so", s.ID)
		}
	}
}

// T. B. Boykin, G. Klimeck, F. Oyafuso, Phys. Rev. B 69, 115201 (2004);
// J.-M. Jancu, R. Scholz, F. Beltram, F. Bassani, Phys. Rev. B 57, 6493 (1998).
func TestSp3d5sStar(t *testing.T) {
	names := map[string]Shell{"s*": s1, "s": s0, "p": p0, "d": d0}
	for section, id := range map[string]string{"Si": "boykin2004/Si", "Ge": "boykin2004/Ge", "Si_jancu": "jancu1998/Si", "GaAs_jancu": "jancu1998/GaAs"} {
		s := lookup(t, id)
		a, k := ends(s)
		c := newCheck(t, id, readTables(t, "sp3d5s_star.toml")[section])
		onSite, bonds := 0, 0
		for key := range c.table {
			if rest, ok := strings.CutPrefix(key, "E_"); ok {
				l, suffix, _ := cutShell(rest)
				element := map[string]string{"a": a, "c": k, "": a}[suffix]
				c.same(key, s.OnSite[element][l])
				onSite++
				continue
			}
			for suffix, symmetry := range map[string]Symmetry{"_sigma": Sigma, "_pi": Pi, "_delta": Delta} {
				orbitals, ok := strings.CutSuffix(key, suffix)
				if !ok {
					continue
				}
				// "ss", or with the atoms, "sa_pc".
				l1, rest, _ := cutShell(orbitals)
				first, second := a, k
				if strings.HasPrefix(rest, "c_") {
					first, second = k, a
				}
				l2, _, ok := cutShell(strings.TrimLeft(rest, "ac_"))
				if !ok {
					t.Fatalf("%s: %s not understood", section, key)
				}
				c.same(key, integral(t, s, 1, first, second, l1, l2, symmetry))
				bonds++
			}
		}
		if a == k {
			c.same("lambda", s.SpinOrbit[a].Lambda())
		} else {
			c.same("lambda_a", s.SpinOrbit[a].Lambda())
			c.same("lambda_c", s.SpinOrbit[k].Lambda())
		}
		c.rest("check_", "flag", "note", "a")
		if want := len(s.OnSite) * len(names); onSite != want || bonds != len(s.Bonds) {
			t.Errorf("%s: %d orbital energies and %d integrals compared, the set has %d and %d", id, onSite, bonds, want, len(s.Bonds))
		}
	}
}

// The fitted metals: every parameter of each shell.
func TestFittedMetals(t *testing.T) {
	for _, table := range readTables(t, "fitted_metals.toml") {
		id := table["id"].(string)
		s := lookup(t, id)
		element := s.Elements[0]
		c := newCheck(t, id, table)
		c.same("a", s.A)
		c.same("electrons", s.Valence[element])
		c.same("shells", float64(s.Shells))
		bonds := 0
		for key := range c.table {
			if l, ok := map[string]Shell{"Es": s0, "Ep": p0, "Ed": d0}[key]; ok {
				c.same(key, s.OnSite[element][l])
			}
			if len(key) != 4 || key[3] < '1' || key[3] > '9' { // "pds2"
				continue
			}
			l1, _, _ := cutShell(key[0:1])
			l2, _, _ := cutShell(key[1:2])
			symmetry := map[byte]Symmetry{'s': Sigma, 'p': Pi, 'd': Delta}[key[2]]
			c.same(key, integral(t, s, int(key[3]-'0'), element, element, l1, l2, symmetry))
			bonds++
		}
		if bonds != len(s.Bonds) {
			t.Errorf("%s: %d integrals compared, the set has %d", id, bonds, len(s.Bonds))
		}
		if delta, ok := c.table["so_p_delta"]; ok {
			c.same("so_p_delta", s.SpinOrbit[element].Delta)
			if x, _ := toNumber(delta); x == 0 {
				t.Errorf("%s: a vanishing splitting", id)
			}
		}
		c.rest("id", "element", "lattice", "basis", "E_F", "check_", "so_", "note", "width", "dos")
	}
}

// Splittings of p shells (D. J. Chadi 1977; measured Δ₀ for the elements) and
// the measured gaps printed beside the models.
func TestHandbookValues(t *testing.T) {
	deltas := make(map[string]float64)
	for _, row := range readCSV(t, "spin_orbit.csv") {
		deltas[row[0]] = number(t, row[1])
	}
	gaps := make(map[string][]string)
	for _, row := range readCSV(t, "handbook_gaps.csv") {
		gaps[row[0]] = row
	}
	for _, s := range Shipped() {
		family, name, _ := strings.Cut(s.ID, "/")
		if family == "vogl1983" || family == "chadi-cohen1975" || family == "fitted" {
			for element := range s.OnSite {
				want, known := deltas[element]
				got, has := s.SpinOrbit[element]
				if has && (!known || got.Delta != want) {
					t.Errorf("%s: Δ of %s is %g eV, the table has %g", s.ID, element, got.Delta, want)
				}
				if known && !has && family != "fitted" {
					t.Errorf("%s: Δ of %s is left out", s.ID, element)
				}
			}
		}
		row, ok := gaps[strings.TrimSuffix(name, "-as-printed")]
		if !ok {
			if family != "fitted" {
				t.Errorf("no measured gap of %s", s.ID)
			}
			continue
		}
		m := s.Measured
		if m == nil || m.Gap300K == nil || m.Gap0K == nil || m.SplitOff == nil || m.Source == "" {
			t.Errorf("%s prints no measured values, or no source", s.ID)
			continue
		}
		if *m.Gap300K != number(t, row[2]) || *m.Gap0K != number(t, row[3]) || *m.SplitOff != number(t, row[4]) {
			t.Errorf("%s: measured %g, %g, %g eV, the handbook has %v", s.ID, *m.Gap300K, *m.Gap0K, *m.SplitOff, row[2:])
		}
		if kind := map[string]string{"i": "indirect", "d": "direct", "z": "zero gap"}[row[1]]; m.Kind != kind {
			t.Errorf("%s: gap is %q, the handbook has %q", s.ID, m.Kind, kind)
		}
	}
}

func number(t *testing.T, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}
