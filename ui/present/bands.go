package present

import (
	"fmt"
	"math"
	"sync"

	"bandwright/physics/bands"
	"bandwright/physics/edges"
	"bandwright/physics/hamiltonian"
	"bandwright/render/chart"
	"bandwright/render/mark"
	"bandwright/render/picture"
	"bandwright/render/typeset"
	"bandwright/ui/session"
)

// EnergyScale is the energy axis that Bands, DOS and Ladder share in panels of
// one height.
func EnergyScale(sn *session.Snapshot, v *View, _, h float64) chart.Scale {
	lo, hi := EnergyWindow(sn, v)
	return chart.Scale{Lo: lo, Hi: hi, At0: max(PlotTop+1, h-PlotBottom), At1: PlotTop}
}

// BandsPlot is where the Bands panel has its plot.
func BandsPlot(sn *session.Snapshot, v *View, w, h float64) chart.Plot {
	y := EnergyScale(sn, v, w, h)
	r := picture.Span(58, y.At1, max(59, w-16), y.At0)
	end := 1.0
	if sn.Bands != nil && sn.Bands.Sampling != nil && len(sn.Bands.Sampling.X) > 0 {
		end = max(1e-9, sn.Bands.Sampling.X[len(sn.Bands.Sampling.X)-1])
	}
	return chart.Plot{Rect: r, X: chart.Scale{Lo: 0, Hi: end, At0: r.X0, At1: r.X1}, Y: y}
}

func axisStyle(t *Theme) chart.AxisStyle {
	return chart.AxisStyle{Ink: t.Ink, Line: t.Faint, Grid: t.Rule, Size: textSize, Title: textSize + 1}
}

// energyTicks are the ticks of the shared axis, on the zero that is printed.
func energyTicks(y chart.Scale, zero float64) []chart.Tick {
	most := max(2, int(math.Abs(y.At1-y.At0)/42))
	ticks := chart.Ticks(y.Lo-zero, y.Hi-zero, most)
	for i := range ticks {
		ticks[i].Value += zero
	}
	return ticks
}

// trace is one continuous curve of the bands within an unbroken run.
type trace struct {
	curve   int32
	xs, ys  []float64
	index   []int // into Bands.E
	highest float64
	lowest  float64
}

// traces of the last bands, since panels are drawn often and bands change
// seldom.
var traces struct {
	sync.Mutex
	of   *bands.Bands
	list []trace
}

// curvesOf takes the curves out of the levels.
func curvesOf(b *bands.Bands) []trace {
	traces.Lock()
	defer traces.Unlock()
	if traces.of == b {
		return traces.list
	}
	var list []trace
	legs := b.Sampling.Legs
	for i := 0; i < len(legs); {
		n := i + 1
		for n < len(legs) && legs[n].First == legs[n-1].Last {
			n++
		}
		first, last := legs[i].First, legs[n-1].Last
		of := make([]trace, b.N)
		for c := range of {
			of[c] = trace{curve: int32(c), lowest: math.Inf(1), highest: math.Inf(-1)}
		}
		for k := first; k <= last; k++ {
			for level := range b.N {
				at := k*b.N + level
				if c := int(b.Curve[at]); c >= 0 && c < b.N {
					t := &of[c]
					t.xs, t.ys, t.index = append(t.xs, b.Sampling.X[k]), append(t.ys, b.E[at]), append(t.index, at)
					t.lowest, t.highest = min(t.lowest, b.E[at]), max(t.highest, b.E[at])
				}
			}
		}
		list = append(list, of...)
		i = n
	}
	traces.of, traces.list = b, list
	return list
}

// thickness is the width, in points, of a band that is wholly of one
// character: less in a low panel, where bands lie close.
func thickness(plot chart.Plot) float64 { return max(4.5, min(9, plot.Rect.H()/42)) }

