package edges

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"bandwright/physics/catalog"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/physics/symmetry"
	"bandwright/physics/tightbinding"
)

func model(tb testing.TB, id string, o tightbinding.Options) hamiltonian.Model {
	tb.Helper()
	set, err := catalog.Lookup(id)
	if err != nil {
		tb.Fatal(err)
	}
	c, err := set.Crystal()
	if err != nil {
		tb.Fatal(err)
	}
	m, err := tightbinding.New(c, set, o)
	if err != nil {
		tb.Fatal(err)
	}
	return m
}

func find(tb testing.TB, m hamiltonian.Model, n int) *Edges {
	tb.Helper()
	g, err := symmetry.Find(m.Crystal(), symmetry.DefaultTolerance)
	if err != nil {
		tb.Fatal(err)
	}
	mesh, err := g.Mesh([3]int{n, n, n})
	if err != nil {
		tb.Fatal(err)
	}
	e, err := Find(context.Background(), m, g, mesh, Options{})
	if err != nil {
		tb.Fatal(err)
	}
	return e
}

// Edges against values outside, to their printed digits: those of P. Vogl et
// al. 1983 (sp3s*), T. B. Boykin et al. 2004 (Si, Ge with spin–orbit) and
// J.-M. Jancu et al. 1998 (GaAs) as computed from the published sets by an
// independent program (flag: computed).
func TestPublished(t *testing.T) {
	for _, test := range []struct {
		id      string
		so      bool
		kind    Kind
		gap     float64
		where   string
		valleys int
		vbmSet  int
	}{
		{"vogl1983/Si", false, Indirect, 1.1713, "0.7311 of Γ–X", 6, 3},
		{"vogl1983/C", false, Indirect, 5.3176, "0.5745 of Γ–X", 6, 3},
		{"vogl1983/Ge", false, Indirect, 0.7649, "L", 4, 3},
		{"vogl1983/GaAs", false, Direct, 1.5500, "Γ", 1, 3},
		{"boykin2004/Si", true, Indirect, 1.1312, "0.8133 of Γ–X", 6, 4},
		{"boykin2004/Ge", true, Indirect, 0.6784, "L", 4, 4},
		{"jancu1998/Si", true, Indirect, 1.1695, "0.8458 of Γ–X", 6, 4},
		{"jancu1998/GaAs", true, Direct, 1.5190, "Γ", 1, 4},
	} {
		e := find(t, model(t, test.id, tightbinding.Options{SpinOrbit: test.so}), 24)
		if e.Kind != test.kind || math.Abs(e.Gap-test.gap) > 5.1e-5 {
			t.Errorf("%s: %s gap %.5f eV, want %s %.4f", test.id, e.Kind, e.Gap, test.kind, test.gap)
		}
		if e.CBM.Where != test.where || e.CBM.Valleys != test.valleys {
			t.Errorf("%s: conduction bottom at %s with %d valleys, want %s with %d", test.id, e.CBM.Where, e.CBM.Valleys, test.where, test.valleys)
		}
		if e.VBM.Where != "Γ" || e.VBM.Set != test.vbmSet {
			t.Errorf("%s: valence top at %s, %d levels, want Γ, %d", test.id, e.VBM.Where, e.VBM.Set, test.vbmSet)
		}
		if math.Abs(e.Fermi-(e.VBM.Energy+e.CBM.Energy)/2) > 1e-12 {
			t.Errorf("%s: Fermi level %g is not in the middle of the gap", test.id, e.Fermi)
		}
	}
	// Gaps at Γ: Ge 0.8140 (Boykin et al. 2004), Si 3.399; Vogl et al. give Ge 0.90.
	if e := find(t, model(t, "boykin2004/Ge", tightbinding.Options{SpinOrbit: true}), 24); math.Abs(e.Direct.Energy-0.8140) > 5.1e-5 || e.Direct.Where != "Γ" {
		t.Errorf("Ge: smallest vertical gap %v, want 0.8140 eV at Γ", e.Direct)
	}
	if e := find(t, model(t, "vogl1983/Ge", tightbinding.Options{}), 24); math.Abs(e.Direct.Energy-0.90) > 5e-3 {
		t.Errorf("Ge: smallest vertical gap %v, want 0.90 eV", e.Direct)
	}
}

