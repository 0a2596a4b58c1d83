package present

import (
	"math"

	"bandwright/physics/hamiltonian"
	"bandwright/render/chart"
	"bandwright/render/picture"
	"bandwright/ui/session"
)

// DOSPlot is where the DOS panel has its plot. X runs in states per eV and
// cell, or in eV per eV and cell for bonding and antibonding.
func DOSPlot(sn *session.Snapshot, v *View, w, h float64) chart.Plot {
	y := EnergyScale(sn, v, w, h)
	r := picture.Span(10, y.At1, max(11, w-10), y.At0)
	lo, hi := 0.0, 1.0
	if c := sn.Curve; c != nil {
		if sn.Doc.View.DOS == "bonding" {
			bonds := bondCurve(sn)
			reach := 1e-3
			for i, e := range c.E {
				if e >= y.Lo && e <= y.Hi && !math.IsNaN(bonds[i]) {
					reach = max(reach, math.Abs(bonds[i]))
				}
			}
			lo, hi = -1.06*reach, 1.06*reach
		} else {
			hi = 1e-3
			for i, e := range c.E {
				if e >= y.Lo && e <= y.Hi && !math.IsInf(c.Total[i], 0) {
					hi = max(hi, c.Total[i])
				}
			}
			hi *= 1.06
		}
	}
	return chart.Plot{Rect: r, X: chart.Scale{Lo: lo, Hi: hi, At0: r.X0, At1: r.X1}, Y: y}
}

// bondCurve is the sum of all bond terms, resolved in energy.
func bondCurve(sn *session.Snapshot) []float64 {
	sum := make([]float64, len(sn.Curve.E))
	for i, t := range sn.DOS.Terms {
		if t.Kind != hamiltonian.Bond || i >= len(sn.Curve.COHP) {
			continue
		}
		for j, v := range sn.Curve.COHP[i] {
			sum[j] += v
		}
	}
	return sum
}

// DOS draws the density of states on the energy axis of the bands.
func DOS(sn *session.Snapshot, v *View, w, h float64) *picture.Picture {
	t := v.Theme
	bonding := sn.Doc.View.DOS == "bonding"
	title, remark := "DOS", "eV⁻¹ cell⁻¹"
	if bonding {
		title, remark = "COHP", "per cell"
	}
	s := newSheet(t, w, h, marked(sn, title), remark)
	plot := DOSPlot(sn, v, w, h)
	style := axisStyle(t)
	zero, _ := Zero(sn)
	if sn.Curve == nil || sn.DOS == nil {
		plot.Frame(s.Picture, style)
		reason := "being computed"
		if sn.DOSErr != nil {
			reason = sn.DOSErr.Error()
		}
		s.message(reason, plot.Rect, t.Soft)
		return s.Picture
	}
	plot.Clip(s.Picture, func() {
		if zero != 0 || sn.FermiKnown {
			plot.Level(s.Picture, zero, zeroStroke(t))
		}
		if bonding {
			s.bondDensity(sn, plot)
		} else {
			s.shellDensity(sn, plot)
		}
		if g := v.Glance; g.HasEnergy {
			plot.Level(s.Picture, g.Energy, picture.Stroke{Color: t.Held, Width: 1, Dash: picture.Dash{On: 2, Off: 2}, Crisp: true})
		}
		if sn.Focus != nil {
			y := plot.Y.At(sn.Focus.Set.Energy)
			s.Line(plot.Rect.X0, y, plot.Rect.X0+9, y, picture.Stroke{Color: t.Held, Width: 2.4})
		}
	})
	plot.YTicks(s.Picture, energyTicks(plot.Y, zero), style)
	plot.XAxis(s.Picture, chart.Ticks(plot.X.Lo, plot.X.Hi, max(2, int(plot.Rect.W()/40))), style)
	plot.Frame(s.Picture, style)
	note := number(sn.DOS.Electrons, 0) + " electrons"
	colour := t.Soft
	if sn.DOSStale && v.Lagging {
		note, colour = "not yet of this model", t.Caution
	} else if bonding {
		note = "bonding ◂ ▸ antibonding"
	}
	s.write(note, (plot.Rect.X0+plot.Rect.X1)/2, PlotTop-9, smallSize, colour, picture.Center)
	return s.Picture
}

// dashes mark the shells besides their colours.
var dashes = [4]picture.Dash{{}, {On: 6, Off: 2.5}, {On: 2, Off: 2}, {On: 7, Off: 2, On2: 2, Off2: 2}}

func (s *sheet) shellDensity(sn *session.Snapshot, plot chart.Plot) {
	t, c := s.t, sn.Curve
	var sums [4][]float64
	for i, g := range sn.DOS.Groups {
		if sums[g.L] == nil {
			sums[g.L] = make([]float64, len(c.E))
		}
		for j, d := range c.Groups[i] {
			sums[g.L][j] += d
		}
	}
	nothing := make([]float64, len(c.E))
	// Filled states are tinted up to the Fermi level.
	if sn.FermiKnown {
		filled := make([]float64, len(c.E))
		for j, e := range c.E {
			if e <= sn.Fermi {
				filled[j] = c.Total[j]
			}
		}
		plot.Area(s.Picture, c.E, nothing, filled, picture.Fill{Color: alpha(t.Faint, 46)}, 0)
	}
	for l := range sums {
		if sums[l] == nil {
			continue
		}
		plot.Area(s.Picture, c.E, nothing, sums[l], picture.Fill{Color: alpha(t.Orbital[l], 60)}, 0)
		plot.Line(s.Picture, sums[l], c.E, picture.Stroke{Color: t.Orbital[l], Width: 1.5, Dash: dashes[l], Join: picture.RoundJoin}, 0)
	}
	plot.Line(s.Picture, c.Total, c.E, picture.Stroke{Color: t.Ink, Width: 1.1, Join: picture.RoundJoin}, 0)
}

func (s *sheet) bondDensity(sn *session.Snapshot, plot chart.Plot) {
	t, c := s.t, sn.Curve
	sum := bondCurve(sn)
	nothing := make([]float64, len(c.E))
	bond, against := make([]float64, len(c.E)), make([]float64, len(c.E))
	for i, v := range sum {
		bond[i], against[i] = min(0, v), max(0, v)
	}
	plot.Area(s.Picture, c.E, nothing, bond, picture.Fill{Color: t.Bonding}, 0)
	plot.Area(s.Picture, c.E, nothing, against, picture.Fill{Hatch: picture.Hatch{Color: t.Against, Angle: 45, Spacing: 4, Width: 1}}, 0)
	plot.Line(s.Picture, against, c.E, picture.Stroke{Color: t.Against, Width: 1}, 0)
	plot.Upright(s.Picture, 0, picture.Stroke{Color: t.Faint, Width: 1, Crisp: true})
}
