package session

import (
	"errors"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"bandwright/physics/catalog"
	"bandwright/physics/edges"
	"bandwright/physics/lattice"
	"bandwright/ui/doc"
)

func TestUseSet(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	do(t, s, SetPath{Legs: []string{"L Γ X"}})
	do(t, s, SetLatticeConstant{A: 5.5})
	do(t, s, Hold{K: lattice.FracK{0.5, 0.5, 0.5}, Level: 4})
	settle(t, s, l)
	do(t, s, UseSet{"vogl1983/Ge"})
	snap := settle(t, s, l)
	check(t, snap)
	set, err := catalog.Lookup("vogl1983/Ge")
	if err != nil {
		t.Fatal(err)
	}
	if snap.Doc.Crystal.A != set.A || snap.Built.Crystal.Formula() != "Ge" {
		t.Errorf("%s at a = %g, want Ge at %g", snap.Built.Crystal.Formula(), snap.Doc.Crystal.A, set.A)
	}
	if len(snap.Doc.Path.Legs) != 1 || snap.Doc.View.Held != (lattice.FracK{0.5, 0.5, 0.5}) || snap.Doc.View.Level != 4 {
		t.Errorf("path %v, held %v, level %d: those of the same lattice stay", snap.Doc.Path.Legs, snap.Doc.View.Held, snap.Doc.View.Level)
	}
	// vogl1983/Ge: 0.7649 eV at L, four valleys (computed independently).
	near(t, "gap of Ge", snap.Edges.Gap, 0.7649, 5e-5)
	if snap.HeldLabel != "L" || snap.Edges.CBM.Valleys != 4 {
		t.Errorf("held %q, edge %s", snap.HeldLabel, snap.Edges.CBM)
	}
	if snap.Doc.Title != set.Title {
		t.Errorf("the title is still %q", snap.Doc.Title)
	}
	do(t, s, SetTitle{"My own"})
	do(t, s, UseSet{"vogl1983/Sn"})
	if title := s.Snapshot().Doc.Title; title != "My own" {
		t.Errorf("a typed title became %q", title)
	}
	do(t, s, UseSet{"vogl1983/Ge"})
	if err := s.Do(UseSet{"nobody/Xx"}); err == nil || s.Snapshot().Doc.Model.Set != "vogl1983/Ge" {
		t.Error("an unknown set is taken:", err)
	}
}

func TestFocusStaysInKind(t *testing.T) {
	s, l := start(t, doc.Document{})
	previewed(t, s, l)
	steps := []struct {
		edit  Edit
		level int // the conduction bottom counted from 0
	}{
		{Focus{4}, 4},
		{UseSet{"vogl1983/GaAs"}, 4},
		{SetSpinOrbit{true}, 8}, // levels are doubled
		{UseSet{"jancu1998/GaAs"}, 8},
		{SetSpinOrbit{false}, 4},
		{Focus{3}, 3},
		{SetSpinOrbit{true}, 7}, // the valence top again
		{UseSet{"fitted/Al"}, 0},
	}
	for _, step := range steps {
		do(t, s, step.edit)
		snap := previewed(t, s, l)
		check(t, snap)
		if snap.Doc.View.Level != step.level {
			t.Errorf("after %#v level %d is in focus, want %d", step.edit, snap.Doc.View.Level, step.level)
		}
	}
}

func TestLatticeOfAnotherKind(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	do(t, s, SetPath{Legs: []string{"L Γ X"}})
	do(t, s, Hold{K: lattice.FracK{0.5, 0.5, 0.5}, Level: 0})
	settle(t, s, l)
	good := s.Snapshot()
	do(t, s, SetCrystal{doc.Crystal{Prototype: "sc", Elements: []string{"Si"}, A: 2.5}})
	snap := settle(t, s, l)
	check(t, snap)
	if len(snap.Doc.Path.Legs) != 0 || snap.Doc.View.Held != (lattice.FracK{}) {
		t.Errorf("path %v and held %v of another lattice stay", snap.Doc.Path.Legs, snap.Doc.View.Held)
	}
	s.Undo()
	snap = settle(t, s, l)
	if !undoable(snap.Doc).Equal(undoable(good.Doc)) {
		t.Error("undo does not bring the crystal and path back")
	}
	check(t, snap)
}

