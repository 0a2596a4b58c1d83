package mark

import (
	"math"
	"slices"
	"strings"

	"bandwright/render/picture"
)

// Label is a text that wants to stand near its anchor.
type Label struct {
	Key      uint64 // who it is, from drawing to drawing; 0 is not remembered
	Anchor   picture.Point
	Clear    float64 // radius about the anchor that stays free: that of its marker
	Text     *picture.Text
	Priority int           // higher ones choose first
	Toward   picture.Point // direction it would like to stand in; zero is no wish
	Pad      float64       // free space kept around the text
}

// Placement is where a label went.
type Placement struct {
	Placed bool
	Box    picture.Rect  // around the letters, without Pad
	Origin picture.Point // of the text: left end of its baseline
	Far    bool          // it stands away from its anchor and wants a leader
	Leader [2]picture.Point
}

// slot is one candidate position: a direction and a distance.
type slot struct {
	dx, dy float64
	gap    float64
	ring   int
	cost   float64
}

const nearSlots = 16 // rings 0 and 1

var slots = makeSlots()

func makeSlots() []slot {
	var list []slot
	for ring, gap := range []float64{2.5, 6, 14, 24, 38, 56} {
		n := 8
		if ring > 1 {
			n = 16
		}
		for i := range n {
			c, s := picture.Turn(float64(i) * 360 / float64(n))
			list = append(list, slot{c, -s, gap, ring, []float64{0, 6, 30, 45, 65, 90}[ring]})
		}
	}
	return list
}

// Costs in the same arbitrary unit: what a label would give to stand better.
const (
	towardCost = 7.0  // the wrong side
	lineCost   = 0.55 // each point of a line through the box, at weight 1
	moveCost   = 12.0 // giving up the place it had
	leaderRing = 2
	sweeps     = 3
)

type obstacle struct {
	a, b   picture.Point
	box    picture.Rect
	weight float64
}

type candidate struct {
	box    picture.Rect // with pad
	cost   float64
	usable bool
	known  bool
}

type labelState struct {
	label  Label
	cand   []candidate
	chosen int // -1 is none
	before int // slot in the drawing before; -1 is none
}

// Placer places labels inside an area. The order of use: Reset, then Block, Avoid and Add in any order, then Solve.
type Placer struct {
	area   picture.Rect
	blocks []picture.Rect
	lines  []obstacle
	states []labelState
	order  []int
	result []Placement
	memory map[uint64]int8
}

// Reset starts a drawing inside area; where labels stood is remembered.
func (pl *Placer) Reset(area picture.Rect) {
	pl.area = area
	pl.blocks, pl.lines = pl.blocks[:0], pl.lines[:0]
	pl.states, pl.order, pl.result = pl.states[:0], pl.order[:0], pl.result[:0]
}

// Forget drops the memory of where labels stood.
func (pl *Placer) Forget() { clear(pl.memory) }

// Block keeps labels out of r.
func (pl *Placer) Block(r picture.Rect) { pl.blocks = append(pl.blocks, r) }

// Avoid makes labels prefer not to stand on the line from a to b; weight 1 is a line one would rather not cover.
func (pl *Placer) Avoid(a, b picture.Point, weight float64) {
	o := obstacle{a, b, picture.Span(a.X, a.Y, b.X, b.Y), weight}
	if o.box.X0-o.box.X0 == 0 && o.box.Y1-o.box.Y1 == 0 {
		pl.lines = append(pl.lines, o)
	}
}

// Add adds a label and returns its index in the answer of Solve.
func (pl *Placer) Add(l Label) int {
	n := len(pl.states)
	if n < cap(pl.states) {
		pl.states = pl.states[:n+1]
	} else {
		pl.states = append(pl.states, labelState{})
	}
	s := &pl.states[n]
	s.label, s.chosen, s.before = l, -1, -1
	if s.cand == nil {
		s.cand = make([]candidate, len(slots))
	}
	clear(s.cand)
	if at, ok := pl.memory[l.Key]; ok && l.Key != 0 {
		s.before = int(at)
	}
	pl.order = append(pl.order, n)
	return n
}

