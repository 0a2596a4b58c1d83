package present

import (
	"fmt"
	"math"
	"slices"

	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/ledger"
	"bandwright/render/chart"
	"bandwright/render/mark"
	"bandwright/render/picture"
	"bandwright/render/typeset"
	"bandwright/ui/session"
)

// share is a part of a composition.
type share struct {
	label string // "p", or "As p" where the elements differ
	l     hamiltonian.AngularMomentum
	value float64
}

// composition gathers the weights of an entry by shell and, where the elements
// of the crystal differ, by element.
func composition(sn *session.Snapshot, weights []ledger.Weight) []share {
	sites := sn.Built.Crystal.Sites
	several := slices.ContainsFunc(sites, func(s crystal.Site) bool { return s.Element != sites[0].Element })
	var list []share
	for _, w := range weights {
		label := w.L.String()
		if several {
			label = sites[w.Site].Element + " " + label
		}
		i := slices.IndexFunc(list, func(s share) bool { return s.label == label })
		if i < 0 {
			list = append(list, share{label: label, l: w.L})
			i = len(list) - 1
		}
		list[i].value += w.Value
	}
	slices.SortStableFunc(list, func(a, b share) int { return int(a.l) - int(b.l) })
	return list
}

// unreliable says whether levels at an energy are outside what the parameter
// set was fitted to.
func unreliable(sn *session.Snapshot, energy float64) bool {
	set := sn.Built.Set
	if set == nil {
		return false
	}
	if set.Fit.HasWindow && (energy < set.Fit.Window[0]-1e-6 || energy > set.Fit.Window[1]+1e-6) {
		return true
	}
	return set.Fit.ValenceOnly && sn.FermiKnown && energy > sn.Fermi+1e-6
}

// pale is how much of its colour an unreliable level loses.
const pale = 0.5

// ladderColumns are the places of a Ladder's columns.
type ladderColumns struct {
	tick, energy, size, filled, bar, barEnd, middle, reach float64
}

func columnsFor(w float64) ladderColumns {
	c := ladderColumns{tick: 26, energy: 74, size: 79, filled: 104, bar: 114}
	c.reach = min(54, max(22, w*0.13))
	c.middle = w - edgePad - 30 - c.reach
	c.barEnd = c.middle - c.reach - 42
	if c.barEnd < c.bar+30 {
		c.barEnd = c.bar + 30
	}
	return c
}

const ladderRow = 17.0

// Ladder draws the levels of the held k point at their energies, on the axis of
// Bands and DOS.
func Ladder(sn *session.Snapshot, v *View, w, h float64) *picture.Picture {
	t := v.Theme
	title := "Ladder"
	if sn.HeldLabel != "" {
		title += " at " + sn.HeldLabel
	}
	s := newSheet(t, w, h, marked(sn, title), "click focuses a level")
	plot := picture.Span(1, PlotTop, w-1, max(PlotTop+1, h-PlotBottom))
	if sn.Held == nil || sn.Built == nil {
		reason := "The levels of the held k point are being computed."
		if sn.HeldErr != nil {
			reason = sn.HeldErr.Error()
		}
		s.message(reason, plot, t.Soft)
		return s.Picture
	}
	lo, hi := EnergyWindow(sn, v)
	zero, _ := Zero(sn)
	y := chart.Scale{Lo: lo, Hi: hi, At0: plot.Y1, At1: plot.Y0}
	col := columnsFor(w)

	s.Begin("columns")
	s.write("eV", col.energy, PlotTop-9, smallSize, t.Soft, picture.Right)
	s.write("composition %", (col.bar+col.barEnd)/2, PlotTop-9, smallSize, t.Soft, picture.Center)
	s.write("bonding", col.middle-5, PlotTop-9, smallSize, t.Soft, picture.Right)
	s.write("antibonding", col.middle+5, PlotTop-9, smallSize, t.Soft, 0)
	s.Line(plot.X0, plot.Y0, plot.X1, plot.Y0, picture.Stroke{Color: t.Rule, Width: 1, Crisp: true})
	s.Line(plot.X0, plot.Y1, plot.X1, plot.Y1, picture.Stroke{Color: t.Rule, Width: 1, Crisp: true})
	s.Line(col.middle, plot.Y0, col.middle, plot.Y1, picture.Stroke{Color: t.Rule, Width: 1, Crisp: true})
	s.End()
	if zero > lo && zero < hi {
		s.Line(plot.X0, y.At(zero), plot.X1, y.At(zero), zeroStroke(t))
	}

	var shown []int
	above, below := 0, 0
	strongest := 1e-3
	for i := range sn.Held.Entries {
		e := &sn.Held.Entries[i]
		switch {
		case e.Set.Energy > hi:
			above++
		case e.Set.Energy < lo:
			below++
		default:
			shown = append(shown, i)
			strongest = max(strongest, math.Abs(e.NetBond))
		}
	}
	// Crowded rows become lower before they would overlap.
	pitch := ladderRow
	if n := len(shown); n > 0 {
		pitch = max(6, min(ladderRow, (plot.H()-4)/float64(n)))
	}
	at := make([]float64, len(shown))
	heights := make([]float64, len(shown))
	for i, n := range shown {
		at[i] = y.At(sn.Held.Entries[n].Set.Energy)
		heights[i] = pitch
	}
	// Spread from the top: the lists run upwards in energy.
	slices.Reverse(at)
	slices.Reverse(shown)
	rows := chart.SpreadLabels(at, heights, plot.Y0+2, plot.Y1-2, 0)
	for i, n := range shown {
		s.ladderRow(sn, &sn.Held.Entries[n], at[i], rows[i], pitch, col, w, zero, strongest)
	}
	foot := ""
	if above > 0 {
		foot = fmt.Sprintf("%d higher", above)
	}
	if below > 0 {
		if foot != "" {
			foot += ", "
		}
		foot += fmt.Sprintf("%d lower", below)
	}
	if foot != "" {
		s.write(foot+" outside these energies", w-edgePad, h-11, smallSize, t.Soft, picture.Right)
	}
	s.write("● filled  ○ empty", edgePad, h-11, smallSize, t.Soft, 0)
	return s.Picture
}