func TestSpinOrbitThatASetLacks(t *testing.T) {
	s, l := start(t, doc.Document{})
	do(t, s, UseSet{"fitted/Al"})
	settle(t, s, l)
	before := s.Snapshot()
	err := s.Do(SetSpinOrbit{true})
	if err == nil || !strings.Contains(err.Error(), "not available") || !strings.Contains(err.Error(), "Al") {
		t.Error("error:", err)
	}
	if s.Snapshot() != before {
		t.Error("a refused edit changes something")
	}
	// A set without it is taken with it off.
	do(t, s, UseSet{"vogl1983/Si"})
	do(t, s, SetSpinOrbit{true})
	do(t, s, UseSet{"fitted/Al"})
	if snap := settle(t, s, l); snap.Doc.Model.SpinOrbit || snap.BuildErr != nil || snap.Edges.Kind != edges.Metal {
		t.Errorf("spin–orbit %v, %v", snap.Doc.Model.SpinOrbit, snap.BuildErr)
	}
}

func TestRefusedEdits(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	before := s.Snapshot()
	for _, e := range []Edit{
		SetLatticeConstant{A: 0}, SetLatticeConstant{A: -5}, SetLatticeConstant{A: math.NaN()}, SetLatticeConstant{A: math.Inf(1)},
		SetLatticeConstant{A: 1e-3, Dragging: true}, SetLatticeConstant{A: 0.5},
		SetFactor{Term: "shell1 ppσ", Value: 3}, SetFactor{Term: "shell1 ppσ", Value: math.NaN()}, SetFactor{Term: "shell7 ppσ", Value: 1.5},
		SetPath{Legs: []string{"Γ Q"}}, SetPath{Legs: []string{"Γ"}},
		SetMesh{[3]int{0, 1, 1}}, SetMesh{[3]int{1, 1, 100_000}},
		Hold{K: lattice.FracK{math.NaN(), 0, 0}}, Hold{Level: 99}, Hold{Level: NearestEnergy, Energy: math.NaN()},
		Focus{-1}, Focus{10},
		PinLevel{'C'}, ClearPin{0},
		SetCrystal{doc.Crystal{Prototype: "diamond", Elements: []string{"Qq"}, A: 5}},
		SetCrystal{doc.Crystal{Prototype: "diamond", Elements: []string{"Si", "C"}, A: 5}},
		SetCrystal{doc.Crystal{}},
		UseSetFile{filepath.Join(t.TempDir(), "none.toml")}, UseSetFile{t.TempDir()},
		SetTitle{"two\nlines"},
	} {
		if err := s.Do(e); err == nil || err.Error() == "" {
			t.Errorf("%#v is taken", e)
		}
		if s.Snapshot() != before {
			t.Fatalf("%#v changes something though it is refused", e)
		}
	}
	if s.CanUndo() {
		t.Error("a refused edit can be undone")
	}
}

func TestFailedBuildKeepsTheLastResults(t *testing.T) {
	s, l := start(t, doc.Document{})
	good := settle(t, s, l)
	// The set knows silicon alone.
	do(t, s, SetCrystal{doc.Crystal{Prototype: "diamond", Elements: []string{"Ge"}, A: 5.66}})
	bad := settle(t, s, l)
	if bad.BuildErr == nil || !strings.Contains(bad.BuildErr.Error(), "Ge") {
		t.Fatal("error:", bad.BuildErr)
	}
	if bad.Bands != good.Bands || bad.DOS != good.DOS || bad.Edges != good.Edges || bad.Held == nil {
		t.Error("the last good results are gone")
	}
	if !bad.BandsStale || !bad.DOSStale || !bad.EdgesStale || !bad.HeldStale {
		t.Error("they are not marked stale")
	}
	check(t, bad)
	// Looking around in the last good results goes on.
	do(t, s, Hold{K: lattice.FracK{0.5, 0.5, 0.5}, Level: 3})
	if snap := settle(t, s, l); snap.HeldLabel != "L" || snap.BuildErr == nil {
		t.Errorf("held %q, %v", snap.HeldLabel, snap.BuildErr)
	}
	if err := s.Do(PinLevel{'A'}); err == nil {
		t.Error("a level of another study is pinned")
	}
	s.Undo()
	mended := settle(t, s, l)
	if mended.BuildErr != nil || mended.BandsStale || mended.DOSStale || mended.EdgesStale || mended.HeldStale {
		t.Errorf("after undo: %+v", mended)
	}
	check(t, mended)
}

