package window

import (
	"math"

	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/physics/zone"
	"bandwright/ui/doc"
	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

// scrub is a drag in one of the panels of the energy axis: along a band, or of
// the energies.
type scrub struct {
	on        bool
	alongBand bool
	curve     int32
	leg       int
}

// bandReach is how near to a band, in points, a press grabs it.
const bandReach = 7

func (w *Window) bandsHandler() view.Handler {
	return view.Handler{
		Hover: w.hoverBands,
		Leave: w.leave,
		Press: w.pressBands,
		Click: w.clickBands,
		Drag:  w.dragBands,
		Drop: func(view.Pointer) {
			if !w.scrub.alongBand {
				w.keepWindow()
			}
			w.scrub = scrub{}
		},
		Wheel: func(p view.Pointer, steps float64) { w.wheelEnergy(w.bands, p, steps) },
		Key:   w.key, Rune: w.rune,
	}
}

func (w *Window) dosHandler() view.Handler {
	return view.Handler{
		Hover: func(p view.Pointer) { w.hoverEnergy(w.dos, p) },
		Leave: w.leave,
		Drag:  func(p view.Pointer, _, dy float64) { w.panEnergy(w.dos, dy) },
		Drop:  func(view.Pointer) { w.keepWindow() },
		Click: func(p view.Pointer) {
			if p.Double {
				w.automaticWindow()
			}
		},
		Wheel: func(p view.Pointer, steps float64) { w.wheelEnergy(w.dos, p, steps) },
		Key:   w.key, Rune: w.rune,
	}
}

func (w *Window) ladderHandler() view.Handler {
	return view.Handler{
		Hover: func(p view.Pointer) { w.hoverEnergy(w.ladder, p) },
		Leave: w.leave,
		Click: func(p view.Pointer) {
			if t := present.TargetOf(p.ID); t.Kind == present.Level {
				w.do(session.Focus{Level: t.I})
			} else if p.Double {
				w.automaticWindow()
			}
		},
		Drag:  func(p view.Pointer, _, dy float64) { w.panEnergy(w.ladder, dy) },
		Drop:  func(view.Pointer) { w.keepWindow() },
		Wheel: func(p view.Pointer, steps float64) { w.wheelEnergy(w.ladder, p, steps) },
		Key:   w.key, Rune: w.rune,
	}
}

func (w *Window) leave() {
	if w.v.Glance.On || w.v.Glance.HasEnergy {
		w.v.Glance = present.Glance{}
		w.drawZone()
		w.drawEnergies()
	}
}

// plotSize is the size of a panel, points.
func plotSize(p *view.Panel) (width, height float64) {
	s := p.Size()
	return float64(s.Width), float64(s.Height)
}

// placeName says where a k point lies: a label, a line, or "".
func (w *Window) placeName(k lattice.FracK) string {
	if w.sn.Built == nil {
		return ""
	}
	return zone.SymmetryName(w.sn.Built.Crystal.Setting, k)
}

func (w *Window) hoverBands(p view.Pointer) {
	b := w.sn.Bands
	if b == nil || b.Sampling == nil || w.sn.Built == nil {
		return
	}
	width, height := plotSize(w.bands)
	plot := present.BandsPlot(w.sn, &w.v, width, height)
	if !plot.Rect.Contains(p.X, p.Y) {
		w.leave()
		return
	}
	x := plot.X.Inv(p.X)
	k := b.Sampling.At(x)
	g := present.Glance{On: true, K: k, X: x, OnPath: true, Note: w.placeName(k)}
	if level, energy, away := w.nearestLevel(x, plot.Y.Inv(p.Y)); level >= 0 {
		if math.Abs(plot.Y.At(energy)-p.Y) < 40 || away == 0 {
			g.Energy, g.HasEnergy = energy, true
		}
	}
	if !g.HasEnergy {
		g.Energy = plot.Y.Inv(p.Y)
	}
	w.v.Glance = g
	w.drawZone()
	w.drawEnergies()
}

// nearestLevel is the level nearest to an energy at a place of the path.
func (w *Window) nearestLevel(x, energy float64) (level int, at, away float64) {
	b := w.sn.Bands
	levels := b.Levels(b.Sampling.Index(x))
	level, away = -1, math.Inf(1)
	for n, e := range levels {
		if d := math.Abs(e - energy); d < away {
			level, at, away = n, e, d
		}
	}
	return level, at, away
}

func (w *Window) hoverEnergy(panel *view.Panel, p view.Pointer) {
	width, height := plotSize(panel)
	y := present.EnergyScale(w.sn, &w.v, width, height)
	if p.Y < present.PlotTop || p.Y > height-present.PlotBottom {
		w.leave()
		return
	}
	w.v.Glance = present.Glance{Energy: y.Inv(p.Y), HasEnergy: true}
	w.drawEnergies()
}

func (w *Window) pressBands(p view.Pointer) {
	w.scrub = scrub{}
	b := w.sn.Bands
	if b == nil || b.Sampling == nil || p.Shift {
		return
	}
	width, height := plotSize(w.bands)
	plot := present.BandsPlot(w.sn, &w.v, width, height)
	if !plot.Rect.Contains(p.X, p.Y) {
		return
	}
	x := plot.X.Inv(p.X)
	level, energy, _ := w.nearestLevel(x, plot.Y.Inv(p.Y))
	if level >= 0 && math.Abs(plot.Y.At(energy)-p.Y) <= bandReach {
		i := b.Sampling.Index(x)
		w.scrub = scrub{on: true, alongBand: true, curve: b.Curve[i*b.N+level], leg: b.Sampling.Leg[i]}
	}
}

func (w *Window) clickBands(p view.Pointer) {
	if p.Double {
		w.automaticWindow()
		return
	}
	b := w.sn.Bands
	if b == nil || b.Sampling == nil {
		return
	}
	width, height := plotSize(w.bands)
	plot := present.BandsPlot(w.sn, &w.v, width, height)
	if !plot.Rect.Contains(p.X, p.Y) {
		return
	}
	x := plot.X.Inv(p.X)
	// A special point within reach of the pointer is meant.
	for _, tick := range b.Sampling.Ticks {
		if math.Abs(plot.X.At(tick.X)-p.X) < 4 {
			x = tick.X
		}
	}
	level, _, _ := w.nearestLevel(x, plot.Y.Inv(p.Y))
	w.do(session.Hold{K: b.Sampling.At(x), Level: level})
}

func (w *Window) dragBands(p view.Pointer, _, dy float64) {
	if !w.scrub.alongBand {
		w.panEnergy(w.bands, dy)
		return
	}
	b := w.sn.Bands
	if b == nil || b.Sampling == nil {
		return
	}
	width, height := plotSize(w.bands)
	plot := present.BandsPlot(w.sn, &w.v, width, height)
	x := max(plot.X.Lo, min(plot.X.Hi, plot.X.Inv(p.X)))
	i := b.Sampling.Index(x)
	if b.Sampling.Leg[i] != w.scrub.leg {
		// A new leg: go on with the level that is nearest to the pointer.
		level, _, _ := w.nearestLevel(x, plot.Y.Inv(p.Y))
		w.scrub.leg = b.Sampling.Leg[i]
		w.scrub.curve = b.Curve[i*b.N+level]
	}
	level := -1
	for n := range b.N {
		if b.Curve[i*b.N+n] == w.scrub.curve {
			level = n
		}
	}
	k := b.Sampling.At(x)
	w.v.Glance = present.Glance{On: true, K: k, X: x, OnPath: true, Note: w.placeName(k)}
	if level >= 0 {
		w.v.Glance.Energy, w.v.Glance.HasEnergy = b.E[i*b.N+level], true
		w.do(session.Hold{K: k, Level: level})
	}
}

// wheelEnergy magnifies the energies about the pointer; with Shift it moves
// them.
func (w *Window) wheelEnergy(panel *view.Panel, p view.Pointer, steps float64) {
	width, height := plotSize(panel)
	y := present.EnergyScale(w.sn, &w.v, width, height)
	if p.Shift {
		w.setWindow(y.Lo+(y.Hi-y.Lo)*0.08*steps, y.Hi+(y.Hi-y.Lo)*0.08*steps)
	} else {
		w.zoomEnergy(y.Inv(p.Y), math.Pow(0.87, steps))
	}
	w.keepWindow()
}

func (w *Window) zoomEnergy(about, factor float64) {
	lo, hi := present.EnergyWindow(w.sn, &w.v)
	w.setWindow(about-(about-lo)*factor, about+(hi-about)*factor)
}

func (w *Window) panEnergy(panel *view.Panel, dy float64) {
	width, height := plotSize(panel)
	y := present.EnergyScale(w.sn, &w.v, width, height)
	d := y.Inv(0) - y.Inv(dy)
	w.setWindow(y.Lo+d, y.Hi+d)
}

// Limits of the energies shown: a window from 1 meV to 1 keV wide, near 0.
const (
	narrowest = 1e-3
	widest    = 1e3
)

func (w *Window) setWindow(lo, hi float64) {
	if hi-lo < narrowest || hi-lo > widest || math.Abs(lo) > 1e4 || math.Abs(hi) > 1e4 {
		return
	}
	w.v.Window = [2]float64{lo, hi}
	w.drawEnergies()
}

// keepWindow makes the energies shown part of the study.
func (w *Window) keepWindow() {
	window := w.v.Window
	if window == w.sn.Doc.View.Window {
		return
	}
	w.do(session.SetView{Change: func(v doc.View) doc.View { v.Window = window; return v }})
}

func (w *Window) automaticWindow() {
	w.v.Window = [2]float64{}
	w.keepWindow()
	w.drawEnergies()
}

// stepAlong holds the next sample of the path in a direction, or the next
// special point.
func (w *Window) stepAlong(direction int, far bool) {
	b := w.sn.Bands
	if b == nil || b.Sampling == nil || w.sn.Built == nil {
		return
	}
	s := b.Sampling
	x, off, on := s.Nearest(w.sn.Built.Crystal.Lattice(), w.sn.Doc.View.Held, 1e-6)
	i := s.Index(x)
	if on || off < 1e-3 {
		i += direction
		// A break and the seam of two legs hold one place twice.
		for i > 0 && i < len(s.K)-1 && math.Abs(s.X[i]-x) < 1e-9 {
			i += direction
		}
	}
	if far {
		i = nextTick(s.X, s.Ticks, x, direction)
	}
	i = max(0, min(len(s.K)-1, i))
	w.do(session.Hold{K: s.K[i], Level: session.NearestEnergy})
}

// stepLevel focuses the next set up or down.
func (w *Window) stepLevel(direction int) {
	if w.sn.Held == nil || w.sn.Focus == nil {
		return
	}
	entries := w.sn.Held.Entries
	for i := range entries {
		if entries[i].Set.First == w.sn.Focus.Set.First {
			if j := i + direction; j >= 0 && j < len(entries) {
				w.do(session.Focus{Level: entries[j].Set.First})
			}
			return
		}
	}
}

// goTo holds a band edge.
func (w *Window) goTo(kind present.EdgeKind) {
	for _, c := range present.Chips(w.sn) {
		if c.Goes && c.Edge == kind {
			w.do(session.Hold{K: c.K, Level: c.Level})
			return
		}
	}
	w.say("There is no such edge: " + w.gapText())
}

func (w *Window) gapText() string {
	if chips := present.Chips(w.sn); len(chips) > 0 {
		return chips[0].Text
	}
	return "not computed yet"
}

// nextTick is the sample of the first tick beyond x in a direction.
func nextTick(x []float64, ticks []path.Tick, from float64, direction int) int {
	const near = 1e-9
	if direction > 0 {
		for _, t := range ticks {
			if t.X > from+near {
				return t.Index
			}
		}
		return len(x) - 1
	}
	for i := len(ticks) - 1; i >= 0; i-- {
		if ticks[i].X < from-near {
			return ticks[i].Index
		}
	}
	return 0
}
