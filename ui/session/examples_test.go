package session

import (
	"strings"
	"testing"

	"bandwright/assets"
	"bandwright/physics/edges"
	"bandwright/physics/ledger"
)

// TestExamples opens every example study and has all of it computed.
func TestExamples(t *testing.T) {
	examples, err := Examples()
	if err != nil {
		t.Fatal(err)
	}
	if len(examples) < 6 {
		t.Fatalf("%d example studies", len(examples))
	}
	readme, err := assets.Studies.ReadFile("studies/README.md")
	if err != nil {
		t.Fatal(err)
	}
	solved := map[string]*Snapshot{}
	for _, e := range examples {
		if e.Title == "" || !strings.Contains(string(readme), "| "+e.Name+" |") {
			t.Errorf("%s has no title or no line in the README", e.Name)
		}
		data, err := assets.Studies.ReadFile("studies/" + e.Name + ".bandstudy")
		if err != nil {
			t.Fatal(err)
		}
		if string(data) != string(e.Document.Encode()) {
			t.Errorf("%s is not written as the program writes it", e.Name)
		}
		s, l := start(t, e.Document)
		if testing.Short() { // without densities and edges
			previewed(t, s, l)
			s.Stop()
		}
		snap := settle(t, s, l)
		check(t, snap)
		if snap.BuildErr != nil || snap.BandsErr != nil || !snap.Stopped && (snap.DOSErr != nil || snap.EdgesErr != nil) {
			t.Errorf("%s: %v, %v, %v, %v", e.Name, snap.BuildErr, snap.BandsErr, snap.DOSErr, snap.EdgesErr)
		}
		if !snap.Doc.Equal(e.Document) || snap.Modified {
			t.Errorf("%s changes by being opened", e.Name)
		}
		for _, pin := range []*Pinned{snap.PinA, snap.PinB} {
			if pin != nil && pin.Err != nil {
				t.Errorf("%s: pin %s: %v", e.Name, pin.Name, pin.Err)
			}
		}
		solved[e.Name] = snap
	}

	// The published facts that the questions are about.
	difference := func(name string) float64 {
		s := solved[name]
		if s == nil || s.PinA == nil || s.PinB == nil {
			t.Fatalf("%s has no pins", name)
		}
		return s.PinB.Entry.Set.Energy - s.PinA.Entry.Set.Energy
	}
	// Γ₂′ of Si at 4.10 eV, of Sn at 0 eV (P. Vogl et al. 1983, by construction of the sets).
	near(t, "antibonding s level, Sn against Si", difference("grey-tin-without-gap"), -4.10, 1e-6)
	for _, pin := range []*Pinned{solved["grey-tin-without-gap"].PinA, solved["grey-tin-without-gap"].PinB} {
		s := 0.0
		for _, w := range pin.Entry.Weights {
			if strings.HasSuffix(w.Subject, " s") {
				s += w.Value
			}
		}
		if s < 0.99 || pin.Entry.NetBond < 0 {
			t.Errorf("%s: weight of s %.3f, net bond energy %.3f: not an antibonding s level", pin.Name, s, pin.Entry.NetBond)
		}
	}
	// Δ₀ = 0.340 eV (J.-M. Jancu et al. 1998).
	near(t, "spin–orbit splitting of GaAs", difference("gallium-arsenide-emitter"), 0.340, 5e-4)
	// A free p shell splits by Δ; in lead Δ = 1.37 eV by the set. Both levels are pure p at Γ.
	near(t, "spin–orbit splitting of Pb", difference("lead-spin-orbit"), 1.37, 1e-6)
	// vogl1983: Γ₁ of GaAs at 1.55, of InSb at 0.23 eV; X₁ − Γ₁ of AlAs 2.30 − 3.04 eV (Vogl et al. 1983, tables).
	near(t, "InSb against GaAs", difference("indium-antimonide-detector"), 0.23-1.55, 1e-3)
	near(t, "X against Γ in AlAs", difference("aluminium-arsenide-barrier"), 2.30-3.04, 1e-3)
	near(t, "gap of Si", difference("silicon-absorber"), 1.1713, 5e-5)
	// The differences add up term by term.
	for name, s := range solved {
		sum := 0.0
		for _, row := range s.Contrast {
			if row.Quantity.IsTerm() {
				sum += row.Difference
			}
		}
		if s.PinA != nil {
			near(t, name+": sum of the contrast", sum, difference(name), 2*ledger.SumTolerance)
		}
	}
	if testing.Short() {
		return
	}
	if k := solved["grey-tin-without-gap"].Edges.Kind; k != edges.Semimetal {
		t.Errorf("grey tin is %s", k)
	}
	if e := solved["germanium-bottom-cell"].Edges; e.CBM.Where != "L" || e.CBM.Valleys != 4 {
		t.Errorf("germanium: %s", e.CBM)
	}
	for _, name := range []string{"aluminium-conductor", "lead-spin-orbit"} {
		if k := solved[name].Edges.Kind; k != edges.Metal {
			t.Errorf("%s is %s", name, k)
		}
	}
}