func TestFactors(t *testing.T) {
	s, l := start(t, doc.Document{})
	previewed(t, s, l)
	do(t, s, SetFactor{Term: "shell1 ppσ", Value: 0.5})
	do(t, s, SetFactor{Term: "onsite s", Value: 1.1})
	snap := previewed(t, s, l)
	if len(snap.Built.Model.Altered()) != 2 || len(snap.Doc.Model.Factors) != 2 {
		t.Errorf("altered: %v", snap.Built.Model.Altered())
	}
	do(t, s, SetFactor{Term: "onsite s", Value: 1})
	if n := len(s.Snapshot().Doc.Model.Factors); n != 1 {
		t.Errorf("%d factors, want one: 1 takes a factor away", n)
	}
	do(t, s, ClearFactors{})
	snap = previewed(t, s, l)
	if len(snap.Built.Model.Altered()) != 0 {
		t.Errorf("altered: %v", snap.Built.Model.Altered())
	}
	for range 4 {
		s.Undo()
	}
	if s.CanUndo() || s.Snapshot().Doc.Model.Factors != nil {
		t.Error("four edits are not four steps")
	}
}

func TestDragIsOneStep(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	a := s.Snapshot().Doc.Crystal.A
	for range 2 {
		for i := range 10 {
			do(t, s, SetLatticeConstant{A: a + 0.01*float64(i+1), Dragging: true})
			l.turn(t)
		}
		do(t, s, SetLatticeConstant{A: a + 0.1})
		do(t, s, SetLatticeConstant{A: a + 0.2}) // typed: its own step
	}
	if s.UndoDepth() != 4 {
		t.Errorf("%d steps, want two drags and two typed values", s.UndoDepth())
	}
	for _, want := range []float64{a + 0.1, a + 0.2, a + 0.1, a} {
		s.Undo()
		near(t, "a", s.Snapshot().Doc.Crystal.A, want, 1e-12)
	}
	s.Redo()
	near(t, "a", s.Snapshot().Doc.Crystal.A, a+0.1, 1e-12)
	check(t, settle(t, s, l))
}

func TestDragKeepsWhatIsInFractions(t *testing.T) {
	s, l := start(t, doc.Document{})
	before := settle(t, s, l).Built
	do(t, s, SetLatticeConstant{A: 5.5, Dragging: true})
	after := previewed(t, s, l).Built
	if after.Group != before.Group || after.Mesh != before.Mesh {
		t.Error("the group and the mesh are made anew")
	}
	if after.Zone == before.Zone || after.Crystal.Setting.A != 5.5 {
		t.Error("the zone is that of another lattice constant")
	}
	do(t, s, SetLatticeConstant{A: 5.5})
	do(t, s, SetSpinOrbit{true})
	if again := previewed(t, s, l).Built; again.Zone != after.Zone || again.Group != before.Group || again.Model == after.Model {
		t.Error("spin–orbit coupling changes more than the model")
	}
}

func TestDragPausesRefining(t *testing.T) {
	s, l := start(t, doc.Document{})
	before := settle(t, s, l)
	do(t, s, SetLatticeConstant{A: 5.5, Dragging: true})
	snap := previewed(t, s, l)
	if snap.DOS != before.DOS || !snap.DOSStale || !snap.EdgesStale || snap.Busy {
		t.Error("refining does not wait for the drag to rest")
	}
	// At rest, though not ended, it refines.
	for s.Snapshot().DOSStale || s.Snapshot().EdgesStale {
		l.turn(t)
	}
	check(t, s.Snapshot())
}