// Extent is the box around the letters of t relative to its origin: tighter than its ascent and descent where the text
// has neither scripts nor letters that hang below the line.
func Extent(t *picture.Text) picture.Rect {
	top, below := t.Cap+0.06*t.Size, 0.06*t.Size
	if strings.ContainsAny(t.Source, `^\`) {
		top = max(top, t.Ascent)
	}
	if strings.ContainsAny(t.Source, "_gjpqyQ,;()[]{}|₀₁₂₃₄₅₆₇₈₉") {
		below = max(below, min(t.Descent, 0.24*t.Size))
		if strings.ContainsAny(t.Source, "_") {
			below = t.Descent
		}
	}
	return picture.Rect{X0: 0, Y0: -top, X1: t.Width, Y1: below}
}

func (pl *Placer) candidate(s *labelState, i int) *candidate {
	c := &s.cand[i]
	if c.known {
		return c
	}
	c.known = true
	l, k := &s.label, &slots[i]
	ext := Extent(l.Text)
	w, h := ext.W()+2*l.Pad, ext.H()+2*l.Pad
	d := l.Clear + k.gap
	cx := l.Anchor.X + k.dx*d + side(k.dx)*w/2
	cy := l.Anchor.Y + k.dy*d + side(k.dy)*h/2
	c.box = picture.Rect{X0: cx - w/2, Y0: cy - h/2, X1: cx + w/2, Y1: cy + h/2}
	if !(c.box.X0 >= pl.area.X0 && c.box.X1 <= pl.area.X1 && c.box.Y0 >= pl.area.Y0 && c.box.Y1 <= pl.area.Y1) {
		return c
	}
	for i := range pl.blocks {
		if c.box.Overlaps(pl.blocks[i]) {
			return c
		}
	}
	c.usable = true
	c.cost = k.cost
	if n := math.Hypot(l.Toward.X, l.Toward.Y); n > 0 {
		c.cost += towardCost * (1 - (l.Toward.X*k.dx+l.Toward.Y*k.dy)/n)
	}
	for i := range pl.lines {
		if o := &pl.lines[i]; o.box.X0 <= c.box.X1 && o.box.X1 >= c.box.X0 && o.box.Y0 <= c.box.Y1 && o.box.Y1 >= c.box.Y0 {
			c.cost += lineCost * o.weight * lengthInside(o.a, o.b, c.box)
		}
	}
	if s.before == i {
		c.cost -= moveCost
	}
	return c
}

// side is where along an edge of the box the direction meets it: the corner for slanted directions, the middle for
// straight ones.
func side(v float64) float64 { return max(-1, min(1, 1.5*v)) }

// lengthInside is the length of the line from a to b inside r (Liang, Barsky 1984).
func lengthInside(a, b picture.Point, r picture.Rect) float64 {
	t0, t1 := 0.0, 1.0
	dx, dy := b.X-a.X, b.Y-a.Y
	for i := range 4 {
		var p, q float64
		switch i {
		case 0:
			p, q = -dx, a.X-r.X0
		case 1:
			p, q = dx, r.X1-a.X
		case 2:
			p, q = -dy, a.Y-r.Y0
		default:
			p, q = dy, r.Y1-a.Y
		}
		switch {
		case p == 0 && q < 0:
			return 0
		case p < 0:
			t0 = max(t0, q/p)
		case p > 0:
			t1 = min(t1, q/p)
		}
	}
	if t1 <= t0 {
		return 0
	}
	return (t1 - t0) * math.Hypot(dx, dy)
}

// conflicts is the first placed label other than me that box overlaps, and how many there are (counting stops at 2).
func (pl *Placer) conflicts(me int, box *picture.Rect) (first, n int) {
	first = -1
	for j := range pl.states {
		o := &pl.states[j]
		if j == me || o.chosen < 0 || !o.cand[o.chosen].box.Overlaps(*box) {
			continue
		}
		if n++; n > 1 {
			return first, n
		}
		first = j
	}
	return first, n
}

// best is the cheapest free slot of label i; distant ones are looked at only when no near one is free.
func (pl *Placer) best(i int) int {
	s := &pl.states[i]
	best, cost := -1, math.Inf(1)
	look := func(from, to int) {
		for k := from; k < to; k++ {
			c := pl.candidate(s, k)
			if c.usable && c.cost < cost {
				if _, n := pl.conflicts(i, &c.box); n == 0 {
					best, cost = k, c.cost
				}
			}
		}
	}
	look(0, nearSlots)
	if s.before >= nearSlots {
		look(s.before, s.before+1)
	}
	if best < 0 || cost > 40 {
		look(nearSlots, len(slots))
	}
	return best
}

// Solve places the labels and returns where each went, in the order they were added; the slice lives until Reset. Boxes
// with their pads overlap neither each other nor a block and lie inside the area; a label with no such place is not
// placed.
func (pl *Placer) Solve() []Placement {
	for i := range pl.states {
		l := &pl.states[i].label
		if l.Text == nil || !(l.Anchor.X-l.Anchor.X == 0 && l.Anchor.Y-l.Anchor.Y == 0) {
			for k := range pl.states[i].cand {
				pl.states[i].cand[k].known = true
			}
		}
	}
	slices.SortStableFunc(pl.order, func(a, b int) int { return pl.states[b].label.Priority - pl.states[a].label.Priority })
	for _, i := range pl.order {
		pl.states[i].chosen = pl.best(i)
	}
	for range sweeps {
		changed := false
		for _, i := range pl.order {
			s := &pl.states[i]
			old := s.chosen
			s.chosen = pl.best(i)
			if s.chosen < 0 {
				pl.push(i)
			}
			changed = changed || s.chosen != old
		}
		if !changed {
			break
		}
	}
	pl.result = pl.result[:0]
	for i := range pl.states {
		pl.result = append(pl.result, pl.placement(i))
	}
	return pl.result
}

// push finds a place for label i by moving one label of no higher priority to another free place.
func (pl *Placer) push(i int) {
	s := &pl.states[i]
	for k := range slots {
		c := pl.candidate(s, k)
		if !c.usable {
			continue
		}
		j, n := pl.conflicts(i, &c.box)
		if n != 1 || pl.states[j].label.Priority > s.label.Priority {
			continue
		}
		was := pl.states[j].chosen
		s.chosen = k
		if pl.states[j].chosen = pl.best(j); pl.states[j].chosen >= 0 {
			return
		}
		s.chosen, pl.states[j].chosen = -1, was
	}
}

func (pl *Placer) placement(i int) Placement {
	s := &pl.states[i]
	if s.label.Key != 0 {
		if pl.memory == nil {
			pl.memory = make(map[uint64]int8)
		}
		if s.chosen < 0 {
			delete(pl.memory, s.label.Key)
		} else {
			pl.memory[s.label.Key] = int8(s.chosen)
		}
	}
	if s.chosen < 0 {
		return Placement{}
	}
	box := s.cand[s.chosen].box.Inset(s.label.Pad)
	ext := Extent(s.label.Text)
	r := Placement{Placed: true, Box: box, Origin: picture.Pt(box.X0, box.Y0-ext.Y0), Far: slots[s.chosen].ring >= leaderRing}
	if r.Far {
		a := s.label.Anchor
		to := picture.Pt(max(box.X0-1, min(box.X1+1, a.X)), max(box.Y0-1, min(box.Y1+1, a.Y)))
		if d := math.Hypot(to.X-a.X, to.Y-a.Y); d > 0 {
			f := (s.label.Clear + 1) / d
			r.Leader = [2]picture.Point{{X: a.X + f*(to.X-a.X), Y: a.Y + f*(to.Y-a.Y)}, to}
		}
	}
	return r
}