// Bands draws the levels along the path.
func Bands(sn *session.Snapshot, v *View, w, h float64) *picture.Picture {
	t := v.Theme
	s := newSheet(t, w, h, marked(sn, "Bands"), "")
	plot := BandsPlot(sn, v, w, h)
	zero, title := Zero(sn)
	style := axisStyle(t)
	ticks := energyTicks(plot.Y, zero)
	if sn.Bands == nil || sn.Bands.Sampling == nil {
		plot.Frame(s.Picture, style)
		reason := "The bands are being computed."
		if sn.BandsErr != nil {
			reason = sn.BandsErr.Error()
		} else if sn.BuildErr != nil {
			reason = sn.BuildErr.Error()
		}
		s.message(reason, plot.Rect, t.Soft)
		return s.Picture
	}
	b := sn.Bands
	s.Begin("axes")
	var labels []chart.Tick
	for _, tick := range b.Sampling.Ticks {
		labels = append(labels, chart.Tick{Value: tick.X, Label: tickLabel(tick.Label), Major: true})
	}
	wide := style
	wide.Size = textSize + 1.5
	plot.XTicks(s.Picture, labels, wide)
	s.End()
	plot.Clip(s.Picture, func() {
		if zero != 0 || sn.FermiKnown {
			plot.Level(s.Picture, zero, zeroStroke(t))
		}
		s.bandCurves(sn, v, plot)
		s.bandMarks(sn, v, plot, zero)
	})
	s.Begin("axis")
	plot.YAxis(s.Picture, ticks, title, style)
	plot.Frame(s.Picture, style)
	s.End()
	used := s.bandLegend(sn, v, w)
	s.bandNotes(sn, plot)
	if g := v.Glance; g.On && g.OnPath || g.HasEnergy {
		s.readout(sn, v, plot, zero, used)
	}
	return s.Picture
}

// tickLabel keeps typed coordinates from filling the axis.
func tickLabel(label string) string {
	if len([]rune(label)) > 9 {
		return "·"
	}
	return typeset.Escape(label)
}

func (s *sheet) bandCurves(sn *session.Snapshot, v *View, plot chart.Plot) {
	t, b := s.t, sn.Bands
	colour := sn.Doc.View.Colour
	list := curvesOf(b)
	thick := thickness(plot)
	scale := thick / strongestBond(b)
	s.Begin("bands")
	for _, c := range list {
		if c.highest < plot.Y.Lo || c.lowest > plot.Y.Hi {
			continue
		}
		weak := unreliable(sn, c.lowest) && unreliable(sn, c.highest)
		fade := func(k picture.Color) picture.Color {
			if weak {
				return mark.Fade(k, t.Panel, pale)
			}
			return k
		}
		switch colour {
		case "plain":
		case "bonding":
			values := make([]float64, len(c.index))
			for i, at := range c.index {
				// Antibonding rises above the curve, bonding hangs below.
				values[i] = b.NetBond[at] * scale
			}
			hatch := picture.Hatch{Color: fade(t.Against), Angle: 45, Spacing: 3.4, Width: 1}
			plot.TwoSided(s.Picture, c.xs, c.ys, values, picture.Fill{Color: alpha(fade(t.Against), 46), Hatch: hatch}, picture.Fill{Color: fade(t.Bonding)}, 0)
		default:
			plot.Ribbons(s.Picture, c.xs, c.ys, s.strips(sn, c, colour, thick, fade), 0)
		}
	}
	for _, c := range list {
		if c.highest < plot.Y.Lo || c.lowest > plot.Y.Hi {
			continue
		}
		stroke := picture.Stroke{Color: t.Ink, Width: 1.1, Join: picture.RoundJoin}
		if unreliable(sn, c.lowest) && unreliable(sn, c.highest) {
			stroke.Color = mark.Fade(t.Ink, t.Panel, pale)
		}
		if sn.BandsStale && v.Lagging {
			stroke.Dash = picture.Dash{On: 5, Off: 2}
		}
		plot.Line(s.Picture, c.xs, c.ys, stroke, 0)
	}
	s.End()
}