func TestStopAndResume(t *testing.T) {
	s, l := start(t, doc.Document{})
	for s.Snapshot().Bands == nil {
		l.turn(t)
	}
	if len(s.Snapshot().Progress) == 0 {
		t.Error("no progress while refining")
	}
	s.Stop()
	snap := settle(t, s, l)
	if !snap.Stopped || !errors.Is(snap.DOSErr, ErrStopped) || !errors.Is(snap.EdgesErr, ErrStopped) || snap.DOS != nil {
		t.Errorf("stopped %v: %v, %v", snap.Stopped, snap.DOSErr, snap.EdgesErr)
	}
	s.Resume()
	if snap = settle(t, s, l); snap.Stopped || snap.DOS == nil || snap.DOSErr != nil || snap.Edges == nil {
		t.Error("nothing goes on")
	}
	do(t, s, SetLatticeConstant{A: 5.5})
	s.Stop()
	snap = settle(t, s, l)
	if snap.BandsStale || !snap.DOSStale || !errors.Is(snap.DOSErr, ErrStopped) {
		t.Error("previews go on, refining does not")
	}
	// A change of the study starts it again.
	do(t, s, SetLatticeConstant{A: 5.6})
	if snap = settle(t, s, l); snap.Stopped || snap.DOSStale || snap.EdgesStale {
		t.Error("stopped for good")
	}
}

func TestFineBandsFollowCoarseOnes(t *testing.T) {
	d := doc.New()
	d.Path.Step = 2e-4 // some 24,000 points
	s, l := start(t, d)
	coarse := 0
	for s.Snapshot().Busy {
		l.turn(t)
		check(t, s.Snapshot())
		if s.Snapshot().BandsCoarse {
			coarse++
		}
	}
	snap := s.Snapshot()
	if coarse == 0 || snap.BandsCoarse || snap.BandsStale {
		t.Errorf("%d coarse snapshots, the last coarse %v stale %v", coarse, snap.BandsCoarse, snap.BandsStale)
	}
	if n := len(snap.Bands.Sampling.K); n < 20_000 {
		t.Errorf("%d points", n)
	}
}

func TestFermiOfAMetal(t *testing.T) {
	s, l := start(t, doc.Document{})
	do(t, s, UseSet{"fitted/Al"})
	snap := settle(t, s, l)
	// fitted/Al: E_F = 11.519 eV on 48³ (computed independently).
	near(t, "Fermi level", snap.Fermi, 11.519, 2e-3)
	do(t, s, SetLatticeConstant{A: 4.06, Dragging: true})
	if snap = previewed(t, s, l); !snap.FermiKnown || !snap.FermiStale {
		t.Error("the last Fermi level is not kept and marked")
	}
}

