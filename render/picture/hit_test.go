package picture

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// HitTest and HitNearest against the slow and obvious: the distance of a point
// to every item.
func TestHitsAgainstDistances(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		coordinate := rapid.Float64Range(0, 100)
		type disc struct{ x, y, r float64 }
		var discs []disc
		p := New(100, 100)
		for i := range rapid.IntRange(1, 12).Draw(t, "items") {
			d := disc{coordinate.Draw(t, "x"), coordinate.Draw(t, "y"), rapid.Float64Range(0.5, 12).Draw(t, "r")}
			discs = append(discs, d)
			p.SetID(ID(i + 1))
			p.Circle(d.x, d.y, d.r, Fill{})
		}
		x, y, tolerance := coordinate.Draw(t, "px"), coordinate.Draw(t, "py"), rapid.Float64Range(0, 8).Draw(t, "tolerance")
		top, nearest, least := ID(0), ID(0), math.Inf(1)
		const slack = 0.02 // circles are cubic curves, flattened
		for i, d := range discs {
			away := max(0, math.Hypot(x-d.x, y-d.y)-d.r)
			if math.Abs(away-tolerance) < slack {
				return // too close to call
			}
			if away <= tolerance {
				top = ID(i + 1)
				if away <= least+slack {
					if away > least-slack && away > 0 && nearest != 0 && away != least {
						return
					}
					nearest, least = ID(i+1), away
				}
			}
		}
		if id, ok := p.HitTest(x, y, tolerance); id != top || ok != (top != 0) {
			t.Fatalf("the topmost is %d, found %d", top, id)
		}
		if id, ok := p.HitNearest(x, y, tolerance); id != nearest || ok != (nearest != 0) {
			t.Fatalf("the nearest is %d, found %d", nearest, id)
		}
	})
}

func TestClipsHideHits(t *testing.T) {
	p := New(100, 100)
	p.PushClip(R(0, 0, 50, 100))
	p.SetID(3)
	p.FillRect(R(0, 0, 100, 100), Fill{})
	p.PopClip()
	if id, ok := p.HitTest(25, 50, 0); !ok || id != 3 {
		t.Error("what the clip shows is not hit")
	}
	if _, ok := p.HitTest(75, 50, 0); ok {
		t.Error("what the clip hides is hit")
	}
	if b := p.BoundsOf(3); b != R(0, 0, 50, 100) {
		t.Errorf("bounds %v", b)
	}
}

// A picture appended to another draws the same, moved.
func TestAppend(t *testing.T) {
	q := New(40, 40)
	q.Begin("part")
	q.SetID(5)
	q.Line(1, 2, 30, 20, Stroke{Color: Color{A: 255}, Width: 2})
	q.PushClip(R(0, 0, 20, 20))
	q.Circle(15, 15, 9, Fill{Color: Color{R: 1, A: 255}})
	q.PopClip()
	q.End()
	p := New(100, 100)
	p.Append(q, 10, 20)
	want := New(100, 100)
	want.Begin("part")
	want.SetID(5)
	want.Line(11, 22, 40, 40, Stroke{Color: Color{A: 255}, Width: 2})
	want.PushClip(R(10, 20, 20, 20))
	want.Circle(25, 35, 9, Fill{Color: Color{R: 1, A: 255}})
	want.PopClip()
	want.End()
	if p.Dump() != want.Dump() {
		t.Errorf("appended:\n%s\ndrawn there:\n%s", p.Dump(), want.Dump())
	}
	// Reset keeps nothing.
	p.Reset(100, 100)
	if p.Len() != 0 || p.Dump() != New(100, 100).Dump() {
		t.Error("something survives Reset")
	}
}

func TestNumbersThatAreNone(t *testing.T) {
	p := New(10, 10)
	nan, inf := math.NaN(), math.Inf(1)
	p.Polyline(Stroke{Color: Color{A: 255}, Width: 1}, Pt(0, 0), Pt(1, 1), Pt(nan, 1), Pt(2, 2), Pt(inf, 0), Pt(3, 3), Pt(4, 4))
	p.Line(nan, nan, inf, 1, Stroke{Width: 1})
	p.FillRect(Rect{nan, 0, 1, inf}, Fill{})
	p.Circle(1, 1, nan, Fill{})
	b := p.Bounds()
	if !(b.X0 >= -3 && b.X1 <= 7) {
		t.Errorf("bounds %v", b)
	}
	p.HitTest(nan, 1, 5)
	p.HitNearest(1, inf, 5)
}