// strips are the fat parts of a band: all shells side by side, one shell, or
// the atoms.
func (s *sheet) strips(sn *session.Snapshot, c trace, colour string, thick float64, fade func(picture.Color) picture.Color) []chart.Band {
	t, b := s.t, sn.Bands
	groups := len(b.Groups)
	gather := func(fits func(hamiltonian.Group) bool) []float64 {
		width := make([]float64, len(c.index))
		for g, group := range b.Groups {
			if !fits(group) {
				continue
			}
			for i, at := range c.index {
				width[i] += thick * b.W[at*groups+g]
			}
		}
		return width
	}
	if len(b.W) == 0 {
		return nil
	}
	var list []chart.Band
	if colour == "atoms" {
		for site := range sn.Built.Crystal.Sites {
			list = append(list, chart.Band{
				Width: gather(func(g hamiltonian.Group) bool { return g.Site == site }),
				Fill:  picture.Fill{Color: fade(t.atom(site))},
			})
		}
		return list
	}
	for _, l := range shellsOf(b) {
		if colour != "" && colour != "orbitals" && colour != l.String() {
			continue
		}
		list = append(list, chart.Band{
			Width: gather(func(g hamiltonian.Group) bool { return g.L == l }),
			Fill:  picture.Fill{Color: fade(t.Orbital[l])},
		})
	}
	return list
}

// atom is the colour of an atom of the cell.
func (t *Theme) atom(site int) picture.Color { return t.Orbital[site%len(t.Orbital)] }

// shellsOf lists the shells of the bands in the order s, p, d, s*.
func shellsOf(b *bands.Bands) []hamiltonian.AngularMomentum {
	var seen [4]bool
	for _, g := range b.Groups {
		seen[g.L] = true
	}
	var list []hamiltonian.AngularMomentum
	for l, on := range seen {
		if on {
			list = append(list, hamiltonian.AngularMomentum(l))
		}
	}
	return list
}

// strongestBond is the largest net bond energy of any level, eV: as a strip it
// is as wide as a pure band.
func strongestBond(b *bands.Bands) float64 {
	strongest := 1e-3
	for _, e := range b.NetBond {
		strongest = max(strongest, math.Abs(e))
	}
	return strongest
}

// bandLegend says what the widths mean, in the strip above the plot, and
// returns where it ends.
func (s *sheet) bandLegend(sn *session.Snapshot, v *View, w float64) (end float64) {
	t := s.t
	y := PlotTop - 10
	x := 58.0
	entry := func(fill picture.Fill, border picture.Color, label string) {
		text := typeset.Plain(label, smallSize+0.5, typeset.Style{})
		if x+text.Width+20 > w-10 {
			return
		}
		r := picture.Span(x, y-4, x+13, y+4)
		s.FillRect(r, fill)
		if border.A > 0 {
			s.StrokeRect(r, picture.Stroke{Color: border, Width: 1, Crisp: true})
		}
		s.Text(text, x+17, y, picture.TextStyle{Color: t.Ink, Align: picture.Middle})
		x += 17 + text.Width + 12
	}
	s.Begin("legend")
	defer s.End()
	none := picture.Color{}
	switch colour := sn.Doc.View.Colour; colour {
	case "plain":
	case "bonding":
		entry(picture.Fill{Color: t.Bonding, Crisp: true}, none, "bonding, below")
		entry(picture.Fill{Hatch: picture.Hatch{Color: t.Against, Angle: 45, Spacing: 3.4, Width: 1}, Crisp: true}, t.Against, "antibonding, above")
	case "atoms":
		for i, site := range sn.Built.Crystal.Sites {
			entry(picture.Fill{Color: t.atom(i), Crisp: true}, none, site.Label)
		}
	default:
		for _, l := range shellsOf(sn.Bands) {
			if colour == "" || colour == "orbitals" || colour == l.String() {
				entry(picture.Fill{Color: t.Orbital[l], Crisp: true}, none, l.String())
			}
		}
	}
	switch {
	case sn.BandsCoarse && v.Lagging:
		s.fitMiddle("preview", x, y, smallSize, t.Caution, w-x)
		x += 50
	case sn.BandsStale && v.Lagging:
		s.fitMiddle("not yet of this model", x, y, smallSize, t.Caution, w-x)
		x += 120
	}
	return x
}

