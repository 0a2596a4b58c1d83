package session

import (
	"fmt"
	"testing"

	"pgregory.net/rapid"

	"bandwright/physics/lattice"
	"bandwright/ui/doc"
)

// TestRandomEdits drives a session with random edits, undo and redo, while
// results arrive in between as they may, and checks every snapshot. At the end
// undoing everything must give the document of the beginning.
func TestRandomEdits(t *testing.T) {
	sets := []string{"vogl1983/Si", "vogl1983/GaAs", "vogl1983/Sn", "chadi-cohen1975/Ge", "fitted/Al-sp"}
	rapid.Check(t, func(t *rapid.T) {
		l := newLoop()
		first := doc.New()
		first.Mesh = [3]int{6, 6, 6} // the machinery is tested, not the mesh
		s := New(Options{Post: l.post, Document: first})
		defer s.Close()
		s.OnChange(func(snap *Snapshot) { check(t, snap) })
		start := s.Snapshot().Doc

		revision := 0
		turn := func(most int) {
			for range most {
				select {
				case f := <-l.posted:
					f()
				default:
					return
				}
			}
		}
		k := rapid.Custom(func(t *rapid.T) lattice.FracK {
			i := func(name string) float64 { return float64(rapid.IntRange(-8, 8).Draw(t, name)) / 8 }
			return lattice.FracK{i("k1"), i("k2"), i("k3")}
		})
		edit := func(e Edit) {
			before := s.Snapshot()
			if err := s.Do(e); err != nil && s.Snapshot() != before {
				t.Fatalf("%#v is refused (%v) and changes something", e, err)
			}
		}
		t.Repeat(map[string]func(*rapid.T){
			"set": func(t *rapid.T) { edit(UseSet{rapid.SampledFrom(sets).Draw(t, "set")}) },
			"crystal": func(t *rapid.T) {
				edit(SetCrystal{rapid.SampledFrom([]doc.Crystal{
					{Prototype: "diamond", Elements: []string{"Si"}, A: 5.43},
					{Prototype: "sc", Elements: []string{"Si"}, A: 2.6},
					{Prototype: "zincblende", Elements: []string{"As", "Ga"}, A: 5.65},
				}).Draw(t, "crystal")})
			},
			"constant": func(t *rapid.T) {
				edit(SetLatticeConstant{A: rapid.Float64Range(3, 8).Draw(t, "a"), Dragging: rapid.Bool().Draw(t, "dragging")})
			},
			"factor": func(t *rapid.T) {
				edit(SetFactor{Term: rapid.SampledFrom([]string{"shell1 ppσ", "shell1 ssσ", "onsite p"}).Draw(t, "term"),
					Value: rapid.Float64Range(0, 2).Draw(t, "factor"), Dragging: rapid.Bool().Draw(t, "dragging")})
			},
			"factors":   func(*rapid.T) { edit(ClearFactors{}) },
			"spinorbit": func(t *rapid.T) { edit(SetSpinOrbit{rapid.Bool().Draw(t, "on")}) },
			"path": func(t *rapid.T) {
				edit(SetPath{Legs: rapid.SampledFrom([][]string{nil, {"Γ X"}, {"L Γ", "X W"}, {"Γ M"}, {"0 0 0 | nonsense"}}).Draw(t, "legs")})
			},
			"mesh": func(t *rapid.T) { n := rapid.IntRange(1, 8).Draw(t, "n"); edit(SetMesh{[3]int{n, n, n}}) },
			"hold": func(t *rapid.T) {
				edit(Hold{K: k.Draw(t, "k"), Level: rapid.IntRange(-1, 9).Draw(t, "level"), Energy: rapid.Float64Range(-5, 5).Draw(t, "E")})
			},
			"focus": func(t *rapid.T) { edit(Focus{rapid.IntRange(0, 19).Draw(t, "level")}) },
			"pin":   func(t *rapid.T) { edit(PinLevel{rapid.SampledFrom([]byte("AB")).Draw(t, "slot")}) },
			"unpin": func(t *rapid.T) { edit(ClearPin{rapid.SampledFrom([]byte("AB")).Draw(t, "slot")}) },
			"swap":  func(*rapid.T) { edit(SwapPins{}) },
			"view": func(t *rapid.T) {
				colour := rapid.SampledFrom([]string{"orbitals", "atoms", "plain"}).Draw(t, "colour")
				edit(SetView{func(v doc.View) doc.View { v.Colour = colour; return v }})
			},
			"undo":   func(*rapid.T) { s.Undo() },
			"redo":   func(*rapid.T) { s.Redo() },
			"stop":   func(*rapid.T) { s.Stop() },
			"resume": func(*rapid.T) { s.Resume() },
			"turn":   func(t *rapid.T) { turn(rapid.IntRange(1, 5).Draw(t, "turns")) },
			"settle": func(*rapid.T) {
				for s.Snapshot().Busy {
					(<-l.posted)()
				}
			},
			"": func(t *rapid.T) {
				if r := s.Snapshot().Revision; r < revision {
					t.Fatalf("revision %d after %d", r, revision)
				} else {
					revision = r
				}
				if s.CanUndo() != (s.UndoDepth() > 0) {
					t.Fatalf("can undo %v with %d steps", s.CanUndo(), s.UndoDepth())
				}
			},
		})

		// What the random walk has made is what a new session makes of the same document.
		edit(SetTitle{"at rest"}) // ends a drag
		for s.Snapshot().Busy {
			(<-l.posted)()
		}
		if got := s.Snapshot(); got.BuildErr == nil {
			fresh := New(Options{Post: l.post, Document: got.Doc})
			for fresh.Snapshot().Bands == nil && fresh.Snapshot().BandsErr == nil && fresh.Snapshot().BuildErr == nil {
				(<-l.posted)()
			}
			want := fresh.Snapshot()
			fresh.Close()
			if same := fmt.Sprint(got.Held.Levels) == fmt.Sprint(want.Held.Levels); !same || got.HeldStale {
				t.Fatalf("held levels %v, stale %v; a new session has %v", got.Held.Levels, got.HeldStale, want.Held.Levels)
			}
			if (got.Bands == nil) != (want.Bands == nil) || got.BandsStale || got.Bands != nil && fmt.Sprint(got.Bands.E) != fmt.Sprint(want.Bands.E) && !want.BandsCoarse {
				t.Fatal("bands differ from those of a new session")
			}
		}

		for s.CanUndo() {
			s.Undo()
		}
		if d := s.Snapshot().Doc; !undoable(d).Equal(undoable(start)) {
			t.Fatalf("undoing everything gives\n%+v\nnot\n%+v", d, start)
		}
	})
}
