package mark

import (
	"fmt"
	"testing"

	"pgregory.net/rapid"

	"bandwright/render/picture"
	"bandwright/render/typeset"
)

// Placed labels overlap neither each other nor what is blocked, and lie inside.
func TestLabelsKeepClear(t *testing.T) {
	var pl Placer
	area := picture.R(0, 0, 300, 200)
	rapid.Check(t, func(t *rapid.T) {
		pl.Reset(area)
		var blocks []picture.Rect
		for range rapid.IntRange(0, 4).Draw(t, "blocks") {
			b := picture.R(rapid.Float64Range(0, 280).Draw(t, "x"), rapid.Float64Range(0, 180).Draw(t, "y"), 30, 20)
			blocks = append(blocks, b)
			pl.Block(b)
		}
		n := rapid.IntRange(1, 25).Draw(t, "labels")
		for i := range n {
			pl.Add(Label{Key: uint64(i + 1), Anchor: picture.Pt(rapid.Float64Range(-10, 310).Draw(t, "ax"), rapid.Float64Range(-10, 210).Draw(t, "ay")),
				Clear: 4, Text: typeset.Plain(fmt.Sprintf("X%d", i), 12, typeset.Style{}), Priority: i % 3, Pad: 1})
		}
		list := pl.Solve()
		if len(list) != n {
			t.Fatalf("%d answers for %d labels", len(list), n)
		}
		for i, a := range list {
			if !a.Placed {
				continue
			}
			if a.Box.X0 < area.X0-1e-9 || a.Box.X1 > area.X1+1e-9 || a.Box.Y0 < area.Y0-1e-9 || a.Box.Y1 > area.Y1+1e-9 {
				t.Fatalf("label %d leaves the area: %v", i, a.Box)
			}
			for j, b := range list[:i] {
				if b.Placed && a.Box.Overlaps(b.Box) {
					t.Fatalf("labels %d and %d overlap: %v, %v", j, i, b.Box, a.Box)
				}
			}
			for _, b := range blocks {
				if a.Box.Overlaps(b) {
					t.Fatalf("label %d stands on a block: %v, %v", i, a.Box, b)
				}
			}
		}
	})
}

// A label with room around it is placed, and stays where it was when nothing
// has changed.
func TestLabelsStay(t *testing.T) {
	var pl Placer
	place := func(x float64) Placement {
		pl.Reset(picture.R(0, 0, 200, 200))
		pl.Add(Label{Key: 1, Anchor: picture.Pt(x, 100), Clear: 4, Text: typeset.Plain("Γ", 12, typeset.Style{})})
		return pl.Solve()[0]
	}
	a := place(100)
	b := place(100)
	if !a.Placed || a != b {
		t.Errorf("%v, then %v", a, b)
	}
	c := place(103)
	if dx := c.Origin.X - a.Origin.X; dx < 2.9 || dx > 3.1 {
		t.Errorf("the anchor moves by 3, the label by %.2f", dx)
	}
}

func TestHeadPointsForward(t *testing.T) {
	var path picture.Path
	Head(&path, 10, 20, 3, 0, 8)
	b := path.Bounds()
	if b.X1 > 10+1e-9 || b.X0 < 1.9 || b.Y0 > 20 || b.Y1 < 20 {
		t.Errorf("a head of length 8 at (10, 20) lies in %v", b)
	}
	path.Reset()
	Head(&path, 10, 20, 0, 0, 8)
	if !path.Empty() {
		t.Error("a head without a direction")
	}
}