// bandMarks draws the pointer's and the held k point, the focused level, the
// band edges and the gap.
func (s *sheet) bandMarks(sn *session.Snapshot, v *View, plot chart.Plot, zero float64) {
	t, b := s.t, sn.Bands
	l := sn.Built.Crystal.Lattice()
	s.Begin("marks")
	defer s.End()
	if g := v.Glance; g.On && g.OnPath {
		plot.Upright(s.Picture, g.X, picture.Stroke{Color: t.Soft, Width: 1, Dash: picture.Dash{On: 2, Off: 2}, Crisp: true})
	}
	held := sn.Doc.View.Held
	if sn.Held != nil {
		held = sn.Held.K
	}
	if x, _, on := b.Sampling.Nearest(l, held, 1e-5); on {
		plot.Upright(s.Picture, x, picture.Stroke{Color: t.Held, Width: 1.4, Crisp: true})
		if sn.Focus != nil {
			look := mark.Look{Shape: mark.Diamond, Size: 8, Fill: t.Held, Stroke: picture.Stroke{Color: t.Panel, Width: 1}}
			var path picture.Path
			look.Draw(s.Picture, &path, plot.X.At(x), plot.Y.At(sn.Focus.Set.Energy))
		}
	}
	e := sn.Edges
	if e == nil || sn.EdgesStale {
		return
	}
	var path picture.Path
	top, bottom := math.NaN(), math.NaN()
	if x, ok := edgePlace(sn, e.VBM); ok {
		top = x
		s.SetID(Target{Kind: EdgePoint, I: int(ValenceTop)}.id())
		mark.Look{Shape: mark.TriangleUp, Size: 8, Fill: t.Bonding, Stroke: picture.Stroke{Color: t.Panel, Width: 1}}.Draw(s.Picture, &path, plot.X.At(x), plot.Y.At(e.VBM.Energy)+1)
	}
	path.Reset()
	if x, ok := edgePlace(sn, e.CBM); ok {
		bottom = x
		s.SetID(Target{Kind: EdgePoint, I: int(ConductionBottom)}.id())
		mark.Look{Shape: mark.TriangleDown, Size: 8, Fill: t.Panel, Stroke: picture.Stroke{Color: t.Against, Width: 1.6}}.Draw(s.Picture, &path, plot.X.At(x), plot.Y.At(e.CBM.Energy)-1)
	}
	s.SetID(0)
	if e.Gap > 0 && !math.IsNaN(bottom) && !math.IsNaN(top) {
		s.gapArrow(plot, plot.X.At(bottom), e.VBM.Energy, e.CBM.Energy, number(e.Gap, 3)+" eV")
	}
}

// edgePlace is where an edge, or a k point equivalent to it, lies on the path.
func edgePlace(sn *session.Snapshot, e *edges.Edge) (x float64, ok bool) {
	if e == nil {
		return 0, false
	}
	l := sn.Built.Crystal.Lattice()
	for _, k := range append([][3]float64{e.K}, kPoints(e)...) {
		if x, _, on := sn.Bands.Sampling.Nearest(l, k, 1e-4); on {
			return x, true
		}
	}
	return 0, false
}

func kPoints(e *edges.Edge) [][3]float64 {
	var list [][3]float64
	for _, k := range e.Star {
		list = append(list, k)
	}
	return list
}

