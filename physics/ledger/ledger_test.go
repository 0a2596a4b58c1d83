package ledger_test

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"bandwright/physics/catalog"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/ledger"
	"bandwright/physics/symmetry"
	"bandwright/physics/tightbinding"
)

func model(t testing.TB, set *catalog.Set, o tightbinding.Options) *tightbinding.Model {
	t.Helper()
	c, err := set.Crystal()
	if err != nil {
		t.Fatal(err)
	}
	m, err := tightbinding.New(c, set, o)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func shipped(t testing.TB, id string, spin bool) *tightbinding.Model {
	t.Helper()
	set, err := catalog.Lookup(id)
	if err != nil {
		t.Fatal(err)
	}
	return model(t, set, tightbinding.Options{SpinOrbit: spin})
}

func at(t testing.TB, m hamiltonian.Model, k lattice.FracK) *ledger.Ledger {
	t.Helper()
	l, err := ledger.At(hamiltonian.NewStates(m), k)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func randomK(r *rand.Rand) lattice.FracK { return lattice.FracK{r.Float64(), r.Float64(), r.Float64()} }

func complete(set *catalog.Set) bool { return len(set.SpinOrbit) == len(set.OnSite) }

// The terms sum to the energy and the weights to 1, at 1000 random k of every
// shipped set (20 in a short run), without and with spin–orbit coupling; so do the rows and the
// energies of single bonds.
func TestSums(t *testing.T) {
	for _, set := range catalog.Shipped() {
		for _, spin := range []bool{false, true} {
			if spin && !complete(set) {
				continue
			}
			points := 1000
			if testing.Short() {
				points = 20
			}
			m := model(t, set, tightbinding.Options{SpinOrbit: spin})
			st := hamiltonian.NewStates(m)
			values, bonds := make([]float64, len(m.Terms())), make([]float64, len(m.Bonds()))
			r := rand.New(rand.NewPCG(1, 2))
			for i := range points {
				k := randomK(r)
				l, err := ledger.At(st, k)
				if err != nil {
					t.Fatalf("%s: %v", set.ID, err)
				}
				next := 0
				for _, e := range l.Entries {
					if e.Set.First != next {
						t.Fatalf("%s: sets leave a hole before level %d", set.ID, next)
					}
					next += e.Set.Size
					var mean, terms, rows, weights, single float64
					for n := range e.Set.Size {
						mean += l.Levels[e.Set.First+n] / float64(e.Set.Size)
					}
					for _, x := range e.Terms {
						terms += x.Value
					}
					for _, x := range e.Rows {
						rows += x.Value
						var details float64
						for _, d := range x.Details {
							details += d.Value
						}
						if len(x.Details) > 0 && math.Abs(details-x.Value) > 1e-12 {
							t.Fatalf("%s: details of %s sum to %g, not %g", set.ID, x.Subject, details, x.Value)
						}
					}
					for _, w := range e.Weights {
						weights += w.Value
						if w.Value < -1e-12 || w.Value > 1+1e-12 {
							t.Fatalf("%s: weight %g of %s", set.ID, w.Value, w.Subject)
						}
					}
					if i%50 == 0 {
						_, v, err := st.Solve(k)
						if err != nil {
							t.Fatal(err)
						}
						st.Evaluator().TermEnergies(k, v, e.Set.First, e.Set.Size, values)
						st.Evaluator().BondEnergies(k, v, e.Set.First, e.Set.Size, bonds)
						for _, x := range bonds {
							single += x
						}
						if math.Abs(single-e.NetBond) > 1e-10 {
							t.Fatalf("%s: single bonds sum to %.12g eV, bond terms to %.12g", set.ID, single, e.NetBond)
						}
					}
					for what, d := range map[string]float64{"terms": terms - mean, "rows": rows - mean, "Sum": e.Sum - mean, "weights": weights - 1} {
						if math.Abs(d) > 1e-9 {
							t.Fatalf("%s at %v, level %d: %s off by %g", set.ID, k, e.Set.First+1, what, d)
						}
					}
				}
				if next != len(l.Levels) {
					t.Fatalf("%s: sets hold %d of %d levels", set.ID, next, len(l.Levels))
				}
			}
		}
	}
}

// All members of a star have one ledger, once equivalent atoms are exchanged
// as the operation says.
func TestStars(t *testing.T) {
	for i, set := range catalog.Shipped() {
		if testing.Short() && i%4 != 0 {
			continue
		}
		for _, spin := range []bool{false, true} {
			if spin && !complete(set) {
				continue
			}
			m := model(t, set, tightbinding.Options{SpinOrbit: spin})
			g, err := symmetry.Find(m.Crystal(), 1e-5)
			if err != nil {
				t.Fatal(err)
			}
			st := hamiltonian.NewStates(m)
			r := rand.New(rand.NewPCG(3, 4))
			for _, k := range []lattice.FracK{randomK(r), {.5, .5, .5}, {.5, 0, .5}, {.3, 0, .3}} {
				want, err := ledger.At(st, k)
				if err != nil {
					t.Fatal(err)
				}
				for i, op := range g.Ops {
					got, err := ledger.At(st, g.ApplyK(i, k))
					if err != nil {
						t.Fatal(err)
					}
					if len(got.Entries) != len(want.Entries) {
						t.Fatalf("%s: %d sets, want %d", set.ID, len(got.Entries), len(want.Entries))
					}
					for j := range want.Entries {
						sameEntry(t, set.ID, &want.Entries[j], &got.Entries[j], op.Permutation)
					}
				}
			}
		}
	}
}

func sameEntry(t *testing.T, id string, a, b *ledger.Entry, permutation []int) {
	t.Helper()
	near := func(what string, x, y float64) {
		t.Helper()
		if math.Abs(x-y) > 1e-8 {
			t.Fatalf("%s level %d: %s is %.12g and %.12g on two members of a star", id, a.Set.First+1, what, x, y)
		}
	}
	near("energy", a.Set.Energy, b.Set.Energy)
	near("net bond energy", a.NetBond, b.NetBond)
	near("bonding share", a.BondingShare, b.BondingShare)
	near("dE/d ln d", a.DEdlnD, b.DEdlnD)
	for _, w := range a.Weights {
		for _, u := range b.Weights {
			if u.Site == permutation[w.Site] && u.L == w.L {
				near("weight "+w.Subject, w.Value, u.Value)
			}
		}
	}
	for _, x := range a.Terms {
		var sum float64
		for _, y := range b.Terms {
			if x.Term.Kind == y.Term.Kind && x.Term.L == y.Term.L && x.Term.Channel == y.Term.Channel && x.Term.Shell == y.Term.Shell &&
				x.Term.Detail == y.Term.Detail && (x.Term.Kind == hamiltonian.Bond || y.Term.Site == permutation[x.Term.Site]) {
				sum += y.Value
			}
		}
		near("a term", x.Value, sum)
	}
}

// Closed forms at Γ in silicon (Vogl, Hjalmarson, Dow 1983: E_p = 1.715,
// V_xx = 1.715, E_s = −4.2, V_ss = −8.3 eV): Γ₂₅′ is pure p, all its bonds
// bonding, with ppσ and ppπ in the ratio of (V_xx+2V_xy)/3 to 2(V_xx−V_xy)/3.
func TestSiliconAtGamma(t *testing.T) {
	l := at(t, shipped(t, "vogl1983/Si", false), lattice.FracK{})
	top := l.EntryOf(3)
	if top == nil || top.Set.Size != 3 || top.Set.First != 1 {
		t.Fatalf("valence top: %+v", top)
	}
	want := map[string]float64{
		"onsite Si1 s": 0, "onsite Si1 p": 1.715 / 2, "onsite Si1 s*": 0,
		"onsite Si2 s": 0, "onsite Si2 p": 1.715 / 2, "onsite Si2 s*": 0,
		"bond shell1 ssσ": 0, "bond shell1 spσ": 0, "bond shell1 s*pσ": 0,
		"bond shell1 ppσ": -(1.715 + 2*4.575) / 3, "bond shell1 ppπ": -2 * (1.715 - 4.575) / 3,
		"net_bond ": -1.715, "bonding_share ": 1,
		"weight Si1 s": 0, "weight Si1 p": .5, "weight Si1 s*": 0, "weight Si2 s": 0, "weight Si2 p": .5, "weight Si2 s*": 0,
	}
	rows := top.Table()
	if len(rows) != len(want) {
		t.Errorf("%d rows, want %d", len(rows), len(want))
	}
	for _, row := range rows {
		key := string(row.Quantity) + " " + row.Subject
		if w, ok := want[key]; !ok || math.Abs(row.Value-w) > 1e-12 {
			t.Errorf("%s = %.12g, want %.12g (known %v)", key, row.Value, w, ok)
		}
	}
	if math.Abs(top.DEdlnD-2*1.715) > 1e-12 {
		t.Errorf("dE/d ln d = %v, want 3.43", top.DEdlnD)
	}
	bottom := l.EntryOf(0)
	if math.Abs(bottom.NetBond+8.3) > 1e-12 || bottom.BondingShare != 1 {
		t.Errorf("Γ₁: net bond energy %v, share %v", bottom.NetBond, bottom.BondingShare)
	}
	// The uncoupled s* levels have no bond energy: the share is undefined.
	star := l.EntryOf(9)
	if star.ShareDefined || math.Abs(star.NetBond) > 1e-9 {
		t.Errorf("s* levels at Γ: %+v", star)
	}
	last := star.Table()
	if row := last[len(last)-1]; !row.Undefined || !math.IsNaN(row.Value) {
		t.Errorf("row of the undefined share: %+v", row)
	}
}

func TestContrast(t *testing.T) {
	si := at(t, shipped(t, "vogl1983/Si", false), lattice.FracK{})
	for _, other := range []struct {
		id   string
		spin bool
	}{{"vogl1983/Sn", true}, {"vogl1983/GaAs", false}, {"fitted/Al", false}, {"boykin2004/Si", true}} {
		o := at(t, shipped(t, other.id, other.spin), lattice.FracK{.1, .2, .3})
		a, b := *si.EntryOf(3), *o.EntryOf(2)
		var sumA, sumB float64
		seen := make(map[string]bool)
		for _, row := range ledger.Contrast(a, b) {
			key := string(row.Quantity) + " " + row.Subject
			if seen[key] {
				t.Errorf("%s twice against %s", key, other.id)
			}
			seen[key] = true
			if !row.InA && !row.InB {
				t.Errorf("%s stands on neither side", key)
			}
			if row.Quantity.IsTerm() {
				sumA += row.A
				sumB += row.B
			}
			if !math.IsNaN(row.Difference) && row.Difference != row.B-row.A {
				t.Errorf("difference of %s", key)
			}
		}
		if math.Abs(sumA-a.Sum) > 1e-12 || math.Abs(sumB-b.Sum) > 1e-12 {
			t.Errorf("against %s the sides sum to %v and %v, want %v and %v", other.id, sumA, sumB, a.Sum, b.Sum)
		}
	}
	gaas := at(t, shipped(t, "vogl1983/GaAs", false), lattice.FracK{})
	found := false
	for _, row := range ledger.Contrast(si.Entries[0], gaas.Entries[0]) {
		if row.Quantity == ledger.OnSite && strings.HasPrefix(row.Subject, "Si2 s |") {
			found = true
			if row.Subject != "Si2 s | Ga1 s" || !row.InA || !row.InB {
				t.Errorf("row %+v", row)
			}
		}
	}
	if !found {
		t.Error("on-site s of the second site is not matched")
	}
	// Γ₂′ against Γ₂₅′ in silicon: 4.1 eV.
	var difference float64
	for _, row := range ledger.Contrast(*si.EntryOf(1), *si.EntryOf(7)) {
		if row.Quantity.IsTerm() {
			difference += row.Difference
		}
	}
	if math.Abs(difference-4.1) > 1e-12 {
		t.Errorf("Γ₂′ − Γ₂₅′ = %v eV, want 4.1", difference)
	}
}

func BenchmarkAt(b *testing.B) {
	st := hamiltonian.NewStates(shipped(b, "vogl1983/Si", false))
	for b.Loop() {
		if _, err := ledger.At(st, lattice.FracK{.1, .2, .3}); err != nil {
			b.Fatal(err)
		}
	}
}