// In grey tin the antibonding s level lies below the p level at Γ, which
// belongs half to the valence and half to the conduction bands; in this set the
// conduction band also dips below it towards X (Vogl et al. 1983; computed).
func TestGreyTin(t *testing.T) {
	for _, so := range []bool{false, true} {
		e := find(t, model(t, "vogl1983/Sn", tightbinding.Options{SpinOrbit: so}), 24)
		if e.Kind != Semimetal || e.Gap != 0 || e.Overlap < 0.1 {
			t.Errorf("Sn, spin–orbit %v: %s, gap %g, overlap %g; want a semimetal with overlap", so, e.Kind, e.Gap, e.Overlap)
		}
		if e.Direct == nil || math.Abs(e.Direct.Energy) > 1e-9 || e.Direct.Where != "Γ" || e.VBM.Where != "Γ" {
			t.Errorf("Sn: bands should touch at Γ: %v, %v", e.Direct, e.VBM)
		}
		if e.Fermi >= e.VBM.Energy || e.Fermi <= e.CBM.Energy {
			t.Errorf("Sn: Fermi level %g is not between %g and %g", e.Fermi, e.CBM.Energy, e.VBM.Energy)
		}
	}
	// InSb of the same tables, with spin–orbit coupling it was not fitted with,
	// is inverted: bands touch at Γ and nowhere overlap (computed).
	e := find(t, model(t, "vogl1983/InSb", tightbinding.Options{SpinOrbit: true}), 24)
	if e.Kind != Semimetal || e.Gap != 0 || e.Overlap != 0 || e.VBM.Where != "Γ" || e.CBM.Where != "Γ" {
		t.Errorf("InSb with spin–orbit: %+v, want bands that touch at Γ", e)
	}
}

// Fermi levels printed with the sets (computed independently, 48³).
func TestMetals(t *testing.T) {
	for _, test := range []struct {
		id    string
		so    bool
		fermi float64
	}{{"fitted/Al", false, 11.519}, {"fitted/Al-sp", false, 11.657}, {"fitted/Pb", false, 9.107}, {"fitted/Pb", true, 9.0924}, {"fitted/Pb-sp", true, 9.0925}} {
		e := find(t, model(t, test.id, tightbinding.Options{SpinOrbit: test.so}), 24)
		if e.Kind != Metal || e.Gap != 0 || e.VBM != nil || e.CBM != nil || e.Direct != nil {
			t.Errorf("%s: %+v, want a metal without edges", test.id, e)
		}
		if math.Abs(e.Fermi-test.fermi) > 0.001 {
			t.Errorf("%s: Fermi level %.4f, want %.4f", test.id, e.Fermi, test.fermi)
		}
	}
}

// No k point anywhere lies beyond an edge: random ones all over the zone and a
// dense cloud about each edge, for every set; and the edge is the energy at its
// k point, at each point of its star.
func TestNothingBeyond(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 11))
	for i, set := range catalog.Shipped() {
		for _, so := range []bool{false, true} {
			if testing.Short() && (i%4 != 0 || so && len(set.OnSite[set.Elements[0]]) == 4) {
				continue
			}
			c, err := set.Crystal()
			if err != nil {
				t.Fatal(err)
			}
			m, err := tightbinding.New(c, set, tightbinding.Options{SpinOrbit: so})
			if err != nil {
				continue // no spin–orbit value
			}
			e := find(t, m, 24)
			if e.Kind == Metal {
				continue
			}
			nv := e.VBM.Level
			st := hamiltonian.NewStates(m)
			levels := make([]float64, st.Len())
			name := set.ID
			check := func(k lattice.FracK) {
				if err := st.Energies(k, levels); err != nil {
					t.Fatal(err)
				}
				if levels[nv] > e.VBM.Energy+1e-7 {
					t.Fatalf("%s: %v has %.9f eV, above the valence top %v", name, k, levels[nv], e.VBM)
				}
				if levels[nv+1] < e.CBM.Energy-1e-7 {
					t.Fatalf("%s: %v has %.9f eV, below the conduction bottom %v", name, k, levels[nv+1], e.CBM)
				}
				if levels[nv+1]-levels[nv] < e.Direct.Energy-1e-7 {
					t.Fatalf("%s: %v has a vertical gap of %.9f eV, below %v", name, k, levels[nv+1]-levels[nv], e.Direct)
				}
			}
			for range 600 {
				check(lattice.FracK{r.Float64(), r.Float64(), r.Float64()})
			}
			for _, edge := range []*Edge{e.VBM, e.CBM, e.Direct} {
				for range 150 {
					radius := math.Pow(10, -1-5*r.Float64())
					check(edge.K.Add(lattice.FracK{radius * r.NormFloat64(), radius * r.NormFloat64(), radius * r.NormFloat64()}))
				}
			}
			for _, k := range append([]lattice.FracK{e.CBM.K}, e.CBM.Star...) {
				if err := st.Energies(k, levels); err != nil {
					t.Fatal(err)
				}
				if math.Abs(levels[e.CBM.Level]-e.CBM.Energy) > 1e-9 {
					t.Fatalf("%s: star member %v has %.12g eV, edge is %.12g", name, k, levels[e.CBM.Level], e.CBM.Energy)
				}
			}
		}
	}
}

