package session

import (
	"math"
	"strings"
	"testing"
	"time"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/ui/doc"
)

// loop is the goroutine that owns a session, here that of the test: posted
// functions run when the test turns the loop.
type loop struct{ posted chan func() }

func newLoop() *loop { return &loop{posted: make(chan func(), 10_000)} }

func (l *loop) post(f func()) { l.posted <- f }

// turn runs what has been posted, and waits for one function at least.
func (l *loop) turn(t testing.TB) {
	t.Helper()
	select {
	case f := <-l.posted:
		f()
	case <-time.After(time.Minute):
		t.Fatal("nothing happens")
	}
}

// start opens a session on a document of its own loop.
func start(t testing.TB, d doc.Document) (*Session, *loop) {
	t.Helper()
	l := newLoop()
	s := New(Options{Post: l.post, Document: d, Dir: t.TempDir()})
	t.Cleanup(s.Close)
	return s, l
}

// settle turns the loop until nothing is computed any more.
func settle(t testing.TB, s *Session, l *loop) *Snapshot {
	t.Helper()
	for s.Snapshot().Busy {
		l.turn(t)
	}
	return s.Snapshot()
}

// previewed turns the loop until bands and held levels are those of the study.
func previewed(t testing.TB, s *Session, l *loop) *Snapshot {
	t.Helper()
	for s.Snapshot().BandsStale || s.Snapshot().HeldStale || s.Snapshot().Bands == nil {
		l.turn(t)
	}
	return s.Snapshot()
}

func do(t testing.TB, s *Session, e Edit) {
	t.Helper()
	if err := s.Do(e); err != nil {
		t.Fatalf("%#v: %v", e, err)
	}
}

func near(t failer, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.9g, want %.9g ± %g", what, got, want, tol)
	}
}

func TestStartShowsSilicon(t *testing.T) {
	s, l := start(t, doc.Document{})
	first := s.Snapshot()
	if first == nil || !first.Busy || first.Built != nil {
		t.Fatalf("before the first result: %+v", first)
	}
	snap := settle(t, s, l)
	if snap.BuildErr != nil || snap.BandsErr != nil || snap.DOSErr != nil || snap.EdgesErr != nil || snap.HeldErr != nil {
		t.Fatal(snap.BuildErr, snap.BandsErr, snap.DOSErr, snap.EdgesErr, snap.HeldErr)
	}
	if snap.BandsStale || snap.BandsCoarse || snap.DOSStale || snap.EdgesStale || snap.HeldStale || snap.Modified {
		t.Errorf("stale, coarse or modified at rest: %+v", snap)
	}
	// vogl1983/Si: gap 1.1713 eV at 0.7311 of Γ–X, six valleys; valence top at 0 eV by
	// construction of the set (P. Vogl et al. 1983; minimum computed independently).
	near(t, "gap", snap.Edges.Gap, 1.1713, 5e-5)
	if !strings.HasPrefix(snap.Edges.CBM.Where, "0.7311 of Γ–X") || snap.Edges.CBM.Valleys != 6 {
		t.Errorf("minimum %s", snap.Edges.CBM)
	}
	near(t, "Fermi", snap.Fermi, 0, 1e-3)
	if !snap.FermiKnown || snap.FermiStale || snap.Filled != 4 {
		t.Errorf("Fermi known %v, stale %v, filled %d", snap.FermiKnown, snap.FermiStale, snap.Filled)
	}
	if snap.HeldLabel != "Γ" || snap.HeldCoGroup != "m-3m" || len(snap.HeldStar) != 1 || snap.HeldPlace != "m-3m (Oh), star of 1" {
		t.Errorf("held %q %q %q %v", snap.HeldLabel, snap.HeldPlace, snap.HeldCoGroup, snap.HeldStar)
	}
	if snap.Focus == nil || snap.Focus.Set.First != 1 || snap.Focus.Set.Size != 3 {
		t.Errorf("the threefold valence top is not in focus: %+v", snap.Focus)
	}
	if n := len(snap.Bands.Sampling.K); n < 300 || n > 500 {
		t.Errorf("%d points along the path", n)
	}
	if len(snap.Curve.E) < 1000 || len(snap.Curve.COHP) == 0 || len(snap.Curve.Groups) == 0 {
		t.Error("the density has no projections or terms")
	}
	low, high := snap.DOS.Range()
	if snap.Curve.E[0] >= low || snap.Curve.E[len(snap.Curve.E)-1] <= high {
		t.Error("the density does not cover all bands")
	}
}

