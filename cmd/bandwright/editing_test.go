package main_test

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// TestWindowPath edits the k-path in every way: typed, picked in the zone, by
// the marks of the list, by dragging, and undone.
func TestWindowPath(t *testing.T) {
	w := open(t, launch{width: 1440, height: 900})
	s := w.settled()
	path := func(what, want string) state {
		t.Helper()
		return w.wait(what+" to give "+want, patience, func(s state) bool { return s.Path == want && !s.Busy })
	}
	typePath := func(text string) {
		w.click(w.in("path_entry", 0.5, 0.5))
		w.key("ctrl+a")
		w.write(text)
		w.key("Return")
	}
	typePath("L G X | U X")
	path("typing", "L–Γ–X | U–X")

	// A point that does not exist is refused beside the entry; the path stays.
	typePath("L Q")
	w.wait("the refusal", patience, func(s state) bool { return strings.Contains(s.Notice, "Q") && s.Path == "L–Γ–X | U–X" })
	w.settled()
	w.shot("refused")
	typePath("L G X | U X")
	w.settled()

	// The list's first row is L: dragged below Γ they change places.
	row := func(n float64) spot { p := w.in("path", 0.1, 0); p.y += 48 + 19*n; return p }
	w.drag(row(0.5), row(1.9), 8)
	path("dragging a row", "Γ–L–X | U–X")

	// Marks at the end of a row: | mends the break after X, × removes L.
	mark := func(n, fromRight float64) spot { p := w.in("path", 1, 0); p.x -= fromRight; p.y += 48 + 19*n; return p }
	w.click(mark(2.5, 40))
	path("mending the break", "Γ–L–X–U–X")
	w.click(mark(1.5, 20))
	path("removing L", "Γ–X–U–X")

	// Picked in the zone: L at the end.
	w.key("Escape") // out of the entry
	w.click(w.in("zone", 0.5, 0.985))
	w.key("n")
	w.click(w.point("L"))
	path("a pick in the zone", "Γ–X–U–X–L")
	w.key("Escape")
	w.settled()
	w.shot("edited")
	for _, want := range []string{"Γ–X–U–X", "Γ–L–X–U–X", "Γ–L–X | U–X", "L–Γ–X | U–X"} {
		w.key("ctrl+z")
		path("undo", want)
	}
	if s = w.settled(); s.Problem != "" {
		t.Error(s.Problem)
	}
	w.close()
}

// TestWindowPicks holds k points with the pointer: on a face and inside the
// zone, at two depths, and in the path's list; and scales a term.
func TestWindowPicks(t *testing.T) {
	config := t.TempDir()
	w := open(t, launch{width: 1440, height: 900, config: config})
	w.settled()
	w.key("1") // along [100]: the pointer's line of sight is the x axis
	time.Sleep(400 * time.Millisecond)
	w.settled()
	// Each pick a little further on: the held point itself would catch a click.
	at := func(i int) spot { return w.in("zone", 0.30+0.06*float64(i), 0.62) }
	var held [3][3]float64
	for i := range held {
		w.click(at(i))
		before := held[max(0, i-1)]
		s := w.wait("a pick inside the zone", patience, func(s state) bool { return s.Held != before && s.Held != [3]float64{} && !s.Busy })
		w.sums(s)
		held[i] = s.Held
		w.key("bracketright", "bracketright", "bracketright", "bracketright")
		w.settled()
	}
	if held[0] == held[1] || held[1] == held[2] {
		t.Errorf("the depth of a pick makes no difference: %v", held)
	}
	w.shot("inside")

	// The second row of the path's list is X.
	row := w.in("path", 0.1, 0)
	row.y += 48 + 19*1.5
	w.click(row)
	w.wait("X to be held", patience, func(s state) bool { return s.HeldLabel == "X" && !s.Busy })

	// Level by level through the Ladder; each Ledger sums to its level.
	for range 3 {
		now := w.settled()
		w.key("Up")
		s := w.wait("the next level", patience, func(s state) bool { return s.FocusFirst > now.FocusFirst && !s.Busy })
		w.sums(s)
	}

	// Spin–orbit coupling by its key, and an off-path edge by its own.
	w.key("s")
	w.wait("spin–orbit coupling", patience, func(s state) bool { return s.SpinOrbit && !s.Busy })
	w.key("d")
	direct := w.wait("the direct gap", patience, func(s state) bool { return s.HeldLabel != "X" && !s.Busy })
	w.sums(direct)
	w.settled()
	w.shot("off-path")

	// A click on a row of the Ledger chooses the term to scale; the slider's
	// drag is one step, and the model is altered.
	rows := w.in("ledger", 0.1, 0)
	rows.y += 34 + 9 + 17*10
	w.click(rows)
	depth := w.settled().UndoDepth
	w.drag(w.in("factor", 0.5, 0.5), w.in("factor", 0.2, 0.5), 10)
	scaled := w.wait("a scaled term", patience, func(s state) bool { return s.UndoDepth == depth+1 && !s.Busy })
	w.sums(scaled)
	w.settled()
	w.shot("scaled")

	// Dark from now on, also at the next start.
	w.key("ctrl+l")
	time.Sleep(300 * time.Millisecond)
	w.settled()
	w.shot("dark")
	w.close()
	text, err := os.ReadFile(filepath.Join(config, "preferences.toml"))
	if err != nil || !strings.Contains(string(text), "dark") {
		t.Errorf("the preferences hold %q (%v)", text, err)
	}
}