func zeroStroke(t *Theme) picture.Stroke {
	return picture.Stroke{Color: t.Soft, Width: 0.8, Dash: picture.Dash{On: 4, Off: 3}, Crisp: true}
}

// ladderRow draws one set: a tick at its energy, a leader to its row, and the
// row.
func (s *sheet) ladderRow(sn *session.Snapshot, e *ledger.Entry, at, row, pitch float64, col ladderColumns, w, zero, strongest float64) {
	t := s.t
	focused := sn.Focus != nil && sn.Focus.Set.First == e.Set.First
	ink := t.Ink
	weak := unreliable(sn, e.Set.Energy)
	fade := func(c picture.Color) picture.Color {
		if weak {
			return mark.Fade(c, t.Panel, pale)
		}
		return c
	}
	s.Begin(fmt.Sprintf("level %d", e.Set.First+1))
	s.SetID(Target{Kind: Level, I: e.Set.First}.id())
	defer func() { s.SetID(0); s.End() }()

	shrink := pitch / ladderRow
	r := picture.Span(2, row-pitch/2+0.5, w-2, row+pitch/2-0.5)
	back := picture.Fill{Crisp: true}
	if focused {
		back.Color = t.Glow
	}
	s.FillRect(r, back)
	if focused {
		s.StrokeRect(r, picture.Stroke{Color: t.Path, Width: 1, Crisp: true})
	}
	line := picture.Stroke{Color: fade(ink), Width: 1.2}
	s.Line(2, at, 12, at, picture.Stroke{Color: fade(ink), Width: 1.6})
	s.Polyline(picture.Stroke{Color: t.Faint, Width: 0.8}, picture.Pt(12, at), picture.Pt(20, row), picture.Pt(col.tick, row))
	style := typeset.Style{Bold: focused}
	middle := picture.Middle
	s.Text(typeset.Layout(signed(e.Set.Energy-zero, 3), textSize*shrink, style), col.energy, row, picture.TextStyle{Color: ink, Align: picture.Right | middle})
	if e.Set.Size > 1 {
		s.write(fmt.Sprintf("×%d", e.Set.Size), col.size, row, smallSize*shrink, t.Soft, picture.Left|middle)
	}
	if sn.FermiKnown {
		if e.Set.Energy <= sn.Fermi+hamiltonian.SetTolerance {
			s.Circle(col.filled, row, 3*shrink, picture.Fill{Color: ink})
		} else {
			s.Ring(col.filled, row, 2.8*shrink, line)
		}
	}

	// Composition.
	x, width := col.bar, col.barEnd-col.bar
	for _, part := range composition(sn, e.Weights) {
		if part.value < 5e-4 {
			continue
		}
		x1 := x + part.value*width
		s.FillRect(picture.Span(x, row-5.5*shrink, x1, row+5.5*shrink), picture.Fill{Color: fade(t.Orbital[part.l]), Crisp: true})
		label := fmt.Sprintf("%.0f %s", 100*part.value, part.label)
		text := typeset.Plain(label, 9.5*shrink, typeset.Style{})
		if text.Width+5 < x1-x {
			s.Text(text, (x+x1)/2, row, picture.TextStyle{Color: t.OrbitInk[part.l], Align: picture.Center | middle})
		}
		x = x1
		if x < col.barEnd-1 {
			s.Line(x, row-5.5*shrink, x, row+5.5*shrink, picture.Stroke{Color: t.Panel, Width: 1, Crisp: true})
		}
	}

	// Bonding to the left and solid, antibonding to the right and hatched.
	s.signedBar(col.middle, row, e.NetBond/strongest*col.reach, 4.5*shrink, weak)
	label := number(math.Abs(e.NetBond), 2)
	if e.NetBond < 0 {
		s.write(minus+label, col.middle+e.NetBond/strongest*col.reach-4, row, smallSize*shrink, t.Soft, picture.Right|middle)
	} else {
		s.write("+"+label, col.middle+e.NetBond/strongest*col.reach+4, row, smallSize*shrink, t.Soft, picture.Left|middle)
	}
}

// signedBar draws a bar from x0 of signed length: to the left solid, to the
// right open and hatched.
func (s *sheet) signedBar(x0, y, length, half float64, weak bool) {
	t := s.t
	fade := func(c picture.Color) picture.Color {
		if weak {
			return mark.Fade(c, t.Panel, pale)
		}
		return c
	}
	r := picture.Span(x0, y-half, x0+length, y+half)
	if r.W() < 0.4 {
		return
	}
	if length < 0 {
		s.FillRect(r, picture.Fill{Color: fade(t.Bonding), Crisp: true})
		return
	}
	c := fade(t.Against)
	s.FillRect(r, picture.Fill{Hatch: picture.Hatch{Color: c, Angle: 45, Spacing: 3.6, Width: 0.9}, Crisp: true})
	s.StrokeRect(r, picture.Stroke{Color: c, Width: 1, Crisp: true})
}