// check verifies what holds of every snapshot.
func check(t failer, s *Snapshot) {
	t.Helper()
	if s.Built == nil {
		if s.Bands != nil || s.Held != nil {
			t.Fatal("results without a model")
		}
		return
	}
	m := s.Built.Model
	n := len(m.Basis())
	if s.Bands != nil && (s.Bands.N != n || len(s.Bands.Groups) != len(hamiltonian.Groups(m.Basis()))) {
		t.Fatalf("bands of %d levels beside a model of %d", s.Bands.N, n)
	}
	if s.Held == nil {
		t.Fatal("a model without held levels:", s.HeldErr)
	}
	// Held belongs to Built, exactly: the same levels by a fresh solution.
	e := make([]float64, n)
	if err := hamiltonian.NewStates(m).Energies(s.Held.K, e); err != nil {
		t.Fatal(err)
	}
	if len(e) != len(s.Held.Levels) {
		t.Fatalf("%d levels held of a model of %d", len(s.Held.Levels), len(e))
	}
	for i, x := range s.Held.Levels {
		near(t, "held level", x, e[i], 1e-9)
	}
	for _, entry := range s.Held.Entries {
		near(t, "sum of the terms", entry.Sum, entry.Set.Energy, 1e-9)
	}
	if s.Focus == nil {
		t.Fatal("nothing in focus")
	}
	// Bands belong to Built: an end of the path by a fresh solution.
	if s.Bands != nil {
		ik := len(s.Bands.Sampling.K) - 1
		if err := hamiltonian.NewStates(m).Energies(s.Bands.Sampling.K[ik], e); err != nil {
			t.Fatal(err)
		}
		for i, x := range s.Bands.Levels(ik) {
			near(t, "band", x, e[i], 1e-9)
		}
	}
	if !s.BandsStale {
		if s.Doc.Crystal.Prototype != "" && s.Built.Crystal.Setting.A != s.Doc.Crystal.A {
			t.Fatalf("fresh bands at a = %g, the document has %g", s.Built.Crystal.Setting.A, s.Doc.Crystal.A)
		}
		if s.Doc.Model.Set != "" && s.Built.Set.ID != s.Doc.Model.Set {
			t.Fatalf("fresh bands of %s, the document has %s", s.Built.Set.ID, s.Doc.Model.Set)
		}
		if s.Doc.Model.SpinOrbit != (m.SpinDegeneracy() == 1) {
			t.Fatal("fresh bands with the other spin–orbit setting")
		}
	}
	if s.DOS != nil && !s.DOSStale {
		if s.DOS.N != n || s.DOS.Mesh != s.Built.Mesh || s.DOS.Mesh.Divisions != s.Doc.Mesh || s.BandsStale {
			t.Fatal("a fresh density of another document")
		}
	}
	if s.Edges != nil && !s.EdgesStale && s.BandsStale {
		t.Fatal("fresh edges of another document")
	}
	if !s.HeldStale && s.Held.K != s.Doc.View.Held {
		t.Fatalf("fresh held levels at %v, the document holds %v", s.Held.K, s.Doc.View.Held)
	}
	if !s.HeldStale && !s.Focus.Set.Contains(s.Doc.View.Level) {
		t.Fatalf("focus on levels %v, the document focuses %d", s.Focus.Set, s.Doc.View.Level)
	}
}

func TestViewRecomputesNothing(t *testing.T) {
	s, l := start(t, doc.Document{})
	before := settle(t, s, l)
	do(t, s, SetView{func(v doc.View) doc.View { v.Colour, v.Window = "atoms", [2]float64{-5, 5}; return v }})
	do(t, s, SetTitle{"Another title"})
	after := s.Snapshot()
	if after.Busy {
		t.Error("a colour starts computing")
	}
	if after.Bands != before.Bands || after.Held != before.Held || after.DOS != before.DOS || after.Edges != before.Edges || after.Built != before.Built {
		t.Error("a colour replaces results")
	}
	if after.Revision <= before.Revision || after.Doc.View.Colour != "atoms" || !after.Modified {
		t.Errorf("revision %d after %d, modified %v", after.Revision, before.Revision, after.Modified)
	}
	if s.UndoDepth() != 1 {
		t.Errorf("%d steps to undo, want that of the title alone", s.UndoDepth())
	}
	s.Undo()
	if d := s.Snapshot().Doc; d.Title == "Another title" || d.View.Colour != "atoms" {
		t.Error("undo reaches for the view")
	}
}