func TestPins(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	do(t, s, PinLevel{'A'})
	do(t, s, UseSet{"vogl1983/Sn"})
	if err := s.Do(PinLevel{'B'}); err == nil {
		t.Error("a level is pinned before it is known")
	}
	settle(t, s, l)
	do(t, s, Focus{0})
	do(t, s, PinLevel{'B'})
	snap := settle(t, s, l)
	a, b := snap.PinA, snap.PinB
	if a == nil || b == nil || a.Err != nil || b.Err != nil {
		t.Fatalf("pins %+v %+v", a, b)
	}
	// The valence top of the set is 0 eV by construction (P. Vogl et al. 1983).
	if a.Name != "Si Γ, levels 2–4, 0.000 eV, vogl1983/Si" || a.Formula != "Si" || a.KLabel != "Γ" || a.SetID != "vogl1983/Si" {
		t.Errorf("pin A: %q", a.Name)
	}
	if !strings.HasPrefix(b.Name, "Sn Γ, level 1, −") {
		t.Errorf("pin B: %q", b.Name)
	}
	sumA, sumB := 0.0, 0.0
	for _, row := range snap.Contrast {
		if row.Quantity.IsTerm() {
			sumA, sumB = sumA+row.A, sumB+row.B
		}
	}
	near(t, "terms of A", sumA, a.Entry.Set.Energy, 1e-9)
	near(t, "terms of B", sumB, b.Entry.Set.Energy, 1e-9)
	do(t, s, SwapPins{})
	if snap := s.Snapshot(); snap.PinA != b || snap.PinB != a || snap.Busy || len(snap.Contrast) == 0 {
		t.Error("swapping pins computes them again")
	}
	do(t, s, ClearPin{'A'})
	if snap := s.Snapshot(); snap.PinA != nil || snap.PinB != a || snap.Contrast != nil {
		t.Error("pin A stays")
	}
	for s.CanUndo() {
		s.Undo()
	}
	if snap := settle(t, s, l); snap.PinA != nil || snap.PinB != nil || snap.Doc.Model.Set != "vogl1983/Si" {
		t.Error("pins are not undone")
	}
}

func TestBadPin(t *testing.T) {
	d := doc.New()
	d.PinA = &doc.Pin{Crystal: d.Crystal, Model: doc.Model{Kind: "two-centre", Set: "nobody/Xx"}}
	d.PinB = &doc.Pin{Crystal: d.Crystal, Model: d.Model, Level: 77}
	s, l := start(t, d)
	snap := settle(t, s, l)
	if snap.PinA == nil || snap.PinA.Err == nil || snap.PinB == nil || snap.PinB.Err == nil || snap.Contrast != nil {
		t.Errorf("pins %+v %+v", snap.PinA, snap.PinB)
	}
	if snap.BuildErr != nil || snap.Bands == nil {
		t.Error("a bad pin spoils the study")
	}
}