// gapArrow draws the gap as an arrow between two energies, with its value.
func (s *sheet) gapArrow(plot chart.Plot, x, from, to float64, label string) {
	t := s.t
	y0, y1 := plot.Y.At(from), plot.Y.At(to)
	if y0-y1 < 14 {
		return
	}
	stroke := picture.Stroke{Color: t.Ink, Width: 1}
	s.Line(x, y0-2, x, y1+7, stroke)
	var head picture.Path
	mark.Head(&head, x, y1+5, 0, -1, 6)
	mark.Head(&head, x, y0-1, 0, 1, 6)
	s.Fill(&head, picture.Fill{Color: t.Ink})
	text := typeset.Plain(label, textSize, typeset.Style{Bold: true})
	at, align := x+6, picture.Left|picture.Middle
	if at+text.Width > plot.Rect.X1-2 {
		at, align = x-6, picture.Right|picture.Middle
	}
	s.Text(text, at, (y0+y1)/2+2, picture.TextStyle{Color: t.Ink, Align: align, Halo: t.Panel, HaloWidth: 2.5})
}

// bandNotes announces edges that are not on the path, with the keys that go
// there.
func (s *sheet) bandNotes(sn *session.Snapshot, plot chart.Plot) {
	e := sn.Edges
	if e == nil || sn.EdgesStale {
		return
	}
	var notes []string
	for _, edge := range []struct {
		e   *edges.Edge
		say string
	}{{e.VBM, "valence top %s is not on this path: key V"}, {e.CBM, "conduction bottom %s is not on this path: key C"}} {
		if edge.e == nil {
			continue
		}
		if _, on := edgePlace(sn, edge.e); !on {
			notes = append(notes, fmt.Sprintf(edge.say, edge.e.Where))
		}
	}
	y := plot.Rect.Y0 + 13
	s.Begin("notes")
	for _, n := range notes {
		text := typeset.Shorten(n, textSize, typeset.Style{}, plot.Rect.W()-16)
		s.Text(text, plot.Rect.X1-8, y, picture.TextStyle{Color: s.t.Caution, Align: picture.Right, Halo: s.t.Panel, HaloWidth: 3})
		y += 15
	}
	s.End()
}

// readout tells the energy and the k point under the pointer.
func (s *sheet) readout(sn *session.Snapshot, v *View, plot chart.Plot, zero, used float64) {
	t, g := s.t, v.Glance
	if g.HasEnergy {
		y := plot.Y.At(g.Energy)
		if y > plot.Rect.Y0 && y < plot.Rect.Y1 {
			s.Line(plot.Rect.X0-4, y, plot.Rect.X0, y, picture.Stroke{Color: t.Held, Width: 2})
			if g.On && g.OnPath {
				s.Ring(plot.X.At(g.X), y, 4, picture.Stroke{Color: t.Held, Width: 1.5})
			}
		}
	}
	text := ""
	if g.HasEnergy {
		text = "*E* = " + signed(g.Energy-zero, 3) + " eV"
	}
	if g.On && g.OnPath {
		if text != "" {
			text += "   "
		}
		text += typeset.Escape(g.Note) + " *k* = " + Coordinates(sn.Built.Crystal.Setting, sn.Doc.View.Frame, g.K) + " " + FrameName(sn.Doc.View.Frame)
	}
	if text == "" {
		return
	}
	laid := typeset.Layout(text, textSize, typeset.Style{})
	if x := plot.Rect.X1 - laid.Width; x > used {
		s.Text(laid, x, PlotTop-10, picture.TextStyle{Color: t.Ink, Align: picture.Middle})
		return
	}
	// No room beside the legend: at the foot of the plot.
	if room := plot.Rect.W() - 12; laid.Width > room {
		laid = typeset.Shorten(plain(text), textSize, typeset.Style{}, room)
	}
	x, y := plot.Rect.X0+6, plot.Rect.Y1-8
	s.FillRect(picture.Span(x-5, y-12, x+laid.Width+5, y+5), picture.Fill{Color: alpha(t.Panel, 225), Crisp: true})
	s.Text(laid, x, y, picture.TextStyle{Color: t.Ink})
}