func TestPathKeepsTheModel(t *testing.T) {
	s, l := start(t, doc.Document{})
	before := settle(t, s, l)
	do(t, s, SetPath{Legs: []string{"L Γ X"}})
	after := settle(t, s, l)
	if after.Built.Model != before.Built.Model || after.DOS != before.DOS || after.Edges != before.Edges {
		t.Error("a path recomputes more than bands")
	}
	if after.Bands == before.Bands || len(after.Bands.Sampling.Ticks) != 3 {
		t.Error("the bands are not those of the new path")
	}
	do(t, s, SetMesh{[3]int{8, 8, 8}})
	meshed := settle(t, s, l)
	if meshed.Bands != after.Bands || meshed.Built.Model != before.Built.Model {
		t.Error("a mesh recomputes bands")
	}
	if meshed.DOS == after.DOS || meshed.DOS.Mesh.Divisions != [3]int{8, 8, 8} {
		t.Error("the density is not of the new mesh")
	}
}

func TestHoldSolvesExactly(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	k := lattice.FracK{0.1234, 0.2345, 0.3456}
	do(t, s, Hold{K: k, Level: NearestEnergy, Energy: 2.0})
	if snap := s.Snapshot(); !snap.HeldStale || snap.Held.K == k {
		t.Error("the old solution is not marked while the new one is on the way")
	}
	snap := settle(t, s, l)
	check(t, snap)
	if snap.Held.K != k {
		t.Fatalf("held %v", snap.Held.K)
	}
	level := snap.Doc.View.Level
	for _, e := range snap.Held.Levels {
		if math.Abs(e-2) < math.Abs(snap.Held.Levels[level]-2)-1e-12 {
			t.Errorf("level %d at %g is focused, %g is nearer to 2 eV", level, snap.Held.Levels[level], e)
		}
	}
	if snap.HeldLabel != "" || len(snap.HeldStar) != 48 || snap.HeldCoGroup != "1" {
		t.Errorf("general position: %q, star of %d, %q", snap.HeldLabel, len(snap.HeldStar), snap.HeldCoGroup)
	}
	// The level nearest in energy to the focused one.
	energy := snap.Focus.Set.Energy
	do(t, s, Hold{K: lattice.FracK{0.5, 0.5, 0.5}, Level: NearestEnergy})
	snap = settle(t, s, l)
	for _, entry := range snap.Held.Entries {
		if math.Abs(entry.Set.Energy-energy) < math.Abs(snap.Focus.Set.Energy-energy)-1e-12 {
			t.Errorf("%g is focused, %g is nearer to %g", snap.Focus.Set.Energy, entry.Set.Energy, energy)
		}
	}
	if snap.HeldLabel != "L" || snap.HeldCoGroup != "-3m" || len(snap.HeldStar) != 4 {
		t.Errorf("L: %q %q star of %d", snap.HeldLabel, snap.HeldCoGroup, len(snap.HeldStar))
	}
	do(t, s, Focus{0})
	if snap := s.Snapshot(); snap.Focus.Set.First != 0 || snap.Busy {
		t.Error("a focus on solved levels needs no computing")
	}
	// A place on a leg, and its equivalents, are named by the leg; X is (½, 0, ½).
	for _, k := range []lattice.FracK{{0.2, 0, 0.2}, {0, 0.2, 0.2}, {-0.2, 0, -0.2}, {1.2, 0, 0.2}} {
		do(t, s, Hold{K: k, Level: 3})
		if snap := settle(t, s, l); snap.HeldLabel != "0.4000 of Γ–X" || snap.HeldCoGroup != "4mm" || len(snap.HeldStar) != 6 {
			t.Errorf("%v: %q %q star of %d", k, snap.HeldLabel, snap.HeldCoGroup, len(snap.HeldStar))
		}
	}
}

func TestManyHoldsEndAtTheLast(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	var last lattice.FracK
	for i := range 200 {
		last = lattice.FracK{float64(i) / 400, 0.1, 0.2}
		do(t, s, Hold{K: last, Level: NearestEnergy, Energy: 1})
		if i%7 == 0 {
			l.turn(t)
		}
	}
	snap := settle(t, s, l)
	if snap.Held.K != last || snap.HeldStale {
		t.Errorf("held %v, want %v", snap.Held.K, last)
	}
}

// failer is a test, also one of rapid.
type failer interface {
	Helper()
	Errorf(format string, args ...any)
	Fatalf(format string, args ...any)
	Fatal(args ...any)
}