func TestSaveAndOpen(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	if err := s.Save(); err == nil {
		t.Error("saved without a file")
	}
	file := filepath.Join(t.TempDir(), "own.bandstudy")
	do(t, s, SetLatticeConstant{A: 5.5})
	do(t, s, Hold{K: lattice.FracK{0.5, 0.5, 0.5}, Level: 4})
	do(t, s, PinLevel{'A'})
	if !s.Modified() {
		t.Error("not modified")
	}
	if err := s.SaveAs(file); err != nil {
		t.Fatal(err)
	}
	settle(t, s, l)
	if s.Modified() || s.File() != file || s.Snapshot().File != file {
		t.Errorf("modified %v, file %q", s.Modified(), s.File())
	}
	saved := s.Snapshot().Doc
	do(t, s, Hold{K: lattice.FracK{}, Level: 0})
	if s.Modified() {
		t.Error("holding another k point is a modification")
	}
	do(t, s, SetTitle{"Changed"})
	if !s.Modified() {
		t.Error("a new title is no modification")
	}
	s.Undo()
	if s.Modified() {
		t.Error("modified after undo")
	}
	if err := s.Open(file); err != nil {
		t.Fatal(err)
	}
	snap := settle(t, s, l)
	if !snap.Doc.Equal(saved) || s.CanUndo() {
		t.Errorf("opened:\n%+v\nsaved:\n%+v", snap.Doc, saved)
	}
	check(t, snap)
	if snap.HeldLabel != "L" || snap.PinA == nil {
		t.Errorf("held %q, pin %v", snap.HeldLabel, snap.PinA)
	}
	bad := filepath.Join(t.TempDir(), "bad.bandstudy")
	if err := os.WriteFile(bad, []byte("bandstudy = 1\ncolour = 3\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := s.Open(bad); err == nil || !strings.Contains(err.Error(), "2") {
		t.Error("error:", err)
	}
	if s.Snapshot() != snap {
		t.Error("a failed opening changes something")
	}
	if err := s.SaveAs(filepath.Join(t.TempDir(), "no", "such", "folder", "x.bandstudy")); err == nil || s.File() != file {
		t.Error("saved nowhere:", err)
	}
}

func TestOwnSet(t *testing.T) {
	dir := t.TempDir()
	data, err := os.ReadFile(filepath.Join("..", "..", "assets", "sets", "vogl1983", "Si.toml"))
	if err != nil {
		t.Fatal(err)
	}
	own := filepath.Join(dir, "own.toml")
	if err := os.WriteFile(own, data, 0o600); err != nil {
		t.Fatal(err)
	}
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	if err := s.SaveAs(filepath.Join(dir, "study.bandstudy")); err != nil {
		t.Fatal(err)
	}
	do(t, s, UseSetFile{own})
	snap := settle(t, s, l)
	if snap.BuildErr != nil || snap.Doc.Model.File != own || snap.Doc.Model.Set != "" {
		t.Fatalf("%v; model %+v", snap.BuildErr, snap.Doc.Model)
	}
	gap := snap.Edges.Gap
	do(t, s, SetSpinOrbit{true})
	if snap := settle(t, s, l); snap.BuildErr != nil {
		t.Fatal(snap.BuildErr)
	}
	s.Undo()
	settle(t, s, l)
	// The file is read anew on request, and only then.
	changed := strings.Replace(string(data), "s = -4.2000", "s = -3.2000", 1)
	if changed == string(data) {
		t.Fatal("nothing changed")
	}
	if err := os.WriteFile(own, []byte(changed), 0o600); err != nil {
		t.Fatal(err)
	}
	before := s.Snapshot()
	do(t, s, SetView{func(v doc.View) doc.View { v.Colour = "atoms"; return v }})
	if s.Snapshot().Built != before.Built {
		t.Error("read anew without request")
	}
	do(t, s, UseSetFile{"own.toml"})
	snap = settle(t, s, l)
	if snap.Edges.Gap == gap {
		t.Error("not read anew")
	}
	// In another folder the study still finds its set.
	below := filepath.Join(dir, "below")
	if err := os.Mkdir(below, 0o700); err != nil {
		t.Fatal(err)
	}
	if err := s.SaveAs(filepath.Join(below, "study.bandstudy")); err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile(s.File())
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(string(text), `file = "../own.toml"`) {
		t.Errorf("the study names its set by a path that does not move with it:\n%s", text)
	}
	if err := s.Open(s.File()); err != nil {
		t.Fatal(err)
	}
	if snap = settle(t, s, l); snap.BuildErr != nil || snap.Doc.Model.File != own {
		t.Errorf("%v; file %q", snap.BuildErr, snap.Doc.Model.File)
	}
}

func TestFreeCrystal(t *testing.T) {
	s, l := start(t, doc.Document{})
	settle(t, s, l)
	h := 5.431 / 2
	do(t, s, SetCrystal{doc.Crystal{
		Lattice: [3][3]float64{{0, h, h}, {h, 0, h}, {h, h, 0}},
		Sites:   []doc.Site{{Element: "Si"}, {Element: "Si", At: [3]float64{0.25, 0.25, 0.25}}},
	}})
	snap := settle(t, s, l)
	if snap.BuildErr != nil {
		t.Fatal(snap.BuildErr)
	}
	check(t, snap)
	near(t, "gap", snap.Edges.Gap, 1.1713, 5e-5) // as of the prototype
	do(t, s, SetLatticeConstant{A: 5.5})
	snap = settle(t, s, l)
	if snap.BuildErr != nil {
		t.Fatal(snap.BuildErr)
	}
	near(t, "a", snap.Built.Crystal.Setting.A, 5.5, 1e-9)
}

func TestClosedSessionStaysSilent(t *testing.T) {
	s, l := start(t, doc.Document{})
	called := false
	s.OnChange(func(*Snapshot) { called = true })
	s.Close()
	for {
		select {
		case f := <-l.posted:
			f()
			continue
		default:
		}
		break
	}
	if called {
		t.Error("a closed session calls")
	}
	if err := s.Do(SetTitle{"x"}); err == nil {
		t.Error("a closed session takes edits")
	}
}