// The edges do not depend on the mesh they are looked for on.
func TestMeshDoesNotMatter(t *testing.T) {
	if testing.Short() {
		t.Skip("the same computation on many meshes")
	}
	for _, id := range []string{"vogl1983/Si", "vogl1983/Ge", "vogl1983/AlAs", "boykin2004/Si"} {
		m := model(t, id, tightbinding.Options{})
		fine := find(t, m, 36)
		unit := 2 * math.Pi / m.Crystal().Setting.A
		for _, n := range []int{2, 5, 13, 24} {
			e := find(t, m, n)
			if math.Abs(e.Gap-fine.Gap) > 1e-7 || math.Abs(e.Direct.Energy-fine.Direct.Energy) > 1e-7 {
				t.Errorf("%s: gaps %.9f and %.9f on %d³, %.9f and %.9f on 36³", id, e.Gap, e.Direct.Energy, n, fine.Gap, fine.Direct.Energy)
			}
			l := m.Crystal().Lattice()
			d := l.Cart(difference(e.CBM.K, fine.CBM.K)).Vec().Len() / unit
			if d > 1e-5 {
				t.Errorf("%s: conduction bottoms on %d³ and 36³ lie %g·2π/a apart", id, n, d)
			}
		}
	}
}

func TestOnPath(t *testing.T) {
	m := model(t, "vogl1983/Si", tightbinding.Options{})
	e := find(t, m, 24)
	s := m.Crystal().Setting
	unit := 2 * math.Pi / s.A
	for _, test := range []struct {
		legs     string
		on       bool
		distance float64 // of the conduction bottom, 2π/a
	}{
		{"Γ X", true, 0},
		{"L Γ X W", true, 0},
		{"Γ L", false, 0.7311 * math.Sqrt(2.0/3)}, // from the line along [111]
		{"X W", false, 1 - 0.7311},
	} {
		p, err := path.Parse([]string{test.legs}, lattice.Primitive, s)
		if err != nil {
			t.Fatal(err)
		}
		on, distance := e.CBM.OnPath(s, p.Sample(s.Lattice, 0.1))
		if on != test.on || math.Abs(distance/unit-test.distance) > 1e-4 {
			t.Errorf("conduction bottom on %s: %v, %.5f·2π/a off; want %v, %.5f", test.legs, on, distance/unit, test.on, test.distance)
		}
	}
	if on, _ := e.VBM.OnPath(s, mustSample(t, s, "X W")); on {
		t.Error("Γ is not on X–W")
	}
}

func mustSample(tb testing.TB, s lattice.Setting, legs string) *path.Sampling {
	tb.Helper()
	p, err := path.Parse([]string{legs}, lattice.Primitive, s)
	if err != nil {
		tb.Fatal(err)
	}
	return p.Sample(s.Lattice, 0.1)
}

func TestCancelled(t *testing.T) {
	m := model(t, "vogl1983/Si", tightbinding.Options{})
	g, err := symmetry.Find(m.Crystal(), symmetry.DefaultTolerance)
	if err != nil {
		t.Fatal(err)
	}
	mesh, err := g.Mesh([3]int{24, 24, 24})
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Find(ctx, m, g, mesh, Options{}); err == nil {
		t.Error("want an error from a cancelled search")
	}
}

func BenchmarkFind(b *testing.B) {
	m := model(b, "vogl1983/Si", tightbinding.Options{})
	for b.Loop() {
		find(b, m, 24)
	}
}
